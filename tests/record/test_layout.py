"""The record: one layout, the same bytes, and refusal of anything else."""

from __future__ import annotations

import dataclasses
import json
import math

import pytest

from planner.model.canonical import digest, plain
from planner.record.layout import (
    LAYOUT,
    REQUIRED,
    RecordError,
    build,
    from_bytes,
    to_bytes,
)
from tests.conftest import kept_results, read_sample

FILES = [("plan.toml", "0" * 64)]


@pytest.fixture(scope="module")
def record():
    return build(read_sample("articulated-run-up"), FILES, store=kept_results())


def test_record_holds_every_part(record):
    assert set(REQUIRED) <= set(record)
    assert record["layout"] == LAYOUT


def test_record_survives_the_round_trip(record):
    assert from_bytes(to_bytes(record), "x.json") == json.loads(to_bytes(record))


def test_same_plan_gives_the_same_bytes(record, articulated):
    assert to_bytes(build(articulated, FILES, store=kept_results())) == to_bytes(record)


def test_meaning_digest_ignores_files_and_files_digest_does_not(record, articulated):
    other = build(articulated, [("plan.toml", "1" * 64)], store=kept_results())
    assert other["meaning_digest"] == record["meaning_digest"]
    assert other["files_digest"] != record["files_digest"]


def test_meaning_digest_moves_with_the_smallest_change(record, articulated):
    site = dataclasses.replace(
        articulated.site, temperature_K=math.nextafter(articulated.site.temperature_K, 400.0)
    )
    assert digest(dataclasses.replace(articulated, site=site)) != record["meaning_digest"]


def test_numbers_that_are_not_finite_become_null():
    assert plain({"a": math.nan, "b": math.inf, "c": 1.0}) == {"a": None, "b": None, "c": 1.0}


@pytest.mark.parametrize(
    ("data", "message"),
    [
        (b"\xff\xfe", r"x.json: expected a whirlcard record in JSON, found"),
        (b"{", r"x.json: expected a whirlcard record in JSON, found"),
        (b"[" * 100_000, r"x.json: expected a whirlcard record in JSON, found"),
        (b"[1]", r"x.json: expected a whirlcard record, found JSON without a layout number"),
        (b'{"layout": 99}', r"x.json: expected record layout 3, found 99"),
        (b'{"layout": [1]}', r"x.json: expected record layout 3, found \[1\]"),
        (b'{"layout": 1}', r"x.json: expected a whole record, found none of: made_by, files"),
        (b'{"layout": 2}', r"x.json: expected a whole record, found none of: made_by, files"),
        (b'{"layout": 3}', r"x.json: expected a whole record, found none of: made_by, files"),
    ],
)
def test_other_files_are_refused(data, message):
    with pytest.raises(RecordError, match=message):
        from_bytes(data, "x.json")


def test_edited_model_is_noticed(record):
    edited = json.loads(to_bytes(record))
    edited["plan"]["stand"]["full_speed_rad_s"] *= 1.1
    with pytest.raises(RecordError, match=r"x.json: .*meaning digest"):
        from_bytes(json.dumps(edited).encode(), "x.json")


def test_edited_verdict_is_noticed(record):
    edited = json.loads(to_bytes(record))
    edited["verdict"] = "GO" if edited["verdict"] != "GO" else "NO-GO"
    with pytest.raises(RecordError, match=r"x.json: .*content digest"):
        from_bytes(json.dumps(edited).encode(), "x.json")
