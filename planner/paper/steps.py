"""The step table: one action a row, with what is predicted and where the readings must stay."""

from __future__ import annotations

from dataclasses import dataclass, replace
from itertools import groupby
from typing import TYPE_CHECKING

from planner.model.results import Verdict
from planner.paper import texts
from planner.paper.boxes import Box, Tally, gap, heading, paragraph
from planner.paper.reading import Json, Reading, verdict_of, with_symbol
from planner.paper.step_readings import MOVING_KEY, SubRow, hold_readings, moving_readings
from planner.paper.tables import Cell, Row, Table, table_row

if TYPE_CHECKING:
    from planner.paper.pages import Frame

MOST_ROWS = 12
_ENTRY = "Entry to every row: the row before is done and CONTINUE has been called."
_EXIT = "then: check data,\nCONTINUE called? ☐"
_NO_HOLD = "No HOLD inside: leave, then HOLD"
_OF_CROSSING = (
    "band_rate",
    "band_time",
    "crossing_cover",
    "band_cycles",
    "passage_amplitude",
)
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
        paragraph(f"{_ENTRY} {MOVING_KEY}", frame.width, keep_next=True),
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
    return [_measured_row(reading, hold, hold_readings(reading, segment["id"]))]


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
    readings = moving_readings(reading, segment["id"])
    ramp = _measured_row(reading, action, readings, keep_next=bool(bands))
    if end < start:
        bands = bands[::-1]
    last = len(bands) - 1
    return [
        ramp,
        *(_band_row(reading, segment, band, keep_next=i < last) for i, band in enumerate(bands)),
    ]


def _ramp_call(reading: Reading, segment: Json) -> tuple[str, tuple[str, ...]]:
    time = _time_text(segment)
    if segment["kind"] == "stop":
        return _stop_call(reading, segment), (_stop_text(reading.plan["shutdown"]),)
    if segment["id"].endswith("b"):
        return f"RETURN: in {time}", (f"after each round but the last ({segment['times']})",)
    return f"SET-UP: in {time}", ()


def _stop_call(reading: Reading, segment: Json) -> str:
    """Time of a stop: as planned under power, else as predicted."""
    if reading.plan["shutdown"]["powered"]:
        return f"STOP: in {_time_text(segment)}"
    rest = reading.shown("time_to_rest", segment["id"])
    if not rest.is_number:
        return f"STOP: time to rest {rest.text} ({rest.why})"
    return f"STOP: rest in {texts.span(rest.low, rest.high, 's')}"


def _time_text(segment: Json) -> str:
    """Time of a ramp; the drive's own run-up may have none that is known."""
    if segment["duration_s"] is None:
        return f"a time {texts.NOT_ASSESSED}"
    return texts.duration(segment["duration_s"])


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
    ends = ". The plan starts or ends inside this band" if inside else ""
    by = reading.documents_behind(segment["id"], _OF_CROSSING)
    rests = f"\nGO by {', '.join(by)}" if by else ""
    cells = [Cell() for _ in _HEAD]
    cells[0] = Cell(f"{segment['id']}\n{band['id']}{rests}", bold=True)
    cells[1] = Cell(lead=f"PASS WITHOUT STOPPING {band_text(band)}")
    cells[2:6] = [Cell(text) for text in _passage(reading, segment, band)]
    cells[-1] = Cell(tick=True)
    tails = (Cell(f"{band['why']}{ends}"),)
    return Row(tuple(cells), tails=tails, keep_next=keep_next, grey=True)


def _passage(reading: Reading, segment: Json, band: Json) -> tuple[str, str, str, str]:
    """What is said of a passage: its rate, or its turns where no power is there to choose it."""
    place = (segment["id"], band["id"])
    rate = reading.shown("band_rate", *place)
    if rate.text == texts.DOES_NOT_APPLY:
        turns = reading.shown("band_cycles", *place)
        margin = reading.margin(place[0], "band_cycles")
        return "Turns", turns.text, turns.why or "No HOLD: no power", margin
    shown = f"{rate.text}/s" if rate.is_number else rate.text
    return "Rate", shown, _NO_HOLD, reading.margin(place[0], "band_rate")


def _measured_row(
    reading: Reading,
    action: Action,
    readings: list[SubRow],
    *,
    keep_next: bool = False,
) -> Row:
    cells = [Cell() for _ in _HEAD]
    cells[0] = Cell(_number_and_verdict(reading, action), bold=True)
    cells[1] = action.cell
    cells[-1] = Cell(tick=True)
    notes = (*_document_note(reading, action.segment_id), *action.notes)
    tails = (*_reason_tails(reading, action.segment_id), *(Cell(note) for note in notes))
    return Row(
        tuple(cells),
        sub_rows=tuple(readings),
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
    """Why a row is not GO: the reasons of its worst verdict; the rest are counted."""
    against = reading.reasons_against(segment_id)
    if not against:
        return ()
    worst = max((word for word, _ in against), key=lambda word: verdict_of(word).rank)
    first = [title for word, title in against if word == worst][:_MOST_REASONS]
    more = len(against) - len(first)
    rest = f"; and {more} more, see the findings" if more > 0 else ""
    return (Cell(f"Not GO: {worst}: {'; '.join(first)}{rest}.", bold=True),)
