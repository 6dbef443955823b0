import numpy as np
import pytest
from ambiance import Atmosphere

from planner.methods.atmosphere import (
    moist_air_density_kg_m3,
    saturation_vapour_pressure_pa,
    speed_of_sound_m_s,
    standard_pressure_pa,
    standard_temperature_k,
)


def test_standard_atmosphere_agrees_with_an_independent_package():
    elevation = np.array([-1000.0, 0.0, 250.0, 1500.0, 5000.0, 11000.0])
    reference = Atmosphere(Atmosphere.geop2geom_height(elevation))
    temperature, pressure = standard_temperature_k(elevation), standard_pressure_pa(elevation)
    assert temperature == pytest.approx(reference.temperature, rel=1e-9)
    assert pressure == pytest.approx(reference.pressure, rel=2e-6)


def test_dry_density_and_sound_agree_with_an_independent_package():
    elevation = np.array([0.0, 500.0, 3000.0])
    reference = Atmosphere(Atmosphere.geop2geom_height(elevation))
    temperature, pressure = standard_temperature_k(elevation), standard_pressure_pa(elevation)
    density = moist_air_density_kg_m3(pressure, temperature, 0.0)
    sound = speed_of_sound_m_s(pressure, temperature, 0.0)
    assert density == pytest.approx(reference.density, rel=2e-6)
    assert sound == pytest.approx(reference.speed_of_sound, rel=2e-6)


def test_saturation_pressure_stays_near_the_magnus_form():
    # Magnus form over water, 6.112 hPa exp(17.62 t / (243.12 + t)); constants from memory.
    celsius = np.linspace(-30.0, 60.0, 91)
    magnus = 611.2 * np.exp(17.62 * celsius / (243.12 + celsius))
    assert saturation_vapour_pressure_pa(celsius + 273.15) == pytest.approx(magnus, rel=4e-3)


@pytest.mark.parametrize(
    ("pressure", "celsius", "humidity", "density"),
    [  # ideal mixture computed separately
        (101325.0, 20.0, 0.5, 1.19885),
        (84500.0, 35.0, 0.6, 0.94085),
        (99800.0, 5.0, 0.8, 1.24664),
    ],
)
def test_moist_density_repeats_separately_computed_values(pressure, celsius, humidity, density):
    found = moist_air_density_kg_m3(pressure, celsius + 273.15, humidity)
    assert float(found) == pytest.approx(density, abs=6e-6)


def test_humidity_thins_hot_air_by_two_and_a_half_percent():
    dry, wet = moist_air_density_kg_m3(84500.0, 308.15, np.array([0.0, 1.0]))
    assert 100.0 * (wet / dry - 1.0) == pytest.approx(-2.5, abs=0.05)


def test_sound_is_faster_in_moist_air():
    speed = speed_of_sound_m_s(101325.0, 293.15, np.linspace(0.0, 1.0, 11))
    assert np.all(np.diff(speed) > 0.0)
    assert speed[5] - speed[0] == pytest.approx(0.64, abs=0.1)


def test_arrays_broadcast():
    density = moist_air_density_kg_m3(
        np.full((3, 1), 1e5), np.array([280.0, 290.0]), np.array([0.2, 0.8])
    )
    assert density.shape == (3, 2)


@pytest.mark.parametrize("elevation", [-2001.0, 11001.0, np.nan])
def test_elevation_outside_the_troposphere_is_refused(elevation):
    with pytest.raises(ValueError, match=r"elevation: expected -2000 to 11000 m, found"):
        standard_pressure_pa(elevation)


def test_air_inputs_outside_their_ranges_are_refused():
    with pytest.raises(ValueError, match=r"air temperature: expected 243.15 to 333.15 K"):
        moist_air_density_kg_m3(1e5, 15.0, 0.5)
    with pytest.raises(ValueError, match=r"air pressure: expected 20000 to 110000 Pa, found 1013"):
        moist_air_density_kg_m3(1013.25, 288.0, 0.5)
    with pytest.raises(ValueError, match=r"relative humidity: expected 0 to 1, found 50"):
        speed_of_sound_m_s(1e5, 288.0, 50.0)
