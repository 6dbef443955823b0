"""Matrices of the rotating blade: identities, physical terms, and refusals."""

from __future__ import annotations

import dataclasses
import math
import re
from typing import TYPE_CHECKING, Any

import numpy as np
import pytest

from planner.methods.beam import (
    BladeBeam,
    Root,
    flap_matrices,
    lag_matrices,
    torsion_matrices,
)
from planner.methods.beam_modes import frequencies
from planner.methods.blade_inertia import blade_inertia

if TYPE_CHECKING:
    from collections.abc import Callable, Sequence

    from planner.methods.beam import BeamMatrices


def a_blade(**changes: Any) -> BladeBeam:
    table: dict[str, Any] = {
        "radius_m": np.array([0.3, 0.9, 0.905, 2.0, 4.0, 6.0]),
        "mass_kg_m": np.array([20.0, 16.0, 7.0, 6.5, 6.0, 5.0]),
        "flap_stiffness_N_m2": np.array([3e5, 2e5, 3e4, 2.5e4, 2e4, 1e4]),
        "lag_stiffness_N_m2": np.array([9e5, 8e5, 7e5, 6e5, 5e5, 4e5]),
        "torsion_stiffness_N_m2": np.array([9e4, 8e4, 2e4, 2e4, 2e4, 1e4]),
        "pitch_inertia_kg_m": np.array([0.1, 0.1, 0.07, 0.06, 0.06, 0.05]),
        "point_radius_m": np.array([4.5, 6.0]),
        "point_mass_kg": np.array([1.5, 0.8]),
    }
    return BladeBeam(**{**table, **changes})


def uniform(
    mass: float = 1.0,
    stiffness: float = 1.0,
    root: float = 0.0,
    length: float = 1.0,
    points: Sequence[tuple[float, float]] = (),
) -> BladeBeam:
    one = np.ones(2)
    return BladeBeam(
        np.array([root, root + length]),
        mass * one,
        stiffness * one,
        stiffness * one,
        stiffness * one,
        mass * one,
        np.array([radius for radius, _ in points], dtype=np.float64),
        np.array([value for _, value in points], dtype=np.float64),
    )


def test_rigid_entries_equal_the_blade_inertia() -> None:
    blade = a_blade()
    hinge = 0.45
    about = blade_inertia(blade.distribution, hinge)
    flap = flap_matrices(blade, Root(hinge, 700.0))
    lag = lag_matrices(blade, Root(hinge, 0.0))
    inertia = float(about.second_moment_kg_m2)
    offset = hinge * float(about.first_moment_kg_m)
    assert flap.mass[0, 0] == pytest.approx(inertia, rel=1e-12)
    assert flap.stiffness_omega2[0, 0] == pytest.approx(inertia + offset, rel=1e-12)
    assert lag.stiffness_omega2[0, 0] == pytest.approx(offset, rel=1e-9)
    assert flap.stiffness_0[0, 0] == 700.0
    assert np.all(flap.stiffness_0[0, 1:] == 0.0)


@pytest.mark.parametrize("build", [flap_matrices, lag_matrices, torsion_matrices])
def test_matrices_are_symmetric(build: Callable[..., BeamMatrices]) -> None:
    matrices = build(a_blade(), Root(0.5, 2e4))
    for matrix in (matrices.mass, matrices.stiffness_0, matrices.stiffness_omega2):
        assert matrix == pytest.approx(matrix.T, rel=1e-14)


@pytest.mark.parametrize("offset", [0.0, 0.05, 0.3])
def test_rigid_hinged_blade_identities(offset: float) -> None:
    """(ω/Ω)² = 1 + 1.5 e/(R-e) in flap and 1.5 e/(R-e) in lag, rigid uniform blade."""
    blade = uniform(mass=4.0, stiffness=1e9, length=5.0)
    e, speed = 5.0 * offset, 30.0
    flap = frequencies(flap_matrices(blade, Root(e, 0.0)), speed)[0] / speed
    lag = frequencies(lag_matrices(blade, Root(e, 0.0)), speed)[0] / speed
    expected = 1.5 * e / (5.0 - e)
    assert flap**2 == pytest.approx(1.0 + expected, rel=1e-4)
    assert lag**2 == pytest.approx(expected, rel=1e-4, abs=1e-9)


