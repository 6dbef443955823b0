"""Modes of the stand: as measured, corrected for the rotor, or of a column."""

from __future__ import annotations

import dataclasses
import math

import pytest

from planner.methods.hand_checks_dynamics import column_frequency_rad_s
from planner.model.results import Status
from planner.model.rotor import MeasuredMode
from planner.predict.stand_modes import mode_fault
from planner.rotor.blade_views import blade_mass_kg
from tests.predict.rows import row, rows


def with_mode(plan, **values):
    """The plan with its first stand mode changed."""
    first, *rest = plan.stand.modes
    modes = (dataclasses.replace(first, **values), *rest)
    return dataclasses.replace(plan, stand=dataclasses.replace(plan.stand, modes=modes))


def test_mode_found_without_the_rotor_is_corrected_by_the_missing_mass(predicted):
    """By hand: 6.4 Hz with 58 kg moving, 3.2 kg missing."""
    found = predicted("hingeless-model")["mode_frequency"]
    i = row(found, segment="1.1h", mode="stand fore-aft")
    assert found.status[i] is Status.OK
    wanted = 6.4 * math.sqrt(58.0 / (58.0 + 3.2))
    assert found.value[i] / (2.0 * math.pi) == pytest.approx(wanted, rel=1e-9)
    assert found.low[i] == pytest.approx(0.97 * found.value[i])


def test_column_carries_head_and_blades_at_its_top(sample, predicted):
    """Against 3 EI/h³ over the top mass and 33/140 of the column's."""
    plan = sample("teetering-pair")
    found = predicted("teetering-pair")["mode_frequency"]
    i = row(found, segment="1.1h", mode="stand column 1")
    column = plan.stand.column
    top = column.head_mass_kg + 2.0 * blade_mass_kg(plan.rotor.blade)
    wanted = column_frequency_rad_s(
        column.height_m, column.bending_stiffness_N_m2, column.mass_kg, top
    )
    assert found.value[i] == pytest.approx(float(wanted), rel=5e-3)


@pytest.mark.parametrize(
    ("values", "status", "words"),
    [
        ({"rotor_fitted": None}, Status.NOT_STATED, "does not say whether the rotor's mass"),
        ({"rotor_fitted": False}, Status.NOT_COMPUTED, "state modal_mass and missing_mass"),
        (
            {"rotor_fitted": False, "missing_mass_kg": 12.0},
            Status.OUTSIDE_VALIDITY,
            "missing_mass 12 kg is less than the 4 blades weigh by their table",
        ),
    ],
)
def test_mode_whose_rotor_is_in_doubt_is_never_judged(
    articulated, run_predict, values, status, words
):
    found = run_predict(with_mode(articulated, **values), "modes", "passages", "speeds")
    quantities = ("mode_frequency", "harmonic_spacing", "crossing_cover", "passage_amplitude")
    for quantity in quantities:
        places = rows(found[quantity], mode="stand lateral")
        assert places
        for i in places:
            assert found[quantity].status[i] is status
            assert words in found[quantity].reasons[i]
    shifted = found["fixed_frame_spacing"]
    doubted = [i for i, x in enumerate(shifted.labels) if x.harmonic.startswith("stand lateral")]
    assert {shifted.status[i] for i in doubted} == {status}


def test_shaft_mode_is_not_mended_by_masses(articulated):
    shaft = dataclasses.replace(
        articulated.stand.modes[-1],
        rotor_fitted=False,
        modal_mass_kg=1.0,
        missing_mass_kg=900.0,
    )
    assert shaft.family == "shaft"
    assert mode_fault(shaft, articulated.rotor)[0] is Status.NOT_COMPUTED


def test_measured_column_takes_its_frequency_and_the_accuracy_as_allowance(sample, run_predict):
    plan = sample("teetering-pair")
    found = MeasuredMode("stand column 1", 2.0 * math.pi * 2.95, 0.0, 0.0, 0.01, "x")
    stand = dataclasses.replace(plan.stand, measured_modes=(found,))
    predictions = run_predict(dataclasses.replace(plan, stand=stand), "modes")
    frequency = predictions["mode_frequency"]
    i = row(frequency, segment="1.1h", mode="stand column 1")
    assert frequency.value[i] / (2.0 * math.pi) == pytest.approx(2.95, rel=1e-9)
    assert frequency.low[i] == pytest.approx(0.99 * frequency.value[i])
    residual = predictions["frequency_residual"]
    assert residual.value[row(residual, mode="stand column 1")] == pytest.approx(0.01)
