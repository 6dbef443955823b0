import numpy as np
import pytest

from planner.methods.gusts import candidate_gusts, gust_lengths_s, gust_m_s, refined


def test_gust_has_its_area_its_peak_and_calm_around_it():
    time = np.linspace(0.0, 20.0, 20001)
    gust = gust_m_s(time, 3.0, 5.0, 8.0)
    assert np.trapezoid(gust, time) == pytest.approx(0.5 * 8.0 * 5.0, rel=1e-9)
    assert time[np.argmax(gust)] == pytest.approx(5.5)
    assert gust.max() == pytest.approx(8.0)
    assert np.all(gust[(time <= 3.0) | (time >= 8.0)] == 0.0)
    assert gust == pytest.approx(
        np.where(gust > 0.0, 4.0 * (1.0 - np.cos(2.0 * np.pi * (time - 3.0) / 5.0)), 0.0)
    )


def test_every_lane_has_its_own_clock_and_gust():
    time = np.array([2.0, 5.0, 1.0])
    start, length, increment = np.array([0.0, 4.0, 3.0]), np.array([4.0, 4.0, 1.0]), 3.0
    assert gust_m_s(time, start, length, increment) == pytest.approx([3.0, 1.5, 0.0])
    assert gust_m_s(time[:, None], start, length, increment).shape == (3, 3)
    assert float(gust_m_s(1.0, 0.0, 2.0, -4.0)) == pytest.approx(-4.0)


def test_unknown_time_is_not_taken_as_calm():
    assert np.isnan(gust_m_s(np.nan, 0.0, 1.0, 5.0))


@pytest.mark.parametrize("length", [0.0, -1.0, np.nan, np.inf])
def test_gust_without_a_length_is_refused(length):
    with pytest.raises(ValueError, match=r"gust length: expected above 0 s and finite, found"):
        gust_m_s(1.0, 0.0, [2.0, length], 5.0)


def test_candidates_peak_at_the_moments_in_lengths_of_equal_ratio():
    start, length = candidate_gusts([0.0, 4.0, 9.0], 0.5, 8.0, 5)
    assert start.shape == length.shape == (15,)
    assert (start + 0.5 * length).reshape(3, 5) == pytest.approx(
        np.repeat([[0.0], [4.0], [9.0]], 5, axis=1)
    )
    assert length[:5] == pytest.approx([0.5, 1.0, 2.0, 4.0, 8.0])
    assert (length[0], length[4]) == (0.5, 8.0)


def test_one_length_where_both_ends_are_one():
    assert gust_lengths_s(3.0, 3.0, 7).tolist() == [3.0]


def test_refinement_closes_in_on_the_worst():
    spacing, ratio, bounds = 3.0, 2.0, (0.5, 8.0)
    start, length = candidate_gusts(np.arange(0.0, 20.0, spacing), *bounds, 5)
    for _ in range(4):
        # a made-up severity whose worst lies off the grid
        far = np.abs(start + 0.5 * length - 7.3) + np.abs(np.log(length / 2.9))
        worst = int(np.argmin(far))
        start, length = refined(start[worst], length[worst], spacing, ratio, bounds)
        assert length.min() >= 0.5
        assert length.max() <= 8.0
        spacing, ratio = spacing / 3.0, ratio ** (1.0 / 3.0)
    peak = start + 0.5 * length
    assert np.abs(peak - 7.3).min() < 0.02
    assert np.abs(length / 2.9 - 1.0).min() < 0.01


def test_refinement_holds_the_gust_itself_and_no_length_twice():
    start, length = refined(1.0, 8.0, 2.0, 2.0, (0.5, 8.0))
    assert length.reshape(5, 3)[0] == pytest.approx(8.0 * 2.0 ** (np.array([-2.0, -1.0, 0.0]) / 3))
    assert np.any((np.abs(start - 1.0) < 1e-12) & (length == 8.0))
    _, only = refined(1.0, 2.0, 2.0, 1.0, (2.0, 2.0))
    assert only.tolist() == [2.0] * 5


@pytest.mark.parametrize(
    ("call", "message"),
    [
        (lambda: gust_lengths_s(0.0, 2.0, 3), r"gust length: expected 0.05 to 600 s, found 0"),
        (lambda: gust_lengths_s(3.0, 2.0, 3), r"longest gust: expected at least .* found 2 s"),
        (lambda: gust_lengths_s(1.0, 2.0, 1), r"number of gust lengths: .* found 1; try both"),
        (lambda: candidate_gusts([], 1.0, 2.0), r"gust peaks: expected finite moments"),
        (lambda: candidate_gusts([1.0, np.nan], 1.0, 2.0), r"gust peaks: expected finite moments"),
        (lambda: refined(0.0, 9.0, 1.0, 2.0, (1.0, 8.0)), r"gust length: expected 1 to 8 s"),
        (lambda: refined(0.0, 2.0, 0.0, 2.0, (1.0, 8.0)), r"gust neighbourhood: .* found 0 s"),
        (lambda: refined(0.0, 2.0, 1.0, 2.0, (1.0, 8.0), 0), r"neighbour, found 1 s, 2 and 0"),
    ],
)
def test_search_that_means_nothing_is_refused(call, message):
    with pytest.raises(ValueError, match=message):
        call()
