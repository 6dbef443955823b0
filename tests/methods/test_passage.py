import numpy as np
import pytest
from scipy.integrate import solve_ivp

from planner.methods.hand_checks_passage import (
    steady_unbalance_peak,
    unbalance_passage_peak,
)
from planner.methods.passage import SpeedTable, passage_peak, turns_inside


def even_sweep(from_rad_s: float, to_rad_s: float, rate: float, points: int = 101) -> SpeedTable:
    speed = np.linspace(from_rad_s, to_rad_s, points)[None, :]
    return SpeedTable(speed, abs(to_rad_s - from_rad_s) / rate / (points - 1))


def integrated_peak(speed, step: float, w: float, zeta: float) -> tuple[float, float]:
    """Peak and speed at the peak, straight pieces integrated adaptively one after the other."""
    phase = np.concatenate([[0.0], np.cumsum(0.5 * (speed[1:] + speed[:-1]) * step)])
    first = speed[0] ** 2 / (w**2 - speed[0] ** 2 + 2j * zeta * w * speed[0])
    state, best = np.array([first, 1j * speed[0] * first]), (abs(first), speed[0])
    times = np.linspace(0.0, step, 1 + round(200 * step))
    for k, slope in enumerate(np.diff(speed) / step):

        def rates(t, x, k=k, slope=slope):
            drive = (speed[k] + slope * t) ** 2 - 1j * slope
            drive *= np.exp(1j * (phase[k] + speed[k] * t + 0.5 * slope * t**2))
            return np.array([x[1], drive - 2.0 * zeta * w * x[1] - w**2 * x[0]])

        found = solve_ivp(rates, (0.0, step), state, "DOP853", times, rtol=1e-8, atol=1e-8)
        state, size = found.y[:, -1], np.abs(found.y[0])
        if size.max() > best[0]:
            best = (size.max(), speed[k] + slope * times[size.argmax()])
    return best


@pytest.mark.parametrize(
    ("speed", "step", "zeta"),
    [
        ([0.0, 12.0, 24.0, 24.0, 8.0, 8.0, 0.0], 1.5, 0.03),
        ([32.0, 20.0, 12.0, 7.0, 3.0, 0.0], 1.0, 0.05),
    ],
)
def test_peak_is_that_of_the_same_equation_integrated_adaptively(monkeypatch, speed, step, zeta):
    monkeypatch.setattr("planner.methods.passage.LARGEST_PHASE_ERROR_RAD", np.inf)
    found = passage_peak(SpeedTable(np.array([speed]), step), [17.0], zeta)
    amplitude, at = integrated_peak(np.array(speed), step, 17.0, zeta)
    assert found.amplitude[0, 0] == pytest.approx(amplitude, rel=2e-4)
    assert found.speed_rad_s[0, 0] == pytest.approx(at, rel=1e-2)
    assert np.interp(found.time_s[0, 0], step * np.arange(len(speed)), speed) == pytest.approx(
        found.speed_rad_s[0, 0]
    )


def test_held_speed_gives_the_steady_response():
    speed = np.array([5.0, 19.0, 20.0, 60.0])
    found = passage_peak(SpeedTable(np.tile(speed[:, None], 5), 0.7), [20.0], 0.04)
    steady = speed**2 / np.abs(400.0 - speed**2 + 2j * 0.04 * 20.0 * speed)
    assert found.amplitude[:, 0] == pytest.approx(steady, rel=1e-6)
    assert found.speed_rad_s[:, 0] == pytest.approx(speed)
    assert found.held_amplitude == pytest.approx(found.amplitude, rel=1e-6)


def test_table_that_ends_in_the_resonance_tells_what_may_still_come():
    ramp = np.linspace(0.0, 20.5, 42)
    held = np.append(ramp, np.full(200, 20.5))
    cut, whole = (
        passage_peak(SpeedTable(speed[None, :], 0.1), [20.0], 0.02) for speed in (ramp, held)
    )
    assert cut.amplitude[0, 0] < 0.6 * whole.amplitude[0, 0]
    assert whole.amplitude[0, 0] <= cut.held_amplitude[0, 0] <= 2.0 * whole.amplitude[0, 0]
    steady = 20.5**2 / abs(400.0 - 20.5**2 + 2j * 0.02 * 20.0 * 20.5)
    assert whole.held_amplitude[0, 0] == pytest.approx(steady, rel=1e-2)


