"""One wind tried: every start, the stop and every abort marched in it and held against the rules.

The wind of a trial is the true wind at the anemometer, whatever error it reads with.
"""

from __future__ import annotations

from dataclasses import dataclass, replace
from typing import TYPE_CHECKING

from planner.judge.case import ABORT, WHOLE_RUN, Case
from planner.judge.evidence import faces_danger, wanted
from planner.judge.findings import judge_rules
from planner.judge.requests import requests
from planner.model.plan import segments
from planner.model.results import Verdict
from planner.model.rules import HAZARD_CLASSES
from planner.predict.histories import timed
from planner.predict.kept import NOTHING_KEPT
from planner.predict.progress import silent
from planner.predict.register import REGISTER
from planner.predict.run import predict

if TYPE_CHECKING:
    from collections.abc import Iterator, Mapping, Sequence

    from planner.judge.case import Place
    from planner.judge.evidence import Evidence
    from planner.judge.findings import Judged
    from planner.judge.outcomes import Outcome
    from planner.model.plan import Plan
    from planner.predict.progress import Progress

PARTS = ("ramp", "stop", ABORT)
"""Parts of a run that the gate answers for; holds are judged in the plan's own wind."""
STUDIES = ("marches", "speeds")
"""Studies whose quantities decide."""
_SOUND = (Verdict.GO, Verdict.CAUTION)


@dataclass(frozen=True)
class Wind:
    """A mean wind with the gust that goes with it."""

    mean_m_s: float
    gust_m_s: float


@dataclass(frozen=True)
class Trial:
    """What is tried.

    Attributes:
        wind: True wind at the anemometer.
        sectors: Names of sectors that it comes from, each by itself; empty: the plan has none.
        is_full: At full fineness; else by the search of the marches alone.
    """

    wind: Wind
    sectors: tuple[str, ...]
    is_full: bool = False


@dataclass(frozen=True)
class Fail:
    """A rule that a trial does not keep, in one part of the run."""

    words: str
    is_exceeded: bool
    """A limit is exceeded; else something was not assessed."""


@dataclass(frozen=True)
class Tried:
    """What a trial came to; exceeded limits first."""

    trial: Trial
    fails: tuple[Fail, ...]
    cautions: tuple[str, ...] = ()

    @property
    def passes(self) -> bool:
        """Tell whether all was assessed and no limit is exceeded; cautions pass."""
        return not self.fails


@dataclass(frozen=True)
class Desk:
    """What trials are predicted with."""

    versions: Mapping[str, str]
    progress: Progress = silent


def tried(plan: Plan, trial: Trial, desk: Desk) -> Tried:
    """Predict and judge a plan in the wind of a trial.

    Args:
        plan: The model.
        trial: What is tried.
        desk: What it is predicted with.

    Returns:
        What fails: every rule about marched quantities in ramps, the stop and aborts that is
        exceeded, or of which anything was not assessed; an outside document that stands in
        computes no gate. Also numbers that the hazard classes ask for and no rule judges.
    """
    windy = plan_in(plan, trial)
    wanted_of_rules = replace(requests(plan.rule_book), is_thrifty=not trial.is_full)
    walk = timed(windy, segments(windy), wanted_of_rules)
    predictions = predict(windy, walk, wanted_of_rules, desk.progress, NOTHING_KEPT, desk.versions)
    return Tried(trial, *judged(Case(windy, {s.id: s for s in walk}, REGISTER, predictions)))


def plan_in(plan: Plan, trial: Trial) -> Plan:
    """The plan in the wind of a trial, with the sectors that are tried.

    The wind is the true one, so that the anemometer's error is not counted a second time.
    """
    site = replace(
        plan.site,
        wind_mean_m_s=trial.wind.mean_m_s,
        wind_gust_m_s=trial.wind.gust_m_s,
        anemometer_error_m_s=0.0,
        sectors=tuple(s for s in plan.site.sectors if s.name in trial.sectors),
    )
    return replace(plan, site=site)


