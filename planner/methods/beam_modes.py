"""Frequencies and shapes of the rotating blade, for many rotor speeds at once."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

from planner.methods.beam_elements import shapes
from planner.methods.blade_inertia import blade_inertia

if TYPE_CHECKING:
    from numpy.typing import ArrayLike, NDArray

    from planner.methods.beam import BeamMatrices
    from planner.methods.blade_inertia import MassDistribution

    FloatArray = NDArray[np.float64]

DEFAULT_MODES = 4

# Squared frequencies this small against the shift of the eigenvalue problem are rounding.
ZERO_TOLERANCE = 1e-11

_OUTERMOST_EQUIVALENT_HINGE = 0.3  # share of the radius
_BISECTIONS = 60


@dataclass(frozen=True, eq=False)
class BeamModes:
    """Modes of one family, lowest first, at each rotor speed.

    Shapes are scaled to a largest magnitude of one, positive at the tip: displacement [-] and its
    slope [1/m] for flap and lag, twist [-] and twist rate [1/m] for torsion.

    Attributes:
        frequency_rad_s: Natural frequencies [rad/s], shape (..., modes).
        radius_m: Where the shapes are given [m], shape (k,).
        shape: Displacement or twist, shape (..., modes, k).
        shape_slope_1_m: Its derivative along the radius [1/m], shape (..., modes, k).
        modal_mass: Generalised mass of the scaled shape, [kg] for flap and lag, [kg m²] for
            torsion, shape (..., modes).
        coordinates: The unknowns of the scaled shape, shape (..., modes, unknowns).
    """

    frequency_rad_s: FloatArray
    radius_m: FloatArray
    shape: FloatArray
    shape_slope_1_m: FloatArray
    modal_mass: FloatArray
    coordinates: FloatArray


@dataclass(frozen=True)
class EquivalentHinge:
    """Rigid blade on a sprung hinge that flaps like the first mode of a hingeless blade.

    Attributes:
        radius_m: Hinge radius [m].
        spring_N_m_rad: Hinge spring [N m/rad].
    """

    radius_m: float
    spring_N_m_rad: float


def _inverse_factor(stiffness: FloatArray) -> FloatArray:
    """Inverse of the Cholesky factor, stacked as the input."""
    try:
        factor = np.linalg.cholesky(stiffness)
    except np.linalg.LinAlgError as error:
        msg = (
            "beam stiffness: expected positive definite, found a negative or zero direction; "
            "check the stiffness and mass columns of the station table"
        )
        raise ValueError(msg) from error
    inverse: FloatArray = np.linalg.inv(factor)
    return inverse


def _rest_scale(matrices: BeamMatrices) -> float:
    """Lowest squared frequency at rest with the root held [rad²/s²]."""
    first = 1 if matrices.mesh.root_is_free else 0
    inverse = _inverse_factor(matrices.stiffness_0[first:, first:])
    flexibility = inverse @ matrices.mass[first:, first:] @ inverse.T
    return float(1.0 / np.linalg.eigvalsh(flexibility)[-1])


def _shifted(
    matrices: BeamMatrices, speed_rad_s: FloatArray, n_modes: int
) -> tuple[FloatArray, FloatArray, FloatArray]:
    """Shift s, inverse factor X of K + s M, and X M Xᵀ with eigenvalues 1 / (ω² + s).

    The inverse problem keeps the low modes accurate however stiff the elements are, and the shift
    keeps a free hinge at rest regular. The part Ω² of it covers the lag family.
    """
    unknowns = matrices.mass.shape[-1]
    if not 1 <= n_modes <= unknowns:
        msg = (
            f"modes: expected between 1 and the {unknowns} unknowns, found {n_modes}; ask for "
            "fewer modes or use more elements"
        )
        raise ValueError(msg)
    if not np.all(np.isfinite(speed_rad_s)):
        msg = f"rotor speed: expected finite values [rad/s], found {speed_rad_s}; correct it"
        raise ValueError(msg)
    square = speed_rad_s**2
    shift = _rest_scale(matrices) + square
    total = (
        matrices.stiffness_0
        + square[..., None, None] * matrices.stiffness_omega2
        + shift[..., None, None] * matrices.mass
    )
    inverse = _inverse_factor(total)
    return shift, inverse, inverse @ matrices.mass @ np.swapaxes(inverse, -1, -2)


def _roots(flexibility_eigenvalues: FloatArray, shift: FloatArray, n_modes: int) -> FloatArray:
    """Frequencies from the largest eigenvalues of the shifted flexibility, lowest first."""
    squared: FloatArray = 1.0 / flexibility_eigenvalues[..., : -n_modes - 1 : -1]
    squared = squared - shift[..., None]
    tolerance = ZERO_TOLERANCE * shift[..., None]
    if np.any(squared < -tolerance):
        msg = (
            f"squared frequency: expected zero or more, found {float(np.min(squared)):g} rad²/s²; "
            "the blade is not held at this speed, check its stiffness and mass columns"
        )
        raise ValueError(msg)
    result: FloatArray = np.sqrt(np.where(squared <= tolerance, 0.0, squared))
    return result


def frequencies(
    matrices: BeamMatrices, speed_rad_s: ArrayLike, n_modes: int = DEFAULT_MODES
) -> FloatArray:
    """Natural frequencies of one family at many rotor speeds.

    det(K₀ + Ω² K₁ - ω² M) = 0, solved as the shifted inverse problem per speed.

    Args:
        matrices: The family, from ``planner.methods.beam``.
        speed_rad_s: Rotor speeds Ω [rad/s], any shape.
        n_modes: Lowest modes wanted [-].

    Returns:
        Frequencies ω, lowest first [rad/s], shape (..., modes). Modes of one uncoupled family
        never cross, so that a column is one mode throughout. A free hinge at rest gives zero.

    Raises:
        ValueError: The stiffness is not positive, a squared frequency is negative beyond
            1e-11 of the shift, too many modes are asked for, or a speed is not finite.

    Validity:
        Modes up to about a third of the number of elements.

    Source:
        Shift-invert of the generalised symmetric eigenvalue problem; classical, from memory.
    """
    speed = np.asarray(speed_rad_s, dtype=np.float64)
    shift, _, flexibility = _shifted(matrices, speed, n_modes)
    values = np.asarray(np.linalg.eigvalsh(flexibility), dtype=np.float64)
    return _roots(values, shift, n_modes)


def _scale(shape: FloatArray) -> FloatArray:
    """Factor that makes the largest magnitude one and the tip positive, shape (..., 1)."""
    largest = np.max(np.abs(shape), axis=-1, keepdims=True)
    factor: FloatArray = np.where(shape[..., -1:] < 0.0, -1.0, 1.0) / largest
    return factor


def modes(
    matrices: BeamMatrices,
    speed_rad_s: ArrayLike,
    n_modes: int = DEFAULT_MODES,
    radius_m: FloatArray | None = None,
) -> BeamModes:
    """Natural frequencies and mode shapes of one family at many rotor speeds.

    Args:
        matrices: The family, from ``planner.methods.beam``.
        speed_rad_s: Rotor speeds Ω [rad/s], any shape.
        n_modes: Lowest modes wanted [-].
        radius_m: Where the shapes are wanted, root to tip and ending at the tip; the element
            ends if left out [m], shape (k,).

    Returns:
        Frequencies as from ``frequencies``, and the shapes scaled to a largest magnitude of one
        among the radii, positive at the tip.

    Raises:
        ValueError: As ``frequencies``, or a radius lies off the flexible length.

    Validity:
        As ``frequencies``.

    Source:
        Shift-invert of the generalised symmetric eigenvalue problem; classical, from memory.
    """
    speed = np.asarray(speed_rad_s, dtype=np.float64)
    nodes = matrices.mesh.node_radius_m
    radius = nodes if radius_m is None else radius_m
    if not np.all((radius >= nodes[0]) & (radius <= nodes[-1])):
        msg = (
            f"shape radius: expected from the root at {nodes[0]:g} m to the tip at "
            f"{nodes[-1]:g} m, found {radius}; leave out radii inboard of the root"
        )
        raise ValueError(msg)
    shift, inverse, flexibility = _shifted(matrices, speed, n_modes)
    values, vectors = np.linalg.eigh(flexibility)
    lowest = np.swapaxes(vectors[..., : -n_modes - 1 : -1], -1, -2)
    coordinates = lowest @ inverse
    contribution = shapes(matrices.mesh, radius)
    is_torsion = matrices.family == "torsion"
    value = contribution.first_integral if is_torsion else contribution.second_integral
    slope = contribution.strain if is_torsion else contribution.first_integral
    coordinates = coordinates * _scale(coordinates @ value.T)
    return BeamModes(
        frequency_rad_s=_roots(values, shift, n_modes),
        radius_m=radius,
        shape=coordinates @ value.T,
        shape_slope_1_m=coordinates @ slope.T,
        modal_mass=np.sum((coordinates @ matrices.mass) * coordinates, axis=-1),
        coordinates=coordinates,
    )


def _check_rates(rest: float, speed: float, turning: float) -> None:
    if not (speed > 0.0 and rest > 0.0 and turning > rest):
        msg = (
            f"equivalent hinge: expected a positive speed and a flap frequency that rises with it "
            f"from a positive value at rest, found {rest:g} rad/s at rest and {turning:g} rad/s "
            f"at {speed:g} rad/s; take both from the built-in blade"
        )
        raise ValueError(msg)


def equivalent_hinge(
    distribution: MassDistribution,
    root_radius_m: float,
    speed_rad_s: float,
    rest_frequency_rad_s: float,
    turning_frequency_rad_s: float,
) -> EquivalentHinge:
    """Hinge offset and spring of a rigid blade that flaps like a hingeless one.

    k = I(e) ω₀² and (ω/Ω)² = 1 + e S(e)/I(e) + k/(I(e) Ω²) fix the hinge radius e and the spring
    k; e is found by bisection between the blade root and 30 % of the radius.

    Args:
        distribution: Mass of the blade along its radius [m], [kg/m], [kg].
        root_radius_m: Where the flexible blade is built in [m].
        speed_rad_s: Reference rotor speed Ω [rad/s].
        rest_frequency_rad_s: First flap frequency at rest ω₀ [rad/s].
        turning_frequency_rad_s: First flap frequency at the reference speed ω [rad/s].

    Returns:
        Hinge radius [m] and spring [N m/rad].

    Raises:
        ValueError: The frequencies do not rise with speed, or no hinge between the root and
            30 % of the radius fits.

    Validity:
        First flap mode only; the frequency is matched at rest and at the reference speed.

    Source:
        Offset-hinge idealisation of the hingeless blade; A. R. S. Bramwell, Helicopter
        Dynamics, 1976, blade flapping; from memory.
    """
    _check_rates(rest_frequency_rad_s, speed_rad_s, turning_frequency_rad_s)
    wanted = (turning_frequency_rad_s**2 - rest_frequency_rad_s**2) / speed_rad_s**2 - 1.0
    tip = float(distribution.radius_m[-1])

    def excess(hinge_m: float) -> float:
        about = blade_inertia(distribution, hinge_m)
        return hinge_m * float(about.first_moment_kg_m / about.second_moment_kg_m2) - wanted

    inner, outer = root_radius_m, _OUTERMOST_EQUIVALENT_HINGE * tip
    if not (inner < outer and excess(inner) <= 0.0 <= excess(outer)):
        msg = (
            f"equivalent hinge: expected one between the root at {inner:g} m and {outer:g} m, "
            f"found none for {rest_frequency_rad_s:g} rad/s at rest and "
            f"{turning_frequency_rad_s:g} rad/s at {speed_rad_s:g} rad/s; check the flap "
            "stiffness near the root"
        )
        raise ValueError(msg)
    for _ in range(_BISECTIONS):
        middle = 0.5 * (inner + outer)
        inner, outer = (middle, outer) if excess(middle) < 0.0 else (inner, middle)
    inertia = blade_inertia(distribution, outer).second_moment_kg_m2
    return EquivalentHinge(outer, float(inertia) * rest_frequency_rad_s**2)
