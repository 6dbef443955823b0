"""Coefficients of a stalled section, from the end of its data to 180 degrees."""

from dataclasses import dataclass

import numpy as np
import numpy.typing as npt

Array = npt.NDArray[np.float64]

WIDEST_MATCH_RAD = float(np.radians(60.0))
WIDEST_ASPECT_RATIO = 50.0
REAR_LIFT_SHARE = -0.7


@dataclass(frozen=True, slots=True)
class Continuation:
    """What the continuation beyond the data needs.

    Attributes:
        aspect_ratio: Tip radius over chord at three quarters of the radius.
        least_drag: Floor of the drag coefficient beyond the data, greater than 0.
    """

    aspect_ratio: float
    least_drag: float


@dataclass(frozen=True, slots=True, eq=False)
class DataEnd:
    """End of the data on the side of positive angles, where the continuation takes over.

    Attributes:
        angle_rad: Last angle of the data [rad].
        lift: Lift coefficient there.
        drag: Drag coefficient there.
        moment: Moment coefficient about the quarter chord there.
        inner_angle_rad: All angles of the data [rad].
        inner_drag: Drag coefficient at those angles.
    """

    angle_rad: float
    lift: float
    drag: float
    moment: float
    inner_angle_rad: Array
    inner_drag: Array


def viterna_continuation(
    angle_rad: npt.ArrayLike,
    match_angle_rad: float,
    match_lift: float,
    match_drag: float,
    aspect_ratio: float,
) -> tuple[Array, Array]:
    """Lift and drag of a stalled section from its stall point to 90 degrees.

    cl = A1 sin 2 alpha + A2 cos^2 alpha / sin alpha,
    cd = CDmax sin^2 alpha + B2 cos alpha,
    CDmax = 1.11 + 0.018 AR, A1 = CDmax / 2,
    A2 = (cl_s - CDmax sin_s cos_s) sin_s / cos_s^2, B2 = (cd_s - CDmax sin_s^2) / cos_s

    Args:
        angle_rad: Angle of attack alpha, stall point to pi/2 [rad], any shape.
        match_angle_rad: Angle alpha_s of the stall point, above 0 to 60 degrees [rad].
        match_lift: Lift coefficient cl_s at the stall point.
        match_drag: Drag coefficient cd_s at the stall point.
        aspect_ratio: Tip radius over chord at three quarters of the radius AR, below 50.

    Returns:
        Lift and drag coefficient, shape of the angle; equal to the stall point at its angle. Drag
        may fall below zero when the stall point has little drag for its angle.

    Raises:
        ValueError: Aspect ratio or stall angle outside its range.

    Validity:
        Deep stall of a blade of finite aspect ratio; drag at 30 to 60 degrees reads low.

    Source:
        L. A. Viterna, R. D. Corrigan: Fixed Pitch Rotor Performance of Large Horizontal Axis Wind
        Turbines, NASA CP-2230, 1981 (CDmax read second hand, coefficients from memory).

    Example:
        >>> cl, cd = viterna_continuation(np.pi / 2, np.radians(15.0), 1.5, 0.036, 15.0)
        >>> round(float(cl), 6), round(float(cd), 3)
        (0.0, 1.38)
    """
    if not 0.0 < match_angle_rad <= WIDEST_MATCH_RAD:
        degrees = float(np.degrees(match_angle_rad))
        message = (
            f"end of section data: expected above 0 to 60 deg, found {degrees:g} deg; "
            "give data to an angle near stall, or over the full circle"
        )
        raise ValueError(message)
    check_continuation(Continuation(aspect_ratio, 1.0))
    alpha = np.asarray(angle_rad, dtype=np.float64)
    largest_drag = 1.11 + 0.018 * aspect_ratio
    sine, cosine = np.sin(match_angle_rad), np.cos(match_angle_rad)
    A1 = 0.5 * largest_drag
    A2 = (match_lift - largest_drag * sine * cosine) * sine / cosine**2
    B2 = (match_drag - largest_drag * sine**2) / cosine
    lift = A1 * np.sin(2.0 * alpha) + A2 * np.cos(alpha) ** 2 / np.sin(alpha)
    drag = largest_drag * np.sin(alpha) ** 2 + B2 * np.cos(alpha)
    return np.asarray(lift), np.asarray(drag)


def coefficients_beyond(
    angle_rad: Array, end: DataEnd, continuation: Continuation
) -> tuple[Array, Array, Array]:
    """Lift, drag and moment of the positive side from the end of the data to 180 degrees.

    To 90 degrees as `viterna_continuation`. Beyond, the section is taken as mirrored with -0.7 of
    its lift; with the trailing edge forward within the data range lift falls straight to zero and
    drag is that of the data. The normal force acts at a point that moves from the quarter chord at
    the end of the data over mid-chord at 90 degrees to the three-quarter chord.

    Args:
        angle_rad: Angles from the end of the data to pi [rad].
        end: End of the data.
        continuation: Aspect ratio and drag floor.

    Returns:
        Lift, drag and moment coefficient, shape of the angles; without a jump at any joint.

    Raises:
        ValueError: Aspect ratio, drag floor or end of the data outside its range.

    Validity:
        An estimate. Drag with the trailing edge forward reads low.

    Source:
        Rear quadrant and moment arm: common practice, from memory.
    """
    check_continuation(continuation)
    reflected = np.where(angle_rad > 0.5 * np.pi, np.pi - angle_rad, angle_rad)
    lift, drag = viterna_continuation(
        np.maximum(reflected, end.angle_rad),
        end.angle_rad,
        end.lift,
        end.drag,
        continuation.aspect_ratio,
    )
    trailing = reflected < end.angle_rad
    lift = np.where(trailing, end.lift * reflected / end.angle_rad, lift)
    lift = np.where(angle_rad > 0.5 * np.pi, REAR_LIFT_SHARE * lift, lift)
    drag = np.where(trailing, np.interp(reflected, end.inner_angle_rad, end.inner_drag), drag)
    drag = np.maximum(drag, continuation.least_drag)
    normal = lift * np.cos(angle_rad) + drag * np.sin(angle_rad)
    arm = np.interp(angle_rad, [end.angle_rad, 0.5 * np.pi, np.pi], [0.0, 0.25, 0.5])
    fade = np.interp(angle_rad, [end.angle_rad, 0.5 * np.pi], [1.0, 0.0])
    return lift, drag, end.moment * fade - normal * arm


def check_continuation(continuation: Continuation) -> None:
    """Refuse a continuation that the method does not hold for.

    Args:
        continuation: Aspect ratio and drag floor.

    Raises:
        ValueError: Aspect ratio not above 0 and below 50, or drag floor not above 0.
    """
    if not 0.0 < continuation.aspect_ratio < WIDEST_ASPECT_RATIO:
        message = (
            f"aspect ratio: expected above 0 and below {WIDEST_ASPECT_RATIO:g}, found "
            f"{continuation.aspect_ratio:g}; check radius and chord"
        )
        raise ValueError(message)
    if not continuation.least_drag > 0.0:
        message = (
            f"drag floor: expected above 0, found {continuation.least_drag:g}; "
            "give a small positive drag coefficient"
        )
        raise ValueError(message)
