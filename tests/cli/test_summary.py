from __future__ import annotations

from planner.cli.summary import summary
from tests.paper.sample_record import by_state, sample_record
from tests.paper.test_wind_gate import gate_of


def test_aborts_are_listed_by_cause_with_where_the_worst_begins() -> None:
    record = sample_record(2)
    found = next(f for f in record["findings"] if f["rule"] == "rest")
    found["by_state"] = by_state("GO", "1.1h")
    found["by_state"]["brake lost"].update(verdict="NO-GO", segment="1.2h")
    text = summary(record)
    part = text[text.index("Aborts by cause") :]
    assert "  GO           controls commanded, worst from " in part
    assert "  NO-GO        brake lost, worst from 1.2h" in part
    assert "Wind gate" not in text


def test_gate_is_listed_where_it_is_kept_for_this_plan() -> None:
    record = sample_record(2)
    record["wind_gate"] = gate_of(record)
    text = summary(record)
    assert "Wind gate, mean and gust at most" in text
    assert "field: 3.7 m/s (7.19 kt), 5.5 m/s (10.7 kt); up-stop-peak; first fails" in text
