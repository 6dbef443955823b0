from dataclasses import replace
from typing import Any

import numpy as np
import pytest

from planner.rotor.case import Cases, make_cases
from planner.rotor.lift_off import lift_off_in_wind, still_air_lift_off
from planner.rotor.result import FlapState
from planner.rotor.trim import free_flap, trim

AIR = {"air_density_kg_m3": 1.2, "speed_of_sound_m_s": 340.0}
STOPS = {"droop_angle_rad": np.radians(-3.0), "up_angle_rad": np.radians(20.0)}
RPM = 30.0 / np.pi


def template(**changes: Any) -> Cases:
    values = {"speed_rad_s": 0.0, "collective_rad": np.radians(3.0), **AIR, **STOPS, **changes}
    return make_cases(**values)


def test_uniform_blade_on_a_central_hinge_without_air(make_arrays):
    """Omega = sqrt(1.5 g / (R sin b)), 65.358 rpm for 6 m and 3 degrees."""
    rotor = make_arrays(hub={"flap_hinge_m": 0.0})
    about = {"flap_inertia_kg_m2": 8.0 * 216.0 / 3.0, "first_moment_kg_m": 8.0 * 18.0}
    cases = template(air_density_kg_m3=1e-7, wind_m_s=9.0)
    found = still_air_lift_off(replace(rotor, **about), cases, np.array([33.0]))
    assert found.is_found.tolist() == [True]
    assert found.speed_rad_s[0] * RPM == pytest.approx(65.358, abs=2e-3)


def test_pitch_lowers_the_lift_off_speed_in_still_air(make_arrays):
    cases = template(collective_rad=np.radians([-4.0, 0.0, 4.0, 8.0]))
    found = still_air_lift_off(make_arrays(), cases, np.full(4, 33.0))
    assert found.is_found.all()
    assert np.all(np.diff(found.speed_rad_s) < 0.0)


def test_lift_off_in_still_air_is_the_same_from_both_searches(make_arrays):
    top = np.array([33.0])
    below = still_air_lift_off(make_arrays(), template(), top).speed_rad_s
    above = lift_off_in_wind(make_arrays(), template(), top).speed_rad_s
    assert below == pytest.approx(above, abs=1e-3)


def test_above_lift_off_in_wind_blades_stay_free_and_just_below_they_touch(make_arrays):
    rotor = make_arrays()
    cases = template(wind_m_s=[5.0, 12.0, 20.0])
    top = np.full(3, 35.0)
    found = lift_off_in_wind(rotor, cases, top)
    assert found.is_found.all()
    assert np.all(np.diff(found.speed_rad_s) > 0.0)
    just_below = trim(rotor, replace(cases, speed_rad_s=found.speed_rad_s - 0.01))
    assert just_below.state.tolist() == [FlapState.INTERMITTENT] * 3
    for share in np.linspace(0.0, 1.0, 24):
        speed = found.speed_rad_s + share * (top - found.speed_rad_s)
        loads, solved = free_flap(rotor, replace(cases, speed_rad_s=speed))
        assert solved.all()
        assert np.all(loads.flap_lowest_rad >= np.radians(-3.0))


def test_contact_at_the_top_speed_is_no_lift_off(make_arrays):
    found = lift_off_in_wind(make_arrays(), template(wind_m_s=[20.0, 5.0]), np.array([7.0, 33.0]))
    assert found.is_found.tolist() == [False, True]
    assert np.isnan(found.speed_rad_s[0])


def test_a_blade_that_never_lifts_is_not_found(make_arrays):
    cases = template(collective_rad=np.radians(-20.0))
    found = still_air_lift_off(make_arrays(), cases, np.array([12.0]))
    assert found.is_found.tolist() == [False]
    assert np.isnan(found.speed_rad_s[0])


def test_first_unsolved_state_ends_the_search(make_arrays, monkeypatch):
    def fails_below(rotor, cases, settings=None):
        loads, solved = free_flap(rotor, cases, settings)
        return loads, solved & (cases.speed_rad_s > 20.0)

    monkeypatch.setattr("planner.rotor.lift_off.free_flap", fails_below)
    found = lift_off_in_wind(make_arrays(), template(wind_m_s=5.0), np.array([33.0]))
    assert found.is_found.tolist() == [False]
    assert np.isnan(found.speed_rad_s[0])


def test_hub_without_stops_needs_no_lift_off(make_arrays):
    values = {"speed_rad_s": 0.0, "collective_rad": 0.1, "wind_m_s": 10.0, **AIR}
    cases = make_cases(**values)
    for search in (still_air_lift_off, lift_off_in_wind):
        found = search(make_arrays("hingeless"), cases, np.array([33.0]))
        assert found.speed_rad_s.tolist() == [0.0]
        assert found.is_found.tolist() == [True]


def test_lift_off_does_not_depend_on_companions(make_arrays):
    rotor = make_arrays()
    cases = template(wind_m_s=[3.0, 8.0, 14.0], collective_rad=np.radians([2.0, 5.0, 1.0]))
    top = np.array([30.0, 33.0, 36.0])
    for search in (still_air_lift_off, lift_off_in_wind):
        together = search(rotor, cases, top).speed_rad_s
        for lane in range(3):
            alone = search(rotor, cases.take(np.array([lane])), top[lane : lane + 1]).speed_rad_s
            assert alone.tobytes() == together[lane : lane + 1].tobytes()


def test_top_speed_must_be_given_for_each_case(make_arrays):
    with pytest.raises(ValueError, match=r"top_speed_rad_s: expected 1 speeds above 0"):
        lift_off_in_wind(make_arrays(), template(), np.array([0.0]))


def test_unsolved_state_next_to_the_change_is_no_lift_off(make_arrays, monkeypatch):
    def fails_between_grid_speeds(rotor, cases, settings=None):
        loads, solved = free_flap(rotor, cases, settings)
        steps = cases.speed_rad_s / 0.33
        return loads, solved & (np.abs(steps - np.round(steps)) < 1e-6)

    monkeypatch.setattr("planner.rotor.lift_off.free_flap", fails_between_grid_speeds)
    found = lift_off_in_wind(make_arrays(), template(wind_m_s=5.0), np.array([33.0]))
    assert found.is_found.tolist() == [False]
