"""Torsional modes of a drive train: inertias in a chain, the last of them a hub with blades.

Blades that lag are not locked to the hub. Their in-plane bending, all blades alike, swings
against it, and the frequencies of the train follow from both together.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

from planner.methods.beam_elements import quadrature, shapes
from planner.methods.beam_modes import modes
from planner.methods.blade_inertia import blade_inertia
from planner.methods.validity import require_within

if TYPE_CHECKING:
    from numpy.typing import ArrayLike, NDArray

    from planner.methods.beam import BeamMatrices, BladeBeam

    FloatArray = NDArray[np.float64]

INERTIA_RANGE_KG_M2 = (1e-9, 1e9)
STIFFNESS_RANGE_N_M_RAD = (1e-6, 1e15)
TURNS_RANGE = (1e-4, 1e4)
SPEED_RANGE_RAD_S = (0.0, 1e4)
LAG_MODES = 3
ZERO_TOLERANCE = 1e-11
"""Squared frequencies this small against the highest are rounding."""
LEAST_SQUARED_RAD2_S2 = 1e-12
"""So are all below this, where a free hinge at rest is the only freedom."""


@dataclass(frozen=True, eq=False)
class ChainBlades:
    """In-plane motion of one blade: r θ + Σ vⱼ(r) qⱼ, with θ the hub's angle.

    Attributes:
        n_blades: Number of equal blades N.
        polar_inertia_kg_m2: ∫ m r² dr of one blade about the shaft [kg m²].
        coupling_kg_m: ∫ m r vⱼ dr [kg m], shape (modes,); either sign of vⱼ will do.
        mass_kg: ∫ m vⱼ vₖ dr [kg], shape (modes, modes).
        stiffness_0_N_m: Stiffness of the motion against the hub at rest, K₀ [N/m], shape
            (modes, modes).
        stiffness_omega2_kg: Its growth with the square of rotor speed, K₁ [kg], shape
            (modes, modes).
    """

    n_blades: int
    polar_inertia_kg_m2: float
    coupling_kg_m: FloatArray
    mass_kg: FloatArray
    stiffness_0_N_m: FloatArray
    stiffness_omega2_kg: FloatArray


@dataclass(frozen=True, eq=False)
class ChainModes:
    """Torsional modes of the chain, lowest first; the free rotation is not among them.

    Attributes:
        frequency_rad_s: Natural frequencies [rad/s], shape (lanes, modes).
        shape: Angles of the inertias, largest one, first inertia positive, shape
            (lanes, modes, k).
        blade_share: Part of the kinetic energy that is in the blades, shape (lanes, modes).
    """

    frequency_rad_s: FloatArray
    shape: FloatArray
    blade_share: FloatArray


@dataclass(frozen=True, eq=False)
class _Chain:
    """M x'' + (K₀ + Ω² K₁) x = 0 with x = (angles, lag coordinates); the blades' part of M."""

    mass: FloatArray
    blade_mass: FloatArray
    stiffness_0: FloatArray
    stiffness_omega2: FloatArray


def referred_chain(
    inertia_kg_m2: ArrayLike,
    shaft_stiffness_N_m_rad: ArrayLike,
    turns_of_inertia: ArrayLike,
    turns_of_shaft: ArrayLike,
) -> tuple[FloatArray, FloatArray]:
    """Inertias and stiffnesses of a geared chain as the rotor shaft feels them.

    J' = J t², k' = k t², t turns for one rotor turn: energy is kept while angles divide by t

    Args:
        inertia_kg_m2: Inertia of each body about its own axis, (k,) [kg m²].
        shaft_stiffness_N_m_rad: Stiffness of each shaft along its own axis, (k - 1,) [N m/rad].
        turns_of_inertia: Turns of each body for one rotor turn, (k,).
        turns_of_shaft: Turns of each shaft for one rotor turn, (k - 1,).

    Returns:
        Inertias (k,) [kg m²] and stiffnesses (k - 1,) [N m/rad], referred to the rotor shaft.

    Raises:
        ValueError: An input outside its range.

    Validity:
        Gears without play or flexibility of their teeth.

    Source:
        Energy of a geared shaft; common practice.

    Example:
        >>> inertia, stiffness = referred_chain([0.5, 40.0], [3.0e4], [6.0, 1.0], [1.0])
        >>> inertia.tolist()
        [18.0, 40.0]
    """
    J = require_within("inertia", inertia_kg_m2, INERTIA_RANGE_KG_M2, "kg m²")
    k = require_within(
        "shaft stiffness", shaft_stiffness_N_m_rad, STIFFNESS_RANGE_N_M_RAD, "N m/rad"
    )
    turns, shaft_turns = (
        require_within(f"turns of {what}", value, TURNS_RANGE, "")
        for what, value in (("an inertia", turns_of_inertia), ("a shaft", turns_of_shaft))
    )
    return np.asarray(J * turns**2), np.asarray(k * shaft_turns**2)


