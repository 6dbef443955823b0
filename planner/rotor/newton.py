"""Newton's method on flap and inflow together, each case on its own."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

from planner.rotor.annuli import starting_induced_m_s
from planner.rotor.balance import Linearised, Trial, linearise

if TYPE_CHECKING:
    from numpy.typing import NDArray

    from planner.rotor.balance import Problem
    from planner.rotor.case import Cases

    FloatArray = NDArray[np.float64]
    BoolArray = NDArray[np.bool_]
    IndexArray = NDArray[np.int64]

ANGLE_TOLERANCE_RAD = 1e-6
INFLOW_TOLERANCE = 1e-6
"""Of the largest induced velocity over the stations, or of a thousandth of the tip speed."""

LARGEST_ANGLE_STEP_RAD = 0.2
LARGEST_INFLOW_STEP = 0.1
"""Of the tip speed."""
RUNAWAY_RAD = 1.5
FULL_STEPS = 14
HALF_STEPS = 34
ALL_STEPS = 60
CASES_AT_ONCE = 64
"""Cases whose arrays stay within the processor's cache; has no influence on any number."""


@dataclass(frozen=True, eq=False)
class Solution:
    """Where Newton's method ended, one lane a case.

    Attributes:
        trial: The unknowns.
        converged: The last correction was within tolerance.
    """

    trial: Trial
    converged: BoolArray


@dataclass(frozen=True, eq=False)
class Correction:
    """What Newton's method would change, one lane a case.

    Attributes:
        freedoms: Freedoms of the motion, (cases, freedoms) [rad].
        cyclic_rad: Cyclic pitch, (cases, 2).
        induced_m_s: Induced velocity, (cases, stations).
    """

    freedoms: FloatArray
    cyclic_rad: FloatArray
    induced_m_s: FloatArray


def solve(problem: Problem, cases: Cases, fixed_flap_rad: FloatArray) -> Solution:
    """Periodic flap and annular inflow of every case.

    Flap equations and rings are corrected together; the rings, each of which feels its own
    inflow only, are eliminated first. A case stops at its own convergence and is not touched
    again. Steps are shortened where flap would move more than 0.2 rad, and halved, later
    quartered, in a case that has not closed after 14 and 34 steps.

    Args:
        problem: Rotor, motion, gradient.
        cases: Held states, none parked.
        fixed_flap_rad: Flap that is no freedom, (cases, azimuths).

    Returns:
        The solution. A case is converged when a correction moved flap (or cyclic) by less than
        1e-6 rad and the inflow by less than 1e-6 of its largest value; what is left after that
        correction is about a hundredth of it.
    """
    parts = [
        _solve_block(problem, cases.take(block), fixed_flap_rad[block])
        for block in _blocks(cases.count)
    ]
    trials = [part.trial for part in parts]
    trial = Trial(
        freedoms=np.concatenate([one.freedoms for one in trials]),
        cyclic_rad=np.concatenate([one.cyclic_rad for one in trials]),
        induced_m_s=np.concatenate([one.induced_m_s for one in trials]),
        fixed_flap_rad=fixed_flap_rad,
    )
    return Solution(trial, np.concatenate([part.converged for part in parts]))


def _blocks(count: int) -> list[IndexArray]:
    edges = range(0, max(count, 1), CASES_AT_ONCE)
    return [np.arange(edge, min(edge + CASES_AT_ONCE, count)) for edge in edges]


def _start(problem: Problem, cases: Cases, fixed_flap_rad: FloatArray) -> Trial:
    given = cases.given_inflow_m_s[:, None]
    induced = starting_induced_m_s(problem.rotor, cases)
    cyclic = np.stack([cases.cyclic_cosine_rad, cases.cyclic_sine_rad], axis=1)
    return Trial(
        freedoms=np.zeros((cases.count, problem.motion.n_freedoms)),
        cyclic_rad=np.where(cases.trimmed[:, None], 0.0, cyclic),
        induced_m_s=np.where(np.isnan(given), induced, given),
        fixed_flap_rad=fixed_flap_rad,
    )


