"""What drives the stand once per revolution: the unbalance that passages are computed for."""

from __future__ import annotations

from typing import TYPE_CHECKING

from planner.methods.unbalance import (
    grade_unbalance_kg_m,
    lag_angle_unbalance_kg_m,
    static_moment_unbalance_kg_m,
    total_unbalance_kg_m,
)
from planner.model.results import Labels, Status
from planner.predict.rows import Rows
from planner.predict.study import Inputs, Study
from planner.rotor.blade_views import flap_inertia

if TYPE_CHECKING:
    from collections.abc import Mapping

    from planner.model.results import Prediction
    from planner.model.rotor import Balance, Blade, Hub

_ID = "unbalance"
NOT_STATED = (
    "the rotor file states no [balance]: grade or measured unbalance, and how far the blades "
    "differ in static moment and lag angle"
)


def run(inputs: Inputs) -> Mapping[str, Prediction]:
    """Residual unbalance, and what unequal blades add in the worst phase."""
    rows = Rows("unbalance", _ID)
    balance: Balance | None = inputs["rotor.balance"]
    if balance is None:
        rows.flag(Labels(), Status.NOT_STATED, NOT_STATED)
    else:
        n = inputs["rotor.n_blades"]
        about_lag = flap_inertia(inputs["rotor.blade"], _lag_radius_m(inputs)).first_moment_kg_m
        rows.add(
            Labels(),
            float(
                total_unbalance_kg_m(
                    residual_kg_m(balance),
                    static_moment_unbalance_kg_m(balance.static_moment_spread_kg_m, n),
                    lag_angle_unbalance_kg_m(balance.lag_angle_spread_rad, float(about_lag), n),
                )
            ),
        )
    return {"unbalance": rows.prediction()}


def residual_kg_m(balance: Balance) -> float:
    """Of hub and rotor: as measured, or what the grade allows."""
    if balance.measured_kg_m is not None:
        return balance.measured_kg_m
    stated = (balance.grade_m_s, balance.mass_kg, balance.reference_rad_s)
    grade, mass, speed = (0.0 if value is None else value for value in stated)
    return float(grade_unbalance_kg_m(grade, mass, speed))


def _lag_radius_m(inputs: Inputs) -> float:
    """Radius about which a blade lags: its hinge, or where it is held."""
    hub: Hub = inputs["rotor.hub"]
    blade: Blade = inputs["rotor.blade"]
    if hub.kind == "articulated":
        return hub.lag_hinge_m
    return hub.root_m if hub.kind == "hingeless" else float(blade.stations.radius_m[0])


UNBALANCE = Study(_ID, 1, ("rotor.balance", "rotor.blade", "rotor.hub", "rotor.n_blades"), (), run)
