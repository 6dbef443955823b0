import numpy as np
import pytest

from planner.rotor.motion import (
    expand,
    fine_basis,
    free_motion,
    held_flap_rad,
    held_motion,
    pair_moment,
)
from planner.rotor.setup import HubFreedom

ALONE = HubFreedom(0.3, 0.0, 0.0, 0.0, 0.0, 0.0, 0.0)
PAIR = HubFreedom(0.0, 0.0, 0.04, 0.0, 0.0, 0.04, 1.0)


@pytest.mark.parametrize("hub", [ALONE, PAIR])
def test_projection_inverts_the_basis(hub):
    motion = free_motion(hub, 24, 5)
    assert motion.projection @ motion.basis == pytest.approx(np.eye(motion.n_freedoms), abs=1e-14)


@pytest.mark.parametrize("hub", [ALONE, PAIR])
def test_slopes_are_derivatives_of_the_basis(hub):
    motion = free_motion(hub, 24, 5)
    fine = fine_basis(motion, hub, 36000)
    step = 2.0 * np.pi / 36000
    slope = (np.roll(fine, -1, axis=0) - np.roll(fine, 1, axis=0)) / (2.0 * step)
    curve = (np.roll(fine, -1, axis=0) - 2.0 * fine + np.roll(fine, 1, axis=0)) / step**2
    assert motion.basis == pytest.approx(fine[::1500], abs=1e-12)
    assert motion.basis_slope == pytest.approx(slope[::1500], abs=1e-6)
    assert motion.basis_curvature == pytest.approx(curve[::1500], abs=1e-5)


def test_opposite_blades_of_a_pair_add_up_to_twice_the_fixed_flap():
    motion = free_motion(PAIR, 24, 5)
    flap = expand(np.array([[0.1, -0.2, 0.03, 0.04, 0.01, 0.02]]), motion.basis)
    assert flap + np.roll(flap, 12, axis=1) == pytest.approx(np.zeros((1, 24)), abs=1e-15)


def test_pair_rests_on_the_stop_that_it_reaches_first():
    on_droop = held_flap_rad(PAIR, np.array([-0.05]), np.array([0.30]), 4)
    assert on_droop[0] == pytest.approx([-0.05] * 4 + [0.13] * 4)
    on_up = held_flap_rad(PAIR, np.array([-0.05]), np.array([0.10]), 4)
    assert on_up[0] == pytest.approx([-0.02] * 4 + [0.10] * 4)


def test_moment_of_a_pair_is_taken_from_the_opposite_blade():
    azimuth = held_motion(PAIR, 8).azimuth_rad
    assert azimuth.size == 16
    same = np.cos(azimuth)[None]
    assert pair_moment(PAIR, same)[0] == pytest.approx(2.0 * same[0, :8])
    assert pair_moment(ALONE, same) is same
