"""The rotor's equations at a trial state: what is out of balance, and how that changes."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

from planner.rotor.airload import BladeState, airload, airload_slopes, blade_flow
from planner.rotor.annuli import (
    gradient_over_disc,
    mean_weights,
    wake_force_n_m,
    wake_force_slope,
)
from planner.rotor.motion import expand

if TYPE_CHECKING:
    from numpy.typing import NDArray

    from planner.rotor.airload import Airload, AirloadSlopes, Flow
    from planner.rotor.annuli import Gradient
    from planner.rotor.case import Cases
    from planner.rotor.motion import Motion
    from planner.rotor.setup import RotorArrays

    FloatArray = NDArray[np.float64]
    BoolArray = NDArray[np.bool_]

GRADIENT_STEP_SHARE = 1e-6


@dataclass(frozen=True, eq=False)
class Problem:
    """What does not change while a block of cases is solved.

    Attributes:
        rotor: The rotor.
        motion: Freedoms of flap.
        gradient: Fore-aft gradient of the induced velocity.
    """

    rotor: RotorArrays
    motion: Motion
    gradient: Gradient


@dataclass(frozen=True, eq=False)
class Trial:
    """Unknowns of the equations, and the flap that is none.

    Attributes:
        freedoms: Freedoms of the motion, (cases, freedoms) [rad].
        cyclic_rad: Cyclic pitch, cosine and sine, (cases, 2).
        induced_m_s: Induced velocity averaged over azimuth, (cases, stations).
        fixed_flap_rad: Flap that is no freedom, (cases, azimuths).
    """

    freedoms: FloatArray
    cyclic_rad: FloatArray
    induced_m_s: FloatArray
    fixed_flap_rad: FloatArray


@dataclass(frozen=True, eq=False)
class Motions:
    """Flap over the azimuth, each (cases, azimuths).

    Attributes:
        flap_rad: Flap.
        rate_rad_s: Its rate in time.
        acceleration_rad_s2: Its second rate in time.
    """

    flap_rad: FloatArray
    rate_rad_s: FloatArray
    acceleration_rad_s2: FloatArray


@dataclass(frozen=True, eq=False)
class Evaluation:
    """Flow, force and moments at a trial.

    Attributes:
        motions: Flap over the azimuth.
        state: State of the blades as the air meets it.
        flow: Air that the elements meet.
        air: Forces of the elements.
        spread: Induced velocity over its azimuth average, (cases, azimuths, stations).
        air_moment_N_m: Moment of the air load about the hinge, (cases, azimuths).
        ring_force_N_m: Azimuth average of the unfactored vertical force per length of all
            blades, (cases, stations).
    """

    motions: Motions
    state: BladeState
    flow: Flow
    air: Airload
    spread: FloatArray
    air_moment_N_m: FloatArray
    ring_force_N_m: FloatArray


@dataclass(frozen=True, eq=False)
class Linearised:
    """Residuals and their derivatives at a trial, one lane a case.

    The change of the mean inflow, which bends the gradient, is carried as one more unknown after
    the freedoms, with its definition as one more equation.

    Attributes:
        flap: Moments out of balance in each freedom's equation, (cases, freedoms + 1) [N m].
        ring: Momentum less blade force of each annulus, (cases, stations) [N/m].
        flap_by_freedom: (cases, freedoms + 1, freedoms + 1).
        flap_by_inflow: (cases, freedoms + 1, stations).
        ring_by_freedom: (cases, stations, freedoms + 1).
        ring_by_inflow: Of each ring with its own inflow, (cases, stations).
    """

    flap: FloatArray
    ring: FloatArray
    flap_by_freedom: FloatArray
    flap_by_inflow: FloatArray
    ring_by_freedom: FloatArray
    ring_by_inflow: FloatArray


def evaluate(problem: Problem, cases: Cases, trial: Trial) -> Evaluation:
    """Flow, force and moments of the blades at a trial.

    Args:
        problem: Rotor, motion, gradient.
        cases: Held states.
        trial: Unknowns.

    Returns:
        The evaluation.
    """
    rotor, motion = problem.rotor, problem.motion
    motions = _motions(problem, cases, trial)
    psi = motion.azimuth_rad
    pitch = cases.collective_rad[:, None] - rotor.hub.pitch_flap * motions.flap_rad
    pitch = pitch + trial.cyclic_rad[:, 0, None] * np.cos(psi)
    pitch = pitch + trial.cyclic_rad[:, 1, None] * np.sin(psi)
    kx = gradient_over_disc(rotor, cases, trial.induced_m_s, problem.gradient)
    x = rotor.station_radius_m / rotor.radius_m
    spread = 1.0 + (kx[:, None] * np.cos(psi))[:, :, None] * x
    induced = trial.induced_m_s[:, None, :] * spread
    state = BladeState(psi, motions.flap_rad, motions.rate_rad_s, pitch, induced)
    flow = blade_flow(rotor, cases, state)
    air = airload(rotor, cases, flow)
    moment = np.sum(air.normal_N_m * (rotor.station_width_m * rotor.arm_m), axis=-1)
    vertical = air.unfactored_N_m * np.cos(motions.flap_rad)[:, :, None]
    ring = (rotor.n_blades / psi.size) * np.sum(vertical, axis=1)
    return Evaluation(motions, state, flow, air, spread, moment, ring)


def flap_imbalance_n_m(rotor: RotorArrays, cases: Cases, evaluation: Evaluation) -> FloatArray:
    """Moment about the hinge that is out of balance over the azimuth.

    I b'' + c b' + Omega^2 (I cos b + e S) sin b + k (b - b_n)
    - S (g_z cos b - g_r sin b) - M_air, with g_r = g_x cos psi + g_y sin psi

    Args:
        rotor: The rotor.
        cases: Held states.
        evaluation: Motion and air load.

    Returns:
        Moment, positive where the blade is pulled down, (cases, azimuths) [N m].

    Validity:
        Rigid blade on a rotor that turns at constant speed; no stop.

    Source:
        Lagrange's equation of the hinged blade (derived); linear form Bramwell 1976 (from
        memory).
    """
    motions, hub = evaluation.motions, rotor.hub
    b = motions.flap_rad
    sine, cosine = np.sin(b), np.cos(b)
    inertia, S = rotor.flap_inertia_kg_m2, rotor.first_moment_kg_m
    spin = cases.speed_rad_s[:, None] ** 2
    moment = inertia * motions.acceleration_rad_s2 + hub.damper_N_m_s_rad * motions.rate_rad_s
    moment += spin * (inertia * cosine + hub.hinge_m * S) * sine
    moment += hub.spring_N_m_rad * (b - hub.spring_neutral_rad)
    along, up = _gravity(cases, evaluation.state.azimuth_rad)
    moment -= S * (up * cosine - along * sine)
    moment -= evaluation.air_moment_N_m
    return moment


def linearise(problem: Problem, cases: Cases, trial: Trial) -> Linearised:
    """Residuals of flap and rings, and their derivatives with the unknowns.

    Args:
        problem: Rotor, motion, gradient.
        cases: Held states; where trimmed the first two freedoms give way to cyclic pitch.
        trial: Unknowns.

    Returns:
        The linearised equations. Left out of the derivatives, not of the residuals: the change
        with Mach number, and the drag's share of the load factor.
    """
    rotor, motion = problem.rotor, problem.motion
    now = evaluate(problem, cases, trial)
    slopes = airload_slopes(rotor, cases, now.state, now.flow, now.air)
    force = wake_force_n_m(rotor, cases, trial.induced_m_s)
    solved = np.isnan(cases.given_inflow_m_s)[:, None]
    by_induced = slopes.by_through_N_s_m2 * np.cos(now.motions.flap_rad)[:, :, None]
    moment, ring = _by_induced(problem, cases, now, by_induced * now.spread)
    slope = wake_force_slope(rotor, cases, trial.induced_m_s, force) - ring
    floor = 0.2 * (force / np.where(trial.induced_m_s == 0.0, 1.0, trial.induced_m_s)) + 1e-9
    bend = _gradient_slope(problem, cases, trial)[:, None, None] * trial.induced_m_s[:, None, :]
    x_cosine = np.cos(motion.azimuth_rad)[:, None] * (rotor.station_radius_m / rotor.radius_m)
    bent_moment, bent_ring = _by_induced(problem, cases, now, by_induced * (bend * x_cosine))
    flap_by_freedom, ring_by_freedom = _by_freedom(problem, cases, now, slopes)
    bent = (-np.sum(bent_moment, axis=-1), -bent_ring)
    share = np.broadcast_to(-mean_weights(rotor), (cases.count, 1, ring.shape[1]))
    flap = expand(flap_imbalance_n_m(rotor, cases, now), motion.projection)
    ring_columns = np.concatenate([ring_by_freedom, bent[1][:, :, None]], axis=2)
    return Linearised(
        flap=np.concatenate([flap, np.zeros((cases.count, 1))], axis=1),
        ring=np.where(solved, force - now.ring_force_N_m, 0.0),
        flap_by_freedom=_bordered(flap_by_freedom, bent[0]),
        flap_by_inflow=np.concatenate([-moment, share], axis=1),
        ring_by_freedom=ring_columns * solved[:, :, None],
        ring_by_inflow=np.maximum(slope, floor),
    )


def _by_induced(
    problem: Problem, cases: Cases, now: Evaluation, by_velocity: FloatArray
) -> tuple[FloatArray, FloatArray]:
    """Air moment in each freedom's equation and ring forces by station, from force slopes."""
    rotor, motion = problem.rotor, problem.motion
    moment = np.matmul(motion.projection, by_velocity * (rotor.station_width_m * rotor.arm_m))
    share = rotor.n_blades / (motion.azimuth_rad.size * cases.load_factor[:, None])
    vertical = by_velocity * np.cos(now.motions.flap_rad)[:, :, None]
    return moment, share * np.sum(vertical, axis=1)


