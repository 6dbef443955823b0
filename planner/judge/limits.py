"""A rule's limit as one number at one place: constant, table over speed, or share of a reference.

Over a range of speeds the stricter end counts. A table is interpolated, never extrapolated.
"""

from __future__ import annotations

import math
from itertools import pairwise
from typing import TYPE_CHECKING

from planner.judge.case import EVERY_SPEED, Case, Span
from planner.judge.references import Missing, Range, resolve
from planner.predict.register import REFERENCES
from planner.units import UnitError, dimension_of

if TYPE_CHECKING:
    from planner.model.results import Quantity
    from planner.model.rules import Limit, Rule, Sense

_SAME = {"frequency": "rotor speed"}
"""Dimensions that share one SI unit and may be held against each other."""


def limit_over(limit: Limit, sense: Sense, span: Span, case: Case) -> float | Missing:
    """Find the strictest value of a limit over a range of speeds [SI].

    Args:
        limit: as the rule book states it.
        sense: "at most" takes the least value, "at least" the greatest.
        span: rotor speeds where the limit has to hold.
        case: plan and predictions, for references.

    Returns:
        A finite number, or why there is none.
    """
    if limit.constant is not None:
        ends: Range | Missing = Range(limit.constant, limit.constant)
    elif limit.table is not None:
        ends = _table_over(limit.table, span)
    elif limit.share is not None and limit.reference is not None:
        ends = _share_of(limit.share, limit.reference, span, case)
    else:
        ends = Missing("the rule states no limit")
    if isinstance(ends, Missing):
        return ends
    value = ends.least if sense == "at most" else ends.greatest
    return value if math.isfinite(value) else Missing("the limit is not a finite number")


def speed_range(rule: Rule, case: Case) -> Span | Missing:
    """Find the rotor speeds where a rule applies.

    An end that names a reference holds the share of it in its speed field. Of an uncertain
    reference the end that widens the range counts.
    """
    given = rule.speed_range
    low, high = given.from_rad_s, given.to_rad_s
    if given.from_reference is not None:
        found = _share_of(low, given.from_reference, EVERY_SPEED, case)
        if isinstance(found, Missing):
            return found
        low = found.least
    if given.to_reference is not None:
        share = math.nan if high is None else high
        found = _share_of(share, given.to_reference, EVERY_SPEED, case)
        if isinstance(found, Missing):
            return found
        high = found.greatest
    if math.isnan(low) or (high is not None and math.isnan(high)):
        return Missing("the rule's speed range is not a number")
    return Span(low, math.inf if high is None else high)


def mismatch(rule: Rule, quantity: Quantity) -> str:
    """Tell why a rule cannot be held against its quantity; empty where it can."""
    if (rule.mode_family or rule.mode_orders) and "mode" not in quantity.axes:
        return f"the rule matches nothing: it is for modes, {quantity.id} has none"
    wanted = _dimension(quantity.unit)
    if rule.unit and _dimension(rule.unit) != wanted:
        return f"the limit is in {rule.unit!r}, {quantity.id} in {quantity.unit!r}"
    for limit in (rule.limit, rule.caution):
        if limit is None or limit.reference is None:
            continue
        unit = REFERENCES.get(limit.reference)
        if unit is not None and _dimension(unit) != wanted:
            return f"{quantity.id} ({quantity.unit}) is held against {limit.reference} ({unit})"
    return ""


def _dimension(unit: str) -> str:
    try:
        dimension = dimension_of(unit)
    except UnitError:
        return f"unknown unit {unit!r}"
    return _SAME.get(dimension, dimension)


def _share_of(share: float, reference: str, span: Span, case: Case) -> Range | Missing:
    found = resolve(reference, case, span)
    if isinstance(found, Missing):
        return found
    ends = (share * found.least, share * found.greatest)
    return Range(min(ends), max(ends))


def _table_over(table: tuple[tuple[float, float], ...], span: Span) -> Range | Missing:
    speeds = [speed for speed, _ in table]
    if not table or not all(a < b for a, b in pairwise(speeds)):
        return Missing("the limit's table must have increasing speeds")
    if not (speeds[0] <= span.lowest_rad_s and span.highest_rad_s <= speeds[-1]):
        return Missing("the limit's table does not reach the rotor speeds of this place")
    values = [_interpolated(table, span.lowest_rad_s), _interpolated(table, span.highest_rad_s)]
    values += [v for s, v in table if span.lowest_rad_s < s < span.highest_rad_s]
    if not all(math.isfinite(value) for value in values):
        return Missing("the limit's table holds a value that is not finite")
    return Range(min(values), max(values))


def _interpolated(table: tuple[tuple[float, float], ...], speed_rad_s: float) -> float:
    for (s0, v0), (s1, v1) in pairwise(table):
        if s0 <= speed_rad_s <= s1:
            return v0 + (v1 - v0) * (speed_rad_s - s0) / (s1 - s0)
    return table[0][1]
