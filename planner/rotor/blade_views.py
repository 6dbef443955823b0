"""The blade of the model as the methods want to see it."""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np

from planner.methods.beam import BladeBeam
from planner.methods.blade_inertia import HingedInertia, MassDistribution, blade_inertia

if TYPE_CHECKING:
    from planner.model.rotor import Blade


def mass_distribution(blade: Blade) -> MassDistribution:
    """Mass per length and point masses."""
    points = sorted(blade.point_masses, key=lambda point: point.radius_m)
    return MassDistribution(
        blade.stations.radius_m,
        blade.stations.mass_kg_m,
        np.array([point.radius_m for point in points], dtype=np.float64),
        np.array([point.mass_kg for point in points], dtype=np.float64),
    )


def beam(blade: Blade) -> BladeBeam:
    """Stiffness and mass for the rotating beam."""
    table, mass = blade.stations, mass_distribution(blade)
    return BladeBeam(
        table.radius_m,
        table.mass_kg_m,
        table.flap_stiffness_N_m2,
        table.lag_stiffness_N_m2,
        table.torsion_stiffness_N_m2,
        table.pitch_inertia_kg_m,
        mass.point_radius_m,
        mass.point_mass_kg,
    )


def flap_inertia(blade: Blade, hinge_m: float) -> HingedInertia:
    """Mass moments of the blade about a hinge radius."""
    return blade_inertia(mass_distribution(blade), hinge_m)
