"""Coupled matrices: the exact motion of the section, limits, symmetries, and refusals."""

from __future__ import annotations

import dataclasses
import math
import re
from typing import TYPE_CHECKING, Any

import numpy as np
import pytest

from planner.methods.beam import (
    DEFAULT_ELEMENTS,
    BladeBeam,
    Root,
    element_mesh,
    flap_matrices,
    lag_matrices,
    torsion_matrices,
)
from planner.methods.beam_elements import quadrature
from planner.methods.blade_inertia import blade_inertia
from planner.methods.coupled_beam import (
    FAMILIES,
    BladeRoots,
    CoupledBlade,
    coupled_matrices,
    pencils,
)
from tests.methods.test_beam import a_blade, uniform

if TYPE_CHECKING:
    from collections.abc import Callable

    from numpy.typing import NDArray

    from planner.methods.coupled_beam import CoupledMatrices

    FloatArray = NDArray[np.float64]

STATIONS = a_blade().radius_m
HELD = BladeRoots(Root(0.45, 700.0), Root(0.6, 30.0), Root(0.3, 9e3))
TWIST = np.radians([3.0, 2.0, 2.0, 0.0, -4.0, -9.0])
OFFSET = np.array([0.01, 0.02, -0.015, 0.03, 0.02, -0.01])
POINTS = np.array([0.05, -0.04])


def coupled(**changes: Any) -> CoupledBlade:
    parts: dict[str, Any] = {
        "beam": a_blade(),
        "twist_rad": TWIST,
        "cg_offset_m": OFFSET,
        "point_offset_m": POINTS,
    }
    return CoupledBlade(**{**parts, **changes})


def plain(beam: BladeBeam) -> CoupledBlade:
    """No twist, no offsets."""
    none = np.zeros_like(beam.radius_m)
    return CoupledBlade(beam, none, none, np.zeros_like(beam.point_radius_m))


def at(
    matrices: CoupledMatrices, speed: float, collective: float
) -> tuple[FloatArray, FloatArray]:
    mass, stiffness = pencils(matrices, [speed], [collective])
    return mass[0], stiffness[0]


def squares(matrices: CoupledMatrices, speed: float, collective: float) -> FloatArray:
    """Squared frequencies, lowest first, by a general solver."""
    mass, stiffness = at(matrices, speed, collective)
    total = stiffness + (100.0 + speed**2) * mass
    inverse = np.linalg.inv(np.linalg.cholesky(total))
    values = np.linalg.eigvalsh(inverse @ mass @ inverse.T)[::-1]
    return np.asarray(1.0 / values - 100.0 - speed**2)


def test_without_coupling_the_blocks_are_those_of_the_families() -> None:
    matrices = coupled_matrices(plain(a_blade()), HELD)
    mass, stiffness = at(matrices, 30.0, 0.0)
    builders: tuple[Callable[..., Any], ...] = (flap_matrices, lag_matrices, torsion_matrices)
    covered = np.zeros(mass.shape, dtype=bool)
    for family, build in zip(FAMILIES, builders, strict=True):
        part = matrices.unknowns[family]
        covered[part, part] = True
        alone = build(a_blade(), HELD.of(family))
        for found, expected in (
            (mass, alone.mass),
            (stiffness, alone.stiffness_0 + 900.0 * alone.stiffness_omega2),
        ):
            size = np.max(np.abs(expected))
            assert found[part, part] == pytest.approx(expected, rel=1e-9, abs=1e-12 * size)
    assert not np.any(mass[~covered])
    assert not np.any(stiffness[~covered])


def test_what_is_kept_as_alone_has_neither_twist_nor_offsets() -> None:
    turned = coupled_matrices(coupled(), HELD)
    flat = coupled_matrices(plain(a_blade()), HELD)
    mass, stiffness = at(flat, 0.0, 0.0)
    # the point masses of the twisted blade keep the pitch inertia of their offset
    flap_lag = slice(0, turned.unknowns["lag"].stop)
    assert turned.alone[0, flap_lag, flap_lag] == pytest.approx(mass[flap_lag, flap_lag])
    assert turned.alone[1] == pytest.approx(stiffness)


