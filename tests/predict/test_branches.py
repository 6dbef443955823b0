"""Branches of blade modes: where names change over and where crossings truly are."""

from __future__ import annotations

import numpy as np
import pytest

from planner.judge.requests import requests
from planner.model.plan import segments
from planner.predict.branches import branches, breaks_of
from planner.predict.fan_series import fan_series
from planner.predict.mode_correction import with_allowance
from planner.predict.mode_tracks import Track
from planner.predict.rows import Rows
from planner.predict.study_modes import crossing_rows

SPEED = np.linspace(0.0, 60.0, 61)


def track(name, frequency):
    ends = with_allowance(frequency, (0.99, 1.01))
    return Track(name, name.split()[0], "blade", ends, (1, 2, 3), set_id="x")


def veering():
    """Two modes that would cross at 30 rad/s and keep 8 rad/s apart; names change over there."""
    rising, flat = 20.0 + 1.0 * SPEED, np.full(61, 50.0)
    middle, half = 0.5 * (rising + flat), np.hypot(0.5 * (rising - flat), 4.0)
    low, high = middle - half, middle + half
    before = SPEED < 30.0
    names = np.where(before, low, high), np.where(before, high, low)
    return track("flap 2", names[0]), track("lag 1", names[1])


def test_names_that_change_over_where_modes_veer_are_a_break_in_both_curves():
    pair = veering()
    assert [breaks_of(each, pair) for each in pair] == [[29], [29]]


def test_modes_that_cross_keep_their_curves_whole():
    pair = (track("flap 2", 20.0 + SPEED), track("torsion 1", np.full(61, 50.5)))
    assert [breaks_of(each, pair) for each in pair] == [[], []]


def test_branches_are_smooth_and_know_whose_name_they_bear():
    low, high = branches(veering())
    for ends, _ in (low, high):
        assert np.abs(np.diff(ends.frequency_rad_s, 2)).max() < 0.2
    assert (low[1][0], low[1][-1]) == (0, 1)
    assert (high[1][0], high[1][-1]) == (1, 0)


def test_jump_of_a_name_over_a_ray_is_no_crossing():
    """At 30 rad/s the pair stands at 46 and 54: no mode meets the ray at 1.67 per revolution."""
    pair = veering()
    rows = Rows("crossing_speed", "modes")
    crossing_rows(rows, pair, SPEED)
    found = rows.prediction()
    told = [(float(v), int(x.harmonic)) for v, x in zip(found.value, found.labels, strict=True)]
    assert len(told) == 5  # the upper branch stays above the first ray
    for speed, harmonic in told:
        gaps = [
            abs(float(np.interp(speed, SPEED, ends.frequency_rad_s)) - harmonic * speed)
            for ends, _ in branches(pair)
        ]
        assert min(gaps) < 1e-6


def test_chart_of_the_teetering_sample_tells_its_breaks(sample, predicted):
    plan = sample("teetering-pair")
    fan = fan_series(plan, segments(plan), predicted("teetering-pair"), requests(plan.rule_book))
    told = {mode["name"]: mode["breaks"] for mode in fan["modes"] if mode.get("breaks")}
    assert told["flap 2 cyclic"] == told["lag 1 cyclic"]


@pytest.mark.parametrize("mode", ["flap 2 cyclic", "lag 1 cyclic"])
def test_told_crossings_lie_on_a_computed_frequency(predicted, mode):
    """A name that jumps over a ray is no crossing: near 84 rpm of this sample there is none."""
    found = predicted("teetering-pair")["crossing_speed"]
    rpm = [
        float(v) * 60.0 / (2.0 * np.pi)
        for v, x in zip(found.value, found.labels, strict=True)
        if x.mode == mode and x.harmonic == "6"
    ]
    assert all(not 80.0 < v < 90.0 for v in rpm)
