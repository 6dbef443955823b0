"""Which rows a rule covers, and which rows should be there and are not.

A rule is only as good as the rows that reach it. So besides filtering, each segment, abort, mode,
harmonic and keep-out band that the rule means is looked for: where prediction left one out, a gap
is put in its place and judged NOT ASSESSED.
"""

from __future__ import annotations

from dataclasses import dataclass, replace
from types import MappingProxyType
from typing import TYPE_CHECKING

from planner.judge.case import EVERY_SPEED, WHOLE_RUN, Case, Place, Span, harmonic_words
from planner.judge.limits import speed_range
from planner.judge.references import Missing
from planner.judge.rows import GIVEN_FAMILIES, Row, family_of, order_of
from planner.model.results import Labels, Status
from planner.predict.fixed_frame import SIDES

if TYPE_CHECKING:
    from collections.abc import Iterator, Mapping, Sequence

    from planner.model.results import Quantity
    from planner.model.rules import Rule


AGAINST_STAND = "fixed_frame_spacing"
"""Quantity whose blade modes are held against each mode of the stand, not against harmonics."""
GIVEN_OF: Mapping[str, tuple[str, ...]] = MappingProxyType(
    {
        "passage_amplitude": ("stand",),
        "passage_peak_speed": ("stand",),
        "passage_rate_needed": ("stand",),
        AGAINST_STAND: (),
        "mode_share": (),
        "crossing_speed": (),
        "frequency_correction": (),
        "frequency_residual": (),
    }
)
"""Families of the stand file of which each mode has a number; quantities not named: all."""


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
    seen: dict[str, set[str]] = {}
    for row in rows:
        if row.labels.mode and _means_mode(rule, row.labels.mode):
            seen.setdefault(row.labels.mode, set()).add(row.labels.harmonic)
    gaps = _gaps(_Scope(rule, quantity, reach, seen, case), picked)
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
    """Set a harmonic aside that the rule does not cover; it is no gap, but closes nothing.

    A number that is for no harmonic is not set aside: a rule for harmonics cannot judge it.
    """
    harmonic = row.labels.harmonic
    if not rule.harmonics or not harmonic or harmonic in {str(n) for n in rule.harmonics}:
        return row
    if not harmonic.isdigit():
        reason = f"the rule is for rotor harmonics, this number is {harmonic_words(harmonic)}"
        return replace(row, reason=reason, gap=True)
    reason = "harmonics that the rule does not cover"
    return replace(row, status=Status.NOT_APPLICABLE, reason=reason, set_aside=True)


@dataclass(frozen=True)
class _Scope:
    """What gaps are looked for with."""

    rule: Rule
    quantity: Quantity
    reach: Span
    seen: Mapping[str, set[str]]
    """Modes that the rule means, with their harmonics, wherever in the run they have a number."""
    case: Case

    @property
    def places(self) -> tuple[Place | None, ...]:
        """Where the rule looks for numbers; None: the run as a whole."""
        if "segment" not in self.quantity.axes:
            return (None,) if WHOLE_RUN in self.rule.where else ()
        return tuple(
            place
            for place in self.case.places_of(self.quantity)
            if _means_kind(self.rule, place.kind) and place.span.meets(self.reach)
        )

    @property
    def given(self) -> set[str]:
        """Labels of the modes of stand and shaft that the rule covers by family."""
        if self.rule.mode_orders:
            return set()
        families = GIVEN_OF.get(self.quantity.id, GIVEN_FAMILIES)
        return {
            label
            for family in families
            if self.rule.mode_family in {"", family}
            for label in self.case.plan.stand.mode_labels(family)
        }

    @property
    def against(self) -> set[str]:
        """What each blade mode is held against on the stand."""
        if self.quantity.id != AGAINST_STAND:
            return set()
        stands = self.case.plan.stand.mode_labels("stand")
        return {f"{stand}, {side}" for stand in stands for side in SIDES}


