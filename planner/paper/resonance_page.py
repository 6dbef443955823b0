"""Passing resonances: sway in each passage, the rate that is needed, and stay in the bands."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

from planner.model.plan import ABORT_CAUSES
from planner.paper import texts
from planner.paper.boxes import Box, gap, heading, new_page, paragraph
from planner.paper.fan_words import (
    NO_HAND,
    NOT_COMPUTED,
    hand_text,
    is_absent,
    limit_text,
    missing_text,
    number_text,
)
from planner.paper.ink import BODY
from planner.paper.passage_words import hand_or_why, peak_note
from planner.paper.reading import ABORT
from planner.paper.steps import band_text
from planner.paper.tables import Table, fitted, plain_row, table_boxes

if TYPE_CHECKING:
    from collections.abc import Iterator

    from planner.paper.pages import Frame
    from planner.paper.reading import Json, Reading

SWAY, PEAK, RATE = "passage_amplitude", "passage_peak_speed", "passage_rate_needed"
_TIME, _TURNS = "band_time_total", "band_cycles_total"
_ALL = "every passage"
_ABORT = "abort from "
_ONCE_ONLY = (
    "Amplitudes are of stand modes at once per revolution only, for nobody knows the force at the "
    "blade number: crossings at the blade number, and those of blade and shaft modes, are listed "
    "in the fan document without amplitude, and holds keep away from them."
)
_NO_LEAST = "no least rate"
_STAYS = f"{_NO_LEAST}: steady sway stays below the rating at the stated damping"
_NO_LEAVE = " No least rate is no leave to dwell: bands are passed without stopping."


@dataclass(frozen=True)
class Passage:
    """One line of the table of passages."""

    mode: str
    places: tuple[str, ...]
    said: tuple[str, ...]
    """Sway, limit, speed at the peak, hand check."""


def resonance_boxes(reading: Reading, frame: Frame, *, level: int = 1) -> list[Box]:
    """A page of its own on what it costs to pass resonances."""
    return [
        new_page(),
        heading("Passing resonances", frame.width, level=level),
        *_passage_boxes(reading, frame),
        gap(),
        *_rate_boxes(reading, frame),
        gap(),
        *_band_boxes(reading, frame),
    ]


def _passage_boxes(reading: Reading, frame: Frame) -> list[Box]:
    rows = reading.rows_of(SWAY)
    if not any(row["mode"] for row in rows):
        reason = missing_text(rows[0], "") if rows else NOT_COMPUTED
        words = f"Sway of the hub while a stand mode is passed: {reason}."
        return [paragraph(words, frame.width, BODY.bold)]
    table = Table(
        frame.shares(26, 13, 18, 9, 24, 10),
        ("Passage", "Stand mode", "Sway to one side", "Limit", "Peak at", "Hand check"),
    )
    found = [plain_row(_joined(one.places), one.mode, *one.said) for one in passages(reading)]
    boxes: list[Box] = [
        paragraph(_passage_key(reading), frame.width, keep_next=bool(found)),
        gap(3.0),
        *table_boxes(fitted(table, found) if found else table, found),
    ]
    left_out = not_passed(reading)
    if left_out:
        words = f"Not passed once per revolution: {', '.join(left_out)}."
        boxes += [gap(3.0), paragraph(words, frame.width)]
    return boxes


def _passage_key(reading: Reading) -> str:
    unbalance = number_text(reading, "unbalance", reading.row("unbalance"))
    return (
        "Each stand mode is driven once per revolution through the ramp, stop or abort as it is "
        f"planned; unbalance: {unbalance}. Of aborts the worst for each mode and cause. Running "
        "up the peak comes above the resonance, running down below it. Brackets: range over the "
        "allowances. Hand check: a published estimate for an even rate. "
        f"{_ONCE_ONLY}"
    )


def _joined(places: tuple[str, ...]) -> str:
    """Places of one line; causes of aborts from one place share its name."""
    together: dict[str, list[str]] = {}
    for place in places:
        start, _, rest = place.partition(", ")
        together.setdefault(start if rest and start.startswith(_ABORT) else place, []).append(rest)
    return "\n".join(
        f"{start}: {', '.join(causes)}" if start not in places else start
        for start, causes in together.items()
    )


def passages(reading: Reading) -> list[Passage]:
    """Lines of the table, mode by mode; places where the same is said share a line."""
    lines: list[Passage] = []
    for mode in _modes(reading):
        own = [row for row in reading.rows_of(SWAY) if row["mode"] == mode]
        together: dict[tuple[str, ...], list[str]] = {}
        for row in _told(reading, own):
            together.setdefault(_said(reading, row), []).append(_place(reading, row))
        is_one = len(together) == 1 and not any(row["status"] == "ok" for row in own)
        lines += [
            Passage(mode, (_ALL,) if is_one else tuple(places), said)
            for said, places in together.items()
        ]
    return lines


def not_passed(reading: Reading) -> list[str]:
    """Stand modes that no part of the run passes."""
    rows = reading.rows_of(SWAY)
    return [
        mode
        for mode in _modes(reading)
        if all(is_absent(row) for row in rows if row["mode"] == mode)
    ]


def _modes(reading: Reading) -> list[str]:
    return list(dict.fromkeys(row["mode"] for row in reading.rows_of(SWAY) if row["mode"]))


def _told(reading: Reading, own: list[Json]) -> Iterator[Json]:
    """Rows of one mode that are printed: all ramps and the stop, the worst abort of each cause."""
    yield from (row for row in own if not (row["state"] or is_absent(row)))
    for cause in ABORT_CAUSES:
        aborts = [row for row in own if row["state"] == cause and not is_absent(row)]
        if aborts:
            yield max(aborts, key=lambda row: _badness(reading, row))


def _badness(reading: Reading, row: Json) -> tuple[bool, float]:
    """Sort key: what is not there outweighs every number."""
    shown = reading.shown_row(SWAY, row)
    return not shown.is_number, shown.high


def _said(reading: Reading, row: Json) -> tuple[str, ...]:
    segment = _segment(reading, row["segment"])
    part = ABORT if row["state"] else segment["kind"]
    limit = limit_text(reading, SWAY, part, row["mode"])
    if not reading.shown_row(SWAY, row).is_number:
        return (number_text(reading, SWAY, row), limit, NO_HAND, NO_HAND)
    place = ("segment", "mode", "harmonic", "state")
    peak = next(
        (r for r in reading.rows_of(PEAK) if all(r[key] == row[key] for key in place)), None
    )
    note = peak_note(reading, row["mode"], peak)
    return (
        number_text(reading, SWAY, row),
        limit,
        "\n".join(filter(None, (number_text(reading, PEAK, peak), note))),
        hand_or_why(reading, row, segment),
    )


def _segment(reading: Reading, segment_id: str) -> Json:
    """A segment of the run; a row that names none is about the whole run."""
    walk = reading.record["segments"]
    return next((s for s in walk if s["id"] == segment_id), {"kind": "run"})


def _place(reading: Reading, row: Json) -> str:
    """Where a passage lies, in words."""
    if row["state"]:
        return f"{_ABORT}{row['segment'] or 'anywhere'}, {row['state']}"
    segment = _segment(reading, row["segment"])
    if "from_rad_s" not in segment:
        return str(row["segment"] or _ALL)
    ends = (segment["from_rad_s"], segment["to_rad_s"])
    start, end = ("rest" if speed == 0.0 else texts.setting(speed, "rpm") for speed in ends)
    return f"{segment['id']}, {start} to {end}"


def _rate_boxes(reading: Reading, frame: Frame) -> list[Box]:
    rating = reading.plan["stand"]["ratings"].get("hub_amplitude_m")
    said = "Slowest even rate of run-up whose sway stays below what the stand bears" + (
        f", {texts.limit(rating, 'mm', 'at most')}." if rating is not None else "."
    )
    table = Table(frame.shares(34, 46, 20), ("Stand mode", "Rate of run-up needed", "Hand check"))
    found = reading.rows_of(RATE)
    said += _NO_LEAVE if any(_rate_text(reading, row) == _STAYS for row in found) else ""
    rows = [
        plain_row(
            row["mode"] or "all stand modes", _rate_text(reading, row), _rate_hand(reading, row)
        )
        for row in found
    ]
    return [
        heading("Rate of run-up needed", frame.width, level=1),
        paragraph(said, frame.width, keep_next=bool(rows)),
        *(table_boxes(table, rows) or [paragraph(f"{NOT_COMPUTED}.", frame.width, BODY.bold)]),
    ]


def _rate_text(reading: Reading, row: Json) -> str:
    shown = reading.shown_row(RATE, row)
    if not shown.is_number:
        return number_text(reading, RATE, row)
    if shown.high <= 0.0:
        return _STAYS
    unit = reading.vocabulary[RATE]["unit"]
    value = texts.number(shown.value, unit, "up")
    if shown.low == shown.high:
        return value
    return f"{value} ({texts.span(shown.low, shown.high, unit)})"


def _rate_hand(reading: Reading, row: Json) -> str:
    """The hand check of a rate; a rate of zero is none."""
    hand = row["hand"]
    return _NO_LEAST if hand is not None and hand <= 0.0 else hand_text(reading, RATE, row)


def _band_boxes(reading: Reading, frame: Frame) -> list[Box]:
    title = heading("Keep-out bands over the whole card", frame.width, level=1)
    bands = reading.plan["keep_outs"]
    if not bands:
        return [title, paragraph("The plan declares no keep-out band.", frame.width)]
    limit = limit_text(reading, _TURNS, "run")
    table = Table(
        frame.shares(22, 26, 22, 18, 12), ("Band", "Why", "Time inside", "Turns inside", "Limit")
    )
    rows = [
        plain_row(
            f"{band['id']}, {band_text(band)}",
            band["why"],
            number_text(reading, _TIME, reading.row(_TIME, "", band["id"])),
            number_text(reading, _TURNS, reading.row(_TURNS, "", band["id"])),
            limit,
        )
        for band in bands
    ]
    return [
        title,
        paragraph(_band_key(reading), frame.width, keep_next=True),
        gap(3.0),
        *table_boxes(fitted(table, rows), rows),
    ]


def _band_key(reading: Reading) -> str:
    counted = "Counted: the schedule with its repeats, the stop,"
    number = reading.plan["abort"].get("reentries")
    if number is None:
        return f"{counted} and aborts, but the plan does not state how many (reentries)."
    many = "1 abort" if number == 1 else f"{number} aborts"
    return f"{counted} and {many}, the longest of any, with the way back up each time."
