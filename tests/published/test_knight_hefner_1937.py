"""Knight, Hefner: Static Thrust Analysis of the Lifting Airscrew, NACA TN 626, 1937, Table IV.

Read second hand: a public copy of the table, halved to CT = T / (rho A (Omega R)^2). The
section law is quoted with the data. Five untwisted blades, R / c = 15, 960 rpm.

Plain theory with tip and root loss against the measurement, read high by:

collective   thrust   power
   0 deg       -      +25.8 %   (profile drag alone)
   4 deg    +19.3 %   +20.2 %
   8 deg     +6.7 %    +5.2 %
  12 deg     +2.1 %    +1.8 %

The bands are two-sided: a better agreement would be as suspect as a worse one.
"""

import numpy as np
import pytest

from planner.methods.hover import (
    HoverBlade,
    HoverCoefficients,
    hover_coefficients,
    hover_inflow,
    midpoint_stations,
)

pytestmark = pytest.mark.published


def quoted_section(alpha, mach):
    del mach
    return 5.75 * alpha, 0.0113 + 1.25 * alpha**2


def theory(degrees: float) -> HoverCoefficients:
    root = 0.127 / 0.762
    radius, width = midpoint_stations(root, 400)
    solidity = np.full(400, 5 * 0.0508 / (np.pi * 0.762))
    blade = HoverBlade(
        5, root, radius, width, solidity, np.radians([[degrees]]), np.array([[0.22]])
    )
    return hover_coefficients(blade, quoted_section, hover_inflow(blade, quoted_section))


@pytest.mark.parametrize(
    ("degrees", "thrust", "power", "thrust_error", "power_error"),
    [
        (4.0, 0.00181, 0.000198, 19.3, 20.2),
        (8.0, 0.005515, 0.000543, 6.7, 5.2),
        (12.0, 0.01, 0.00114, 2.1, 1.8),
    ],
)
def test_slender_blades_read_high(degrees, thrust, power, thrust_error, power_error):
    found = theory(degrees)
    above = 100.0 * (found.thrust_coefficient[0] / thrust - 1.0)
    assert above == pytest.approx(thrust_error, abs=0.3)
    above = 100.0 * (found.power_coefficient[0] / power - 1.0)
    assert above == pytest.approx(power_error, abs=0.3)


def test_profile_power_at_no_pitch_reads_high():
    found = theory(0.0)
    assert 100.0 * (found.power_coefficient[0] / 0.000119 - 1.0) == pytest.approx(25.8, abs=0.5)
