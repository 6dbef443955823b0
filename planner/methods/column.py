"""Bending modes of a column with a mass on top, and a mode of the stand with more mass on it."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

from planner.methods.beam import BladeBeam, Root, flap_matrices
from planner.methods.beam_modes import modes as beam_modes
from planner.methods.validity import require_within

if TYPE_CHECKING:
    from numpy.typing import ArrayLike, NDArray

    FloatArray = NDArray[np.float64]

HEIGHT_RANGE_M = (0.05, 200.0)
STIFFNESS_RANGE_N_M2 = (1.0, 1e13)
COLUMN_MASS_RANGE_KG = (1e-3, 1e7)
TOP_MASS_RANGE_KG = (0.0, 1e7)
MODAL_MASS_RANGE_KG = (1e-3, 1e9)
FREQUENCY_RANGE_RAD_S = (1e-2, 1e4)
ELEMENTS = 20
MOST_MODES = 6
LARGEST_WEIGHT_SHARE = 0.05
"""Of the bending stiffness at the top: what the weight on the column may take of it."""
GRAVITY_M_S2 = 9.80665


@dataclass(frozen=True, eq=False)
class ColumnModes:
    """Bending modes in one direction, lowest first.

    Attributes:
        frequency_rad_s: Natural frequencies [rad/s], shape (modes,).
        modal_mass_kg: Mass that moves with the top: the modal mass of the shape scaled to one
            there [kg], shape (modes,).
    """

    frequency_rad_s: FloatArray
    modal_mass_kg: FloatArray


def column_modes(
    height_m: float,
    bending_stiffness_N_m2: float,
    mass_kg: float,
    top_mass_kg: float,
    modes: int = 2,
) -> ColumnModes:
    """Natural frequencies of a uniform column, built in at its foot, with a mass at its top.

    (EI w'')'' + (m / h) w'' (in time) = 0, with the top mass as a point mass at h

    Args:
        height_m: From the foot to the top, h [m].
        bending_stiffness_N_m2: EI [N m²].
        mass_kg: Mass of the column alone, m [kg].
        top_mass_kg: All that sits at the top and moves with it, M [kg].
        modes: Lowest modes wanted, 1 to 6 [-].

    Returns:
        Frequencies and modal masses at the top, lowest first. The modes of one chain of bending
        never cross; here they do not depend on rotor speed at all.

    Raises:
        ValueError: An input outside its range, or a load whose weight takes more than 5 % of the
            column's stiffness.

    Validity:
        Slender column on a rigid foundation; the top mass is a point, without tilting inertia
        (which lowers the second mode most). Weight is left out: it takes the share
        g h² (1.2 M + 0.375 m) / (3 EI) of the stiffness and lowers the first frequency by half
        of it, 2.5 % at most.

    Source:
        The blade's beam elements at rest; the weight's share by the shape of a tip load
        (computed).

    Example:
        >>> found = column_modes(4.0, 8.0e7, 900.0, 1500.0)
        >>> round(float(found.frequency_rad_s[0]), 2)
        46.79
    """
    h = float(require_within("column height", height_m, HEIGHT_RANGE_M, "m"))
    EI = require_within("column stiffness", bending_stiffness_N_m2, STIFFNESS_RANGE_N_M2, "N m²")
    m = float(require_within("column mass", mass_kg, COLUMN_MASS_RANGE_KG, "kg"))
    M = float(require_within("mass at the top", top_mass_kg, TOP_MASS_RANGE_KG, "kg"))
    require_within("number of column modes", modes, (1.0, float(MOST_MODES)), "")
    _require_stiff(GRAVITY_M_S2 * h**2 * (1.2 * M + 0.375 * m) / (3.0 * float(EI)))
    one, top = np.ones(2), np.array([h])
    bending = float(EI) * one
    beam = BladeBeam(
        np.array([0.0, h]), m / h * one, bending, bending, bending, one, top, np.array([M])
    )
    found = beam_modes(flap_matrices(beam, Root(0.0), ELEMENTS), 0.0, modes)
    return ColumnModes(found.frequency_rad_s, found.modal_mass / found.shape[:, -1] ** 2)


def with_added_mass(
    frequency_rad_s: ArrayLike, modal_mass_kg: ArrayLike, added_mass_kg: ArrayLike
) -> FloatArray:
    """Frequency of a mode after mass was added where its modal mass is counted.

    w' = w sqrt(M / (M + m)), at unchanged stiffness

    A mode of the stand found without the rotor is brought to the stand with the rotor so.

    Args:
        frequency_rad_s: Natural frequency as it was found, w [rad/s].
        modal_mass_kg: Mass that moves with the hub as it was found, M [kg].
        added_mass_kg: Mass at the hub that was missing, m [kg].

    Returns:
        Frequency with the mass on [rad/s], broadcast shape.

    Raises:
        ValueError: An input outside its range.

    Validity:
        The shape does not change with the mass. The true frequency is never above the estimate.
        First mode of a bare uniform column: 0.4 % high with its modal mass added, 1.3 % with ten
        times that; of one that carries half its own mass already, 0.04 % and 0.13 % (computed).

    Source:
        Rayleigh's quotient with the shape kept.

    Example:
        >>> round(float(with_added_mass(20.0, 900.0, 300.0)), 3)
        17.321
    """
    w = require_within("frequency", frequency_rad_s, FREQUENCY_RANGE_RAD_S, "rad/s")
    M = require_within("modal mass", modal_mass_kg, MODAL_MASS_RANGE_KG, "kg")
    m = require_within("added mass", added_mass_kg, TOP_MASS_RANGE_KG, "kg")
    return np.asarray(w * np.sqrt(M / (M + m)))


def _require_stiff(share: float) -> None:
    """Refuse a column that the weight on it nearly buckles."""
    if share > LARGEST_WEIGHT_SHARE:
        msg = (
            f"column: expected a weight that takes up to {100.0 * LARGEST_WEIGHT_SHARE:g} % of "
            f"its stiffness, found {100.0 * share:.3g} %; check height, stiffness and masses, or "
            "give the mode as measured"
        )
        raise ValueError(msg)