def _gradient_slope(problem: Problem, cases: Cases, trial: Trial) -> FloatArray:
    """Change of the gradient with the mean inflow, (cases,) [s/m]."""
    step = GRADIENT_STEP_SHARE * (np.abs(cases.wind_m_s) + 1.0)
    now, stepped = (
        gradient_over_disc(problem.rotor, cases, induced, problem.gradient)
        for induced in (trial.induced_m_s, trial.induced_m_s + step[:, None])
    )
    slope: FloatArray = (stepped - now) / step
    return slope


def _bordered(matrix: FloatArray, column: FloatArray) -> FloatArray:
    """One more unknown: its column in the old equations, and the equation that defines it."""
    cases, size = column.shape
    wide = np.zeros((cases, size + 1, size + 1))
    wide[:, :size, :size] = matrix
    wide[:, :size, size] = column
    wide[:, size, size] = 1.0
    return wide


def _by_freedom(
    problem: Problem, cases: Cases, now: Evaluation, slopes: AirloadSlopes
) -> tuple[FloatArray, FloatArray]:
    """Derivatives of the flap and ring equations with the freedoms or, trimmed, the cyclic."""
    rotor, motion = problem.rotor, problem.motion
    inertia = rotor.flap_inertia_kg_m2
    stiffness, damping, by_pitch = _blade_coefficients(rotor, cases, now, slopes)
    ring_stiffness, ring_damping, ring_pitch = _ring_coefficients(rotor, cases, now, slopes)
    spin = cases.speed_rad_s[:, None, None]
    local = stiffness[:, :, None] * motion.basis
    local += spin * damping[:, :, None] * motion.basis_slope
    local += inertia * spin**2 * motion.basis_curvature
    ring = np.matmul(ring_stiffness, motion.basis)
    ring += spin * np.matmul(ring_damping, motion.basis_slope)
    if motion.has_first_harmonic and np.any(cases.trimmed):
        swap = cases.trimmed[:, None, None]
        cyclic = np.ascontiguousarray(motion.basis[:, :2])
        local[:, :, :2] = np.where(swap, -by_pitch[:, :, None] * cyclic, local[:, :, :2])
        ring[:, :, :2] = np.where(swap, np.matmul(ring_pitch, cyclic), ring[:, :, :2])
    return np.matmul(motion.projection, local), ring