class Field:
    """A motion known in closed form: rotation, and a strain that is straight along the blade."""

    def __init__(self, root: Root, numbers: FloatArray) -> None:
        self.root, self.numbers = root, numbers

    def unknowns(self) -> FloatArray:
        nodes = element_mesh(a_blade(), self.root, DEFAULT_ELEMENTS).node_radius_m
        turn, a, b = self.numbers
        strain = a + b * (nodes - nodes[0])
        return np.concatenate([[turn], strain[:-1], strain[1:]])

    def value(self, r: FloatArray, order: int) -> FloatArray:
        """Order 1 is slope or twist, order 2 displacement; zero inboard of the root."""
        turn, a, b = self.numbers
        s = np.maximum(r - self.root.radius_m, 0.0)
        moves = r > self.root.radius_m
        if order == 1:
            return np.where(moves, turn + a * s + b * s**2 / 2, 0.0)
        return np.asarray(turn * s + a * s**2 / 2 + b * s**3 / 6)

    def squared(self, r: FloatArray) -> FloatArray:
        """Integral of the squared slope from the root."""
        turn, a, b = self.numbers
        slope = np.polynomial.Polynomial([turn, a, b / 2])
        return np.asarray((slope**2).integ()(np.maximum(r - self.root.radius_m, 0.0)))


class Particles:
    """Two mass points a section, in a flat section, moved exactly; and the point masses."""

    def __init__(self, blade: CoupledBlade, fields: list[Field], collective: float) -> None:
        beam, self.fields = blade.beam, fields
        breaks = np.concatenate([beam.radius_m, beam.point_radius_m, [0.45, 0.6]])
        grid = quadrature(np.linspace(0.3, 6.0, 58), breaks)
        self.r = np.concatenate([grid.radius_m, beam.point_radius_m])
        mass, inertia, x = (
            np.interp(grid.radius_m, beam.radius_m, column)
            for column in (beam.mass_kg_m, beam.pitch_inertia_kg_m, blade.cg_offset_m)
        )
        spread = np.sqrt(inertia / mass - x**2)
        points = blade.point_offset_m
        self.mass = np.concatenate([grid.weight_m * mass, beam.point_mass_kg])
        self.chord = [
            np.concatenate([x - spread, points]),
            np.concatenate([x + spread, points]),
        ]
        self.pitch = collective + np.interp(self.r, beam.radius_m, blade.twist_rad)

    def section(self, size: FloatArray, tangent: float) -> tuple[FloatArray, ...]:
        """Lag, flap, their slopes, and pitch, of three fields times their sizes."""
        flap, lag, torsion = (
            [k * f.value(self.r, order) for order in (1, 2)]
            for k, f in zip(size, self.fields, strict=True)
        )
        linkage = tangent * size[0] * self.fields[0].numbers[0]
        return lag[1], flap[1], lag[0], flap[0], self.pitch + torsion[0] - linkage

    def places(self, size: FloatArray, tangent: float) -> list[tuple[FloatArray, FloatArray]]:
        """Displacements in the disc plane and out of it of both particles."""
        v, w, _, _, pitch = self.section(size, tangent)
        return [(v + x * np.cos(pitch), w - x * np.sin(pitch)) for x in self.chord]

    def centrifugal(self, size: FloatArray, tangent: float) -> float:
        """Energy per Ω², squared tilts of the section itself left out."""
        _, _, v_slope, w_slope, pitch = self.section(size, tangent)
        total = 0.0
        for x, (y, _) in zip(self.chord, self.places(size, tangent), strict=True):
            drawn = self.shortening(size) + x * (np.cos(pitch) * v_slope - np.sin(pitch) * w_slope)
            total -= 0.25 * float(np.sum(self.mass * (y**2 - 2.0 * self.r * drawn)))
        return total

    def shortening(self, size: FloatArray) -> FloatArray:
        """½ ∫ v′² + w′² from the root."""
        flap, lag, _ = self.fields
        both = size[0] ** 2 * flap.squared(self.r) + size[1] ** 2 * lag.squared(self.r)
        return np.asarray(0.5 * both)


