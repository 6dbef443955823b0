from __future__ import annotations

import pytest

from planner.model.plan import ABORT_CAUSES
from planner.model.results import Verdict
from planner.paper.abort_causes import Aborts
from planner.paper.abort_sheet import ONE_ORDER, abort_boxes, abort_facts, orders_text
from planner.paper.abort_table import (
    bands_text,
    cause_boxes,
    contacts_text,
    crossings_text,
    times_text,
)
from planner.paper.boxes import Lines
from planner.paper.ink import ABORT
from planner.paper.pages import frame_for, paginate
from planner.paper.reading import Reading
from planner.paper.tables import TableRow
from planner.units import to_si
from tests.paper.sample_record import Json, by_state, sample_record

COMMANDED, FROZEN, BRAKE_LOST, NOT_RESEATED = ABORT_CAUSES
FRAME = frame_for("a4")


def aborts_of(record: Json) -> Aborts:
    return Aborts(Reading(record))


def rows(record: Json, quantity: str, cause: str, segment: str = "") -> list[Json]:
    found = record["predictions"][quantity]["rows"]
    return [r for r in found if r["state"] == cause and segment in {"", r["segment"]}]


def finding(record: Json, rule: str) -> Json:
    found: Json = next(f for f in record["findings"] if f["rule"] == rule)
    return found


def words_of(record: Json, cause: str) -> str:
    found = next(v for v in aborts_of(record).verdicts if v.cause == cause)
    return f"{found.words} {found.origin} {'; '.join(found.against)}"


def test_one_order_serves_all_causes_where_all_are_sound() -> None:
    record = sample_record(3)
    assert orders_text(aborts_of(record)) == ONE_ORDER
    finding(record, "rest")["by_state"][FROZEN]["verdict"] = "CAUTION"
    assert orders_text(aborts_of(record)) == f"{ONE_ORDER} CAUTION: controls frozen."
    for part in finding(record, "rest")["by_state"].values():
        part["verdict"] = "CAUTION"
    assert orders_text(aborts_of(record)) == f"{ONE_ORDER} CAUTION: all causes."


@pytest.mark.parametrize("verdict", ["NO-GO", "NOT ASSESSED"])
def test_cause_that_the_actions_do_not_cover_is_named(verdict: str) -> None:
    record = sample_record(3)
    finding(record, "stop-peak")["by_state"][FROZEN].update(verdict=verdict, segment="1.1h")
    text = orders_text(aborts_of(record))
    assert text.startswith("NOT COVERED by these actions: controls frozen (")
    assert verdict in text
    assert "Do not run. It serves the other causes." in text
    assert ONE_ORDER not in text
    assert words_of(record, FROZEN).endswith(f"1.1h {verdict}: Peak moment on a droop stop")
    orders = [
        " ".join(line for line, _ in box.tail_lines[0])
        for box in cause_boxes(aborts_of(record), FRAME)
        if isinstance(box, TableRow)
    ]
    assert orders[0].startswith("In this order: torque off; collective and cyclic as stated")
    assert orders[1].startswith("NOT COVERED: do not run. Should it happen: torque off; leave")
    assert "let it coast" in orders[2]
    assert "blades may hang low" in orders[3]


def test_nothing_covers_what_is_bad_for_every_cause() -> None:
    record = sample_record(3)
    finding(record, "rest")["by_state"] = by_state("NO-GO", "1.1h")
    text = orders_text(aborts_of(record))
    assert (
        text
        == "NOT COVERED by these actions: any cause (■ NO-GO). Do not run. By cause: overleaf."
    )


def test_finding_that_does_not_tell_causes_apart_counts_against_each() -> None:
    record = sample_record(3)
    finding(record, "rest").update(by_state={}, verdict="NO-GO")
    assert {v.verdict for v in aborts_of(record).verdicts} == {Verdict.NO_GO}
    del finding(record, "rest")["by_state"]
    assert {v.verdict for v in aborts_of(record).verdicts} == {Verdict.NO_GO}


