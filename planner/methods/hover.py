"""Blade-element momentum theory of the hovering rotor: closed form and annular solution."""

from collections.abc import Callable
from dataclasses import dataclass

import numpy as np
import numpy.typing as npt

from planner.methods.inflow import root_loss_factor, tip_loss_factor
from planner.methods.validity import Array

SectionLaw = Callable[[Array, Array], tuple[Array, Array]]
"""Lift and drag coefficient from angle of attack [rad] and Mach number, both (lane, station).

The search for the inflow also asks for trial angles up to 60 degrees from the pitch and for up to
twice the station's Mach number: the law must answer there, however roughly.
"""

SCAN_STEP_RAD = np.radians(1.0)
SCAN_STEPS = 60
BISECTION_STEPS = 44


@dataclass(frozen=True, slots=True, eq=False)
class HoverBlade:
    """Blades of a hovering rotor, one lane a case; every array broadcasts to (lane, station).

    Attributes:
        blade_count: Number of blades.
        root_fraction: Inner end of the lifting blade over tip radius.
        radius_fraction: Middle of each station over tip radius.
        width_fraction: Width of each station over tip radius.
        local_solidity: Number of blades times chord over pi R at each station.
        pitch_rad: Pitch of each station [rad].
        tip_mach: Rotational tip speed over speed of sound.
    """

    blade_count: int
    root_fraction: float
    radius_fraction: Array
    width_fraction: Array
    local_solidity: Array
    pitch_rad: Array
    tip_mach: Array


@dataclass(frozen=True, slots=True, eq=False)
class HoverFlow:
    """Inflow that closes the momentum balance of each annulus, (lane, station).

    Attributes:
        inflow_angle_rad: Angle of the flow to the disc plane [rad]; not a number if unsolved.
        inflow_ratio: Induced velocity over tip speed, positive against thrust.
        loss_factor: Product of tip and root loss factors.
        converged: A balance was found within 60 degrees.
    """

    inflow_angle_rad: Array
    inflow_ratio: Array
    loss_factor: Array
    converged: npt.NDArray[np.bool_]


@dataclass(frozen=True, slots=True, eq=False)
class HoverCoefficients:
    """Thrust and power of each lane.

    Attributes:
        thrust_coefficient: T / (rho A (Omega R)^2).
        power_coefficient: P / (rho A (Omega R)^3), induced and profile.
        profile_power_coefficient: Part of the power that section drag takes.
        converged: Every annulus of the lane found its balance.
    """

    thrust_coefficient: Array
    power_coefficient: Array
    profile_power_coefficient: Array
    converged: npt.NDArray[np.bool_]


def midpoint_stations(root_fraction: float, station_count: int) -> tuple[Array, Array]:
    """Middles and widths of equal stations from the root to the tip.

    Args:
        root_fraction: Inner end of the lifting blade over tip radius, 0 to below 1.
        station_count: Number of stations.

    Returns:
        Radius fractions and width fractions, each (station,).

    Raises:
        ValueError: Root fraction not within 0 to below 1, or no station.

    Example:
        >>> radius, width = midpoint_stations(0.2, 2)
        >>> radius.round(3).tolist(), width.round(3).tolist()
        ([0.4, 0.8], [0.4, 0.4])
    """
    if not 0.0 <= root_fraction < 1.0 or station_count < 1:
        message = (
            "hover stations: expected a root fraction from 0 to below 1 and at least 1 station, "
            f"found {root_fraction:g} and {station_count}; correct the blade's lifting part"
        )
        raise ValueError(message)
    width = (1.0 - root_fraction) / station_count
    radius = root_fraction + width * (np.arange(station_count, dtype=np.float64) + 0.5)
    return radius, np.full(station_count, width, dtype=np.float64)


def closed_form_inflow_ratio(
    radius_fraction: npt.ArrayLike,
    pitch_rad: npt.ArrayLike,
    solidity_lift_slope: npt.ArrayLike,
    loss_factor: npt.ArrayLike,
) -> Array:
    """Hover inflow at a station with a straight lift curve and small angles.

    lambda(x) = (s a / (16 F)) (sqrt(1 + 32 F |theta| x / (s a)) - 1), sign of theta

    Args:
        radius_fraction: Station over tip radius x.
        pitch_rad: Pitch theta from zero lift [rad].
        solidity_lift_slope: Local solidity times lift slope, s a [1/rad], greater than 0.
        loss_factor: Loss factor F, above 0 to 1; 1 for no loss.

    Returns:
        Inflow ratio lambda, broadcast shape.

    Validity:
        Attached flow, inflow angles below about 15 degrees, hover.

    Source:
        Gessow & Myers 1952 and Leishman 2006 (classical result, from memory).

    Example:
        >>> round(float(closed_form_inflow_ratio(0.75, np.radians(8.0), 0.61, 1.0)), 4)
        0.059
    """
    x = np.asarray(radius_fraction, dtype=np.float64)
    theta = np.asarray(pitch_rad, dtype=np.float64)
    F = np.asarray(loss_factor, dtype=np.float64)
    sa = np.asarray(solidity_lift_slope, dtype=np.float64)
    magnitude = sa / (16.0 * F) * (np.sqrt(1.0 + 32.0 * F * np.abs(theta) * x / sa) - 1.0)
    return np.asarray(np.sign(theta) * magnitude)