def test_rigid_blade_on_a_spring_with_point_masses() -> None:
    blade = uniform(mass=4.0, stiffness=1e9, length=5.0, points=((2.0, 3.0), (5.0, 1.0)))
    about = blade_inertia(blade.distribution, 0.25)
    inertia = float(about.second_moment_kg_m2)
    speed, spring = np.array([0.0, 10.0, 40.0]), 8e3
    found = frequencies(flap_matrices(blade, Root(0.25, spring)), speed)[:, 0]
    expected = spring / inertia + speed**2 * (
        1.0 + 0.25 * float(about.first_moment_kg_m) / inertia
    )
    assert found**2 == pytest.approx(expected, rel=1e-4)


@pytest.mark.parametrize("points", [(), ((1.0, 0.5),), ((0.37, 2.0), (0.8, 0.3))])
def test_central_hinge_flaps_once_per_revolution(points: tuple[tuple[float, float], ...]) -> None:
    """Exact for any elastic blade, and only if the tension carries the point masses."""
    matrices = flap_matrices(uniform(points=points), Root(0.0, 0.0))
    speed = np.array([0.05, 1.0, 12.0, 100.0])
    assert frequencies(matrices, speed)[:, 0] == pytest.approx(speed, rel=1e-9)


def test_point_mass_left_out_of_the_tension_shows() -> None:
    """Leaving the tip mass out of the tension costs flap 2 and 3 a few per cent."""
    with_tip = uniform(points=((1.0, 0.05),))
    matrices = flap_matrices(with_tip, Root(0.0, 0.0))
    bare = flap_matrices(uniform(), Root(0.0, 0.0))
    assert np.array_equal(matrices.mesh.node_radius_m, bare.mesh.node_radius_m)
    wrong = dataclasses.replace(matrices, stiffness_omega2=bare.stiffness_omega2)
    right_frequency, wrong_frequency = (frequencies(m, 12.0) for m in (matrices, wrong))
    assert right_frequency[0] == pytest.approx(12.0, rel=1e-9)
    assert np.all(wrong_frequency[1:3] / right_frequency[1:3] - 1.0 < -0.01)


def test_point_mass_equals_a_short_heavy_stretch() -> None:
    half = 0.001
    radius = np.array([0.0, 0.6 - half, 0.6 - half + 1e-7, 0.6 + half - 1e-7, 0.6 + half, 1.0])
    one = np.ones(6)
    mass = np.array([1.0, 1.0, 1.0 + 0.4 / (2 * half), 1.0 + 0.4 / (2 * half), 1.0, 1.0])
    smeared = BladeBeam(radius, mass, one, one, one, one)
    lumped = uniform(points=((0.6, 0.4),))
    for root in (Root(0.0), Root(0.0, 0.0)):
        found, expected = (
            frequencies(flap_matrices(blade, root), [0.0, 8.0]) for blade in (smeared, lumped)
        )
        assert found == pytest.approx(expected, rel=3e-4)


@pytest.mark.parametrize("root", [Root(0.3), Root(0.45, 0.0), Root(0.45, 3e3)])
def test_lag_identity_without_pitch(root: Root) -> None:
    """ω_lag² = ω_flap² - Ω² where both stiffnesses are equal; fails without the -Ω² m term."""
    stiffness = a_blade().flap_stiffness_N_m2
    blade = a_blade(lag_stiffness_N_m2=stiffness)
    speed = np.array([0.0, 5.0, 20.0, 45.0])
    flap = frequencies(flap_matrices(blade, root), speed)
    lag = frequencies(lag_matrices(blade, root), speed)
    assert lag**2 == pytest.approx(flap**2 - speed[:, None] ** 2, rel=1e-9)


def test_lag_of_a_heavy_articulated_blade() -> None:
    """Masses of C. E. Hammond, J. American Helicopter Society 19(4), 1974, read second hand.

    m 94.9 kg, S 289.1 kg m, I 1084.7 kg m², e 0.3048 m give √(e S/I) = 0.285 per revolution
    (computed); without the -Ω² m term the answer would be 1.04.
    """
    mass, first, second, hinge = 94.9, 289.1, 1084.7, 0.3048
    middle = first / mass
    spread = math.sqrt(second / mass - middle**2)
    arms = (middle - spread, middle + spread)
    blade = uniform(
        mass=1e-6, stiffness=1e9, length=6.0, points=[(hinge + a, mass / 2) for a in arms]
    )
    found = frequencies(lag_matrices(blade, Root(hinge, 0.0)), 25.0)[0] / 25.0
    assert found == pytest.approx(0.2850209, rel=1e-4)


