"""Dynamic inflow: time constant of small changes about hover."""

import numpy as np
import pytest

from planner.methods.dynamic_inflow import APPARENT_MASS_SHARE, inflow_time_constant_s


def test_time_constant_is_that_of_the_linearised_balance():
    """K R dl/dt / Omega R = C_T / 2 ... - l^2 : a small change of l decays with it."""
    speed, ratio, solidity_slope = 30.0, 0.05, 0.4
    tau = float(inflow_time_constant_s(speed, ratio, solidity_slope))

    def rate(change):
        lift = -0.25 * solidity_slope * change
        momentum = 2.0 * ((ratio + change) ** 2 - ratio**2)
        return speed * (lift - momentum) / APPARENT_MASS_SHARE

    assert rate(1e-6) == pytest.approx(-1e-6 / tau, rel=1e-4)


def test_without_feedback_of_the_blades_it_is_longer():
    both = inflow_time_constant_s(30.0, 0.05, [0.0, 0.4])
    assert both[0] == pytest.approx(APPARENT_MASS_SHARE / (4.0 * 0.05) / 30.0)
    assert both[1] < both[0]


@pytest.mark.parametrize(
    ("values", "message"),
    [
        ((0.0, 0.05, 0.4), r"rotor speed: expected"),
        ((30.0, 0.0, 0.4), r"inflow ratio: expected"),
        ((30.0, 0.05, -0.1), r"solidity times lift slope: expected"),
        ((np.nan, 0.05, 0.4), r"rotor speed: expected"),
    ],
)
def test_values_out_of_range_are_refused(values, message):
    with pytest.raises(ValueError, match=message):
        inflow_time_constant_s(*values)
