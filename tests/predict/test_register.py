"""The register is the one vocabulary: complete, consistent, and filled by the studies."""

from __future__ import annotations

import pytest

from planner.model.results import Status
from planner.predict.register import REFERENCES, REGISTER
from planner.predict.run import STUDIES
from planner.predict.study import PATHS
from planner.units import dimension_of


@pytest.mark.parametrize("quantity", REGISTER.values(), ids=lambda q: q.id)
def test_entries_say_all_there_is_to_say(quantity):
    assert quantity.danger in {"high", "low", "both", "none"}
    assert quantity.study in {study.id for study in STUDIES}
    for text in (
        quantity.name,
        quantity.method,
        quantity.validity,
        quantity.source,
        quantity.hand_check,
    ):
        assert text.strip()
    if quantity.unit:
        dimension_of(quantity.unit)
    assert quantity.allowance in {"", "air_load", "torque", "frequency"}


@pytest.mark.parametrize("name", ["articulated-run-up", "hingeless-model", "teetering-pair"])
@pytest.mark.parametrize("quantity", REGISTER.values(), ids=lambda q: q.id)
def test_every_quantity_is_filled_by_its_study(predicted, name, quantity):
    found = predicted(name)[quantity.id]
    assert found.study == quantity.study
    assert found.quantity == quantity.id
    assert all(reason != "no study computed it" for reason in found.reasons)
    for label in found.labels:
        for axis in ("segment", "mode", "harmonic", "band", "state"):
            if getattr(label, axis):
                assert axis in quantity.axes


@pytest.mark.parametrize(
    "name", ["articulated-run-up", "articulated-gusty", "hingeless-model", "teetering-pair"]
)
def test_assessed_rows_hold_finite_ordered_numbers(predicted, name):
    for found in predicted(name).values():
        for i, status in enumerate(found.status):
            if status is Status.OK:
                assert found.low[i] <= found.value[i] <= found.high[i]
            else:
                assert found.reasons[i]


@pytest.mark.parametrize(
    "name", ["articulated-run-up", "articulated-gusty", "hingeless-model", "teetering-pair"]
)
@pytest.mark.parametrize(
    "quantity", [q for q in REGISTER.values() if q.hand_band], ids=lambda q: q.id
)
def test_hand_checks_agree_within_their_band(predicted, name, quantity):
    found = predicted(name)[quantity.id]
    for i, status in enumerate(found.status):
        if status is Status.OK and found.hand[i] == found.hand[i]:
            allowed = max(quantity.hand_band * abs(found.value[i]), quantity.hand_floor)
            assert abs(found.value[i] - found.hand[i]) <= allowed, found.labels[i]


def test_studies_take_known_paths_and_need_earlier_studies():
    seen: set[str] = set()
    for study in STUDIES:
        assert set(study.takes) <= PATHS
        assert set(study.needs) <= seen
        seen.add(study.id)


def test_references_have_known_units():
    for unit in REFERENCES.values():
        dimension_of(unit)
