"""Flap over rotor speed along starts and the stop, for the chart on paper."""

from __future__ import annotations

import math
from dataclasses import replace
from typing import TYPE_CHECKING

from planner.model.results import Labels, Status
from planner.predict.fineness import STATIONS
from planner.predict.march_runs import SEARCH, cases_of
from planner.predict.rows import Rows
from planner.rotor.march_model import march_model
from planner.rotor.march_trace import course

if TYPE_CHECKING:
    from collections.abc import Sequence

    from planner.model.plan import Segment
    from planner.model.results import Prediction
    from planner.predict.march_outcome import Lane
    from planner.predict.march_parts import Part
    from planner.predict.march_runs import Bench
    from planner.predict.march_tracks import Track

COURSE = "flap_course_marched"
STRETCHES = 60
CASES = ("case with the highest flap", "case with the lowest flap")


def course_rows(parts: Sequence[Part], bench: Bench, walk: Sequence[Segment]) -> Prediction:
    """Rows of the starts and the stop: rotor speed, middle, lowest and highest flap by stretch.

    Args:
        parts: What was marched.
        bench: What it was marched with.
        walk: The segments of the run.

    Returns:
        One row a stretch of each of the two worst cases, in order of time.
    """
    rows = Rows(COURSE, "marches")
    ends = {s.id for s in walk if s.kind != "hold" and 0.0 in {s.from_rad_s, s.to_rad_s}}
    wanted: list[tuple[Labels, Track, Lane]] = []
    for part in parts:
        label = part.labels
        if label.state or label.segment not in ends:
            continue
        if part.status is not Status.OK or bench.is_thrifty:
            reason = part.reason or "left out of a scan over many winds"
            status = part.status if part.reason else Status.NOT_COMPUTED
            rows.flag(label, status, reason, speed_rad_s=part.top_rad_s)
            continue
        wanted += [
            (replace(label, mode=words), piece, lane)
            for piece, outcome in zip(part.pieces, part.outcomes, strict=True)
            if piece.is_low
            for words, lane in zip(CASES, outcome.shown, strict=True)
        ]
    if wanted:
        _courses(rows, bench, wanted)
    return rows.prediction()


def _courses(rows: Rows, bench: Bench, wanted: Sequence[tuple[Labels, Track, Lane]]) -> None:
    """Rows of the cases, marched side by side in double precision."""
    tracks = [track for _, track, _ in wanted]
    lanes = [replace(lane, track=i) for i, (_, _, lane) in enumerate(wanted)]
    job = bench.job(tracks, replace(SEARCH, single=False))
    model = march_model(
        bench.rotor, job.top_rad_s, job.settings, STATIONS, mounting=bench.mounting
    )
    found = course(
        model, job.histories, bench.winds.rough, cases_of(bench, tracks, lanes), STRETCHES
    )
    for i, (label, _, _) in enumerate(wanted):
        for speed, high, low in zip(
            found.speed_rad_s[i].tolist(),
            found.highest_rad[i].tolist(),
            found.lowest_rad[i].tolist(),
            strict=True,
        ):
            if math.isfinite(high):
                rows.add(label, 0.5 * (high + low), low=low, high=high, speed_rad_s=speed)
