"""The small space of motions in which a blade's coupled modes are found for many lanes at once.

A lane is one rotor speed with one collective. Full solutions at a few lanes far from one another
span the space, family by family, so that it also holds the modes of each family alone; full
solutions at other lanes check it.
"""

from __future__ import annotations

import dataclasses
from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np
from scipy.linalg import eigh, solve_triangular

from planner.methods.coupled_beam import FAMILIES, pencils

if TYPE_CHECKING:
    from collections.abc import Mapping

    from numpy.typing import NDArray

    from planner.methods.beam import Family
    from planner.methods.coupled_beam import CoupledMatrices

    FloatArray = NDArray[np.float64]
    Lanes = tuple[FloatArray, FloatArray]

TOLERANCE = 1e-5
"""Of a frequency, between the small space and the full solution."""
SNAPSHOTS = 5
CHECKS = 3
"""Full solutions that span the space at first, and that check it each time."""
ENRICHMENTS = 3

MARGIN = 2
"""References beyond the highest named one, so that its neighbours find a name too."""
_PITCH_WEIGHT = 3.0
"""Pitch [rad] that counts as much as the whole range of speed, inverted."""
_KEPT = 1e-4
"""Share of the greatest singular value that a direction must have; a tenth each enrichment."""
_ALL = 1e-9
"""The same where every lane is a full solution, so that nothing need be left out."""
_FLOOR = 1e-4
"""Share of the shift below which a squared frequency is held against this share instead."""
_NOT_HELD = (
    "shifted blade stiffness: expected positive definite, found a negative or zero direction; the "
    "blade is not held, check its stiffnesses and the offsets of its mass"
)


@dataclass(frozen=True, eq=False)
class Solution:
    """Modes of pencils, lowest first.

    Attributes:
        squared: Squared frequencies [rad²/s²], shape (lanes, modes).
        vectors: Unknowns of each mode at unit modal mass, shape (lanes, modes, unknowns).
    """

    squared: FloatArray
    vectors: FloatArray


@dataclass(frozen=True, eq=False)
class SmallSpace:
    """The blade in the space of a few motions, and how its modes are found there.

    Attributes:
        matrices: The blade restricted to the space.
        lanes: Rotor speeds [rad/s] and collectives [rad], shape (lanes,) each.
        shift: Added to squared frequencies, so that none is zero [rad²/s²], shape (lanes,).
    """

    matrices: CoupledMatrices
    lanes: Lanes
    shift: FloatArray


def _rest_scale(matrices: CoupledMatrices) -> float:
    """Lowest squared frequency at rest and no pitch with every root held [rad²/s²]."""
    held = np.delete(np.arange(matrices.mass.shape[-1]), matrices.root_rotations)
    mass, stiffness = (m[0][np.ix_(held, held)] for m in pencils(matrices, [0.0], [0.0]))
    inverse = _inverse_factor(stiffness)
    return float(1.0 / np.linalg.eigvalsh(inverse @ mass @ inverse.T)[-1])


def _inverse_factor(stiffness: FloatArray) -> FloatArray:
    """Inverse of the Cholesky factor, stacked as the input."""
    try:
        factor = np.linalg.cholesky(stiffness)
    except np.linalg.LinAlgError as error:
        raise ValueError(_NOT_HELD) from error
    inverse: FloatArray = np.linalg.inv(factor)
    return inverse


def solved(mass: FloatArray, stiffness: FloatArray, shift: FloatArray) -> Solution:
    """All modes of stacked pencils by the shifted inverse problem.

    Args:
        mass: Mass, shape (lanes, unknowns, unknowns).
        stiffness: Stiffness, same shape.
        shift: Added to squared frequencies [rad²/s²], shape (lanes,).

    Returns:
        Modes, lowest first.

    Raises:
        ValueError: A squared frequency is below the negative shift: the blade is not held.

    Source:
        Shift-invert of the generalised symmetric eigenvalue problem; classical, from memory.
    """
    inverse = _inverse_factor(stiffness + shift[:, None, None] * mass)
    values, vectors = np.linalg.eigh(inverse @ mass @ np.swapaxes(inverse, -1, -2))
    values, vectors = values[:, ::-1], np.swapaxes(vectors[:, :, ::-1], -1, -2)
    return Solution(
        1.0 / values - shift[:, None], (vectors @ inverse) / np.sqrt(values)[..., None]
    )


