"""Mass properties about the hinge: closed forms, exactness, and refusals."""

from __future__ import annotations

import re
from typing import Any

import numpy as np
import pytest

from planner.methods.blade_inertia import (
    MassDistribution,
    blade_inertia,
    lock_number,
    outboard_centrifugal_factor,
    resample,
)


def a_blade(**changes: Any) -> MassDistribution:
    table: dict[str, Any] = {
        "radius_m": np.array([0.3, 0.9, 0.901, 3.0, 6.0]),
        "mass_kg_m": np.array([20.0, 16.0, 7.0, 6.0, 4.0]),
        "point_radius_m": np.array([0.2, 4.5, 6.0]),
        "point_mass_kg": np.array([9.0, 1.5, 0.8]),
    }
    return MassDistribution(**{**table, **changes})


def piecewise(
    blade: MassDistribution, hinge: float, power_of_arm: int, power_of_radius: int = 0
) -> float:
    """The integral from closed-form antiderivatives, station by station."""
    arm = np.polynomial.Polynomial([-hinge, 1.0]) ** power_of_arm
    arm *= np.polynomial.Polynomial([0.0, 1.0]) ** power_of_radius
    total = 0.0
    r, m = blade.radius_m, blade.mass_kg_m
    for i in range(r.size - 1):
        slope = (m[i + 1] - m[i]) / (r[i + 1] - r[i])
        integral = (arm * np.polynomial.Polynomial([m[i] - slope * r[i], slope])).integ()
        inner, outer = max(r[i], hinge), max(r[i + 1], hinge)
        total += integral(outer) - integral(inner)
    for where, mass in zip(blade.point_radius_m, blade.point_mass_kg, strict=True):
        total += mass * arm(where) if where > hinge else 0.0
    return total


@pytest.mark.parametrize("hinge", [0.0, 0.25, 0.3, 0.5, 0.9, 0.9004, 2.2, 5.0])
def test_integrals_equal_antiderivatives(hinge: float) -> None:
    blade = a_blade()
    found = blade_inertia(blade, hinge)
    assert found.mass_kg == pytest.approx(piecewise(blade, hinge, 0), rel=1e-12)
    assert found.first_moment_kg_m == pytest.approx(piecewise(blade, hinge, 1), rel=1e-11)
    assert found.second_moment_kg_m2 == pytest.approx(piecewise(blade, hinge, 2), rel=1e-11)
    assert found.centrifugal_factor_kg_m == pytest.approx(piecewise(blade, hinge, 0, 1), rel=1e-12)


def test_many_hinges_equal_one_by_one() -> None:
    blade = a_blade()
    hinges = np.array([[0.0, 0.3], [0.7, 2.2]])
    together = blade_inertia(blade, hinges)
    assert together.first_moment_kg_m.shape == (2, 2)
    for index in np.ndindex(2, 2):
        alone = blade_inertia(blade, hinges[index])
        assert together.first_moment_kg_m[index] == alone.first_moment_kg_m
        assert together.second_moment_kg_m2[index] == alone.second_moment_kg_m2


def test_uniform_blade_closed_form() -> None:
    blade = MassDistribution(np.array([0.4, 5.0]), np.array([6.0, 6.0]))
    found = blade_inertia(blade, 0.4)
    assert found.mass_kg == pytest.approx(6.0 * 4.6, rel=1e-14)
    assert found.first_moment_kg_m == pytest.approx(6.0 * 4.6**2 / 2, rel=1e-13)
    assert found.second_moment_kg_m2 == pytest.approx(6.0 * 4.6**3 / 3, rel=1e-13)
    assert found.centrifugal_factor_kg_m == pytest.approx(6.0 * (5.0**2 - 0.4**2) / 2, rel=1e-14)


def test_mass_inboard_of_the_hinge_does_not_flap() -> None:
    heavy_cuff = a_blade(mass_kg_m=np.array([80.0, 60.0, 7.0, 6.0, 4.0]))
    for name in ("mass_kg", "first_moment_kg_m", "second_moment_kg_m2"):
        assert getattr(blade_inertia(heavy_cuff, 0.901), name) == pytest.approx(
            getattr(blade_inertia(a_blade(), 0.901), name), rel=1e-13
        )


def test_extra_station_on_the_line_changes_nothing() -> None:
    blade = a_blade()
    at = np.array([0.3, 0.6, 0.9, 0.901, 2.0, 3.0, 4.4, 6.0])
    finer = a_blade(radius_m=at, mass_kg_m=resample(blade.radius_m, blade.mass_kg_m, at))
    assert blade_inertia(finer, 0.45).second_moment_kg_m2 == pytest.approx(
        float(blade_inertia(blade, 0.45).second_moment_kg_m2), rel=1e-13
    )


