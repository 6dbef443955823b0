"""Shapes in which the reference lets a hinged blade move, made from the matrices of the beam."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING, Literal

import numpy as np
from scipy.linalg import eigh

from planner.methods.beam import Root, flap_matrices
from planner.methods.beam_elements import quadrature, shapes

if TYPE_CHECKING:
    from numpy.typing import NDArray

    from planner.methods.beam import BladeBeam
    from planner.methods.beam_elements import Mesh

    FloatArray = NDArray[np.float64]

Rest = Literal["orthogonal", "clamped", "none"]


@dataclass(frozen=True, eq=False)
class BladeShapes:
    """Shapes of a hinged blade: rigid flap, its bending modes at rest, and what the blade that is
    clamped at the hinge adds when it hangs under its weight.

    Attributes:
        mass: M, (shapes, shapes).
        stiffness_0: K₀ of bending alone, (shapes, shapes).
        stiffness_omega2: K₁, (shapes, shapes).
        weight_kg_m: ∫ m φ dr, (shapes,).
        hinge_slope: φ' at the hinge, (shapes,).
        at_stations: φ at the air-load stations, (stations, shapes).
        slope_at_stations: φ' there, (stations, shapes).
        tip: φ at the tip, (shapes,).
    """

    mass: FloatArray
    stiffness_0: FloatArray
    stiffness_omega2: FloatArray
    weight_kg_m: FloatArray
    hinge_slope: FloatArray
    at_stations: FloatArray
    slope_at_stations: FloatArray
    tip: FloatArray


def blade_shapes(
    beam: BladeBeam,
    hinge_m: float,
    station_m: FloatArray,
    n_elastic: int,
    rest: Rest = "orthogonal",
) -> BladeShapes:
    """Shapes of the blade, elastic ones scaled to one at the tip.

    The angle that counts as rigid flap, and so the sines and cosines in the equations, hang on
    what is done with the shape at rest: orthogonal in mass to the others, it leaves all of the
    blade's mean slope to rigid flap; clamped, as it is, it takes its part of it.
    """
    matrices = flap_matrices(beam, Root(hinge_m, 0.0))
    mesh, M, K0 = matrices.mesh, matrices.mass, matrices.stiffness_0
    weight = _weight(beam, mesh, hinge_m)
    tip = shapes(mesh, mesh.node_radius_m[-1:]).second_integral[0]
    modes = eigh(K0 + 1e3 * M, M, subset_by_index=[0, n_elastic])[1]
    basis = [np.eye(len(M))[0]]
    basis += [_orthogonal(mode, basis, M) for mode in modes[:, 1:].T]
    if rest != "none":
        hanging = np.append(0.0, np.linalg.solve(K0[1:, 1:], weight[1:]))
        basis.append(_orthogonal(hanging, basis, M) if rest == "orthogonal" else hanging)
    B = np.array([basis[0], *(shape / (tip @ shape) for shape in basis[1:])]).T
    outboard = shapes(mesh, np.maximum(station_m, hinge_m))
    slope = outboard.first_integral * (station_m > hinge_m)[:, None]
    return BladeShapes(
        mass=B.T @ M @ B,
        stiffness_0=B.T @ K0 @ B,
        stiffness_omega2=B.T @ matrices.stiffness_omega2 @ B,
        weight_kg_m=weight @ B,
        hinge_slope=B[0],
        at_stations=outboard.second_integral @ B,
        slope_at_stations=slope @ B,
        tip=tip @ B,
    )


def _weight(beam: BladeBeam, mesh: Mesh, hinge_m: float) -> FloatArray:
    """∫ m φ dr of the unknowns of the mesh."""
    points = quadrature(mesh.node_radius_m, np.concatenate([beam.radius_m, beam.point_radius_m]))
    mass = points.weight_m * np.interp(points.radius_m, beam.radius_m, beam.mass_kg_m)
    lumps = beam.point_radius_m > hinge_m
    weight: FloatArray = shapes(mesh, points.radius_m).second_integral.T @ mass
    at_lumps = shapes(mesh, beam.point_radius_m[lumps]).second_integral
    return weight + at_lumps.T @ beam.point_mass_kg[lumps]


def _orthogonal(shape: FloatArray, others: list[FloatArray], mass: FloatArray) -> FloatArray:
    """The part of a shape that is orthogonal in mass to the others."""
    for other in others * 2:  # twice, against rounding
        shape = shape - other * (other @ mass @ shape) / (other @ mass @ other)
    return shape
