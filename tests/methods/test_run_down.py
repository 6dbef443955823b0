"""Rotor speed over time: against closed forms, an adaptive integration, and its own limits."""

from __future__ import annotations

import dataclasses

import numpy as np
import pytest
from scipy.integrate import solve_ivp

from planner.methods import hand_checks_run_down as hand
from planner.methods.run_down import RunDown, lanes_of, reach, run_down, run_up, speed_at
from planner.methods.shaft_torque import finer_torque, motor_torque_n_m

INERTIA, DRAG, FRICTION, BRAKE, FIRST = 1954.0, 2.0, 300.0, 1300.0, 37.0
SHARES = np.array([1.0, 0.87, 0.75, 0.62, 0.5, 0.4, 0.3, 0.21, 0.14, 0.08, 0.04, 0.0])


def rotors(drag=(DRAG,), parts=20, **numbers):
    """One lane a set of drag constants: the columns while the controls move."""
    drags = np.atleast_2d(np.asarray(drag, dtype=float))
    lanes = drags.shape[0]
    coarse = np.tile(FIRST * SHARES, (lanes, 1))
    torque = drags[:, :, None] * coarse[:, None, :] ** 2
    speed, torque = finer_torque(coarse, torque, parts)
    given = {
        "inertia_kg_m2": INERTIA,
        "friction_N_m": 0.0,
        "brake_N_m": 0.0,
        "brake_from_rad_s": 0.0,
        "brake_delay_s": 0.0,
        "delay_s": 0.0,
        "move_s": 0.0,
    } | numbers
    spread = {name: np.broadcast_to(np.asarray(v, float), (lanes,)) for name, v in given.items()}
    return RunDown(speed, torque, **spread)


def times(path, *shares):
    return reach(path, np.tile(FIRST * np.array(shares), (path.speed_rad_s.shape[0], 1)))


def test_drag_alone_halves_again_and_again_and_never_ends():
    path = run_down(rotors(parts=80))
    time, _ = times(path, 0.5, 0.3, 0.1, 0.0)
    tau = INERTIA / (DRAG * FIRST)
    assert time[0, :3] == pytest.approx([tau, tau * 7.0 / 3.0, tau * 9.0], rel=2e-5)
    assert time[0, 3] == np.inf
    wanted = np.array([[3.0, tau, 100.0]])
    exact = hand.drag_speed_rad_s(FIRST, DRAG, INERTIA, wanted)
    assert speed_at(path, wanted) == pytest.approx(exact, rel=1e-4)


def test_friction_and_brake_follow_the_arctangent():
    path = run_down(rotors(friction_N_m=FRICTION, brake_N_m=BRAKE, brake_from_rad_s=11.5))
    time, turns = times(path, 0.5, 11.5 / FIRST, 0.1, 0.0)
    free, braked = (INERTIA, DRAG, FRICTION), (INERTIA, DRAG, FRICTION + BRAKE)
    to_brake = hand.drag_and_friction_time_s(*free, FIRST, 11.5)
    assert time[0, 0] == pytest.approx(
        hand.drag_and_friction_time_s(*free, FIRST, 0.5 * FIRST), rel=5e-5
    )
    assert time[0, 1] == pytest.approx(to_brake, rel=5e-5)
    later = [hand.drag_and_friction_time_s(*braked, 11.5, v) for v in (0.1 * FIRST, 0.0)]
    assert time[0, 2:] == pytest.approx(to_brake + np.array(later), rel=5e-5)
    at_brake = float(hand.drag_and_friction_turns(*free, FIRST, 11.5))
    to_rest = hand.drag_and_friction_turns(*braked, 11.5, 0.0)
    assert turns[0, [1, 3]] == pytest.approx([at_brake, at_brake + to_rest], rel=5e-5)


