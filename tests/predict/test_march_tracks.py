"""Histories in pieces, and aborts put together from pieces that many of them share."""

from __future__ import annotations

import dataclasses
import math
from itertools import pairwise
from operator import attrgetter

import numpy as np
import pytest

from planner.judge.requests import requests
from planner.model.plan import ABORT_CAUSES
from planner.model.results import Status
from planner.predict.histories import NO_REST
from planner.predict.march_tracks import (
    LADDER,
    PIECE_S,
    AbortTracks,
    Source,
    distinct,
    low_speed_rad_s,
    pieces_of,
)
from planner.predict.shaft import TAKES, Shaft, shaft_of
from planner.predict.study import Inputs
from planner.predict.study_air import AIR, WIND
from planner.rotor.speed_history import STEP_S, Controls, History
from tests.conftest import read_sample

COMMANDED, FROZEN, BRAKE_LOST, NOT_RESEATED = ABORT_CAUSES
LOW = 10.0
FIRST, SECOND = Controls(0.05), Controls(0.10, 0.01, -0.02)
HOLD_1, HOLD_2 = Source("1.1h", 14.0, FIRST, (FIRST,)), Source("1.2h", 20.0, SECOND, (SECOND,))
RAMP = Source("1.2r", 17.0, FIRST.towards(SECOND, 0.5), (FIRST, SECOND))


def history(speed_rad_s):
    """A history with controls that tell its rows apart."""
    speed = np.asarray(speed_rad_s, dtype=np.float64)
    rows = np.arange(speed.size, dtype=np.float64)
    return History(
        label="test",
        is_unpowered=False,
        step_s=STEP_S,
        speed_rad_s=speed,
        collective_rad=0.1 + 1e-6 * rows,
        cyclic_cosine_rad=1e-7 * rows,
        cyclic_sine_rad=0.0 * rows,
    )


class PlainShaft(Shaft):
    """A rotor whose torque is known without solving it."""

    def torque_n_m(self, points):
        return np.array([2.0 * point.speed_rad_s**2 for point in points])


@pytest.fixture(scope="module")
def shaft(shaft_plan):
    plan = shaft_plan
    paths = {*AIR.takes, *WIND.takes, *TAKES}
    values = {path: attrgetter(path)(plan) for path in paths}
    bare = Inputs(values, requests(plan.rule_book), {})
    found = shaft_of(dataclasses.replace(bare, prior={**AIR.run(bare), **WIND.run(bare)}))
    return PlainShaft(**{f.name: getattr(found, f.name) for f in dataclasses.fields(found)})


@pytest.fixture(scope="module")
def shaft_plan():
    return read_sample("articulated-run-up")


def aborts(shaft, plan, *sources, **changes):
    found = AbortTracks(shaft, dataclasses.replace(plan.abort, **changes), LOW, sources)
    return {(abort.segment, abort.cause): abort for abort in found.aborts(ABORT_CAUSES)}


UP = np.linspace(0.0, 30.0, 1001)
HISTORIES = {
    "up": UP,
    "down": UP[::-1],
    "up and down": np.concatenate([UP, UP[-2::-1]]),
    "two dips": 10.0 + 4.0 * np.cos(np.linspace(0.0, 4.0 * np.pi, 1501)),
    "all low": np.linspace(0.0, 9.0, 801),
    "all high": np.linspace(11.0, 30.0, 801),
    "high in its last row": np.array([8.0, 9.0, 10.0]),
    "two rows": np.array([12.0, 8.0]),
}


@pytest.mark.parametrize("speed", HISTORIES.values(), ids=HISTORIES)
def test_pieces_cover_every_row_once_and_in_order(speed):
    whole = history(speed)
    pieces = pieces_of(whole, LOW)
    for name in ("speed_rad_s", "collective_rad", "cyclic_cosine_rad", "cyclic_sine_rad"):
        tables = [getattr(piece.history, name) for piece in pieces]
        joined = np.concatenate([tables[0], *(table[1:] for table in tables[1:])])
        assert joined.tobytes() == getattr(whole, name).tobytes()
        assert all(a[-1] == b[0] for a, b in pairwise(tables))
    begins = np.cumsum([0.0, *(piece.history.duration_s for piece in pieces)])
    assert [piece.begins_s for piece in pieces] == pytest.approx(begins[:-1].tolist())
    assert begins[-1] == pytest.approx(whole.duration_s)


