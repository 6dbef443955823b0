"""Predictions held against the plan's rule book: findings, coverage and the verdict.

A wrong GO can hurt someone. These are the ways in which one could come out, and what stops each;
tests of the same numbers in ``tests/judge`` try every one of them.

1. A number is NaN or infinite: comparisons are written so that only a finite number inside passes.
2. A number was not computed, did not converge or lies outside validity: the status is read before
   the number; such a row is NOT ASSESSED even where its number looks harmless. It is not NO-GO
   either where its number looks bad: the number is unproven, so it is told in the reason only.
3. Only the nominal value is inside, or only the sign is harmless: "at most" reads the greatest of
   value, low and high, "at least" the least. Thrust, torque and power are dangerous both ways: "at
   most" reads their size, and "at least" closes nothing.
4. Rounding: nothing is rounded before judging.
5. A quantity is not predicted, or a rule names one that does not exist: NOT ASSESSED.
6. A rule matches no row, because of its part of the run, speed range, mode family or harmonics:
   NOT ASSESSED, and its class is open.
7. Prediction left out a segment, an abort, a mode or a keep-out band, or labelled it wrongly: the
   expected places are listed from the plan and each missing one is NOT ASSESSED. Modes of stand
   and shaft are listed as the stand file gives them and as its column and drive train have them.
8. A hold's window or a ramp reaches into a rule's speed range with one end only: it is judged
   whole, gauge error included.
9. A limit over speed is read outside its table, or at the mild end of a ramp: no extrapolation;
   the strictest value over the whole range of speeds counts.
10. A reference value is missing, not positive, or rests on a prediction that is not OK: NOT
    ASSESSED.
11. A limit is in another dimension than the quantity, or refers to a value of another: NOT
    ASSESSED.
12. The plan or book lacks a value that it must have (a model allowance, the overspeed trip, the
    margin on lift-off speed, whether a mode was found with the rotor fitted, the sway that the
    stand bears): NOT ASSESSED, and no document closes it.
13. A mode is exempt by damping that was not assessed: only assessed damping, at its least, counts.
14. A part does not apply, or a rule sets harmonics aside or exempts modes: the rule gives GO, but
    what it set aside or exempted closes no hazard class (the first flap mode may be exempt: it
    lives near once per revolution). Where every number that a built-in class asks for was looked
    at and does not apply, there is no such hazard, and the rules that looked close it.
15. A thin rule book: every class is listed, part by part, and each asks for the numbers that speak
    of its hazard, down to the order of a blade mode, each mode of the stand and the harmonic that
    drives it: held spacing and distance from each keep-out band, resonances passed in ramps and
    the stop and how far the hub sways there, both stops and the moment of resting on one, also at
    rest, the overspeed trip, torque and power while speed changes and what the drive has left, the
    room between blade and stand. A rule that guards the harmless side, or one of another part of
    the run, does not count.
16. One hold is judged, another is outside every rule's range: each segment is asked by itself.
17. An outside document is for less speed or less wind (at the anemometer or the hub, whichever is
    more), is for another part or class, is dated after the card's issue, or names no approver: it
    does not close. It never closes what did not converge, a missing limit, a gap, or NO-GO.
18. The plan's wind, with the anemometer's error, is above the book's cap, or there is no cap.
19. The main path has a slip: an independent hand check that disagrees is a finding.
20. A step looks good although its class is open: a class that is not closed in holds, ramps or
    the stop marks all of those segments; open aborts mark every hold and ramp, for nobody knows
    how to leave it.
21. No rule, no segment, no prediction at all: the worst of nothing is NOT ASSESSED.
22. A ramp or the stop is judged by periodic states, although blades meet their stops and gusts
    pass: there each class asks for marched numbers (peak moments of the stops, contacts once they
    are left behind, peaks of hub moment and thrust), and a margin of the periodic solution or a
    number of a hold does not stand in.
23. An abort is judged for one cause, or from one hold only: the numbers are asked for every cause
    from every hold and ramp; one that is missing is a gap. What is bad in an abort counts against
    the segment where it begins, and a rule for ramps does not reach the aborts out of them.
24. An abort is said not to apply: with power cut and controls commanded or frozen it always does;
    the class of aborts is never closed by rows of which none was assessed.
25. A passage without power is judged by its rate, which nobody chooses: an unpowered stop and each
    abort that runs down through a keep-out band are asked for turns inside it. A rate does not
    tell the response either: every ramp, the stop and every abort are asked for the sway of the
    hub in each mode of the stand, inside a band or not.
26. A wind gate was computed for this very plan and the planned wind is above it in a sector:
    NO-GO; NOT ASSESSED where the gate ends because something was not assessed. The gate of another
    plan or version is never found, and lying inside a gate closes no class.
27. A number is said not to apply although there is one: only a rotor at rest has no harmonics;
    that a mode of the stand is not passed counts only where the plan's speeds, with the gauge's
    error, keep off its frequency with its allowance; a frequency that is not known is passed by
    whatever turns. A keep-out band that is entered has its own number. A stand file without a mode
    of the stand leaves open what ramps, the stop and aborts pass.
28. A blade mode seen from the stand is held against some of the stand's modes only: each of them
    is looked for by name, on both sides of rotor speed; a rule for rotor harmonics judges no such
    pair instead of setting it aside; a stand mode that does not count the rotor's mass takes the
    OK from its pairs; and damping exempts where that of the blade mode itself was assessed.
29. A mode has lost its name, or a harmonic its number, at the one hold that a rule reaches: what
    has a number anywhere in the run is looked for in every place of the rule. Of a teetering pair
    both motions are asked for.
30. A number over the whole card leaves out a keep-out band, or a mode of the stand: these are
    looked for there too.
"""

