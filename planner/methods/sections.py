"""Blade section data over the full circle of angle of attack.

A section is known, by law or by the user's polars, over a limited range of angles. Beyond it, a
whirling blade in wind still needs values: they are continued by the flat-plate form of Viterna and
Corrigan, joined without a jump. Within which angles and Mach numbers a table rests on data is kept
beside it.
"""

from dataclasses import dataclass

import numpy as np
import numpy.typing as npt

from planner.methods.stall import (
    WIDEST_MATCH_RAD,
    Continuation,
    DataEnd,
    check_continuation,
    coefficients_beyond,
)

Array = npt.NDArray[np.float64]

ANGLE_STEPS = 720
ANGLE_GRID_RAD: Array = np.radians(np.linspace(-180.0, 180.0, ANGLE_STEPS + 1))
MACH_STEPS = 16
FEWEST_POINTS = 5

NACA_0012_DIVERGENCE_MACH = 0.725
"""NACA TN 4357, read second hand: the lift slope falls above this Mach number."""
NACA_0012_STALL_FALL_RAD_PER_MACH = float(np.radians(16.0))
"""NACA TN 4357, read second hand: lift curve straight up to 15 - 16 M degrees."""


@dataclass(frozen=True, slots=True, eq=False)
class SectionTable:
    """Coefficients of one section on the common angle grid, (mach, angle).

    Attributes:
        mach: Mach numbers of the rows, increasing, at least one.
        lift: Lift coefficient.
        drag: Drag coefficient.
        moment: Moment coefficient about the quarter chord, nose up positive.
        valid_low_rad: Lowest angle that rests on data, (mach,) [rad].
        valid_high_rad: Highest angle that rests on data, (mach,) [rad].
        valid_mach: Lowest and highest Mach number that rest on data.
        moment_is_known: The data gave a moment; otherwise 0 stands within the data range.
    """

    mach: Array
    lift: Array
    drag: Array
    moment: Array
    valid_low_rad: Array
    valid_high_rad: Array
    valid_mach: tuple[float, float]
    moment_is_known: bool


@dataclass(frozen=True, slots=True)
class SymmetricLaw:
    """Law of a symmetric section up to stall; the plan gives every number.

    Attributes:
        lift_slope_per_rad: Lift slope at Mach 0 [1/rad].
        zero_lift_drag: Drag coefficient at zero angle.
        drag_rise_per_rad2: Growth of drag with angle squared [1/rad2].
        stall_angle_rad: End of the straight lift curve at Mach 0 [rad].
        stall_fall_rad_per_mach: Fall of that angle with Mach number [rad].
        divergence_mach: Mach number at which the compressibility correction stops.
    """

    lift_slope_per_rad: float
    zero_lift_drag: float
    drag_rise_per_rad2: float
    stall_angle_rad: float
    stall_fall_rad_per_mach: float
    divergence_mach: float


@dataclass(frozen=True, slots=True, eq=False)
class PolarData:
    """Polars of one section as given, one block of angles for each Mach number.

    Attributes:
        mach: Mach numbers, (block,), increasing.
        angle_rad: Angles of each block, increasing [rad].
        lift: Lift coefficients of each block.
        drag: Drag coefficients of each block.
        moment: Moment coefficients about the quarter chord of each block, or none at all.
    """

    mach: Array
    angle_rad: tuple[Array, ...]
    lift: tuple[Array, ...]
    drag: tuple[Array, ...]
    moment: tuple[Array, ...] | None


