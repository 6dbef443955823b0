"""Uniform cantilever at rest that carries its own mass at the tip.

Frequency equation of flexural vibrating cantilever beam considering the rotary inertial moment of
an attached mass, Mathematical Problems in Engineering, 2017, article 1568019, Table 1 (case
without rotary inertia). Read; authors not noted.

Dimensionless: ω √(m L⁴/EI), point mass m L at the tip.
"""

import numpy as np
import pytest

from planner.methods.beam import BladeBeam, Root, flap_matrices
from planner.methods.beam_modes import frequencies

pytestmark = pytest.mark.published


def test_four_modes_with_a_tip_mass() -> None:
    one = np.ones(2)
    tip, mass = np.array([1.0]), np.array([1.0])
    beam = BladeBeam(np.array([0.0, 1.0]), one, one, one, one, one, tip, mass)
    found = frequencies(flap_matrices(beam, Root(0.0)), 0.0, 4)
    assert found == pytest.approx([1.557298, 16.25009, 50.89584, 105.1983], rel=1e-4)