def test_open_class_counts_against_the_cause_that_it_names_or_all() -> None:
    record = sample_record(3)
    covered = next(c for c in record["coverage"] if c["where"] == "abort")
    covered.update(closed_by="", verdict="NOT ASSESSED", reason="nothing judges it")
    assert all(not v.is_sound for v in aborts_of(record).verdicts)
    covered["reason"] = "no rule judges hub_moment_peak at the abort from 1.1h, brake lost"
    sound = {v.cause: v.is_sound for v in aborts_of(record).verdicts}
    assert sound == {COMMANDED: True, FROZEN: True, BRAKE_LOST: False, NOT_RESEATED: True}
    record["coverage"] = []
    assert "NOT ASSESSED: nothing closes aborts" in words_of(record, COMMANDED)


def test_document_that_closes_aborts_is_named_with_the_verdict() -> None:
    record = sample_record(3)
    rules = record["plan"]["rule_book"]["rules"]
    for rule in rules:
        rule["where"] = [where for where in rule["where"] if where != "abort"]
    covered = next(c for c in record["coverage"] if c["where"] == "abort")
    covered["closed_by"] = "DOC-7"
    assert words_of(record, COMMANDED) == "○ GO by DOC-7  "


def test_times_are_of_the_highest_hold_with_the_longest_beside() -> None:
    record = sample_record(6)
    aborts = aborts_of(record)
    hold = aborts.highest_hold
    assert hold is not None
    assert "rest: 62.7\xa0s" in times_text(aborts, COMMANDED, hold)
    assert "rest: 94.1\xa0s" in times_text(aborts, BRAKE_LOST, hold)
    rows(record, "time_to_half", COMMANDED, "1.1h")[0].update(high=99.0)
    text = times_text(aborts_of(record), COMMANDED, hold)
    assert "(99.0\xa0s, 1.1h)" in text.splitlines()[0]


def test_number_of_one_abort_that_is_missing_outweighs_all_others() -> None:
    record = sample_record(6)
    rows(record, "time_to_rest", COMMANDED, "1.1h")[0].update(status="not converged", value=None)
    rows(record, "droop_stop_peak_moment", COMMANDED, "1.1r")[0].update(status="not computed")
    aborts = aborts_of(record)
    assert "(NOT ASSESSED, 1.1h)" in times_text(aborts, COMMANDED, aborts.highest_hold)
    assert "peak droop NOT ASSESSED (not computed)" in contacts_text(aborts, COMMANDED)
    del record["predictions"]["contacts_after_lift_off"]
    assert "at speed: NOT ASSESSED (not computed)" in contacts_text(aborts_of(record), FROZEN)


def test_contacts_tell_count_speed_and_the_worse_stop() -> None:
    record = sample_record(6)
    text = contacts_text(aborts_of(record), COMMANDED)
    assert text.splitlines() == [
        "at speed: none",
        "touches up to 110\xa0rpm",
        "peak droop 1100\xa0N\xa0m, 27.5\xa0% of its rating",
    ]
    rows(record, "contacts_after_lift_off", COMMANDED, "1.2h")[0].update(high=2.0)
    rows(record, "up_stop_peak_moment", COMMANDED, "1.2h")[0].update(high=3800.0)
    text = contacts_text(aborts_of(record), COMMANDED)
    assert "at speed: 2 of one blade, from 1.2h" in text
    assert "peak up 3800\xa0N\xa0m, 95.0\xa0% of its rating" in text


def test_bands_tell_turns_and_sway_and_leave_out_what_is_not_passed() -> None:
    record = sample_record(3)
    assert bands_text(aborts_of(record), COMMANDED).splitlines() == [
        "K1 141–156\xa0rpm: 12.6 turns",
        "K2 250–262\xa0rpm: 12.6 turns",
        "sway 6.60\xa0mm, rocking",
    ]
    for row in rows(record, "band_cycles", COMMANDED):
        row.update(status="does not apply", value=None, low=None, high=None)
    assert bands_text(aborts_of(record), COMMANDED).splitlines()[0] == "no band is passed"
    for row in rows(record, "passage_amplitude", COMMANDED):
        row.update(status="does not apply", value=None, low=None, high=None)
    assert bands_text(aborts_of(record), COMMANDED) == "no band is passed"
    del record["predictions"]["passage_amplitude"]
    assert "sway NOT ASSESSED (not computed)" in bands_text(aborts_of(record), FROZEN)


