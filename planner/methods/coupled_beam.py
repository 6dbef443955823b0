"""Rotating blade whose flap, lag and torsion act on one another: matrices of the coupled motion.

Twist and pitch setting couple flap with lag, offsets of the centre of gravity couple both with
torsion, and a pitch-flap linkage turns the root. Everything is affine in the square of the rotor
speed and in (1, cos θ₀, sin θ₀, cos 2θ₀, sin 2θ₀) of the collective θ₀, so that one assembly
serves every speed and every pitch setting. ``planner.methods.coupled_modes`` finds the modes.

Signs: w up, v in the disc plane against the rotation, φ and pitch nose up, offsets aft of the
pitch axis. A chordwise offset x lies at x (cos θ, -sin θ) in (v, w).
"""

from __future__ import annotations

import dataclasses
import math
from dataclasses import dataclass
from typing import TYPE_CHECKING, Literal

import numpy as np

from planner.methods.beam import DEFAULT_ELEMENTS, element_mesh, require_control_stiffness
from planner.methods.beam_elements import gram, quadrature, shapes
from planner.methods.blade_inertia import outboard_centrifugal_factor, require_values

if TYPE_CHECKING:
    from collections.abc import Callable, Mapping

    from numpy.typing import ArrayLike, NDArray

    from planner.methods.beam import BladeBeam, Family, Root
    from planner.methods.beam_elements import Mesh

    FloatArray = NDArray[np.float64]

FAMILIES: tuple[Family, ...] = ("flap", "lag", "torsion")
"""Order of the unknowns."""

_ROUNDING = 1e-9
_AT_NO_PITCH = np.array([1.0, 1.0, 0.0, 1.0, 0.0])


@dataclass(frozen=True)
class BladeRoots:
    """How the blade is held in its three kinds of motion.

    Attributes:
        flap: Flap hinge, or where the blade is built in against flap.
        lag: Lag hinge, or where the blade is built in against lag.
        torsion: Pitch bearing with the control stiffness.
        pitch_flap_tangent: Nose-down pitch per upward flap angle, tan δ₃ [-].
        couples_to: The flap angle that the linkage sees: the rotation about the flap hinge, which
            a built-in blade lacks, or the height of the tip over the flexible length.

    Raises:
        ValueError: The tangent is not finite, or the control stiffness is zero.
    """

    flap: Root
    lag: Root
    torsion: Root
    pitch_flap_tangent: float = 0.0
    couples_to: Literal["hinge", "tip"] = "hinge"

    def __post_init__(self) -> None:
        """Refuse a linkage that cannot be built."""
        require_control_stiffness(self.torsion)
        if not math.isfinite(self.pitch_flap_tangent):
            msg = (
                f"pitch-flap coupling: expected a finite tangent, found "
                f"{self.pitch_flap_tangent}; correct the angle of the flap hinge"
            )
            raise ValueError(msg)

    def of(self, family: Family) -> Root:
        """The root of one family."""
        return {"flap": self.flap, "lag": self.lag, "torsion": self.torsion}[family]


@dataclass(frozen=True, eq=False)
class CoupledBlade:
    """A blade with its twist and the offsets of its mass from the pitch axis.

    Attributes:
        beam: Properties along the radius; stiffnesses along and across the chord of the section.
        twist_rad: Section pitch less the collective, nose up [rad], shape (stations,).
        cg_offset_m: Centre of gravity aft of the pitch axis [m], shape (stations,).
        point_offset_m: Point masses aft of the pitch axis [m], shape (points,).

    Raises:
        ValueError: Shapes do not match, a value is not finite, or the pitch inertia is less than
            the offset mass alone has.
    """

    beam: BladeBeam
    twist_rad: FloatArray
    cg_offset_m: FloatArray
    point_offset_m: FloatArray

    def __post_init__(self) -> None:
        """Refuse columns that do not fit the blade."""
        columns = {"twist [rad]": self.twist_rad, "c.g. offset [m]": self.cg_offset_m}
        for name, values in columns.items():
            require_values(name, values, self.beam.radius_m, lowest=-math.inf)
        expected = self.beam.point_radius_m.shape
        if self.point_offset_m.shape != expected or not np.all(np.isfinite(self.point_offset_m)):
            msg = (
                f"point mass offsets: expected a finite value per point mass, shape {expected}, "
                f"found {self.point_offset_m}; give every point mass its offset, 0 m on the axis"
            )
            raise ValueError(msg)
        lowest = self.beam.mass_kg_m * self.cg_offset_m**2
        if np.any(lowest > self.beam.pitch_inertia_kg_m * (1.0 + _ROUNDING)):
            i = int(np.argmax(lowest - self.beam.pitch_inertia_kg_m))
            msg = (
                f"pitch inertia per length [kg m]: expected at least mass times squared c.g. "
                f"offset, {lowest[i]:g}, found {self.beam.pitch_inertia_kg_m[i]:g} at radius "
                f"{self.beam.radius_m[i]:g} m; give it about the pitch axis"
            )
            raise ValueError(msg)


