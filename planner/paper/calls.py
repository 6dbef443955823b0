"""The build-up rule and the calls, defined for this card."""

from __future__ import annotations

from dataclasses import replace
from typing import TYPE_CHECKING

from planner.paper.boxes import Box, gap, heading, numbered, paragraph
from planner.paper.ink import BODY

if TYPE_CHECKING:
    from planner.paper.pages import Frame


def rule_boxes(frame: Frame) -> list[Box]:
    """The build-up rule and the calls, defined for this card."""
    boxes: list[Box] = [
        heading("8  Build-up rule and calls", frame.width),
        paragraph(
            "Build-up rule: the next row is begun only when the data of this row have been "
            "checked and CONTINUE has been called. Rows are run in order; none is left out.",
            frame.width,
            BODY.bold,
            keep_next=True,
        ),
        gap(4.0),
    ]
    calls = [numbered(word, text, frame.width) for word, text in CALLS]
    return [*boxes, *(replace(call, keep_next=True) for call in calls[:-1]), calls[-1]]


CALLS = (
    ("CONTINUE", "data good, nobody objects: begin the next row."),
    (
        "HOLD",
        "keep rotor speed and pitch as they are, change nothing, and say why. Inside a "
        "PASS WITHOUT STOPPING band: first leave the band in the direction of travel, then hold. "
        "Ends with CONTINUE or STOP TEST.",
    ),
    (
        "STOP TEST",
        "nobody is in danger, but the test or its data are no good: recover by the stop row of "
        "this card, and say why.",
    ),
    (
        "ABORT, ABORT, ABORT",
        "danger, or safety can no longer be confirmed because a reading that it depends on is "
        "lost: everyone acts at once by the ABORT sheet; the reason is given afterwards.",
    ),
)
