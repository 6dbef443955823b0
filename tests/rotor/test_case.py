import numpy as np
import pytest

from planner.rotor.case import gravity_vector_m_s2, make_cases

AIR = {"air_density_kg_m3": 1.2, "speed_of_sound_m_s": 340.0}


def test_make_cases_broadcasts_and_fills_defaults():
    cases = make_cases(speed_rad_s=[10.0, 20.0, 30.0], collective_rad=0.1, **AIR)
    assert cases.count == 3
    assert cases.collective_rad.tolist() == [0.1, 0.1, 0.1]
    assert not cases.trimmed.any()
    assert np.all(np.isnan(cases.droop_angle_rad))
    assert cases.gravity_m_s2.shape == (3, 3)


def test_take_keeps_order():
    cases = make_cases(speed_rad_s=[10.0, 20.0, 30.0], collective_rad=[1.0, 2.0, 3.0], **AIR)
    assert cases.take(np.array([2, 0])).collective_rad.tolist() == [3.0, 1.0]


def test_gravity_of_a_level_axis_lies_in_the_disc_plane():
    assert gravity_vector_m_s2("axis level").tolist() == [0.0, -9.80665, 0.0]
    other = gravity_vector_m_s2("axis level", wind_from_other_side=True)
    assert other.tolist() == [0.0, 9.80665, 0.0]


@pytest.mark.parametrize(
    ("changes", "message"),
    [
        ({"speed_rad_s": -1.0}, r"speed_rad_s: expected values from 0 up, found -1"),
        ({"wind_m_s": np.nan}, r"wind_m_s: expected finite values"),
        ({"air_density_kg_m3": 0.0}, r"air_density_kg_m3: expected values above 0, found 0"),
        ({"load_factor": -0.5}, r"load_factor: expected values above 0"),
        ({"droop_angle_rad": 0.2, "up_angle_rad": 0.1}, r"droop stop below the up stop"),
        ({"blade": 4.0}, r"missing or unknown: \['blade'\]"),
    ],
)
def test_impossible_cases_are_refused(changes, message):
    values = {"speed_rad_s": 10.0, "collective_rad": 0.1, **AIR, **changes}
    with pytest.raises(ValueError, match=message):
        make_cases(**values)


def test_missing_air_is_refused():
    with pytest.raises(ValueError, match=r"missing or unknown: \['air_density_kg_m3', 'speed_of"):
        make_cases(speed_rad_s=10.0, collective_rad=0.1)
