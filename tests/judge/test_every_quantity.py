"""For every quantity of the register: what is not assessed stops the card."""

from __future__ import annotations

import dataclasses

import numpy as np
import pytest

from planner.judge.judge import judge
from planner.model.plan import segments
from planner.model.results import Status, Verdict
from planner.model.rules import Limit, Rule, Where
from planner.predict.register import REGISTER

NAME = "articulated-run-up"


def generous_rule(quantity):
    """A rule that every number would pass."""
    where: tuple[Where, ...] = ("run",)
    if "segment" in quantity.axes:
        where = ("hold", "ramp", "stop")
    if "state" in quantity.axes:
        where = ("hold", "ramp", "stop", "abort")
    return Rule(
        id="generous", kind="predicted", hazard_class="loads", title="x", why="x", basis="x",
        where=where, quantity=quantity.id, sense="at most", limit=Limit(constant=1e30),
        unit=quantity.unit,
    )  # fmt: skip


def finding_of(plan, predictions, quantity):
    book = dataclasses.replace(plan.rule_book, rules=(generous_rule(quantity),))
    plan = dataclasses.replace(plan, rule_book=book, documents=())
    judgement = judge(plan, segments(plan), REGISTER, predictions)
    assert judgement.verdict.rank >= Verdict.NOT_ASSESSED.rank
    return next(f for f in judgement.findings if f.rule == "generous")


@pytest.mark.parametrize("quantity", REGISTER.values(), ids=lambda q: q.id)
def test_a_missing_quantity_is_not_assessed(sample, predicted, quantity):
    rest = {key: value for key, value in predicted(NAME).items() if key != quantity.id}
    finding = finding_of(sample(NAME), rest, quantity)
    assert finding.verdict is Verdict.NOT_ASSESSED
    assert "was not predicted" in finding.reason


@pytest.mark.parametrize(
    "status", [s for s in Status if s not in {Status.OK, Status.NOT_APPLICABLE}]
)
@pytest.mark.parametrize("quantity", REGISTER.values(), ids=lambda q: q.id)
def test_a_quantity_without_standing_is_not_assessed(sample, predicted, quantity, status):
    found = predicted(NAME)[quantity.id]
    spoilt = dataclasses.replace(
        found,
        status=(status,) * len(found.labels),
        reasons=("spoilt",) * len(found.labels),
    )
    finding = finding_of(sample(NAME), {**predicted(NAME), quantity.id: spoilt}, quantity)
    assert finding.verdict is Verdict.NOT_ASSESSED


@pytest.mark.parametrize("quantity", REGISTER.values(), ids=lambda q: q.id)
def test_one_spoilt_row_is_enough(sample, predicted, quantity):
    found = predicted(NAME)[quantity.id]
    if not found.labels:
        assert quantity.id == "crossing_speed"
        return
    status = list(found.status)
    status[-1] = Status.NOT_CONVERGED
    spoilt = dataclasses.replace(found, status=tuple(status))
    finding = finding_of(sample(NAME), {**predicted(NAME), quantity.id: spoilt}, quantity)
    assert finding.verdict is Verdict.NOT_ASSESSED


@pytest.mark.parametrize("quantity", REGISTER.values(), ids=lambda q: q.id)
@pytest.mark.parametrize("number", [np.nan, np.inf, -np.inf])
def test_an_unreal_number_is_not_assessed(sample, predicted, quantity, number):
    found = predicted(NAME)[quantity.id]
    spoilt = dataclasses.replace(
        found,
        status=(Status.OK,) * len(found.labels),
        high=np.full_like(found.high, number),
    )
    finding = finding_of(sample(NAME), {**predicted(NAME), quantity.id: spoilt}, quantity)
    assert finding.verdict is Verdict.NOT_ASSESSED
