"""Sheldahl, Klimas: Aerodynamic Characteristics of Seven Symmetrical Airfoil Sections Through
180-Degree Angle of Attack, SAND80-2114, 1981. Values of a symmetric section, from memory.

The continuation is for a blade of finite aspect ratio and so reads below these two-dimensional
values; what matters for a whirling blade is that sign and size hold all the way round.
"""

import numpy as np
import pytest

from planner.methods.section_lookup import coefficients
from planner.methods.sections import SymmetricLaw, symmetric_section
from planner.methods.stall import Continuation

pytestmark = pytest.mark.published

TABLE = symmetric_section(
    SymmetricLaw(5.73, 0.0081, 0.4, float(np.radians(15.0)), float(np.radians(16.0)), 0.725),
    Continuation(49.0, 0.005),
)


@pytest.mark.parametrize(
    ("degrees", "lift", "drag"),
    [
        (30.0, 0.855, 0.57),
        (45.0, 1.05, 1.075),
        (60.0, 0.875, 1.47),
        (90.0, 0.09, 1.80),
        (135.0, -0.93, 1.085),
        (170.0, -0.85, 0.14),
        (175.0, -0.66, 0.055),
        (180.0, 0.0, 0.025),
    ],
)
def test_full_circle_stays_near_the_measured_section(degrees, lift, drag):
    found_lift, found_drag, _ = coefficients(TABLE, np.radians(degrees), 0.0)
    assert float(found_lift) == pytest.approx(lift, abs=0.45)
    assert float(found_drag) == pytest.approx(drag, abs=0.22)


def test_trailing_edge_forward_reads_low_in_drag():
    for degrees, measured in ((170.0, 0.14), (175.0, 0.055), (180.0, 0.025)):
        _, drag, _ = coefficients(TABLE, np.radians(degrees), 0.0)
        assert 0.1 < float(drag) / measured < 0.4
