"""Where marched blades lie when their lead-in begins."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING, Any

import numpy as np

from planner.rotor.annuli import starting_induced_m_s
from planner.rotor.case import make_cases

if TYPE_CHECKING:
    from numpy.typing import NDArray

    from planner.rotor.march_case import MarchCases
    from planner.rotor.march_model import MarchModel
    from planner.rotor.march_wind import Prescribed

    Array = NDArray[np.floating[Any]]
    FloatArray = NDArray[np.float64]

LEAST_STIFFNESS = 1e-9
"""Of a free hinge over inertia: keeps the balance of a blade without stops and speed solvable."""
ROUNDS = 6
"""Of the balance with weight and centrifugal force as they are at the angle found."""


@dataclass(frozen=True, eq=False)
class Start:
    """State at the begin of the lead-in.

    Attributes:
        x: Freedoms and their rates, (cases, units, 2n).
        moment_N_m: Signed moment of the stops, (cases, units).
        induced_m_s: Induced velocity, (cases, stations).
    """

    x: FloatArray
    moment_N_m: FloatArray
    induced_m_s: FloatArray


def starting_state(
    model: MarchModel, cases: MarchCases, first: Prescribed, places: tuple[Array, Array]
) -> Start:
    """Balance of weight, centrifugal force, springs and stops without the air, and hover inflow.

    A blade that would sink below its lower stop, or rise past its upper one, lies on it with the
    moment that holds it; bending included. The air is left to the lead-in.

    Args:
        model: The model.
        cases: The cases.
        first: What their histories begin with.
        places: Lower and upper stops, (cases, units).

    Returns:
        The state.
    """
    unit = model.unit
    speed2 = (first.speed_rad_s**2)[:, None, None]
    stiff = unit.stiffness + LEAST_STIFFNESS * unit.mass + speed2 * unit.spin_stiffness
    load = unit.spring_load + model.gravity_m_s2[2] * unit.weight
    load = load - speed2 * unit.fixed_flap_rad * unit.spin_fixed
    load = np.repeat(load, model.units, axis=1)
    q, moment = np.zeros_like(load), np.zeros(load.shape[:2])
    for _ in range(ROUNDS):
        beyond = _beyond_linear(model, q, speed2[:, :, 0])
        q, moment = _lying(model, stiff, load + beyond, places)
    return Start(
        np.concatenate([q, np.zeros_like(q)], axis=-1), moment, _inflow(model, cases, first)
    )


def _lying(
    model: MarchModel, stiff: FloatArray, load: FloatArray, places: tuple[Array, Array]
) -> tuple[FloatArray, FloatArray]:
    """Freedoms under a load, (cases, units, n), and the moments of stops that are pressed."""
    unit, laws = model.unit, model.laws

    def solved(stiffness: FloatArray, pushed: FloatArray) -> FloatArray:
        return np.swapaxes(np.linalg.solve(stiffness, np.swapaxes(pushed, 1, 2)), 1, 2)

    q, moment = solved(stiff, load), np.zeros(load.shape[:2])
    if not laws.exist:
        return q, moment
    turned = q @ unit.hinge
    for place, law, sinks in (
        (places[0], laws.low, turned < places[0]),
        (places[1], laws.high, turned > places[1]),
    ):
        held = stiff + law[0] * np.outer(unit.hinge, unit.hinge)
        lying = solved(held, load + law[0] * place[:, :, None] * unit.hinge)
        q = np.where(sinks[:, :, None], lying, q)
        moment = np.where(sinks, law[0] * (place - lying @ unit.hinge), moment)
    return q, moment


def _beyond_linear(model: MarchModel, q: FloatArray, speed2: FloatArray) -> FloatArray:
    """What rigid flap's weight and centrifugal force differ by from their linear forms."""
    unit, hinge = model.unit, model.arrays.hub.hinge_m
    inertia, first = unit.flap_inertia_kg_m2, unit.first_moment_kg_m
    flap = unit.fixed_flap_rad + q @ unit.rigid.T
    sine, cosine = np.sin(flap), np.cos(flap)
    moment = model.gravity_m_s2[2] * first * (cosine - 1.0)
    straight = (inertia + hinge * first) * flap
    moment += speed2[:, :, None] * (straight - (inertia * cosine + hinge * first) * sine)
    return np.asarray(moment @ unit.rigid)


def _inflow(model: MarchModel, cases: MarchCases, first: Prescribed) -> FloatArray:
    held = make_cases(
        speed_rad_s=first.speed_rad_s,
        collective_rad=first.collective_rad,
        wind_m_s=cases.wind_m_s,
        air_density_kg_m3=cases.air_density_kg_m3,
        speed_of_sound_m_s=cases.speed_of_sound_m_s,
        load_factor=cases.load_factor,
    )
    return starting_induced_m_s(model.arrays, held)
