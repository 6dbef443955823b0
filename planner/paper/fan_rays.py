"""Rays of the harmonics on a panel of the fan chart, each named where its name hides nothing."""

from __future__ import annotations

import math
from bisect import bisect_left
from dataclasses import dataclass
from itertools import pairwise
from operator import itemgetter
from typing import TYPE_CHECKING

from planner.paper.plot import text_width

if TYPE_CHECKING:
    from collections.abc import Iterator, Sequence

    from planner.paper.plot import Area, Plot, Point

    Line = Sequence[Point]

_FROM_END, _STEP, _FURTHEST = 15.0, 6.0, 0.75
"""Where along a ray a name is tried: from its end inward [pt], up to this share of its length."""
_CLEAR, _CLEAR_OF_RAYS = 3.5, 0.5
"""Room around a name to curves with their markers, and to other rays [pt]."""
_GREY = 0.35


@dataclass(frozen=True)
class Name:
    """The box that a name takes."""

    text: str
    left: float
    bottom: float

    @property
    def right(self) -> float:
        """Right edge."""
        return self.left + text_width(self.text) + 2.0

    @property
    def top(self) -> float:
        """Upper edge."""
        return self.bottom + 10.0


def rays(area: Area, harmonics: Sequence[int]) -> dict[str, tuple[Point, Point]]:
    """Name and both ends of each ray, from the origin to where it leaves the chart."""
    found = {}
    for n in harmonics:
        end_rpm = min(area.x_range[1], 60.0 * area.y_range[1] / n)
        end = area.x(end_rpm), area.y(n * end_rpm / 60.0)
        found[f"{n}P"] = ((area.left, area.bottom), end)
    return found


def draw_rays(plot: Plot, harmonics: Sequence[int]) -> None:
    """Draw the rays alone; curves come on top of them."""
    for ray in rays(plot.area, harmonics).values():
        plot.line(ray, 0.5, grey=_GREY)


def name_rays(plot: Plot, harmonics: Sequence[int], curves: Sequence[Line]) -> None:
    """Name the rays on a white ground, on top of curves where no place is free of them.

    Args:
        plot: to draw on, with rays and curves drawn.
        harmonics: of the rays.
        curves: what the names should not hide, each with x growing along it.
    """
    found = rays(plot.area, harmonics)
    placed: list[Name] = []
    for text, ray in found.items():
        others = [other for name, other in found.items() if name != text]
        name = _placed(plot.area, (text, ray), (curves, others), placed)
        placed.append(name)
        left, right, bottom, top = name.left, name.right, name.bottom, name.top
        plot.fill(((left, bottom), (right, bottom), (right, top), (left, top)), 1.0)
        plot.text((left + 1.0, bottom + 2.0), text)


def _placed(
    area: Area,
    named: tuple[str, tuple[Point, Point]],
    around: tuple[Sequence[Line], Sequence[Line]],
    placed: Sequence[Name],
) -> Name:
    """The place nearest to the ray's end that hides nothing; else no curve, else the end."""
    curves, others = around
    places = list(_places(area, *named))
    clear = [name for name in places if not any(_overlap(name, one) for one in placed)]
    free = [name for name in clear if not any(_is_on(line, name, _CLEAR) for line in curves)]
    wholly = (n for n in free if not any(_is_on(ray, n, _CLEAR_OF_RAYS) for ray in others))
    return next(wholly, next(iter([*free, *clear, *places])))


def _places(area: Area, text: str, ray: tuple[Point, Point]) -> Iterator[Name]:
    """Places along a ray, inward from its end, all within the frame."""
    (x0, y0), (x1, y1) = ray
    length = max(1.0, math.dist(*ray))
    half = 0.5 * text_width(text) + 1.0
    for k in range(max(1, int((_FURTHEST * length - _FROM_END) / _STEP))):
        along = 1.0 - (_FROM_END + k * _STEP) / length
        x, y = x0 + along * (x1 - x0) - half, y0 + along * (y1 - y0) - 5.0
        yield Name(text, min(x, area.right - 2.0 * half - 1.0), min(y, area.top - 12.0))


def _overlap(one: Name, other: Name) -> bool:
    return (
        one.left < other.right
        and other.left < one.right
        and one.bottom < other.top
        and other.bottom < one.top
    )


def _is_on(line: Line, name: Name, clear: float) -> bool:
    """Whether a line whose x grows comes nearer to a name than asked."""
    left, right = name.left - clear, name.right + clear
    bottom, top = name.bottom - clear, name.top + clear
    first = max(0, bisect_left(line, left, key=itemgetter(0)) - 1)
    for (x0, y0), (x1, y1) in pairwise(line[first:]):
        if x0 > right:
            return False
        low, high = max(x0, left), min(x1, right)
        if low <= high and x1 > x0:
            ends = [y0 + (y1 - y0) * (x - x0) / (x1 - x0) for x in (low, high)]
            if min(ends) <= top and max(ends) >= bottom:
                return True
    return False
