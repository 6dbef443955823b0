"""Frequencies and shapes: properties, zero and negative roots, and the equivalent hinge."""

from __future__ import annotations

import dataclasses
import math
from typing import TYPE_CHECKING

import numpy as np
import pytest

from planner.methods.beam import BladeBeam, Root, flap_matrices, lag_matrices, torsion_matrices
from planner.methods.beam_modes import equivalent_hinge, frequencies, modes
from planner.methods.blade_inertia import MassDistribution, blade_inertia

if TYPE_CHECKING:
    from collections.abc import Callable

    from numpy.typing import NDArray

    from planner.methods.beam import BeamMatrices


def blade_of(
    radius: NDArray[np.float64],
    mass: float | NDArray[np.float64],
    stiffness: float | NDArray[np.float64],
) -> BladeBeam:
    one = np.ones_like(radius)
    return BladeBeam(radius, mass * one, stiffness * one, 30 * stiffness * one, one, one)


def uniform() -> BladeBeam:
    return blade_of(np.array([0.0, 1.0]), 1.0, 1.0)


def a_blade() -> BladeBeam:
    radius = np.linspace(0.3, 6.0, 24)
    return blade_of(radius, 9.0 - radius, 3e4 * (6.5 - radius))


def bisect(function: Callable[[float], float], low: float, high: float) -> float:
    sign = math.copysign(1.0, function(low))
    for _ in range(100):
        middle = 0.5 * (low + high)
        low, high = (middle, high) if sign * function(middle) > 0.0 else (low, middle)
    return low


def test_cantilever_at_rest_solves_its_characteristic_equation() -> None:
    """1 + cos x cosh x = 0 with ω = x²: computed here."""
    found = frequencies(flap_matrices(uniform(), Root(0.0)), 0.0)
    for mode in range(4):
        x = bisect(
            lambda x: math.cos(x) + 1.0 / math.cosh(x), mode * math.pi + 1e-9, (mode + 1) * math.pi
        )
        assert found[mode] == pytest.approx(x * x, rel=1e-4)


def test_hinged_at_rest_solves_its_characteristic_equation() -> None:
    """tan x = tanh x with ω = x²: computed here."""
    found = frequencies(flap_matrices(uniform(), Root(0.0, 0.0)), 0.0)
    for mode in range(1, 4):
        x = bisect(
            lambda x: math.sin(x) - math.tanh(x) * math.cos(x),
            mode * math.pi,
            (mode + 0.5) * math.pi,
        )
        assert found[mode] == pytest.approx(x * x, rel=1e-4)


@pytest.mark.parametrize(
    ("root", "expected"),
    [
        (Root(0.0), [1.193336, 6.478225, 17.85952, 36.05539]),
        (Root(0.0, 0.0), [1.0, 6.397395, 17.90500, 35.99923]),
    ],
)
def test_southwell_coefficients_of_the_modes_at_rest(root: Root, expected: list[float]) -> None:
    """Stiffening per Ω² of the shapes at rest; computed by two independent solvers."""
    matrices = flap_matrices(uniform(), root)
    at_rest = modes(matrices, 0.0)
    q = at_rest.coordinates
    stiffening = np.einsum("mi,ij,mj->m", q, matrices.stiffness_omega2, q) / at_rest.modal_mass
    assert stiffening == pytest.approx(expected, rel=1e-4)


def test_southwell_from_the_shapes_at_rest_is_an_upper_bound() -> None:
    matrices = flap_matrices(uniform(), Root(0.0))
    at_rest, q = frequencies(matrices, 0.0), modes(matrices, 0.0)
    slope = np.einsum("mi,ij,mj->m", q.coordinates, matrices.stiffness_omega2, q.coordinates) / (
        q.modal_mass
    )
    bound = np.sqrt(at_rest**2 + 144.0 * slope)
    excess = bound / frequencies(matrices, 12.0) - 1.0
    assert np.all(excess > 0.0)
    assert 0.001 < np.max(excess) < 0.04


