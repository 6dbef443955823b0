"""Rows of marched ramps, stops and aborts; the march itself is played by a table of numbers."""

from __future__ import annotations

import dataclasses
import math
from operator import attrgetter

import numpy as np
import pytest

from planner.judge.requests import requests
from planner.model.plan import ABORT_CAUSES, Cyclic, segments
from planner.model.results import Labels, Status
from planner.model.stand import Obstruction
from planner.predict import histories, march_course
from planner.predict.fineness import STATIONS
from planner.predict.march_outcome import LEAST, MOST
from planner.predict.march_parts import AT_REST, IN_DOUBT
from planner.predict.march_pool import Crew
from planner.predict.march_runs import PRINTED, SCAN, SEARCH
from planner.predict.rows import Rows, single
from planner.predict.shaft import Shaft
from planner.predict.study import Inputs, NotAssessedError
from planner.predict.study_air import AIR, WIND
from planner.predict.study_marches import (
    MARCHES,
    MOMENTS,
    OF_LAG,
    OF_STOPS,
    OVERRUN,
    QUANTITIES,
)
from planner.rotor.march import MarchResult
from planner.rotor.march_model import march_model
from planner.rotor.march_trace import Course
from planner.rotor.march_track import Contacts, Extremes
from tests.conftest import read_sample

COMMANDED, FROZEN, BRAKE_LOST, NOT_RESEATED = ABORT_CAUSES
FREE = 9.0
TIP, HIGH_TIP = -0.2, 0.3
FLAP = 0.01
FINE = 1e-4
HOLD_FLAP, HOLD_HIGH = -0.02, 0.1


def change(plan, part, **values):
    return dataclasses.replace(plan, **{part: dataclasses.replace(getattr(plan, part), **values)})


def short(name):
    """Two steps of a sample at fixed cyclic, with ramps of a few seconds."""
    plan = read_sample(name)
    steps = tuple(
        dataclasses.replace(step, cyclic=Cyclic(trimmed=False), ramp_time_s=4.0)
        for step in plan.blocks[0].steps[:2]
    )
    block = dataclasses.replace(plan.blocks[0], steps=steps, repeat=1)
    plan = dataclasses.replace(plan, blocks=(block,))
    drive = dataclasses.replace(plan.stand.drive, friction_N_m=600.0)
    return change(plan, "stand", drive=drive)


@pytest.fixture(scope="module")
def windy():
    return short("articulated-run-up")


@pytest.fixture(scope="module")
def plan(windy):
    """The same in still air, where there is less to march."""
    return change(windy, "site", wind_mean_m_s=0.0, wind_gust_m_s=0.0, anemometer_error_m_s=0.0)


class Play:
    """Stands in for the march: what was asked of it, and numbers that tell what they are of."""

    def __init__(self):
        self.jobs, self.lanes, self.spoilt = [], [], ()

    def march(self, job, cases, progress):
        self.jobs.append(job)
        self.lanes.append(cases)
        blades = job.rotor.n_blades
        extremes = Extremes.none(cases.count, blades, blades)
        contacts = Contacts.none((cases.count, blades))
        windy = cases.wind_m_s + cases.gust_m_s
        flap = cases.load_factor * (FLAP + 1e-3 * windy) + FINE * (job.settings == PRINTED)
        extremes.highest_flap_rad[:] = flap[:, None]
        extremes.lowest_flap_rad[:] = -flap[:, None]
        extremes.lowest_tip_m[:] = TIP
        extremes.highest_tip_m[:] = HIGH_TIP
        extremes.thrust_N[:], extremes.least_thrust_N[:] = 9000.0 + windy, -50.0 - windy
        extremes.worst_s[:] = 0.1
        contacts.first_s[:, 0], contacts.last_s[:, 1] = 1.0, 2.0
        progress(1.0)
        return MarchResult(extremes, contacts, ~np.isin(cases.seats, self.spoilt))


