"""What the drive has left in ramps; how long the stop and aborts take, and what they pass."""

from __future__ import annotations

import dataclasses
import math
from operator import attrgetter

import numpy as np
import pytest

from planner.files.read import read_plan
from planner.judge.requests import requests
from planner.methods import hand_checks_run_down as hand
from planner.model.plan import ABORT_CAUSES, Cyclic, KeepOut, segments
from planner.model.results import Status
from planner.predict.band_rows import TOTALS
from planner.predict.histories import (
    Origin,
    abort_order,
    own_run_up_of,
    ramp_history,
    run_downs,
    timed,
)
from planner.predict.passage_amplitudes import AMPLITUDE, PEAK_SPEED
from planner.predict.register import REFERENCES, REGISTER
from planner.predict.run_down_events import aborts, solved_events, stops
from planner.predict.shaft import ends_of, shaft_of
from planner.predict.study import Inputs, NotAssessedError
from planner.predict.study_air import AIR, WIND
from planner.predict.study_speeds import SPEEDS, TIMES
from planner.predict.study_unbalance import UNBALANCE
from planner.rotor.speed_history import Controls
from tests.conftest import SAMPLES

RPM = 2.0 * math.pi / 60.0
COMMANDED, FROZEN, BRAKE_LOST, NOT_RESEATED = ABORT_CAUSES
FRICTION, BRAKE = 300.0, 1300.0


def change(plan, part, **values):
    return dataclasses.replace(plan, **{part: dataclasses.replace(getattr(plan, part), **values)})


def with_drive(plan, **values):
    return change(plan, "stand", drive=dataclasses.replace(plan.stand.drive, **values))


@pytest.fixture(scope="module")
def plan():
    """To 180 rpm at 6 degrees and down again, with the brake from 110 rpm."""
    articulated = read_plan(
        SAMPLES / "articulated-run-up",
        {entry.id: (entry.unit, entry.axes) for entry in REGISTER.values()},
        REFERENCES,
    ).plan
    step = dataclasses.replace(
        articulated.blocks[0].steps[1],
        collective_rad=math.radians(6.0),
        cyclic=Cyclic(trimmed=False),
        ramp_time_s=15.0,
    )
    block = dataclasses.replace(articulated.blocks[0], steps=(step,), repeat=1)
    plan = dataclasses.replace(articulated, blocks=(block,))
    plan = with_drive(plan, friction_N_m=FRICTION, torque_by_speed=())
    plan = change(plan, "stand", brake_torque_N_m=BRAKE, brake_below_rad_s=120.0 * RPM)
    return change(
        plan,
        "abort",
        collective_rate_rad_s=math.radians(1.0),
        reaction_time_s=2.0,
        brake=True,
        brake_from_rad_s=110.0 * RPM,
    )


def inputs_of(plan, walk=None):
    walk, wanted = walk or segments(plan), requests(plan.rule_book)
    before = (AIR, WIND, UNBALANCE)
    paths = {path for study in (*before, SPEEDS) for path in study.takes} - {"segments"}
    values = {path: attrgetter(path)(plan) for path in paths} | {"segments": walk}
    bare = Inputs(values, wanted, {})
    prior = {quantity: p for study in before for quantity, p in study.run(bare).items()}
    return Inputs(values, wanted, prior)


def found_in(plan, walk=None):
    return SPEEDS.run(inputs_of(plan, walk))


@pytest.fixture(scope="module")
def found(plan):
    return found_in(plan)


def rows(prediction, **labels):
    return [
        i
        for i, label in enumerate(prediction.labels)
        if all(getattr(label, key) == value for key, value in labels.items())
    ]


