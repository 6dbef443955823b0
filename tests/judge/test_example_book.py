"""The shipped example book: every rule turns the verdict, no quantity can be missed."""

import math
import tomllib
from pathlib import Path

import numpy as np
import pytest

from planner import units
from planner.model.results import Status, Verdict
from planner.model.rules import HAZARD_CLASSES
from planner.predict.register import REFERENCES, REGISTER
from tests.judge.conftest import TWO_HOLDS, fresh

BOOK = Path(__file__).parents[2] / "rules" / "example_book.toml"

REFERENCE_NUMBERS = {
    "flap_travel": math.radians(23.0),
    "droop_stop_moment_rating": 600.0,
    "up_stop_moment_rating": 900.0,
    "lag_stop_moment_rating": 500.0,
    "lag_travel": math.radians(7.0),
    "blade_radius": 5.0,
    "root_moment_rating": 1_000.0,
    "full_speed": 40.0,
    "stand_thrust_rating": 20_000.0,
    "root_force_rating": 100_000.0,
    "stand_hub_moment_rating": 3_000.0,
    "stand_hub_amplitude_rating": 0.005,
    "lowest_design_or_proven_speed": 40.0,
    "drive_maximum_speed": 45.0,
    "drive_torque_rating": 4_000.0,
    "drive_power_rating": 150_000.0,
}
OF_HINGELESS = {"root_flap_moment", "root_flap_peak_moment"}
EPS = 1e-6
WITHOUT_STANDING = [s for s in Status if s not in {Status.OK, Status.NOT_APPLICABLE}]


def expected_number(stated) -> float:
    if isinstance(stated, int):
        return float(stated)
    if isinstance(stated, str):
        number, unit = stated.split(" ", 1)
        return units.to_si(float(number), unit)
    share, _ = units.parse(stated["share"], "share")
    return share * REFERENCE_NUMBERS[stated["of"]]


@pytest.fixture
def bench():
    """Two holds are enough for rules taken one by one."""
    return fresh("articulated", TWO_HOLDS)


@pytest.fixture
def hingeless_bench():
    return fresh("hingeless", TWO_HOLDS)


@pytest.fixture
def ready(bench, hingeless_bench, book_rule):
    """The bench with a hub to which the rule applies, its rule, and one row it covers."""
    chosen = hingeless_bench if book_rule["quantity"] in OF_HINGELESS else bench
    kinds = {s.id: s.kind for s in chosen.segments} | {"": "run"}
    rows = [
        i
        for i, labels in enumerate(chosen.predictions[book_rule["quantity"]].labels)
        if ("abort" if labels.state else kinds[labels.segment]) in book_rule["where"]
        and chosen.predictions[book_rule["quantity"]].status[i] is Status.OK
        and labels.mode.startswith(book_rule.get("family", ""))
        and (not book_rule.get("orders") or labels.mode[-1] == str(book_rule["orders"][-1]))
        and (not book_rule.get("harmonics") or int(labels.harmonic) in book_rule["harmonics"])
    ]
    return chosen, book_rule, rows[-1:]


def beyond_and_inside(rule) -> tuple[float, float]:
    """Numbers just beyond and just inside a rule's limit."""
    limit = expected_number(rule["limit"])
    step = EPS * (abs(limit) or 1.0)
    return (
        (limit + step, limit - step)
        if rule["sense"] == "at most"
        else (limit - step, limit + step)
    )


def verdict_at(ready, number: float) -> Verdict:
    bench, rule, row = ready
    bench.put(rule["quantity"], row, value=number, low=number, high=number)
    return Verdict(bench.finding(rule["id"]).verdict)


def test_safe_run_is_go(bench):
    judgement = bench.judge()
    assert [f for f in judgement.findings if f.verdict is not Verdict.GO] == []
    assert [c for c in judgement.coverage if c.verdict is not Verdict.GO] == []
    assert judgement.verdict is Verdict.GO
    assert set(judgement.segment_verdicts.values()) == {Verdict.GO}


