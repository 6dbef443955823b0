import numpy as np
import pytest

from planner.methods.column import column_modes, with_added_mass
from planner.methods.hand_checks_dynamics import column_frequency_rad_s

H, EI, M = 4.0, 8.0e7, 900.0


def test_bare_column_is_a_cantilever():
    found = column_modes(H, EI, M, 0.0)
    ends = np.array([3.5160, 22.0345]) * np.sqrt(EI / (M * H**3))
    assert found.frequency_rad_s == pytest.approx(ends, rel=1e-4)
    # the shape of a cantilever scaled to one at its top holds a quarter of the mass in every mode
    assert found.modal_mass_kg == pytest.approx(0.25 * M * np.ones(2), rel=1e-4)


@pytest.mark.parametrize(("top", "high"), [(0.0, 0.015), (900.0, 6e-4), (2700.0, 1e-4)])
def test_first_mode_lies_just_below_the_hand_estimate(top, high):
    found = column_modes(H, EI, M, top)
    hand = float(column_frequency_rad_s(H, EI, M, top))
    assert found.frequency_rad_s[0] <= hand <= found.frequency_rad_s[0] * (1.0 + high)
    assert found.modal_mass_kg[0] == pytest.approx(top + 0.24 * M, rel=0.07)


def test_heavy_top_holds_still_in_the_second_mode():
    found = column_modes(H, EI, M, 50.0 * M)
    propped = 15.4182 * np.sqrt(EI / (M * H**3))  # built in and simply supported
    assert found.frequency_rad_s[1] == pytest.approx(propped, rel=0.01)
    assert found.modal_mass_kg[1] > 100.0 * found.modal_mass_kg[0]


def test_rotor_added_to_a_mode_by_hand_and_by_the_column_itself():
    assert float(with_added_mass(20.0, 900.0, 700.0)) == pytest.approx(15.0)
    without, fitted = (column_modes(H, EI, M, top) for top in (600.0, 1000.0))
    found = with_added_mass(without.frequency_rad_s[0], without.modal_mass_kg[0], 400.0)
    exact = float(fitted.frequency_rad_s[0])
    assert exact <= float(found) <= 1.0005 * exact


@pytest.mark.parametrize(
    ("changed", "message"),
    [
        ({"mass_kg": 0.0}, r"column mass: expected 0.001 to 1e\+07 kg, found 0"),
        ({"modes": 9}, r"number of column modes: expected 1 to 6, found 9"),
        ({"top_mass_kg": 9e5}, r"weight that takes up to 5 % of its stiffness, found 70.6 %"),
    ],
)
def test_columns_that_cannot_be_are_refused(changed, message):
    column = {"height_m": H, "bending_stiffness_N_m2": EI, "mass_kg": M, "top_mass_kg": 0.0}
    with pytest.raises(ValueError, match=message):
        column_modes(**{**column, **changed})
