"""Better speeds for holds near a resonance: what is told keeps every rule when it is planned."""

from __future__ import annotations

import dataclasses
import functools
import math
from typing import TYPE_CHECKING, NamedTuple

import pytest

from planner.explore import speed_advice
from planner.explore.speed_advice import QUANTITIES, Advice, advise
from planner.judge.judge import judge
from planner.model.plan import KeepOut, Plan, Window, segments
from planner.model.results import Verdict
from planner.model.rotor import HingelessHub
from planner.predict.register import REGISTER
from planner.rotor.setup import hub_freedom
from tests.conftest import read_sample

if TYPE_CHECKING:
    from collections.abc import Callable, Mapping

    from planner.model.results import Prediction

    Predict = Callable[..., Mapping[str, Prediction]]

RPM = 2.0 * math.pi / 60.0
BAND = KeepOut("X", 751.0 * RPM, 769.0 * RPM, "test")
BETWEEN_RULES = 832.0
"""Just above 85 % of the card's speed, from where flap spacing is asked."""


class Case(NamedTuple):
    """A hold [rpm], a rule that it does not satisfy, and where better speeds are told."""

    rpm: float
    rule: str
    sides: str


CASES = (
    Case(760.0, "keep-out-distance", "below above"),
    Case(BETWEEN_RULES, "flap-low-spacing", ""),
    Case(930.0, "torsion-spacing", "above"),
)
SOUND = (0.0, 250.0, 970.0)


@functools.cache
def sample_plan() -> Plan:
    """The hingeless sample with its equivalent hinge stated, so that it is found once."""
    plan = read_sample("hingeless-model")
    found = hub_freedom(plan.rotor)
    assert isinstance(plan.rotor.hub, HingelessHub)
    hub = dataclasses.replace(
        plan.rotor.hub,
        equivalent_hinge_m=found.hinge_m,
        equivalent_spring_N_m_rad=found.spring_N_m_rad,
    )
    return dataclasses.replace(plan, rotor=dataclasses.replace(plan.rotor, hub=hub))


def held_at(*rpm: float) -> Plan:
    """The sample with holds at these speeds and one more keep-out band."""
    plan = sample_plan()
    step = dataclasses.replace(plan.blocks[0].steps[1], window=Window(4.0 * RPM, 0.005))
    steps = tuple(dataclasses.replace(step, speed_rad_s=speed * RPM) for speed in rpm)
    block = dataclasses.replace(plan.blocks[0], steps=steps)
    return dataclasses.replace(plan, blocks=(block,), keep_outs=(*plan.keep_outs, BAND))