def judged(case: Case) -> tuple[tuple[Fail, ...], tuple[str, ...]]:
    """What fails in ramps, the stop and aborts, exceeded limits first; then the cautions."""
    found = [one for one in judge_rules(case) if _is_marched(one.rule.quantity, case)]
    fails: list[Fail] = []
    cautions: list[str] = []
    for one in found:
        if not one.outcomes and {*PARTS, WHOLE_RUN} & set(one.rule.where):
            fails.append(Fail(f"{one.rule.id}: {one.finding.reason}", is_exceeded=False))
        for part in (*PARTS, ""):
            worst = _worst([o for o in one.outcomes if o.row.kind == part])
            if worst is None:
                continue
            words = f"{one.rule.id} at {worst.row.place}: {_reason(worst)}"
            if _fails(worst):
                fails.append(Fail(words, is_exceeded=worst.verdict is Verdict.NO_GO))
            elif worst.verdict is Verdict.CAUTION:
                cautions.append(words)
    fails += [Fail(words, is_exceeded=False) for words in _unlooked(case, found)]
    return tuple(sorted(fails, key=lambda fail: not fail.is_exceeded)), tuple(cautions)


def _is_marched(quantity: str, case: Case) -> bool:
    known = case.vocabulary.get(quantity)
    return known is not None and known.study in STUDIES


def _fails(outcome: Outcome) -> bool:
    return outcome.kind == "not assessed" or outcome.verdict not in _SOUND


def _worst(outcomes: Sequence[Outcome]) -> Outcome | None:
    """The outcome that fails most: an exceeded limit, then one that is not assessed."""

    def badness(outcome: Outcome) -> tuple[int, float]:
        verdict = Verdict.NOT_ASSESSED if outcome.closed_by else outcome.verdict
        return -verdict.rank, outcome.relative_margin

    return min(outcomes, key=badness, default=None)


def _reason(outcome: Outcome) -> str:
    if not outcome.closed_by:
        return outcome.reason
    return f"{outcome.reason}; outside document {outcome.closed_by} computes no gate"


def _unlooked(case: Case, found: Sequence[Judged]) -> list[str]:
    """Marched numbers that a hazard class asks for and no rule judges, once a part of the run."""
    looked = _looked_at(case, found)
    told: dict[tuple[str, str], str] = {}
    for place, evidence in _asked(case):
        kinds = looked.get((evidence.quantity, place.segment.id, place.state), set())
        if not _is_looked_at(evidence, kinds):
            words = f"no rule judges {evidence} at {place.words}"
            told.setdefault((evidence.quantity, place.kind), words)
    return list(told.values())


def _looked_at(case: Case, found: Sequence[Judged]) -> dict[tuple[str, str, str], set[str]]:
    """Kinds of outcomes by quantity, segment and cause, of rules on the dangerous side."""
    looked: dict[tuple[str, str, str], set[str]] = {}
    for one in found:
        quantity = case.vocabulary[one.rule.quantity]
        for outcome in one.outcomes if faces_danger(one.rule, quantity) else ():
            labels = outcome.row.labels
            if not outcome.row.set_aside:
                key = (quantity.id, labels.segment, labels.state)
                looked.setdefault(key, set()).add(outcome.kind)
    return looked


def _asked(case: Case) -> Iterator[tuple[Place, Evidence]]:
    """Marched numbers that hazard classes ask for in ramps, the stop and aborts."""
    for place in (*case.stretches, *case.aborts):
        for hazard_class, (_, parts) in HAZARD_CLASSES.items():
            if place.kind in PARTS and place.kind in parts:
                asked = wanted(hazard_class, place, case) or ()
                yield from ((place, e) for e in asked if _is_marched(e.quantity, case))


def _is_looked_at(evidence: Evidence, kinds: set[str]) -> bool:
    counted = {"assessed", "not assessed"}
    return bool(kinds & (counted if evidence.must_apply else {*counted, "does not apply"}))
