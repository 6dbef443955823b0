"""Rotating blade as a beam: mass and stiffness matrices of flap, lag and torsion.

The stiffness is affine in the square of the rotor speed, K = K₀ + Ω² K₁, so that one assembly
serves every speed. ``planner.methods.beam_modes`` turns the matrices into frequencies and shapes.
"""

from __future__ import annotations

import math
from dataclasses import dataclass, field
from typing import TYPE_CHECKING, Literal

import numpy as np

from planner.methods.beam_elements import Mesh, gram, node_radii, quadrature, shapes
from planner.methods.blade_inertia import (
    MassDistribution,
    outboard_centrifugal_factor,
    require_values,
)

if TYPE_CHECKING:
    from numpy.typing import NDArray

    from planner.methods.beam_elements import Quadrature

    FloatArray = NDArray[np.float64]

Family = Literal["flap", "lag", "torsion"]

DEFAULT_ELEMENTS = 20
FEWEST_ELEMENTS = 2

# A property that changes by more than this share between two stations closer than this share of
# an element length is a jump, and gets a node of its own.
_JUMP_CHANGE = 0.05
_JUMP_LENGTH = 0.1


def _no_points() -> FloatArray:
    return np.zeros(0)


@dataclass(frozen=True, eq=False)
class BladeBeam:
    """Properties of one straight blade along its radius, linear between stations.

    A jump is written as two close stations. Point masses sit on the pitch axis.

    Attributes:
        radius_m: Station radii from the rotor centre to the tip, increasing [m], shape (n,).
        mass_kg_m: Mass per length [kg/m], shape (n,).
        flap_stiffness_N_m2: Bending stiffness EI out of the disc plane [N m²], shape (n,).
        lag_stiffness_N_m2: Bending stiffness EI in the disc plane [N m²], shape (n,).
        torsion_stiffness_N_m2: Torsional stiffness GJ [N m²], shape (n,).
        pitch_inertia_kg_m: Pitch inertia per length about the pitch axis [kg m], shape (n,).
        point_radius_m: Radii of the point masses [m], shape (p,).
        point_mass_kg: Point masses [kg], shape (p,).

    Raises:
        ValueError: Radii do not increase, a property is not positive, or shapes do not match.
    """

    radius_m: FloatArray
    mass_kg_m: FloatArray
    flap_stiffness_N_m2: FloatArray
    lag_stiffness_N_m2: FloatArray
    torsion_stiffness_N_m2: FloatArray
    pitch_inertia_kg_m: FloatArray
    point_radius_m: FloatArray = field(default_factory=_no_points)
    point_mass_kg: FloatArray = field(default_factory=_no_points)

    def __post_init__(self) -> None:
        """Refuse a table that cannot be a blade."""
        radius = self.distribution.radius_m
        columns = {
            "mass per length [kg/m]": self.mass_kg_m,
            "flap stiffness [N m²]": self.flap_stiffness_N_m2,
            "lag stiffness [N m²]": self.lag_stiffness_N_m2,
            "torsion stiffness [N m²]": self.torsion_stiffness_N_m2,
            "pitch inertia per length [kg m]": self.pitch_inertia_kg_m,
        }
        for name, values in columns.items():
            require_values(name, values, radius, lowest=0.0, lowest_allowed=False)

    @property
    def distribution(self) -> MassDistribution:
        """The mass of the blade alone, for its inertia and tension."""
        return MassDistribution(
            self.radius_m, self.mass_kg_m, self.point_radius_m, self.point_mass_kg
        )


@dataclass(frozen=True)
class Root:
    """How one family of motions is held at the inner end of the flexible length.

    Attributes:
        radius_m: Hinge or pitch bearing radius; where the blade is built in, the radius where
            the flexible length begins [m].
        spring_N_m_rad: Spring about the hinge, or control stiffness about the pitch bearing
            [N m/rad]. Zero is a free hinge; infinity, the default, is built in.

    Raises:
        ValueError: The radius or the spring is negative or not a number.
    """

    radius_m: float
    spring_N_m_rad: float = math.inf

    def __post_init__(self) -> None:
        """Refuse a root that cannot be built."""
        if not 0.0 <= self.radius_m < math.inf:
            msg = (
                f"root radius: expected a finite value from 0 m up, found {self.radius_m}; "
                "measure it from the rotor centre"
            )
            raise ValueError(msg)
        if not self.spring_N_m_rad >= 0.0:
            msg = (
                f"root spring: expected 0 N m/rad (free) up to infinity (built in), found "
                f"{self.spring_N_m_rad}; correct the stiffness"
            )
            raise ValueError(msg)

    @property
    def is_free(self) -> bool:
        """The root can rotate, against a spring or without one."""
        return math.isfinite(self.spring_N_m_rad)


