"""Everything of a run that is marched, part by part: ramps, the stop, and every abort."""

from __future__ import annotations

from dataclasses import dataclass, replace
from typing import TYPE_CHECKING

import numpy as np

from planner.model.plan import ABORT_CAUSES
from planner.model.results import Labels, Status
from planner.predict.histories import own_run_up_of, ramp_history, run_downs, stop_order
from planner.predict.march_runs import Searched, search, settle
from planner.predict.march_tracks import (
    Abort,
    AbortTracks,
    Source,
    Track,
    distinct,
    low_speed_rad_s,
    pieces_of,
)
from planner.predict.shaft import ends_of
from planner.predict.study import NotAssessedError
from planner.rotor.speed_history import Controls

if TYPE_CHECKING:
    from collections.abc import Callable, Mapping, Sequence

    from planner.model.plan import AbortActions, Segment, Shutdown
    from planner.model.rotor import Rotor
    from planner.predict.march_outcome import Outcome
    from planner.predict.march_runs import Bench
    from planner.predict.shaft import Shaft, Way
    from planner.rotor.speed_history import History

WORST_WITHIN = (0.05, 0.95)
"""Shares of a ramp's time within which its worst moment is taken as the beginning of an abort."""
AT_REST = "the rotor is at rest"
IN_DOUBT = (
    "it begins at a speed held between re-seat and release of the droop stop, whose place then "
    "depends on the way there: hold above release or below re-seat"
)


@dataclass(frozen=True, eq=False)
class RunParts:
    """What of a plan decides what is marched."""

    shaft: Shaft
    walk: Sequence[Segment]
    shutdown: Shutdown
    abort: AbortActions


@dataclass(frozen=True, eq=False)
class Part:
    """A ramp, the stop or an abort: what it came to, or why it was not marched.

    An abort that is marched in pieces has one outcome a piece.
    """

    labels: Labels
    top_rad_s: float
    outcomes: tuple[Outcome, ...] = ()
    status: Status = Status.OK
    reason: str = ""
    collective_rad: float = 0.0
    """Greatest size of collective in it."""
    pieces: tuple[Track, ...] = ()
    """Pieces of a ramp or the stop, in order of time."""


def march_parts(
    run: RunParts, bench: Bench, progress: Callable[[str, float], None] = lambda *_: None
) -> list[Part]:
    """March a run: ramps and the stop first, then aborts from holds and the ramps' worst moments.

    Args:
        run: What of the plan decides what is marched.
        bench: What it is marched with.
        progress: Called with what is being marched and the share of it that is done.

    Returns:
        A part for each ramp, for the stop, and for each cause of abort from each segment but the
        stop.
    """
    cyclics = run.shaft.found_cyclics(run.walk)
    ways = [(segment, ends_of(segment, cyclics)) for segment in run.walk]
    low = low_speed_rad_s(bench.free_rad_s, bench.rotor.droop_stop, _brakes(run))
    tracks = {w[0].id: _ramp(w, run, low) for w in ways if w[0].kind != "hold"}
    ramps = _search(
        [piece for found in tracks.values() for piece in found.pieces], bench, progress, "ramps"
    )
    sources = [_source(way, tracks.get(way[0].id), ramps) for way in ways if way[0].kind != "stop"]
    found = AbortTracks(run.shaft, run.abort, low, sources).aborts(ABORT_CAUSES)
    aborts = _search([t for one in found for t in one.tracks], bench, progress, "aborts")
    seen = _settled([ramps, aborts], bench, progress)
    parts = [
        _ramp_part(segment, tracks[segment.id], seen)
        for segment, _ in ways
        if segment.id in tracks
    ]
    tops = {segment.id: segment.top_rad_s for segment in run.walk}
    doubtful = {
        s.id for s, _ in ways if s.kind == "hold" and _stop_in_doubt(bench.rotor, s.to_rad_s)
    }
    parts += [
        replace(part, status=Status.OUTSIDE_VALIDITY, reason=IN_DOUBT)
        if part.labels.segment in doubtful and part.status is Status.OK
        else part
        for part in (_abort_part(abort, seen, tops[abort.segment]) for abort in found)
    ]
    resting = [source.segment for source in sources if source.speed_rad_s <= 0.0]
    parts += [
        Part(Labels(segment=name, state=cause), 0.0, (), Status.NOT_APPLICABLE, AT_REST)
        for name in resting
        for cause in ABORT_CAUSES
    ]
    return parts


@dataclass(frozen=True, eq=False)
class _Ramp:
    """A ramp or the stop: its history in pieces, or why there is none."""

    history: History | None = None
    pieces: tuple[Track, ...] = ()
    status: Status = Status.OK
    reason: str = ""


def _brakes(run: RunParts) -> tuple[float, float]:
    """Speeds from which the brake acts in the stop and in aborts."""
    stop, abort = run.shutdown, run.abort
    return (
        run.shaft.brake_from_rad_s(stop.brake_from_rad_s, is_used=stop.brake),
        run.shaft.brake_from_rad_s(abort.brake_from_rad_s, is_used=abort.brake),
    )


