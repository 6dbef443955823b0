"""Fast section coefficients along a blade whose section changes with radius."""

from collections.abc import Sequence
from dataclasses import dataclass
from typing import TypeVar

import numpy as np
import numpy.typing as npt

from planner.methods.sections import ANGLE_STEPS, Array, SectionTable

ComplexArray = npt.NDArray[np.complex128]
IndexArray = npt.NDArray[np.int64]
Number = TypeVar("Number", np.float64, np.complex128)
_ROW_LENGTH = ANGLE_STEPS + 1
_UNIFORM_TOLERANCE = 1e-9


@dataclass(frozen=True, slots=True, eq=False)
class StationSections:
    """Blended section tables of the stations of a blade; equal blends share one row.

    Lift and drag lie in one complex table (lift real, drag imaginary): one gather serves both.

    Attributes:
        mach: Mach numbers common to all rows, increasing.
        row: Row of each station, (station,).
        lift_drag: Lift + i drag, (row, mach, angle).
        moment: Moment coefficient about the quarter chord, (row, mach, angle).
        valid_low_rad: Lowest angle that rests on data, (row, mach) [rad].
        valid_high_rad: Highest angle that rests on data, (row, mach) [rad].
        valid_mach: Lowest and highest Mach number that rest on data, (row, 2).
        moment_is_known: Every section blended into the row gave a moment, (row,).
    """

    mach: Array
    row: IndexArray
    lift_drag: ComplexArray
    moment: Array
    valid_low_rad: Array
    valid_high_rad: Array
    valid_mach: Array
    moment_is_known: npt.NDArray[np.bool_]


@dataclass(frozen=True, slots=True, eq=False)
class _Place:
    """Where points fall in the flat tables: lower corner, and shares of the way to the next."""

    corner: IndexArray
    angle_share: Array
    mach_share: Array


def blend_weights(section_radius_m: npt.ArrayLike, station_radius_m: npt.ArrayLike) -> Array:
    """Weights of sections at stations when sections change linearly between given radii.

    Args:
        section_radius_m: Radius of each section, increasing [m]; held inboard of the first and
            outboard of the last.
        station_radius_m: Radius of each station [m].

    Returns:
        Weights, (station, section), each row summing to 1. For sections that change in a step
        pass weights of 0 and 1 to `station_tables` directly.

    Raises:
        ValueError: Section radii not increasing.

    Example:
        >>> blend_weights([1.0, 3.0], [0.5, 1.5, 4.0]).tolist()
        [[1.0, 0.0], [0.75, 0.25], [0.0, 1.0]]
    """
    known = np.atleast_1d(np.asarray(section_radius_m, dtype=np.float64))
    if np.any(np.diff(known) <= 0.0):
        message = f"section radii: expected increasing, found {known.tolist()}; sort the sections"
        raise ValueError(message)
    stations = np.asarray(station_radius_m, dtype=np.float64)
    return np.stack([np.interp(stations, known, unit) for unit in np.eye(known.size)], axis=-1)


def station_tables(tables: Sequence[SectionTable], weights: Array) -> StationSections:
    """Blend section tables into one table for each distinct station.

    Args:
        tables: Tables of the sections of the blade.
        weights: Share of each section at each station, (station, section), 0 or more, each row
            summing to 1.

    Returns:
        Tables of the stations on the union of all Mach numbers. Validity of a blend is the range
        common to every section that takes part in it.

    Raises:
        ValueError: Weights of a wrong shape, negative, or not summing to 1.

    Validity:
        Coefficients are blended at equal angle and Mach number (common practice); for sections
        of very different stall the blend is an estimate.
    """
    share = np.asarray(weights, dtype=np.float64)
    _check_weights(share, len(tables))
    mach = np.array(sorted({float(m) for table in tables for m in table.mach}))
    rows = [tuple(station) for station in share.tolist()]
    different = list(dict.fromkeys(rows))
    distinct, row = np.array(different), np.array([different.index(station) for station in rows])
    takes_part = distinct > 0.0
    lift_drag = [_at_mach(table.lift + 1j * table.drag, table.mach, mach) for table in tables]
    moment = [_at_mach(table.moment, table.mach, mach).real for table in tables]
    low = [_at_mach(table.valid_low_rad[:, None], table.mach, mach).real for table in tables]
    high = [_at_mach(table.valid_high_rad[:, None], table.mach, mach).real for table in tables]
    slow, fast = np.array([table.valid_mach for table in tables]).T
    known = np.array([table.moment_is_known for table in tables])
    part = takes_part[:, :, None]
    return StationSections(
        mach=mach,
        row=row.reshape(-1).astype(np.int64),
        lift_drag=np.ascontiguousarray(np.tensordot(distinct, np.stack(lift_drag), axes=1)),
        moment=np.ascontiguousarray(np.tensordot(distinct, np.stack(moment), axes=1)),
        valid_low_rad=np.where(part, np.stack(low)[None, :, :, 0], -np.inf).max(axis=1),
        valid_high_rad=np.where(part, np.stack(high)[None, :, :, 0], np.inf).min(axis=1),
        valid_mach=np.stack(
            [
                np.where(takes_part, slow, -np.inf).max(axis=1),
                np.where(takes_part, fast, np.inf).min(axis=1),
            ],
            axis=-1,
        ),
        moment_is_known=np.all(known | ~takes_part, axis=1),
    )


