from __future__ import annotations

import math
from dataclasses import replace

import pytest

from planner.explore import gate_trial
from planner.explore.gate_trial import Desk, Trial, Wind, judged, plan_in, tried
from planner.model.plan import Sector
from planner.model.results import Status
from tests.judge.conftest import Bench, document, plan, predictions

RAMP = {"segment": "1.2r", "state": ""}
ABORT = {"segment": "1.3h", "state": "controls frozen"}


@pytest.fixture
def bench() -> Bench:
    return Bench(plan())


def words(bench: Bench) -> list[tuple[str, bool]]:
    return [(fail.words, fail.is_exceeded) for fail in judged(bench.case)[0]]


def test_a_run_inside_its_rules_passes(bench):
    assert judged(bench.case) == ((), ())


def test_an_exceeded_limit_fails_once_a_rule_and_part_and_comes_first(bench):
    bench.flag("lag_peak", bench.rows("lag_peak", segment="stop"), Status.NOT_CONVERGED)
    for place in (RAMP, ABORT):
        bench.put("up_stop_peak_moment", bench.rows("up_stop_peak_moment", **place), high=700.0)
    assert words(bench) == [
        ("up-stop-peak at 1.2r: 700 N m against limit at most 594 N m", True),
        (
            "up-stop-peak at abort from 1.3h, controls frozen: 700 N m against limit at most "
            "594 N m",
            True,
        ),
        (
            "lag-travel at stop: not converged: why (for information: 4 deg, within the limit "
            "5.6 deg)",
            False,
        ),
    ]


@pytest.mark.parametrize(
    ("quantity", "where"), [("droop_stop_clearance", "1.2h"), ("blade_clearance", "1.2h")]
)
def test_holds_are_not_the_gates_affair(bench, quantity, where):
    rows = bench.rows(quantity, segment=where, state="")
    bench.put(quantity, rows, value=-1.0, low=-1.0)
    assert words(bench) == []


@pytest.mark.parametrize(
    ("status", "value"),
    [(Status.NOT_COMPUTED, 1.0), (Status.OUTSIDE_VALIDITY, 1.0), (Status.OK, math.nan)],
)
def test_what_is_not_assessed_fails_with_its_words(bench, status, value):
    rows = bench.rows("hub_moment_peak", **ABORT)
    bench.put("hub_moment_peak", rows, value=value)
    bench.flag("hub_moment_peak", rows, status)
    (fail,) = judged(bench.case)[0]
    assert fail.words.startswith("hub-moment-peak at abort from 1.3h, controls frozen: ")
    assert not fail.is_exceeded


def test_a_document_stands_in_for_a_run_but_computes_no_gate(bench):
    bench.change(documents=(*bench.plan.documents, document("aborts", "abort")))
    bench.flag("lag_peak", bench.rows("lag_peak", **ABORT), Status.NOT_COMPUTED)
    (fail,) = judged(bench.case)[0]
    assert fail.words.endswith("outside document DOC aborts computes no gate")


def test_a_missing_abort_fails(bench):
    found = bench.predictions["lag_peak"]
    kept = [i for i in range(len(found.labels)) if i not in bench.rows("lag_peak", **ABORT)]
    columns = ("value", "low", "high", "speed_rad_s", "hand")
    bench.predictions["lag_peak"] = replace(
        found,
        **{name: getattr(found, name)[kept] for name in columns},
        **{n: tuple(getattr(found, n)[i] for i in kept) for n in ("labels", "status", "reasons")},
    )
    assert "nothing was predicted for the abort from 1.3h" in words(bench)[0][0]


@pytest.mark.parametrize(
    ("spoil", "expected"),
    [
        ({"rules": ()}, "no rule judges droop_stop_peak_moment at 1.1r"),
        (None, "no rule judges up_stop_peak_moment at the abort from 1.1r, controls commanded"),
    ],
)
def test_a_thin_rule_book_opens_no_gate(bench, spoil, expected):
    if spoil is None:
        bench.change_rule("up-stop-peak", where=("ramp", "stop"))
    else:
        bench.change_book(**spoil)
    assert (expected, False) in words(bench)


def test_a_rule_that_matches_nothing_fails(bench):
    bench.add_rule(id="late", quantity="lag_peak", where=("ramp",), unit="deg",
                   speed_range=replace(bench.rules[0].speed_range, from_rad_s=500.0))  # fmt: skip
    assert words(bench)[0][0].startswith("late: the rule matches nothing")


def test_a_caution_passes_and_is_told(bench):
    rows = bench.rows("droop_stop_peak_moment", **RAMP)
    bench.put("droop_stop_peak_moment", rows, high=350.0)
    fails, cautions = judged(bench.case)
    assert fails == ()
    assert cautions == ("droop-stop-peak at 1.2r: 350 N m against caution level at most 300 N m",)


def test_a_trial_is_predicted_and_judged_in_its_own_wind(monkeypatch):
    sectors = tuple(Sector(name, 0.0, 3.0, 0.0, 0.1, None, "") for name in ("field", "wood"))
    whole = plan()
    whole = replace(whole, site=replace(whole.site, sectors=sectors))
    asked = []

    def predict(windy, _walk, requests, *_):
        asked.append((windy.site, requests.is_thrifty))
        return predictions(windy)

    monkeypatch.setattr(gate_trial, "predict", predict)
    for is_full in (False, True):
        trial = Trial(Wind(4.0, 7.0), ("wood",), is_full=is_full)
        found = tried(whole, trial, Desk({}))
        assert found.passes
        assert found.trial is trial
        site, is_thrifty = asked[-1]
        assert is_thrifty is not is_full
        assert site == plan_in(whole, trial).site
        assert (site.wind_mean_m_s, site.wind_gust_m_s, site.anemometer_error_m_s) == (4.0, 7.0, 0)
        assert [sector.name for sector in site.sectors] == ["wood"]
