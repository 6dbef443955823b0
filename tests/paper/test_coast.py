from __future__ import annotations

import pytest

from planner.paper.boxes import Lines
from planner.paper.coast import coast_boxes
from planner.paper.pages import frame_for
from planner.paper.reading import Reading
from planner.paper.tables import TableRow
from planner.units import to_si
from tests.paper.sample_record import Json, sample_record

FRAME = frame_for("a4")


def table(record: Json) -> list[list[str]]:
    return [
        [" ".join(line for line, _ in cell).replace("\xa0", " ") for cell in box.lines]
        for box in coast_boxes(Reading(record), FRAME)
        if isinstance(box, TableRow)
    ]


def said(record: Json) -> str:
    boxes = coast_boxes(Reading(record), FRAME)
    return " ".join(" ".join(b.lines) for b in boxes if isinstance(b, Lines))


def test_speeds_run_down_from_the_top_with_times_and_meanings() -> None:
    rows = table(sample_record(3))
    speeds = [float(row[0].split()[0]) for row in rows]
    assert speeds == sorted(speeds, reverse=True)
    assert rows[0][:3] == ["375.25 rpm (95.0 %)", "0.0 s", "0.0 s"]
    assert rows[-1][:3] == ["0 rpm (0.0 %)", "51.3 to 62.7 s", "51.3 to 62.7 s"]
    by_speed = {row[0]: row for row in rows}
    assert by_speed["188 rpm (47.5 %)"][1] == "17.1 to 20.9 s"
    words = " ".join(row[-1] for row in rows)
    for part in (
        "the stand's brake is allowed only below this",
        "brake planned from here down",
        "droop stops re-seat",
        "keep-out K1 141–156 rpm begins",
        "stop: blades touch their droop stops from here down",
        "abort: blades touch their droop stops from here down",
    ):
        assert part in words


def test_between_points_a_time_is_bounded_by_its_neighbours() -> None:
    rows = {row[0]: row for row in table(sample_record(3))}
    assert rows["150 rpm (38.0 %)"][1] == "17.1 to 35.6 s"


def test_contact_speed_close_below_a_planned_one_shares_its_row() -> None:
    rows = {row[0]: row for row in table(sample_record(3))}
    assert "droop stops re-seat" in rows["110 rpm (27.8 %)"][-1]
    assert "blades touch" in rows["110 rpm (27.8 %)"][-1]


def test_missing_times_are_not_assessed_with_their_reason() -> None:
    record = sample_record(3)
    for quantity in ("time_to_10", "time_to_rest"):
        for row in record["predictions"][quantity]["rows"]:
            if row["segment"] == "stop":
                row.update(status="outside validity", value=None, low=None, high=None)
    rows = table(record)
    assert rows[-1][1] == "NOT ASSESSED"
    assert rows[-1][2] != "NOT ASSESSED"
    assert "Stop: NOT ASSESSED, outside validity." in said(record)


def test_contact_speed_that_is_not_known_is_told_at_rest() -> None:
    record = sample_record(3)
    del record["predictions"]["contact_highest_speed"]
    assert "stop: speed of stop contact NOT ASSESSED (not computed)" in table(record)[-1][-1]


def test_stop_under_power_follows_the_planned_line() -> None:
    record = sample_record(3)
    record["plan"]["shutdown"]["powered"] = True
    rows = {row[0]: row for row in table(record)}
    assert rows["188 rpm (47.5 %)"][1] == "47.5 s"
    assert rows["150 rpm (38.0 %)"][1] == "57.1 s"
    assert said(record).startswith("Stop: the planned line, under power.")


def test_speed_above_the_beginning_of_the_stop_has_no_time() -> None:
    record = sample_record(3)
    stop = record["segments"][-1]
    stop["from_rad_s"] = to_si(300.0, "rpm")
    first = table(record)[0]
    assert first[1:3] == ["—", "0.0 s"]


@pytest.mark.parametrize("kind", ["stop", "hold"])
def test_run_without_a_stop_or_a_hold_still_prints(kind: str) -> None:
    record = sample_record(2)
    record["segments"] = [s for s in record["segments"] if s["kind"] != kind]
    text = said(record)
    assert ("the record holds no way to rest" in text) == (kind == "stop")
