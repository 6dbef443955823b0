"""What is said beside a passage: where its peak lies, and why it has no hand check."""

from __future__ import annotations

from typing import TYPE_CHECKING

from planner.paper.fan_words import NO_HAND, hand_text

if TYPE_CHECKING:
    from planner.paper.reading import Json, Reading, Shown

_SWAY, _PEAK = "passage_amplitude", "passage_peak_speed"
_ONCE = "1"
IN_ONE = "none: ramp and run-down in one"
"""Of an abort out of the middle of a ramp, which is no passage at an even rate."""
_HAND_DAMPING, _CLEAR = 0.06, 1.05
"""Damping up to which the hand check holds, and how far above a mode a run-down must begin."""


def peak_note(reading: Reading, mode: str, peak: Json | None) -> str:
    """Say where a peak, or an end of its range, lies outside the keep-out bands.

    Args:
        reading: the record.
        mode: that is passed.
        peak: the row of its peak speed.
    """
    shown = reading.shown_row(_PEAK, peak)
    if not shown.is_number:
        return ""
    bands = reading.plan["keep_outs"]
    if any(_holds(band, shown.low) and _holds(band, shown.high) for band in bands):
        return ""
    around = [band for band in bands if _holds(band, shown.value)]
    own = around or [band for band in bands if _is_of(reading, band, mode)]
    if not own:
        return "peak outside every band"
    names = ", ".join(str(band["id"]) for band in own)
    return f"{'partly' if around else 'peak'} outside band {names}"


def _holds(band: Json, speed_rad_s: float) -> bool:
    return bool(band["from_rad_s"] <= speed_rad_s <= band["to_rad_s"])


def _is_of(reading: Reading, band: Json, mode: str) -> bool:
    """Whether a band reaches into the speeds at which a mode meets once per revolution."""
    return any(
        met.low <= band["to_rad_s"] and met.high >= band["from_rad_s"]
        for met in _crossings(reading, mode)
    )


def _crossings(reading: Reading, mode: str) -> list[Shown]:
    """Speeds at which a mode meets once per revolution."""
    rows = reading.rows_of("crossing_speed")
    own = [row for row in rows if row["mode"] == mode and row["harmonic"] == _ONCE]
    shown = [reading.shown_row("crossing_speed", row) for row in own]
    return [one for one in shown if one.is_number]


def hand_or_why(reading: Reading, row: Json, segment: Json) -> str:
    """The hand check of a passage, or why an abort out of a ramp has none.

    Args:
        reading: the record.
        row: of the sway.
        segment: where the passage, or the abort, begins.
    """
    text = hand_text(reading, _SWAY, row)
    if text != NO_HAND or not row["state"] or segment["kind"] != "ramp":
        return text
    modes = reading.record["series"]["fan"]["modes"]
    damping = next((m["damping"] for m in modes if m["name"] == row["mode"]), None)
    top = max(segment["from_rad_s"], segment["to_rad_s"])
    met = [one.value for one in _crossings(reading, row["mode"])]
    would_hold = damping is not None and damping <= _HAND_DAMPING and met
    return IN_ONE if would_hold and _CLEAR * max(met) < top else text
