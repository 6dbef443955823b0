"""One-sided stops: the law, and its closed form over a step."""

import math

import numpy as np
import pytest

from planner.methods.stop_contact import stop_moment_after_step_n_m, stop_moment_n_m

ONE = np.ones(1)


def after_step(depth, rate, law, yields):
    arrays = [tuple(value * ONE for value in pair) for pair in (law, yields)]
    return float(stop_moment_after_step_n_m(depth * ONE, rate * ONE, *arrays)[0])


def test_stop_never_pulls_and_does_not_jump():
    depth = np.array([-0.01, 0.0, 0.01, 0.01, 0.01])
    rate = np.array([5.0, 5.0, 0.0, 2.0, -20.0])
    found = stop_moment_n_m(depth, rate, np.full(5, 1000.0), np.full(5, 0.1))
    assert found == pytest.approx([0.0, 0.0, 10.0, 12.0, 0.0])


@pytest.mark.parametrize("damping", [0.0, 0.2, 3.0])
@pytest.mark.parametrize("rate", [-1.0, 0.5, 4.0])
def test_moment_after_a_step_meets_the_law(damping, rate):
    depth, stiffness, yields = 0.02, 2e5, (3e-7, 4e-4)
    moment = after_step(depth, rate, (stiffness, damping), yields)
    left = np.array([depth - yields[0] * moment])
    closing = np.array([rate - yields[1] * moment])
    law = stop_moment_n_m(left, closing, stiffness * ONE, damping * ONE)
    assert moment == pytest.approx(float(law[0]), rel=1e-9, abs=1e-9)
    assert 0.0 <= moment < stiffness * depth * max(1.0, 1.0 + damping * rate)


def test_no_moment_without_penetration_or_while_parting_fast():
    assert after_step(-0.01, 9.0, (2e5, 0.2), (3e-7, 4e-4)) == 0.0
    assert after_step(0.01, -9.0, (2e5, 0.2), (3e-7, 4e-4)) == 0.0


@pytest.mark.parametrize(("angle", "grows"), [(0.5, False), (3.0, False), (3.7, True)])
def test_pressing_mass_keeps_its_swing_while_the_step_follows_it(angle, grows):
    """m x'' = -M: a swing about a deep place on the stop, by hat-shaped moments."""
    stiffness, mass, deep = 4e4, 1.0, 1.0
    h = angle / math.sqrt(stiffness / mass)
    yields = (h * h / (6.0 * mass), h / (2.0 * mass))
    held = stiffness * deep  # a steady push that holds the mass there
    x, v, moment, size = deep + 0.01, 0.0, stiffness * (deep + 0.01), []
    for _ in range(60):
        push = held - moment
        free = x + h * v + h * h * (held / 2.0 - moment / 3.0) / mass
        rate = v + h * (held - 0.5 * moment) / mass
        moment = after_step(free, rate, (stiffness, 0.0), yields)
        x, v = free - yields[0] * moment, rate - yields[1] * moment
        size.append(abs(x - deep))
        assert np.isfinite(push)
    assert (max(size) > 0.05) is grows
