from __future__ import annotations

from dataclasses import replace
from typing import TYPE_CHECKING

import pytest

from planner.explore import wind_gate as subject
from planner.explore.gate_trial import Desk, Fail, Trial, Tried
from planner.explore.wind_gate import wind_gate, winds_to_try
from planner.judge.wind_gate import gate_verdict
from planner.model.canonical import digest
from planner.model.plan import Plan, Sector
from planner.model.results import Verdict
from tests.judge.conftest import plan as invented

if TYPE_CHECKING:
    from collections.abc import Sequence

DESK = Desk({})
EXCEEDED = Fail("up-stop-peak at 1.1r: too much", is_exceeded=True)
UNKNOWN = Fail("lag-travel at stop: not converged", is_exceeded=False)


def windy(**site) -> Plan:
    """Mean 6 m/s, gust 9 m/s, anemometer error 0.5 m/s, caps 12 and 17 m/s."""
    whole = invented()
    return replace(whole, site=replace(whole.site, **site))


def sector(name: str, **changes) -> Sector:
    return replace(Sector(name, 0.0, 3.0, 0.0, 0.1, None, ""), **changes)


@pytest.fixture
def marches(monkeypatch):
    """A marcher that fails above a mean wind of each sector; what it was asked is kept."""

    def install(limit, fail: Fail = EXCEEDED):
        asked: list[Trial] = []

        class Team:
            def __init__(self, plan: Plan, _: Desk) -> None:
                self.plan = plan

            def __enter__(self) -> Team:
                return self

            def __exit__(self, *_: object) -> None: ...

            def __call__(self, trials: Sequence[Trial]) -> list[Tried]:
                return [tried(trial) for trial in trials]

        def tried(trial: Trial) -> Tried:
            asked.append(trial)
            limits = [limit if isinstance(limit, float) else limit[s] for s in trial.sectors]
            fails = (fail,) if trial.wind.mean_m_s > min(limits) else ()
            return Tried(trial, fails, () if fails else ("near the limit",))

        monkeypatch.setattr(subject, "Team", Team)
        return asked

    return install


@pytest.mark.parametrize(
    ("limit", "mean", "gust", "first", "verdict"),
    [
        (8.2, 7.5, 10.5, 9.0, "GO"),
        (6.4, 5.5, 8.5, 7.0, "NO-GO"),  # the planned 6 m/s less the anemometer's error fail
        (0.5, None, None, 1.0, "NO-GO"),  # calm alone passes, and no reading is as good as that
        (-1.0, None, None, 0.0, "NO-GO"),
        (99.0, 11.5, 14.5, None, "GO"),
    ],
)
def test_gate_is_what_passes_less_the_anemometers_error(
    marches, limit, mean, gust, first, verdict
):
    marches(limit)
    gate = wind_gate(windy(), DESK)
    (found,) = gate["sectors"]
    assert (found["name"], found["mean_m_s"], found["gust_m_s"]) == ("all round", mean, gust)
    assert found["first_failure_mean_m_s"] == first
    assert gate["verdict"].startswith(f"{verdict}: ")
    assert gate_verdict(gate).value == verdict
    at_cap = first is None
    words = "the rule book's cap on mean wind" if at_cap else EXCEEDED.words
    assert (found["at_cap"], found["limited_by"]) == (at_cap, words)


@pytest.mark.parametrize(
    ("book", "mean", "words"),
    [
        ({"wind_mean_cap_m_s": 7.3}, 6.8, "the rule book's cap on mean wind"),
        ({"wind_gust_cap_m_s": 10.5}, 7.0, "the rule book's cap on gusts"),
        ({"wind_gust_cap_m_s": 2.0}, None, "the rule book's cap on gusts"),
    ],
)
def test_gate_is_never_above_the_cap_with_the_error_on_top(marches, book, mean, words):
    asked = marches(99.0)
    whole = windy()
    whole = replace(whole, rule_book=replace(whole.rule_book, **book))
    (found,) = wind_gate(whole, DESK)["sectors"]
    assert found["mean_m_s"] == (None if mean is None else pytest.approx(mean))
    assert (found["limited_by"], found["at_cap"]) == (words, True)
    cap_m_s = (whole.rule_book.wind_mean_cap_m_s, whole.rule_book.wind_gust_cap_m_s)
    assert all(t.wind.mean_m_s <= cap_m_s[0] and t.wind.gust_m_s <= cap_m_s[1] for t in asked)


