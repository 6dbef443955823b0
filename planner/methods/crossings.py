"""Rotor speeds at which a natural frequency meets a rotor harmonic."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

if TYPE_CHECKING:
    from numpy.typing import NDArray

    FloatArray = NDArray[np.float64]


@dataclass(frozen=True)
class Crossing:
    """Speeds over which a mode may lie on a harmonic.

    Attributes:
        nominal_rad_s: Where the nominal frequency meets it; where it does not, the end of the
            range that lies inside the table, else the middle [rad/s].
        low_rad_s: Lowest speed of the range [rad/s].
        high_rad_s: Highest speed of the range [rad/s].
    """

    nominal_rad_s: float
    low_rad_s: float
    high_rad_s: float


def crossings(
    speed_rad_s: FloatArray,
    frequency_rad_s: FloatArray,
    low_rad_s: FloatArray,
    high_rad_s: FloatArray,
    harmonic: int,
) -> list[Crossing]:
    """Ranges of rotor speed where a mode may lie on a harmonic: ω_low <= n Ω <= ω_high.

    Args:
        speed_rad_s: Rotor speeds Ω, increasing [rad/s], shape (speeds,).
        frequency_rad_s: Natural frequency ω there [rad/s], shape (speeds,).
        low_rad_s: Lowest that it may be [rad/s], shape (speeds,).
        high_rad_s: Highest that it may be [rad/s], shape (speeds,).
        harmonic: Times per revolution n [-].

    Returns:
        The ranges, slowest first, straight lines between the speeds. Rest itself, where a free
        hinge has zero frequency on every harmonic, is none.

    Validity:
        Straight lines between the speeds: a range narrower than their distance that is not
        entered by either curve between two speeds is not seen; with a frequency that changes
        little between speeds there is none.

    Source:
        Definition.

    Example:
        >>> speed = np.array([0.0, 10.0, 20.0])
        >>> w = np.array([12.0, 12.0, 12.0])
        >>> crossings(speed, w, 0.9 * w, 1.1 * w, 1)
        [Crossing(nominal_rad_s=12.0, low_rad_s=10.8, high_rad_s=13.2)]
    """
    ray = harmonic * speed_rad_s
    below, above = ray - low_rad_s, high_rad_s - ray
    places = np.unique(np.concatenate([speed_rad_s, _zeros(speed_rad_s, below),
                                       _zeros(speed_rad_s, above)]))  # fmt: skip
    middles = 0.5 * (places[1:] + places[:-1])
    inside = (np.interp(middles, speed_rad_s, below) >= 0.0) & (
        np.interp(middles, speed_rad_s, above) >= 0.0
    )
    nominal = _zeros(speed_rad_s, ray - frequency_rad_s)
    found = []
    for begin, end in _runs(inside):
        low, high = float(places[begin]), float(places[end])
        if high > 0.0 and not (low == 0.0 and frequency_rad_s[0] <= 0.0):
            found.append(Crossing(_nominal(nominal, low, high), low, high))
    return found


def _zeros(speed: FloatArray, values: FloatArray) -> FloatArray:
    """Speeds at which values, straight between the speeds, pass through zero."""
    change = np.flatnonzero((values[:-1] > 0.0) != (values[1:] > 0.0))
    share = values[change] / (values[change] - values[change + 1])
    found: FloatArray = speed[change] + share * (speed[change + 1] - speed[change])
    return found


def _runs(inside: NDArray[np.bool_]) -> list[tuple[int, int]]:
    """Begin and end of each stretch of true values, as places of the points around them."""
    edges = np.diff(np.concatenate([[False], inside, [False]]).astype(np.int8))
    begins, ends = np.flatnonzero(edges == 1), np.flatnonzero(edges == -1)
    return list(zip(begins.tolist(), ends.tolist(), strict=True))


def _nominal(nominal: FloatArray, low: float, high: float) -> float:
    """The nominal crossing of a range, or what stands in for it."""
    own = nominal[(nominal >= low) & (nominal <= high)]
    return float(own[0]) if own.size else 0.5 * (low + high)
