"""Resonances that a ramp passes, against the declared keep-out bands."""

from __future__ import annotations

import dataclasses
import math

import pytest

from planner.model.plan import KeepOut
from planner.model.results import Status

RPM = 2.0 * math.pi / 60.0


def row(prediction, segment, mode, harmonic):
    for i, label in enumerate(prediction.labels):
        if (label.segment, label.mode, label.harmonic) == (segment, mode, harmonic):
            return i
    raise AssertionError(segment)


def with_bands(plan, *bands):
    keep_outs = tuple(
        KeepOut(f"K{i}", low * RPM, high * RPM, "x") for i, (low, high) in enumerate(bands)
    )
    return dataclasses.replace(plan, keep_outs=keep_outs)


def test_covered_passage_has_the_distance_to_the_nearer_edge(predicted):
    found = predicted("articulated-run-up")["crossing_cover"]
    i = row(found, "1.2r", "stand lateral", "1")
    assert found.status[i] is Status.OK
    # 2 Hz is 120 rpm, 97 to 103 % of it and 1 rpm of gauge error; the band is 112 to 142 rpm
    assert found.value[i] / RPM == pytest.approx(120.0 * 0.97 - 1.0 - 112.0)


@pytest.mark.parametrize("bands", [(), ((40.0, 41.0),), ((117.0, 142.0),)])
def test_uncovered_passage_is_not_computed(articulated, run_predict, bands):
    found = run_predict(with_bands(articulated, *bands), "passages")["crossing_cover"]
    i = row(found, "1.2r", "stand lateral", "1")
    assert found.status[i] is Status.NOT_COMPUTED
    assert "outside every declared keep-out band" in found.reasons[i]


def test_resonance_that_is_not_passed_does_not_apply(predicted):
    found = predicted("articulated-run-up")["crossing_cover"]
    i = row(found, "1.4r", "stand lateral", "1")
    assert found.status[i] is Status.NOT_APPLICABLE


def test_mode_of_unstated_mass_is_not_stated(articulated, run_predict):
    modes = tuple(dataclasses.replace(mode, rotor_fitted=None) for mode in articulated.stand.modes)
    stand = dataclasses.replace(articulated.stand, modes=modes)
    found = run_predict(dataclasses.replace(articulated, stand=stand), "modes", "passages")
    for quantity in ("crossing_cover", "harmonic_spacing"):
        given = [
            found[quantity].status[i]
            for i, label in enumerate(found[quantity].labels)
            if label.mode.startswith(("stand", "shaft"))
        ]
        assert set(given) == {Status.NOT_STATED}
