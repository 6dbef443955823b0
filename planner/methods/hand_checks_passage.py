"""Closed forms for passing a resonance at an even rate, to be redone with a pencil.

One mode, light damping, rate of rotor speed a = Omega' constant in size. This file shares nothing
with the main calculation.
"""

import numpy as np
import numpy.typing as npt

Array = npt.NDArray[np.float64]

SLOWEST_SWEEP = 1e-12


def steady_unbalance_peak(damping_ratio: npt.ArrayLike) -> Array:
    """Largest steady amplitude over unbalance offset, at whatever speed.

    1 / (2 zeta sqrt(1 - zeta^2)), at Omega = w / sqrt(1 - 2 zeta^2); 1 / (2 zeta) at Omega = w

    Args:
        damping_ratio: Part of critical damping zeta, above 0 and up to 0.5.

    Returns:
        Amplitude over offset. A passage at an even rate stays below it within 0.1 % on the way
        down, and within 1.4 zeta^2 of it on the way up, as the force grows (computed, damping up
        to 0.2).

    Source:
        Steady solution of x'' + 2 zeta w x' + w^2 x = Omega^2 e^(i Omega t).

    Example:
        >>> round(float(steady_unbalance_peak(0.05)), 3)
        10.013
    """
    zeta = np.asarray(damping_ratio, dtype=np.float64)
    return np.asarray(0.5 / (zeta * np.sqrt(1.0 - zeta**2)))


def half_power_turns(
    frequency_rad_s: npt.ArrayLike, damping_ratio: npt.ArrayLike, rate_rad_s2: npt.ArrayLike
) -> Array:
    """Turns of the rotor between the half-power points of a resonance.

    N = w (2 zeta w / a) / (2 pi) = zeta w^2 / (pi a)

    Args:
        frequency_rad_s: Undamped frequency w [rad/s].
        damping_ratio: Part of critical damping zeta.
        rate_rad_s2: Size of the rate of rotor speed a, above 0 [rad/s2].

    Returns:
        Turns, broadcast shape.

    Validity:
        Damping up to about 0.1, half-power points at w (1 - zeta) and w (1 + zeta).

    Source:
        Definition.

    Example:
        >>> round(float(half_power_turns(20.0, 0.03, 1.0)), 2)
        3.82
    """
    w = np.asarray(frequency_rad_s, dtype=np.float64)
    zeta = np.asarray(damping_ratio, dtype=np.float64)
    return np.asarray(zeta * w**2 / (np.pi * np.asarray(rate_rad_s2, dtype=np.float64)))


def swept_share(
    frequency_rad_s: npt.ArrayLike, damping_ratio: npt.ArrayLike, rate_rad_s2: npt.ArrayLike
) -> Array:
    """Peak while passing a resonance over the steady peak, force of constant size.

    G = 1 - exp(-2.86 eta^-0.445), eta = Q^2 f' / f^2 = a pi / (2 zeta^2 w^2), Q = 1 / (2 zeta)

    eta is Q over the turns between the half-power points.

    Args:
        frequency_rad_s: Undamped frequency w [rad/s].
        damping_ratio: Part of critical damping zeta.
        rate_rad_s2: Size of the rate of rotor speed a, zero or above [rad/s2].

    Returns:
        Share G, 0 to 1, broadcast shape.

    Validity:
        eta up to 100: within 0.7 % to 20, 1.5 % high at 50, 3.6 % high at 100, 10.6 % high at 500
        (computed). The start lies well away from the resonance.

    Source:
        Cronin 1968, Shock and Vibration Bulletin 38 (from memory).

    Example:
        >>> round(float(swept_share(20.0, 0.05, 2.0 * 0.05**2 * 400.0 / np.pi)), 4)
        0.9427
    """
    w = np.asarray(frequency_rad_s, dtype=np.float64)
    zeta = np.asarray(damping_ratio, dtype=np.float64)
    rate = np.asarray(rate_rad_s2, dtype=np.float64)
    eta = np.maximum(0.5 * np.pi * rate / (zeta * w) ** 2, SLOWEST_SWEEP)
    return np.asarray(1.0 - np.exp(-2.86 * eta**-0.445))


def unbalance_passage_peak(
    frequency_rad_s: npt.ArrayLike, damping_ratio: npt.ArrayLike, rate_rad_s2: npt.ArrayLike
) -> Array:
    """Peak amplitude over unbalance offset while passing a resonance at an even rate.

    A = G / (2 zeta)

    Args:
        frequency_rad_s: Undamped frequency w [rad/s].
        damping_ratio: Part of critical damping zeta.
        rate_rad_s2: Size of the rate of rotor speed a, zero or above [rad/s2].

    Returns:
        Amplitude over offset, broadcast shape.

    Validity:
        Damping up to 0.06. An upper estimate on the way down. On the way up the force has grown
        before the peak comes: the true peak lies between A and A (1 + 2.157 sqrt(a) / w). To a
        half per cent for eta up to 100 (computed).

    Source:
        `swept_share` with the force taken at w.

    Example:
        >>> round(float(unbalance_passage_peak(20.0, 0.03, 1.0)), 2)
        12.89
    """
    zeta = np.asarray(damping_ratio, dtype=np.float64)
    return np.asarray(swept_share(frequency_rad_s, zeta, rate_rad_s2) / (2.0 * zeta))


def undamped_sweep_peak(frequency_rad_s: npt.ArrayLike, rate_rad_s2: npt.ArrayLike) -> Array:
    """Peak over static deflection while a constant force sweeps through an undamped resonance.

    3.676 f / sqrt(f') = 3.676 w / sqrt(2 pi a): an upper bound that needs no damping

    Args:
        frequency_rad_s: Undamped frequency w [rad/s].
        rate_rad_s2: Size of the rate of rotor speed a, above 0 [rad/s2].

    Returns:
        Peak over static deflection, broadcast shape.

    Validity:
        Slow sweep, sqrt(a) / w up to about 0.01 for 0.2 %; starts far from the resonance.

    Source:
        Fresnel integrals (computed); the form 3.67 is Lewis 1932 (from memory).

    Example:
        >>> round(float(undamped_sweep_peak(20.0, 1.0)), 1)
        29.3
    """
    w = np.asarray(frequency_rad_s, dtype=np.float64)
    return np.asarray(3.676 * w / np.sqrt(2.0 * np.pi * np.asarray(rate_rad_s2)))


def undamped_peak_speed_rad_s(frequency_rad_s: npt.ArrayLike, rate_rad_s2: npt.ArrayLike) -> Array:
    """Speed at which the peak of an undamped passage comes: late, in the sense of the sweep.

    Omega = w + 2.157 sqrt(|a|) sign(a)

    Args:
        frequency_rad_s: Undamped frequency w [rad/s].
        rate_rad_s2: Rate of rotor speed a, negative on the way down [rad/s2].

    Returns:
        Speed [rad/s], broadcast shape. With damping the peak comes nearer to w.

    Source:
        Fresnel integrals (computed).

    Example:
        >>> round(float(undamped_peak_speed_rad_s(20.0, -1.0)), 3)
        17.843
    """
    w = np.asarray(frequency_rad_s, dtype=np.float64)
    rate = np.asarray(rate_rad_s2, dtype=np.float64)
    return np.asarray(w + 2.157 * np.sqrt(np.abs(rate)) * np.sign(rate))
