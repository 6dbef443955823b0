"""Watching marched blades: moments, thrust, tips and lag go into the running extremes."""

from __future__ import annotations

from typing import TYPE_CHECKING, Any

import numpy as np

from planner.rotor.march_track import AZIMUTH_BINS, Extremes

if TYPE_CHECKING:
    from numpy.typing import NDArray

    from planner.rotor.march_loads import Instant, UnitLoads
    from planner.rotor.march_model import MarchModel

    Array = NDArray[np.floating[Any]]
    FloatArray = NDArray[np.float64]
    BoolArray = NDArray[np.bool_]


class Watch:
    """What is read off an instant of a block; nothing counts before a history begins."""

    def __init__(self, model: MarchModel) -> None:
        """Constants of the rotor."""
        self._model = model
        unit = model.unit
        self._blades = model.units * unit.n_blades
        self._inverse = (1.0 / np.diag(unit.mass)).astype(np.float64)
        self._tip_arm = model.arrays.radius_m - model.arrays.hub.hinge_m
        self._all = self._blades == model.arrays.n_blades
        dtype = model.settings.dtype
        self._inverse = self._inverse.astype(dtype)
        self._stiffness = np.hstack([unit.stiffness, unit.spin_stiffness]).astype(dtype)
        self._damping = unit.damping.astype(dtype)
        self._hinge = unit.hinge.astype(dtype)
        self._of_blade = [
            np.ascontiguousarray(matrix.T).astype(dtype)
            for matrix in (unit.rigid, unit.tip, unit.first_moment, unit.root_mass, unit.root_spin)
        ]
        self._cells = np.arange(self._blades) * AZIMUTH_BINS
        self._offsets = model.blade_offsets_rad * (AZIMUTH_BINS / (2.0 * np.pi))

    def loads(
        self,
        extremes: Extremes,
        now: Instant,
        loads: UnitLoads,
        held: tuple[Array, BoolArray],
    ) -> None:
        """Take root and hub moments and thrust.

        Args:
            extremes: To be widened.
            now: The instant.
            loads: Loads then.
            held: Signed stop moments, (cases, units), and which cases count, (cases,).
        """
        moment, counts = held
        if self._all:
            thrust = loads.vertical_N.sum(axis=1)
            top, least = extremes.thrust_N, extremes.least_thrust_N
            np.maximum(top, thrust, out=top, where=counts)
            np.minimum(least, thrust, out=least, where=counts)
        speeding = self._accelerations(now, loads, moment)
        root = self._root(now, loads, moment, speeding)
        where = counts[:, None]
        np.maximum(extremes.root_N_m, np.abs(root), out=extremes.root_N_m, where=where)
        if self._all:
            hub = self._hub(loads, root, speeding)
            np.maximum(extremes.hub_N_m, hub, out=extremes.hub_N_m, where=counts)

    def _accelerations(self, now: Instant, loads: UnitLoads, moment: Array) -> Array:
        """Second derivatives of the freedoms, (cases, units, n)."""
        n = self._model.unit.n_freedoms
        q, rate = now.x[..., :n], now.x[..., n:]
        speed2 = (now.controls.speed_rad_s**2).astype(now.x.dtype)[:, None, None]
        stiff = np.matmul(q, self._stiffness)
        force = loads.on_freedoms + moment[:, :, None] * self._hinge
        force -= stiff[..., :n]
        force -= speed2 * stiff[..., n:]
        force -= np.matmul(rate, self._damping)
        table = self._model.table
        force -= rate * table.numeric[table.node(now.controls.speed_rad_s)][:, None, :]
        force *= self._inverse
        return force

    def _root(self, now: Instant, loads: UnitLoads, moment: Array, speeding: Array) -> Array:
        """Moment that each blade leaves on hinge or root, upward, (cases, blades)."""
        unit, hub = self._model.unit, self._model.arrays.hub
        n, dtype = unit.n_freedoms, now.x.dtype
        shape = loads.flap_rad.shape
        if unit.is_hinged:
            column = self._model.flap_column
            rotation = np.matmul(now.x[..., :n], column)[..., 0]
            rate = np.matmul(now.x[..., n:], column)[..., 0]
            relaxed = hub.spring_neutral_rad - unit.fixed_flap_rad
            per_unit = hub.spring_N_m_rad * (rotation - relaxed) + hub.damper_N_m_s_rad * rate
            per_unit = per_unit - moment / unit.n_blades
            if unit.n_blades == 1:
                return per_unit
            signs = unit.rigid[:, 0].astype(dtype)
            both: Array = (per_unit[:, :, None] * signs).reshape(shape)
            return both
        speed2 = (now.controls.speed_rad_s**2).astype(dtype)[:, None]
        inertia = np.matmul(speeding, self._of_blade[3]).reshape(shape)
        spin = np.matmul(now.x[..., :n], self._of_blade[4]).reshape(shape)
        root = loads.root_air_N_m - inertia - speed2 * spin
        root += self._model.root_weight_kg_m * self._model.gravity_m_s2[2]
        root -= speed2 * (self._model.root_centrifugal_kg_m2 * unit.fixed_flap_rad)
        return root

    def _hub(self, loads: UnitLoads, root: Array, speeding: Array) -> Array:
        """Size of the moment of all blades at the rotor centre, (cases,)."""
        unit, arrays = self._model.unit, self._model.arrays
        lifted = np.matmul(speeding, self._of_blade[2]).reshape(root.shape)
        shear = loads.vertical_N - lifted
        shear += arrays.blade_mass_kg * self._model.gravity_m_s2[2]
        moment = root + unit.root_m * shear
        x = (moment * loads.cosine).sum(axis=1)
        y = (moment * loads.sine).sum(axis=1)
        size: Array = np.sqrt(x * x + y * y)
        return size

    def flap(
        self,
        extremes: Extremes,
        turned: tuple[Array, Array],
        counts: BoolArray,
        time_s: FloatArray,
    ) -> None:
        """Take what counts as flap, without its built-in part, at two instants, (cases, units)."""
        fixed = self._model.unit.fixed_flap_rad
        where = counts[:, None]
        top = np.maximum(turned[0], turned[1]) + fixed
        low = np.minimum(turned[0], turned[1]) + fixed
        if self._model.unit.n_blades > 1:
            top, low = np.maximum(top, 2.0 * fixed - low), np.minimum(low, 2.0 * fixed - top)
        highest, lowest = extremes.highest_flap_rad, extremes.lowest_flap_rad
        rises = (top > highest) & where
        if np.any(rises):
            extremes.worst_s = np.where(np.any(rises, axis=1), time_s, extremes.worst_s)
            np.maximum(highest, top, out=highest, where=where)
        np.minimum(lowest, low, out=lowest, where=where)

    def tips(
        self, extremes: Extremes, x: Array, azimuth_rad: FloatArray, counts: BoolArray
    ) -> None:
        """Take the tips of all blades at their azimuth."""
        unit = self._model.unit
        n, dtype = unit.n_freedoms, x.dtype
        shape = (x.shape[0], self._blades)
        flap = np.matmul(x[..., :n], self._of_blade[0]).reshape(shape)
        bend = np.matmul(x[..., :n], self._of_blade[1]).reshape(shape)
        height = self._tip_arm * np.sin(flap + dtype.type(unit.fixed_flap_rad)) + bend
        where = counts[:, None]
        np.maximum(extremes.highest_tip_m, height, out=extremes.highest_tip_m, where=where)
        turned = (azimuth_rad * (AZIMUTH_BINS / (2.0 * np.pi)))[:, None] + self._offsets
        part = np.floor(turned).astype(np.int64) % AZIMUTH_BINS
        part += self._cells
        part += (np.arange(shape[0]) * (AZIMUTH_BINS * shape[1]))[:, None]
        lowest = extremes.lowest_tip_m.reshape(-1)
        lowest[part] = np.where(where, np.minimum(lowest[part], height), lowest[part])

    @staticmethod
    def stops(extremes: Extremes, moment: Array, counts: BoolArray, *, both_droop: bool) -> None:
        """Take signed moments of the flap stops, (cases, units)."""
        where = counts[:, None]
        pressing = np.abs(moment) if both_droop else moment
        np.maximum(extremes.droop_N_m, pressing, out=extremes.droop_N_m, where=where)
        if not both_droop:
            np.maximum(extremes.up_N_m, -moment, out=extremes.up_N_m, where=where)

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
        fast = counts[1][:, None]
        np.maximum(extremes.lag_rad, np.abs(lag_rad), out=extremes.lag_rad, where=fast)
        size, where = np.abs(stop_N_m), counts[0][:, None]
        np.maximum(extremes.lag_stop_N_m, size, out=extremes.lag_stop_N_m, where=where)
