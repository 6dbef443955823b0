"""Closed forms for blade, stop and hover that a reviewer can redo with a pencil.

Rigid blade on a flap hinge. This file shares nothing with the main calculation.
"""

from dataclasses import dataclass

import numpy as np
import numpy.typing as npt

Array = npt.NDArray[np.float64]

STANDARD_GRAVITY_M_S2 = 9.80665


@dataclass(frozen=True, slots=True, eq=False)
class FlapHinge:
    """Blade and hinge spring against the droop stop, in physical units.

    Attributes:
        inertia_kg_m2: Second mass moment about the hinge, I = int m (r - e)^2 dr.
        first_moment_kg_m: First mass moment about the hinge, S = int m (r - e) dr.
        hinge_offset_m: Hinge offset e.
        spring_N_m_rad: Hinge spring k.
        spring_neutral_rad: Flap angle at which the spring is relaxed.
    """

    inertia_kg_m2: float | Array
    first_moment_kg_m: float | Array
    hinge_offset_m: float | Array
    spring_N_m_rad: float | Array
    spring_neutral_rad: float | Array


def uniform_flap_inertia(
    mass_per_length_kg_m: npt.ArrayLike, radius_m: npt.ArrayLike, hinge_offset_m: npt.ArrayLike
) -> tuple[Array, Array]:
    """Second and first mass moment of a uniform blade about its flap hinge.

    I = m L^3 / 3, S = m L^2 / 2, L = R - e

    Args:
        mass_per_length_kg_m: Mass per length m, hinge to tip [kg/m].
        radius_m: Tip radius R [m].
        hinge_offset_m: Hinge offset e [m].

    Returns:
        Second moment I [kg m2] and first moment S [kg m].

    Source:
        Integration.

    Example:
        >>> inertia, moment = uniform_flap_inertia(8.0, 6.0, 0.0)
        >>> float(inertia), float(moment)
        (576.0, 144.0)
    """
    m = np.asarray(mass_per_length_kg_m, dtype=np.float64)
    L = np.asarray(radius_m, dtype=np.float64) - np.asarray(hinge_offset_m, dtype=np.float64)
    return np.asarray(m * L**3 / 3.0), np.asarray(m * L**2 / 2.0)


def lock_number(
    air_density_kg_m3: npt.ArrayLike,
    lift_slope_per_rad: npt.ArrayLike,
    chord_m: npt.ArrayLike,
    radius_m: npt.ArrayLike,
    inertia_kg_m2: npt.ArrayLike,
) -> Array:
    """Ratio of air load to inertia of a flapping blade.

    gamma = rho a c R^4 / I

    Args:
        air_density_kg_m3: Air density rho [kg/m3].
        lift_slope_per_rad: Section lift slope a [1/rad].
        chord_m: Chord c [m].
        radius_m: Tip radius R [m].
        inertia_kg_m2: Second mass moment about the flap hinge I [kg m2].

    Returns:
        Lock number, broadcast shape.

    Source:
        Classical definition, Gessow & Myers 1952 (from memory).

    Example:
        >>> round(float(lock_number(1.2, 5.7, 0.3, 6.0, 576.0)), 3)
        4.617
    """
    R4 = np.asarray(radius_m, dtype=np.float64) ** 4
    numerator = np.asarray(air_density_kg_m3) * np.asarray(lift_slope_per_rad) * chord_m * R4
    return np.asarray(numerator / np.asarray(inertia_kg_m2, dtype=np.float64))


