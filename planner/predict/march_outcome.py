"""Marched cases and what they come to: worst numbers case by case, and of a track over all."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

if TYPE_CHECKING:
    from collections.abc import Sequence

    from numpy.typing import NDArray

    from planner.predict.cases import AirState
    from planner.predict.march_winds import Ride
    from planner.rotor.march import MarchResult

    FloatArray = NDArray[np.float64]

Numbers = Mapping[str, "NDArray[np.float64]"]
"""Quantity to its worst value in each case, (cases,)."""

MOST = (
    "highest_flap_marched",
    "droop_stop_peak_moment",
    "up_stop_peak_moment",
    "contacts_after_lift_off",
    "contact_highest_speed",
    "contact_longest",
    "contact_closing_speed",
    "contact_energy",
    "highest_tip",
    "lag_peak",
    "lag_stop_peak_moment",
    "root_flap_peak_moment",
    "hub_moment_peak",
    "thrust_peak",
)
"""Quantities whose greatest value is the worst."""
LEAST = ("lowest_flap_marched", "lowest_tip")
"""Quantities whose least value is the worst."""
GOVERNING = (
    "highest_flap_marched",
    "lowest_flap_marched",
    "droop_stop_peak_moment",
    "up_stop_peak_moment",
    "root_flap_peak_moment",
    "hub_moment_peak",
    "contacts_after_lift_off",
    "contact_closing_speed",
)
"""A track's worst case of each of these is marched again in double precision."""
REFINED = ("highest_flap_marched", "droop_stop_peak_moment")
"""The gusts about the worst case of each of these are searched more finely."""


@dataclass(frozen=True)
class Lane:
    """One case: a track in one wind and air."""

    track: int
    ride: Ride
    air: AirState


@dataclass(frozen=True, eq=False)
class Outcome:
    """What a track comes to over all its winds.

    Attributes:
        nominal: Quantity to its worst value in nominal air.
        worst: Quantity to its worst value over all cases.
        other: The least thrust, and the times of the first and the last touch after lift-off in
            any case, not a number where there is none.
        converged: Every case was marched to its end and resolved its stops.
        shown: The cases with the highest and with the lowest flap.
        is_at_rest: The history begins or ends at rest.
    """

    nominal: dict[str, float]
    worst: dict[str, float]
    other: dict[str, float]
    converged: bool
    shown: tuple[Lane, Lane]
    is_at_rest: bool


def worst_of_cases(droop_N_m_rad: float, result: MarchResult) -> Numbers:
    """The worst of all blades of each case, by quantity, each (cases,).

    Beside the quantities: ``least_thrust``, ``when`` (of the highest flap), ``first`` and ``last``
    touch after lift-off (not a number where there is none), and ``converged``.

    Args:
        droop_N_m_rad: Stiffness of the droop stop; infinite where the hub has none.
        result: What was marched.
    """
    extremes, contacts = result.extremes, result.contacts
    droop = np.max(extremes.droop_N_m, axis=1)
    return {
        "highest_flap_marched": np.max(extremes.highest_flap_rad, axis=1),
        "lowest_flap_marched": np.min(extremes.lowest_flap_rad, axis=1),
        "droop_stop_peak_moment": droop,
        "up_stop_peak_moment": np.max(extremes.up_N_m, axis=1),
        "contacts_after_lift_off": np.max(contacts.fast_count, axis=1).astype(np.float64),
        "contact_highest_speed": np.max(contacts.fastest_rad_s, axis=1),
        "contact_longest": np.max(contacts.longest_s, axis=1),
        "contact_closing_speed": np.max(contacts.closing_rad_s, axis=1),
        "contact_energy": 0.5 * droop**2 / droop_N_m_rad,
        "highest_tip": np.max(extremes.highest_tip_m, axis=1),
        "lowest_tip": np.min(extremes.lowest_tip_m, axis=(1, 2)),
        "lag_peak": np.max(extremes.lag_rad, axis=1),
        "lag_stop_peak_moment": np.max(extremes.lag_stop_N_m, axis=1),
        "root_flap_peak_moment": np.max(extremes.root_N_m, axis=1),
        "hub_moment_peak": extremes.hub_N_m,
        "thrust_peak": extremes.thrust_N,
        "least_thrust": extremes.least_thrust_N,
        "when": extremes.worst_s,
        "first": np.fmin.reduce(contacts.first_s, axis=1),
        "last": np.fmax.reduce(contacts.last_s, axis=1),
        "converged": result.converged.astype(np.float64),
    }