def _solve_block(problem: Problem, cases: Cases, fixed_flap_rad: FloatArray) -> Solution:
    whole = _start(problem, cases, fixed_flap_rad)
    converged = np.zeros(cases.count, dtype=bool)
    active = np.arange(cases.count)
    for count in range(ALL_STEPS):
        if active.size == 0:
            break
        part = cases.take(active)
        trial = _take(whole, active)
        correction = _correction(problem, part, linearise(problem, part, trial))
        usable = _is_usable(trial, correction)
        done = usable & _is_small(problem, part, trial, correction)
        share = _share(count, correction)[usable, None]
        moved = active[usable]
        whole.freedoms[moved] += share * correction.freedoms[usable]
        whole.cyclic_rad[moved] += share * correction.cyclic_rad[usable]
        whole.induced_m_s[moved] += share * correction.induced_m_s[usable]
        converged[active[done]] = True
        active = active[usable & ~done]
    return Solution(whole, converged)


def _take(trial: Trial, where: IndexArray) -> Trial:
    return Trial(
        trial.freedoms[where],
        trial.cyclic_rad[where],
        trial.induced_m_s[where],
        trial.fixed_flap_rad[where],
    )


def _correction(problem: Problem, cases: Cases, equations: Linearised) -> Correction:
    """Newton's correction; where trimmed, cyclic takes the place of the first two freedoms."""
    over = equations.flap_by_inflow / equations.ring_by_inflow[:, None, :]
    matrix = equations.flap_by_freedom - np.matmul(over, equations.ring_by_freedom)
    right = np.sum(over * equations.ring[:, None, :], axis=-1) - equations.flap
    flap = _solve_each(matrix, right)
    felt = np.sum(equations.ring_by_freedom * flap[:, None, :], axis=-1)
    inflow = -(equations.ring + felt) / equations.ring_by_inflow
    limit = LARGEST_INFLOW_STEP * (cases.speed_rad_s * problem.rotor.radius_m)[:, None]
    flap, cyclic = flap[:, :-1].copy(), np.zeros((cases.count, 2))
    if problem.motion.has_first_harmonic:
        trimmed = cases.trimmed[:, None]
        cyclic = np.where(trimmed, flap[:, :2], 0.0)
        flap[:, :2] = np.where(trimmed, 0.0, flap[:, :2])
    return Correction(flap, cyclic, np.clip(inflow, -limit, limit))


def _solve_each(matrix: FloatArray, right: FloatArray) -> FloatArray:
    """Solutions of small systems; not a number where one is singular."""
    try:
        return np.asarray(np.linalg.solve(matrix, right[:, :, None])[:, :, 0])
    except np.linalg.LinAlgError:
        result = np.full_like(right, np.nan)
        for lane in range(right.shape[0]):
            if np.linalg.cond(matrix[lane]) < 1.0 / np.finfo(np.float64).eps:
                result[lane] = np.linalg.solve(matrix[lane], right[lane])
        return result


def _largest_angle(correction: Correction) -> FloatArray:
    flap = np.max(np.abs(correction.freedoms), axis=-1, initial=0.0)
    largest: FloatArray = np.maximum(flap, np.max(np.abs(correction.cyclic_rad), axis=-1))
    return largest


def _is_usable(trial: Trial, correction: Correction) -> BoolArray:
    """The correction is a number, and the state has not run away."""
    angles = np.concatenate([trial.freedoms, trial.cyclic_rad], axis=1)
    is_number = np.isfinite(_largest_angle(correction) + np.sum(correction.induced_m_s, axis=-1))
    return np.asarray(is_number & (np.max(np.abs(angles), axis=-1) < RUNAWAY_RAD))


def _is_small(problem: Problem, cases: Cases, trial: Trial, correction: Correction) -> BoolArray:
    least = 1e-3 * cases.speed_rad_s * problem.rotor.radius_m
    largest = np.maximum(np.max(np.abs(trial.induced_m_s), axis=-1), least)
    inflow = np.max(np.abs(correction.induced_m_s), axis=-1)
    is_angle_small = _largest_angle(correction) < ANGLE_TOLERANCE_RAD
    return np.asarray(is_angle_small & (inflow < INFLOW_TOLERANCE * largest))


def _share(count: int, correction: Correction) -> FloatArray:
    """Share of the correction that is taken, (cases,)."""
    damped = 1.0 if count < FULL_STEPS else 0.5 if count < HALF_STEPS else 0.25
    reach = LARGEST_ANGLE_STEP_RAD / np.maximum(_largest_angle(correction), LARGEST_ANGLE_STEP_RAD)
    return np.asarray(damped * reach)