from __future__ import annotations

from typing import TYPE_CHECKING, Any

from planner.judge.case import ABORT, Case
from planner.judge.coverage import coverage
from planner.judge.findings import judge_rules
from planner.judge.hand_checks import hand_check_findings
from planner.judge.weather import wind_cap_findings
from planner.judge.wind_gate import gate_findings
from planner.model.results import Judgement, Verdict

if TYPE_CHECKING:
    from collections.abc import Mapping, Sequence

    from planner.model.plan import Plan, Segment
    from planner.model.results import Coverage, Finding, Predictions, Quantity


def judge(
    plan: Plan,
    segments: Sequence[Segment],
    vocabulary: Mapping[str, Quantity],
    predictions: Predictions,
    gate: Mapping[str, Any] | None = None,
) -> Judgement:
    """Judge a run against its rule book.

    Args:
        plan: the plan with its merged rule book.
        segments: the walk of the schedule, as ``planner.model.plan.segments`` gives it.
        vocabulary: the register of quantities.
        predictions: every predicted quantity by id.
        gate: the wind gate that is kept for this very plan; None: none is.

    Returns:
        Findings of the predicted rules in the book's order, then of the wind cap, then of the
        wind gate where there is one, then hand checks that disagree; coverage of every hazard
        class; the verdict of each segment (its worst row, or NOT ASSESSED where a class is open in
        its kind) and of the run (the worst of all).

    Raises:
        ValueError: a prediction whose columns differ in length or that is filed under another id.
    """
    case = Case(plan, {segment.id: segment for segment in segments}, vocabulary, predictions)
    judged = judge_rules(case)
    findings = (
        *(one.finding for one in judged),
        *wind_cap_findings(plan),
        *gate_findings(plan.site, gate),
        *hand_check_findings(vocabulary, predictions),
    )
    covered = coverage(case, judged)
    verdicts = [f.verdict for f in findings] + [c.verdict for c in covered]
    by_segment = {s.id: _segment(s, findings, covered) for s in segments}
    return Judgement(
        findings, covered, Verdict.worst([*verdicts, *by_segment.values()]), by_segment
    )


def _segment(
    segment: Segment, findings: Sequence[Finding], covered: Sequence[Coverage]
) -> Verdict:
    said = [
        Verdict(finding.segment_verdicts[segment.id])
        for finding in findings
        if segment.id in finding.segment_verdicts
    ]
    parts = {segment.kind} if segment.kind == "stop" else {segment.kind, ABORT}
    open_class = any(c.where in parts and not c.closed_by for c in covered)
    return Verdict.worst([*said, Verdict.NOT_ASSESSED] if open_class else said)
