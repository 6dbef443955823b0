"""One rotating blade solved by general finite elements (scikit-fem), as an independent reference.

Hermite cubics in displacements for flap and lag, quadratics for twist, on a finer mesh; the energy
is written out anew, with section pitch, offsets, hinge springs, and a point mass off the axis.
"""

from __future__ import annotations

import dataclasses
import functools
import math
from typing import TYPE_CHECKING, Any

import numpy as np
import pytest
import skfem  # type: ignore[import-untyped]
from scipy.linalg import eigh

from planner.methods.beam import BladeBeam, Root, flap_matrices, lag_matrices, torsion_matrices
from planner.methods.beam_modes import frequencies
from planner.methods.coupled_beam import FAMILIES, BladeRoots, CoupledBlade, coupled_matrices
from planner.methods.coupled_modes import coupled_modes

if TYPE_CHECKING:
    from collections.abc import Callable, Mapping

    from numpy.typing import NDArray

    from planner.methods.beam import Family

    FloatArray = NDArray[np.float64]

ROOT, TIP, SPEED = 0.4, 6.0, 35.0
SPRING: dict[Family, float] = {"flap": 900.0, "lag": 2500.0, "torsion": 1.5e4}
POINT = (4.0, 2.5, -0.05)
"""Radius, mass and offset of a point mass at a station."""

R = np.array([0.4, 0.9, 1.5, 3.0, 4.0, 5.2, 6.0])
TABLE = {
    "m": np.array([14.0, 9.0, 7.0, 6.5, 6.0, 5.5, 4.0]),
    "flap": np.array([1.5e5, 8e4, 4e4, 2.5e4, 2e4, 1.5e4, 1e4]),
    "lag": np.array([9e5, 7e5, 6e5, 5e5, 4.5e5, 4e5, 3e5]),
    "torsion": np.array([9e4, 5e4, 2.5e4, 2e4, 2e4, 1.6e4, 1.2e4]),
    "inertia": np.array([0.12, 0.08, 0.07, 0.06, 0.06, 0.05, 0.04]),
}
NONE = np.zeros(R.size)
TWIST = np.radians(np.interp(R, [ROOT, TIP], [5.0, -7.0]))
OFFSET = np.array([0.0, 0.01, 0.02, 0.02, 0.015, 0.01, 0.0])
FORM: Callable[[Any], Any] = skfem.BilinearForm


@dataclasses.dataclass(frozen=True, eq=False)
class Turned:
    """What couples the families."""

    collective: float
    twist: FloatArray
    offset: FloatArray
    point_offset: float


APART = Turned(0.0, NONE, NONE, 0.0)
COUPLED = Turned(0.15, TWIST, OFFSET, POINT[2])


def bent(motion: Any) -> Any:
    """Curvature."""
    return motion.hess[0][0]


@functools.cache
def fine_tension() -> tuple[FloatArray, FloatArray]:
    """∫ m s ds to the tip on a fine grid, without the point mass."""
    r = np.linspace(ROOT, TIP, 56001)
    pull = np.interp(r, R, TABLE["m"]) * r
    steps = 0.5 * (pull[1:] + pull[:-1]) * np.diff(r)
    return r, np.concatenate([np.cumsum(steps[::-1])[::-1], [0.0]])


def tension(r: FloatArray) -> FloatArray:
    grid, values = fine_tension()
    radius, mass, _ = POINT
    return np.asarray(np.interp(r, grid, values) + np.where(r < radius, mass * radius, 0.0))