def lanes_of_track(lanes: Sequence[Lane], track: int) -> NDArray[np.int64]:
    """Places of a track's cases."""
    return np.flatnonzero([lane.track == track for lane in lanes])


def worst_lane(numbers: Numbers, where: NDArray[np.int64], quantity: str) -> int:
    """Place of the worst value; one that is not a number is never the worst."""
    values = numbers[quantity][where]
    if quantity in LEAST:
        values = -values
    return int(where[np.argmax(np.where(np.isfinite(values), values, -np.inf))])


def split_at(numbers: Numbers, at: int) -> tuple[Numbers, Numbers]:
    """Numbers of the cases before a place, and of those from there on."""
    first = {name: values[:at] for name, values in numbers.items()}
    return first, {name: values[at:] for name, values in numbers.items()}


def replaced(
    whole: tuple[Sequence[Lane], Numbers], again: tuple[Sequence[Lane], Numbers]
) -> Numbers:
    """Numbers of all lanes, those of lanes that were marched again replaced."""
    place = {lane: i for i, lane in enumerate(whole[0])}
    where = np.array([place[lane] for lane in again[0]])
    merged = {name: values.copy() for name, values in whole[1].items()}
    for name, values in merged.items():
        values[where] = again[1][name]
    return merged


def joined(first: Numbers, second: Numbers) -> Numbers:
    """Numbers of two lists of cases, one after the other."""
    return {name: np.concatenate([first[name], second[name]]) for name in first}


def all_converged(n_tracks: int, parts: Sequence[tuple[Sequence[Lane], Numbers]]) -> list[bool]:
    """Whether all cases of each track converged."""
    good = [True] * n_tracks
    for lanes, numbers in parts:
        for lane, converged in zip(lanes, numbers["converged"], strict=True):
            good[lane.track] = good[lane.track] and bool(converged)
    return good


def outcome_of(
    last: tuple[Sequence[Lane], Numbers],
    middle: tuple[Sequence[Lane], Numbers],
    track: int,
    *,
    converged: bool,
    is_at_rest: bool,
) -> Outcome:
    """What a track comes to.

    Args:
        last: All cases and their numbers.
        middle: Cases in nominal air and their numbers.
        track: Which track.
        converged: All its cases converged.
        is_at_rest: Its history begins or ends at rest.

    Returns:
        The outcome.
    """
    lanes, numbers = last
    where, between = lanes_of_track(lanes, track), lanes_of_track(middle[0], track)

    def worst(values: FloatArray, quantity: str) -> float:
        return float(np.min(values) if quantity in LEAST else np.max(values))

    both = (*MOST, *LEAST)
    return Outcome(
        nominal={q: worst(middle[1][q][between], q) for q in both},
        worst={q: worst(numbers[q][where], q) for q in both},
        other={
            "least_thrust": float(np.min(numbers["least_thrust"][where])),
            "first": float(np.fmin.reduce(numbers["first"][where])),
            "last": float(np.fmax.reduce(numbers["last"][where])),
        },
        converged=converged,
        is_at_rest=is_at_rest,
        shown=(
            lanes[worst_lane(numbers, where, "highest_flap_marched")],
            lanes[worst_lane(numbers, where, "lowest_flap_marched")],
        ),
    )
