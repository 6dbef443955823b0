"""The ABORT sheet: on paper of its own, in large type, the most urgent action first."""

from __future__ import annotations

from typing import TYPE_CHECKING

from planner.model.results import Verdict
from planner.paper.boxes import Box, Ruled, gap, heading, paragraph
from planner.paper.closing import abort_facts, abort_settings
from planner.paper.ink import ABORT, BOLD, Face
from planner.paper.tables import Cell, Row, Table, table_boxes

if TYPE_CHECKING:
    from planner.paper.pages import Frame
    from planner.paper.reading import Reading

_TITLE = Face(BOLD, 22.0, 28.0)
_AFTER = (
    "Everyone stays inside; count heads, call the number",
    "Zero rpm seen by two means, drive locked out, before anyone goes to the rotor",
)


def abort_boxes(reading: Reading, frame: Frame) -> list[Box]:
    """Everything on the ABORT sheet."""
    plan = reading.plan
    facts = abort_facts(plan)
    state = Table(frame.shares(1, 1, 1), tuple(name for name, _ in facts), ABORT)
    values = Row(tuple(Cell(value, bold=True) for _, value in facts))
    steps = Table(frame.shares(6, 80, 14), ("No.", "At once, in this order", "Done"), ABORT)
    actions = [_row(i, text) for i, text in enumerate(plan["abort"]["actions"], 1)]
    if not actions:
        actions = [_row(1, "NOT ASSESSED: the plan orders no abort actions. Do not run.")]
    later = Table(frame.shares(6, 80, 14), ("No.", "Then, whatever the cause", "Done"), ABORT)
    after = [_row(i, text) for i, text in enumerate(_AFTER, len(actions) + 1)]
    who = ", ".join(role["role"] for role in plan["roles"] if role["may_abort"])
    return [
        heading("ABORT, ABORT, ABORT", frame.width, face=_TITLE),
        paragraph(abort_settings(plan), frame.width, ABORT.bold, keep_next=True),
        gap(4.0),
        *table_boxes(steps, actions),
        gap(6.0),
        *table_boxes(state, [values]),
        gap(6.0),
        *table_boxes(later, after),
        gap(6.0),
        *(paragraph(text, frame.width, ABORT) for text in _notices(reading, who)),
    ]


def _row(number: int, text: str) -> Row:
    return Row((Cell(str(number), bold=True), Cell(text, bold=True), Cell(tick=True)))


def _notices(reading: Reading, who: str) -> list[str]:
    parts = [c for c in reading.record["coverage"] if c["where"] == "abort"]
    open_parts = [c for c in parts if c["verdict"] == Verdict.NOT_ASSESSED.value]
    notices = [f"May call ABORT: {who or 'no one is named (NOT ASSESSED, do not run)'}."]
    if open_parts or not parts:
        notices.append(
            "NOT ASSESSED: flap, stop contact and loads after an abort are not known for this "
            "plan."
        )
    notices += [
        f"{reading.class_title(c['hazard_class'])}: closed by {c['closed_by']}."
        for c in parts
        if c["closed_by"]
    ]
    notices.append("The facility's own emergency procedure comes before this sheet.")
    return notices


def notes_boxes(frame: Frame) -> list[Box]:
    """A page for notes, so that the ABORT sheet starts on paper of its own."""
    pitch = 24.0
    n_lines = int((frame.height - 60.0) / pitch)
    return [
        heading("Notes", frame.width),
        Ruled(keep_next=False, n_lines=n_lines, width=frame.width, pitch=pitch),
    ]
