"""Gessow, Myers: Aerodynamics of the Helicopter, 1952. Classical results, from memory."""

import numpy as np
import pytest

from planner.methods.hand_checks_flap import (
    FlapBlade,
    FlapLoading,
    coning_rad,
    flap_damping_ratio,
    second_order_flap_rad,
)

pytestmark = pytest.mark.published

BLADE = FlapBlade(7.0, 1.0, 0.0, 0.0, 1.0, 0.0)
MU = np.linspace(0.0, 0.3, 7)


def test_coning_is_set_by_pitch_at_four_fifths_of_the_radius():
    theta, twist, inflow = 0.12, -0.15, 0.05
    loading = FlapLoading(theta, twist, 0.0, 0.0, inflow, 0.0, 0.0, 0.0)
    four_fifths = theta + 0.05 * twist
    expected = 7.0 * (four_fifths / 8.0 - inflow / 6.0)
    assert float(coning_rad(BLADE, loading)) == pytest.approx(expected)


def test_flap_damping_of_a_blade_hinged_at_the_shaft():
    assert float(flap_damping_ratio(BLADE)) == pytest.approx(7.0 / 16.0)


def test_flapping_in_edgewise_wind_of_a_blade_hinged_at_the_shaft():
    theta, inflow = 0.1, 0.03
    loading = FlapLoading(theta, 0.0, 0.0, 0.0, inflow, 0.0, MU, 0.0)
    flap = second_order_flap_rad(BLADE, loading)
    mean = 7.0 * (theta * (1.0 + MU**2) / 8.0 - inflow / 6.0)
    cosine = -MU * (8.0 / 3.0 * theta - 2.0 * inflow) / (1.0 - MU**2 / 2.0)
    sine = -4.0 / 3.0 * MU * mean / (1.0 + MU**2 / 2.0)
    assert flap.mean_rad == pytest.approx(mean)
    assert flap.cosine_rad == pytest.approx(cosine)
    assert flap.sine_rad == pytest.approx(sine)