def test_friction_alone_is_a_straight_line():
    path = run_down(rotors(drag=(0.0,), friction_N_m=FRICTION))
    end = float(hand.constant_torque_time_s(INERTIA, FRICTION, FIRST))
    time, turns = times(path, 0.5, 0.0)
    assert time[0] == pytest.approx([0.5 * end, end], rel=1e-12)
    assert turns[0, 1] == pytest.approx(FIRST * end / (4.0 * np.pi), rel=1e-12)
    speed = speed_at(path, np.array([[0.0, 0.25 * end, path.time_s[0, -1], end + 9.0]]))
    assert speed[0] == pytest.approx([FIRST, 0.75 * FIRST, 0.0, 0.0], abs=1e-12)
    assert np.all(speed[0, 2:] == 0.0)


def test_moving_controls_and_a_late_brake_against_an_adaptive_integration():
    drags = (6.0, 3.5, 1.5)
    case = rotors(
        drag=drags, parts=40, friction_N_m=FRICTION, brake_N_m=BRAKE, brake_from_rad_s=50.0,
        brake_delay_s=2.0, delay_s=2.0, move_s=5.0,
    )  # fmt: skip
    path = run_down(case)

    def rate(t, y):
        share = min(max((t - 2.0) / 5.0, 0.0), 1.0)
        drag = np.interp(share, [0.0, 0.5, 1.0], drags)
        return [-(drag * y[0] ** 2 + FRICTION + BRAKE * (t >= 2.0)) / INERTIA]

    start, found = np.array([FIRST]), []
    for begin, end in ((0.0, 2.0), (2.0, 4.5), (4.5, 7.0), (7.0, 20.0)):
        part = solve_ivp(rate, (begin, end), start, rtol=1e-10, atol=1e-10, method="LSODA")
        start = part.y[:, -1]
        found.append(float(start[0]))
    ours = speed_at(path, np.array([[2.0, 4.5, 7.0, 20.0]]))[0]
    assert ours == pytest.approx(found, abs=2e-4 * FIRST)


def test_wind_that_drives_the_rotor_on_leaves_the_time_infinite():
    speed = FIRST * SHARES[None, :]
    torque = DRAG * speed**2 - 400.0  # the air drives below 14 rad/s
    rest = {
        field.name: np.zeros(1)
        for field in dataclasses.fields(RunDown)
        if field.name not in {"speed_rad_s", "rotor_torque_N_m", "inertia_kg_m2"}
    }
    case = RunDown(speed, torque[:, None, :], inertia_kg_m2=np.ones(1), **rest)
    path = run_down(case)
    time, turns = times(path, 0.5, 0.3, 0.0)
    assert np.isfinite(time[0, 0])
    assert np.all(np.isinf(time[0, 1:]))
    assert np.all(np.isinf(turns[0, 1:]))
    assert speed_at(path, np.array([[1e9]]))[0, 0] > 0.3 * FIRST
    held = run_down(dataclasses.replace(case, friction_N_m=np.array([401.0])))
    assert np.isfinite(held.time_s[0, -1])


def test_speed_outside_the_path_is_no_number():
    time, turns = times(run_down(rotors(friction_N_m=FRICTION)), 1.1)
    assert np.isnan(time[0, 0])
    assert np.isnan(turns[0, 0])


def test_lanes_keep_their_bits_whatever_their_companions():
    drags = [(6.0, 3.0, 1.5), (2.0, 2.0, 2.0), (0.0, -1.0, 4.0)]
    case = rotors(
        drag=drags, parts=6, friction_N_m=[300.0, 0.0, 20.0], brake_N_m=[900.0, 0.0, 50.0],
        brake_from_rad_s=[12.0, 9.0, 50.0], brake_delay_s=[2.0, 0.0, 1.0],
        delay_s=[2.0, 0.0, 1.0], move_s=[4.0, 0.0, 0.0],
    )  # fmt: skip
    path = run_down(case)
    for i in range(3):
        picked = {f.name: getattr(case, f.name)[i : i + 1] for f in dataclasses.fields(RunDown)}
        alone, among = run_down(RunDown(**picked)), lanes_of(path, slice(i, i + 1))
        for field in dataclasses.fields(alone):
            assert np.array_equal(getattr(alone, field.name), getattr(among, field.name))


