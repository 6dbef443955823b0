"""Where flap stops stand, and the rule of the stop that moves."""

from dataclasses import replace

import numpy as np
import pytest

from planner.model.rotor import Retraction, Stop
from planner.rotor.march_case import MarchSettings
from planner.rotor.march_stops import FAR_RAD, MarchStops, stop_laws
from tests.rotor.marching import NO_AIR, block_at_once, history, marched, model_of

STATIC, GONE = np.radians(-4.0), np.radians(-8.0)
MOVING = Stop(STATIC, 2e5, 500.0, 4500.0, Retraction(10.0, 8.0, GONE))
SETTINGS = MarchSettings(24, 0.02, 4, lead_in_s=0.1, lead_in_turns=0.2)


def moving(make_rotor):
    return replace(make_rotor(), droop_stop=MOVING)


def stops_of(rotor, units=1):
    return MarchStops(stop_laws(rotor, model_of(rotor).unit), (1, units), np.float64)


def moved(stops, speed, rotation=0.1, *, seats=True):
    """Lower stops after the speed is reached."""
    turned = np.atleast_2d(np.asarray(rotation, dtype=float))
    stops.move(np.array([speed]), turned, np.array([seats]))
    return stops.places[0][0]


def test_stop_moves_at_its_two_speeds_and_keeps_its_place_between(make_rotor):
    stops = stops_of(moving(make_rotor))
    assert moved(stops, 9.9) == pytest.approx(STATIC)
    assert moved(stops, 10.0) == pytest.approx(GONE)
    assert moved(stops, 8.1) == pytest.approx(GONE)
    assert moved(stops, 8.0) == pytest.approx(STATIC)
    assert moved(stops, 9.9) == pytest.approx(STATIC)


def test_stop_comes_back_blade_by_blade_and_only_under_a_blade_above_it(make_rotor):
    stops = stops_of(moving(make_rotor), 3)
    flap = [0.0, STATIC - 0.01, STATIC]
    moved(stops, 12.0, flap)
    assert moved(stops, 5.0, flap) == pytest.approx([STATIC, GONE, STATIC])
    assert moved(stops, 5.0, [GONE, GONE, 0.0]) == pytest.approx([STATIC, GONE, STATIC])
    assert moved(stops, 5.0, [0.0, 0.001, 0.0]) == pytest.approx([STATIC, STATIC, STATIC])


def test_stop_that_does_not_seat_stays_away(make_rotor):
    stops = stops_of(moving(make_rotor))
    moved(stops, 12.0)
    assert moved(stops, 0.0, seats=False) == pytest.approx(GONE)


def test_a_blade_below_the_seat_is_never_pushed(make_rotor):
    """Blades swing about -2 degrees; half of them lie below the seat when it would come."""
    model = model_of(moving(make_rotor), SETTINGS)
    block = block_at_once(model, history([[10.1, 6.6]], 1.0), **NO_AIR)
    block.stops.move(np.array([10.1]), np.zeros((1, 4)), np.array([True]))
    block.x[:], block.moment_N_m[:] = 0.0, 0.0
    block.x[0, :, 0] = np.radians([-7.0, -5.5, 0.0, 1.0])
    waited = 0
    while block.time_s[0] < 0.98:
        before, flap = block.stops.places[0][0].copy(), block.flap_rad[0]
        slow = block.time_s[0] > 0.61
        block.step()
        seats = block.stops.places[0][0] > before
        assert np.all(flap[seats] >= STATIC)
        waited += int(np.sum(slow & (flap < STATIC) & (before < STATIC)))
    assert waited > 0
    assert np.any(block.stops.places[0][0] == STATIC)


def test_seats_or_not_makes_the_difference_at_rest(make_rotor):
    model = model_of(moving(make_rotor), SETTINGS)
    course = history([[10.5, 5.0, 0.0, 0.0]], 3.0)
    result = marched(model, course, seats=[True, False], counts_from_rad_s=9.0)
    lowest = np.degrees(result.extremes.lowest_flap_rad.min(axis=1))
    assert result.converged.all()
    assert lowest[1] < -7.9
    assert lowest[0] > lowest[1] + 3.0


def test_hubs_have_the_stops_that_are_stated(make_rotor):
    rotor = make_rotor()
    laws = stop_laws(rotor, model_of(rotor).unit)
    assert (laws.low_rad, laws.high_rad) == pytest.approx(np.radians([-3.0, 20.0]))
    assert not laws.high_is_droop
    bare = replace(rotor, droop_stop=None)
    only_up = stop_laws(bare, model_of(bare).unit)
    assert only_up.exist
    assert only_up.low_rad == -FAR_RAD
    assert only_up.high_rad == pytest.approx(np.radians(20.0))
    pair = make_rotor("teetering")
    both = stop_laws(pair, model_of(pair).unit)
    assert both.high_is_droop
    assert (both.low_rad, both.high_rad) == pytest.approx(np.radians([-5.5, 5.5]))
    built_in = make_rotor("hingeless")
    assert not stop_laws(built_in, model_of(built_in).unit).exist


@pytest.mark.parametrize("change", [{"stiffness_N_m_rad": 0.0}, {"moment_rating_N_m": 0.0}])
def test_a_stop_without_stiffness_or_rating_is_refused(make_rotor, change):
    rotor = replace(make_rotor(), droop_stop=replace(MOVING, **change))
    with pytest.raises(ValueError, match=r"droop stop: expected a stiffness and a rated moment"):
        model_of(rotor)
