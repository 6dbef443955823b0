"""Closed forms for stand modes and their passage, to be redone with a pencil.

This file shares nothing with the main calculation.
"""

import numpy as np
import numpy.typing as npt

Array = npt.NDArray[np.float64]


def column_frequency_rad_s(
    height_m: npt.ArrayLike,
    bending_stiffness_N_m2: npt.ArrayLike,
    mass_kg: npt.ArrayLike,
    top_mass_kg: npt.ArrayLike,
) -> Array:
    """First bending frequency of a uniform column, built in at its foot, with a mass on top.

    w^2 = (3 EI / h^3) / (M + 33/140 m): the shape is that of a load at the top

    Args:
        height_m: Height h [m].
        bending_stiffness_N_m2: EI [N m2].
        mass_kg: Mass of the column alone m [kg].
        top_mass_kg: Mass at its top M [kg].

    Returns:
        Frequency [rad/s], broadcast shape; never below the true one.

    Validity:
        High by 1.5 % without a mass on top, by 0.06 % or less where that is the column's own or
        more (computed). Weight on the column is left out.

    Source:
        Rayleigh's quotient (from memory).

    Example:
        >>> round(float(column_frequency_rad_s(4.0, 8.0e7, 900.0, 1500.0)), 2)
        46.8
    """
    stiffness = 3.0 * np.asarray(bending_stiffness_N_m2) / np.asarray(height_m) ** 3
    moving = np.asarray(top_mass_kg) + 33.0 / 140.0 * np.asarray(mass_kg)
    return np.asarray(np.sqrt(stiffness / moving), dtype=np.float64)


def rate_for_peak_rad_s2(
    frequency_rad_s: npt.ArrayLike,
    damping_ratio: npt.ArrayLike,
    amplitude_over_offset: npt.ArrayLike,
) -> Array:
    """Rate of rotor speed at which a passage peaks at a given amplitude over unbalance offset.

    2 zeta A = 1 - exp(-2.86 eta^-0.445), so eta = (-ln(1 - 2 zeta A) / 2.86)^(-1 / 0.445) and
    a = 2 eta zeta^2 w^2 / pi

    Args:
        frequency_rad_s: Undamped frequency w [rad/s].
        damping_ratio: Part of critical damping zeta.
        amplitude_over_offset: Amplitude over unbalance offset A, above 0.

    Returns:
        Size of the rate [rad/s2], broadcast shape; 0 where the steady peak 1 / (2 zeta) is not
        above A.

    Validity:
        Damping up to 0.06, eta up to 100. As good as the fit: an error of 1 % in the peak is 3 %
        in the rate at half the steady peak, 9 % at nine tenths of it. On the way up the force
        grows until the peak comes, and the rate needed is the higher.

    Source:
        Cronin 1968, Shock and Vibration Bulletin 38 (from memory), solved for the rate.

    Example:
        >>> round(float(rate_for_peak_rad_s2(20.0, 0.03, 12.0)), 2)
        1.41
    """
    w = np.asarray(frequency_rad_s, dtype=np.float64)
    zeta = np.asarray(damping_ratio, dtype=np.float64)
    share = np.minimum(2.0 * zeta * np.asarray(amplitude_over_offset, dtype=np.float64), 1.0)
    missing = np.maximum(1.0 - share, np.finfo(np.float64).tiny)
    eta = (-np.log(missing) / 2.86) ** (-1.0 / 0.445)
    return np.asarray(np.where(share < 1.0, 2.0 * eta * (zeta * w) ** 2 / np.pi, 0.0))
