"""One rule over everything that it covers, gathered into a finding."""

from __future__ import annotations

import math
from collections import Counter
from dataclasses import dataclass
from typing import TYPE_CHECKING

from planner.judge.limits import mismatch
from planner.judge.outcomes import Bench, Outcome, judge_row
from planner.judge.rows import Row, rows_of
from planner.judge.selection import select
from planner.model.results import Finding, OfCause, Status, Verdict

if TYPE_CHECKING:
    from collections.abc import Mapping, Sequence

    from planner.judge.case import Case
    from planner.model.results import Quantity
    from planner.model.rules import Rule


@dataclass(frozen=True)
class Judged:
    """A rule with its outcomes, and the finding they come to."""

    rule: Rule
    outcomes: tuple[Outcome, ...]
    finding: Finding


def judge_rules(case: Case) -> tuple[Judged, ...]:
    """Judge every predicted rule of the plan's book, in the book's order."""
    known: dict[str, list[Row]] = {}
    damping = _damping(case)
    judged: list[Judged] = []
    for rule in case.plan.rule_book.rules:
        if rule.kind != "predicted":
            continue
        outcomes, fault = _outcomes(rule, case, known, damping)
        judged.append(Judged(rule, outcomes, gather(rule, outcomes, fault)))
    return tuple(judged)


def gather(rule: Rule, outcomes: Sequence[Outcome], fault: str = "") -> Finding:
    """Make one finding out of a rule's outcomes, filled from the worst.

    Args:
        rule: the rule.
        outcomes: one for each row; none makes the finding NOT ASSESSED.
        fault: why there are no outcomes.
    """
    if not outcomes:
        return _unmatched(rule, fault)
    worst = min(outcomes, key=_badness)
    return Finding(
        rule=rule.id,
        where=worst.row.place,
        segment=worst.row.labels.segment,
        value=worst.row.value,
        low=worst.row.low,
        high=worst.row.high,
        limit=worst.limit,
        caution=worst.caution,
        margin=worst.margin,
        verdict=worst.verdict,
        reason=_reason(worst, outcomes),
        tested=sum(outcome.kind == "assessed" for outcome in outcomes),
        not_assessed=sum(outcome.kind == "not assessed" for outcome in outcomes),
        closed_by=_closers(outcomes),
        segment_verdicts=_by_segment(outcomes),
        segment_margins=_margins(outcomes),
        by_state=_by_state(outcomes),
    )


def _outcomes(
    rule: Rule,
    case: Case,
    known: dict[str, list[Row]],
    damping: Mapping[tuple[str, str], float],
) -> tuple[tuple[Outcome, ...], str]:
    quantity = case.vocabulary.get(rule.quantity)
    prediction = case.predictions.get(rule.quantity)
    if quantity is None:
        return (), f"there is no quantity {rule.quantity!r}"
    if prediction is None:
        return (), f"{rule.quantity} was not predicted"
    fault = mismatch(rule, quantity)
    if fault:
        return (), fault
    if quantity.id not in known:
        known[quantity.id] = rows_of(quantity, prediction, case)
    selection = select(rule, quantity, known[quantity.id], case)
    bench = Bench(rule, quantity, selection.speeds, damping, case)
    outcomes = tuple(judge_row(row, bench) for row in selection.rows)
    if all(row.set_aside for row in selection.rows):
        outcomes = ()
    return outcomes, "" if outcomes else _nothing_matches(rule, quantity)


def _nothing_matches(rule: Rule, quantity: Quantity) -> str:
    words = f"the rule matches nothing: no {quantity.id} at {', '.join(rule.where) or 'nowhere'}"
    if rule.mode_family:
        words += f" for {rule.mode_family} modes"
    if rule.harmonics:
        words += f" per revolution {', '.join(str(n) for n in rule.harmonics)}"
    if "segment" not in quantity.axes and "run" not in rule.where:
        words += '; it is a number of the whole run, so where must have "run"'
    elif rule.speed_range.from_rad_s or rule.speed_range.to_rad_s is not None:
        words += " in the rule's speed range"
    return words


