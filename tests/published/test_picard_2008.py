"""Picard, Davis, Glaser, Fujii: CIPM-2007, Metrologia 45 (2008) 149-155.

The full formula (compressibility, enhancement factor) was evaluated separately, its constants from
memory. The ideal mixture used here leaves those out and must read 0.02 to 0.06 % low.
"""

import pytest

from planner.methods.atmosphere import moist_air_density_kg_m3, saturation_vapour_pressure_pa

pytestmark = pytest.mark.published


@pytest.mark.parametrize(
    ("pressure", "celsius", "humidity", "full_formula"),
    [
        (101325.0, 20.0, 0.5, 1.19931),
        (84500.0, 35.0, 0.6, 0.94109),
        (99800.0, 5.0, 0.8, 1.24731),
    ],
)
def test_ideal_mixture_reads_slightly_low(pressure, celsius, humidity, full_formula):
    density = float(moist_air_density_kg_m3(pressure, celsius + 273.15, humidity))
    assert 0.02 < 100.0 * (1.0 - density / full_formula) < 0.06


def test_saturation_vapour_pressure_at_twenty_degrees():
    assert float(saturation_vapour_pressure_pa(293.15)) == pytest.approx(2339.16, abs=6e-3)
