"""Where modes meet harmonics: one row a mode, one column a harmonic."""

from __future__ import annotations

from typing import TYPE_CHECKING

from planner.paper import texts
from planner.paper.boxes import Box, gap, heading, paragraph
from planner.paper.fan_panels import panels
from planner.paper.fan_words import NOT_COMPUTED, harmonic_text, is_absent, missing_text
from planner.paper.ink import BODY, REFERENCE
from planner.paper.tables import Row, Table, fitted, plain_row, table_boxes

if TYPE_CHECKING:
    from collections.abc import Sequence

    from planner.paper.ink import Face
    from planner.paper.pages import Frame
    from planner.paper.reading import Json, Reading

CROSSING = "crossing_speed"
_UNIT = "rpm"
_GIVEN = ("stand", "shaft")
"""Families that share a table; blade modes have their own harmonics."""
_MODE_SHARE = 1.5
_NONE = "—"


def crossing_boxes(reading: Reading, frame: Frame) -> list[Box]:
    """Both tables, and in words what stands in no column."""
    title = heading("Crossings", frame.width)
    rows = reading.rows_of(CROSSING)
    if not rows:
        return [title, paragraph(f"Crossing speeds: {NOT_COMPUTED}.", frame.width, BODY.bold)]
    boxes: list[Box] = [title, paragraph(_key(reading), frame.width, keep_next=True)]
    for side in (False, True):
        boxes += _table_boxes(frame, _of(reading, rows, given=side))
    for text, face in _said(rows):
        boxes += [gap(3.0), paragraph(text, frame.width, face)]
    return boxes


def _key(reading: Reading) -> str:
    speeds = [s for s in reading.record["series"]["fan"]["speed_rad_s"] if s is not None]
    top = f" up to {texts.number(max(speeds), _UNIT, 'down')}" if speeds else ""
    return (
        "Rotor speeds [rpm] where a mode meets n per revolution, in brackets their range over the "
        f"allowance; {_NONE}: they do not meet{top}; blank: not looked at."
    )


def _of(
    reading: Reading, rows: Sequence[Json], *, given: bool
) -> dict[str, dict[str, list[str] | None]]:
    """Crossings by mode and harmonic, of the blades or of what stands still; None: none found."""
    found: dict[str, dict[str, list[str] | None]] = {}
    for panel in panels(reading):
        own = (c for c in panel.curves if not c.is_shifted and (panel.family in _GIVEN) is given)
        for curve in own:
            is_known = texts.NOT_ASSESSED not in curve.doubt and None not in curve.frequency_hz
            if is_known and not _is_open(rows, curve.name):
                found[curve.name] = dict.fromkeys(map(str, panel.harmonics))
    for row in rows:
        if row["mode"] and row["harmonic"] and _is_given(row["mode"]) is given:
            cells = found.setdefault(row["mode"], {})
            cells[row["harmonic"]] = [*(cells.get(row["harmonic"]) or ()), _text(reading, row)]
    return found


def _is_given(mode: str) -> bool:
    return mode.split(maxsplit=1)[0] in _GIVEN


def _is_open(rows: Sequence[Json], mode: str) -> bool:
    """Whether a row says of all harmonics of a mode, or of all modes, why nothing is known."""
    return any(row["mode"] in {"", mode} and not row["harmonic"] for row in rows)


def _text(reading: Reading, row: Json) -> str:
    shown = reading.shown_row(CROSSING, row)
    if not shown.is_number:
        return missing_text(row, shown.why)
    value = _bare(texts.number(shown.value, _UNIT))
    if shown.low == shown.high:
        return value
    return f"{value} ({_bare(texts.span(shown.low, shown.high, _UNIT)).replace(' to ', '–')})"


def _bare(text: str) -> str:
    """A speed whose unit the key gives."""
    return text.removesuffix(f"{texts.GLUE}{_UNIT}")


def _table_boxes(frame: Frame, found: dict[str, dict[str, list[str] | None]]) -> list[Box]:
    harmonics = sorted({n for cells in found.values() for n in cells}, key=int)
    if not harmonics:
        return []
    table = Table(
        frame.shares(_MODE_SHARE, *(1.0 for _ in harmonics)),
        ("Mode", *map(harmonic_text, harmonics)),
        REFERENCE,
    )
    rows = [_row(mode, cells, harmonics) for mode, cells in found.items()]
    return [gap(3.0), *table_boxes(fitted(table, rows), rows)]


def _row(mode: str, cells: dict[str, list[str] | None], harmonics: Sequence[str]) -> Row:
    told = ("" if n not in cells else "\n".join(cells[n] or (_NONE,)) for n in harmonics)
    return plain_row(mode, *told)


def _said(rows: Sequence[Json]) -> list[tuple[str, Face]]:
    """Rows that belong to no column: modes, or all of them, of which nothing is known."""
    return [
        (
            f"{row['mode'] or 'All modes'}: {missing_text(row, NOT_COMPUTED)}.",
            BODY if is_absent(row) else BODY.bold,
        )
        for row in rows
        if not (row["mode"] and row["harmonic"])
    ]
