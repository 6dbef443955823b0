"""Running extremes and contact events of marched units: kept, so that histories need not be."""

from __future__ import annotations

from dataclasses import dataclass, fields
from typing import TYPE_CHECKING, Any

import numpy as np

if TYPE_CHECKING:
    from numpy.typing import NDArray

    Array = NDArray[np.floating[Any]]
    FloatArray = NDArray[np.float64]
    BoolArray = NDArray[np.bool_]
    IndexArray = NDArray[np.int64]

AZIMUTH_BINS = 36
"""Parts of a turn for which the lowest tip is kept."""
TURN_RAD = 2.0 * np.pi
JOIN_S = 0.02
"""Touches less than this apart are one: a stop rings at more than fifty a second, and how often a
blade parts from it then depends on the number of bending modes."""


@dataclass(eq=False)
class Contacts:
    """Touches of the lower stop, each (cases, units); times from the begin of the history.

    Attributes:
        touching: The blade is on its stop now.
        left_rad: Azimuth of the first blade when this one was last on it.
        left_s: Time when it was.
        lifted: It has been off for a whole turn at least once, or began turning and free.
        lift_off_s: When it first had; not a number where it never did.
        count: Touches after that.
        fast_count: Touches at or above the case's counting speed, lifted or not: lying on the
            stop when that speed is passed is one too.
        fast_s: Time when it was last on its stop at such a speed.
        first_s: First touch after that; not a number where there was none.
        last_s: Last touch after that.
        began_s: When the present touch began.
        longest_s: Longest touch after that which ended.
        closing_rad_s: Fastest closing rate at any touch, before lift-off too.
        fastest_rad_s: Highest rotor speed in such a touch.
    """

    touching: BoolArray
    left_rad: FloatArray
    left_s: FloatArray
    lifted: BoolArray
    lift_off_s: FloatArray
    count: IndexArray
    fast_count: IndexArray
    fast_s: FloatArray
    first_s: FloatArray
    last_s: FloatArray
    began_s: FloatArray
    longest_s: FloatArray
    closing_rad_s: FloatArray
    fastest_rad_s: FloatArray

    @staticmethod
    def none(shape: tuple[int, int]) -> Contacts:
        """Nothing has happened yet."""

        def all_of(value: float) -> FloatArray:
            return np.full(shape, value)

        no, whole = np.zeros(shape, bool), np.zeros(shape, np.int64)
        return Contacts(
            touching=no,
            left_rad=all_of(0.0),
            left_s=all_of(-np.inf),
            lifted=no.copy(),
            lift_off_s=all_of(np.nan),
            count=whole,
            fast_count=whole.copy(),
            fast_s=all_of(-np.inf),
            first_s=all_of(np.nan),
            last_s=all_of(np.nan),
            began_s=all_of(0.0),
            longest_s=all_of(0.0),
            closing_rad_s=all_of(0.0),
            fastest_rad_s=all_of(0.0),
        )

    def take(self, where: NDArray[Any]) -> Contacts:
        """Pick cases."""
        return Contacts(*(getattr(self, f.name)[where] for f in fields(self)))

    def put(self, where: NDArray[Any], part: Contacts) -> None:
        """Write cases back."""
        for f in fields(self):
            getattr(self, f.name)[where] = getattr(part, f.name)

    def start_free(self, begins: BoolArray, is_on: BoolArray, speed_rad_s: FloatArray) -> None:
        """Blades that turn free of their stops when their history begins count as lifted.

        Args:
            begins: Cases whose history begins, (cases,).
            is_on: Blades on their stops, (cases, units).
            speed_rad_s: Rotor speed, (cases,).
        """
        self.lifted |= begins[:, None] & ~is_on & (speed_rad_s > 0.0)[:, None]

    def lift(self, azimuth_rad: FloatArray, time_s: FloatArray, counts: BoolArray) -> None:
        """Blades that have been off for a whole turn for the first time count as lifted.

        Args:
            azimuth_rad: Of the first blade, (cases,).
            time_s: Time, (cases,).
            counts: Cases whose history has begun and not ended, (cases,).
        """
        if self.lifted.all():
            return
        rises = azimuth_rad[:, None] - self.left_rad >= TURN_RAD
        rises &= ~self.lifted & ~self.touching & counts[:, None]
        if np.count_nonzero(rises):
            self.lifted |= rises
            self.lift_off_s = np.where(rises, time_s[:, None], self.lift_off_s)


