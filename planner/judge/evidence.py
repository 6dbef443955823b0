"""What has to be judged before a built-in hazard class counts as closed by rules.

Without this a thin rule book could close a class with a rule that says nothing about the hazard.
Each class asks, in each segment, for one number out of every group below; a facility's book
chooses the limits, not whether the hazard is looked at. A class without groups is closed by an
outside document only: its methods are not there. A method that is added later adds its
quantities here.
"""

from __future__ import annotations

from typing import TYPE_CHECKING

from planner.judge.references import Missing, resolve
from planner.judge.rows import BLADE_FAMILIES, GIVEN_FAMILIES
from planner.judge.selection import crosses
from planner.model.rules import HAZARD_CLASSES

if TYPE_CHECKING:
    from collections.abc import Callable

    from planner.judge.case import Case
    from planner.model.plan import Segment
    from planner.model.results import Quantity
    from planner.model.rules import Rule

Group = tuple[tuple[str, str], ...]
"""Alternatives that serve equally: quantity id and mode family (empty: any)."""

TOP_SHARE = 0.9
"""Holds from this share of the card's highest speed have to be judged for blade modes too: the
loads that drive these grow with speed squared, so a book may leave out slow build-up holds."""
_PASSAGE: tuple[Group, ...] = ((("band_rate", ""), ("band_time", "")),)


def wanted(hazard_class: str, segment: Segment | None, case: Case) -> tuple[Group, ...] | None:
    """Groups of which one member each must be judged to close a class in a segment.

    Args:
        hazard_class: a built-in class, or one that the book or plan adds.
        segment: where; None for the run as a whole.
        case: plan and predictions.

    Returns:
        The groups; empty where any judged rule of the class serves (added classes) or where
        nothing of the kind can occur (a ramp that enters no keep-out band); None where no
        quantity there is can close the class.
    """
    if hazard_class not in HAZARD_CLASSES:
        return ()
    if hazard_class in _ON_RUN:
        return _ON_RUN[hazard_class]
    if segment is None or hazard_class not in _BY_SEGMENT:
        return None
    return _BY_SEGMENT[hazard_class](segment, case)


def faces_danger(rule: Rule, quantity: Quantity) -> bool:
    """Tell whether a rule limits its quantity on the dangerous side."""
    if quantity.danger == "high":
        return rule.sense == "at most"
    return quantity.danger != "low" or rule.sense == "at least"


def _stops(segment: Segment, case: Case) -> tuple[Group, ...]:
    """A hingeless blade by its root moment; others by clearance, or by the moment of resting."""
    if case.plan.rotor.hub.kind == "hingeless":
        return ((("root_flap_moment", ""),),)
    droop: Group = (("droop_stop_clearance", ""),)
    span = case.spans[segment.id]
    free = resolve("stop_free_speed", case, span)
    if not isinstance(free, Missing) and span.highest_rad_s < free.least:
        droop = (*droop, ("droop_stop_moment", ""))
    return (droop, (("up_stop_clearance", ""),))


def _resonance(segment: Segment, case: Case) -> tuple[Group, ...]:
    if segment.kind == "hold":
        top = TOP_SHARE * case.whole_run.highest_rad_s
        blade = BLADE_FAMILIES if case.spans[segment.id].highest_rad_s >= top else ()
        return tuple((("harmonic_spacing", family),) for family in (*blade, *GIVEN_FAMILIES))
    return _PASSAGE if any(crosses(segment, band) for band in case.plan.keep_outs) else ()


def _loads(_: Segment, __: Case) -> tuple[Group, ...]:
    return (
        (("thrust", ""),),
        (("root_centrifugal_force", ""),),
        (("hub_moment", ""),),
    )


_ON_RUN: dict[str, tuple[Group, ...]] = {
    "drive and overspeed": ((("card_speed", ""),), (("torque", ""), ("power", ""))),
}
_BY_SEGMENT: dict[str, Callable[[Segment, Case], tuple[Group, ...]]] = {
    "stops": _stops,
    "resonance": _resonance,
    "loads": _loads,
}
