"""Blade modes as the stand sees them."""

from __future__ import annotations

import dataclasses
import math

import pytest

from planner.model.results import Status
from tests.predict.rows import row, rows

RPM = 2.0 * math.pi / 60.0


def test_lag_seen_from_the_stand_is_rotor_speed_less_its_frequency(predicted):
    """By hand from the printed frequencies, at 99 % rpm with 1 rpm of window and of gauge."""
    found = predicted("articulated-run-up")
    frequency, spacing = found["mode_frequency"], found["fixed_frame_spacing"]
    lag = frequency.value[row(frequency, segment="1.6h", mode="lag 1")]
    stand = frequency.value[row(frequency, segment="1.6h", mode="stand lateral")]
    speed = 0.99 * 360.0 * RPM
    i = row(spacing, segment="1.6h", mode="lag 1", harmonic="stand lateral, Ω - ω")
    assert spacing.value[i] == pytest.approx(abs((speed - lag) / stand - 1.0), rel=1e-9)
    i = row(spacing, segment="1.6h", mode="lag 1", harmonic="stand lateral, Ω + ω")
    assert spacing.value[i] == pytest.approx(abs((speed + lag) / stand - 1.0), rel=1e-9)


def test_hold_where_shifted_lag_meets_a_stand_mode_has_no_distance_left(predicted):
    """Half speed of this sample: 180 rpm less about a third is 120 rpm, the lateral mode."""
    spacing = predicted("articulated-run-up")["fixed_frame_spacing"]
    i = row(spacing, segment="1.2h", mode="lag 1", harmonic="stand lateral, Ω - ω")
    assert spacing.low[i] == 0.0
    assert spacing.value[i] < 0.05


def test_blades_that_move_alike_do_not_shake_the_stand_sideways(predicted):
    labels = predicted("teetering-pair")["fixed_frame_spacing"].labels
    modes = {label.mode for label in labels if label.mode}
    assert modes == {f"{family} {n} cyclic" for family in ("flap", "lag") for n in (1, 2)}


def test_stand_that_states_no_modes_leaves_the_comparison_open(articulated, run_predict):
    bare = dataclasses.replace(articulated.stand, modes=())
    found = run_predict(dataclasses.replace(articulated, stand=bare), "modes")
    spacing = found["fixed_frame_spacing"]
    assert {spacing.status[i] for i in rows(spacing, mode="lag 1")} == {Status.NOT_STATED}
