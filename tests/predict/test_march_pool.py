"""Cases dealt out to processes: the same numbers, whoever marches them."""

from __future__ import annotations

import math
from concurrent.futures.process import BrokenProcessPool
from contextlib import suppress
from dataclasses import fields, replace

import numpy as np
import pytest

from planner.predict import march_pool
from planner.predict.march_pool import Crew, Job, blade_steps, crew, dealt, march_cases
from planner.rotor.march_case import STILL, Histories, MarchSettings, make_march_cases
from tests.conftest import read_sample

TOP = 40.0


def job(rotor, ends_s=(0.3, 0.5)) -> Job:
    """Two short run-ups of a small rotor, coarsely."""
    rows = 51
    rise = np.linspace(0.5 * TOP, TOP, rows)
    same = np.ones((2, rows))
    return Job(
        rotor=rotor,
        mounting="upright",
        top_rad_s=TOP,
        settings=MarchSettings(steps_per_turn=16, longest_step_s=0.04, lead_in_turns=0.5),
        n_stations=6,
        histories=Histories(
            step_s=0.02,
            speed_rad_s=np.stack([rise, 0.5 * rise]),
            collective_rad=0.05 * same,
            cyclic_cosine_rad=0.0 * same,
            cyclic_sine_rad=0.0 * same,
            end_s=np.array(ends_s),
        ),
        rough=STILL,
    )


@pytest.fixture(scope="module")
def small() -> Job:
    return job(read_sample("teetering-pair").rotor)


@pytest.fixture(scope="module")
def alone(small, cases):
    """What this process makes of it."""
    return march_cases(small, cases)


@pytest.fixture(scope="module")
def cases():
    return make_march_cases(
        history=[0, 1, 0, 1, 0],
        wind_m_s=[0.0, 2.0, 4.0, 6.0, 8.0],
        air_density_kg_m3=1.2,
        speed_of_sound_m_s=340.0,
    )


def same_bits(one, other) -> bool:
    pairs = [(one.converged, other.converged)]
    for part in ("extremes", "contacts"):
        first, second = getattr(one, part), getattr(other, part)
        pairs += [(getattr(first, f.name), getattr(second, f.name)) for f in fields(first)]
    return all(a.dtype == b.dtype and a.tobytes() == b.tobytes() for a, b in pairs)


@pytest.mark.parametrize("n_parts", [1, 2, 3, 7])
def test_every_case_is_dealt_once_and_the_longest_first(n_parts):
    work = np.array([3.0, 9.0, 1.0, 9.0, 5.0])
    parts = dealt(work, n_parts)
    assert sorted(np.concatenate(parts).tolist()) == [0, 1, 2, 3, 4]
    assert len(parts) == min(n_parts, 5)
    assert parts[0][0] == 1
    shares = [float(np.sum(work[part])) for part in parts]
    assert max(shares) - min(shares) <= 9.0


def test_work_counts_the_steps_of_every_blade(small, cases):
    """By hand: 20 rad/s² from 20 rad/s, and half of both; 16 steps a turn, two blades."""
    turns = np.array([0.3 * 23.0, 0.5 * 12.5]) / (2.0 * math.pi)
    steps = blade_steps(small, cases)
    assert steps[:2] == pytest.approx(2 * 16 * turns, rel=0.05)
    assert steps.tolist() == [steps[0], steps[1], steps[0], steps[1], steps[0]]
    fine = replace(small, settings=replace(small.settings, longest_step_s=0.01))
    assert blade_steps(fine, cases)[:2] == pytest.approx([2 * 30.0, 2 * 50.0], rel=0.05)


@pytest.fixture
def pair(monkeypatch):
    """Two workers who are called for the least of work."""
    monkeypatch.setattr(march_pool, "WORTH_BLADE_STEPS", 0.0)
    hands = Crew(2)
    yield hands
    hands.dismiss()


def test_two_processes_give_the_bits_of_one(small, cases, alone, pair):
    assert alone.converged.all()
    assert len(set(alone.extremes.thrust_N.tolist())) == 5
    told: list[float] = []
    assert same_bits(alone, pair.march(small, cases, told.append))
    assert told == [0.5, 1.0]


@pytest.mark.parametrize("fault", [BrokenProcessPool("gone"), OSError("no more processes")])
def test_processes_that_cannot_be_had_are_done_without(
    small, cases, alone, pair, monkeypatch, fault
):
    def fail(*_):
        raise fault

    monkeypatch.setattr(Crew, "_all", fail)
    assert same_bits(alone, pair.march(small, cases))


@pytest.mark.parametrize("workers", [1, 2])
def test_little_work_calls_nobody(small, cases, alone, workers, monkeypatch):
    monkeypatch.setattr(Crew, "_all", lambda *_: pytest.fail("somebody was called"))
    monkeypatch.setattr(march_pool, "march_cases", lambda *_: alone)
    told: list[float] = []
    assert Crew(workers).march(small, cases, told.append) is alone
    assert told == [1.0]


def test_a_fault_of_the_method_is_not_hidden(small, cases, pair, monkeypatch):
    def fail(*_):
        msg = "no such speed"
        raise ValueError(msg)

    monkeypatch.setattr(Crew, "_all", fail)
    with pytest.raises(ValueError, match=r"no such speed"):
        pair.march(small, cases)


def test_everybody_goes_home_when_the_work_fails(monkeypatch):
    gone: list[bool] = []
    monkeypatch.setattr(Crew, "dismiss", lambda _: gone.append(True))
    with suppress(RuntimeError), crew():
        raise RuntimeError
    assert gone == [True]
