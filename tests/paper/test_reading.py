from __future__ import annotations

from typing import Any

import pytest

from planner.paper.pages import frame_for
from planner.paper.reading import Reading
from planner.paper.step_readings import hold_readings, moving_readings
from planner.paper.steps import step_boxes
from planner.paper.tables import TableRow
from tests.paper.sample_record import Json, sample_record


def readings(record: Json, segment: str) -> dict[str, list[str]]:
    rows = moving_readings(Reading(record), segment)
    return {row[0].text: [cell.text.replace("\xa0", " ") for cell in row[1:4]] for row in rows}


def step_texts(record: Json) -> list[str]:
    return [
        " ".join(
            line
            for lines in (*box.lines, *(c for sub in box.sub_lines for c in sub), *box.tail_lines)
            for line, _ in lines
        ).replace("\xa0", " ")
        for box in step_boxes(Reading(record), frame_for("a4"))
        if isinstance(box, TableRow)
    ]


def test_number_of_a_place_is_never_that_of_an_abort() -> None:
    record = sample_record(2)
    found = record["predictions"]["droop_stop_peak_moment"]["rows"]
    found.reverse()
    reading = Reading(record)
    own = reading.row("droop_stop_peak_moment", "1.1r")
    assert own is not None
    assert own["state"] == ""
    assert reading.row("droop_stop_peak_moment", "1.1h") is None
    row = reading.abort_row("droop_stop_peak_moment", "1.1h", "brake lost")
    assert row is not None
    assert row["state"] == "brake lost"


@pytest.mark.parametrize("place", [{}, {"state": "brake lost"}, {"segment": "1.1h"}])
def test_row_that_stands_for_a_study_answers_for_its_aborts(place: dict[str, str]) -> None:
    record = sample_record(2)
    empty = dict.fromkeys(("segment", "mode", "harmonic", "band", "state"), "")
    row: dict[str, Any] = {**empty, "value": None, "low": None, "high": None, "reason": "no air",
                           "status": "not computed"}  # fmt: skip
    if "segment" in place:
        place = {**place, "state": "brake lost"}
    record["predictions"]["time_to_rest"]["rows"] = [row | place]
    found = Reading(record).abort_row("time_to_rest", "1.1h", "brake lost")
    assert found is not None
    assert found["reason"] == "no air"


def test_open_aborts_keep_holds_and_ramps_from_go_but_not_the_stop() -> None:
    record = sample_record(2)
    covered = next(c for c in record["coverage"] if c["where"] == "abort")
    covered.update(closed_by="", verdict="NOT ASSESSED")
    reading = Reading(record)
    against = ("NOT ASSESSED", "nothing closes Abort from any point of the run")
    assert against in reading.reasons_against("1.1h")
    assert against in reading.reasons_against("1.1r")
    assert against not in reading.reasons_against("stop")


def test_reason_that_comes_from_an_abort_says_so_at_a_hold() -> None:
    record = sample_record(2)
    found = next(f for f in record["findings"] if f["rule"] == "stop-peak")
    found["segment_verdicts"] |= {"1.1h": "NO-GO", "1.1r": "NO-GO"}
    reading = Reading(record)
    title = "Peak moment on a droop stop"
    assert ("NO-GO", f"{title} (abort from here)") in reading.reasons_against("1.1h")
    assert ("NO-GO", title) in reading.reasons_against("1.1r")


def test_documents_on_aborts_stand_behind_rows_of_aborts_only() -> None:
    record = sample_record(2)
    for row in record["predictions"]["droop_stop_peak_moment"]["rows"]:
        if row["state"] == "brake lost":
            row.update(status="outside validity", value=None, low=None, high=None)
    found = next(f for f in record["findings"] if f["rule"] == "stop-peak")
    found["closed_by"] = "DOC-7, DOC-9"
    documents = record["plan"]["documents"]
    documents.append(
        documents[0] | {"number": "DOC-9", "hazard_class": "stops", "where": ["ramp"]}
    )
    reading = Reading(record)
    assert reading.documents_behind("1.1h") == ["DOC-7"]
    assert reading.documents_behind("1.1r") == ["DOC-7"]
    assert reading.documents_behind("stop") == []


def test_ramp_shows_marched_flap_stop_and_contacts_with_margins() -> None:
    record = sample_record(2)
    shown = readings(record, "1.1r")
    assert shown["Flap"][0] == "−4.6 to 6.9°"
    assert shown["Stop"][:2] == ["droop 27.5 %", "0 to 1100 N m"]
    assert shown["Stop"][2].endswith(" N m")
    assert shown["Contact"] == ["none at speed", "up to 110 rpm", "no limit"]
    assert set(shown) == {"Flap", "Stop", "Contact", "Torque"}


def test_ramp_says_what_is_not_marched_and_what_is_met() -> None:
    record = sample_record(2)
    for row in record["predictions"]["droop_stop_peak_moment"]["rows"]:
        row.update(value=0.0, low=0.0, high=0.0)
    for row in record["predictions"]["contacts_after_lift_off"]["rows"]:
        row.update(high=3.0)
    for row in record["predictions"]["lowest_flap_marched"]["rows"]:
        row.update(status="not converged")
    shown = readings(record, "1.1r")
    assert shown["Flap"][:2] == ["NOT ASSESSED", "not converged"]
    assert shown["Stop"][:2] == ["none met", "any: HOLD"]
    assert shown["Contact"][0] == "3 at speed"


def test_record_from_before_marching_shows_the_periodic_flap() -> None:
    record = sample_record(2)
    del record["predictions"]["lowest_flap_marched"]
    assert set(readings(record, "1.1r")) == {"Flap", "Torque"}
    names = [row[0].text for row in hold_readings(Reading(record), "1.1h")]
    assert names == ["Flap", "Droop gap", "Up gap", "Thrust", "Torque", "Power"]


def test_stop_row_tells_the_time_to_rest_and_turns_in_bands() -> None:
    record = sample_record(2)
    for row in record["predictions"]["band_rate"]["rows"]:
        if row["segment"] == "stop":
            row.update(status="does not apply", value=None, low=None, high=None)
    texts = step_texts(record)
    assert any("STOP: rest in 51.3 to 62.7 s" in text for text in texts)
    assert any("stop K1" in text and "Turns 12.6 No HOLD: no power" in text for text in texts)
    record["plan"]["shutdown"]["powered"] = True
    assert any("STOP: in 95 s" in text for text in step_texts(record))
    record["plan"]["shutdown"]["powered"] = False
    del record["predictions"]["time_to_rest"]
    assert any("time to rest NOT ASSESSED (not computed)" in t for t in step_texts(record))


def test_run_up_of_the_drive_without_a_time_is_not_assessed() -> None:
    record = sample_record(2)
    record["segments"][0]["duration_s"] = None
    assert any("SET-UP: in a time NOT ASSESSED" in text for text in step_texts(record))


def test_only_the_worst_reasons_of_a_row_are_listed() -> None:
    record = sample_record(2)
    words = {"torque": "CAUTION", "power": "NO-GO"}
    for found in record["findings"]:
        if found["rule"] in words:
            found["segment_verdicts"]["1.1h"] = words[found["rule"]]
    text = next(text for text in step_texts(record) if text.startswith("1.1h"))
    assert "Not GO: NO-GO: Drive power; and 1 more, see the findings." in text
