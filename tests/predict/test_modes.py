"""Frequencies at holds, their distance from harmonics, and crossings."""

from __future__ import annotations

import dataclasses
import math

import numpy as np
import pytest

from planner.model.plan import Window
from planner.model.results import Status

RPM = 2.0 * math.pi / 60.0


def row(prediction, **labels):
    for i, label in enumerate(prediction.labels):
        if all(getattr(label, key) == value for key, value in labels.items()):
            return i
    raise AssertionError(labels)


def test_spacing_of_a_stand_mode_is_redone_by_hand(predicted):
    found = predicted("articulated-run-up")["harmonic_spacing"]
    i = row(found, segment="1.2h", mode="stand fore-aft", harmonic="1")
    assert found.value[i] == pytest.approx(1.0 - 132.0 / 180.0)
    lowest, highest = 177.0, 183.0  # window 2 rpm and gauge error 1 rpm
    assert found.low[i] == pytest.approx(1.0 - 132.0 * 1.03 / lowest)
    assert found.high[i] == pytest.approx(1.0 - 132.0 * 0.97 / highest)


def test_window_over_a_harmonic_has_no_distance_left(articulated, run_predict):
    step = dataclasses.replace(
        articulated.blocks[0].steps[1], speed_rad_s=140.0 * RPM, window=Window(25.0 * RPM, 0.0)
    )
    block = dataclasses.replace(articulated.blocks[0], steps=(step,))
    found = run_predict(dataclasses.replace(articulated, blocks=(block,)), "modes")[
        "harmonic_spacing"
    ]
    assert found.low[row(found, segment="1.1h", mode="stand lateral", harmonic="1")] == 0.0


def test_window_that_reaches_rest_is_still_held_against_harmonics(articulated, run_predict):
    step = dataclasses.replace(
        articulated.blocks[0].steps[1], speed_rad_s=140.0 * RPM, window=Window(200.0 * RPM, 0.0)
    )
    block = dataclasses.replace(articulated.blocks[0], steps=(step,))
    predictions = run_predict(dataclasses.replace(articulated, blocks=(block,)), "modes")
    found, damping = predictions["harmonic_spacing"], predictions["mode_damping"]
    i = row(found, segment="1.1h", mode="stand lateral", harmonic="1")
    assert found.status[i] is Status.OK
    assert found.low[i] == 0.0
    # at rest a hinged blade's lag frequency is zero, and its damping ratio without an end
    i = row(damping, segment="1.1h", mode="lag 1")
    assert damping.status[i] is Status.NOT_COMPUTED


def test_lag_frequency_of_a_hinged_blade_is_far_below_once_per_revolution(predicted):
    """Common practice: hinged blades lag at about a quarter of rotor speed."""
    found = predicted("articulated-run-up")["mode_frequency"]
    i = row(found, segment="1.6h", mode="lag 1")
    assert 0.2 < found.value[i] / found.speed_rad_s[i] < 0.4


def test_flap_of_a_central_hinge_is_at_once_per_revolution(predicted):
    found = predicted("teetering-pair")["mode_frequency"]
    i = row(found, segment="1.4h", mode="flap 1 cyclic")
    assert found.value[i] / found.speed_rad_s[i] == pytest.approx(1.0, abs=1e-6)


def test_flap_is_damped_by_the_air_and_lag_needs_its_damper(articulated, run_predict):
    """Common practice: a blade flapping at once per revolution needs no mechanical damper."""
    hub = dataclasses.replace(articulated.rotor.hub, lag_damper_N_m_s_rad=0.0)
    rotor = dataclasses.replace(articulated.rotor, hub=hub)
    found = run_predict(dataclasses.replace(articulated, rotor=rotor), "modes")["mode_damping"]
    assert articulated.rotor.hub.flap_damper_N_m_s_rad == 0.0
    assert found.low[row(found, segment="1.6h", mode="flap 1")] > 0.1
    assert found.value[row(found, segment="1.6h", mode="lag 1")] == 0.0


def test_crossings_lie_where_frequency_meets_the_harmonic(predicted):
    found = predicted("articulated-run-up")["crossing_speed"]
    i = row(found, mode="stand lateral", harmonic="1")
    assert found.value[i] / RPM == pytest.approx(120.0, rel=1e-9)
    i = row(found, mode="shaft first torsion", harmonic="8")
    assert found.value[i] / RPM == pytest.approx(29.3 * 60.0 / 8.0, rel=1e-9)


def test_modes_are_the_same_at_holds_of_the_same_speed(predicted):
    found = predicted("articulated-run-up")["mode_frequency"]
    for mode in ("flap 2", "lag 2", "torsion 1"):
        first = found.value[row(found, segment="1.6h", mode=mode)]
        again = found.value[row(found, segment="2.4h", mode=mode)]
        assert first == again


def test_frequencies_rise_with_speed_in_flap(predicted):
    found = predicted("articulated-run-up")["mode_frequency"]
    holds = ["1.1h", "1.2h", "1.3h", "1.4h", "1.5h", "1.6h"]
    rising = [found.value[row(found, segment=hold, mode="flap 2")] for hold in holds]
    assert np.all(np.diff(rising) > 0.0)
