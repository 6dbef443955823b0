"""ISO 21940-11:2016, Mechanical vibration - Rotor balancing - Part 11. Read second hand.

Balance grade G times mass over speed: a rotor of 2 kg at 10000 rpm, G 6.3, may keep 12 g mm; to
more digits (computed) 12.03 g mm.
"""

import numpy as np
import pytest

from planner.methods.unbalance import grade_unbalance_kg_m

pytestmark = pytest.mark.published


def test_residual_unbalance_of_a_grade():
    found = float(grade_unbalance_kg_m(0.0063, 2.0, 10_000.0 * np.pi / 30.0))
    assert found * 1e6 == pytest.approx(12.0, rel=5e-3)
    assert found * 1e6 == pytest.approx(12.03, abs=0.005)
