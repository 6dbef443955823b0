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


@dataclass(eq=False)
class Contacts:
    """Touches of the lower stop, each (cases, units); times from the begin of the history.

    Attributes:
        touching: The blade is on its stop now.
        free_rad: Azimuth that it has turned since it left it.
        lifted: It has been off for a whole turn at least once, or began turning and free.
        lift_off_s: When it first had; not a number where it never did.
        count: Touches after that.
        fast_count: Touches after that at or above the case's counting speed.
        first_s: First touch after that; not a number where there was none.
        last_s: Last touch after that.
        began_s: When the present touch began.
        longest_s: Longest touch after that which ended.
        closing_rad_s: Fastest closing rate at such a touch.
        fastest_rad_s: Highest rotor speed in such a touch.
    """

    touching: BoolArray
    free_rad: FloatArray
    lifted: BoolArray
    lift_off_s: FloatArray
    count: IndexArray
    fast_count: IndexArray
    first_s: FloatArray
    last_s: FloatArray
    began_s: FloatArray
    longest_s: FloatArray
    closing_rad_s: FloatArray
    fastest_rad_s: FloatArray

    @staticmethod
    def none(shape: tuple[int, int]) -> Contacts:
        """Nothing has happened yet."""
        whole, missing = np.zeros(shape, np.int64), np.full(shape, np.nan)
        no, zero = np.zeros(shape, bool), np.zeros(shape)
        return Contacts(
            no.copy(),
            zero.copy(),
            no.copy(),
            missing.copy(),
            whole.copy(),
            whole.copy(),
            missing.copy(),
            missing.copy(),
            zero.copy(),
            zero.copy(),
            zero.copy(),
            zero.copy(),
        )

    def take(self, where: NDArray[Any]) -> Contacts:
        """Pick cases."""
        return Contacts(*(getattr(self, f.name)[where] for f in fields(self)))

    def put(self, where: NDArray[Any], part: Contacts) -> None:
        """Write cases back."""
        for f in fields(self):
            getattr(self, f.name)[where] = getattr(part, f.name)


@dataclass(frozen=True, eq=False)
class Moment:
    """One instant of a block at the end of a sub-step.

    Attributes:
        time_s: From the begin of the history, (cases,).
        step_s: Since the instant before, (cases,).
        speed_rad_s: Rotor speed, (cases,).
        counts_from_rad_s: Speed from which touches count by themselves, (cases,).
        is_on: The moment on the lower stop is not zero, (cases, units).
        closing_rad_s: Rate at which blades approach it, (cases, units).
    """

    time_s: FloatArray
    step_s: FloatArray
    speed_rad_s: FloatArray
    counts_from_rad_s: FloatArray
    is_on: BoolArray
    closing_rad_s: Array


def start_free(
    contacts: Contacts, begins: BoolArray, is_on: BoolArray, speed_rad_s: FloatArray
) -> None:
    """Blades that turn free of their stops when their history begins count as lifted."""
    lifted = begins[:, None] & ~is_on & (speed_rad_s > 0.0)[:, None]
    contacts.lifted |= lifted


def turn_on(contacts: Contacts, turned_rad: FloatArray, counts: BoolArray) -> BoolArray:
    """Count turns of blades away from their stops.

    Args:
        contacts: To be carried on.
        turned_rad: Azimuth turned, 0 where a blade may be on its stop, (cases,).
        counts: Cases whose history has begun and whose blades are away, (cases,).

    Returns:
        Blades that have just been off for a whole turn for the first time, (cases, units).
    """
    contacts.free_rad += turned_rad[:, None]
    rises: BoolArray = (contacts.free_rad >= TURN_RAD) & ~contacts.lifted & counts[:, None]
    contacts.lifted |= rises
    return rises


def follow(contacts: Contacts, now: Moment) -> None:
    """Count touches up to an instant; nothing counts before the history begins."""
    counts = (now.time_s >= 0.0)[:, None]
    time = np.broadcast_to(now.time_s[:, None], now.is_on.shape)
    speed = np.broadcast_to(now.speed_rad_s[:, None], now.is_on.shape)
    begins = now.is_on & ~contacts.touching
    ends = ~now.is_on & contacts.touching
    if np.any(begins):
        event = begins & contacts.lifted & counts
        contacts.count += event
        contacts.fast_count += event & (speed >= now.counts_from_rad_s[:, None])
        contacts.first_s = np.where(event & np.isnan(contacts.first_s), time, contacts.first_s)
        contacts.last_s = np.where(event, time, contacts.last_s)
        closing = np.where(event, now.closing_rad_s, 0.0)
        contacts.closing_rad_s = np.maximum(contacts.closing_rad_s, closing)
        contacts.began_s = np.where(begins, time, contacts.began_s)
    held = now.is_on & contacts.lifted & counts
    if np.any(held):
        contacts.fastest_rad_s = np.maximum(contacts.fastest_rad_s, np.where(held, speed, 0.0))
    if np.any(ends):
        event = ends & contacts.lifted & counts
        stay = np.where(event, time - contacts.began_s, 0.0)
        contacts.longest_s = np.maximum(contacts.longest_s, stay)
    contacts.touching = now.is_on
    turned = contacts.free_rad + (now.speed_rad_s * now.step_s)[:, None]
    contacts.free_rad = np.where(now.is_on, 0.0, turned)
    rises = (contacts.free_rad >= TURN_RAD) & ~contacts.lifted & counts
    if np.any(rises):
        contacts.lifted |= rises
        contacts.lift_off_s = np.where(rises, time, contacts.lift_off_s)


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
        lag_rad: Size of lag, (cases, blades).
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