@dataclass(frozen=True, eq=False)
class BeamMatrices:
    """One family of blade motions: M q'' + (K₀ + Ω² K₁) q = 0.

    Attributes:
        family: Flap, lag or torsion.
        mesh: Elements, and the order of the unknowns q.
        mass: M, shape (unknowns, unknowns).
        stiffness_0: Stiffness at rest K₀ [times rad²/s²], shape (unknowns, unknowns).
        stiffness_omega2: Stiffness per squared rotor speed K₁, shape (unknowns, unknowns).
    """

    family: Family
    mesh: Mesh
    mass: FloatArray
    stiffness_0: FloatArray
    stiffness_omega2: FloatArray


def _jumps(beam: BladeBeam, length_m: float) -> FloatArray:
    """Middles of the station gaps across which a property jumps."""
    columns = np.stack(
        [
            beam.mass_kg_m,
            beam.flap_stiffness_N_m2,
            beam.lag_stiffness_N_m2,
            beam.torsion_stiffness_N_m2,
            beam.pitch_inertia_kg_m,
        ]
    )
    inner, outer = columns[:, :-1], columns[:, 1:]
    change = np.max(np.abs(outer - inner) / np.maximum(inner, outer), axis=0)
    is_jump = (np.diff(beam.radius_m) < _JUMP_LENGTH * length_m) & (change > _JUMP_CHANGE)
    middle: FloatArray = 0.5 * (beam.radius_m[:-1] + beam.radius_m[1:])[is_jump]
    return middle


def element_mesh(beam: BladeBeam, root: Root, n_elements: int) -> Mesh:
    """Elements from a root to the tip, with nodes where properties jump and at point masses.

    Args:
        beam: Blade properties along the radius.
        root: Where the flexible length begins, and how it is held.
        n_elements: Elements to aim for [-].

    Returns:
        Element ends and the freedom of the root.

    Raises:
        ValueError: The root lies outside the station table, or fewer than two elements.
    """
    start, tip = root.radius_m, float(beam.radius_m[-1])
    if not beam.radius_m[0] <= start < tip:
        msg = (
            f"root radius: expected within the station table, {beam.radius_m[0]:g} m to less than "
            f"{tip:g} m, found {start:g} m; extend the table inboard to the hinge"
        )
        raise ValueError(msg)
    if n_elements < FEWEST_ELEMENTS:
        msg = (
            f"elements: expected at least {FEWEST_ELEMENTS}, found {n_elements}; "
            f"{DEFAULT_ELEMENTS} are usual"
        )
        raise ValueError(msg)
    fixed = np.concatenate([_jumps(beam, (tip - start) / n_elements), beam.point_radius_m])
    nodes = node_radii((start, tip), fixed, beam.radius_m, n_elements)
    return Mesh(nodes, root.is_free)


def require_control_stiffness(root: Root) -> None:
    """Refuse a pitch bearing that nothing holds.

    Args:
        root: Pitch bearing with its control stiffness.

    Raises:
        ValueError: The control stiffness is zero.
    """
    if root.spring_N_m_rad == 0.0:
        msg = (
            "control stiffness: expected more than 0 N m/rad, found 0; enter the stiffness of "
            "the pitch control, or infinity for a locked pitch bearing"
        )
        raise ValueError(msg)


def _mesh(beam: BladeBeam, root: Root, n_elements: int) -> tuple[Mesh, Quadrature]:
    """Elements from root to tip, and the points at which properties are integrated."""
    mesh = element_mesh(beam, root, n_elements)
    breaks = np.concatenate([beam.radius_m, beam.point_radius_m])
    return mesh, quadrature(mesh.node_radius_m, breaks)


def _with_spring(stiffness: FloatArray, root: Root) -> FloatArray:
    """The stiffness with the root spring on the root rotation, its first unknown if free."""
    if root.is_free:
        stiffness[0, 0] += root.spring_N_m_rad
    return stiffness


def _bending_matrices(
    beam: BladeBeam, root: Root, family: Literal["flap", "lag"], n_elements: int
) -> BeamMatrices:
    mesh, points = _mesh(beam, root, n_elements)
    r, weight = points.radius_m, points.weight_m
    is_flap = family == "flap"
    stiffness = beam.flap_stiffness_N_m2 if is_flap else beam.lag_stiffness_N_m2
    shape = shapes(mesh, r)
    outboard = beam.point_radius_m > root.radius_m
    at_points = shapes(mesh, beam.point_radius_m[outboard])
    mass = gram(shape.second_integral, weight * np.interp(r, beam.radius_m, beam.mass_kg_m))
    mass += gram(at_points.second_integral, beam.point_mass_kg[outboard])
    tension = outboard_centrifugal_factor(beam.distribution, r)
    stiffening = gram(shape.first_integral, weight * tension)
    bending = gram(shape.strain, weight * np.interp(r, beam.radius_m, stiffness))
    return BeamMatrices(
        family=family,
        mesh=mesh,
        mass=mass,
        stiffness_0=_with_spring(bending, root),
        stiffness_omega2=stiffening if is_flap else stiffening - mass,
    )


