"""Uniform rotating cantilever in flap.

S. M. Hamza Cherif, A. Houmat, Natural frequencies of rotating cantilever flexible beams by using
the p-version of the finite element method, 24th ICAS Congress, 2004, Table 2. Read second hand.

Dimensionless: ω √(m L⁴/EI) at Ω √(m L⁴/EI), no hub radius.
"""

import numpy as np
import pytest

from planner.methods.beam import BladeBeam, Root, flap_matrices
from planner.methods.beam_modes import frequencies

pytestmark = pytest.mark.published


def test_first_flap_mode_over_speed() -> None:
    one = np.ones(2)
    beam = BladeBeam(np.array([0.0, 1.0]), one, one, one, one, one)
    found = frequencies(flap_matrices(beam, Root(0.0)), [2.0, 4.0, 6.0, 8.0, 10.0], 1)
    assert found[:, 0] == pytest.approx([4.1373, 5.5850, 7.3603, 9.2568, 11.2023], abs=1.01e-4)
