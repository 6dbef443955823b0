"""The fan chart by itself: as PDF, as SVG and as a table of numbers."""

from __future__ import annotations

import csv
import io
from typing import TYPE_CHECKING

from planner.paper import texts
from planner.paper.banner import banner_of
from planner.paper.boxes import Box, Picture, gap, heading, new_page, paragraph
from planner.paper.fan_chart import curves, fan_drawing
from planner.paper.pages import frame_for, paginate, render
from planner.paper.reading import Json, Reading
from planner.paper.tables import Table, plain_row, table_boxes

if TYPE_CHECKING:
    from planner.paper.pages import Frame

_SVG_SIZE = (900.0, 560.0)


def fan_pdf(record: Json, paper: str = "a4") -> bytes:
    """Print the fan chart with its crossings.

    Args:
        record: a record of the present layout.
        paper: ``a4`` or ``letter``.

    Raises:
        UnprintableError: text holds characters that paper cannot show.
        ValueError: an unknown paper.
    """
    reading, frame = Reading(record), frame_for(paper)
    boxes = [*fan_boxes(reading, frame, "Fan chart"), new_page(), *_crossings(reading, frame)]
    return render(paginate(boxes, frame.height), frame, banner_of(reading, "Fan chart"))


def fan_svg(record: Json) -> str:
    """Draw the fan chart as an SVG picture; text in it is never markup."""
    from reportlab.graphics.renderSVG import drawToString  # noqa: PLC0415  # only SVG pays

    return str(drawToString(fan_drawing(Reading(record), *_SVG_SIZE)))


def fan_csv(record: Json) -> str:
    """Write the fan chart as a table, one row a rotor speed; what is not known says so."""
    reading = Reading(record)
    modes = curves(reading)
    harmonics = reading.record["series"]["fan"]["harmonics"]
    out = io.StringIO()
    writer = csv.writer(out, lineterminator="\n")
    writer.writerow(
        [
            "rotor speed [rpm]",
            *(f"{mode.name}{f' ({mode.doubt})' if mode.doubt else ''} [Hz]" for mode in modes),
            *(f"{n} per revolution [Hz]" for n in harmonics),
        ]
    )
    speeds = modes[0].speed_rpm if modes else ()
    for i, rpm in enumerate(speeds):
        frequencies = [mode.frequency_hz[i] for mode in modes]
        writer.writerow(
            [
                f"{rpm:.6g}",
                *(texts.NOT_ASSESSED if f is None else f"{f:.6g}" for f in frequencies),
                *(f"{n * rpm / 60.0:.6g}" for n in harmonics),
            ]
        )
    return out.getvalue()


def fan_boxes(reading: Reading, frame: Frame, title: str) -> list[Box]:
    """The chart on a page of its own."""
    room = frame.height - 60.0
    said = (
        "Rays nP: n times per revolution. Hatched: keep-out bands. Frequencies are uncoupled; a "
        "mode marked NOT ASSESSED has no known rotor mass fitted."
    )
    return [
        new_page(),
        heading(title, frame.width),
        paragraph(said, frame.width, keep_next=True),
        Picture(keep_next=False, drawing=fan_drawing(reading, frame.width, room)),
    ]


def _crossings(reading: Reading, frame: Frame) -> list[Box]:
    table = Table(
        frame.shares(34, 22, 44), ("Mode", "Harmonic", "Rotor speed where they meet (range)")
    )
    found = reading.record["predictions"].get("crossing_speed", {"rows": []})["rows"]
    rows = [
        plain_row(row["mode"] or "all modes", f"{row['harmonic']} per rev", _crossing_text(row))
        for row in found
    ]
    none = f"Crossing speeds: {texts.NOT_ASSESSED} (not computed)."
    return [
        heading("Crossings", frame.width),
        *(table_boxes(table, rows) or [paragraph(none, frame.width)]),
        gap(),
    ]


def _crossing_text(row: Json) -> str:
    ends = (row["value"], row["low"], row["high"])
    if row["status"] != "ok" or None in ends:
        return f"{texts.NOT_ASSESSED} ({row['status']})"
    return f"{texts.number(row['value'], 'rpm')} ({texts.span(row['low'], row['high'], 'rpm')})"
