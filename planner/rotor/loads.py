"""What a solved state means: flap, thrust, torque and the loads on hub and stops."""

from __future__ import annotations

from dataclasses import dataclass, fields
from typing import TYPE_CHECKING

import numpy as np

from planner.methods.section_lookup import within_validity
from planner.rotor.annuli import mean_induced_m_s, wake_force_n_m
from planner.rotor.balance import Trial, evaluate, flap_imbalance_n_m
from planner.rotor.motion import between_azimuths, expand, fine_basis, pair_moment
from planner.rotor.newton import CASES_AT_ONCE

if TYPE_CHECKING:
    from numpy.typing import NDArray

    from planner.rotor.balance import Evaluation, Problem
    from planner.rotor.case import Cases
    from planner.rotor.setup import RotorArrays

    FloatArray = NDArray[np.float64]

FINE_AZIMUTHS = 360


@dataclass(frozen=True, eq=False)
class Loads:
    """Results of solved cases, each of shape (cases,).

    Attributes:
        flap_mean_rad: Mean flap.
        flap_cosine_rad: First harmonic, cosine part.
        flap_sine_rad: First harmonic, sine part.
        flap_highest_rad: Highest flap over azimuth.
        flap_lowest_rad: Lowest flap over azimuth.
        thrust_N: Air load of all blades along the shaft, averaged over azimuth; weight is not in.
        torque_N_m: Torque that turns the blades against the air.
        hub_moment_N_m: Steady moment of all blades at the rotor centre, about axes in the disc
            plane; flap moments and shear only, not what lag moments add through the coning angle.
        hub_moment_peak_N_m: Highest moment over a turn, with what shakes at multiples of the
            number of blades; with two blades about twice the steady one.
        root_flap_moment_N_m: Largest flap moment over azimuth that one blade hands to the hub
            through spring, damper, stop or, in a rigid pair, the yoke.
        lift_off_moment_N_m: Of blades held on their stop, the largest upward moment over
            azimuth that the stop would have to take; below zero where the blade rests all round.
            For free blades not a number.
        stop_moment_N_m: Of blades held on their stop, the largest moment over azimuth that
            presses on it. For free blades not a number.
        induced_m_s: Induced velocity averaged over the disc.
        highest_mach: Highest Mach number at any station and azimuth.
        outside_share: Moment of dynamic pressure on blade elements whose coefficients rest on the
            continuation of the section data, over that on all elements and the weight moment.
        flap_residual_rad: Moment left over in the worst flap equation, over I Omega^2 + k.
        inflow_residual: Force left over in the worst ring, over the largest ring force.
    """

    flap_mean_rad: FloatArray
    flap_cosine_rad: FloatArray
    flap_sine_rad: FloatArray
    flap_highest_rad: FloatArray
    flap_lowest_rad: FloatArray
    thrust_N: FloatArray
    torque_N_m: FloatArray
    hub_moment_N_m: FloatArray
    hub_moment_peak_N_m: FloatArray
    root_flap_moment_N_m: FloatArray
    lift_off_moment_N_m: FloatArray
    stop_moment_N_m: FloatArray
    induced_m_s: FloatArray
    highest_mach: FloatArray
    outside_share: FloatArray
    flap_residual_rad: FloatArray
    inflow_residual: FloatArray


def loads(problem: Problem, cases: Cases, trial: Trial) -> Loads:
    """Results of solved cases.

    Args:
        problem: Rotor, motion, gradient. A motion without freedoms: blades held still.
        cases: Held states.
        trial: Solution.

    Returns:
        The results.
    """
    parts = []
    for edge in range(0, max(cases.count, 1), CASES_AT_ONCE):
        block = np.arange(edge, min(edge + CASES_AT_ONCE, cases.count))
        part = Trial(
            trial.freedoms[block],
            trial.cyclic_rad[block],
            trial.induced_m_s[block],
            trial.fixed_flap_rad[block],
        )
        parts.append(_block_loads(problem, cases.take(block), part))
    names = [field.name for field in fields(Loads)]
    return Loads(*(np.concatenate([getattr(part, name) for part in parts]) for name in names))


