"""Curves of the fan chart: modes of blades, stand and shaft over speed, and time at speed."""

from __future__ import annotations

import itertools
from typing import TYPE_CHECKING, Any

import numpy as np

from planner.model.results import Status
from planner.predict.branches import breaks_of, sets_of
from planner.predict.fixed_frame import SIDES, shifted, shifted_rad_s
from planner.predict.mode_tracks import (
    BLADE_HARMONICS,
    shaft_harmonics,
    stand_harmonics,
    tracks,
)
from planner.predict.study_modes import MODES, fan_collective_rad, fan_lanes, fan_speeds

if TYPE_CHECKING:
    from collections.abc import Mapping, Sequence

    from numpy.typing import NDArray

    from planner.model.plan import Plan, Segment
    from planner.model.results import Prediction, Requests
    from planner.predict.mode_tracks import Track

    FloatArray = NDArray[np.float64]

BIN_SHARE = 0.02
"""Of full speed: width of the bins of time at speed."""
DRAWN_ORDER = "1"
"""Order of the blade modes that are drawn as the stand sees them."""


def fan_series(
    plan: Plan,
    segments: tuple[Segment, ...],
    predictions: Mapping[str, Prediction],
    requests: Requests,
) -> dict[str, Any]:
    """All curves of the fan chart, at the pitch of the last of the fastest holds."""
    inputs = MODES.inputs(plan, segments, requests, predictions)
    speed = fan_speeds(inputs)
    try:
        found = tracks(inputs, fan_lanes(inputs))
    except (ValueError, np.linalg.LinAlgError):
        found = []  # the study itself says why
    n = plan.rotor.n_blades
    breaks = {t.name: breaks_of(t, members) for members in sets_of(found) for t in members}
    return {
        "speed_rad_s": speed,
        "collective_rad": fan_collective_rad(segments),
        "modes": [_curve(track, breaks.get(track.name, [])) for track in found],
        "shifted": [
            {
                "name": f"{track.name}, {words}",
                "frequency_rad_s": shifted_rad_s(track, speed, side),
                "breaks": breaks.get(track.name, []),
            }
            for track in shifted(found)
            if track.name.split()[1] == DRAWN_ORDER
            for words, side in SIDES.items()
        ],
        "harmonics": {
            "blade": BLADE_HARMONICS,
            "stand": stand_harmonics(n),
            "shaft": shaft_harmonics(n),
        },
        "time_at_speed": time_at_speed(segments, plan.stand.full_speed_rad_s),
    }


def _curve(track: Track, breaks: Sequence[int]) -> dict[str, Any]:
    return {
        "name": track.name,
        "family": track.family,
        "panel": track.panel,
        "frequency_rad_s": track.ends.frequency_rad_s,
        "breaks": breaks,
        "damping": track.damping,
        "doubt": "" if track.status is Status.OK else "NOT ASSESSED",
    }


def time_at_speed(segments: Sequence[Segment], full_speed_rad_s: float) -> dict[str, Any]:
    """Time that the run spends in each bin of speed, repeats counted.

    A segment without a time counts for nothing.
    """
    width = BIN_SHARE * full_speed_rad_s
    top = max((s.top_rad_s for s in segments), default=0.0)
    edges = width * np.arange(int(top / width) + 2, dtype=np.float64)
    seconds = np.zeros(edges.size - 1)
    for segment in segments:
        if segment.duration_s > 0.0:
            for lasts, first, last in segment.pieces:
                seconds += segment.times * lasts * _shares(sorted((first, last)), edges)
    return {"edges_rad_s": edges, "seconds": seconds}


def _shares(ends: Sequence[float], edges: FloatArray) -> FloatArray:
    """Share of the time of a stretch between two speeds in each bin."""
    low, high = ends
    if low == high:
        at = np.searchsorted(edges, low, side="right") - 1
        return np.asarray(np.arange(edges.size - 1) == at, dtype=np.float64)
    overlap = [max(0.0, min(high, b) - max(low, a)) for a, b in itertools.pairwise(edges)]
    return np.array(overlap) / (high - low)
