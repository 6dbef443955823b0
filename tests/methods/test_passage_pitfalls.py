"""Errors that are easily made with passages of a stand mode, and what each of them costs."""

import numpy as np
import pytest
from scipy.integrate import solve_ivp

from planner.methods.column import column_modes, with_added_mass
from planner.methods.hand_checks_passage import steady_unbalance_peak, swept_share
from planner.methods.passage import SpeedTable, passage_peak
from planner.methods.unbalance import grade_unbalance_kg_m

W, ZETA, RATE = 20.0, 0.02, 1.0


def even_passage(direction: int):
    """Peak of an even passage between 8 and 34 rad/s, and the speed at it."""
    ends = np.array([8.0, 34.0])[::direction]
    found = passage_peak(SpeedTable(ends[None, :], 26.0 / RATE), [W], ZETA)
    return float(found.amplitude[0, 0]), float(found.speed_rad_s[0, 0])


def forced_peak(direction: int):
    """The same from Newton's law in real numbers, unbalance at two angles a quarter turn apart."""
    first = (8.0, 34.0)[::direction][0]
    rate = direction * RATE
    turning = first**2 / (W**2 - first**2 + 2j * ZETA * W * first)
    size, times = np.zeros(13_001), np.linspace(0.0, 26.0, 13_001)
    for angle in (0.0, -0.5 * np.pi):

        def newton(t, x, angle=angle):
            speed, phase = first + rate * t, first * t + 0.5 * rate * t**2 + angle
            force = speed**2 * np.cos(phase) + rate * np.sin(phase)
            return [x[1], force - 2.0 * ZETA * W * x[1] - W**2 * x[0]]

        start = turning * np.exp(1j * angle)
        state = [start.real, (1j * first * start).real]
        found = solve_ivp(newton, (0.0, 26.0), state, "DOP853", times, rtol=1e-7, atol=1e-7)
        size += found.y[0] ** 2
    return np.sqrt(size.max()), first + rate * times[size.argmax()]


@pytest.mark.parametrize("direction", [1, -1])
def test_peak_taken_at_the_frequency_itself(direction):
    """A run-up peaks above it and a run-down below it, by up to 2.16 roots of the rate."""
    amplitude, speed = even_passage(direction)
    exact, at = forced_peak(direction)
    assert amplitude == pytest.approx(exact, rel=5e-4)
    assert speed == pytest.approx(at, rel=2e-3)
    assert 1.5 * np.sqrt(RATE) < direction * (speed - W) < 2.16 * np.sqrt(RATE)


@pytest.mark.parametrize("direction", [1, -1])
def test_steady_amplitude_taken_while_passing(direction):
    """Too high by the inverse of the swept share: half as much again at this rate."""
    amplitude, _ = even_passage(direction)
    share = float(swept_share(W, ZETA, RATE))
    assert 1.0 / share == pytest.approx(1.55, abs=0.01)
    assert float(steady_unbalance_peak(ZETA)) / amplitude == pytest.approx(1.0 / share, rel=0.12)


def test_force_of_the_balance_grade_kept_at_all_speeds():
    """M G times reference speed holds there alone; at half that speed the force is a quarter."""
    mass, grade, reference, w = 260.0, 0.0063, 40.0, 20.0
    unbalance = float(grade_unbalance_kg_m(grade, mass, reference))
    assert unbalance * reference**2 == pytest.approx(mass * grade * reference)
    held = SpeedTable(np.full((1, 2), w), 1.0)
    right = passage_peak(held, [w], ZETA).amplitude[0, 0] * unbalance
    static = mass * grade * reference / w**2
    wrong = passage_peak(held, [w], ZETA, "constant force").amplitude[0, 0] * static
    assert wrong / right == pytest.approx(4.0, rel=1e-6)


def test_hub_mass_taken_with_or_without_the_blades():
    """260 kg of blades on a head of 600 kg: a mode without them lies 15 % high."""
    column = (4.0, 8.0e7, 900.0)
    bare, fitted = (column_modes(*column, top) for top in (600.0, 860.0))
    without, right = (float(found.frequency_rad_s[0]) for found in (bare, fitted))
    assert without / right == pytest.approx(1.15, abs=0.005)
    mended = float(with_added_mass(without, bare.modal_mass_kg[0], 260.0))
    assert mended == pytest.approx(right, rel=5e-4)
    twice = float(with_added_mass(right, fitted.modal_mass_kg[0], 260.0))
    assert twice / right == pytest.approx(0.896, abs=0.005)
