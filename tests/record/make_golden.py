"""Writes the golden record of the present layout: a short run of the hingeless sample.

Run it only when numbers or the layout are meant to change, and give the reason in CHANGELOG.md:
python -m tests.record.make_golden
"""

from __future__ import annotations

import dataclasses
import pathlib
from typing import TYPE_CHECKING, Any

from planner.files.read import read_plan
from planner.predict.register import REFERENCES, REGISTER
from planner.record.layout import LAYOUT, build, to_bytes

if TYPE_CHECKING:
    from planner.model.plan import Plan

HERE = pathlib.Path(__file__).parent
GOLDEN = HERE / f"golden_layout_{LAYOUT}.json"


def short_plan() -> Plan:
    """The hingeless sample with its first two steps only."""
    vocabulary = {entry.id: (entry.unit, entry.axes) for entry in REGISTER.values()}
    sample = HERE.parent.parent / "sample_plans" / "hingeless-model"
    plan = read_plan(sample, vocabulary, REFERENCES).plan
    block = dataclasses.replace(plan.blocks[0], steps=plan.blocks[0].steps[:2])
    return dataclasses.replace(plan, blocks=(block,))


def golden_record() -> dict[str, Any]:
    """Build the record afresh."""
    return build(short_plan(), [("plan.toml", "0" * 64)])


if __name__ == "__main__":
    GOLDEN.write_bytes(to_bytes(golden_record()))
