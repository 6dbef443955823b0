"""The back of the ABORT sheet: what to expect of an abort, cause by cause."""

from __future__ import annotations

from typing import TYPE_CHECKING

from planner.paper import texts
from planner.paper.abort_causes import (
    BRAKE_LOST,
    COMMANDED,
    FROZEN,
    NOT_RESEATED,
    Aborts,
    CauseVerdict,
    Worst,
    top_rad_s,
)
from planner.paper.boxes import Box, gap, heading, paragraph
from planner.paper.fan_panels import counts_rotor
from planner.paper.ink import ABORT
from planner.paper.step_readings import count_text
from planner.paper.steps import band_text, speed_text
from planner.paper.stop_loads import governing_peak
from planner.paper.tables import Cell, Row, Table, table_boxes

if TYPE_CHECKING:
    from planner.paper.pages import Frame
    from planner.paper.reading import Json, Reading

TIMES = (("50 %", "time_to_half"), ("30 %", "time_to_30"), ("10 %", "time_to_10"))
REST = "time_to_rest"
"""Shares of the speed at which an abort begins, and the time to reach them."""
_ONCE = "1"
_COLUMN = "stand column"


def cause_boxes(aborts: Aborts, frame: Frame) -> list[Box]:
    """Times, contacts and resonances of each cause, with the verdict."""
    hold = aborts.highest_hold
    head = ("Cause, verdict", "Time", "Contacts to expect", "Bands, sway")
    table = Table(frame.shares(18, 28, 24, 30), head, ABORT, tail_face=ABORT)
    rows = [_cause_row(aborts, verdict, hold) for verdict in aborts.verdicts]
    return [
        heading("Abort: what to expect, by cause", frame.width, level=1),
        paragraph(_key(aborts.reading, hold), frame.width, ABORT, keep_next=True),
        gap(3.0),
        *table_boxes(table, rows),
        gap(3.0),
        *(paragraph(text, frame.width, ABORT) for text in _said(aborts)),
    ]


def _key(reading: Reading, hold: Json | None) -> str:
    """What the columns of the table mean."""
    if hold is None:
        return f"{texts.NOT_ASSESSED}: the record holds no hold."
    start = f"{hold['id']}, {speed_text(reading, top_rad_s(hold))}"
    return (
        f"Time: from {start}, to 50, 30, 10 % of it, to rest (longest of all rows). Contacts, "
        "bands: worst of all rows. Sway: of the hub to one side, as a stand mode is passed."
    )


def _cause_row(aborts: Aborts, verdict: CauseVerdict, hold: Json | None) -> Row:
    cause = verdict.cause
    begins = f"\nworst from {verdict.origin}" if verdict.origin else ""
    told = all(one.is_sound for one in aborts.verdicts)
    return Row(
        (
            Cell(f"{verdict.words}{begins}", lead=cause[:1].upper() + cause[1:]),
            Cell(times_text(aborts, cause, hold)),
            Cell(contacts_text(aborts, cause)),
            Cell(bands_text(aborts, cause)),
        ),
        tails=() if told else (Cell(_order(aborts.reading, verdict), bold=True),),
    )


def times_text(aborts: Aborts, cause: str, hold: Json | None) -> str:
    """Times from the highest hold, with the longest of all origins where it is another."""
    lines: list[str] = []
    missing: dict[str, None] = {}
    for share, quantity in (*TIMES, ("rest", REST)):
        worst = aborts.worst(quantity, cause)
        own = aborts.shown(quantity, hold["id"], cause) if hold else worst.shown
        text = own.text if own.is_number else f"{own.text} ({own.why})"
        if not own.is_number:
            missing[text] = None
        elif worst.shown.text != own.text:
            text += f" ({worst.shown.text}, {worst.origin})"
        lines.append(f"{share}: {text}")
    if len(missing) == 1 and all(line.endswith(next(iter(missing))) for line in lines):
        return next(iter(missing))
    return "\n".join(lines)


def contacts_text(aborts: Aborts, cause: str) -> str:
    """Contacts of any one blade, the speed up to which they come, and the peak stop moment."""
    if aborts.reading.plan["rotor"]["droop_stop"] is None:
        return f"no flap stops; peak {_peak_text(aborts, cause)}"
    number = aborts.worst("contacts_after_lift_off", cause)
    speed = aborts.worst("contact_highest_speed", cause)
    return "\n".join(
        (
            _count_text(number),
            _speed_text(speed),
            f"peak {_peak_text(aborts, cause)}",
        )
    )


def _count_text(number: Worst) -> str:
    if not number.shown.is_number:
        return f"at speed: {number.shown.text} ({number.shown.why}), {number.origin}"
    text = f"at speed: {count_text(number.shown.high)}"
    return f"{text} of one blade, from {number.origin}" if number.shown.high > 0.0 else text


def _speed_text(speed: Worst) -> str:
    if not speed.shown.is_number:
        return f"touches up to: {speed.shown.text} ({speed.shown.why})"
    if speed.shown.high <= 0.0:
        return "no touch after lift-off"
    return f"touches up to {speed.shown.text}"


def _peak_text(aborts: Aborts, cause: str) -> str:
    """The stop moment that is the greatest share of its rating, or the root moment."""
    peak = governing_peak(aborts.reading, lambda quantity: aborts.worst(quantity, cause).shown)
    if not peak.shown.is_number:
        return f"{peak.name} {peak.shown.text} ({peak.shown.why})".strip()
    return f"{peak.name} {peak.shown.text}, {peak.share_text} of its rating"