def _ramp(way: Way, run: RunParts, low_rad_s: float) -> _Ramp:
    """A ramp or the stop in pieces."""
    segment, controls = way
    if _stop_in_doubt(run.shaft.rotor, segment.from_rad_s):
        return _Ramp(status=Status.OUTSIDE_VALIDITY, reason=IN_DOUBT)
    try:
        if segment.kind == "stop" and not run.shutdown.powered:
            order = stop_order(run.shaft, way, run.shutdown, run.abort)
            history = run_downs(run.shaft, [order])[0].history(segment.id)
        else:
            up = own_run_up_of(run.shaft, segment, controls) if segment.own_run_up else None
            history = ramp_history(segment, controls, up)
    except NotAssessedError as refusal:
        return _Ramp(status=refusal.status, reason=str(refusal))
    return _Ramp(history, pieces_of(history, low_rad_s))


@dataclass(frozen=True, eq=False)
class _Found:
    """A search, with the place of each track in it by the track's identity."""

    searched: Searched
    place: Mapping[int, int]


def _search(
    tracks: Sequence[Track], bench: Bench, progress: Callable[[str, float], None], what: str
) -> _Found:
    """March tracks, each different one once."""
    kept, place = distinct(tracks)
    words = f"marching {what}: {len(kept)} histories"
    return _Found(search(bench, kept, lambda share: progress(words, share)), place)


def _settled(
    found: Sequence[_Found], bench: Bench, progress: Callable[[str, float], None]
) -> Mapping[int, Outcome]:
    """Outcomes of all tracks by their identity, looked at again unless the bench is thrifty."""
    searches = [one.searched for one in found]
    if bench.is_thrifty:
        results = [outcome for one in searches for outcome in one.outcomes()]
    else:
        words = "marching the worst cases again"
        results = settle(searches, lambda share: progress(words, share))
    seen: dict[int, Outcome] = {}
    before = 0
    for one in found:
        seen |= {key: results[before + place] for key, place in one.place.items()}
        before += len(one.searched.tracks)
    return seen


def _ramp_part(segment: Segment, ramp: _Ramp, seen: Mapping[int, Outcome]) -> Part:
    bare = Part(Labels(segment=segment.id), segment.top_rad_s)
    if ramp.status is not Status.OK:
        return replace(bare, status=ramp.status, reason=ramp.reason)
    found = tuple(seen[id(piece)] for piece in ramp.pieces)
    return replace(
        bare, outcomes=found, collective_rad=_collective(ramp.pieces), pieces=ramp.pieces
    )


def _stop_in_doubt(rotor: Rotor, speed_rad_s: float) -> bool:
    """Between re-seat and release speed nobody knows which place the droop stop is in."""
    droop = rotor.droop_stop
    if droop is None or droop.retraction is None:
        return False
    return droop.retraction.reseat_rad_s < speed_rad_s < droop.retraction.release_rad_s


def _abort_part(abort: Abort, ended: Mapping[int, Outcome], top_rad_s: float) -> Part:
    bare = Part(Labels(segment=abort.segment, state=abort.cause), top_rad_s)
    if abort.status is not Status.OK:
        return replace(bare, status=abort.status, reason=abort.reason)
    found = tuple(ended[id(track)] for track in abort.tracks)
    return replace(bare, outcomes=found, collective_rad=_collective(abort.tracks))


def _collective(tracks: Sequence[Track]) -> float:
    return max(float(np.max(np.abs(track.history.collective_rad))) for track in tracks)


def _source(way: Way, ramp: _Ramp | None, ramps: _Found) -> Source:
    """Where aborts from a segment begin: at a hold's state, at a ramp's worst moment.

    The worst moment is when a blade flapped highest; the fast end where the ramp itself could not
    be marched.
    """
    segment, (start, end) = way
    if ramp is None:
        return Source(segment.id, segment.to_rad_s, end, (end,))
    ends = ((start, segment.from_rad_s), (end, segment.to_rad_s))
    both = tuple(controls for controls, speed in ends if speed > 0.0)
    history = ramp.history
    if history is None:
        falls = segment.from_rad_s > segment.to_rad_s
        return Source(segment.id, segment.top_rad_s, start if falls else end, both)
    length = segment.duration_s if segment.duration_s > 0.0 else history.duration_s
    earliest, latest = (share * length for share in WORST_WITHIN)
    when = min(max(_worst_moment_s(ramp.pieces, ramps), earliest), latest)
    speed, *controls = (
        float(np.interp(when, history.time_s, table))
        for table in (
            history.speed_rad_s,
            history.collective_rad,
            history.cyclic_cosine_rad,
            history.cyclic_sine_rad,
        )
    )
    own = Controls(*controls)
    if len(both) == 1 and own != both[0]:
        both = (*both, own)  # nothing on the other side covers it
    return Source(segment.id, speed, own, both)


def _worst_moment_s(pieces: Sequence[Track], ramps: _Found) -> float:
    """When a blade flapped highest, from the begin of the history."""
    places = [ramps.place[id(piece)] for piece in pieces]
    highest = [ramps.searched.highest_flap(place) for place in places]
    worst = int(np.argmax([flap for flap, _ in highest]))
    return pieces[worst].begins_s + highest[worst][1]
