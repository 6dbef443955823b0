"""Kaimal, Wyngaard, Izumi, Cote: Q. J. Roy. Met. Soc. 98 (1972) 563-589. From memory.

In the inertial subrange of neutral air the along-wind spectrum falls as n S / u*² = 0.3 f^(-2/3),
and the spectra across and up are 4/3 of it. The curves fitted to the measured spectra meet this
within 4 %.
"""

import numpy as np
import pytest

from planner.methods.turbulence import kaimal_spectrum, kaimal_variance

pytestmark = pytest.mark.published

HEIGHT_M, MEAN_M_S = 10.0, 10.0


@pytest.mark.parametrize(("component", "level"), [("u", 0.3), ("v", 0.4), ("w", 0.4)])
def test_inertial_subrange(component, level):
    reduced = 80.0
    frequency = reduced * MEAN_M_S / HEIGHT_M
    found = frequency * float(kaimal_spectrum(frequency, HEIGHT_M, MEAN_M_S, component))
    assert found * reduced ** (2.0 / 3.0) == pytest.approx(level, rel=0.04)


def test_spectra_depend_on_reduced_frequency_alone():
    frequency = np.array([0.01, 0.1, 1.0])
    one = frequency * kaimal_spectrum(frequency, 5.66, 4.0, "w")
    other = 2.0 * frequency * kaimal_spectrum(2.0 * frequency, 11.32, 16.0, "w")
    assert other == pytest.approx(one)


def test_vertical_deviation_is_about_five_quarters_of_friction_velocity():
    assert np.sqrt(kaimal_variance("w")) == pytest.approx(1.25, rel=0.02)
