"""Contact events and running extremes, from made-up touches."""

import numpy as np
import pytest

from planner.rotor.march_track import AZIMUTH_BINS, TURN_RAD, Contacts, Extremes, Touches, follow

STEP_S, SPEED = 0.1, 20.0


def lifted():
    contacts = Contacts.none((1, 1))
    contacts.lifted[:] = True
    return contacts


def steps(contacts, pattern, *, counts=True, fast=True, closing=0.5):
    """Follow a pattern of touching, one character a part, four parts a step."""
    on = np.array([mark == "x" for mark in pattern]).reshape(-1, 4)
    for number, parts in enumerate(on):
        now = Touches(
            is_on=parts[:, None, None],
            closing_rad_s=np.full((5, 1, 1), closing),
            time_s=np.array([number * STEP_S]),
            step_s=np.array([STEP_S]),
            speed_rad_s=np.array([SPEED]),
            azimuth_rad=np.array([number * STEP_S * SPEED]),
            counts=np.array([counts]),
            is_fast=np.array([fast]),
        )
        follow(contacts, np.array([0]), now)
    return contacts


def test_touches_are_counted_timed_and_measured():
    found = steps(lifted(), ".xx.......xxxx..")
    assert found.count[0, 0] == 2
    assert found.first_s[0, 0] == pytest.approx(0.05)
    assert found.last_s[0, 0] == pytest.approx(0.275)
    assert found.longest_s[0, 0] == pytest.approx(0.1)
    assert found.closing_rad_s[0, 0] == pytest.approx(0.5)
    assert found.fastest_rad_s[0, 0] == SPEED
    assert not found.touching[0, 0]
    assert found.left_rad[0, 0] == pytest.approx(0.35 * SPEED)


def test_a_touch_within_one_step_is_not_missed():
    found = steps(lifted(), ".....x......")
    assert found.count[0, 0] == 1
    assert found.longest_s[0, 0] == pytest.approx(0.025)


def test_nothing_counts_before_lift_off_or_outside_the_history():
    before = steps(Contacts.none((1, 1)), "xx..x...")
    assert before.count[0, 0] == 0
    assert np.isnan(before.first_s[0, 0])
    outside = steps(lifted(), "xx..x...", counts=False)
    assert outside.count[0, 0] == 0
    assert outside.fastest_rad_s[0, 0] == 0.0


def test_a_blade_counts_as_lifted_after_a_whole_turn_off_its_stop():
    contacts = steps(Contacts.none((1, 1)), "xxx.")
    left = 0.075 * SPEED
    for turned, wanted in ((0.99 * TURN_RAD, False), (1.01 * TURN_RAD, True)):
        contacts.lift(np.array([left + turned]), np.array([1.5]), np.array([True]))
        assert bool(contacts.lifted[0, 0]) is wanted
    assert contacts.lift_off_s[0, 0] == 1.5


def test_a_rotor_that_begins_turning_and_free_counts_as_lifted():
    contacts = Contacts.none((3, 1))
    on = np.array([[True], [False], [False]])
    contacts.start_free(np.array([True, True, False]), on, np.array([9.0, 9.0, 9.0]))
    assert contacts.lifted[:, 0].tolist() == [False, True, False]


def test_extremes_put_back_what_was_taken():
    whole = Extremes.none(3, 2, 4)
    part = whole.take(np.array([1]))
    part.droop_N_m[:], part.lowest_tip_m[:] = 7.0, -1.0
    whole.put(np.array([1]), part)
    assert whole.droop_N_m[:, 0].tolist() == [0.0, 7.0, 0.0]
    assert whole.lowest_tip_m.shape == (3, 4, AZIMUTH_BINS)
    assert whole.lowest_tip_m[1].max() == -1.0
    assert np.all(np.isinf(whole.lowest_tip_m[0]))