@pytest.fixture(scope="module", autouse=True)
def _plain_rotor():
    """Torque that needs no solution, and numbers that need no march."""

    def course(_model, _histories, _rough, cases, stretches):
        flap = np.where(np.arange(stretches), FLAP, np.nan) * np.ones((cases.count, 1))
        return Course(np.ones_like(flap), np.ones_like(flap), flap, -flap)

    with pytest.MonkeyPatch.context() as patch:
        patch.setattr(histories, "PARTS", 4)
        patch.setattr(Shaft, "torque_n_m", lambda _, at: np.array([p.speed_rad_s**2 for p in at]))
        patch.setattr(Crew, "march", Play().march)
        patch.setattr(march_course, "march_model", lambda *_, **__: None)
        patch.setattr(march_course, "course", course)
        yield


@pytest.fixture
def play(monkeypatch):
    """What a test of its own asks of the march."""
    play = Play()
    monkeypatch.setattr(Crew, "march", play.march)
    return play


@pytest.fixture(scope="module")
def found(plan):
    """What is found for the plan as it is, told once to many tests."""
    return found_in(plan)


def flap_of_holds(plan, quantity, flap_rad):
    rows = Rows(quantity, "holds")
    for segment in segments(plan):
        if segment.kind == "hold":
            rows.add(Labels(segment=segment.id), flap_rad, low=flap_rad - 0.01)
    return rows.prediction()


def found_in(plan, *, thrifty=False, told=lambda *_: None, **prior):
    """The study's predictions, with the studies before it cut short."""
    values = {path: attrgetter(path)(plan) for path in {*AIR.takes, *WIND.takes}}
    wanted = dataclasses.replace(requests(plan.rule_book), is_thrifty=thrifty)
    bare = Inputs(values, wanted, {})
    known = {
        **AIR.run(bare),
        **WIND.run(bare),
        "stop_free_speed": single("stop_free_speed", "stops", FREE),
        "flap_lowest": flap_of_holds(plan, "flap_lowest", HOLD_FLAP),
        "flap_highest": flap_of_holds(plan, "flap_highest", HOLD_HIGH),
        **prior,
    }
    inputs = MARCHES.inputs(plan, segments(plan), wanted, known)
    return MARCHES.run(dataclasses.replace(inputs, progress=told))


def rows(prediction, **labels):
    return [
        i
        for i, label in enumerate(prediction.labels)
        if all(getattr(label, key) == value for key, value in labels.items())
    ]


def test_every_place_has_its_row(plan, found):
    walk = [s.id for s in segments(plan)]
    assert walk == ["1.1r", "1.1h", "1.2r", "1.2h", "stop"]
    places = {(s, "") for s in ("1.1r", "1.2r", "stop")}
    places |= {(s, c) for s in walk[:-1] for c in ABORT_CAUSES}
    for quantity in QUANTITIES:
        labels = [(x.segment, x.state) for x in found[quantity].labels]
        at_holds = {("1.1h", ""), ("1.2h", "")} if quantity == "blade_clearance" else set()
        assert set(labels) == places | at_holds
        assert len(set(labels)) == len(labels)
    for quantity in {*MOST, *LEAST, "blade_clearance"} - {"root_flap_peak_moment"}:
        assert set(found[quantity].status) == {Status.OK}
    assert found["root_flap_peak_moment"].reasons[0].startswith("the hub has a flap hinge")


def test_the_worst_of_all_winds_is_told_beside_nominal_air(windy):
    found, stronger = found_in(windy), found_in(change(windy, "site", wind_gust_m_s=12.0))
    for quantity, end, sign in (
        ("highest_flap_marched", "high", 1.0),
        ("lowest_flap_marched", "low", -1.0),
    ):
        worst = sign * getattr(found[quantity], end)
        gust = 4.5 + 0.5  # with the anemometer's error, at a hub no higher than it
        nominal, most = (lift * (FLAP + 1e-3 * gust) for lift in (1.0, 1.05))
        assert worst == pytest.approx(most + FINE, rel=1e-6)
        assert sign * found[quantity].value == pytest.approx(nominal, rel=1e-6)
        assert np.all(sign * getattr(stronger[quantity], end) > worst)
    thrust = found["thrust_peak"]
    assert np.all((thrust.low < -50.0) & (thrust.high > 9000.0))


