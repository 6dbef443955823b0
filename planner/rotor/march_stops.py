"""Flap stops of marched units: where they stand, and how they press over a sub-step."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING, Any

import numpy as np

from planner.methods.stop_contact import stop_moment_after_step_n_m

if TYPE_CHECKING:
    from numpy.typing import NDArray

    from planner.model.rotor import Rotor, Stop
    from planner.rotor.flap_unit import FlapUnit

    Array = NDArray[np.floating[Any]]
    FloatArray = NDArray[np.float64]
    BoolArray = NDArray[np.bool_]

FAR_RAD = 1e3
"""Where a stop stands that is not there."""


@dataclass(frozen=True, eq=False)
class StopLaws:
    """Stops of one unit; a teetering pair's stand on both sides of its hinge alike.

    Attributes:
        low_rad: Lower stop against the hinge rotation without built-in flap.
        retracted_rad: The same when retracted.
        high_rad: Upper stop.
        low: Stiffness [N m/rad] and damping [s/rad] of the lower stop.
        high: The same of the upper stop.
        release_rad_s: Speed at and above which the lower stop is retracted, running up.
        reseat_rad_s: Speed at and below which it is back, running down.
        high_is_droop: Both stops are droop stops, one of each blade of a pair.
        exist: The hub has stops.
    """

    low_rad: float
    retracted_rad: float
    high_rad: float
    low: tuple[float, float]
    high: tuple[float, float]
    release_rad_s: float
    reseat_rad_s: float
    high_is_droop: bool
    exist: bool


def stop_laws(rotor: Rotor, unit: FlapUnit) -> StopLaws:
    """Stops of a rotor's units.

    Damping grows with penetration; it reaches the stated value where the stop carries its rated
    moment, so that d = damping / rating.

    Args:
        rotor: The article under test.
        unit: Its flapping unit.

    Returns:
        The stops; a missing one stands out of reach.

    Raises:
        ValueError: A stop without stiffness.
    """
    droop, up = rotor.droop_stop, rotor.up_stop
    if not unit.is_hinged or (droop is None and up is None):
        return no_stops()
    fixed = unit.fixed_flap_rad
    low = gone = -FAR_RAD if droop is None else droop.angle_rad - fixed
    high = FAR_RAD if up is None else up.angle_rad - fixed
    release, reseat = np.inf, 0.0
    if droop is not None and droop.retraction is not None:
        gone = droop.retraction.retracted_angle_rad - fixed
        release, reseat = droop.retraction.release_rad_s, droop.retraction.reseat_rad_s
    lower, upper = _law("droop stop", droop or up), _law("up stop", up or droop)
    paired = unit.n_blades > 1
    if paired:
        low, gone = max(low, -high), max(gone, -high)
        high, upper = -low, lower
    return StopLaws(
        low, gone, high, lower, upper, release, reseat, high_is_droop=paired, exist=True
    )


def no_stops() -> StopLaws:
    """The laws of a hinge that turns freely."""
    nothing = (1.0, 0.0)
    return StopLaws(
        -FAR_RAD,
        -FAR_RAD,
        FAR_RAD,
        nothing,
        nothing,
        np.inf,
        0.0,
        high_is_droop=False,
        exist=False,
    )


def _law(name: str, stop: Stop | None) -> tuple[float, float]:
    if stop is None:
        return 1.0, 0.0
    if not stop.stiffness_N_m_rad > 0.0 or not stop.moment_rating_N_m > 0.0:
        msg = (
            f"{name}: expected a stiffness and a rated moment above 0, found "
            f"{stop.stiffness_N_m_rad:g} N m/rad and {stop.moment_rating_N_m:g} N m; state both"
        )
        raise ValueError(msg)
    return stop.stiffness_N_m_rad, stop.damping_N_m_s_rad / stop.moment_rating_N_m


class MarchStops:
    """Place of the stops of each unit of a block.

    The moving stop is out of force at once when its release speed is reached. Running down it
    comes back at its re-seat speed, blade by blade, and never pushes one: under a blade that then
    lies below the stop's place it stays back until that blade has risen past it.
    """

    def __init__(self, laws: StopLaws, shape: tuple[int, int], dtype: type[Any]) -> None:
        """All stops in their static place."""
        self.laws = laws
        self._dtype = dtype
        self._moves = bool(np.isfinite(laws.release_rad_s))
        self._set(np.zeros(shape, dtype=bool))

    def take(self, where: NDArray[Any]) -> MarchStops:
        """The same for some of the cases."""
        part = MarchStops(self.laws, (0, 0), self._dtype)
        part._set(self.is_retracted[where])
        return part

    def _set(self, is_retracted: BoolArray) -> None:
        """Put every stop in its place."""
        laws, dtype = self.laws, self._dtype
        self.is_retracted = is_retracted
        low = np.where(is_retracted, laws.retracted_rad, laws.low_rad).astype(dtype)
        high = -low if laws.high_is_droop else np.full_like(low, laws.high_rad)
        self.places = (low, high)
        """Lower and upper stop of each unit, (cases, units)."""

    def move(self, speed_rad_s: FloatArray, rotation_rad: Array, seats: BoolArray) -> None:
        """Retract or re-seat stops at this speed, where the blades allow it."""
        if not self._moves:
            return
        laws = self.laws
        slow = (speed_rad_s <= laws.reseat_rad_s) & seats
        above = rotation_rad >= laws.low_rad
        if laws.high_is_droop:
            above &= rotation_rad <= -laws.low_rad
        now = self.is_retracted | (speed_rad_s >= laws.release_rad_s)[:, None]
        now &= ~(slow[:, None] & above)
        if np.any(now != self.is_retracted):
            self._set(now)

    def moment(
        self,
        rotation: tuple[Array, Array],
        places: tuple[Array, Array],
        yields: tuple[Array, Array],
    ) -> Array:
        """Moment at the end of a part of a step: of the lower stop above 0, of the upper below.

        Args:
            rotation: Rotation at the hinge without that moment, and its rate, (cases, units).
            places: Lower and upper stop.
            yields: Rotation and rate at the hinge for a unit of that moment, broadcast.

        Returns:
            Signed moment, (cases, units) [N m].
        """
        below, above = places[0] - rotation[0], rotation[0] - places[1]
        if not np.count_nonzero(above > 0.0):
            if not np.count_nonzero(below > 0.0):
                return np.zeros_like(below)
            law = self._law(np.asarray(True))  # noqa: FBT003 - a mask
            return stop_moment_after_step_n_m(below, -rotation[1], law, yields)
        depth = np.maximum(below, above)
        is_low = below >= above
        sign = np.where(is_low, self._dtype(1.0), self._dtype(-1.0))
        law = self._law(is_low)
        moment = stop_moment_after_step_n_m(depth, -sign * rotation[1], law, yields)
        moment *= sign
        return moment

    def _law(self, is_low: BoolArray) -> tuple[Array, Array]:
        """Stiffness and damping of the stop in question."""
        low, high, dtype = self.laws.low, self.laws.high, self._dtype
        if low == high:
            return np.asarray(low[0], dtype), np.asarray(low[1], dtype)
        return (
            np.where(is_low, dtype(low[0]), dtype(high[0])),
            np.where(is_low, dtype(low[1]), dtype(high[1])),
        )
