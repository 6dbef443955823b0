"""Marches that hold a state come to what the periodic solution of that state says."""

import math
from dataclasses import replace

import numpy as np
import pytest

from planner.rotor.case import make_cases
from planner.rotor.march_case import MarchSettings
from planner.rotor.march_model import march_model
from planner.rotor.result import TrimSettings
from planner.rotor.setup import rotor_arrays
from planner.rotor.trim import trim
from tests.rotor.marching import AIR, history, marched

WINDS = np.array([0.0, 6.0])
HOLDS = {
    "articulated-run-up": (200.0, 5.0),
    "teetering-pair": (250.0, 5.0),
    "hingeless-model": (700.0, 4.0),
}
"""Rotor speed [rpm] and collective [deg] by sample."""
BENDING_DEG = 0.25
"""What bending changes of the rotation at the hinge."""
SETTINGS = MarchSettings(24, 0.02, 4, lead_in_turns=14.0)


def held(rotor, rpm, collective_deg):
    """March and periodic solution of one state in calm and wind."""
    speed, collective = rpm * math.pi / 30.0, math.radians(collective_deg)
    model = march_model(rotor, 1.05 * speed, SETTINGS, 16)
    course = history(speed, 2.0 * 2.0 * math.pi / speed, collective)
    result = marched(model, course, wind_m_s=WINDS)
    droop = rotor.droop_stop
    up = np.nan if rotor.up_stop is None else rotor.up_stop.angle_rad
    cases = make_cases(
        speed_rad_s=speed,
        collective_rad=collective,
        wind_m_s=WINDS,
        droop_angle_rad=np.nan if droop is None else droop.lowest_angle_rad(speed),
        up_angle_rad=up,
        **AIR,
    )
    return result, trim(rotor_arrays(rotor, 16), cases, TrimSettings(48, 10))


@pytest.mark.parametrize("name", HOLDS)
def test_thrust_hub_moment_and_flap_of_a_hold(sample, name):
    rotor = sample(name).rotor
    result, periodic = held(rotor, *HOLDS[name])
    extremes, loads = result.extremes, periodic.loads
    assert result.converged.all()
    mean = 0.5 * (extremes.thrust_N + extremes.least_thrust_N)
    assert mean == pytest.approx(loads.thrust_N, rel=0.01)
    size = max(loads.hub_moment_peak_N_m.max(), 1.0)
    assert extremes.hub_N_m == pytest.approx(loads.hub_moment_peak_N_m, abs=0.05 * size)
    if name != "hingeless-model":  # bending blades against an equivalent hinge there
        flap = np.degrees(extremes.highest_flap_rad.max(axis=1))
        assert flap == pytest.approx(np.degrees(loads.flap_highest_rad), abs=BENDING_DEG)
        flap = np.degrees(extremes.lowest_flap_rad.min(axis=1))
        assert flap == pytest.approx(np.degrees(loads.flap_lowest_rad), abs=BENDING_DEG)


def test_stiff_blades_flap_as_the_rigid_ones_of_the_periodic_solution(sample):
    rotor = sample("articulated-run-up").rotor
    table = rotor.blade.stations
    stiff = replace(table, flap_stiffness_N_m2=300.0 * table.flap_stiffness_N_m2)
    rotor = replace(rotor, blade=replace(rotor.blade, stations=stiff))
    result, periodic = held(rotor, 250.0, 5.0)
    highest = np.degrees(result.extremes.highest_flap_rad.max(axis=1))
    lowest = np.degrees(result.extremes.lowest_flap_rad.min(axis=1))
    assert highest == pytest.approx(np.degrees(periodic.loads.flap_highest_rad), abs=0.01)
    assert lowest == pytest.approx(np.degrees(periodic.loads.flap_lowest_rad), abs=0.01)
    hub = result.extremes.hub_N_m
    assert hub == pytest.approx(periodic.loads.hub_moment_peak_N_m, rel=0.01, abs=5.0)
