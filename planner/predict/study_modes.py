"""Natural frequencies over rotor speed and their distance from rotor harmonics."""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np

from planner.methods.crossings import crossings
from planner.model.results import Labels, Status
from planner.predict.blade_modes import Lanes
from planner.predict.branches import branches, sets_of
from planner.predict.fixed_frame import fixed_frame_rows
from planner.predict.mode_damping import add_damping
from planner.predict.mode_hand import hand_frequency
from planner.predict.mode_tracks import TAKES, Track, tracks
from planner.predict.rows import Rows
from planner.predict.study import Inputs, Study

if TYPE_CHECKING:
    from collections.abc import Mapping, Sequence

    from numpy.typing import NDArray

    from planner.model.plan import Segment
    from planner.model.results import Prediction
    from planner.predict.mode_correction import Ends

    FloatArray = NDArray[np.float64]
    IntArray = NDArray[np.intp]

_ID = "modes"
TOP_SHARE = 1.2
"""Of full speed, and of the card's highest: how far the fan chart reaches."""
GRID_SPEEDS = 61
PITCH_SHARES = (-1.0, -0.5, 0.0, 0.5, 1.0)
"""Of the half window of collective: a frequency may be lowest or highest between its ends."""
CORNERS = 1 + 2 * len(PITCH_SHARES)
"""Lanes of a hold: as meant, then both ends of speed with each of these pitches."""
SLOWEST_SHARE = 1e-3
"""A window that reaches down to rest is held against harmonics from this share of its top."""
AT_HOLDS = ("mode_frequency", "mode_share", "mode_damping", "harmonic_spacing")
_NO_HARMONICS = "no harmonics at rest"
_NOT_MEASURED = "the plan states no measured frequency"


def run(inputs: Inputs) -> Mapping[str, Prediction]:
    """Frequencies and spacing at every hold, and crossings over the speeds of the fan chart."""
    holds = [s for s in inputs["segments"] if s.kind == "hold"]
    fan = fan_speeds(inputs)
    found = tracks(inputs, _joined(hold_lanes(holds, inputs), fan_lanes(inputs)))
    over_fan = [track.at(slice(CORNERS * len(holds), None)) for track in found]
    rows = {q: Rows(q, _ID) for q in (*AT_HOLDS, "crossing_speed", "fixed_frame_spacing")}
    crossing_rows(rows["crossing_speed"], over_fan, fan)
    for i, hold in enumerate(holds):
        lanes = slice(CORNERS * i, CORNERS * (i + 1))
        here = [track.at(lanes) for track in found]
        speed = hold_lanes([hold], inputs).speed_rad_s
        for track in here:
            _hold_rows(rows, track, (hold, speed), inputs)
        fixed_frame_rows(rows["fixed_frame_spacing"], here, (hold, speed))
    if not found:
        rows["crossing_speed"].flag(Labels(), Status.NOT_APPLICABLE, "the plan has no mode")
    predictions = {quantity: filled.prediction() for quantity, filled in rows.items()}
    return predictions | _corrections(found)


def fan_speeds(inputs: Inputs) -> FloatArray:
    """Rotor speeds of the fan chart, from rest to beyond full speed and the card's [rad/s]."""
    highest = max((s.highest_rad_s for s in inputs["segments"]), default=0.0)
    top = max(inputs["stand.full_speed_rad_s"], highest)
    return np.linspace(0.0, TOP_SHARE * top, GRID_SPEEDS)


def fan_collective_rad(segments: Sequence[Segment]) -> float:
    """Pitch setting of the fan chart: that of the last of the fastest holds."""
    holds = [segment for segment in segments if segment.kind == "hold"]
    top = max((hold.to_rad_s for hold in holds), default=0.0)
    return next((h.to_collective_rad for h in reversed(holds) if h.to_rad_s == top), 0.0)


def fan_lanes(inputs: Inputs) -> Lanes:
    """Lanes of the fan chart."""
    speed = fan_speeds(inputs)
    return Lanes(speed, np.full(speed.shape, fan_collective_rad(inputs["segments"])))


def hold_lanes(holds: Sequence[Segment], inputs: Inputs) -> Lanes:
    """Each hold as it is meant and around its window, gauge error included."""
    error = inputs["stand.speed_gauge_error_rad_s"]
    speeds, pitches = [], []
    for hold in holds:
        low, high = hold.ends_rad_s(error)
        pitch, half = hold.to_collective_rad, hold.window.collective_rad
        around = [pitch + share * half for share in PITCH_SHARES]
        speeds += [hold.to_rad_s, *(v for v in (low, high) for _ in around)]
        pitches += [pitch, *around, *around]
    return Lanes(np.array(speeds, dtype=np.float64), np.array(pitches, dtype=np.float64))


