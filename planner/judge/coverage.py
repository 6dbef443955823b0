"""Every hazard class, in every part of the run, is closed by something or NOT ASSESSED."""

from __future__ import annotations

from typing import TYPE_CHECKING

from planner.judge.case import ABORT, WHOLE_RUN
from planner.judge.documents import closing_document, parts_of
from planner.judge.evidence import Evidence, faces_danger, wanted
from planner.judge.rows import family_of, order_of
from planner.model.results import Coverage, Verdict
from planner.model.rules import ABORTS, HAZARD_CLASSES

if TYPE_CHECKING:
    from collections.abc import Sequence

    from planner.judge.case import Case, Place
    from planner.judge.findings import Judged
    from planner.judge.outcomes import Outcome
    from planner.model.rules import Rule

_Said = tuple["Rule", "Outcome"]


def coverage(case: Case, judged: Sequence[Judged]) -> tuple[Coverage, ...]:
    """Close each class of the tool, the book and the plan, part by part.

    A part is closed by rules where in each of its segments the numbers that the class asks for
    were judged or shown not to apply, and nothing was left open; else by a document that reaches
    the whole part, unless something was left open that no document may close. Aborts are closed
    by rules of any class that judge numbers of aborts, abort by abort.
    """
    classes = [
        *HAZARD_CLASSES,
        *(name for name, _ in case.plan.rule_book.extra_classes),
        *case.plan.extra_classes,
    ]
    return tuple(
        _part(hazard_class, part, case, [j for j in judged if _speaks_of(hazard_class, j)])
        for hazard_class in dict.fromkeys(classes)
        for part in parts_of(hazard_class)
    )


def _speaks_of(hazard_class: str, judged: Judged) -> bool:
    """Tell whether a rule belongs to a class; each that reaches aborts belongs to these too."""
    reaches_aborts = ABORT in judged.rule.where or any(
        outcome.row.kind == ABORT for outcome in judged.outcomes
    )
    return judged.rule.hazard_class == hazard_class or (hazard_class == ABORTS and reaches_aborts)


def _part(hazard_class: str, part: str, case: Case, judged: Sequence[Judged]) -> Coverage:
    pooled = parts_of(hazard_class) == (WHOLE_RUN,)
    said = [(j.rule, o) for j in judged for o in j.outcomes if pooled or o.row.kind == part]
    verdicts = [outcome.verdict for _, outcome in said]
    about = [j for j in judged if pooled or {part, WHOLE_RUN} & set(j.rule.where)]
    opened = _left_open(said, about)
    holes = _holes(hazard_class, part, case, said)
    by_rules = _closers(said, case)
    if not by_rules and hazard_class in HAZARD_CLASSES and part != ABORT:
        # nothing of the kind can occur here, and the numbers that would show it were looked at;
        # an abort can always occur
        by_rules = list(dict.fromkeys(_rules_that(("does not apply",), said, case)))
    if not opened and not holes and by_rules:
        return Coverage(hazard_class, part, ", ".join(by_rules), Verdict.worst(verdicts))
    number, why = closing_document(hazard_class, part, _highest(part, case), case)
    if number and not opened:
        closers = dict.fromkeys((*by_rules, number))
        worst = Verdict.worst([*verdicts, Verdict.GO])
        return Coverage(hazard_class, part, ", ".join(closers), worst)
    reason = opened or holes or "no judged rule and no outside document closes it"
    worst = Verdict.worst([*verdicts, Verdict.NOT_ASSESSED])
    return Coverage(hazard_class, part, "", worst, f"{reason}; {why}" if why else reason)


def _left_open(said: Sequence[_Said], about: Sequence[Judged]) -> str:
    """Say what a rule about the part left open, or that it matched nothing."""
    for rule, outcome in said:
        if outcome.left_open:
            return f"{rule.id} left {outcome.row.place} not assessed: {outcome.reason}"
    for one in about:
        if not one.outcomes:
            return f"{one.rule.id}: {one.finding.reason}"
    return ""


def _holes(hazard_class: str, part: str, case: Case, said: Sequence[_Said]) -> str:
    """Name the first number that the class asks for and that no rule looked at."""
    places: list[Place | None] = [None]
    if part != WHOLE_RUN:
        places = [p for p in (*case.stretches, *case.aborts) if p.kind == part]
    facing: dict[tuple[str, str], list[_Said]] = {}
    for rule, outcome in said:
        if faces_danger(rule, case.vocabulary[rule.quantity]):
            labels = outcome.row.labels
            where = ("", "") if part == WHOLE_RUN else (labels.segment, labels.state)
            facing.setdefault(where, []).append((rule, outcome))
    for place in places:
        numbers = wanted(hazard_class, place, case)
        if numbers is None:
            return "no quantity of this tool closes it"
        here = facing.get((place.segment.id, place.state) if place else ("", ""), [])
        for evidence in numbers:
            if not any(_is_evidence(evidence, rule, outcome) for rule, outcome in here):
                at = place.words if place else "the run"
                return f"no rule of the class judges {evidence} at {at}"
    return ""


def _is_evidence(evidence: Evidence, rule: Rule, outcome: Outcome) -> bool:
    """Tell whether a rule looked at a number.

    One that it set aside does not count, nor one that it exempted: only the first flap mode lives
    near a harmonic by its nature.
    """
    labels = outcome.row.labels
    if rule.quantity != evidence.quantity or outcome.row.set_aside:
        return False
    if outcome.kind == "does not apply" and evidence.must_apply:
        return False
    if outcome.kind == "exempt" and not (evidence.family == "flap" and evidence.order == 1):
        return False
    family = family_of(labels.mode) if labels.mode else rule.mode_family
    order = order_of(labels.mode) if labels.mode else evidence.order
    return (
        evidence.family in {"", family}
        and evidence.order in {0, order}
        and evidence.mode in {"", labels.mode or evidence.mode}
        and evidence.harmonic in {"", labels.harmonic or evidence.harmonic}
        and evidence.band in {"", labels.band or evidence.band}
    )


def _closers(said: Sequence[_Said], case: Case) -> list[str]:
    """Rules that judged something on its dangerous side, then documents that stood in."""
    return list(
        dict.fromkeys(
            (
                *_rules_that(("assessed",), said, case),
                *(outcome.closed_by for _, outcome in said if outcome.closed_by),
            )
        )
    )


def _rules_that(kinds: tuple[str, ...], said: Sequence[_Said], case: Case) -> list[str]:
    return [
        rule.id
        for rule, outcome in said
        if outcome.kind in kinds
        and not outcome.row.set_aside
        and faces_danger(rule, case.vocabulary[rule.quantity])
    ]


def _highest(part: str, case: Case) -> float:
    inside = [case.spans[s.id].highest_rad_s for s in case.segments.values() if s.kind == part]
    return max(inside, default=case.whole_run.highest_rad_s)
