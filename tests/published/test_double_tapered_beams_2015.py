"""Double-tapered cantilever at rest, tapering to 40 % in height and in breadth.

Flapwise bending vibration analysis of functionally graded rotating double-tapered beams,
International Journal of Mechanical and Materials Engineering, 2015,
doi 10.1186/s40712-015-0040-0, Table 1 (taper ratios 0.6 and 0.6). Read; authors not noted.

Dimensionless with the root properties, x = r/L: m = (1 - 0.6 x)², EI = (1 - 0.6 x)⁴, entered as
200 straight pieces.
"""

import numpy as np
import pytest

from planner.methods.beam import BladeBeam, Root, flap_matrices
from planner.methods.beam_modes import frequencies

pytestmark = pytest.mark.published


def test_three_modes_at_rest() -> None:
    x = np.linspace(0.0, 1.0, 201)
    one, taper = np.ones(201), 1.0 - 0.6 * x
    beam = BladeBeam(x, taper**2, taper**4, taper**4, one, one)
    found = frequencies(flap_matrices(beam, Root(0.0)), 0.0, 3)
    assert found == pytest.approx([5.00903, 19.0649, 45.7384], rel=5e-5)
