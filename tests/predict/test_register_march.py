"""Entries for what is marched: their axes, and the closed forms that they name."""

from __future__ import annotations

import math

import numpy as np
import pytest

from planner.methods.stop_contact import stop_moment_n_m
from planner.predict.band_rows import TOTALS
from planner.predict.passage_amplitudes import AMPLITUDE, PEAK_SPEED
from planner.predict.register import REGISTER
from planner.predict.register_march import COURSE, MARCHED
from planner.predict.register_speeds import SPEEDS


def test_marched_numbers_are_of_segments_and_aborts_only():
    for quantity in (*MARCHED, *SPEEDS):
        whole_card = quantity.id in TOTALS
        states = quantity.id != "drive_torque_reserve" and not whole_card
        assert ("state" in quantity.axes) is states
        assert quantity.axes[0] == ("band" if whole_card else "segment")
        assert quantity.allowance == ("air_load" if quantity in MARCHED else "torque")
    known = {q.id for q in REGISTER.values() if q.study in {"marches", "speeds"}}
    assert known == {AMPLITUDE, PEAK_SPEED} | {q.id for q in (*MARCHED, COURSE, *SPEEDS)}
    assert COURSE.axes == ("segment", "mode")  # a picture of starts and the stop, no abort's


def test_contacts_are_those_where_the_stops_are_left_behind():
    assert "stop_free_speed" in REGISTER["contacts_after_lift_off"].method


@pytest.mark.parametrize("closing_rad_s", [0.0, 0.3, 1.0])
def test_rigid_drop_peaks_where_the_entry_says(closing_rad_s):
    """A blade that meets a lossless stop, marched by small steps without air."""
    inertia, weight, stiffness = 330.0, 900.0, 2e5
    angle, rate, peak, step = 0.0, closing_rad_s, 0.0, 2e-5
    while rate >= 0.0:
        lanes = [np.array([x]) for x in (angle, rate, stiffness, 0.0)]
        moment = float(stop_moment_n_m(*lanes)[0])
        peak = max(peak, moment)
        rate += step * (weight - moment) / inertia
        angle += step * rate
    by_hand = weight + math.sqrt(weight**2 + stiffness * inertia * closing_rad_s**2)
    assert peak == pytest.approx(by_hand, rel=2e-3)
    assert peak >= weight


def test_rigid_blade_that_falls_closes_as_the_entry_says():
    """Energy: I w^2 / 2 = g S drop; 5 m of even blade gain 30 deg/s in about 3 deg."""
    radius, mass = 5.0, 7.0
    inertia, moment = mass * radius**3 / 3.0, 9.80665 * mass * radius**2 / 2.0
    closing = math.sqrt(2.0 * moment * math.radians(2.67) / inertia)
    assert math.degrees(closing) == pytest.approx(30.0, rel=0.01)