@dataclass(frozen=True, eq=False)
class CoupledMatrices:
    """Coupled motion of one blade: M q'' + (K₀ + Ω² K₁) q = 0.

    Each matrix is a stack of coefficients of (1, cos θ₀, sin θ₀, cos 2θ₀, sin 2θ₀). With a
    pitch-flap linkage the twist in q is that over the pitch that the linkage gives.

    Attributes:
        mass: M, shape (5, unknowns, unknowns).
        stiffness_0: Stiffness at rest K₀ [times rad²/s²], shape (5, unknowns, unknowns).
        stiffness_omega2: Stiffness per squared rotor speed K₁, shape (5, unknowns, unknowns).
        alone: M, K₀, K₁ without twist, pitch and offsets: each family for itself, shape
            (3, unknowns, unknowns).
        unknowns: Which of q belong to which family.
        root_rotations: Which of q turn a free root and strain nothing; they come first in theirs.
    """

    mass: FloatArray
    stiffness_0: FloatArray
    stiffness_omega2: FloatArray
    alone: FloatArray
    unknowns: Mapping[Family, slice]
    root_rotations: tuple[int, ...]


@dataclass(frozen=True, eq=False)
class _Motion:
    """What each unknown contributes at radii, shape (q, unknowns) each."""

    flap: FloatArray
    flap_slope: FloatArray
    flap_curvature: FloatArray
    lag: FloatArray
    lag_slope: FloatArray
    lag_curvature: FloatArray
    twist: FloatArray
    twist_rate: FloatArray


@dataclass(frozen=True, eq=False)
class _Weights:
    """Properties times integration weights, shape (q,) each; point masses are last."""

    radius_m: FloatArray
    mass: FloatArray
    moment: FloatArray
    pitch_inertia: FloatArray
    tension: FloatArray
    mean_bending: FloatArray
    half_difference: FloatArray
    twisting: FloatArray
    twist_rad: FloatArray


def _unknowns(meshes: Mapping[Family, Mesh]) -> dict[Family, slice]:
    found: dict[Family, slice] = {}
    start = 0
    for family in FAMILIES:
        mesh = meshes[family]
        count = 2 * (mesh.node_radius_m.size - 1) + int(mesh.root_is_free)
        found[family] = slice(start, start + count)
        start += count
    return found


def _flap_angle(roots: BladeRoots, mesh: Mesh, n_unknowns: int) -> FloatArray:
    """The flap angle that the linkage sees, per unknown; flap unknowns come first."""
    angle = np.zeros(n_unknowns)
    if roots.couples_to == "hinge":
        angle[0] = float(mesh.root_is_free)
        return angle
    ends = mesh.node_radius_m[[0, -1]]
    at_tip = shapes(mesh, ends[1:]).second_integral[0]
    angle[: at_tip.size] = at_tip / (ends[1] - ends[0])
    return angle


def _motion(
    roots: BladeRoots, meshes: Mapping[Family, Mesh], radius_m: FloatArray
) -> tuple[_Motion, dict[Family, slice]]:
    """Shapes of the three families side by side, each zero inboard of its own root."""
    unknowns = _unknowns(meshes)
    n = unknowns["torsion"].stop
    columns = np.zeros((3, 3, radius_m.size, n))
    for i, family in enumerate(FAMILIES):
        moves = radius_m > roots.of(family).radius_m
        at = shapes(meshes[family], radius_m[moves])
        for k, part in enumerate((at.second_integral, at.first_integral, at.strain)):
            columns[i, k, moves, unknowns[family]] = part
    flap, lag, torsion = columns
    pitches = (radius_m > roots.torsion.radius_m).astype(np.float64)
    follows = np.outer(pitches, _flap_angle(roots, meshes["flap"], n))
    twist = torsion[1] - roots.pitch_flap_tangent * follows
    motion = _Motion(flap[0], flap[1], flap[2], lag[0], lag[1], lag[2], twist, torsion[2])
    return motion, unknowns


