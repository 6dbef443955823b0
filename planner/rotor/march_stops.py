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
    if not unit.is_hinged or droop is None:
        nothing = (1.0, 0.0)
        return StopLaws(
            -FAR_RAD,
            -FAR_RAD,
            FAR_RAD,
            nothing,
            nothing,
            np.inf,
            0.0,
            False,
            False,  # noqa: FBT003
        )
    fixed = unit.fixed_flap_rad
    low, gone = droop.angle_rad - fixed, droop.angle_rad - fixed
    release, reseat = np.inf, 0.0
    if droop.retraction is not None:
        gone = droop.retraction.retracted_angle_rad - fixed
        release, reseat = droop.retraction.release_rad_s, droop.retraction.reseat_rad_s
    high = FAR_RAD if up is None else up.angle_rad - fixed
    lower, upper = _law("droop stop", droop), _law("up stop", up or droop)
    if unit.n_blades > 1:
        low, gone = max(low, -high), max(gone, -high)
        return StopLaws(low, gone, -low, lower, lower, release, reseat, True, True)  # noqa: FBT003
    return StopLaws(low, gone, high, lower, upper, release, reseat, False, True)  # noqa: FBT003


def _law(name: str, stop: Stop) -> tuple[float, float]:
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
        self.is_retracted = np.zeros(shape, dtype=bool)

    def take(self, where: NDArray[Any]) -> MarchStops:
        """The same for some of the cases."""
        part = MarchStops(self.laws, (0, 0), self._dtype)
        part.is_retracted = self.is_retracted[where]
        return part

    @property
    def moves(self) -> bool:
        """The lower stop retracts."""
        return bool(np.isfinite(self.laws.release_rad_s))

    def move(self, speed_rad_s: Array, rotation_rad: Array, seats: BoolArray) -> None:
        """Retract or re-seat stops at this speed, where the blades allow it."""
        if not self.moves:
            return
        self.is_retracted |= (speed_rad_s >= self.laws.release_rad_s)[:, None]
        slow = (speed_rad_s <= self.laws.reseat_rad_s) & seats
        above = rotation_rad >= self.laws.low_rad
        if self.laws.high_is_droop:
            above &= rotation_rad <= -self.laws.low_rad
        self.is_retracted &= ~(slow[:, None] & above)

    def places(self) -> tuple[Array, Array]:
        """Lower and upper stop of each unit, (cases, units)."""
        laws, dtype = self.laws, self._dtype
        low = np.where(self.is_retracted, laws.retracted_rad, laws.low_rad).astype(dtype)
        if laws.high_is_droop:
            return low, -low
        return low, np.full_like(low, laws.high_rad)

    def moment(
        self,
        rotation: tuple[Array, Array],
        places: tuple[Array, Array],
        yields: tuple[Array, Array],
    ) -> Array:
        """Moment at the end of a sub-step: of the lower stop positive, of the upper negative.

        Args:
            rotation: Rotation at the hinge without that moment, and its rate, (cases, units).
            places: Lower and upper stop.
            yields: Rotation and rate at the hinge for a unit of that moment, broadcast.

        Returns:
            Signed moment, (cases, units) [N m].
        """
        below, above = places[0] - rotation[0], rotation[0] - places[1]
        is_low = below >= above
        sign = np.where(is_low, self._dtype(1.0), self._dtype(-1.0))
        low, high = self.laws.low, self.laws.high
        if low == high:
            law = (self._dtype(low[0]), self._dtype(low[1]))
        else:
            law = (
                np.where(is_low, self._dtype(low[0]), self._dtype(high[0])),
                np.where(is_low, self._dtype(low[1]), self._dtype(high[1])),
            )
        depth = np.maximum(below, above)
        moment = stop_moment_after_step_n_m(depth, -sign * rotation[1], law, yields)
        return np.asarray(sign * moment)
