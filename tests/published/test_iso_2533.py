"""ISO 2533:1975, Standard Atmosphere. Values from memory, to the printed digits."""

import pytest

from planner.methods.atmosphere import (
    moist_air_density_kg_m3,
    speed_of_sound_m_s,
    standard_pressure_pa,
    standard_temperature_k,
)

pytestmark = pytest.mark.published


@pytest.mark.parametrize(
    ("elevation", "temperature", "pressure", "density", "sound"),
    [
        (0.0, 288.15, 101325.0, 1.2250, 340.294),
        (500.0, 284.90, 95460.8, 1.16727, 338.370),
        (1000.0, 281.65, 89874.6, 1.11164, 336.434),
        (2000.0, 275.15, 79495.2, 1.00649, 332.529),
        (3000.0, 268.65, 70108.5, 0.909122, 328.578),
    ],
)
def test_standard_atmosphere(elevation, temperature, pressure, density, sound):
    T, p = standard_temperature_k(elevation), standard_pressure_pa(elevation)
    assert float(T) == pytest.approx(temperature, abs=5e-3)
    assert float(p) == pytest.approx(pressure, abs=0.06)
    assert float(moist_air_density_kg_m3(p, T, 0.0)) == pytest.approx(density, abs=6e-6)
    assert float(speed_of_sound_m_s(p, T, 0.0)) == pytest.approx(sound, abs=6e-4)
