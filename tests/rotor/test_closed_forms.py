"""Trim against pencil-and-paper results, each within what the closed form leaves out."""

from dataclasses import replace
from typing import Any

import numpy as np
import pytest

from planner.methods.hover import HoverBlade, hover_coefficients, hover_inflow, midpoint_stations
from planner.methods.section_lookup import coefficients
from planner.methods.sections import NACA_0012_DIVERGENCE_MACH, SymmetricLaw, symmetric_section
from planner.methods.stall import Continuation
from planner.rotor.case import gravity_vector_m_s2, make_cases
from planner.rotor.result import TrimSettings
from planner.rotor.setup import RotorArrays, rotor_arrays
from planner.rotor.trim import trim

AIR = {"air_density_kg_m3": 1.2, "speed_of_sound_m_s": 340.0}
EVEN = TrimSettings(gradient="none")
NO_GRAVITY = np.zeros(3)


def cut(rotor: RotorArrays, inner_m: float, outer_m: float) -> RotorArrays:
    """The rotor with lift between two radii only."""
    node, weight = np.polynomial.legendre.leggauss(rotor.chord_m.size)
    half = 0.5 * (outer_m - inner_m)
    return replace(
        rotor, station_radius_m=inner_m + half * (1.0 + node), station_width_m=half * weight
    )


@pytest.fixture
def linear_rotor(make_rotor, linear_section):
    def build(hinge_m, inner_m, outer_m):
        hub = {"flap_hinge_m": hinge_m}
        model = make_rotor(section=linear_section, hub=hub, twist_rad=0.0)
        return cut(rotor_arrays(model), inner_m, outer_m)

    return build


# Computed separately by a march in time of the small-angle equation: advance ratio, then mean,
# cosine and sine flap in degrees, and how far the exact equation may differ.
OFFSET_HINGE = [(0.07, 1.790, -0.975, -0.034, 0.01), (0.30, 2.102, -4.378, -0.291, 0.06)]


@pytest.mark.parametrize(("mu", "mean", "cosine", "sine", "band"), OFFSET_HINGE)
def test_offset_hinge_in_wind(mu, mean, cosine, sine, band, linear_rotor):
    rotor = linear_rotor(0.3, 0.9, 0.97 * 6.0)
    tip_speed = 35.0 * 6.0
    cases = make_cases(
        speed_rad_s=35.0,
        collective_rad=np.radians(6.0),
        wind_m_s=mu * tip_speed,
        given_inflow_m_s=0.03 * tip_speed,
        **AIR,
    )
    found = trim(rotor, cases, EVEN).loads
    assert np.degrees(found.flap_mean_rad[0]) == pytest.approx(mean, abs=band)
    assert np.degrees(found.flap_cosine_rad[0]) == pytest.approx(cosine, abs=band)
    assert np.degrees(found.flap_sine_rad[0]) == pytest.approx(sine, abs=band)


def test_central_hinge_in_wind(linear_rotor):
    rotor = linear_rotor(0.0, 1e-3, 6.0)
    lock = 1.2 * 5.7 * 0.3 * 6.0**4 / rotor.flap_inertia_kg_m2
    tip_speed, mu, inflow, pitch = 35.0 * 6.0, 0.1, 0.03, np.radians(6.0)
    cases = make_cases(
        speed_rad_s=35.0,
        collective_rad=pitch,
        wind_m_s=mu * tip_speed,
        given_inflow_m_s=inflow * tip_speed,
        gravity_m_s2=NO_GRAVITY,
        **AIR,
    )
    found = trim(rotor, cases, EVEN).loads
    mean = lock * (pitch * (1.0 + mu**2) / 8.0 - inflow / 6.0)
    cosine = -mu * (8.0 / 3.0 * pitch - 2.0 * inflow) / (1.0 - 0.5 * mu**2)
    sine = -4.0 / 3.0 * mu * mean / (1.0 + 0.5 * mu**2)
    assert found.flap_mean_rad[0] == pytest.approx(mean, rel=0.01)
    assert found.flap_cosine_rad[0] == pytest.approx(cosine, rel=0.01)
    assert found.flap_sine_rad[0] == pytest.approx(sine, rel=0.02)


