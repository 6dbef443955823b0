"""The console test card: a pure function of the record."""

from __future__ import annotations

from typing import TYPE_CHECKING

from planner.paper.abort_sheet import abort_boxes, notes_boxes
from planner.paper.banner import banner_of
from planner.paper.boxes import Box, Picture, gap, heading, new_page, paragraph
from planner.paper.calls import rule_boxes
from planner.paper.closing import as_run_boxes, reentry_boxes, signature_boxes
from planner.paper.coast import coast_boxes
from planner.paper.course_chart import course_boxes
from planner.paper.fan import fan_boxes
from planner.paper.fan_tables import measured_boxes
from planner.paper.flap_chart import flap_drawing
from planner.paper.front import (
    configuration_boxes,
    prerequisite_boxes,
    run_boxes,
    weather_boxes,
)
from planner.paper.limits import finding_boxes, limit_boxes
from planner.paper.numbers import number_boxes
from planner.paper.pages import frame_for, paginate, render
from planner.paper.reading import Json, Reading
from planner.paper.resonance_page import resonance_boxes
from planner.paper.steps import step_boxes

if TYPE_CHECKING:
    from planner.paper.pages import Frame, Page

_GAP = 14.0


def card_pdf(record: Json, paper: str = "a4") -> bytes:
    """Print the test card of a record.

    The same record gives the same bytes within one set of locked libraries.

    Args:
        record: a record of the present layout, as ``planner.record.layout`` describes it.
        paper: ``a4`` or ``letter``.

    Raises:
        UnprintableError: text holds characters that paper cannot show.
        ValueError: an unknown paper, or a verdict that is none.
    """
    reading, frame = Reading(record), frame_for(paper)
    return render(card_pages(reading, frame), frame, banner_of(reading, "Test card"))


def card_pages(reading: Reading, frame: Frame) -> list[Page]:
    """Lay the card out; the ABORT sheet comes last, face and back on paper of its own."""
    pages = paginate(_body(reading, frame), frame.height)
    if len(pages) % 2:
        pages += paginate(notes_boxes(frame), frame.height)
    return pages + paginate(abort_boxes(reading, frame), frame.height)


def _body(reading: Reading, frame: Frame) -> list[Box]:
    parts = (
        run_boxes(reading, frame),
        configuration_boxes(reading, frame),
        prerequisite_boxes(reading, frame),
        weather_boxes(reading, frame),
        limit_boxes(reading, frame),
        finding_boxes(reading, frame),
        number_boxes(reading, frame),
        rule_boxes(frame),
        step_boxes(reading, frame),
        coast_boxes(reading, frame),
        reentry_boxes(frame),
        as_run_boxes(frame),
        fan_boxes(reading, frame, "13  Fan chart"),
        resonance_boxes(reading, frame),
        measured_boxes(reading, frame, is_short=True),
        _flap_boxes(reading, frame),
        course_boxes(reading, frame),
        signature_boxes(reading, frame),
    )
    return [box for part in parts for box in (*part, gap(_GAP))]


def _flap_boxes(reading: Reading, frame: Frame) -> list[Box]:
    said = (
        "Lowest and highest flap over each hold's window and the model allowance, from periodic "
        "states. Along ramps and in the stop the marched flap of the step rows holds."
    )
    drawing = flap_drawing(reading, frame.width, frame.height - 60.0)
    return [
        new_page(),
        heading("Flap range against the stops", frame.width, level=1),
        paragraph(said, frame.width, keep_next=True),
        Picture(keep_next=False, drawing=drawing),
    ]