@pytest.mark.parametrize("tangent", [0.0, 0.4])
def test_energies_are_those_of_the_exact_motion(tangent: float) -> None:
    """Second differences of the energy of particles, at pitch 0.3 rad."""
    blade = coupled()
    roots = dataclasses.replace(HELD, pitch_flap_tangent=tangent)
    fields = [
        Field(roots.flap, np.array([0.3, 0.05, 0.02])),
        Field(roots.lag, np.array([-0.2, 0.03, 0.01])),
        Field(roots.torsion, np.array([0.4, -0.1, 0.05])),
    ]
    particles = Particles(blade, fields, 0.3)
    matrices = coupled_matrices(blade, roots)
    mass, turning = at(matrices, 1.0, 0.3)
    stiffness = turning - at(matrices, 0.0, 0.3)[1]
    q = np.zeros((3, mass.shape[0]))
    for row, family, field in zip(q, FAMILIES, fields, strict=True):
        row[matrices.unknowns[family]] = field.unknowns()
    step = 1e-3
    sizes = step * np.eye(3)
    for i in range(3):
        for j in range(i + 1):
            ends = [
                a * b * particles.centrifugal(a * sizes[i] + b * sizes[j], tangent)
                for a in (1, -1)
                for b in (1, -1)
            ]
            found = sum(ends) / (4.0 * step**2)
            assert found == pytest.approx(q[i] @ stiffness @ q[j], rel=1e-5, abs=1e-5)
            rates = [
                [
                    (np.asarray(ahead) - np.asarray(behind)) / (2.0 * step)
                    for ahead, behind in zip(
                        particles.places(sizes[k], tangent),
                        particles.places(-sizes[k], tangent),
                        strict=True,
                    )
                ]
                for k in (i, j)
            ]
            kinetic = 0.5 * sum(
                np.sum(particles.mass * one * other)
                for one, other in zip(rates[0], rates[1], strict=True)
            )
            assert kinetic == pytest.approx(q[i] @ mass @ q[j], rel=1e-5, abs=1e-6)


def test_a_right_angle_of_pitch_swaps_the_bending_stiffnesses() -> None:
    plan = a_blade()
    swapped = dataclasses.replace(
        plan,
        flap_stiffness_N_m2=plan.lag_stiffness_N_m2,
        lag_stiffness_N_m2=plan.flap_stiffness_N_m2,
    )
    turned = at(coupled_matrices(plain(plan), HELD), 0.0, 0.5 * math.pi)[1]
    expected = at(coupled_matrices(plain(swapped), HELD), 0.0, 0.0)[1]
    assert turned == pytest.approx(expected, rel=1e-12, abs=1e-9)


def test_pitch_turns_the_racket_moment() -> None:
    """cos 2θ: the moment that flattens a section is zero at 45° and turns over beyond."""
    matrices = coupled_matrices(plain(a_blade()), HELD)
    part = matrices.unknowns["torsion"]
    per_speed = [
        (at(matrices, 1.0, angle)[1] - at(matrices, 0.0, angle)[1])[part, part][0, 0]
        for angle in (0.0, 0.25 * math.pi, 0.5 * math.pi)
    ]
    assert per_speed == pytest.approx([per_speed[0], 0.0, -per_speed[0]], abs=1e-9)
    assert per_speed[0] > 0.0


def test_upside_down_twist_gives_the_same_frequencies() -> None:
    blade = coupled()
    mirror = dataclasses.replace(blade, twist_rad=-blade.twist_rad)
    found = squares(coupled_matrices(mirror, HELD), 30.0, -0.2)
    assert found[:8] == pytest.approx(squares(coupled_matrices(blade, HELD), 30.0, 0.2)[:8])


