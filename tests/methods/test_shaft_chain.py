from dataclasses import replace

import numpy as np
import pytest

from planner.methods.beam import BladeBeam, Root, lag_matrices
from planner.methods.beam_modes import frequencies
from planner.methods.shaft_chain import chain_blades, chain_modes, referred_chain

HINGE, TIP, MASS = 0.3, 5.5, 7.0
SPEED = np.array([0.0, 10.0, 25.0, 40.0])
TRAIN = (np.array([30.0, 20.0, 8.0]), np.array([3e5, 8e5]))


def uniform_blade(stiffness: float = 1e6) -> BladeBeam:
    one = np.ones(2)
    return BladeBeam(
        np.array([HINGE, TIP]), MASS * one, 4e4 * one, stiffness * one, 1e5 * one, 0.05 * one
    )


def on_hub(root: Root, n_modes: int = 3, stiffness: float = 1e6):
    blade = uniform_blade(stiffness)
    return chain_blades(blade, lag_matrices(blade, root), 4, n_modes)


def test_two_inertias_by_hand():
    found = chain_modes([2.0, 6.0], [150.0], None, SPEED, 1)
    assert found.frequency_rad_s == pytest.approx(np.full((4, 1), 10.0))
    assert found.shape == pytest.approx(np.tile([1.0, -1.0 / 3.0], (4, 1, 1)))
    assert np.all(found.blade_share == 0.0)


@pytest.mark.parametrize("spring", [0.0, 3e4])
def test_hub_and_rigid_blades_free_in_space_have_a_closed_form(spring):
    length = TIP - HINGE
    S, inertia = MASS * length**2 / 2.0, MASS * length**3 / 3.0
    polar, coupled = MASS * (TIP**3 - HINGE**3) / 3.0, inertia + HINGE * S
    hub, stiffness = 12.0, 4.0 * (HINGE * S * SPEED**2 + spring)
    whole = hub + 4.0 * polar
    exact = np.sqrt(stiffness * whole / (4.0 * inertia * whole - (4.0 * coupled) ** 2))
    blades = on_hub(Root(HINGE, spring), 1, 1e12)
    assert abs(blades.coupling_kg_m[0]) * length == pytest.approx(coupled, rel=1e-6)
    found = chain_modes([hub], [], blades, SPEED, 1)
    assert found.frequency_rad_s[:, 0] == pytest.approx(exact, rel=1e-6)


def test_sense_of_lag_does_not_matter():
    blades = on_hub(Root(HINGE, 2e4))
    turned = replace(blades, coupling_kg_m=-blades.coupling_kg_m)
    one, other = (chain_modes(*TRAIN, own, SPEED, 4) for own in (blades, turned))
    assert other.frequency_rad_s == pytest.approx(one.frequency_rad_s, rel=1e-9)
    assert other.shape == pytest.approx(one.shape, abs=1e-8)
    assert other.blade_share == pytest.approx(one.blade_share, rel=1e-8)


def test_hub_that_cannot_move_leaves_the_blades_their_own_frequencies():
    root = Root(HINGE, 2e4)
    own = frequencies(lag_matrices(uniform_blade(), root), SPEED, 2)
    found = chain_modes([1e8], [], on_hub(root), SPEED, 2)
    assert found.frequency_rad_s == pytest.approx(own, rel=1e-4)


@pytest.mark.parametrize("root", [Root(HINGE, 0.0), Root(HINGE, 2e4), Root(HINGE)])
def test_three_blade_modes_are_enough(root):
    few, many = (chain_modes(*TRAIN, on_hub(root, n), SPEED, 3).frequency_rad_s for n in (3, 10))
    assert few == pytest.approx(many, rel=2e-4, abs=1e-9)
    assert (few[0, 0] == 0.0) == (root.spring_N_m_rad == 0.0)
    assert np.all(np.diff(few, axis=0) >= 0.0)


def test_blades_locked_to_the_hub_put_the_train_far_off():
    """First drive mode 44 % low, the second 2 % high, and collective lag not seen at all."""
    blades = on_hub(Root(HINGE, 0.0))
    right = chain_modes(*TRAIN, blades, SPEED[-1:], 3)
    locked = TRAIN[0] + np.array([0.0, 0.0, 4.0 * blades.polar_inertia_kg_m2])
    wrong = chain_modes(locked, TRAIN[1], None, SPEED[-1:], 2)
    share = wrong.frequency_rad_s[0] / right.frequency_rad_s[0, 1:]
    assert share == pytest.approx([0.557, 1.019], abs=0.002)


def test_chain_is_referred_by_the_square_of_the_ratio():
    """By the ratio itself the motor is a sixth as heavy: the frequency comes out 111 % high."""
    inertia, stiffness = referred_chain([0.5, 40.0], [3.0e4], [6.0, 1.0], [1.0])
    right = chain_modes(inertia, stiffness, None, [0.0], 1).frequency_rad_s[0, 0]
    assert right == pytest.approx(np.sqrt(3.0e4 * (1.0 / 18.0 + 1.0 / 40.0)))
    # the same shaft on the motor's side of the gears
    _, fast = referred_chain([0.5, 40.0], [3.0e4 / 36.0], [6.0, 1.0], [6.0])
    assert fast == pytest.approx(stiffness)
    wrong = chain_modes([0.5 * 6.0, 40.0], stiffness, None, [0.0], 1).frequency_rad_s[0, 0]
    assert wrong / right == pytest.approx(2.11, abs=0.005)


@pytest.mark.parametrize(
    ("stiffness", "n_modes", "message"),
    [
        ([1.0], 1, r"one shaft fewer than inertias, found shapes \(3,\) .* and \(1,\) of shafts"),
        ([1.0, 1.0], 3, r"modes of the chain: expected between 1 and its 2 freedoms, found 3"),
        ([1.0, 0.0], 1, r"shaft stiffness: expected 1e-06 to 1e\+15 N m/rad, found 0"),
    ],
)
def test_chains_that_cannot_be_are_refused(stiffness, n_modes, message):
    with pytest.raises(ValueError, match=message):
        chain_modes([1.0, 2.0, 3.0], stiffness, None, [0.0], n_modes)
