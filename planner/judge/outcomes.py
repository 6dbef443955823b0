"""One rule held against one row."""

from __future__ import annotations

import math
from dataclasses import dataclass, replace
from typing import TYPE_CHECKING, Literal

from planner.judge.case import ABORT, WHOLE_RUN
from planner.judge.documents import CLOSABLE, closing_document
from planner.judge.limits import limit_over
from planner.judge.references import Missing
from planner.model.results import Status, Verdict
from planner.model.rules import ABORTS
from planner.units import from_si

if TYPE_CHECKING:
    from collections.abc import Mapping

    from planner.judge.case import Case, Span
    from planner.judge.rows import Row
    from planner.model.results import Quantity
    from planner.model.rules import Limit, Rule

Kind = Literal["assessed", "not assessed", "does not apply", "exempt"]

LAST_DIGITS = 1e-12
"""Relative difference that is mere binary representation: 6 deg less 4 deg is 2 deg."""


@dataclass(frozen=True)
class Outcome:
    """What a rule says about one row; margin and limits in SI, NaN where there are none."""

    row: Row
    kind: Kind
    verdict: Verdict
    reason: str = ""
    limit: float = math.nan
    caution: float = math.nan
    margin: float = math.nan
    closed_by: str = ""

    @property
    def relative_margin(self) -> float:
        """Margin as a share of the limit (of the value for a limit of zero); NaN last."""
        scale = abs(self.limit) or max(abs(self.row.low), abs(self.row.high)) or 1.0
        share = self.margin / scale
        return math.inf if math.isnan(share) else share

    @property
    def left_open(self) -> bool:
        """Tell whether the row is neither assessed nor closed by a document."""
        return self.kind == "not assessed" and not self.closed_by


@dataclass(frozen=True)
class Bench:
    """What a rule is judged with, the same for all its rows."""

    rule: Rule
    quantity: Quantity
    speeds: Span | Missing
    damping: Mapping[tuple[str, str], float]
    """Least modal damping by segment and mode, only where it was assessed."""
    case: Case


def judge_row(row: Row, bench: Bench) -> Outcome:
    """Judge one row, and close it by a document where that is allowed.

    The status decides first: only a row that is OK and finite is compared. A number outside
    validity is told in the reason but makes neither GO nor NO-GO.
    """
    if row.gap:
        return _open(row, row.reason)
    if row.status is Status.NOT_APPLICABLE:
        return Outcome(row, "does not apply", Verdict.GO, row.reason)
    if row.status is not Status.OK:
        return _by_document(_open(row, _status_reason(row, bench)), bench)
    return _judge_number(row, bench)


def _judge_number(row: Row, bench: Bench) -> Outcome:
    if not row.finite:
        return _open(row, "the predicted number is not finite")
    if _exempt(row, bench):
        return Outcome(row, "exempt", Verdict.GO, f"{row.labels.mode} is exempt by its damping")
    if isinstance(bench.speeds, Missing):
        return _open(row, f"speed range of the rule: {bench.speeds.reason}")
    return _compared(row, bench)


def _compared(row: Row, bench: Bench) -> Outcome:
    rule = bench.rule
    limit = _limit(rule.limit, row, bench)
    if isinstance(limit, Missing):
        return _open(row, limit.reason)
    caution = math.nan
    if rule.caution is not None:
        stated = _limit(rule.caution, row, bench)
        if isinstance(stated, Missing):
            return _open(row, f"caution level: {stated.reason}")
        caution = stated
    margin = _margin(row, bench, limit)
    verdict = Verdict.GO if _keeps(margin, limit) else Verdict.NO_GO
    if verdict is Verdict.GO and rule.caution is not None:
        kept = _keeps(_margin(row, bench, caution), caution)
        verdict = Verdict.GO if kept else Verdict.CAUTION
    reason = "" if verdict is Verdict.GO else _beyond(row, bench, limit, caution)
    return Outcome(row, "assessed", verdict, reason, limit, caution, margin)


def _limit(limit: Limit | None, row: Row, bench: Bench) -> float | Missing:
    if limit is None or isinstance(bench.speeds, Missing):
        return Missing("the rule states no limit")
    return limit_over(limit, bench.rule.sense, row.span.within(bench.speeds), bench.case)


def _margin(row: Row, bench: Bench, limit: float) -> float:
    """Distance inside a limit of the end of the row that comes nearest to it."""
    end = _worst_end(row, bench)
    return limit - end if bench.rule.sense == "at most" else end - limit


def _worst_end(row: Row, bench: Bench) -> float:
    """The end nearest to the limit; of a quantity dangerous both ways, the greatest size."""
    numbers = (row.value, row.low, row.high)
    if bench.rule.sense == "at least":
        return min(numbers)
    if bench.quantity.danger == "both":
        return max(abs(number) for number in numbers)
    return max(numbers)


def _keeps(margin: float, limit: float) -> bool:
    """Judge unrounded; only the last binary digits of equal numbers are forgiven. NaN fails."""
    return margin >= -LAST_DIGITS * abs(limit)


def _exempt(row: Row, bench: Bench) -> bool:
    least = bench.rule.exempt_damping
    if least is None or not row.labels.mode or row.labels.state:
        return False  # an abort passes other speeds than those whose damping is known
    return bench.damping.get((row.labels.segment, row.labels.mode), -math.inf) >= least


def _open(row: Row, reason: str) -> Outcome:
    return Outcome(row, "not assessed", Verdict.NOT_ASSESSED, reason)


def _by_document(outcome: Outcome, bench: Bench) -> Outcome:
    """Close a row that is not assessed by an outside document that reaches it.

    Numbers of aborts are closed by documents on aborts, whatever the class of their rule.
    """
    row = outcome.row
    if row.status not in CLOSABLE:
        return outcome
    on_run = row.kind == WHOLE_RUN
    highest = (bench.case.whole_run if on_run else row.span).highest_rad_s
    hazard_class = ABORTS if row.kind == ABORT else bench.rule.hazard_class
    number, why = closing_document(hazard_class, row.kind, highest, bench.case)
    if number:
        return replace(outcome, verdict=Verdict.GO, closed_by=number)
    return replace(outcome, reason=f"{outcome.reason}; {why}") if why else outcome


def _status_reason(row: Row, bench: Bench) -> str:
    words = f"{row.status.value}: {row.reason}" if row.reason else row.status.value
    if not row.finite or row.status is Status.NOT_COMPUTED:
        return words
    unit = bench.quantity.unit
    words += f" (for information: {_text(_worst_end(row, bench), unit)}"
    limit = _limit(bench.rule.limit, row, bench)
    if not isinstance(limit, Missing):
        kept = _keeps(_margin(row, bench, limit), limit)
        words += f", {'within' if kept else 'beyond'} the limit {_text(limit, unit)}"
    return words + ")"


def _beyond(row: Row, bench: Bench, limit: float, caution: float) -> str:
    rule, unit = bench.rule, bench.quantity.unit
    exceeded = not _keeps(_margin(row, bench, limit), limit)
    name, bound = ("limit", limit) if exceeded else ("caution level", caution)
    return (
        f"{_text(_worst_end(row, bench), unit)} against {name} {rule.sense} {_text(bound, unit)}"
    )


def _text(value: float, unit: str) -> str:
    return f"{from_si(value, unit):.6g} {unit}".strip()
