"""Closing pages of the card: coast-down, re-entry, what was run, cautions and signatures."""

from __future__ import annotations

from itertools import pairwise
from typing import TYPE_CHECKING

from planner.paper import texts
from planner.paper.boxes import Box, Ruled, gap, heading, numbered, paragraph
from planner.paper.front import INK_HEIGHT
from planner.paper.ink import BODY
from planner.paper.steps import band_text, speed_text
from planner.paper.tables import Cell, Row, Table, plain_row, table_boxes

if TYPE_CHECKING:
    from planner.paper.pages import Frame
    from planner.paper.reading import Json, Reading

_COAST_SHARES = (1.0, 0.8, 0.6, 0.5, 0.4, 0.3, 0.2, 0.1, 0.05, 0.0)
_APART = 0.03
_NEAR_RAD_S = 1e-6


def coast_boxes(reading: Reading, frame: Frame) -> list[Box]:
    """Rotor speed against time on the way to rest, with what happens at each speed."""
    table = Table(
        frame.shares(23, 14, 16, 12, 35),
        ("Rotor speed", "Planned time", "Time found", "Initials", "What this speed means"),
    )
    points = _stop_points(reading)
    start = points[0][1] if points else 0.0
    events = _speed_events(reading, start)
    speeds = {speed for speed, _ in events} | {0.0}
    apart = _APART * start
    for share in _COAST_SHARES:
        if all(abs(start * share - speed) > apart for speed in speeds):
            speeds.add(start * share)
    rows = [
        plain_row(
            speed_text(reading, speed),
            _time_at(points, speed),
            "",
            "",
            "; ".join(text for at, text in events if abs(at - speed) < _NEAR_RAD_S),
            least_height=INK_HEIGHT,
        )
        for speed in sorted(speeds, reverse=True)
    ]
    powered = reading.plan["shutdown"]["powered"]
    said = "The planned times are the schedule's own, run down at a constant rate" + (
        " under power." if powered else "; a coast without power was not computed: NOT ASSESSED."
    )
    said += " Time runs from the start of the stop row."
    none = "NOT ASSESSED: the record holds no way to rest. Do not run."
    return [
        heading("10  Coast-down", frame.width),
        paragraph(said, frame.width, keep_next=True),
        gap(3.0),
        *(table_boxes(table, rows) if points else [paragraph(none, frame.width, BODY.bold)]),
    ]


def _stop_points(reading: Reading) -> list[tuple[float, float]]:
    """Time since the start of the stop, and speed, along the charted run."""
    run = reading.record["series"]["run"]
    stops = {s["id"] for s in reading.record["segments"] if s["kind"] == "stop"}
    points = [
        (time, speed)
        for time, speed, segment in zip(
            run["time_s"], run["speed_rad_s"], run["segment"], strict=True
        )
        if segment in stops and time is not None and speed is not None
    ]
    return [(time - points[0][0], speed) for time, speed in points]


def _time_at(points: list[tuple[float, float]], speed: float) -> str:
    """Time at which the charted line passes a speed."""
    for (time, above), (later, below) in pairwise(points):
        if below <= speed <= above and below < above:
            passed = time + (later - time) * (above - speed) / (above - below)
            return texts.number(passed, "s", "up")
    return "not passed"


def _speed_events(reading: Reading, start_rad_s: float) -> list[tuple[float, str]]:
    plan = reading.plan
    events: list[tuple[float, str]] = []
    brake = plan["stand"]["brake_below_rad_s"]
    if brake is not None:
        events.append((brake, "the stand's brake is allowed only below this"))
    if plan["shutdown"]["brake"]:
        events.append((plan["shutdown"]["brake_from_rad_s"], "brake planned from here down"))
    stop = plan["rotor"]["droop_stop"]
    swing = stop["retraction"] if stop is not None else None
    if swing is not None:
        events += [
            (swing["release_rad_s"], "droop stops release running up: stop region below"),
            (swing["reseat_rad_s"], "droop stops re-seat; listen for contact"),
        ]
    elif stop is not None:
        events += _lift_off_event(reading)
    for band in plan["keep_outs"]:
        events.append((band["to_rad_s"], f"keep-out {band['id']} {band_text(band)} begins"))
        events.append((band["from_rad_s"], f"keep-out {band['id']} ends"))
    return [(speed, text) for speed, text in events if 0.0 <= speed <= start_rad_s]


def _lift_off_event(reading: Reading) -> list[tuple[float, str]]:
    shown = reading.shown("lift_off_speed_in_wind")
    text = "blades may rest on or touch the droop stops from here down"
    if shown.is_number:
        return [(shown.high, text)]
    return [(0.0, f"speed of droop stop contact: {shown.text} ({shown.why})")]


def reentry_boxes(frame: Frame) -> list[Box]:
    """What comes before any further run after an abort."""
    table = Table(frame.shares(7, 57, 8, 14, 14), ("Row", "Action", "Done", "Initials", "Time"))
    rows = [_tick_row(f"A{i}", action) for i, action in enumerate(_REENTRY, 1)]
    return [heading("11  Re-entry after an abort", frame.width), *table_boxes(table, rows)]


_REENTRY = (
    "Cause known and written on the as-run page",
    "Inspection after the abort finished, disposition signed",
    "Every exceedance and every stop contact judged by the approver",
    "All prerequisites initialled again",
    "Weather gate met again",
    "Approver calls CONTINUE by name",
    "Start again from rest, at the first row of the block that was aborted; "
    "no row above it is reached by a longer step than planned",
)


def _tick_row(number: str, action: str) -> Row:
    cells = (Cell(number, bold=True), Cell(action), Cell(tick=True), Cell(), Cell())
    return Row(cells, least_height=INK_HEIGHT)


