"""Histories of speed and controls: exact ends, rest that is rest, and controls that wait."""

from __future__ import annotations

import math

import numpy as np
import pytest

from planner.methods.run_down import travel
from planner.rotor.speed_history import (
    AFTER_REST_S,
    STEP_S,
    ControlMove,
    Controls,
    History,
    own_run_up,
    prescribed_ramp,
    run_down,
    side_by_side,
)

LOW = Controls(0.02)
HIGH = Controls(0.12, 0.03, -0.04)


def straight(first, last, seconds):
    """A change of speed under one torque, as the second of two lanes."""
    speed = np.array([[first, last], [first, last]])
    torque = np.array([[1.0], [abs(last - first) / seconds]])
    return travel(speed, torque, torque, np.ones(2))


def test_ramp_runs_straight_and_settles_exactly_at_its_end():
    ramp = prescribed_ramp("1.2r", (10.0, 20.0), (LOW, HIGH), 5.0, 2.0)
    assert ramp.step_s == STEP_S
    assert not ramp.is_unpowered
    assert 7.0 <= ramp.duration_s < 7.0 + 2.0 * STEP_S
    half = round(2.5 / STEP_S)
    assert ramp.speed_rad_s[half] == pytest.approx(15.0)
    assert ramp.collective_rad[half] == pytest.approx(0.07)
    after = ramp.time_s >= 5.0
    assert np.all(ramp.speed_rad_s[after] == 20.0)
    assert np.all(ramp.cyclic_sine_rad[after] == -0.04)


def test_run_down_ends_a_second_after_a_rest_that_is_exactly_zero():
    path = straight(30.0, 0.0, 60.003)
    history = run_down("stop", path, 1, ControlMove(HIGH, HIGH, 0.0, 1.0))
    assert history.is_unpowered
    assert history.speed_rad_s[0] == 30.0
    rests = history.time_s >= 60.003
    assert np.all(history.speed_rad_s[rests] == 0.0)
    assert np.all(history.speed_rad_s[~rests] > 0.0)
    assert AFTER_REST_S <= history.duration_s - 60.003 < AFTER_REST_S + 2.0 * STEP_S
    assert np.all(history.collective_rad == 0.12)


def test_controls_wait_and_then_move_at_their_rate():
    move = ControlMove(HIGH, LOW, 2.0, 0.05)
    collective, cosine, sine = move.at(np.array([0.0, 2.0, 3.0, 4.0, 9.0]))
    assert collective.tolist() == pytest.approx([0.12, 0.12, 0.07, 0.02, 0.02])
    assert cosine.tolist() == pytest.approx([0.03, 0.03, 0.0, 0.0, 0.0])
    assert sine.tolist() == pytest.approx([-0.04, -0.04, 0.0, 0.0, 0.0])
    assert (collective[-1], sine[-1]) == (0.02, 0.0)
    assert move.collective_s == pytest.approx(2.0)
    assert not move.is_frozen


def test_time_of_a_move_of_cyclic_alone_is_that_of_cyclic():
    move = ControlMove(HIGH, Controls(0.12), 0.0, 0.05)
    assert move.collective_s == pytest.approx(1.0)
    assert ControlMove(HIGH, HIGH, 0.0, 0.05).collective_s == 0.0


def test_own_run_up_takes_controls_along_with_speed():
    history = own_run_up("1.1r", straight(0.0, 20.0, 8.0), 1, (LOW, HIGH), 1.0)
    share = history.speed_rad_s / 20.0
    assert history.collective_rad == pytest.approx(0.02 + 0.1 * share)
    assert history.speed_rad_s[-1] == 20.0
    assert history.collective_rad[-1] == 0.12


def test_side_by_side_the_shorter_keeps_its_last_row():
    short = prescribed_ramp("a", (0.0, 4.0), (LOW, HIGH), 1.0, 0.5)
    long = prescribed_ramp("b", (4.0, 0.0), (HIGH, LOW), 3.0, 0.5)
    both = side_by_side([short, long])
    assert both.speed_rad_s.shape == (2, long.speed_rad_s.size)
    assert np.array_equal(both.speed_rad_s[1], long.speed_rad_s)
    assert np.all(both.collective_rad[0, short.speed_rad_s.size :] == 0.12)
    assert both.end_s.tolist() == [short.duration_s, long.duration_s]


def test_histories_without_an_end_are_refused():
    never = travel(np.array([[9.0, 0.0]]), np.zeros((1, 1)), np.zeros((1, 1)), np.ones(1))
    with pytest.raises(ValueError, match=r"history stop: expected a last speed that is reached"):
        run_down("stop", never, 0, ControlMove(LOW, LOW, 0.0, 1.0))
    with pytest.raises(ValueError, match=r"history 1.2r: expected a time of the ramp above 0 s"):
        prescribed_ramp("1.2r", (1.0, 2.0), (LOW, LOW), math.nan, 1.0)


@pytest.mark.parametrize(
    ("speed", "words"),
    [
        ([1.0, -1.0], r"expected speeds from 0 up"),
        ([1.0, math.nan], r"expected finite values"),
        ([1.0], r"expected tables of one length of 2 or more, found \(1,\)"),
    ],
)
def test_tables_that_cannot_be_are_refused(speed, words):
    table = np.array(speed)
    still = np.zeros(table.size)
    with pytest.raises(ValueError, match=words):
        History(
            label="x", is_unpowered=False, step_s=STEP_S, speed_rad_s=table,
            collective_rad=still, cyclic_cosine_rad=still, cyclic_sine_rad=still,
        )  # fmt: skip
