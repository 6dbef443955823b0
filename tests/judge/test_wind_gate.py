from __future__ import annotations

import pytest

from planner.judge.judge import judge
from planner.judge.wind_gate import gate_findings, gate_key, gate_verdict
from planner.model.results import Verdict
from planner.predict.kept import NOTHING_KEPT, MemoryStore
from planner.predict.register import REGISTER
from planner.record.layout import gate_of, versions
from tests.judge.conftest import Bench, plan

GO, NO_GO, OPEN = Verdict.GO, Verdict.NO_GO, Verdict.NOT_ASSESSED


def sector(name: str, mean: float | None, gust: float | None, *, is_assessed: bool = True):
    return {
        "name": name, "mean_m_s": mean, "gust_m_s": gust, "limited_by": "lag-travel at stop",
        "is_assessed": is_assessed,
    }  # fmt: skip


def gate(*sectors):
    return {"sectors": list(sectors), "planned": {"mean_m_s": 6.0, "gust_m_s": 9.0}}


@pytest.mark.parametrize(
    ("sectors", "verdict", "reason"),
    [
        ([sector("field", 6.0, 9.0), sector("wood", 8.0, 11.0)], GO, ""),
        (
            [sector("field", 7.0, 10.0), sector("wood", 5.5, 8.5)],
            NO_GO,
            "6 m/s mean and 9 m/s gust against the gate from wood: 5.5 m/s mean and 8.5 m/s gust; "
            "limited by lag-travel at stop",
        ),
        ([sector("field", 6.0, 8.9)], NO_GO, "6 m/s mean and 8.9 m/s gust"),
        ([sector("field", None, None)], NO_GO, "it is closed; limited by lag-travel at stop"),
        ([sector("field", 3.0, 6.0, is_assessed=False)], OPEN, "3 m/s mean"),
        (
            [sector("field", 5.0, 8.0), sector("wood", None, None, is_assessed=False)],
            NO_GO,
            "from field",
        ),
        ([], OPEN, "it holds no sector"),
    ],
)
def test_26_planned_wind_is_held_against_the_gate_of_every_sector(sectors, verdict, reason):
    found = gate(*sectors)
    bench = Bench(plan())
    judgement = judge(bench.plan, bench.segments, REGISTER, bench.predictions, found)
    (finding,) = [f for f in judgement.findings if f.rule == "wind gate"]
    assert finding.verdict is verdict
    assert judgement.verdict is verdict
    assert reason in finding.reason
    assert gate_verdict(found) is verdict


def test_without_a_gate_nothing_is_found():
    assert gate_findings(plan().site, None) == ()


def test_a_gate_is_found_for_its_plan_alone():
    store = MemoryStore()
    store.put_plain(gate_key("mine", versions()), {"kept_for": "mine"})
    store.put_plain(gate_key("yours", versions()), {"kept_for": "someone else's"})
    assert gate_of("mine", store) == {"kept_for": "mine"}
    assert gate_of("yours", store) is None
    assert gate_of("another", store) is None
    assert gate_of("mine", NOTHING_KEPT) is None
    assert gate_key("mine", versions()) != gate_key("mine", versions() | {"numpy": "0"})
