"""Finite elements of a straight blade, written in strains instead of displacements.

Each element carries a strain that is linear along it: the curvature in bending, the twist rate in
torsion. Integrated once it gives slope or twist, integrated twice the displacement. In bending
this is exactly the space of the slope-continuous cubic (Hermite) element, in torsion that of the
quadratic element. The unknowns differ for a reason: a rotation about a hinge is an unknown of its
own that strains nothing, so that no rounding residue of large element stiffnesses can act as a
spring on a free hinge.
"""

from __future__ import annotations

from dataclasses import dataclass
from itertools import pairwise
from typing import TYPE_CHECKING

import numpy as np

if TYPE_CHECKING:
    from numpy.typing import NDArray

    FloatArray = NDArray[np.float64]

# Four Gauss points are exact to degree 7: linear mass on a cubic squared, and the cubic tension
# of a linear mass on a quadratic slope squared.
_GAUSS_POINTS, _GAUSS_WEIGHTS = np.polynomial.legendre.leggauss(4)

# Shares of the mean element length.
_CLOSEST_FIXED_NODES = 0.25
_SNAP_REACH = 0.4


@dataclass(frozen=True, eq=False)
class Mesh:
    """Elements along the flexible length of a blade.

    Unknowns, in this order: the rotation of the root if it is free, the strain at the inner end
    of each element, the strain at the outer end of each element.

    Attributes:
        node_radius_m: Element ends from root to tip [m], shape (elements + 1,).
        root_is_free: The root may rotate (bending) or twist (torsion).
    """

    node_radius_m: FloatArray
    root_is_free: bool


@dataclass(frozen=True, eq=False)
class Quadrature:
    """Points and weights that integrate along the blade.

    Attributes:
        radius_m: Where to evaluate [m], shape (q,).
        weight_m: What to multiply with before summing [m], shape (q,).
    """

    radius_m: FloatArray
    weight_m: FloatArray


@dataclass(frozen=True, eq=False)
class Shapes:
    """What each unknown contributes at given radii, one column per unknown.

    Attributes:
        strain: Curvature [1/m] or twist rate [rad/m], shape (q, unknowns).
        first_integral: Slope or twist [rad], shape (q, unknowns).
        second_integral: Displacement [m], bending only, shape (q, unknowns).
    """

    strain: FloatArray
    first_integral: FloatArray
    second_integral: FloatArray


def _apart(wanted_m: FloatArray, ends_m: tuple[float, float], distance_m: float) -> FloatArray:
    """The ends and those wanted radii that keep their distance from each other and the ends."""
    start, tip = ends_m
    kept = [start]
    for radius in np.sort(wanted_m):
        if radius - kept[-1] >= distance_m and tip - radius >= distance_m:
            kept.append(float(radius))
    return np.array([*kept, tip])


def _snap(nodes_m: FloatArray, stations_m: FloatArray) -> FloatArray:
    """Inner nodes of an evenly divided stretch, moved onto a station where one is near."""
    inner = nodes_m[1:-1]
    reach = _SNAP_REACH * (nodes_m[1] - nodes_m[0])
    nearest = stations_m[np.argmin(np.abs(stations_m - inner[:, None]), axis=1)]
    snapped = np.where(np.abs(nearest - inner) <= reach, nearest, inner)
    return np.concatenate([nodes_m[:1], snapped])


def node_radii(
    ends_m: tuple[float, float],
    fixed_m: FloatArray,
    stations_m: FloatArray,
    n_elements: int,
) -> FloatArray:
    """Element ends: fixed ones first, the rest even, moved onto near stations.

    Args:
        ends_m: Root and tip of the flexible length [m].
        fixed_m: Radii that need a node, such as property jumps and point masses [m], shape (f,).
        stations_m: Radii where a node is welcome [m], shape (n,).
        n_elements: Elements to aim for [-]; fixed nodes add a few.

    Returns:
        Node radii from root to tip [m], shape (elements + 1,).

    Validity:
        Fixed radii closer than a quarter of the mean element length to another are passed over;
        integrals stay exact since they are also broken at stations and point masses.
    """
    length = (ends_m[1] - ends_m[0]) / n_elements
    fixed = _apart(fixed_m, ends_m, _CLOSEST_FIXED_NODES * length)
    stretches = []
    for inner, outer in pairwise(fixed):
        parts = max(1, int(np.ceil((outer - inner) / length - 1e-9)))
        stretches.append(_snap(np.linspace(inner, outer, parts + 1), stations_m))
    return np.concatenate([*stretches, fixed[-1:]])


