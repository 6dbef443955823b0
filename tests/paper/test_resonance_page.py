from __future__ import annotations

from typing import Any

import pytest

from planner.model.plan import ABORT_CAUSES
from planner.paper.boxes import Lines
from planner.paper.fan_words import limit_text
from planner.paper.pages import frame_for, paginate
from planner.paper.passage_words import IN_ONE, hand_or_why, peak_note
from planner.paper.reading import Reading
from planner.paper.resonance_page import not_passed, passages, resonance_boxes
from planner.paper.tables import TableRow
from planner.units import to_si
from tests.paper.sample_record import Json, sample_record

FRAME = frame_for("a4")
FAULT: Json = {"value": None, "low": None, "high": None, "hand": None}


def sway(record: Json, state: str | None = None) -> list[Json]:
    rows: list[Json] = record["predictions"]["passage_amplitude"]["rows"]
    passed = [row for row in rows if row["status"] == "ok"]
    return passed if state is None else [row for row in passed if row["state"] == state]


def said(record: Json) -> str:
    boxes = resonance_boxes(Reading(record), FRAME)
    lines: list[str] = []
    for box in boxes:
        if isinstance(box, Lines):
            lines += box.lines
        elif isinstance(box, TableRow):
            lines += [line for cell in box.lines for line, _ in cell]
    return " ".join(lines).replace("\xa0", " ")


def places(record: Json) -> dict[str, tuple[str, ...]]:
    found = {}
    for one in passages(Reading(record)):
        for place in one.places:
            found[place] = (one.mode, *(text.replace("\xa0", " ") for text in one.said))
    return found


def test_ramps_and_stop_are_listed_and_the_worst_abort_of_each_cause() -> None:
    record = sample_record(6)
    frozen = sway(record, ABORT_CAUSES[1])
    frozen[2].update(high=8.1e-3)
    found = places(record)
    frozen_place = f"abort from {frozen[2]['segment']}, {ABORT_CAUSES[1]}"
    assert set(found) == {
        "1.1r, rest to 247.62\xa0rpm",
        "stop, 375.25\xa0rpm to rest",
        frozen_place,
        *(f"abort from 1.1r, {cause}" for cause in ABORT_CAUSES if cause != ABORT_CAUSES[1]),
    }
    assert found["1.1r, rest to 247.62\xa0rpm"] == (
        "stand rocking", "6.00 mm (5.40 to 6.60 mm)", "no limit",
        "146 rpm (131 to 161 rpm)\npartly outside band K1", "6.24 mm",
    )  # fmt: skip
    assert found[frozen_place][1] == "6.00 mm (5.40 to 8.10 mm)"


def test_page_says_that_amplitudes_are_of_stand_modes_once_per_revolution_only() -> None:
    assert "of stand modes at once per revolution only, for nobody knows" in said(sample_record(2))


@pytest.mark.parametrize(
    ("speeds_rpm", "has_bands", "words"),
    [
        ((146.0, 142.0, 150.0), True, ""),
        ((146.0, 138.0, 150.0), True, "partly outside band K1"),
        ((138.0, 135.0, 140.0), True, "peak outside band K1"),
        ((138.0, 135.0, 140.0), False, "peak outside every band"),
    ],
)
def test_peak_outside_the_bands_is_told(
    speeds_rpm: tuple[float, ...], words: str, *, has_bands: bool
) -> None:
    record = sample_record(2)
    if not has_bands:
        record["plan"]["keep_outs"] = record["plan"]["keep_outs"][1:]
    row = record["predictions"]["passage_peak_speed"]["rows"][0]
    ends = (to_si(rpm, "rpm") for rpm in speeds_rpm)
    row.update(zip(("value", "low", "high"), ends, strict=True), status="ok")
    assert peak_note(Reading(record), "stand rocking", row) == words


@pytest.mark.parametrize(
    ("damping", "kind", "words"),
    [(0.02, "ramp", IN_ONE), (0.08, "ramp", "—"), (None, "ramp", "—"), (0.02, "hold", "—")],
)
def test_abort_out_of_a_ramp_without_a_hand_check_says_why(
    damping: float | None, kind: str, words: str
) -> None:
    record = sample_record(6)
    for mode in record["series"]["fan"]["modes"]:
        mode["damping"] = damping
    row = {**sway(record, ABORT_CAUSES[0])[0], "hand": None}
    segment = {"kind": kind, "from_rad_s": 0.0, "to_rad_s": to_si(300.0, "rpm")}
    assert hand_or_why(Reading(record), row, segment) == words
    assert hand_or_why(Reading(record), {**row, "hand": 2e-3}, segment) == "2.00\xa0mm"


def test_missing_number_outweighs_all_others_of_its_cause() -> None:
    record = sample_record(6)
    row = sway(record, ABORT_CAUSES[0])[1]
    row.update(FAULT, status="outside validity", reason="the damping is high")
    found = places(record)[f"abort from {row['segment']}, {ABORT_CAUSES[0]}"]
    assert found[1] == "NOT ASSESSED (outside validity: the damping is high)"
    assert found[3:] == ("—", "—")


def test_mode_that_is_missing_everywhere_takes_one_line() -> None:
    record = sample_record(3)
    for row in sway(record):
        row.update(FAULT, status="not stated", reason="no unbalance is stated")
    (only,) = passages(Reading(record))
    assert only.places == ("every passage",)
    assert only.said[0] == "NOT ASSESSED (not stated: no unbalance is stated)"


