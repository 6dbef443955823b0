"""Rotors at rest, and what the wind does to them then."""

from dataclasses import replace

import numpy as np
import pytest

from planner.methods.blade_inertia import blade_inertia
from planner.model.rotor import Stop
from planner.rotor.blade_views import mass_distribution
from planner.rotor.march_case import MarchSettings
from tests.rotor.marching import block_at_once, history, marched, model_of

G = 9.80665
REST = history(0.0, 0.6)
SETTINGS = MarchSettings(24, 0.02, 4, lead_in_s=0.2, lead_in_turns=0.1)


@pytest.mark.parametrize("spring", [0.0, 5000.0])
def test_blade_presses_on_its_stop_with_its_weight_and_its_spring(make_rotor, spring):
    hub = {"flap_spring_N_m_rad": spring, "flap_spring_neutral_rad": 0.02}
    model = model_of(make_rotor(hub=hub), SETTINGS)
    result = marched(model, REST)
    turned = result.extremes.lowest_flap_rad[0, 0]
    block = block_at_once(model, REST)
    rigid = block.x[0, 0, 0]
    wanted = model.arrays.first_moment_kg_m * G * np.cos(rigid) + spring * (turned - 0.02)
    assert result.converged.all()
    assert result.extremes.droop_N_m == pytest.approx(wanted, rel=1e-7)
    assert result.extremes.highest_flap_rad[0, 0] == pytest.approx(turned, abs=1e-10)
    assert turned == pytest.approx(np.radians(-3.0) - wanted / 1e6, rel=1e-9)
    assert rigid < turned - 0.01  # the elastic blade droops beyond its root


def test_a_blade_at_rest_droops_as_a_beam_on_its_stop(make_rotor):
    """Uniform mass and stiffness: tip at l sin b beyond the stop's slope less m g l^4 / (8 EI)."""
    rotor = make_rotor()
    flat = rotor.blade.stations
    even = replace(flat, flap_stiffness_N_m2=np.full_like(flat.radius_m, 4e4))
    rotor = replace(rotor, blade=replace(rotor.blade, stations=even))
    tip = marched(model_of(rotor, SETTINGS), REST).extremes.lowest_tip_m.min()
    length = 6.0 - 0.3
    pressed = 8.0 * length**2 / 2.0 * G
    wanted = length * (np.radians(-3.0) - pressed / 1e6) - 8.0 * G * length**4 / (8.0 * 4e4)
    assert tip == pytest.approx(wanted, rel=0.02)  # large angles of rigid flap


def test_built_in_blade_at_rest_has_its_weight_at_the_root(make_rotor):
    rotor = make_rotor("hingeless")
    result = marched(model_of(rotor, SETTINGS), REST)
    about = blade_inertia(mass_distribution(rotor.blade), 0.4)
    assert result.extremes.root_N_m == pytest.approx(about.first_moment_kg_m * G, rel=1e-4)
    assert result.extremes.hub_N_m == pytest.approx(0.0, abs=0.01)
    assert result.extremes.droop_N_m == pytest.approx(0.0)


def test_pair_at_rest_is_balanced_and_symmetric_when_its_blades_change_places(make_rotor):
    result = marched(
        model_of(make_rotor("teetering"), SETTINGS),
        REST,
        wind_m_s=[0.0, 9.0, 9.0],
        azimuth_rad=[0.0, 0.4, 0.4 + np.pi],
    )
    extremes = result.extremes
    assert extremes.highest_flap_rad[0, 0] == pytest.approx(np.radians(2.5), abs=1e-6)
    assert extremes.highest_flap_rad[1] == pytest.approx(extremes.highest_flap_rad[2], rel=1e-6)
    one, other = extremes.lowest_tip_m.min(axis=2)[1:]
    assert one == pytest.approx(other[::-1], rel=1e-6)
    assert extremes.droop_N_m[1] == pytest.approx(extremes.droop_N_m[2], rel=1e-6, abs=1e-6)


@pytest.mark.parametrize("kind", ["articulated", "teetering", "hingeless"])
def test_wind_from_behind_and_gusts_shake_a_parked_rotor_that_stays_finite(make_rotor, kind):
    result = marched(
        model_of(make_rotor(kind), SETTINGS),
        REST,
        wind_m_s=[0.0, -12.0, 12.0, 0.0],
        gust_m_s=[0.0, 0.0, 0.0, 20.0],
        gust_length_s=0.5,
        azimuth_rad=[0.0, 0.0, np.pi, 1.0],
    )
    assert result.converged.all()
    thrust = result.extremes.thrust_N
    assert thrust[0] == pytest.approx(0.0, abs=1e-9)
    if kind != "teetering":  # wind from behind on one blade is wind from ahead on the opposite
        assert abs(thrust[1]) > 1.0
    tip = result.extremes.lowest_tip_m.min(axis=(1, 2))
    assert tip[3] < tip[0]
    if kind == "articulated":
        assert thrust[1] == pytest.approx(thrust[2], rel=1e-6)


def test_up_stop_alone_holds_a_blade_that_a_gust_throws_up(make_rotor):
    rotor = replace(make_rotor(), up_stop=Stop(np.radians(4.0), 2e5, 200.0, 5e3))
    model = model_of(rotor, SETTINGS)
    result = marched(model, history(3.0, 1.0, 0.25), wind_m_s=30.0, gust_m_s=30.0)
    assert result.converged.all()
    assert result.extremes.up_N_m.max() > 100.0
    most = np.radians(4.0) + result.extremes.up_N_m.max() / 2e5
    assert result.extremes.highest_flap_rad.max() == pytest.approx(most, abs=np.radians(0.05))
