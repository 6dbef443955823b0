"""The adaptive reference of a march, held to closed forms, the trim and its stored results."""

import dataclasses
import json
import math
from typing import Any

import numpy as np
import pytest

from planner.model.rotor import Retraction
from planner.rotor.airload import BladeState, blade_flow
from planner.rotor.blade_views import beam
from planner.rotor.case import make_cases
from planner.rotor.setup import rotor_arrays
from planner.rotor.trim import trim
from tests.reference.blade_shapes import blade_shapes
from tests.reference.make_march_references import STORED, equations, setups
from tests.reference.march_equations import (
    Case,
    Equations,
    Instant,
    constant,
    lag_hinge,
    steady_wind,
    tabled,
)
from tests.reference.march_reference import Solver, contacts, march, reference_march
from tests.reference.reference_rotor import DROOP_STOP, UP_STOP, reference_rotor

MODEL = reference_rotor()
ROTOR = rotor_arrays(MODEL)
BEAM = beam(MODEL.blade)
HINGE = ROTOR.hub.hinge_m
RIGID = blade_shapes(BEAM, HINGE, ROTOR.station_radius_m, 0, "none")
ELASTIC = blade_shapes(BEAM, HINGE, ROTOR.station_radius_m, 3)
FREE = (None, None)


def energy(model: Equations, q: Any, rate: Any, speed: float) -> Any:
    """Kinetic, strain, weight and centrifugal energy of a blade; constant without air."""
    blade, b = model.blade, q[0]
    turning = speed**2 * (
        0.5 * model.inertia * (np.sin(b) ** 2 - b**2) - model.e_S * (np.cos(b) - 1.0 + 0.5 * b**2)
    )
    stiffness = blade.stiffness_0 + speed**2 * blade.stiffness_omega2
    stored = 0.5 * np.sum(q * (stiffness @ q), axis=0) + turning
    weight = 9.80665 * (blade.weight_kg_m[0] * np.sin(b) + blade.weight_kg_m[1:] @ q[1:])
    return stored + weight + 0.5 * np.sum(rate * (blade.mass @ rate), axis=0)


@pytest.mark.parametrize("speed", [0.0, 8.0])
def test_energy_is_kept_in_a_drop_without_air_and_damping(speed):
    bare = dataclasses.replace(DROOP_STOP, damping_N_m_s_rad=0.0)
    case = Case(0.8, constant(speed), air_density_kg_m3=0.0)
    model = Equations(ROTOR, ELASTIC, (bare, None), case)
    start = model.start(np.array([0.15, 0.02, -0.01, 0.0, 0.0]))
    fallen = march(model, start, Solver("DOP853", 1e-9, 1e-11))
    q, rate = (states[0] for states in model.blade_states(fallen.state))
    total = energy(model, q, rate, speed)
    total += 0.5 * 200e3 * np.maximum(fallen.droop_rad - fallen.hinge_rad(), 0.0) ** 2
    assert fallen.droop_moment_n_m().max() > 500.0
    assert np.ptp(total) < 1e-5


@pytest.mark.parametrize("rest", ["orthogonal", "clamped"])
def test_blade_at_rest_presses_on_its_stop_with_its_weight(rest):
    """S g cos b, and a tip that more modes leave where it is."""
    case = Case(1.0, air_density_kg_m3=0.0)
    flat = dataclasses.replace(DROOP_STOP, angle_rad=0.0)
    tips = []
    for n_elastic in (3, 12):
        blade = blade_shapes(BEAM, HINGE, ROTOR.station_radius_m, n_elastic, rest)
        model = Equations(ROTOR, blade, (flat, None), case)
        q = model.at_rest()
        pressed = ROTOR.first_moment_kg_m * 9.80665 * math.cos(q[0])
        assert -200e3 * (blade.hinge_slope @ q) == pytest.approx(pressed, rel=1e-6)
        assert model(0.0, model.start(q)) == pytest.approx(0.0, abs=1e-6)
        tips.append(blade.tip @ q)
    assert tips[1] == pytest.approx(tips[0], rel=1e-3)


def test_calm_hold_comes_to_the_flap_of_the_trim():
    speed, collective = 25.0, math.radians(8.0)
    air = {"air_density_kg_m3": 1.2, "speed_of_sound_m_s": 340.0}
    held = trim(ROTOR, make_cases(speed_rad_s=speed, collective_rad=collective, **air))
    model = Equations(ROTOR, RIGID, FREE, Case(4.0, constant(speed), constant(collective)))
    settled = march(model, model.start(np.array([0.05]), induced=4.0))
    assert held.converged.all()
    wanted = float(held.loads.flap_mean_rad[0])
    assert wanted > math.radians(2.0)
    assert settled.hinge_rad()[-1] == pytest.approx(wanted, abs=math.radians(0.005))


