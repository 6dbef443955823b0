import math
from dataclasses import replace

import pytest

from planner.judge.hand_checks import hand_check_findings
from planner.model.results import Finding, Status, Verdict
from planner.predict.register import REGISTER


def check(bench) -> tuple[Finding, ...]:
    return hand_check_findings(REGISTER, bench.predictions)


def test_numbers_that_agree_or_do_not_compare_give_no_finding(bench):
    assert check(bench) == ()
    band = REGISTER["thrust"].hand_band
    bench.put("thrust", bench.rows("thrust"), hand=10_000.0 / (1.0 + band * 0.999))
    assert check(bench) == ()


@pytest.mark.parametrize("side", [-1.0, 1.0])
def test_difference_beyond_the_band_is_not_assessed_and_names_both(bench, side):
    hand = 10_000.0 / (1.0 + side * REGISTER["thrust"].hand_band * 1.001)
    bench.put("thrust", bench.rows("thrust", segment="1.2h"), hand=hand)
    (finding,) = check(bench)
    assert finding.rule == "hand check: thrust"
    assert finding.verdict is Verdict.NOT_ASSESSED
    assert f"predicted 10000 N, by hand {hand:.6g} N" in finding.reason
    assert finding.margin < 0.0
    assert (finding.tested, finding.not_assessed) == (1, 1)
    assert finding.segment_verdicts == {"1.2h": "NOT ASSESSED"}


@pytest.mark.parametrize("hand", [0.0, math.inf, -10_000.0])
def test_hand_check_of_zero_or_infinity_or_other_sign_disagrees(bench, hand):
    bench.put("thrust", bench.rows("thrust", segment="1.2h"), hand=hand)
    assert len(check(bench)) == 1


def test_number_that_is_nan_disagrees_with_a_hand_check(bench):
    bench.put("thrust", bench.rows("thrust", segment="1.2h"), hand=10_000.0, value=math.nan)
    assert len(check(bench)) == 1


def test_rows_that_are_not_ok_are_not_compared(bench):
    rows = bench.rows("thrust", segment="1.2h")
    bench.put("thrust", rows, hand=1.0)
    bench.flag("thrust", rows, Status.OUTSIDE_VALIDITY)
    assert check(bench) == ()


def test_exact_check_allows_rounding_only(bench):
    exact = replace(REGISTER["thrust"], hand_band=0.0)
    bench.put("thrust", [0], hand=10_000.0 * (1.0 + 1e-13))
    assert hand_check_findings({"thrust": exact}, bench.predictions) == ()
    bench.put("thrust", [0], hand=10_000.0 * (1.0 + 1e-6))
    assert len(hand_check_findings({"thrust": exact}, bench.predictions)) == 1


def test_worst_of_several_is_told(bench):
    bench.put("thrust", bench.rows("thrust"), hand=7_000.0)
    bench.put("thrust", bench.rows("thrust", segment="1.3h"), hand=2_000.0)
    (finding,) = check(bench)
    assert finding.segment == "1.3h"
    assert "(9 of 9 disagree)" in finding.reason


def test_quantity_that_was_not_predicted_has_no_hand_check(bench):
    del bench.predictions["thrust"]
    assert check(bench) == ()
