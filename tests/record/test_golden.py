"""The golden record of each layout stays readable, and today's numbers are still those."""

from __future__ import annotations

import pytest

from planner.paper.card import card_pdf
from planner.record.layout import from_bytes
from tests.record.make_golden import GOLDEN, golden_record

TOLERANCE = 1e-6


@pytest.fixture(scope="module")
def golden():
    return from_bytes(GOLDEN.read_bytes(), GOLDEN.name)


def test_golden_record_prints(golden):
    assert card_pdf(golden).startswith(b"%PDF")


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
