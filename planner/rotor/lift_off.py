"""Rotor speeds at which blades leave their droop stop."""

from __future__ import annotations

from dataclasses import dataclass, replace
from typing import TYPE_CHECKING

import numpy as np

from planner.rotor.trim import free_flap, held_on_stop

if TYPE_CHECKING:
    from collections.abc import Callable

    from numpy.typing import NDArray

    from planner.rotor.case import Cases
    from planner.rotor.result import TrimSettings
    from planner.rotor.setup import RotorArrays

    FloatArray = NDArray[np.float64]
    BoolArray = NDArray[np.bool_]
    IndexArray = NDArray[np.int64]
    Margin = Callable[[Cases], tuple[FloatArray, BoolArray]]

GRID = np.concatenate([np.arange(1, 21) * 0.02, np.arange(5, 11) * 0.1])
"""Speeds tried as shares of the top speed, in steps of 2 % up to 40 % of it and of 10 % above:
contact in a narrower range of speeds may be missed."""
STEPS_AT_ONCE = 5
ROUNDS = 4
"""Rounds of false position (Illinois), which close in from both sides."""


@dataclass(frozen=True, eq=False)
class LiftOff:
    """Lift-off speeds, each of shape (cases,).

    Attributes:
        speed_rad_s: The speed; not a number where none was found. 0 where there is no droop stop.
        is_found: The speed was closed in between a solved state with contact and a solved state
            without, or there is no stop to leave.
    """

    speed_rad_s: FloatArray
    is_found: BoolArray


def still_air_lift_off(
    rotor: RotorArrays,
    cases: Cases,
    top_speed_rad_s: FloatArray,
    settings: TrimSettings | None = None,
) -> LiftOff:
    """Lowest speed at which nothing presses the blades on the droop stop at the given pitch.

    The blade is held at the stop angle in its own downwash. Moments of air, centrifugal force,
    weight and spring are summed at the azimuth where they press most.

    Args:
        rotor: The rotor.
        cases: Pitch, air and stop; their wind is left out and their speed is not used.
        top_speed_rad_s: Where the search upwards ends, above 0, (cases,).
        settings: Fineness; None takes the defaults.

    Returns:
        Lift-off speeds. Not found where the blade does not lift by the top speed or a state on
        the way there could not be solved. A blade that lifts at 2 % of the top speed already
        gets that speed.

    Validity:
        Still air only: in wind blades may touch far above this speed.
    """
    still = replace(
        cases,
        wind_m_s=np.zeros(cases.count),
        trimmed=np.zeros(cases.count, dtype=bool),
        cyclic_cosine_rad=np.where(cases.trimmed, 0.0, cases.cyclic_cosine_rad),
        cyclic_sine_rad=np.where(cases.trimmed, 0.0, cases.cyclic_sine_rad),
    )

    def margin(part: Cases) -> tuple[FloatArray, BoolArray]:
        results, solved = held_on_stop(rotor, part, settings)
        return -results.stop_moment_N_m, solved

    _check_top_speed(cases, top_speed_rad_s)
    grid = GRID
    change = _first_change(still, top_speed_rad_s, grid, margin)
    return _lift_off(still, top_speed_rad_s, change, margin, at_once=grid[0], never=np.nan)


def lift_off_in_wind(
    rotor: RotorArrays,
    cases: Cases,
    top_speed_rad_s: FloatArray,
    settings: TrimSettings | None = None,
) -> LiftOff:
    """Lowest speed above which blades stay off the droop stop at every azimuth.

    Searched downwards from the top speed over the grid for the first speed whose free flap
    passes the stop, then refined between that speed and the one above.

    Args:
        rotor: The rotor.
        cases: Pitch, wind, air and stop; their speed is not used.
        top_speed_rad_s: Where the search downwards begins, above 0, (cases,).
        settings: Fineness; None takes the defaults.

    Returns:
        Lift-off speeds. Not found where blades touch at the top speed already, or where the first
        state that is not free of contact could not be solved: a speed next to a failure would be
        a guess. Blades free down to 2 % of the top speed get that speed.

    Validity:
        Blades held at each speed in steady wind, up to the top speed.
    """

    def margin(part: Cases) -> tuple[FloatArray, BoolArray]:
        results, solved = free_flap(rotor, part, settings)
        return part.droop_angle_rad - results.flap_lowest_rad, solved

    _check_top_speed(cases, top_speed_rad_s)
    grid = GRID[::-1]
    change = _first_change(cases, top_speed_rad_s, grid, margin)
    return _lift_off(cases, top_speed_rad_s, change, margin, at_once=np.nan, never=grid[-1])


