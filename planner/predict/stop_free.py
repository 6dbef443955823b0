"""The speed at and above which a run has left the region of its stops behind."""

from __future__ import annotations

from typing import TYPE_CHECKING

from planner.model.results import Status
from planner.predict.study import NotAssessedError

if TYPE_CHECKING:
    from planner.model.results import Prediction
    from planner.model.rotor import Rotor
    from planner.predict.study import Inputs

SAIL_SHARE = 0.35
"""Hubs without stops, and inverted rotors, whose blades hang away from the droop stop: share of
100 % rpm below which gusts throw blades about (25 to 35 %, from memory), so that quasi-static
flap is no prediction."""


def stop_free_speed_rad_s(inputs: Inputs, rotor: Rotor, lift_off: Prediction) -> float:
    """Release speed of a retracting stop; lift-off speed in this wind with margin of a fixed one.

    Raises:
        NotAssessedError: the lift-off speed was not assessed, or the rule book states no margin.
    """
    if rotor.droop_stop is None or inputs["stand.mounting"] == "inverted":
        return SAIL_SHARE * float(inputs["stand.full_speed_rad_s"])
    if rotor.droop_stop.retraction is not None:
        return rotor.droop_stop.retraction.release_rad_s
    margin = inputs.requests.stop_free_margin
    if margin is None:
        msg = "the rule book states no stop_free_margin for fixed droop stops"
        raise NotAssessedError(Status.NOT_STATED, msg)
    if lift_off.status[0] is not Status.OK:
        msg = f"lift_off_speed_in_wind is {lift_off.status[0].value}: {lift_off.reasons[0]}"
        raise NotAssessedError(lift_off.status[0], msg)
    return float(lift_off.high[0]) * (1.0 + margin)
