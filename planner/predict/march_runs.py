"""Marching tracks in their winds: searched in single precision, the worst again in double."""

from __future__ import annotations

from dataclasses import dataclass, replace
from typing import TYPE_CHECKING

import numpy as np

from planner.methods.gusts import refined
from planner.predict.fineness import STATIONS
from planner.predict.march_pool import Job
from planner.predict.march_winds import GUST_LENGTHS, gust_peaks_s
from planner.rotor.blade_views import flap_inertia
from planner.rotor.march_case import Histories, MarchCases, MarchSettings, make_march_cases
from planner.rotor.setup import hub_freedom

if TYPE_CHECKING:
    from collections.abc import Callable, Sequence

    from numpy.typing import NDArray

    from planner.model.rotor import Rotor
    from planner.model.stand import Mounting
    from planner.predict.cases import Air, AirState
    from planner.predict.march_pool import Crew
    from planner.predict.march_tracks import Track
    from planner.predict.march_winds import Ride, Winds
    from planner.rotor.march import MarchResult

    FloatArray = NDArray[np.float64]

SEARCH = MarchSettings(steps_per_turn=24, longest_step_s=0.01, substeps=4, single=True)
"""For the search; within 0.05 deg of flap and 1 % of a stop moment of the settings below."""
PRINTED = MarchSettings(steps_per_turn=48, longest_step_s=0.01, substeps=8)
"""For what is printed. DEVELOPERS.md tells the convergence study."""
LOWEST_SPEED_RATIO = 1.2
"""Margin of the step table over the highest speed marched."""

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
    "hub_moment_peak",
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
        other: Quantity to its mildest extreme; the least thrust for thrust.
        converged: Every case was marched to its end and resolved its stops.
        when_s: When the highest flap came in the worst case for it.
        governing: The case with the highest flap.
    """

    nominal: dict[str, float]
    worst: dict[str, float]
    other: dict[str, float]
    converged: bool
    when_s: float
    governing: Lane


@dataclass(frozen=True, eq=False)
class Bench:
    """What tracks are marched with."""

    rotor: Rotor
    mounting: Mounting
    air: Air
    winds: Winds
    free_rad_s: float
    crew: Crew

    def job(self, tracks: Sequence[Track], settings: MarchSettings) -> Job:
        """These tracks as a job for the crew."""
        top = max(float(np.max(track.history.speed_rad_s)) for track in tracks)
        return Job(
            rotor=self.rotor,
            mounting=self.mounting,
            top_rad_s=max(top, self.free_rad_s, 1.0),
            settings=settings,
            n_stations=STATIONS,
            histories=stacked(tracks),
            rough=self.winds.rough,
        )


def outcomes(
    bench: Bench,
    tracks: Sequence[Track],
    progress: Callable[[float], None] = lambda _: None,
) -> list[Outcome]:
    """March all tracks in all their winds.

    First at both ends of the air load allowance in single precision; then, also in single
    precision, finer gusts about the worst ones, and the worst cases in nominal air; then the worst
    cases again in double precision, whose numbers take the place of the others.

    Args:
        bench: What they are marched with.
        tracks: The tracks, none twice.
        progress: Called with the share of the work that is done.

    Returns:
        One outcome a track.
    """
    if not tracks:
        return []
    first = [
        Lane(i, ride, end)
        for i, track in enumerate(tracks)
        for ride in bench.winds.rides(track, bench.free_rad_s)
        for end in bench.air.ends
    ]
    seen = _marched(bench, tracks, first, SEARCH, lambda share: progress(0.6 * share))
    finer = [lane for i in range(len(tracks)) for lane in _finer(bench, tracks, first, seen, i)]
    lanes = [*first, *finer]
    if finer:
        seen = _joined(seen, _marched(bench, tracks, finer, SEARCH, lambda _: None))
    progress(0.75)
    chosen = [lane for i in range(len(tracks)) for lane in _governing(lanes, seen, i)]
    nominal = [replace(lane, air=bench.air.nominal) for lane in chosen]
    middle = _marched(bench, tracks, nominal, SEARCH, lambda _: None)
    progress(0.85)
    last = _marched(bench, tracks, chosen, PRINTED, lambda share: progress(0.85 + 0.15 * share))
    all_converged = _all_of(tracks, [(lanes, seen), (nominal, middle), (chosen, last)])
    whole = _replaced((lanes, seen), (chosen, last))
    return [
        _outcome((lanes, whole), (nominal, middle), i, converged=all_converged[i])
        for i in range(len(tracks))
    ]


_Numbers = dict[str, "FloatArray"]


def _marched(
    bench: Bench,
    tracks: Sequence[Track],
    lanes: Sequence[Lane],
    settings: MarchSettings,
    progress: Callable[[float], None],
) -> _Numbers:
    """Worst numbers of each lane; each different lane is marched once."""
    different: dict[Lane, int] = {}
    where = np.array([different.setdefault(lane, len(different)) for lane in lanes])
    cases = _cases(bench, tracks, list(different))
    result = bench.crew.march(bench.job(tracks, settings), cases, progress)
    numbers = worst_of_cases(flap_inertia_kg_m2(bench.rotor), result)
    return {name: values[where] for name, values in numbers.items()}


def _cases(bench: Bench, tracks: Sequence[Track], lanes: Sequence[Lane]) -> MarchCases:
    spacing = 2.0 * np.pi / bench.rotor.n_blades
    rides = [lane.ride for lane in lanes]
    return make_march_cases(
        history=[lane.track for lane in lanes],
        azimuth_rad=[spacing * ride.azimuth_share for ride in rides],
        wind_m_s=[ride.mean_m_s for ride in rides],
        gust_m_s=[ride.gust_m_s for ride in rides],
        gust_start_s=[ride.start_s for ride in rides],
        gust_length_s=[ride.length_s for ride in rides],
        upflow=[ride.upflow for ride in rides],
        series=[ride.series for ride in rides],
        air_density_kg_m3=[lane.air.density_kg_m3 for lane in lanes],
        speed_of_sound_m_s=[lane.air.sound_m_s for lane in lanes],
        load_factor=[lane.air.load_factor for lane in lanes],
        counts_from_rad_s=bench.free_rad_s,
        seats=[tracks[lane.track].seats for lane in lanes],
    )


def stacked(tracks: Sequence[Track]) -> Histories:
    """Histories of tracks side by side, each held at its last row."""
    longest = max(track.history.speed_rad_s.size for track in tracks)

    def rows(name: str) -> FloatArray:
        tables = [getattr(track.history, name) for track in tracks]
        return np.stack([np.pad(t, (0, longest - t.size), mode="edge") for t in tables])

    step = tracks[0].history.step_s
    return Histories(
        step_s=step,
        speed_rad_s=rows("speed_rad_s"),
        collective_rad=rows("collective_rad"),
        cyclic_cosine_rad=rows("cyclic_cosine_rad"),
        cyclic_sine_rad=rows("cyclic_sine_rad"),
        end_s=np.array([step * (track.history.speed_rad_s.size - 1) for track in tracks]),
    )


def flap_inertia_kg_m2(rotor: Rotor) -> float:
    """Moment of inertia of one blade about its flap hinge or equivalent hinge."""
    hinge = hub_freedom(rotor).hinge_m
    return float(flap_inertia(rotor.blade, hinge).second_moment_kg_m2)


def worst_of_cases(inertia_kg_m2: float, result: MarchResult) -> _Numbers:
    """The worst of all blades of each case, by quantity, each (cases,).

    Beside the quantities: ``least_thrust``, ``when`` (of the highest flap) and ``converged``.
    """
    extremes, contacts = result.extremes, result.contacts
    closing = np.max(contacts.closing_rad_s, axis=1)
    return {
        "highest_flap_marched": np.max(extremes.highest_flap_rad, axis=1),
        "lowest_flap_marched": np.min(extremes.lowest_flap_rad, axis=1),
        "droop_stop_peak_moment": np.max(extremes.droop_N_m, axis=1),
        "up_stop_peak_moment": np.max(extremes.up_N_m, axis=1),
        "contacts_after_lift_off": np.max(contacts.fast_count, axis=1).astype(np.float64),
        "contact_highest_speed": np.max(contacts.fastest_rad_s, axis=1),
        "contact_longest": np.max(contacts.longest_s, axis=1),
        "contact_closing_speed": closing,
        "contact_energy": 0.5 * inertia_kg_m2 * closing**2,
        "highest_tip": np.max(extremes.highest_tip_m, axis=1),
        "lowest_tip": np.min(extremes.lowest_tip_m, axis=(1, 2)),
        "lag_peak": np.max(extremes.lag_rad, axis=1),
        "lag_stop_peak_moment": np.max(extremes.lag_stop_N_m, axis=1),
        "root_flap_peak_moment": np.max(extremes.root_N_m, axis=1),
        "hub_moment_peak": extremes.hub_N_m,
        "thrust_peak": extremes.thrust_N,
        "least_thrust": extremes.least_thrust_N,
        "when": extremes.worst_s,
        "converged": result.converged.astype(np.float64),
    }


def _of(lanes: Sequence[Lane], track: int) -> NDArray[np.int64]:
    return np.flatnonzero([lane.track == track for lane in lanes])


def _worst_lane(numbers: _Numbers, where: NDArray[np.int64], quantity: str) -> int:
    """Place of the worst value; one that is not a number is never the worst."""
    values = numbers[quantity][where]
    if quantity in LEAST:
        values = -values
    return int(where[np.argmax(np.where(np.isfinite(values), values, -np.inf))])


def _finer(
    bench: Bench, tracks: Sequence[Track], lanes: Sequence[Lane], seen: _Numbers, track: int
) -> list[Lane]:
    """Gusts about the worst ones of a track that passes the region of the stops."""
    if not tracks[track].is_low:
        return []
    where = _of(lanes, track)
    found: list[Lane] = []
    peaks = gust_peaks_s(tracks[track], bench.free_rad_s)
    spacing = float(np.min(np.diff(peaks))) if peaks.size > 1 else 2.0
    for quantity in REFINED:
        worst = lanes[_worst_lane(seen, where, quantity)]
        ride = worst.ride
        if ride.gust_m_s <= 0.0:
            continue
        bounds = bench.winds.lengths_s(bench.winds.sectors[ride.sector])
        ratio = (bounds[1] / bounds[0]) ** (1.0 / (GUST_LENGTHS - 1))
        near = refined(ride.start_s, ride.length_s, spacing, ratio, bounds, 1)
        found += [
            replace(worst, ride=replace(ride, start_s=start, length_s=length))
            for start, length in zip(near[0].tolist(), near[1].tolist(), strict=True)
        ]
    return [lane for lane in dict.fromkeys(found) if lane not in lanes]


def _governing(lanes: Sequence[Lane], seen: _Numbers, track: int) -> list[Lane]:
    """The worst cases of a track, each once."""
    where = _of(lanes, track)
    return list(dict.fromkeys(lanes[_worst_lane(seen, where, q)] for q in GOVERNING))


def _replaced(
    whole: tuple[Sequence[Lane], _Numbers], again: tuple[Sequence[Lane], _Numbers]
) -> _Numbers:
    """Numbers of all lanes, those of lanes that were marched again replaced."""
    place = {lane: i for i, lane in enumerate(whole[0])}
    where = np.array([place[lane] for lane in again[0]])
    merged = {name: values.copy() for name, values in whole[1].items()}
    for name, values in merged.items():
        values[where] = again[1][name]
    return merged


def _joined(first: _Numbers, second: _Numbers) -> _Numbers:
    return {name: np.concatenate([first[name], second[name]]) for name in first}


def _all_of(
    tracks: Sequence[Track], parts: Sequence[tuple[Sequence[Lane], _Numbers]]
) -> list[bool]:
    """Whether all lanes of each track converged."""
    good = [True] * len(tracks)
    for lanes, numbers in parts:
        for lane, converged in zip(lanes, numbers["converged"], strict=True):
            good[lane.track] = good[lane.track] and bool(converged)
    return good


def _outcome(
    last: tuple[Sequence[Lane], _Numbers],
    middle: tuple[Sequence[Lane], _Numbers],
    track: int,
    *,
    converged: bool,
) -> Outcome:
    lanes, numbers = last
    where, between = _of(lanes, track), _of(middle[0], track)

    def worst(values: FloatArray, quantity: str) -> float:
        return float(np.min(values) if quantity in LEAST else np.max(values))

    both = (*MOST, *LEAST)
    top = _worst_lane(numbers, where, "highest_flap_marched")
    return Outcome(
        nominal={q: worst(middle[1][q][between], q) for q in both},
        worst={q: worst(numbers[q][where], q) for q in both},
        other={"thrust_peak": float(np.min(numbers["least_thrust"][where]))},
        converged=converged,
        when_s=float(numbers["when"][top]),
        governing=lanes[top],
    )
