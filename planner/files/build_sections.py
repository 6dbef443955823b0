"""Blade sections: checks of polars, and the way into the model."""

from __future__ import annotations

import itertools
from typing import TYPE_CHECKING

import numpy as np
from numpy.typing import NDArray

from planner.files.schema_rotor import PolarTable, SymmetricTable
from planner.model.rotor import PolarSection, Section, SymmetricSection

if TYPE_CHECKING:
    from planner.files.csv_tables import CsvTable
    from planner.files.faults import Fault

FloatArray = NDArray[np.float64]
_NEAR_DEG = 1e-6
_FEWEST_ROWS = 5
_POLAR_END_DEG = (4.0, 60.0)
"""Where a polar that is not a full circle may end, on both sides."""


def check_polar(table: CsvTable) -> list[Fault]:
    """Find polars whose angles are out of order or end where they cannot be continued."""
    faults: list[Fault] = []
    mach = _mach_of(table)
    angle = table.values["angle"]
    for i in np.flatnonzero(np.diff(mach) < 0.0) + 1:
        expected = f"mach of at least {mach[i - 1]:g} of the row before"
        mend = "order the blocks by mach"
        faults.append(table.fault(int(i), "mach", expected, f"{mach[i]:g}", mend))
    for block in _blocks(mach):
        degrees = np.degrees(angle[block])
        first, last = block.start, block.stop - 1
        for i in np.flatnonzero(np.diff(degrees) <= 0.0) + 1:
            expected = f"an angle above {degrees[i - 1]:g} deg of the row before"
            mend = "order the rows by angle"
            found = f"{degrees[i]:g} deg"
            faults.append(table.fault(int(first + i), "angle", expected, found, mend))
        if degrees.size < _FEWEST_ROWS:
            expected = f"at least {_FEWEST_ROWS} angles for each mach"
            found = f"{degrees.size}"
            faults.append(table.fault(last, "angle", expected, found, "tabulate more angles"))
        faults += _polar_ends(table, degrees, (first, last))
    return faults


def _polar_ends(table: CsvTable, degrees: FloatArray, rows: tuple[int, int]) -> list[Fault]:
    """A polar covers the full circle, or ends near stall on both sides and is continued."""
    ends = (-float(degrees[0]), float(degrees[-1]))
    whole = [abs(end - 180.0) <= _NEAR_DEG for end in ends]
    least, most = _POLAR_END_DEG
    usable = [full or least <= end <= most for full, end in zip(whole, ends, strict=True)]
    if all(usable) and any(whole):
        usable = whole
    mend = "tabulate the full circle, or data that end near stall on both sides"
    faults = []
    if not usable[0]:
        expected = f"a first angle of -180 deg, or between -{most:g} deg and -{least:g} deg"
        faults.append(table.fault(rows[0], "angle", expected, f"{degrees[0]:g} deg", mend))
    if not usable[1]:
        expected = f"a last angle of 180 deg, or between {least:g} deg and {most:g} deg"
        faults.append(table.fault(rows[1], "angle", expected, f"{degrees[-1]:g} deg", mend))
    return faults


def build_section(span: SymmetricTable | PolarTable, polars: dict[str, CsvTable]) -> Section:
    """The section of a span: the built-in symmetric law, or a polar that was read."""
    if isinstance(span, PolarTable):
        return _polar(span.name, polars[span.polar])
    return SymmetricSection(
        name=span.name,
        lift_slope_per_rad=span.lift_slope,
        zero_lift_drag=span.zero_lift_drag,
        drag_rise_per_rad2=span.drag_rise,
        stall_angle_rad=span.stall_angle,
    )


def _polar(name: str, table: CsvTable) -> Section:
    mach = _mach_of(table)
    blocks = _blocks(mach)
    values = table.values
    moment = values.get("moment", np.zeros_like(values["angle"]))
    return PolarSection(
        name=name,
        mach=np.array([mach[block.start] for block in blocks]),
        angle_rad=tuple(values["angle"][block] for block in blocks),
        lift=tuple(values["lift"][block] for block in blocks),
        drag=tuple(values["drag"][block] for block in blocks),
        moment=tuple(moment[block] for block in blocks),
    )


def _mach_of(table: CsvTable) -> FloatArray:
    return table.values.get("mach", np.zeros_like(table.values["angle"]))


def _blocks(mach: FloatArray) -> list[slice]:
    edges = [0, *(np.flatnonzero(np.diff(mach) != 0.0) + 1).tolist(), mach.size]
    return [slice(start, stop) for start, stop in itertools.pairwise(edges)]