@pytest.mark.parametrize("speed", HISTORIES.values(), ids=HISTORIES)
def test_what_is_low_is_whole_and_what_is_high_is_short(speed):
    pieces = pieces_of(history(speed), LOW)
    for piece in pieces:
        inner = piece.history.speed_rad_s[:-1]  # the last row begins the next piece
        assert np.all((inner < LOW) == piece.is_low)
        if not piece.is_low:
            assert piece.history.duration_s <= PIECE_S + STEP_S
        assert piece.seats
    assert not any(a.is_low and b.is_low for a, b in pairwise(pieces))
    assert not any(piece.seats for piece in pieces_of(history(speed), LOW, seats=False))


@pytest.mark.parametrize(
    ("free", "brakes", "expected"),
    [(5.0, (0.0, 8.0), 1.1 * 8.796), (10.0, (0.0, 8.0), 13.0), (5.0, (9.0, 12.0), 13.2)],
)
def test_low_speed_lies_above_stops_release_and_brake(articulated, free, brakes, expected):
    droop = articulated.rotor.droop_stop
    assert droop.retraction.release_rad_s == pytest.approx(8.796, abs=1e-3)
    assert low_speed_rad_s(free, droop, brakes) == pytest.approx(expected, rel=1e-4)
    fixed = dataclasses.replace(droop, retraction=None)
    alone = max(1.3 * free, 1.1 * max(brakes))
    assert low_speed_rad_s(free, fixed, brakes) == pytest.approx(alone)
    assert low_speed_rad_s(free, None, brakes) == pytest.approx(alone)


def beginning(tracks):
    """The tracks of an abort until its controls have settled."""
    (second, *_) = (i for i, track in enumerate(tracks) if i and track.begins_s == 0.0)
    return tracks[:second], tracks[second:]


def test_an_abort_is_its_beginning_and_the_run_down_after_it(shaft, shaft_plan):
    found = aborts(shaft, shaft_plan, HOLD_1, HOLD_2)
    first, rest = beginning(found["1.2h", COMMANDED].tracks)
    assert first[0].history.speed_rad_s[0] == HOLD_2.speed_rad_s
    assert first[0].history.collective_rad[0] == SECOND.collective_rad
    target = shaft_plan.abort.collective_rad
    assert first[-1].history.collective_rad[-1] == target
    assert all(np.all(track.history.collective_rad == target) for track in rest)
    *upper, lower = rest
    assert upper[0].history.speed_rad_s[0] >= HOLD_2.speed_rad_s
    assert not any(track.is_low for track in upper)
    assert upper[-1].history.speed_rad_s[-1] < LOW  # down to where the lower part begins
    assert lower.is_low
    assert lower.history.speed_rad_s[0] == pytest.approx(LOW, rel=0.01)
    assert lower.history.speed_rad_s[-1] == 0.0


def test_the_beginning_lasts_until_the_controls_have_settled(shaft, shaft_plan):
    first, _ = beginning(aborts(shaft, shaft_plan, HOLD_2)["1.2h", COMMANDED].tracks)
    moves = math.degrees(SECOND.collective_rad - shaft_plan.abort.collective_rad) / 1.0
    ends = 2.0 + moves + 3.0  # reaction, one degree a second, and three seconds more
    assert first[-1].begins_s + first[-1].history.duration_s == pytest.approx(ends, abs=0.05)


def test_a_stop_that_does_not_seat_is_marched_where_it_tells(shaft, shaft_plan):
    slow = dataclasses.replace(HOLD_1, speed_rad_s=0.9 * LOW)
    found = aborts(shaft, shaft_plan, slow, HOLD_2)
    for segment in ("1.1h", "1.2h"):
        tracks = found[segment, NOT_RESEATED].tracks
        assert not any(track.seats for track in tracks if track.is_low)
        assert tracks[-1].is_low
        assert all(track.seats for track in found[segment, COMMANDED].tracks)
    assert found["1.1h", NOT_RESEATED].tracks[0].is_low  # from its very beginning
    braked, bare = (found["1.2h", cause].tracks[-1] for cause in (COMMANDED, BRAKE_LOST))
    assert bare.history.duration_s > 1.5 * braked.history.duration_s


