"""Closed forms for rotor speed over time that a reviewer can redo with a pencil.

I dOmega/dt = Q_motor - k Omega^2 - Q_f: rotor torque grows with the square of speed, friction and
brake stay the same, or the drive gives one torque. This file shares nothing with the main
calculation.
"""

import numpy as np
import numpy.typing as npt

Array = npt.NDArray[np.float64]


def drag_speed_rad_s(
    start_rad_s: npt.ArrayLike,
    drag_N_m_s2: npt.ArrayLike,
    inertia_kg_m2: npt.ArrayLike,
    time_s: npt.ArrayLike,
) -> Array:
    """Speed of a rotor that its air alone slows.

    Omega = Omega_0 / (1 + t / tau), tau = I / (k Omega_0)

    Args:
        start_rad_s: Speed Omega_0 at the start [rad/s].
        drag_N_m_s2: Rotor torque over speed squared, k [N m s2].
        inertia_kg_m2: Rotating inertia I [kg m2].
        time_s: Time t [s].

    Returns:
        Speed [rad/s], broadcast shape. It never reaches 0.

    Validity:
        Torque in proportion to the square of speed: fixed pitch, no wind, low Mach number.

    Source:
        Integration.

    Example:
        >>> float(drag_speed_rad_s(40.0, 2.0, 2000.0, 25.0))
        20.0
    """
    start = np.asarray(start_rad_s, dtype=np.float64)
    tau = np.asarray(inertia_kg_m2) / (np.asarray(drag_N_m_s2) * start)
    return np.asarray(start / (1.0 + np.asarray(time_s) / tau))


def drag_and_friction_time_s(
    inertia_kg_m2: npt.ArrayLike,
    drag_N_m_s2: npt.ArrayLike,
    friction_N_m: npt.ArrayLike,
    start_rad_s: npt.ArrayLike,
    end_rad_s: npt.ArrayLike,
) -> Array:
    """Time in which air, friction and brake slow a rotor from one speed to another.

    t = I / sqrt(k Q_f) (atan(Omega_0 sqrt(k / Q_f)) - atan(Omega_1 sqrt(k / Q_f)))

    Args:
        inertia_kg_m2: Rotating inertia I [kg m2].
        drag_N_m_s2: Rotor torque over speed squared k, above 0 [N m s2].
        friction_N_m: Friction and brake torque Q_f, above 0 [N m].
        start_rad_s: Speed Omega_0 [rad/s].
        end_rad_s: Speed Omega_1 [rad/s].

    Returns:
        Time [s], broadcast shape.

    Validity:
        As `drag_speed_rad_s`; friction and brake torque the same at all speeds between the two.

    Source:
        Integration.

    Example:
        >>> round(float(drag_and_friction_time_s(2000.0, 2.0, 200.0, 40.0, 0.0)), 2)
        132.58
    """
    k, friction = np.asarray(drag_N_m_s2, dtype=np.float64), np.asarray(friction_N_m)
    root = np.sqrt(k / friction)
    angle = np.arctan(np.asarray(start_rad_s) * root) - np.arctan(np.asarray(end_rad_s) * root)
    return np.asarray(np.asarray(inertia_kg_m2) / np.sqrt(k * friction) * angle)


def drag_and_friction_speed_rad_s(
    inertia_kg_m2: npt.ArrayLike,
    drag_N_m_s2: npt.ArrayLike,
    friction_N_m: npt.ArrayLike,
    start_rad_s: npt.ArrayLike,
    time_s: npt.ArrayLike,
) -> Array:
    """Speed after a time, slowed by air, friction and brake.

    Omega = sqrt(Q_f / k) tan(atan(Omega_0 sqrt(k / Q_f)) - t sqrt(k Q_f) / I)

    Args:
        inertia_kg_m2: Rotating inertia I [kg m2].
        drag_N_m_s2: Rotor torque over speed squared k, above 0 [N m s2].
        friction_N_m: Friction and brake torque Q_f, above 0 [N m].
        start_rad_s: Speed Omega_0 [rad/s].
        time_s: Time t [s].

    Returns:
        Speed [rad/s], broadcast shape; 0 after the rotor has come to rest.

    Validity:
        As `drag_and_friction_time_s`.

    Source:
        Integration.

    Example:
        >>> round(float(drag_and_friction_speed_rad_s(2000.0, 2.0, 200.0, 40.0, 132.58)), 2)
        0.0
    """
    k, friction = np.asarray(drag_N_m_s2, dtype=np.float64), np.asarray(friction_N_m)
    root = np.sqrt(k / friction)
    angle = np.arctan(np.asarray(start_rad_s) * root)
    angle = angle - np.asarray(time_s) * np.sqrt(k * friction) / np.asarray(inertia_kg_m2)
    return np.asarray(np.tan(np.maximum(angle, 0.0)) / root)