def as_run_boxes(frame: Frame) -> list[Box]:
    """Blanks for what really happened."""
    deviations = Table(
        frame.shares(10, 46, 24, 20), ("Row", "Deviation from the card", "Approved by", "Time")
    )
    exceedances = Table(
        frame.shares(10, 30, 20, 16, 24),
        ("Row", "Channel or limit exceeded", "Highest value, unit", "For how long", "Reported to"),
    )
    inspection = Table(
        frame.shares(46, 30, 12, 12), ("Inspection after the run", "Found", "Initials", "Time")
    )
    blanks = [Row(tuple(Cell() for _ in range(n)), least_height=30.0) for n in (4, 5)]
    checks = [plain_row(text, "", "", "", least_height=30.0) for text in _INSPECTION]
    return [
        heading("12  As run", frame.width),
        heading("Deviations", frame.width, level=1),
        *table_boxes(deviations, [blanks[0]] * 5),
        gap(),
        heading("Exceedances", frame.width, level=1),
        *table_boxes(exceedances, [blanks[1]] * 5),
        gap(),
        heading("Inspection after the run", frame.width, level=1),
        *table_boxes(inspection, checks),
        gap(),
        *_disposition(frame),
    ]


_INSPECTION = (
    "Droop and up stops: marks of contact",
    "Blades, tips, weights and their locking",
    "Hub, hinges, dampers, pitch links",
    "Stand bolts, drive, brake, leaks",
    "Loose objects on the pad; other",
)


def _disposition(frame: Frame) -> list[Box]:
    table = Table(frame.shares(56, 8, 36), ("Disposition", "Ring", "By whom, time"))
    rows = [
        Row((Cell(text), Cell(tick=True), Cell()), least_height=28.0, keep_next=True)
        for text in (
            "Run complete, data accepted",
            "Run incomplete: rows to repeat are listed under deviations",
            "Article or stand held for inspection: no further run",
        )
    ]
    return [
        heading("Disposition", frame.width, level=1),
        *table_boxes(table, rows),
        gap(),
        heading("Remarks", frame.width, level=1),
        Ruled(keep_next=False, n_lines=4, width=frame.width),
    ]


def signature_boxes(reading: Reading, frame: Frame) -> list[Box]:
    """Cautions, then the lines to be signed in ink."""
    table = Table(
        frame.shares(15, 24, 19, 20, 22),
        ("Meaning", "Printed name", "Role", "Date and time", "Signature"),
    )
    rows = [
        Row(
            (Cell(meaning, bold=True), *(Cell() for _ in range(4))),
            least_height=40.0,
            keep_next=i < len(_SIGNATURES) - 1,
        )
        for i, meaning in enumerate(_SIGNATURES)
    ]
    digest = reading.record["files_digest"]
    said = (
        f"The signatures hold for the files with SHA-256 digest {digest} only. The digest shows "
        "that nothing was changed; it does not show who signed."
    )
    return [
        heading("14  Cautions", frame.width),
        *(numbered("•", text, frame.width) for text in _cautions(reading)),
        gap(),
        heading("15  Signatures", frame.width),
        paragraph(
            "This card is a DRAFT until it has been approved here in ink.",
            frame.width,
            BODY.bold,
            keep_next=True,
        ),
        *table_boxes(table, rows),
        gap(3.0),
        paragraph(said, frame.width),
    ]


_SIGNATURES = ("Prepared", "Reviewed", "Approved to run")


def _cautions(reading: Reading) -> list[str]:
    cautions = [
        "This card is a planning aid. The facility's approved procedures, local codes and "
        "licensed practice come before anything printed here.",
        "PLAN GO speaks about the plan as written, within the methods and limits named on this "
        "card. Clearance to run is given by people, at the stand, on the day.",
        "NOT ASSESSED means not known. It is never a pass.",
        "Cutting the power does not stop a rotor: see coast-down before anyone goes near.",
        "Predictions are made with allowances, not with certainty. A reading outside its range "
        "means that the rotor is not the one that was predicted: HOLD.",
    ]
    accuracy = reading.vocabulary.get("thrust", {}).get("accuracy")
    if accuracy:
        cautions.append(f"How good: {texts.sentence(accuracy)}".replace(" %", f"{texts.GLUE}%"))
    if not reading.book["approved"]:
        cautions.insert(
            0,
            "The limits come from an EXAMPLE rule book that no facility has approved. Replace it "
            "by the facility's own approved book before any run.",
        )
    return cautions


def abort_settings(plan: Json) -> str:
    """The settings of an abort in one line, numbers first."""
    abort, below = plan["abort"], plan["stand"]["brake_below_rad_s"]
    parts = (
        f"Collective to {texts.setting(abort['collective_rad'], 'deg')}",
        f"cyclic {abort['cyclic'] or texts.NOT_ASSESSED}",
        f"brake only below {texts.limit(below, 'rpm', 'at most')}"
        if below is not None
        else "DO NOT BRAKE",
    )
    return " — ".join(parts)


def abort_facts(plan: Json) -> tuple[tuple[str, str], ...]:
    """What an abort sets: collective, cyclic, brake."""
    abort, stand = plan["abort"], plan["stand"]
    below = stand["brake_below_rad_s"]
    brake = (
        f"not above {texts.limit(below, 'rpm', 'at most')}"
        if below is not None
        else "DO NOT BRAKE: no brake speed is stated"
    )
    return (
        ("Collective to", texts.setting(abort["collective_rad"], "deg")),
        ("Cyclic", abort["cyclic"] or "NOT ASSESSED: the plan does not say"),
        ("Brake", brake),
    )