def _joined(first: Lanes, second: Lanes) -> Lanes:
    return Lanes(
        np.concatenate([first.speed_rad_s, second.speed_rad_s]),
        np.concatenate([first.collective_rad, second.collective_rad]),
    )


_At = tuple["Segment", "FloatArray"]
"""A hold, and the speeds of its lanes."""


def _hold_rows(rows: Mapping[str, Rows], track: Track, at: _At, inputs: Inputs) -> None:
    hold, _ = at
    label = Labels(segment=hold.id, mode=track.name)
    if track.status is not Status.OK:
        for quantity in AT_HOLDS:
            if quantity != "mode_share" or track.panel == "blade":
                rows[quantity].flag(label, track.status, track.reason, speed_rad_s=hold.to_rad_s)
        return
    ends = track.ends
    rows["mode_frequency"].add(
        label,
        float(ends.frequency_rad_s[0]),
        low=float(ends.low_rad_s.min()),
        high=float(ends.high_rad_s.max()),
        speed_rad_s=hold.to_rad_s,
        hand=hand_frequency(track.name, inputs, hold.to_rad_s),
    )
    if track.share is not None:
        share = [float(f(track.share)) for f in (np.min, np.max)]
        rows["mode_share"].add(
            label,
            float(track.share[0]),
            low=share[0],
            high=share[1],
            speed_rad_s=hold.to_rad_s,
        )
    add_damping(rows["mode_damping"], track, hold, inputs)
    _spacing_rows(rows["harmonic_spacing"], track, label, at)


def _spacing_rows(rows: Rows, track: Track, label: Labels, at: _At) -> None:
    hold, speed = at
    if speed.max() <= 0.0:
        rows.flag(label, Status.NOT_APPLICABLE, _NO_HARMONICS, speed_rad_s=hold.to_rad_s)
        return
    turning = np.maximum(speed, SLOWEST_SHARE * speed.max())
    lowest = float((track.ends.low_rad_s / turning).min())
    highest = float((track.ends.high_rad_s / turning).max())
    nominal = float(track.ends.frequency_rad_s[0] / turning[0])
    for n in track.harmonics:
        ends = (abs(lowest / n - 1.0), abs(highest / n - 1.0))
        rows.add(
            Labels(label.segment, label.mode, str(n)),
            abs(nominal / n - 1.0),
            low=0.0 if lowest <= n <= highest else min(ends),
            high=max(ends),
            speed_rad_s=hold.to_rad_s,
        )


def crossing_rows(rows: Rows, tracks: Sequence[Track], speed: FloatArray) -> None:
    """Blade modes along their branches, the others along their own curves."""
    for track in tracks:
        if track.status is not Status.OK:
            rows.flag(Labels(mode=track.name), track.status, track.reason)
        elif track.panel != "blade":
            one = np.zeros(speed.shape, dtype=np.intp)
            _met_rows(rows, [track], (track.ends, one), speed)
    for members in sets_of(tracks):
        for branch in branches(members):
            _met_rows(rows, members, branch, speed)


def _met_rows(
    rows: Rows, members: Sequence[Track], branch: tuple[Ends, IntArray], speed: FloatArray
) -> None:
    """Where a branch meets each harmonic, under the name that it has there."""
    ends, who = branch
    for n in members[0].harmonics:
        for met in crossings(speed, ends.frequency_rad_s, ends.low_rad_s, ends.high_rad_s, n):
            nearest = int(np.argmin(np.abs(speed - met.nominal_rad_s)))
            label = Labels(mode=members[who[nearest]].name, harmonic=str(n))
            rows.add(
                label,
                met.nominal_rad_s,
                low=met.low_rad_s,
                high=met.high_rad_s,
                speed_rad_s=met.nominal_rad_s,
            )


def _corrections(found: Sequence[Track]) -> dict[str, Prediction]:
    rows = {q: Rows(q, _ID) for q in ("frequency_correction", "frequency_residual")}
    for track in found:
        if track.ends.fault:
            for filled in rows.values():
                filled.flag(Labels(mode=track.name), track.status, track.ends.fault)
        elif np.isfinite(track.ends.residual):
            rows["frequency_correction"].add(Labels(mode=track.name), track.ends.correction)
            rows["frequency_residual"].add(Labels(mode=track.name), track.ends.residual)
    for filled in rows.values():
        if not any(np.isfinite(t.ends.residual) or t.ends.fault for t in found):
            filled.flag(Labels(), Status.NOT_APPLICABLE, _NOT_MEASURED)
    return {quantity: filled.prediction() for quantity, filled in rows.items()}


MODES = Study(
    _ID,
    2,
    (
        "segments",
        "rotor.hub",
        "rotor.blade",
        "stand.full_speed_rad_s",
        "stand.speed_gauge_error_rad_s",
        *TAKES,
    ),
    ("holds",),
    run,
)
