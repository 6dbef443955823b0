"""Shared fixtures: the sample plans, read and predicted once."""

from __future__ import annotations

import functools
import os
import pathlib
from typing import TYPE_CHECKING

import pytest
from hypothesis import settings

from planner.files.kept import FolderStore
from planner.files.read import read_plan
from planner.judge.requests import requests
from planner.model.plan import segments
from planner.predict.histories import timed
from planner.predict.register import REFERENCES, REGISTER
from planner.predict.run import predict
from planner.record.layout import versions

if TYPE_CHECKING:
    from collections.abc import Callable, Iterator, Mapping

    from planner.model.plan import Plan
    from planner.model.results import Prediction

settings.register_profile("repeatable", derandomize=True, deadline=None, database=None)
settings.load_profile("repeatable")

SAMPLES = pathlib.Path(__file__).parent.parent / "sample_plans"
SAMPLE_NAMES = (
    "articulated-run-up",
    "articulated-gusty",
    "articulated-gusty-start",
    "hingeless-model",
    "teetering-pair",
)


@functools.cache
def _sample(name: str) -> Plan:
    vocabulary = {entry.id: (entry.unit, entry.axes) for entry in REGISTER.values()}
    return read_plan(SAMPLES / name, vocabulary, REFERENCES).plan


def predict_plan(plan: Plan) -> Mapping[str, Prediction]:
    """Predict as the commands do: what a test before this one has marched is found again."""
    store = FolderStore(pathlib.Path(os.environ["WHIRLCARD_KEPT"]))
    wanted = requests(plan.rule_book)
    walk = timed(plan, segments(plan), wanted)
    return predict(plan, walk, wanted, store=store, versions=versions())


@pytest.fixture(scope="session", autouse=True)
def _own_kept_folder(tmp_path_factory: pytest.TempPathFactory) -> Iterator[None]:
    """Results are kept in a folder of the tests' own, each sample's marches for all tests."""
    with pytest.MonkeyPatch.context() as patch:
        patch.setenv("WHIRLCARD_KEPT", str(tmp_path_factory.mktemp("kept")))
        yield


@functools.cache
def _predicted(name: str) -> Mapping[str, Prediction]:
    return predict_plan(_sample(name))


@pytest.fixture
def sample() -> Callable[[str], Plan]:
    return _sample


@pytest.fixture
def predicted() -> Callable[[str], Mapping[str, Prediction]]:
    return _predicted


@pytest.fixture
def run_predict() -> Callable[[Plan], Mapping[str, Prediction]]:
    return predict_plan


@pytest.fixture
def articulated() -> Plan:
    return _sample("articulated-run-up")
