import numpy as np
import pytest

from planner.methods.validity import require_within


def test_value_inside_keeps_shape_and_bounds_count_as_inside():
    value = require_within("height", [[1.0, 2.0], [3.0, 4.0]], (1.0, 4.0), "m")
    assert value.shape == (2, 2)
    assert value.dtype == np.float64


@pytest.mark.parametrize("bad", [0.999, 4.001, np.nan, np.inf])
def test_value_outside_is_named_with_range_and_finding(bad):
    with pytest.raises(ValueError, match=r"height: expected 1 to 4 m, found .*not known to hold"):
        require_within("height", [2.0, bad], (1.0, 4.0), "m")


def test_rounding_of_a_unit_conversion_counts_as_the_bound():
    assert require_within("air temperature", -30.0 + 273.15, (243.15, 333.15), "K") == 243.15
    with pytest.raises(ValueError, match=r"air temperature: expected 243.15 to 333.15 K"):
        require_within("air temperature", 243.1499, (243.15, 333.15), "K")


def test_open_upper_bound_is_accepted():
    assert require_within("advance ratio", 1e9, (0.0, np.inf), "") == 1e9