@dataclass(frozen=True)
class _Wanted:
    mode: str = ""
    order: int | None = None
    band: str = ""
    harmonics: frozenset[str] = frozenset()
    """Each of which must have a row of its own."""
    harmonic: str = ""
    """The one that has none."""

    def __str__(self) -> str:
        mode = self.mode if self.order is None else f"order {self.order} of the mode family"
        band = f"band {self.band}" if self.band else ""
        return ", ".join(part for part in (mode, harmonic_words(self.harmonic), band) if part)


def _gaps(scope: _Scope, picked: Sequence[Row]) -> list[Row]:
    by_place: dict[tuple[str, str], list[Row]] = {}
    for row in picked:
        by_place.setdefault((row.labels.segment, row.labels.state), []).append(row)
    gaps: list[Row] = []
    for place in scope.places:
        key = (place.segment.id, place.state) if place else ("", "")
        for wanted in _wanted(scope, place):
            found = [row for row in by_place.get(key, []) if _answers(row, wanted)]
            missing = _harmonics_missing(found, wanted) if found else [wanted]
            gaps += [_gap(one, place, scope.case) for one in missing]
    return gaps


def _wanted(scope: _Scope, place: Place | None) -> Iterator[_Wanted]:
    """What must have a row at a place that a rule covers, or in the run as a whole."""
    bands = [""]
    if "band" in scope.quantity.axes:
        bands = [
            band.id
            for band in scope.case.plan.keep_outs
            if place is None or place.kind == "hold" or place.enters(band)
        ]
    if "mode" in scope.quantity.axes:
        modes = [*_wanted_modes(scope, place)]
    else:
        modes = [_Wanted()] if place or "band" in scope.quantity.axes else []
    return (replace(mode, band=band) for band in bands for mode in modes)


def _wanted_modes(scope: _Scope, place: Place | None) -> Iterator[_Wanted]:
    """Modes that have numbers elsewhere, those of the stand file, and the orders of the rule.

    A number of the run may be missing because there is nothing to tell, such as a crossing.
    """
    rule = scope.rule
    for mode in sorted(scope.given | (set(scope.seen) if place else set())):
        harmonics = scope.against | scope.seen.get(mode, set()) if place else set()
        yield _Wanted(mode=mode, harmonics=frozenset(harmonics - {""}))
    if place and rule.mode_family not in GIVEN_FAMILIES:
        for order in rule.mode_orders:
            yield _Wanted(order=order)


def _answers(row: Row, wanted: _Wanted) -> bool:
    """Tell whether a row speaks of what is wanted.

    One that names no mode or band stands for all of them, but not where it says that there are
    none: the plan has them.
    """
    labels = row.labels
    of_all = not _does_not_apply(row)
    if wanted.band and labels.band != wanted.band and (labels.band or not of_all):
        return False
    if wanted.order is not None:
        return order_of(labels.mode) == wanted.order if labels.mode else of_all
    if not wanted.mode:
        return True
    return labels.mode == wanted.mode if labels.mode else of_all


def _harmonics_missing(found: Sequence[Row], wanted: _Wanted) -> list[_Wanted]:
    """Harmonics of a mode without a row; one that names none stands for all rotor harmonics."""
    named = {row.labels.harmonic for row in found}
    if any(not row.labels.harmonic and not _does_not_apply(row) for row in found):
        return []
    missing = wanted.harmonics - named
    if "" in named:
        missing = frozenset(one for one in missing if not one.isdigit())
    return [replace(wanted, harmonic=one) for one in sorted(missing)]


def _does_not_apply(row: Row) -> bool:
    return row.status is Status.NOT_APPLICABLE and not row.set_aside and not row.gap


def _gap(wanted: _Wanted, place: Place | None, case: Case) -> Row:
    labels = Labels(mode=wanted.mode, harmonic=wanted.harmonic, band=wanted.band)
    what = str(wanted)
    if place is None:
        reason = f"nothing was predicted for {what} over the run"
        return Row(labels, WHOLE_RUN, case.whole_run, reason=reason, gap=True)
    labels = replace(labels, segment=place.segment.id, state=place.state)
    if not what and not place.state:
        what = "the segment"
    where = f"{what} at {place.words}" if what else place.words
    reason = f"nothing was predicted for {where}"
    return Row(labels, place.kind, place.span, reason=reason, gap=True)
