"""How quickly a resonance of the stand must be passed to stay below an amplitude."""

from dataclasses import dataclass
from typing import Literal

import numpy as np
import numpy.typing as npt

from planner.methods.passage import FREQUENCY_RANGE_RAD_S, SpeedTable, passage_peak
from planner.methods.validity import Array, require_within

DAMPING_RANGE = (5e-4, 0.5)
LEAST_AMPLIFICATION = 2.0
"""Nearer to the offset itself the mass just turns about its own centre, at any rate."""
GROWTH = 1.4
"""Times zeta^2: share by which a passage on the way up may top the steady peak."""
QUICKEST = 0.15
"""sqrt(a) / w of the quickest rate looked at: rotor speed rises from 0.5 w to w in 3.5 periods."""
SLOWEST_SWEEP = 0.1
"""Q^2 f' / f^2 of the slowest rate looked at, whose peak is the steady one within 0.2 % where
damping is light."""
REACH = 15.0
"""Speeds followed to either side of w, in sqrt(a)."""
POINTS = 65
BISECTIONS = 12


@dataclass(frozen=True, slots=True, eq=False)
class RateNeeded:
    """Slowest rates that keep a passage below an amplitude, each (lanes,).

    Attributes:
        rate_rad_s2: Size of the rate of rotor speed; 0 where a passage at any rate stays below
            [rad/s2].
        is_found: A rate does it. Where none does, the rate is the quickest that was looked at,
            and it is not enough.
    """

    rate_rad_s2: Array
    is_found: npt.NDArray[np.bool_]


def rate_needed_rad_s2(
    frequency_rad_s: npt.ArrayLike,
    damping_ratio: npt.ArrayLike,
    amplitude_over_offset: npt.ArrayLike,
    direction: Literal[1, -1] = 1,
) -> RateNeeded:
    """Slowest even rate of rotor speed whose passage stays below an amplitude.

    The peak of `planner.methods.passage.passage_peak` falls as the rate grows. The rate is
    halved in its logarithm between Q^2 f' / f^2 = 0.1 and sqrt(a) = 0.15 w. Each trial marches
    from 15 sqrt(a) before w, or 0.5 w on the way up and 2 w on the way down, to as far beyond.

    Args:
        frequency_rad_s: Undamped frequency w, (lanes,) [rad/s].
        damping_ratio: Part of critical damping zeta, (lanes,) or one.
        amplitude_over_offset: Wanted bound of amplitude over unbalance offset, (lanes,) or one.
        direction: 1 on the way up, -1 on the way down.

    Returns:
        Rates (lanes,), always on the safe side: the passage at the rate given stays below the
        amplitude.

    Raises:
        ValueError: An input outside its range, or a direction that is neither.

    Validity:
        One mode, damping 0.0005 to 0.5, even rate through the whole resonance, as of
        `passage_peak`. Within 0.5 % of the slowest such rate. No rate is found for less than
        twice the offset, nor where sqrt(a) = 0.15 w is not enough. On the way up a passage may
        top the steady peak by 1.4 zeta^2 of it, as the force grows (computed): a rate of 0 is
        given only where that too is below. Light damping takes long: seconds at 0.0005.

    Source:
        Bisection of the marched equation (computed).

    Example:
        >>> found = rate_needed_rad_s2([20.0], 0.03, 12.0)
        >>> round(float(found.rate_rad_s2[0]), 2)
        1.81
    """
    w = np.atleast_1d(require_within("frequency", frequency_rad_s, FREQUENCY_RANGE_RAD_S, "rad/s"))
    zeta = require_within("damping ratio", damping_ratio, DAMPING_RANGE, "")
    wanted = require_within("amplitude over offset", amplitude_over_offset, (0.0, 1e9), "")
    if direction not in {1, -1}:
        msg = f"direction: expected 1 (up) or -1 (down), found {direction}; give one of both"
        raise ValueError(msg)
    w, zeta, wanted = (np.array(value) for value in np.broadcast_arrays(w, zeta, wanted))
    rate, is_found = np.zeros(w.shape), np.ones(w.shape, dtype=np.bool_)
    steady = 0.5 / (zeta * np.sqrt(1.0 - zeta**2))
    passing = wanted <= steady * (1.0 + (GROWTH * zeta**2 if direction > 0 else 0.0))
    if np.any(passing):
        found = _slowest(zeta[passing], wanted[passing], direction)
        rate[passing], is_found[passing] = found[0] * w[passing] ** 2, found[1]
    return RateNeeded(rate, is_found)


def _slowest(zeta: Array, wanted: Array, direction: int) -> tuple[Array, npt.NDArray[np.bool_]]:
    """Rate over w^2 and whether it is enough, for modes whose steady peak is too high."""
    low = np.log(2.0 * SLOWEST_SWEEP * zeta**2 / np.pi)
    high = np.full(zeta.shape, 2.0 * np.log(QUICKEST))
    enough = _peak(np.exp(high), zeta, direction) < wanted
    is_found = enough & (wanted >= LEAST_AMPLIFICATION)
    for _ in range(BISECTIONS):
        middle = 0.5 * (low + high)
        below = np.zeros(zeta.shape, dtype=np.bool_)
        below[is_found] = (
            _peak(np.exp(middle[is_found]), zeta[is_found], direction) < wanted[is_found]
        )
        low = np.where(is_found & ~below, middle, low)
        high = np.where(is_found & below, middle, high)
    return np.exp(high), is_found


def _peak(rate: Array, zeta: Array, direction: int) -> Array:
    """Amplitude over offset of one passage a lane at w = 1, (lanes,)."""
    if not rate.size:
        return np.zeros(0)
    reach = REACH * np.sqrt(rate)
    if direction > 0:
        start, end = 1.0 - np.minimum(reach, 0.5), 1.0 + reach
    else:
        start, end = 1.0 + np.minimum(reach, 1.0), 1.0 - np.minimum(reach, 0.8)
    share = np.linspace(0.0, 1.0, POINTS)
    speed = start[:, None] + (end - start)[:, None] * share
    table = SpeedTable(speed, np.abs(end - start) / rate / (POINTS - 1))
    return passage_peak(table, [1.0], zeta[:, None]).amplitude[:, 0]
