"""Marching tracks in their winds: searched in single precision, the worst again in double."""

from __future__ import annotations

import math
from dataclasses import dataclass, replace
from typing import TYPE_CHECKING

import numpy as np

from planner.methods.gusts import refined
from planner.predict.fineness import STATIONS
from planner.predict.march_outcome import (
    GOVERNING,
    REFINED,
    Lane,
    Numbers,
    Outcome,
    all_converged,
    joined,
    lanes_of_track,
    outcome_of,
    replaced,
    split_at,
    worst_lane,
    worst_of_cases,
)
from planner.predict.march_pool import Job
from planner.predict.march_winds import GUST_LENGTHS, gust_peaks_s
from planner.rotor.march_case import Histories, MarchCases, MarchSettings, make_march_cases

if TYPE_CHECKING:
    from collections.abc import Callable, Mapping, Sequence

    from numpy.typing import NDArray

    from planner.model.rotor import Rotor
    from planner.model.stand import Mounting
    from planner.predict.cases import Air
    from planner.predict.march_pool import Crew
    from planner.predict.march_tracks import Track
    from planner.predict.march_winds import Ride, Winds

    FloatArray = NDArray[np.float64]

SEARCH = MarchSettings(steps_per_turn=24, longest_step_s=0.02, substeps=6, single=True)
"""For the search; within 0.05 deg of flap and 1 % of a stop moment of the settings below."""
PRINTED = MarchSettings(steps_per_turn=48, longest_step_s=0.01, substeps=8)
"""For what is printed. DEVELOPERS.md tells the convergence study."""
SCAN = MarchSettings(steps_per_turn=16, longest_step_s=0.015, substeps=6, single=True)
"""For the search of a thrifty bench; within 0.02 deg of flap and 1 % of a stop moment of the
search above, in three quarters of its time (computed: the articulated sample in 9 m/s)."""
ALONE_S = 2.0
"""Spacing about a gust's peak that has no neighbour."""


@dataclass(frozen=True, eq=False)
class Bench:
    """What tracks are marched with."""

    rotor: Rotor
    mounting: Mounting
    air: Air
    winds: Winds
    free_rad_s: float
    crew: Crew
    is_thrifty: bool = False
    """The search alone counts: for scans over many winds."""

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


@dataclass(frozen=True, eq=False)
class Searched:
    """Tracks after the search: every case in single precision, both ends of the allowance.

    Attributes:
        bench: What they were marched with.
        tracks: The tracks, none twice.
        lanes: The cases.
        numbers: Worst numbers of each case.
    """

    bench: Bench
    tracks: tuple[Track, ...]
    lanes: tuple[Lane, ...]
    numbers: Mapping[str, FloatArray]

    def highest_flap(self, track: int) -> tuple[float, float]:
        """Highest flap of a track, and when it came."""
        worst = worst_lane(self.numbers, lanes_of_track(self.lanes, track), "highest_flap_marched")
        flap, when = self.numbers["highest_flap_marched"], self.numbers["when"]
        return float(flap[worst]), float(when[worst])

    def outcomes(self) -> list[Outcome]:
        """What the tracks came to by the search alone; nominal stands for the worst."""
        good = all_converged(len(self.tracks), [(self.lanes, self.numbers)])
        both = (self.lanes, self.numbers)
        return [
            outcome_of(both, both, i, converged=good[i], is_at_rest=self.tracks[i].is_at_rest)
            for i in range(len(self.tracks))
        ]


def search(
    bench: Bench, tracks: Sequence[Track], progress: Callable[[float], None] = lambda _: None
) -> Searched:
    """March tracks in all their winds at both ends of the air load allowance.

    Args:
        bench: What they are marched with.
        tracks: The tracks, none twice.
        progress: Called with the share of the work that is done.

    Returns:
        The tracks with all their cases.
    """
    lanes = tuple(
        Lane(i, ride, end)
        for i, track in enumerate(tracks)
        for ride in _rides(bench, track)
        for end in bench.air.ends
    )
    settings = SCAN if bench.is_thrifty else SEARCH
    numbers = _marched(bench, tracks, lanes, settings, progress) if lanes else {}
    return Searched(bench, tuple(tracks), lanes, numbers)


def _rides(bench: Bench, track: Track) -> list[Ride]:
    """Winds of a track, each once: sectors of like wind differ in their turbulence alone.

    A thrifty bench leaves out calm and steady wind where there are gusts, whose mean is as strong.
    """
    winds = [(s.mean_m_s, s.gust_m_s, s.upflow_slope) for s in bench.winds.sectors]
    rides = bench.winds.rides(track, bench.free_rad_s)
    if bench.is_thrifty:
        rides = [ride for ride in rides if ride.gust_m_s > 0.0 or ride.series >= 0] or rides
    return list(
        dict.fromkeys(
            ride if ride.series >= 0 else replace(ride, sector=winds.index(winds[ride.sector]))
            for ride in rides
        )
    )