def test_every_place_has_its_row(plan, found):
    walk = [s.id for s in segments(plan)]
    assert walk == ["1.1r", "1.1h", "stop"]
    places = {("stop", "")} | {(s, c) for s in walk[:-1] for c in ABORT_CAUSES}
    for quantity in TIMES:
        assert {(x.segment, x.state) for x in found[quantity].labels} == places
        assert set(found[quantity].status) == {Status.OK}
    assert {(x.segment, x.state) for x in found["band_cycles"].labels} == places
    assert set(found["band_cycles"].status) == {Status.OK}
    for quantity in (AMPLITUDE, PEAK_SPEED):
        for mode in ("stand lateral", "stand fore-aft"):
            here = [found[quantity].labels[i] for i in rows(found[quantity], mode=mode)]
            assert {(x.segment, x.state) for x in here} == places | {("1.1r", "")}
        assert set(found[quantity].status) == {Status.OK}
    for quantity in TOTALS:
        assert [x.band for x in found[quantity].labels] == ["S1"]
        assert found[quantity].status == (Status.OK,)
    assert {x.segment for x in found["drive_torque_reserve"].labels} == {"1.1r", "stop"}
    for prediction in found.values():
        known = np.isfinite(prediction.hand)
        band = 0.25 * np.abs(prediction.hand) + 0.5
        assert np.all((np.abs(prediction.value - prediction.hand) <= band)[known])
    assert np.isfinite(found["time_to_rest"].hand).all()


def test_times_fall_in_order_of_speed_and_of_cause(found):
    i = {c: rows(found["time_to_rest"], segment="1.1h", state=c)[0] for c in ABORT_CAUSES}
    rest, half = found["time_to_rest"].value, found["time_to_half"].value
    assert np.all(half < found["time_to_30"].value)
    assert np.all(found["time_to_30"].value < found["time_to_10"].value)
    assert rest[i[BRAKE_LOST]] > 1.5 * rest[i[COMMANDED]]
    assert rest[i[FROZEN]] < rest[i[COMMANDED]]  # six degrees brake better than two
    assert rest[i[NOT_RESEATED]] == rest[i[COMMANDED]]
    low, high = found["time_to_half"].low, found["time_to_half"].high
    assert np.all((low < half) & (half < high))


def test_rotor_without_drag_runs_down_by_friction_and_brake(plan):
    """A vanishing density leaves only what can be redone with a pencil."""
    inputs = inputs_of(plan)
    shaft = shaft_of(inputs)
    thin = dataclasses.replace(shaft.air, density_kg_m3=1e-9)
    shaft = dataclasses.replace(shaft, air=thin, wind_m_s=0.0)
    ways = [(s, ends_of(s, {})) for s in inputs["segments"]]
    events = [e for e in aborts(ways, inputs, shaft) if e.label.segment == "1.1h"]
    orders = [e.order for e in events if e.order is not None]
    first, brake_from, inertia = 180.0 * RPM, 110.0 * RPM, shaft.inertia_kg_m2
    # by hand: each blade about the shaft, I + 2 e S + e² m = 407.5 + 2 0.22 111.0 + 0.22² 43.2
    assert inertia == pytest.approx(120.0 + 4.0 * 458.4, rel=0.001)
    by_cause = dict(zip(ABORT_CAUSES, run_downs(shaft, orders), strict=False))
    braked = hand.constant_torque_time_s(inertia, FRICTION, first - brake_from)
    braked = braked + hand.constant_torque_time_s(inertia, FRICTION + BRAKE, brake_from)
    bare = hand.constant_torque_time_s(inertia, FRICTION, first)
    assert by_cause[COMMANDED].reached(0.0)[0] == pytest.approx(float(braked), rel=1e-6)
    assert by_cause[BRAKE_LOST].reached(0.0)[0] == pytest.approx(float(bare), rel=1e-6)


def test_no_stated_friction_leaves_everything_not_stated(plan):
    with pytest.raises(NotAssessedError, match=r"state friction in \[drive\]") as refusal:
        found_in(with_drive(plan, friction_N_m=None))
    assert refusal.value.status is Status.NOT_STATED


def test_stand_without_a_brake_cannot_lose_it(plan):
    bare = change(plan, "stand", brake_below_rad_s=None, brake_torque_N_m=None)
    found = found_in(change(bare, "shutdown", brake=False))["time_to_rest"]
    for i in rows(found, state=BRAKE_LOST):
        assert found.status[i] is Status.NOT_APPLICABLE
        assert found.reasons[i] == "the stand has no brake that could be lost"
    assert all(found.status[i] is Status.OK for i in rows(found, state=COMMANDED))