@dataclass(frozen=True, eq=False)
class Touches:
    """What cases on or near a stop do over one step.

    Attributes:
        is_on: The moment on the lower stop is not zero after each part of the step,
            (parts, cases, units).
        closing_rad_s: Rate at which blades approach it at the begin and after each part,
            (parts + 1, cases, units).
        time_s: Begin of the step, (cases,).
        step_s: Its length, (cases,).
        speed_rad_s: Rotor speed, (cases,).
        azimuth_rad: Of the first blade at the begin, (cases,).
        counts: The history has begun and not ended, (cases,).
        is_fast: Touches count by themselves at this speed, (cases,).
    """

    is_on: BoolArray
    closing_rad_s: Array
    time_s: FloatArray
    step_s: FloatArray
    speed_rad_s: FloatArray
    azimuth_rad: FloatArray
    counts: BoolArray
    is_fast: BoolArray


def follow(contacts: Contacts, where: IndexArray, now: Touches) -> None:
    """Carry contacts on over a step.

    Args:
        contacts: Of the whole block.
        where: Which of its cases these are.
        now: What they did.
    """
    any_on = np.logical_or.reduce(now.is_on, axis=0)
    changes = any_on != contacts.touching[where]
    changes |= any_on != np.logical_and.reduce(now.is_on, axis=0)
    if np.count_nonzero(changes):
        _follow_changes(contacts, where, now, np.nonzero(changes))
    case, unit = np.nonzero(now.is_on[-1])
    azimuth = now.azimuth_rad + now.step_s * now.speed_rad_s
    end_s = now.time_s + now.step_s
    contacts.left_rad[where[case], unit] = azimuth[case]
    contacts.left_s[where[case], unit] = end_s[case]
    any_on &= now.counts[:, None]
    if np.count_nonzero(now.is_fast) and np.count_nonzero(any_on & now.is_fast[:, None]):
        _count_fast(contacts, where, any_on & now.is_fast[:, None], (now.time_s, end_s))
    any_on &= contacts.lifted[where]
    if np.count_nonzero(any_on):
        fastest = np.where(any_on, now.speed_rad_s[:, None], 0.0)
        contacts.fastest_rad_s[where] = np.maximum(contacts.fastest_rad_s[where], fastest)


def _count_fast(
    contacts: Contacts, where: IndexArray, is_on: BoolArray, times: tuple[FloatArray, FloatArray]
) -> None:
    """Count blades on their stops at speed, unless they were so just before."""
    begin, end = (time[:, None] for time in times)
    before = contacts.fast_s[where]
    contacts.fast_count[where] += is_on & (begin - before > JOIN_S)
    contacts.fast_s[where] = np.where(is_on, end, before)


def _follow_changes(
    contacts: Contacts, where: IndexArray, now: Touches, lanes: tuple[IndexArray, ...]
) -> None:
    """The same for blades that come down or rise off, each array (parts, lanes) or (lanes,)."""
    case, unit = lanes
    on = now.is_on[:, case, unit]
    parts, lane = on.shape[0], (where[case], unit)
    before = np.concatenate([contacts.touching[lane][None], on[:-1]])
    share = (np.arange(1.0, parts + 1.0) / parts)[:, None]
    time = now.time_s[case] + share * now.step_s[case]
    turned = now.azimuth_rad[case] + share * (now.step_s * now.speed_rad_s)[case]
    counts = contacts.lifted[lane] & now.counts[case]
    seen = np.concatenate([contacts.left_s[lane][None], np.where(on, time, -np.inf)])
    apart = time - np.maximum.accumulate(seen, axis=0)[:-1]
    begins, ends = on & ~before & (apart > JOIN_S), ~on & before & counts
    began = np.where(begins, time, contacts.began_s[lane])
    began = np.maximum.accumulate(began, axis=0)
    stay = np.where(ends, time - began, 0.0).max(axis=0)
    contacts.longest_s[lane] = np.maximum(contacts.longest_s[lane], stay)
    contacts.began_s[lane], contacts.touching[lane] = began[-1], on[-1]
    left = np.where(on, turned, -np.inf).max(axis=0)
    contacts.left_rad[lane] = np.maximum(contacts.left_rad[lane], left)
    contacts.left_s[lane] = seen.max(axis=0)
    begins &= now.counts[case]
    if np.count_nonzero(begins):
        closing = np.maximum(now.closing_rad_s[:-1, case, unit], now.closing_rad_s[1:, case, unit])
        fastest = np.where(begins, closing, 0.0).max(axis=0)
        contacts.closing_rad_s[lane] = np.maximum(contacts.closing_rad_s[lane], fastest)
        _count(contacts, lane, begins & counts, time)


