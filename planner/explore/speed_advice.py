"""Schedule help: for each hold too near a resonance, the nearest speeds that are not.

Candidates are judged as the plan itself is: the same studies, the same rules of frequency, the
same window, so that a speed that is told satisfies all of them. A rule that covers the hold where
it is planned is asked at every candidate, so that no speed is told only because a rule ends above
it.
"""

from __future__ import annotations

from dataclasses import dataclass, replace
from typing import TYPE_CHECKING

from planner.judge.judge import judge
from planner.judge.requests import requests
from planner.model.plan import segments
from planner.model.results import Verdict
from planner.model.rules import SpeedRange
from planner.predict.histories import timed
from planner.predict.register import REGISTER
from planner.predict.run import predict_only
from planner.units import from_si, to_si

if TYPE_CHECKING:
    from collections.abc import Iterator, Sequence

    from planner.model.plan import Plan, Segment
    from planner.model.results import Finding, Judgement, Prediction, Requests
    from planner.model.rules import Rule

    Predictions = dict[str, Prediction]

STUDIES = ("air", "wind", "stops", "schedule", "holds", "modes")
"""What rules of frequency rest on."""
AGAIN = ("schedule", "holds", "modes")
"""Those of them that a hold's speed changes."""
QUANTITIES = ("harmonic_spacing", "fixed_frame_spacing", "band_distance")
"""A rule of frequency limits one of these."""
REACH = 0.3
"""Of full speed: how far to either side speeds are tried."""
COARSE, FINE = 0.005, 0.001
"""Of full speed: steps of the search, and of what is told. A gap narrower than the first may be
missed."""
TOLD_DECIMALS = 1
"""Of a speed in rpm, as it is told."""


_OPEN = Verdict.NOT_ASSESSED


@dataclass(frozen=True)
class Better:
    """A speed that keeps every limit of frequency, and what the rules would say of it."""

    speed_rad_s: float
    verdict: Verdict
    """GO, or for a hold that is worse than that CAUTION."""


@dataclass(frozen=True)
class Advice:
    """What a hold comes too near to, and where else it could be."""

    segment: str
    speed_rad_s: float
    verdict: Verdict
    reasons: tuple[str, ...]
    """Titles of the rules that it does not satisfy, each with its place."""
    below: Better | None = None
    above: Better | None = None
    """Nearest better speeds; None: none within reach, or not looked for."""
    open_for: tuple[str, ...] = ()
    """Why the rules were not assessed: then no other speed is looked for."""


def advise(plan: Plan) -> tuple[Advice, ...]:
    """Look for better speeds for every hold that a rule of frequency does not let pass.

    Args:
        plan: the plan with its merged rule book.

    Returns:
        One entry for each such hold, in the order of the run; empty where there is none.
    """
    book = replace(plan.rule_book, rules=tuple(r for r in plan.rule_book.rules if _is_asked(r)))
    desk = _Desk(replace(plan, rule_book=book), requests(plan.rule_book))
    walk = timed(plan, segments(plan), desk.wanted)
    real = desk.predicted(walk)
    judgement = desk.judged(walk, real)
    found = []
    loose = [f for f in judgement.findings if _is_loose(f)]
    for hold in walk:
        verdict, reasons = _held(hold.id, judgement)
        if hold.kind == "hold" and loose:
            rules = tuple(dict.fromkeys((*reasons, *(f.rule for f in loose))))
            told = Advice(hold.id, hold.to_rad_s, Verdict.worst([verdict, _OPEN]), rules)
            found.append(replace(told, open_for=_open_for(judgement)))
        elif hold.kind == "hold" and verdict is not Verdict.GO:
            told = Advice(hold.id, hold.to_rad_s, verdict, reasons)
            if _is_open(hold.id, judgement):
                found.append(replace(told, open_for=_open_for(judgement)))
            else:
                found.append(_searched(desk.held_to(hold, judgement), told, hold, real))
    return tuple(found)


def _is_asked(rule: Rule) -> bool:
    return rule.quantity in QUANTITIES


