"""Holds and ramps: what the rows say, and each way in which they must not say GO in silence."""

from __future__ import annotations

import dataclasses
import math

import numpy as np
import pytest

from planner.model.plan import Cyclic
from planner.model.results import Status
from planner.model.rules import Allowance
from planner.predict import solving
from planner.rotor.result import FlapState
from planner.rotor.trim import trim

DEGREE = math.pi / 180.0


def row(prediction, segment):
    return next(i for i, label in enumerate(prediction.labels) if label.segment == segment)


def with_site(plan, **values):
    return dataclasses.replace(plan, site=dataclasses.replace(plan.site, **values))


def with_book(plan, **values):
    return dataclasses.replace(plan, rule_book=dataclasses.replace(plan.rule_book, **values))


def calm(plan):
    return with_site(plan, wind_mean_m_s=0.0, wind_gust_m_s=0.0, anemometer_error_m_s=0.0)


def first_steps(plan, count):
    block = dataclasses.replace(plan.blocks[0], steps=plan.blocks[0].steps[:count])
    return dataclasses.replace(plan, blocks=(block,))


@pytest.fixture
def short(articulated):
    return first_steps(articulated, 2)


def change_trim(monkeypatch, change):
    """Let every trim come back changed."""
    real = trim
    monkeypatch.setattr(solving, "trim", lambda *arguments: change(real(*arguments)))


def test_gust_is_not_trimmed_out(short, run_predict):
    found = run_predict(short, "holds")
    i = row(found["flap_cosine"], "1.2h")
    assert abs(found["flap_cosine"].value[i]) < 1e-6
    assert found["flap_sine"].high[i] > 0.2 * DEGREE
    assert found["flap_lowest"].low[i] < found["flap_lowest"].value[i] - 0.2 * DEGREE


def test_low_lift_takes_the_stop_margin_and_high_lift_the_thrust(short, run_predict):
    found = run_predict(short, "holds")
    strict = with_book(
        short,
        allowances=tuple(
            Allowance("air_load", 1.0, 1.0, "test") if a.id == "air_load" else a
            for a in short.rule_book.allowances
        ),
    )
    exact = run_predict(strict, "holds")
    i = row(found["thrust"], "1.2h")
    assert found["droop_stop_clearance"].low[i] < exact["droop_stop_clearance"].low[i]
    assert found["thrust"].high[i] > exact["thrust"].high[i]
    assert found["thrust"].low[i] < exact["thrust"].low[i]


def test_ramp_from_rest_in_wind_is_information_only(short, run_predict):
    found = run_predict(short, "holds")
    for quantity in ("flap_lowest", "droop_stop_clearance", "droop_stop_moment", "hub_moment"):
        i = row(found[quantity], "1.1r")
        assert found[quantity].status[i] is Status.OUTSIDE_VALIDITY
        assert "information only" in found[quantity].reasons[i]
        assert math.isfinite(found[quantity].value[i])
        assert found[quantity].status[row(found[quantity], "1.2r")] is Status.OK
        assert found[quantity].status[row(found[quantity], "stop")] is Status.OUTSIDE_VALIDITY


def test_ramp_from_rest_without_wind_is_assessed(short, run_predict):
    found = run_predict(calm(short), "holds")
    for quantity in ("flap_lowest", "droop_stop_clearance", "droop_stop_moment"):
        assert found[quantity].status[row(found[quantity], "1.1r")] is Status.OK
    moment = found["droop_stop_moment"]
    rest = found["droop_stop_rest_moment"]
    assert moment.high[row(moment, "1.1r")] < rest.value[0]


def test_ramp_wholly_below_the_release_speed_is_outside_validity(short, run_predict):
    stop = short.rotor.droop_stop
    late = dataclasses.replace(stop.retraction, release_rad_s=12.0, reseat_rad_s=8.0)
    rotor = dataclasses.replace(short.rotor, droop_stop=dataclasses.replace(stop, retraction=late))
    found = run_predict(dataclasses.replace(short, rotor=rotor), "holds")
    i = row(found["thrust"], "1.1r")
    assert found["thrust"].status[i] is Status.OUTSIDE_VALIDITY
    assert "region of the stops" in found["thrust"].reasons[i]


def test_fixed_stop_takes_its_margin_from_the_rule_book(short, run_predict):
    stop = dataclasses.replace(short.rotor.droop_stop, retraction=None)
    plan = dataclasses.replace(short, rotor=dataclasses.replace(short.rotor, droop_stop=stop))
    found = run_predict(with_book(plan, stop_free_margin=None), "holds")
    assert set(found["flap_lowest"].status) == {Status.NOT_STATED}
    assert "stop_free_margin" in found["flap_lowest"].reasons[0]
    assert Status.OK in run_predict(plan, "holds")["flap_lowest"].status


def test_unconverged_states_are_told(short, predict_anew, monkeypatch):
    def spoil(result):
        converged = result.converged.copy()
        converged[0] = False
        return dataclasses.replace(result, converged=converged)

    change_trim(monkeypatch, spoil)
    found = predict_anew(short, "holds")
    statuses = set(found["thrust"].status)
    assert Status.NOT_CONVERGED in statuses
    i = found["thrust"].status.index(Status.NOT_CONVERGED)
    assert "states found no periodic solution" in found["thrust"].reasons[i]


def test_work_beyond_the_section_data_is_told(short, predict_anew, monkeypatch):
    change_trim(
        monkeypatch,
        lambda result: dataclasses.replace(
            result, outside_sections=np.ones_like(result.outside_sections)
        ),
    )
    found = predict_anew(short, "holds")
    for quantity in ("thrust", "torque", "flap_lowest"):
        i = row(found[quantity], "1.2h")
        assert found[quantity].status[i] is Status.OUTSIDE_VALIDITY
        assert "section data" in found[quantity].reasons[i]


