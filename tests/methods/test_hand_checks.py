import ast
from pathlib import Path

import numpy as np
import pytest

from planner.methods import hand_checks, hand_checks_flap, hand_checks_hover
from planner.methods.hand_checks import (
    FlapHinge,
    flap_frequency_ratio,
    lift_off_speed_rad_s,
    lock_number,
    resting_stop_moment_n_m,
    steady_flap_moment,
    tip_speed_m_s,
    uniform_centrifugal_force_n,
    uniform_flap_inertia,
    uniform_lift_off_speed_rad_s,
)
from planner.methods.hand_checks_hover import (
    hover_power_coefficient,
    momentum_hover_thrust_coefficient,
)

RPM = np.pi / 30.0


def uniform_hinge(offset: float, spring: float = 0.0, neutral: float = 0.0) -> FlapHinge:
    inertia, moment = uniform_flap_inertia(8.0, 6.0, offset)
    return FlapHinge(inertia, moment, offset, spring, neutral)


@pytest.mark.parametrize("module", [hand_checks, hand_checks_flap, hand_checks_hover])
def test_hand_checks_import_nothing_of_the_main_calculation(module):
    tree = ast.parse(Path(module.__file__).read_text(encoding="utf-8"))
    names = {
        alias.name
        for node in ast.walk(tree)
        if isinstance(node, ast.Import)
        for alias in node.names
    } | {node.module for node in ast.walk(tree) if isinstance(node, ast.ImportFrom)}
    assert names <= {"numpy", "numpy.typing", "dataclasses"}


def test_uniform_moments_agree_with_quadrature():
    radius = np.linspace(0.3, 6.0, 20001)
    inertia, moment = uniform_flap_inertia(8.0, 6.0, 0.3)
    assert np.trapezoid(8.0 * (radius - 0.3) ** 2, radius) == pytest.approx(float(inertia))
    assert np.trapezoid(8.0 * (radius - 0.3), radius) == pytest.approx(float(moment))


@pytest.mark.parametrize(("offset", "worked"), [(0.0, 4.617), (0.3, 5.385)])
def test_lock_number_repeats_worked_values(offset, worked):
    inertia, _ = uniform_flap_inertia(8.0, 6.0, offset)
    assert float(lock_number(1.2, 5.7, 0.3, 6.0, inertia)) == pytest.approx(worked, abs=5e-4)


@pytest.mark.parametrize(("offset", "worked"), [(0.05, 1.038724), (0.04, 1.030776)])
def test_flap_frequency_repeats_worked_values(offset, worked):
    ratio = flap_frequency_ratio(uniform_hinge(6.0 * offset), 35.0)
    assert float(ratio) == pytest.approx(worked, abs=5e-7)
    assert float(ratio) ** 2 == pytest.approx(1.0 + 1.5 * offset / (1.0 - offset))


def test_spring_stiffens_flapping_as_its_share_of_the_inertia_moment():
    hinge = uniform_hinge(0.3, spring=2.0e4)
    speed = np.array([10.0, 35.0])
    squared = flap_frequency_ratio(hinge, speed) ** 2
    bare = flap_frequency_ratio(uniform_hinge(0.3), speed) ** 2
    assert squared - bare == pytest.approx(2.0e4 / (8.0 * 5.7**3 / 3.0 * speed**2))


def test_lift_off_repeats_the_worked_value_in_both_forms():
    stop = np.radians(-3.0)
    assert float(uniform_lift_off_speed_rad_s(6.0, stop)) / RPM == pytest.approx(65.358, abs=5e-4)
    assert float(lift_off_speed_rad_s(uniform_hinge(0.0), stop)) == pytest.approx(
        float(uniform_lift_off_speed_rad_s(6.0, stop)), rel=1e-12
    )


def test_hinge_offset_lowers_lift_off_as_half_of_it_lengthens_the_blade():
    stop = np.radians(-1e-3)  # so small that cos is 1
    speed = lift_off_speed_rad_s(uniform_hinge(0.3), stop)
    longer = uniform_lift_off_speed_rad_s(6.0 + 0.5 * 0.3, stop)
    assert float(speed) == pytest.approx(float(longer), rel=1e-9)