def quadrature(nodes_m: FloatArray, breaks_m: FloatArray) -> Quadrature:
    """Gauss points between all nodes and all breaks of the properties.

    Args:
        nodes_m: Element ends [m], shape (elements + 1,).
        breaks_m: Radii where a property or its slope jumps [m], shape (b,).

    Returns:
        Points and weights from root to tip, exact to degree 7 on each piece.
    """
    inside = (breaks_m > nodes_m[0]) & (breaks_m < nodes_m[-1])
    ends = np.array(sorted({*nodes_m.tolist(), *breaks_m[inside].tolist()}))
    half = 0.5 * np.diff(ends)[:, None]
    middle = 0.5 * (ends[:-1] + ends[1:])[:, None]
    return Quadrature(
        radius_m=(middle + half * _GAUSS_POINTS).ravel(),
        weight_m=(half * _GAUSS_WEIGHTS).ravel(),
    )


def shapes(mesh: Mesh, radius_m: FloatArray) -> Shapes:
    """Strain, slope and displacement that each unknown causes at given radii.

    With t the distance covered inside an element of length l, an inner strain A and an outer
    strain B give the slope A (t - t²/2l) + B t²/2l and the displacement
    A (t²/2 - t³/6l) + B t³/6l; outboard of the element the displacement grows with its end slope.

    Args:
        mesh: Elements and root condition.
        radius_m: Where to evaluate, root to tip [m], shape (q,).

    Returns:
        One row per radius, one column per unknown.

    Source:
        Direct integration of a linear strain.
    """
    inner, outer = mesh.node_radius_m[:-1], mesh.node_radius_m[1:]
    l = outer - inner  # noqa: E741 - the paper symbol for the element length
    t = np.clip(radius_m[:, None] - inner, 0.0, l)
    beyond = np.maximum(radius_m[:, None] - outer, 0.0)
    home = np.clip(np.searchsorted(inner, radius_m, side="right") - 1, 0, inner.size - 1)
    here = np.arange(inner.size) == home[:, None]
    slope_outer = t * t / (2.0 * l)
    slope_inner = t - slope_outer
    lift_outer = t**3 / (6.0 * l) + beyond * slope_outer
    lift_inner = 0.5 * t * t - t**3 / (6.0 * l) + beyond * slope_inner
    strain = np.hstack([np.where(here, 1.0 - t / l, 0.0), np.where(here, t / l, 0.0)])
    first = np.hstack([slope_inner, slope_outer])
    second = np.hstack([lift_inner, lift_outer])
    if mesh.root_is_free:
        arm = radius_m[:, None] - mesh.node_radius_m[0]
        strain = np.hstack([np.zeros_like(arm), strain])
        first = np.hstack([np.ones_like(arm), first])
        second = np.hstack([arm, second])
    return Shapes(strain=strain, first_integral=first, second_integral=second)


def gram(columns: FloatArray, weight: FloatArray) -> FloatArray:
    """Symmetric matrix Σ weight · columnᵢ · columnⱼ.

    Args:
        columns: Shape values, shape (q, unknowns).
        weight: Property times integration weight, shape (q,).

    Returns:
        Shape (unknowns, unknowns), symmetric and positive semi-definite for positive weights.
    """
    weighted = columns * weight[:, None]
    product = columns.T @ weighted
    result: FloatArray = 0.5 * (product + product.T)
    return result
