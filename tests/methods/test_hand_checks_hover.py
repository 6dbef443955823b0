"""Closed forms for thrust and power in light wind."""

from __future__ import annotations

import numpy as np
import pytest

from planner.methods.hand_checks_hover import (
    hover_power_coefficient,
    momentum_hover_thrust_coefficient,
    momentum_thrust_in_wind,
    power_in_wind,
)


def test_without_wind_it_is_the_hover_closed_form() -> None:
    pitch = np.radians(np.linspace(-8.0, 14.0, 12))
    thrust, inflow = momentum_thrust_in_wind(0.45, pitch, 0.97, 0.0)
    assert thrust == pytest.approx(momentum_hover_thrust_coefficient(0.45, pitch, 0.97), abs=1e-12)
    assert thrust == pytest.approx(2.0 * inflow * np.abs(inflow), abs=1e-12)


@pytest.mark.parametrize("advance_ratio", [0.0, 0.02, 0.05, 0.1, 0.2])
def test_momentum_and_blade_element_thrust_agree(advance_ratio: float) -> None:
    thrust, inflow = momentum_thrust_in_wind(0.4, 0.12, 1.0, advance_ratio)
    given = 2.0 * inflow * np.hypot(advance_ratio, inflow)
    assert given == pytest.approx(float(thrust), rel=1e-12)


def test_wind_raises_thrust_at_the_same_pitch() -> None:
    thrust, inflow = momentum_thrust_in_wind(0.4, 0.08, 1.0, np.linspace(0.0, 0.2, 9))
    assert np.all(np.diff(thrust) > 0.0)
    assert np.all(np.diff(inflow) < 0.0)


def test_thrust_turns_with_the_pitch() -> None:
    up, _ = momentum_thrust_in_wind(0.4, 0.1, 1.0, 0.05)
    down, _ = momentum_thrust_in_wind(0.4, -0.1, 1.0, 0.05)
    assert down == pytest.approx(-up)


def test_power_without_wind_is_the_hover_closed_form() -> None:
    thrust = 0.006
    inflow = np.sqrt(thrust / 2.0)
    assert power_in_wind(thrust, inflow, 1.15, 0.08 * 0.01) == pytest.approx(
        float(hover_power_coefficient(thrust, 1.15, 0.08, 0.01))
    )