def momentum_thrust_coefficient(
    radius_fraction: Array, width_fraction: Array, inflow_ratio: Array, loss_factor: Array
) -> Array:
    """Thrust coefficient of a hovering rotor from its inflow.

    CT = 4 sum F lambda |lambda| x dx

    Args:
        radius_fraction: Middle of each station over tip radius x, (station,).
        width_fraction: Width of each station over tip radius dx, (station,).
        inflow_ratio: Inflow ratio lambda, (lane, station).
        loss_factor: Loss factor F, broadcasts to (lane, station).

    Returns:
        Thrust coefficient, (lane,).

    Validity:
        Hover; swirl left out.

    Source:
        Momentum theory of the annulus, Gessow & Myers 1952 (from memory).

    Example:
        >>> x, dx = midpoint_stations(0.0, 200)
        >>> uniform = np.full(200, 0.05)
        >>> round(float(momentum_thrust_coefficient(x, dx, uniform, np.ones(200))), 6)
        0.005
    """
    thrust = 4.0 * loss_factor * inflow_ratio * np.abs(inflow_ratio)
    return np.asarray(np.sum(thrust * radius_fraction * width_fraction, axis=-1))


def hover_inflow(blade: HoverBlade, section: SectionLaw) -> HoverFlow:
    """Inflow of each annulus of a hovering rotor with tip and root loss.

    4 F lambda |lambda| x = (s/2) U^2 (cl cos phi - cd sin phi), U^2 = x^2 + lambda^2,
    tan phi = lambda / x

    The smallest inflow that balances is taken: a scan from zero in steps of one degree finds the
    first change of sign, bisection then narrows it to 1e-15 rad.

    Args:
        blade: Blades, stations and cases.
        section: Lift and drag law of the stations.

    Returns:
        Flow of each annulus, (lane, station); annuli without a balance are marked.

    Validity:
        Hover in still air, independent annuli, no swirl. Reads thrust high for stubby blades:
        against measurement 2 to 20 % high at R/c 15 and 26 to 42 % high at R/c 6.

    Source:
        Gessow & Myers 1952 and Leishman 2006 (classical theory, from memory).
    """
    shape = _lane_shape(blade)
    zero = np.zeros(shape)
    start = _imbalance(blade, section, zero)
    direction = np.where(start >= 0.0, 1.0, -1.0)
    upper = np.full(shape, np.nan)
    for step in range(1, SCAN_STEPS + 1):
        angle = direction * SCAN_STEP_RAD * step
        crossed = direction * _imbalance(blade, section, angle) <= 0.0
        upper = np.where(np.isnan(upper) & crossed, angle, upper)
    lower = upper - direction * SCAN_STEP_RAD
    found = ~np.isnan(upper)
    lower, upper = np.where(found, lower, 0.0), np.where(found, upper, 0.0)
    for _ in range(BISECTION_STEPS):
        middle = 0.5 * (lower + upper)
        short = direction * _imbalance(blade, section, middle) > 0.0
        lower, upper = np.where(short, middle, lower), np.where(short, upper, middle)
    angle = np.where(found, 0.5 * (lower + upper), np.nan)
    ratio = blade.radius_fraction * np.tan(angle)
    return HoverFlow(angle, ratio, _loss(blade, angle), found)


def hover_coefficients(
    blade: HoverBlade, section: SectionLaw, flow: HoverFlow
) -> HoverCoefficients:
    """Thrust and power of a hovering rotor from its solved inflow.

    CT = sum (s/2) U^2 (cl cos phi - cd sin phi) dx,
    CP = sum (s/2) U^2 (cl sin phi + cd cos phi) x dx

    Args:
        blade: Blades, stations and cases.
        section: Lift and drag law of the stations.
        flow: Solution of `hover_inflow` for the same blade and section.

    Returns:
        Coefficients of each lane. A lane with an unsolved annulus is marked and not a number.

    Validity:
        As `hover_inflow`. The swirl left in the wake is not counted.

    Source:
        Gessow & Myers 1952 (classical theory, from memory).
    """
    phi = flow.inflow_angle_rad
    lift, drag = section(blade.pitch_rad - phi, _mach(blade, phi))
    weight = 0.5 * blade.local_solidity * (blade.radius_fraction / np.cos(phi)) ** 2
    weight = weight * blade.width_fraction
    thrust = weight * (lift * np.cos(phi) - drag * np.sin(phi))
    profile = weight * drag * np.cos(phi) * blade.radius_fraction
    induced = weight * lift * np.sin(phi) * blade.radius_fraction
    return HoverCoefficients(
        thrust_coefficient=np.sum(thrust, axis=-1),
        power_coefficient=np.sum(induced + profile, axis=-1),
        profile_power_coefficient=np.sum(profile, axis=-1),
        converged=np.all(flow.converged, axis=-1),
    )


def _lane_shape(blade: HoverBlade) -> tuple[int, ...]:
    return np.broadcast_shapes(
        blade.radius_fraction.shape,
        blade.width_fraction.shape,
        blade.local_solidity.shape,
        blade.pitch_rad.shape,
        blade.tip_mach.shape,
    )


def _mach(blade: HoverBlade, phi: Array) -> Array:
    return np.asarray(blade.tip_mach * blade.radius_fraction / np.cos(phi))


def _loss(blade: HoverBlade, phi: Array) -> Array:
    sine, x = np.sin(phi), blade.radius_fraction
    tip = tip_loss_factor(blade.blade_count, x, sine)
    return tip * root_loss_factor(blade.blade_count, x, blade.root_fraction, sine)


def _imbalance(blade: HoverBlade, section: SectionLaw, phi: Array) -> Array:
    """Blade thrust less momentum thrust of each annulus."""
    x = blade.radius_fraction
    lift, drag = section(blade.pitch_rad - phi, _mach(blade, phi))
    force = lift * np.cos(phi) - drag * np.sin(phi)
    element = 0.5 * blade.local_solidity * (x / np.cos(phi)) ** 2 * force
    ratio = x * np.tan(phi)
    return np.asarray(element - 4.0 * _loss(blade, phi) * ratio * np.abs(ratio) * x)
