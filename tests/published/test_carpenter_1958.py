"""Carpenter: Lift and Profile-Drag Characteristics of an NACA 0012 Airfoil Section as Derived from
Measured Helicopter-Rotor Hovering Performance, NACA TN 4357, 1958.

Fit to the whirl-tower data, read second hand: lift slope 0.1 / sqrt(1 - M^2) - 0.01 M per degree
below Mach 0.725 and 0.677 - 0.744 M above; lift curve straight up to 15 - 16 M degrees.
"""

import numpy as np
import numpy.typing as npt
import pytest

from planner.methods.section_lookup import coefficients
from planner.methods.sections import (
    NACA_0012_DIVERGENCE_MACH,
    NACA_0012_STALL_FALL_RAD_PER_MACH,
    SymmetricLaw,
    symmetric_section,
)
from planner.methods.stall import Continuation

pytestmark = pytest.mark.published


def built_in_slope_per_deg(mach: npt.ArrayLike) -> npt.NDArray[np.float64]:
    law = SymmetricLaw(
        float(np.degrees(0.1)),
        0.0087,
        0.4,
        float(np.radians(15.0)),
        NACA_0012_STALL_FALL_RAD_PER_MACH,
        NACA_0012_DIVERGENCE_MACH,
    )
    lift, _, _ = coefficients(
        symmetric_section(law, Continuation(15.0, 0.005)), np.radians(1.0), mach
    )
    return lift


def test_slope_reads_up_to_five_percent_high_below_divergence():
    mach = np.linspace(0.0, 0.72, 10)
    fitted = 0.1 / np.sqrt(1.0 - mach**2) - 0.01 * mach
    above = 100.0 * (built_in_slope_per_deg(mach) / fitted - 1.0)
    assert above.min() > -0.01
    assert above.max() == pytest.approx(5.5, abs=0.3)


def test_slope_reads_far_too_high_above_divergence_where_it_is_marked_invalid():
    above = built_in_slope_per_deg(0.8) / (0.677 - 0.744 * 0.8) - 1.0
    assert 100.0 * float(above) == pytest.approx(77.0, abs=2.0)
