"""Limits and speed ranges of rules: units checked against the quantity that is judged."""

from __future__ import annotations

import math
from dataclasses import dataclass
from typing import TYPE_CHECKING

from planner import units
from planner.files.faults import did_you_mean, listed, minus_mend, shown
from planner.files.schema_rules import OverSpeedTable, ShareTable
from planner.files.schema_values import Measured, Unknown
from planner.model.rules import Limit, Sense, SpeedRange
from planner.units import from_si

if TYPE_CHECKING:
    from collections.abc import Mapping

    from planner.files.positions import KeyPath
    from planner.files.source import Document

_RELATIVE = {"rotor speed": "relative speed", "speed rate": "relative rate"}


@dataclass(frozen=True)
class Scale:
    """How a value is written: its dimensions, and the references it may be a share of."""

    dimensions: tuple[str, ...]
    references: Mapping[str, str]
    full_speed: float


def scale_of(unit: str, references: Mapping[str, str], full_speed: float) -> Scale:
    """Find the dimensions that have a unit; speeds may also be percent of full speed."""
    found = [name for name, table in units.DIMENSIONS.items() if unit in table]
    relative = [_RELATIVE[name] for name in found if name in _RELATIVE]
    return Scale((*found, *relative), references, full_speed)


def limit_of(
    document: Document,
    path: KeyPath,
    value: str | float | Unknown | ShareTable | OverSpeedTable,
    scale: Scale,
) -> Limit:
    """Read a limit in any of its three forms, adding its faults."""
    match value:
        case ShareTable():
            _check_reference(document, path, value, scale)
            return Limit(share=value.share, reference=value.of)
        case OverSpeedTable():
            return Limit(table=_table(document, (*path, "over_rpm"), value, scale))
        case _:
            return Limit(constant=_constant(document, path, value, scale))


def _table(
    document: Document, path: KeyPath, value: OverSpeedTable, scale: Scale
) -> tuple[tuple[float, float], ...]:
    rows = tuple(
        (
            speed.resolved(scale.full_speed),
            _constant(document, (*path, i, 1), amount, scale),
        )
        for i, (speed, amount) in enumerate(value.over_rpm)
    )
    for i in range(1, len(rows)):
        if rows[i][0] <= rows[i - 1][0]:
            rpm = from_si(rows[i - 1][0], "rpm")
            expected = f"a speed above {rpm:g} rpm of the row before"
            document.fault((*path, i, 0), expected, "order the rows by speed")
    return rows


def _constant(
    document: Document, path: KeyPath, value: str | float | Unknown, scale: Scale
) -> float:
    if isinstance(value, Unknown):
        return math.nan
    bare = scale.dimensions == ("number",)
    if not isinstance(value, str):
        if bare:
            return value
        expected = f"a value in {listed(units.unit_names(*scale.dimensions))}"
        document.fault(path, expected, "write number and unit as one text in quotes")
        return math.nan
    try:
        number, dimension = units.parse(value, *scale.dimensions)
    except units.UnitError as error:
        expected = (
            "a bare number"
            if bare
            else f"a value in {listed(units.unit_names(*scale.dimensions))},"
            " the unit of the quantity"
        )
        mend = minus_mend(value) or error.mend.replace("'", '"') or "correct the unit"
        document.fault(path, expected, mend)
        return math.nan
    if not math.isfinite(number):
        document.fault(path, "a finite value", "correct the value")
    return Measured(number, dimension).resolved(scale.full_speed)


def _check_reference(document: Document, path: KeyPath, value: ShareTable, scale: Scale) -> None:
    if not value.of:
        return
    unit = scale.references.get(value.of)
    if unit is None:
        mend = did_you_mean(value.of, scale.references) or "use one of these"
        document.fault((*path, "of"), f"a reference: {listed(scale.references)}", mend)
    elif unit not in units.unit_names(*scale.dimensions):
        expected = f"a reference in {listed(units.unit_names(*scale.dimensions))}"
        found = f"{shown(value.of)} in {unit or 'no unit'}"
        document.fault((*path, "of"), expected, "refer to a value of the same dimension", found)


def check_strictness(
    document: Document, path: KeyPath, sense: Sense, limit: Limit, caution: Limit
) -> None:
    """Add a fault when a caution would come only after its limit."""
    pairs = [(limit.constant, caution.constant)]
    if limit.reference == caution.reference:
        pairs.append((limit.share, caution.share))
    for hard, soft in pairs:
        if hard is None or soft is None:
            continue
        if (sense == "at most" and soft > hard) or (sense == "at least" and soft < hard):
            document.fault(path, "a caution that comes before the limit", "swap the two values")


def speed_range(
    document: Document,
    path: KeyPath,
    ends: tuple[Measured | ShareTable | None, Measured | ShareTable | None],
    scale: Scale,
) -> SpeedRange:
    """Read from and to; an end that is a share keeps the share beside its reference."""
    values: list[float | None] = []
    names: list[str | None] = []
    for key, end in zip(("from", "to"), ends, strict=True):
        if isinstance(end, ShareTable):
            _check_reference(document, (*path, key), end, scale)
            values.append(end.share)
            names.append(end.of)
        else:
            values.append(None if end is None else end.resolved(scale.full_speed))
            names.append(None)
    low, high = values
    if low is not None and high is not None and names[0] == names[1] and low > high:
        document.fault((*path, "to"), "a speed at or above from", "swap from and to")
    return SpeedRange(low or 0.0, high, *names)
