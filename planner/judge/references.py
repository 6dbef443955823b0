"""Reference values that a rule book may take shares of, found from the model and predictions.

A reference may depend on rotor speed (flap travel jumps where a droop stop retracts), so each
is resolved over a range of speeds to its least and greatest value, and the caller takes the
stricter end. What cannot be resolved is `Missing` with its reason, never a default.
"""

from __future__ import annotations

import math
from collections.abc import Callable, Mapping
from dataclasses import dataclass
from types import MappingProxyType
from typing import TYPE_CHECKING

from planner.judge.case import Case, Span
from planner.model.results import Status
from planner.model.rotor import HingelessHub

if TYPE_CHECKING:
    from planner.model.plan import Plan
    from planner.model.results import Prediction, Predictions
    from planner.model.rotor import LagStop, Stop


@dataclass(frozen=True)
class Range:
    """Least and greatest value of a reference over some speeds, SI."""

    least: float
    greatest: float


@dataclass(frozen=True)
class Missing:
    """A number that cannot be had, and why."""

    reason: str


Found = Range | Missing
_Resolver = Callable[[Case, Span], Found]


def resolve(reference_id: str, case: Case, span: Span) -> Found:
    """Find a reference value over a range of speeds.

    Args:
        reference_id: an id out of ``RESOLVERS``.
        case: plan and predictions.
        span: rotor speeds over which the value is needed.

    Returns:
        Least and greatest value, or the reason why there is none. A value that is not finite, or
        not above zero (``stop_free_speed`` may be zero), is missing too.
    """
    resolver = RESOLVERS.get(reference_id)
    if resolver is None:
        return Missing(f"there is no reference value {reference_id!r}")
    found = resolver(case, span)
    if isinstance(found, Missing):
        return Missing(f"reference {reference_id}: {found.reason}")
    smallest = 0.0 if reference_id == "stop_free_speed" else math.ulp(0.0)
    if not smallest <= found.least <= found.greatest < math.inf:
        return Missing(f"reference {reference_id} is not a positive number")
    return found


def reference_table(
    plan: Plan, predictions: Predictions, speed_rad_s: float
) -> dict[str, float | None]:
    """List every reference value at one rotor speed, None where it cannot be resolved.

    Where a value is a range (a stop between release and re-seat) the least is given.
    """
    case = Case(plan, {}, {}, predictions)
    table: dict[str, float | None] = {}
    for reference_id in RESOLVERS:
        found = resolve(reference_id, case, Span(speed_rad_s, speed_rad_s))
        table[reference_id] = found.least if isinstance(found, Range) else None
    return table


def _fixed(read: Callable[[Plan], float]) -> _Resolver:
    def found(case: Case, _: Span) -> Found:
        value = read(case.plan)
        return Range(value, value)

    return found


def _stop_rating(name: str, read: Callable[[Plan], Stop | None]) -> _Resolver:
    def found(case: Case, _: Span) -> Found:
        stop = read(case.plan)
        if stop is None:
            return Missing(f"the hub has no {name} stop")
        return Range(stop.moment_rating_N_m, stop.moment_rating_N_m)

    return found


def _lag_stop(read: Callable[[LagStop], float]) -> _Resolver:
    def found(case: Case, _: Span) -> Found:
        stop = case.plan.rotor.lag_stop
        if stop is None:
            return Missing("the hub has no lag stops")
        value = read(stop)
        return Range(value, value)

    return found


def _hub_amplitude(case: Case, _: Span) -> Found:
    rated = case.plan.stand.ratings.hub_amplitude_m
    if rated is None:
        return Missing("the stand file states no hub_amplitude in [ratings]")
    return Range(rated, rated)


def _root_moment_rating(case: Case, _: Span) -> Found:
    hub = case.plan.rotor.hub
    if not isinstance(hub, HingelessHub):
        return Missing(f"the hub is {hub.kind}, only a hingeless one has it")
    return Range(hub.root_moment_rating_N_m, hub.root_moment_rating_N_m)


