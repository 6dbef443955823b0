from typing import Any

import numpy as np
import pytest

from planner.rotor.balance import evaluate, flap_imbalance_n_m
from planner.rotor.case import Cases, gravity_vector_m_s2, make_cases
from planner.rotor.parked import parked
from planner.rotor.result import FlapState
from planner.rotor.trim import trim

AIR = {"air_density_kg_m3": 1.2, "speed_of_sound_m_s": 340.0}
STOPS = {"droop_angle_rad": np.radians(-3.0), "up_angle_rad": np.radians(20.0)}


def still(**changes: Any) -> Cases:
    values = {"speed_rad_s": 0.0, "collective_rad": 0.0, **AIR, **STOPS, **changes}
    return make_cases(**values)


def test_weight_rests_on_the_droop_stop_in_still_air(make_arrays):
    rotor = make_arrays()
    result = trim(rotor, still())
    weight = 9.80665 * rotor.first_moment_kg_m * np.cos(np.radians(3.0))
    assert result.state.tolist() == [FlapState.RESTING]
    assert result.stop_moment_N_m == pytest.approx([weight])
    assert result.loads.thrust_N[0] == pytest.approx(0.0, abs=1e-9)
    assert np.isnan(result.blade_loading[0])


def test_wind_on_pitched_blades_raises_the_worst_stop_moment(make_arrays):
    result = trim(make_arrays(), still(collective_rad=0.1, wind_m_s=[0.0, 5.0, 10.0]))
    assert np.all(np.diff(result.stop_moment_N_m) > 0.0)


def test_strong_wind_lifts_a_light_blade_at_some_azimuth(make_arrays):
    rotor = make_arrays(mass_kg_m=2.0)
    result = trim(rotor, still(collective_rad=0.15, wind_m_s=[3.0, 20.0]))
    assert result.state[0] == FlapState.RESTING
    assert result.state[1] in {FlapState.INTERMITTENT, FlapState.UP_STOP}
    assert result.loads.flap_highest_rad[1] > np.radians(-3.0)
    assert result.loads.flap_lowest_rad[1] == pytest.approx(np.radians(-3.0))


def test_inverted_blade_hangs_on_the_up_stop(make_arrays):
    rotor = make_arrays()
    result = trim(rotor, still(gravity_m_s2=gravity_vector_m_s2("inverted")))
    weight = 9.80665 * rotor.first_moment_kg_m * np.cos(np.radians(20.0))
    assert result.state.tolist() == [FlapState.RESTING_UP]
    assert result.stop_moment_N_m == pytest.approx([weight])
    assert result.loads.flap_lowest_rad == pytest.approx([np.radians(20.0)])


def test_spring_can_carry_the_blade_off_both_stops(make_arrays):
    spring = 1e5
    rotor = make_arrays(hub={"flap_spring_N_m_rad": spring, "flap_spring_neutral_rad": 0.02})
    result = trim(rotor, still())
    assert result.state.tolist() == [FlapState.FREE]
    flap = result.loads.flap_mean_rad[0]
    weight = 9.80665 * rotor.first_moment_kg_m * np.cos(flap)
    assert spring * (0.02 - flap) == pytest.approx(weight, rel=1e-9)
    assert result.stop_moment_N_m.tolist() == [0.0]


def test_hingeless_blade_droops_in_its_spring(make_arrays):
    rotor = make_arrays("hingeless")
    values = {"speed_rad_s": 0.0, "collective_rad": 0.0, **AIR}
    result = trim(rotor, make_cases(**values))
    flap = result.loads.flap_mean_rad[0]
    weight = 9.80665 * rotor.first_moment_kg_m * np.cos(flap)
    assert rotor.hub.spring_N_m_rad * (np.radians(1.0) - flap) == pytest.approx(weight)
    assert result.loads.root_flap_moment_N_m == pytest.approx([weight])


def test_teetering_rotor_tips_on_to_a_stop(make_arrays):
    rotor = make_arrays("teetering")
    result = trim(rotor, still())
    assert result.state.tolist() == [FlapState.RESTING]
    assert result.loads.flap_lowest_rad == pytest.approx([np.radians(-3.0)])
    assert result.loads.flap_highest_rad == pytest.approx([np.radians(8.0)])
    lower, upper = np.cos(np.radians([-3.0, 8.0]))
    weight = 9.80665 * rotor.first_moment_kg_m * (lower - upper)
    assert result.stop_moment_N_m == pytest.approx([weight])


def test_parked_state_is_met_continuously_from_slow_turning(make_arrays):
    cases = make_cases(speed_rad_s=[0.0, 0.05], collective_rad=0.05, wind_m_s=6.0, **AIR, **STOPS)
    result = trim(make_arrays(), cases)
    assert result.state.tolist() == [FlapState.RESTING] * 2
    assert result.stop_moment_N_m[1] == pytest.approx(result.stop_moment_N_m[0], rel=0.02)


def test_parked_pair_stays_in_line_and_in_balance_in_wind(make_arrays):
    rotor = make_arrays("teetering", hub={"teeter_spring_N_m_rad": 2000.0}, mass_kg_m=2.0)
    cases = still(collective_rad=0.1, wind_m_s=12.0)
    problem, solution = parked(rotor, cases, 24)
    lower, upper = solution.trial.fixed_flap_rad[0, :24], solution.trial.fixed_flap_rad[0, 24:]
    assert lower + np.roll(upper, -12) == pytest.approx(np.full(24, np.radians(5.0)))
    moment = -flap_imbalance_n_m(rotor, cases, evaluate(problem, cases, solution.trial))[0]
    net = moment[:24] - np.roll(moment[24:], -12)
    floating = ~(solution.on_droop[0] | solution.on_up[0])
    assert np.any(floating)
    assert not np.all(floating)
    assert net[floating] == pytest.approx(np.zeros(floating.sum()), abs=1e-6)
    assert np.all(net[solution.on_droop[0]] <= 0.0)
    assert np.ptp(lower) > np.radians(1.0)


def test_parked_blade_is_outside_section_data_only_where_wind_matters_beside_weight(make_arrays):
    result = trim(make_arrays(), still(wind_m_s=[2.0, 25.0]))
    assert result.outside_sections.tolist() == [False, True]