@pytest.mark.parametrize("azimuth", [0.3, 2.0, 4.4])
def test_air_meets_the_blade_as_in_the_trim_from_any_direction(azimuth):
    wind, speed, induced = 12.0, 9.0, 3.0
    flap, rate = 0.11, -0.4
    cases = make_cases(
        speed_rad_s=speed,
        collective_rad=0.0,
        wind_m_s=wind,
        air_density_kg_m3=1.2,
        speed_of_sound_m_s=340.0,
    )
    state = BladeState(
        np.array([azimuth]),
        np.array([[flap]]),
        np.array([[rate]]),
        np.zeros((1, 1)),
        np.full((1, 1, 24), induced),
    )
    wanted = blade_flow(ROTOR, cases, state)
    model = Equations(ROTOR, ELASTIC, FREE, Case(1.0))
    q, q_rate = np.zeros((2, 5))
    q[0], q_rate[0] = flap, rate
    direction = 0.7  # of the wind; the azimuth is then counted from there
    for turned, lift in ((0.0, 0.0), (direction, 0.0), (direction, 1.3)):
        psi = azimuth + turned
        blows = (wind * math.cos(turned), wind * math.sin(turned), lift)
        now = Instant(speed, blows, 0.0, (0.0, 0.0))
        through = np.full(24, induced + lift)
        flow = model.flow(now, (math.cos(psi), math.sin(psi)), (q, q_rate), (through, 0.0))
        assert flow[0] == pytest.approx(wanted.tangential_m_s[0, 0], abs=1e-12)
        assert flow[1] == pytest.approx(wanted.through_m_s[0, 0], abs=1e-12)


def test_blades_alike_share_the_inflow_of_one():
    case = Case(1.0, constant(20.0), constant(0.1))
    one = Equations(ROTOR, ELASTIC, FREE, case)
    four = Equations(ROTOR, ELASTIC, FREE, case, n_marched=4)
    q, rate = np.array([0.05, 0.01, 0.0, 0.002, 0.0]), np.array([0.3, 0.0, 0.1, 0.0, 0.0])
    single = one(0.0, one.start(q, rate, 3.0))
    together = four(0.0, four.start(q, rate, 3.0))
    assert together[:25] == pytest.approx(single[:25], rel=1e-12)
    assert together[25:].reshape(4, 10) == pytest.approx(np.tile(single[25:], (4, 1)), rel=1e-12)


def test_inflow_feels_upflow_and_follows_with_its_apparent_mass():
    """8 rho R / (3 pi) dv/dt = loading - 2 rho v sqrt(V^2 + (v - w)^2), far from the tips."""
    many = dataclasses.replace(ROTOR, n_blades=10000)
    none = dataclasses.replace(many, chord_m=1e-12 * ROTOR.chord_m)
    case = Case(1.0, constant(20.0), wind_m_s=steady_wind(6.0, 0.0, 2.0))
    model = Equations(none, RIGID, FREE, case)
    rates = model(0.0, model.start(np.zeros(1), induced=5.0))
    wanted = -2.0 * 5.0 * math.hypot(6.0, 3.0) / (8.0 * ROTOR.radius_m / (3.0 * math.pi))
    assert rates[8:16] == pytest.approx(wanted, rel=1e-6)


def test_lag_keeps_the_angular_momentum_of_a_flapping_blade():
    lag = lag_hinge(BEAM, 0.35, 0.0, 0.0)
    case = Case(1.0, constant(20.0), acceleration_rad_s2=constant(2.0), air_density_kg_m3=0.0)
    model = Equations(ROTOR, RIGID, FREE, case, lag=lag)
    state = model.start(np.array([0.1]), np.array([0.5]))
    e_S = 0.35 * lag.first_moment_kg_m
    wanted = 2.0 * (1.0 + e_S / lag.inertia_kg_m2) - 2.0 * 20.0 * 0.1 * 0.5
    assert model(0.0, state)[-1] == pytest.approx(wanted)
    state[-2] = 0.05
    assert model(0.0, state)[-1] == pytest.approx(
        wanted - 20.0**2 * e_S / lag.inertia_kg_m2 * 0.05
    )


@pytest.mark.parametrize(("start", "waits"), [(-4.0, True), (2.0, False)])
def test_seat_never_pushes_a_blade_that_lies_below_it(start, waits):
    stop = dataclasses.replace(DROOP_STOP, retraction=Retraction(8.0, 6.0, math.radians(-8.0)))
    speed = tabled(np.array([0.0, 0.2]), np.array([8.1, 5.0]))
    case = Case(0.4, speed, air_density_kg_m3=0.0)
    model = Equations(ROTOR, RIGID, (stop, None), case)
    moved = march(model, model.start(np.radians([start])), Solver("DOP853", dense=True))
    seated = moved.droop_rad == stop.angle_rad
    assert (not seated.any()) if waits else seated[-1]
    if not waits:
        assert moved.hinge_rad()[seated][0] > stop.angle_rad
        assert moved.time_s[seated][0] == pytest.approx(0.2 * 2.1 / 3.1, abs=1e-6)


def test_stored_marches_belong_to_these_equations():
    """The stored first moments come again, and stored states give the stored rates of change."""
    stored = json.loads(STORED.read_text(encoding="utf-8"))
    assert set(stored) == set(setups())
    for name, setup in setups().items():
        found = stored[name]["results"]
        rates = equations(setup)(setup.case.duration_s, np.array(found["final_state"]))
        assert rates == pytest.approx(np.array(found["final_rates"]), rel=1e-6, abs=1e-5)
    beginning = dataclasses.replace(setups()["engagement"].case, duration_s=1.0)
    first = reference_march(ROTOR, BEAM, (DROOP_STOP, UP_STOP), beginning)
    wanted = stored["engagement"]["results"]["flap_each_half_second_deg"][:3]
    again = np.interp([0.0, 0.5, 1.0], first.time_s, np.degrees(first.hinge_rad()))
    assert again == pytest.approx(wanted, abs=1e-3)
    assert not contacts(first)
