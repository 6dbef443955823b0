"""Section tables over a pseudo-angle, so that the march needs no arc tangent per station."""

from __future__ import annotations

from dataclasses import dataclass, replace
from typing import TYPE_CHECKING

import numpy as np

from planner.methods.section_lookup import station_lift_drag

if TYPE_CHECKING:
    from numpy.typing import NDArray

    from planner.methods.section_lookup import StationSections

    FloatArray = NDArray[np.float64]

CELLS = 2880
"""Cells of the pseudo-angle in a turn: a sixth of a degree about zero, a third at 45 degrees."""
UNEVEN_MACH_PLANES = 61
"""Planes of Mach number where the tables have uneven steps; even ones are kept."""


@dataclass(frozen=True, eq=False)
class PseudoTables:
    """Lift + i drag of the stations over pseudo-angle and even steps of Mach number.

    The pseudo-angle of a direction (c, s) is 1 - c / (|c| + |s|) with the sign of s, from -2 to 2;
    it grows with the angle and has the same period. The tables run over the pseudo-angle of the
    angle of attack with its sign changed.

    Attributes:
        flat: Coefficients at the cells' begins, one after another, (rows * planes * (cells + 1),).
        rise: What they change by over each cell, of the same shape.
        row_start: Start of each station's table, (stations,).
        mach_planes: Planes of Mach number.
        lowest_mach: Mach number of the first plane.
        per_mach: Planes per unit Mach number.
    """

    flat: NDArray[np.complexfloating]
    rise: NDArray[np.complexfloating]
    row_start: NDArray[np.int64]
    mach_planes: int
    lowest_mach: float
    per_mach: float


def pseudo_tables(
    sections: StationSections, dtype: type[np.floating] = np.float64
) -> PseudoTables:
    """Resample section tables.

    Args:
        sections: Tables of the stations.
        dtype: Precision of the march: float64, or float32 for screening.

    Returns:
        The tables, held at their ends beyond the highest Mach number.

    Validity:
        Between the corners of the original tables (half a degree apart) values agree to 0.2 % of
        the highest lift.
    """
    pseudo = np.linspace(-2.0, 2.0, CELLS + 1)
    angle = -_angle(pseudo)
    mach = _even_mach(sections.mach)
    planes = mach.size
    rows = np.unique(sections.row)
    place = np.searchsorted(rows, sections.row)
    each = replace(sections, row=rows)
    points = np.zeros((planes, CELLS + 1, rows.size))
    found = station_lift_drag(each, points + angle[:, None], mach[:, None, None])
    flat = np.moveaxis(found, -1, 0).ravel()
    kind = np.complex64 if dtype is np.float32 else np.complex128
    return PseudoTables(
        flat=flat.astype(kind),
        rise=np.append(np.diff(flat), 0.0).astype(kind),
        row_start=(place * planes * (CELLS + 1)).astype(np.int64),
        mach_planes=planes,
        lowest_mach=float(mach[0]),
        per_mach=(planes - 1) / max(float(mach[-1] - mach[0]), 1e-9),
    )


def _even_mach(mach: FloatArray) -> FloatArray:
    """Mach numbers of the planes, in even steps."""
    if mach.size == 1:
        return mach
    even = np.linspace(mach[0], mach[-1], mach.size)
    if np.allclose(mach, even, rtol=0.0, atol=1e-9):
        return even
    return np.linspace(mach[0], mach[-1], UNEVEN_MACH_PLANES)


def _angle(pseudo: FloatArray) -> FloatArray:
    """Angle of a pseudo-angle, -pi to pi."""
    within = 1.0 - np.abs(np.abs(pseudo) - 1.0)
    sine = np.sign(pseudo) * within
    cosine = np.where(np.abs(pseudo) <= 1.0, 1.0 - within, within - 1.0)
    return np.arctan2(sine, cosine)