def test_tension_carries_the_point_masses_outboard() -> None:
    with_tip = outboard_centrifugal_factor(a_blade(), np.array([1.0, 5.0, 5.999999, 6.0]))
    without = a_blade(point_radius_m=np.zeros(0), point_mass_kg=np.zeros(0))
    bare = outboard_centrifugal_factor(without, np.array([1.0, 5.0, 5.999999, 6.0]))
    assert with_tip - bare == pytest.approx([1.5 * 4.5 + 0.8 * 6.0, 4.8, 4.8, 0.0], abs=1e-12)
    assert bare[-1] == 0.0


@pytest.mark.parametrize(
    ("changes", "text"),
    [
        ({"radius_m": np.array([0.3, 0.9, 0.9, 3.0, 6.0])}, "0.9 m followed by 0.9 m; sort"),
        ({"radius_m": np.array([-0.3, 0.9, 1.9, 3.0, 6.0])}, "from 0 m up"),
        ({"radius_m": np.array([0.3, 0.9, np.nan, 3.0, 6.0])}, "expected finite values"),
        ({"radius_m": np.array([0.3])}, "a row of at least two, found shape (1,)"),
        ({"mass_kg_m": np.array([1.0, 1.0])}, "shape (5,), found (2,); give every station"),
        ({"mass_kg_m": np.array([1.0, 1, -2, 1, 1])}, "at least 0, found -2 at radius 0.901 m"),
        ({"mass_kg_m": np.array([1.0, 1, np.nan, 1, 1])}, "expected a finite value"),
        ({"point_mass_kg": np.array([1.0])}, "as many radii as masses"),
        ({"point_mass_kg": np.array([1.0, -1.0, 1.0])}, "from 0 kg up"),
        ({"point_mass_kg": np.array([1.0, np.inf, 1.0])}, "expected finite values from 0 kg"),
        ({"point_radius_m": np.array([1.0, 2.0, 6.1])}, "last station at 6 m"),
        ({"point_radius_m": np.array([1.0, 2.0, np.nan])}, "move the mass or extend"),
    ],
)
def test_unusable_tables_are_refused(changes: dict[str, Any], text: str) -> None:
    with pytest.raises(ValueError, match=re.escape(text)):
        a_blade(**changes)


@pytest.mark.parametrize("hinge", [-0.1, 6.0, np.nan])
def test_hinge_off_the_blade_is_refused(hinge: float) -> None:
    with pytest.raises(ValueError, match=r"hinge radius: expected from 0 m to less than the tip"):
        blade_inertia(a_blade(), hinge)


def test_weightless_blade_is_refused() -> None:
    blade = MassDistribution(np.array([0.0, 2.0, 4.0]), np.array([3.0, 0.0, 0.0]))
    with pytest.raises(ValueError, match=r"blade mass: expected more than 0 kg outboard"):
        blade_inertia(blade, 2.5)


def test_lock_number_scales_and_refuses() -> None:
    gamma = lock_number(np.array([1.225, 0.6125]), 5.7, 0.4, 6.0, 400.0)
    assert gamma[0] == pytest.approx(1.225 * 5.7 * 0.4 * 6.0**4 / 400.0, rel=1e-14)
    assert gamma[0] / gamma[1] == pytest.approx(2.0, rel=1e-14)
    with pytest.raises(ValueError, match=r"flap inertia: expected more than 0 kg m²"):
        lock_number(1.225, 5.7, 0.4, 6.0, 0.0)


def test_resample_keeps_stations_and_columns() -> None:
    radius = np.array([0.0, 1.0, 4.0])
    columns = np.array([[2.0, 5.0, 8.0], [1.0, 0.0, 3.0]])
    assert np.array_equal(resample(radius, columns, radius), columns)
    assert resample(radius, columns, [2.5]) == pytest.approx(np.array([[6.5], [1.5]]))


def test_resample_never_extrapolates() -> None:
    radius = np.array([0.5, 1.0])
    with pytest.raises(ValueError, match=r"expected between 0.5 m and 1 m.*extend the station"):
        resample(radius, radius, [0.4])
    with pytest.raises(ValueError, match=r"expected between 0.5 m and 1 m"):
        resample(radius, radius, [np.nan])
    with pytest.raises(ValueError, match=r"expected 2 along the last axis"):
        resample(radius, np.ones(3), [0.6])
