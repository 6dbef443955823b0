"""The blade as a rigid body about its flap hinge."""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np

from planner.methods.blade_inertia import lock_number, resample
from planner.predict.fineness import STATIONS
from planner.predict.rows import single
from planner.predict.study import Inputs, Study
from planner.rotor.blade_views import lift_slope_per_rad, section_at
from planner.rotor.setup import rotor_arrays

if TYPE_CHECKING:
    from collections.abc import Mapping

    from planner.model.results import Prediction
    from planner.model.rotor import Blade

_ID = "inertia"
_REFERENCE_SHARE = 0.75


def run(inputs: Inputs) -> Mapping[str, Prediction]:
    """Flap inertia, first moment and Lock number."""
    blade: Blade = inputs["rotor"].blade
    arrays = rotor_arrays(inputs["rotor"], STATIONS)
    hinge = arrays.hub.hinge_m
    inertia, first = arrays.flap_inertia_kg_m2, arrays.first_moment_kg_m
    at = _REFERENCE_SHARE * blade.radius_m
    chord = float(resample(blade.stations.radius_m, blade.stations.chord_m, [at])[0])
    slope = lift_slope_per_rad(section_at(blade, at))
    locks = [
        float(lock_number(density, slope, chord, blade.radius_m, inertia))
        for density in inputs.bounds("air_density")
    ]
    return {
        "blade_flap_inertia": single(
            "blade_flap_inertia", _ID, inertia, hand=moment_by_trapezia(blade, hinge, 2)
        ),
        "blade_first_moment": single(
            "blade_first_moment", _ID, first, hand=moment_by_trapezia(blade, hinge, 1)
        ),
        "lock_number": single("lock_number", _ID, locks[0], low=locks[1], high=locks[2]),
    }


def moment_by_trapezia(blade: Blade, hinge_m: float, power: int) -> float:
    """Mass moment about a hinge by the trapezoidal rule on 200 strips: the hand check."""
    radius = np.linspace(max(hinge_m, blade.stations.radius_m[0]), blade.radius_m, 201)
    mass = np.interp(radius, blade.stations.radius_m, blade.stations.mass_kg_m)
    points = sum(
        point.mass_kg * (point.radius_m - hinge_m) ** power
        for point in blade.point_masses
        if point.radius_m > hinge_m
    )
    return float(np.trapezoid(mass * (radius - hinge_m) ** power, radius)) + points


INERTIA = Study(_ID, 1, ("rotor",), ("air",), run)