def predicted(quantity: str, predictions: Predictions) -> Found:
    """Find the range of a predicted number, all of whose rows must be OK and finite."""
    prediction = predictions.get(quantity)
    if prediction is None or not prediction.labels:
        return Missing(f"{quantity} was not predicted")
    faulty = next((i for i, s in enumerate(prediction.status) if s is not Status.OK), None)
    if faulty is not None:
        return Missing(f"{quantity} is {_status_text(prediction, faulty)}")
    numbers = [
        number
        for array in (prediction.value, prediction.low, prediction.high)
        for number in array.tolist()
    ]
    if not all(math.isfinite(number) for number in numbers):
        return Missing(f"{quantity} is not finite")
    return Range(min(numbers), max(numbers))


def _status_text(prediction: Prediction, row: int) -> str:
    return f"{prediction.status[row].value}: {prediction.reasons[row]}"


def _card_speed(case: Case, _: Span) -> Found:
    return predicted("card_speed", case.predictions)


def _stop_free_speed(case: Case, _: Span) -> Found:
    return predicted("stop_free_speed", case.predictions)


def _flap_travel(case: Case, span: Span) -> Found:
    """Up-stop angle less droop-stop angle.

    Between re-seat and release a retracting stop may be in either place, depending on the way
    the speed came; both travels count there.
    """
    droop, up = case.plan.rotor.droop_stop, case.plan.rotor.up_stop
    if droop is None or up is None:
        return Missing("the hub has no flap stops")
    angles = [droop.angle_rad]
    if droop.retraction is not None:
        seated = span.lowest_rad_s < droop.retraction.release_rad_s
        retracted = span.highest_rad_s > droop.retraction.reseat_rad_s
        angles = [droop.angle_rad] * seated + [droop.retraction.retracted_angle_rad] * retracted
    travels = [up.angle_rad - angle for angle in angles]
    return Range(min(travels), max(travels)) if travels else Missing("no speed was given")


RESOLVERS: Mapping[str, _Resolver] = MappingProxyType(
    {
        "design_maximum_speed": _fixed(lambda p: p.rotor.design_maximum_rad_s),
        "proven_speed": _fixed(lambda p: p.rotor.proven_rad_s),
        "lowest_design_or_proven_speed": _fixed(
            lambda p: min(p.rotor.design_maximum_rad_s, p.rotor.proven_rad_s)
        ),
        "full_speed": _fixed(lambda p: p.stand.full_speed_rad_s),
        "card_speed": _card_speed,
        "stop_free_speed": _stop_free_speed,
        "drive_maximum_speed": _fixed(lambda p: p.stand.drive.maximum_rad_s),
        "drive_torque_rating": _fixed(lambda p: p.stand.drive.torque_rating_N_m),
        "drive_power_rating": _fixed(lambda p: p.stand.drive.power_rating_W),
        "stand_thrust_rating": _fixed(lambda p: p.stand.ratings.thrust_N),
        "stand_hub_moment_rating": _fixed(lambda p: p.stand.ratings.hub_moment_N_m),
        "stand_hub_amplitude_rating": _hub_amplitude,
        "root_force_rating": _fixed(lambda p: p.rotor.root_force_rating_N),
        "root_moment_rating": _root_moment_rating,
        "droop_stop_moment_rating": _stop_rating("droop", lambda p: p.rotor.droop_stop),
        "up_stop_moment_rating": _stop_rating("up", lambda p: p.rotor.up_stop),
        "lag_stop_moment_rating": _lag_stop(lambda s: s.moment_rating_N_m),
        "flap_travel": _flap_travel,
        "lag_travel": _lag_stop(lambda s: (s.lag_angle_rad - s.lead_angle_rad) / 2.0),
        "cyclic_authority": _fixed(lambda p: p.rotor.cyclic_authority_rad),
        "blade_radius": _fixed(lambda p: p.rotor.blade.radius_m),
    }
)
"""Id to the function that finds it; the ids are those of the register's REFERENCES."""
