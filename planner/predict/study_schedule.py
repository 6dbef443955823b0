"""What the schedule itself says: speeds, steps, rates and keep-out bands."""

from __future__ import annotations

from typing import TYPE_CHECKING

from planner.model.results import Labels, Status
from planner.predict.rows import Rows, single
from planner.predict.study import Inputs, Study

if TYPE_CHECKING:
    from collections.abc import Mapping, Sequence

    from planner.model.plan import AbortActions, KeepOut, Segment, Shutdown
    from planner.model.results import Prediction

_ID = "schedule"
_SEGMENT_QUANTITIES = ("speed_step", "collective_step", "collective_rate", "ramp_rate")


def run(inputs: Inputs) -> Mapping[str, Prediction]:
    """Everything that follows from the schedule without a rotor model."""
    rows = {quantity: Rows(quantity, _ID) for quantity in _SEGMENT_QUANTITIES}
    segments: Sequence[Segment] = inputs["segments"]
    for segment in segments:
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
    abort: AbortActions = inputs["abort"]
    brakes = [
        applied
        for is_used, applied in (
            (shutdown.brake, shutdown.brake_from_rad_s),
            (abort.brake, abort.brake_from_rad_s),
        )
        if is_used
    ]
    if brakes:
        applied = max(brakes)
        brake.add(Labels(), applied, low=applied - error, high=applied + error)
    else:
        brake.flag(Labels(), Status.NOT_APPLICABLE, "neither shutdown nor abort uses a brake")
    return {
        "card_speed": single("card_speed", _ID, top, low=top - error, high=widest + error),
        "brake_speed": brake.prediction(),
        **_trip(inputs, (top, widest + error)),
    }


def _trip(inputs: Inputs, card_rad_s: tuple[float, float]) -> dict[str, Prediction]:
    """Where the overspeed trip stands between the card's speeds and the proven one."""
    trip = inputs["stand.drive"].overspeed_trip_rad_s
    rows = {q: Rows(q, _ID) for q in ("trip_above_card", "trip_below_proven")}
    if trip is None:
        for filled in rows.values():
            reason = "the stand file states no overspeed trip"
            filled.flag(Labels(), Status.NOT_STATED, reason)
    else:
        proven = min(inputs["rotor.design_maximum_rad_s"], inputs["rotor.proven_rad_s"])
        target, highest = card_rad_s
        rows["trip_above_card"].add(Labels(), trip - target, low=trip - highest)
        rows["trip_below_proven"].add(Labels(), proven - trip)
    return {quantity: filled.prediction() for quantity, filled in rows.items()}


def _ramp(rows: Mapping[str, Rows], segment: Segment, inputs: Inputs) -> None:
    shutdown: Shutdown = inputs["shutdown"]
    label = Labels(segment=segment.id)
    top = segment.top_rad_s
    rise = max(0.0, segment.to_rad_s - segment.from_rad_s) / inputs["stand.full_speed_rad_s"]
    change = segment.to_collective_rad - segment.from_collective_rad
    rows["speed_step"].add(label, rise, speed_rad_s=top)
    rows["collective_step"].add(label, max(0.0, change), speed_rad_s=top)
    if not segment.duration_s > 0.0:
        for quantity in ("ramp_rate", "collective_rate"):
            rows[quantity].flag(label, *_no_time(segment), speed_rad_s=top)
        return
    rate = abs(change) / segment.duration_s
    if segment.kind == "stop" and not shutdown.powered:
        rate = _rate_of_the_crew(inputs, rate) if change else 0.0
    rows["collective_rate"].add(label, rate, speed_rad_s=top)
    if segment.kind == "stop" and not shutdown.powered:
        reason = "an unpowered stop has no prescribed rate"
        rows["ramp_rate"].flag(label, Status.NOT_APPLICABLE, reason, speed_rad_s=top)
    else:
        rows["ramp_rate"].add(label, rate_rad_s2(segment), speed_rad_s=top)


def _rate_of_the_crew(inputs: Inputs, even_rad_s: float) -> float:
    """Rate at which the crew moves collective when power is off, as stated for aborts."""
    abort: AbortActions = inputs["abort"]
    stated = abort.collective_rate_rad_s
    return even_rad_s if stated is None else stated


def _no_time(segment: Segment) -> tuple[Status, str]:
    """Why a ramp has no duration."""
    if segment.own_run_up:
        return Status.OUTSIDE_VALIDITY, "no time was found for the drive's own run-up"
    return Status.NOT_STATED, "the ramp has no duration"


