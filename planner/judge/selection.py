"""Which rows a rule covers, and which rows should be there and are not.

A rule is only as good as the rows that reach it. So besides filtering, each segment, mode and
keep-out band that the rule means is looked for: where prediction left one out, a gap is put in
its place and judged NOT ASSESSED.
"""

from __future__ import annotations

from dataclasses import dataclass, replace
from typing import TYPE_CHECKING

from planner.judge.case import EVERY_SPEED, WHOLE_RUN, Case, Span
from planner.judge.limits import speed_range
from planner.judge.references import Missing
from planner.judge.rows import GIVEN_FAMILIES, Row, family_of, order_of
from planner.model.results import Labels, Status

if TYPE_CHECKING:
    from collections.abc import Iterator, Sequence

    from planner.model.plan import Segment
    from planner.model.results import Quantity
    from planner.model.rules import Rule


@dataclass(frozen=True)
class Selection:
    """Rows that a rule covers, gaps included; none at all means that it matches nothing."""

    rows: tuple[Row, ...]
    speeds: Span | Missing
    """Rotor speeds where the rule applies; where they are missing, no number can be judged."""


def select(rule: Rule, quantity: Quantity, rows: Sequence[Row], case: Case) -> Selection:
    """Pick a rule's rows out of those of its quantity.

    Where it applies is read widely: a rule meets a segment if any speed of the segment's window,
    gauge error included, lies in the rule's range. A rule for the ``run`` covers numbers of the
    whole run and those of every segment; a number of the whole run is covered by no other rule.
    """
    speeds = speed_range(rule, case)
    reach = EVERY_SPEED if isinstance(speeds, Missing) else speeds
    picked = [
        _at_harmonic(rule, row)
        for row in rows
        if (not row.kind or _means_kind(rule, row.kind))
        and row.span.meets(reach)
        and _means_mode(rule, row.labels.mode)
    ]
    gaps = _gaps(rule, quantity, picked, (reach, case)) if "segment" in quantity.axes else []
    return Selection((*picked, *gaps), speeds)


def _means_kind(rule: Rule, kind: str) -> bool:
    return kind in rule.where or WHOLE_RUN in rule.where


def _means_mode(rule: Rule, mode: str) -> bool:
    if not rule.mode_family and not rule.mode_orders:
        return True
    if not mode:
        return True
    if rule.mode_family and family_of(mode) != rule.mode_family:
        return False
    return not rule.mode_orders or order_of(mode) in rule.mode_orders


def _at_harmonic(rule: Rule, row: Row) -> Row:
    """Set a harmonic aside that the rule does not cover; it is no gap, but closes nothing."""
    harmonic = row.labels.harmonic
    if not rule.harmonics or not harmonic or harmonic in {str(n) for n in rule.harmonics}:
        return row
    reason = "harmonics that the rule does not cover"
    return replace(row, status=Status.NOT_APPLICABLE, reason=reason, set_aside=True)


def _gaps(
    rule: Rule, quantity: Quantity, picked: Sequence[Row], scope: tuple[Span, Case]
) -> list[Row]:
    reach, case = scope
    seen = {row.labels.mode for row in picked if row.labels.mode}
    by_segment: dict[str, list[Labels]] = {}
    for row in picked:
        by_segment.setdefault(row.labels.segment, []).append(row.labels)
    gaps: list[Row] = []
    for segment in case.segments.values():
        span = case.spans[segment.id]
        if not (_means_kind(rule, segment.kind) and span.meets(reach)):
            continue
        here = by_segment.get(segment.id, [])
        gaps.extend(
            _gap(wanted, segment, span)
            for wanted in _wanted(rule, quantity, segment, (seen, case))
            if not any(_answers(labels, wanted) for labels in here)
        )
    return gaps


@dataclass(frozen=True)
class _Wanted:
    mode: str = ""
    order: int | None = None
    band: str = ""

    def __str__(self) -> str:
        if self.order is not None:
            return f"order {self.order} of the mode family"
        return self.mode or (f"band {self.band}" if self.band else "the segment")


def _wanted(
    rule: Rule, quantity: Quantity, segment: Segment, scope: tuple[set[str], Case]
) -> Iterator[_Wanted]:
    """What must have a row in a segment that a rule covers."""
    seen, case = scope
    if "band" in quantity.axes:
        bands = case.plan.keep_outs
        yield from (
            _Wanted(band=b.id) for b in bands if segment.kind == "hold" or segment.enters(b)
        )
        return
    if "mode" not in quantity.axes:
        yield _Wanted()
        return
    given = {
        f"{m.family} {m.name}"
        for m in case.plan.stand.modes
        if rule.mode_family in {"", m.family} and not rule.mode_orders
    }
    yield from (_Wanted(mode=mode) for mode in sorted(seen | given))
    if rule.mode_family not in GIVEN_FAMILIES:
        yield from (_Wanted(order=order) for order in rule.mode_orders)


def _answers(labels: Labels, wanted: _Wanted) -> bool:
    if wanted.band:
        return labels.band in {"", wanted.band}
    if wanted.order is not None:
        return not labels.mode or order_of(labels.mode) == wanted.order
    return not wanted.mode or labels.mode in {"", wanted.mode}


def _gap(wanted: _Wanted, segment: Segment, span: Span) -> Row:
    labels = Labels(segment=segment.id, mode=wanted.mode, band=wanted.band)
    reason = f"nothing was predicted for {wanted} at {segment.id}"
    return Row(labels, segment.kind, span, reason=reason, gap=True)
