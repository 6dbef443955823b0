"""The discrete gust that rises and falls once, and the gusts among which the worst is sought."""

import numpy as np
import numpy.typing as npt

from planner.methods.validity import Array, require_within

LENGTH_RANGE_S = (0.05, 600.0)
SAME_LENGTH = 1e-9


def gust_m_s(
    time_s: npt.ArrayLike,
    start_s: npt.ArrayLike,
    length_s: npt.ArrayLike,
    increment_m_s: npt.ArrayLike,
) -> Array:
    """Speed that a one-minus-cosine gust adds to the wind.

    dV(t) = (D / 2) (1 - cos(2 pi (t - t0) / L))  for t0 < t < t0 + L, else 0

    Args:
        time_s: Time t [s]. All arguments broadcast; one gust a lane is (lanes,).
        start_s: Start t0 [s]; may lie before the time counts from.
        length_s: Whole time L from calm to calm [s], above 0.
        increment_m_s: Greatest speed D that the gust adds [m/s]; negative for a lull.

    Returns:
        Added speed [m/s], broadcast shape; exactly 0 outside the gust. Its peak D falls on the
        middle, and its area is D L / 2.

    Raises:
        ValueError: A length that is not above 0 and finite.

    Validity:
        The same all over the disc at one time. True of gusts that need long to cross the disc;
        a short gust also tilts the wind over the disc, which is left out.

    Source:
        Shape of the discrete gust of CS 25.341(a), time in place of distance (from memory).

    Example:
        >>> gust_m_s([0.0, 1.0, 2.0, 3.0, 9.0], 1.0, 2.0, 6.0).tolist()
        [0.0, 0.0, 6.0, 0.0, 0.0]
    """
    L = np.asarray(length_s, dtype=np.float64)
    usable = (L > 0.0) & np.isfinite(L)
    if not np.all(usable):
        found = float(L[~usable].flat[0])
        message = (
            f"gust length: expected above 0 s and finite, found {found:g} s; "
            "give the time from calm to calm"
        )
        raise ValueError(message)
    passed = (np.asarray(time_s, dtype=np.float64) - np.asarray(start_s, dtype=np.float64)) / L
    inside = np.where((passed <= 0.0) | (passed >= 1.0), 0.0, passed)
    return np.asarray(np.asarray(increment_m_s, dtype=np.float64) * np.sin(np.pi * inside) ** 2)


def gust_lengths_s(shortest_s: float, longest_s: float, n_lengths: int) -> Array:
    """Lengths to try, in equal ratios from the shortest to the longest.

    L_i = L_short (L_long / L_short)^(i / (n - 1))

    Args:
        shortest_s: Shortest length L_short [s].
        longest_s: Longest length L_long [s], not below the shortest.
        n_lengths: Number n of lengths, at least 2; 1 will do where both ends are one.

    Returns:
        Lengths, rising, both ends exact (n_lengths,) [s]; one where both ends are one.

    Raises:
        ValueError: A length outside 0.05 to 600 s, ends the wrong way round, too few lengths.

    Validity:
        As `gust_m_s`.

    Source:
        Definition.

    Example:
        >>> gust_lengths_s(1.0, 9.0, 3).tolist()
        [1.0, 3.0, 9.0]
    """
    require_within("gust length", [shortest_s, longest_s], LENGTH_RANGE_S, "s")
    if longest_s < shortest_s:
        message = (
            f"longest gust: expected at least the shortest, {shortest_s:g} s, found "
            f"{longest_s:g} s; exchange the two"
        )
        raise ValueError(message)
    if longest_s == shortest_s:
        return np.array([shortest_s], dtype=np.float64)
    if n_lengths < 2:  # noqa: PLR2004 - both ends are tried
        message = f"number of gust lengths: expected at least 2, found {n_lengths}; try both ends"
        raise ValueError(message)
    return np.geomspace(shortest_s, longest_s, n_lengths)


