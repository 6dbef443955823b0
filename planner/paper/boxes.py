"""Things of known height that are stacked down a page: text, headings, charts, blanks."""

from __future__ import annotations

from abc import ABC, abstractmethod
from dataclasses import dataclass, replace
from typing import TYPE_CHECKING

from planner.paper.ink import BODY, HEADING, Face, draw_lines, lines_of, width_of

if TYPE_CHECKING:
    from reportlab.graphics.shapes import Drawing
    from reportlab.pdfgen.canvas import Canvas

RULE, HAIR = 0.8, 0.3
"""Widths of rules in points."""

_TALLY = 17.0
_FEWEST_LINES = 2
_ROUNDING = 1e-6


@dataclass(frozen=True)
class Box(ABC):
    """One thing on a page; ``keep_next`` ties it to the page of the box after it."""

    keep_next: bool

    @property
    @abstractmethod
    def height(self) -> float:
        """Height in points."""

    @abstractmethod
    def draw(self, canvas: Canvas, left: float, top: float) -> None:
        """Draw with the given upper left corner."""

    def split(self, room: float) -> tuple[Box, Box] | None:  # noqa: ARG002  # most cannot
        """Divide into a part that fits the room and the rest, where that can be done."""
        return None


@dataclass(frozen=True)
class Gap(Box):
    """White space; dropped at the top of a page."""

    points: float

    @property
    def height(self) -> float:
        """Height in points."""
        return self.points

    def draw(self, canvas: Canvas, left: float, top: float) -> None:
        """Draw nothing."""


def gap(points: float = 8.0) -> Gap:
    """White space that stays with what follows."""
    return Gap(keep_next=True, points=points)


@dataclass(frozen=True)
class NewPage(Gap):
    """What follows starts a page."""


def new_page() -> NewPage:
    """End the page here, unless it is still empty."""
    return NewPage(keep_next=True, points=0.0)


@dataclass(frozen=True)
class Lines(Box):
    """A paragraph, already broken into lines."""

    lines: tuple[str, ...]
    face: Face
    indent: float = 0.0

    @property
    def height(self) -> float:
        """Height in points."""
        return len(self.lines) * self.face.leading + 2.0

    def draw(self, canvas: Canvas, left: float, top: float) -> None:
        """Draw the lines."""
        draw_lines(canvas, self.lines, self.face, (left + self.indent, top))

    def split(self, room: float) -> tuple[Box, Box] | None:
        """Divide between lines, leaving at least two on either side."""
        n = int((room - 2.0) / self.face.leading + _ROUNDING)
        n = min(n, len(self.lines) - _FEWEST_LINES)
        if n < _FEWEST_LINES:
            return None
        first = replace(self, lines=self.lines[:n], keep_next=False)
        return first, replace(self, lines=self.lines[n:])


def paragraph(text: str, width: float, face: Face = BODY, *, keep_next: bool = False) -> Lines:
    """Break text into a paragraph."""
    return Lines(keep_next=keep_next, lines=lines_of(text, face, width), face=face)


def numbered(mark: str, text: str, width: float, face: Face = BODY) -> Paired:
    """Set a paragraph beside a short mark, such as a number or a word to be defined."""
    indent = width_of(mark + "  ", face.bold)
    body = Lines(keep_next=False, lines=lines_of(text, face, width - indent), face=face)
    return Paired(keep_next=False, mark=mark, body=body, indent=indent)


@dataclass(frozen=True)
class Paired(Box):
    """A bold mark with a paragraph beside it."""

    mark: str
    body: Lines
    indent: float

    @property
    def height(self) -> float:
        """Height in points."""
        return self.body.height + 1.0

    def draw(self, canvas: Canvas, left: float, top: float) -> None:
        """Draw the mark and the paragraph."""
        draw_lines(canvas, (self.mark,), self.body.face.bold, (left, top))
        self.body.draw(canvas, left + self.indent, top)


@dataclass(frozen=True)
class Heading(Box):
    """A heading that the outline lists; it never stands last on a page."""

    lines: tuple[str, ...]
    title: str
    level: int
    face: Face

    @property
    def height(self) -> float:
        """Height in points."""
        return len(self.lines) * self.face.leading + 5.0

    def draw(self, canvas: Canvas, left: float, top: float) -> None:
        """Draw the heading and enter it in the outline."""
        draw_lines(canvas, self.lines, self.face, (left, top))
        key = f"{canvas.getPageNumber()}.{top:.2f}"
        canvas.bookmarkHorizontal(key, 0, top)
        canvas.addOutlineEntry(self.title, key, level=self.level, closed=self.level > 0)


def heading(text: str, width: float, level: int = 0, face: Face = HEADING) -> Heading:
    """Make a heading; level 0 is a part of the card, 1 a piece of a part."""
    title = " ".join(text.split())
    lines = lines_of(title, face, width)
    return Heading(keep_next=True, lines=lines, title=title, level=level, face=face)


@dataclass(frozen=True)
class Picture(Box):
    """A chart."""

    drawing: Drawing

    @property
    def height(self) -> float:
        """Height in points."""
        return float(self.drawing.height)

    def draw(self, canvas: Canvas, left: float, top: float) -> None:
        """Draw the chart."""
        from reportlab.graphics import renderPDF  # noqa: PLC0415  # only charts pay

        renderPDF.draw(self.drawing, canvas, left, top - self.height)


@dataclass(frozen=True)
class Ruled(Box):
    """Empty ruled lines for handwriting."""

    n_lines: int
    width: float
    pitch: float = 24.0

    @property
    def height(self) -> float:
        """Height in points."""
        return self.n_lines * self.pitch + 4.0

    def draw(self, canvas: Canvas, left: float, top: float) -> None:
        """Draw the lines."""
        canvas.setLineWidth(HAIR)
        for i in range(1, self.n_lines + 1):
            y = top - i * self.pitch
            canvas.line(left, y, left + self.width, y)


@dataclass(frozen=True)
class Tally(Box):
    """A numbered box for each repeat, to be ticked off."""

    repeats: int
    width: float

    @property
    def _a_row(self) -> int:
        return max(1, int(self.width / (2.0 * _TALLY)))

    @property
    def height(self) -> float:
        """Height in points."""
        return -(-self.repeats // self._a_row) * (_TALLY + 5.0) + 3.0

    def draw(self, canvas: Canvas, left: float, top: float) -> None:
        """Draw the boxes."""
        canvas.setLineWidth(RULE)
        for i in range(self.repeats):
            row, column = divmod(i, self._a_row)
            x, y = left + 2.0 * _TALLY * column, top - (row + 1) * (_TALLY + 5.0) + 3.0
            canvas.rect(x, y, 2.0 * _TALLY - 3.0, _TALLY + 2.0)
            draw_lines(canvas, (str(i + 1),), BODY, (x + 2.0, y + _TALLY))
