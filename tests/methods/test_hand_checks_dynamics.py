import numpy as np
import pytest

from planner.methods.hand_checks_dynamics import column_frequency_rad_s, rate_for_peak_rad_s2


def test_massless_column_is_a_spring():
    assert float(column_frequency_rad_s(2.0, 8.0, 0.0, 3.0)) == pytest.approx(1.0)
    assert float(column_frequency_rad_s(2.0, 8.0, 140.0, 0.0)) == pytest.approx(
        33.0**-0.5 * 3**0.5
    )


def test_rate_grows_as_the_amplitude_falls_until_none_is_needed():
    rate = rate_for_peak_rad_s2(20.0, 0.02, np.array([5.0, 15.0, 24.9, 25.0, 30.0]))
    assert np.all(np.diff(rate[:4]) < 0.0)
    assert rate[3:].tolist() == [0.0, 0.0]
    assert rate_for_peak_rad_s2(40.0, 0.02, 15.0) == pytest.approx(4.0 * rate[1])