def chain_blades(
    beam: BladeBeam, lag: BeamMatrices, n_blades: int, n_modes: int = LAG_MODES
) -> ChainBlades:
    """Blades on the hub of a chain, by their lowest in-plane modes at rest.

    A blade on a free lag hinge begins with its rigid rotation about the hinge.

    Args:
        beam: One blade along its radius, from the rotor centre's side to the tip.
        lag: Its in-plane matrices, from `planner.methods.beam.lag_matrices`.
        n_blades: Number of blades [-].
        n_modes: In-plane modes of the blade held at the hub [-].

    Returns:
        What `chain_modes` takes. What lies inboard of the hinge turns with the hub.

    Raises:
        ValueError: Matrices of another family, no blade, or a mode count that the beam refuses.

    Validity:
        Straight blade without coning; no coupling with flap. With three modes the three lowest
        frequencies of a train of three inertias lie within 0.02 % of those with ten (computed,
        hinged, sprung and built-in blades).

    Source:
        Projection on the shapes of `planner.methods.beam_modes.modes`.
    """
    if lag.family != "lag" or n_blades < 1:
        msg = (
            f"blades of the chain: expected in-plane matrices and 1 blade or more, found "
            f"{lag.family} and {n_blades}; give lag matrices of one blade"
        )
        raise ValueError(msg)
    q = modes(lag, 0.0, n_modes).coordinates
    nodes = lag.mesh.node_radius_m
    points = quadrature(nodes, np.concatenate([beam.radius_m, beam.point_radius_m]))
    outboard = beam.point_radius_m > nodes[0]
    radius = np.concatenate([points.radius_m, beam.point_radius_m[outboard]])
    along = points.weight_m * np.interp(points.radius_m, beam.radius_m, beam.mass_kg_m)
    mass = np.concatenate([along, beam.point_mass_kg[outboard]])
    return ChainBlades(
        n_blades=n_blades,
        polar_inertia_kg_m2=float(blade_inertia(beam.distribution, 0.0).second_moment_kg_m2),
        coupling_kg_m=(mass * radius) @ shapes(lag.mesh, radius).second_integral @ q.T,
        mass_kg=q @ lag.mass @ q.T,
        stiffness_0_N_m=q @ lag.stiffness_0 @ q.T,
        stiffness_omega2_kg=q @ lag.stiffness_omega2 @ q.T,
    )


def chain_modes(
    inertia_kg_m2: ArrayLike,
    stiffness_N_m_rad: ArrayLike,
    blades: ChainBlades | None,
    speed_rad_s: ArrayLike,
    n_modes: int,
) -> ChainModes:
    """Natural frequencies of a torsional chain at many rotor speeds.

    J₁ θ₁'' + k₁ (θ₁ - θ₂) = 0, and so on along the chain; at the hub, with N blades alike,
    (J + N ∫ m r²) θ'' + N Σ (∫ m r vⱼ) qⱼ'' + k (θ - θ before) = 0
    N Σ (∫ m vⱼ vₖ) qₖ'' + N (∫ m r vⱼ) θ'' + N Σ (K₀ + Ω² K₁)ⱼₖ qₖ = 0

    Args:
        inertia_kg_m2: Inertias from the motor to the hub, which is last and without blades,
            referred to the rotor shaft, (k,) [kg m²].
        stiffness_N_m_rad: Stiffness between each and the next, referred, (k - 1,) [N m/rad].
        blades: Blades on the hub, or none.
        speed_rad_s: Rotor speeds Ω, (lanes,) [rad/s].
        n_modes: Lowest modes wanted [-]; at most k - 1 and the blades' own.

    Returns:
        Modes without the free rotation of the whole, which has no frequency and is taken out by
        the momentum it holds. Modes of one chain do not cross as speed changes, they veer: order
        is identity. One may turn from blade motion to shaft motion on the way; the blades' share
        tells.

    Raises:
        ValueError: An input outside its range, shapes that do not match, too many modes, or
            blades that are not held at a speed.

    Validity:
        Equal blades that swing alike (collective lag), small motion, no damping; the motor's
        field has no stiffness of its own. Blades on free hinges give a frequency of zero at
        rest.

    Source:
        Lagrange's equations of chain and blades; at rest the chain of inertias is classical
        (common practice).

    Example:
        >>> found = chain_modes([2.0, 6.0], [150.0], None, [0.0], 1)
        >>> found.frequency_rad_s.round(3).tolist()
        [[10.0]]
    """
    J, k = _checked(inertia_kg_m2, stiffness_N_m_rad)
    speed = require_within("rotor speed", speed_rad_s, SPEED_RANGE_RAD_S, "rad/s")
    chain = _assembled(J, k, blades)
    _require_modes(n_modes, len(chain.mass) - 1)
    hub = J.size - 1
    basis = _without_rotation(chain.mass, J.size)
    inverse = np.linalg.inv(np.linalg.cholesky(basis.T @ chain.mass @ basis))
    total = chain.stiffness_0 + speed[:, None, None] ** 2 * chain.stiffness_omega2
    held = np.delete(np.delete(total, hub, axis=-1), hub, axis=-2)
    squared, vectors = np.linalg.eigh(inverse @ held @ inverse.T)
    motion = np.swapaxes(basis @ inverse.T @ vectors[..., :n_modes], -1, -2)
    angles = motion[..., : J.size]
    largest = np.max(np.abs(angles), axis=-1, keepdims=True)
    energy = np.sum((motion @ chain.mass) * motion, axis=-1)
    return ChainModes(
        frequency_rad_s=_roots(squared)[:, :n_modes],
        shape=angles * np.where(angles[..., :1] < 0.0, -1.0, 1.0) / largest,
        blade_share=np.sum((motion @ chain.blade_mass) * motion, axis=-1) / energy,
    )


