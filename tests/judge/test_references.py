import math
from dataclasses import replace

import pytest

from planner.judge.case import Span
from planner.judge.references import RESOLVERS, Missing, Range, reference_table, resolve
from planner.model.results import Status
from planner.model.rotor import Retraction
from planner.predict.register import REFERENCES

AT_20 = Span(20.0, 20.0)
DEG = math.pi / 180.0


def test_ids_are_those_of_the_register():
    assert set(RESOLVERS) == set(REFERENCES)


@pytest.mark.parametrize(
    ("reference", "value"),
    [
        ("design_maximum_speed", 42.0),
        ("proven_speed", 40.0),
        ("lowest_design_or_proven_speed", 40.0),
        ("full_speed", 40.0),
        ("card_speed", 36.0),
        ("stop_free_speed", 13.2),
        ("drive_maximum_speed", 45.0),
        ("drive_torque_rating", 4_000.0),
        ("drive_power_rating", 150_000.0),
        ("stand_thrust_rating", 20_000.0),
        ("stand_hub_moment_rating", 3_000.0),
        ("stand_hub_amplitude_rating", 0.005),
        ("root_force_rating", 100_000.0),
        ("droop_stop_moment_rating", 600.0),
        ("up_stop_moment_rating", 900.0),
        ("lag_stop_moment_rating", 500.0),
        ("flap_travel", 23.0 * DEG),
        ("lag_travel", 7.0 * DEG),
        ("cyclic_authority", 8.0 * DEG),
        ("blade_radius", 5.0),
    ],
)
def test_value_is_found(bench, reference, value):
    found = resolve(reference, bench.case, AT_20)
    assert isinstance(found, Range)
    assert found.least == pytest.approx(value)
    assert found.greatest == pytest.approx(value)


def test_hingeless_hub_has_a_root_rating_and_no_stops(hingeless_bench):
    case = hingeless_bench.case
    assert resolve("root_moment_rating", case, AT_20) == Range(1_000.0, 1_000.0)
    absent = ("droop_stop_moment_rating", "up_stop_moment_rating", "flap_travel", "lag_travel")
    for reference in absent:
        found = resolve(reference, case, AT_20)
        assert isinstance(found, Missing)
        assert "the hub has no" in found.reason


def test_articulated_hub_has_no_root_rating(bench):
    found = resolve("root_moment_rating", bench.case, AT_20)
    assert found == Missing(
        "reference root_moment_rating: the hub is articulated, only a hingeless one has it"
    )


def test_unknown_reference_is_missing(bench):
    assert resolve("moon", bench.case, AT_20) == Missing("there is no reference value 'moon'")


def test_uncertain_prediction_gives_its_whole_range(bench):
    bench.put("card_speed", [0], low=35.9, high=36.3)
    assert resolve("card_speed", bench.case, AT_20) == Range(35.9, 36.3)
    bench.put("stop_free_speed", [0], high=22.0)
    assert resolve("stop_free_speed", bench.case, AT_20) == Range(13.2, 22.0)


@pytest.mark.parametrize("number", [math.nan, math.inf, -1.0, 0.0])
def test_prediction_that_is_no_positive_number_is_missing(bench, number):
    bench.put("card_speed", [0], low=number)
    assert isinstance(resolve("card_speed", bench.case, AT_20), Missing)


def test_prediction_that_failed_or_is_absent_is_missing(bench):
    bench.flag("card_speed", [0], Status.OUTSIDE_VALIDITY, "too fast")
    assert resolve("card_speed", bench.case, AT_20) == Missing(
        "reference card_speed: card_speed is outside validity: too fast"
    )
    bench.drop("card_speed", [0])
    assert "was not predicted" in str(resolve("card_speed", bench.case, AT_20))
    del bench.predictions["card_speed"]
    assert "was not predicted" in str(resolve("card_speed", bench.case, AT_20))


def test_stop_free_speed_that_was_not_predicted_is_missing(bench):
    reason = "the rule book states no stop_free_margin"
    bench.flag("stop_free_speed", [0], Status.NOT_STATED, reason)
    assert resolve("stop_free_speed", bench.case, AT_20) == Missing(
        f"reference stop_free_speed: stop_free_speed is not stated: {reason}"
    )
    del bench.predictions["stop_free_speed"]
    assert "was not predicted" in str(resolve("stop_free_speed", bench.case, AT_20))


@pytest.mark.parametrize(
    ("span", "least_deg", "greatest_deg"),
    [
        (Span(0.0, 15.0), 23.0, 23.0),  # up to re-seat: static angle
        (Span(25.0, 36.0), 30.0, 30.0),  # from release: retracted
        (Span(20.0, 20.0), 23.0, 30.0),  # between, it depends on where the speed came from
        (Span(0.0, 36.0), 23.0, 30.0),
    ],
)
def test_travel_jumps_with_a_retracting_stop(bench, span, least_deg, greatest_deg):
    rotor = bench.plan.rotor
    stop = replace(rotor.droop_stop, retraction=Retraction(25.0, 15.0, -10.0 * DEG))
    bench.change(rotor=replace(rotor, droop_stop=stop))
    found = resolve("flap_travel", bench.case, span)
    assert isinstance(found, Range)
    assert found.least == pytest.approx(least_deg * DEG)
    assert found.greatest == pytest.approx(greatest_deg * DEG)


def test_table_lists_every_reference_and_none_where_there_is_none(hingeless_bench):
    table = reference_table(hingeless_bench.plan, hingeless_bench.predictions, 20.0)
    assert list(table) == list(RESOLVERS)
    assert table["flap_travel"] is None
    assert table["full_speed"] == 40.0
