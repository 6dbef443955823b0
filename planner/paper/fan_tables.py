"""Tables beside the fan chart: crossings, measured corrections, blade modes near stand modes."""

from __future__ import annotations

from typing import TYPE_CHECKING

from planner.paper import texts
from planner.paper.boxes import Box, gap, heading, paragraph
from planner.paper.fan_words import (
    NOT_COMPUTED,
    harmonic_text,
    is_absent,
    limit_text,
    missing_text,
    number_text,
)
from planner.paper.ink import BODY
from planner.paper.tables import Row, Table, fitted, plain_row, table_boxes

if TYPE_CHECKING:
    from planner.paper.pages import Frame
    from planner.paper.reading import Json, Reading

CROSSING, SPACING = "crossing_speed", "fixed_frame_spacing"
CORRECTION, RESIDUAL = "frequency_correction", "frequency_residual"
_NOT_MEASURED = "No frequency was measured: the allowance of the rule book holds in full."


def fan_table_boxes(reading: Reading, frame: Frame) -> list[Box]:
    """All tables that belong to the curves."""
    return [
        gap(),
        *_correction_boxes(reading, frame),
        gap(),
        *_spacing_boxes(reading, frame),
        gap(),
        *_crossing_boxes(reading, frame),
    ]


def _titled(frame: Frame, title: str, table: Table, rows: list[Row], none: str) -> list[Box]:
    """A table under its heading, or what is said in its place."""
    if rows:
        return [heading(title, frame.width), *table_boxes(fitted(table, rows), rows)]
    face = BODY.bold if texts.NOT_ASSESSED in none else BODY
    return [heading(title, frame.width), paragraph(none, frame.width, face)]


def _crossing_boxes(reading: Reading, frame: Frame) -> list[Box]:
    table = Table(
        frame.shares(34, 22, 44), ("Mode", "Harmonic", "Rotor speed where they meet (range)")
    )
    rows = [
        plain_row(
            row["mode"] or "all modes",
            harmonic_text(row["harmonic"]),
            number_text(reading, CROSSING, row),
        )
        for row in reading.rows_of(CROSSING)
    ]
    return _titled(frame, "Crossings", table, rows, f"Crossing speeds: {NOT_COMPUTED}.")


def _correction_boxes(reading: Reading, frame: Frame) -> list[Box]:
    plan = reading.plan
    measured: dict[str, list[Json]] = {}
    for where in ("rotor", "stand"):
        for one in plan[where].get("measured_modes") or ():
            measured.setdefault(one["mode"], []).append(one)
    table = Table(
        frame.shares(16, 32, 18, 17, 17),
        ("Mode", "Measured", "Source", "Correction", "Left open"),
    )
    rows = [
        plain_row(
            mode,
            "\n".join(_measured_text(one) for one in found),
            "; ".join(dict.fromkeys(one["source"] for one in found)),
            _correction_text(reading, mode),
            number_text(reading, RESIDUAL, _row_of(reading, RESIDUAL, mode)),
        )
        for mode, found in measured.items()
    ]
    return _titled(frame, "Measured frequencies", table, rows, _NOT_MEASURED)


def _measured_text(one: Json) -> str:
    speed = one["speed_rad_s"]
    at = f"at {texts.setting(speed, 'rpm')}" if speed else "at rest"
    pitch = f", pitch {texts.setting(one['collective_rad'], 'deg')}"
    accuracy = f"± {texts.setting(one['accuracy'], '%')}"
    return f"{texts.setting(one['frequency_rad_s'], 'Hz')} {accuracy} {at}{pitch}"


def _row_of(reading: Reading, quantity: str, mode: str) -> Json | None:
    """The row of a mode, or the one that says of all why there is none."""
    rows = reading.rows_of(quantity)
    own = (row for row in rows if row["mode"] == mode)
    return next(own, next((row for row in rows if not row["mode"]), None))


def _correction_text(reading: Reading, mode: str) -> str:
    row = _row_of(reading, CORRECTION, mode)
    text = number_text(reading, CORRECTION, row)
    is_up = row is not None and reading.shown_row(CORRECTION, row).value > 0.0
    return f"+{text}" if is_up else text


def _spacing_boxes(reading: Reading, frame: Frame) -> list[Box]:
    """The least distance of each pair over all holds."""
    table = Table(
        frame.shares(20, 34, 22, 10, 14),
        ("Blade mode", "Against", "Least distance", "At hold", "Limit"),
    )
    pairs: dict[tuple[str, str], list[Json]] = {}
    for row in reading.rows_of(SPACING):
        pairs.setdefault((row["mode"], row["harmonic"]), []).append(row)
    rows = [_pair_row(reading, pair, found) for pair, found in pairs.items()]
    title = "Blade modes as the stand sees them, against its modes"
    none = f"Distance of shifted blade modes from stand modes: {NOT_COMPUTED}."
    return _titled(frame, title, table, rows, none)


def _pair_row(reading: Reading, pair: tuple[str, str], found: list[Json]) -> Row:
    """What is not there outweighs every number."""
    real = [row for row in found if not is_absent(row)]
    if not real:
        text = missing_text(found[0], "")
        return plain_row(pair[0] or "all blade modes", pair[1] or "stand modes", text, "—", "—")
    worst = min(real, key=lambda row: _nearness(reading, row))
    shown = reading.shown_row(SPACING, worst)
    return plain_row(
        pair[0],
        pair[1],
        shown.text if shown.is_number else missing_text(worst, shown.why),
        worst["segment"],
        limit_text(reading, SPACING, "hold", pair[0]),
    )


def _nearness(reading: Reading, row: Json) -> tuple[bool, float]:
    shown = reading.shown_row(SPACING, row)
    return shown.is_number, shown.low