def test_sign_of_the_offset_matters_with_a_linkage_only() -> None:
    """In vacuum the mirror image of the blade vibrates alike, unless flap also turns its root."""
    blade = coupled()
    forward = dataclasses.replace(
        blade, cg_offset_m=-blade.cg_offset_m, point_offset_m=-blade.point_offset_m
    )
    linked = dataclasses.replace(HELD, pitch_flap_tangent=0.5)
    for roots, alike in ((HELD, True), (linked, False)):
        one, other = (squares(coupled_matrices(b, roots), 30.0, 0.1)[:6] for b in (blade, forward))
        assert np.allclose(one, other, rtol=1e-9) is alike


def test_offset_coupling_equals_the_rigid_blade_on_a_flap_hinge_and_a_control_spring() -> None:
    """The two-by-two matrices of pitch and flap, and their signs.

    M = [I_b, -∫ m x (r-e); ., I_θ], K = Ω² [∫ m r (r-e), -∫ m x r; ., I_θ] + [0, k_θ]; offsets
    positive aft, so that an upward acceleration of an aft mass pitches nose up.
    """
    e, control, speed = 0.4, 5e3, 30.0
    beam = dataclasses.replace(
        uniform(mass=6.0, stiffness=1e9, length=5.0, points=((4.0, 2.0),)),
        pitch_inertia_kg_m=np.full(2, 0.05),
    )
    blade = CoupledBlade(beam, np.zeros(2), np.full(2, 0.04), np.array([-0.1]))
    roots = BladeRoots(Root(e, 0.0), Root(e), Root(e, control))
    r = np.linspace(e, 5.0, 2001)

    def moment(of: Callable[[FloatArray], FloatArray], at_point: float) -> float:
        return float(np.trapezoid(6.0 * of(r), r)) + 2.0 * at_point

    arms = moment(lambda s: 0.04 * (s - e), -0.1 * (4.0 - e))
    pulled = moment(lambda s: 0.04 * s, -0.1 * 4.0)
    inertia = 0.05 * (5.0 - e) + 2.0 * 0.1**2
    about = blade_inertia(beam.distribution, e)
    flap = float(about.second_moment_kg_m2)
    mass = np.array([[flap, -arms], [-arms, inertia]])
    stiff = speed**2 * np.array(
        [[flap + e * float(about.first_moment_kg_m), -pulled], [-pulled, inertia]]
    )
    stiff[1, 1] += control
    expected = np.sort(np.linalg.eigvals(np.linalg.solve(mass, stiff)).real)
    found = squares(coupled_matrices(blade, roots), speed, 0.0)[:2]
    assert found == pytest.approx(expected, rel=1e-4)
    confused = stiff.copy()
    confused[0, 1] = confused[1, 0] = -(speed**2) * arms
    wrong = np.sort(np.linalg.eigvals(np.linalg.solve(mass, confused)).real)
    assert np.max(np.abs(wrong / expected - 1.0)) > 3e-4


def test_linkage_turns_a_rigid_blade_as_it_flaps() -> None:
    """Locked control: φ = -β tan δ₃ and one freedom, and a very stiff control comes to the same.

    T = ½ (I_b + 2 t ∫ m x (r-e) + t² I_θ), V = ½ Ω² (∫ m r (r-e) + 2 t ∫ m x r + t² I_θ).
    """
    e, t, speed = 0.4, 0.7, 30.0
    beam = dataclasses.replace(
        uniform(mass=6.0, stiffness=1e9, length=5.0), pitch_inertia_kg_m=np.full(2, 0.6)
    )
    blade = CoupledBlade(beam, np.zeros(2), np.full(2, 0.2), np.zeros(0))
    about = blade_inertia(beam.distribution, e)
    first, second = float(about.first_moment_kg_m), float(about.second_moment_kg_m2)
    inertia = 0.6 * (5.0 - e)
    radial = float(about.centrifugal_factor_kg_m)
    mass = second + 2 * t * 0.2 * first + t * t * inertia
    stiff = second + e * first + 2 * t * 0.2 * radial + t * t * inertia
    for control in (math.inf, 1e9):
        roots = BladeRoots(Root(e, 0.0), Root(e), Root(e, control), t)
        found = squares(coupled_matrices(blade, roots), speed, 0.0)[0]
        assert found == pytest.approx(speed**2 * stiff / mass, rel=1e-4)
    unlinked = (second + e * first) / second
    assert stiff / mass != pytest.approx(unlinked, rel=1e-3)


