"""Closed forms for a hold in light wind, put beside the blade-element results."""

from __future__ import annotations

import math
from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

from planner.methods import hand_checks, hand_checks_flap, hand_checks_hover
from planner.model.rotor import SymmetricSection
from planner.predict.study_inertia import moment_by_trapezia
from planner.rotor.blade_views import lift_slope_per_rad, section_at

if TYPE_CHECKING:
    from planner.model.rotor import Blade, Section
    from planner.predict.cases import Point
    from planner.rotor.setup import RotorArrays

GREATEST_ADVANCE_RATIO = 0.1
LEAST_SPEED_SHARE = 0.5
LEAST_BLADE_LOADING = 0.02
"""Below this CT/σ the sum of lifting and down-pulling parts is too small to compare in percent."""
TIP_ITERATIONS = 5
INDUCED_FACTOR = 1.15
"""Induced power factor: 1.10 to 1.20 (from memory)."""


@dataclass(frozen=True)
class HoverHand:
    """Closed-form results; NaN where a hold does not compare."""

    flap_mean_rad: float = math.nan
    thrust_N: float = math.nan
    torque_N_m: float = math.nan
    power_W: float = math.nan
    damping_ratio: float = math.nan
    frequency_ratio: float = math.nan


def compares(point: Point, full_speed_rad_s: float, radius_m: float) -> bool:
    """Whether uniform inflow is a fair picture of this state."""
    if point.speed_rad_s < LEAST_SPEED_SHARE * full_speed_rad_s:
        return False
    return point.wind_m_s <= GREATEST_ADVANCE_RATIO * point.speed_rad_s * radius_m


def hover_hand(rotor: RotorArrays, blade: Blade, point: Point) -> HoverHand:
    """Closed forms for one state that compares (rotor turning, upright)."""
    speed, tip = point.speed_rad_s, point.speed_rad_s * blade.radius_m
    at = 0.75 * blade.radius_m
    section = section_at(blade, at)
    slope = lift_slope_per_rad(section) / math.sqrt(
        1.0 - min(0.7, 0.75 * tip / point.air.sound_m_s) ** 2
    )
    solidity = rotor.blade_area_m2 / (math.pi * blade.radius_m**2)
    pitch = point.collective_rad + _twist(blade, at) - _twist(blade, blade.collective_radius_m)
    thrust, inflow, tip_fraction = _thrust(
        solidity * slope, pitch, rotor.n_blades, point.wind_m_s / tip
    )
    mean_angle = 6.0 * thrust / (solidity * slope)
    drag = _drag(section, mean_angle)
    power = float(hand_checks_hover.power_in_wind(thrust, inflow, INDUCED_FACTOR, solidity * drag))
    force = point.air.density_kg_m3 * math.pi * blade.radius_m**2 * tip**2
    form = _flap_blade(rotor, blade, point, (slope, tip_fraction))
    damping = float(hand_checks_flap.flap_damping_ratio(form))
    frequency = float(hand_checks.flap_frequency_ratio(hinge_by_hand(rotor, blade), speed))
    coning = float(
        hand_checks_flap.coning_rad(
            form,
            hand_checks_flap.FlapLoading(
                pitch,
                4.0 * (_twist(blade, blade.radius_m) - _twist(blade, at)),
                0.0,
                0.0,
                inflow,
                0.0,
                0.0,
                float(hand_checks.steady_flap_moment(hinge_by_hand(rotor, blade), speed)),
            ),
        )
    )
    if abs(thrust) < LEAST_BLADE_LOADING * solidity:
        return HoverHand(damping_ratio=damping, frequency_ratio=frequency)
    return HoverHand(
        flap_mean_rad=math.nan if rotor.hub.pair else coning,
        thrust_N=thrust * force,
        torque_N_m=power * force * blade.radius_m,
        power_W=power * force * tip,
        damping_ratio=damping,
        frequency_ratio=frequency,
    )


def _thrust(
    solidity_slope: float, pitch_rad: float, n_blades: int, advance_ratio: float
) -> tuple[float, float, float]:
    """Thrust coefficient, inflow, and effective tip 1 - sqrt(CT) / N (Prandtl, from memory)."""
    thrust, inflow, tip = 0.0, 0.0, 1.0
    for _ in range(TIP_ITERATIONS):
        tip = 1.0 - math.sqrt(abs(thrust)) / n_blades
        found = hand_checks_hover.momentum_thrust_in_wind(
            solidity_slope, pitch_rad, tip, advance_ratio
        )
        thrust, inflow = float(found[0]), float(found[1])
    return thrust, inflow, tip


def hinge_by_hand(rotor: RotorArrays, blade: Blade) -> hand_checks.FlapHinge:
    """Blade and hinge with mass moments from a trapezoidal sum over the stations."""
    hub = rotor.hub
    return hand_checks.FlapHinge(
        inertia_kg_m2=moment_by_trapezia(blade, hub.hinge_m, 2),
        first_moment_kg_m=moment_by_trapezia(blade, hub.hinge_m, 1),
        hinge_offset_m=hub.hinge_m,
        spring_N_m_rad=hub.spring_N_m_rad,
        spring_neutral_rad=hub.spring_neutral_rad,
    )


def _flap_blade(
    rotor: RotorArrays, blade: Blade, point: Point, slope_and_tip: tuple[float, float]
) -> hand_checks_flap.FlapBlade:
    slope_per_rad, tip_fraction = slope_and_tip
    chord = rotor.blade_area_m2 / (rotor.n_blades * blade.radius_m)
    lock = hand_checks.lock_number(
        point.air.density_kg_m3,
        slope_per_rad,
        chord,
        blade.radius_m,
        moment_by_trapezia(blade, rotor.hub.hinge_m, 2),
    )
    ratio = hand_checks.flap_frequency_ratio(hinge_by_hand(rotor, blade), point.speed_rad_s)
    return hand_checks_flap.FlapBlade(
        lock,
        np.square(ratio),
        rotor.hub.hinge_m / blade.radius_m,
        blade.aero_root_m / blade.radius_m,
        tip_fraction,
        rotor.hub.pitch_flap,
    )


def _twist(blade: Blade, radius_m: float) -> float:
    return float(np.interp(radius_m, blade.stations.radius_m, blade.stations.twist_rad))


def _drag(section: Section, angle_rad: float) -> float:
    if isinstance(section, SymmetricSection):
        return section.zero_lift_drag + section.drag_rise_per_rad2 * angle_rad**2
    return float(np.interp(angle_rad, section.angle_rad[0], section.drag[0]))