@pytest.mark.parametrize("build", [flap_matrices, lag_matrices, torsion_matrices])
def test_batch_equals_single_speeds_bit_for_bit(build: Callable[..., BeamMatrices]) -> None:
    matrices = build(a_blade(), Root(0.45, 4e3))
    speed = np.linspace(0.0, 45.0, 9)
    batch = frequencies(matrices, speed)
    shaped = frequencies(matrices, speed.reshape(3, 3))
    assert batch.shape == (9, 4)
    assert np.array_equal(shaped.reshape(9, 4), batch)
    together = modes(matrices, speed)
    for index, value in enumerate(speed):
        assert np.array_equal(frequencies(matrices, value), batch[index])
        assert np.array_equal(modes(matrices, value).shape, together.shape[index])


@pytest.mark.parametrize("root", [Root(0.3), Root(0.5, 0.0), Root(0.5, 1e4)])
def test_flap_rises_with_speed_and_at_least_as_fast_as_the_rotor(root: Root) -> None:
    speed = np.linspace(0.0, 60.0, 31)
    squared = frequencies(flap_matrices(a_blade(), root), speed) ** 2
    gain = np.diff(squared, axis=0) / np.diff(speed**2)[:, None]
    assert np.all(gain > 1.0)
    assert np.all(np.diff(squared, axis=1) > 0.0)


def test_free_hinge_at_rest_gives_exactly_zero() -> None:
    for build in (flap_matrices, lag_matrices):
        found = frequencies(build(a_blade(), Root(0.45, 0.0)), [0.0, 1.0])
        assert found[0, 0] == 0.0
        assert np.all(np.isfinite(found))
        assert found[0, 1] > 1.0
    assert frequencies(lag_matrices(uniform(), Root(0.0, 0.0)), [0.0, 3.0, 90.0])[:, 0] == (
        pytest.approx([0.0, 0.0, 0.0], abs=0.0)
    )


def test_stiff_root_does_not_stiffen_a_free_hinge() -> None:
    """At a thousandth of the first bending frequency the hinge still turns once per revolution."""
    radius = np.linspace(0.0, 6.0, 61)
    blade = blade_of(radius, 5.0, np.where(radius < 0.6, 1e9, 1e4))
    speed = np.array([0.01, 0.1, 1.0, 30.0])
    found = frequencies(flap_matrices(blade, Root(0.0, 0.0), 60), speed)[:, 0]
    assert found == pytest.approx(speed, rel=1e-7)


def test_shapes_satisfy_the_eigenproblem_and_are_orthogonal() -> None:
    matrices = flap_matrices(a_blade(), Root(0.45, 4e3))
    found = modes(matrices, [0.0, 30.0], 5)
    stiffness = matrices.stiffness_0 + 900.0 * matrices.stiffness_omega2
    q = found.coordinates[1]
    mass = q @ matrices.mass @ q.T
    assert np.diag(mass) == pytest.approx(found.modal_mass[1], rel=1e-12)
    scale = np.sqrt(np.outer(found.modal_mass[1], found.modal_mass[1]))
    assert mass / scale == pytest.approx(np.eye(5), abs=1e-9)
    energy = q @ stiffness @ q.T / scale
    assert np.diag(energy) == pytest.approx(found.frequency_rad_s[1] ** 2, rel=1e-8)
    assert np.array_equal(found.frequency_rad_s.shape, (2, 5))
    assert found.frequency_rad_s == pytest.approx(frequencies(matrices, [0.0, 30.0], 5), rel=1e-9)


def test_shapes_are_scaled_and_have_one_node_more_each() -> None:
    radius = np.linspace(0.3, 6.0, 400)
    found = modes(flap_matrices(a_blade(), Root(0.3)), 30.0, 4, radius)
    assert np.max(np.abs(found.shape), axis=-1) == pytest.approx(np.ones(4))
    assert np.all(found.shape[:, -1] > 0.0)
    inner = found.shape[:, 1:]
    crossings = np.sum(np.sign(inner[:, 1:]) != np.sign(inner[:, :-1]), axis=-1)
    assert crossings.tolist() == [0, 1, 2, 3]
    assert found.shape[:, 0] == pytest.approx(np.zeros(4), abs=1e-12)
    assert found.shape_slope_1_m[:, 0] == pytest.approx(np.zeros(4), abs=1e-12)
    assert np.gradient(found.shape[2], radius)[5:-5] == pytest.approx(
        found.shape_slope_1_m[2, 5:-5], abs=2e-3
    )


