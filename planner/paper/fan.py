"""The fan chart by itself: as PDF, as SVG and as a table of numbers."""

from __future__ import annotations

import csv
import io
from typing import TYPE_CHECKING

from planner.paper import texts
from planner.paper.banner import banner_of
from planner.paper.boxes import Box, Picture, heading, new_page, paragraph
from planner.paper.fan_chart import fan_drawing
from planner.paper.fan_panels import FAMILIES, FRAMES, panels
from planner.paper.fan_tables import fan_table_boxes
from planner.paper.ink import PLAIN
from planner.paper.pages import frame_for, paginate, render
from planner.paper.reading import Json, Reading
from planner.paper.resonance_page import resonance_boxes

if TYPE_CHECKING:
    from planner.paper.fan_panels import Curve
    from planner.paper.pages import Frame

_SVG_WIDTH, _SVG_PANEL = 900.0, 470.0
_KEY = (
    "Rays nP: n times per revolution. Hatched: keep-out bands. Dotted uprights: speeds that are "
    "held. "
)
_COUPLED = "Blade modes: flap, lag and torsion coupled, named by what they are most like. "
_UNCOUPLED = "Blade modes are uncoupled. "
_DOUBT = "A mode marked NOT ASSESSED may not be read as known."
_ROUNDING = 1e-3


def fan_pdf(record: Json, paper: str = "a4") -> bytes:
    """Print the fan chart, a page for each of blade, stand and shaft modes, with its tables.

    Args:
        record: a record of the present layout.
        paper: ``a4`` or ``letter``.

    Raises:
        UnprintableError: text holds characters that paper cannot show.
        ValueError: an unknown paper.
    """
    reading, frame = Reading(record), frame_for(paper)
    boxes = [
        box
        for family in FAMILIES
        for box in _page(reading, frame, f"Fan chart: {family} modes", (family,))
    ]
    boxes += [*resonance_boxes(reading, frame, level=0), *fan_table_boxes(reading, frame)]
    return render(paginate(boxes, frame.height), frame, banner_of(reading, "Fan chart"))


def fan_svg(record: Json) -> str:
    """Draw the panels, one below the other, as an SVG picture; text in it is never markup."""
    from reportlab.graphics.renderSVG import drawToString  # noqa: PLC0415  # only SVG pays
    from reportlab.graphics.shapes import Drawing, Group  # noqa: PLC0415

    reading = Reading(record)
    whole = Drawing(_SVG_WIDTH, len(FAMILIES) * _SVG_PANEL, initialFontName=PLAIN)
    for i, family in enumerate(reversed(FAMILIES)):
        part = fan_drawing(reading, (family,), _SVG_WIDTH, _SVG_PANEL - 10.0)
        whole.add(Group(*part.contents, transform=(1, 0, 0, 1, 0, i * _SVG_PANEL)))
    return str(drawToString(whole))


def fan_csv(record: Json) -> str:
    """Write the fan chart as a table, one row a rotor speed; what is not known says so."""
    reading = Reading(record)
    found = panels(reading)
    curves = [(panel.family, curve) for panel in found for curve in panel.curves]
    harmonics = sorted({n for panel in found for n in panel.harmonics})
    out = io.StringIO()
    writer = csv.writer(out, lineterminator="\n")
    writer.writerow(
        [
            "rotor speed [rpm]",
            *(_column(family, curve) for family, curve in curves),
            *(f"{n} per revolution [Hz]" for n in harmonics),
        ]
    )
    speeds = curves[0][1].speed_rpm if curves else ()
    for i, rpm in enumerate(speeds):
        frequencies = [curve.frequency_hz[i] for _, curve in curves]
        writer.writerow(
            [
                f"{rpm:.6g}",
                *(texts.NOT_ASSESSED if f is None else f"{f:.6g}" for f in frequencies),
                *(f"{n * rpm / 60.0:.6g}" for n in harmonics),
            ]
        )
    return out.getvalue()


def _column(family: str, curve: Curve) -> str:
    """Head of a column: mode, what makes it doubtful, and the frame."""
    return f"{curve.label}, {FRAMES[family]} [Hz]"


def fan_boxes(reading: Reading, frame: Frame, title: str) -> list[Box]:
    """The chart for the card: a page for the blades, one for stand and shaft."""
    return [
        *_page(reading, frame, title, ("blade",)),
        *_page(reading, frame, "Fan chart: stand and shaft modes", ("stand", "shaft"), level=1),
    ]


def _page(
    reading: Reading, frame: Frame, title: str, families: tuple[str, ...], *, level: int = 0
) -> list[Box]:
    """Panels on a page of their own."""
    coupled = reading.record["series"]["fan"]["collective_rad"] is not None
    blades = (_COUPLED if coupled else _UNCOUPLED) if "blade" in families else ""
    above = [
        heading(title, frame.width, level=level),
        paragraph(f"{_KEY}{blades}{_DOUBT}", frame.width, keep_next=True),
    ]
    room = frame.height - sum(box.height for box in above) - _ROUNDING
    drawing = fan_drawing(reading, families, frame.width, room)
    return [new_page(), *above, Picture(keep_next=False, drawing=drawing)]
