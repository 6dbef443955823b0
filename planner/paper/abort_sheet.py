"""The ABORT sheet: on paper of its own, in large type, the most urgent action first."""

from __future__ import annotations

from typing import TYPE_CHECKING

from planner.model.results import Verdict
from planner.paper import texts
from planner.paper.abort_causes import Aborts
from planner.paper.abort_table import cause_boxes, causes_text
from planner.paper.boxes import Box, Ruled, gap, heading, new_page, paragraph
from planner.paper.ink import ABORT, BOLD, Face
from planner.paper.limits import closers
from planner.paper.steps import speed_text
from planner.paper.tables import Cell, Row, Table, table_boxes

if TYPE_CHECKING:
    from planner.paper.pages import Frame
    from planner.paper.reading import Json, Reading

_TITLE = Face(BOLD, 22.0, 28.0)
_AFTER = (
    "Everyone stays inside; count heads, call the number",
    "Zero rpm seen by two means",
    "Drive locked out, before anyone goes to the rotor",
)
ONE_ORDER = "One order of actions serves all causes."


def abort_boxes(reading: Reading, frame: Frame) -> list[Box]:
    """Everything on the ABORT sheet: on its face what is done, on its back what to expect."""
    aborts = Aborts(reading)
    facts = abort_facts(reading)
    state = Table(frame.shares(14, 26, 20, 40), tuple(name for name, _ in facts), ABORT)
    values = Row(tuple(Cell(value, bold=True) for _, value in facts))
    actions = [_row(i, text) for i, text in enumerate(reading.plan["abort"]["actions"], 1)]
    if not actions:
        actions = [_row(1, "NOT ASSESSED: the plan orders no abort actions. Do not run.")]
    steps = Table(frame.shares(6, 80, 14), ("No.", "At once, in this order", "Done"), ABORT)
    later = Table(frame.shares(6, 80, 14), ("No.", "Then, whatever the cause", "Done"), ABORT)
    after = [_row(i, text) for i, text in enumerate(_AFTER, len(actions) + 1)]
    return [
        heading("ABORT, ABORT, ABORT", frame.width, face=_TITLE),
        *table_boxes(state, [values]),
        gap(6.0),
        *table_boxes(steps, actions),
        gap(6.0),
        *table_boxes(later, after),
        gap(4.0),
        paragraph(orders_text(aborts), frame.width, ABORT.bold),
        *(paragraph(text, frame.width, ABORT) for text in _notices(reading, aborts)),
        new_page(),
        *cause_boxes(aborts, frame),
    ]


def abort_facts(reading: Reading) -> tuple[tuple[str, str], ...]:
    """What an abort sets, the most urgent first: torque, collective, cyclic, brake."""
    abort = reading.plan["abort"]
    rate = abort.get("collective_rate_rad_s")
    how_fast = f"at {texts.setting(rate, 'deg/s')}" if rate is not None else "(no rate stated)"
    return (
        ("Torque", "OFF"),
        ("Collective to", f"{texts.setting(abort['collective_rad'], 'deg')} {how_fast}"),
        ("Cyclic", abort["cyclic"] or "NOT ASSESSED: the plan does not say"),
        ("Brake", _brake(reading)),
    )


def _brake(reading: Reading) -> str:
    """Panel rpm below which the brake is permitted, and from where it is ordered."""
    below, abort = reading.plan["stand"]["brake_below_rad_s"], reading.plan["abort"]
    if below is None:
        return "DO NOT BRAKE: no brake speed is stated"
    share = texts.number(below / reading.plan["stand"]["full_speed_rad_s"], "%", "down")
    permitted = f"not above {texts.limit(below, 'rpm', 'at most')} ({share})"
    if not abort.get("brake"):
        return f"{permitted}; none ordered"
    start = abort["brake_from_rad_s"]
    if start > below:
        return f"{permitted}, although the plan orders it from {speed_text(reading, start)}"
    return f"{permitted}; from {texts.limit(start, 'rpm', 'at most')} down"


def orders_text(aborts: Aborts) -> str:
    """Say whether one order of actions serves all causes, or which it does not."""
    bad = [verdict for verdict in aborts.verdicts if not verdict.is_sound]
    if not bad:
        accepted = [v.cause for v in aborts.verdicts if v.verdict is Verdict.CAUTION]
        return f"{ONE_ORDER} CAUTION: {causes_text(aborts, accepted)}." if accepted else ONE_ORDER
    listed = "; ".join(f"{verdict.cause} ({verdict.words})" for verdict in bad)
    if len(bad) == len(aborts.verdicts) and len({verdict.words for verdict in bad}) == 1:
        listed = f"any cause ({bad[0].words})"
    rest = "" if len(bad) == len(aborts.verdicts) else " It serves the other causes."
    return f"NOT COVERED by these actions: {listed}. Do not run.{rest} By cause: overleaf."


def _row(number: int, text: str) -> Row:
    return Row((Cell(str(number), bold=True), Cell(text, bold=True), Cell(tick=True)))


def _notices(reading: Reading, aborts: Aborts) -> list[str]:
    who = ", ".join(role["role"] for role in reading.plan["roles"] if role["may_abort"])
    notices = [f"May call ABORT: {who or 'no one is named (NOT ASSESSED, do not run)'}."]
    if not aborts.coverage or any(not part["closed_by"] for part in aborts.coverage):
        notices.append(
            "NOT ASSESSED: flap, stop contact and loads after an abort are not known for this "
            "plan."
        )
    notices += [_closed(reading, part) for part in aborts.coverage if part["closed_by"]]
    notices.append("The facility's own emergency procedure comes before this sheet.")
    return notices


def _closed(reading: Reading, part: Json) -> str:
    title = reading.class_title(part["hazard_class"])
    return f"{title}: {closers(reading, part['closed_by'])}."


def notes_boxes(frame: Frame) -> list[Box]:
    """A page for notes, so that the ABORT sheet starts on paper of its own."""
    pitch = 24.0
    n_lines = int((frame.height - 60.0) / pitch)
    return [
        heading("Notes", frame.width),
        Ruled(keep_next=False, n_lines=n_lines, width=frame.width, pitch=pitch),
    ]
