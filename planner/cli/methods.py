"""Words for the command ``method``."""

from __future__ import annotations

import difflib
import shutil
import textwrap

from planner.cli.screen import fail
from planner.predict.register import REGISTER


def listing() -> str:
    """All quantity ids with their names and units."""
    width = max(len(quantity) for quantity in REGISTER)
    lines = [
        f"{quantity.id:<{width}}  {quantity.name}"
        + (f" [{quantity.unit}]" if quantity.unit else "")
        for quantity in REGISTER.values()
    ]
    return "\n".join(lines)


def describe(quantity_id: str) -> str:
    """Everything that the register says about one quantity."""
    quantity = REGISTER.get(quantity_id)
    if quantity is None:
        close = difflib.get_close_matches(quantity_id, REGISTER, n=1)
        hint = f" Did you mean {close[0]!r}?" if close else ""
        fail(f"{quantity_id!r} is not a quantity.{hint} `whirlcard method` lists them all.")
    band = f" (agreement within {quantity.hand_band * 100:g} %)" if quantity.hand_band else ""
    allowance = quantity.allowance or "none: exact arithmetic on the inputs"
    parts = [
        ("symbol", quantity.symbol),
        ("unit", quantity.unit or "none (a ratio)"),
        ("for each", ", ".join(quantity.axes) or "whole run"),
        ("dangerous", quantity.danger),
        ("method", quantity.method),
        ("validity", quantity.validity),
        ("accuracy", quantity.accuracy or "not compared with measurements"),
        ("source", quantity.source),
        ("hand check", quantity.hand_check + band),
        ("allowance", allowance),
    ]
    width = min(100, shutil.get_terminal_size((80, 24)).columns)
    body = [
        textwrap.fill(text, width, initial_indent=f"  {label:<11}", subsequent_indent=" " * 13)
        for label, text in parts
    ]
    return "\n".join([f"{quantity.id}: {quantity.name}", *body])