def test_limp_hinged_blade_is_a_chain() -> None:
    """(ω/Ω)² = 1, 6, 15: the hanging chain in the centrifugal field, analytic."""
    matrices = flap_matrices(uniform(stiffness=1e-8), Root(0.0, 0.0))
    assert frequencies(matrices, 1.0, 3) ** 2 == pytest.approx([1.0, 6.0, 15.0], rel=1e-3)


def test_hub_radius_raises_the_tension() -> None:
    """Hub radius equal to the blade length; computed by a Ritz and a shooting solver."""
    found = frequencies(flap_matrices(uniform(root=1.0), Root(1.0)), [2.0, 12.0], 2)
    assert found[:, 0] == pytest.approx([4.83369, 19.72150], rel=1e-3)
    assert found[:, 1] == pytest.approx([23.36604, 51.07013], rel=1e-3)


def test_teetering_families_from_two_roots() -> None:
    blade = uniform()
    collective = frequencies(flap_matrices(blade, Root(0.0)), 6.0)
    cyclic = frequencies(flap_matrices(blade, Root(0.0, 0.0)), 6.0)
    assert cyclic[0] == pytest.approx(6.0, rel=1e-10)
    assert np.all(cyclic[:-1] < collective[:-1])
    assert np.all(collective[:-1] < cyclic[1:])


def test_torsion_of_a_built_in_uniform_rod() -> None:
    """ω = (2 n - 1) π/2 √(GJ / (I_θ L²)) at rest, plus Ω² on the square: analytic."""
    matrices = torsion_matrices(uniform(mass=2.0, stiffness=18.0, length=3.0), Root(0.0))
    at_rest = (2 * np.arange(1, 5) - 1) * math.pi / 2 * math.sqrt(18.0 / (2.0 * 9.0))
    found = frequencies(matrices, [0.0, 5.0])
    assert found[0] == pytest.approx(at_rest, rel=1e-4)
    assert found[1] ** 2 - found[0] ** 2 == pytest.approx(np.full(4, 25.0), rel=1e-9)


def test_torsion_on_a_control_spring() -> None:
    """x tan x = k L / GJ with x = ω L √(I_θ/GJ): characteristic equation, solved here."""
    spring = 1.7
    low, high = 0.0, math.pi / 2
    for _ in range(80):
        x = 0.5 * (low + high)
        low, high = (x, high) if x * math.tan(x) < spring else (low, x)
    found = frequencies(torsion_matrices(uniform(), Root(0.0, spring)), 0.0)
    assert found[0] == pytest.approx(low, rel=1e-8)


def test_control_stiffness_ranges_from_rigid_pitch_to_locked() -> None:
    blade = a_blade()
    root = 0.3
    spring = np.array([1.0, 1e3, 1e5, 1e9])
    first = [frequencies(torsion_matrices(blade, Root(root, k)), 0.0)[0] for k in spring]
    locked = frequencies(torsion_matrices(blade, Root(root)), 0.0)[0]
    assert np.all(np.diff(first) > 0.0)
    assert first[-1] == pytest.approx(locked, rel=1e-4)
    inertia = np.trapezoid(blade.pitch_inertia_kg_m, blade.radius_m)
    assert first[0] == pytest.approx(math.sqrt(1.0 / inertia), rel=1e-4)


@pytest.mark.parametrize("build", [flap_matrices, lag_matrices, torsion_matrices])
@pytest.mark.parametrize("root", [Root(0.3), Root(0.45, 5e3)])
def test_frequencies_do_not_depend_on_the_elements(
    build: Callable[..., BeamMatrices], root: Root
) -> None:
    blade = a_blade()
    coarse, fine = (frequencies(build(blade, root, n), [0.0, 30.0]) for n in (20, 80))
    assert coarse[:, :2] == pytest.approx(fine[:, :2], rel=2e-4)
    assert coarse[:, 2:] == pytest.approx(fine[:, 2:], rel=1e-3)
    assert np.all(coarse >= fine * (1.0 - 1e-9))


