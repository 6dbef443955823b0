import numpy as np
import pytest

from planner.methods.hand_checks_dynamics import rate_for_peak_rad_s2
from planner.methods.hand_checks_passage import steady_unbalance_peak, unbalance_passage_peak
from planner.methods.passage import SpeedTable, passage_peak
from planner.methods.passage_rate import rate_needed_rad_s2

W = np.array([20.0, 34.0, 20.0])
ZETA = np.array([0.02, 0.03, 0.05])
WANTED = np.array([22.0, 12.0, 8.5])


def marched_back(w: float, zeta: float, rate: float, direction: int) -> float:
    """Peak of a whole passage from far below to far above, or back."""
    ends = (0.3 * w, 1.8 * w)[::direction]
    table = SpeedTable(np.array([ends]), 1.5 * w / rate)
    return float(passage_peak(table, [w], zeta).amplitude[0, 0])


@pytest.mark.parametrize("direction", [1, -1])
def test_rate_marched_back_stays_below_and_a_slower_one_does_not(direction):
    found = rate_needed_rad_s2(W, ZETA, WANTED, direction)
    assert np.all(found.is_found)
    for w, zeta, wanted, rate in zip(W, ZETA, WANTED, found.rate_rad_s2, strict=True):
        # a passage that begins further away differs by some thousandths
        assert marched_back(w, zeta, rate, direction) <= 1.003 * wanted
        assert marched_back(w, zeta, 0.93 * rate, direction) > wanted


def test_hand_rate_lies_between_down_and_up():
    hand = rate_for_peak_rad_s2(W, ZETA, WANTED)
    up, down = (rate_needed_rad_s2(W, ZETA, WANTED, d).rate_rad_s2 for d in (1, -1))
    assert np.all(down < hand)
    assert np.all(hand < up)
    assert up == pytest.approx(hand, rel=0.6)
    assert unbalance_passage_peak(W, ZETA, hand) == pytest.approx(WANTED)


def test_lanes_keep_to_themselves_and_time_scales():
    found = rate_needed_rad_s2(W, ZETA, WANTED)
    alone = rate_needed_rad_s2(2.0 * W[1:2], ZETA[1:2], WANTED[1:2])
    assert alone.rate_rad_s2[0] == pytest.approx(4.0 * found.rate_rad_s2[1], rel=1e-12)


def test_no_rate_is_needed_where_no_passage_reaches_the_amplitude():
    zeta = np.array([0.1, 0.1, 0.05])
    steady = steady_unbalance_peak(zeta)
    found = rate_needed_rad_s2(20.0, zeta, steady * np.array([1.02, 1.005, 3.0]))
    # the second lies within what growing force may add on the way up
    assert (found.rate_rad_s2 == 0.0).tolist() == [True, False, True]
    assert np.all(found.is_found)
    assert rate_needed_rad_s2(20.0, 0.1, 1.005 * steady[0], -1).rate_rad_s2[0] == 0.0
    assert float(rate_for_peak_rad_s2(20.0, 0.1, 5.0)) == 0.0


def test_amplitudes_out_of_reach_are_flagged():
    found = rate_needed_rad_s2(20.0, 0.02, np.array([5.0, 1.5, 12.0]))
    assert found.is_found.tolist() == [False, False, True]
    assert found.rate_rad_s2[:2] == pytest.approx((0.15 * 20.0) ** 2)
    assert np.all(np.isfinite(found.rate_rad_s2))


@pytest.mark.parametrize(
    ("zeta", "wanted", "direction", "message"),
    [
        (1e-5, 9.0, 1, r"damping ratio: expected 0.0005 to 0.5, found 1e-05"),
        (0.02, -1.0, 1, r"amplitude over offset: expected 0 to 1e\+09, found -1"),
        (0.02, 9.0, 0, r"direction: expected 1 \(up\) or -1 \(down\), found 0"),
    ],
)
def test_what_cannot_be_is_refused(zeta, wanted, direction, message):
    with pytest.raises(ValueError, match=message):
        rate_needed_rad_s2(20.0, zeta, wanted, direction)