def rate_rad_s2(segment: Segment) -> float:
    """Size of the rate of change of rotor speed, taken as constant [rad/s²]."""
    return abs(segment.to_rad_s - segment.from_rad_s) / segment.duration_s


def _bands(inputs: Inputs) -> dict[str, Prediction]:
    bands: Sequence[KeepOut] = inputs["keep_outs"]
    rows = {q: Rows(q, _ID) for q in ("band_distance", "band_rate")}
    if not bands:
        for filled in rows.values():
            filled.flag(Labels(), Status.NOT_APPLICABLE, "the plan declares no keep-out band")
    for band in bands:
        _band(rows, band, inputs)
    return {quantity: filled.prediction() for quantity, filled in rows.items()}


def _band(rows: Mapping[str, Rows], band: KeepOut, inputs: Inputs) -> None:
    segments: Sequence[Segment] = inputs["segments"]
    error = inputs["stand.speed_gauge_error_rad_s"]
    for segment in segments:
        label = Labels(segment=segment.id, band=band.id)
        if segment.kind == "hold":
            nominal = _gap(segment.to_rad_s, segment.to_rad_s, band)
            worst = _gap(*segment.ends_rad_s(error), band)
            rows["band_distance"].add(label, nominal, low=worst, speed_rad_s=segment.to_rad_s)
        elif segment.enters(band):
            _passage(rows["band_rate"], segment, band, inputs)
    if not any(segment.enters(band) for segment in segments if segment.kind != "hold"):
        rows["band_rate"].flag(
            Labels(band=band.id), Status.NOT_APPLICABLE, "no ramp of the card enters this band"
        )


def _passage(rows: Rows, segment: Segment, band: KeepOut, inputs: Inputs) -> None:
    shutdown: Shutdown = inputs["shutdown"]
    label, top = Labels(segment=segment.id, band=band.id), segment.top_rad_s
    if segment.kind == "stop" and not shutdown.powered:
        reason = "an unpowered passage is judged by its turns and its amplitude"
        rows.flag(label, Status.NOT_APPLICABLE, reason, speed_rad_s=top)
        return
    if not segment.duration_s > 0.0:
        rows.flag(label, *_no_time(segment), speed_rad_s=top)
        return
    full = inputs["stand.full_speed_rad_s"]
    rate, slowest = (least_rate_rad_s2(each, band) for each in (segment, segment.slowest))
    rows.add(label, rate / full, low=slowest / full, speed_rad_s=top)


def least_rate_rad_s2(segment: Segment, band: KeepOut) -> float:
    """Least size of the rate of change of rotor speed inside a band that is entered [rad/s²]."""
    rates = [
        abs(last - first) / seconds
        for seconds, first, last in segment.pieces
        if seconds > 0.0
        and min(first, last) < band.to_rad_s
        and max(first, last) > band.from_rad_s
    ]
    return min(rates, default=0.0)


def _gap(low_rad_s: float, high_rad_s: float, band: KeepOut) -> float:
    """Distance of a speed range from a band, negative when they overlap [rad/s]."""
    return max(low_rad_s - band.to_rad_s, band.from_rad_s - high_rad_s)


def seconds_inside(segment: Segment, band: KeepOut) -> float:
    """Time that one pass of a segment spends inside a band [s]."""
    return sum(seconds for seconds, _ in stretches_inside(segment, band))


def stretches_inside(segment: Segment, band: KeepOut) -> list[tuple[float, float]]:
    """Time [s] and mean speed [rad/s] of each even stretch of a segment inside a band."""
    found = []
    for seconds, first, last in segment.pieces:
        low, high = sorted((first, last))
        inner, outer = max(low, band.from_rad_s), min(high, band.to_rad_s)
        if low == high and inner <= outer:
            found.append((seconds, low))
        elif inner < outer:
            found.append((seconds * (outer - inner) / (high - low), 0.5 * (inner + outer)))
    return found


SCHEDULE = Study(
    _ID,
    1,
    (
        "segments",
        "keep_outs",
        "shutdown",
        "abort",
        "rotor.design_maximum_rad_s",
        "rotor.proven_rad_s",
        "stand.drive",
        "stand.full_speed_rad_s",
        "stand.speed_gauge_error_rad_s",
    ),
    (),
    run,
)