def candidate_gusts(
    peak_times_s: npt.ArrayLike, shortest_s: float, longest_s: float, n_lengths: int = 5
) -> tuple[Array, Array]:
    """All gusts whose peaks fall on given moments, in lengths from shortest to longest.

    t0 = t_peak - L / 2

    Args:
        peak_times_s: Moments t_peak of the peaks, any shape [s].
        shortest_s: Shortest length L from calm to calm [s].
        longest_s: Longest length L from calm to calm [s].
        n_lengths: Number of lengths tried, as `gust_lengths_s`.

    Returns:
        Starts t0 and lengths L, flat, (peaks times lengths,) [s]; the lengths of the first peak
        come first. A start may lie before zero: the rotor then starts within the gust.

    Raises:
        ValueError: No peak, a peak that is not finite, or as `gust_lengths_s`.

    Validity:
        A search on a grid: what lies between is looked at by `refined`.

    Source:
        Definition.

    Example:
        >>> start, length = candidate_gusts([5.0, 8.0], 2.0, 4.0, 2)
        >>> start.tolist(), length.tolist()
        ([4.0, 3.0, 7.0, 6.0], [2.0, 4.0, 2.0, 4.0])
    """
    peaks = np.asarray(peak_times_s, dtype=np.float64).ravel()
    if peaks.size == 0 or not np.all(np.isfinite(peaks)):
        message = "gust peaks: expected finite moments, found none or one that is not; give some"
        raise ValueError(message)
    return _every_pair(peaks, gust_lengths_s(shortest_s, longest_s, n_lengths))


def refined(
    start_s: float,
    length_s: float,
    spacing_s: float,
    ratio: float,
    bounds_s: tuple[float, float],
    n_side: int = 2,
) -> tuple[Array, Array]:
    """The finer neighbourhood of the worst gust found so far.

    t_i = t_peak + d i / (n + 1),  L_j = L q^(j / (n + 1)),  i, j = -n .. n

    Args:
        start_s: Start of the worst gust [s]; its peak t_peak lies half a length later.
        length_s: Length L of the worst gust [s].
        spacing_s: Spacing d of the peaks that were tried [s].
        ratio: Ratio q between neighbouring lengths that were tried, 1 or more.
        bounds_s: Shortest and longest length allowed [s].
        n_side: Number n of new peaks, and of new lengths, to either side.

    Returns:
        Starts and lengths, flat [s]; the gust itself is among them. Lengths beyond a bound are
        drawn to it, and each length comes once. The next round takes the spacing d / (n + 1) and
        the ratio q^(1 / (n + 1)).

    Raises:
        ValueError: Spacing not above 0, ratio below 1, no new neighbours, length out of bounds.

    Validity:
        Finds the worst between the neighbours of one gust; another peak elsewhere in the search
        needs its own refinement.

    Source:
        Definition.

    Example:
        >>> start, length = refined(4.0, 2.0, 3.0, 8.0, (1.0, 8.0), 2)
        >>> start[:5].tolist(), sorted(set(length.tolist()))
        ([2.5, 2.0, 1.0, -1.0, 3.5], [1.0, 2.0, 4.0, 8.0])
    """
    require_within("gust length", length_s, bounds_s, "s")
    if not (0.0 < spacing_s < np.inf and 1.0 <= ratio < np.inf and n_side >= 1):
        message = (
            "gust neighbourhood: expected spacing above 0, ratio of at least 1 and at least 1 "
            f"neighbour, found {spacing_s:g} s, {ratio:g} and {n_side}; take those of the search"
        )
        raise ValueError(message)
    share = np.arange(-n_side, n_side + 1) / (n_side + 1.0)
    peaks = start_s + 0.5 * length_s + spacing_s * share
    lengths = np.clip(length_s * ratio**share, *bounds_s)
    kept = np.append(lengths[:-1] < lengths[1:] * (1.0 - SAME_LENGTH), True)
    return _every_pair(peaks, lengths[kept])


def _every_pair(peaks: Array, lengths: Array) -> tuple[Array, Array]:
    peak, length = (grid.ravel() for grid in np.meshgrid(peaks, lengths, indexing="ij"))
    return peak - 0.5 * length, length
