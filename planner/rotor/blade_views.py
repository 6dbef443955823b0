"""The blade of the model as the methods want to see it."""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np

from planner.methods.beam import BladeBeam
from planner.methods.blade_inertia import HingedInertia, MassDistribution, blade_inertia
from planner.methods.coupled_beam import CoupledBlade
from planner.model.rotor import SymmetricSection

if TYPE_CHECKING:
    from planner.model.rotor import Blade, Section


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


def blade_mass_kg(blade: Blade) -> float:
    """Mass of one blade by its table, point masses included."""
    start = float(blade.stations.radius_m[0])
    return float(flap_inertia(blade, start).mass_kg)


def coupled_blade(blade: Blade) -> CoupledBlade:
    """The blade with its twist over the collective and its offsets, for coupled modes."""
    table = blade.stations
    reference = np.interp(blade.collective_radius_m, table.radius_m, table.twist_rad)
    points = sorted(blade.point_masses, key=lambda point: point.radius_m)
    return CoupledBlade(
        beam(blade),
        table.twist_rad - reference,
        table.cg_offset_m,
        np.array([point.cg_offset_m for point in points], dtype=np.float64),
    )


def section_at(blade: Blade, radius_m: float) -> Section:
    """Section that applies at a radius (the outer one at a joint)."""
    spans = [span for span in blade.sections if span.from_radius_m <= radius_m]
    return (spans[-1] if spans else blade.sections[0]).section


def lift_slope_per_rad(section: Section) -> float:
    """Lift slope near zero angle at the lowest Mach number that is tabled."""
    if isinstance(section, SymmetricSection):
        return section.lift_slope_per_rad
    angle, lift = section.angle_rad[0], section.lift[0]
    near = np.radians(2.0)
    rise = np.interp([-near, near], angle, lift)
    return float((rise[1] - rise[0]) / (2.0 * near))
