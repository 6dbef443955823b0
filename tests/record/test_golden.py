"""The golden record of each layout stays readable, and today's numbers are still those."""

from __future__ import annotations

import json

import pytest

from planner.paper.card import card_pdf
from planner.record.layout import LAYOUT, RecordError, from_bytes, to_bytes
from tests.record.make_golden import GOLDEN, HERE, golden_record

TOLERANCE = 1e-6


@pytest.fixture(scope="module")
def golden():
    return from_bytes(GOLDEN.read_bytes(), GOLDEN.name)


@pytest.mark.parametrize("layout", range(1, LAYOUT + 1))
def test_golden_record_of_every_layout_prints(layout):
    path = HERE / f"golden_layout_{layout}.json"
    record = from_bytes(path.read_bytes(), path.name)
    assert record["layout"] == LAYOUT
    assert card_pdf(record).startswith(b"%PDF")


def test_layout_1_is_brought_forward_with_rows_of_no_abort():
    data = (HERE / "golden_layout_1.json").read_bytes()
    old, record = json.loads(data), from_bytes(data, "x.json")
    for quantity, found in record["predictions"].items():
        was = old["predictions"][quantity]["rows"]
        assert found["rows"] == [{**row, "state": ""} for row in was]
    assert changed(old, record) == {"layout", "predictions", "series", "content_digest"}
    assert from_bytes(to_bytes(record), "x.json") == record


@pytest.mark.parametrize("layout", [1, 2])
def test_older_fan_charts_are_brought_forward_without_what_was_not_computed(layout):
    data = (HERE / f"golden_layout_{layout}.json").read_bytes()
    old, record = json.loads(data), from_bytes(data, "x.json")
    if layout > 1:
        assert changed(old, record) == {"layout", "series", "content_digest"}
    assert changed(old["series"], record["series"]) == {"fan"}
    before, fan = old["series"]["fan"], record["series"]["fan"]
    assert fan["speed_rad_s"] == before["speed_rad_s"]
    assert fan["harmonics"] == {"blade": before["harmonics"], "stand": [], "shaft": []}
    assert (fan["collective_rad"], fan["shifted"], fan["time_at_speed"]) == (None, [], None)
    for mode, was in zip(fan["modes"], before["modes"], strict=True):
        given = mode["family"] in {"stand", "shaft"}
        told = {"panel": mode["family"] if given else "blade", "doubt": ""}
        assert mode == {**told, **was}
    assert from_bytes(to_bytes(record), "x.json") == record


def changed(old, new):
    """Keys whose values are not the same in both."""
    return {key for key in {*old, *new} if key not in old or old[key] != new.get(key)}


def test_layout_1_that_was_edited_is_noticed():
    record = json.loads((HERE / "golden_layout_1.json").read_bytes())
    record["verdict"] = "GO"
    with pytest.raises(RecordError, match=r"x.json: .*content digest"):
        from_bytes(json.dumps(record).encode(), "x.json")


def test_todays_record_has_the_same_shape_and_numbers(golden):
    today = golden_record()
    compare(numbers_of(golden), numbers_of(today), "record")


def numbers_of(record):
    """A record without versions, digests, and the words of register and rule book."""
    words = {"made_by", "meaning_digest", "content_digest", "vocabulary"}
    kept = {key: value for key, value in record.items() if key not in words}
    kept["plan"] = {key: value for key, value in record["plan"].items() if key != "rule_book"}
    return kept


def compare(then, now, place):
    if isinstance(then, dict):
        assert then.keys() == now.keys(), place
        for key in then:
            compare(then[key], now[key], f"{place}.{key}")
    elif isinstance(then, list):
        assert len(then) == len(now), place
        for i, (one, other) in enumerate(zip(then, now, strict=True)):
            compare(one, other, f"{place}[{i}]")
    elif isinstance(then, float) and isinstance(now, float | int):
        assert now == pytest.approx(then, rel=TOLERANCE, abs=1e-9), place
    else:
        assert then == now, place
