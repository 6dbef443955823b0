"""Coupled modes of a blade at many rotor speeds and pitch settings, named by shape.

A few full solutions span a small space of motions, in which the modes of all lanes are found at
once; full solutions at other lanes check it. A lane is one rotor speed with one collective.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np
from scipy.optimize import linear_sum_assignment

from planner.methods.beam_modes import ZERO_TOLERANCE
from planner.methods.coupled_beam import FAMILIES, pencils
from planner.methods.coupled_space import MARGIN, references, small_space, solved, solved_alone

if TYPE_CHECKING:
    from collections.abc import Mapping

    from numpy.typing import ArrayLike, NDArray

    from planner.methods.beam import Family
    from planner.methods.coupled_beam import CoupledMatrices
    from planner.methods.coupled_space import SmallSpace

    FloatArray = NDArray[np.float64]
    Lanes = tuple[FloatArray, FloatArray]

_MOST_PITCH_RAD = 0.25 * np.pi
"""Beyond it flap moves more along the chord than across it."""
_EQUAL = 1e-9
"""Squared frequencies this near to one another, against themselves and the shift, are one."""
_PREFERENCE = 1e-5
"""What order counts beside squared overlap, where overlap does not decide."""


@dataclass(frozen=True, eq=False)
class CoupledModes:
    """Modes of a blade, named by the motion of which they hold most.

    Attributes:
        names: Family and number within it, in the order asked for.
        frequency_rad_s: Natural frequencies [rad/s], shape (lanes, names).
        share: Kinetic energy in flap, lag and torsion [-], shape (lanes, names, 3). That of the
            products between families, by offset mass, is left out; shares add up to one.
    """

    names: tuple[tuple[Family, int], ...]
    frequency_rad_s: FloatArray
    share: FloatArray


def coupled_modes(
    matrices: CoupledMatrices,
    speed_rad_s: ArrayLike,
    collective_rad: ArrayLike,
    counts: Mapping[Family, int],
) -> CoupledModes:
    """Coupled modes of one blade, each named after the uncoupled mode that it resembles.

    (K₀ + Ω² K₁ - ω² M) q = 0 in the space of full solutions at a few lanes. At each lane the
    squared overlap (q M q_ref)² with the modes q_ref of the families alone, at the same speed
    without twist, pitch and offsets, is made greatest in sum over one-to-one names.

    Args:
        matrices: The blade, from ``planner.methods.coupled_beam``.
        speed_rad_s: Rotor speeds Ω [rad/s], shape (lanes,) or one value.
        collective_rad: Collectives θ₀ [rad], shape (lanes,) or one value.
        counts: How many modes of each family are wanted [-].

    Returns:
        Frequencies and shares by name. A free hinge at rest gives zero. Names at a lane hang on
        that lane alone; frequencies hang on the other lanes within the tolerance.

    Raises:
        ValueError: The blade is not held at a lane (a negative squared frequency), a lane is not
            finite or beyond 45° of collective, or too many modes are asked for.
        LinAlgError: Frequencies differ from full solutions by more than 1e-5 after three
            enrichments of the space.

    Validity:
        As ``coupled_matrices``; modes of each family up to about a third of its elements. Where
        two modes veer the names change over: the shares pass a half and both named frequencies
        jump by the gap between the two, so that together they always tell both.

    Source:
        Ritz's method with the modes of neighbouring states; assignment by modal overlap; both
        common practice.
    """
    lanes, back = _distinct(speed_rad_s, collective_rad)
    _require_counts(matrices, counts)
    frequency, share = _named(small_space(matrices, lanes, counts), counts)
    names = tuple((family, k + 1) for family, count in counts.items() for k in range(count))
    return CoupledModes(names, frequency[back], share[back])


def _distinct(speed: ArrayLike, collective: ArrayLike) -> tuple[Lanes, NDArray[np.intp]]:
    """Each lane once, and which of them every lane asked for is."""
    pair = np.broadcast_arrays(
        np.atleast_1d(np.asarray(speed, dtype=np.float64)),
        np.atleast_1d(np.asarray(collective, dtype=np.float64)),
    )
    together = np.stack(pair, axis=-1)
    if together.shape[0] == 0 or not np.all(np.isfinite(together)):
        msg = (
            f"lanes: expected at least one, of finite rotor speed [rad/s] and collective [rad], "
            f"found {together.tolist()}; correct them"
        )
        raise ValueError(msg)
    if np.max(np.abs(together[:, 1])) > _MOST_PITCH_RAD:
        msg = (
            f"collective: expected within ±{_MOST_PITCH_RAD:.4g} rad, found "
            f"{together[np.argmax(np.abs(together[:, 1])), 1]:g} rad; beyond it no mode is flap "
            "or lag by its shape"
        )
        raise ValueError(msg)
    found, back = np.unique(together, axis=0, return_inverse=True)
    return (found[:, 0], found[:, 1]), back.reshape(-1)


def _require_counts(matrices: CoupledMatrices, counts: Mapping[Family, int]) -> None:
    if not counts:
        msg = "named modes: expected at least one family, found none; ask for flap, lag or torsion"
        raise ValueError(msg)
    for family, count in counts.items():
        part = matrices.unknowns[family]
        most = part.stop - part.start - MARGIN
        if not 1 <= count <= most:
            msg = (
                f"{family} modes: expected between 1 and {most}, found {count}; ask for fewer "
                "modes or use more elements"
            )
            raise ValueError(msg)


def _frequencies(squared: FloatArray, lanes: Lanes, shift: FloatArray) -> FloatArray:
    """Frequencies of all lanes, rounding about zero left out."""
    tolerance = ZERO_TOLERANCE * shift[:, None]
    if np.any(squared < -tolerance):
        lane = int(np.argmin(np.min(squared, axis=-1)))
        msg = (
            f"squared frequency: expected zero or more, found {float(np.min(squared[lane])):g} "
            f"rad²/s² at {lanes[0][lane]:g} rad/s and {lanes[1][lane]:g} rad of collective; the "
            "blade is not held there, check its stiffnesses and the offsets of its mass"
        )
        raise ValueError(msg)
    result: FloatArray = np.sqrt(np.where(squared <= tolerance, 0.0, squared))
    return result


def _energies(vectors: FloatArray, mass: FloatArray, matrices: CoupledMatrices) -> FloatArray:
    """Products of vectors by the mass of each family alone, shape (families, modes, modes)."""
    parts = [matrices.unknowns[family] for family in FAMILIES]
    return np.stack([vectors[:, p] @ mass[p, p] @ vectors[:, p].T for p in parts])


def _parted(
    vectors: FloatArray, squared: FloatArray, shift: float, energies: FloatArray
) -> FloatArray:
    """Vectors, those of equal frequency turned into flap first, then lag, then torsion."""
    result = vectors.copy()
    near = np.diff(squared) <= _EQUAL * (squared[1:] + shift)
    for group in np.split(np.arange(squared.size), np.flatnonzero(~near) + 1):
        if group.size > 1:
            inside = energies[:, group[:, None], group]
            _, turn = np.linalg.eigh(inside[1] + 2.0 * inside[2])
            result[group] = turn.T @ vectors[group]
    return result


def _named(space: SmallSpace, counts: Mapping[Family, int]) -> tuple[FloatArray, FloatArray]:
    """Frequencies and shares in the order of the names, lane by lane."""
    small, shift = space.matrices, space.shift
    mass, stiffness = pencils(small, *space.lanes)
    coupled = solved(mass, stiffness, shift)
    blocks = solved_alone(small, space.lanes[0], shift)
    frequency = _frequencies(coupled.squared, space.lanes, shift)
    names = [(family, k) for family, count in counts.items() for k in range(count)]
    found, share = np.empty((shift.size, len(names))), np.empty((shift.size, len(names), 3))
    for lane, added in enumerate(shift):
        wanted = references(blocks, lane, counts)
        vectors = coupled.vectors[lane, : len(wanted)]
        energies = _energies(vectors, mass[lane], small)
        squared = coupled.squared[lane, : len(wanted)]
        vectors = _parted(vectors, squared, float(added), energies)
        alone = np.zeros((len(wanted), mass.shape[-1]))
        for row, (family, k) in enumerate(wanted):
            alone[row, small.unknowns[family]] = blocks[family].vectors[lane, k]
        mode_of = _assigned((vectors @ mass[lane] @ alone.T) ** 2, wanted)
        modes = [mode_of[name] for name in names]
        found[lane] = frequency[lane, modes]
        own = np.stack([np.diag(e) for e in _energies(vectors, mass[lane], small)], axis=-1)
        share[lane] = (own / own.sum(axis=-1, keepdims=True))[modes]
    return found, share


def _assigned(
    overlap: FloatArray, wanted: list[tuple[Family, int]]
) -> dict[tuple[Family, int], int]:
    """Which coupled mode each reference is found in, by the greatest sum of overlaps."""
    order = np.arange(overlap.shape[0])
    family = np.array([FAMILIES.index(name) for name, _ in wanted])
    rows, columns = linear_sum_assignment(
        overlap + _PREFERENCE * order[:, None] * family, maximize=True
    )
    return {wanted[column]: int(row) for row, column in zip(rows, columns, strict=True)}
