"""Trim against a march in time that shares no equation with it.

The march treats one blade as a row of lumps, takes velocities and forces as vectors in space and
evaluates the section law itself; it is run until it repeats.
"""

from dataclasses import replace
from typing import Any

import numpy as np
import pytest
from scipy.integrate import solve_ivp

from planner.rotor.balance import Problem
from planner.rotor.case import gravity_vector_m_s2, make_cases
from planner.rotor.motion import free_motion
from planner.rotor.newton import solve
from planner.rotor.result import TrimSettings
from planner.rotor.setup import RotorArrays, rotor_arrays
from planner.rotor.trim import trim

AIR = {"air_density_kg_m3": 1.2, "speed_of_sound_m_s": 340.0}
TURNS = 15
FINE = TrimSettings(n_azimuths=48, n_harmonics=8, gradient="none")


def smooth_law(alpha: Any) -> tuple[Any, Any]:
    return 5.7 * np.sin(alpha) * np.cos(alpha), 0.01 + 1.2 * np.sin(alpha) ** 2


class March:
    """One blade of the invented articulated rotor in a given downwash."""

    def __init__(
        self, case: dict[str, Any], rotor: RotorArrays, induced: Any, gradient: float = 0.0
    ) -> None:
        self.case, self.rotor, self.hinge = case, rotor, rotor.hub.hinge_m
        self.induced, self.gradient = induced, gradient
        edges = np.linspace(max(self.hinge, 0.2), 6.0, 401)
        self.lump_arm = 0.5 * (edges[1:] + edges[:-1]) - self.hinge
        self.lump_mass = 8.0 * np.diff(edges)

    def forces(self, psi: float, flap: float, rate: float) -> tuple[Any, Any, Any]:
        """Air force vectors on the elements, and their places, in axes downwind, cross, up."""
        case, rotor = self.case, self.rotor
        out = np.array([np.cos(psi), np.sin(psi), 0.0])
        ahead = np.array([-np.sin(psi), np.cos(psi), 0.0])
        up = np.array([0.0, 0.0, 1.0])
        span = np.cos(flap) * out + np.sin(flap) * up
        normal = np.cos(flap) * up - np.sin(flap) * out
        arm = rotor.station_radius_m - self.hinge
        reach = self.hinge + arm * np.cos(flap)
        place = self.hinge * out + arm[:, None] * span
        moving = case["speed_rad_s"] * reach[:, None] * ahead + (arm * rate)[:, None] * normal
        share = 1.0 + self.gradient * rotor.station_radius_m / 6.0 * np.cos(psi)
        wind = np.array([case["wind_m_s"], 0.0, 0.0]) - (self.induced * share)[:, None] * up
        air = wind - moving
        chordwise, upward = air @ -ahead, air @ normal
        pitch = case["collective_rad"] + rotor.twist_rad - rotor.hub.pitch_flap * flap
        pitch = pitch + case.get("cyclic_cosine_rad", 0.0) * np.cos(psi)
        pitch = pitch + case.get("cyclic_sine_rad", 0.0) * np.sin(psi)
        lift, drag = smooth_law(pitch + np.arctan2(upward, chordwise))
        speed = np.hypot(chordwise, upward)
        along = air - (air @ span)[:, None] * span
        pressure = 0.5 * 1.2 * rotor.chord_m * rotor.station_width_m * speed
        force = np.cross(along, span) * lift[:, None] + along * drag[:, None]
        return pressure[:, None] * force, place, normal

    def slope(self, time: float, state: Any) -> list[float]:
        flap, rate = state
        Omega = self.case["speed_rad_s"]
        psi = Omega * time
        force, _, normal = self.forces(psi, flap, rate)
        moment = np.sum((force @ normal) * (self.rotor.station_radius_m - self.hinge))
        gravity = self.case.get("gravity_m_s2", np.array([0.0, 0.0, -9.80665]))
        arm, mass = self.lump_arm, self.lump_mass
        moment += np.sum(mass * arm) * (gravity @ normal)
        outward = Omega**2 * (self.hinge + arm * np.cos(flap))
        moment -= np.sum(mass * arm * outward) * np.sin(flap)
        hub = self.rotor.hub
        moment -= hub.spring_N_m_rad * (flap - hub.spring_neutral_rad)
        moment -= hub.damper_N_m_s_rad * rate
        return [rate, moment / np.sum(mass * arm**2)]

    def settled(self) -> Any:
        """Flap and its rate over the last of many turns, at 360 azimuths."""
        turn = 2.0 * np.pi / self.case["speed_rad_s"]
        times = turn * (TURNS - 1 + np.arange(361) / 360)
        run = solve_ivp(
            self.slope, (0.0, TURNS * turn), [0.0, 0.0], "DOP853", times, rtol=1e-7, atol=1e-9
        )
        assert run.success
        assert run.y[0, -1] == pytest.approx(run.y[0, 0], abs=1e-5)
        return run.y[:, :-1]


