"""A plain plotting area: scales, ticks, dashes, markers, hatching and labels that keep apart."""

from __future__ import annotations

import math
from dataclasses import dataclass
from typing import TYPE_CHECKING, Literal

from planner.paper.ink import REFERENCE, Face, clipped, width_of
from planner.paper.texts import shipped_fonts

if TYPE_CHECKING:
    from collections.abc import Sequence

    from reportlab.graphics.shapes import Drawing, Shape

LABEL = REFERENCE
Point = tuple[float, float]

Anchor = Literal["start", "middle", "end"]

DASHES: tuple[tuple[float, ...], ...] = (
    (),
    (7.0, 3.0),
    (2.0, 2.0),
    (9.0, 3.0, 2.0, 3.0),
    (12.0, 4.0),
    (5.0, 2.0, 1.0, 2.0, 1.0, 2.0),
)
_MARKERS = 5
_MARKER = 2.6
_MOST_TICKS = 10
_MINUTES_FROM_S = 300.0
_NICE = (1.0, 2.0, 2.5, 5.0, 10.0)


@dataclass(frozen=True)
class Area:
    """Where the plot lies on its drawing [pt] and which values its edges stand for."""

    left: float
    bottom: float
    width: float
    height: float
    x_range: tuple[float, float]
    y_range: tuple[float, float]

    def x(self, value: float) -> float:
        """Horizontal place of a value."""
        low, high = self.x_range
        return self.left + self.width * (value - low) / (high - low)

    def y(self, value: float) -> float:
        """Vertical place of a value."""
        low, high = self.y_range
        return self.bottom + self.height * (value - low) / (high - low)

    @property
    def right(self) -> float:
        """Right edge."""
        return self.left + self.width

    @property
    def top(self) -> float:
        """Upper edge."""
        return self.bottom + self.height


class Plot:
    """Draws on one area of a drawing, in black and greys."""

    def __init__(self, drawing: Drawing, area: Area) -> None:
        """Take a drawing and the area on it."""
        from reportlab.graphics import shapes  # noqa: PLC0415  # only charts pay

        shipped_fonts()
        self.drawing = drawing
        self.area = area
        self.shapes = shapes

    def line(
        self,
        points: Sequence[Point],
        width: float = 0.8,
        dash: tuple[float, ...] = (),
        grey: float = 0.0,
    ) -> None:
        """Draw a line through places on the drawing; a single place draws nothing."""
        from reportlab.lib.colors import Color  # noqa: PLC0415  # only charts pay

        if len(points) <= 1:
            return
        flat = [coordinate for point in points for coordinate in point]
        line = self.shapes.PolyLine(
            flat, strokeColor=Color(grey, grey, grey), strokeWidth=width, strokeLineJoin=1
        )
        if dash:
            line.strokeDashArray = list(dash)
        self.drawing.add(line)

    def text(
        self, place: Point, text: str, anchor: Anchor = "start", *, face: Face = LABEL
    ) -> None:
        """Write one line of text."""
        line = clipped(text, face, 1e4)
        self.drawing.add(
            self.shapes.String(
                *place, line, fontName=face.font, fontSize=face.size, textAnchor=anchor
            )
        )

    def fill(self, corners: Sequence[Point], grey: float) -> None:
        """Fill a closed shape with grey, without an outline."""
        from reportlab.lib.colors import Color  # noqa: PLC0415  # only charts pay

        flat = [coordinate for point in corners for coordinate in point]
        self.drawing.add(
            self.shapes.Polygon(flat, fillColor=Color(grey, grey, grey), strokeColor=None)
        )

    def hatch(self, start: float, end: float, pitch: float = 6.0) -> None:
        """Hatch an upright stretch between two horizontal places, within the area."""
        from reportlab.lib.colors import Color  # noqa: PLC0415  # only charts pay

        area = self.area
        start, end = max(start, area.left), min(end, area.right)
        if end <= start:
            return
        path = self.shapes.Path(
            strokeColor=Color(0.45, 0.45, 0.45), strokeWidth=0.4, fillColor=None
        )
        offset = (start + area.bottom) // pitch * pitch
        while offset < end + area.top:
            # the line x + y = offset, cut to the stretch
            x_low = max(start, offset - area.top)
            x_high = min(end, offset - area.bottom)
            if x_low < x_high:
                path.moveTo(x_low, offset - x_low)
                path.lineTo(x_high, offset - x_high)
            offset += pitch
        self.drawing.add(path)
        edges = (start, end) if end - start > pitch else ()
        for x in edges:
            self.line(((x, area.bottom), (x, area.top)), 0.6)

    def marker(self, place: Point, kind: int) -> None:
        """Draw one of five small hollow shapes."""
        from reportlab.lib.colors import black, white  # noqa: PLC0415  # only charts pay

        x, y = place
        corners = {1: (4, 45.0), 2: (3, 90.0), 3: (4, 0.0), 4: (3, 270.0)}.get(kind % _MARKERS)
        shape: Shape
        if corners is None:
            shape = self.shapes.Circle(x, y, _MARKER)
        else:
            n, first = corners
            flat: list[float] = []
            for i in range(n):
                angle = math.radians(first + 360.0 * i / n)
                flat += [x + 1.3 * _MARKER * math.cos(angle), y + 1.3 * _MARKER * math.sin(angle)]
            shape = self.shapes.Polygon(flat)
        shape.setProperties({"fillColor": white, "strokeColor": black, "strokeWidth": 0.8})
        self.drawing.add(shape)

    def border(self) -> None:
        """Draw the frame of the area."""
        area = self.area
        left, right, bottom, top = area.left, area.right, area.bottom, area.top
        corners = ((left, bottom), (right, bottom), (right, top), (left, top), (left, bottom))
        self.line(corners, 1.0)

    def x_axis(self, title: str) -> None:
        """Draw round ticks with their numbers, and the title with its unit."""
        area = self.area
        for value, label in ticks(*area.x_range):
            x = area.x(value)
            self.line(((x, area.bottom), (x, area.bottom - 4.0)))
            self.text((x, area.bottom - 14.0), label, "middle")
        self.text((0.5 * (area.left + area.right), area.bottom - 27.0), title, "middle")

    def y_axis(self, title: str) -> None:
        """Draw round ticks with their numbers, and the title with its unit above."""
        area = self.area
        most = max(2, int(area.height / 24.0))
        for value, label in ticks(*area.y_range, most=min(most, _MOST_TICKS)):
            y = area.y(value)
            self.line(((area.left, y), (area.left - 4.0, y)))
            self.text((area.left - 7.0, y - 3.2), label, "end")
        self.text((area.left - 34.0, area.top + 6.0), title)


