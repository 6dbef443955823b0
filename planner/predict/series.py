"""Curves for the charts: the run over time, the fan of frequencies, flap against the stops."""

from __future__ import annotations

import itertools
from dataclasses import replace
from typing import TYPE_CHECKING, Any

import numpy as np

from planner.model.results import Labels, Status
from planner.predict.fan_series import fan_series

if TYPE_CHECKING:
    from collections.abc import Mapping

    from planner.model.plan import Plan, Segment
    from planner.model.results import Prediction, Requests
    from planner.model.rotor import Stop


SHARES_OF_SPEED = (
    ("time_to_half", 0.5),
    ("time_to_30", 0.3),
    ("time_to_10", 0.1),
    ("time_to_rest", 0.0),
)
"""Times of a run-down, with the share of its first speed that each belongs to."""


def series(
    plan: Plan,
    segments: tuple[Segment, ...],
    predictions: Mapping[str, Prediction],
    requests: Requests,
) -> dict[str, Any]:
    """All chart series of a plan; an unpowered stop takes the time that was computed for it."""
    way = _way_to_rest(plan, segments, predictions)
    if way:
        last = replace(segments[-1], duration_s=way[-1][0], course=tuple(way))
        segments = (*segments[:-1], last)
    return {
        "run": _run(segments, way),
        "fan": fan_series(plan, segments, predictions, requests),
        "flap": _flap(plan, segments, predictions),
    }


def _times(segments: tuple[Segment, ...]) -> list[tuple[float, float]]:
    """Start and end of each segment, one pass of each [s]."""
    # a run-up that the drive never finishes has no time; it is not assessed anywhere else
    ends = np.cumsum([0.0] + [np.nan_to_num(segment.duration_s) for segment in segments])
    return [(float(a), float(b)) for a, b in itertools.pairwise(ends)]


def _way_to_rest(
    plan: Plan, segments: tuple[Segment, ...], predictions: Mapping[str, Prediction]
) -> list[tuple[float, float]]:
    """Time from power off [s] and speed of an unpowered stop where both were computed."""
    stop = segments[-1]
    if stop.kind != "stop" or plan.shutdown.powered:
        return []
    way = [(0.0, stop.from_rad_s)]
    for quantity, share in SHARES_OF_SPEED:
        found = predictions[quantity]
        places = [i for i, label in enumerate(found.labels) if label == Labels(segment=stop.id)]
        if not places or found.status[places[0]] is not Status.OK:
            return []
        way.append((float(found.value[places[0]]), share * stop.from_rad_s))
    return way


def _run(segments: tuple[Segment, ...], way: list[tuple[float, float]]) -> dict[str, Any]:
    corners = [
        (time, speed, segment.id)
        for segment, (start, end) in zip(segments, _times(segments), strict=True)
        for time, speed in ((start, segment.from_rad_s), (end, segment.to_rad_s))
    ]
    if way:
        begin, stop = corners[-2][0], segments[-1].id
        corners[-2:] = [(begin + time, speed, stop) for time, speed in way]
    return {
        "time_s": [c[0] for c in corners],
        "speed_rad_s": [c[1] for c in corners],
        "segment": [c[2] for c in corners],
    }


def _flap(
    plan: Plan, segments: tuple[Segment, ...], predictions: Mapping[str, Prediction]
) -> dict[str, Any]:
    lowest = _by_segment(predictions["flap_lowest"])
    highest = _by_segment(predictions["flap_highest"])
    droop, up = plan.rotor.droop_stop, plan.rotor.up_stop
    out: dict[str, list[Any]] = {
        key: []
        for key in (
            "time_s",
            "segment",
            "lowest_rad",
            "highest_rad",
            "droop_rad",
            "up_rad",
            "assessed",
        )
    }
    for segment, (start, end) in zip(segments, _times(segments), strict=True):
        low, low_known = lowest.get(segment.id, (float("nan"), False))
        high, high_known = highest.get(segment.id, (float("nan"), False))
        for time, angle in _droop_points(segment, (start, end), droop):
            out["time_s"].append(time)
            out["segment"].append(segment.id)
            out["lowest_rad"].append(low)
            out["highest_rad"].append(high)
            out["droop_rad"].append(angle)
            out["up_rad"].append(None if up is None else up.angle_rad)
            out["assessed"].append(low_known and high_known)
    return out


def _droop_points(
    segment: Segment, times: tuple[float, float], droop: Stop | None
) -> list[tuple[float, float | None]]:
    """Time and droop stop angle in force at both ends, and where the stop swings."""
    if droop is None:
        return [(times[0], None), (times[1], None)]
    first = droop.lowest_angle_rad(segment.from_rad_s)
    last = droop.lowest_angle_rad(segment.to_rad_s)
    points: list[tuple[float, float | None]] = [(times[0], first), (times[1], last)]
    if first != last and droop.retraction is not None:
        change = segment.to_rad_s - segment.from_rad_s
        share = (droop.retraction.release_rad_s - segment.from_rad_s) / change
        at = times[0] + share * (times[1] - times[0])
        points[1:1] = [(at, first), (at, last)]
    return points


def _by_segment(prediction: Prediction) -> dict[str, tuple[float, bool]]:
    """Extreme and whether it was assessed, for each segment."""
    extreme = prediction.low if prediction.quantity == "flap_lowest" else prediction.high
    return {
        label.segment: (float(extreme[i]), prediction.status[i] is Status.OK)
        for i, label in enumerate(prediction.labels)
    }
