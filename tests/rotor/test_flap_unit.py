"""Equations of what flaps together, bound from hubs and blades."""

from dataclasses import replace

import numpy as np
import pytest

from planner.rotor.flap_unit import flap_unit
from planner.rotor.setup import rotor_arrays
from tests.rotor.marching import marchable

HUBS = ("articulated", "teetering", "hingeless")


def unit_of(rotor, n_elastic=3):
    whole = marchable(rotor)
    arrays = rotor_arrays(whole, 12)
    return flap_unit(whole, arrays, n_elastic), arrays


@pytest.mark.parametrize("kind", HUBS)
def test_shapes_do_not_couple_through_their_mass_and_reach_one_metre_at_the_tip(make_rotor, kind):
    unit, _ = unit_of(make_rotor(kind))
    assert unit.mass == pytest.approx(np.diag(np.diag(unit.mass)))
    assert np.all(np.diag(unit.mass) > 0.0)
    bends = np.abs(unit.tip).max(axis=0) > 0.0
    assert np.abs(unit.tip)[:, bends] == pytest.approx(1.0)
    assert np.sum(~bends) == (0 if kind == "hingeless" else 1)  # rigid flap
    assert unit.stiffness == pytest.approx(unit.stiffness.T, abs=1e-6)
    assert unit.spin_stiffness == pytest.approx(unit.spin_stiffness.T, abs=1e-6)


@pytest.mark.parametrize("kind", ["articulated", "teetering"])
def test_rigid_flap_has_the_blades_own_inertia(make_rotor, kind):
    unit, arrays = unit_of(make_rotor(kind))
    nb, e = unit.n_blades, arrays.hub.hinge_m
    inertia, first = arrays.flap_inertia_kg_m2, arrays.first_moment_kg_m
    assert unit.mass[0, 0] == pytest.approx(nb * inertia, rel=1e-6)
    assert unit.spin_stiffness[0, 0] == pytest.approx(nb * (inertia + e * first), rel=1e-6)
    weight = first if nb == 1 else 0.0  # a pair balances
    assert unit.weight[0] == pytest.approx(weight, rel=1e-6, abs=1e-6)


def test_resting_blade_droops_as_the_whole_beam_whatever_the_number_of_modes(make_rotor):
    """Held at its hinge under gravity; the shape at rest makes it exact."""
    tips = []
    for n_elastic in (0, 1, 3, 6):
        unit, _ = unit_of(make_rotor(), n_elastic)
        held = unit.stiffness + 1e12 * np.outer(unit.hinge, unit.hinge)
        q = np.linalg.solve(held, -9.80665 * unit.weight)
        tips.append((5.7 * unit.rigid[0] + unit.tip[0]) @ q)
    assert tips == pytest.approx(4 * [tips[0]], rel=1e-4)
    assert tips[0] < -0.1


def test_pair_is_antisymmetric_where_hinged_and_symmetric_where_built_in(make_rotor):
    unit, _ = unit_of(make_rotor("teetering"))
    turns = np.abs(unit.hinge) > 0.0
    assert unit.shape[0][turns] == pytest.approx(-unit.shape[1][turns])
    assert unit.shape[0][~turns] == pytest.approx(unit.shape[1][~turns])
    assert unit.rigid[:, 0].tolist() == [1.0, -1.0]
    assert unit.blade_azimuth_rad == pytest.approx([0.0, np.pi])
    assert unit.weight[turns] == pytest.approx(0.0)
    assert np.all(unit.weight[~turns] != 0.0)


def test_built_in_blade_counts_tip_height_over_length_as_flap(make_rotor):
    unit, arrays = unit_of(make_rotor("hingeless"))
    assert not unit.is_hinged
    assert unit.hinge == pytest.approx(0.0)
    assert unit.flap_view == pytest.approx(unit.tip[0] / (arrays.radius_m - unit.root_m))
    assert unit.fixed_flap_rad == pytest.approx(np.radians(1.0))


def test_spring_and_damper_act_on_the_rotation_at_the_hinge(make_rotor):
    hub = {
        "flap_spring_N_m_rad": 6000.0,
        "flap_spring_neutral_rad": 0.02,
        "flap_damper_N_m_s_rad": 700.0,
    }
    bare, sprung = unit_of(make_rotor())[0], unit_of(make_rotor(hub=hub))[0]
    turn = np.outer(bare.hinge, bare.hinge)
    assert sprung.stiffness - bare.stiffness == pytest.approx(6000.0 * turn, abs=1e-4)
    assert sprung.damping - bare.damping == pytest.approx(700.0 * turn, abs=1e-6)
    assert sprung.spring_load == pytest.approx(6000.0 * 0.02 * bare.hinge)


def test_pitch_flap_coupling_without_a_hinge_is_refused(make_rotor):
    rotor = make_rotor("hingeless")
    arrays = rotor_arrays(rotor, 8)
    coupled = replace(arrays, hub=replace(arrays.hub, pitch_flap=0.5))
    with pytest.raises(ValueError, match=r"pitch-flap coupling: expected 0 deg on a hingeless"):
        flap_unit(rotor, coupled, 2)