def test_safe_hingeless_run_is_go(hingeless_bench):
    judgement = hingeless_bench.judge()
    assert judgement.verdict is Verdict.GO
    assert hingeless_bench.covered("stops", "run").closed_by == "droop-rest-moment"
    stops = hingeless_bench.finding("droop-clearance-angle")
    assert (stops.verdict, stops.tested) == (Verdict.GO, 0)
    assert "does not apply: the hub has no such part" in stops.reason
    assert hingeless_bench.covered("stops", "hold").closed_by == "root-flap-moment"


def test_beyond_the_limit_is_no_go(ready):
    rule = ready[1]
    limit = expected_number(rule["limit"])
    beyond, _ = beyond_and_inside(rule)
    assert verdict_at(ready, beyond) is Verdict.NO_GO
    assert ready[0].judge().verdict is Verdict.NO_GO
    finding = ready[0].finding(rule["id"])
    assert finding.limit == pytest.approx(limit)
    assert finding.margin == pytest.approx(-abs(beyond - limit), rel=1e-3)


def test_quantity_dangerous_both_ways_is_judged_by_size(ready):
    bench, rule, _ = ready
    negative = -beyond_and_inside(rule)[0]
    both = REGISTER[rule["quantity"]].danger == "both"
    assert both is (rule["quantity"] in {"thrust", "torque", "power", "thrust_peak"})
    if rule["sense"] == "at most":
        assert (verdict_at(ready, negative) is Verdict.NO_GO) is both
    if both:
        assert bench.finding(rule["id"]).margin < 0.0


def test_inside_the_limit_is_not_no_go(ready):
    rule = ready[1]
    limit = expected_number(rule["limit"])
    _, inside = beyond_and_inside(rule)
    wanted = Verdict.CAUTION if "caution" in rule else Verdict.GO
    assert verdict_at(ready, inside) is wanted
    assert verdict_at(ready, limit) is wanted


def test_caution_level_turns_go_into_caution(ready):
    rule = ready[1]
    if "caution" not in rule:
        assert "caution_acceptor" not in rule
        return
    caution = expected_number(rule["caution"])
    factor = 1.0 + EPS if rule["sense"] == "at most" else 1.0 - EPS
    assert verdict_at(ready, caution * factor) is Verdict.CAUTION
    assert verdict_at(ready, caution / factor) is Verdict.GO
    assert rule["caution_acceptor"]


def test_only_the_allowance_beyond_the_limit_is_no_go(ready):
    bench, rule, row = ready
    end = "high" if rule["sense"] == "at most" else "low"
    bench.put(rule["quantity"], row, **{end: beyond_and_inside(rule)[0]})
    assert bench.finding(rule["id"]).verdict is Verdict.NO_GO


@pytest.mark.parametrize(
    ("column", "number"),
    [
        ("value", math.nan),
        ("low", math.nan),
        ("high", math.nan),
        ("low", -math.inf),
        ("high", math.inf),
    ],
)
def test_number_that_is_not_finite_is_not_assessed(ready, column, number):
    bench, rule, row = ready
    bench.put(rule["quantity"], row, **{column: number})
    assert bench.finding(rule["id"]).verdict is Verdict.NOT_ASSESSED
    assert column != "value" or bench.judge().verdict is Verdict.NOT_ASSESSED


@pytest.mark.parametrize("status", WITHOUT_STANDING)
def test_status_that_is_not_ok_is_not_assessed(ready, status):
    bench, rule, row = ready
    bench.flag(rule["quantity"], row, status, "grid too coarse")
    finding = bench.finding(rule["id"])
    assert finding.verdict is Verdict.NOT_ASSESSED
    assert f"{status.value}: grid too coarse" in finding.reason
    once = status is Status.OUTSIDE_VALIDITY
    assert not once or bench.judge().verdict is Verdict.NOT_ASSESSED