def settle(
    found: Sequence[Searched], progress: Callable[[float], None] = lambda _: None
) -> list[Outcome]:
    """Look again at what searches found worst.

    Finer gusts about the worst ones and the worst cases in nominal air are marched, still in
    single precision; then, where the stops matter, the worst cases in double precision, whose
    numbers take the place of the others. Above that both precisions agree far within 0.01 deg.

    Args:
        found: Searches with the same bench.
        progress: Called with the share of the work that is done.

    Returns:
        One outcome a track, search after search.
    """
    if not any(one.tracks for one in found):
        return []
    whole = _together(found)
    bench, tracks, first, seen = whole.bench, whole.tracks, whole.lanes, whole.numbers
    places = range(len(tracks))
    finer = [lane for i in places for lane in _finer(whole, i)]
    likely = [lane for i in places for lane in _governing(first, seen, i)]
    nominal = [replace(lane, air=bench.air.nominal) for lane in likely]
    both = _marched(bench, tracks, [*finer, *nominal], SEARCH, lambda s: progress(0.4 * s))
    again, middle = split_at(both, len(finer))
    lanes, seen = (*first, *finer), joined(seen, again)
    chosen = [lane for i in places if tracks[i].is_low for lane in _governing(lanes, seen, i)]
    parts = [(lanes, seen), (nominal, middle)]
    if chosen:
        last = _marched(bench, tracks, chosen, PRINTED, lambda share: progress(0.4 + 0.6 * share))
        parts.append((chosen, last))
        seen = replaced((lanes, seen), (chosen, last))
    good = all_converged(len(tracks), parts)
    return [
        outcome_of(
            (lanes, seen),
            (nominal, middle),
            i,
            converged=good[i],
            is_at_rest=tracks[i].is_at_rest,
        )
        for i in places
    ]


def _together(found: Sequence[Searched]) -> Searched:
    """Searches one after the other as one."""
    lanes: list[Lane] = []
    tracks: list[Track] = []
    numbers = next(one.numbers for one in found if one.tracks)
    numbers = {name: numbers[name][:0] for name in numbers}
    for one in found:
        if not one.tracks:
            continue
        lanes += [replace(lane, track=lane.track + len(tracks)) for lane in one.lanes]
        tracks += one.tracks
        numbers = joined(numbers, one.numbers)
    return Searched(found[0].bench, tuple(tracks), tuple(lanes), numbers)


def _marched(
    bench: Bench,
    tracks: Sequence[Track],
    lanes: Sequence[Lane],
    settings: MarchSettings,
    progress: Callable[[float], None],
) -> Numbers:
    """Worst numbers of each lane; each different lane is marched once."""
    different: dict[Lane, int] = {}
    where = np.array([different.setdefault(lane, len(different)) for lane in lanes])
    cases = cases_of(bench, tracks, list(different))
    result = bench.crew.march(bench.job(tracks, settings), cases, progress)
    droop = bench.rotor.droop_stop
    stiffness = math.inf if droop is None else droop.stiffness_N_m_rad
    numbers = worst_of_cases(stiffness, result)
    return {name: values[where] for name, values in numbers.items()}


def cases_of(bench: Bench, tracks: Sequence[Track], lanes: Sequence[Lane]) -> MarchCases:
    """Cases as the rotor marches them."""
    spacing = 2.0 * np.pi / bench.rotor.n_blades
    up = -1.0 if bench.mounting == "inverted" else 1.0  # along thrust
    rides = [lane.ride for lane in lanes]
    return make_march_cases(
        history=[lane.track for lane in lanes],
        azimuth_rad=[spacing * ride.azimuth_share for ride in rides],
        wind_m_s=[ride.mean_m_s for ride in rides],
        gust_m_s=[ride.gust_m_s for ride in rides],
        gust_start_s=[ride.start_s for ride in rides],
        gust_length_s=[ride.length_s for ride in rides],
        upflow=[up * ride.upflow for ride in rides],
        series=[ride.series for ride in rides],
        series_start_s=[ride.series_start_s for ride in rides],
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


def _finer(whole: Searched, track: int) -> list[Lane]:
    """Gusts about the worst ones of a track that passes the region of the stops."""
    bench, tracks, lanes, seen = whole.bench, whole.tracks, whole.lanes, whole.numbers
    if not tracks[track].is_low:
        return []
    where = lanes_of_track(lanes, track)
    found: list[Lane] = []
    peaks = gust_peaks_s(tracks[track], bench.free_rad_s)
    for quantity in REFINED:
        worst = lanes[worst_lane(seen, where, quantity)]
        ride = worst.ride
        if ride.gust_m_s <= 0.0:
            continue
        bounds = bench.winds.lengths_s(bench.winds.sectors[ride.sector])
        ratio = (bounds[1] / bounds[0]) ** (1.0 / (GUST_LENGTHS - 1))
        spacing = _spacing_s(peaks, ride.start_s + 0.5 * ride.length_s)
        near = refined(ride.start_s, ride.length_s, spacing, ratio, bounds, 1)
        found += [
            replace(worst, ride=replace(ride, start_s=start, length_s=length))
            for start, length in zip(near[0].tolist(), near[1].tolist(), strict=True)
        ]
    return [lane for lane in dict.fromkeys(found) if lane not in lanes]


def _spacing_s(peaks_s: FloatArray, peak_s: float) -> float:
    """Distance from a gust's peak to the farther of its neighbours."""
    place = int(np.argmin(np.abs(peaks_s - peak_s)))
    gaps = np.diff(peaks_s)[max(place - 1, 0) : place + 1]
    return float(np.max(gaps)) if gaps.size else ALONE_S


def _governing(lanes: Sequence[Lane], seen: Numbers, track: int) -> list[Lane]:
    """The worst cases of a track, each once."""
    where = lanes_of_track(lanes, track)
    return list(dict.fromkeys(lanes[worst_lane(seen, where, q)] for q in GOVERNING))