def test_worst_cases_are_marched_again_in_double_precision(windy, play):
    told = []
    found_in(windy, told=lambda *words: told.append(words))
    assert [job.settings for job in play.jobs] == [SEARCH, SEARCH, SEARCH, PRINTED]
    assert play.lanes[-1].count < 0.2 * (play.lanes[0].count + play.lanes[1].count)
    texts = [text for text, _ in told]
    assert texts[0].startswith("marching ramps: ")
    assert any(text.startswith("marching aborts: ") for text in texts)
    assert texts[-1] == "marching the worst cases again"
    assert told[-1][1] == pytest.approx(1.0)


def test_a_thrifty_run_ends_with_its_search(plan, play):
    found = found_in(plan, thrifty=True)
    assert [job.settings for job in play.jobs] == [SCAN, SCAN]
    assert set(found["highest_flap_marched"].status) == {Status.OK}
    assert set(found["flap_course_marched"].status) == {Status.NOT_COMPUTED}


def test_touches_are_timed_from_the_begin_of_the_ramp(found):
    first, last = (found[quantity] for quantity in MOMENTS)
    (ramp,) = rows(first, segment="1.1r", state="")
    assert first.value[ramp] == 1.0
    (stop,) = rows(last, segment="stop", state="")
    assert last.value[stop] > 4.0  # of its last piece
    for i in rows(first, state=COMMANDED):
        assert first.status[i] is Status.NOT_APPLICABLE
        assert "told by rotor speed" in first.reasons[i]


def test_course_is_told_of_the_start_and_the_stop_alone(found):
    course = found["flap_course_marched"]
    assert {label.segment for label in course.labels} == {"1.1r", "stop"}
    assert set(course.status) == {Status.OK}
    for mode in march_course.CASES:  # a stretch without a number has no row
        assert len(rows(course, segment="1.1r", mode=mode)) == march_course.STRETCHES - 1


def test_nothing_is_broken_off_at_rest(plan):
    step = dataclasses.replace(plan.blocks[0].steps[0], speed_rad_s=0.0)
    block = dataclasses.replace(plan.blocks[0], steps=(step, plan.blocks[0].steps[1]))
    found = found_in(dataclasses.replace(plan, blocks=(block,)))["highest_flap_marched"]
    for cause in ABORT_CAUSES:
        (i,) = rows(found, segment="1.1h", state=cause)
        assert (found.status[i], found.reasons[i]) == (Status.NOT_APPLICABLE, AT_REST)
    assert all(found.status[i] is Status.OK for i in rows(found, segment="1.2h"))


def test_hingeless_rotor_has_root_moments_and_no_stops():
    plan = short("hingeless-model")
    found = found_in(plan)
    for quantity in OF_STOPS:
        assert set(found[quantity].status) == {Status.NOT_APPLICABLE}
        assert set(found[quantity].reasons) == {
            "the hub has no flap stops; its root moment is judged instead"
        }
    for quantity in OF_LAG:
        assert set(found[quantity].reasons) == {"the rotor file states no lag stops"}
    assert Status.OK in found["root_flap_peak_moment"].status
    for cause in (BRAKE_LOST, NOT_RESEATED):
        of_cause = [
            found["hub_moment_peak"].status[i] for i in rows(found["hub_moment_peak"], state=cause)
        ]
        stands = cause == BRAKE_LOST and plan.stand.brake_below_rad_s is not None
        assert set(of_cause) == {Status.OK if stands else Status.NOT_APPLICABLE}