@pytest.fixture
def chosen(used_quantity, bench, hingeless_bench):
    """The bench with a hub that has the quantity."""
    return hingeless_bench if used_quantity in OF_HINGELESS else bench


def test_missing_quantity_is_not_assessed(used_quantity, chosen):
    del chosen.predictions[used_quantity]
    assert chosen.judge().verdict is Verdict.NOT_ASSESSED


def test_quantity_without_rows_is_not_assessed(used_quantity, chosen):
    chosen.drop(used_quantity, chosen.rows(used_quantity))
    assert chosen.judge().verdict is Verdict.NOT_ASSESSED


@pytest.mark.parametrize("status", [Status.NOT_CONVERGED, Status.OUTSIDE_VALIDITY])
def test_study_that_refused_as_a_whole_is_not_assessed(used_quantity, chosen, status):
    chosen.drop(used_quantity, chosen.rows(used_quantity)[1:])
    chosen.flag(used_quantity, [0], status, "refused")
    old = chosen.predictions[used_quantity]
    blank = type(old.labels[0])()
    chosen.predictions[used_quantity] = type(old)(
        **{**vars(old), "labels": (blank,), "value": np.array([math.nan])}
    )
    judgement = chosen.judge()
    assert judgement.verdict is Verdict.NOT_ASSESSED
    if "segment" in REGISTER[used_quantity].axes:
        assert Verdict.NOT_ASSESSED in judgement.segment_verdicts.values()


def test_each_segment_left_out_is_not_assessed(used_quantity, chosen):
    for segment in {label.segment for label in chosen.predictions[used_quantity].labels} - {""}:
        kept = dict(chosen.predictions)
        chosen.drop(used_quantity, chosen.rows(used_quantity, segment=segment))
        quantity_rules = [r for r in chosen.plan.rule_book.rules if r.quantity == used_quantity]
        kind = next(s.kind for s in chosen.segments if s.id == segment)
        if any(kind in r.where for r in quantity_rules):
            judgement = chosen.judge()
            assert judgement.verdict is Verdict.NOT_ASSESSED, segment
            assert judgement.segment_verdicts[segment] is Verdict.NOT_ASSESSED
        chosen.predictions = kept


def test_book_refers_to_known_ids_only(bench):
    for rule in bench.plan.rule_book.rules:
        assert rule.hazard_class in HAZARD_CLASSES
        if rule.kind == "predicted":
            assert rule.quantity in REGISTER
            for limit in (rule.limit, rule.caution):
                assert limit is None or limit.reference is None or limit.reference in REFERENCES


def test_book_states_every_allowance_that_its_quantities_need(bench):
    stated = {a.id for a in bench.plan.rule_book.allowances}
    assert {q.allowance for q in REGISTER.values()} - {""} <= stated


def test_book_says_that_it_is_an_example():
    table = tomllib.loads(BOOK.read_text(encoding="utf-8"))
    assert table["approved"] is False
    assert "not approved" in table["owner"]
    assert len({rule["id"] for rule in table["rule"]}) == len(table["rule"]) >= 40
    marks = ("read", "from memory", "common practice", "computed")
    assert [r["id"] for r in table["rule"] if not any(m in r["basis"] for m in marks)] == []
    assert all(rule["why"] for rule in table["rule"])


def test_watched_and_confirmed_rules_do_not_close_a_class(bench):
    rules = tuple(r for r in bench.plan.rule_book.rules if r.kind != "predicted")
    bench.change_book(rules=rules)
    judgement = bench.judge()
    assert [f.rule for f in judgement.findings] == ["wind cap: mean", "wind cap: gust"]
    assert judgement.verdict is Verdict.NOT_ASSESSED
    assert bench.covered("loads", "hold").verdict is Verdict.NOT_ASSESSED


def test_readme_names_every_class_and_reference():
    text = (BOOK.parent / "README.md").read_text(encoding="utf-8")
    missing = [name for name in (*REFERENCES, *HAZARD_CLASSES) if f"`{name}`" not in text]
    assert missing == []