def test_wind_that_keeps_the_rotor_turning_gives_no_time(plan):
    idle = with_drive(change(plan, "abort", brake=False), friction_N_m=0.0)
    idle = change(idle, "site", wind_mean_m_s=12.0, wind_gust_m_s=14.0)
    found = found_in(change(idle, "shutdown", brake=False))
    for i in rows(found["time_to_rest"], state=FROZEN):
        assert found["time_to_rest"].status[i] is Status.OUTSIDE_VALIDITY
        assert "do not bring this rotor to rest" in found["time_to_rest"].reasons[i]
        assert math.isnan(found["time_to_rest"].value[i])
        assert found["time_to_half"].status[i] is Status.OK


@pytest.mark.parametrize(
    ("values", "cause", "words"),
    [
        ({"collective_rate_rad_s": None}, COMMANDED, r"expected collective_rate and reaction_tim"),
        ({"reaction_time_s": None}, FROZEN, r"expected collective_rate and reaction_time"),
        ({"cyclic": "full aft"}, COMMANDED, r"found 'full aft'; nothing else can be marched"),
    ],
)
def test_abort_that_does_not_say_who_does_what_when_is_not_stated(plan, values, cause, words):
    shaft, origin = shaft_of(inputs_of(plan)), Origin(18.0, Controls(0.1, 0.01, 0.02))
    with pytest.raises(NotAssessedError, match=words) as refusal:
        abort_order(shaft, dataclasses.replace(plan.abort, **values), origin, cause)
    assert refusal.value.status is Status.NOT_STATED
    kept = dataclasses.replace(plan.abort, cyclic="as it is")
    move = abort_order(shaft, kept, origin, COMMANDED).move
    assert move.target == dataclasses.replace(origin.controls, collective_rad=math.radians(2.0))


def test_powered_stop_takes_its_stated_time(plan):
    found = found_in(change(plan, "shutdown", powered=True, time_s=40.0))
    i = rows(found["time_to_10"], segment="stop")[0]
    assert found["time_to_10"].value[i] == pytest.approx(36.0)
    i = rows(found["band_cycles"], segment="stop")[0]
    assert found["band_cycles"].status[i] is Status.NOT_APPLICABLE
    i = rows(found["drive_torque_reserve"], segment="stop")[0]
    assert found["drive_torque_reserve"].status[i] is Status.OK


def test_band_above_the_first_speed_is_not_passed(plan):
    found = found_in(
        dataclasses.replace(plan, keep_outs=(KeepOut("S9", 190.0 * RPM, 200.0 * RPM, "x"),))
    )
    assert set(found["band_cycles"].status) == {Status.NOT_APPLICABLE}
    assert set(found["band_cycles"].reasons) == {"the run-down begins below this band"}
    for quantity in TOTALS:
        assert found[quantity].status == (Status.OK,)
        assert found[quantity].high.tolist() == [0.0]


def test_mode_above_the_first_speed_is_not_passed(plan):
    modes = tuple(
        dataclasses.replace(m, frequency_rad_s=200.0 * RPM) for m in plan.stand.modes[:1]
    )
    found = found_in(change(plan, "stand", modes=modes))
    for quantity in (AMPLITUDE, PEAK_SPEED):
        assert set(found[quantity].status) == {Status.NOT_APPLICABLE}
        assert set(found[quantity].reasons) == {"this resonance is not passed"}


def test_mode_that_no_passage_can_be_computed_for_says_why(plan):
    modes = tuple(dataclasses.replace(m, damping_ratio=0.0) for m in plan.stand.modes)
    found = found_in(change(plan, "stand", modes=modes))
    for quantity in (AMPLITUDE, PEAK_SPEED):
        assert set(found[quantity].status) == {Status.OUTSIDE_VALIDITY}
        assert all("damping" in reason for reason in found[quantity].reasons)
    assert set(found["band_cycles"].status) == {Status.OK}


def test_reserve_is_what_the_drive_gives_less_what_the_ramp_takes(plan):
    weak = with_drive(plan, torque_rating_N_m=2000.0, power_rating_W=1e9)
    found, shaft = found_in(weak)["drive_torque_reserve"], shaft_of(inputs_of(weak))
    walk = segments(weak)
    i = rows(found, segment="1.1r")[0]
    ends = ends_of(walk[0], shaft.found_cyclics(walk))
    (torque,) = shaft.torque_n_m([shaft.nominal(walk[0].to_rad_s, ends[1])])
    taken = shaft.inertia_kg_m2 * walk[0].to_rad_s / walk[0].duration_s
    assert found.value[i] == pytest.approx(2000.0 - torque - FRICTION - taken)
    assert found.value[i] < 0.0  # too weak for this ramp: a number, for a rule to judge
    assert found.low[i] < found.value[i] < found.high[i]
    assert found.status[i] is Status.OK


