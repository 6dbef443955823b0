import numpy as np
import pytest

from planner.methods.hover import (
    HoverBlade,
    HoverCoefficients,
    closed_form_inflow_ratio,
    hover_coefficients,
    hover_inflow,
    midpoint_stations,
    momentum_thrust_coefficient,
)
from planner.methods.inflow import tip_loss_factor

LIFT_SLOPE = 5.75
CUT_OUT = 0.125 / 0.762

# Computed separately: blades, solidity, collective, thrust of the closed form without
# loss, and thrust and power of the full solution with tip loss and cut-out.
COMPUTED = [
    (2, 0.04244, 4, 0.001324, 0.001275, 0.0001034),
    (2, 0.04244, 8, 0.003284, 0.003144, 0.0002460),
    (2, 0.04244, 12, 0.005432, 0.005189, 0.0004849),
    (3, 0.06366, 4, 0.001695, 0.001638, 0.0001505),
    (3, 0.06366, 8, 0.004379, 0.004209, 0.0003609),
    (3, 0.06366, 12, 0.007389, 0.007087, 0.0007204),
    (4, 0.08488, 4, 0.001986, 0.001925, 0.0001952),
    (4, 0.08488, 8, 0.005298, 0.005109, 0.0004690),
    (4, 0.08488, 12, 0.009083, 0.008740, 0.0009455),
    (5, 0.10610, 4, 0.002223, 0.002160, 0.0002379),
    (5, 0.10610, 8, 0.006088, 0.005886, 0.0005709),
    (5, 0.10610, 12, 0.010579, 0.010210, 0.0011603),
]


def model_section(alpha, mach):
    del mach
    return LIFT_SLOPE * alpha, 0.0113 + 1.25 * alpha**2


def plain_blade(blades, solidity, pitch_rad, *, root=CUT_OUT, stations=400) -> HoverBlade:
    radius, width = midpoint_stations(root, stations)
    pitch = np.atleast_1d(np.asarray(pitch_rad, dtype=np.float64))[:, None]
    return HoverBlade(
        blades, root, radius, width, np.full(stations, solidity), pitch, np.zeros((1, 1))
    )


def solve(blade, section=model_section) -> HoverCoefficients:
    return hover_coefficients(blade, section, hover_inflow(blade, section))


@pytest.mark.parametrize(("blades", "solidity", "degrees", "thrust", "lossy", "power"), COMPUTED)
def test_thrust_and_power_repeat_separately_computed_values(
    blades, solidity, degrees, thrust, lossy, power
):
    radius, width = midpoint_stations(0.0, 2000)
    pitch = np.radians(degrees)
    inflow = closed_form_inflow_ratio(radius, pitch, solidity * LIFT_SLOPE, 1.0)
    closed = momentum_thrust_coefficient(radius, width, inflow, np.ones_like(radius))
    assert float(closed) == pytest.approx(thrust, rel=5e-4)
    found = solve(plain_blade(blades, solidity, pitch))
    assert found.thrust_coefficient[0] == pytest.approx(lossy, rel=1.5e-3)
    assert found.power_coefficient[0] == pytest.approx(power, rel=1e-3)
    assert found.converged.tolist() == [True]


def test_annular_solution_nears_the_closed_form_with_many_blades():
    radius, width = midpoint_stations(0.0, 400)
    pitch = np.radians(4.0)
    inflow = closed_form_inflow_ratio(radius, pitch, 0.08 * LIFT_SLOPE, 1.0)
    closed = momentum_thrust_coefficient(radius, width, inflow, np.ones_like(radius))
    found = solve(plain_blade(4000, 0.08, pitch, root=0.0))
    assert found.thrust_coefficient[0] == pytest.approx(float(closed), rel=5e-3)


def test_closed_form_with_tip_loss_agrees_with_the_annular_solution():
    radius, width = midpoint_stations(CUT_OUT, 400)
    pitch, solidity_slope = np.radians(8.0), 0.1061 * LIFT_SLOPE
    factor, inflow = np.ones_like(radius), np.zeros_like(radius)
    for _ in range(60):
        inflow = closed_form_inflow_ratio(radius, pitch, solidity_slope, factor)
        factor = tip_loss_factor(5, radius, inflow / radius)
    closed = momentum_thrust_coefficient(radius, width, inflow, factor)
    found = solve(plain_blade(5, 0.1061, pitch))
    assert float(closed) == pytest.approx(found.thrust_coefficient[0], rel=5e-3)


