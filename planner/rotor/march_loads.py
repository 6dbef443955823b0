"""Loads on marched units at one instant, from their state, controls and wind."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING, Any

import numpy as np

from planner.rotor.march_air import BladeFlow, MarchAir

if TYPE_CHECKING:
    from numpy.typing import NDArray

    from planner.rotor.march_case import MarchCases
    from planner.rotor.march_inflow import MarchInflow
    from planner.rotor.march_model import MarchModel
    from planner.rotor.march_wind import Prescribed, WindNow

    Array = NDArray[np.floating[Any]]
    FloatArray = NDArray[np.float64]


@dataclass(frozen=True, eq=False)
class Instant:
    """What a block is in at one instant.

    Attributes:
        x: Freedoms and their rates, (cases, units, 2n).
        induced_m_s: Induced velocity, (cases, stations).
        azimuth_rad: Of the first blade, (cases,).
        controls: Speed and pitch.
        wind: Wind.
    """

    x: Array
    induced_m_s: Array
    azimuth_rad: FloatArray
    controls: Prescribed
    wind: WindNow


@dataclass(frozen=True, eq=False)
class UnitLoads:
    """Loads at one instant.

    Attributes:
        on_freedoms: Generalised load without the part that K0 + Omega^2 K1 gives, stops left
            out, (cases, units, n).
        ring_force: Thrust per length of the whole rotor over air density, (cases, stations).
        flap_rad: Rigid flap, built-in part included, (cases, blades).
        flap_rate_rad_s: Its rate, (cases, blades).
        cosine: Of each blade's azimuth, (cases, blades).
        sine: Of each blade's azimuth, (cases, blades).
        vertical_N: Air load along the shaft, (cases, blades).
        root_air_N_m: Moment of the air load about the root, (cases, blades).
        lag_air_N_m: Moment of the air load about the lag hinge, against rotation,
            (cases, blades).
    """

    on_freedoms: Array
    ring_force: Array
    flap_rad: Array
    flap_rate_rad_s: Array
    cosine: Array
    sine: Array
    vertical_N: Array
    root_air_N_m: Array
    lag_air_N_m: Array


class LoadMaker:
    """Shapes and work space that turn an instant into loads, for a number of cases."""

    def __init__(self, model: MarchModel, cases: MarchCases, inflow: MarchInflow) -> None:
        """Bind the model to the block's cases."""
        self._model, self._inflow = model, inflow
        unit, dtype = model.unit, model.settings.dtype
        self._blades = model.units * unit.n_blades
        self._stations = model.arrays.chord_m.size
        self._air = MarchAir(model.arrays, cases.count * self._blades, dtype)
        self._offsets = model.blade_offsets_rad
        self._basis(dtype)
        air = (cases.air_density_kg_m3, cases.speed_of_sound_m_s, cases.load_factor)
        self._each = [np.repeat(values, self._blades).astype(dtype) for values in air]

    def _basis(self, dtype: type[Any]) -> None:
        """Matrices between freedoms, blades and stations."""
        unit, arrays = self._model.unit, self._model.arrays
        flat = (unit.n_freedoms, unit.n_blades * self._stations)
        self._shape = np.swapaxes(unit.shape, 0, 1).reshape(flat).astype(dtype)
        self._slope = np.swapaxes(unit.slope, 0, 1).reshape(flat).astype(dtype)
        self._rigid = np.ascontiguousarray(unit.rigid.T).astype(dtype)
        signs = unit.rigid[:, :1] if unit.is_hinged else np.zeros((unit.n_blades, 1))
        self._turn = np.ascontiguousarray((signs * unit.hinge).T).astype(dtype)
        width = arrays.station_width_m
        onto = (unit.shape + unit.rigid[:, :, None] * arrays.arm_m) * width
        self._onto = np.ascontiguousarray(np.swapaxes(onto, 1, 2).reshape(flat[::-1]))
        self._onto = self._onto.astype(dtype)
        reach = np.maximum(arrays.station_radius_m - unit.root_m, 0.0)
        self._up_sums = np.stack([width, width * reach], axis=1).astype(dtype)
        lag = self._model.lag
        outer = 0.0 if lag is None else lag.hinge_m
        self._back_sum = (width * np.maximum(arrays.station_radius_m - outer, 0.0)).astype(dtype)
        fixed = unit.spring_load + self._model.gravity_m_s2[2] * unit.weight
        self._fixed = fixed.astype(dtype)
        self._by_speed2 = (-unit.fixed_flap_rad * unit.spin_fixed).astype(dtype)

    def __call__(self, now: Instant) -> UnitLoads:
        """Loads at an instant."""
        count, unit = now.x.shape[0], self._model.unit
        n, dtype = unit.n_freedoms, self._model.settings.dtype
        q, rate = now.x[..., :n], now.x[..., n:]
        per_blade = (count, self._blades)
        flap = np.matmul(q, self._rigid).reshape(per_blade) + dtype(unit.fixed_flap_rad)
        flap_rate = np.matmul(rate, self._rigid).reshape(per_blade)
        azimuth = now.azimuth_rad[:, None] + self._offsets
        cosine, sine = np.cos(azimuth).astype(dtype), np.sin(azimuth).astype(dtype)
        flow = self._flow(now, (q, rate), (flap, flap_rate), (cosine, sine))
        normal, unfactored, plane = self._air.loads(flow, *self._each)
        cos_flap = np.cos(flap)
        stations = (*per_blade, self._stations)
        unfactored = unfactored.reshape(stations)
        unfactored *= cos_flap[:, :, None]
        ring = unfactored.sum(axis=1)
        ring *= self._model.arrays.n_blades / self._blades
        ring /= self._each[0][:: self._blades, None]
        sums = np.matmul(normal.reshape(stations), self._up_sums)
        back = np.matmul(plane.reshape(stations), self._back_sum[:, None])[..., 0]
        load = np.matmul(normal.reshape(count, self._model.units, -1), self._onto)
        load += self._fixed
        speed = now.controls.speed_rad_s.astype(dtype)
        load += (speed * speed)[:, None, None] * self._by_speed2
        load += self._beyond_linear(flap, speed, (cosine, sine))
        return UnitLoads(
            load, ring, flap, flap_rate, cosine, sine, sums[..., 0] * cos_flap, sums[..., 1], back
        )

    def _flow(
        self,
        now: Instant,
        motion: tuple[Array, Array],
        flap: tuple[Array, Array],
        turn: tuple[Array, Array],
    ) -> BladeFlow:
        """Air and motion of every blade."""
        unit, dtype = self._model.unit, self._model.settings.dtype
        count = now.x.shape[0]
        cosine, sine = turn
        wind = now.wind
        along, across = wind.along_m_s.astype(dtype), wind.across_m_s.astype(dtype)
        kx = self._inflow.gradient(now.induced_m_s, along)
        through = self._inflow.over_disc(now.induced_m_s, kx, cosine)
        through -= wind.up_m_s.astype(dtype)[:, None, None]
        rows = (count * self._blades, self._stations)
        controls = now.controls
        pitch = controls.collective_rad[:, None] + (
            controls.cyclic_cosine_rad[:, None] * cosine + controls.cyclic_sine_rad[:, None] * sine
        )
        if self._model.arrays.hub.pitch_flap != 0.0:
            hinge = np.matmul(motion[0], self._turn).reshape(count, self._blades)
            pitch = pitch - self._model.arrays.hub.pitch_flap * (hinge + unit.fixed_flap_rad)
        speed = np.repeat(controls.speed_rad_s.astype(dtype), self._blades)
        return BladeFlow(
            speed_rad_s=speed,
            along_m_s=(along[:, None] * cosine + across[:, None] * sine).ravel(),
            across_m_s=(along[:, None] * sine - across[:, None] * cosine).ravel(),
            flap_rad=flap[0].ravel(),
            flap_rate_rad_s=flap[1].ravel(),
            pitch_rad=pitch.astype(dtype).ravel(),
            through_m_s=through.reshape(rows),
            bend_rate_m_s=np.matmul(motion[1], self._shape).reshape(rows),
            bend_slope=np.matmul(motion[0], self._slope).reshape(rows),
        )

    def _beyond_linear(self, flap: Array, speed: Array, turn: tuple[Array, Array]) -> Array:
        """What rigid flap's centrifugal force and weight differ by from their linear forms."""
        unit, gravity = self._model.unit, self._model.gravity_m_s2
        I, S = unit.flap_inertia_kg_m2, unit.first_moment_kg_m  # noqa: E741
        hinge = self._model.arrays.hub.hinge_m
        sine, cosine = np.sin(flap), np.cos(flap)
        spin = (speed * speed)[:, None]
        moment = spin * ((I + hinge * S) * flap - (I * cosine + hinge * S) * sine)
        moment += gravity[2] * S * (cosine - 1.0)
        if gravity[0] or gravity[1]:
            moment -= S * (gravity[0] * turn[0] + gravity[1] * turn[1]) * sine
        shaped = moment.reshape(flap.shape[0], self._model.units, unit.n_blades)
        onto: Array = np.matmul(shaped, np.ascontiguousarray(self._rigid.T))
        return onto