def _block_loads(problem: Problem, cases: Cases, trial: Trial) -> Loads:
    rotor = problem.rotor
    now = evaluate(problem, cases, trial)
    imbalance = flap_imbalance_n_m(rotor, cases, now)
    mean, cosine, sine, highest, lowest = _flap(problem, trial, now)
    root = _root_moment(problem, now, imbalance)
    steady, peak = _hub_moment(problem, root + rotor.hub.hinge_m * _shear(rotor, cases, now))
    lift = _held_moment(problem, imbalance)
    return Loads(
        flap_mean_rad=mean,
        flap_cosine_rad=cosine,
        flap_sine_rad=sine,
        flap_highest_rad=highest,
        flap_lowest_rad=lowest,
        thrust_N=rotor.n_blades * np.mean(_vertical(rotor, now), axis=-1),
        torque_N_m=_torque(rotor, now),
        hub_moment_N_m=steady,
        hub_moment_peak_N_m=peak,
        root_flap_moment_N_m=np.maximum(_highest(problem, root), _highest(problem, -root)),
        lift_off_moment_N_m=_highest(problem, lift),
        stop_moment_N_m=_highest(problem, -lift),
        induced_m_s=mean_induced_m_s(rotor, trial.induced_m_s),
        highest_mach=np.max(now.flow.mach, axis=(1, 2)),
        outside_share=_outside_share(rotor, cases, now),
        flap_residual_rad=_flap_residual(problem, cases, imbalance),
        inflow_residual=_inflow_residual(rotor, cases, trial, now),
    )


def _flap(
    problem: Problem, trial: Trial, now: Evaluation
) -> tuple[FloatArray, FloatArray, FloatArray, FloatArray, FloatArray]:
    """Mean, first harmonic and extremes of flap."""
    motion, flap = problem.motion, now.motions.flap_rad
    zero = np.zeros(flap.shape[0])
    if not motion.has_first_harmonic:
        return np.mean(flap, axis=-1), zero, zero, np.max(flap, axis=-1), np.min(flap, axis=-1)
    fine = expand(trial.freedoms, fine_basis(motion, problem.rotor.hub, FINE_AZIMUTHS))
    fine += trial.fixed_flap_rad[:, :1]
    cosine, sine = trial.freedoms[:, 0].copy(), trial.freedoms[:, 1].copy()
    return np.mean(flap, axis=-1), cosine, sine, np.max(fine, axis=-1), np.min(fine, axis=-1)


def _vertical(rotor: RotorArrays, now: Evaluation) -> FloatArray:
    """Air load of one blade along the shaft, (cases, azimuths) [N]."""
    normal = np.sum(now.air.normal_N_m * rotor.station_width_m, axis=-1)
    force: FloatArray = normal * np.cos(now.motions.flap_rad)
    return force


def _torque(rotor: RotorArrays, now: Evaluation) -> FloatArray:
    drag = now.air.drag_N_m * rotor.station_width_m
    outboard = np.sum(drag * rotor.arm_m, axis=-1)
    inboard = np.sum(drag * rotor.still_m, axis=-1)
    one = inboard + np.cos(now.motions.flap_rad) * outboard
    torque: FloatArray = rotor.n_blades * np.mean(one, axis=-1)
    return torque


def _shear(rotor: RotorArrays, cases: Cases, now: Evaluation) -> FloatArray:
    """Force of one blade on its hinge along the shaft, (cases, azimuths) [N].

    V = F_z - S (cos b b'' - sin b b'^2) + m g_z
    """
    motions = now.motions
    lifted = np.cos(motions.flap_rad) * motions.acceleration_rad_s2
    lifted -= np.sin(motions.flap_rad) * motions.rate_rad_s**2
    weight = rotor.blade_mass_kg * cases.gravity_m_s2[:, 2, None]
    shear: FloatArray = _vertical(rotor, now) - rotor.first_moment_kg_m * lifted + weight
    return shear


