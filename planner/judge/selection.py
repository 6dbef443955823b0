"""Which rows a rule covers, and which rows should be there and are not.

A rule is only as good as the rows that reach it. So besides filtering, each segment, abort, mode
and keep-out band that the rule means is looked for: where prediction left one out, a gap is put in
its place and judged NOT ASSESSED.
"""

from __future__ import annotations

from dataclasses import dataclass, replace
from typing import TYPE_CHECKING

from planner.judge.case import EVERY_SPEED, WHOLE_RUN, Case, Place, Span
from planner.judge.limits import speed_range
from planner.judge.references import Missing
from planner.judge.rows import GIVEN_FAMILIES, Row, family_of, order_of
from planner.model.results import Labels, Status

if TYPE_CHECKING:
    from collections.abc import Iterator, Sequence

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
    gauge error included, lies in the rule's range; an abort passes all speeds from its segment's
    down to rest. A rule for the ``run`` covers numbers of the whole run, of every segment and of
    every abort; a number of the whole run is covered by no other rule. Numbers of aborts are
    covered by rules for ``abort`` or the ``run`` alone, never by those for the segment's kind.
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
    by_place: dict[tuple[str, str], list[Labels]] = {}
    for row in picked:
        by_place.setdefault((row.labels.segment, row.labels.state), []).append(row.labels)
    gaps: list[Row] = []
    for place in case.places_of(quantity):
        if not (_means_kind(rule, place.kind) and place.span.meets(reach)):
            continue
        here = by_place.get((place.segment.id, place.state), [])
        gaps.extend(
            _gap(wanted, place)
            for wanted in _wanted(rule, quantity, place, (seen, case))
            if not any(_answers(labels, wanted) for labels in here)
        )
    return gaps


@dataclass(frozen=True)
class _Wanted:
    mode: str = ""
    order: int | None = None
    band: str = ""

    def __str__(self) -> str:
        mode = self.mode if self.order is None else f"order {self.order} of the mode family"
        parts = (mode, f"band {self.band}" if self.band else "")
        return ", ".join(part for part in parts if part)


def _wanted(
    rule: Rule, quantity: Quantity, place: Place, scope: tuple[set[str], Case]
) -> Iterator[_Wanted]:
    """What must have a row at a place that a rule covers."""
    seen, case = scope
    bands = [""]
    if "band" in quantity.axes:
        bands = [b.id for b in case.plan.keep_outs if place.kind == "hold" or place.enters(b)]
    for band in bands:
        if "mode" not in quantity.axes:
            yield _Wanted(band=band)
            continue
        given = _given(rule, case)
        yield from (_Wanted(mode=mode, band=band) for mode in sorted(seen | given))
        if rule.mode_family not in GIVEN_FAMILIES:
            yield from (_Wanted(order=order, band=band) for order in rule.mode_orders)


def _given(rule: Rule, case: Case) -> set[str]:
    """Labels of the modes of stand and shaft that a rule covers by family."""
    if rule.mode_orders:
        return set()
    families = [f for f in GIVEN_FAMILIES if rule.mode_family in {"", f}]
    return {label for f in families for label in case.plan.stand.mode_labels(f)}


def _answers(labels: Labels, wanted: _Wanted) -> bool:
    if wanted.band and labels.band not in {"", wanted.band}:
        return False
    if wanted.order is not None:
        return not labels.mode or order_of(labels.mode) == wanted.order
    return not wanted.mode or labels.mode in {"", wanted.mode}


def _gap(wanted: _Wanted, place: Place) -> Row:
    labels = Labels(
        segment=place.segment.id, mode=wanted.mode, band=wanted.band, state=place.state
    )
    what = str(wanted)
    if not what and not place.state:
        what = "the segment"
    where = f"{what} at {place.words}" if what else place.words
    reason = f"nothing was predicted for {where}"
    return Row(labels, place.kind, place.span, reason=reason, gap=True)
