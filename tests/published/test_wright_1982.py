"""Uniform rotating beams, clamped and hinged.

A. D. Wright, C. E. Smith, R. W. Thresher, J. L. C. Wang, Vibration modes of centrifugally
stiffened beams, J. Applied Mechanics 49(1), 1982, pp. 197-202. From memory; each number was also
reproduced by two independent solvers. The first hinged value is analytic (once per revolution).

Dimensionless: ω √(m L⁴/EI) at Ω √(m L⁴/EI), no hub radius.
"""

import numpy as np
import pytest

from planner.methods.beam import BladeBeam, Root, flap_matrices
from planner.methods.beam_modes import frequencies

pytestmark = pytest.mark.published

ONE = np.ones(2)
UNIFORM = BladeBeam(np.array([0.0, 1.0]), ONE, ONE, ONE, ONE, ONE)
CLAMPED = Root(0.0)
HINGED = Root(0.0, 0.0)


@pytest.mark.parametrize(
    ("speed", "first"),
    [(2.0, 4.1373), (4.0, 5.5850), (6.0, 7.3603), (8.0, 9.2568), (10.0, 11.2023)],
)
def test_clamped_first_mode(speed: float, first: float) -> None:
    found = frequencies(flap_matrices(UNIFORM, CLAMPED), speed, 1)
    assert found[0] == pytest.approx(first, abs=1.01e-4)


@pytest.mark.parametrize(
    ("root", "expected"),
    [(CLAMPED, [13.1702, 37.6031, 79.6145]), (HINGED, [12.0, 33.7603, 70.8373])],
)
def test_three_modes_at_speed_twelve(root: Root, expected: list[float]) -> None:
    found = frequencies(flap_matrices(UNIFORM, root), 12.0, 3)
    assert found == pytest.approx(expected, rel=2e-5)
