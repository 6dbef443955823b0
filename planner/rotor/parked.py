"""The rotor at rest in wind: where each blade comes to lie, azimuth by azimuth."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

from planner.rotor.balance import Problem, Trial, evaluate, flap_imbalance_n_m
from planner.rotor.motion import held_flap_rad, held_motion, pair_moment

if TYPE_CHECKING:
    from numpy.typing import NDArray

    from planner.rotor.case import Cases
    from planner.rotor.setup import RotorArrays

    FloatArray = NDArray[np.float64]
    BoolArray = NDArray[np.bool_]

REACH_WITHOUT_STOPS_RAD = 1.0
SCAN_STEPS = 32
BISECTIONS = 44


@dataclass(frozen=True, eq=False)
class ParkedSolution:
    """Rest position of the blades at every azimuth of `held_motion`.

    Attributes:
        trial: Flap as fixed flap; no induced velocity.
        on_droop: The blade lies on its droop stop, (cases, azimuths of one turn).
        on_up: The blade is blown against its up stop, (cases, azimuths of one turn).
        stop_moment_N_m: Largest moment over azimuth that presses on a stop, (cases,).
        converged: A rest position was found at every azimuth, (cases,).
    """

    trial: Trial
    on_droop: BoolArray
    on_up: BoolArray
    stop_moment_N_m: FloatArray
    converged: BoolArray


def parked(rotor: RotorArrays, cases: Cases, n_azimuths: int) -> tuple[Problem, ParkedSolution]:
    """Static balance of weight, spring, wind and rigid stops at every azimuth.

    A blade lies on its droop stop as long as the net moment there presses on it. Where it does
    not, the blade rises to the first angle at which the moment turns, or to the up stop.

    Args:
        rotor: The rotor.
        cases: Held states; their speed is taken as zero.
        n_azimuths: Azimuths in one turn.

    Returns:
        The problem whose results are to be taken, and the solution.

    Validity:
        Steady wind, no induced velocity, stops without give; the blade may flutter on its stop
        or fall back on it after a gust, which is not computed.
    """
    problem = Problem(rotor, held_motion(rotor.hub, n_azimuths), "none")
    low, high, has_stops = _limits(rotor, cases, n_azimuths)
    at_low = _net_moment(problem, cases, low)
    lifts = at_low > 0.0
    angle, at_high = low, np.zeros_like(low)
    blown_up = np.zeros_like(lifts)
    some = np.flatnonzero(np.any(lifts, axis=-1))
    if some.size:
        part = cases.take(some)
        risen, turns = _rise(problem, part, low[some], high[some])
        angle, at_high = low.copy(), np.zeros_like(low)
        angle[some] = np.where(lifts[some], risen, low[some])
        blown_up[some] = lifts[some] & ~turns
        at_high[some] = _net_moment(problem, part, high[some])
    on_stop = has_stops[:, None]
    pressing = np.where(~lifts, -at_low, np.where(blown_up, at_high, 0.0))
    found = np.all(on_stop | (lifts & ~blown_up), axis=-1)
    solution = ParkedSolution(
        trial=_trial(problem, cases, angle),
        on_droop=on_stop & ~lifts,
        on_up=on_stop & blown_up,
        stop_moment_N_m=np.where(has_stops, np.max(pressing, axis=-1), 0.0),
        converged=found,
    )
    return problem, solution


def _limits(
    rotor: RotorArrays, cases: Cases, n_azimuths: int
) -> tuple[FloatArray, FloatArray, BoolArray]:
    """Lowest and highest free part of flap, (cases, azimuths), and where stops set them."""
    hub = rotor.hub
    has_stops = np.isfinite(cases.droop_angle_rad) & np.isfinite(cases.up_angle_rad)
    held = held_flap_rad(hub, cases.droop_angle_rad, cases.up_angle_rad, n_azimuths)
    low = held[:, :n_azimuths] - hub.fixed_flap_rad
    up = np.repeat(cases.up_angle_rad[:, None], n_azimuths, axis=1)
    high = -low if hub.pair > 0.0 else up
    middle = hub.spring_neutral_rad - hub.fixed_flap_rad
    low = np.where(has_stops[:, None], low, middle - REACH_WITHOUT_STOPS_RAD)
    high = np.where(has_stops[:, None], high, middle + REACH_WITHOUT_STOPS_RAD)
    return low, high, has_stops


def _trial(problem: Problem, cases: Cases, angle: FloatArray) -> Trial:
    """Blades at the free part of flap given for each azimuth; a pair's other blade opposite."""
    hub, n_azimuths = problem.rotor.hub, angle.shape[1]
    flap = hub.fixed_flap_rad + angle
    if hub.pair > 0.0:
        other = hub.fixed_flap_rad - np.roll(angle, n_azimuths // 2, axis=1)
        flap = np.concatenate([flap, other], axis=1)
    cyclic = np.stack([cases.cyclic_cosine_rad, cases.cyclic_sine_rad], axis=1)
    cyclic = np.where(cases.trimmed[:, None], 0.0, cyclic)
    still = np.zeros((cases.count, problem.rotor.chord_m.size))
    return Trial(np.zeros((cases.count, 0)), cyclic, still, flap)


def _net_moment(problem: Problem, cases: Cases, angle: FloatArray) -> FloatArray:
    """Upward moment on a blade, or on a pair about its hinge, (cases, azimuths of one turn)."""
    now = evaluate(problem, cases, _trial(problem, cases, angle))
    imbalance = flap_imbalance_n_m(problem.rotor, cases, now)
    return pair_moment(problem.rotor.hub, -imbalance)


def _rise(
    problem: Problem, cases: Cases, low: FloatArray, high: FloatArray
) -> tuple[FloatArray, BoolArray]:
    """First angle above the low one at which the upward moment vanishes, and whether any does."""
    below, above = low.copy(), high.copy()
    turned = np.zeros(low.shape, dtype=bool)
    for step in range(1, SCAN_STEPS + 1):
        angle = low + (high - low) * (step / SCAN_STEPS)
        turns = ~turned & (_net_moment(problem, cases, angle) <= 0.0)
        above = np.where(turns, angle, above)
        below = np.where(turned | turns, below, angle)
        turned |= turns
    for _ in range(BISECTIONS):
        middle = 0.5 * (below + above)
        is_up = _net_moment(problem, cases, middle) > 0.0
        below = np.where(is_up, middle, below)
        above = np.where(is_up, above, middle)
    return np.where(turned, 0.5 * (below + above), high), turned
