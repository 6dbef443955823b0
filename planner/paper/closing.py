"""Closing pages of the card: re-entry, what was run, cautions and signatures."""

from __future__ import annotations

from typing import TYPE_CHECKING

from planner.paper import texts
from planner.paper.boxes import Box, Ruled, gap, heading, numbered, paragraph
from planner.paper.front import INK_HEIGHT
from planner.paper.ink import BODY
from planner.paper.tables import Cell, Row, Table, plain_row, table_boxes

if TYPE_CHECKING:
    from planner.paper.pages import Frame
    from planner.paper.reading import Reading


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
            least_height=34.0,
            keep_next=i < len(_SIGNATURES) - 1,
        )
        for i, meaning in enumerate(_SIGNATURES)
    ]
    digest = reading.record["files_digest"]
    said = (
        "The signatures hold only for the files whose digest (SHA-256, which shows change and not "
        f"who signed) is {digest}."
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
        paragraph(said, frame.width, keep_next=True),
        gap(3.0),
        *table_boxes(table, rows),
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
