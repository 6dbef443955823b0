"""The step table: one action a row, with what is predicted and where the readings must stay."""

from __future__ import annotations

from dataclasses import dataclass, replace
from itertools import groupby
from typing import TYPE_CHECKING

from planner.model.results import Verdict
from planner.paper import texts
from planner.paper.boxes import Box, Tally, gap, heading, numbered, paragraph
from planner.paper.ink import BODY
from planner.paper.reading import Json, Reading, with_symbol
from planner.paper.tables import Cell, Row, Table, table_row

if TYPE_CHECKING:
    from planner.paper.pages import Frame

MOST_ROWS = 12
_ENTRY = "Entry to every row: the row before is done and CONTINUE has been called."
_EXIT = "then: check data,\nCONTINUE called? ☐"
_OF_CROSSING = ("band_rate", "band_time", "crossing_cover")
MOST_TALLIES = 60
_MOST_REASONS = 3
_LEAST_WIDTHS = (82.5, 175.0, 71.5, 94.0, 118.0, 81.0, 69.5, 44.5)
_SHARES_OF_REST = (0.0, 0.2, 0.0, 0.0, 0.3, 0.0, 0.5, 0.0)
"""How the columns divide what the sheet is wider than the least widths."""
_HEAD = (
    "Row",
    "Call, action, setting",
    "Watch",
    "Predicted",
    "Outside: HOLD",
    "Margin",
    "Reading",
    "Done init.",
)
_GAPS = (("Droop gap", "droop_stop_clearance"), ("Up gap", "up_stop_clearance"))
_WATCHED = (
    *_GAPS,
    ("Thrust", "thrust"),
    ("Torque", "torque"),
    ("Power", "power"),
)
_WATCHED_MOVING = (("Torque", "torque"),)
"""On the way no readings are written: flap stands for both gaps and has the least margin."""
_ROOT = (("Root", "root_flap_moment"),)
_FLAP = ("flap_lowest", "flap_highest")
_SUB_FROM = 2
_BAND_ENDS = ("from_rad_s", "to_rad_s")


@dataclass(frozen=True)
class Action:
    """One row's identity: number, the part of the run whose verdict it carries, and words."""

    number: str
    segment_id: str
    call: str
    settings: tuple[str, ...]
    notes: tuple[str, ...] = ()

    @property
    def cell(self) -> Cell:
        """The call in bold, with what is to be set below it."""
        return Cell("\n".join(self.settings), lead=self.call)


def step_boxes(reading: Reading, frame: Frame) -> list[Box]:
    """All blocks of the schedule, then the stop."""
    boxes: list[Box] = [
        heading("9  Steps", frame.width),
        paragraph(_ENTRY, frame.width, keep_next=True),
    ]
    segments = reading.record["segments"]
    rest = frame.width - sum(_LEAST_WIDTHS)
    widths = (w + rest * s for w, s in zip(_LEAST_WIDTHS, _SHARES_OF_REST, strict=True))
    table = Table(tuple(widths), _HEAD, most_rows=MOST_ROWS)
    main = [segment for segment in segments if segment["kind"] != "stop"]
    for index, members in groupby(main, key=lambda segment: int(segment["block"])):
        boxes += _block_boxes(reading, frame, index)
        boxes += [table_row(table, row) for s in members for row in _rows(reading, s)]
        boxes.append(gap(10.0))
    boxes.append(heading("Stop: the way to rest", frame.width, level=1))
    for segment in segments:
        if segment["kind"] == "stop":
            boxes += [table_row(table, row) for row in _rows(reading, segment)]
            boxes.append(table_row(table, _last_row(reading, segment["id"])))
    return boxes


def _last_row(reading: Reading, segment_id: str) -> Row:
    """The written call that ends the run."""
    action = Action("end", segment_id, "ZERO RPM: seen by two", ("Call: RUN COMPLETE",))
    row = _gate_row(reading, action)
    words = {2: "Heads", 3: "counted:", 4: "anything else: no entry"}
    cells = [Cell(words[i]) if i in words else cell for i, cell in enumerate(row.cells)]
    return replace(row, cells=tuple(cells))


