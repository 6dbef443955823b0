"""Mass properties of one blade about its flap hinge."""

from __future__ import annotations

from dataclasses import dataclass, field
from typing import TYPE_CHECKING

import numpy as np

if TYPE_CHECKING:
    from numpy.typing import ArrayLike, NDArray

    FloatArray = NDArray[np.float64]

_GAUSS_POINT = 1.0 / np.sqrt(3.0)
_FEWEST_STATIONS = 2


def _no_points() -> FloatArray:
    return np.zeros(0)


@dataclass(frozen=True, eq=False)
class MassDistribution:
    """Mass of one blade along its radius.

    The mass per length is linear between stations; a jump is written as two close stations.

    Attributes:
        radius_m: Station radii from the rotor centre, strictly increasing [m], shape (n,).
        mass_kg_m: Mass per length at the stations [kg/m], shape (n,).
        point_radius_m: Radii of the point masses [m], shape (p,).
        point_mass_kg: Point masses [kg], shape (p,).

    Raises:
        ValueError: A radius does not increase, a mass is negative, or shapes do not match.
    """

    radius_m: FloatArray
    mass_kg_m: FloatArray
    point_radius_m: FloatArray = field(default_factory=_no_points)
    point_mass_kg: FloatArray = field(default_factory=_no_points)

    def __post_init__(self) -> None:
        """Refuse a table that cannot be a blade."""
        require_stations(self.radius_m)
        require_values("mass per length [kg/m]", self.mass_kg_m, self.radius_m, lowest=0.0)
        require_point_masses(self)


@dataclass(frozen=True, eq=False)
class HingedInertia:
    """Mass properties of the blade outboard of a hinge, one entry per hinge radius asked for.

    Attributes:
        mass_kg: Mass outboard of the hinge [kg].
        first_moment_kg_m: First moment about the hinge, S = ∫ m (r-e) dr [kg m].
        second_moment_kg_m2: Moment of inertia about the hinge, I = ∫ m (r-e)² dr [kg m²].
        centrifugal_factor_kg_m: ∫ m r dr; times Ω² it is the centrifugal force [kg m].
    """

    mass_kg: FloatArray
    first_moment_kg_m: FloatArray
    second_moment_kg_m2: FloatArray
    centrifugal_factor_kg_m: FloatArray


def require_stations(radius_m: FloatArray) -> None:
    """Refuse station radii that do not increase from the rotor centre outwards.

    Args:
        radius_m: Station radii [m], shape (n,).

    Raises:
        ValueError: Fewer than two stations, not finite, negative, or not strictly increasing.
    """
    if radius_m.ndim != 1 or radius_m.size < _FEWEST_STATIONS:
        msg = (
            f"station radii: expected a row of at least two, found shape {radius_m.shape}; "
            "give the root and the tip"
        )
        raise ValueError(msg)
    if not np.all(np.isfinite(radius_m)) or radius_m[0] < 0.0:
        msg = (
            f"station radii: expected finite values from 0 m up, found {radius_m}; "
            "measure the radius from the rotor centre"
        )
        raise ValueError(msg)
    steps = np.diff(radius_m)
    if np.any(steps <= 0.0):
        i = int(np.argmax(steps <= 0.0))
        msg = (
            f"station radii: expected strictly increasing values, found {radius_m[i]:g} m "
            f"followed by {radius_m[i + 1]:g} m; sort the stations, and write a jump as two close "
            "stations"
        )
        raise ValueError(msg)


def require_values(
    name: str,
    values: FloatArray,
    radius_m: FloatArray,
    *,
    lowest: float,
    lowest_allowed: bool = True,
) -> None:
    """Refuse a station column that has the wrong length or a value that is too low.

    Args:
        name: What the column holds, with its unit, for the message.
        values: The column, shape (n,).
        radius_m: Station radii [m], shape (n,).
        lowest: The bound below, in the unit of the column.
        lowest_allowed: The bound itself is a legal value.

    Raises:
        ValueError: The shape differs, or a value is not finite or is too low.
    """
    if values.shape != radius_m.shape:
        msg = (
            f"{name}: expected one value per station, shape {radius_m.shape}, "
            f"found {values.shape}; give every station a value"
        )
        raise ValueError(msg)
    good = np.isfinite(values) & ((values > lowest) | (lowest_allowed & (values == lowest)))
    if not np.all(good):
        i = int(np.argmin(good))
        bound = "at least" if lowest_allowed else "more than"
        msg = (
            f"{name}: expected a finite value of {bound} {lowest:g}, found {values[i]:g} "
            f"at radius {radius_m[i]:g} m; correct that station"
        )
        raise ValueError(msg)


