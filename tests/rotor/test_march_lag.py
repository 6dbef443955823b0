"""Rigid lag of marched blades: steady drag, changes of speed, stops."""

from dataclasses import replace

import numpy as np
import pytest

from planner.model.rotor import LagStop
from planner.rotor.march_case import MarchSettings
from tests.rotor.marching import NO_AIR, block_at_once, history, marched, model_of

SETTINGS = MarchSettings(24, 0.02, 4, lead_in_turns=0.1)
SPEED = 20.0
SPRING, DAMPER = 9e4, 6e3
HUB = {"lag_spring_N_m_rad": SPRING, "lag_damper_N_m_s_rad": DAMPER}


def stiffness(model):
    return SPRING + SPEED**2 * model.lag.hinge_m * model.lag.first_moment_kg_m


def test_steady_lag_is_drag_over_stiffness(make_rotor):
    model = model_of(make_rotor(hub=HUB), SETTINGS)
    block = block_at_once(model, history(SPEED, 4.0))
    drag = []
    inner = block.lag.step

    def noted(node, loads, *rest):
        drag.append(loads.lag_air_N_m[0].copy())
        inner(node, loads, *rest)

    block.lag.step = noted
    while block.time_s[0] < 3.0:
        block.step()
    wanted = np.mean(drag[-24:], axis=0) / stiffness(model)
    assert np.all(wanted > 1e-4)
    assert block.lag.x[0, :, 0] == pytest.approx(wanted, rel=0.01)


def test_lag_follows_a_change_of_speed(make_rotor):
    """I z'' = dOmega/dt (I + e S) - (k + Omega^2 e S) z, without air and without flapping."""
    model = model_of(make_rotor(hub={**HUB, "lag_damper_N_m_s_rad": 3e4}), SETTINGS)
    rate = 2.0
    block = block_at_once(model, history([[SPEED - 4.0, SPEED]], 2.0), **NO_AIR)
    while block.time_s[0] < 1.98:
        block.step()
    whole = model.lag.inertia_kg_m2 + model.lag.hinge_m * model.lag.first_moment_kg_m
    assert block.lag.x[0, :, 0] == pytest.approx(rate * whole / stiffness(model), rel=0.03)


def test_lag_stop_holds_a_blade_that_is_spun_up_hard(make_rotor):
    stop = LagStop(np.radians(-10.0), np.radians(12.0), 3e5, 500.0, 6e3)
    rotor = replace(make_rotor(hub={"lag_damper_N_m_s_rad": 200.0}), lag_stop=stop)
    model = model_of(rotor, SETTINGS)
    course = history([[0.1, 12.0]], 2.0)
    result = marched(model, course, counts_from_rad_s=[0.0, 20.0], **NO_AIR)
    assert result.converged.all()
    push = 6.0 * (model.lag.inertia_kg_m2 + model.lag.hinge_m * model.lag.first_moment_kg_m)
    lag, moment = result.extremes.lag_rad[0], result.extremes.lag_stop_N_m
    assert moment.min() > 0.9 * push
    assert lag.max() < np.radians(11.0) + 1.2 * moment.max() / 3e5
    assert lag.min() > np.radians(11.0)  # counted from the middle, 1 degree
    assert result.extremes.lag_rad[1] == pytest.approx(0.0)  # never at counting speed


def test_a_lag_stop_too_stiff_for_whole_steps_is_not_resolved(make_rotor):
    stop = LagStop(np.radians(-10.0), np.radians(12.0), 1e9, 0.0, 6e3)
    assert not model_of(replace(make_rotor(), lag_stop=stop)).resolves_stops
    assert model_of(make_rotor(hub=HUB)).resolves_stops
