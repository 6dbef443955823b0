"""The predicted numbers of the run and of each hold, with their ranges or statuses."""

from __future__ import annotations

from typing import TYPE_CHECKING

from planner.model.results import Status
from planner.paper import texts
from planner.paper.boxes import Box, gap, heading, paragraph
from planner.paper.ink import BODY
from planner.paper.tables import Cell, Row, Table, fitted, plain_row, table_boxes

if TYPE_CHECKING:
    from planner.paper.pages import Frame
    from planner.paper.reading import Json, Reading

_OF_RUN = (
    "air_density",
    "speed_of_sound",
    "wind_at_hub",
    "blade_flap_inertia",
    "lock_number",
    "lift_off_speed_still_air",
    "lift_off_speed_in_wind",
    "stop_free_speed",
    "droop_stop_rest_moment",
    "trip_above_card",
    "trip_below_proven",
)
_OF_HOLD = (
    ("Tip Mach", "tip_mach"),
    ("Advancing tip Mach", "advancing_tip_mach"),
    ("Advance ratio", "advance_ratio"),
    ("CT/σ", "blade_loading"),
    ("Flap freq. ν", "flap_frequency_ratio"),
    ("Flap damp. ζ", "flap_damping_ratio"),
    ("Hub moment", "hub_moment"),
)
_RANGED = "hub_moment"


def number_boxes(reading: Reading, frame: Frame) -> list[Box]:
    """Numbers of the whole run, then those of each hold."""
    run = Table(frame.shares(40, 16, 22, 22), ("Of the run", "Value", "Low to high", "Status"))
    rows = [_run_row(reading, quantity) for quantity in _OF_RUN]
    return [
        heading("7  Predicted numbers", frame.width),
        *table_boxes(fitted(run, rows), rows),
        gap(),
        *_hold_boxes(reading, frame),
    ]


def _run_row(reading: Reading, quantity: str) -> Row:
    entry = reading.vocabulary.get(quantity)
    name = entry["name"] if entry else quantity.replace("_", " ")
    shown = reading.shown(quantity)
    if entry is None or not shown.is_number:
        return plain_row(name, shown.text, "—", _status(reading, quantity, shown.why))
    value = texts.toward_danger(shown.value, entry["unit"], entry["danger"])
    single = shown.low == shown.high
    ends = "single value" if single else texts.span(shown.low, shown.high, entry["unit"])
    return plain_row(name, value, ends, Status.OK.value)


def _status(reading: Reading, quantity: str, why: str) -> str:
    """Why a number of the run is not there, with the record's own reason."""
    row = reading.row(quantity)
    if row is None:
        return why
    status = row["status"] if row["status"] != Status.OK.value else why
    return f"{status}: {row['reason']}" if row["reason"] else str(status)


def _hold_boxes(reading: Reading, frame: Frame) -> list[Box]:
    names = tuple(name for name, _ in _OF_HOLD)
    table = Table(frame.shares(6, 9, 9, 11, 10, 9, 10, 10, 26), ("Hold", "rpm", *names))
    holds = [s for s in reading.record["segments"] if s["kind"] == "hold"]
    rows = [_hold_row(reading, segment) for segment in holds]
    said = (
        "Of each hold, at its settings; the range of the hub moment covers the window and the "
        "model allowance. CT/σ: blade loading; ν: rigid flap frequency over rotor speed."
    )
    none = f"{texts.NOT_ASSESSED}: the record holds no hold. Do not run."
    return [
        paragraph(said, frame.width, keep_next=True),
        gap(3.0),
        *(table_boxes(fitted(table, rows), rows) or [paragraph(none, frame.width, BODY.bold)]),
    ]


def _hold_row(reading: Reading, segment: Json) -> Row:
    speed = texts.setting(segment["to_rad_s"], "rpm").removesuffix(f"{texts.GLUE}rpm")
    cells = [_hold_text(reading, quantity, segment["id"]) for _, quantity in _OF_HOLD]
    bold = Cell(segment["id"], bold=True)
    return Row((bold, Cell(speed), *(Cell(text) for text in cells)))


def _hold_text(reading: Reading, quantity: str, segment_id: str) -> str:
    shown = reading.shown(quantity, segment_id)
    row = reading.row(quantity, segment_id)
    if not shown.is_number:
        applies = row is None or row["status"] != Status.NOT_APPLICABLE.value
        return f"{shown.text}: {shown.why}" if applies else shown.text
    unit, danger = (reading.vocabulary[quantity][key] for key in ("unit", "danger"))
    value = texts.toward_danger(shown.value, unit, danger)
    if quantity != _RANGED:
        return value
    if not any(digit in texts.number(shown.high, unit) for digit in "123456789"):
        return texts.number(shown.high, unit)
    return f"{value} ({texts.span(shown.low, shown.high, unit)})"
