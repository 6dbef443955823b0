"""The engine, as printed numbers use it, against a converged adaptive integration."""

from __future__ import annotations

import dataclasses
import functools
import json
import math
import pathlib

import numpy as np
import pytest

from planner.predict.march_runs import PRINTED, SEARCH
from tests.reference.engine_cases import run

STORED = json.loads(
    (pathlib.Path(__file__).parents[1] / "reference" / "march_references.json").read_text()
)
FROM_REST = ("engagement", "engagement in a gust")


@functools.cache
def found(name, *, search=False):
    settings = SEARCH if search else PRINTED
    return run(name, dataclasses.replace(settings, lead_in_s=0.0, lead_in_turns=0.0))


@pytest.mark.parametrize("name", FROM_REST)
def test_flap_tip_and_stop_moment_of_an_engagement(name):
    wanted, extremes = STORED[name]["results"], found(name).extremes
    assert found(name).converged.all()
    highest = math.degrees(extremes.highest_flap_rad[0, 0])
    lowest = math.degrees(extremes.lowest_flap_rad[0, 0])
    assert highest == pytest.approx(wanted["highest_flap_deg"], abs=0.02)
    assert lowest == pytest.approx(wanted["lowest_flap_deg"], abs=0.005)
    assert extremes.lowest_tip_m.min() == pytest.approx(wanted["lowest_tip_m"], rel=0.01)
    assert extremes.droop_N_m[0, 0] == pytest.approx(wanted["droop_peak_N_m"], rel=0.01)


def test_both_stops_of_a_coast_down():
    wanted, extremes = STORED["coast-down"]["results"], found("coast-down").extremes
    assert extremes.lowest_tip_m.min() == pytest.approx(wanted["lowest_tip_m"], rel=0.01)
    assert extremes.droop_N_m[0, 0] == pytest.approx(wanted["droop_peak_N_m"], rel=0.015)
    assert extremes.up_N_m[0, 0] == pytest.approx(wanted["up_peak_N_m"], rel=0.05)


def joined(contacts, apart_s=0.02):
    """Contacts with those that nearly touch taken as one: start and end times."""
    whole = [list(contacts[0][:2])]
    for start, end, *_ in contacts[1:]:
        if start - whole[-1][1] > apart_s:
            whole.append([start, end])
        else:
            whole[-1][1] = end
    return np.array(whole)


def test_time_and_number_of_contacts():
    touches = joined(STORED["coast-down"]["results"]["droop_contacts"])
    contacts = found("coast-down").contacts
    assert contacts.first_s[0, 0] == pytest.approx(touches[0, 0], abs=0.002)
    assert abs(int(contacts.count[0, 0]) - len(touches)) <= 1


@pytest.mark.parametrize("name", FROM_REST)
def test_the_search_finds_the_same_flap_and_moment(name):
    one, other = found(name).extremes, found(name, search=True).extremes
    highest = [math.degrees(e.highest_flap_rad[0, 0]) for e in (one, other)]
    lowest = [math.degrees(e.lowest_flap_rad[0, 0]) for e in (one, other)]
    assert highest[1] == pytest.approx(highest[0], abs=0.05)
    assert lowest[1] == pytest.approx(lowest[0], abs=0.02)
    assert other.droop_N_m[0, 0] == pytest.approx(one.droop_N_m[0, 0], rel=0.01)