def flap_matrices(beam: BladeBeam, root: Root, n_elements: int = DEFAULT_ELEMENTS) -> BeamMatrices:
    """Bending out of the disc plane: (EI w'')'' - (T w')' + m w'' (in time) = 0.

    T(r) = Ω² ∫ m s ds from r to the tip, point masses outboard of r included; the ends carry
    the natural conditions. A teetering blade takes two calls with the root at radius 0: built in
    (slope zero at the centre) for the collective family, where both blades bend alike, and
    hinged for the cyclic family, where the rotor tilts and the blades bend opposite.

    Args:
        beam: Blade properties along the radius.
        root: Flap hinge with its spring, or the radius where the blade is built in.
        n_elements: Elements to aim for [-].

    Returns:
        Matrices of slope-continuous cubic elements with exact property integrals.

    Raises:
        ValueError: The root lies outside the station table, or fewer than two elements.

    Validity:
        Slender straight blade, small deflections, no section pitch, no coupling with lag or
        torsion, mass outboard of the root only. With 20 elements modes 1 to 4 of the published
        beams come within 0.1 %.

    Source:
        Euler-Bernoulli beam under centrifugal tension; R. L. Bielawa, Rotary Wing Structural
        Dynamics and Aeroelasticity, 1992, rotating beams; from memory.
    """
    return _bending_matrices(beam, root, "flap", n_elements)


def lag_matrices(beam: BladeBeam, root: Root, n_elements: int = DEFAULT_ELEMENTS) -> BeamMatrices:
    """Bending in the disc plane: (EI v'')'' - (T v')' - Ω² m v + m v'' (in time) = 0.

    The term -Ω² m v is the sideways part of the centrifugal force, which always points away from
    the rotor centre; without it the lag frequency of an articulated blade is far too high.

    Args:
        beam: Blade properties along the radius.
        root: Lag hinge with its spring, or the radius where the blade is built in.
        n_elements: Elements to aim for [-].

    Returns:
        Matrices of slope-continuous cubic elements with exact property integrals.

    Raises:
        ValueError: The root lies outside the station table, or fewer than two elements.

    Validity:
        As ``flap_matrices``. Stretching of the blade and its Coriolis coupling, kept in some
        published tables, lower the frequency by up to 1.6 % more and are left out.

    Source:
        Euler-Bernoulli beam under centrifugal force; R. L. Bielawa, Rotary Wing Structural
        Dynamics and Aeroelasticity, 1992, rotating beams; from memory.
    """
    return _bending_matrices(beam, root, "lag", n_elements)


def torsion_matrices(
    beam: BladeBeam, root: Root, n_elements: int = DEFAULT_ELEMENTS
) -> BeamMatrices:
    """Twisting about the pitch axis: -(GJ φ')' + Ω² I_θ φ + I_θ φ'' (in time) = 0.

    The term Ω² I_θ φ turns a flat section back into the disc plane (tennis racket effect). The
    control stiffness acts at the pitch bearing as a spring; infinity holds the root.

    Args:
        beam: Blade properties along the radius.
        root: Pitch bearing radius and control stiffness.
        n_elements: Elements to aim for [-].

    Returns:
        Matrices of quadratic elements with exact property integrals.

    Raises:
        ValueError: As ``flap_matrices``, or the control stiffness is zero.

    Validity:
        Flat section at small pitch, whose mass lies near the chord line, so that the racket
        moment takes the whole pitch inertia; warping and the untwisting pull of the tension are
        left out (both raise the frequency); point masses lie on the pitch axis.

    Source:
        Rod in torsion with propeller moment; R. L. Bielawa, Rotary Wing Structural Dynamics and
        Aeroelasticity, 1992, torsion of rotating blades; from memory.
    """
    require_control_stiffness(root)
    mesh, points = _mesh(beam, root, n_elements)
    r, weight = points.radius_m, points.weight_m
    shape = shapes(mesh, r)
    inertia = gram(
        shape.first_integral, weight * np.interp(r, beam.radius_m, beam.pitch_inertia_kg_m)
    )
    twisting = gram(
        shape.strain, weight * np.interp(r, beam.radius_m, beam.torsion_stiffness_N_m2)
    )
    return BeamMatrices(
        family="torsion",
        mesh=mesh,
        mass=inertia,
        stiffness_0=_with_spring(twisting, root),
        stiffness_omega2=inertia.copy(),
    )