def _block_boxes(reading: Reading, frame: Frame, index: int) -> list[Box]:
    block = reading.plan["blocks"][index]
    repeat = int(block["repeat"])
    times = f", repeat {repeat} times" if repeat > 1 else ""
    title = f"Block {index + 1}: {block['name']} ({block['kind']}){times}"
    boxes: list[Box] = [heading(title, frame.width, level=1)]
    if repeat > 1 and repeat <= MOST_TALLIES:
        said = "Tick one box as each round is finished."
        boxes += [
            paragraph(said, frame.width, keep_next=True),
            Tally(keep_next=True, repeats=repeat, width=frame.width),
        ]
    elif repeat > 1:
        said = f"Write the number of each finished round: ________________ of {repeat}"
        boxes.append(paragraph(said, frame.width, keep_next=True))
    return boxes


def _rows(reading: Reading, segment: Json) -> list[Row]:
    if segment["kind"] == "hold":
        return _hold_rows(reading, segment)
    return _ramp_rows(reading, segment)


def _hold_rows(reading: Reading, segment: Json) -> list[Row]:
    step = reading.plan["blocks"][segment["block"]]["steps"][segment["step"]]
    inside = [
        f"This hold lies inside the keep-out band {band_text(band)} ({band['why']})."
        for band in bands_met(reading, segment)
    ]
    note = [f"Note: {step['note']}"] if step["note"].strip() else []
    window = segment["window"]
    hold = Action(
        segment["id"],
        segment["id"],
        f"RUN: hold {texts.duration(segment['duration_s'])}, read",
        (
            f"{speed_text(reading, segment['to_rad_s'])} ± "
            f"{texts.setting(window['speed_rad_s'], 'rpm')}",
            f"pitch {texts.setting(segment['to_collective_rad'], 'deg')} ± "
            f"{texts.setting(window['collective_rad'], 'deg')}",
            _cyclic_text(segment["cyclic"]),
            _EXIT,
        ),
        (*note, *inside),
    )
    return [_measured_row(reading, hold, _WATCHED)]


def _ramp_rows(reading: Reading, segment: Json) -> list[Row]:
    start, end = segment["from_rad_s"], segment["to_rad_s"]
    pitch = (segment["from_collective_rad"], segment["to_collective_rad"])
    from_rpm = texts.setting(start, "rpm").removesuffix(f"{texts.GLUE}rpm")
    moved = f"{from_rpm} to " if start != end else "stay at "
    settings = [f"{moved}{speed_text(reading, end)}"]
    turned = f"{texts.setting(pitch[0], 'deg')} to " if pitch[0] != pitch[1] else "stays "
    settings.append(f"pitch {turned}{texts.setting(pitch[1], 'deg')}")
    if segment["cyclic"] != segment["from_cyclic"]:
        settings.append(_cyclic_text(segment["cyclic"]))
    call, words = _ramp_call(reading, segment)
    action = Action(segment["id"], segment["id"], call, (*words, *settings))
    bands = bands_met(reading, segment)
    ramp = _measured_row(reading, action, _WATCHED_MOVING, keep_next=bool(bands))
    if end < start:
        bands = bands[::-1]
    last = len(bands) - 1
    return [
        ramp,
        *(_band_row(reading, segment, band, keep_next=i < last) for i, band in enumerate(bands)),
    ]


def _ramp_call(reading: Reading, segment: Json) -> tuple[str, tuple[str, ...]]:
    time = texts.duration(segment["duration_s"])
    if segment["kind"] == "stop":
        return f"STOP: in {time}", (_stop_text(reading.plan["shutdown"]),)
    if segment["id"].endswith("b"):
        return f"RETURN: in {time}", (f"after each round but the last ({segment['times']})",)
    return f"SET-UP: in {time}", ()


def _stop_text(shutdown: Json) -> str:
    power = "Under power." if shutdown["powered"] else "Power off, coast."
    if not shutdown["brake"]:
        return f"{power} No brake."
    below = texts.limit(shutdown["brake_from_rad_s"], "rpm", "at most")
    return f"{power} Brake only below {below}."


def speed_text(reading: Reading, speed_rad_s: float) -> str:
    """Print a speed to be set, with its share of 100 % rpm."""
    share = speed_rad_s / reading.plan["stand"]["full_speed_rad_s"]
    return f"{texts.setting(speed_rad_s, 'rpm')} ({texts.number(share, '%')})"