def test_rigid_flap_shape_is_a_straight_line() -> None:
    blade = blade_of(np.array([0.0, 5.0]), 4.0, 1e9)
    radius = np.linspace(0.5, 5.0, 10)
    found = modes(flap_matrices(blade, Root(0.5, 0.0)), 20.0, 1, radius)
    assert found.shape[0] == pytest.approx((radius - 0.5) / 4.5, abs=1e-5)
    inertia = float(blade_inertia(blade.distribution, 0.5).second_moment_kg_m2)
    assert found.modal_mass[0] == pytest.approx(inertia / 4.5**2, rel=1e-5)


def test_torsion_shape_is_twist() -> None:
    radius = np.linspace(0.0, 1.0, 11)
    found = modes(torsion_matrices(uniform(), Root(0.0)), 3.0, 1, radius)
    assert found.shape[0] == pytest.approx(np.sin(0.5 * math.pi * radius), abs=1e-5)
    assert found.modal_mass[0] == pytest.approx(0.5, rel=1e-5)


def test_negative_square_is_an_error_not_a_nan() -> None:
    matrices = flap_matrices(uniform(), Root(0.0))
    pushed = dataclasses.replace(matrices, stiffness_omega2=-3.0 * matrices.mass)
    with pytest.raises(ValueError, match=r"squared frequency: expected zero or more, found -"):
        frequencies(pushed, 2.5)
    soft = dataclasses.replace(matrices, stiffness_0=-matrices.stiffness_0)
    with pytest.raises(ValueError, match=r"beam stiffness: expected positive definite"):
        frequencies(soft, 1.0)


def test_impossible_requests_are_refused() -> None:
    matrices = flap_matrices(uniform(), Root(0.0), 2)
    with pytest.raises(ValueError, match=r"modes: expected between 1 and the 4 unknowns, found 5"):
        frequencies(matrices, 1.0, 5)
    with pytest.raises(ValueError, match=r"rotor speed: expected finite values"):
        frequencies(matrices, [1.0, math.nan])
    with pytest.raises(ValueError, match=r"shape radius: expected from the root at 0 m"):
        modes(matrices, 1.0, 1, np.array([0.5, 1.1]))


def test_equivalent_hinge_reproduces_both_frequencies() -> None:
    blade = a_blade()
    matrices = flap_matrices(blade, Root(0.3))
    rest, turning = frequencies(matrices, [0.0, 33.0])[:, 0]
    found = equivalent_hinge(blade.distribution, 0.3, 33.0, rest, turning)
    assert 0.3 < found.radius_m < 1.8
    about = blade_inertia(blade.distribution, found.radius_m)
    inertia = float(about.second_moment_kg_m2)
    assert math.sqrt(found.spring_N_m_rad / inertia) == pytest.approx(rest, rel=1e-12)
    ratio = (
        1.0
        + found.radius_m * float(about.first_moment_kg_m) / inertia
        + found.spring_N_m_rad / (inertia * 33.0**2)
    )
    assert ratio == pytest.approx((turning / 33.0) ** 2, rel=1e-10)


def test_equivalent_hinge_of_a_sprung_rigid_blade_is_its_own_hinge() -> None:
    blade = blade_of(np.array([0.0, 5.0]), 4.0, 1e10)
    rest, turning = frequencies(flap_matrices(blade, Root(0.4, 6e3)), [0.0, 30.0])[:, 0]
    found = equivalent_hinge(blade.distribution, 0.0, 30.0, rest, turning)
    assert found.radius_m == pytest.approx(0.4, rel=1e-4)
    assert found.spring_N_m_rad == pytest.approx(6e3, rel=1e-4)


def test_equivalent_hinge_refuses_what_it_cannot_match() -> None:
    blade = MassDistribution(np.array([0.0, 5.0]), np.array([4.0, 4.0]))
    with pytest.raises(ValueError, match=r"expected one between the root at 1 m and 1.5 m"):
        equivalent_hinge(blade, 1.0, 30.0, 5.0, 31.0)
    with pytest.raises(ValueError, match=r"expected one between the root at 0 m and 1.5 m"):
        equivalent_hinge(blade, 0.0, 30.0, 5.0, 60.0)
    with pytest.raises(ValueError, match=r"a flap frequency that rises with it"):
        equivalent_hinge(blade, 0.0, 30.0, 5.0, 4.0)
    with pytest.raises(ValueError, match=r"expected a positive speed"):
        equivalent_hinge(blade, 0.0, 0.0, 5.0, 6.0)
