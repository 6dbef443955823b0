"""Induced velocity of a rotor in edgewise wind, its gradient over the disc, and loss factors."""

import numpy as np
import numpy.typing as npt

from planner.methods.validity import Array, require_within

DREES_ADVANCE_RATIO_RANGE = (0.0, 0.5)
NEWTON_STEPS = 60
NEWTON_TOLERANCE = 1e-12
SMALLEST_SINE = 1e-9


def edgewise_induced_velocity_m_s(
    thrust_n: npt.ArrayLike, density_area_kg_m: npt.ArrayLike, edgewise_m_s: npt.ArrayLike
) -> Array:
    """Mean induced velocity of a rotor in wind that lies in the disc plane.

    T = 2 rho A v sqrt(V^2 + v^2), solved for v without iteration:
    v^2 = 2 t^2 / (V^2 + sqrt(V^4 + 4 t^2)), t = T / (2 rho A), sign of v that of T.

    Args:
        thrust_n: Thrust T [N], either sign.
        density_area_kg_m: Air density times disc area, rho A [kg/m], greater than 0.
        edgewise_m_s: Wind V in the disc plane [m/s].

    Returns:
        Mean induced velocity v, positive against thrust [m/s], broadcast shape.

    Raises:
        ValueError: Density times area not greater than 0.

    Validity:
        Any edgewise wind, hover included; lightly loaded uniform disc, steady.

    Source:
        H. Glauert's momentum hypothesis, as given by Leishman 2006 (from memory).

    Example:
        >>> round(float(edgewise_induced_velocity_m_s(20000.0, 100.0, 0.0)), 3)
        10.0
    """
    t = np.asarray(thrust_n, dtype=np.float64) / (2.0 * _positive_area(density_area_kg_m))
    V2 = np.square(np.asarray(edgewise_m_s, dtype=np.float64))
    below = np.sqrt(V2 + np.sqrt(V2**2 + 4.0 * t**2))
    magnitude = np.sqrt(2.0) * np.abs(t) / np.where(below > 0.0, below, 1.0)
    return np.asarray(np.copysign(magnitude, t))


def wake_skew_angle_rad(edgewise_m_s: npt.ArrayLike, through_m_s: npt.ArrayLike) -> Array:
    """Angle between rotor shaft and wake.

    chi = atan(|V| / |W + v|)

    Args:
        edgewise_m_s: Wind V in the disc plane [m/s], or the advance ratio.
        through_m_s: Flow W + v through the disc [m/s], or the inflow ratio.

    Returns:
        Skew angle, 0 to pi/2 [rad], broadcast shape; 0 with no flow at all.

    Validity:
        A wake that is carried away; undeformed, steady.

    Source:
        R. P. Coleman, A. M. Feingold, C. W. Stempin: Evaluation of the Induced-Velocity Field of
        an Idealized Helicopter Rotor, NACA ARR L5E10, 1945 (summary read, formula from memory).

    Example:
        >>> round(float(wake_skew_angle_rad(1.0, 1.0)), 4)
        0.7854
    """
    return np.asarray(np.arctan2(np.abs(edgewise_m_s), np.abs(through_m_s)), dtype=np.float64)


def coleman_gradient(advance_ratio: npt.ArrayLike, inflow_ratio: npt.ArrayLike) -> Array:
    """Fore-aft gradient of induced velocity after Coleman.

    v(x, psi) = v_mean (1 + kx x cos psi), kx = tan(chi / 2)

    Args:
        advance_ratio: Edgewise wind over tip speed, mu, not negative. Only the ratio to the
            inflow matters here, so speeds in [m/s] may be given for both.
        inflow_ratio: Flow through the disc over tip speed, lambda.

    Returns:
        Gradient kx, 0 to 1, broadcast shape; more downwash on the downwind side.

    Raises:
        ValueError: Advance ratio negative.

    Validity:
        Derived on the fore-aft line of a uniformly loaded disc.

    Source:
        R. P. Coleman, A. M. Feingold, C. W. Stempin: NACA ARR L5E10, 1945 (summary read, formula
        from memory).

    Example:
        >>> round(float(coleman_gradient(0.1, 0.0)), 3)
        1.0
    """
    mu = require_within("advance ratio", advance_ratio, (0.0, np.inf), "")
    return np.asarray(np.tan(0.5 * wake_skew_angle_rad(mu, inflow_ratio)))