def _damping(case: Case) -> dict[tuple[str, str], float]:
    quantity = case.vocabulary.get("mode_damping")
    prediction = case.predictions.get("mode_damping")
    if quantity is None or prediction is None:
        return {}
    least: dict[tuple[str, str], float] = {}
    for row in rows_of(quantity, prediction, case):
        key = (row.labels.segment, row.labels.mode)
        sound = row.status is Status.OK and row.finite and not row.gap
        number = min(row.value, row.low, row.high) if sound else -math.inf
        least[key] = min(number, least.get(key, math.inf))
    return least


def _badness(outcome: Outcome) -> tuple[int, int, float]:
    """Sort key: worst verdict, then rows with numbers, then the smallest margin."""
    kinds = ("assessed", "not assessed", "exempt", "does not apply")
    return -outcome.verdict.rank, kinds.index(outcome.kind), outcome.relative_margin


def _reason(worst: Outcome, outcomes: Sequence[Outcome]) -> str:
    """Reason of the worst row, then everything that was left out of the comparison."""
    parts = [worst.reason] if worst.verdict is not Verdict.GO else []
    closed = [o for o in outcomes if o.closed_by]
    if closed:
        parts.append(f"{len(closed)} not assessed but closed by document: {closed[0].reason}")
    exempt = Counter(o.row.labels.mode for o in outcomes if o.kind == "exempt")
    if exempt:
        modes = ", ".join(f"{mode} ({count} times)" for mode, count in exempt.items())
        parts.append(f"exempt by damping: {modes}")
    absent = dict.fromkeys(
        o.reason for o in outcomes if o.kind == "does not apply" and not o.row.set_aside
    )
    if absent:
        parts.append(f"does not apply: {'; '.join(absent)}")
    return ". ".join(part for part in parts if part)


def _by_segment(outcomes: Sequence[Outcome]) -> dict[str, str]:
    worst: dict[str, Verdict] = {}
    for outcome in outcomes:
        segment = outcome.row.labels.segment
        if segment and outcome.verdict is Verdict.GO:
            worst.setdefault(segment, Verdict.GO)
        elif segment:
            worst[segment] = Verdict.worst([outcome.verdict, worst.get(segment, Verdict.GO)])
    return {segment: verdict.value for segment, verdict in worst.items()}


def _margins(outcomes: Sequence[Outcome]) -> dict[str, float]:
    """Least margin of the assessed rows of each segment."""
    least: dict[str, float] = {}
    for outcome in outcomes:
        segment = outcome.row.labels.segment
        if segment and outcome.kind == "assessed":
            least[segment] = min(outcome.margin, least.get(segment, math.inf))
    return least


def _by_state(outcomes: Sequence[Outcome]) -> dict[str, OfCause]:
    """What the aborts of each cause come to."""
    groups: dict[str, list[Outcome]] = {}
    for outcome in outcomes:
        if outcome.row.labels.state:
            groups.setdefault(outcome.row.labels.state, []).append(outcome)
    return {state: _of_cause(group) for state, group in groups.items()}


def _of_cause(outcomes: Sequence[Outcome]) -> OfCause:
    worst = min(outcomes, key=_badness)
    return OfCause(
        verdict=worst.verdict.value,
        segment=worst.row.labels.segment,
        low=worst.row.low,
        high=worst.row.high,
        limit=worst.limit,
        margin=worst.margin,
        closed_by=_closers(outcomes),
    )


def _closers(outcomes: Sequence[Outcome]) -> str:
    """Numbers of the outside documents that stand in for what was not assessed."""
    return ", ".join(dict.fromkeys(o.closed_by for o in outcomes if o.closed_by))


def _unmatched(rule: Rule, fault: str) -> Finding:
    nan = math.nan
    return Finding(
        rule=rule.id,
        where="",
        segment="",
        value=nan,
        low=nan,
        high=nan,
        limit=nan,
        caution=nan,
        margin=nan,
        verdict=Verdict.NOT_ASSESSED,
        reason=fault or "the rule matches nothing",
        tested=0,
        not_assessed=0,
    )
