"""Traps of blade dynamics: one test each, which shows the size of the error and its absence."""

from __future__ import annotations

import dataclasses
import math

import numpy as np
import pytest

from planner.methods.beam import BladeBeam, Root, flap_matrices, lag_matrices
from planner.methods.beam_modes import frequencies, modes
from planner.methods.blade_inertia import blade_inertia
from planner.methods.coupled_beam import BladeRoots, CoupledBlade, coupled_matrices, pencils
from planner.methods.coupled_modes import coupled_modes
from tests.methods.test_beam import uniform
from tests.methods.test_coupled_beam import plain

HINGE_M = 0.3048
"""Lag hinge of the blade of C. E. Hammond, J. American Helicopter Society 19(4), 1974; its mass
94.9 kg, S 289.1 kg m, I 1084.7 kg m². Read second hand."""


def heavy_blade() -> BladeBeam:
    """Two masses on a stiff and nearly massless blade that have Hammond's moments."""
    mass, first, second = 94.9, 289.1, 1084.7
    middle = first / mass
    spread = math.sqrt(second / mass - middle**2)
    arms = (middle - spread, middle + spread)
    points = [(HINGE_M + arm, mass / 2) for arm in arms]
    return uniform(mass=1e-6, stiffness=1e9, length=6.0, points=points)


def test_lag_keeps_the_sideways_part_of_the_centrifugal_force() -> None:
    """Without -Ω² M it lags 1.04 times a revolution instead of 0.285 times."""
    matrices = lag_matrices(heavy_blade(), Root(HINGE_M, 0.0))
    assert frequencies(matrices, 25.0, 1)[0] / 25.0 == pytest.approx(0.285, abs=5e-4)
    wrong = dataclasses.replace(
        matrices, stiffness_omega2=matrices.stiffness_omega2 + matrices.mass
    )
    assert frequencies(wrong, 25.0, 1)[0] / 25.0 == pytest.approx(1.04, abs=5e-3)
    roots = BladeRoots(Root(HINGE_M, 0.0), Root(HINGE_M, 0.0), Root(HINGE_M))
    matrices_of_all = coupled_matrices(plain(heavy_blade()), roots)
    coupled = coupled_modes(matrices_of_all, 25.0, 0.0, {"flap": 1, "lag": 1})
    assert coupled.frequency_rad_s[0] / 25.0 == pytest.approx([1.0399, 0.2850], abs=1e-3)


def test_tension_carries_the_tip_mass() -> None:
    """Left out of it, flap 2 and 3 come out 2 to 3 per cent low."""
    roots = BladeRoots(Root(0.0, 0.0), Root(0.0, 0.0), Root(0.0))
    heavy, bare = (
        coupled_matrices(plain(uniform(points=p)), roots) for p in (((1.0, 0.015),), ())
    )
    wrong = dataclasses.replace(
        heavy,
        stiffness_omega2=bare.stiffness_omega2,
        alone=np.stack([*heavy.alone[:2], bare.alone[2]]),
    )
    right, low = (
        coupled_modes(m, 12.0, 0.0, {"flap": 3}).frequency_rad_s[0] for m in (heavy, wrong)
    )
    assert right[0] == pytest.approx(12.0, rel=1e-9)
    assert np.all((low[1:] / right[1:] - 1.0 < -0.01) & (low[1:] / right[1:] - 1.0 > -0.05))


def test_shapes_at_rest_give_no_more_than_an_upper_bound() -> None:
    """Southwell's formula on a hinged blade: 1 to 2 % too high for modes 2 to 4 at full speed."""
    matrices, speed = flap_matrices(uniform(), Root(0.0, 0.0)), 20.0
    at_rest = modes(matrices, 0.0)
    q = at_rest.coordinates
    rise = np.einsum("mi,ij,mj->m", q, matrices.stiffness_omega2, q) / at_rest.modal_mass
    bound = np.sqrt(at_rest.frequency_rad_s**2 + speed**2 * rise)
    excess = bound / frequencies(matrices, speed) - 1.0
    assert excess[0] == pytest.approx(0.0, abs=1e-9)
    assert np.all((excess[1:] > 0.009) & (excess[1:] < 0.02))


