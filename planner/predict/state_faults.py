"""Why a quantity of the rotor does not count in a segment, although states were solved."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

from planner.model.results import Status

if TYPE_CHECKING:
    from collections.abc import Iterator

    from planner.model.stand import Mounting
    from planner.predict.segment_results import SegmentResults

AIR_LOADS = ("thrust", "torque", "power", "blade_loading")
STOPS = ("droop_stop_clearance", "up_stop_clearance", "droop_stop_moment")
_TORQUE = ("torque", "power")
_Fault = tuple[bool, Status, str]


@dataclass(frozen=True)
class Scope:
    """What of the run decides whether states count."""

    mounting: Mounting
    gust_m_s: float
    has_torque_allowance: bool


def state_fault(quantity: str, found: SegmentResults, scope: Scope) -> tuple[Status, str]:
    """First fault that touches a quantity in a segment; OK and no words where there is none."""
    for faults in (_of_the_hub, _of_the_method, _of_contact):
        for is_so, status, reason in faults(quantity, found, scope):
            if is_so:
                return status, reason
    return Status.OK, ""


def _of_the_hub(quantity: str, found: SegmentResults, _: Scope) -> Iterator[_Fault]:
    yield (
        quantity in STOPS and found.rotor.droop_stop is None,
        Status.NOT_APPLICABLE,
        "the hub has no flap stops; its root moment is judged instead",
    )
    yield (
        quantity == "root_flap_moment" and found.rotor.hub.kind != "hingeless",
        Status.NOT_APPLICABLE,
        "the hub has a flap hinge; its stops are judged instead",
    )


def _of_the_method(quantity: str, found: SegmentResults, scope: Scope) -> Iterator[_Fault]:
    yield (
        scope.mounting == "axis level" and scope.gust_m_s > 0.0,
        Status.OUTSIDE_VALIDITY,
        "wind on a rotor with a level axis also blows through the disc, which is not modelled",
    )
    yield (
        found.is_empty,
        Status.OUTSIDE_VALIDITY,
        "the whole ramp lies in the region of the stops, where gusts throw blades about and "
        "quasi-static states are no prediction",
    )
    yield (
        quantity in _TORQUE and not scope.has_torque_allowance,
        Status.NOT_STATED,
        "the rule book states no allowance 'torque'",
    )
    yield (
        found.unconverged > 0,
        Status.NOT_CONVERGED,
        f"{found.unconverged} of {found.states.size} states found no periodic solution",
    )
    yield (
        found.works_outside_sections,
        Status.OUTSIDE_VALIDITY,
        "more than 5 % of the loads come from beyond the section data (stall or Mach number)",
    )


def _of_contact(quantity: str, found: SegmentResults, scope: Scope) -> Iterator[_Fault]:
    feels_contact = quantity not in AIR_LOADS
    parked = found.segment.kind == "hold" and found.segment.top_rad_s == 0.0
    yield (
        quantity in {"droop_stop_clearance", "up_stop_clearance"} and parked,
        Status.NOT_APPLICABLE,
        "the rotor is at rest: judged by the moment on the stop",
    )
    yield (
        quantity == "droop_stop_clearance" and found.rests,
        Status.NOT_APPLICABLE,
        "the blades rest on their droop stops all round: judged by the moment on the stop",
    )
    yield (
        feels_contact and found.reaches_below and scope.gust_m_s > 0.0,
        Status.OUTSIDE_VALIDITY,
        "the ramp passes the region of the stops in wind; its quasi-static states are "
        "information only until the ramp is marched in gusts",
    )
    # a teetering pair at rest lies on one stop or the other, whichever way it tips
    can_knock = feels_contact and not (parked and found.rotor.hub.kind == "teetering")
    yield (
        can_knock and found.knocks and quantity != "droop_stop_clearance",
        Status.OUTSIDE_VALIDITY,
        "a blade touches its droop stop in part of each turn; what the impact does is not "
        "predicted by a periodic solution",
    )
    yield (
        can_knock and found.reaches_up_stop and quantity != "up_stop_clearance",
        Status.OUTSIDE_VALIDITY,
        "a blade reaches its up stop; what the impact does is not predicted by a periodic "
        "solution",
    )
