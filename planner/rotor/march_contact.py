"""Which marched units come near a stop within a step."""

from __future__ import annotations

from typing import TYPE_CHECKING, Any

import numpy as np

if TYPE_CHECKING:
    from numpy.typing import NDArray

    Array = NDArray[np.floating[Any]]
    BoolArray = NDArray[np.bool_]

NEAR_RAD = 0.002
"""How far beyond what a step is seen to reach a stop still counts as near."""


def middle(before: tuple[Array, Array], after: tuple[Array, Array], step_s: Array) -> Array:
    """Rotation halfway through a step, from both ends and their rates (cubic), (cases, units)."""
    half = before[1] - after[1]
    half *= 0.125 * step_s[:, None]
    half += 0.5 * (before[0] + after[0])
    return half


def near_stops(
    lowest_rad: Array, highest_rad: Array, moment_N_m: Array, places: tuple[Array, Array]
) -> BoolArray:
    """Cases with a unit on a stop or near one within a step, (cases,).

    Args:
        lowest_rad: Lowest rotation seen in the step without stops, (cases, units).
        highest_rad: Highest.
        moment_N_m: Stop moments at its begin.
        places: Lower and upper stops.

    Returns:
        Which cases need sub-steps.
    """
    near = lowest_rad < places[0] + NEAR_RAD
    near |= highest_rad > places[1] - NEAR_RAD
    near |= moment_N_m != 0.0
    result: BoolArray = np.logical_or.reduce(near, axis=1)
    return result
