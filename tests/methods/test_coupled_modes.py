"""Coupled modes: limits, crossings and names, lanes, and refusals."""

from __future__ import annotations

import dataclasses
import math
from typing import TYPE_CHECKING

import numpy as np
import pytest
from scipy.optimize import brentq

from planner.methods import coupled_space
from planner.methods.beam import (
    BladeBeam,
    Root,
    flap_matrices,
    lag_matrices,
    torsion_matrices,
)
from planner.methods.beam_modes import frequencies
from planner.methods.coupled_beam import (
    FAMILIES,
    BladeRoots,
    CoupledBlade,
    coupled_matrices,
    pencils,
)
from planner.methods.coupled_modes import coupled_modes
from tests.methods.test_beam import a_blade, uniform
from tests.methods.test_coupled_beam import HELD, coupled, plain

if TYPE_CHECKING:
    from numpy.typing import NDArray

    from planner.methods.beam import Family
    from planner.methods.coupled_beam import CoupledMatrices

    FloatArray = NDArray[np.float64]

COUNTS: dict[Family, int] = {"flap": 4, "lag": 2, "torsion": 2}
SPEED = np.linspace(0.0, 45.0, 19)
BUILT_IN = BladeRoots(Root(0.0), Root(0.0), Root(0.0))
HINGED = BladeRoots(Root(0.0, 0.0), Root(0.0, 0.0), Root(0.0))


def flap_frequencies(beam: BladeBeam, roots: BladeRoots, speed: object, modes: int) -> FloatArray:
    """Flap through the coupled path."""
    matrices = coupled_matrices(plain(beam), roots)
    found = coupled_modes(matrices, np.asarray(speed, dtype=np.float64), 0.0, {"flap": modes})
    return found.frequency_rad_s


@pytest.mark.parametrize("roots", [HELD, BladeRoots(Root(0.3), Root(0.3), Root(0.3))])
def test_without_coupling_the_frequencies_are_those_of_the_families(roots: BladeRoots) -> None:
    speed = np.array([0.0, 12.0, 30.0, 45.0])
    found = coupled_modes(coupled_matrices(plain(a_blade()), roots), speed, 0.0, COUNTS)
    builders = (flap_matrices, lag_matrices, torsion_matrices)
    expected = np.hstack(
        [
            frequencies(build(a_blade(), roots.of(family)), speed, COUNTS[family])
            for family, build in zip(FAMILIES, builders, strict=True)
        ]
    )
    assert found.frequency_rad_s == pytest.approx(expected, rel=1e-9)
    assert found.names[:5] == (("flap", 1), ("flap", 2), ("flap", 3), ("flap", 4), ("lag", 1))
    own = [FAMILIES.index(family) for family, _ in found.names]
    assert found.share[:, range(8), own] == pytest.approx(1.0)


def test_check_values_hold_through_the_coupled_path() -> None:
    """Numbers of tests/published and closed forms, see there and in test_beam."""
    at_rest = flap_frequencies(uniform(), BUILT_IN, [0.0, 12.0], 3)
    assert at_rest[0] == pytest.approx([3.5160, 22.0345, 61.6972], rel=1e-4)
    assert at_rest[1] == pytest.approx([13.1702, 37.6031, 79.6145], rel=5e-5)
    hinged = flap_frequencies(uniform(), HINGED, [12.0], 3)
    assert hinged[0] == pytest.approx([12.0, 33.7603, 70.8373], rel=5e-5)
    tip = flap_frequencies(uniform(points=((1.0, 1.0),)), BUILT_IN, [0.0], 3)
    assert tip[0] == pytest.approx([1.557298, 16.25009, 50.89584], rel=1e-4)
    hub = BladeRoots(Root(1.0), Root(1.0), Root(1.0))
    far = flap_frequencies(uniform(root=1.0), hub, [2.0, 12.0], 2)
    assert far == pytest.approx(np.array([[4.83369, 23.36604], [19.72150, 51.07013]]), rel=1e-3)
    limp = dataclasses.replace(uniform(stiffness=1e-8), torsion_stiffness_N_m2=np.ones(2))
    chain = flap_frequencies(limp, HINGED, [1.0], 3)[0]
    assert chain**2 == pytest.approx([1.0, 6.0, 15.0], rel=1e-3)


