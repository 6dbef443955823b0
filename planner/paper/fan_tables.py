"""Tables beside the fan chart: crossings, measured corrections, blade modes near stand modes."""

from __future__ import annotations

from typing import TYPE_CHECKING

from planner.model.results import Status
from planner.paper import texts
from planner.paper.boxes import Box, gap, heading, paragraph
from planner.paper.crossing_table import crossing_boxes
from planner.paper.fan_words import (
    EXEMPT,
    NO_HAND,
    NOT_COMPUTED,
    exempting_damping,
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

SPACING = "fixed_frame_spacing"
CORRECTION, RESIDUAL = "frequency_correction", "frequency_residual"
_REACH = (
    "The correction counts up to the highest speed of measuring; below the lowest the rule book's "
    "allowance on the uncorrected model counts too, beyond the highest what the squared frequency "
    "gains keeps that allowance."
)
_SPACING_KEY = (
    "Least distance: over the holds where no damping exempts, or over all where it always does. "
    "Damping that exempts counts dampers in order."
)
_NOT_MEASURED = "No frequency was measured: the allowance of the rule book holds in full."


def fan_table_boxes(reading: Reading, frame: Frame) -> list[Box]:
    """All tables that belong to the curves."""
    return [
        gap(),
        *measured_boxes(reading, frame),
        gap(),
        *_spacing_boxes(reading, frame),
        gap(),
        *crossing_boxes(reading, frame),
    ]


def measured_boxes(reading: Reading, frame: Frame, *, is_short: bool = False) -> list[Box]:
    """What was measured of each mode, the correction, and what it leaves open.

    Args:
        reading: the record.
        frame: of the page.
        is_short: for the card: without sources, and nothing where nothing was measured.
    """
    measured = _measured(reading)
    if not measured and is_short:
        return []
    title = heading("Measured frequencies", frame.width, level=1 if is_short else 0)
    if not measured:
        return [title, paragraph(_NOT_MEASURED, frame.width)]
    columns = [
        ("Mode", 16, list(measured)),
        ("Measured", 32, ["\n".join(map(_measured_text, found)) for found in measured.values()]),
        ("Source", 18, [_sources_text(found) for found in measured.values()]),
        ("Correction", 17, [_correction_text(reading, mode) for mode in measured]),
        ("Left open", 17, [_known_text(reading, RESIDUAL, mode) for mode in measured]),
    ]
    heads, shares, cells = zip(
        *(c for c in columns if not (is_short and c[0] == "Source")), strict=True
    )
    table = Table(frame.shares(*shares), heads)
    rows = [plain_row(*one) for one in zip(*cells, strict=True)]
    return [
        title,
        *table_boxes(fitted(table, rows), rows),
        gap(3.0),
        paragraph(_REACH, frame.width),
    ]


def _measured(reading: Reading) -> dict[str, list[Json]]:
    """Measurements by mode."""
    found: dict[str, list[Json]] = {}
    for where in ("rotor", "stand"):
        for one in reading.plan[where].get("measured_modes") or ():
            found.setdefault(one["mode"], []).append(one)
    return found


def _measured_text(one: Json) -> str:
    speed = one["speed_rad_s"]
    at = f"at {texts.setting(speed, 'rpm')}" if speed else "at rest"
    pitch = f", pitch {texts.setting(one['collective_rad'], 'deg')}"
    accuracy = f"± {texts.setting(one['accuracy'], '%')}"
    return f"{texts.setting(one['frequency_rad_s'], 'Hz')} {accuracy} {at}{pitch}"


def _sources_text(found: list[Json]) -> str:
    return "; ".join(dict.fromkeys(one["source"] for one in found))


def _row_of(reading: Reading, quantity: str, mode: str) -> Json | None:
    """The row of a mode, or the one that says of all why there is none.

    What was measured is never "not measured": such a row does not count.
    """
    rows = reading.rows_of(quantity)
    own = (row for row in rows if row["mode"] == mode)
    standing = (row for row in rows if not row["mode"] and not is_absent(row))
    return next(own, next(standing, None))


def _known_text(reading: Reading, quantity: str, mode: str) -> str:
    """A number of a measured mode, or what is wrong with its frequency."""
    row = _row_of(reading, quantity, mode)
    told = (f for f in reading.rows_of("mode_frequency") if f["mode"] == mode)
    fault = next((f for f in told if f["status"] != Status.OK.value), None)
    if row is None and fault is not None:
        return missing_text(fault, "")
    return number_text(reading, quantity, row)


def _correction_text(reading: Reading, mode: str) -> str:
    text = _known_text(reading, CORRECTION, mode)
    row = _row_of(reading, CORRECTION, mode)
    is_up = row is not None and reading.shown_row(CORRECTION, row).value > 0.0
    return f"+{text}" if is_up else text


def _spacing_boxes(reading: Reading, frame: Frame) -> list[Box]:
    """The least distance of each pair over all holds."""
    title = heading("Blade modes as the stand sees them, against its modes", frame.width)
    pairs: dict[tuple[str, str], list[Json]] = {}
    for row in reading.rows_of(SPACING):
        pairs.setdefault((row["mode"], row["harmonic"]), []).append(row)
    if not pairs:
        none = f"Distance of shifted blade modes from stand modes: {NOT_COMPUTED}."
        return [title, paragraph(none, frame.width, BODY.bold)]
    judged = {pair: real for pair, rows in pairs.items() if (real := _real(rows))}
    rows = [_pair_row(reading, pair, found) for pair, found in judged.items()]
    table = Table(
        frame.shares(16, 28, 28, 12, 16),
        ("Blade mode", "Against", "Least distance", "At hold", "Limit"),
    )
    boxes: list[Box] = [title]
    if rows:
        boxes.append(paragraph(_SPACING_KEY, frame.width, keep_next=True))
        boxes += [gap(3.0), *table_boxes(fitted(table, rows), rows)]
    absent = {pair: rows for pair, rows in pairs.items() if pair not in judged}
    said = _absent_texts(reading, absent)
    return [*boxes, *(box for text in said for box in (gap(3.0), paragraph(text, frame.width)))]


def _real(rows: list[Json]) -> list[Json]:
    return [row for row in rows if not is_absent(row)]


def _absent_texts(reading: Reading, absent: dict[tuple[str, str], list[Json]]) -> list[str]:
    """One sentence for each reason why pairs need no distance, with the distance all the same."""
    said: dict[str, dict[str, list[str]]] = {}
    for (mode, against), rows in absent.items():
        modes = said.setdefault(rows[0]["reason"], {})
        named = modes.setdefault(mode or "all blade modes", [])
        named.append(_absent_pair(reading, against, rows))
    return [
        texts.sentence(
            f"Does not apply ({reason}): "
            + "; ".join(f"{mode} against {', '.join(pairs)}" for mode, pairs in modes.items())
        )
        for reason, modes in said.items()
    ]


def _absent_pair(reading: Reading, against: str, rows: list[Json]) -> str:
    """What a mode is seen against, with the least distance that nobody judges."""
    stand, _, side = (against or "stand modes").partition(", ")
    seen = f"{stand} {side.replace(' ', texts.GLUE)}".strip()
    known = [row["low"] for row in rows if row["low"] is not None]
    if not known:
        return seen
    unit = reading.vocabulary[SPACING]["unit"]
    return f"{seen} (for information {texts.number(min(known), unit, 'down')})"


def _pair_row(reading: Reading, pair: tuple[str, str], real: list[Json]) -> Row:
    """What is not there outweighs every number; a hold where damping exempts gives way."""
    judged = [row for row in real if not exempting_damping(reading, SPACING, row)]
    worst = min(judged or real, key=lambda row: _nearness(reading, row))
    shown = reading.shown_row(SPACING, worst)
    damping = exempting_damping(reading, SPACING, worst)
    return plain_row(
        pair[0] or "all blade modes",
        pair[1] or "stand modes",
        shown.text if shown.is_number else missing_text(worst, shown.why),
        worst["segment"] or NO_HAND,
        f"exempt by damping {damping}" if damping else _limit_of(reading, pair[0]),
    )


def _limit_of(reading: Reading, mode: str) -> str:
    """The limit where damping does not exempt; never a word of exemption without its number."""
    text = limit_text(reading, SPACING, "hold", mode)
    return texts.NOT_ASSESSED if text == EXEMPT else text


def _nearness(reading: Reading, row: Json) -> tuple[bool, float]:
    shown = reading.shown_row(SPACING, row)
    return shown.is_number, shown.low