@pytest.mark.parametrize("post", [None, Obstruction("post", 0.0, 6.6, 3.0)])
def test_clearance_is_that_of_the_lowest_tip(plan, post):
    height = plan.stand.hub_height_m
    places = () if post is None else (post,)
    found = found_in(change(plan, "stand", obstructions=places))["blade_clearance"]
    radius, hinge = plan.rotor.blade.radius_m, plan.rotor.hub.flap_hinge_m
    chord = float(np.max(plan.rotor.blade.stations.chord_m))
    (ramp,) = rows(found, segment="1.2r", state="")
    (hold,) = rows(found, segment="1.2h", state="")
    pitch = plan.blocks[0].steps[0].collective_rad
    window = plan.blocks[0].steps[1].window.collective_rad
    low = (
        TIP - 0.75 * chord * math.sin(pitch),
        (radius - hinge) * math.sin(HOLD_FLAP - 0.01) - 0.75 * chord * math.sin(pitch + window),
    )
    by_hand = [height + edge for edge in low]
    if post is not None:  # slant distance from the tip to the post's top
        away = post.distance_m - radius
        by_hand = [min(z, math.hypot(away, z - post.height_m)) for z in by_hand]
    assert [found.low[ramp], found.low[hold]] == pytest.approx(by_hand, rel=1e-3)


def test_clearance_of_an_inverted_rotor_is_that_of_its_highest_tip(plan):
    found = found_in(change(plan, "stand", mounting="inverted", obstructions=()))[
        "blade_clearance"
    ]
    radius, hinge = plan.rotor.blade.radius_m, plan.rotor.hub.flap_hinge_m
    lowest = (-HIGH_TIP, -(radius - hinge) * math.sin(HOLD_HIGH))
    for segment, edge in zip(("1.2r", "1.2h"), lowest, strict=True):
        (i,) = rows(found, segment=segment, state="")
        assert found.low[i] == pytest.approx(plan.stand.hub_height_m + edge, abs=0.03)


def test_clearance_of_a_level_axis_is_outside_validity(plan):
    found = found_in(change(plan, "stand", mounting="axis level"))
    assert set(found["blade_clearance"].status) == {Status.OUTSIDE_VALIDITY}
    assert Status.OK in found["highest_flap_marched"].status


def test_hold_without_its_flap_has_no_clearance(plan):
    flap = Rows("flap_lowest", "holds")
    flap.flag(Labels(segment="1.1h"), Status.NOT_CONVERGED, "no balance")
    found = found_in(plan, flap_lowest=flap.prediction())["blade_clearance"]
    for segment, status, words in (
        ("1.1h", Status.NOT_CONVERGED, "flap_lowest: no balance"),
        ("1.2h", Status.NOT_COMPUTED, "flap_lowest: no flap was predicted for this hold"),
    ):
        (i,) = rows(found, segment=segment, state="")
        assert (found.status[i], found.reasons[i]) == (status, words)


def test_one_case_that_failed_leaves_its_part_not_converged(plan, play):
    play.spoilt = (False,)  # the cases in which a stop does not seat again
    found = found_in(plan)
    for quantity in ("droop_stop_peak_moment", "blade_clearance", "thrust_peak"):
        for cause in ABORT_CAUSES:
            for i in rows(found[quantity], state=cause):
                expected = Status.NOT_CONVERGED if cause == NOT_RESEATED else Status.OK
                assert found[quantity].status[i] is expected
        (i,) = rows(found[quantity], segment="stop", state="")
        assert found[quantity].status[i] is Status.OK


def test_a_blade_that_sinks_below_its_static_stop_is_told_at_rest(plan):
    stop = dataclasses.replace(plan.rotor.droop_stop, angle_rad=-0.008)
    found = found_in(change(plan, "rotor", droop_stop=stop))[OVERRUN]
    sunk = 1.05 * FLAP + FINE - 0.008
    for segment, state in (("1.1r", ""), ("stop", ""), ("1.2h", COMMANDED)):
        (i,) = rows(found, segment=segment, state=state)
        assert found.high[i] == pytest.approx(sunk)
    for labels in ({"segment": "1.2r", "state": ""}, {"state": NOT_RESEATED}):
        assert {found.status[i] for i in rows(found, **labels)} == {Status.NOT_APPLICABLE}


