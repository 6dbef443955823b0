"""Type faces, measured widths and line breaking: where text becomes lines of known size."""

from __future__ import annotations

from dataclasses import dataclass
from functools import cache, lru_cache
from typing import TYPE_CHECKING

from planner.paper.texts import FONT_FILES, printable, shipped_fonts

if TYPE_CHECKING:
    from reportlab.pdfgen.canvas import Canvas

PLAIN, BOLD = tuple(FONT_FILES)
_TAB = "    "


@dataclass(frozen=True)
class Face:
    """A font at a size; the gap between lines is 25 to 33 % of the size."""

    font: str
    size: float
    leading: float

    @property
    def bold(self) -> Face:
        """The same size in bold."""
        return Face(BOLD, self.size, self.leading)


BODY = Face(PLAIN, 12.0, 15.5)
ABORT = Face(PLAIN, 14.0, 18.2)
HEADING = Face(BOLD, 14.0, 18.0)
REFERENCE = Face(PLAIN, 9.0, 11.5)
"""Running header, digests and chart labels: looked up, not read at the console."""


@cache
def character_widths() -> dict[str, dict[int, float]]:
    """For each font, the width of each character in thousandths of the size."""
    return {name: font.face.charWidths for name, font in shipped_fonts().items()}


def width_of(text: str, face: Face) -> float:
    """Measure one line of text in points."""
    widths = character_widths()[face.font]
    return sum(widths[ord(character)] for character in text) * face.size / 1000.0


@lru_cache(maxsize=4096)
def lines_of(text: str, face: Face, width: float) -> tuple[str, ...]:
    """Break text into lines no wider than ``width``; a longer word is broken inside.

    Raises:
        UnprintableError: the text holds characters that paper cannot show.
    """
    lines: list[str] = []
    for paragraph in printable(text).replace("\t", _TAB).split("\n"):
        lines.extend(_paragraph_lines(paragraph, face, width))
    return tuple(lines)


@lru_cache(maxsize=256)
def clipped(text: str, face: Face, width: float) -> str:
    """Shorten text to one line that fits, with an ellipsis where something was left out.

    Raises:
        UnprintableError: the text holds characters that paper cannot show.
    """
    line = " ".join(printable(text).split())
    if width_of(line, face) <= width:
        return line
    room = width - width_of("…", face)
    end = 0
    while end < len(line) and room >= 0.0:
        room -= width_of(line[end], face)
        end += 1
    return line[: end - 1].rstrip() + "…"


def draw_lines(
    canvas: Canvas, lines: tuple[str, ...], face: Face, place: tuple[float, float]
) -> None:
    """Draw lines downward; ``place`` is the left edge and the top of the first line."""
    left, top = place
    base = top - 0.5 * (face.leading + 0.69 * face.size)  # capitals centred in the line
    canvas.setFont(face.font, face.size)
    for i, line in enumerate(lines):
        if line:
            canvas.drawString(left, base - i * face.leading, line)


def _paragraph_lines(paragraph: str, face: Face, width: float) -> list[str]:
    lines: list[str] = []
    line = ""
    for word in paragraph.split(" "):
        joined = f"{line} {word}" if line else word
        if width_of(joined, face) <= width:
            line = joined
            continue
        if line:
            lines.append(line)
        pieces = _pieces(word, face, width)
        lines.extend(pieces[:-1])
        line = pieces[-1]
    lines.append(line)
    return lines


def _pieces(word: str, face: Face, width: float) -> list[str]:
    pieces = [""]
    for character in word:
        if pieces[-1] and width_of(pieces[-1] + character, face) > width:
            pieces.append("")
        pieces[-1] += character
    return pieces