def symmetric_section(law: SymmetricLaw, continuation: Continuation) -> SectionTable:
    """Full-circle table of a symmetric section from its law.

    cl = a0 alpha / sqrt(1 - M^2), cd = cd0 + cd2 alpha^2 up to the stall angle
    alpha_s = alpha_s0 - k M; beyond it as `viterna_continuation`. Everything is held at its value
    at the divergence Mach number above that number.

    Args:
        law: Law up to stall.
        continuation: Aspect ratio and drag floor beyond it.

    Returns:
        Table at Mach numbers from 0 to the divergence Mach number. Moment 0 up to stall.

    Raises:
        ValueError: A number of the law that cannot be.

    Validity:
        Up to the stall angle and the divergence Mach number; no drag rise above divergence and no
        dynamic stall. Drag with the trailing edge forward is that of the attached section: low.

    Source:
        H. Glauert's compressibility correction (from memory); its stop at Mach 0.725 after
        P. J. Carpenter: Lift and Profile-Drag Characteristics of an NACA 0012 Airfoil Section as
        Derived from Measured Helicopter-Rotor Hovering Performance, NACA TN 4357, 1958 (read
        second hand).
    """
    _check_law(law)
    mach = np.linspace(0.0, law.divergence_mach, MACH_STEPS)
    stall = law.stall_angle_rad - law.stall_fall_rad_per_mach * mach
    angle = tuple(np.linspace(-limit, limit, 81) for limit in stall)
    slope = law.lift_slope_per_rad / np.sqrt(1.0 - mach**2)
    polars = PolarData(
        mach=mach,
        angle_rad=angle,
        lift=tuple(a * alpha for a, alpha in zip(slope, angle, strict=True)),
        drag=tuple(law.zero_lift_drag + law.drag_rise_per_rad2 * alpha**2 for alpha in angle),
        moment=tuple(np.zeros_like(alpha) for alpha in angle),
    )
    return polar_section(polars, continuation, (0.0, law.divergence_mach))


def polar_section(
    polars: PolarData, continuation: Continuation, valid_mach: tuple[float, float]
) -> SectionTable:
    """Full-circle table of a section from its polars.

    Args:
        polars: The user's polars. Each block either covers the full circle or ends within 60
            degrees on both sides of zero and is continued as `viterna_continuation`.
        continuation: Aspect ratio and drag floor beyond the data.
        valid_mach: Lowest and highest Mach number that the polars stand for.

    Returns:
        Table on the common angle grid, one row for each block.

    Raises:
        ValueError: A polar that cannot be used; the message names block, fault and mend.

    Validity:
        Within the data. The continuation is a flat-plate estimate and marked as outside.

    Source:
        As `viterna_continuation`.
    """
    check_continuation(continuation)
    _check_blocks(polars, valid_mach)
    moments = polars.moment or tuple(np.zeros_like(angle) for angle in polars.angle_rad)
    blocks = [
        _full_circle(np.vstack(block), continuation)
        for block in zip(polars.angle_rad, polars.lift, polars.drag, moments, strict=True)
    ]
    return SectionTable(
        mach=np.asarray(polars.mach, dtype=np.float64),
        lift=np.stack([block[0] for block in blocks]),
        drag=np.stack([block[1] for block in blocks]),
        moment=np.stack([block[2] for block in blocks]),
        valid_low_rad=np.array([max(angle[0], -np.pi) for angle in polars.angle_rad]),
        valid_high_rad=np.array([min(angle[-1], np.pi) for angle in polars.angle_rad]),
        valid_mach=valid_mach,
        moment_is_known=polars.moment is not None,
    )


def _full_circle(block: Array, continuation: Continuation) -> tuple[Array, Array, Array]:
    """Lift, drag and moment of one polar (angle, lift, drag, moment) on the angle grid."""
    angle, lift, drag, moment = block
    values = [np.interp(ANGLE_GRID_RAD, angle, column) for column in (lift, drag, moment)]
    if not _covers_circle(angle):
        above = angle[-1] < ANGLE_GRID_RAD
        upper = DataEnd(angle[-1], lift[-1], drag[-1], moment[-1], angle, drag)
        below = angle[0] > ANGLE_GRID_RAD
        lower = DataEnd(-angle[0], -lift[0], drag[0], -moment[0], -angle[::-1], drag[::-1])
        outer = coefficients_beyond(ANGLE_GRID_RAD[above], upper, continuation)
        mirrored = coefficients_beyond(-ANGLE_GRID_RAD[below], lower, continuation)
        for value, high, low, sign in zip(values, outer, mirrored, (-1.0, 1.0, -1.0), strict=True):
            value[above], value[below] = high, sign * low
    for value in values:
        # Both ends are the same attitude of the section.
        value[0] = value[-1] = 0.5 * (value[0] + value[-1])
    return values[0], values[1], values[2]