def test_moments_balance_at_lift_off():
    hinge = uniform_hinge(0.3, spring=900.0, neutral=np.radians(1.0))
    stop = np.radians(-4.0)
    speed = float(lift_off_speed_rad_s(hinge, stop))
    # Sum over mass elements at height (r - e) sin(b) and radius e + (r - e) cos(b).
    arm = np.linspace(0.0, 5.7, 40001)
    pull = 8.0 * speed**2 * (0.3 + arm * np.cos(stop)) * arm * np.sin(-stop)
    weight = 8.0 * 9.80665 * arm * np.cos(stop)
    spring = 900.0 * (np.radians(1.0) - stop)
    assert np.trapezoid(pull, arm) == pytest.approx(np.trapezoid(weight, arm) - spring, rel=1e-7)


def test_spring_that_carries_the_blade_gives_lift_off_at_rest():
    hinge = uniform_hinge(0.3, spring=1e5, neutral=0.1)
    assert float(lift_off_speed_rad_s(hinge, -0.05)) == 0.0
    assert float(resting_stop_moment_n_m(hinge, -0.05)) < 0.0


@pytest.mark.parametrize("stop", [0.0, 0.02])
def test_stop_at_or_above_level_is_refused(stop):
    with pytest.raises(ValueError, match=r"droop stop angle: expected below 0 rad, found 0"):
        lift_off_speed_rad_s(uniform_hinge(0.0), stop)
    with pytest.raises(ValueError, match=r"droop stop angle: expected below 0 rad"):
        uniform_lift_off_speed_rad_s(6.0, [-0.1, stop])


def test_resting_moment_is_weight_times_arm():
    moment = float(resting_stop_moment_n_m(uniform_hinge(0.3), np.radians(-3.0)))
    assert moment == pytest.approx(8.0 * 5.7 * 9.80665 * 5.7 / 2.0 * np.cos(np.radians(3.0)))


def test_steady_moment_is_weight_against_inertia():
    found = float(steady_flap_moment(uniform_hinge(0.3, 500.0, 0.02), 35.0))
    inertia = 8.0 * 5.7**3 / 3.0 * 35.0**2
    weight = 8.0 * 5.7**2 / 2.0 * 9.80665
    assert found == pytest.approx((500.0 * 0.02 - weight) / inertia)


@pytest.mark.parametrize("degrees", [-6.0, 0.0, 2.0, 8.0, 14.0])
def test_momentum_thrust_closes_blade_element_and_momentum_forms(degrees):
    theta, tip = np.radians(degrees), 0.97
    thrust = float(momentum_hover_thrust_coefficient(0.55, theta, tip))
    inflow = np.sign(theta) * np.sqrt(abs(thrust) / 2.0)
    blade = 0.5 * 0.55 * (theta * tip**3 / 3.0 - inflow * tip**2 / 2.0)
    assert thrust == pytest.approx(blade, abs=1e-15)


def test_hover_power_is_the_sum_of_ideal_and_profile_power():
    ideal = float(hover_power_coefficient(0.008, 1.0, 0.0, 0.01))
    assert ideal == pytest.approx(0.008 * np.sqrt(0.004))
    both = float(hover_power_coefficient(-0.008, 1.15, 0.08, 0.01))
    assert both == pytest.approx(1.15 * ideal + 0.08 * 0.01 / 8.0)


def test_centrifugal_pull_agrees_with_quadrature_and_ends_at_the_tip():
    radius = np.linspace(0.3, 6.0, 20001)
    pull = float(uniform_centrifugal_force_n(8.0, 0.3, 6.0, 35.0))
    assert np.trapezoid(8.0 * 35.0**2 * radius, radius) == pytest.approx(pull)
    assert float(uniform_centrifugal_force_n(8.0, 6.0, 6.0, 35.0)) == 0.0
    assert tip_speed_m_s([10.0, 35.0], 6.0) == pytest.approx([60.0, 210.0])
