"""The fan chart by itself: as PDF, as SVG and as a table of numbers."""

from __future__ import annotations

from typing import TYPE_CHECKING
from xml.sax.saxutils import escape

from planner.paper.banner import banner_of
from planner.paper.boxes import Box, Picture, heading, new_page, paragraph
from planner.paper.fan_chart import fan_drawing
from planner.paper.fan_csv import csv_text
from planner.paper.fan_panels import FAMILIES
from planner.paper.fan_tables import fan_table_boxes
from planner.paper.ink import BODY, HEADING, PLAIN, REFERENCE, clipped
from planner.paper.pages import FOOTING, frame_for, paginate, render
from planner.paper.reading import Json, Reading
from planner.paper.resonance_page import resonance_boxes

if TYPE_CHECKING:
    from reportlab.graphics.shapes import Drawing

    from planner.paper.pages import Banner, Frame

_SVG_WIDTH, _SVG_PANEL, _SVG_BANNER = 900.0, 470.0, 78.0
_SVG_TITLE, _SVG_ABOUT = "<title>...</title>", "<desc>...</desc>"
"""What the library writes in place of a title and of a description."""
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
    banner = banner_of(reading, "Fan chart")
    tall = len(FAMILIES) * _SVG_PANEL
    whole = Drawing(_SVG_WIDTH, tall + _SVG_BANNER, initialFontName=PLAIN)
    _draw_banner(whole, banner, tall)
    for i, family in enumerate(reversed(FAMILIES)):
        part = fan_drawing(reading, (family,), _SVG_WIDTH, _SVG_PANEL - 10.0)
        whole.add(Group(*part.contents, transform=(1, 0, 0, 1, 0, i * _SVG_PANEL)))
    title = escape(f"{banner.document}: {' '.join(banner.title.split())}")
    about = escape(f"{banner.verdict}. {banner.status}. {banner.reference}. {FOOTING}")
    drawn = str(drawToString(whole))
    drawn = drawn.replace(_SVG_TITLE, f"<title>{title}</title>", 1)
    return drawn.replace(_SVG_ABOUT, f"<desc>{about}</desc>", 1)


def _draw_banner(drawing: Drawing, banner: Banner, bottom: float) -> None:
    """What every page says of its document, above the panels."""
    from reportlab.graphics.shapes import String  # noqa: PLC0415  # only SVG pays

    left, width = 10.0, _SVG_WIDTH - 20.0
    lines = (
        (f"{banner.document}: {banner.title}", HEADING, 60.0),
        (f"{banner.verdict}  ·  {banner.status}", BODY.bold, 42.0),
        (banner.reference, REFERENCE, 27.0),
        (f"{FOOTING}  ·  {banner.maker}", REFERENCE, 14.0),
    )
    for text, face, up in lines:
        line = clipped(text, face, width)
        drawing.add(String(left, bottom + up, line, fontName=face.font, fontSize=face.size))


def fan_csv(record: Json) -> str:
    """Write the fan chart as tables of numbers; what is not known says so."""
    return csv_text(Reading(record))


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