@pytest.fixture(autouse=True)
def _short_search(monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr(speed_advice, "REACH", 0.035)


@pytest.fixture(scope="module")
def advised() -> dict[float, Advice]:
    """Advice by planned speed [rpm], of one plan with all cases."""
    with pytest.MonkeyPatch.context() as patch:
        patch.setattr(speed_advice, "REACH", 0.035)
        found = advise(held_at(*SOUND, *(case.rpm for case in CASES)))
    return {round(one.speed_rad_s / RPM, 6): one for one in found}


def told_rpm(advice: Advice) -> dict[str, float]:
    """The speeds that are told [rpm], to the decimals that are printed."""
    found = {"below": advice.below, "above": advice.above}
    return {k: round(v.speed_rad_s / RPM, 1) for k, v in found.items() if v is not None}


def verdicts_of(plan: Plan, predict: Predict) -> dict[float, Verdict]:
    """What all rules of frequency say of each hold [rpm] of a plan that is predicted anew."""
    found, walk = predict(plan, "schedule", "holds", "modes"), segments(plan)
    quantity_of = {rule.id: rule.quantity for rule in plan.rule_book.rules}
    findings = [
        finding
        for finding in judge(plan, walk, REGISTER, found).findings
        if quantity_of.get(finding.rule) in QUANTITIES
    ]
    return {
        round(hold.to_rad_s / RPM, 6): Verdict.worst(
            [
                Verdict(f.segment_verdicts[hold.id])
                for f in findings
                if hold.id in f.segment_verdicts
            ]
        )
        for hold in walk
        if hold.kind == "hold"
    }


@pytest.mark.parametrize("case", CASES, ids=lambda case: f"{case.rpm:g} rpm")
def test_hold_is_told_with_its_reasons_and_what_lies_beside_it(advised, case):
    advice = advised[case.rpm]
    assert advice.verdict is Verdict.NO_GO
    assert case.rule in advice.reasons
    told = told_rpm(advice)
    assert " ".join(told) == case.sides
    assert told.get("below", 0.0) < case.rpm < told.get("above", math.inf)


def test_holds_that_are_well_are_not_told(advised):
    assert advised.keys() == {case.rpm for case in CASES}


def test_told_speeds_keep_every_rule_when_they_are_planned(advised, run_predict):
    better = {
        round(one.speed_rad_s / RPM, 6): one.verdict
        for advice in advised.values()
        for one in (advice.below, advice.above)
        if one is not None
    }
    assert all(rpm == pytest.approx(round(rpm, 1), abs=1e-6) for rpm in better)
    found = verdicts_of(held_at(*sorted(better), 970.0), run_predict)
    assert {rpm: found[rpm] for rpm in better} == better
    assert set(found.values()) <= {Verdict.GO, Verdict.CAUTION}


def test_hold_in_a_band_is_told_the_speeds_beside_it(advised):
    """By hand: window 4 rpm, gauge 3 rpm, and 0.5 % of 1000 rpm that the rule asks for."""
    advice = advised[760.0]
    assert advice.reasons == ("keep-out-distance",)
    told = told_rpm(advice)
    assert 751.0 - 12.0 - 1.0 < told["below"] <= 751.0 - 12.0
    assert 769.0 + 12.0 <= told["above"] < 769.0 + 12.0 + 1.0


def test_rule_that_ends_above_a_speed_makes_it_no_better(advised, run_predict):
    """Below 85 % of the card's speed no rule asks; the mode is as near as before."""
    plan = held_at(*SOUND, 805.0)
    assert verdicts_of(plan, run_predict)[805.0] is Verdict.GO
    assert advised[BETWEEN_RULES].below is None


def test_hold_whose_rules_are_not_assessed_is_told_no_other_speed():
    plan = held_at(930.0)
    modes = tuple(dataclasses.replace(mode, rotor_fitted=None) for mode in plan.stand.modes)
    stand = dataclasses.replace(plan.stand, modes=modes)
    (advice,) = advise(dataclasses.replace(plan, stand=stand))
    assert advice.verdict is not Verdict.GO
    assert {"torsion-spacing", "stand-spacing"} <= set(advice.reasons)
    assert (advice.below, advice.above) == (None, None)
    assert any("whether the rotor's mass was fitted" in reason for reason in advice.open_for)


def test_plan_where_all_is_well_needs_no_advice():
    assert advise(held_at(*SOUND)) == ()


def test_no_speed_is_told_that_the_drive_may_not_have(monkeypatch):
    """Were all speeds well, the next step to either side would be told: 0.1 % of 1000 rpm."""
    monkeypatch.setattr(
        "planner.explore.speed_advice._Desk.verdicts",
        lambda _desk, _hold, speeds, _real: [Verdict.GO] * len(speeds),
    )
    plan = held_at(930.0)
    (advice,) = advise(plan)
    assert told_rpm(advice) == {"below": 929.0, "above": 931.0}
    drive = dataclasses.replace(plan.stand.drive, maximum_rad_s=930.5 * RPM)
    stand = dataclasses.replace(plan.stand, drive=drive)
    (advice,) = advise(dataclasses.replace(plan, stand=stand))
    assert told_rpm(advice) == {"below": 929.0}


def test_rule_that_matches_nothing_leaves_every_hold_open():
    """A stand without a shaft mode: no hold can be said to satisfy the rule of shafts."""
    plan = held_at(250.0, 970.0)
    stand = dataclasses.replace(
        plan.stand,
        drive_train=None,
        modes=tuple(m for m in plan.stand.modes if m.family != "shaft"),
    )
    told = advise(dataclasses.replace(plan, stand=stand))
    holds = [s.id for s in segments(plan) if s.kind == "hold"]
    assert [one.segment for one in told] == holds
    for one in told:
        assert one.verdict is Verdict.NOT_ASSESSED
        assert "shaft-spacing" in one.reasons
        assert one.open_for
        assert (one.below, one.above) == (None, None)