def hub_moment(march: March, flap: Any, rate: Any) -> float:
    """Steady moment at the rotor centre from forces and accelerations of all elements and lumps.

    Only the part about each blade's flap axis is counted.
    """
    psi = 2.0 * np.pi * np.arange(360) / 360
    out = np.stack([np.cos(psi), np.sin(psi), 0.0 * psi], axis=1)
    ahead = np.stack([-np.sin(psi), np.cos(psi), 0.0 * psi], axis=1)
    up = np.array([0.0, 0.0, 1.0])
    span = np.cos(flap)[:, None] * out + np.sin(flap)[:, None] * up
    lumps = march.hinge * out[:, None] + march.lump_arm[:, None] * span[:, None]
    step = 2.0 * np.pi / 360 / march.case["speed_rad_s"]
    second = (np.roll(lumps, -1, axis=0) - 2.0 * lumps + np.roll(lumps, 1, axis=0)) / step**2
    inertial = march.lump_mass[:, None] * (np.array([0.0, 0.0, -9.80665]) - second)
    moment = np.sum(np.cross(lumps, inertial), axis=1)
    for index, now in enumerate(zip(psi, flap, rate, strict=True)):
        force, place, _ = march.forces(*now)
        moment[index] += np.sum(np.cross(place, force), axis=0)
    about_flap_axis = -np.sum(moment * ahead, axis=1)
    first = np.mean(about_flap_axis * np.exp(1j * psi))
    return 4.0 * float(np.abs(first))


HOLDS: dict[str, dict[str, Any]] = {
    "nominal": {"speed_rad_s": 35.0, "collective_rad": 0.1, "wind_m_s": 10.0},
    "slow in strong wind": {"speed_rad_s": 12.0, "collective_rad": 0.05, "wind_m_s": 18.0},
    "cyclic": {
        "speed_rad_s": 25.0,
        "collective_rad": 0.08,
        "wind_m_s": 6.0,
        "cyclic_cosine_rad": 0.03,
        "cyclic_sine_rad": -0.05,
    },
    "inverted": {
        "speed_rad_s": 20.0,
        "collective_rad": 0.03,
        "wind_m_s": 8.0,
        "gravity_m_s2": gravity_vector_m_s2("inverted"),
    },
    "axis level": {
        "speed_rad_s": 14.0,
        "collective_rad": 0.12,
        "wind_m_s": 5.0,
        "gravity_m_s2": gravity_vector_m_s2("axis level"),
    },
}


@pytest.mark.parametrize("name", HOLDS)
def test_flap_in_a_given_downwash_follows_the_march(name, make_rotor, smooth_section):
    hold = HOLDS[name]
    rotor = rotor_arrays(make_rotor(section=smooth_section))
    result = trim(rotor, make_cases(given_inflow_m_s=4.0, **hold, **AIR), FINE)
    flap = March(hold, rotor, 4.0).settled()[0]
    assert result.converged.all()
    tolerance = np.radians(0.005)
    assert result.loads.flap_highest_rad[0] == pytest.approx(flap.max(), abs=tolerance)
    assert result.loads.flap_lowest_rad[0] == pytest.approx(flap.min(), abs=tolerance)
    assert result.loads.flap_mean_rad[0] == pytest.approx(flap.mean(), abs=tolerance)
    psi = 2.0 * np.pi * np.arange(360) / 360
    cosine, sine = 2.0 * np.mean(flap * np.cos(psi)), 2.0 * np.mean(flap * np.sin(psi))
    assert result.loads.flap_cosine_rad[0] == pytest.approx(cosine, abs=tolerance)
    assert result.loads.flap_sine_rad[0] == pytest.approx(sine, abs=tolerance)