def test_lag_identity_and_hinge_offset_rules() -> None:
    """ω_lag² = ω_flap² - Ω² with equal stiffnesses; rigid: 1 + 1.5 e/(R-e) and 1.5 e/(R-e)."""
    speed = np.array([5.0, 30.0])
    beam = dataclasses.replace(a_blade(), lag_stiffness_N_m2=a_blade().flap_stiffness_N_m2)
    roots = BladeRoots(Root(0.45, 700.0), Root(0.45, 700.0), Root(0.3))
    counts: dict[Family, int] = {"flap": 2, "lag": 2}
    for collective in (0.0, 0.3):
        found = coupled_modes(
            coupled_matrices(plain(beam), roots), speed, collective, counts
        ).frequency_rad_s
        assert found[:, 2:] ** 2 == pytest.approx(
            found[:, :2] ** 2 - speed[:, None] ** 2, rel=1e-9
        )
    rigid = uniform(mass=4.0, stiffness=1e9, length=5.0)
    hinges = BladeRoots(Root(0.25, 0.0), Root(0.25, 0.0), Root(0.25))
    one = coupled_modes(coupled_matrices(plain(rigid), hinges), 30.0, 0.0, {"flap": 1, "lag": 1})
    rule = 1.5 * 0.25 / 4.75
    assert (one.frequency_rad_s[0] / 30.0) ** 2 == pytest.approx([1.0 + rule, rule], rel=1e-4)


def test_pitch_does_not_matter_at_rest_to_a_straight_blade_held_alike() -> None:
    """Turning a built-in blade as a whole turns its modes; the shares follow cos² of the pitch."""
    matrices = coupled_matrices(plain(a_blade()), BladeRoots(Root(0.3), Root(0.3), Root(0.3)))
    pitch = np.radians([0.0, 10.0, 25.0, 40.0])
    found = coupled_modes(matrices, np.zeros(4), pitch, COUNTS)
    assert found.frequency_rad_s == pytest.approx(
        np.tile(found.frequency_rad_s[0], (4, 1)), rel=1e-5
    )
    assert found.share[:, 0, 0] == pytest.approx(np.cos(pitch) ** 2, rel=1e-5)
    assert found.share[:, 4, 1] == pytest.approx(np.cos(pitch) ** 2, rel=1e-5)


def crossing_blade(offset: float) -> CoupledMatrices:
    """Torsion 1 lies between flap 2 and 3 at rest, and flap 2 rises through it with speed."""
    r = np.linspace(0.3, 6.0, 8)
    one = np.ones(8)
    beam = BladeBeam(r, 7.0 * one, 2e4 * one, 5e5 * one, 2e4 * one, 0.06 * one)
    blade = CoupledBlade(beam, 0.0 * r, offset * one, np.zeros(0))
    return coupled_matrices(blade, BladeRoots(Root(0.3, 0.0), Root(0.3, 0.0), Root(0.3, 6e3)), 10)


def test_names_follow_the_shape_through_a_crossing_without_coupling() -> None:
    speed = np.linspace(5.0, 45.0, 41)
    found = coupled_modes(crossing_blade(0.0), speed, 0.0, COUNTS)
    flap, torsion = found.frequency_rad_s[:, 1], found.frequency_rad_s[:, 6]
    assert np.count_nonzero(np.diff(np.sign(flap - torsion))) == 1
    assert np.diff(torsion**2) == pytest.approx(np.diff(speed**2), rel=1e-6)
    assert found.share[:, 1, 0] == pytest.approx(1.0)
    assert found.share[:, 6, 2] == pytest.approx(1.0)