def _checked(inertia: ArrayLike, stiffness: ArrayLike) -> tuple[FloatArray, FloatArray]:
    """Inertias and stiffnesses of a chain, or a refusal."""
    J = require_within("inertia", inertia, INERTIA_RANGE_KG_M2, "kg m²")
    k = require_within("shaft stiffness", stiffness, STIFFNESS_RANGE_N_M_RAD, "N m/rad")
    if J.ndim != 1 or J.size < 1 or k.shape != (J.size - 1,):
        msg = (
            f"torsional chain: expected one shaft fewer than inertias, found shapes {J.shape} "
            f"of inertias and {k.shape} of shafts; give one shaft between each two"
        )
        raise ValueError(msg)
    return J, k


def _require_modes(n_modes: int, most: int) -> None:
    if not 1 <= n_modes <= most:
        msg = (
            f"modes of the chain: expected between 1 and its {most} freedoms, found {n_modes}; "
            "ask for fewer modes"
        )
        raise ValueError(msg)


def _assembled(J: FloatArray, k: FloatArray, blades: ChainBlades | None) -> _Chain:
    """Matrices of the whole, angles first and then the blades' coordinates."""
    bodies, hub = J.size, J.size - 1
    size = bodies + (0 if blades is None else blades.coupling_kg_m.size)
    blade_mass, stiffness_0, stiffness_omega2 = np.zeros((3, size, size))
    between = np.eye(bodies)[:-1] - np.eye(bodies)[1:]
    stiffness_0[:bodies, :bodies] = between.T @ (k[:, None] * between)
    if blades is not None:
        own, n = slice(bodies, None), blades.n_blades
        blade_mass[hub, hub] = n * blades.polar_inertia_kg_m2
        blade_mass[hub, own] = blade_mass[own, hub] = n * blades.coupling_kg_m
        blade_mass[own, own] = n * blades.mass_kg
        stiffness_0[own, own] = n * blades.stiffness_0_N_m
        stiffness_omega2[own, own] = n * blades.stiffness_omega2_kg
    mass = blade_mass.copy()
    mass[np.arange(bodies), np.arange(bodies)] += J
    return _Chain(mass, blade_mass, stiffness_0, stiffness_omega2)


def _without_rotation(mass: FloatArray, bodies: int) -> FloatArray:
    """Motions without angular momentum, one a column: each freedom but the hub's angle.

    The rotation of the whole strains nothing, so that of the stiffness only the hub's row and
    column fall out.
    """
    rotation = np.concatenate([np.ones(bodies), np.zeros(len(mass) - bodies)])
    momentum = mass @ rotation
    others = np.delete(np.arange(len(mass)), bodies - 1)
    basis: FloatArray = np.eye(len(mass))[:, others]
    basis -= np.outer(rotation, momentum[others]) / (rotation @ momentum)
    return basis


def _roots(squared: FloatArray) -> FloatArray:
    """Frequencies, rounding about zero taken as zero."""
    tolerance = np.maximum(ZERO_TOLERANCE * squared[:, -1:], LEAST_SQUARED_RAD2_S2)
    if np.any(squared < -tolerance):
        msg = (
            f"squared frequency of the chain: expected zero or more, found "
            f"{float(np.min(squared)):g} rad²/s²; the blades are not held at this speed, check "
            "their in-plane stiffness"
        )
        raise ValueError(msg)
    result: FloatArray = np.sqrt(np.where(squared <= tolerance, 0.0, squared))
    return result