def test_spring_damper_and_pitch_coupling_follow_the_march(make_rotor, smooth_section):
    hub = {
        "flap_spring_N_m_rad": 6000.0,
        "flap_spring_neutral_rad": 0.02,
        "flap_damper_N_m_s_rad": 700.0,
        "pitch_flap_coupling_rad": np.radians(30.0),
    }
    rotor = rotor_arrays(make_rotor(section=smooth_section, hub=hub))
    hold = HOLDS["slow in strong wind"]
    result = trim(rotor, make_cases(given_inflow_m_s=2.0, **hold, **AIR), FINE)
    flap = March(hold, rotor, 2.0).settled()[0]
    assert result.loads.flap_highest_rad[0] == pytest.approx(flap.max(), abs=np.radians(0.005))
    assert result.loads.flap_lowest_rad[0] == pytest.approx(flap.min(), abs=np.radians(0.005))


@pytest.mark.parametrize("name", ["nominal", "cyclic"])
def test_hub_moment_balances_all_forces_on_the_marched_blade(name, make_rotor, smooth_section):
    hold = HOLDS[name]
    hub = {"flap_spring_N_m_rad": 3000.0, "flap_damper_N_m_s_rad": 50.0}
    rotor = rotor_arrays(make_rotor(section=smooth_section, hub=hub))
    result = trim(rotor, make_cases(given_inflow_m_s=4.0, **hold, **AIR), FINE)
    march = March(hold, rotor, 4.0)
    assert result.loads.hub_moment_N_m[0] == pytest.approx(
        hub_moment(march, *march.settled()), rel=0.005
    )


@pytest.mark.parametrize("name", ["nominal", "slow in strong wind"])
def test_solved_inflow_closes_the_momentum_of_marched_blades(name, make_rotor, smooth_section):
    hold = HOLDS[name]
    rotor = rotor_arrays(make_rotor(section=smooth_section))
    problem = Problem(rotor, free_motion(rotor.hub, 48, 8), "pitt-peters")
    solution = solve(problem, make_cases(**hold, **AIR), np.zeros((1, 48)))
    induced = solution.trial.induced_m_s[0]
    r = rotor.station_radius_m
    mean = np.sum(induced * r * rotor.station_width_m) / np.sum(r * rotor.station_width_m)
    skew = np.arctan2(hold["wind_m_s"], mean)
    march = March(hold, rotor, induced, 15.0 * np.pi / 32.0 * np.tan(0.5 * skew))
    flap, rate = march.settled()
    psi = 2.0 * np.pi * np.arange(360) / 360
    upward = [march.forces(*now)[0][:, 2] for now in zip(psi, flap, rate, strict=True)]
    blades = 4 * np.mean(upward, axis=0) / rotor.station_width_m
    sine = np.abs(induced) / np.hypot(hold["speed_rad_s"] * r, induced)
    loss = 1.0
    for distance in (6.0 - r, r - 0.9):
        loss = loss * 2.0 / np.pi * np.arccos(np.exp(-2.0 * distance / (r * sine)))
    carried = induced * np.hypot(hold["wind_m_s"], induced)
    momentum = 4.0 * np.pi * r * 1.2 * loss * carried
    assert blades == pytest.approx(momentum, rel=2e-3, abs=2e-3 * np.abs(momentum).max())
    lowest = trim(rotor, make_cases(**hold, **AIR), replace(FINE, gradient="pitt-peters"))
    assert lowest.loads.flap_lowest_rad[0] == pytest.approx(flap.min(), abs=np.radians(0.005))


def test_default_fineness_keeps_flap_within_a_hundredth_of_a_degree(make_rotor):
    model = make_rotor()
    random = np.random.default_rng(5)
    cases = make_cases(
        speed_rad_s=35.0 * random.uniform(0.25, 1.1, 60),
        collective_rad=np.radians(random.uniform(-3.0, 12.0, 60)),
        wind_m_s=random.uniform(0.0, 20.0, 60),
        **AIR,
    )
    usual = trim(rotor_arrays(model), cases).loads
    fine = trim(rotor_arrays(model, 64), cases, TrimSettings(96, 10)).loads
    tolerance = np.radians(0.01)
    assert usual.flap_highest_rad == pytest.approx(fine.flap_highest_rad, abs=tolerance)
    assert usual.flap_lowest_rad == pytest.approx(fine.flap_lowest_rad, abs=tolerance)
    assert usual.thrust_N == pytest.approx(fine.thrust_N, rel=1e-3, abs=5.0)