def test_run_up_against_drag_and_a_drive_too_weak():
    speed = np.linspace(0.0, FIRST, 400)[None, :]
    rotor, friction = DRAG * speed**2, np.array([FRICTION])
    path = run_up(speed, np.full_like(speed, 4000.0), rotor, friction, np.array([INERTIA]))
    by_hand = hand.run_up_time_s(INERTIA, DRAG, 4000.0 - FRICTION, FIRST)
    assert path.time_s[0, -1] == pytest.approx(by_hand, rel=1e-4)
    weak = run_up(speed, np.full_like(speed, 2000.0), rotor, friction, np.array([INERTIA]))
    assert weak.time_s[0, -1] == np.inf
    assert hand.run_up_time_s(INERTIA, DRAG, 2000.0 - FRICTION, FIRST) == np.inf
    assert speed_at(weak, np.array([[1e6]]))[0, 0] < np.sqrt((2000.0 - FRICTION) / DRAG)


def test_closed_forms_of_speed_and_time_are_inverse():
    time = hand.drag_and_friction_time_s(INERTIA, DRAG, FRICTION, FIRST, 9.0)
    back = hand.drag_and_friction_speed_rad_s(INERTIA, DRAG, FRICTION, FIRST, time)
    assert back == pytest.approx(9.0)
    assert hand.drag_and_friction_speed_rad_s(INERTIA, DRAG, FRICTION, FIRST, 1e6) == 0.0


def test_torque_between_speeds_meets_a_square_and_makes_no_hills():
    coarse = FIRST * SHARES[None, :]
    kinked = np.array([9.0, 8.0, 7.0, 6.0, 5.0, 0.0, 0.0, -2.0, 3.0, 3.0, 1.0, 0.0])
    speed, torque = finer_torque(coarse, np.stack([coarse[0] ** 2, kinked])[None], 7)
    assert torque[0, 0] == pytest.approx(speed[0] ** 2, abs=1e-9)
    pieces = torque[0, 1][:-1].reshape(-1, 7)
    low, high = np.minimum(kinked[:-1], kinked[1:]), np.maximum(kinked[:-1], kinked[1:])
    assert np.all((pieces >= low[:, None] - 1e-12) & (pieces <= high[:, None] + 1e-12))


def test_motor_gives_the_least_of_table_and_ratings():
    table = ((0.0, 900.0), (20.0, 900.0), (40.0, 500.0))
    given = motor_torque_n_m([0.0, 10.0, 30.0, 40.0, 41.0], 800.0, 18000.0, table)
    assert given.tolist() == [800.0, 800.0, 600.0, 450.0, 0.0]


@pytest.mark.parametrize(
    ("name", "value", "words"),
    [
        ("inertia_kg_m2", 0.0, r"inertia_kg_m2: expected values above 0, found 0"),
        ("friction_N_m", -1.0, r"friction_N_m: expected values from 0 up, found -1"),
        ("move_s", np.nan, r"move_s: expected finite values of shape \(1,\)"),
    ],
)
def test_what_is_no_run_down_is_refused(name, value, words):
    with pytest.raises(ValueError, match=words):
        rotors(**{name: value})


def test_rising_speeds_and_too_few_are_refused():
    case = rotors()
    with pytest.raises(ValueError, match=r"speed_rad_s: expected falling speeds"):
        dataclasses.replace(case, speed_rad_s=case.speed_rad_s[:, ::-1])
    with pytest.raises(ValueError, match=r"expected three speeds or more, found 2"):
        finer_torque(np.ones((1, 2)), np.ones((1, 1, 2)), 4)