def test_ideal_twist_gives_uniform_inflow():
    radius, _ = midpoint_stations(0.05, 50)
    inflow = closed_form_inflow_ratio(radius, 0.1 / radius, 0.5, 1.0)
    assert np.ptp(inflow) == pytest.approx(0.0, abs=1e-15)


def test_blade_thrust_equals_momentum_of_the_annuli():
    blade = plain_blade(3, 0.07, np.radians([3.0, 10.0]))
    flow = hover_inflow(blade, model_section)
    momentum = momentum_thrust_coefficient(
        blade.radius_fraction, blade.width_fraction, flow.inflow_ratio, flow.loss_factor
    )
    found = hover_coefficients(blade, model_section, flow)
    assert found.thrust_coefficient == pytest.approx(momentum, rel=1e-9)


def test_negative_pitch_mirrors_thrust_and_keeps_power():
    found = solve(plain_blade(3, 0.07, np.radians([-8.0, 8.0])))
    assert found.thrust_coefficient[0] == pytest.approx(-found.thrust_coefficient[1], rel=1e-9)
    assert found.power_coefficient[0] == pytest.approx(found.power_coefficient[1], rel=1e-9)


def test_no_pitch_gives_profile_power_alone():
    found = solve(plain_blade(3, 0.07, 0.0, root=0.0))
    assert found.power_coefficient[0] == pytest.approx(0.07 * 0.0113 / 8.0, rel=1e-3)
    assert found.profile_power_coefficient[0] == pytest.approx(0.07 * 0.0113 / 8.0, rel=1e-3)
    assert found.thrust_coefficient[0] == pytest.approx(0.0, abs=2e-6)


def test_power_exceeds_ideal_and_grows_with_pitch():
    found = solve(plain_blade(4, 0.08, np.radians(np.arange(2.0, 15.0))))
    induced = found.power_coefficient - found.profile_power_coefficient
    ideal = found.thrust_coefficient**1.5 / np.sqrt(2.0)
    assert np.all(induced > 1.02 * ideal)
    assert np.all(induced < 1.35 * ideal)
    assert np.all(np.diff(found.power_coefficient) > 0.0)


def test_stations_converge():
    coarse = solve(plain_blade(4, 0.08, np.radians(8.0), stations=40))
    fine = solve(plain_blade(4, 0.08, np.radians(8.0), stations=1600))
    assert coarse.thrust_coefficient[0] == pytest.approx(fine.thrust_coefficient[0], rel=5e-3)


def test_lane_does_not_depend_on_its_companions():
    alone = solve(plain_blade(4, 0.08, np.radians([8.0])))
    among = solve(plain_blade(4, 0.08, np.radians([1.0, -12.0, 8.0])))
    assert among.thrust_coefficient[2] == alone.thrust_coefficient[0]


def test_tip_mach_reaches_the_section():
    def compressible(alpha, mach):
        return 5.73 / np.sqrt(1.0 - np.minimum(mach, 0.725) ** 2) * alpha, np.full_like(
            alpha * mach, 0.01
        )

    radius, width = midpoint_stations(0.1, 60)
    blade = HoverBlade(
        4, 0.1, radius, width, np.full(60, 0.08), np.array([[0.12]]), np.array([[0.0], [0.6]])
    )
    found = solve(blade, compressible)
    assert found.thrust_coefficient.shape == (2,)
    assert found.thrust_coefficient[1] > 1.05 * found.thrust_coefficient[0]


def test_annulus_without_a_balance_is_said():
    def impossible(alpha, mach):
        return np.full_like(alpha + mach, 1e6), np.zeros_like(alpha + mach)

    flow = hover_inflow(plain_blade(2, 0.1, 0.1, stations=8), impossible)
    found = hover_coefficients(plain_blade(2, 0.1, 0.1, stations=8), impossible, flow)
    assert not flow.converged.any()
    assert np.isnan(flow.inflow_angle_rad).all()
    assert found.converged.tolist() == [False]
    assert np.isnan(found.thrust_coefficient).all()


@pytest.mark.parametrize(("root", "count"), [(1.0, 10), (-0.1, 10), (0.2, 0)])
def test_stations_that_cannot_be_are_refused(root, count):
    with pytest.raises(ValueError, match=r"hover stations: expected a root fraction from 0 to"):
        midpoint_stations(root, count)
