"""Unbalance of a rotor: what its balance grade leaves, and what unequal blades add."""

import math

import numpy as np
import numpy.typing as npt

from planner.methods.validity import Array, require_within

GRADE_RANGE_M_S = (0.0, 10.0)
MASS_RANGE_KG = (0.0, 1e6)
SPEED_RANGE_RAD_S = (1e-2, 1e5)
MOMENT_RANGE_KG_M = (0.0, 1e6)
LAG_SPREAD_RANGE_RAD = (0.0, 0.1)
FEWEST_BLADES = 2


def grade_unbalance_kg_m(
    grade_m_s: npt.ArrayLike, mass_kg: npt.ArrayLike, reference_rad_s: npt.ArrayLike
) -> Array:
    """Largest unbalance that a balance grade leaves.

    U = M G / Omega; the force is U times the square of the speed of the moment, not M G Omega

    Args:
        grade_m_s: Balance grade G; G 6.3 is 0.0063 m/s [m/s].
        mass_kg: Mass of the balanced rotor M [kg].
        reference_rad_s: Speed that the grade refers to, the rotor's highest in service [rad/s].

    Returns:
        Unbalance, mass times offset [kg m], broadcast shape.

    Raises:
        ValueError: An input outside its range.

    Validity:
        Static unbalance in one plane. A rotor left at its grade's limit; one balanced better has
        less.

    Source:
        ISO 21940-11:2016 (read second hand).

    Example:
        >>> round(1e6 * float(grade_unbalance_kg_m(0.0063, 2.0, 10_000.0 * np.pi / 30.0)), 2)
        12.03
    """
    grade = require_within("balance grade", grade_m_s, GRADE_RANGE_M_S, "m/s")
    mass = require_within("balanced mass", mass_kg, MASS_RANGE_KG, "kg")
    speed = require_within("reference speed", reference_rad_s, SPEED_RANGE_RAD_S, "rad/s")
    return np.asarray(mass * grade / speed)


def spread_factor(n_blades: int) -> float:
    """Largest sum over the blades' directions, when their values differ by one at most.

    max |sum d e^(2 pi i k / n)|, d from -1/2 to 1/2: half the blades high, half low, side by
    side. 1 / sin(pi / n) of an even number n, 1 / (2 sin(pi / 2n)) of an odd one

    Args:
        n_blades: Number of blades n, 2 or more.

    Returns:
        The factor; what all blades have in common sums to nothing.

    Raises:
        ValueError: Fewer than two blades.

    Validity:
        The worst order of the set on the hub. A set sorted by weight about the hub sums to less.

    Source:
        Definition; the sums are geometric series (computed).

    Example:
        >>> [round(spread_factor(n), 4) for n in (2, 3, 4, 5)]
        [1.0, 1.0, 1.4142, 1.618]
    """
    if n_blades < FEWEST_BLADES:
        msg = f"number of blades: expected 2 or more, found {n_blades}; correct the rotor"
        raise ValueError(msg)
    if n_blades % 2:
        return 0.5 / math.sin(0.5 * math.pi / n_blades)
    return 1.0 / math.sin(math.pi / n_blades)


def static_moment_unbalance_kg_m(spread_kg_m: npt.ArrayLike, n_blades: int) -> Array:
    """Unbalance of blades whose static moments differ, in the worst order on the hub.

    U = spread * factor

    Args:
        spread_kg_m: Greatest difference of first mass moment about the shaft between two blades
            of the set [kg m].
        n_blades: Number of blades.

    Returns:
        Unbalance along the blades [kg m].

    Raises:
        ValueError: A spread outside its range, or fewer than two blades.

    Source:
        `spread_factor`.

    Example:
        >>> round(float(static_moment_unbalance_kg_m(0.03, 4)), 4)
        0.0424
    """
    spread = require_within("static-moment spread", spread_kg_m, MOMENT_RANGE_KG_M, "kg m")
    return np.asarray(spread * spread_factor(n_blades))


def lag_angle_unbalance_kg_m(
    spread_rad: npt.ArrayLike, first_moment_kg_m: npt.ArrayLike, n_blades: int
) -> Array:
    """Unbalance of blades out of their even places, in the worst order on the hub.

    U = spread * S * factor: a blade out of place by an angle moves its mass across itself

    Args:
        spread_rad: Greatest difference of lag angle between two blades [rad].
        first_moment_kg_m: First mass moment of a blade about its lag hinge S [kg m].
        n_blades: Number of blades.

    Returns:
        Unbalance across the blades [kg m].

    Raises:
        ValueError: An input outside its range, or fewer than two blades.

    Validity:
        Lag angles up to 0.1 rad, held while the rotor turns. Blades that swing (lag resonance)
        are another matter.

    Source:
        `spread_factor`; small angle.

    Example:
        >>> round(float(lag_angle_unbalance_kg_m(0.002, 60.0, 3)), 4)
        0.12
    """
    spread = require_within("lag-angle spread", spread_rad, LAG_SPREAD_RANGE_RAD, "rad")
    moment = require_within("first moment", first_moment_kg_m, MOMENT_RANGE_KG_M, "kg m")
    return np.asarray(spread * moment * spread_factor(n_blades))


def total_unbalance_kg_m(*parts_kg_m: npt.ArrayLike) -> Array:
    """Unbalance of all parts together when their directions fall on one another.

    U = sum of the parts: nobody knows their directions, so the worst is taken

    Args:
        parts_kg_m: Residual unbalance, static moments, lag angles, each zero or above [kg m].

    Returns:
        Unbalance [kg m], broadcast shape.

    Raises:
        ValueError: A part outside its range.

    Source:
        Triangle inequality.

    Example:
        >>> round(float(total_unbalance_kg_m(0.2, 0.04, 0.12)), 2)
        0.36
    """
    total = np.zeros(())
    for part in parts_kg_m:
        total = total + require_within("unbalance", part, MOMENT_RANGE_KG_M, "kg m")
    return np.asarray(total)