def _cyclic_text(cyclic: Json) -> str:
    if cyclic["trimmed"]:
        return "cyclic: trim flap to zero"
    parts = (texts.setting(cyclic["cosine_rad"], "deg"), texts.setting(cyclic["sine_rad"], "deg"))
    return f"cyclic cos {parts[0]}, sin {parts[1]}"


def band_text(band: Json) -> str:
    """Print a keep-out band's speeds."""
    ends = (texts.setting(band[key], "rpm").removesuffix(f"{texts.GLUE}rpm") for key in _BAND_ENDS)
    return f"{'–'.join(ends)}{texts.GLUE}rpm"


def bands_met(reading: Reading, segment: Json) -> list[Json]:
    """Keep-out bands that a stretch of the run touches, slowest first."""
    ends = (segment["from_rad_s"], segment["to_rad_s"])
    slack = segment["window"]["speed_rad_s"]
    found = [
        band
        for band in reading.plan["keep_outs"]
        if min(ends) - slack < band["to_rad_s"] and max(ends) + slack > band["from_rad_s"]
    ]
    return sorted(found, key=lambda band: float(band["from_rad_s"]))


def _band_row(reading: Reading, segment: Json, band: Json, *, keep_next: bool) -> Row:
    inside = [
        segment[key] for key in _BAND_ENDS if band["from_rad_s"] < segment[key] < band["to_rad_s"]
    ]
    rate = reading.shown("band_rate", segment["id"], band["id"]).text
    ends = "\nThe plan starts or ends inside this band." if inside else ""
    cells = [Cell() for _ in _HEAD]
    by = reading.documents_behind(segment["id"], _OF_CROSSING)
    rests = f"\nGO by {', '.join(by)}" if by else ""
    cells[0] = Cell(f"{segment['id']}\n{band['id']}{rests}", bold=True)
    cells[1] = Cell(f"{band['why']}{ends}", lead=f"PASS WITHOUT STOPPING {band_text(band)}")
    cells[2] = Cell("Rate")
    cells[3] = Cell(f"{rate} of full rpm a second" if rate.endswith("%") else rate)
    cells[4] = Cell("No HOLD inside: leave the band, then HOLD")
    cells[5] = Cell(reading.margin(segment["id"], "band_rate"))
    cells[-1] = Cell(tick=True)
    return Row(tuple(cells), keep_next=keep_next, grey=True, least_height=40.0)


def _measured_row(
    reading: Reading,
    action: Action,
    watched: tuple[tuple[str, str], ...],
    *,
    keep_next: bool = False,
) -> Row:
    if _is_hingeless(reading):
        watched = (*_ROOT, *watched)
    gaps = tuple(gap_id for _, gap_id in _GAPS)
    judged = _FLAP if gaps[0] in dict(watched).values() else (*_FLAP, *gaps)
    subs = [_flap_sub_row(reading, action.segment_id, judged)]
    subs += [
        _sub_row(reading, name, quantity, action.segment_id)
        for name, quantity in watched
        if reading.applies(quantity)
    ]
    cells = [Cell() for _ in _HEAD]
    cells[0] = Cell(_number_and_verdict(reading, action), bold=True)
    cells[1] = action.cell
    cells[-1] = Cell(tick=True)
    notes = (*_document_note(reading, action.segment_id), *action.notes)
    tails = (*_reason_tails(reading, action.segment_id), *(Cell(note) for note in notes))
    return Row(
        tuple(cells),
        sub_rows=tuple(subs),
        sub_from=_SUB_FROM,
        tails=tails,
        least_height=44.0,
        keep_next=keep_next,
    )


def _gate_row(reading: Reading, action: Action) -> Row:
    cells = [Cell() for _ in _HEAD]
    cells[0] = Cell(_number_and_verdict(reading, action), bold=True)
    cells[1] = action.cell
    cells[2] = Cell("Data")
    cells[3] = Cell("good / bad\n(ring one)")
    cells[4] = Cell("bad: HOLD, then STOP TEST")
    cells[5] = Cell("—")
    cells[-1] = Cell(tick=True)
    return Row(tuple(cells), least_height=38.0)


