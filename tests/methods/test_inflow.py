import numpy as np
import pytest

from planner.methods.inflow import (
    coleman_gradient,
    drees_gradients,
    edgewise_induced_velocity_m_s,
    mean_induced_velocity_m_s,
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


def test_newton_agrees_with_the_edgewise_solution_without_axial_wind():
    thrust, wind = RNG.uniform(-4e4, 4e4, 200), RNG.uniform(0.0, 30.0, 200)
    flow = mean_induced_velocity_m_s(thrust, 120.0, wind, 0.0)
    reference = edgewise_induced_velocity_m_s(thrust, 120.0, wind)
    assert flow.velocity_m_s == pytest.approx(reference, rel=1e-11)
    assert np.all(flow.converged)
    assert np.all(flow.within_validity)


def test_newton_closes_the_balance_with_axial_wind_of_either_sense_of_thrust():
    thrust, wind = RNG.uniform(100.0, 4e4, 300), RNG.uniform(0.0, 30.0, 300)
    axial = RNG.uniform(0.0, 40.0, 300)
    flow = mean_induced_velocity_m_s(thrust, 120.0, wind, axial)
    mirrored = mean_induced_velocity_m_s(-thrust, 120.0, wind, -axial)
    wake = np.hypot(wind, axial + flow.velocity_m_s)
    assert np.all(flow.converged)
    assert 2.0 * 120.0 * flow.velocity_m_s * wake == pytest.approx(thrust, rel=1e-10)
    assert np.array_equal(mirrored.velocity_m_s, -flow.velocity_m_s)
    assert np.all(mirrored.within_validity)


def test_wind_against_the_wake_is_marked_outside_validity():
    flow = mean_induced_velocity_m_s([2e4, 2e4], 100.0, 5.0, [-3.0, 3.0])
    assert flow.within_validity.tolist() == [False, True]


def test_a_balance_that_does_not_close_is_said():
    flow = mean_induced_velocity_m_s([2e4, np.nan], 100.0, 5.0, 1.0)
    assert flow.converged.tolist() == [True, False]


def test_disc_without_air_is_refused():
    with pytest.raises(ValueError, match=r"air density times disc area: expected 1e-09 to"):
        edgewise_induced_velocity_m_s(1e4, 0.0, 5.0)


def test_skew_angle_runs_from_hover_to_edgewise():
    angle = wake_skew_angle_rad([0.0, 0.0, 0.1, 0.1], [0.0, 0.05, 0.1, 0.0])
    assert angle == pytest.approx([0.0, 0.0, np.pi / 4.0, np.pi / 2.0])
    assert float(wake_skew_angle_rad(0.1, -0.1)) == pytest.approx(np.pi / 4.0)


def test_gradients_vanish_in_hover():
    kx, ky = drees_gradients(0.0, 0.05)
    assert float(coleman_gradient(0.0, 0.05)) == 0.0
    assert float(pitt_peters_gradient(0.0, 0.05)) == 0.0
    assert (float(kx), float(ky)) == (0.0, 0.0)


def test_gradients_grow_with_skew_in_fixed_proportion():
    mu = np.linspace(0.0, 0.5, 26)
    coleman = coleman_gradient(mu, 0.05)
    assert np.all(np.diff(coleman) > 0.0)
    assert coleman[-1] < 1.0
    assert pitt_peters_gradient(mu, 0.05) == pytest.approx(1.4726215564 * coleman)


def test_drees_agrees_with_its_form_in_the_skew_angle():
    mu = np.linspace(0.01, 0.5, 50)
    chi = wake_skew_angle_rad(mu, 0.06)
    kx, ky = drees_gradients(mu, 0.06)
    assert kx == pytest.approx(4.0 / 3.0 * (1.0 - np.cos(chi) - 1.8 * mu**2) / np.sin(chi))
    assert ky == pytest.approx(-2.0 * mu)


def test_drees_beyond_half_is_refused():
    with pytest.raises(ValueError, match=r"advance ratio: expected 0 to 0.5, found 0.51"):
        drees_gradients([0.1, 0.51], 0.05)
    with pytest.raises(ValueError, match=r"advance ratio: expected 0 to inf, found -0.1"):
        coleman_gradient(-0.1, 0.05)


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
