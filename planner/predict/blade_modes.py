"""Coupled modes of the blades of one hub, at many rotor speeds and pitch settings."""

from __future__ import annotations

import math
from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

from planner.methods.beam import Root
from planner.methods.coupled_beam import BladeRoots, coupled_matrices
from planner.methods.coupled_modes import coupled_modes
from planner.predict.mode_correction import ModelFrequency, measured_ends, require_known
from planner.rotor.blade_views import coupled_blade

if TYPE_CHECKING:
    from collections.abc import Sequence

    from numpy.typing import NDArray

    from planner.methods.beam import Family
    from planner.methods.coupled_modes import CoupledModes
    from planner.model.rotor import MeasuredMode, Rotor
    from planner.predict.mode_correction import Ends

    FloatArray = NDArray[np.float64]

FAMILY_MODES: dict[Family, int] = {"flap": 4, "lag": 2, "torsion": 2}
CYCLIC, COLLECTIVE = " cyclic", " collective"
"""A teetering pair's blades move opposite, or alike."""


@dataclass(frozen=True, eq=False)
class Lanes:
    """Where modes are wanted, each of shape (lanes,)."""

    speed_rad_s: FloatArray
    collective_rad: FloatArray


@dataclass(frozen=True, eq=False)
class BladeMode:
    """One mode of a blade on its hub."""

    label: str
    family: str
    ends: Ends
    share: FloatArray
    """Of its motion in its own family, by kinetic energy, shape (lanes,)."""
    set_id: str = ""
    """Kind of motion of the hub that it belongs to."""


def blade_modes(
    rotor: Rotor, lanes: Lanes, allowance: tuple[float, float]
) -> tuple[BladeMode, ...]:
    """Modes of every kind of motion of a hub, named by shape.

    Raises:
        ValueError: a blade that is not held, a root off the station table, or a measurement that
            is not of its mode.
        LinAlgError: the modes did not reach their tolerance.
    """
    wide, extra = _with_measured(rotor.measured_modes, lanes)
    found: list[BladeMode] = []
    for suffix, roots in blade_roots(rotor):
        matrices = coupled_matrices(coupled_blade(rotor.blade), roots)
        modes = coupled_modes(matrices, wide.speed_rad_s, wide.collective_rad, FAMILY_MODES)
        found += _labelled(modes, suffix, (rotor.measured_modes, lanes, extra), allowance)
    require_known(rotor.measured_modes, [mode.label for mode in found])
    return tuple(found)


def blade_roots(rotor: Rotor) -> list[tuple[str, BladeRoots]]:
    """How a blade is held: once, or for a teetering pair once for each of its two motions."""
    hub, start = rotor.hub, float(rotor.blade.stations.radius_m[0])
    torsion = Root(start, rotor.control_stiffness_N_m_rad)
    tangent = math.tan(hub.pitch_flap_coupling_rad)
    if hub.kind == "articulated":
        flap = Root(hub.flap_hinge_m, hub.flap_spring_N_m_rad)
        lag = Root(hub.lag_hinge_m, hub.lag_spring_N_m_rad)
        return [("", BladeRoots(flap, lag, torsion, tangent))]
    if hub.kind == "hingeless":
        built_in = Root(hub.root_m)
        return [("", BladeRoots(built_in, built_in, torsion, tangent, "tip"))]
    tilting = Root(start, 0.5 * hub.teeter_spring_N_m_rad)
    return [
        (CYCLIC, BladeRoots(tilting, Root(start), torsion, tangent)),
        (COLLECTIVE, BladeRoots(Root(start), Root(start), torsion)),
    ]


def _with_measured(
    measured: Sequence[MeasuredMode], lanes: Lanes
) -> tuple[Lanes, NDArray[np.intp]]:
    """Lanes, then where modes were measured, then rest at each pitch; and each lane's rest.

    Without measurements nothing is added.
    """
    if not measured:
        return lanes, np.zeros(0, dtype=np.intp)
    speed = [*lanes.speed_rad_s, *(m.speed_rad_s for m in measured)]
    pitch = np.array([*lanes.collective_rad, *(m.collective_rad for m in measured)])
    settings, which = np.unique(pitch, return_inverse=True)
    wide = Lanes(
        np.concatenate([speed, np.zeros(settings.size)]), np.concatenate([pitch, settings])
    )
    return wide, len(speed) + which


def _labelled(
    modes: CoupledModes,
    suffix: str,
    asked: tuple[Sequence[MeasuredMode], Lanes, NDArray[np.intp]],
    allowance: tuple[float, float],
) -> list[BladeMode]:
    measured, lanes, rest = asked
    families, n = list(FAMILY_MODES), lanes.speed_rad_s.size
    found = []
    for k, (family, order) in enumerate(modes.names):
        label = f"{family} {order}{suffix}"
        all_lanes = modes.frequency_rad_s[:, k]
        own = [i for i, m in enumerate(measured) if m.mode == label]
        at = n + np.array(own, dtype=np.intp)
        at_rest = all_lanes[rest] if own else np.zeros(n)
        model = ModelFrequency(
            lanes.speed_rad_s,
            all_lanes[:n],
            at_rest[:n],
            all_lanes[at],
            at_rest[at] if own else at_rest[:0],
        )
        ends = measured_ends(model, [measured[i] for i in own], allowance)
        share = modes.share[:n, k, families.index(family)]
        found.append(BladeMode(label, family, ends, share, suffix))
    return found