def solved_alone(
    matrices: CoupledMatrices, speed_rad_s: FloatArray, shift: FloatArray
) -> dict[Family, Solution]:
    """Modes of each family alone: no twist, no pitch, no offsets.

    Args:
        matrices: The blade.
        speed_rad_s: Rotor speeds [rad/s], shape (lanes,).
        shift: Added to squared frequencies [rad²/s²], shape (lanes,).

    Returns:
        Modes by family, vectors in the unknowns of the family.

    Raises:
        ValueError: As ``solved``.
    """
    found = {}
    square = speed_rad_s[:, None, None] ** 2
    for family in FAMILIES:
        part = matrices.unknowns[family]
        mass, stiffness_0, stiffness_omega2 = matrices.alone[:, part, part]
        masses = np.broadcast_to(mass, (speed_rad_s.size, *mass.shape))
        found[family] = solved(masses, stiffness_0 + square * stiffness_omega2, shift)
    return found


def references(
    blocks: Mapping[Family, Solution], lane: int, counts: Mapping[Family, int]
) -> list[tuple[Family, int]]:
    """Modes of the families alone by frequency, up to the highest named one and a margin.

    Args:
        blocks: Modes of each family alone.
        lane: Which lane.
        counts: How many modes of each family have a name [-].

    Returns:
        Family and place in it from 0, lowest frequency first.
    """
    every = sorted(
        (float(value), i, k)
        for i, family in enumerate(FAMILIES)
        for k, value in enumerate(blocks[family].squared[lane])
    )
    named = [at for at, (_, i, k) in enumerate(every) if k < counts.get(FAMILIES[i], 0)]
    return [(FAMILIES[i], k) for _, i, k in every[: named[-1] + 1 + MARGIN]]


def _spread(lanes: Lanes, count: int) -> NDArray[np.intp]:
    """Lanes far from one another: the fastest, then always the one farthest from those taken."""
    speed, collective = lanes
    place = np.stack([speed / (np.max(np.abs(speed)) or 1.0), _PITCH_WEIGHT * collective])
    taken = [int(np.argmax(np.abs(speed)))]
    distance = np.full(speed.size, np.inf)
    while len(taken) < min(count, speed.size):
        step = place - place[:, taken[-1:]]
        distance = np.minimum(distance, np.hypot(step[0], step[1]))
        taken.append(int(np.argmax(distance)))
    return np.array(taken)


@dataclass(frozen=True, eq=False)
class _Snapshots:
    """Full solutions at some lanes: the lowest squares of each, and motions of unit energy."""

    squared: list[FloatArray]
    motions: dict[Family, list[FloatArray]]


def _snapshots(
    matrices: CoupledMatrices, lanes: Lanes, counts: Mapping[Family, int], scale: float
) -> _Snapshots:
    mass, stiffness = pencils(matrices, *lanes)
    shift = scale + lanes[0] ** 2
    blocks = solved_alone(matrices, lanes[0], shift)
    found = _Snapshots([], {family: [] for family in FAMILIES})
    for lane, added in enumerate(shift):
        wanted = references(blocks, lane, counts)
        total = stiffness[lane] + added * mass[lane]
        squared, coupled = _lowest(mass[lane], total, len(wanted) + MARGIN)
        found.squared.append(squared[: len(wanted)] - added)
        for family in FAMILIES:
            own = slice(sum(name == family for name, _ in wanted))
            alone = blocks[family]
            size = np.sqrt(alone.squared[lane, own] + added)[:, None]
            found.motions[family] += [
                coupled[:, matrices.unknowns[family]],
                alone.vectors[lane, own] / size,
            ]
    return found


def _lowest(mass: FloatArray, total: FloatArray, count: int) -> tuple[FloatArray, FloatArray]:
    """Lowest shifted squares of one full pencil, and their motions of unit energy."""
    n = mass.shape[0]
    try:
        values, vectors = eigh(mass, total, subset_by_index=[max(n - count, 0), n - 1])
    except np.linalg.LinAlgError as error:
        raise ValueError(_NOT_HELD) from error
    return 1.0 / values[::-1], vectors.T[::-1]