def test_stiff_root_does_not_stiffen_a_free_hinge_of_the_coupled_blade() -> None:
    """A root 10⁵ times stiffer than the blade; a hundredth of full speed must read as it is."""
    r = np.linspace(0.0, 6.0, 31)
    one = np.ones(31)
    stiff = np.where(r < 0.6, 1e9, 1e4)
    beam = BladeBeam(r, 5.0 * one, stiff, 30.0 * stiff, stiff, 0.05 * one)
    roots = BladeRoots(Root(0.0, 0.0), Root(0.0, 0.0), Root(0.0, 1e4))
    speed = np.array([0.01, 0.1, 1.0, 30.0])
    blade = CoupledBlade(beam, 0.0 * r, 0.01 * one, np.zeros(0))
    found = coupled_modes(coupled_matrices(plain(beam), roots), speed, 0.0, {"flap": 2, "lag": 1})
    assert found.frequency_rad_s[:, 0] == pytest.approx(speed, rel=1e-7)
    assert found.frequency_rad_s[:, 2] == pytest.approx(np.zeros(4), abs=1e-4)
    turned = coupled_modes(coupled_matrices(blade, roots), speed, 0.1, {"flap": 2, "lag": 1})
    assert turned.frequency_rad_s[:, 0] == pytest.approx(speed, rel=1e-3)


def test_offset_pulls_by_its_radius_and_swings_by_its_arm() -> None:
    """Aft mass: inertia couples by -∫ m x (r-e), centrifugal force by -∫ m x r."""
    e, x = 0.5, 0.04
    beam = dataclasses.replace(uniform(mass=6.0, length=5.0), pitch_inertia_kg_m=np.full(2, 0.06))
    roots = BladeRoots(Root(e, 0.0), Root(e), Root(e, 1e3))
    about = blade_inertia(beam.distribution, e)
    first, pulled = float(about.first_moment_kg_m), float(about.centrifugal_factor_kg_m)
    for sign in (1.0, -1.0):
        blade = CoupledBlade(beam, np.zeros(2), np.full(2, sign * x), np.zeros(0))
        matrices = coupled_matrices(blade, roots)
        flap, twist = (matrices.unknowns[f].start for f in ("flap", "torsion"))
        mass, turning = pencils(matrices, [1.0], [0.0])
        assert mass[0, flap, twist] == pytest.approx(-sign * x * first)
        assert turning[0, flap, twist] == pytest.approx(-sign * x * pulled)
    assert pulled - first == pytest.approx(e * 6.0 * 4.5)


def test_published_lag_tables_with_stretching_lie_below() -> None:
    """Coriolis coupling with stretching: 0.1 to 1.6 % lower at speeds 2 to 10, slenderness 70.

    Uniform built-in beam, ω and Ω times √(m L⁴/EI), EA L²/EI = 70². Chordwise shapes with sines
    of stretching: v″ - 2 Ω G u' and u″ + 2 Ω Gᵀ v' couple the two; solved here as a first-order
    system. The tables are right, and so is the model without stretching.
    """
    r = np.linspace(0.0, 1.0, 401)
    sines = np.array([np.sin((n - 0.5) * np.pi * r) for n in range(1, 7)])
    matrices = lag_matrices(uniform(), Root(0.0))
    drop = []
    for speed in (2.0, 10.0):
        chord = modes(matrices, speed, 4, r)
        shapes = chord.shape / np.sqrt(chord.modal_mass)[:, None]
        gyro = 2.0 * speed * np.trapezoid(shapes[:, None] * sines * np.sqrt(2.0), r, axis=-1)
        axial = 70.0**2 * ((np.arange(1, 7) - 0.5) * np.pi) ** 2 - speed**2
        stiff = np.diag(np.concatenate([chord.frequency_rad_s**2, axial]))
        coriolis = np.block([[np.zeros((4, 4)), -gyro], [gyro.T, np.zeros((6, 6))]])
        system = np.block([[np.zeros((10, 10)), np.eye(10)], [-stiff, -coriolis]])
        lowest = np.min(np.abs(np.linalg.eigvals(system).imag))
        drop.append(1.0 - lowest / chord.frequency_rad_s[0])
    assert drop[0] == pytest.approx(0.001, abs=0.0006)
    assert drop[1] == pytest.approx(0.016, abs=0.004)


def test_lag_shows_in_fixed_axes_shifted_by_rotor_speed() -> None:
    """Three blades that lag at ω one after another move their centre at Ω - ω, not at ω."""
    speed = 25.0
    roots = BladeRoots(Root(HINGE_M, 0.0), Root(HINGE_M, 0.0), Root(HINGE_M))
    found = coupled_modes(coupled_matrices(plain(heavy_blade()), roots), speed, 0.0, {"lag": 1})
    own = float(found.frequency_rad_s[0, 0])
    t = np.arange(4096) * 0.01
    sideways = sum(
        np.cos(own * t + 2 * np.pi * k / 3) * np.sin(speed * t + 2 * np.pi * k / 3)
        for k in range(3)
    )
    window = np.hanning(t.size)
    heard = np.abs(np.fft.rfft(sideways * window))
    rate = 2 * np.pi * np.fft.rfftfreq(t.size, 0.01)
    assert rate[np.argmax(heard)] == pytest.approx(abs(speed - own), abs=2 * rate[1])
    assert heard[np.argmin(np.abs(rate - own))] < 1e-3 * heard.max()