def _covers_circle(angle: Array) -> bool:
    return bool(angle[0] <= -np.pi + 1e-6 and angle[-1] >= np.pi - 1e-6)


def _check_law(law: SymmetricLaw) -> None:
    last_stall = law.stall_angle_rad - law.stall_fall_rad_per_mach * law.divergence_mach
    expectations = (
        ("lift slope", law.lift_slope_per_rad > 0.0, "above 0 per rad", law.lift_slope_per_rad),
        ("zero-lift drag", law.zero_lift_drag > 0.0, "above 0", law.zero_lift_drag),
        ("drag rise", law.drag_rise_per_rad2 >= 0.0, "0 or more", law.drag_rise_per_rad2),
        (
            "divergence Mach number",
            0.0 < law.divergence_mach < 1.0,
            "above 0 and below 1",
            law.divergence_mach,
        ),
        (
            "stall angle at the divergence Mach number",
            np.radians(1.0) <= last_stall <= law.stall_angle_rad <= WIDEST_MATCH_RAD,
            "0.0175 rad or more, and not above that at Mach 0",
            last_stall,
        ),
    )
    for name, is_met, expected, found in expectations:
        if not is_met:
            message = (
                f"symmetric section, {name}: expected {expected}, found {found:g}; "
                "correct the section law"
            )
            raise ValueError(message)


def _check_blocks(polars: PolarData, valid_mach: tuple[float, float]) -> None:
    mach = np.asarray(polars.mach)
    columns = [polars.angle_rad, polars.lift, polars.drag, polars.moment or polars.angle_rad]
    if mach.size == 0 or any(len(column) != mach.size for column in columns):
        counts = ", ".join(str(len(column)) for column in columns)
        message = (
            f"polar: expected one block of angle, lift, drag and moment for each of {mach.size} "
            f"Mach numbers (at least 1), found {counts}; complete the table"
        )
        raise ValueError(message)
    if not (mach[0] >= 0.0 and np.all(np.diff(mach) > 0.0)):
        message = (
            f"polar: expected Mach numbers increasing from 0 or more, found {mach.tolist()}; "
            "sort the blocks"
        )
        raise ValueError(message)
    if not 0.0 <= valid_mach[0] <= valid_mach[1]:
        message = (
            f"polar: expected a lowest and a highest valid Mach number, found {valid_mach}; "
            "give the range the polars stand for"
        )
        raise ValueError(message)
    for number, *block in zip(mach, *columns, strict=True):
        fault = _block_fault([np.asarray(column) for column in block])
        if fault:
            message = f"polar at Mach {number:g}: {fault}"
            raise ValueError(message)


def _block_fault(block: list[Array]) -> str:
    """What is wrong with one polar, in words; empty if nothing is."""
    angle, _, drag, _ = block
    sizes = [column.size for column in block]
    if len(set(sizes)) > 1:
        return f"expected columns of equal length, found {sizes}; complete the rows"
    if angle.size < FEWEST_POINTS:
        return f"expected at least {FEWEST_POINTS} angles, found {angle.size}; add rows"
    if not all(np.all(np.isfinite(column)) for column in block):
        return "expected numbers throughout, found an empty or infinite value; complete the rows"
    ends = np.degrees([angle[0], angle[-1]])
    reach = 60.0 + 1e-6
    within = -reach <= ends[0] < 0.0 < ends[1] <= reach
    faults = (
        (np.any(np.diff(angle) <= 0.0), "expected increasing angles, found a repeat or a step "
         "back; sort the rows"),
        (np.any(drag <= 0.0), f"expected drag above 0, found {np.min(drag):g}; correct the rows"),
        (not (within or _covers_circle(angle)), "expected angles on both sides of zero that end "
         "within 60 deg, or cover -180 to 180 deg, found "
         f"{ends[0]:g} to {ends[1]:g} deg; cut or extend the table"),
    )  # fmt: skip
    return next((words for is_faulty, words in faults if is_faulty), "")
