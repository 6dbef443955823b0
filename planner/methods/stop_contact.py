"""One-sided flap stops: a stiff spring whose damping grows with penetration."""

from __future__ import annotations

from typing import TYPE_CHECKING, Any

import numpy as np

if TYPE_CHECKING:
    from numpy.typing import NDArray

    Array = NDArray[np.floating[Any]]


def stop_moment_n_m(
    penetration_rad: Array,
    closing_rad_s: Array,
    stiffness_N_m_rad: Array,
    damping_s_rad: Array,
) -> Array:
    """Moment of a stop on a blade that presses into it; never pulls.

    M = max(0, K p (1 + d p'))  for p > 0, else 0

    Args:
        penetration_rad: Depth p by which the blade presses into the stop, (lanes,) [rad].
        closing_rad_s: Rate p' at which it goes deeper, (lanes,) [rad/s].
        stiffness_N_m_rad: Stiffness K, (lanes,) [N m/rad].
        damping_s_rad: Damping d, (lanes,) [s/rad].

    Returns:
        Moment away from the stop, (lanes,) [N m].

    Validity:
        The moment does not jump at touch-down, as it would with a plain dashpot beside the
        spring. A lossless stop has d = 0.

    Source:
        K. H. Hunt, F. R. E. Crossley: Coefficient of Restitution Interpreted as Damping in
        Vibroimpact, Journal of Applied Mechanics 42, 1975 (from memory).

    Example:
        >>> import numpy as np
        >>> one = np.ones(1)
        >>> float(stop_moment_n_m(0.01 * one, 2.0 * one, 1000.0 * one, 0.1 * one)[0])
        12.0
    """
    pressed = np.maximum(penetration_rad, 0.0)
    moment: Array = stiffness_N_m_rad * pressed
    moment *= np.maximum(1.0 + damping_s_rad * closing_rad_s, 0.0)
    return moment


def stop_moment_after_step_n_m(
    without_rad: Array,
    without_rad_s: Array,
    law: tuple[Array, Array],
    yields: tuple[Array, Array],
) -> Array:
    """Moment at the end of a step over which it grows linearly, from one scalar equation a lane.

    M = K (P - a M) (1 + d (V - b M)) has the smaller root
    M = 2 K P D / (1 + x + y + sqrt(1 + 2 (x + y) + (x - y)^2)), D = 1 + d V, x = K a D,
    y = K d b P, which lies in contact. It is 0 where P or D is negative.

    Args:
        without_rad: Penetration P at the end without that growth, (lanes,) [rad].
        without_rad_s: Closing rate V there, (lanes,) [rad/s].
        law: Stiffness K [N m/rad] and damping d [s/rad], each (lanes,).
        yields: What unit growth takes from penetration, a [1/(N m)], and from the closing rate,
            b [1/(N m s)], each (lanes,).

    Returns:
        Moment away from the stop at the end of the step, (lanes,) [N m].

    Validity:
        a and b not negative. Without damping energy is kept while sqrt(K / I) times the step
        stays below 2 sqrt(3), I being the inertia; above that the march diverges.

    Source:
        The law of `stop_moment_n_m` (derived).
    """
    (K, d), (a, b) = law, yields
    P = np.maximum(without_rad, 0.0)
    D = d * without_rad_s
    D += 1.0
    np.maximum(D, 0.0, out=D)
    x, y = K * a * D, K * d * b * P
    root = x - y
    root *= root
    x += y
    root += 2.0 * x
    root += 1.0
    np.sqrt(root, out=root)
    root += x
    root += 1.0
    moment: Array = 2.0 * K * P
    moment *= D
    moment /= root
    return moment