def require_point_masses(distribution: MassDistribution) -> None:
    """Refuse point masses that are negative or lie outside the station table.

    Args:
        distribution: The blade, radii [m] and masses [kg].

    Raises:
        ValueError: Shapes differ, a mass is negative or not finite, or it lies off the blade.
    """
    where, mass = distribution.point_radius_m, distribution.point_mass_kg
    if where.ndim != 1 or where.shape != mass.shape:
        msg = (
            f"point masses: expected as many radii as masses, found shapes {where.shape} and "
            f"{mass.shape}; give each point mass one radius"
        )
        raise ValueError(msg)
    if not np.all(np.isfinite(mass) & (mass >= 0.0)):
        msg = f"point masses: expected finite values from 0 kg up, found {mass}; correct the mass"
        raise ValueError(msg)
    tip = distribution.radius_m[-1]
    if not np.all((where >= 0.0) & (where <= tip)):
        msg = (
            f"point masses: expected radii between 0 m and the last station at {tip:g} m, found "
            f"{where}; move the mass or extend the station table"
        )
        raise ValueError(msg)


def resample(radius_m: FloatArray, values: FloatArray, at_radius_m: ArrayLike) -> FloatArray:
    """Properties between stations, linear from station to station.

    Args:
        radius_m: Station radii, strictly increasing [m], shape (n,).
        values: Properties at the stations, any unit, shape (..., n).
        at_radius_m: Radii asked for [m], shape (k,).

    Returns:
        The properties at the radii asked for, unit of ``values``, shape (..., k).

    Raises:
        ValueError: The stations are unusable, the values do not match them, or a radius lies
            outside the table.

    Validity:
        Between the first and the last station; nothing is extrapolated.

    Source:
        Linear interpolation.

    Example:
        >>> resample(np.array([0.0, 2.0]), np.array([4.0, 8.0]), [0.5, 2.0])
        array([5., 8.])
    """
    require_stations(radius_m)
    if values.ndim == 0 or values.shape[-1] != radius_m.size:
        msg = (
            f"values: expected {radius_m.size} along the last axis, one per station, found shape "
            f"{values.shape}; give every station a value"
        )
        raise ValueError(msg)
    at = np.asarray(at_radius_m, dtype=np.float64)
    if not np.all((at >= radius_m[0]) & (at <= radius_m[-1])):
        msg = (
            f"radius asked for: expected between {radius_m[0]:g} m and {radius_m[-1]:g} m, found "
            f"{at}; extend the station table"
        )
        raise ValueError(msg)
    cell = np.clip(np.searchsorted(radius_m, at, side="right") - 1, 0, radius_m.size - 2)
    share = (at - radius_m[cell]) / (radius_m[cell + 1] - radius_m[cell])
    result: FloatArray = values[..., cell] * (1.0 - share) + values[..., cell + 1] * share
    return result


def _moments_between(
    distribution: MassDistribution, cell: NDArray[np.intp], inner_m: FloatArray
) -> FloatArray:
    """∫ m r^j dr, j = 0, 1, 2, from a radius inside a cell to its outer end, shape (3, ...).

    Two Gauss points integrate the cubic m r² exactly.
    """
    r, m = distribution.radius_m, distribution.mass_kg_m
    outer = r[cell + 1]
    half = 0.5 * (outer - inner_m)
    slope = (m[cell + 1] - m[cell]) / (outer - r[cell])
    total: FloatArray = np.zeros((3, *np.shape(inner_m)))
    for offset in (-_GAUSS_POINT, _GAUSS_POINT):
        s = inner_m + half * (1.0 + offset)
        element = half * (m[cell] + slope * (s - r[cell]))
        total += np.stack([element, element * s, element * s * s])
    return total


def _moments_outboard(distribution: MassDistribution, radius_m: FloatArray) -> FloatArray:
    """∫ m r^j dr, j = 0, 1, 2, outboard of each radius, point masses included, (3, ...)."""
    r = distribution.radius_m
    whole = _moments_between(distribution, np.arange(r.size - 1), r[:-1])
    outboard = np.zeros((3, r.size))
    outboard[:, :-1] = np.cumsum(whole[:, ::-1], axis=1)[:, ::-1]
    inner = np.maximum(radius_m, r[0])
    cell = np.clip(np.searchsorted(r, inner, side="right") - 1, 0, r.size - 2)
    total = outboard[:, cell + 1] + _moments_between(distribution, cell, inner)
    for where, mass in zip(distribution.point_radius_m, distribution.point_mass_kg, strict=True):
        carried = np.where(where > radius_m, mass, 0.0)
        total += np.stack([carried, carried * where, carried * where**2])
    return total