def flap_frequency_ratio(hinge: FlapHinge, speed_rad_s: npt.ArrayLike) -> Array:
    """Flap frequency over rotor speed, without air.

    nu^2 = 1 + e S / I + k / (I Omega^2)

    Args:
        hinge: Blade, hinge and spring.
        speed_rad_s: Rotor speed Omega, greater than 0 [rad/s].

    Returns:
        Frequency ratio nu, broadcast shape.

    Validity:
        Rigid blade, small flap angles.

    Source:
        Derived from Lagrange's equation; classical result (from memory).

    Example:
        >>> inertia, moment = uniform_flap_inertia(8.0, 6.0, 0.3)
        >>> hinge = FlapHinge(inertia, moment, 0.3, 0.0, 0.0)
        >>> round(float(flap_frequency_ratio(hinge, 35.0)), 6)
        1.038724
    """
    inertia = np.asarray(hinge.inertia_kg_m2, dtype=np.float64)
    offset = np.asarray(hinge.hinge_offset_m) * np.asarray(hinge.first_moment_kg_m) / inertia
    stiffness = np.asarray(hinge.spring_N_m_rad) / (inertia * np.square(speed_rad_s))
    return np.asarray(np.sqrt(1.0 + offset + stiffness))


def steady_flap_moment(hinge: FlapHinge, speed_rad_s: npt.ArrayLike) -> Array:
    """Weight and spring moment on a level blade over the inertia moment.

    (k beta_spring - g S) / (I Omega^2)

    Args:
        hinge: Blade, hinge and spring; upright rotor.
        speed_rad_s: Rotor speed Omega, greater than 0 [rad/s].

    Returns:
        Steady moment for `FlapLoading` [rad], broadcast shape.

    Validity:
        Small flap angles, thrust upward.

    Source:
        Derived from Lagrange's equation.

    Example:
        >>> hinge = FlapHinge(576.0, 144.0, 0.0, 0.0, 0.0)
        >>> round(float(steady_flap_moment(hinge, 35.0)), 6)
        -0.002001
    """
    spring = np.asarray(hinge.spring_N_m_rad) * np.asarray(hinge.spring_neutral_rad)
    weight = STANDARD_GRAVITY_M_S2 * np.asarray(hinge.first_moment_kg_m)
    inertia = np.asarray(hinge.inertia_kg_m2) * np.square(speed_rad_s)
    return np.asarray((spring - weight) / inertia)


def lift_off_speed_rad_s(hinge: FlapHinge, stop_angle_rad: npt.ArrayLike) -> Array:
    """Rotor speed at which centrifugal force alone lifts a blade off its droop stop.

    Omega^2 = (g S cos b_s + k (b_s - b_spring)) / (|sin b_s| (I cos b_s + e S))

    Args:
        hinge: Blade, hinge and spring; upright rotor.
        stop_angle_rad: Droop stop angle b_s, below 0 [rad].

    Returns:
        Lift-off speed [rad/s], broadcast shape; 0 where the spring carries the blade at rest.

    Raises:
        ValueError: A stop angle not below 0.

    Validity:
        No air load: with positive pitch the blade lifts earlier. It is not the end of stop
        contact in wind. A blade softer than rigid needs a few per cent more.

    Source:
        Derived from Lagrange's equation.

    Example:
        >>> hinge = FlapHinge(576.0, 144.0, 0.0, 0.0, 0.0)
        >>> round(float(lift_off_speed_rad_s(hinge, np.radians(-3.0))) * 30.0 / np.pi, 3)
        65.358
    """
    stop = _below_level(stop_angle_rad)
    moment = np.maximum(resting_stop_moment_n_m(hinge, stop), 0.0)
    offset = np.asarray(hinge.hinge_offset_m) * np.asarray(hinge.first_moment_kg_m)
    inertia = np.asarray(hinge.inertia_kg_m2) * np.cos(stop) + offset
    return np.asarray(np.sqrt(moment / (np.abs(np.sin(stop)) * inertia)))