def test_scaling_keeps_the_dimensionless_frequencies() -> None:
    """ω √(m L⁴/EI) depends on Ω √(m L⁴/EI) and the shape of the tables only."""
    plain = a_blade()
    length, mass, stiffness = 2.5, 3.0, 0.7
    other = BladeBeam(
        length * plain.radius_m,
        mass * plain.mass_kg_m,
        stiffness * plain.flap_stiffness_N_m2,
        stiffness * plain.lag_stiffness_N_m2,
        stiffness * plain.torsion_stiffness_N_m2,
        plain.pitch_inertia_kg_m,
        length * plain.point_radius_m,
        mass * length * plain.point_mass_kg,
    )
    rate = math.sqrt(stiffness / (mass * length**4))
    speed = np.array([0.0, 10.0, 40.0])
    for build in (flap_matrices, lag_matrices):
        expected = rate * frequencies(build(plain, Root(0.3)), speed)
        found = frequencies(build(other, Root(0.3 * length)), rate * speed)
        assert found == pytest.approx(expected, rel=1e-9)


def test_mass_inboard_of_the_hinge_does_not_matter() -> None:
    heavy = a_blade(mass_kg_m=np.array([90.0, 50.0, 7.0, 6.5, 6.0, 5.0]))
    found, expected = (
        frequencies(flap_matrices(blade, Root(0.905, 0.0)), 30.0) for blade in (heavy, a_blade())
    )
    assert found == pytest.approx(expected, rel=1e-12)
    ring = a_blade(
        point_radius_m=np.array([0.2, 4.5, 6.0]), point_mass_kg=np.array([9.0, 1.5, 0.8])
    )
    assert frequencies(flap_matrices(ring, Root(0.905, 0.0)), 30.0) == pytest.approx(
        expected, rel=1e-12
    )


@pytest.mark.parametrize(
    ("changes", "text"),
    [
        (
            {"mass_kg_m": np.array([20.0, 16, 0, 6.5, 6, 5])},
            "more than 0, found 0 at radius 0.905",
        ),
        ({"flap_stiffness_N_m2": np.array([3e5, 2e5, -1, 1, 1, 1])}, "flap stiffness [N m²]"),
        ({"lag_stiffness_N_m2": np.full(6, np.nan)}, "lag stiffness [N m²]: expected a finite"),
        ({"torsion_stiffness_N_m2": np.ones(5)}, "torsion stiffness [N m²]: expected one value"),
        ({"pitch_inertia_kg_m": np.zeros(6)}, "pitch inertia per length [kg m]"),
        ({"radius_m": np.array([0.3, 0.9, 0.8, 2.0, 4.0, 6.0])}, "0.9 m followed by 0.8 m"),
        ({"point_radius_m": np.array([4.5, 6.5])}, "last station at 6 m"),
    ],
)
def test_unusable_tables_are_refused(changes: dict[str, Any], text: str) -> None:
    with pytest.raises(ValueError, match=re.escape(text)):
        a_blade(**changes)


@pytest.mark.parametrize("radius", [0.2, 6.0, 7.0])
def test_root_off_the_table_is_refused(radius: float) -> None:
    with pytest.raises(ValueError, match=r"within the station table, 0.3 m to less than 6 m"):
        flap_matrices(a_blade(), Root(radius))


def test_impossible_roots_are_refused() -> None:
    with pytest.raises(ValueError, match=r"root radius: expected a finite value from 0 m up"):
        Root(-0.1)
    with pytest.raises(ValueError, match=r"root spring: expected 0 N m/rad .* found -1"):
        Root(0.3, -1.0)
    with pytest.raises(ValueError, match=r"root spring: .* found nan"):
        Root(0.3, math.nan)
    with pytest.raises(ValueError, match=r"control stiffness: expected more than 0 N m/rad"):
        torsion_matrices(a_blade(), Root(0.3, 0.0))
    with pytest.raises(ValueError, match=r"elements: expected at least 2, found 1; 20 are usual"):
        flap_matrices(a_blade(), Root(0.3), 1)
