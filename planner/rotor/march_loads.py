"""Loads on marched units at one instant, from their state, controls and wind."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING, Any

import numpy as np

from planner.rotor.march_air import MarchAir, UnitFlow

if TYPE_CHECKING:
    from numpy.typing import NDArray

    from planner.rotor.march_case import MarchCases
    from planner.rotor.march_inflow import MarchInflow
    from planner.rotor.march_model import MarchModel
    from planner.rotor.march_view import View
    from planner.rotor.march_wind import Prescribed, WindNow

    Array = NDArray[np.floating[Any]]
    ComplexArray = NDArray[np.complexfloating[Any]]
    FloatArray = NDArray[np.float64]


@dataclass(frozen=True, eq=False)
class Instant:
    """What a block is in at one instant.

    Attributes:
        x: Freedoms and their rates, (cases, units, 2n).
        view: What is read off them.
        induced_m_s: Induced velocity, (cases, stations).
        azimuth_rad: Of the first blade, (cases,).
        node: Nodes of the step table, (cases,).
        speed_rad_s: Rotor speed in the march's precision, (cases,).
        controls: Speed and pitch.
        wind: Wind.
    """

    x: Array
    view: View
    induced_m_s: Array
    azimuth_rad: FloatArray
    node: NDArray[np.int64]
    speed_rad_s: Array
    controls: Prescribed
    wind: WindNow


@dataclass(frozen=True, eq=False)
class UnitLoads:
    """Loads at one instant, (cases, blades) unless stated.

    Attributes:
        on_freedoms: Generalised load without the part that K0 + Omega^2 K1 gives, stops left
            out, (cases, units, n).
        ring_force: Thrust per length of the whole rotor over air density, (cases, stations).
        flap_rad: Rigid flap, built-in part included.
        flap_rate_rad_s: Its rate.
        flap_sine: Its sine.
        cosine: Of each blade's azimuth.
        sine: Of each blade's azimuth.
        vertical_N: Air load along the shaft.
        root_air_N_m: Moment of the air load about the root of blades that are built in.
        lag_air_N_m: Moment of the air load about the lag hinge, against rotation, of blades with
            lag hinges.
    """

    on_freedoms: Array
    ring_force: Array
    flap_rad: Array
    flap_rate_rad_s: Array
    flap_sine: Array
    cosine: Array
    sine: Array
    vertical_N: Array
    root_air_N_m: Array
    lag_air_N_m: Array


class LoadMaker:
    """Weights and work space that turn an instant into loads, for a number of cases."""

    def __init__(self, model: MarchModel, cases: MarchCases, inflow: MarchInflow) -> None:
        """Bind the model to the block's cases."""
        self._model, self._inflow = model, inflow
        unit, self._dtype = model.unit, model.settings.dtype
        self._blades = model.units * unit.n_blades
        shape = (cases.count, self._blades)
        self._air = MarchAir(model.arrays, unit, model.sections, shape)
        self._offsets = model.blade_offsets_rad
        self._per_turn = model.arrays.n_blades / self._blades
        self._density = cases.air_density_kg_m3.astype(self._dtype)[:, None, None]
        self._sound = cases.speed_of_sound_m_s.astype(self._dtype)
        factor = cases.load_factor.astype(self._dtype)
        self._factor = factor if np.any(factor != 1.0) else None
        self._sums = self._weights().astype(self._dtype)
        fixed = unit.spring_load + model.gravity_m_s2[2] * unit.weight
        self._fixed = fixed.astype(self._dtype)
        by_speed2 = -unit.fixed_flap_rad * unit.spin_fixed
        self._by_speed2 = by_speed2.astype(self._dtype) if np.any(by_speed2) else None
        self._rigid = unit.rigid[:, 0].astype(self._dtype)

    def _weights(self) -> FloatArray:
        """From a unit's forces at the stations to sums, (blades * stations * 2, sums).

        Rows: normal force and force in the plane by turns. Columns: load on each freedom; then of
        each blade the normal force, moment about its root, moment about its lag hinge.
        """
        unit, arrays, lag = self._model.unit, self._model.arrays, self._model.lag
        n, nb, width = unit.n_freedoms, unit.n_blades, arrays.station_width_m
        weights = np.zeros((nb, width.size, 2, n + 3 * nb))
        onto = (unit.shape + unit.rigid[:, :, None] * arrays.arm_m) * width
        weights[:, :, 0, :n] = np.swapaxes(onto, 1, 2)
        outer = 0.0 if lag is None else lag.hinge_m
        for blade in range(nb):
            weights[blade, :, 0, n + blade] = width
            reach = np.maximum(arrays.station_radius_m - unit.root_m, 0.0)
            weights[blade, :, 0, n + nb + blade] = width * reach
            reach = np.maximum(arrays.station_radius_m - outer, 0.0)
            weights[blade, :, 1, n + 2 * nb + blade] = width * reach
        return weights.reshape(-1, n + 3 * nb)

    def __call__(self, now: Instant) -> UnitLoads:
        """Loads at an instant."""
        unit, dtype = self._model.unit, self._dtype
        n, nb, count = unit.n_freedoms, unit.n_blades, now.x.shape[0]
        flap = now.view.of_blades("flap") + dtype(unit.fixed_flap_rad)
        flap_sine, flap_cosine = np.sin(flap), np.cos(flap)
        azimuth = now.azimuth_rad[:, None] + self._offsets
        turn = (np.cos(azimuth).astype(dtype), np.sin(azimuth).astype(dtype))
        flow = self._flow(now, (flap_sine, flap_cosine), turn)
        ring, force = self._air.loads(flow, self._sound, self._factor)
        if self._per_turn != 1.0:
            ring *= self._per_turn
        of_units = force.view(dtype).reshape(count, self._model.units, -1)
        sums = np.matmul(of_units, self._sums)
        sums *= self._density
        load = sums[..., :n] + self._fixed
        speed2 = now.speed_rad_s * now.speed_rad_s
        if self._by_speed2 is not None:
            load += speed2[:, None, None] * self._by_speed2
        if unit.first_moment_kg_m:
            beyond = self._beyond_linear(flap, (flap_sine, flap_cosine), speed2, turn)
            shaped = beyond.reshape(count, self._model.units, nb)
            load[..., 0] += shaped[..., 0] if nb == 1 else np.matmul(shaped, self._rigid)
        rest = (sums[..., n + i * nb : n + (i + 1) * nb].reshape(flap.shape) for i in range(3))
        normal, root, back = rest
        vertical = normal * flap_cosine
        rate = now.view.of_blades("flap_rate")
        return UnitLoads(load, ring, flap, rate, flap_sine, *turn, vertical, root, back)

    def _flow(
        self, now: Instant, flap: tuple[Array, Array], turn: tuple[Array, Array]
    ) -> UnitFlow:
        """Air and motion of every blade."""
        cosine, sine = turn
        wind = now.wind
        along, across = wind.along_m_s[:, None], wind.across_m_s[:, None]
        kx = self._inflow.gradient(now.induced_m_s, wind.along_m_s)
        return UnitFlow(
            x=now.x,
            speed_rad_s=now.speed_rad_s,
            along_m_s=along * cosine + across * sine,
            across_m_s=along * sine - across * cosine,
            up_m_s=wind.up_m_s,
            sine=flap[0],
            cosine=flap[1],
            pitch_rad=self._pitch(now, turn),
            induced_m_s=now.induced_m_s,
            tilt=kx[:, None] * cosine,
        )

    def _pitch(self, now: Instant, turn: tuple[Array, Array]) -> Array:
        """Pitch at the collective radius, (cases, blades)."""
        controls, dtype, hub = now.controls, self._dtype, self._model.arrays.hub
        pitch = np.repeat(controls.collective_rad.astype(dtype)[:, None], self._blades, axis=1)
        if controls.cyclic:
            pitch += controls.cyclic_cosine_rad.astype(dtype)[:, None] * turn[0]
            pitch += controls.cyclic_sine_rad.astype(dtype)[:, None] * turn[1]
        if hub.pitch_flap != 0.0:
            hinge = now.view["rotation"] * self._rigid
            fixed = dtype(self._model.unit.fixed_flap_rad)
            pitch -= dtype(hub.pitch_flap) * (hinge.reshape(pitch.shape) + fixed)
        return pitch

    def _beyond_linear(
        self, flap: Array, direction: tuple[Array, Array], speed2: Array, turn: tuple[Array, Array]
    ) -> Array:
        """What rigid flap's centrifugal force and weight differ by from their linear forms."""
        unit, gravity = self._model.unit, self._model.gravity_m_s2
        I, S = unit.flap_inertia_kg_m2, unit.first_moment_kg_m  # noqa: E741
        level = self._model.arrays.hub.hinge_m * S
        sine, cosine = direction
        moment = (I + level) * flap - (I * cosine + level) * sine
        moment *= speed2[:, None]
        moment += gravity[2] * S * (cosine - 1.0)
        if gravity[0] or gravity[1]:
            moment -= S * (gravity[0] * turn[0] + gravity[1] * turn[1]) * sine
        return moment