def test_modes_that_are_not_passed_are_named() -> None:
    record = sample_record(3)
    assert not not_passed(Reading(record))
    for row in sway(record):
        row.update(FAULT, status="does not apply", reason="this resonance is not passed")
    assert not_passed(Reading(record)) == ["stand rocking"]
    assert "Not passed once per revolution: stand rocking." in said(record)


@pytest.mark.parametrize(
    ("rows", "words"),
    [
        (None, "is passed: NOT ASSESSED (not computed)."),
        ([{"status": "does not apply", "reason": "the stand file gives no mode of the stand"}],
         "is passed: does not apply (the stand file gives no mode of the stand)."),
        ([{"status": "not stated", "reason": "no allowance"}],
         "is passed: NOT ASSESSED (not stated: no allowance)."),
    ],
)  # fmt: skip
def test_run_without_any_passage_says_why(rows: list[Json] | None, words: str) -> None:
    record = sample_record(3)
    one = record["predictions"].pop("passage_amplitude")["rows"][0]
    if rows is not None:
        made = [{**one, **FAULT, "segment": "", "mode": "", **row} for row in rows]
        record["predictions"]["passage_amplitude"] = {"study": "sample", "rows": made}
    assert words in said(record)


def rule(where: tuple[str, ...], family: str = "") -> dict[str, Any]:
    record = sample_record(2)
    first = record["plan"]["rule_book"]["rules"][2]
    return {**first, "id": "sway", "quantity": "passage_amplitude", "where": list(where),
            "mode_family": family, "unit": "mm"}  # fmt: skip


@pytest.mark.parametrize(
    ("made", "at", "ramp", "abort"),
    [
        (rule(("ramp", "abort"), "stand"), 2e-3, "at most 2 mm", "at most 2 mm"),
        (rule(("abort",)), 2e-3, "no limit", "at most 2 mm"),
        (rule(("ramp",), "shaft"), 2e-3, "no limit", "no limit"),
        (rule(("ramp",)), None, "NOT ASSESSED", "no limit"),
    ],
)
def test_limit_is_the_book_s_where_it_looks(
    made: Json, at: float | None, ramp: str, abort: str
) -> None:
    record = sample_record(6)
    record["plan"]["rule_book"]["rules"].append(made)
    record["findings"].append({**record["findings"][0], "rule": "sway", "limit": at})
    found = places(record)
    assert found["1.1r, rest to 247.62\xa0rpm"][2] == ramp
    assert found[f"abort from 1.1r, {ABORT_CAUSES[0]}"][2] == abort


def test_rate_needed_is_told_with_the_rating_or_why_not() -> None:
    record = sample_record(3)
    record["plan"]["stand"]["ratings"]["hub_amplitude_m"] = 0.002
    text = said(record)
    assert "below what the stand bears, 2 mm." in text
    assert "stand rocking 1.60 rpm/s (1.52 to 1.68 rpm/s) —" in text
    assert "stand twist NOT ASSESSED (not stated: the stand file does not say" in text
    row = record["predictions"]["passage_rate_needed"]["rows"][0]
    row.update(value=0.0, low=0.0, high=0.0, hand=to_si(0.1, "rpm/s"))
    no_rate = "no least rate: steady sway stays below the rating at the stated damping"
    assert f"{no_rate} 0.100 rpm/s" in said(record)
    assert "No least rate is no leave to dwell: bands are passed without stopping." in said(record)
    row.update(hand=0.0)
    assert f"{no_rate} no least rate" in said(record)


def test_stay_in_bands_is_told_over_the_whole_card() -> None:
    record = sample_record(3)
    record["plan"]["abort"]["reentries"] = 2
    text = said(record)
    assert "the stop, and 2 aborts, the longest of any, with the way back up each time." in text
    assert (
        "K1, 141–156 rpm stand rocking mode at 1P 240 s (228 to 252 s) 610 (579 to 641) no limit"
        in text
    )
    for row in record["predictions"]["band_time_total"]["rows"]:
        row.update(FAULT, status="not stated", reason="[abort] does not state reentries")
    assert "NOT ASSESSED (not stated: [abort] does not state reentries)" in said(record)
    record["plan"]["keep_outs"] = []
    assert "The plan declares no keep-out band." in said(record)


def test_page_breaks_inside_the_sheet_with_many_steps() -> None:
    for paper in ("a4", "letter"):
        frame = frame_for(paper)
        pages = paginate(resonance_boxes(Reading(sample_record(40)), frame), frame.height)
        assert all(max(p.down + p.box.height for p in page) <= frame.height for page in pages)


@pytest.mark.parametrize(
    ("change", "mode", "words"),
    [
        ({}, "lag 1", "at most 3 mm"),
        ({}, "lag 2", "no limit"),
        ({}, "flap 1", "no limit"),
        ({"limit": None, "tested": 0, "verdict": "GO"}, "lag 1", "exempt by damping"),
        ({"limit": None, "tested": 0, "verdict": "NOT ASSESSED"}, "lag 1", "NOT ASSESSED"),
    ],
)
def test_limit_is_of_the_modes_that_a_rule_covers(change: Json, mode: str, words: str) -> None:
    record = sample_record(2)
    made = {**rule(("hold",), "lag"), "mode_orders": [1], "exempt_damping": 0.05}
    record["plan"]["rule_book"]["rules"].append(made)
    record["findings"].append({**record["findings"][0], "rule": "sway", "limit": 3e-3, **change})
    text = limit_text(Reading(record), "passage_amplitude", "hold", mode)
    assert text.replace("\xa0", " ") == words


def test_causes_of_aborts_from_one_place_share_its_name() -> None:
    text = said(sample_record(6))
    assert f"abort from 1.1r: {', '.join(ABORT_CAUSES)}" in " ".join(text.split())
