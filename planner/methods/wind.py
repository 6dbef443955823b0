"""Wind at the hub from what the anemometer shows."""

import numpy as np
import numpy.typing as npt

from planner.methods.validity import Array, require_within

HEIGHT_RANGE_M = (1.0, 150.0)
EXPONENT_RANGE = (0.0, 0.5)
SPEED_RANGE_M_S = (0.0, 75.0)


def wind_at_height_m_s(
    speed_m_s: npt.ArrayLike,
    measured_height_m: npt.ArrayLike,
    height_m: npt.ArrayLike,
    exponent: npt.ArrayLike,
) -> Array:
    """Mean wind at one height from the mean wind at another.

    V(z) = V_a (z / z_a)^p

    Args:
        speed_m_s: Mean wind V_a at the anemometer [m/s].
        measured_height_m: Height z_a of the anemometer over ground [m].
        height_m: Height z wanted, usually of the hub [m].
        exponent: Exponent p of the site, about 0.1 over water to 0.3 among buildings.

    Returns:
        Mean wind at the wanted height [m/s], broadcast shape.

    Raises:
        ValueError: An input outside its range.

    Validity:
        Open ground, 1 m to 150 m, exponent 0 to 0.5, up to 75 m/s. Not in the wake of a building
        or of the stand itself, and a mean over minutes, not a gust.

    Source:
        Power law of the wind profile (common practice, from memory).

    Example:
        >>> round(float(wind_at_height_m_s(10.0, 5.0, 10.0, 0.2)), 3)
        11.487
    """
    speed = require_within("wind speed", speed_m_s, SPEED_RANGE_M_S, "m/s")
    measured = require_within("anemometer height", measured_height_m, HEIGHT_RANGE_M, "m")
    height = require_within("hub height", height_m, HEIGHT_RANGE_M, "m")
    power = require_within("wind profile exponent", exponent, EXPONENT_RANGE, "")
    return np.asarray(speed * (height / measured) ** power)


def gust_peak_m_s(mean_m_s: npt.ArrayLike, spread_m_s: npt.ArrayLike) -> Array:
    """Highest wind when gusts exceed the mean by the spread.

    V_gust = V + dV. The spread is carried to the hub unscaled: turbulence changes less with height
    than the mean does, and scaling it down with the profile would read low at a low hub.

    Args:
        mean_m_s: Mean wind V at the hub [m/s].
        spread_m_s: Gust spread dV, gust peak less mean [m/s].

    Returns:
        Gust peak [m/s], broadcast shape.

    Raises:
        ValueError: A speed outside 0 to 75 m/s.

    Validity:
        0 to 75 m/s; a spread observed over the minutes before the run.

    Source:
        Definition; the unscaled spread is common practice.

    Example:
        >>> float(gust_peak_m_s(10.0, 5.0))
        15.0
    """
    mean = require_within("wind speed", mean_m_s, SPEED_RANGE_M_S, "m/s")
    spread = require_within("gust spread", spread_m_s, SPEED_RANGE_M_S, "m/s")
    return np.asarray(mean + spread)