def pitt_peters_gradient(advance_ratio: npt.ArrayLike, inflow_ratio: npt.ArrayLike) -> Array:
    """Fore-aft gradient of induced velocity after Pitt and Peters.

    kx = (15 pi / 32) tan(chi / 2)

    Args:
        advance_ratio: Edgewise wind over tip speed, mu, not negative; or speeds for both.
        inflow_ratio: Flow through the disc over tip speed, lambda.

    Returns:
        Gradient kx, 0 to 1.47, broadcast shape.

    Raises:
        ValueError: Advance ratio negative.

    Validity:
        Steady, uniform loading, no hub moment.

    Source:
        D. M. Pitt, D. A. Peters: Theoretical Prediction of Dynamic-Inflow Derivatives, Vertica 5,
        1981, 21-34 (from memory).

    Example:
        >>> round(float(pitt_peters_gradient(0.1, 0.0)), 4)
        1.4726
    """
    return np.asarray(15.0 * np.pi / 32.0 * coleman_gradient(advance_ratio, inflow_ratio))


def tip_loss_factor(
    blade_count: int, radius_fraction: npt.ArrayLike, sine_inflow: npt.ArrayLike
) -> Array:
    """Share of the annulus momentum that a finite number of blades reaches near the tip.

    F = (2/pi) acos(exp(-f)), f = (N/2) (1 - x) / (x |sin phi|)

    Args:
        blade_count: Number of blades N.
        radius_fraction: Station over tip radius x, above 0 to 1.
        sine_inflow: Sine of the inflow angle phi at the station.

    Returns:
        Loss factor F, 0 at the tip to 1, broadcast shape; 1 where there is no inflow.

    Raises:
        ValueError: Radius fraction outside 0 to 1.

    Validity:
        Moderate loading; the number of blades enters only through the wake spacing.

    Source:
        L. Prandtl's tip loss, as given by Leishman 2006 (from memory).

    Example:
        >>> round(float(tip_loss_factor(4, 0.95, 0.08)), 3)
        0.827
    """
    x = require_within("radius fraction", radius_fraction, (1e-6, 1.0), "")
    return _prandtl(0.5 * blade_count * (1.0 - x) / x, sine_inflow)


def root_loss_factor(
    blade_count: int,
    radius_fraction: npt.ArrayLike,
    root_fraction: npt.ArrayLike,
    sine_inflow: npt.ArrayLike,
) -> Array:
    """Share of the annulus momentum reached near the inner end of the lifting blade.

    F = (2/pi) acos(exp(-f)), f = (N/2) (x - x0) / (x |sin phi|)

    Args:
        blade_count: Number of blades N.
        radius_fraction: Station over tip radius x, x0 to 1.
        root_fraction: Inner end of the lifting blade over tip radius x0.
        sine_inflow: Sine of the inflow angle phi at the station.

    Returns:
        Loss factor F, 0 at the inner end to 1, broadcast shape.

    Raises:
        ValueError: Radius fraction outside 0 to 1.

    Validity:
        As the tip loss; a rough estimate, since the root wake does not hold together as long.

    Source:
        The tip form mirrored to the root (common practice, from memory).

    Example:
        >>> round(float(root_loss_factor(4, 0.2, 0.15, 0.2)), 3)
        0.948
    """
    x = require_within("radius fraction", radius_fraction, (1e-6, 1.0), "")
    inboard = np.maximum(x - np.asarray(root_fraction, dtype=np.float64), 0.0)
    return _prandtl(0.5 * blade_count * inboard / x, sine_inflow)


def _prandtl(numerator: Array, sine_inflow: npt.ArrayLike) -> Array:
    f = numerator / np.maximum(np.abs(sine_inflow), SMALLEST_SINE)
    return np.asarray(2.0 / np.pi * np.arccos(np.exp(-f)))


def _positive_area(density_area_kg_m: npt.ArrayLike) -> Array:
    return require_within("air density times disc area", density_area_kg_m, (1e-9, 1e9), "kg/m")
