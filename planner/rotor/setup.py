"""From the article under test to the arrays of the rotor's equations."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

from planner.methods.beam import Root, flap_matrices
from planner.methods.beam_modes import equivalent_hinge, frequencies
from planner.methods.blade_inertia import blade_inertia
from planner.methods.section_lookup import StationSections, station_tables
from planner.methods.sections import (
    NACA_0012_DIVERGENCE_MACH,
    PolarData,
    SectionTable,
    SymmetricLaw,
    polar_section,
    symmetric_section,
)
from planner.methods.stall import Continuation
from planner.model.rotor import ArticulatedHub, HingelessHub, SymmetricSection, TeeteringHub
from planner.rotor.blade_views import beam, mass_distribution

if TYPE_CHECKING:
    from numpy.typing import NDArray

    from planner.model.rotor import Blade, Hub, Rotor, Section

    FloatArray = NDArray[np.float64]

STATIONS = 24
"""Gauss points along the lifting blade; multiples of eight keep whole vector registers."""

STALL_FALL_SHARE_PER_MACH = 16.0 / 15.0
"""NACA TN 4357, read second hand: straight to 15 - 16 M degrees, scaled to the stated stall."""

LOW_MACH = 0.3
"""Up to here compressibility is weak: a polar tabled below it stands for all Mach up to it."""


@dataclass(frozen=True)
class HubFreedom:
    """How a hub lets one blade flap: the numbers by which the kinds of hub differ.

    Attributes:
        hinge_m: Radius of the hinge or equivalent hinge.
        spring_N_m_rad: Hinge spring that one blade works against.
        spring_neutral_rad: Flap angle at which that spring is relaxed.
        damper_N_m_s_rad: Hinge damper of one blade.
        pitch_flap: Fall of pitch with flap, tan(delta-three).
        fixed_flap_rad: Part of flap that is built in and no freedom.
        pair: 0: every blade flaps alone. 1: opposite blades flap as one rigid pair.
    """

    hinge_m: float
    spring_N_m_rad: float
    spring_neutral_rad: float
    damper_N_m_s_rad: float
    pitch_flap: float
    fixed_flap_rad: float
    pair: float


@dataclass(frozen=True, eq=False)
class RotorArrays:
    """Everything about the rotor that its equations need; station arrays have shape (stations,).

    Attributes:
        n_blades: Number of blades.
        radius_m: Tip radius.
        aero_root_m: Inner end of the lifting blade.
        station_radius_m: Radii of the air-load stations.
        station_width_m: Integration weights of the stations.
        chord_m: Chord at the stations.
        twist_rad: Pitch at the stations over the collective.
        sections: Section tables of the stations.
        hub: Freedom of flap.
        flap_inertia_kg_m2: Moment of inertia of one blade about the hinge.
        first_moment_kg_m: First moment of one blade about the hinge.
        blade_mass_kg: Mass of one blade outboard of the hinge.
        centrifugal_factor_kg_m: Centrifugal force at the hinge over speed squared.
        blade_area_m2: Area of all blades, chord weighted with the square of the radius.
        cyclic_authority_rad: Largest cyclic pitch, cosine and sine parts combined.
    """

    n_blades: int
    radius_m: float
    aero_root_m: float
    station_radius_m: FloatArray
    station_width_m: FloatArray
    chord_m: FloatArray
    twist_rad: FloatArray
    sections: StationSections
    hub: HubFreedom
    flap_inertia_kg_m2: float
    first_moment_kg_m: float
    blade_mass_kg: float
    centrifugal_factor_kg_m: float
    blade_area_m2: float
    cyclic_authority_rad: float

    @property
    def arm_m(self) -> FloatArray:
        """Length of blade between hinge and station that flaps, (stations,)."""
        return np.maximum(self.station_radius_m - self.hub.hinge_m, 0.0)

    @property
    def still_m(self) -> FloatArray:
        """Radius that does not shrink with flap: the hinge's, or a station's inboard of it."""
        return np.minimum(self.station_radius_m, self.hub.hinge_m)


def rotor_arrays(rotor: Rotor, n_stations: int = STATIONS) -> RotorArrays:
    """Bind a rotor to arrays.

    Twist is counted from the collective radius, where pitch equals the collective. Mass
    properties are exact for the tabled mass; the air load is integrated by Gauss points from the
    aerodynamic root to the tip, where chord and twist are linear between tabled stations.

    Args:
        rotor: The article under test.
        n_stations: Gauss points along the lifting blade.

    Returns:
        The arrays.

    Raises:
        ValueError: A table or hub that cannot be used; the message names the fault.

    Validity:
        Rigid straight blade, equal blades; a hingeless blade as its equivalent hinge.
    """
    blade = rotor.blade
    table = blade.stations
    node, weight = np.polynomial.legendre.leggauss(n_stations)
    half = 0.5 * (blade.radius_m - blade.aero_root_m)
    radius = blade.aero_root_m + half * (1.0 + node)
    width = half * weight
    chord = np.interp(radius, table.radius_m, table.chord_m)
    reference = np.interp(blade.collective_radius_m, table.radius_m, table.twist_rad)
    hub = hub_freedom(rotor)
    about = blade_inertia(mass_distribution(blade), hub.hinge_m)
    mean_chord = np.sum(width * chord * radius**2) / np.sum(width * radius**2)
    return RotorArrays(
        n_blades=rotor.n_blades,
        radius_m=blade.radius_m,
        aero_root_m=blade.aero_root_m,
        station_radius_m=radius,
        station_width_m=width,
        chord_m=chord,
        twist_rad=np.interp(radius, table.radius_m, table.twist_rad) - reference,
        sections=_station_sections(blade, radius),
        hub=hub,
        flap_inertia_kg_m2=float(about.second_moment_kg_m2),
        first_moment_kg_m=float(about.first_moment_kg_m),
        blade_mass_kg=float(about.mass_kg),
        centrifugal_factor_kg_m=float(about.centrifugal_factor_kg_m),
        blade_area_m2=rotor.n_blades * float(mean_chord) * blade.radius_m,
        cyclic_authority_rad=rotor.cyclic_authority_rad,
    )


def hub_freedom(rotor: Rotor) -> HubFreedom:
    """Say how the rotor's hub lets a blade flap.

    A teetering pair shares one spring and one damper, so that each blade works against half of
    them; its precone is built in. A hingeless blade takes its stated equivalent hinge, else the
    one that gives its first flap frequency at rest and at the design maximum speed.

    Args:
        rotor: The article under test.

    Returns:
        Hinge, spring, damper, pitch coupling and pairing.

    Raises:
        ValueError: No equivalent hinge fits the hingeless blade.
    """
    hub: Hub = rotor.hub
    coupling = float(np.tan(hub.pitch_flap_coupling_rad))
    match hub:
        case ArticulatedHub():
            neutral = hub.flap_spring_neutral_rad + hub.precone_rad
            return HubFreedom(
                hub.flap_hinge_m,
                hub.flap_spring_N_m_rad,
                neutral,
                hub.flap_damper_N_m_s_rad,
                coupling,
                fixed_flap_rad=0.0,
                pair=0.0,
            )
        case TeeteringHub():
            return HubFreedom(
                0.0,
                0.5 * hub.teeter_spring_N_m_rad,
                hub.precone_rad,
                0.5 * hub.teeter_damper_N_m_s_rad,
                coupling,
                fixed_flap_rad=hub.precone_rad,
                pair=1.0,
            )
        case HingelessHub():
            hinge, spring = _equivalent_hinge(rotor, hub)
            return HubFreedom(
                hinge,
                spring,
                hub.precone_rad,
                hub.flap_damper_N_m_s_rad,
                coupling,
                fixed_flap_rad=0.0,
                pair=0.0,
            )


def _equivalent_hinge(rotor: Rotor, hub: HingelessHub) -> tuple[float, float]:
    if hub.equivalent_hinge_m is not None and hub.equivalent_spring_N_m_rad is not None:
        return hub.equivalent_hinge_m, hub.equivalent_spring_N_m_rad
    reference = rotor.design_maximum_rad_s
    matrices = flap_matrices(beam(rotor.blade), Root(hub.root_m))
    rest, turning = frequencies(matrices, np.array([0.0, reference]), n_modes=1)[:, 0]
    found = equivalent_hinge(
        mass_distribution(rotor.blade), hub.root_m, reference, float(rest), float(turning)
    )
    return found.radius_m, found.spring_N_m_rad


def _station_sections(blade: Blade, radius_m: FloatArray) -> StationSections:
    """Tables of the stations; each station takes the section in whose span it lies."""
    chord = np.interp(0.75 * blade.radius_m, blade.stations.radius_m, blade.stations.chord_m)
    aspect_ratio = blade.radius_m / float(chord)
    tables = [_section_table(span.section, aspect_ratio) for span in blade.sections]
    starts = np.array([span.from_radius_m for span in blade.sections])
    place = np.clip(np.searchsorted(starts, radius_m, side="right") - 1, 0, starts.size - 1)
    return station_tables(tables, np.eye(starts.size)[place])


def _section_table(section: Section, aspect_ratio: float) -> SectionTable:
    if isinstance(section, SymmetricSection):
        law = SymmetricLaw(
            lift_slope_per_rad=section.lift_slope_per_rad,
            zero_lift_drag=section.zero_lift_drag,
            drag_rise_per_rad2=section.drag_rise_per_rad2,
            stall_angle_rad=section.stall_angle_rad,
            stall_fall_rad_per_mach=STALL_FALL_SHARE_PER_MACH * section.stall_angle_rad,
            divergence_mach=NACA_0012_DIVERGENCE_MACH,
        )
        return symmetric_section(law, Continuation(aspect_ratio, section.zero_lift_drag))
    least_drag = min(float(np.min(drag)) for drag in section.drag)
    polars = PolarData(section.mach, section.angle_rad, section.lift, section.drag, section.moment)
    first, last = float(section.mach[0]), float(section.mach[-1])
    valid_mach = (0.0 if first <= LOW_MACH else first, max(last, LOW_MACH))
    return polar_section(polars, Continuation(aspect_ratio, least_drag), valid_mach)
