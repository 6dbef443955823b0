"""Every run-down without power that a plan may come to: its stop, and aborts from anywhere."""

from __future__ import annotations

from dataclasses import dataclass, replace
from functools import partial
from typing import TYPE_CHECKING

import numpy as np

from planner.model.plan import ABORT_CAUSES
from planner.model.results import Labels, Status
from planner.predict.histories import (
    NO_REST,
    NO_TORQUE,
    Order,
    Origin,
    abort_order,
    run_downs,
    stop_order,
)
from planner.predict.study import Inputs, NotAssessedError
from planner.units import from_si

if TYPE_CHECKING:
    from collections.abc import Callable, Iterator, Sequence

    from numpy.typing import NDArray

    from planner.predict.histories import FoundRunDown
    from planner.predict.rows import Rows
    from planner.predict.shaft import Shaft, Way

    FloatArray = NDArray[np.float64]

AT_REST = "the rotor is at rest"


@dataclass(frozen=True)
class Event:
    """A run-down of the plan: the stop, or an abort from a segment for one cause."""

    label: Labels
    from_rad_s: float
    order: Order | None = None
    """None: powered, or nothing can be known, for a reason."""
    status: Status = Status.OK
    reason: str = ""
    powered_s: float = 0.0
    """Time of a powered stop, whose speed falls along a straight line."""


def stops(ways: Sequence[Way], inputs: Inputs, shaft: Shaft) -> Iterator[Event]:
    """The stop at the end of the run; the study takes the shutdown and the abort actions."""
    for segment, ends in ways:
        if segment.kind != "stop":
            continue
        event = Event(Labels(segment=segment.id), segment.from_rad_s)
        if inputs["shutdown"].powered:
            yield replace(event, powered_s=segment.duration_s)
        else:
            parts = ((segment, ends), inputs["shutdown"], inputs["abort"])
            yield ordered(event, partial(stop_order, shaft, *parts))


def aborts(ways: Sequence[Way], inputs: Inputs, shaft: Shaft) -> Iterator[Event]:
    """Every cause from every hold, and from every ramp where it is fastest."""
    for segment, (start, end) in ways:
        if segment.kind == "stop":
            continue
        falls = segment.from_rad_s > segment.to_rad_s
        origin = Origin(segment.top_rad_s, start if falls else end)
        for cause in ABORT_CAUSES:
            event = Event(Labels(segment=segment.id, state=cause), origin.speed_rad_s)
            parts = (inputs["abort"], origin, cause)
            yield ordered(event, partial(abort_order, shaft, *parts))


def ordered(event: Event, order: Callable[[], Order]) -> Event:
    """The event with its order, or with why there is none."""
    if event.from_rad_s <= 0.0:
        return replace(event, status=Status.NOT_APPLICABLE, reason=AT_REST)
    try:
        return replace(event, order=order())
    except NotAssessedError as refusal:
        return replace(event, status=refusal.status, reason=str(refusal))


def solved_events(
    shaft: Shaft, events: Sequence[Event], torque_allowance: tuple[float, float]
) -> list[tuple[Event, FoundRunDown | None]]:
    """Find every different run-down once, all in one batch; None where nothing is to be found.

    Raises:
        NotAssessedError: the stand file states no friction.
    """
    orders = list(dict.fromkeys(event.order for event in events if event.order is not None))
    solved = dict(zip(orders, run_downs(shaft, orders, torque_allowance), strict=True))
    found: list[tuple[Event, FoundRunDown | None]] = []
    for event in events:
        run_down = None if event.order is None else solved[event.order]
        if run_down is not None and not run_down.is_solved:
            failed = replace(event, status=Status.NOT_CONVERGED, reason=NO_TORQUE)
            found.append((failed, None))
        else:
            found.append((event, run_down))
    return found


def add_ends(
    rows: Rows, label: Labels, numbers: tuple[FloatArray, float], found: FoundRunDown
) -> None:
    """Add a row of a nominal number, its ends and its hand check; without an end it is flagged."""
    values, hand = numbers
    top = found.order.from_rad_s
    if np.all(np.isfinite(values)):
        low, high = float(values.min()), float(values.max())
        rows.add(label, float(values[0]), low=low, high=high, speed_rad_s=top, hand=hand)
        return
    stays = from_si(max(found.stays_above_rad_s(lane) for lane in range(3)), "rpm")
    words = f"{NO_REST}: within the torque allowance it may stay at {stays:.0f} rpm"
    rows.flag(label, Status.OUTSIDE_VALIDITY, words, speed_rad_s=top)