def test_names_at_the_very_crossing_part_equal_modes() -> None:
    """At equal frequencies the vectors are any mixture, the shares must not be."""
    matrices = crossing_blade(0.0)

    def apart(speed: float) -> float:
        flap, torsion = coupled_modes(matrices, speed, 0.0, COUNTS).frequency_rad_s[0, [1, 6]]
        return float(flap - torsion)

    met = brentq(apart, 20.0, 45.0, xtol=1e-12, rtol=1e-14)
    found = coupled_modes(matrices, met, 0.0, COUNTS)
    assert found.frequency_rad_s[0, 1] == pytest.approx(found.frequency_rad_s[0, 6], rel=1e-9)
    assert found.share[0, 1, 0] == pytest.approx(1.0)
    assert found.share[0, 6, 2] == pytest.approx(1.0)


def test_names_follow_the_shape_where_weakly_coupled_modes_veer() -> None:
    speed = np.linspace(5.0, 45.0, 41)
    found = coupled_modes(crossing_blade(0.004), speed, 0.0, COUNTS)
    exact = coupled_modes(crossing_blade(0.0), speed, 0.0, COUNTS)
    assert found.frequency_rad_s == pytest.approx(exact.frequency_rad_s, rel=0.02)
    assert np.all(found.share[:, 1, 0] > 0.499)
    assert np.all(found.share[:, 6, 2] > 0.499)
    order = np.sign(found.frequency_rad_s[:, 1] - found.frequency_rad_s[:, 6])
    assert np.count_nonzero(np.diff(order)) == 1
    ordered = np.sort(found.frequency_rad_s[:, [1, 6]], axis=-1)
    assert np.all(ordered[:, 1] - ordered[:, 0] > 0.05)


def test_a_lane_does_not_depend_on_its_companions() -> None:
    matrices = coupled_matrices(coupled(), HELD, 10)
    pitch = np.linspace(-0.05, 0.3, SPEED.size)
    together = coupled_modes(matrices, SPEED, pitch, COUNTS)
    for lane in (0, 7, 13):
        alone = coupled_modes(matrices, SPEED[lane], pitch[lane], COUNTS)
        assert together.frequency_rad_s[lane] == pytest.approx(
            alone.frequency_rad_s[0], rel=1e-5, abs=1e-3
        )
        assert together.share[lane] == pytest.approx(alone.share[0], abs=1e-3)
    backwards = coupled_modes(matrices, SPEED[::-1], pitch[::-1], COUNTS)
    assert np.array_equal(backwards.frequency_rad_s[::-1], together.frequency_rad_s)
    doubled = coupled_modes(matrices, np.tile(SPEED, 2), np.tile(pitch, 2), COUNTS)
    assert np.array_equal(doubled.frequency_rad_s[:19], together.frequency_rad_s)
    assert np.array_equal(doubled.share[19:], together.share)


def test_all_lanes_agree_with_full_solutions() -> None:
    """Also the many that are neither in the space nor among its checks."""
    matrices = coupled_matrices(coupled(), HELD, 10)
    found = coupled_modes(matrices, SPEED, 0.2, COUNTS).frequency_rad_s
    mass, stiffness = pencils(matrices, SPEED, np.full(SPEED.size, 0.2))
    shift = 100.0 + SPEED**2
    every = np.sqrt(np.maximum(coupled_space.solved(mass, stiffness, shift).squared, 0.0))
    apart = np.abs(found[:, :, None] - every[:, None, :]).min(axis=-1)
    assert np.max(apart / np.maximum(found, 0.01 * np.sqrt(shift)[:, None])) < 1e-6


def test_free_hinges_at_rest_are_zero_and_named_for_themselves() -> None:
    roots = BladeRoots(Root(0.35, 0.0), Root(0.45, 0.0), Root(0.3, 9e3), 0.3)
    found = coupled_modes(coupled_matrices(coupled(), roots), [0.0, 20.0, 40.0], 0.15, COUNTS)
    assert found.frequency_rad_s[0, [0, 4]].tolist() == [0.0, 0.0]
    assert found.share[0, 0, 0] > 0.99
    assert found.share[0, 4, 1] > 0.99
    assert np.all(found.frequency_rad_s[1:] > 1.0)
    assert found.share.sum(axis=-1) == pytest.approx(np.ones((3, 8)))
    assert np.all(found.share >= 0.0)


