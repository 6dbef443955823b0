"""What marched cases come to: the worst of blades, of cases and of tracks."""

from __future__ import annotations

import math

import numpy as np
import pytest

from planner.predict.cases import AirState
from planner.predict.march_outcome import (
    GOVERNING,
    LEAST,
    MOST,
    REFINED,
    Lane,
    all_converged,
    joined,
    lanes_of_track,
    outcome_of,
    replaced,
    split_at,
    worst_lane,
    worst_of_cases,
)
from planner.predict.march_winds import Ride
from planner.rotor.march import MarchResult
from planner.rotor.march_track import Contacts, Extremes

AIR = AirState(1.2, 340.0, 1.0)
STIFFNESS = 2e5


def lane(track: int, gust_m_s: float = 0.0) -> Lane:
    return Lane(track, Ride(3.0, gust_m_s, 1.0, 2.0, 0.0, -1, 0.0, 0), AIR)


def result(cases: int) -> MarchResult:
    """Three blades a case, each number of its own."""
    extremes, contacts = Extremes.none(cases, 3, 3), Contacts.none((cases, 3))
    by_blade = np.arange(3.0 * cases).reshape(cases, 3)
    for name in ("highest_flap_rad", "lowest_flap_rad", "highest_tip_m", "droop_N_m", "up_N_m"):
        getattr(extremes, name)[:] = by_blade
    for name in ("root_N_m", "lag_rad", "lag_stop_N_m"):
        getattr(extremes, name)[:] = 100.0 + by_blade
    extremes.lowest_tip_m[:] = 1.0
    extremes.lowest_tip_m[:, 1, 20] = -0.5 - np.arange(cases)
    for name in ("hub_N_m", "thrust_N", "least_thrust_N", "worst_s"):
        getattr(extremes, name)[:] = 7.0 + np.arange(cases)
    contacts.closing_rad_s[:] = [0.1, 0.4, 0.2]
    contacts.count[:] = [9, 9, 9]
    contacts.fast_count[:] = [0, 3, 1]
    return MarchResult(extremes, contacts, np.ones(cases, dtype=bool))


def numbers(**columns: list[float]) -> dict[str, np.ndarray]:
    """Columns as given, zeros for all other quantities."""
    length = len(next(iter(columns.values())))
    names = (*worst_of_cases(STIFFNESS, result(1)),)
    zeros = {name: np.zeros(length) for name in names} | {"converged": np.ones(length)}
    return zeros | {name: np.array(values, dtype=np.float64) for name, values in columns.items()}


def test_the_worst_blade_speaks_for_its_case():
    found = worst_of_cases(STIFFNESS, result(2))
    assert found["highest_flap_marched"].tolist() == [2.0, 5.0]
    assert found["lowest_flap_marched"].tolist() == [0.0, 3.0]
    assert found["lowest_tip"].tolist() == [-0.5, -1.5]  # of all blades and parts of the turn
    assert found["root_flap_peak_moment"].tolist() == [102.0, 105.0]
    assert found["contacts_after_lift_off"].tolist() == [3.0, 3.0]  # those that count alone
    assert found["contact_closing_speed"].tolist() == [0.4, 0.4]
    assert found["contact_energy"] == pytest.approx(np.array([2.0, 5.0]) ** 2 / (2.0 * STIFFNESS))
    assert found["thrust_peak"].tolist() == found["least_thrust"].tolist() == [7.0, 8.0]
    assert set(found) >= {*MOST, *LEAST}
    assert all(values.shape == (2,) for values in found.values())


def test_hub_without_stops_takes_up_no_energy():
    assert not np.any(worst_of_cases(math.inf, result(2))["contact_energy"])


def test_every_quantity_has_one_worst_side():
    assert not set(MOST) & set(LEAST)
    assert {*GOVERNING, *REFINED} <= {*MOST, *LEAST}


def test_the_worst_case_is_the_least_where_less_is_worse():
    found = numbers(highest_flap_marched=[1.0, 3.0, 2.0], lowest_tip=[1.0, 3.0, -2.0])
    everywhere = np.arange(3)
    assert worst_lane(found, everywhere, "highest_flap_marched") == 1
    assert worst_lane(found, everywhere, "lowest_tip") == 2
    assert worst_lane(found, np.array([0, 2]), "highest_flap_marched") == 2


@pytest.mark.parametrize("quantity", ["highest_flap_marched", "lowest_flap_marched"])
def test_what_is_not_a_number_is_never_the_worst_case(quantity):
    for odd in (math.nan, math.inf, -math.inf):
        found = numbers(**{quantity: [odd, 0.1, odd]})
        assert worst_lane(found, np.arange(3), quantity) == 1


def test_cases_are_found_by_their_track():
    lanes = [lane(1), lane(0), lane(1, 2.0)]
    assert lanes_of_track(lanes, 1).tolist() == [0, 2]
    assert lanes_of_track(lanes, 2).size == 0


def test_a_case_that_was_marched_again_has_its_new_numbers():
    lanes = [lane(0), lane(0, 2.0), lane(1)]
    old = numbers(thrust_peak=[1.0, 2.0, 3.0])
    new = numbers(thrust_peak=[30.0, 20.0])
    merged = replaced((lanes, old), ([lanes[2], lanes[1]], new))
    assert merged["thrust_peak"].tolist() == [1.0, 20.0, 30.0]
    assert old["thrust_peak"].tolist() == [1.0, 2.0, 3.0]
    both = joined(old, new)
    assert both["thrust_peak"].tolist() == [1.0, 2.0, 3.0, 30.0, 20.0]
    first, second = split_at(both, 3)
    assert {name: values.tolist() for name, values in first.items()} == {
        name: values.tolist() for name, values in old.items()
    }
    assert second["thrust_peak"].tolist() == [30.0, 20.0]


def test_one_case_that_did_not_converge_is_enough():
    lanes = [lane(0), lane(1), lane(1, 2.0)]
    good, bad = numbers(converged=[1.0, 1.0, 1.0]), numbers(converged=[1.0, 1.0, 0.0])
    assert all_converged(3, [(lanes, good)]) == [True, True, True]
    assert all_converged(3, [(lanes, good), (lanes, bad)]) == [True, False, True]


def test_an_outcome_is_the_worst_of_all_cases_of_its_track():
    lanes = [lane(0), lane(1), lane(1, 2.0)]
    found = numbers(
        highest_flap_marched=[9.0, 0.2, 0.3],
        lowest_flap_marched=[-9.0, -0.2, -0.1],
        thrust_peak=[900.0, 20.0, 30.0],
        least_thrust=[-900.0, -5.0, -4.0],
    )
    middle = numbers(highest_flap_marched=[0.25], lowest_flap_marched=[-0.15])
    outcome = outcome_of((lanes, found), ([lanes[1]], middle), 1, converged=True, is_at_rest=False)
    assert (outcome.converged, outcome.is_at_rest) == (True, False)
    assert outcome.shown == (lanes[2], lanes[1])
    assert outcome.worst["highest_flap_marched"] == 0.3
    assert outcome.worst["lowest_flap_marched"] == -0.2
    assert outcome.worst["thrust_peak"] == 30.0
    assert outcome.nominal["highest_flap_marched"] == 0.25
    assert outcome.nominal["lowest_flap_marched"] == -0.15
    assert -5.0 in outcome.other.values()  # the least thrust
    assert {*outcome.worst} == {*outcome.nominal} == {*MOST, *LEAST}
