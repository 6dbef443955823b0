"""Where a natural frequency meets a harmonic, with what it may be off by."""

from __future__ import annotations

import numpy as np
import pytest

from planner.methods.crossings import crossings

SPEED = np.linspace(0.0, 60.0, 61)


def test_mode_that_does_not_change_is_met_at_its_frequency_over_the_harmonic():
    w = np.full(61, 37.0)
    (met,) = crossings(SPEED, w, 0.97 * w, 1.03 * w, 4)
    assert met.nominal_rad_s == pytest.approx(37.0 / 4.0, rel=1e-12)
    assert met.low_rad_s == pytest.approx(0.97 * 37.0 / 4.0, rel=1e-12)
    assert met.high_rad_s == pytest.approx(1.03 * 37.0 / 4.0, rel=1e-12)


def test_mode_that_bends_up_along_a_ray_is_met_twice():
    w = 20.0 + 0.012 * SPEED**2  # equals v at (1 ± 0.2) / 0.024
    found = crossings(SPEED, w, 0.999 * w, 1.001 * w, 1)
    assert [met.nominal_rad_s for met in found] == pytest.approx([100.0 / 3.0, 50.0], rel=2e-3)


def test_mode_that_only_its_allowance_brings_to_a_ray_is_told_at_the_middle():
    w = SPEED + 2.0
    (met,) = crossings(SPEED, w, 0.95 * w, 1.05 * w, 1)
    assert met.low_rad_s == pytest.approx(38.0, rel=1e-9)  # 0.95 (v + 2) = v
    assert met.high_rad_s == 60.0
    assert met.nominal_rad_s == pytest.approx(49.0)


def test_range_that_leaves_the_table_ends_with_it():
    w = np.full(61, 61.0)
    (met,) = crossings(SPEED, w, 0.9 * w, 1.1 * w, 1)
    assert met.low_rad_s == pytest.approx(54.9)
    assert met.high_rad_s == 60.0


def test_free_hinge_meets_no_harmonic_at_rest_and_a_far_mode_none_at_all():
    assert crossings(SPEED, 0.3 * SPEED, 0.29 * SPEED, 0.31 * SPEED, 1) == []
    w = np.full(61, 500.0)
    assert crossings(SPEED, w, 0.97 * w, 1.03 * w, 8) == []


def test_flap_at_once_per_revolution_is_met_everywhere_but_not_counted_from_rest():
    assert crossings(SPEED, SPEED, 0.97 * SPEED, 1.03 * SPEED, 1) == []