@pytest.mark.parametrize("zeta", [0.03, 0.05])
def test_very_slow_passage_reaches_the_steady_peak_from_both_sides(zeta):
    rate = 0.08 * (20.0 * zeta) ** 2 / np.pi
    for ends in ((15.0, 25.0), (25.0, 15.0)):
        found = passage_peak(even_sweep(*ends, rate), [20.0], zeta)
        assert found.amplitude[0, 0] == pytest.approx(float(steady_unbalance_peak(zeta)), rel=3e-3)
        assert found.speed_rad_s[0, 0] == pytest.approx(20.0 / np.sqrt(1 - 2 * zeta**2), rel=1e-2)


def test_passages_up_and_down_lie_about_the_hand_estimate():
    rate = np.array([0.2, 1.0, 5.0])
    hand = unbalance_passage_peak(20.0, 0.02, rate)
    up, down = (
        [passage_peak(even_sweep(*ends, a), [20.0], 0.02).amplitude[0, 0] for a in rate]
        for ends in ((0.0, 40.0), (40.0, 0.0))
    )
    assert np.all(up >= hand * 0.995)
    assert np.all(up <= hand * (1.005 + 2.157 * np.sqrt(rate) / 20.0))
    assert np.all(down <= hand * 1.005)
    assert np.all(down >= 0.88 * hand)
    assert np.all(np.diff(up) < 0.0)


def test_time_scale_does_not_matter_and_lanes_keep_to_themselves():
    speed = np.array([np.linspace(0.0, 30.0, 61), np.linspace(40.0, 0.0, 61)])
    both = passage_peak(SpeedTable(speed, np.array([0.1, 0.4])), [12.0, 18.0], [0.02, 0.05])
    twice = passage_peak(SpeedTable(2 * speed, np.array([0.05, 0.2])), [24.0, 36.0], [0.02, 0.05])
    assert twice.amplitude == pytest.approx(both.amplitude, rel=1e-9)
    for lane, step in ((0, 0.1), (1, 0.4)):
        alone = passage_peak(SpeedTable(speed[[lane]], step), [[12.0, 18.0]], [0.02, 0.05])
        assert np.array_equal(alone.amplitude[0], both.amplitude[lane])


def test_finer_table_of_a_curved_history_changes_little():
    coarse, fine = (
        SpeedTable(40.0 / (1.0 + np.arange(0.0, 40.0, step) / 8.0)[None, :], step)
        for step in (0.4, 0.05)
    )
    peaks = [passage_peak(table, [10.0, 20.0], 0.01).amplitude for table in (coarse, fine)]
    assert peaks[0] == pytest.approx(peaks[1], rel=1e-3)


def test_turns_inside_a_band_by_hand():
    speed = np.array([[0.0, 20.0, 20.0, 5.0, 5.0], [10.0, 10.0, 10.0, 10.0, 10.0]])
    table = SpeedTable(speed, np.array([2.0, 1.0]))
    # up 10 to 15 in 0.5 s, down 15 to 10 in two thirds of a second; held at the edge counts
    hand = np.array([12.5 * (0.5 + 2.0 / 3.0), 40.0])
    assert turns_inside(table, 10.0, 15.0) * 2 * np.pi == pytest.approx(hand)
    whole = np.array([20.0 + 40.0 + 25.0 + 10.0, 40.0])
    assert turns_inside(table, 0.0, 100.0) * 2 * np.pi == pytest.approx(whole)
    assert turns_inside(table, [21.0, 5.0], [30.0, 9.0]) == pytest.approx([0.0, 0.0])


@pytest.mark.parametrize(
    ("speed", "step", "zeta", "message"),
    [
        ([[0.0, -1.0]], 1.0, 0.1, r"rotor speed: expected 0 to 10000 rad/s, found -1"),
        ([0.0, 1.0], 1.0, 0.1, r"speed table: expected lanes by 2 points or more, found shape"),
        ([[0.0, 1.0]], 0.0, 0.1, r"speed table step: expected 1e-06 to 10000 s, found 0"),
        ([[0.0, 1.0]], 1.0, 0.0, r"damping ratio: expected 1e-07 to 0.5, found 0"),
        ([[0.0, 9.0, 9.0]], 1.0, 0.1, r"expected a phase error up to 0.1 rad .* found 0.75 rad"),
    ],
)
def test_bad_tables_are_refused(speed, step, zeta, message):
    with pytest.raises(ValueError, match=message):
        passage_peak(SpeedTable(np.array(speed), step), [10.0], zeta)


def test_bands_upside_down_are_refused():
    with pytest.raises(ValueError, match=r"speed band: expected .*, found 2 to 1 rad/s"):
        turns_inside(SpeedTable(np.zeros((2, 2)), 1.0), 2.0, [3.0, 1.0])
