"""A blade that falls on its stop without air: energy, closed forms, stiffness of the stop.

The uniform elastic blade is that of tests/published/test_stop_drop.py, with the same values.
"""

import math
from dataclasses import replace

import numpy as np
import pytest

from planner.model.rotor import Stop
from planner.rotor.march_case import MarchSettings
from planner.rotor.march_model import MOST_SUBSTEPS, RESOLVED_RAD, contact_rad_s
from tests.rotor.marching import NO_AIR, block_at_once, history, model_of

G = 9.80665
TOP = math.radians(5.0)
FALL = history(0.0, 1.0)
INERTIA, FIRST = 6.0 * 4.8**3 / 3.0, 6.0 * 4.8**2 / 2.0


def uniform(make_rotor, bending_N_m2, stop):
    """Hinge at 0.2 m, tip at 5 m, 6 kg/m."""
    rotor = make_rotor(mass_kg_m=6.0)
    radius = np.linspace(0.2, 5.0, 13)
    table = rotor.blade.stations
    kept = {name: getattr(table, name)[:13] for name in vars(table)}
    kept |= {"radius_m": radius, "flap_stiffness_N_m2": np.full(13, bending_N_m2)}
    span = replace(rotor.blade.sections[0], to_radius_m=5.0)
    blade = replace(rotor.blade, radius_m=5.0, stations=type(table)(**kept), sections=(span,))
    hub = replace(rotor.hub, flap_hinge_m=0.2)
    return replace(rotor, blade=blade, hub=hub, droop_stop=stop, up_stop=None)


def fallen(model, *, linear=False, seconds=0.6):
    """Block at the end, and at each step time, state and energy."""
    if linear:  # weight normal to the hub plane, as in the published case
        model = replace(
            model, unit=replace(model.unit, first_moment_kg_m=0.0, flap_inertia_kg_m2=0.0)
        )
    block = block_at_once(model, FALL, **NO_AIR)
    block.x[:], block.moment_N_m[:] = 0.0, 0.0
    block.x[0, 0, 0] = TOP
    unit, steps = model.unit, []
    while block.time_s[0] < seconds:
        block.step()
        q, rate = block.x[0, 0, : unit.n_freedoms], block.x[0, 0, unit.n_freedoms :]
        pressed = max(0.0, model.laws.low_rad - q @ unit.hinge)
        energy = 0.5 * (rate @ unit.mass @ rate + q @ unit.stiffness @ q)
        energy += 0.5 * model.laws.low[0] * pressed**2 + G * unit.weight @ q
        steps.append((block.time_s[0], energy, block.moment_N_m[0, 0]))
    return block, np.array(steps)


def at_rest(rotor, step_s, substeps=4, **fineness):
    settings = MarchSettings(24, step_s, substeps, lead_in_s=0.0, **fineness)
    return model_of(rotor, settings, one_blade=True, to_centre=False)


def test_rigid_blade_falls_and_hits_as_in_closed_form(make_rotor):
    stop = Stop(math.radians(-2.0), 2e5, 0.0, 5e3)
    model = at_rest(uniform(make_rotor, 1e10, stop), 0.005)
    block, steps = fallen(model, linear=True, seconds=0.4)
    drop, weight = TOP - stop.angle_rad, G * FIRST
    falls_s = math.sqrt(2.0 * drop * INERTIA / weight)
    peak = weight + math.sqrt(weight**2 + 2e5 * 2.0 * drop * weight)
    touched = steps[steps[:, 2] > 0.0][0, 0]
    assert touched == pytest.approx(falls_s, abs=0.005)
    assert block.extremes.droop_N_m[0, 0] == pytest.approx(peak, rel=0.01)
    begin = G * FIRST * TOP
    assert steps[:, 1] == pytest.approx(begin, rel=0.01)


def test_elastic_blade_falls_and_hits_as_computed(make_rotor):
    stop = Stop(math.radians(-2.0), 2e5, 0.0, 5e3)
    model = at_rest(uniform(make_rotor, 2e4, stop), 0.005)
    block, steps = fallen(model, linear=True)
    assert steps[steps[:, 2] > 0.0][0, 0] == pytest.approx(0.27753, abs=0.005)
    assert block.extremes.droop_N_m[0, 0] == pytest.approx(2605.0, rel=0.02)
    # rigid flap here is the sine of the angle: 4.8 (b - sin b) above the published height
    assert block.extremes.lowest_tip_m.min() == pytest.approx(-0.9817, rel=0.01)


def test_energy_is_kept_through_contact(make_rotor):
    stop = Stop(math.radians(-2.0), 2e5, 0.0, 5e3)
    model = at_rest(uniform(make_rotor, 2e4, stop), 0.0025, 8)
    _, steps = fallen(model, linear=True)
    begin = G * FIRST * TOP
    assert steps[:, 1] == pytest.approx(begin, abs=0.015 * G * FIRST * (TOP - stop.angle_rad))


def test_a_lossy_stop_takes_energy_and_adds_none(make_rotor):
    stop = Stop(math.radians(-2.0), 2e5, 20e3, 5e3)
    model = at_rest(uniform(make_rotor, 2e4, stop), 0.005)
    _, steps = fallen(model, linear=True)
    begin = steps[0, 1]
    assert steps[-1, 1] < begin - 0.05 * G * FIRST * TOP
    assert steps[:, 1].max() < begin + 0.005 * G * FIRST * TOP


def test_stiff_stops_take_more_parts_of_a_step_or_are_not_resolved(make_rotor):
    found = []
    for stiffness in (2e4, 2e5, 1e9):
        stop = Stop(math.radians(-2.0), stiffness, 0.0, 5e3)
        found.append(at_rest(uniform(make_rotor, 2e4, stop), 0.01))
    parts = [model.substeps.parts for model in found]
    assert parts[0] < parts[1] < parts[2]
    assert parts[2] == MOST_SUBSTEPS
    assert [model.resolves_stops for model in found] == [True, True, False]
    turned = contact_rad_s(found[1].unit, 2e5) * 0.01 / parts[1]
    assert 0.9 * RESOLVED_RAD < turned <= RESOLVED_RAD


@pytest.mark.parametrize("stiffness", [2e5, 1e6])
def test_peak_moment_of_a_coarse_step_is_within_four_percent(make_rotor, stiffness):
    stop = Stop(math.radians(-2.0), stiffness, 500.0, 5e3)
    rotor = uniform(make_rotor, 2e4, stop)
    coarse, fine = (
        fallen(at_rest(rotor, step, 4))[0].extremes.droop_N_m[0, 0] for step in (0.01, 0.001)
    )
    assert coarse == pytest.approx(fine, rel=0.04)
