import numpy as np
import pytest

from planner.methods.wind import (
    gust_peak_m_s,
    wind_at_height_m_s,
)


def test_profile_there_and_back_returns_the_wind():
    wind = np.linspace(0.0, 30.0, 7)
    up = wind_at_height_m_s(wind, 3.0, 12.0, 0.2)
    assert wind_at_height_m_s(up, 12.0, 3.0, 0.2) == pytest.approx(wind, rel=1e-12)
    assert up == pytest.approx(wind * 4.0**0.2)


def test_profile_with_exponent_zero_or_equal_height_changes_nothing():
    assert float(wind_at_height_m_s(9.0, 2.0, 20.0, 0.0)) == 9.0
    assert float(wind_at_height_m_s(9.0, 7.0, 7.0, 0.3)) == 9.0


@pytest.mark.parametrize(
    ("inputs", "message"),
    [
        ((-1.0, 3.0, 9.0, 0.2), r"wind speed: expected 0 to 75 m/s, found -1"),
        ((5.0, 0.2, 9.0, 0.2), r"anemometer height: expected 1 to 150 m, found 0.2"),
        ((5.0, 3.0, 300.0, 0.2), r"hub height: expected 1 to 150 m, found 300"),
        ((5.0, 3.0, 9.0, 0.7), r"wind profile exponent: expected 0 to 0.5, found 0.7"),
    ],
)
def test_profile_outside_its_range_is_refused(inputs, message):
    with pytest.raises(ValueError, match=message):
        wind_at_height_m_s(*inputs)


def test_gust_peak_adds_the_spread():
    assert gust_peak_m_s([5.0, 10.0], 4.0) == pytest.approx([9.0, 14.0])
    with pytest.raises(ValueError, match=r"gust spread: expected 0 to 75 m/s, found -2"):
        gust_peak_m_s(5.0, -2.0)