def _count(
    contacts: Contacts,
    lane: tuple[IndexArray, IndexArray],
    begins: BoolArray,
    time: FloatArray,
) -> None:
    """Count touches that begin after lift-off."""
    number = begins.sum(axis=0)
    contacts.count[lane] += number
    first = np.where(begins, time, np.inf).min(axis=0)
    last = np.where(begins, time, -np.inf).max(axis=0)
    touched = number > 0
    before = contacts.first_s[lane]
    contacts.first_s[lane] = np.where(touched & np.isnan(before), first, before)
    contacts.last_s[lane] = np.where(touched, last, contacts.last_s[lane])


@dataclass(eq=False)
class Extremes:
    """Greatest and least values so far.

    Attributes:
        highest_flap_rad: Rotation at the hinge, built-in flap included, (cases, units).
        lowest_flap_rad: The same, lowest.
        highest_tip_m: Height of a tip over the hub, (cases, blades).
        lowest_tip_m: The same by part of the turn, (cases, blades, parts).
        droop_N_m: Moment on a droop stop, (cases, units).
        up_N_m: Moment on an up stop, (cases, units).
        root_N_m: Size of the root moment, (cases, blades).
        hub_N_m: Size of the hub moment of all blades, (cases,).
        thrust_N: Greatest thrust of the whole rotor, (cases,).
        least_thrust_N: Least thrust, (cases,).
        lag_rad: Size of lag at or above the counting speed, (cases, blades).
        lag_stop_N_m: Moment on a lag stop, (cases, blades).
        worst_s: When the highest flap came, (cases,).
    """

    highest_flap_rad: FloatArray
    lowest_flap_rad: FloatArray
    highest_tip_m: FloatArray
    lowest_tip_m: FloatArray
    droop_N_m: FloatArray
    up_N_m: FloatArray
    root_N_m: FloatArray
    hub_N_m: FloatArray
    thrust_N: FloatArray
    least_thrust_N: FloatArray
    lag_rad: FloatArray
    lag_stop_N_m: FloatArray
    worst_s: FloatArray

    @staticmethod
    def none(cases: int, units: int, blades: int) -> Extremes:
        """Nothing has been seen yet."""
        low = -np.inf
        return Extremes(
            np.full((cases, units), low),
            np.full((cases, units), np.inf),
            np.full((cases, blades), low),
            np.full((cases, blades, AZIMUTH_BINS), np.inf),
            np.zeros((cases, units)),
            np.zeros((cases, units)),
            np.zeros((cases, blades)),
            np.zeros(cases),
            np.full(cases, low),
            np.full(cases, np.inf),
            np.zeros((cases, blades)),
            np.zeros((cases, blades)),
            np.zeros(cases),
        )

    def put(self, where: NDArray[Any], part: Extremes) -> None:
        """Write cases back."""
        for f in fields(self):
            getattr(self, f.name)[where] = getattr(part, f.name)

    def take(self, where: NDArray[Any]) -> Extremes:
        """Pick cases."""
        return Extremes(*(getattr(self, f.name)[where] for f in fields(self)))
