"""Elements in strains: consistency of the shapes and exactness of the integrals."""

import numpy as np
import pytest

from planner.methods.beam_elements import Mesh, gram, node_radii, quadrature, shapes

NODES = np.array([0.4, 0.9, 1.1, 2.6, 4.0])


@pytest.mark.parametrize("free_roots", [0, 1])
def test_shapes_are_integrals_of_the_strain(free_roots: int) -> None:
    mesh = Mesh(NODES, root_is_free=free_roots == 1)
    radius = np.linspace(0.4, 4.0, 181)
    at = shapes(mesh, radius)
    fine = quadrature(radius, NODES)
    inside = shapes(mesh, fine.radius_m)
    for of, to in (
        (inside.strain, at.first_integral),
        (inside.first_integral, at.second_integral),
    ):
        gained = (of * fine.weight_m[:, None]).sum(axis=0)
        assert to[-1] - to[0] == pytest.approx(gained, abs=1e-13)
    assert at.second_integral.shape == (181, 8 + free_roots)


def test_free_root_rotates_without_strain() -> None:
    at = shapes(Mesh(NODES, root_is_free=True), np.array([0.4, 1.0, 4.0]))
    assert np.all(at.strain[:, 0] == 0.0)
    assert np.all(at.first_integral[:, 0] == 1.0)
    assert at.second_integral[:, 0] == pytest.approx([0.0, 0.6, 3.6])


def test_unit_curvature_bends_to_a_parabola() -> None:
    at = shapes(Mesh(NODES, root_is_free=False), np.array([0.4, 1.0, 2.6, 4.0]))
    x = np.array([0.0, 0.6, 2.2, 3.6])
    ones = np.ones(8)
    assert at.strain @ ones == pytest.approx(np.ones(4))
    assert at.first_integral @ ones == pytest.approx(x)
    assert at.second_integral @ ones == pytest.approx(0.5 * x**2)


def test_quadrature_is_exact_across_breaks() -> None:
    points = quadrature(np.array([0.0, 1.0, 2.0]), np.array([-1.0, 0.3, 1.0, 1.7, 2.0]))
    kinked = np.where(points.radius_m < 0.3, 0.0, (points.radius_m - 0.3) ** 7)
    assert (points.weight_m * kinked).sum() == pytest.approx(1.7**8 / 8, rel=1e-13)
    assert points.weight_m.sum() == pytest.approx(2.0, rel=1e-14)


def test_nodes_hold_jumps_and_move_onto_stations() -> None:
    nodes = node_radii((0.0, 2.0), np.array([0.77]), np.array([0.0, 0.31, 1.45, 2.0]), 10)
    assert nodes[0] == 0.0
    assert nodes[-1] == 2.0
    for wanted in (0.31, 0.77, 1.45):
        assert np.min(np.abs(nodes - wanted)) == 0.0
    assert np.all(np.diff(nodes) > 0.02)
    assert 11 <= nodes.size <= 13


def test_a_fine_table_does_not_multiply_the_elements() -> None:
    stations = np.linspace(0.0, 2.0, 1001)
    nodes = node_radii((0.0, 2.0), stations, stations, 10)
    assert nodes.size <= 41
    assert node_radii((0.0, 2.0), np.zeros(0), stations, 10).size == 11


def test_gram_is_symmetric_to_the_bit() -> None:
    columns = np.random.default_rng(4).normal(size=(30, 7))
    matrix = gram(columns, np.linspace(0.1, 2.0, 30))
    assert np.array_equal(matrix, matrix.T)
    assert np.all(np.linalg.eigvalsh(matrix) > 0.0)