def test_what_begins_where_the_droop_stop_is_in_doubt_is_outside_validity(plan):
    between = 0.5 * sum(
        attrgetter("reseat_rad_s", "release_rad_s")(plan.rotor.droop_stop.retraction)
    )
    step = dataclasses.replace(plan.blocks[0].steps[0], speed_rad_s=between)
    block = dataclasses.replace(plan.blocks[0], steps=(step, plan.blocks[0].steps[1]))
    found = found_in(dataclasses.replace(plan, blocks=(block,)))["thrust_peak"]
    doubtful = [("1.2r", ""), *(("1.1h", cause) for cause in ABORT_CAUSES)]
    for i, label in enumerate(found.labels):
        if (label.segment, label.state) in doubtful:
            assert (found.status[i], found.reasons[i]) == (Status.OUTSIDE_VALIDITY, IN_DOUBT)
        else:
            assert found.status[i] is Status.OK


@pytest.mark.parametrize("settings", [PRINTED, SEARCH, SCAN])
def test_stop_too_stiff_for_the_steps_is_not_resolved(plan, settings):
    stop = plan.rotor.droop_stop
    stiff = dataclasses.replace(stop, stiffness_N_m_rad=1e4 * stop.stiffness_N_m_rad)
    rotor = dataclasses.replace(plan.rotor, droop_stop=stiff)
    found = [march_model(r, 20.0, settings, STATIONS).resolves_stops for r in (plan.rotor, rotor)]
    assert found == [True, False]


@pytest.mark.parametrize(
    ("part", "values", "status", "words"),
    [
        ("drive", {"friction_N_m": None}, Status.NOT_STATED, r"state friction in \[drive\]"),
        ("site", {"gust_lengths": None}, Status.NOT_STATED, r"state in \[gust\] the lengths"),
        ("site", {"wind_gust_m_s": 40.0}, Status.OUTSIDE_VALIDITY, r"expected up to 30 m/s"),
        ("rule_book", {"allowances": ()}, Status.NOT_STATED, r"states no allowance 'air_load'"),
    ],
)
def test_what_is_not_known_refuses_the_whole_study(windy, play, part, values, status, words):
    if part == "drive":
        drive = dataclasses.replace(windy.stand.drive, **values)
        part, values = "stand", {"drive": drive}
    with pytest.raises(NotAssessedError, match=words) as refusal:
        found_in(change(windy, part, **values))
    assert refusal.value.status is status
    assert play.jobs == []


def test_unknown_stop_free_speed_refuses_the_whole_study(plan):
    free = Rows("stop_free_speed", "stops")
    free.flag(Labels(), Status.NOT_STATED, "the rule book states no stop_free_margin")
    with pytest.raises(NotAssessedError, match=r"stop_free_speed is not stated") as refusal:
        found_in(plan, stop_free_speed=free.prediction())
    assert refusal.value.status is Status.NOT_STATED


def test_ramp_without_a_time_is_not_stated_and_aborts_begin_at_its_fast_end(plan):
    step = dataclasses.replace(plan.blocks[0].steps[1], ramp_time_s=math.nan)
    block = dataclasses.replace(plan.blocks[0], steps=(plan.blocks[0].steps[0], step))
    found = found_in(dataclasses.replace(plan, blocks=(block,)))["highest_flap_marched"]
    (i,) = rows(found, segment="1.2r", state="")
    assert (found.status[i], found.reasons[i]) == (Status.NOT_STATED, "the ramp has no duration")
    assert all(found.status[i] is Status.OK for i in rows(found, state=COMMANDED))