@dataclass(frozen=True)
class _Desk:
    """The plan with its rules of frequency alone."""

    plan: Plan
    wanted: Requests

    def predicted(self, walk: tuple[Segment, ...]) -> Predictions:
        return dict(predict_only(STUDIES, self.plan, walk, self.wanted))

    def tried(self, walk: tuple[Segment, ...], real: Predictions) -> Predictions:
        """Candidates predicted; what is of the whole run stays the plan's own."""
        told = predict_only(AGAIN, self.plan, walk, self.wanted, real)
        return {q: real[q] if not REGISTER[q].axes else found for q, found in told.items()}

    def judged(self, walk: tuple[Segment, ...], predictions: Predictions) -> Judgement:
        return judge(self.plan, walk, REGISTER, predictions)

    def held_to(self, hold: Segment, judgement: Judgement) -> _Desk:
        """The desk whose rules that cover a hold apply at every speed."""
        covering = {f.rule for f in judgement.findings if hold.id in f.segment_verdicts}
        rules = tuple(
            replace(rule, speed_range=SpeedRange()) if rule.id in covering else rule
            for rule in self.plan.rule_book.rules
        )
        book = replace(self.plan.rule_book, rules=rules)
        return replace(self, plan=replace(self.plan, rule_book=book))

    def verdicts(self, hold: Segment, speeds: Sequence[float], real: Predictions) -> list[Verdict]:
        """What the rules would say of the hold at each speed.

        References of the run, such as the card's speed, stay those of the plan.
        """
        walk = tuple(
            replace(hold, id=f"{hold.id} at {k}", from_rad_s=v, to_rad_s=v)
            for k, v in enumerate(speeds)
        )
        if not walk:
            return []
        judgement = self.judged(walk, self.tried(walk, real))
        return [_held(segment.id, judgement)[0] for segment in walk]


def _held(segment_id: str, judgement: Judgement) -> tuple[Verdict, tuple[str, ...]]:
    """Worst verdict of the rules of frequency at a hold, and which rules are not GO."""
    said = [
        (finding, Verdict(finding.segment_verdicts[segment_id]))
        for finding in judgement.findings
        if _of_rules(finding) and segment_id in finding.segment_verdicts
    ]
    worst = Verdict.worst([verdict for _, verdict in said] or [Verdict.GO])
    return worst, tuple(f.rule for f, verdict in said if verdict is not Verdict.GO)


def _is_loose(finding: Finding) -> bool:
    """A rule that matches nothing: no hold can be said to satisfy it."""
    return finding.verdict is _OPEN and not finding.segment_verdicts


def _is_open(segment_id: str, judgement: Judgement) -> bool:
    """A rule of frequency was not assessed at a hold, so that none can be satisfied for sure."""
    open_words = Verdict.NOT_ASSESSED.value
    return any(f.segment_verdicts.get(segment_id) == open_words for f in judgement.findings)


def _open_for(judgement: Judgement) -> tuple[str, ...]:
    """Reasons of the rules of frequency that were not assessed, each once."""
    said = [f.reason for f in judgement.findings if f.verdict is Verdict.NOT_ASSESSED]
    return tuple(dict.fromkeys(reason for reason in said if reason))


def _of_rules(finding: Finding) -> bool:
    return bool(finding.segment_verdicts)


def _searched(desk: _Desk, told: Advice, hold: Segment, real: Predictions) -> Advice:
    """Coarse steps to both sides, then fine ones towards the hold."""
    plan = desk.plan
    unit = plan.stand.full_speed_rad_s
    top = min(
        plan.rotor.design_maximum_rad_s, plan.rotor.proven_rad_s, plan.stand.drive.maximum_rad_s
    )
    coarse = COARSE * unit
    count = int(REACH / COARSE)
    found: list[Better | None] = []
    for side in (-1.0, 1.0):
        speeds = [_as_told(hold.to_rad_s + side * coarse * (k + 1)) for k in range(count)]
        speeds = [v for v in speeds if 0.0 < v <= top]
        first = next(_better(desk, (told, hold), speeds, real), None)
        if first is not None:
            steps = range(int(COARSE / FINE) - 1, 0, -1)
            nearer = [_as_told(first.speed_rad_s - side * FINE * unit * k) for k in steps]
            first = next(_better(desk, (told, hold), nearer, real), first)
        found.append(first)
    return replace(told, below=found[0], above=found[1])


def _as_told(speed_rad_s: float) -> float:
    """The speed that is printed, so that none is told that was not itself tried."""
    return to_si(round(from_si(speed_rad_s, "rpm"), TOLD_DECIMALS), "rpm")


def _better(
    desk: _Desk, asked: tuple[Advice, Segment], speeds: Sequence[float], real: Predictions
) -> Iterator[Better]:
    """Speeds with a better verdict than the hold has, none worse than CAUTION."""
    told, hold = asked
    most = min(told.verdict.rank - 1, Verdict.CAUTION.rank)
    for speed, verdict in zip(speeds, desk.verdicts(hold, speeds, real), strict=True):
        if verdict.rank <= most:
            yield Better(speed, verdict)
