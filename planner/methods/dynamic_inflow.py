"""Dynamic inflow: the mass of air that is sped up before the downwash follows the thrust."""

from __future__ import annotations

import math
from typing import TYPE_CHECKING

import numpy as np

from planner.methods.validity import require_within

if TYPE_CHECKING:
    import numpy.typing as npt

    Array = npt.NDArray[np.float64]

APPARENT_MASS_SHARE = 8.0 / (3.0 * math.pi)
"""Apparent mass of the disc over rho A R: 0.637 times that of a sphere of air of its radius.
P. J. Carpenter, B. Fridovich: Effect of a Rapid Blade-Pitch Increase on the Thrust and
Induced-Velocity Response of a Full-Scale Helicopter Rotor, NACA TN 3044, 1953 (factor read second
hand)."""


def inflow_time_constant_s(
    speed_rad_s: npt.ArrayLike, inflow_ratio: npt.ArrayLike, solidity_slope: npt.ArrayLike
) -> Array:
    """Time constant of small changes of uniform induced velocity about hover.

    tau Omega = K / (4 lambda + sigma a / 4), K = 8/(3 pi); without the blades' feedback, sigma a
    = 0, K / (4 lambda)

    Args:
        speed_rad_s: Rotor speed Omega, above 0 [rad/s].
        inflow_ratio: Induced velocity over tip speed, above 0 [-].
        solidity_slope: Solidity times lift slope sigma a, 0 or more [-].

    Returns:
        Time constant, broadcast shape [s].

    Raises:
        ValueError: A value below its range.

    Validity:
        Hover, small changes, uniform inflow and load.

    Source:
        Linearised momentum balance with the apparent mass of Carpenter and Fridovich, NACA TN
        3044, 1953 (form from memory, checked by linearising).

    Example:
        >>> round(float(inflow_time_constant_s(37.7, 0.0553, 0.370)), 3)
        0.072
    """
    Omega = require_within("rotor speed", speed_rad_s, (1e-6, np.inf), "rad/s")
    lam = require_within("inflow ratio", inflow_ratio, (1e-9, np.inf), "")
    sigma_a = require_within("solidity times lift slope", solidity_slope, (0.0, np.inf), "")
    return np.asarray(APPARENT_MASS_SHARE / (4.0 * lam + 0.25 * sigma_a) / Omega)
