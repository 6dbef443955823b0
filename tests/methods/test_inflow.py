import numpy as np
import pytest

from planner.methods.inflow import (
    coleman_gradient,
    edgewise_induced_velocity_m_s,
    pitt_peters_gradient,
    root_loss_factor,
    tip_loss_factor,
    wake_skew_angle_rad,
)

RNG = np.random.default_rng(7)


def test_edgewise_velocity_closes_the_momentum_balance():
    thrust = RNG.uniform(-4e4, 4e4, 400)
    wind = 10.0 ** RNG.uniform(-6.0, 2.0, 400)
    velocity = edgewise_induced_velocity_m_s(thrust, 120.0, wind)
    balance = 2.0 * 120.0 * velocity * np.hypot(wind, velocity)
    assert balance == pytest.approx(thrust, rel=1e-12)


def test_edgewise_velocity_limits():
    assert float(edgewise_induced_velocity_m_s(2.0e4, 100.0, 0.0)) == pytest.approx(10.0)
    fast = edgewise_induced_velocity_m_s(100.0, 100.0, 60.0)
    assert float(fast) == pytest.approx(100.0 / (2.0 * 100.0 * 60.0), rel=1e-4)
    assert float(edgewise_induced_velocity_m_s(0.0, 100.0, 0.0)) == 0.0


def test_edgewise_velocity_is_odd_in_thrust():
    thrust = np.linspace(0.0, 3e4, 31)
    up = edgewise_induced_velocity_m_s(thrust, 100.0, 8.0)
    down = edgewise_induced_velocity_m_s(-thrust, 100.0, 8.0)
    assert np.array_equal(up, -down)


def test_ratio_form_agrees_with_the_quartic():
    # lam = CT / (2 sqrt(mu^2 + lam^2)), with rho A = 1 and tip speed 1
    roots = np.roots([1.0, 0.0, 0.06**2, 0.0, -0.25 * 0.007**2])
    real = roots[(np.abs(roots.imag) < 1e-12) & (roots.real > 0.0)].real[0]
    assert float(edgewise_induced_velocity_m_s(0.007, 1.0, 0.06)) == pytest.approx(real)


def test_disc_without_air_is_refused():
    with pytest.raises(ValueError, match=r"air density times disc area: expected 1e-09 to"):
        edgewise_induced_velocity_m_s(1e4, 0.0, 5.0)


def test_skew_angle_runs_from_hover_to_edgewise():
    angle = wake_skew_angle_rad([0.0, 0.0, 0.1, 0.1], [0.0, 0.05, 0.1, 0.0])
    assert angle == pytest.approx([0.0, 0.0, np.pi / 4.0, np.pi / 2.0])
    assert float(wake_skew_angle_rad(0.1, -0.1)) == pytest.approx(np.pi / 4.0)


def test_gradients_grow_with_skew_in_fixed_proportion():
    mu = np.linspace(0.0, 0.5, 26)
    coleman = coleman_gradient(mu, 0.05)
    assert np.all(np.diff(coleman) > 0.0)
    assert coleman[-1] < 1.0
    assert pitt_peters_gradient(mu, 0.05) == pytest.approx(1.4726215564 * coleman)


def test_loss_factors_fall_to_nothing_at_their_ends():
    x = np.linspace(0.2, 1.0, 81)
    tip, root = tip_loss_factor(4, x, 0.08), root_loss_factor(4, x, 0.2, 0.08)
    assert tip[-1] == 0.0
    assert root[0] == 0.0
    assert np.all(np.diff(tip) <= 0.0)
    assert np.all(np.diff(root) >= 0.0)
    assert tip[0] == pytest.approx(1.0, abs=1e-6)
    assert root[-1] == pytest.approx(1.0, abs=1e-6)


def test_loss_factor_nears_one_with_many_blades_or_without_inflow():
    few, many = tip_loss_factor(2, 0.97, 0.08), tip_loss_factor(20, 0.97, 0.08)
    assert few < many < 1.0
    assert float(tip_loss_factor(2, 0.97, 0.0)) == pytest.approx(1.0)
    assert float(tip_loss_factor(2, 0.97, -0.08)) == float(few)
    with pytest.raises(ValueError, match=r"radius fraction: expected 1e-06 to 1, found 1.1"):
        tip_loss_factor(2, 1.1, 0.08)
