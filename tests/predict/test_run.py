"""Kept results: used for the very same question, and for no other."""

from __future__ import annotations

from dataclasses import dataclass, field, replace
from typing import TYPE_CHECKING

import pytest

from planner.judge.requests import requests
from planner.model.plan import segments
from planner.model.results import Status
from planner.predict import run
from planner.predict.kept import MemoryStore
from planner.predict.study_air import AIR, WIND
from planner.predict.study_inertia import INERTIA
from planner.predict.study_schedule import SCHEDULE

if TYPE_CHECKING:
    from planner.model.plan import Plan
    from planner.predict.study import Inputs, Study

VERSIONS = {"numpy": "2.0"}


@dataclass
class Desk:
    """Cheap studies that all keep what they find, and a list of those that ran."""

    store: MemoryStore = field(default_factory=MemoryStore)
    ran: list[str] = field(default_factory=list)

    def kept(self, study: Study) -> Study:
        def run_it(inputs: Inputs):
            self.ran.append(study.id)
            inputs.progress(f"{study.id}, half done", 0.5)
            return study.run(inputs)

        return replace(study, kept=True, run=run_it)

    def predict(self, plan: Plan, *, wanted=None, versions=VERSIONS, progress=lambda *_: None):
        """The predictions, and the studies that ran for them."""
        self.ran.clear()
        wanted = wanted or requests(plan.rule_book)
        found = run.predict(plan, segments(plan), wanted, progress, self.store, versions)
        return found, list(self.ran)


@pytest.fixture
def desk(monkeypatch):
    desk = Desk()
    studies = (AIR, WIND, INERTIA, SCHEDULE)
    monkeypatch.setattr(run, "STUDIES", tuple(desk.kept(study) for study in studies))
    return desk


def changed(plan: Plan, part: str, **values: object) -> Plan:
    return replace(plan, **{part: replace(getattr(plan, part), **values)})


def test_the_same_question_is_answered_from_the_store(desk, articulated):
    first, ran = desk.predict(articulated)
    assert ran == ["air", "wind", "inertia", "schedule"]
    again, ran = desk.predict(articulated)
    assert ran == []
    assert list(again) == list(first)
    for quantity in ("air_density", "wind_at_hub", "lock_number"):
        assert again[quantity] is first[quantity]


def test_what_a_study_does_not_take_finds_its_result(desk, articulated):
    desk.predict(articulated)
    renamed = replace(articulated, title="Another title", card="OTHER-1")
    assert desk.predict(renamed)[1] == []
    windy = changed(articulated, "site", wind_mean_m_s=articulated.site.wind_mean_m_s + 0.1)
    assert desk.predict(windy)[1] == ["air", "wind", *needing({"air", "wind"})]
    heavier = changed(articulated, "rotor", n_blades=articulated.rotor.n_blades + 1)
    assert desk.predict(heavier)[1] == ["inertia"]


def needing(changed_ids: set[str]) -> list[str]:
    return [study.id for study in (INERTIA, SCHEDULE) if changed_ids & set(study.needs)]


def test_other_versions_and_requests_are_another_question(desk, articulated):
    everything = desk.predict(articulated)[1]
    assert desk.predict(articulated, versions={"numpy": "2.1"})[1] == everything
    wanted = requests(articulated.rule_book)
    more = replace(wanted, allowances={**wanted.allowances, "air_load": (0.5, 1.5)})
    assert desk.predict(articulated, wanted=more)[1] == everything


def test_a_key_holds_id_version_and_the_keys_of_needs(articulated):
    inputs = INERTIA.inputs(
        articulated, segments(articulated), requests(articulated.rule_book), {}
    )
    study = replace(INERTIA, needs=("air",))
    others = [
        replace(study, id="other").key(inputs, VERSIONS, {"air": "1"}),
        replace(study, version=study.version + 1).key(inputs, VERSIONS, {"air": "1"}),
        study.key(inputs, VERSIONS, {"air": "2"}),
    ]
    key = study.key(inputs, VERSIONS, {"air": "1", "wind": "any"})
    assert key == study.key(inputs, VERSIONS, {"air": "1"})
    assert len({key, *others}) == 4
    with pytest.raises(KeyError, match=r"air"):
        study.key(inputs, VERSIONS, {})


def test_a_refusal_is_not_kept(desk, articulated):
    hot = changed(articulated, "site", temperature_K=400.0)
    for _ in range(2):
        found, ran = desk.predict(hot)
        assert found["air_density"].status == (Status.OUTSIDE_VALIDITY,)
        assert ran[0] == "air"


@pytest.mark.parametrize("lacks", ["a quantity", "all", "its own name", "its own study"])
def test_a_result_that_is_not_whole_is_computed_anew(desk, articulated, lacks):
    true, _ = desk.predict(articulated)
    whole = {q: p for q, p in true.items() if p.study == "air"}
    name = next(iter(whole))
    found = {
        "a quantity": {q: p for q, p in whole.items() if q != name},
        "all": {},
        "its own name": {**whole, name: replace(whole[name], quantity="thrust")},
        "its own study": {**whole, name: replace(whole[name], study="wind")},
    }[lacks]
    desk.store.get = lambda _key: found
    again, ran = desk.predict(articulated)
    assert "air" in ran
    assert again["air_density"].value == true["air_density"].value


def test_only_slow_studies_keep(desk, articulated, monkeypatch):
    monkeypatch.setattr(run, "STUDIES", tuple(replace(s, kept=False) for s in run.STUDIES))
    assert desk.predict(articulated)[1] == desk.predict(articulated)[1] != []


def test_progress_reaches_the_studies(desk, articulated):
    told: list[tuple[object, ...]] = []
    desk.predict(articulated, progress=lambda *words: told.append(words))
    assert told[:3] == [("air",), ("air, half done", 0.5), ("wind",)]