def _weights(blade: CoupledBlade, radius_m: FloatArray, weight_m: FloatArray) -> _Weights:
    """Properties at the points of integration, then those of the point masses."""
    beam, x = blade.beam, blade.point_offset_m
    at = np.concatenate([radius_m, beam.point_radius_m])
    weight = np.concatenate([weight_m, np.zeros(x.size)])

    def along(column: FloatArray) -> FloatArray:
        result: FloatArray = np.interp(at, beam.radius_m, column)
        return result

    def heavy(column: FloatArray, at_points: FloatArray) -> FloatArray:
        result: FloatArray = weight * along(column)
        result[radius_m.size :] += at_points
        return result

    flap, lag = beam.flap_stiffness_N_m2, beam.lag_stiffness_N_m2
    mass = heavy(beam.mass_kg_m, beam.point_mass_kg)
    offset = np.concatenate([np.interp(radius_m, beam.radius_m, blade.cg_offset_m), x])
    return _Weights(
        radius_m=at,
        mass=mass,
        moment=mass * offset,
        pitch_inertia=heavy(beam.pitch_inertia_kg_m, beam.point_mass_kg * x**2),
        tension=weight * outboard_centrifugal_factor(beam.distribution, at),
        mean_bending=weight * along(0.5 * (flap + lag)),
        half_difference=weight * along(0.5 * (flap - lag)),
        twisting=weight * along(beam.torsion_stiffness_N_m2),
        twist_rad=along(blade.twist_rad),
    )


def _cross(one: FloatArray, other: FloatArray, weight: FloatArray) -> FloatArray:
    """Symmetric matrix of the energy Σ weight · one · other."""
    product = one.T @ (other * weight[:, None])
    result: FloatArray = product + product.T
    return result


def _turned(
    of_sine: Callable[[FloatArray], FloatArray],
    of_cosine: Callable[[FloatArray], FloatArray],
    angle_rad: FloatArray,
) -> tuple[FloatArray, FloatArray]:
    """What stands with cos α and sin α in A sin(α + angle) + B cos(α + angle)."""
    c, s = np.cos(angle_rad), np.sin(angle_rad)
    return of_sine(s) + of_cosine(c), of_sine(c) - of_cosine(s)


def _mass(at: _Motion, of: _Weights) -> FloatArray:
    """T = ½ ∫ m (v'² + w'²) + I φ'² - 2 m x φ' (sin θ v' + cos θ w') dr, ' in time."""
    plain = gram(at.flap, of.mass) + gram(at.lag, of.mass) + gram(at.twist, of.pitch_inertia)
    cosine, sine = _turned(
        lambda f: -_cross(at.lag, at.twist, f * of.moment),
        lambda f: -_cross(at.flap, at.twist, f * of.moment),
        of.twist_rad,
    )
    none = np.zeros_like(plain)
    return np.stack([plain, cosine, sine, none, none])


def _stiffness_0(at: _Motion, of: _Weights) -> FloatArray:
    """V = ½ ∫ EI_f (w″ cos θ + v″ sin θ)² + EI_l (v″ cos θ - w″ sin θ)² + GJ φ′² dr."""
    w, v = at.flap_curvature, at.lag_curvature
    plain = gram(w, of.mean_bending) + gram(v, of.mean_bending)
    plain += gram(at.twist_rate, of.twisting)
    cosine, sine = _turned(
        lambda f: _cross(w, v, f * of.half_difference),
        lambda f: gram(w, f * of.half_difference) - gram(v, f * of.half_difference),
        2.0 * of.twist_rad,
    )
    none = np.zeros_like(plain)
    return np.stack([plain, none, none, cosine, sine])


def _stiffness_omega2(at: _Motion, of: _Weights) -> FloatArray:
    """Energy of the centrifugal force per Ω², T the tension per Ω².

    V = ½ ∫ T (v′² + w′²) - m v² + I cos 2θ φ²
    + 2 m x φ (sin θ v - r sin θ v′ - r cos θ w′) dr
    """
    moment, outwards, phi = of.moment, of.moment * of.radius_m, at.twist
    plain = gram(at.flap_slope, of.tension) + gram(at.lag_slope, of.tension)
    plain -= gram(at.lag, of.mass)
    once = _turned(
        lambda f: _cross(at.lag, phi, f * moment) - _cross(at.lag_slope, phi, f * outwards),
        lambda f: -_cross(at.flap_slope, phi, f * outwards),
        of.twist_rad,
    )
    twice = _turned(
        lambda _: np.zeros_like(plain),
        lambda f: gram(phi, f * of.pitch_inertia),
        2.0 * of.twist_rad,
    )
    return np.stack([plain, *once, *twice])