class Reference:
    """Assembled matrices of all three families."""

    def __init__(self, turned: Turned, elements: int = 56) -> None:
        mesh = skfem.MeshLine(np.linspace(ROOT, TIP, elements + 1))
        self.turned = turned
        bend = skfem.Basis(mesh, skfem.ElementLineHermite(), intorder=9)
        twist = skfem.Basis(mesh, skfem.ElementLineP2(), intorder=9)
        self.bases = {"flap": bend, "lag": bend, "torsion": twist}
        self.size = {family: basis.N for family, basis in self.bases.items()}

    def at(self, name: str, r: FloatArray) -> FloatArray:
        """A property at radii; the twist gives cosine and sine of the section pitch."""
        columns = {**TABLE, "x": self.turned.offset, "twist": self.turned.twist}
        return np.asarray(np.interp(r, R, columns[name]))

    def pitch(self, r: FloatArray) -> FloatArray:
        return np.asarray(self.turned.collective + self.at("twist", r))

    def block(self, one: str, other: str, integrand: Callable[..., Any]) -> FloatArray:
        """Σ over trial motions of ``other`` and test motions of ``one``."""
        form = FORM(lambda u, v, w: integrand(u, v, w.x[0]))
        return np.asarray(
            form.assemble(self.bases[other], self.bases[one]).toarray(), dtype=np.float64
        )

    def mass(self) -> dict[tuple[str, str], FloatArray]:
        return {
            ("flap", "flap"): self.block("flap", "flap", lambda u, v, r: self.at("m", r) * u * v),
            ("lag", "lag"): self.block("lag", "lag", lambda u, v, r: self.at("m", r) * u * v),
            ("torsion", "torsion"): self.block(
                "torsion", "torsion", lambda u, v, r: self.at("inertia", r) * u * v
            ),
            ("flap", "torsion"): self.block(
                "flap", "torsion", lambda u, v, r: -self.moment(r, np.cos) * u * v
            ),
            ("lag", "torsion"): self.block(
                "lag", "torsion", lambda u, v, r: -self.moment(r, np.sin) * u * v
            ),
        }

    def moment(self, r: FloatArray, turn: Callable[[FloatArray], FloatArray]) -> FloatArray:
        return np.asarray(self.at("m", r) * self.at("x", r) * turn(self.pitch(r)))

    def bending(self, r: FloatArray, one: str, other: str) -> FloatArray:
        """Square of cosine with the first stiffness, of sine with the second."""
        c, s = np.cos(self.pitch(r)) ** 2, np.sin(self.pitch(r)) ** 2
        return np.asarray(self.at(one, r) * c + self.at(other, r) * s)

    def at_rest(self) -> dict[tuple[str, str], FloatArray]:
        def cross(u: Any, v: Any, r: FloatArray) -> Any:
            apart = self.at("flap", r) - self.at("lag", r)
            return apart * np.sin(self.pitch(r)) * np.cos(self.pitch(r)) * bent(u) * bent(v)

        return {
            ("flap", "flap"): self.block(
                "flap", "flap", lambda u, v, r: self.bending(r, "flap", "lag") * bent(u) * bent(v)
            ),
            ("lag", "lag"): self.block(
                "lag", "lag", lambda u, v, r: self.bending(r, "lag", "flap") * bent(u) * bent(v)
            ),
            ("flap", "lag"): self.block("flap", "lag", cross),
            ("torsion", "torsion"): self.block(
                "torsion", "torsion", lambda u, v, r: self.at("torsion", r) * u.grad[0] * v.grad[0]
            ),
        }

    def turning(self) -> dict[tuple[str, str], FloatArray]:
        def stiffening(u: Any, v: Any, r: FloatArray) -> Any:
            return tension(r) * u.grad[0] * v.grad[0]

        return {
            ("flap", "flap"): self.block("flap", "flap", stiffening),
            ("lag", "lag"): self.block(
                "lag", "lag", lambda u, v, r: stiffening(u, v, r) - self.at("m", r) * u * v
            ),
            ("torsion", "torsion"): self.block(
                "torsion",
                "torsion",
                lambda u, v, r: self.at("inertia", r) * np.cos(2 * self.pitch(r)) * u * v,
            ),
            ("flap", "torsion"): self.block(
                "flap", "torsion", lambda u, v, r: -r * self.moment(r, np.cos) * u * v.grad[0]
            ),
            ("lag", "torsion"): self.block(
                "lag",
                "torsion",
                lambda u, v, r: self.moment(r, np.sin) * u * (v - r * v.grad[0]),
            ),
        }

    def whole(self, blocks: Mapping[tuple[str, str], FloatArray]) -> FloatArray:
        rows = [
            [
                blocks[one, other]
                if (one, other) in blocks
                else blocks[other, one].T
                if (other, one) in blocks
                else np.zeros((self.size[one], self.size[other]))
                for other in FAMILIES
            ]
            for one in FAMILIES
        ]
        return np.block(rows)

    def node(self, radius: float) -> dict[str, int]:
        """Where height, slope and twist at a node stand among all unknowns."""
        dofs = self.bases["flap"].get_dofs(lambda x: np.isclose(x[0], radius))
        height, slope = int(dofs.nodal["u"][0]), int(dofs.nodal["u_x"][0])
        turn = self.bases["torsion"].get_dofs(lambda x: np.isclose(x[0], radius))
        lag, torsion = self.size["flap"], self.size["flap"] + self.size["lag"]
        return {
            "flap": height,
            "flap slope": slope,
            "lag": lag + height,
            "lag slope": lag + slope,
            "torsion": torsion + int(turn.nodal["u"][0]),
        }

    def solve(self, speed: float, modes: int) -> FloatArray:
        """Lowest frequencies with hinges and a control spring at the root."""
        mass, stiffness = self.whole(self.mass()), self.whole(self.at_rest())
        turning = self.whole(self.turning())
        self.add_point(mass, turning)
        root = self.node(ROOT)
        for family, name in zip(FAMILIES, ("flap slope", "lag slope", "torsion"), strict=True):
            stiffness[root[name], root[name]] += SPRING[family]
        kept = np.delete(np.arange(mass.shape[0]), [root["flap"], root["lag"]])
        pair = [m[np.ix_(kept, kept)] for m in (stiffness + speed**2 * turning, mass)]
        values = eigh(*pair, eigvals_only=True, subset_by_index=[0, modes - 1])
        return np.asarray(np.sqrt(values))

    def add_point(self, mass: FloatArray, turning: FloatArray) -> None:
        """The point mass moves as its node does, with its offset turned by the twist there."""
        radius, m, _ = POINT
        x, at = self.turned.point_offset, self.node(radius)
        angle = float(self.pitch(np.array(radius)))
        c, s = math.cos(angle), math.sin(angle)
        for name in ("flap", "lag"):
            mass[at[name], at[name]] += m
        turning[at["lag"], at["lag"]] -= m
        mass[at["torsion"], at["torsion"]] += m * x * x
        turning[at["torsion"], at["torsion"]] += m * x * x * math.cos(2 * angle)
        for matrix, name, value in (
            (mass, "flap", -m * x * c),
            (mass, "lag", -m * x * s),
            (turning, "lag", m * x * s),
            (turning, "lag slope", -m * x * radius * s),
            (turning, "flap slope", -m * x * radius * c),
        ):
            matrix[at[name], at["torsion"]] += value
            matrix[at["torsion"], at[name]] += value