def resting_stop_moment_n_m(hinge: FlapHinge, stop_angle_rad: npt.ArrayLike) -> Array:
    """Moment of a blade at rest on its droop stop.

    M = g S cos b_s + k (b_s - b_spring)

    Args:
        hinge: Blade, hinge and spring; upright rotor.
        stop_angle_rad: Droop stop angle b_s [rad].

    Returns:
        Moment on the stop [N m], broadcast shape; negative where the spring holds the blade off.

    Validity:
        Rigid blade, rotor at rest, no wind.

    Source:
        Statics.

    Example:
        >>> hinge = FlapHinge(576.0, 144.0, 0.0, 0.0, 0.0)
        >>> round(float(resting_stop_moment_n_m(hinge, 0.0)), 2)
        1412.16
    """
    stop = np.asarray(stop_angle_rad, dtype=np.float64)
    weight = STANDARD_GRAVITY_M_S2 * np.asarray(hinge.first_moment_kg_m) * np.cos(stop)
    spring = np.asarray(hinge.spring_N_m_rad) * (stop - np.asarray(hinge.spring_neutral_rad))
    return np.asarray(weight + spring)


def uniform_lift_off_speed_rad_s(radius_m: npt.ArrayLike, stop_angle_rad: npt.ArrayLike) -> Array:
    """Lift-off speed of a uniform blade hinged at the shaft, without spring and air load.

    Omega = sqrt(1.5 g / (R |sin b_s|))

    Args:
        radius_m: Tip radius R [m].
        stop_angle_rad: Droop stop angle b_s, below 0 [rad].

    Returns:
        Lift-off speed [rad/s], broadcast shape.

    Raises:
        ValueError: A stop angle not below 0.

    Validity:
        As `lift_off_speed_rad_s`.

    Source:
        Limit of `lift_off_speed_rad_s`.

    Example:
        >>> round(float(uniform_lift_off_speed_rad_s(6.0, np.radians(-3.0))), 4)
        6.8443
    """
    stop = _below_level(stop_angle_rad)
    radius = np.asarray(radius_m, dtype=np.float64)
    return np.asarray(np.sqrt(1.5 * STANDARD_GRAVITY_M_S2 / (radius * np.abs(np.sin(stop)))))


def tip_speed_m_s(speed_rad_s: npt.ArrayLike, radius_m: npt.ArrayLike) -> Array:
    """Rotational speed of the blade tip.

    Omega R

    Args:
        speed_rad_s: Rotor speed Omega [rad/s].
        radius_m: Tip radius R [m].

    Returns:
        Tip speed [m/s], broadcast shape.

    Source:
        Kinematics.

    Example:
        >>> float(tip_speed_m_s(35.0, 6.0))
        210.0
    """
    return np.asarray(np.asarray(speed_rad_s, dtype=np.float64) * np.asarray(radius_m))


def uniform_centrifugal_force_n(
    mass_per_length_kg_m: npt.ArrayLike,
    inner_radius_m: npt.ArrayLike,
    outer_radius_m: npt.ArrayLike,
    speed_rad_s: npt.ArrayLike,
) -> Array:
    """Centrifugal pull of a uniform blade at its inner radius.

    F = m Omega^2 (R^2 - r0^2) / 2

    Args:
        mass_per_length_kg_m: Mass per length m [kg/m].
        inner_radius_m: Radius r0 at which the pull is wanted [m].
        outer_radius_m: Tip radius R [m].
        speed_rad_s: Rotor speed Omega [rad/s].

    Returns:
        Pull [N], broadcast shape.

    Validity:
        Blade near the disc plane.

    Source:
        Integration.

    Example:
        >>> float(uniform_centrifugal_force_n(8.0, 0.0, 6.0, 35.0))
        176400.0
    """
    span = np.square(np.asarray(outer_radius_m, dtype=np.float64)) - np.square(inner_radius_m)
    return np.asarray(0.5 * np.asarray(mass_per_length_kg_m) * np.square(speed_rad_s) * span)


def _below_level(stop_angle_rad: npt.ArrayLike) -> Array:
    stop = np.asarray(stop_angle_rad, dtype=np.float64)
    if not np.all(stop < 0.0):
        message = (
            f"droop stop angle: expected below 0 rad, found {float(stop.max()):g}; a stop at or "
            "above level is not lifted off by centrifugal force"
        )
        raise ValueError(message)
    return stop