def _number_and_verdict(reading: Reading, action: Action) -> str:
    word = reading.segment_verdict(action.segment_id)
    by = reading.documents_behind(action.segment_id) if word == Verdict.GO.value else []
    rests = f" by {', '.join(by)}" if by else ""
    return f"{action.number}\n{with_symbol(word)}{rests}"


def _document_note(reading: Reading, segment_id: str) -> tuple[str, ...]:
    """Documents under a verdict that is not GO; a GO names them beside itself."""
    numbers = reading.documents_behind(segment_id)
    if not numbers or reading.segment_verdict(segment_id) == Verdict.GO.value:
        return ()
    return (f"What is NOT ASSESSED here rests on {', '.join(numbers)}, not on a prediction.",)


def _reason_tails(reading: Reading, segment_id: str) -> tuple[Cell, ...]:
    against = reading.reasons_against(segment_id)
    if not against:
        return ()
    listed = "; ".join(f"{word}: {title}" for word, title in against[:_MOST_REASONS])
    more = len(against) - _MOST_REASONS
    rest = f"; and {more} more, see the findings" if more > 0 else ""
    return (Cell(f"Not GO: {listed}{rest}.", bold=True),)


def _flap_sub_row(reading: Reading, segment_id: str, judged: tuple[str, ...]) -> tuple[Cell, ...]:
    low, high = (reading.shown(quantity, segment_id) for quantity in _FLAP)
    margin = reading.margin(segment_id, *judged)
    if margin == "no limit":
        margin = _flap_judged_by(reading)
    if not (low.is_number and high.is_number):
        missing = high if low.is_number else low
        return (Cell("Flap"), Cell(missing.text), Cell(missing.why), Cell(margin), Cell())
    predicted = texts.span(low.value, high.value, "deg")
    band = texts.hold_band(low.low, high.high, "deg")
    return (Cell("Flap"), Cell(predicted), Cell(band), Cell(margin), Cell())


def _is_hingeless(reading: Reading) -> bool:
    return bool(reading.plan["rotor"]["hub"]["kind"] == "hingeless")


def _flap_judged_by(reading: Reading) -> str:
    return "see root" if _is_hingeless(reading) else "see gaps"


def _sub_row(reading: Reading, name: str, quantity: str, segment_id: str) -> tuple[Cell, ...]:
    shown = reading.shown(quantity, segment_id)
    margin = reading.margin(segment_id, quantity)
    if not shown.is_number:
        return (Cell(name), Cell(shown.text), Cell(shown.why), Cell(margin), Cell())
    unit = reading.vocabulary[quantity]["unit"]
    danger = reading.vocabulary[quantity]["danger"]
    return (
        Cell(name),
        Cell(texts.toward_danger(shown.value, unit, danger)),
        Cell(texts.hold_band(shown.low, shown.high, unit)),
        Cell(margin),
        Cell(),
    )


def rule_boxes(frame: Frame) -> list[Box]:
    """The build-up rule and the calls, defined for this card."""
    boxes: list[Box] = [
        heading("8  Build-up rule and calls", frame.width),
        paragraph(
            "Build-up rule: the next row is begun only when the data of this row have been "
            "checked and CONTINUE has been called. Rows are run in order; none is left out.",
            frame.width,
            BODY.bold,
            keep_next=True,
        ),
        gap(4.0),
    ]
    calls = [numbered(word, text, frame.width) for word, text in CALLS]
    return [*boxes, *(replace(call, keep_next=True) for call in calls[:-1]), calls[-1]]


CALLS = (
    ("CONTINUE", "data good, nobody objects: begin the next row."),
    (
        "HOLD",
        "keep rotor speed and pitch as they are, change nothing, and say why. Inside a "
        "PASS WITHOUT STOPPING band: first leave the band in the direction of travel, then hold. "
        "Ends with CONTINUE or STOP TEST.",
    ),
    (
        "STOP TEST",
        "nobody is in danger, but the test or its data are no good: recover by the stop row of "
        "this card, and say why.",
    ),
    (
        "ABORT, ABORT, ABORT",
        "danger, or safety can no longer be confirmed because a reading that it depends on is "
        "lost: everyone acts at once by the ABORT sheet; the reason is given afterwards.",
    ),
)