def blade_inertia(distribution: MassDistribution, hinge_radius_m: ArrayLike) -> HingedInertia:
    """Mass, first and second moment about a hinge, and the centrifugal force factor.

    S = ∫ m (r-e) dr, I = ∫ m (r-e)² dr, ∫ m r dr, all from the hinge radius e to the tip, plus
    the point masses outboard of e. Mass inboard of the hinge, or on it, does not flap.

    Args:
        distribution: Mass of the blade along its radius [m], [kg/m], [kg].
        hinge_radius_m: Hinge radius or radii e [m], any shape.

    Returns:
        The four integrals, each of the shape of ``hinge_radius_m`` [kg, kg m, kg m², kg m].

    Raises:
        ValueError: A hinge lies inboard of the rotor centre or not inboard of the tip, or
            nothing heavy lies outboard of it.

    Validity:
        Exact for mass per length linear between stations. Where the table starts outboard of
        the hinge, the part between carries no mass.

    Source:
        Definitions; classical result, from memory.

    Example:
        >>> uniform = MassDistribution(np.array([0.0, 6.0]), np.array([5.0, 5.0]))
        >>> float(blade_inertia(uniform, 0.0).second_moment_kg_m2)  # m R³/3
        360.0
    """
    e = np.asarray(hinge_radius_m, dtype=np.float64)
    tip = distribution.radius_m[-1]
    if not np.all((e >= 0.0) & (e < tip)):
        msg = (
            f"hinge radius: expected from 0 m to less than the tip radius {tip:g} m, found {e}; "
            "measure the hinge from the rotor centre"
        )
        raise ValueError(msg)
    mass, about_centre, square = _moments_outboard(distribution, e)
    if not np.all(mass > 0.0):
        msg = f"blade mass: expected more than 0 kg outboard of {e} m, found 0 kg; enter the mass"
        raise ValueError(msg)
    return HingedInertia(
        mass_kg=mass,
        first_moment_kg_m=about_centre - e * mass,
        second_moment_kg_m2=square - 2.0 * e * about_centre + e * e * mass,
        centrifugal_factor_kg_m=about_centre,
    )


def outboard_centrifugal_factor(distribution: MassDistribution, radius_m: ArrayLike) -> FloatArray:
    """∫ m s ds from each radius to the tip, point masses outboard of it included.

    Times Ω² it is the blade tension at that radius.

    Args:
        distribution: Mass of the blade along its radius [m], [kg/m], [kg].
        radius_m: Radii [m], any shape; zero is returned at the tip.

    Returns:
        The factor [kg m], shape of ``radius_m``.

    Validity:
        Exact for mass per length linear between stations; straight blade in the disc plane.

    Source:
        Definition; classical result, from memory.
    """
    result: FloatArray = _moments_outboard(distribution, np.asarray(radius_m, dtype=np.float64))[1]
    return result


def lock_number(
    air_density_kg_m3: ArrayLike,
    lift_slope_per_rad: ArrayLike,
    chord_m: ArrayLike,
    radius_m: ArrayLike,
    flap_inertia_kg_m2: ArrayLike,
) -> FloatArray:
    """Lock number γ = ρ a c R⁴ / I, the ratio of air loads to inertia in flapping.

    Args:
        air_density_kg_m3: Air density ρ [kg/m³].
        lift_slope_per_rad: Lift curve slope a [1/rad].
        chord_m: Reference chord c, commonly that at 75 % radius [m].
        radius_m: Rotor radius R [m].
        flap_inertia_kg_m2: Moment of inertia of one blade about its flap hinge I [kg m²].

    Returns:
        Lock number γ [-], broadcast shape of the arguments.

    Raises:
        ValueError: The flap inertia is not positive.

    Validity:
        A measure for blades of near-constant chord; for strong taper the air load moments must
        be integrated instead.

    Source:
        J. G. Leishman, Principles of Helicopter Aerodynamics, 2006, blade motion; from memory.

    Example:
        >>> float(lock_number(1.225, 5.73, 0.4, 6.0, 400.0))
        9.0970
    """
    inertia = np.asarray(flap_inertia_kg_m2, dtype=np.float64)
    if not np.all(inertia > 0.0):
        msg = f"flap inertia: expected more than 0 kg m², found {inertia}; enter the blade mass"
        raise ValueError(msg)
    above = (
        np.asarray(air_density_kg_m3, dtype=np.float64)
        * np.asarray(lift_slope_per_rad, dtype=np.float64)
        * np.asarray(chord_m, dtype=np.float64)
        * np.asarray(radius_m, dtype=np.float64) ** 4
    )
    result: FloatArray = above / inertia
    return result
