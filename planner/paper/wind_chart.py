"""The chart of one sector's wind gate: levels that pass and fail, gate, cap and planned wind."""

from __future__ import annotations

import re
from typing import TYPE_CHECKING

from planner.paper.ink import PLAIN
from planner.paper.plot import Area, Plot, spread, text_width

if TYPE_CHECKING:
    from collections.abc import Sequence

    from reportlab.graphics.shapes import Drawing

    from planner.paper.reading import Json, Reading

FAMILIES = ("starts", "stop", "aborts")
"""What is tried at each level of wind."""
_LEFT, _RIGHT, _BOTTOM, _TOP = 60.0, 150.0, 36.0, 30.0
_HALF = 4.0
_LEAST_M_S = 1.0
_MARK_GAP = 14.0


def levels_of(gate: Json, sector: Json) -> list[Json]:
    """Levels that were tried in a sector, calmest first."""
    found = [level for level in gate["levels"] if level["sector"] == sector["name"]]
    return sorted(found, key=lambda level: float(level["mean_m_s"]))


def families_failed(record: Json, level: Json) -> set[str]:
    """What fails at a level, by the places that its words name.

    A failure whose words name no place counts against all.
    """
    if level["passes"]:
        return set()
    ids = [s["id"] for s in record["segments"] if s["kind"] != "stop"]
    failed: set[str] = set()
    for words in level["fails"]:
        failed |= _families_in(words, ids)
    return failed or set(FAMILIES)


def _families_in(words: str, ids: Sequence[str]) -> set[str]:
    """Families that a failure is about: abort, a segment by its id, or the stop at the end."""
    if re.search(r"\babort", words):
        return {FAMILIES[2]}
    if any(re.search(rf"(?<![\w.]){re.escape(name)}(?![\w.])", words) for name in ids):
        return {FAMILIES[0]}
    if re.search(r"(\bat stop\b|^stop\b)", words):
        return {FAMILIES[1]}
    return set(FAMILIES)


def sector_drawing(
    reading: Reading, gate: Json, sector: Json, width: float, height: float
) -> Drawing:
    """Draw a sector: mean wind to the right, a row for starts, the stop and aborts each."""
    from reportlab.graphics.shapes import Drawing  # noqa: PLC0415  # only charts pay

    drawing = Drawing(width, height, initialFontName=PLAIN)
    levels = levels_of(gate, sector)
    lines = _uprights(reading, sector)
    most = max([*(float(v["mean_m_s"]) for v in levels), *(v for v, *_ in lines), _LEAST_M_S])
    area = Area(
        _LEFT,
        _BOTTOM,
        width - _LEFT - _RIGHT,
        height - _BOTTOM - _TOP,
        (0.0, 1.05 * most),
        (0.0, float(len(FAMILIES))),
    )
    plot = Plot(drawing, area)
    _draw_uprights(plot, lines)
    for i, family in enumerate(FAMILIES):
        y = area.y(len(FAMILIES) - i - 0.5)
        plot.text((area.left - 7.0, y - 3.0), family, "end")
        for level in levels:
            fails = family in families_failed(reading.record, level)
            _mark(plot, (area.x(level["mean_m_s"]), y), fails=fails)
    plot.border()
    plot.x_axis("mean wind at the anemometer [m/s]")
    _key(plot)
    return drawing


_Upright = tuple[float, str, float, tuple[float, ...]]
"""Wind, label, width and dashes."""


def _uprights(reading: Reading, sector: Json) -> list[_Upright]:
    """Lines at the planned wind, the gate and the rule book's cap."""
    lines: list[_Upright] = [
        (float(reading.plan["site"]["wind_mean_m_s"]), "planned", 1.0, (2.0, 2.0))
    ]
    if sector["mean_m_s"] is not None and sector["mean_m_s"] >= 0.0:
        lines.append((float(sector["mean_m_s"]), "GATE", 2.4, ()))
    cap = reading.book["wind_mean_cap_m_s"]
    if cap is not None:
        lines.append((float(cap), "cap", 1.4, (8.0, 3.0)))
    return lines


def _draw_uprights(plot: Plot, lines: Sequence[_Upright]) -> None:
    area = plot.area
    places = [area.x(value) for value, *_ in lines]
    widest = max(text_width(label) for _, label, *_ in lines)
    moved = spread(places, widest + 6.0, area.left + 10.0, area.right - 10.0)
    for place, at, (_, label, thick, dash) in zip(places, moved, lines, strict=True):
        plot.line(((place, area.bottom), (place, area.top)), thick, dash)
        plot.line(((place, area.top), (at, area.top + 6.0)), 0.4)
        plot.text((at, area.top + 9.0), label, "middle")


def _mark(plot: Plot, place: tuple[float, float], *, fails: bool) -> None:
    """A ring where a level passes, a black square where it fails."""
    if not fails:
        plot.marker(place, 0)
        return
    x, y = place
    corners = ((-_HALF, -_HALF), (_HALF, -_HALF), (_HALF, _HALF), (-_HALF, _HALF))
    plot.fill([(x + a, y + b) for a, b in corners], 0.0)


def _key(plot: Plot) -> None:
    area = plot.area
    x = area.right + 16.0
    for i, (words, fails) in enumerate((("passes", False), ("fails", True))):
        y = area.top - 10.0 - _MARK_GAP * i
        _mark(plot, (x, y), fails=fails)
        plot.text((x + 10.0, y - 3.0), words)