def test_like_origins_share_their_run_down_and_slow_ones_have_their_own(shaft, shaft_plan):
    near = dataclasses.replace(HOLD_1, speed_rad_s=HOLD_2.speed_rad_s / LADDER + 0.1)
    far = dataclasses.replace(HOLD_1, speed_rad_s=HOLD_2.speed_rad_s / LADDER - 0.1)

    def run_down_tops(source):
        found = aborts(shaft, shaft_plan, source, HOLD_2)
        tracks = [found[s, COMMANDED].tracks for s in ("1.1h", "1.2h")]
        moved = shaft_plan.abort.collective_rad
        return [
            max(t.history.speed_rad_s[0] for t in own if t.history.collective_rad[0] == moved)
            for own in tracks
        ]

    assert run_down_tops(near) == [20.0, 20.0]
    assert run_down_tops(far) == [pytest.approx(far.speed_rad_s), 20.0]


def test_frozen_controls_of_a_ramp_are_covered_by_both_its_ends(shaft, shaft_plan):
    found = aborts(shaft, shaft_plan, HOLD_1, RAMP, HOLD_2)
    first, *others = found["1.2r", FROZEN].tracks
    assert np.all(first.history.collective_rad == RAMP.controls.collective_rad)
    for controls in (FIRST, SECOND):
        held = [t for t in others if t.history.cyclic_sine_rad[0] == controls.cyclic_sine_rad]
        assert all(np.all(t.history.collective_rad == controls.collective_rad) for t in held)
        assert max(t.history.speed_rad_s[0] for t in held) >= RAMP.speed_rad_s
        assert min(t.history.speed_rad_s[-1] for t in held) == 0.0
    tracks = [track for abort in found.values() for track in abort.tracks]
    kept, where = distinct(tracks)
    assert len(kept) < 0.6 * len(tracks)  # most of it is shared
    assert all(kept[where[id(track)]].key == track.key for track in tracks)
    assert len({track.key for track in kept}) == len(kept)


def test_tracks_that_differ_in_anything_are_marched_each():
    (track,) = pieces_of(history(HISTORIES["all low"]), LOW)
    unseated = dataclasses.replace(track, seats=False)
    pitch = dataclasses.replace(
        track.history, cyclic_sine_rad=track.history.cyclic_sine_rad + 0.01
    )
    pitched = dataclasses.replace(track, history=pitch)
    later = dataclasses.replace(track, begins_s=3.0)
    kept, where = distinct([track, unseated, pitched, later])
    assert kept == [track, unseated, pitched]
    assert where[id(later)] == where[id(track)] == 0


def test_a_cause_that_cannot_be_says_why(shaft, shaft_plan):
    bare = dataclasses.replace(shaft, brake_below_rad_s=None, brake_torque_N_m=None)
    found = aborts(bare, shaft_plan, HOLD_1)["1.1h", BRAKE_LOST]
    assert (found.status, found.tracks) == (Status.NOT_APPLICABLE, ())
    assert found.reason == "the stand has no brake that could be lost"


def test_an_abort_without_times_is_not_stated(shaft, shaft_plan):
    for abort in aborts(shaft, shaft_plan, HOLD_1, reaction_time_s=None).values():
        assert (abort.status, abort.tracks) == (Status.NOT_STATED, ())
        assert "expected collective_rate and reaction_time" in abort.reason


def test_a_rotor_that_does_not_come_to_rest_is_outside_validity(shaft, shaft_plan):
    drive = dataclasses.replace(shaft.drive, friction_N_m=0.0)
    found = aborts(dataclasses.replace(shaft, drive=drive), shaft_plan, HOLD_1)
    assert found["1.1h", BRAKE_LOST].status is Status.OUTSIDE_VALIDITY
    assert found["1.1h", BRAKE_LOST].reason == NO_REST
    assert found["1.1h", COMMANDED].status is Status.OK


def test_origins_at_rest_are_left_out(shaft, shaft_plan):
    resting = Source("1.1h", 0.0, FIRST, (FIRST,))
    assert aborts(shaft, shaft_plan, resting) == {}
    assert {s for s, _ in aborts(shaft, shaft_plan, resting, HOLD_2)} == {"1.2h"}