def coefficients(
    table: SectionTable, alpha_rad: npt.ArrayLike, mach: npt.ArrayLike
) -> tuple[Array, Array, Array]:
    """Lift, drag and moment coefficient of one section, linear in angle and Mach number.

    Args:
        table: Full-circle table of the section.
        alpha_rad: Angle of attack, any number of turns [rad], any shape.
        mach: Mach number, broadcasts with the angle; held at the ends of the table.

    Returns:
        Lift, drag and moment coefficient, broadcast shape.

    Validity:
        See `within_validity`. A value that is not a number gives one that is not a number.

    Example:
        >>> from planner.methods.sections import Continuation, SymmetricLaw, symmetric_section
        >>> law = SymmetricLaw(5.73, 0.0087, 0.4, 0.26, 0.28, 0.725)
        >>> table = symmetric_section(law, Continuation(15.0, 0.005))
        >>> cl, cd, cm = coefficients(table, 0.1, 0.0)
        >>> round(float(cl), 3), round(float(cd), 4), float(cm)
        (0.573, 0.0127, 0.0)
    """
    alpha, number = np.broadcast_arrays(np.asarray(alpha_rad, dtype=np.float64), mach)
    sections = station_tables([table], np.ones((1, 1)))
    lift, drag, moment = station_coefficients(sections, alpha[..., None], number[..., None])
    return lift[..., 0], drag[..., 0], moment[..., 0]


def station_lift_drag(sections: StationSections, alpha_rad: Array, mach: Array) -> ComplexArray:
    """Lift + i drag of the stations of a blade, linear in angle and Mach number.

    Args:
        sections: Tables of the stations.
        alpha_rad: Angle of attack [rad], last axis the station.
        mach: Mach number, broadcasts with the angle; held at the ends of the table.

    Returns:
        Complex array of the broadcast shape: real part lift, imaginary part drag coefficient.

    Validity:
        See `within_validity`. A value that is not a number gives one that is not a number.
    """
    place = _place(sections, alpha_rad, mach)
    return _look_up(sections.lift_drag.reshape(-1), place, one_mach=sections.mach.size == 1)


def station_coefficients(
    sections: StationSections, alpha_rad: Array, mach: Array
) -> tuple[Array, Array, Array]:
    """Lift, drag and moment coefficient of the stations of a blade.

    Args:
        sections: Tables of the stations.
        alpha_rad: Angle of attack [rad], last axis the station.
        mach: Mach number, broadcasts with the angle; held at the ends of the table.

    Returns:
        Lift, drag and moment coefficient, broadcast shape.

    Validity:
        See `within_validity`. A value that is not a number gives one that is not a number.
    """
    place = _place(sections, alpha_rad, mach)
    one_mach = sections.mach.size == 1
    lift_drag = _look_up(sections.lift_drag.reshape(-1), place, one_mach=one_mach)
    moment = _look_up(sections.moment.reshape(-1), place, one_mach=one_mach)
    return lift_drag.real, lift_drag.imag, moment


