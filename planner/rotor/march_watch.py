"""Watching marched blades: moments, thrust, tips and lag go into the running extremes."""

from __future__ import annotations

from typing import TYPE_CHECKING, Any

import numpy as np

from planner.rotor.march_track import AZIMUTH_BINS, Extremes
from planner.rotor.march_view import inertial_rows

if TYPE_CHECKING:
    from numpy.typing import NDArray

    from planner.rotor.march_loads import Instant, UnitLoads
    from planner.rotor.march_model import MarchModel

    Array = NDArray[np.floating[Any]]
    FloatArray = NDArray[np.float64]
    BoolArray = NDArray[np.bool_]
    IndexArray = NDArray[np.int64]


class Watch:
    """What is read off an instant of a block; nothing counts before a history begins."""

    def __init__(self, model: MarchModel) -> None:
        """Constants of the rotor."""
        self._model = model
        unit, dtype = model.unit, model.settings.dtype
        self._blades = model.units * unit.n_blades
        self._all = self._blades == model.arrays.n_blades
        self._tip_arm = model.arrays.radius_m - model.arrays.hub.hinge_m
        inertial = inertial_rows(unit)
        self._inertial = np.ascontiguousarray(inertial.T).astype(dtype)
        numeric = model.table.numeric[:, :, None] * inertial.T
        self._numeric = numeric.astype(dtype) if np.any(numeric) else None
        self._by_stop = (inertial @ unit.hinge).astype(dtype)
        self._signs = unit.rigid[:, 0].astype(dtype)
        self._root_spin = np.ascontiguousarray(unit.root_spin.T).astype(dtype)
        self._cells = np.arange(self._blades) * AZIMUTH_BINS
        self._per_part = AZIMUTH_BINS / (2.0 * np.pi)
        self._offsets = model.blade_offsets_rad * self._per_part

    def loads(
        self, extremes: Extremes, now: Instant, loads: UnitLoads, held: tuple[Array, BoolArray]
    ) -> None:
        """Take root and hub moments and thrust.

        Args:
            extremes: To be widened.
            now: The instant.
            loads: Loads then.
            held: Signed stop moments, (cases, units), and which cases count, (cases,).
        """
        moment, counts = held
        inertial = self._inertial_sums(now, loads, moment)
        root = self._root(now, loads, moment, inertial)
        seen = np.abs(root)
        seen[~counts] = 0.0
        np.maximum(extremes.root_N_m, seen, out=extremes.root_N_m)
        if not self._all:
            return
        thrust = np.add.reduce(loads.vertical_N, axis=1)
        top, least = extremes.thrust_N, extremes.least_thrust_N
        np.maximum(top, thrust, out=top, where=counts)
        np.minimum(least, thrust, out=least, where=counts)
        hub = self._hub(loads, root, inertial)
        np.maximum(extremes.hub_N_m, hub, out=extremes.hub_N_m, where=counts)

    def _inertial_sums(self, now: Instant, loads: UnitLoads, moment: Array) -> Array:
        """Force, and moment at the root, that speed up each blade, (cases, units, sums)."""
        speed2 = now.speed_rad_s * now.speed_rad_s
        force: Array = np.matmul(loads.on_freedoms, self._inertial)
        force += moment[:, :, None] * self._by_stop
        force -= now.view["held"]
        force -= speed2[:, None, None] * now.view["held_by_spin"]
        if self._numeric is not None:
            rate = now.x[..., self._model.unit.n_freedoms :]
            force -= np.matmul(rate, self._numeric.take(now.node, axis=0))
        return force

    def _root(self, now: Instant, loads: UnitLoads, moment: Array, inertial: Array) -> Array:
        """Moment that each blade leaves on hinge or root, upward, (cases, blades)."""
        unit, hub = self._model.unit, self._model.arrays.hub
        if not unit.is_hinged:
            return self._built_in_root(now, loads, inertial)
        nb = unit.n_blades
        root: Array = moment * (-1.0 / nb)
        if hub.spring_N_m_rad or hub.damper_N_m_s_rad:
            relaxed = hub.spring_neutral_rad - unit.fixed_flap_rad if nb == 1 else 0.0
            root += hub.spring_N_m_rad * (now.view["rotation"][..., 0] - relaxed)
            root += hub.damper_N_m_s_rad * now.view["rotation_rate"][..., 0]
        if nb == 1:
            return root
        of_blades: Array = (root[:, :, None] * self._signs).reshape(loads.flap_rad.shape)
        return of_blades

    def _built_in_root(self, now: Instant, loads: UnitLoads, inertial: Array) -> Array:
        """The same of blades that are built in: what air, weight and inertia bring there."""
        model, unit = self._model, self._model.unit
        shape = loads.flap_rad.shape
        spin = np.matmul(now.x[..., : unit.n_freedoms], self._root_spin).reshape(shape)
        spin += model.root_centrifugal_kg_m2 * unit.fixed_flap_rad
        spin *= (now.speed_rad_s * now.speed_rad_s)[:, None]
        root: Array = loads.root_air_N_m - inertial[..., unit.n_blades :].reshape(shape)
        root += model.root_weight_kg_m * model.gravity_m_s2[2]
        root -= spin
        return root

    def _hub(self, loads: UnitLoads, root: Array, inertial: Array) -> Array:
        """Size of the moment of all blades at the rotor centre, (cases,)."""
        unit, arrays = self._model.unit, self._model.arrays
        lifted = inertial[..., : unit.n_blades].reshape(root.shape)
        shear = loads.vertical_N - lifted
        shear += arrays.blade_mass_kg * self._model.gravity_m_s2[2]
        moment = root + unit.root_m * shear
        x = np.add.reduce(moment * loads.cosine, axis=1)
        y = np.add.reduce(moment * loads.sine, axis=1)
        size: Array = np.hypot(x, y)
        return size

    def flap(
        self,
        extremes: Extremes,
        reached: tuple[Array, Array],
        counts: BoolArray,
        time_s: FloatArray,
    ) -> None:
        """Take lowest and highest of what counts as flap, without its built-in part."""
        fixed = self._model.unit.fixed_flap_rad
        low, top = reached[0] + fixed, reached[1] + fixed
        if self._model.unit.n_blades > 1:
            top, low = np.maximum(top, 2.0 * fixed - low), np.minimum(low, 2.0 * fixed - top)
        highest, lowest = extremes.highest_flap_rad, extremes.lowest_flap_rad
        counting = counts[:, None]
        rises = top > highest
        rises &= counting
        if np.count_nonzero(rises):
            extremes.worst_s = np.where(np.any(rises, axis=1), time_s, extremes.worst_s)
            np.copyto(highest, top, where=rises)
        falls = low < lowest
        falls &= counting
        if np.count_nonzero(falls):
            np.copyto(lowest, low, where=falls)

    def tips(
        self,
        extremes: Extremes,
        where: IndexArray | None,
        height: tuple[Array, Array],
        turn: tuple[FloatArray, BoolArray],
    ) -> None:
        """Take the tips of all blades at their azimuth.

        Args:
            extremes: To be widened.
            where: Which cases these are; None for all.
            height: Sine of rigid flap, and elastic height of the tip, each (cases, blades).
            turn: Azimuth of the first blade, and which cases count, each (cases,).
        """
        azimuth, counts = turn
        tip = self._tip_arm * height[0]
        tip += height[1]
        part = (azimuth * self._per_part)[:, None] + self._offsets
        part -= AZIMUTH_BINS * np.floor(part * (1.0 / AZIMUTH_BINS))
        place = part.astype(np.int64)
        np.minimum(place, AZIMUTH_BINS - 1, out=place)
        place += self._cells
        case = np.arange(tip.shape[0]) if where is None else where
        place += (case * (AZIMUTH_BINS * self._blades))[:, None]
        lowest = extremes.lowest_tip_m.reshape(-1)
        falls = tip < lowest.take(place)
        falls &= counts[:, None]
        if np.count_nonzero(falls):
            lowest[place[falls]] = tip[falls]
        highest = extremes.highest_tip_m.reshape(-1)
        rows = slice(None) if where is None else where
        rises = tip > extremes.highest_tip_m[rows]
        rises &= counts[:, None]
        if np.count_nonzero(rises):
            highest[(place // AZIMUTH_BINS)[rises]] = tip[rises]

    def tip_sine(self, flap_rad: Array) -> Array:
        """Sine of rigid flap given without its built-in part."""
        result: Array = np.sin(flap_rad + flap_rad.dtype.type(self._model.unit.fixed_flap_rad))
        return result

    @staticmethod
    def stops(extremes: Extremes, where: IndexArray, moment: Array, *, both_droop: bool) -> None:
        """Take signed moments of the flap stops, (parts, cases, units)."""
        if not np.count_nonzero(moment):
            return
        pressing = np.maximum.reduce(np.abs(moment) if both_droop else moment, axis=0)
        extremes.droop_N_m[where] = np.maximum(extremes.droop_N_m[where], pressing)
        if not both_droop:
            lifted = -np.minimum.reduce(moment, axis=0)
            if np.count_nonzero(lifted > 0.0):
                extremes.up_N_m[where] = np.maximum(extremes.up_N_m[where], lifted)

    @staticmethod
    def lag(
        extremes: Extremes, lag_rad: Array, stop_N_m: Array, counts: tuple[BoolArray, BoolArray]
    ) -> None:
        """Take moments of the lag stops, and lag where centrifugal force holds the blades.

        At low speed a blade without a lag spring lies on its lag stop whenever speed changes.

        Args:
            extremes: To be widened.
            lag_rad: Lag from the middle of its stops, (cases, blades).
            stop_N_m: Moments of the lag stops, (cases, blades).
            counts: Cases that count, and those that do at or above their counting speed.
        """
        size = np.abs(lag_rad)
        rises = size > extremes.lag_rad
        rises &= counts[1][:, None]
        if np.count_nonzero(rises):
            np.copyto(extremes.lag_rad, size, where=rises)
        if np.count_nonzero(stop_N_m):
            size = np.abs(stop_N_m)
            rises = size > extremes.lag_stop_N_m
            rises &= counts[0][:, None]
            np.copyto(extremes.lag_stop_N_m, size, where=rises)