def _root_moment(problem: Problem, now: Evaluation, imbalance: FloatArray) -> FloatArray:
    """Flap moment that a blade hands to the hub, (cases, azimuths) [N m].

    Free: spring and damper; in a pair also what both blades carry alike, through the yoke. Held
    still: spring and stop, which together balance all else.
    """
    hub, motions = problem.rotor.hub, now.motions
    moment = hub.spring_N_m_rad * (motions.flap_rad - hub.spring_neutral_rad)
    moment += hub.damper_N_m_s_rad * motions.rate_rad_s
    if not problem.motion.has_first_harmonic:
        return moment - imbalance
    opposite = np.roll(imbalance, imbalance.shape[1] // 2, axis=1)
    result: FloatArray = moment - hub.pair * 0.5 * (imbalance + opposite)
    return result


def _hub_moment(problem: Problem, moment: FloatArray) -> tuple[FloatArray, FloatArray]:
    """Steady and highest moment of all blades at the rotor centre.

    The blades at psi + 2 pi k / N together keep of M(psi) exp(i psi) N times the harmonics that
    are multiples of N.
    """
    n_blades, psi = problem.rotor.n_blades, problem.motion.azimuth_rad
    if not problem.motion.has_first_harmonic:
        moment = pair_moment(problem.rotor.hub, moment)
        psi = psi[: moment.shape[1]]
        n_blades = 1 if problem.rotor.hub.pair > 0.0 else n_blades
    highest = (psi.size - 1) // 2 // n_blades
    fine = 2.0 * np.pi * np.arange(FINE_AZIMUTHS) / (n_blades * FINE_AZIMUTHS)
    along = np.zeros((moment.shape[0], fine.size))
    across = np.zeros_like(along)
    for n in n_blades * np.arange(-highest, highest + 1):
        real = n_blades * np.mean(moment * np.cos((n - 1) * psi), axis=-1)
        imaginary = -n_blades * np.mean(moment * np.sin((n - 1) * psi), axis=-1)
        along += real[:, None] * np.cos(n * fine) - imaginary[:, None] * np.sin(n * fine)
        across += real[:, None] * np.sin(n * fine) + imaginary[:, None] * np.cos(n * fine)
    steady = n_blades * np.hypot(
        np.mean(moment * np.cos(psi), axis=-1), np.mean(moment * np.sin(psi), axis=-1)
    )
    return steady, np.max(np.hypot(along, across), axis=-1)


def _held_moment(problem: Problem, imbalance: FloatArray) -> FloatArray:
    """Moment that would lift blades off the stop they are held on, (cases, azimuths)."""
    if problem.motion.has_first_harmonic:
        return np.full_like(imbalance, np.nan)
    return pair_moment(problem.rotor.hub, -imbalance)


def _highest(problem: Problem, moment: FloatArray) -> FloatArray:
    """Highest value over one or two turns, between azimuths too, (cases,)."""
    (count, size), turn = moment.shape, problem.motion.n_turn
    turns = size // turn
    fine = expand(moment.reshape(count * turns, turn), between_azimuths(turn, FINE_AZIMUTHS))
    highest: FloatArray = np.max(fine.reshape(count, turns * FINE_AZIMUTHS), axis=-1)
    return highest


def _outside_share(rotor: RotorArrays, cases: Cases, now: Evaluation) -> FloatArray:
    """Moment of pressure on elements beyond section data, over that of all and of weight."""
    inside = within_validity(rotor.sections, now.flow.alpha_rad, now.flow.mach)
    lever = rotor.station_width_m * rotor.arm_m * rotor.chord_m
    pressure = 0.5 * cases.air_density_kg_m3[:, None, None] * now.flow.speed_m_s**2 * lever
    beyond = np.mean(np.sum(np.where(inside, 0.0, pressure), axis=-1), axis=-1)
    whole = np.mean(np.sum(pressure, axis=-1), axis=-1)
    weight = np.sqrt(np.sum(cases.gravity_m_s2**2, axis=-1)) * rotor.first_moment_kg_m
    share: FloatArray = beyond / np.maximum(whole + weight, 1e-9)
    return share


def _flap_residual(problem: Problem, cases: Cases, imbalance: FloatArray) -> FloatArray:
    left_over = np.abs(expand(imbalance, problem.motion.projection))
    rotor = problem.rotor
    scale = rotor.flap_inertia_kg_m2 * cases.speed_rad_s**2 + rotor.hub.spring_N_m_rad
    worst: FloatArray = np.max(left_over, axis=-1, initial=0.0) / np.maximum(scale, 1e-9)
    return worst


def _inflow_residual(
    rotor: RotorArrays, cases: Cases, trial: Trial, now: Evaluation
) -> FloatArray:
    """Of cases whose inflow is solved; 0 where it is given or where the rotor is parked."""
    is_solved = np.isnan(cases.given_inflow_m_s) & (np.max(trial.induced_m_s**2, axis=-1) > 0.0)
    force = wake_force_n_m(rotor, cases, trial.induced_m_s)
    left_over = np.max(np.abs(force - now.ring_force_N_m), axis=-1)
    scale = np.maximum(np.max(np.abs(now.ring_force_N_m), axis=-1), 1e-9)
    return np.asarray(np.where(is_solved, left_over / scale, 0.0))
