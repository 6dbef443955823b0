from itertools import product

import numpy as np
import pytest

from planner.methods.unbalance import (
    grade_unbalance_kg_m,
    lag_angle_unbalance_kg_m,
    spread_factor,
    static_moment_unbalance_kg_m,
    total_unbalance_kg_m,
)


@pytest.mark.parametrize("n", [2, 3, 4, 5, 6, 7, 8])
def test_spread_factor_is_the_largest_of_every_order_of_the_set(n):
    places = np.exp(2j * np.pi * np.arange(n) / n)
    signs = np.array(list(product([-0.5, 0.5], repeat=n)))
    assert spread_factor(n) == pytest.approx(np.abs(signs @ places).max())


def test_parts_by_hand_add_up_in_the_worst_phase():
    static = static_moment_unbalance_kg_m([0.0, 0.03], 4)
    lag = lag_angle_unbalance_kg_m(0.002, 60.0, 4)
    assert static == pytest.approx([0.0, 0.03 * np.sqrt(2.0)])
    assert float(lag) == pytest.approx(0.12 * np.sqrt(2.0))
    assert total_unbalance_kg_m(0.2, static, lag) == pytest.approx(0.2 + static + lag)
    assert float(grade_unbalance_kg_m(0.0063, 260.0, 37.7)) == pytest.approx(0.04345, rel=1e-3)


@pytest.mark.parametrize(
    ("call", "message"),
    [
        (lambda: spread_factor(1), r"number of blades: expected 2 or more, found 1"),
        (lambda: grade_unbalance_kg_m(0.006, 2.0, 0.0), r"reference speed: expected .*, found 0"),
        (lambda: static_moment_unbalance_kg_m(-1.0, 3), r"static-moment spread: .* found -1"),
        (lambda: lag_angle_unbalance_kg_m(0.2, 9.0, 3), r"lag-angle spread: .*, found 0.2"),
        (lambda: total_unbalance_kg_m(0.1, np.nan), r"unbalance: expected .*, found nan"),
    ],
)
def test_what_cannot_be_is_refused(call, message):
    with pytest.raises(ValueError, match=message):
        call()
