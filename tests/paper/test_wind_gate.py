from __future__ import annotations

import csv
import io
from functools import cache
from typing import TYPE_CHECKING

import pypdf
import pytest
from reportlab.graphics.shapes import Circle, Polygon, String

from planner.paper.front import weather_boxes
from planner.paper.pages import frame_for
from planner.paper.reading import Reading
from planner.paper.tables import TableRow
from planner.paper.wind_chart import families_failed, sector_drawing
from planner.paper.wind_page import wind_csv, wind_pdf
from tests.paper.sample_record import Json, sample_record

if TYPE_CHECKING:
    from planner.paper.boxes import Box

FRAME = frame_for("a4")


def gate_of(record: Json) -> Json:
    levels = [level("field", mean, fails=[]) for mean in (0.0, 2.0, 4.0)]
    fails = ["up-stop-peak at abort from 1.1h, controls frozen", "droop-stop-peak at 1.1r"]
    levels.append(level("field", 6.0, fails=fails))
    levels += [level("wood", mean, fails=[]) for mean in (0.0, 2.0)]
    return {
        "kept_for": record["meaning_digest"], "step_m_s": 2.0, "averaging_time_s": 120.0,
        "anemometer_error_m_s": 0.3, "verdict": "Planned wind is inside the gate",
        "sectors": [
            sector("field", 3.7, 5.55, "up-stop-peak", first=6.0, at_cap=False),
            sector("wood", 8.0, 11.0, "cap of the rule book", first=None, at_cap=True),
        ],
        "levels": levels,
    }  # fmt: skip


def level(name: str, mean: float, fails: list[str]) -> Json:
    gust = 1.5 * mean
    return {"sector": name, "mean_m_s": mean, "gust_m_s": gust, "passes": not fails,
            "fails": fails}  # fmt: skip


def sector(
    name: str, mean: float, gust: float, limited_by: str, *, first: float | None, at_cap: bool
) -> Json:
    return {"name": name, "mean_m_s": mean, "gust_m_s": gust, "limited_by": limited_by,
            "first_failure_mean_m_s": first, "at_cap": at_cap}  # fmt: skip


def text_of(boxes: list[Box]) -> str:
    words: list[str] = []
    for box in boxes:
        if isinstance(box, TableRow):
            words += [line for cell in box.lines for line, _ in cell]
        else:
            words += getattr(box, "lines", ())
    return " ".join(words).replace("\xa0", " ")


@cache
def printed() -> tuple[str, ...]:
    record = sample_record(2)
    pages = pypdf.PdfReader(io.BytesIO(wind_pdf(record, gate_of(record)))).pages
    return tuple(" ".join(page.extract_text().split()) for page in pages)


def test_card_prints_a_gate_that_is_kept_for_this_plan() -> None:
    record = sample_record(2)
    record["wind_gate"] = gate_of(record)
    text = text_of(weather_boxes(Reading(record), FRAME))
    for part in (
        "Computed wind gate",
        "Planned wind is inside the gate.",
        "3.7 m/s (7.19 kt)",
        "5.5 m/s (10.7 kt)",
        "up-stop-peak; first fails at 6.0 m/s",
        "cap of the rule book; no failure up to the cap",
        "over 2 min; its error of 0.3 m/s is taken off already",
        "Above the gate, the planned wind or the cap at any time: no start",
    ):
        assert part in text
    assert "No computed wind gate" not in text


@pytest.mark.parametrize("kept_for", [None, "another plan"])
def test_card_prints_no_gate_of_another_plan(kept_for: str | None) -> None:
    record = sample_record(2)
    record["wind_gate"] = None if kept_for is None else gate_of(record) | {"kept_for": kept_for}
    text = text_of(weather_boxes(Reading(record), FRAME))
    assert "No computed wind gate is kept for this plan" in text
    assert "Above the planned wind or the cap at any time: no start" in text
    assert "3.7 m/s" not in text