@pytest.mark.parametrize("cap", [None, float("nan")])
def test_without_a_cap_there_is_no_gate(marches, cap):
    asked = marches(99.0)
    whole = windy()
    book = replace(whole.rule_book, wind_gust_cap_m_s=cap)
    gate = wind_gate(replace(whole, rule_book=book), DESK)
    assert gate["verdict"].startswith("NOT ASSESSED: ")
    assert "the rule book: it states no cap" in gate["sectors"][0]["limited_by"]
    assert (asked, gate["levels"]) == ([], [])


def test_what_was_not_assessed_ends_the_gate_and_is_told_so(marches):
    marches(3.0, UNKNOWN)
    gate = wind_gate(windy(), DESK)
    assert gate_verdict(gate) is Verdict.NOT_ASSESSED
    assert gate["sectors"][0]["limited_by"] == UNKNOWN.words
    assert wind_gate(windy(wind_mean_m_s=2.0, wind_gust_m_s=5.0), DESK)["verdict"].startswith("GO")


def test_each_sector_has_its_gate_and_like_sectors_are_tried_once(marches):
    sectors = (
        sector("field"),
        sector("wood", turbulence_intensity=0.3),
        sector("meadow"),
        sector("hall", shelter=0.6, shelter_source="survey"),
    )
    asked = marches({"field": 9.0, "wood": 4.0, "hall": 99.0})
    gate = wind_gate(windy(sectors=sectors), DESK)
    means = {found["name"]: found["mean_m_s"] for found in gate["sectors"]}
    assert means == {"field": 8.5, "wood": 3.5, "meadow": 8.5, "hall": 11.5}
    assert "meadow" not in {name for trial in asked for name in trial.sectors}
    assert {level["sector"] for level in gate["levels"]} == set(means)
    assert gate["verdict"].startswith(
        "NO-GO: 6 m/s mean and 9 m/s gust against the gate from wood: 3.5 m/s mean and 6.5 m/s"
    )


def test_what_is_kept_tells_plan_levels_and_their_fineness(marches):
    marches(2.0)
    whole = windy()
    gate = wind_gate(whole, DESK, 1.5)
    assert gate["kept_for"] == digest(whole)
    assert (gate["step_m_s"], gate["averaging_time_s"]) == (1.5, 600.0)
    assert gate["anemometer_error_m_s"] == 0.5
    assert gate["cap"] == {"mean_m_s": 12.0, "gust_m_s": 17.0}
    assert gate["planned"] == {"mean_m_s": 6.0, "gust_m_s": 9.0}
    levels = [
        tuple(level[k] for k in ("mean_m_s", "gust_m_s", "passes", "is_full", "fails"))
        for level in gate["levels"]
    ]
    assert levels == [
        (0.0, 0.0, True, False, []),
        (1.5, 4.5, True, True, []),
        (3.0, 6.0, False, False, [EXCEEDED.words]),
        (4.5, 7.5, False, False, [EXCEEDED.words]),  # tried ahead
    ]
    assert gate["levels"][0]["cautions"] == ["near the limit"]
    assert gate["sectors"][0]["cautions"] == ["near the limit"]


def test_winds_go_up_to_the_cap_and_a_plan_without_gusts_has_none():
    winds = winds_to_try(windy(wind_gust_m_s=6.0), 1.75)
    means = [0.0, 1.75, 3.5, 5.25, 7.0, 8.75, 10.5, 12.0]
    assert [(wind.mean_m_s, wind.gust_m_s) for wind in winds] == [(m, m) for m in means]


@pytest.mark.parametrize("step", [0.0, -1.0, 0.001, 6.0, float("nan"), float("inf")])
def test_a_step_that_leads_nowhere_is_refused(step):
    with pytest.raises(
        ValueError, match=r"step: expected a wind speed from 0.12 m/s to 2 m/s, found"
    ):
        wind_gate(windy(), DESK, step)
