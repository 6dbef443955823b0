"""The computed wind gate on paper: only where it is kept for this very plan."""

from __future__ import annotations

from typing import TYPE_CHECKING

from planner.paper import texts
from planner.paper.boxes import Box, gap, paragraph
from planner.paper.ink import BODY
from planner.paper.tables import Table, fitted, plain_row, table_boxes

if TYPE_CHECKING:
    from planner.paper.pages import Frame
    from planner.paper.reading import Json, Reading

NO_GATE = (
    "No computed wind gate is kept for this plan: the wind that the plan was made for holds, and "
    "never more than the rule book's cap."
)
_LOWER = (
    "Holds were judged in the planned wind: where gate and planned wind differ, the lower holds."
)
_NO_WIND = "none: no start"


def kept_gate(record: Json) -> Json | None:
    """The record's wind gate, if it was computed for the plan as it is now."""
    gate: Json | None = record.get("wind_gate")
    return gate if gate and gate["kept_for"] == record["meaning_digest"] else None


def gate_boxes(reading: Reading, gate: Json, frame: Frame) -> list[Box]:
    """Verdict of the gate, then greatest mean wind and gust of each sector with what sets them."""
    table = Table(
        frame.shares(28, 17, 17, 38), ("Wind from", "Mean at most", "Gust at most", "Limited by")
    )
    rows = [
        plain_row(
            sector_text(reading, sector["name"]),
            speed_text(sector["mean_m_s"]),
            speed_text(sector["gust_m_s"]),
            limit_words(sector),
        )
        for sector in gate["sectors"]
    ]
    none = f"{texts.NOT_ASSESSED}: the gate holds no sector. Do not run."
    return [
        paragraph(texts.sentence(gate["verdict"]), frame.width, BODY.bold, keep_next=True),
        paragraph(f"{reading_words(gate)} {_LOWER}", frame.width, keep_next=True),
        gap(3.0),
        *(table_boxes(fitted(table, rows), rows) or [paragraph(none, frame.width, BODY.bold)]),
    ]


def reading_words(gate: Json) -> str:
    """How the wind is read that the gate is held against."""
    error = texts.setting(gate["anemometer_error_m_s"], "m/s")
    return (
        f"Every start, the stop and every abort stay inside the rules up to this wind, read at "
        f"the anemometer over {texts.duration(gate['averaging_time_s'])}; its error of {error} is "
        "taken off already, and no sector passes the cap." + spread_words(gate)
    )


def spread_words(gate: Json) -> str:
    """How far above the mean gusts were tried: no gate tells of gusts that stand out farther."""
    planned = gate.get("planned")
    if not planned:
        return ""
    spread = max(0.0, planned["gust_m_s"] - planned["mean_m_s"])
    words = texts.number(spread, "m/s", "down")
    return f" Gusts were tried {words} above each mean wind: a gust farther above it is outside."


def sector_text(reading: Reading, name: str) -> str:
    """A sector by name, with its bearings where the plan states them."""
    for sector in reading.plan["site"].get("sectors", ()):
        if sector["name"] == name:
            ends = (texts.setting(sector[key], "deg") for key in ("from_rad", "to_rad"))
            return f"{name} ({' to '.join(ends)})"
    return name


def speed_text(speed_m_s: float | None) -> str:
    """A wind speed that must not be passed, in panel units, rounded down."""
    if speed_m_s is None or speed_m_s < 0.0:
        return _NO_WIND
    shown = texts.number(speed_m_s, "m/s", "down")
    return f"{shown} ({texts.number(speed_m_s, 'kt', 'down')})"


def limit_words(sector: Json) -> str:
    """What sets a sector's gate, and where the first failure was met."""
    words = str(sector["limited_by"] or "not told")
    first = sector["first_failure_mean_m_s"]
    if first is not None:
        return f"{words}; first fails at {texts.number(first, 'm/s', 'down')}"
    return f"{words}; no failure up to the cap" if sector["at_cap"] else words
