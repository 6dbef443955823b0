"""Everything of a run that is marched, part by part: ramps, the stop, and every abort."""

from __future__ import annotations

from dataclasses import dataclass, replace
from typing import TYPE_CHECKING

import numpy as np

from planner.model.plan import ABORT_CAUSES
from planner.model.results import Labels, Status
from planner.predict.histories import own_run_up_of, ramp_history, run_downs, stop_order
from planner.predict.march_runs import Outcome, outcomes
from planner.predict.march_tracks import Abort, AbortTracks, Source, Track, distinct, track_of
from planner.predict.shaft import ends_of
from planner.predict.study import NotAssessedError
from planner.rotor.speed_history import Controls

if TYPE_CHECKING:
    from collections.abc import Callable, Mapping, Sequence

    from planner.model.plan import AbortActions, Segment, Shutdown
    from planner.predict.march_runs import Bench
    from planner.predict.shaft import Shaft, Way

WORST_WITHIN = (0.05, 0.95)
"""Shares of a ramp's time within which its worst moment is taken as the beginning of an abort."""
AT_REST = "the rotor is at rest"


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
    tracks = {w[0].id: _ramp(w, run, bench) for w in ways if w[0].kind != "hold"}
    seen = _march([t for t in tracks.values() if isinstance(t, Track)], bench, progress, "ramps")
    parts = [
        _ramp_part(segment, tracks[segment.id], seen)
        for segment, _ in ways
        if segment.id in tracks
    ]
    sources = [_source(way, tracks.get(way[0].id), seen) for way in ways if way[0].kind != "stop"]
    found = AbortTracks(run.shaft, run.abort, bench.free_rad_s, sources).aborts(ABORT_CAUSES)
    ended = _march([t for one in found for t in one.tracks], bench, progress, "aborts")
    tops = {segment.id: segment.top_rad_s for segment in run.walk}
    parts += [_abort_part(abort, ended, tops[abort.segment]) for abort in found]
    resting = [source.segment for source in sources if source.speed_rad_s <= 0.0]
    parts += [
        Part(Labels(segment=name, state=cause), 0.0, (), Status.NOT_APPLICABLE, AT_REST)
        for name in resting
        for cause in ABORT_CAUSES
    ]
    return parts


_NoTrack = tuple[Status, str]


def _ramp(way: Way, run: RunParts, bench: Bench) -> Track | _NoTrack:
    """The track of a ramp or of the stop, or why there is none."""
    segment, controls = way
    try:
        if segment.kind == "stop" and not run.shutdown.powered:
            order = stop_order(run.shaft, way, run.shutdown, run.abort)
            history = run_downs(run.shaft, [order])[0].history(segment.id)
        else:
            up = own_run_up_of(run.shaft, segment, controls) if segment.own_run_up else None
            history = ramp_history(segment, controls, up)
    except NotAssessedError as refusal:
        return refusal.status, str(refusal)
    return track_of(f"ramp {segment.id}", history, bench.free_rad_s)


def _march(
    tracks: Sequence[Track],
    bench: Bench,
    progress: Callable[[str, float], None],
    what: str,
) -> Mapping[int, Outcome]:
    """March tracks, each different one once; outcomes by the identity of the track."""
    kept, where = distinct(tracks)
    words = f"marching {what}, {len(kept)} histories"
    found = outcomes(bench, kept, lambda share: progress(words, share))
    return {key: found[place] for key, place in where.items()}


def _ramp_part(segment: Segment, track: Track | _NoTrack, seen: Mapping[int, Outcome]) -> Part:
    bare = Part(Labels(segment=segment.id), segment.top_rad_s)
    if not isinstance(track, Track):
        return replace(bare, status=track[0], reason=track[1])
    return replace(bare, outcomes=(seen[id(track)],), collective_rad=_collective([track]))


def _abort_part(abort: Abort, ended: Mapping[int, Outcome], top_rad_s: float) -> Part:
    bare = Part(Labels(segment=abort.segment, state=abort.cause), top_rad_s)
    if abort.status is not Status.OK:
        return replace(bare, status=abort.status, reason=abort.reason)
    found = tuple(ended[id(track)] for track in abort.tracks)
    return replace(bare, outcomes=found, collective_rad=_collective(abort.tracks))


def _collective(tracks: Sequence[Track]) -> float:
    return max(float(np.max(np.abs(track.history.collective_rad))) for track in tracks)


def _source(way: Way, track: Track | _NoTrack | None, seen: Mapping[int, Outcome]) -> Source:
    """Where aborts from a segment begin: at a hold's state, at a ramp's worst moment.

    The worst moment is when a blade flapped highest; the fast end where the ramp itself could not
    be marched.
    """
    segment, (start, end) = way
    if segment.kind == "hold":
        return Source(segment.id, segment.to_rad_s, end, (end,))
    both = tuple(
        controls
        for controls, speed in ((start, segment.from_rad_s), (end, segment.to_rad_s))
        if speed > 0.0
    )
    if not isinstance(track, Track):
        falls = segment.from_rad_s > segment.to_rad_s
        return Source(segment.id, segment.top_rad_s, start if falls else end, both)
    history = track.history
    length = segment.duration_s if segment.duration_s > 0.0 else history.duration_s
    earliest, latest = (share * length for share in WORST_WITHIN)
    when = min(max(seen[id(track)].when_s, earliest), latest)
    time = history.time_s
    speed, pitch, cosine, sine = (
        float(np.interp(when, time, table))
        for table in (
            history.speed_rad_s,
            history.collective_rad,
            history.cyclic_cosine_rad,
            history.cyclic_sine_rad,
        )
    )
    return Source(segment.id, speed, Controls(pitch, cosine, sine), both)