def test_gate_that_is_shut_and_gate_without_sectors_stop_the_run() -> None:
    record = sample_record(2)
    record["wind_gate"] = gate = gate_of(record)
    gate["sectors"][0].update(mean_m_s=None, gust_m_s=None)
    assert "field none: no start none: no start" in text_of(weather_boxes(Reading(record), FRAME))
    gate["sectors"] = []
    text = text_of(weather_boxes(Reading(record), FRAME))
    assert "NOT ASSESSED: the gate holds no sector. Do not run." in text


def test_sector_is_printed_with_its_bearings() -> None:
    record = sample_record(2)
    record["wind_gate"] = gate_of(record)
    record["plan"]["site"]["sectors"] = [
        {"name": "field", "from_rad": 0.0, "to_rad": 1.5707963268}
    ]
    assert "field (0° to 90°)" in text_of(weather_boxes(Reading(record), FRAME))


def test_page_shows_gate_limit_cautions_and_a_chart_a_sector() -> None:
    text = " ".join(printed())
    for part in (
        "Wind gate",
        "Gate: mean 3.7 m/s (7.19 kt), gust 5.5 m/s (10.7 kt)",
        "At 6.0 m/s: up-stop-peak at abort from 1.1h, controls frozen; droop-stop-peak at 1.1r.",
        "not clearance to start",
        "nothing above the cap",
    ):
        assert part in text
    assert text.count("mean wind at the anemometer [m/s]") == 2
    assert text.count("GATE") == 2


def test_chart_tells_pass_from_fail_without_colour() -> None:
    record = sample_record(2)
    gate = gate_of(record)
    drawing = sector_drawing(Reading(record), gate, gate["sectors"][0], 700.0, 150.0)
    rings = sum(isinstance(shape, Circle) for shape in drawing.contents)
    squares = sum(isinstance(shape, Polygon) for shape in drawing.contents)
    assert rings == 3 * 3 + 1 + 1  # passing levels, the stop at the failing one, the key
    assert squares == 2 + 1
    labels = {shape.text for shape in drawing.contents if isinstance(shape, String)}
    assert {"starts", "stop", "aborts", "passes", "fails", "planned", "GATE", "cap"} <= labels
    left, bottom, right, top = drawing.getBounds()
    assert left >= -1.0
    assert bottom >= -1.0
    assert right <= 701.0
    assert top <= 151.0


@pytest.mark.parametrize(
    ("words", "families"),
    [
        (["droop-stop-peak at 1.1r"], {"starts"}),
        (["no-contact-at-speed at stop"], {"stop"}),
        (["lag-travel at abort from 1.1r, brake lost"], {"aborts"}),
        (["the droop stop is met"], {"starts", "stop", "aborts"}),
        ([], {"starts", "stop", "aborts"}),
    ],
)
def test_failure_counts_where_its_words_say_or_everywhere(
    words: list[str], families: set[str]
) -> None:
    failing = level("field", 6.0, fails=words) | {"passes": False}
    assert families_failed(sample_record(2), failing) == families


def test_table_has_every_level_with_the_gate_of_its_sector() -> None:
    record = sample_record(2)
    rows = list(csv.reader(io.StringIO(wind_csv(record, gate_of(record)))))
    assert rows[0][:4] == ["sector", "mean wind [m/s]", "gust [m/s]", "result"]
    assert len(rows) == 1 + 6
    assert len({len(row) for row in rows}) == 1
    assert rows[4][:7] == ["field", "6", "9", "fails", "fails", "passes", "fails"]
    assert rows[4][8:] == ["3.7", "5.55", "up-stop-peak"]


def test_gate_of_another_plan_is_refused() -> None:
    record = sample_record(2)
    gate = gate_of(record) | {"kept_for": "0" * 64}
    with pytest.raises(ValueError, match=r"wind gate: expected one that was computed for this"):
        wind_pdf(record, gate)
    with pytest.raises(ValueError, match=r"found one of a plan with digest 000000000000; compute"):
        wind_csv(record, gate)