def bands_text(aborts: Aborts, cause: str) -> str:
    """Turns inside each keep-out band, and the largest sway while a stand mode is passed."""
    lines: list[str] = []
    for band in aborts.reading.plan["keep_outs"]:
        turns = aborts.worst("band_cycles", cause, band).shown
        if turns.text == texts.DOES_NOT_APPLY:
            continue
        shown = f"{turns.text}{' turns' if turns.is_number else ''}"
        lines.append(f"{band['id']} {band_text(band)}: {shown}")
    return "\n".join((*(lines or ["no band is passed"]), *_sway_texts(aborts, cause)))


def _sway_texts(aborts: Aborts, cause: str) -> tuple[str, ...]:
    """The mode that sways most; nothing where none is passed."""
    sway = aborts.worst("passage_amplitude", cause)
    if sway.shown.text == texts.DOES_NOT_APPLY:
        return ()
    why = "" if sway.shown.is_number else f" ({sway.shown.why})"
    mode = f", {sway.mode.removeprefix('stand ')}" if sway.mode else ""
    return (f"sway {sway.shown.text}{why}{mode}",)


def _said(aborts: Aborts) -> list[str]:
    """Resonances of the stand, causes left out, and what keeps a cause from GO."""
    said = [crossings_text(aborts)]
    said += [
        f"{cause[:1].upper()}{cause[1:]}: left out, {aborts.does_not_apply(cause)}."
        for cause in (COMMANDED, FROZEN, BRAKE_LOST, NOT_RESEATED)
        if cause not in aborts.causes
    ]
    reasons: dict[str, list[str]] = {}
    for verdict in aborts.verdicts:
        for reason in verdict.against:
            reasons.setdefault(reason, []).append(verdict.cause)
    listed = [
        texts.sentence(f"{reason} ({causes_text(aborts, causes)})")
        for reason, causes in reasons.items()
    ]
    return [*said, " ".join(listed)] if listed else said


def causes_text(aborts: Aborts, causes: list[str]) -> str:
    """Causes in words, all of them as one."""
    return "all causes" if len(causes) == len(aborts.causes) else ", ".join(causes)


def crossings_text(aborts: Aborts) -> str:
    """Stand modes that an abort from the top passes once per revolution."""
    modes = _stand_modes(aborts.reading)
    if not modes:
        return "Stand modes once per revolution: NOT ASSESSED, the stand file gives none."
    top = max((top_rad_s(s) for s in aborts.origins), default=0.0)
    found = [_crossing(aborts.reading, label, top) for label in modes]
    listed = ", ".join(text for text in found if text)
    return f"Passed once per revolution on the way down: {listed or 'no stand mode'}."


def _stand_modes(reading: Reading) -> list[str]:
    """Labels of the modes that the stand file gives, and of those that follow from its column."""
    stand = reading.plan["stand"]
    found = [f"stand {mode['name']}" for mode in stand["modes"] if mode["family"] == "stand"]
    if stand.get("column") is not None:
        told = (*reading.rows_of("mode_frequency"), *reading.rows_of("crossing_speed"))
        named = dict.fromkeys(r["mode"] for r in told if r["mode"].startswith(_COLUMN))
        found += named or [_COLUMN]
    return found


def _crossing(reading: Reading, label: str, top_speed_rad_s: float) -> str:
    """Speeds where a mode meets once per revolution; empty where that is above the run's."""
    name, rows = label.removeprefix("stand "), reading.rows_of("crossing_speed")
    given = [m for m in reading.plan["stand"]["modes"] if f"stand {m['name']}" == label]
    if any(m["family"] == "stand" and not counts_rotor(m) for m in given):
        return f"{name} {texts.NOT_ASSESSED} (rotor's mass not fitted)"
    own = [r for r in rows if r["mode"] == label and r["harmonic"] in {"", _ONCE}]
    standing: list[Json | None] = [row for row in rows if not row["mode"]]
    standing += [None] * (not rows or label == _COLUMN)
    spans: list[str] = []
    for row in (*own, *standing):
        shown = reading.shown_row("crossing_speed", row)
        if not shown.is_number:
            return f"{name} {shown.text} ({shown.why})"
        if shown.low < top_speed_rad_s:
            spans.append(f"{name} {texts.span(shown.low, shown.high, 'rpm')}")
    return ", ".join(spans)


def _order(reading: Reading, verdict: CauseVerdict) -> str:
    """The actions of one cause in order, or what holds where they do not cover it."""
    below = reading.plan["stand"]["brake_below_rad_s"]
    brake = f"no brake above {texts.limit(below, 'rpm', 'at most')}" if below else "no brake"
    move = "collective and cyclic as stated"
    order = {
        COMMANDED: f"torque off; {move}; {brake}",
        FROZEN: f"torque off; leave the controls; {brake}",
        BRAKE_LOST: f"torque off; {move}; let it coast, the time to rest is longer",
        NOT_RESEATED: f"torque off; {move}; {brake}; blades may hang low to the end",
    }[verdict.cause]
    if verdict.is_sound:
        return f"In this order: {order}."
    return f"NOT COVERED: do not run. Should it happen: {order}; everyone stays inside."