def drag_and_friction_turns(
    inertia_kg_m2: npt.ArrayLike,
    drag_N_m_s2: npt.ArrayLike,
    friction_N_m: npt.ArrayLike,
    start_rad_s: npt.ArrayLike,
    end_rad_s: npt.ArrayLike,
) -> Array:
    """Turns in which air, friction and brake slow a rotor from one speed to another.

    N = I / (4 pi k) ln((k Omega_0^2 + Q_f) / (k Omega_1^2 + Q_f))

    Args:
        inertia_kg_m2: Rotating inertia I [kg m2].
        drag_N_m_s2: Rotor torque over speed squared k, above 0 [N m s2].
        friction_N_m: Friction and brake torque Q_f [N m].
        start_rad_s: Speed Omega_0 [rad/s].
        end_rad_s: Speed Omega_1 [rad/s].

    Returns:
        Turns, broadcast shape.

    Validity:
        As `drag_and_friction_time_s`.

    Source:
        Integration.

    Example:
        >>> round(float(drag_and_friction_turns(2000.0, 2.0, 200.0, 40.0, 0.0)), 2)
        225.46
    """
    k, friction = np.asarray(drag_N_m_s2, dtype=np.float64), np.asarray(friction_N_m)
    first = k * np.square(np.asarray(start_rad_s)) + friction
    last = k * np.square(np.asarray(end_rad_s)) + friction
    return np.asarray(np.asarray(inertia_kg_m2) / (4.0 * np.pi * k) * np.log(first / last))


def constant_torque_time_s(
    inertia_kg_m2: npt.ArrayLike,
    net_torque_N_m: npt.ArrayLike,
    change_rad_s: npt.ArrayLike,
) -> Array:
    """Time in which one net torque changes the speed.

    t = I dOmega / Q

    Args:
        inertia_kg_m2: Rotating inertia I [kg m2].
        net_torque_N_m: Torque of the drive less friction and rotor torque, Q [N m].
        change_rad_s: Change of speed dOmega [rad/s].

    Returns:
        Time [s], broadcast shape.

    Validity:
        Torque the same at all speeds between the two.

    Source:
        Newton's law for a shaft.

    Example:
        >>> float(constant_torque_time_s(2000.0, 500.0, 40.0))
        160.0
    """
    impulse = np.asarray(inertia_kg_m2, dtype=np.float64) * np.asarray(change_rad_s)
    return np.asarray(impulse / np.asarray(net_torque_N_m))


def run_up_time_s(
    inertia_kg_m2: npt.ArrayLike,
    drag_N_m_s2: npt.ArrayLike,
    net_torque_N_m: npt.ArrayLike,
    end_rad_s: npt.ArrayLike,
) -> Array:
    """Time from rest to a speed under one motor torque against the rotor's drag.

    t = I / sqrt(k Q) artanh(Omega sqrt(k / Q))

    Args:
        inertia_kg_m2: Rotating inertia I [kg m2].
        drag_N_m_s2: Rotor torque over speed squared k, above 0 [N m s2].
        net_torque_N_m: Motor torque less friction Q, above 0 [N m].
        end_rad_s: Speed Omega [rad/s].

    Returns:
        Time [s], broadcast shape; infinite from the speed at which drag takes all torque.

    Validity:
        As `drag_speed_rad_s`; motor torque the same at all speeds.

    Source:
        Integration.

    Example:
        >>> round(float(run_up_time_s(2000.0, 2.0, 4000.0, 40.0)), 2)
        32.28
    """
    k, net = np.asarray(drag_N_m_s2, dtype=np.float64), np.asarray(net_torque_N_m)
    share = np.asarray(np.asarray(end_rad_s) * np.sqrt(k / net))
    rising = np.arctanh(np.where(share < 1.0, share, 0.0))
    time = np.asarray(inertia_kg_m2) / np.sqrt(k * net) * rising
    return np.asarray(np.where(share < 1.0, time, np.inf))