def test_linkage_of_a_built_in_blade_sees_the_height_of_its_tip() -> None:
    """A blade bent to a parabola of unit curvature: angle l/2, so pitch -t l/2 everywhere."""
    beam = uniform(length=4.0)
    blade = plain(beam)
    held = BladeRoots(Root(0.5), Root(0.5), Root(0.0), 0.6, "tip")
    matrices = coupled_matrices(blade, held)
    part = matrices.unknowns["flap"]
    bent = np.ones(part.stop - part.start)
    mass = matrices.mass[0]
    free = coupled_matrices(blade, dataclasses.replace(held, pitch_flap_tangent=0.0)).mass[0]
    gained = bent @ (mass - free)[part, part] @ bent
    assert gained == pytest.approx(4.0 * (0.6 * 3.5 / 2.0) ** 2)
    by_hinge = dataclasses.replace(held, couples_to="hinge")
    assert np.array_equal(coupled_matrices(blade, by_hinge).mass[0], free)


def test_offset_point_mass_equals_a_short_heavy_stretch() -> None:
    half = 1e-3
    r = np.array([0.0, 0.6 - half, 0.6 - half + 1e-7, 0.6 + half - 1e-7, 0.6 + half, 1.0])
    one = np.ones(6)
    heavy = np.array([0, 0, 1, 1, 0, 0]) * 0.4 / (2 * half)
    inertia = 0.1 * one + heavy * 0.05**2
    offset = np.where(heavy > 0.0, 0.05 * heavy / (one + heavy), 0.0)
    smeared = CoupledBlade(
        BladeBeam(r, one + heavy, one, one, one, inertia), 0.0 * one, offset, np.zeros(0)
    )
    lumped = CoupledBlade(
        dataclasses.replace(uniform(points=((0.6, 0.4),)), pitch_inertia_kg_m=np.full(2, 0.1)),
        np.zeros(2),
        np.zeros(2),
        np.array([0.05]),
    )
    roots = BladeRoots(Root(0.0), Root(0.0), Root(0.0))
    found, expected = (
        squares(coupled_matrices(b, roots), 4.0, 0.3)[:6] for b in (smeared, lumped)
    )
    assert found == pytest.approx(expected, rel=5e-4)


@pytest.mark.parametrize(
    ("changes", "text"),
    [
        ({"twist_rad": np.zeros(5)}, "twist [rad]: expected one value per station"),
        ({"twist_rad": np.full(6, np.nan)}, "twist [rad]: expected a finite value"),
        ({"cg_offset_m": np.zeros(7)}, "c.g. offset [m]: expected one value per station"),
        ({"point_offset_m": np.zeros(1)}, "point mass offsets: expected a finite value per point"),
        ({"point_offset_m": np.array([0.0, np.inf])}, "point mass offsets: expected a finite"),
        ({"cg_offset_m": np.full(6, 0.2)}, "expected at least mass times squared c.g. offset"),
    ],
)
def test_unusable_blades_are_refused(changes: dict[str, Any], text: str) -> None:
    with pytest.raises(ValueError, match=re.escape(text)):
        coupled(**changes)


def test_impossible_roots_are_refused() -> None:
    with pytest.raises(ValueError, match=r"control stiffness: expected more than 0 N m/rad"):
        BladeRoots(Root(0.3), Root(0.3), Root(0.3, 0.0))
    with pytest.raises(ValueError, match=r"pitch-flap coupling: expected a finite tangent"):
        BladeRoots(Root(0.3), Root(0.3), Root(0.3), math.inf)
    with pytest.raises(ValueError, match=r"root radius: expected within the station table"):
        coupled_matrices(coupled(), BladeRoots(Root(0.3), Root(0.2), Root(0.3)))