def _blade_coefficients(
    rotor: RotorArrays, cases: Cases, now: Evaluation, slopes: AirloadSlopes
) -> tuple[FloatArray, FloatArray, FloatArray]:
    """Derivative of the imbalance with flap and flap rate, and of the air moment with pitch."""
    b, psi, hub = now.motions.flap_rad, now.state.azimuth_rad, rotor.hub
    sine, cosine = np.sin(b), np.cos(b)
    arm_width = rotor.arm_m * rotor.station_width_m
    air = np.sum(slopes.by_flap_N_m_rad * arm_width, axis=-1)
    rate = np.sum(slopes.by_through_N_s_m2 * (arm_width * rotor.arm_m), axis=-1)
    by_pitch = np.sum(slopes.by_pitch_N_m_rad * arm_width, axis=-1)
    along, up = _gravity(cases, psi)
    S, inertia = rotor.first_moment_kg_m, rotor.flap_inertia_kg_m2
    spin = cases.speed_rad_s[:, None] ** 2
    stiffness = spin * (inertia * (cosine**2 - sine**2) + hub.hinge_m * S * cosine)
    stiffness += hub.spring_N_m_rad + S * (up * sine + along * cosine) - air
    return stiffness, hub.damper_N_m_s_rad - rate, by_pitch


