"""Measured frequencies correct the model and leave their residual as allowance."""

from __future__ import annotations

import dataclasses
import math

import pytest

from planner.model.results import Status
from planner.model.rotor import MeasuredMode
from tests.predict.rows import row

HZ = 2.0 * math.pi


def measured(plan, *modes):
    rotor = dataclasses.replace(plan.rotor, measured_modes=modes)
    return dataclasses.replace(plan, rotor=rotor)


def test_rap_test_corrects_the_structural_part_alone(articulated, run_predict):
    """By hand: ω² at speed gains what ω² at rest gained."""
    plain = run_predict(measured(articulated), "modes")["mode_frequency"]
    i = row(plain, segment="1.6h", mode="torsion 1")
    tap = MeasuredMode("torsion 1", 18.4 * HZ, 0.0, math.radians(3.0), 0.015, "x")
    found = run_predict(measured(articulated, tap), "modes")
    frequency, correction = found["mode_frequency"], found["frequency_correction"]
    share = correction.value[row(correction, mode="torsion 1")]
    rest = 18.4 * HZ / (1.0 + share)
    assert rest / HZ == pytest.approx(18.78, abs=0.01)
    wanted = math.sqrt(plain.value[i] ** 2 + (18.4 * HZ) ** 2 - rest**2)
    assert frequency.value[i] == pytest.approx(wanted, rel=1e-4)
    residual = found["frequency_residual"]
    assert residual.value[row(residual, mode="torsion 1")] == pytest.approx(0.015, abs=1e-9)


def test_allowance_is_narrower_between_the_speeds_where_a_mode_was_measured(
    articulated, run_predict
):
    speed = articulated.blocks[0].steps[-1].speed_rad_s
    tap = MeasuredMode("flap 2", 2.26 * HZ, 0.0, math.radians(3.0), 0.01, "x")
    run = MeasuredMode("flap 2", 15.6 * HZ, 1.02 * speed, math.radians(3.0), 0.01, "x")
    found = run_predict(measured(articulated, tap, run), "modes")["mode_frequency"]
    alone = run_predict(measured(articulated, run), "modes")["mode_frequency"]
    widths = []
    for rows, mode in ((found, "flap 2"), (found, "flap 3"), (alone, "flap 2")):
        i = row(rows, segment="1.6h", mode=mode)
        widths.append((rows.high[i] - rows.low[i]) / rows.value[i])
    assert widths[0] < 0.6 * widths[1]
    # below all measured speeds structure weighs more than it was measured
    assert widths[2] > 0.9 * widths[1]


def test_measurement_of_another_mode_is_refused_in_words_and_leaves_the_others(
    articulated, run_predict
):
    tap = MeasuredMode("torsion 1", 55.9 * HZ, 0.0, 0.0, 0.01, "x")
    found = run_predict(measured(articulated, tap), "modes")
    for quantity in ("harmonic_spacing", "mode_frequency"):
        rows = found[quantity]
        refused = {
            label.mode
            for label, status in zip(rows.labels, rows.status, strict=True)
            if status is Status.OUTSIDE_VALIDITY
        }
        assert refused == {"torsion 1"}
        own = [i for i, label in enumerate(rows.labels) if label.mode == "torsion 1"]
        assert {rows.status[i] for i in own} == {Status.OUTSIDE_VALIDITY}
        assert all("check which mode it is" in rows.reasons[i] for i in own)


def test_plan_without_measurements_says_so(sample, run_predict):
    found = run_predict(measured(sample("hingeless-model")), "modes")["frequency_correction"]
    assert found.status == (Status.NOT_APPLICABLE,)
