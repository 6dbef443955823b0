"""Flap over rotor speed along starts and the stop, in the worst marched cases."""

from __future__ import annotations

from typing import TYPE_CHECKING, Any

from planner.paper.boxes import Box, Picture, heading, new_page, paragraph
from planner.paper.ink import PLAIN
from planner.paper.plot import DASHES, Area, Plot
from planner.units import from_si

if TYPE_CHECKING:
    from collections.abc import Sequence

    from reportlab.graphics.shapes import Drawing

    from planner.paper.pages import Frame
    from planner.paper.reading import Json, Reading

QUANTITY = "flap_course_marched"
_LEFT, _RIGHT, _BOTTOM, _TOP = 44.0, 96.0, 34.0, 24.0
_SAID = (
    "Of all blades, stretch by stretch: grey, the case with the highest flap; dashed, the case "
    "with the lowest. Start to the right, stop to the left. The extremes over all gusts, both "
    "ends of the air load allowance and every blade are the marched numbers of the step rows."
)


def course_boxes(reading: Reading, frame: Frame) -> list[Box]:
    """The page of these charts; none where nothing was marched from or to rest."""
    courses = _courses(reading)
    if not courses:
        return []
    height = (frame.height - 90.0) / len(courses)
    boxes: list[Box] = [
        new_page(),
        heading("Start and stop in the worst gusts", frame.width, level=1),
        paragraph(_SAID, frame.width, keep_next=True),
    ]
    for segment, cases in courses.items():
        drawing = course_drawing(reading, (segment, cases), frame.width, min(height, 300.0))
        boxes.append(Picture(keep_next=False, drawing=drawing))
    return boxes


def _courses(reading: Reading) -> dict[str, dict[str, list[Json]]]:
    """Assessed rows by segment and case, in the order of time."""
    found: dict[str, dict[str, list[Json]]] = {}
    for row in reading.rows_of(QUANTITY):
        if row["status"] == "ok":
            found.setdefault(row["segment"], {}).setdefault(row["mode"], []).append(row)
    return found


def course_drawing(
    reading: Reading,
    course: tuple[str, dict[str, list[Json]]],
    width: float,
    height: float,
) -> Drawing:
    """Draw one start or stop.

    Args:
        reading: the record.
        course: id of the segment, and rows of its cases.
        width: of the drawing [pt].
        height: of the drawing [pt].
    """
    from reportlab.graphics.shapes import Drawing  # noqa: PLC0415  # only charts pay

    segment, cases = course
    drawing = Drawing(width, height, initialFontName=PLAIN)
    every = [row for rows in cases.values() for row in rows]
    stops = _stops(reading)
    angles = [from_si(row[end], "deg") for row in every for end in ("low", "high")]
    angles += [from_si(angle, "deg") for _, angle in stops]
    margin = max(1.0, 0.1 * (max(angles) - min(angles)))
    top = max(from_si(row["speed_rad_s"], "rpm") for row in every) * 1.02
    area = Area(
        _LEFT,
        _BOTTOM,
        width - _LEFT - _RIGHT,
        height - _BOTTOM - _TOP,
        (0.0, max(top, 1.0)),
        (min(angles) - margin, max(angles) + margin),
    )
    plot = Plot(drawing, area)
    _draw_cases(plot, list(cases.values()))
    for words, angle in stops:
        y = area.y(from_si(angle, "deg"))
        plot.line([(area.left, y), (area.right, y)], 1.6, (8.0, 3.0))
        plot.text((area.right + 6.0, y - 3.0), words)
    plot.border()
    plot.x_axis("rotor speed [rpm]")
    plot.y_axis("flap [°]")
    plot.text((area.left, area.top + 8.0), f"segment {segment}")
    return drawing


def _draw_cases(plot: Plot, cases: Sequence[Sequence[Json]]) -> None:
    """The first case as a grey band, the others as dashed lines."""
    area = plot.area
    for number, rows in enumerate(cases):
        places = [area.x(from_si(row["speed_rad_s"], "rpm")) for row in rows]
        low, high = (
            [(x, area.y(from_si(row[end], "deg"))) for x, row in zip(places, rows, strict=True)]
            for end in ("low", "high")
        )
        if number == 0:
            plot.fill([*low, *high[::-1]], 0.8)
        dash = DASHES[min(number, len(DASHES) - 1)]
        plot.line(low, 1.0, dash)
        plot.line(high, 1.0, dash)


def _stops(reading: Reading) -> list[tuple[str, float]]:
    """Stops of the rotor: words and angle [rad]."""
    rotor: dict[str, Any] = reading.plan["rotor"]
    droop, up = rotor["droop_stop"], rotor["up_stop"]
    found = []
    if droop is not None:
        found.append(("droop stop", droop["angle_rad"]))
        if droop["retraction"] is not None:
            found.append(("retracted", droop["retraction"]["retracted_angle_rad"]))
    if up is not None:
        found.append(("up stop", up["angle_rad"]))
    return found
