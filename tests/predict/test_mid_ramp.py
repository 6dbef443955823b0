"""Aborts out of the middle of a ramp: power fails a little above a resonance."""

from __future__ import annotations

import dataclasses
import math

import numpy as np
import pytest
from scipy.integrate import solve_ivp

from planner.judge.requests import requests
from planner.model.plan import ABORT_CAUSES, segments
from planner.model.results import Labels, Status
from planner.predict.histories import Origin, abort_order, run_downs
from planner.predict.mid_ramp import Cut, cut_speeds, worst_of_cuts
from planner.predict.mode_correction import with_allowance
from planner.predict.run_down_events import Event
from planner.predict.shaft import ends_of, shaft_of
from planner.predict.stand_modes import StandMode
from planner.predict.study_speeds import SPEEDS
from tests.predict.rows import row

COMMANDED = ABORT_CAUSES[0]
W, ZETA, MASS = 2.0 * math.pi * 2.0, 0.025, 1400.0
"""The lateral mode of the stand."""


def joined_history(plan, predictions, share):
    """Time and speed of the ramp from 90 rpm up to a share of the mode, and the run-down."""
    inputs = SPEEDS.inputs(plan, segments(plan), requests(plan.rule_book), predictions)
    shaft = shaft_of(inputs)
    ramp = next(s for s in inputs["segments"] if s.id == "1.2r")
    start, end = ends_of(ramp, shaft.found_cyclics([ramp]))
    at = share * W
    done = (at - ramp.from_rad_s) / (ramp.to_rad_s - ramp.from_rad_s)
    order = abort_order(shaft, plan.abort, Origin(at, start.towards(end, done)), COMMANDED)
    down = run_downs(shaft, [order])[0].history("x")
    ramp_s = done * ramp.duration_s
    ramp_times = np.linspace(0.0, ramp_s, 200)[:-1]
    speeds = ramp.from_rad_s + (at - ramp.from_rad_s) * ramp_times / ramp_s
    after = np.arange(down.speed_rad_s.size) * down.step_s
    return np.concatenate([ramp_times, ramp_s + after]), np.concatenate([speeds, down.speed_rad_s])


def test_worst_cut_equals_ramp_and_run_down_integrated_as_one(articulated, predicted):
    """x'' + 2 ζ w x' + w² x = (Ω² - i Ω') e^(iψ), by an adaptive method, at the same cuts."""
    found = predicted("articulated-run-up")
    worst = 0.0
    for share in (1.04, 1.08, 1.12):
        times, speeds = joined_history(articulated, found, share)
        keep = times < 40.0
        times, speeds = times[keep], speeds[keep]
        rates = np.gradient(speeds, times)
        turned = np.concatenate([[0.0], np.cumsum(
            0.5 * (speeds[1:] + speeds[:-1]) * np.diff(times))])  # fmt: skip

        def motion(t, y, times=times, speeds=speeds, rates=rates, turned=turned):
            v, a, psi = (np.interp(t, times, each) for each in (speeds, rates, turned))
            force = (v * v - 1j * a) * np.exp(1j * psi)
            return [y[1], force - 2.0 * ZETA * W * y[1] - W * W * y[0]]

        first = speeds[0] ** 2 / (W**2 - speeds[0] ** 2 + 2j * ZETA * W * speeds[0])
        begin = np.array([first, 1j * speeds[0] * first])
        span = (0.0, float(times[-1]))
        result = solve_ivp(motion, span, begin, rtol=1e-6, atol=1e-7, max_step=0.05)
        worst = max(worst, float(np.abs(result.y[0]).max()))
    sway = found["passage_amplitude"]
    i = row(sway, segment="1.2r", mode="stand lateral", state=COMMANDED)
    offset = float(found["unbalance"].value[0]) / MASS
    assert 0.97 * sway.value[i] < worst * offset < 1.005 * sway.value[i]
    assert sway.high[i] > worst * offset


def test_abort_out_of_the_ramp_sways_more_than_one_from_its_end(predicted):
    sway = predicted("articulated-run-up")["passage_amplitude"]
    for cause in ABORT_CAUSES:
        ramp = row(sway, segment="1.2r", mode="stand lateral", state=cause)
        hold = row(sway, segment="1.2h", mode="stand lateral", state=cause)
        assert sway.value[ramp] > 1.05 * sway.value[hold]
        assert sway.high[ramp] >= sway.value[ramp]
        assert math.isnan(sway.hand[ramp])


def test_ramp_that_passes_no_mode_is_not_cut(predicted):
    sway = predicted("articulated-run-up")["passage_amplitude"]
    ramp = row(sway, segment="1.3r", mode="stand lateral", state=COMMANDED)
    hold = row(sway, segment="1.3h", mode="stand lateral", state=COMMANDED)
    assert sway.value[ramp] == pytest.approx(sway.value[hold], rel=1e-9)


def test_cut_whose_run_down_was_not_found_counts_against_its_ramp(articulated):
    ramp = next(s for s in segments(articulated) if s.id == "1.2r")
    label = Labels(segment="1.2r", state=COMMANDED)
    failed = Event(label, 13.0, status=Status.NOT_CONVERGED, reason="torque did not converge")
    ends = with_allowance(np.array([W]), (0.97, 1.03))
    mode = StandMode("stand lateral", ends, ZETA, MASS)
    cut = Cut(ramp, failed)
    variants = (np.array([W]), np.array([ZETA]))
    worst = worst_of_cuts([(cut, failed, None)], mode, variants)["1.2r", COMMANDED]
    assert (worst.status, worst.reason) == (Status.NOT_CONVERGED, "torque did not converge")
    absent = dataclasses.replace(failed, status=Status.NOT_APPLICABLE)
    assert worst_of_cuts([(cut, absent, None)], mode, variants) == {}


def test_ramp_is_cut_about_the_modes_it_passes_and_nowhere_else(articulated):
    walk = {s.id: s for s in segments(articulated)}
    ends = with_allowance(np.array([W]), (0.97, 1.03))
    mode = StandMode("stand lateral", ends, ZETA, MASS)
    speeds = np.array(cut_speeds(walk["1.2r"], [mode]))
    assert speeds.min() == pytest.approx(0.96 * W)
    assert speeds.max() == pytest.approx(1.24 * W)
    assert np.all(np.diff(speeds) == pytest.approx(0.04 * W))
    assert cut_speeds(walk["1.3r"], [mode]) == []
    assert cut_speeds(walk["2.1r"], [mode]) == []  # pitch alone changes
    unknown = dataclasses.replace(mode, status=Status.NOT_STATED)
    assert cut_speeds(walk["1.2r"], [unknown]) == []
