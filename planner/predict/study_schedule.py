"""What the schedule itself says: speeds, steps, rates and keep-out bands."""

from __future__ import annotations

import math
from typing import TYPE_CHECKING

from planner.model.results import Labels, Status
from planner.predict.rows import Rows, single
from planner.predict.study import Inputs, Study

if TYPE_CHECKING:
    from collections.abc import Mapping, Sequence

    from planner.model.plan import KeepOut, Segment, Shutdown, Site
    from planner.model.results import Prediction
    from planner.model.rotor import Blade

_ID = "schedule"
_SEGMENT_QUANTITIES = (
    "tip_speed",
    "tip_mach",
    "advancing_tip_mach",
    "advance_ratio",
    "speed_step",
    "collective_step",
    "ramp_rate",
)


def run(inputs: Inputs) -> Mapping[str, Prediction]:
    """Everything that follows from the schedule without a rotor model."""
    rows = {quantity: Rows(quantity, _ID) for quantity in _SEGMENT_QUANTITIES}
    segments: Sequence[Segment] = inputs["segments"]
    for segment in segments:
        _tip(rows, segment, inputs)
        if segment.kind != "hold":
            _ramp(rows, segment, inputs)
    predictions = {quantity: filled.prediction() for quantity, filled in rows.items()}
    predictions |= _whole_run(inputs)
    return predictions | _bands(inputs)


def _whole_run(inputs: Inputs) -> dict[str, Prediction]:
    segments: Sequence[Segment] = inputs["segments"]
    shutdown: Shutdown = inputs["shutdown"]
    error = inputs["stand.speed_gauge_error_rad_s"]
    top = max(segment.to_rad_s for segment in segments)
    widest = max(segment.highest_rad_s for segment in segments)
    brake = Rows("brake_speed", _ID)
    if shutdown.brake:
        applied = shutdown.brake_from_rad_s
        brake.add(Labels(), applied, low=applied - error, high=applied + error)
    else:
        brake.flag(Labels(), Status.NOT_APPLICABLE, "the shutdown uses no brake")
    return {
        "card_speed": single("card_speed", _ID, top, low=top - error, high=widest + error),
        "brake_speed": brake.prediction(),
    }


def _tip(rows: Mapping[str, Rows], segment: Segment, inputs: Inputs) -> None:
    blade: Blade = inputs["rotor.blade"]
    site: Site = inputs["site"]
    error = inputs["stand.speed_gauge_error_rad_s"]
    label = Labels(segment=segment.id)
    top = max(segment.from_rad_s, segment.to_rad_s)
    tips = [
        blade.radius_m * speed
        for speed in (top, max(0.0, segment.lowest_rad_s - error), segment.highest_rad_s + error)
    ]
    sound, slow_sound, fast_sound = inputs.bounds("speed_of_sound")
    mean, _, gust = inputs.bounds("wind_at_hub")
    dry_sound = 20.05 * math.sqrt(site.temperature_K)
    rows["tip_speed"].add(
        label,
        tips[0],
        low=tips[1],
        high=tips[2],
        speed_rad_s=top,
        hand=math.pi * 2.0 * blade.radius_m * (top / (2.0 * math.pi)),
    )
    rows["tip_mach"].add(
        label,
        tips[0] / sound,
        low=tips[1] / fast_sound,
        high=tips[2] / slow_sound,
        speed_rad_s=top,
        hand=tips[0] / dry_sound,
    )
    rows["advancing_tip_mach"].add(
        label,
        (tips[0] + mean) / sound,
        low=tips[1] / fast_sound,
        high=(tips[2] + gust) / slow_sound,
        speed_rad_s=top,
    )
    if tips[1] > 0.0:
        rows["advance_ratio"].add(
            label, mean / tips[0], low=0.0, high=gust / tips[1], speed_rad_s=top
        )
    else:
        rows["advance_ratio"].flag(
            label,
            Status.NOT_APPLICABLE,
            "the rotor comes from, goes to or stays at rest: no advance ratio",
            speed_rad_s=top,
        )


