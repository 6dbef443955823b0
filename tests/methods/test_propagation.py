"""Exact steps of linear equations of motion."""

import math

import numpy as np
import pytest
from scipy.linalg import expm

from planner.methods.propagation import exponentials, step_matrices


def test_exponentials_of_many_matrices():
    matrices = np.random.default_rng(2).normal(size=(7, 6, 6))
    matrices[3] *= 30.0
    wanted = np.stack([expm(one) for one in matrices])
    found = exponentials(matrices)
    scale = np.abs(wanted).max(axis=(1, 2), keepdims=True)
    assert found / scale == pytest.approx(wanted / scale, abs=1e-10)
    assert exponentials(np.zeros((1, 3, 3)))[0] == pytest.approx(np.eye(3))


def test_step_of_an_oscillator_under_a_load_that_rises_evenly():
    """x = A cos wt + B sin wt + (f0 + r t) / k, exactly, however long the step."""
    m, k, h, start, rise = 2.0, 50.0, 0.7, 3.0, 4.0
    one = np.ones((1, 1, 1))
    step = step_matrices(m * one[0], 0.0 * one, k * one, np.array([h]))
    w, x, v = math.sqrt(k / m), 0.3, -1.0
    slope = rise / h / k
    a, b = x - start / k, (v - slope) / w
    wanted_x = a * math.cos(w * h) + b * math.sin(w * h) + (start + rise) / k
    wanted_v = -a * w * math.sin(w * h) + b * w * math.cos(w * h) + slope
    found = step.free[0] @ [x, v] + step.by_load[0, :, 0] * start + step.by_rise[0, :, 0] * rise
    assert found == pytest.approx([wanted_x, wanted_v], rel=1e-12)


def test_two_steps_are_one_of_twice_the_length_with_damping_and_coupling():
    mass = np.diag([2.0, 0.5])
    damping = np.array([[[0.4, 0.1], [0.1, 0.2]]])
    stiffness = np.array([[[80.0, -5.0], [-5.0, 900.0]]])
    short, long = (
        step_matrices(mass, damping, stiffness, np.array([step])) for step in (0.05, 0.1)
    )
    x, load, rise = np.array([0.1, 0.0, 1.0, -2.0]), np.array([3.0, 1.0]), np.array([2.0, -4.0])
    once = long.free[0] @ x + long.by_load[0] @ load + long.by_rise[0] @ rise
    for part in range(2):
        begin = load + 0.5 * part * rise
        x = short.free[0] @ x + short.by_load[0] @ begin + short.by_rise[0] @ (0.5 * rise)
    assert x == pytest.approx(once, rel=1e-10)


def test_nodes_have_their_own_step_and_stiffness():
    stiffness = np.array([10.0, 1000.0])[:, None, None] * np.ones((1, 1))
    steps = np.array([0.2, 0.01])
    found = step_matrices(np.eye(1), 0.0 * stiffness, stiffness, steps)
    assert found.free[:, 0, 0] == pytest.approx(np.cos(np.sqrt([10.0, 1000.0]) * steps))
    assert found.step_s is steps
