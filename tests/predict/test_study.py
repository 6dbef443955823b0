"""A study sees what it declares, and no more."""

from __future__ import annotations

import dataclasses

import pytest

from planner.judge.requests import requests
from planner.model.plan import segments
from planner.model.results import Labels, Status
from planner.predict import run
from planner.predict.rows import Rows
from planner.predict.study import Study
from planner.predict.study_air import AIR


def inputs_of(study, plan):
    return study.inputs(plan, segments(plan), requests(plan.rule_book), {})


def test_undeclared_path_is_refused(articulated):
    with pytest.raises(KeyError, match=r"rotor"):
        inputs_of(AIR, articulated)["rotor"]


def test_unknown_path_is_refused(articulated):
    study = Study("x", 1, ("rotor.colour",), (), lambda _: {})
    with pytest.raises(KeyError, match=r"unknown path 'rotor.colour'; known: "):
        inputs_of(study, articulated)


def test_a_refusing_method_leaves_its_study_outside_validity(articulated, run_predict):
    hot = dataclasses.replace(
        articulated, site=dataclasses.replace(articulated.site, temperature_K=400.0)
    )
    found = run_predict(hot)
    assert found["air_density"].status == (Status.OUTSIDE_VALIDITY,)
    assert "air temperature" in found["air_density"].reasons[0]
    for quantity in ("thrust", "lock_number", "tip_mach"):
        assert set(found[quantity].status) <= {Status.OUTSIDE_VALIDITY, Status.NOT_COMPUTED}


def test_a_quantity_that_no_study_fills_is_not_computed(articulated, monkeypatch, run_predict):
    monkeypatch.setattr(run, "STUDIES", (AIR,))
    found = run_predict(articulated)
    assert found["thrust"].status == (Status.NOT_COMPUTED,)
    assert found["thrust"].reasons == ("no study computed it",)


@pytest.mark.parametrize("bad", [float("nan"), float("inf")])
def test_rows_never_call_an_unreal_number_assessed(bad):
    rows = Rows("thrust", "holds")
    rows.add(Labels(segment="1.1h"), bad)
    rows.add(Labels(segment="1.2h"), 1.0, high=bad)
    assert rows.prediction().status == (Status.NOT_COMPUTED, Status.NOT_COMPUTED)