def test_sway_of_the_worst_stand_mode_is_told_and_a_missing_one_outweighs() -> None:
    record = sample_record(3)
    other = [
        {**row, "mode": "stand column 1"} for row in rows(record, "passage_amplitude", FROZEN)
    ]
    other[-1]["high"] = 9e-3
    record["predictions"]["passage_amplitude"]["rows"] += other
    assert bands_text(aborts_of(record), FROZEN).endswith("sway 9.00\xa0mm, column 1")
    other[0].update(status="not stated", value=None, low=None, high=None)
    text = bands_text(aborts_of(record), FROZEN)
    assert text.endswith("sway NOT ASSESSED (not stated), column 1")


def test_stand_modes_once_per_revolution_are_told_or_not_assessed() -> None:
    record = sample_record(3)
    text = crossings_text(aborts_of(record))
    assert "rocking 145 to 156\xa0rpm" in text
    assert "twist NOT ASSESSED (rotor's mass not fitted)" in text
    record["predictions"]["crossing_speed"]["rows"] = []
    assert "rocking NOT ASSESSED (not computed)" in crossings_text(aborts_of(record))
    record["plan"]["stand"]["modes"] = []
    assert "the stand file gives none" in crossings_text(aborts_of(record))


def test_stand_modes_of_a_column_are_told_too() -> None:
    record = sample_record(3)
    record["plan"]["stand"] |= {"modes": [], "column": {"height_m": 8.0}}
    assert "column NOT ASSESSED (not computed)" in crossings_text(aborts_of(record))
    found = record["predictions"]["crossing_speed"]["rows"]
    found += [{**found[-1], "mode": f"stand column {i}"} for i in (1, 2)]
    found[-1].update(harmonic="", status="not computed", value=None, low=None, high=None)
    text = crossings_text(aborts_of(record))
    assert "column 1 145 to 156\xa0rpm, column 2 NOT ASSESSED (not computed)" in text
    record["plan"]["stand"]["modes"] = [
        {"name": "rocking", "family": "stand", "rotor_fitted": False, "modal_mass_kg": 900.0,
         "missing_mass_kg": 200.0}
    ]  # fmt: skip
    assert "rocking 145 to 156\xa0rpm" in crossings_text(aborts_of(record))


def test_cause_that_cannot_be_is_left_out_with_its_reason() -> None:
    record = sample_record(3)
    for cause in (BRAKE_LOST, FROZEN):
        for row in rows(record, "time_to_rest", cause):
            row.update(status="does not apply", reason="the stand has no brake", value=None)
    aborts = aborts_of(record)
    assert aborts.causes == (COMMANDED, FROZEN, NOT_RESEATED)  # frozen controls always can be
    said = [" ".join(b.lines) for b in cause_boxes(aborts, FRAME) if isinstance(b, Lines)]
    assert "Brake lost: left out, the stand has no brake." in said


@pytest.mark.parametrize(
    ("changes", "words"),
    [
        ({}, "not above 150 rpm (37.9 %); from 140 rpm down"),
        ({"brake": False}, "not above 150 rpm (37.9 %); none ordered"),
        (
            {"brake_from_rad_s": to_si(158.0, "rpm")},
            "not above 150 rpm (37.9 %), although the plan orders it from 158 rpm (40.0 %)",
        ),
    ],
)
def test_brake_is_told_in_panel_rpm(changes: Json, words: str) -> None:
    record = sample_record(2)
    record["plan"]["abort"] |= changes
    facts = dict(abort_facts(Reading(record)))
    assert facts["Brake"].replace("\xa0", " ") == words
    assert list(facts) == ["Torque", "Collective to", "Cyclic", "Brake"]


def test_collective_without_a_rate_and_cyclic_without_words_are_told() -> None:
    record = sample_record(2)
    del record["plan"]["abort"]["collective_rate_rad_s"]
    record["plan"]["abort"]["cyclic"] = ""
    facts = dict(abort_facts(Reading(record)))
    assert facts["Collective to"] == "0.5° (no rate stated)"
    assert facts["Cyclic"].startswith("NOT ASSESSED")


def test_face_and_back_take_a_page_each_in_large_type() -> None:
    boxes = abort_boxes(Reading(sample_record(4)), FRAME)
    assert len(paginate(boxes, FRAME.height)) == 2
    for box in boxes:
        face = box.table.tail_face if isinstance(box, TableRow) and box.tail_lines else None
        assert face in {None, ABORT}
