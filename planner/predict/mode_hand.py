"""The hand check of natural frequencies: a rigid blade about its hinge."""

from __future__ import annotations

import math
from typing import TYPE_CHECKING

from planner.predict.study_inertia import moment_by_trapezia
from planner.rotor.setup import hub_freedom

if TYPE_CHECKING:
    from planner.model.rotor import Rotor
    from planner.predict.study import Inputs


def hand_frequency(mode: str, inputs: Inputs, speed_rad_s: float) -> float:
    """First flap and lag frequency of a rigid blade about its hinge; NaN for other modes.

    A hingeless blade flaps about its equivalent hinge, stated or found: a statement that does not
    fit the blade's own stiffness shows here. Mass moments come from a trapezoidal sum.
    """
    rotor: Rotor = inputs["rotor"]
    if speed_rad_s <= 0.0 or mode not in {"flap 1", "flap 1 cyclic", "lag 1"}:
        return math.nan
    if mode == "lag 1":
        hub = rotor.hub
        if hub.kind != "articulated":
            return math.nan
        hinge, spring, turning = hub.lag_hinge_m, hub.lag_spring_N_m_rad, 0.0
    else:
        freedom = hub_freedom(rotor)
        hinge, spring, turning = freedom.hinge_m, freedom.spring_N_m_rad, 1.0
    inertia = moment_by_trapezia(rotor.blade, hinge, 2)
    offset = hinge * moment_by_trapezia(rotor.blade, hinge, 1) / inertia
    return speed_rad_s * math.sqrt(turning + offset + spring / (inertia * speed_rad_s**2))
