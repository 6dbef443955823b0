"""Air at the stand: standard atmosphere, moist air density, speed of sound."""

import numpy as np
import numpy.typing as npt

from planner.methods.validity import Array, require_within

SEA_LEVEL_TEMPERATURE_K = 288.15
SEA_LEVEL_PRESSURE_PA = 101325.0
LAPSE_RATE_K_PER_M = 0.0065
STANDARD_GRAVITY_M_S2 = 9.80665
DRY_AIR_GAS_CONSTANT_J_PER_KG_K = 287.053
WATER_VAPOUR_GAS_CONSTANT_J_PER_KG_K = 461.523

ELEVATION_RANGE_M = (-2000.0, 11000.0)
TEMPERATURE_RANGE_K = (243.15, 333.15)
PRESSURE_RANGE_PA = (20000.0, 110000.0)
HUMIDITY_RANGE = (0.0, 1.0)


def standard_temperature_k(elevation_m: npt.ArrayLike) -> Array:
    """Temperature of the standard atmosphere.

    T = T0 - L h

    Args:
        elevation_m: Geopotential elevation h above mean sea level [m], any shape.

    Returns:
        Temperature T [K], same shape.

    Raises:
        ValueError: Elevation outside -2000 m to 11000 m.

    Validity:
        Troposphere, -2000 m to 11000 m.

    Source:
        ISO 2533:1975, Standard Atmosphere (from memory).

    Example:
        >>> float(standard_temperature_k(1000.0))
        281.65
    """
    elevation = require_within("elevation", elevation_m, ELEVATION_RANGE_M, "m")
    return np.asarray(SEA_LEVEL_TEMPERATURE_K - LAPSE_RATE_K_PER_M * elevation)


def standard_pressure_pa(elevation_m: npt.ArrayLike) -> Array:
    """Pressure of the standard atmosphere.

    p = p0 (T / T0)^(g / (R L))

    Args:
        elevation_m: Geopotential elevation h above mean sea level [m], any shape.

    Returns:
        Pressure p [Pa], same shape.

    Raises:
        ValueError: Elevation outside -2000 m to 11000 m.

    Validity:
        Troposphere, -2000 m to 11000 m.

    Source:
        ISO 2533:1975, Standard Atmosphere (from memory).

    Example:
        >>> round(float(standard_pressure_pa(2000.0)), 1)
        79495.2
    """
    exponent = STANDARD_GRAVITY_M_S2 / (DRY_AIR_GAS_CONSTANT_J_PER_KG_K * LAPSE_RATE_K_PER_M)
    ratio = standard_temperature_k(elevation_m) / SEA_LEVEL_TEMPERATURE_K
    return np.asarray(SEA_LEVEL_PRESSURE_PA * ratio**exponent)


def saturation_vapour_pressure_pa(temperature_k: npt.ArrayLike) -> Array:
    """Saturation vapour pressure of water.

    p_sv = exp(A T^2 + B T + C + D / T)

    Args:
        temperature_k: Air temperature T [K], any shape.

    Returns:
        Vapour pressure over liquid water [Pa], same shape.

    Raises:
        ValueError: Temperature outside 243.15 K to 333.15 K.

    Validity:
        Stated by the authors for room conditions; used here from -30 degC to 60 degC, over
        supercooled water below freezing, where it stays within 0.4 % of the Magnus form.

    Source:
        A. Picard, R. S. Davis, M. Glaser, K. Fujii: Revised Formula for the Density of Moist Air
        (CIPM-2007), Metrologia 45 (2008) 149-155 (constants from memory).

    Example:
        >>> round(float(saturation_vapour_pressure_pa(293.15)), 2)
        2339.16
    """
    T = require_within("air temperature", temperature_k, TEMPERATURE_RANGE_K, "K")
    return np.asarray(np.exp(1.2378847e-5 * T**2 - 1.9121316e-2 * T + 33.93711047 - 6343.1645 / T))


def moist_air_density_kg_m3(
    pressure_pa: npt.ArrayLike, temperature_k: npt.ArrayLike, relative_humidity: npt.ArrayLike
) -> Array:
    """Density of moist air as a mixture of two ideal gases.

    rho = (p - e) / (R_d T) + e / (R_v T),  e = phi p_sv(T)

    Args:
        pressure_pa: Static pressure p at the stand, not reduced to sea level [Pa].
        temperature_k: Air temperature T [K].
        relative_humidity: Relative humidity phi, 0 to 1.

    Returns:
        Density [kg/m3], broadcast shape.

    Raises:
        ValueError: An input outside its range.

    Validity:
        20 kPa to 110 kPa, -30 degC to 60 degC. Leaving out compressibility and the enhancement
        factor reads up to 0.06 % low against CIPM-2007.

    Source:
        Ideal gas mixture (common practice); saturation as in `saturation_vapour_pressure_pa`.

    Example:
        >>> round(float(moist_air_density_kg_m3(101325.0, 293.15, 0.5)), 5)
        1.19885
    """
    p, T, e = _mixture(pressure_pa, temperature_k, relative_humidity)
    dry = (p - e) / (DRY_AIR_GAS_CONSTANT_J_PER_KG_K * T)
    return np.asarray(dry + e / (WATER_VAPOUR_GAS_CONSTANT_J_PER_KG_K * T))


def speed_of_sound_m_s(
    pressure_pa: npt.ArrayLike, temperature_k: npt.ArrayLike, relative_humidity: npt.ArrayLike
) -> Array:
    """Speed of sound in moist air.

    a = sqrt(gamma p / rho); gamma from molar heat capacities 7/2 (dry air) and 4 (vapour).

    Args:
        pressure_pa: Static pressure p [Pa].
        temperature_k: Air temperature T [K].
        relative_humidity: Relative humidity, 0 to 1.

    Returns:
        Speed of sound a [m/s], broadcast shape.

    Raises:
        ValueError: An input outside its range.

    Validity:
        20 kPa to 110 kPa, -30 degC to 60 degC; ideal gases, no dispersion.

    Source:
        Ideal gas mixture (classical result, from memory).

    Example:
        >>> round(float(speed_of_sound_m_s(101325.0, 288.15, 0.0)), 2)
        340.29
    """
    p, T, e = _mixture(pressure_pa, temperature_k, relative_humidity)
    vapour_share = e / p
    heat_capacity = 3.5 + 0.5 * vapour_share
    gamma = heat_capacity / (heat_capacity - 1.0)
    rho = moist_air_density_kg_m3(p, T, relative_humidity)
    return np.asarray(np.sqrt(gamma * p / rho))


def _mixture(
    pressure_pa: npt.ArrayLike, temperature_k: npt.ArrayLike, relative_humidity: npt.ArrayLike
) -> tuple[Array, Array, Array]:
    pressure = require_within("air pressure", pressure_pa, PRESSURE_RANGE_PA, "Pa")
    humidity = require_within("relative humidity", relative_humidity, HUMIDITY_RANGE, "")
    saturation = saturation_vapour_pressure_pa(temperature_k)
    return pressure, np.asarray(temperature_k, dtype=np.float64), humidity * saturation