def within_validity(
    sections: StationSections, alpha_rad: Array, mach: Array
) -> npt.NDArray[np.bool_]:
    """Whether coefficients rest on section data rather than on its continuation.

    Args:
        sections: Tables of the stations.
        alpha_rad: Angle of attack [rad], last axis the station.
        mach: Mach number, broadcasts with the angle.

    Returns:
        True where angle and Mach number lie within the data, broadcast shape.
    """
    number = np.asarray(mach, dtype=np.float64)
    alpha = np.asarray(alpha_rad) - 2.0 * np.pi * np.round(np.asarray(alpha_rad) / (2.0 * np.pi))
    plane, share = _mach_plane(sections.mach, number)
    beyond = np.minimum(plane + 1, sections.mach.size - 1)
    low, high = (
        (1.0 - share) * limit[sections.row, plane] + share * limit[sections.row, beyond]
        for limit in (sections.valid_low_rad, sections.valid_high_rad)
    )
    slow, fast = sections.valid_mach[sections.row].T
    inside = (alpha >= low) & (alpha <= high) & (number >= slow) & (number <= fast)
    return np.asarray(inside)


def _place(sections: StationSections, alpha_rad: Array, mach: Array) -> _Place:
    """Flat table index of each point; what is asked of one point changes no other's number."""
    position = np.asarray(alpha_rad, dtype=np.float64) * (0.5 * ANGLE_STEPS / np.pi)
    position = position + 0.5 * ANGLE_STEPS
    if position.size and not (position.min() >= 0.0 and position.max() < ANGLE_STEPS):
        with np.errstate(invalid="ignore"):
            position = position - ANGLE_STEPS * np.floor(position / ANGLE_STEPS)
        whole = np.where(np.isfinite(position), position, 0.0).astype(np.int64)
        whole = np.minimum(whole, ANGLE_STEPS - 1)
    else:
        whole = position.astype(np.int64)
    plane, mach_share = _mach_plane(sections.mach, np.asarray(mach, dtype=np.float64))
    corner = (sections.row * sections.mach.size + plane) * _ROW_LENGTH + whole
    return _Place(corner, position - whole, mach_share)


def _mach_plane(grid: Array, mach: Array) -> tuple[IndexArray, Array]:
    """Index of the Mach number below each point, and share of the way to the next."""
    held = np.clip(mach, grid[0], grid[-1])
    if grid.size == 1:
        return np.zeros(mach.shape, dtype=np.int64), held - grid[0]
    steps = np.diff(grid)
    last = steps.size - 1
    if steps.max() - steps.min() < _UNIFORM_TOLERANCE:
        position = (held - grid[0]) * (steps.size / (grid[-1] - grid[0]))
        plane = np.fmin(position, last).astype(np.int64)
        return plane, position - plane
    plane = np.clip(np.searchsorted(grid, held, side="right") - 1, 0, last)
    return plane, (held - grid[plane]) / steps[plane]


def _look_up(flat: npt.NDArray[Number], place: _Place, *, one_mach: bool) -> npt.NDArray[Number]:
    low = _between_angles(flat, place.corner, place.angle_share)
    if one_mach:
        return low
    high = _between_angles(flat, place.corner + _ROW_LENGTH, place.angle_share)
    high -= low
    high *= place.mach_share
    high += low
    return high


def _between_angles(
    flat: npt.NDArray[Number], corner: IndexArray, share: Array
) -> npt.NDArray[Number]:
    low = flat.take(corner)
    high = flat.take(corner + 1)
    high -= low
    high *= share
    high += low
    return high


def _at_mach(values: npt.NDArray[np.generic], known: Array, wanted: Array) -> ComplexArray:
    """Rows of a (mach, ...) table interpolated to other Mach numbers, held at its ends."""
    plane, share = _mach_plane(known, wanted)
    beyond = np.minimum(plane + 1, known.size - 1)
    table = np.asarray(values, dtype=np.complex128)
    return table[plane] + share[:, None] * (table[beyond] - table[plane])


def _check_weights(share: Array, table_count: int) -> None:
    shape_fits = share.shape[1:] == (table_count,) and table_count > 0
    if not (shape_fits and np.all(share >= 0.0) and np.allclose(share.sum(axis=-1), 1.0)):
        message = (
            f"section weights: expected (station, {table_count}) shares of 0 or more that sum to "
            f"1, found shape {share.shape}, lowest {share.min(initial=0.0):g}; mend the blend"
        )
        raise ValueError(message)
