"""Shared fixtures: the sample plans, read and predicted once."""

from __future__ import annotations

import os

for _name in ("OPENBLAS_NUM_THREADS", "MKL_NUM_THREADS", "OMP_NUM_THREADS"):
    os.environ.setdefault(_name, "1")  # before numpy is imported, as the command does

import dataclasses
import functools
import pathlib
from typing import TYPE_CHECKING

import pytest
from hypothesis import settings

from planner.files.kept import FolderStore
from planner.files.read import read_plan
from planner.judge.requests import requests
from planner.model.plan import segments
from planner.predict import run
from planner.predict.histories import timed
from planner.predict.kept import NOTHING_KEPT, MemoryStore
from planner.predict.register import REFERENCES, REGISTER
from planner.record.layout import versions

if TYPE_CHECKING:
    from collections.abc import Callable, Iterator, Mapping, Sequence

    from planner.model.plan import Plan
    from planner.model.results import Prediction
    from planner.predict.kept import Store
    from planner.predict.study import Study

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
STUDIES = run.STUDIES


@functools.cache
def read_sample(name: str) -> Plan:
    """A sample plan as its folder states it."""
    vocabulary = {entry.id: (entry.unit, entry.axes) for entry in REGISTER.values()}
    return read_plan(SAMPLES / name, vocabulary, REFERENCES).plan


def kept_results() -> FolderStore:
    """Where the tests keep what they march."""
    return FolderStore(pathlib.Path(os.environ["WHIRLCARD_KEPT"]))


def predict_plan(
    plan: Plan, studies: Sequence[Study] = STUDIES, store: Store | None = None
) -> Mapping[str, Prediction]:
    """Predict as the commands do: what a test before this one has marched is found again."""
    wanted = requests(plan.rule_book)
    walk = timed(plan, segments(plan), wanted)
    with pytest.MonkeyPatch.context() as patch:
        patch.setattr(run, "STUDIES", tuple(studies))
        return run.predict(plan, walk, wanted, store=store or kept_results(), versions=versions())


def unmarched(studies: Sequence[Study]) -> tuple[Study, ...]:
    """All but the marches."""
    return tuple(study for study in studies if study.id != "marches")


def all_kept(studies: Sequence[Study]) -> tuple[Study, ...]:
    """All studies keep what they find, not the slow ones alone."""
    return tuple(dataclasses.replace(study, kept=True) for study in studies)


def needed_for(studies: Sequence[Study], names: Sequence[str]) -> tuple[Study, ...]:
    """Studies of these names, with all that they need."""
    wanted = set(names)
    for study in reversed(studies):
        wanted |= set(study.needs) if study.id in wanted else set()
    return tuple(study for study in studies if study.id in wanted)


@pytest.fixture(scope="session", autouse=True)
def _own_kept_folder(tmp_path_factory: pytest.TempPathFactory) -> Iterator[None]:
    """Results are kept in a folder of the tests' own, each sample's marches for all tests."""
    with pytest.MonkeyPatch.context() as patch:
        patch.setenv("WHIRLCARD_KEPT", str(tmp_path_factory.mktemp("kept")))
        yield


@functools.cache
def _predicted(name: str) -> Mapping[str, Prediction]:
    return predict_plan(read_sample(name))


@pytest.fixture
def sample() -> Callable[[str], Plan]:
    return read_sample


@pytest.fixture
def predicted() -> Callable[[str], Mapping[str, Prediction]]:
    return _predicted


@functools.cache
def _session() -> MemoryStore:
    """Results of these tests: a study that a change does not touch is not run again."""
    return MemoryStore()


@pytest.fixture
def run_predict() -> Callable[..., Mapping[str, Prediction]]:
    """Predict a changed plan: the named studies and what they need, else all but the marches.

    The marches of a changed plan would take a minute each time.
    """

    def predict(plan: Plan, *names: str) -> Mapping[str, Prediction]:
        studies = needed_for(run.STUDIES, names) if names else unmarched(run.STUDIES)
        return predict_plan(plan, all_kept(studies), _session())

    return predict


@pytest.fixture
def predict_anew() -> Callable[..., Mapping[str, Prediction]]:
    """Predict named studies with nothing kept: for tests that change the methods themselves."""
    return lambda plan, *names: predict_plan(plan, needed_for(run.STUDIES, names), NOTHING_KEPT)


@pytest.fixture
def without_marches(monkeypatch: pytest.MonkeyPatch) -> None:
    """Commands on changed plans march nothing; whatever is judged of it is NOT ASSESSED."""
    monkeypatch.setattr(run, "STUDIES", unmarched(run.STUDIES))


@pytest.fixture
def articulated() -> Plan:
    return read_sample("articulated-run-up")
