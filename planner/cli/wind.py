"""The command ``wind``: finding the gate, keeping it, and telling it on a terminal."""

from __future__ import annotations

import shutil
import textwrap
from typing import TYPE_CHECKING, Any

from planner.cli.progress import ProgressLine
from planner.cli.screen import fail, mention
from planner.cli.sources import load_record, open_store, stop_on_fault
from planner.cli.summary import NARROW, WIDE
from planner.explore.gate_trial import Desk
from planner.explore.wind_gate import wind_gate, winds_to_try
from planner.files.read import read_plan
from planner.judge.wind_gate import gate_key
from planner.model.canonical import digest
from planner.paper.gate import limit_words, speed_text, spread_words
from planner.paper.texts import unprintable
from planner.predict.register import REFERENCES, REGISTER
from planner.record.layout import versions
from planner.units import UnitError, parse

if TYPE_CHECKING:
    from collections.abc import Mapping
    from pathlib import Path

    from planner.cli.sources import Keeping
    from planner.model.plan import Plan
    from planner.predict.kept import Store

    Json = dict[str, Any]


_IN = " " * 6


def record_with_gate(source: Path, keeping: Keeping, step: str) -> tuple[Json, Json]:
    """The record of a plan and its wind gate, found and kept where it is not kept already.

    A record holds the gate that was kept when it was written, or none; then status 2.

    Args:
        source: plan folder, its plan.toml, or a record.
        keeping: what the command line says of kept results.
        step: of the mean wind, with its unit.
    """
    if source.suffix.lower() == ".json" and not source.is_dir():
        record = load_record(source, keeping)
        gate = record.get("wind_gate")
        if gate is None:
            fail(
                f"{source}: expected a record that holds a wind gate, found none; find one with "
                "`whirlcard wind` from the plan folder"
            )
        return record, gate
    gate = _gate_of_plan(source, keeping, _step_m_s(step))
    return load_record(source, keeping), gate


def _step_m_s(text: str) -> float:
    try:
        return parse(text, "speed")[0]
    except UnitError as fault:
        fail(f'--step: expected a wind speed with its unit, such as "1 m/s": it {fault}')


def _gate_of_plan(source: Path, keeping: Keeping, step_m_s: float) -> Json:
    vocabulary = {entry.id: (entry.unit, entry.axes) for entry in REGISTER.values()}
    with stop_on_fault():
        plan = read_plan(source, vocabulary, REFERENCES, unprintable).plan
    try:
        winds_to_try(plan, step_m_s)
    except ValueError as fault:
        fail(f"--{fault}")
    notes: list[str] = []
    gate = _kept_or_found(plan, open_store(keeping, notes.append), step_m_s)
    for note in notes:
        mention(note)
    return gate


def _kept_or_found(plan: Plan, store: Store, step_m_s: float) -> Json:
    key = gate_key(digest(plan), versions())
    before = store.get_plain(key)
    if before is not None and before["step_m_s"] == step_m_s:
        return dict(before)
    with ProgressLine() as progress:
        gate = wind_gate(plan, Desk(versions(), progress), step_m_s)
    store.put_plain(key, gate)
    return gate


def told(gate: Mapping[str, Any]) -> str:
    """The gate for a terminal: a sector a paragraph, with what limits it."""
    width = max(NARROW, min(WIDE, shutil.get_terminal_size((NARROW, 24)).columns))
    lines = [f"Wind gate, read at the anemometer over {gate['averaging_time_s']:g} s", ""]
    lines += [f"  {'from':<30} {'mean at most':<22} gust at most"]
    for sector in gate["sectors"]:
        mean, gust = (speed_text(sector[key]) for key in ("mean_m_s", "gust_m_s"))
        lines.append(f"  {sector['name']:<30} {mean:<22} {gust}")
        details = [f"limited by {limit_words(sector)}"]
        details += [f"CAUTION at the gate: {words}" for words in sector.get("cautions", ())]
        for detail in details:
            lines += textwrap.wrap(detail, width, initial_indent=_IN, subsequent_indent=_IN)
    lines += ["", *textwrap.wrap(gate["verdict"], width)]
    lines += textwrap.wrap(spread_words(gate).strip(), width)
    return "\n".join(lines).replace("\N{NO-BREAK SPACE}", " ")
