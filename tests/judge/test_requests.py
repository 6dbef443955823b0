import math
from dataclasses import replace

import pytest

from planner.judge.requests import requests
from planner.model.rules import Allowance


def test_allowances_and_margin_go_forward(bench):
    wanted = requests(bench.plan.rule_book)
    assert set(wanted.allowances) == {"air_load", "torque", "frequency", "damping"}
    assert wanted.allowances["air_load"] == pytest.approx((0.68, 1.05))
    assert wanted.stop_free_margin == pytest.approx(0.1)


def test_wider_end_of_two_books_counts(bench):
    twice = (Allowance("x", 0.8, 1.0, ""), Allowance("x", 0.9, 1.2, ""))
    assert requests(replace(bench.plan.rule_book, allowances=twice)).allowances == {
        "x": (0.8, 1.2)
    }


def test_book_without_margin_asks_for_none(bench):
    assert requests(replace(bench.plan.rule_book, stop_free_margin=None)).stop_free_margin is None


@pytest.mark.parametrize(
    ("low", "high"), [(1.1, 0.9), (0.0, 1.0), (-1.0, 1.0), (math.nan, 1.0), (0.9, math.inf)]
)
def test_allowance_out_of_order_is_refused(bench, low, high):
    wrong = replace(bench.plan.rule_book, allowances=(Allowance("x", low, high, ""),))
    with pytest.raises(ValueError, match=r"allowance 'x' must have 0 < low <= high"):
        requests(wrong)


@pytest.mark.parametrize("margin", [-0.1, math.nan, math.inf])
def test_margin_below_zero_is_refused(bench, margin):
    with pytest.raises(ValueError, match=r"stop_free_margin must be a share of 0 % or more"):
        requests(replace(bench.plan.rule_book, stop_free_margin=margin))
