"""Shaft with three rotors, free at both ends: examination exercise, read second hand.

Inertias 0.15, 0.30 and 0.09 kg m², steel shaft of 70 mm, 1.5 m and 1.0 m between them, G = 84 GPa:
171 Hz and 277 Hz, with nodes 1.146 m and 0.4356 m from the first rotor. To more digits (computed):
170.688 and 277.034 Hz, 1.1477 and 0.4357 m.
"""

import numpy as np
import pytest

from planner.methods.shaft_chain import chain_modes

pytestmark = pytest.mark.published

INERTIA = np.array([0.15, 0.30, 0.09])
LENGTH = np.array([1.5, 1.0])
STIFFNESS = 84e9 * np.pi * 0.07**4 / 32.0 / LENGTH


def test_frequencies():
    found = chain_modes(INERTIA, STIFFNESS, None, [0.0], 2).frequency_rad_s[0] / (2.0 * np.pi)
    assert found == pytest.approx([171.0, 277.0], rel=2e-3)
    assert found == pytest.approx([170.688, 277.034], rel=1e-5)


def test_nodes():
    shape = chain_modes(INERTIA, STIFFNESS, None, [0.0], 2).shape[0]
    nodes = LENGTH[0] * shape[:, 0] / (shape[:, 0] - shape[:, 1])
    assert nodes == pytest.approx([1.146, 0.4356], rel=2e-3)
    assert nodes == pytest.approx([1.1477, 0.4357], abs=1e-4)