def coupled_matrices(
    blade: CoupledBlade, roots: BladeRoots, n_elements: int = DEFAULT_ELEMENTS
) -> CoupledMatrices:
    """Coupled flap, lag and torsion of a rotating blade.

    T = ½ ∫ m (v'² + w'²) + I φ'² - 2 m x φ' (sin θ v' + cos θ w') dr (' in time),
    V = ½ ∫ EI_f (w″ cos θ + v″ sin θ)² + EI_l (v″ cos θ - w″ sin θ)² + GJ φ′² dr
    + ½ Ω² ∫ T₁ (v′² + w′²) - m v² + I cos 2θ φ² + 2 m x φ (sin θ v - r sin θ v′ - r cos θ w′) dr
    + ½ k_β β² + ½ k_ζ ζ² + ½ k_θ (φ_root + β tan δ₃)²,
    with θ = θ₀ + twist and T₁ = ∫ m s ds from r to the tip.

    Args:
        blade: Properties, twist and offsets.
        roots: How it is held; each family begins at its own root and is zero inboard of it.
        n_elements: Elements to aim for in each family [-].

    Returns:
        Coefficient stacks for ``pencils``. Point masses count with their offset x and the pitch
        inertia m x². Without twist, pitch, offsets and linkage the three blocks are those of
        ``planner.methods.beam``.

    Raises:
        ValueError: A root lies outside the station table, or fewer than two elements.

    Validity:
        Slender straight blade, small motion about the straight blade in the disc plane. Left
        out: Coriolis coupling through coning and steady lag, steady deflections, untwisting by
        tension, rotary inertia of bending, warping. Hinge axes lie in and across the disc plane
        and do not turn with pitch. Hinge springs act about them.

    Source:
        Second-order energy of the exact motion of the section, checked against it numerically
        (computed); equations of J. C. Houbolt, G. W. Brooks, NACA Report 1346, 1958, from
        memory.
    """
    beam = blade.beam
    meshes = {family: element_mesh(beam, roots.of(family), n_elements) for family in FAMILIES}
    nodes = np.unique(np.concatenate([mesh.node_radius_m for mesh in meshes.values()]))
    points = quadrature(nodes, np.concatenate([beam.radius_m, beam.point_radius_m]))
    weights = _weights(blade, points.radius_m, points.weight_m)
    motion, unknowns = _motion(roots, meshes, weights.radius_m)
    free = {f: unknowns[f].start for f in FAMILIES if meshes[f].root_is_free}
    springs = np.zeros((motion.flap.shape[1],) * 2)
    for family, first in free.items():
        springs[first, first] = roots.of(family).spring_N_m_rad
    none = np.zeros_like(weights.mass)
    turned, flat = (
        (_mass(motion, of), _stiffness_0(motion, of), _stiffness_omega2(motion, of))
        for of in (weights, dataclasses.replace(weights, moment=none, twist_rad=none))
    )
    for stacks in (turned, flat):
        stacks[1][0] += springs
    return CoupledMatrices(
        *turned,
        alone=np.tensordot(_AT_NO_PITCH, np.stack(flat), (0, 1)),
        unknowns=unknowns,
        root_rotations=tuple(free.values()),
    )


def pencils(
    matrices: CoupledMatrices, speed_rad_s: ArrayLike, collective_rad: ArrayLike
) -> tuple[FloatArray, FloatArray]:
    """Mass and stiffness K₀ + Ω² K₁ at rotor speeds and pitch settings.

    Args:
        matrices: From ``coupled_matrices``.
        speed_rad_s: Rotor speeds Ω [rad/s], shape (lanes,).
        collective_rad: Collectives θ₀ [rad], shape (lanes,).

    Returns:
        Mass and stiffness, shape (lanes, unknowns, unknowns) each.

    Source:
        Definition.
    """
    speed = np.asarray(speed_rad_s, dtype=np.float64)
    angle = np.asarray(collective_rad, dtype=np.float64)
    one, twice = np.ones_like(angle), 2.0 * angle
    factors = np.stack([one, np.cos(angle), np.sin(angle), np.cos(twice), np.sin(twice)], axis=-1)
    mass = np.tensordot(factors, matrices.mass, 1)
    stiffness = np.tensordot(factors, matrices.stiffness_0, 1)
    stiffness += np.tensordot(speed[..., None] ** 2 * factors, matrices.stiffness_omega2, 1)
    return mass, stiffness