def test_contact_in_part_of_a_turn_is_told(short, predict_anew, monkeypatch):
    change_trim(
        monkeypatch,
        lambda result: dataclasses.replace(
            result, state=np.full_like(result.state, int(FlapState.INTERMITTENT))
        ),
    )
    found = predict_anew(short, "holds")
    for quantity in ("flap_lowest", "droop_stop_moment", "hub_moment"):
        i = row(found[quantity], "1.2h")
        assert found[quantity].status[i] is Status.OUTSIDE_VALIDITY
        assert "touches its droop stop" in found[quantity].reasons[i]
    assert found["droop_stop_clearance"].status[row(found["thrust"], "1.2h")] is Status.OK


def test_reaching_the_up_stop_is_told_and_its_margin_judged(short, run_predict):
    stop = dataclasses.replace(short.rotor.up_stop, angle_rad=0.2 * DEGREE)
    plan = dataclasses.replace(short, rotor=dataclasses.replace(short.rotor, up_stop=stop))
    found = run_predict(plan, "holds")
    i = row(found["up_stop_clearance"], "1.2h")
    assert found["up_stop_clearance"].status[i] is Status.OK
    assert found["up_stop_clearance"].low[i] < 0.0
    assert "reaches its up stop" in found["flap_highest"].reasons[i]


def test_level_axis_in_wind_is_outside_validity(short, run_predict):
    plan = dataclasses.replace(
        short, stand=dataclasses.replace(short.stand, mounting="axis level")
    )
    found = run_predict(plan, "holds")
    assert set(found["thrust"].status) == {Status.OUTSIDE_VALIDITY}
    in_calm = run_predict(calm(plan), "holds")
    assert in_calm["thrust"].status[row(in_calm["thrust"], "1.2h")] is Status.OK


@pytest.mark.parametrize(
    ("allowance", "quantity"),
    [
        ("air_load", "thrust"),
        ("torque", "torque"),
        ("torque", "power"),
        ("frequency", "harmonic_spacing"),
    ],
)
def test_missing_allowance_leaves_nothing_assessed(short, run_predict, allowance, quantity):
    plan = with_book(
        short, allowances=tuple(a for a in short.rule_book.allowances if a.id != allowance)
    )
    found = run_predict(plan, "holds", "modes")[quantity]
    assert Status.OK not in found.status
    assert any(f"allowance '{allowance}'" in reason for reason in found.reasons)


def test_hub_without_stops_says_that_stop_numbers_do_not_apply(predicted):
    found = predicted("hingeless-model")
    for quantity in ("droop_stop_clearance", "up_stop_clearance", "droop_stop_moment"):
        assert set(found[quantity].status) == {Status.NOT_APPLICABLE}
    assert Status.OK in found["root_flap_moment"].status


def test_cyclic_beyond_authority_reads_above_one(short, run_predict):
    weak = dataclasses.replace(
        short, rotor=dataclasses.replace(short.rotor, cyclic_authority_rad=0.05 * DEGREE)
    )
    found = run_predict(weak, "holds")["cyclic_needed"]
    assert found.high[row(found, "1.2h")] > 1.0


def test_parked_hold_is_legal_and_keeps_the_worst_azimuth(short, run_predict):
    step = dataclasses.replace(
        short.blocks[0].steps[0], speed_rad_s=0.0, cyclic=Cyclic(trimmed=False)
    )
    block = dataclasses.replace(short.blocks[0], steps=(step, *short.blocks[0].steps))
    plan = with_site(dataclasses.replace(short, blocks=(block,)), wind_gust_m_s=12.0)
    found = run_predict(plan, "holds")
    i = row(found["droop_stop_moment"], "1.1h")
    assert found["droop_stop_moment"].status[i] is Status.OK
    assert found["droop_stop_moment"].high[i] >= found["droop_stop_moment"].value[i]
    assert found["droop_stop_moment"].high[i] == pytest.approx(
        found["droop_stop_rest_moment"].high[0], rel=0.02
    )


def test_parked_in_still_air_carries_the_weight_alone(short, run_predict):
    found = run_predict(calm(short), "holds")["droop_stop_rest_moment"]
    assert found.value[0] == pytest.approx(found.hand[0], rel=1e-5)


def test_speed_of_the_wind_lifts_the_lift_off_speed(articulated, run_predict):
    speeds = [
        run_predict(
            first_steps(with_site(articulated, wind_mean_m_s=gust / 2.0, wind_gust_m_s=gust), 1),
            "stops",
        )["lift_off_speed_in_wind"].high[0]
        for gust in (0.0, 6.0, 12.0)
    ]
    assert speeds == sorted(speeds)


def test_inverted_rotor_leaves_its_rest_position_unassessed(short, run_predict):
    stand = dataclasses.replace(short.stand, mounting="inverted")
    found = run_predict(dataclasses.replace(short, stand=stand), "holds")
    for quantity in ("droop_stop_rest_moment", "lift_off_speed_still_air"):
        assert found[quantity].status == (Status.OUTSIDE_VALIDITY,)
        assert "hang on their up stops" in found[quantity].reasons[0]
    i = row(found["flap_mean"], "1.2h")
    upright = run_predict(short, "holds")["flap_mean"]
    assert found["flap_mean"].status[i] is Status.OK
    assert found["flap_mean"].value[i] > upright.value[row(upright, "1.2h")]