@dataclass(frozen=True, eq=False)
class _Change:
    """Where a margin, below zero at the start of a grid, first is not below zero any more.

    Attributes:
        before: Share of the top speed just before, not a number where the first one has changed.
        after: Share of the top speed of the change, not a number where nothing changes.
        is_solved: The state of the change is solved, or there is no change.
    """

    before: FloatArray
    after: FloatArray
    is_solved: BoolArray


def _check_top_speed(cases: Cases, top_speed_rad_s: FloatArray) -> None:
    if top_speed_rad_s.shape != (cases.count,) or not np.all(top_speed_rad_s > 0.0):
        msg = (
            f"lift-off, top_speed_rad_s: expected {cases.count} speeds above 0, found "
            f"{top_speed_rad_s}; give the highest speed of the run for each case"
        )
        raise ValueError(msg)


def _first_change(
    cases: Cases, top_speed_rad_s: FloatArray, grid: FloatArray, margin: Margin
) -> _Change:
    """Walk along the grid, a few speeds at once, until every case has changed."""
    count = cases.count
    before, after = np.full(count, np.nan), np.full(count, np.nan)
    is_solved = np.ones(count, dtype=bool)
    waiting = np.flatnonzero(np.isfinite(cases.droop_angle_rad))
    for start in range(0, grid.size, STEPS_AT_ONCE):
        if waiting.size == 0:
            break
        shares = grid[start : start + STEPS_AT_ONCE]
        part = cases.take(np.repeat(waiting, shares.size))
        speed = (top_speed_rad_s[waiting, None] * shares).reshape(-1)
        value, solved = margin(replace(part, speed_rad_s=speed))
        solved = solved.reshape(waiting.size, shares.size)
        changes = ~solved | (value.reshape(solved.shape) >= 0.0)
        first = np.argmax(changes, axis=1)
        ended = np.any(changes, axis=1)
        after[waiting[ended]] = shares[first[ended]]
        is_solved[waiting[ended]] = solved[ended, first[ended]]
        place = np.where(ended, start + first, start + shares.size)
        before[waiting] = np.where(place > 0, grid[np.maximum(place - 1, 0)], np.nan)
        waiting = waiting[~ended]
    return _Change(before, after, is_solved)


def _lift_off(
    cases: Cases,
    top_speed_rad_s: FloatArray,
    change: _Change,
    margin: Margin,
    *,
    at_once: float,
    never: float,
) -> LiftOff:
    """Narrow each change down; name what changes at the first speed, and what never does."""
    share, solved = np.maximum(change.before, change.after), change.is_solved.copy()
    bracketed = np.flatnonzero(solved & np.isfinite(change.before) & np.isfinite(change.after))
    if bracketed.size:
        part, top = cases.take(bracketed), top_speed_rad_s[bracketed]

        def at(shares: FloatArray) -> tuple[FloatArray, BoolArray]:
            return margin(replace(part, speed_rad_s=shares * top))

        ends = (change.before[bracketed], change.after[bracketed])
        share[bracketed], solved[bracketed] = _false_position(ends, at)
    share = np.where(np.isnan(change.after), never, share)
    share = np.where(np.isnan(change.before), at_once, share)
    has_stop = np.isfinite(cases.droop_angle_rad)
    share = np.where(has_stop, np.where(solved, share, np.nan), 0.0)
    return LiftOff(share * top_speed_rad_s, np.isfinite(share))


def _false_position(
    ends: tuple[FloatArray, FloatArray],
    margin: Callable[[FloatArray], tuple[FloatArray, BoolArray]],
) -> tuple[FloatArray, BoolArray]:
    """Zero of a margin, below zero at the first end and not at the second; its faster side.

    Lines are drawn over the square of the speed, with which centrifugal force grows.
    """
    (below, low), (above, high) = (ends[0], margin(ends[0])[0]), (ends[1], margin(ends[1])[0])
    share, solved = ends[1], np.ones(ends[0].shape, dtype=bool)
    side = np.zeros(ends[0].shape)
    for _ in range(ROUNDS):
        slope = np.where(high > low, high - low, 1.0)
        share = np.clip(
            np.sqrt(np.maximum(above**2 - high * (above**2 - below**2) / slope, 0.0)),
            np.minimum(below, above),
            np.maximum(below, above),
        )
        value, is_solved = margin(share)
        solved &= is_solved
        is_below = value < 0.0
        high = np.where(is_below & (side < 0.0), 0.5 * high, high)
        low = np.where(~is_below & (side > 0.0), 0.5 * low, low)
        below, low = np.where(is_below, share, below), np.where(is_below, value, low)
        above, high = np.where(is_below, above, share), np.where(is_below, high, value)
        side = np.where(is_below, -1.0, 1.0)
    return np.maximum(below, above), solved
