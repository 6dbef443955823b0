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


def reading_band_m_s(
    reading_m_s: npt.ArrayLike, fixed_error_m_s: npt.ArrayLike, error_share: npt.ArrayLike
) -> tuple[Array, Array]:
    """Lowest and highest true wind behind an anemometer reading.

    low = max(0, V - d),  high = V + d,  d = d_fixed + q V

    Args:
        reading_m_s: Reading V [m/s].
        fixed_error_m_s: Error d_fixed that does not grow with the wind [m/s].
        error_share: Error q as a share of the reading, 0 to 1.

    Returns:
        Lowest and highest true wind [m/s], broadcast shape. The two errors are added, not
        combined as a root of squares, since both may be systematic.

    Raises:
        ValueError: An input outside its range.

    Validity:
        0 to 75 m/s. The error is that of the instrument, not of its position.

    Source:
        Common practice.

    Example:
        >>> low, high = reading_band_m_s(10.0, 0.5, 0.03)
        >>> float(low), float(high)
        (9.2, 10.8)
    """
    reading = require_within("wind speed", reading_m_s, SPEED_RANGE_M_S, "m/s")
    fixed = require_within("anemometer error", fixed_error_m_s, SPEED_RANGE_M_S, "m/s")
    share = require_within("anemometer error share", error_share, (0.0, 1.0), "")
    error = fixed + share * reading
    return np.asarray(np.maximum(reading - error, 0.0)), np.asarray(reading + error)


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


def one_minus_cosine_gust_m_s(
    time_s: npt.ArrayLike,
    start_s: npt.ArrayLike,
    duration_s: npt.ArrayLike,
    spread_m_s: npt.ArrayLike,
) -> Array:
    """Extra wind of a single smooth gust.

    dV(t) = (dV/2) (1 - cos(2 pi (t - t0) / D)) for t0 <= t <= t0 + D, else 0

    Args:
        time_s: Time t [s].
        start_s: Start t0 of the gust [s].
        duration_s: Whole length D of the gust, rise and fall [s], greater than 0.
        spread_m_s: Height dV of the gust over the mean wind [m/s]; negative is a lull.

    Returns:
        Extra wind [m/s], broadcast shape.

    Raises:
        ValueError: Duration not greater than 0.

    Validity:
        One gust that strikes the whole disc at once; smaller than a rotor it is too severe.

    Source:
        Discrete gust shape (common practice, from memory).

    Example:
        >>> float(one_minus_cosine_gust_m_s(2.0, 1.0, 2.0, 5.0))
        5.0
    """
    duration = require_within("gust duration", duration_s, (1e-3, 1e6), "s")
    phase = (np.asarray(time_s, dtype=np.float64) - np.asarray(start_s)) / duration
    shape = 0.5 * (1.0 - np.cos(2.0 * np.pi * np.clip(phase, 0.0, 1.0)))
    return np.asarray(np.asarray(spread_m_s, dtype=np.float64) * shape)