def _ramp(rows: Mapping[str, Rows], segment: Segment, inputs: Inputs) -> None:
    full = inputs["stand.full_speed_rad_s"]
    shutdown: Shutdown = inputs["shutdown"]
    label = Labels(segment=segment.id)
    top = max(segment.from_rad_s, segment.to_rad_s)
    rise = max(0.0, segment.to_rad_s - segment.from_rad_s) / full
    more = max(0.0, segment.to_collective_rad - segment.from_collective_rad)
    rows["speed_step"].add(label, rise, speed_rad_s=top)
    rows["collective_step"].add(label, more, speed_rad_s=top)
    if segment.kind == "stop" and not shutdown.powered:
        rows["ramp_rate"].flag(
            label,
            Status.NOT_APPLICABLE,
            "an unpowered stop has no prescribed rate",
            speed_rad_s=top,
        )
    elif segment.duration_s > 0.0:
        rows["ramp_rate"].add(label, rate_rad_s2(segment), speed_rad_s=top)
    else:
        rows["ramp_rate"].flag(
            label, Status.NOT_COMPUTED, "the ramp has no duration", speed_rad_s=top
        )


def rate_rad_s2(segment: Segment) -> float:
    """Size of the rate of change of rotor speed, taken as constant [rad/s²]."""
    return abs(segment.to_rad_s - segment.from_rad_s) / segment.duration_s


def _bands(inputs: Inputs) -> dict[str, Prediction]:
    bands: Sequence[KeepOut] = inputs["keep_outs"]
    rows = {q: Rows(q, _ID) for q in ("band_distance", "band_rate", "band_time")}
    if not bands:
        for filled in rows.values():
            filled.flag(Labels(), Status.NOT_APPLICABLE, "the plan declares no keep-out band")
    for band in bands:
        _band(rows, band, inputs)
    return {quantity: filled.prediction() for quantity, filled in rows.items()}


def _band(rows: Mapping[str, Rows], band: KeepOut, inputs: Inputs) -> None:
    segments: Sequence[Segment] = inputs["segments"]
    error = inputs["stand.speed_gauge_error_rad_s"]
    seconds = 0.0
    for segment in segments:
        label = Labels(segment=segment.id, band=band.id)
        seconds += segment.times * seconds_inside(segment, band)
        if segment.kind == "hold":
            nominal = _gap(segment.to_rad_s, segment.to_rad_s, band)
            worst = _gap(segment.lowest_rad_s - error, segment.highest_rad_s + error, band)
            rows["band_distance"].add(label, nominal, low=worst, speed_rad_s=segment.to_rad_s)
        elif _crosses(segment, band):
            _passage(rows["band_rate"], segment, label, inputs)
    if not any(_crosses(segment, band) for segment in segments if segment.kind != "hold"):
        rows["band_rate"].flag(
            Labels(band=band.id), Status.NOT_APPLICABLE, "no ramp of the card enters this band"
        )
    rows["band_time"].add(Labels(band=band.id), seconds)


def _passage(rows: Rows, segment: Segment, label: Labels, inputs: Inputs) -> None:
    shutdown: Shutdown = inputs["shutdown"]
    top = max(segment.from_rad_s, segment.to_rad_s)
    if segment.kind == "stop" and not shutdown.powered:
        rows.flag(
            label,
            Status.NOT_COMPUTED,
            "an unpowered passage is judged by amplitude and cycles, which are not computed",
            speed_rad_s=top,
        )
        return
    rows.add(label, rate_rad_s2(segment) / inputs["stand.full_speed_rad_s"], speed_rad_s=top)


def _crosses(segment: Segment, band: KeepOut) -> bool:
    low, high = sorted((segment.from_rad_s, segment.to_rad_s))
    return low < band.to_rad_s and high > band.from_rad_s


def _gap(low_rad_s: float, high_rad_s: float, band: KeepOut) -> float:
    """Distance of a speed range from a band, negative when they overlap [rad/s]."""
    return max(low_rad_s - band.to_rad_s, band.from_rad_s - high_rad_s)


def seconds_inside(segment: Segment, band: KeepOut) -> float:
    """Time that one pass of a segment spends inside a band [s]."""
    low, high = sorted((segment.from_rad_s, segment.to_rad_s))
    if low == high:
        inside = band.from_rad_s <= low <= band.to_rad_s
        return segment.duration_s if inside else 0.0
    overlap = max(0.0, min(high, band.to_rad_s) - max(low, band.from_rad_s))
    return segment.duration_s * overlap / (high - low)


SCHEDULE = Study(
    _ID,
    1,
    (
        "segments",
        "keep_outs",
        "shutdown",
        "site",
        "rotor.blade",
        "stand.full_speed_rad_s",
        "stand.speed_gauge_error_rad_s",
    ),
    ("air",),
    run,
)