def test_motor_table_is_looked_at_between_its_rows(plan):
    dip = ((0.0, 9000.0), (100.1 * RPM, 7000.0), (105.0 * RPM, 9000.0), (400.0 * RPM, 9000.0))
    found = found_in(with_drive(plan, torque_by_speed=dip))["drive_torque_reserve"]
    i = rows(found, segment="1.1r")[0]
    taken = 1954.0 * 180.0 * RPM / 15.0
    assert 7000.0 - 900.0 < found.value[i] + FRICTION + taken < 7000.0


def own_run_up_plan(plan, rating):
    step = dataclasses.replace(plan.blocks[0].steps[0], own_run_up=True, ramp_time_s=math.nan)
    block = dataclasses.replace(plan.blocks[0], steps=(step, *plan.blocks[0].steps[1:]))
    plan = dataclasses.replace(plan, blocks=(block,))
    return with_drive(plan, torque_rating_N_m=rating, power_rating_W=1e9)


def test_own_run_up_takes_the_time_that_its_torque_gives(plan):
    plan = own_run_up_plan(plan, 3000.0)
    walk = timed(plan, segments(plan), requests(plan.rule_book))
    shaft = shaft_of(inputs_of(plan, walk))
    ends = ends_of(walk[0], shaft.found_cyclics(walk))
    (torque,) = shaft.torque_n_m([shaft.nominal(walk[0].to_rad_s, ends[1])])
    by_hand = hand.run_up_time_s(
        shaft.inertia_kg_m2, torque / walk[0].to_rad_s ** 2, 3000.0 - FRICTION, walk[0].to_rad_s
    )
    assert walk[0].duration_s == pytest.approx(float(by_hand), rel=0.01)
    assert [s.duration_s for s in walk[1:]] == [s.duration_s for s in segments(plan)[1:]]
    assert walk[0].course[-1] == (walk[0].duration_s, walk[0].to_rad_s)
    assert walk[0].slow_course[-1][0] > 1.01 * walk[0].duration_s
    assert walk[0].slowest.pieces[-1][0] > walk[0].pieces[-1][0]
    history = ramp_history(walk[0], ends, own_run_up_of(shaft, walk[0], ends))
    assert history.speed_rad_s[-1] == walk[0].to_rad_s
    found = found_in(plan, walk)["drive_torque_reserve"]
    assert found.value[rows(found, segment="1.1r")[0]] == pytest.approx(3000.0 - FRICTION - torque)


def test_own_run_up_that_never_arrives_is_outside_validity(plan):
    plan = own_run_up_plan(plan, 700.0)
    walk = timed(plan, segments(plan), requests(plan.rule_book))
    assert math.isnan(walk[0].duration_s)
    found = found_in(plan, walk)["drive_torque_reserve"]
    i = rows(found, segment="1.1r")[0]
    assert found.status[i] is Status.OUTSIDE_VALIDITY
    assert "does not reach this step's speed" in found.reasons[i]
    assert found.value[i] < 0.0


def test_history_of_the_stop_agrees_with_its_times(plan, found):
    inputs = inputs_of(plan)
    shaft = shaft_of(inputs)
    ways = [(s, ends_of(s, {})) for s in inputs["segments"]]
    events = list(stops(ways, inputs, shaft))
    ((event, alone),) = solved_events(shaft, events, (1.0, 1.0))
    assert alone is not None
    assert alone.order == event.order
    history = alone.history("stop")
    rest = alone.reached(0.0)[0][0]
    assert np.all((history.speed_rad_s > 0.0) == (history.time_s < rest))
    half = alone.reached(0.5 * event.from_rad_s)[0][0]
    at_half = np.interp(half, history.time_s, history.speed_rad_s)
    assert at_half == pytest.approx(0.5 * event.from_rad_s, rel=1e-4)
    assert history.collective_rad[-1] == plan.shutdown.collective_rad
    # the same bits among all the run-downs of the plan
    (i,) = rows(found["time_to_rest"], segment="stop")
    assert found["time_to_rest"].value[i] == rest