def _ring_coefficients(
    rotor: RotorArrays, cases: Cases, now: Evaluation, slopes: AirloadSlopes
) -> tuple[FloatArray, FloatArray, FloatArray]:
    """Minus the derivative of each ring's mean force with flap, flap rate and pitch at an azimuth.

    Each (cases, stations, azimuths).
    """
    b, psi = now.motions.flap_rad, now.state.azimuth_rad
    share = -rotor.n_blades / (psi.size * cases.load_factor[:, None, None])
    lean = share * np.cos(b)[:, :, None]
    sunk = share * np.sin(b)[:, :, None]
    by_flap = slopes.by_flap_N_m_rad * lean - now.air.normal_N_m * sunk
    by_rate = slopes.by_through_N_s_m2 * lean * rotor.arm_m
    by_pitch = slopes.by_pitch_N_m_rad * lean
    turned = [np.ascontiguousarray(np.swapaxes(a, 1, 2)) for a in (by_flap, by_rate, by_pitch)]
    return turned[0], turned[1], turned[2]


def _motions(problem: Problem, cases: Cases, trial: Trial) -> Motions:
    motion, spin = problem.motion, cases.speed_rad_s[:, None]
    return Motions(
        flap_rad=trial.fixed_flap_rad + expand(trial.freedoms, motion.basis),
        rate_rad_s=spin * expand(trial.freedoms, motion.basis_slope),
        acceleration_rad_s2=spin**2 * expand(trial.freedoms, motion.basis_curvature),
    )


def _gravity(cases: Cases, azimuth_rad: FloatArray) -> tuple[FloatArray, FloatArray]:
    """Gravity along the blade's azimuth and along thrust, each (cases, azimuths) or (cases, 1)."""
    x, y, z = (cases.gravity_m_s2[:, axis, None] for axis in range(3))
    return x * np.cos(azimuth_rad) + y * np.sin(azimuth_rad), z
