"""Closed forms for thrust and power in hover and light wind, to be redone with a pencil.

This file shares nothing with the main calculation.
"""

import numpy as np
import numpy.typing as npt

Array = npt.NDArray[np.float64]


def momentum_hover_thrust_coefficient(
    solidity_lift_slope: npt.ArrayLike, pitch_rad: npt.ArrayLike, tip_fraction: npt.ArrayLike
) -> Array:
    """Hover thrust of a rectangular rotor with uniform inflow.

    CT = (s a / 2) (theta B^3 / 3 - lambda B^2 / 2) with CT = 2 lambda |lambda|, solved:
    lambda = (s a B^2 / 16) (sqrt(1 + 64 |theta| / (3 s a B)) - 1), sign of theta

    Args:
        solidity_lift_slope: Solidity times lift slope, s a, greater than 0 [1/rad].
        pitch_rad: Pitch at three quarters of the radius from zero lift, theta [rad].
        tip_fraction: Outer end of the lifting blade over tip radius, B.

    Returns:
        Thrust coefficient T / (rho A (Omega R)^2), broadcast shape.

    Validity:
        Attached flow, straight lift curve, linear twist, no root cut-out; reads thrust high for
        blades shorter than about 10 chords. At negative pitch the rotor blows upward.

    Source:
        Classical blade-element and momentum theory, Gessow & Myers 1952 (from memory).

    Example:
        >>> round(float(momentum_hover_thrust_coefficient(0.61, np.radians(8.0), 1.0)), 5)
        0.00591
    """
    sa = np.asarray(solidity_lift_slope, dtype=np.float64)
    theta = np.asarray(pitch_rad, dtype=np.float64)
    B = np.asarray(tip_fraction, dtype=np.float64)
    inflow = sa * B**2 / 16.0 * (np.sqrt(1.0 + 64.0 * np.abs(theta) / (3.0 * sa * B)) - 1.0)
    return np.asarray(np.sign(theta) * 2.0 * inflow**2)


def hover_power_coefficient(
    thrust_coefficient: npt.ArrayLike,
    induced_power_factor: npt.ArrayLike,
    solidity: npt.ArrayLike,
    profile_drag: npt.ArrayLike,
) -> Array:
    """Hover power as induced plus profile power.

    CP = kappa |CT|^1.5 / sqrt(2) + s cd0 / 8

    Args:
        thrust_coefficient: CT.
        induced_power_factor: Factor kappa on ideal induced power, usually 1.10 to 1.20.
        solidity: Blade area over disc area, s.
        profile_drag: Mean drag coefficient cd0.

    Returns:
        Power coefficient P / (rho A (Omega R)^3), broadcast shape.

    Validity:
        Hover, attached flow, below drag divergence.

    Source:
        Classical momentum theory, Gessow & Myers 1952 (from memory).

    Example:
        >>> round(float(hover_power_coefficient(0.005, 1.15, 0.1, 0.01)), 6)
        0.000412
    """
    thrust = np.abs(np.asarray(thrust_coefficient, dtype=np.float64))
    induced = np.asarray(induced_power_factor) * thrust**1.5 / np.sqrt(2.0)
    return np.asarray(induced + np.asarray(solidity) * np.asarray(profile_drag) / 8.0)


def momentum_thrust_in_wind(
    solidity_lift_slope: npt.ArrayLike,
    pitch_rad: npt.ArrayLike,
    tip_fraction: npt.ArrayLike,
    advance_ratio: npt.ArrayLike,
) -> tuple[Array, Array]:
    """Thrust of a rectangular rotor with uniform inflow in edgewise wind.

    CT = (s a / 2) (theta (B^3 / 3 + mu^2 B / 2) - lambda B^2 / 2),
    lambda = CT / (2 sqrt(mu^2 + lambda^2)), by bisection on lambda

    Args:
        solidity_lift_slope: Solidity times lift slope, s a, greater than 0 [1/rad].
        pitch_rad: Pitch at three quarters of the radius from zero lift, theta [rad].
        tip_fraction: Outer end of the lifting blade over tip radius, B.
        advance_ratio: Wind in the disc plane over tip speed, mu.

    Returns:
        Thrust coefficient and inflow ratio, broadcast shape.

    Validity:
        As `momentum_hover_thrust_coefficient`; advance ratio to about 0.2, cyclic left out.

    Source:
        Classical theory with Glauert's induced velocity, Gessow & Myers 1952 (from memory).

    Example:
        >>> thrust, inflow = momentum_thrust_in_wind(0.61, np.radians(8.0), 1.0, 0.0)
        >>> round(float(thrust), 5), round(float(inflow), 5)
        (0.00591, 0.05435)
    """
    sa = np.asarray(solidity_lift_slope, dtype=np.float64)
    B = np.asarray(tip_fraction, dtype=np.float64)
    mu2 = np.square(np.asarray(advance_ratio, dtype=np.float64))
    lift = np.asarray(pitch_rad, dtype=np.float64) * (B**3 / 3.0 + mu2 * B / 2.0)
    low = np.full(np.broadcast_shapes(sa.shape, B.shape, lift.shape), -1.0)
    high, inflow = -low, low
    for _ in range(60):
        inflow = 0.5 * (low + high)
        wanted = sa / 2.0 * (lift - inflow * B**2 / 2.0)
        given = 2.0 * inflow * np.sqrt(mu2 + inflow**2)
        low = np.where(given < wanted, inflow, low)
        high = np.where(given < wanted, high, inflow)
    return np.asarray(sa / 2.0 * (lift - inflow * B**2 / 2.0)), np.asarray(inflow)


def power_in_wind(
    thrust_coefficient: npt.ArrayLike,
    inflow_ratio: npt.ArrayLike,
    induced_power_factor: npt.ArrayLike,
    solidity_drag: npt.ArrayLike,
) -> Array:
    """Power as induced plus profile power, with a given uniform inflow.

    CP = kappa lambda CT + s cd0 / 8

    Args:
        thrust_coefficient: CT.
        inflow_ratio: Induced velocity over tip speed, lambda.
        induced_power_factor: Factor kappa on ideal induced power, usually 1.10 to 1.20.
        solidity_drag: Solidity times mean drag coefficient, s cd0.

    Returns:
        Power coefficient P / (rho A (Omega R)^3), broadcast shape.

    Validity:
        Attached flow, below drag divergence, advance ratio to about 0.1: the growth of profile
        power with wind is left out.

    Source:
        Classical momentum theory, Gessow & Myers 1952 (from memory).

    Example:
        >>> round(float(power_in_wind(0.005, 0.05, 1.15, 0.001)), 6)
        0.000412
    """
    thrust, inflow = np.asarray(thrust_coefficient), np.asarray(inflow_ratio)
    induced = np.asarray(induced_power_factor) * inflow * thrust
    return np.asarray(induced + np.asarray(solidity_drag) / 8.0)
