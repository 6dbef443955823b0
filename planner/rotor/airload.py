"""The one blade-element kernel: flow and force at every (case, azimuth, station)."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

from planner.methods.section_lookup import station_lift_drag

if TYPE_CHECKING:
    from numpy.typing import NDArray

    from planner.rotor.case import Cases
    from planner.rotor.setup import RotorArrays

    FloatArray = NDArray[np.float64]

ANGLE_STEP_RAD = 1e-4
"""Step of the difference quotient for section slopes; tables are straight over half a degree."""

LEAST_SPEED_M_S = 1e-9
"""Keeps quotients by the local speed defined where the air is at rest."""


@dataclass(frozen=True, eq=False)
class BladeState:
    """Where a blade is and how it moves, over the azimuth.

    Attributes:
        azimuth_rad: Azimuths, (azimuths,).
        flap_rad: Flap, (cases, azimuths).
        flap_rate_rad_s: Flap rate, (cases, azimuths).
        pitch_rad: Pitch at the collective radius, (cases, azimuths).
        induced_m_s: Induced velocity, positive against thrust, (cases, azimuths, stations).
    """

    azimuth_rad: FloatArray
    flap_rad: FloatArray
    flap_rate_rad_s: FloatArray
    pitch_rad: FloatArray
    induced_m_s: FloatArray


@dataclass(frozen=True, eq=False)
class Flow:
    """Air that the blade elements meet, each (cases, azimuths, stations).

    Attributes:
        tangential_m_s: From the leading edge, in the disc plane.
        through_m_s: From above, normal to the blade.
        speed_m_s: Of both together.
        alpha_rad: Angle of attack, any number of turns.
        mach: Speed over that of sound.
    """

    tangential_m_s: FloatArray
    through_m_s: FloatArray
    speed_m_s: FloatArray
    alpha_rad: FloatArray
    mach: FloatArray


@dataclass(frozen=True, eq=False)
class Airload:
    """Forces per length, each (cases, azimuths, stations).

    Attributes:
        normal_N_m: Normal to the blade, up, with the load factor.
        unfactored_N_m: The same without it: what the momentum balance sees.
        drag_N_m: Against rotation, with the load factor.
    """

    normal_N_m: FloatArray
    unfactored_N_m: FloatArray
    drag_N_m: FloatArray


@dataclass(frozen=True, eq=False)
class AirloadSlopes:
    """Derivatives of the factored normal force, each (cases, azimuths, stations).

    Attributes:
        by_through_N_s_m2: With the air through the disc [N/m per m/s].
        by_pitch_N_m_rad: With pitch [N/m per rad].
        by_flap_N_m_rad: With flap, its rate and the induced velocity held [N/m per rad].
    """

    by_through_N_s_m2: FloatArray
    by_pitch_N_m_rad: FloatArray
    by_flap_N_m_rad: FloatArray


def blade_flow(rotor: RotorArrays, cases: Cases, state: BladeState) -> Flow:
    """Air that the blade elements meet, without small angles.

    u_T = Omega (e + (r-e) cos beta) + V sin psi
    u_P = v cos beta + (r-e) dbeta/dt + V cos psi sin beta
    alpha = theta - atan2(u_P, u_T), so that reverse flow meets the section tail first.

    Args:
        rotor: The rotor.
        cases: Held states.
        state: Flap, pitch and induced velocity over the azimuth.

    Returns:
        The flow.

    Validity:
        Sections see the flow in their own plane; the part along the blade is left out.

    Source:
        Kinematics of the hinged blade; Bramwell 1976 (from memory).
    """
    beta, psi = state.flap_rad[:, :, None], state.azimuth_rad[None, :]
    V, Omega = cases.wind_m_s[:, None], cases.speed_rad_s[:, None, None]
    cosine = np.cos(beta)
    u_T = Omega * (rotor.still_m + rotor.arm_m * cosine) + (V * np.sin(psi))[:, :, None]
    u_P = state.induced_m_s * cosine
    u_P += rotor.arm_m * state.flap_rate_rad_s[:, :, None]
    u_P += (V * np.cos(psi) * np.sin(state.flap_rad))[:, :, None]
    speed = np.maximum(np.sqrt(u_T * u_T + u_P * u_P), LEAST_SPEED_M_S)
    alpha = state.pitch_rad[:, :, None] + rotor.twist_rad - np.arctan2(u_P, u_T)
    mach = speed / cases.speed_of_sound_m_s[:, None, None]
    return Flow(u_T, u_P, speed, alpha, mach)


def airload(rotor: RotorArrays, cases: Cases, flow: Flow) -> Airload:
    """Forces of the blade elements.

    F_n = rho c U (k cl u_T - cd u_P) / 2, F_t = rho c U (k cl u_P + cd u_T) / 2

    Args:
        rotor: The rotor.
        cases: Held states, with the load factor k.
        flow: Air that the elements meet.

    Returns:
        Forces per length.

    Validity:
        Steady section data at every instant: no dynamic stall, no unsteady lift.

    Source:
        Blade-element theory, Gessow & Myers 1952 (from memory).
    """
    lift_drag = station_lift_drag(rotor.sections, flow.alpha_rad, flow.mach)
    pressure = _half_density_chord(rotor, cases) * flow.speed_m_s
    lift, drag = pressure * lift_drag.real, pressure * lift_drag.imag
    k = cases.load_factor[:, None, None]
    drag_normal = drag * flow.through_m_s
    unfactored = lift * flow.tangential_m_s
    normal = k * unfactored - drag_normal
    unfactored -= drag_normal
    tangential = k * lift * flow.through_m_s + drag * flow.tangential_m_s
    return Airload(normal, unfactored, tangential)


def airload_slopes(
    rotor: RotorArrays, cases: Cases, state: BladeState, flow: Flow, air: Airload
) -> AirloadSlopes:
    """Derivatives of the normal force, from one more look at the sections.

    F_theta is a difference quotient. Turning the flow by d phi changes the force by
    -(F_theta + F_t) d phi and a change of speed by 2 F_n dU / U, so that with U^2
    F_P = (2 F_n u_P - (F_theta + F_t) u_T) / U^2, F_T = (2 F_n u_T + (F_theta + F_t) u_P) / U^2.

    Args:
        rotor: The rotor.
        cases: Held states.
        state: State of the blades.
        flow: Air that the elements meet.
        air: Forces at that flow.

    Returns:
        The derivatives, at constant Mach number.
    """
    stepped = station_lift_drag(rotor.sections, flow.alpha_rad + ANGLE_STEP_RAD, flow.mach)
    pressure = _half_density_chord(rotor, cases) * flow.speed_m_s
    lift = cases.load_factor[:, None, None] * stepped.real
    by_pitch = lift * flow.tangential_m_s - stepped.imag * flow.through_m_s
    by_pitch *= pressure
    by_pitch -= air.normal_N_m
    by_pitch /= ANGLE_STEP_RAD
    inverse = 1.0 / (flow.speed_m_s * flow.speed_m_s)
    turning = (by_pitch + air.drag_N_m) * inverse
    growing = 2.0 * air.normal_N_m * inverse
    by_through = growing * flow.through_m_s - turning * flow.tangential_m_s
    by_tangential = growing * flow.tangential_m_s + turning * flow.through_m_s
    sine, cosine = np.sin(state.flap_rad), np.cos(state.flap_rad)
    wind = cases.wind_m_s[:, None] * np.cos(state.azimuth_rad) * cosine
    turned = wind[:, :, None] - state.induced_m_s * sine[:, :, None]
    by_flap = by_through * turned - rotor.hub.pitch_flap * by_pitch
    shortened = (cases.speed_rad_s[:, None] * sine)[:, :, None] * rotor.arm_m
    by_flap -= by_tangential * shortened
    return AirloadSlopes(by_through, by_pitch, by_flap)


def _half_density_chord(rotor: RotorArrays, cases: Cases) -> FloatArray:
    half: FloatArray = 0.5 * cases.air_density_kg_m3[:, None, None] * rotor.chord_m
    return half
