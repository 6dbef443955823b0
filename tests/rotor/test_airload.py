from dataclasses import replace
from typing import Any

import numpy as np
import pytest

from planner.rotor.airload import BladeState, airload, airload_slopes, blade_flow
from planner.rotor.case import Cases, make_cases
from planner.rotor.setup import RotorArrays

AIR = {"air_density_kg_m3": 1.2, "speed_of_sound_m_s": 340.0}
PSI = 2.0 * np.pi * np.arange(8) / 8


def at_azimuths(
    flap: float = 0.05, rate: float = 0.3, pitch: float = 0.1, induced: float = 3.0
) -> BladeState:
    flat = np.ones((1, PSI.size))
    return BladeState(PSI, flap * flat, rate * flat, pitch * flat, np.full((1, 8, 24), induced))


def cases(**changes: float) -> Cases:
    values = {"speed_rad_s": 20.0, "collective_rad": 0.1, "wind_m_s": 30.0, **AIR, **changes}
    return make_cases(**values)


def normal(rotor: RotorArrays, held: Cases, state: BladeState) -> Any:
    return airload(rotor, held, blade_flow(rotor, held, state)).normal_N_m


def test_wind_adds_on_the_advancing_side_and_reverses_the_flow_inboard(make_arrays):
    rotor = make_arrays()
    flow = blade_flow(rotor, cases(), at_azimuths(flap=0.0, rate=0.0, induced=0.0))
    r = rotor.station_radius_m
    assert flow.tangential_m_s[0, 2] == pytest.approx(20.0 * r + 30.0)
    assert flow.tangential_m_s[0, 6] == pytest.approx(20.0 * r - 30.0)
    inboard = r < 1.5
    assert np.abs(flow.alpha_rad[0, 6, inboard]).min() > np.radians(150.0)


def test_wind_presses_on_a_coned_blade_downwind(make_arrays):
    rotor = make_arrays()
    flow = blade_flow(rotor, cases(), at_azimuths(flap=0.1, rate=0.0, induced=0.0))
    assert flow.through_m_s[0, 0] == pytest.approx(np.full(24, 30.0 * np.sin(0.1)))
    assert flow.through_m_s[0, 4] == pytest.approx(np.full(24, -30.0 * np.sin(0.1)))


def test_flat_plate_in_reverse_flow_is_pushed_down_by_nose_up_pitch(make_arrays, smooth_section):
    rotor = make_arrays(section=smooth_section)
    state = at_azimuths(flap=0.0, rate=0.0, pitch=0.15, induced=0.0)
    force = normal(rotor, cases(), state)[0, 6]
    reverse = 20.0 * rotor.station_radius_m < 25.0
    assert np.all(force[reverse] < 0.0)


@pytest.mark.parametrize("load_factor", [0.8, 1.0, 1.25])
def test_slopes_are_derivatives_of_the_normal_force(load_factor, make_arrays, smooth_section):
    rotor = make_arrays(section=smooth_section, hub={"pitch_flap_coupling_rad": 0.4})
    held, step = cases(load_factor=load_factor), 1e-5
    state = at_azimuths()
    flow = blade_flow(rotor, held, state)
    found = airload_slopes(rotor, held, state, flow, airload(rotor, held, flow))

    def quotient(**change: float) -> Any:
        up = {name: getattr(state, name) + step * size for name, size in change.items()}
        down = {name: getattr(state, name) - step * size for name, size in change.items()}
        high, low = replace(state, **up), replace(state, **down)
        return (normal(rotor, held, high) - normal(rotor, held, low)) / (2.0 * step)

    size = np.abs(found.by_pitch_N_m_rad).max()
    assert found.by_pitch_N_m_rad == pytest.approx(quotient(pitch_rad=1.0), abs=2e-3 * size)
    coupled = quotient(flap_rad=1.0, pitch_rad=-np.tan(0.4))
    assert found.by_flap_N_m_rad == pytest.approx(coupled, abs=2e-3 * size)
    through = quotient(induced_m_s=1.0) / np.cos(0.05)
    size = np.abs(found.by_through_N_s_m2).max()
    assert found.by_through_N_s_m2 == pytest.approx(through, abs=2e-3 * size)


def test_load_factor_multiplies_lift_and_not_drag(make_arrays):
    rotor = make_arrays()
    state = at_azimuths()
    once, twice = cases(), cases(load_factor=2.0)
    flow = blade_flow(rotor, once, state)
    single, double = airload(rotor, once, flow), airload(rotor, twice, flow)
    assert np.array_equal(double.unfactored_N_m, single.unfactored_N_m)
    lift = double.normal_N_m - single.normal_N_m
    drag = lift - single.normal_N_m
    ratio = drag / flow.through_m_s
    assert ratio.min() > 0.0
    along = single.drag_N_m - ratio * flow.tangential_m_s
    assert along == pytest.approx(lift * flow.through_m_s / flow.tangential_m_s)


def test_air_at_rest_gives_no_force(make_arrays):
    held = cases(speed_rad_s=0.0, wind_m_s=0.0)
    force = normal(make_arrays(), held, at_azimuths(rate=0.0, induced=0.0))
    assert force == pytest.approx(np.zeros((1, 8, 24)), abs=1e-12)
