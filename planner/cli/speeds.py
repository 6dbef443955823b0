"""The command ``speeds``: where holds that are too near a resonance could be instead."""

from __future__ import annotations

import csv
import io
import shutil
import textwrap
from typing import TYPE_CHECKING

from planner.cli.screen import fail
from planner.cli.sources import stop_on_fault
from planner.cli.summary import NARROW, WIDE
from planner.explore.speed_advice import FINE, REACH, TOLD_DECIMALS, advise
from planner.files.read import read_plan
from planner.model.results import Verdict
from planner.paper.texts import unprintable
from planner.predict.register import REFERENCES, REGISTER
from planner.units import from_si

if TYPE_CHECKING:
    from collections.abc import Sequence
    from pathlib import Path

    from planner.explore.speed_advice import Advice, Better

_IN = " " * 4
_NONE = "none within reach"
_ALL_WELL = "Every hold satisfies every rule of frequency."
_FOREWORD = (
    "Holds that a rule of frequency does not let pass, and the nearest speeds that keep every "
    f"limit of frequency, on steps of {FINE:.1%} and up to {REACH:.0%} of full speed away. "
    "Window, pitch and air stay as planned. Other rules, those of the ramps between among them, "
    "are not looked at here: check the plan again after a change."
)


def advice_of(source: Path) -> tuple[Advice, ...]:
    """Read a plan folder and look for better speeds.

    Args:
        source: plan folder or its plan.toml; a record holds too little, then status 2.
    """
    if source.suffix.lower() == ".json" and not source.is_dir():
        fail(f"{source}: expected a plan folder, found a record; name the folder it came from")
    vocabulary = {entry.id: (entry.unit, entry.axes) for entry in REGISTER.values()}
    with stop_on_fault():
        plan = read_plan(source, vocabulary, REFERENCES, unprintable).plan
    try:
        return advise(plan)
    except ValueError as fault:
        fail(f"{source}: {fault}")


def told(advice: Sequence[Advice]) -> str:
    """The advice for a terminal, a hold a paragraph."""
    width = max(NARROW, min(WIDE, shutil.get_terminal_size((NARROW, 24)).columns))
    if not advice:
        return _ALL_WELL
    lines = [*textwrap.wrap(_FOREWORD, width), ""]
    heads = f"{'nearest below':<22}{'nearest above':<22}"
    lines.append(f"  {'hold':<8}{'speed':<12}{heads}verdict")
    for one in advice:
        pair = (one.below, one.above)
        below, above = ("not looked for" if one.open_for else _words(b) for b in pair)
        speed = _rpm(one.speed_rad_s)
        lines.append(f"  {one.segment:<8}{speed:<12}{below:<22}{above:<22}{one.verdict.value}")
        words = f"{'not assessed' if one.open_for else 'not satisfied'}: {', '.join(one.reasons)}"
        lines += textwrap.wrap(words, width, initial_indent=_IN, subsequent_indent=_IN)
    reasons = dict.fromkeys(reason for one in advice for reason in one.open_for)
    if reasons:
        lines += ["", "Not assessed, so that no other speed was looked for:"]
    for reason in reasons:
        lines += textwrap.wrap(reason, width, initial_indent="  ", subsequent_indent=_IN)
    return "\n".join(lines)


def advice_csv(advice: Sequence[Advice]) -> str:
    """The advice as a table."""
    out = io.StringIO()
    writer = csv.writer(out, lineterminator="\n")
    writer.writerow(
        [
            "hold",
            "speed [rpm]",
            "verdict",
            "nearest below [rpm]",
            "verdict there",
            "nearest above [rpm]",
            "verdict there",
            "rules not satisfied",
        ]
    )
    for one in advice:
        row = [one.segment, f"{from_si(one.speed_rad_s, 'rpm'):.6g}", one.verdict.value]
        for better in (one.below, one.above):
            if better is None:
                row += ["", ""]
            else:
                row += [f"{from_si(better.speed_rad_s, 'rpm'):.6g}", better.verdict.value]
        writer.writerow([*row, " ".join(one.reasons)])
    return out.getvalue()


def _words(better: Better | None) -> str:
    if better is None:
        return _NONE
    doubt = "" if better.verdict is Verdict.GO else f" ({better.verdict.value})"
    return f"{_rpm(better.speed_rad_s)}{doubt}"


def _rpm(speed_rad_s: float) -> str:
    return f"{from_si(speed_rad_s, 'rpm'):.{TOLD_DECIMALS}f} rpm"
