"""The blade of the model as the methods want to see it."""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np

from planner.methods.beam import BladeBeam
from planner.methods.blade_inertia import HingedInertia, MassDistribution, blade_inertia

if TYPE_CHECKING:
    from planner.model.rotor import Blade, Hub


def mass_distribution(blade: Blade) -> MassDistribution:
    """Mass per length and point masses."""
    return MassDistribution(
        blade.stations.radius_m,
        blade.stations.mass_kg_m,
        np.array([point.radius_m for point in blade.point_masses]),
        np.array([point.mass_kg for point in blade.point_masses]),
    )


def beam(blade: Blade) -> BladeBeam:
    """Stiffness and mass for the rotating beam."""
    table = blade.stations
    return BladeBeam(
        table.radius_m, table.mass_kg_m, table.flap_stiffness_N_m2, table.lag_stiffness_N_m2,
        table.torsion_stiffness_N_m2, table.pitch_inertia_kg_m,
        np.array([point.radius_m for point in blade.point_masses]),
        np.array([point.mass_kg for point in blade.point_masses]),
    )


def flap_hinge_m(hub: Hub) -> float:
    """Radius of the flap hinge; of the root where there is none; zero for a teeter hinge."""
    if hub.kind == "articulated":
        return hub.flap_hinge_m
    if hub.kind == "hingeless":
        return hub.root_m if hub.equivalent_hinge_m is None else hub.equivalent_hinge_m
    return 0.0


def flap_inertia(blade: Blade, hinge_m: float) -> HingedInertia:
    """Mass moments of the blade about a hinge radius."""
    return blade_inertia(mass_distribution(blade), hinge_m)