def time_scale(last_s: float) -> tuple[str, float]:
    """Choose seconds or minutes for a time axis: the unit, and its length in seconds."""
    return ("min", 60.0) if last_s >= _MINUTES_FROM_S else ("s", 1.0)


def ticks(first_end: float, second_end: float, most: int = _MOST_TICKS) -> list[tuple[float, str]]:
    """Choose round values between two ends, with their labels.

    Example:
        >>> [label for _, label in ticks(0.0, 50.0, most=5)]
        ['0', '10', '20', '30', '40', '50']
    """
    low, high = min(first_end, second_end), max(first_end, second_end)
    rough = (high - low) / most
    scale = 10.0 ** math.floor(math.log10(rough))
    step = next(scale * nice for nice in _NICE if scale * nice >= rough * (1.0 - 1e-9))
    first = math.ceil(low / step - 1e-9)
    last = math.floor(high / step + 1e-9)
    return [(i * step, f"{i * step:.10g}".replace("-", "−")) for i in range(first, last + 1)]


def spread(places: Sequence[float], apart: float, low: float, high: float) -> list[float]:
    """Move places apart so that none is nearer to the next than asked, staying inside the ends.

    Where they do not all fit, they are spaced evenly over the whole stretch.

    Example:
        >>> spread([10.0, 11.0, 40.0], 8.0, 0.0, 100.0)
        [6.5, 14.5, 40.0]
    """
    order = sorted(range(len(places)), key=lambda i: places[i])
    if len(places) > 1 and (len(places) - 1) * apart > high - low:
        apart = (high - low) / (len(places) - 1)
    groups: list[tuple[float, int]] = []  # (centre, members), pushed together where they touch
    for i in order:
        centre, members = min(max(places[i], low), high), 1
        while groups and centre - groups[-1][0] < 0.5 * apart * (members + groups[-1][1]):
            other, count = groups.pop()
            centre = (other * count + centre * members) / (count + members)
            members += count
            half = 0.5 * apart * (members - 1)
            centre = min(max(centre, low + half), high - half)
        groups.append((centre, members))
    moved = [
        centre + apart * (j - 0.5 * (members - 1))
        for centre, members in groups
        for j in range(members)
    ]
    result = [0.0] * len(places)
    for i, place in zip(order, moved, strict=True):
        result[i] = place
    return result


def text_width(text: str) -> float:
    """Width of a chart label in points."""
    return width_of(text, LABEL)