def test_cyclic_of_a_central_hinge_tilts_the_disc_a_quarter_turn_later(linear_rotor):
    rotor = linear_rotor(0.0, 1e-3, 6.0)
    cyclic = np.radians(2.0)
    cases = make_cases(
        speed_rad_s=35.0,
        collective_rad=np.radians(4.0),
        cyclic_cosine_rad=[cyclic, 0.0],
        cyclic_sine_rad=[0.0, cyclic],
        given_inflow_m_s=4.0,
        gravity_m_s2=NO_GRAVITY,
        **AIR,
    )
    found = trim(rotor, cases, EVEN).loads
    assert found.flap_sine_rad == pytest.approx([cyclic, 0.0], abs=2e-4)
    assert found.flap_cosine_rad == pytest.approx([0.0, -cyclic], abs=2e-4)


def coning_moments(rotor: RotorArrays, inner_m: float, outer_m: float) -> tuple[Any, Any]:
    """Integrals of (r - e) r^2 and (r - e) r over the lifting blade."""
    edges = np.linspace(inner_m, outer_m, 20001)
    r, width = 0.5 * (edges[1:] + edges[:-1]), np.diff(edges)
    arm = r - rotor.hub.hinge_m
    return np.sum(arm * r**2 * width), np.sum(arm * r * width)


@pytest.mark.parametrize("delta_three_deg", [0.0, 25.0, -20.0])
@pytest.mark.parametrize("mounting", ["upright", "inverted"])
def test_coning_with_pitch_coupling_and_gravity(
    delta_three_deg, mounting, make_rotor, linear_section
):
    coupling = {"pitch_flap_coupling_rad": np.radians(delta_three_deg)}
    model = make_rotor(section=linear_section, hub=coupling, twist_rad=0.0)
    rotor = cut(rotor_arrays(model), 0.9, 6.0)
    Omega, v, pitch = 30.0, 3.0, np.radians(5.0)
    gravity = gravity_vector_m_s2(mounting)
    cases = make_cases(
        speed_rad_s=Omega, collective_rad=pitch, given_inflow_m_s=v, gravity_m_s2=gravity, **AIR
    )
    found = trim(rotor, cases, EVEN).loads.flap_mean_rad[0]
    by_pitch, by_inflow = coning_moments(rotor, 0.9, 6.0)
    strength = 0.5 * 1.2 * 5.7 * 0.3
    inertia, S = rotor.flap_inertia_kg_m2, rotor.first_moment_kg_m
    lift = strength * (Omega**2 * by_pitch * pitch - Omega * by_inflow * v)
    stiffness = Omega**2 * (inertia + 0.3 * S)
    stiffness += strength * Omega**2 * by_pitch * np.tan(np.radians(delta_three_deg))
    assert found == pytest.approx((lift + S * gravity[2]) / stiffness, rel=0.005)


def test_level_axis_shakes_a_coned_blade_once_a_turn(make_arrays):
    rotor = make_arrays(hub={"flap_hinge_m": 0.0, "flap_spring_N_m_rad": 2e4})
    gravity = gravity_vector_m_s2("axis level")
    thin = {"air_density_kg_m3": 1e-6, "speed_of_sound_m_s": 340.0}
    cases = make_cases(
        speed_rad_s=2.0,
        collective_rad=0.0,
        gravity_m_s2=gravity,
        **thin,
    )
    coned = replace(rotor, hub=replace(rotor.hub, spring_neutral_rad=0.1))
    found = trim(coned, cases).loads
    spin = 4.0 * rotor.flap_inertia_kg_m2
    mean = 2e4 * 0.1 / (2e4 + spin)
    sine = rotor.first_moment_kg_m * 9.80665 * mean / 2e4
    assert found.flap_mean_rad[0] == pytest.approx(mean, rel=0.01)
    assert found.flap_sine_rad[0] == pytest.approx(sine, rel=0.01)
    assert found.flap_cosine_rad[0] == pytest.approx(0.0, abs=1e-6)


