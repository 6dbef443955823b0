import math

import pytest

from planner.judge.case import Span
from planner.judge.limits import limit_over, mismatch, speed_range
from planner.judge.references import Missing
from planner.model.rules import Limit, SpeedRange
from planner.predict.register import REGISTER

TABLE = Limit(table=((0.0, 1.0), (10.0, 3.0), (20.0, 2.0)))


@pytest.mark.parametrize(
    ("span", "least", "greatest"),
    [
        (Span(0.0, 0.0), 1.0, 1.0),
        (Span(5.0, 5.0), 2.0, 2.0),
        (Span(20.0, 20.0), 2.0, 2.0),
        (Span(5.0, 8.0), 2.0, 2.6),
        (Span(5.0, 15.0), 2.0, 3.0),
        (Span(0.0, 20.0), 1.0, 3.0),
    ],
)
def test_table_is_interpolated_and_its_strict_end_taken(bench, span, least, greatest):
    assert limit_over(TABLE, "at most", span, bench.case) == pytest.approx(least)
    assert limit_over(TABLE, "at least", span, bench.case) == pytest.approx(greatest)


@pytest.mark.parametrize("span", [Span(0.0, 20.1), Span(-0.1, 5.0), Span(0.0, math.nan)])
def test_table_is_not_extrapolated(bench, span):
    assert isinstance(limit_over(TABLE, "at most", span, bench.case), Missing)


@pytest.mark.parametrize(
    "table",
    [(), ((0.0, 1.0), (0.0, 2.0)), ((5.0, 1.0), (0.0, 2.0)), ((0.0, 1.0), (9.0, math.nan))],
)
def test_table_out_of_order_is_missing(bench, table):
    found = limit_over(Limit(table=table), "at most", Span(0.0, 0.0), bench.case)
    assert isinstance(found, Missing)


def test_share_takes_the_strict_end_of_its_reference(bench):
    bench.put("card_speed", [0], low=30.0, high=40.0)
    share = Limit(share=0.5, reference="card_speed")
    assert limit_over(share, "at most", Span(0.0, 0.0), bench.case) == pytest.approx(15.0)
    assert limit_over(share, "at least", Span(0.0, 0.0), bench.case) == pytest.approx(20.0)


@pytest.mark.parametrize(
    ("given", "span"),
    [
        (SpeedRange(), Span(0.0, math.inf)),
        (SpeedRange(5.0, 9.0), Span(5.0, 9.0)),
        (SpeedRange(0.5, None, "card_speed"), Span(15.0, math.inf)),
        (SpeedRange(0.0, 0.5, None, "card_speed"), Span(0.0, 20.0)),
    ],
)
def test_speed_range_is_read_widely(bench, given, span):
    bench.put("card_speed", [0], low=30.0, high=40.0)
    bench.change_rule("stand-thrust", speed_range=given)
    assert speed_range(bench.rule("stand-thrust"), bench.case) == span


@pytest.mark.parametrize(
    "given",
    [
        SpeedRange(1.0, None, "moon"),
        SpeedRange(0.0, 1.0, None, "moon"),
        SpeedRange(0.0, None, None, "full_speed"),
        SpeedRange(math.nan),
        SpeedRange(0.0, math.nan),
    ],
)
def test_speed_range_that_cannot_be_resolved_is_missing_and_judges_nothing(bench, given):
    bench.change_rule("stand-thrust", speed_range=given)
    assert isinstance(speed_range(bench.rule("stand-thrust"), bench.case), Missing)
    finding = bench.finding("stand-thrust")
    assert finding.verdict.value == "NOT ASSESSED"
    assert (finding.tested, finding.not_assessed) == (0, 4)


@pytest.mark.parametrize(
    ("quantity", "changes", "fault"),
    [
        ("mode_frequency", {"limit": Limit(share=1.0, reference="full_speed")}, False),
        ("thrust", {"unit": "kN", "limit": Limit(constant=1.0)}, False),
        ("thrust", {"unit": "parsec", "limit": Limit(constant=1.0)}, True),
        ("thrust", {"limit": Limit(share=1.0, reference="full_speed")}, True),
        ("thrust", {"caution": Limit(share=1.0, reference="full_speed")}, True),
        ("thrust", {"limit": None, "caution": None}, False),
    ],
)
def test_dimensions_are_compared(bench, quantity, changes, fault):
    bench.change_rule("stand-thrust", **{"caution": None, "unit": ""} | changes)
    assert bool(mismatch(bench.rule("stand-thrust"), REGISTER[quantity])) is fault


@pytest.mark.parametrize(
    ("other", "meet"),
    [
        (Span(5.0, 10.0), True),
        (Span(20.0, 30.0), True),
        (Span(12.0, 13.0), True),
        (Span(0.0, 50.0), True),
        (Span(0.0, 9.99), False),
        (Span(20.01, 30.0), False),
    ],
)
def test_ranges_that_touch_at_one_speed_meet(other, meet):
    assert Span(10.0, 20.0).meets(other) is meet
    assert other.meets(Span(10.0, 20.0)) is meet