def test_families_of_equal_stiffness_keep_their_names() -> None:
    """Flap and lag are equal at rest, at every pitch."""
    matrices = coupled_matrices(plain(uniform()), BUILT_IN)
    found = coupled_modes(matrices, [0.0, 0.0, 2.0], [0.0, 0.4, 0.4], {"flap": 2, "lag": 2})
    assert found.share[:, :2, 0] == pytest.approx(1.0)
    assert found.share[:, 2:, 1] == pytest.approx(1.0)
    assert found.frequency_rad_s[:2, :2] == pytest.approx(found.frequency_rad_s[:2, 2:])


def test_teetering_pair_tilts_once_per_revolution() -> None:
    """Exact for any elastic blade without pitch, and for one with twist to its small coupling."""
    cyclic = dataclasses.replace(HINGED, lag=Root(0.0))
    speed = np.array([1.0, 6.0, 12.0])
    found = flap_frequencies(uniform(), cyclic, speed, 2)
    assert found[:, 0] == pytest.approx(speed, rel=1e-9)
    collective = flap_frequencies(uniform(), BUILT_IN, speed, 2)
    assert np.all(collective[:, 0] > found[:, 0])
    assert np.all(collective[:, 0] < found[:, 1])


def test_diverging_blade_is_refused() -> None:
    """Soft control and offsets to one side: the outward pull on the aft mass turns it further."""
    r = np.linspace(0.0, 5.0, 6)
    one = np.ones(6)
    beam = BladeBeam(r, 6.0 * one, 5e4 * one, 5e5 * one, 1e5 * one, 0.06 * one)
    blade = CoupledBlade(beam, 0.0 * r, 0.09 * one, np.zeros(0))
    roots = BladeRoots(Root(0.0, 0.0), Root(0.0), Root(0.0, 20.0))
    matrices = coupled_matrices(blade, roots)
    assert np.all(coupled_modes(matrices, [0.0, 5.0], 0.7, COUNTS).frequency_rad_s[:, 1:] > 0.0)
    with pytest.raises(ValueError, match=r"the blade is not held"):
        coupled_modes(matrices, [0.0, 5.0, 60.0], 0.7, COUNTS)


def test_what_does_not_converge_is_an_error(monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr(coupled_space, "TOLERANCE", 1e-30)
    matrices = coupled_matrices(coupled(), HELD, 6)
    with pytest.raises(np.linalg.LinAlgError, match=r"coupled modes: expected .* 3 enrichments"):
        coupled_modes(matrices, np.linspace(0.0, 40.0, 25), 0.1, {"flap": 2})


def test_impossible_requests_are_refused() -> None:
    matrices = coupled_matrices(plain(uniform()), BUILT_IN, 2)
    with pytest.raises(ValueError, match=r"lag modes: expected between 1 and 2, found 3"):
        coupled_modes(matrices, 1.0, 0.0, {"flap": 1, "lag": 3})
    with pytest.raises(ValueError, match=r"named modes: expected at least one family, found none"):
        coupled_modes(matrices, 1.0, 0.0, {})
    with pytest.raises(ValueError, match=r"lanes: expected at least one, of finite"):
        coupled_modes(matrices, [1.0, math.nan], 0.0, COUNTS)
    with pytest.raises(ValueError, match=r"lanes: expected at least one, of finite"):
        coupled_modes(matrices, [], 0.0, COUNTS)
    with pytest.raises(ValueError, match=r"collective: expected within ±0.7854 rad, found -1 rad"):
        coupled_modes(matrices, 1.0, [0.1, -1.0], COUNTS)