def _projected(
    matrices: CoupledMatrices,
    metric: FloatArray,
    motions: Mapping[Family, list[FloatArray]],
    least: float,
) -> CoupledMatrices:
    """The blade restricted to what the motions span, family by family.

    The rotation of a free root is kept exactly, so that it stays free of strain.
    """
    columns, unknowns, start = [], {}, 0
    for family in FAMILIES:
        part = matrices.unknowns[family]
        factor = np.linalg.cholesky(metric[part, part])
        directions, size, _ = np.linalg.svd(
            factor.T @ np.concatenate(motions[family]).T, full_matrices=False
        )
        kept = directions[:, size > least * size[0]]
        if part.start in matrices.root_rotations:
            kept = np.linalg.qr(np.hstack([factor.T[:, :1], kept]))[0]
        column = np.zeros((metric.shape[0], kept.shape[1]))
        column[part] = solve_triangular(factor.T, kept)
        columns.append(column)
        unknowns[family] = slice(start, start + kept.shape[1])
        start += kept.shape[1]
    basis = np.hstack(columns)
    return dataclasses.replace(
        matrices,
        mass=basis.T @ matrices.mass @ basis,
        stiffness_0=basis.T @ matrices.stiffness_0 @ basis,
        stiffness_omega2=basis.T @ matrices.stiffness_omega2 @ basis,
        alone=basis.T @ matrices.alone @ basis,
        unknowns=unknowns,
        root_rotations=(),
    )


def small_space(
    matrices: CoupledMatrices, lanes: Lanes, counts: Mapping[Family, int]
) -> SmallSpace:
    """The blade in a space that holds the named modes of all lanes to the tolerance.

    Args:
        matrices: The blade.
        lanes: Rotor speeds [rad/s] and collectives [rad], shape (lanes,) each.
        counts: How many modes of each family are wanted [-].

    Returns:
        The restricted blade, with its lanes.

    Raises:
        ValueError: The blade is not held.
        LinAlgError: Frequencies differ from full solutions by more than 1e-5 after three
            enrichments of the space.

    Validity:
        Checked at three lanes far from those that span the space, and taken to hold between.

    Source:
        Ritz's method; common practice.
    """
    speed, collective = lanes
    scale = _rest_scale(matrices)
    order = _spread(lanes, SNAPSHOTS + (ENRICHMENTS + 1) * CHECKS)

    def at(which: NDArray[np.intp]) -> Lanes:
        return speed[which], collective[which]

    taken = _snapshots(matrices, at(order[:SNAPSHOTS]), counts, scale)
    mass, stiffness = (m[0] for m in pencils(matrices, *at(order[:1])))
    metric = stiffness + (scale + speed[order[0]] ** 2) * mass
    kept, worst = (_KEPT if order.size > SNAPSHOTS else _ALL), 0.0
    for turn in range(ENRICHMENTS + 1):
        small = _projected(matrices, metric, taken.motions, kept * 0.1**turn)
        check = at(order[SNAPSHOTS + turn * CHECKS :][:CHECKS])
        full = _snapshots(matrices, check, counts, scale)
        worst = _difference(SmallSpace(small, check, scale + check[0] ** 2), full.squared)
        if worst <= TOLERANCE:
            return SmallSpace(small, lanes, scale + speed**2)
        for family in FAMILIES:
            taken.motions[family].extend(full.motions[family])
    msg = (
        f"coupled modes: expected frequencies within {TOLERANCE:g} of the full solution, found "
        f"{worst:g} after {ENRICHMENTS} enrichments; ask for fewer lanes at once"
    )
    raise np.linalg.LinAlgError(msg)


def _difference(space: SmallSpace, squared: list[FloatArray]) -> float:
    """Greatest relative difference of a frequency from full solutions; zero without them."""
    if not squared:
        return 0.0
    found = solved(*pencils(space.matrices, *space.lanes), space.shift).squared
    worst = 0.0
    for lane, expected in enumerate(squared):
        off = np.abs(found[lane, : expected.size] - expected)
        size = np.maximum(expected, _FLOOR * space.shift[lane])
        worst = max(worst, float(np.max(0.5 * off / size)))
    return worst