def the_beam() -> BladeBeam:
    return BladeBeam(
        R, TABLE["m"], TABLE["flap"], TABLE["lag"], TABLE["torsion"], TABLE["inertia"],
        np.array(POINT[:1]), np.array(POINT[1:2]),
    )  # fmt: skip


def accurate(found: FloatArray, expected: FloatArray) -> bool:
    """Modes 1 and 2 within 0.1 %, the others within 0.5 %, of the nearest of the reference."""
    nearest = np.argmin(np.abs(expected[:, None] - found), axis=0)
    goal = np.where(np.arange(found.size) < 2, 1e-3, 5e-3)
    apart = np.abs(found / expected[nearest] - 1.0)
    return bool(np.all(apart <= goal) and np.unique(nearest).size == found.size)


def test_families_alone() -> None:
    expected = Reference(APART).solve(SPEED, 16)
    builders = (flap_matrices, lag_matrices, torsion_matrices)
    for family, build, count in zip(FAMILIES, builders, (4, 4, 3), strict=True):
        found = frequencies(build(the_beam(), Root(ROOT, SPRING[family])), SPEED, count)
        assert accurate(found, expected)


@pytest.mark.parametrize("offset", [False, True])
def test_flap_lag_and_torsion_coupled(*, offset: bool) -> None:
    turned = COUPLED if offset else dataclasses.replace(COUPLED, offset=NONE, point_offset=0.0)
    blade = CoupledBlade(the_beam(), turned.twist, turned.offset, np.array([turned.point_offset]))
    flap, lag, torsion = (Root(ROOT, SPRING[family]) for family in FAMILIES)
    matrices = coupled_matrices(blade, BladeRoots(flap, lag, torsion))
    expected = Reference(turned).solve(SPEED, 12)
    counts: dict[Family, int] = {"flap": 4, "lag": 2, "torsion": 2}
    found = coupled_modes(matrices, SPEED, turned.collective, counts)
    for family in FAMILIES:
        own = [k for k, (name, _) in enumerate(found.names) if name == family]
        assert accurate(found.frequency_rad_s[0, own], expected)
    assert np.sort(found.frequency_rad_s[0])[:6] == pytest.approx(expected[:6], rel=1e-3)