@pytest.mark.parametrize("collective_deg", [4.0, 12.0])
def test_hover_thrust_and_power_agree_with_hover_theory(collective_deg, make_arrays):
    rotor = make_arrays(mass_kg_m=8000.0)
    Omega = 33.0
    cases = make_cases(speed_rad_s=Omega, collective_rad=np.radians(collective_deg), **AIR)
    found = trim(rotor, cases)
    stall = np.radians(15.0)
    law = SymmetricLaw(5.73, 0.0087, 0.4, stall, 16 / 15 * stall, NACA_0012_DIVERGENCE_MACH)
    table = symmetric_section(law, Continuation(20.0, 0.0087))
    x, width = midpoint_stations(0.15, 100)
    pitch = np.radians(collective_deg) + np.radians(-8.0) * (x - 0.75)
    blade = HoverBlade(
        4, 0.15, x, width, np.full(100, 4 * 0.3 / (np.pi * 6.0)), pitch, np.array([198.0 / 340.0])
    )

    def section(alpha, mach):
        return coefficients(table, alpha, mach)[:2]

    wanted = hover_coefficients(blade, section, hover_inflow(blade, section))
    pressure = 1.2 * np.pi * 36.0 * 198.0**2
    thrust = float(wanted.thrust_coefficient) * pressure
    power = float(wanted.power_coefficient) * pressure * 198.0
    assert found.loads.thrust_N[0] == pytest.approx(thrust, rel=0.003)
    assert found.power_W[0] == pytest.approx(power, rel=0.003)


def test_inflow_at_speed_tends_to_glauert(make_arrays):
    rotor = make_arrays()
    cases = make_cases(speed_rad_s=33.0, collective_rad=0.1, wind_m_s=40.0, **AIR)
    found = trim(rotor, cases).loads
    area = np.pi * (36.0 - 0.81)
    glauert = found.thrust_N[0] / (2.0 * 1.2 * area * 40.0)
    assert found.induced_m_s[0] == pytest.approx(glauert, rel=0.12)


def test_hub_moment_of_a_central_spring(make_arrays):
    spring = 2e4
    hub = {"equivalent_hinge_m": 0.0, "equivalent_spring_N_m_rad": spring}
    rotor = make_arrays("hingeless", hub=hub)
    cases = make_cases(speed_rad_s=33.0, collective_rad=0.1, wind_m_s=12.0, **AIR)
    found = trim(rotor, cases).loads
    first = np.hypot(found.flap_cosine_rad[0], found.flap_sine_rad[0])
    assert found.hub_moment_N_m[0] == pytest.approx(2.5 * spring * first, rel=1e-9)
    swing = found.flap_highest_rad[0] - np.radians(1.0)
    assert found.root_flap_moment_N_m[0] == pytest.approx(spring * swing, rel=1e-3)


def test_hub_moment_of_a_teeter_spring_peaks_at_twice_its_steady_part(make_arrays):
    rotor = make_arrays("teetering", hub={"teeter_spring_N_m_rad": 3000.0})
    cases = make_cases(speed_rad_s=33.0, collective_rad=0.1, wind_m_s=12.0, **AIR)
    found = trim(rotor, cases).loads
    first = np.hypot(found.flap_cosine_rad[0], found.flap_sine_rad[0])
    assert found.hub_moment_N_m[0] == pytest.approx(0.5 * 3000.0 * first, rel=1e-6)
    assert found.hub_moment_peak_N_m[0] == pytest.approx(3000.0 * first, rel=0.02)
