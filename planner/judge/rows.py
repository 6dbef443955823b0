"""Predictions as rows: one number with its labels, its place in the run, and its status.

Two things are checked here once more although predicting checks them too, because a slip there
would turn into a wrong GO: an allowance that the rule book does not state, and a stand or shaft
mode that was not found with the rotor's mass fitted.
"""

from __future__ import annotations

import math
from dataclasses import dataclass, replace
from typing import TYPE_CHECKING

from planner.judge.case import ABORT, WHOLE_RUN, Case, Place, Span, place_words
from planner.model.plan import ABORT_CAUSES
from planner.model.results import Labels, Status

if TYPE_CHECKING:
    from planner.model.results import Prediction, Quantity

BLADE_FAMILIES = ("flap", "lag", "torsion")
GIVEN_FAMILIES = ("stand", "shaft")
"""Mode families that the stand file gives."""


@dataclass(frozen=True)
class Row:
    """One predicted number, or a place where there should be one."""

    labels: Labels
    kind: str
    """Segment kind, ``abort``, or ``run`` for a number of the whole run; empty: not placed."""
    span: Span
    value: float = math.nan
    low: float = math.nan
    high: float = math.nan
    status: Status = Status.NOT_COMPUTED
    reason: str = ""
    set_aside: bool = False
    """The rule itself leaves this number out, by the harmonics that it covers."""
    gap: bool = False
    """Stands for a number that should be there and is not; no document closes a gap."""

    @property
    def finite(self) -> bool:
        """Tell whether value, low and high are all finite."""
        return all(math.isfinite(number) for number in (self.value, self.low, self.high))

    @property
    def place(self) -> str:
        """The labels in words."""
        return place_words(self.labels)


def rows_of(quantity: Quantity, prediction: Prediction, case: Case) -> list[Row]:
    """Take a prediction apart into rows.

    A row without segment label in a quantity that has one for each segment, and which holds no
    number to judge (a study that refused as a whole, a part that the hub does not have), stands
    for every segment of the run, and where the quantity has numbers of aborts for these too; one
    with the cause of an abort stands for the aborts of that cause.

    Raises:
        ValueError: columns of different lengths, or a prediction of another quantity.
    """
    if prediction.quantity != quantity.id:
        msg = f"the prediction under {quantity.id!r} is one of {prediction.quantity!r}"
        raise ValueError(msg)
    if quantity.allowance and case.plan.rule_book.allowance(quantity.allowance) is None:
        doubt = f"rule book states no allowance {quantity.allowance!r}"
    else:
        doubt = ""
    columns = zip(
        prediction.labels,
        prediction.value.tolist(),
        prediction.low.tolist(),
        prediction.high.tolist(),
        prediction.status,
        prediction.reasons,
        prediction.speed_rad_s.tolist(),
        strict=True,
    )
    found: list[Row] = []
    for labels, value, low, high, status, reason, speed in columns:
        row = Row(labels, "", case.whole_run, value, low, high, status, reason)
        found += _placed(_doubted(row, doubt, case), quantity, case, speed)
    return found


def family_of(mode: str) -> str:
    """Family of a mode label: the text before the first space."""
    return mode.split(" ", 1)[0]


def order_of(mode: str) -> int | None:
    """Order of a blade mode, counted from one; None for modes without one."""
    words = mode.split()
    if len(words) > 1 and words[1].isdigit() and words[0] not in GIVEN_FAMILIES:
        return int(words[1])
    return None


def stand_mode_of(harmonic: str) -> str:
    """Mode of the stand that a blade mode is held against; empty for a rotor harmonic.

    Example:
        >>> stand_mode_of("stand sway, Ω - ω"), stand_mode_of("4")
        ('stand sway', '')
    """
    return harmonic.rpartition(", ")[0]


def _doubted(row: Row, doubt: str, case: Case) -> Row:
    """Take the OK from a row whose inputs do not carry it."""
    if row.status is not Status.OK:
        return row
    if doubt:
        return replace(row, status=Status.NOT_STATED, reason=doubt)
    if {row.labels.mode, stand_mode_of(row.labels.harmonic)} & case.unfitted_modes:
        reason = "the mode is not stated to be found with the rotor's mass fitted"
        return replace(row, status=Status.NOT_STATED, reason=reason)
    return row


def _placed(row: Row, quantity: Quantity, case: Case, speed_rad_s: float) -> list[Row]:
    fault = _label_fault(row, quantity, case)
    if fault:
        return [replace(row, status=Status.NOT_COMPUTED, reason=fault, gap=True)]
    if row.labels.segment:
        place = _place(row.labels, case)
        return [replace(row, kind=place.kind, span=place.span.including(speed_rad_s))]
    if "segment" not in quantity.axes:
        span = case.whole_run if math.isnan(speed_rad_s) else Span(speed_rad_s, speed_rad_s)
        return [replace(row, kind=WHOLE_RUN, span=span)]
    return [
        replace(
            row,
            labels=replace(row.labels, segment=each.segment.id, state=each.state),
            kind=each.kind,
            span=each.span,
        )
        for each in case.places_of(quantity)
        if row.labels.state in {"", each.state}
    ]


def _place(labels: Labels, case: Case) -> Place:
    """The segment of a label, or the abort that begins in it."""
    span = case.spans[labels.segment]
    if labels.state:
        span = replace(span, lowest_rad_s=0.0)
    return Place(case.segments[labels.segment], span, labels.state)


def _label_fault(row: Row, quantity: Quantity, case: Case) -> str:
    name = row.labels.segment
    if name and name not in case.segments:
        return f"a number was predicted for segment {name}, which the plan does not have"
    state = row.labels.state
    if state and "state" not in quantity.axes:
        return f"a number was predicted for the {ABORT} cause {state}, {quantity.id} has none"
    if state and state not in ABORT_CAUSES:
        return f"a number was predicted for the {ABORT} cause {state}, which is not known"
    bare = [axis for axis in quantity.axes if axis != "state" and not getattr(row.labels, axis)]
    if bare and row.status is Status.OK:
        return f"a number was predicted without saying for which {bare[0]}"
    return ""
