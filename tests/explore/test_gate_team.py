"""A tiny run of the hingeless sample, marched in winds for real."""

from __future__ import annotations

from dataclasses import replace
from typing import TYPE_CHECKING

import pytest

from planner.explore import gate_team
from planner.explore.gate_team import Team
from planner.explore.gate_trial import Desk, Trial, Tried, Wind, tried

if TYPE_CHECKING:
    from planner.model.plan import Plan

WINDS = (Wind(11.0, 12.0), Wind(31.0, 32.0))
TRIALS = [Trial(wind, ("all round",)) for wind in WINDS]


@pytest.fixture
def tiny(sample) -> Plan:
    plan: Plan = sample("hingeless-model")
    block = plan.blocks[0]
    step = replace(block.steps[0], ramp_time_s=4.0)
    return replace(
        plan,
        blocks=(replace(block, repeat=1, steps=(step,)),),
        shutdown=replace(plan.shutdown, time_s=4.0),
        site=replace(plan.site, turbulence=None),
    )


def test_winds_are_tried_side_by_side_with_the_same_outcome(tiny):
    told: list[tuple[str, float | None]] = []
    with Team(tiny, Desk({}, lambda text, share=None, /: told.append((text, share))), 2) as team:
        good, beyond = team(TRIALS)
    assert good.passes
    assert beyond == tried(tiny, TRIALS[1], Desk({}))
    assert "gust: expected up to 30 m/s at the hub" in beyond.fails[0].words
    assert not beyond.fails[0].is_exceeded
    words = "trying 11 m/s and 31 m/s"
    assert told == [(words, 0.0), (words, 0.5), (words, 1.0)]


@pytest.mark.parametrize(("trials", "size"), [(TRIALS[:1], 2), (TRIALS, 1)])
def test_one_wind_or_one_core_calls_nobody(tiny, monkeypatch, trials, size):
    def fake(_plan: Plan, trial: Trial, desk: Desk) -> Tried:
        desk.progress("marching ramps", 0.5)
        return Tried(trial, ())

    monkeypatch.setattr(gate_team, "tried", fake)
    monkeypatch.setattr(gate_team, "ProcessPoolExecutor", None)
    told: list[str] = []
    with Team(tiny, Desk({}, lambda text, _=None, /: told.append(text)), size) as team:
        assert [one.trial for one in team(trials)] == trials
    assert told == [f"trying {t.wind.mean_m_s:g} m/s: marching ramps" for t in trials]


def test_where_no_process_can_start_winds_are_tried_one_after_the_other(tiny, monkeypatch):
    def refuse(*_: object, **__: object) -> None:
        raise OSError

    monkeypatch.setattr(gate_team, "ProcessPoolExecutor", refuse)
    monkeypatch.setattr(gate_team, "tried", lambda _, trial, __: Tried(trial, ()))
    with Team(tiny, Desk({}), 2) as team:
        assert [one.trial for one in team(TRIALS)] == TRIALS
