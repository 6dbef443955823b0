"""Keep-out bands: turns of each passage without power, and stay and turns over the whole card."""

from __future__ import annotations

import math
from dataclasses import dataclass, replace
from typing import TYPE_CHECKING

import numpy as np

from planner.model.results import Labels, Status
from planner.predict.run_down_events import add_ends
from planner.predict.study_schedule import stretches_inside

if TYPE_CHECKING:
    from collections.abc import Mapping, Sequence

    from numpy.typing import NDArray

    from planner.model.plan import KeepOut, Segment
    from planner.predict.histories import FoundRunDown, Order
    from planner.predict.rows import Rows
    from planner.predict.run_down_events import Event
    from planner.predict.run_down_hand import Hand

    FloatArray = NDArray[np.float64]
    Case = tuple[Event, FoundRunDown | None]
    Hands = Mapping[Order, Hand]

CYCLES = "band_cycles"
TOTALS = ("band_time_total", "band_cycles_total")
_POWERED = "the stop is powered: its rate is prescribed, and judged as such"
_BELOW_BAND = "the run-down begins below this band"
NO_BAND = "the plan declares no keep-out band"
_NO_REENTRIES = (
    "[abort] does not state reentries: how many aborts, each with a way back, the card allows for"
)
_TURN = 2.0 * math.pi
_NOTHING = np.zeros((2, 3))


def cycle_rows(rows: Rows, solved: Sequence[Case], bands: Sequence[KeepOut], hands: Hands) -> None:
    """Turns inside each band that the unpowered stop or an abort may pass."""
    if not bands:
        rows.flag(Labels(), Status.NOT_APPLICABLE, NO_BAND)
    for band in bands:
        for event, found in solved:
            label = replace(event.label, band=band.id)
            if found is None or band.from_rad_s >= event.from_rad_s:
                rows.flag(label, *_why_not(event, band), speed_rad_s=event.from_rad_s)
                continue
            enters = min(band.to_rad_s, event.from_rad_s)
            hand = hands[found.order].turns(enters, band.from_rad_s)
            add_ends(rows, label, (_passed(found, band)[1], hand), found)


def _why_not(event: Event, band: KeepOut) -> tuple[Status, str]:
    """Why a run-down has no passage of a band to judge."""
    if band.from_rad_s >= event.from_rad_s:
        return Status.NOT_APPLICABLE, _BELOW_BAND
    if event.status is Status.OK:
        return Status.NOT_APPLICABLE, _POWERED
    return event.status, event.reason


def _passed(found: FoundRunDown, band: KeepOut) -> FloatArray:
    """Time and turns inside a band, each nominal and at both ends of the torque allowance."""
    if band.from_rad_s >= found.order.from_rad_s:
        return _NOTHING
    enters = min(band.to_rad_s, found.order.from_rad_s)
    inner, outer = found.reached(band.from_rad_s), found.reached(enters)
    return np.stack([inner[0] - outer[0], inner[1] - outer[1]])


@dataclass(frozen=True, eq=False)
class Stay:
    """Time [s] and turns inside a band, each nominal, low and high: shape (2, 3)."""

    numbers: FloatArray
    status: Status = Status.OK
    reason: str = ""


def total_rows(
    rows: Mapping[str, Rows],
    solved: Sequence[Case],
    plan: tuple[Sequence[Segment], Sequence[KeepOut]],
    reentries: int | None,
) -> None:
    """Stay over the whole card: schedule with repeats, the stop, and the aborts allowed for.

    Each abort counts with the longest stay of any, and with every ramp from rest back to where it
    began.
    """
    walk, bands = plan
    for quantity in TOTALS:
        if not bands:
            rows[quantity].flag(Labels(), Status.NOT_APPLICABLE, NO_BAND)
    for band in bands:
        stay = _stay(walk, solved, band, reentries)
        for i, quantity in enumerate(TOTALS):
            label = Labels(band=band.id)
            if stay.status is Status.OK and np.all(np.isfinite(stay.numbers)):
                nominal, *ends = stay.numbers[i].tolist()
                rows[quantity].add(label, nominal, low=min(ends), high=max(ends))
            else:
                status = Status.OUTSIDE_VALIDITY if stay.status is Status.OK else stay.status
                reason = stay.reason or "a run-down may stay inside this band for ever"
                rows[quantity].flag(label, status, reason)


def _stay(
    walk: Sequence[Segment], solved: Sequence[Case], band: KeepOut, reentries: int | None
) -> Stay:
    """Everything that the card spends inside one band."""
    if reentries is None:
        return Stay(_NOTHING, Status.NOT_STATED, _NO_REENTRIES)
    for event, found in solved:
        if found is None and event.status not in {Status.OK, Status.NOT_APPLICABLE}:
            return Stay(_NOTHING, event.status, event.reason)
    total = _NOTHING.copy()
    worst = _NOTHING.copy()
    for event, found in solved:
        if found is None:
            continue  # a powered stop, which the walk counts, or a cause that cannot be
        if not event.label.state:
            total += _passed(found, band)
        else:
            back = _way_back(walk, event.label.segment, band)
            worst = np.maximum(worst, _passed(found, band) + back)
    coasts = any(found is not None and not event.label.state for event, found in solved)
    return _with_schedule(walk, band, Stay(total + reentries * worst), coasts=coasts)


def _with_schedule(walk: Sequence[Segment], band: KeepOut, stay: Stay, *, coasts: bool) -> Stay:
    """Add all that is driven, repeats counted; a stop that coasts is counted already."""
    total = stay.numbers.copy()
    for segment in walk:
        if segment.kind == "stop" and coasts:
            continue
        if not segment.duration_s > 0.0 and segment.enters(band):
            return Stay(_NOTHING, Status.NOT_STATED, f"{segment.id} has no duration")
        total += segment.times * _inside_ends(segment, band)
    return Stay(total)


def _way_back(walk: Sequence[Segment], segment_id: str, band: KeepOut) -> FloatArray:
    """Ramps from rest up to and into a segment, each once."""
    way = _NOTHING.copy()
    for segment in walk:
        if segment.kind == "ramp" and segment.duration_s > 0.0:
            way += _inside_ends(segment, band)
        if segment.id == segment_id:
            break
    return way


def _inside_ends(segment: Segment, band: KeepOut) -> FloatArray:
    """Time and turns inside a band, nominal twice and as slow as the torque allowance lets."""
    nominal, slowest = inside(segment, band), inside(segment.slowest, band)
    return np.stack([nominal, nominal, slowest], axis=1)


def inside(segment: Segment, band: KeepOut) -> FloatArray:
    """Time [s] and turns that one pass of a segment spends inside a band."""
    stretches = stretches_inside(segment, band)
    turns = sum(seconds * speed for seconds, speed in stretches) / _TURN
    return np.array([sum(seconds for seconds, _ in stretches), turns])
