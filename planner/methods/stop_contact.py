"""One-sided flap stops: a stiff spring whose damping grows with penetration."""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np

if TYPE_CHECKING:
    from numpy.typing import NDArray

    FloatArray = NDArray[np.float64]


def stop_moment_n_m(
    penetration_rad: FloatArray,
    closing_rad_s: FloatArray,
    stiffness_N_m_rad: FloatArray,
    damping_s_rad: FloatArray,
) -> FloatArray:
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
    moment: FloatArray = stiffness_N_m_rad * pressed
    moment *= np.maximum(1.0 + damping_s_rad * closing_rad_s, 0.0)
    return moment


def stop_moment_after_step_n_m(
    without_rad: FloatArray,
    without_rad_s: FloatArray,
    law: tuple[FloatArray, FloatArray],
    yields: tuple[FloatArray, FloatArray],
) -> FloatArray:
    """Moment at the end of a step over which it grows linearly, from one scalar equation a lane.

    M = K (P - a M) (1 + d (V - b M)) has the smaller root
    M = 2 c / (B + sqrt(B^2 - 4 A c)), A = K a d b, B = 1 + K a (1 + d V) + K d b P,
    c = K P (1 + d V), which is real and lies in contact. It is 0 where P or 1 + d V is negative.

    Args:
        without_rad: Penetration P at the end without that growth, (lanes,) [rad].
        without_rad_s: Closing rate V there, (lanes,) [rad/s].
        law: Stiffness K [N m/rad] and damping d [s/rad], each (lanes,).
        yields: What unit growth takes from penetration, a [1/(N m)], and from the closing rate,
            b [1/(N m s)], each (lanes,).

    Returns:
        Moment away from the stop at the end of the step, (lanes,) [N m].

    Validity:
        a and b not negative. Unconditionally stable; see `resolves_contact` for accuracy.

    Source:
        The law of `stop_moment_n_m` (derived).
    """
    (K, d), (a, b) = law, yields
    P = np.maximum(without_rad, 0.0)
    pressing = np.maximum(1.0 + d * without_rad_s, 0.0)
    B = 1.0 + K * (a * pressing + d * b * P)
    c = K * P * pressing
    root = np.sqrt(np.maximum(B * B - 4.0 * K * a * d * b * c, 0.0))
    moment: FloatArray = 2.0 * c / (B + root)
    return moment
