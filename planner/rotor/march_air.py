"""Air load of marched blades: one evaluation of every station of every blade."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING, Any

import numpy as np

from planner.rotor.march_sections import CELLS, pseudo_tables

if TYPE_CHECKING:
    from numpy.typing import NDArray

    from planner.rotor.setup import RotorArrays

    Array = NDArray[np.floating[Any]]

LEAST_SPEED_M_S = 1e-6


@dataclass(frozen=True, eq=False)
class BladeFlow:
    """What the air load of each marched blade depends on; (blades,) unless stated.

    Attributes:
        speed_rad_s: Rotor speed.
        along_m_s: Wind along the blade, outward.
        across_m_s: Wind against the blade's motion.
        flap_rad: Rigid flap.
        flap_rate_rad_s: Its rate.
        pitch_rad: Pitch at the collective radius.
        through_m_s: Induced velocity less upward wind at the stations, (blades, stations).
        bend_rate_m_s: Rate of elastic height at the stations, (blades, stations).
        bend_slope: Elastic slope at the stations, (blades, stations).
    """

    speed_rad_s: Array
    along_m_s: Array
    across_m_s: Array
    flap_rad: Array
    flap_rate_rad_s: Array
    pitch_rad: Array
    through_m_s: Array
    bend_rate_m_s: Array
    bend_slope: Array


class MarchAir:
    """Blade-element loads with work space kept from step to step."""

    def __init__(self, arrays: RotorArrays, blades: int, dtype: type[np.floating[Any]]) -> None:
        """Prepare tables and work space for a number of blades."""
        self._tables = pseudo_tables(arrays.sections, dtype)
        shape = (blades, arrays.chord_m.size)
        self._real = [np.empty(shape, dtype) for _ in range(7)]
        self._whole = [np.empty(shape, np.int32) for _ in range(2)]
        kind = self._tables.flat.dtype
        self._complex = [np.empty(shape, kind) for _ in range(4)]
        self._row_start = self._tables.row_start.astype(np.int32)
        self.arm_m = arrays.arm_m.astype(dtype)
        self.still_m = arrays.still_m.astype(dtype)
        self.cos_twist = np.cos(arrays.twist_rad).astype(dtype)
        self.sin_twist = np.sin(arrays.twist_rad).astype(dtype)
        self.half_chord = (0.5 * arrays.chord_m).astype(dtype)

    def loads(
        self, flow: BladeFlow, density_kg_m3: Array, sound_m_s: Array, load_factor: Array
    ) -> tuple[Array, Array, Array]:
        """Forces per length of every station: normal, normal without load factor, in the plane.

        The same equations as `planner.rotor.airload`: u_T, u_P and the section's lift and drag
        turned into the blade's axes.

        Args:
            flow: State of the blades.
            density_kg_m3: Air density, (blades,).
            sound_m_s: Speed of sound, (blades,).
            load_factor: Multiplies lift, (blades,).

        Returns:
            Normal force, the same that the momentum balance sees, and force against rotation,
            each (blades, stations) [N/m]. The arrays are overwritten by the next call.
        """
        tangential, through, speed = self._velocities(flow)
        lift_drag = self._sections(flow, tangential, through, speed, sound_m_s)
        pressure, unfactored, normal, plane = self._real[3:7]
        np.multiply(speed, self.half_chord, out=pressure)
        pressure *= density_kg_m3[:, None]
        lift, drag = lift_drag.real, lift_drag.imag
        np.multiply(lift, tangential, out=unfactored)
        np.multiply(lift, through, out=plane)
        scale = load_factor[:, None]
        np.multiply(unfactored, scale, out=normal)
        plane *= scale
        through *= drag
        tangential *= drag
        normal -= through
        unfactored -= through
        plane += tangential
        for force in (normal, unfactored, plane):
            force *= pressure
        return normal, unfactored, plane

    def _velocities(self, flow: BladeFlow) -> tuple[Array, Array, Array]:
        """Air from ahead, through the disc, and both together."""
        tangential, through, speed, work = self._real[:4]
        cosine = np.cos(flow.flap_rad)
        np.multiply((flow.speed_rad_s * cosine)[:, None], self.arm_m, out=tangential)
        np.multiply(flow.speed_rad_s[:, None], self.still_m, out=work)
        tangential += work
        tangential += flow.across_m_s[:, None]
        np.multiply(flow.through_m_s, cosine[:, None], out=through)
        np.multiply(flow.flap_rate_rad_s[:, None], self.arm_m, out=work)
        through += work
        through += flow.bend_rate_m_s
        np.add(flow.bend_slope, np.sin(flow.flap_rad)[:, None], out=work)
        work *= flow.along_m_s[:, None]
        through += work
        np.multiply(tangential, tangential, out=speed)
        np.multiply(through, through, out=work)
        speed += work
        np.sqrt(speed, out=speed)
        np.maximum(speed, LEAST_SPEED_M_S, out=speed)
        return tangential, through, speed

    def _sections(
        self, flow: BladeFlow, tangential: Array, through: Array, speed: Array, sound_m_s: Array
    ) -> NDArray[np.complexfloating[Any]]:
        """Lift + i drag from the direction of the flow, turned by pitch and twist."""
        cosine, sine, work = self._real[3:6]
        cp, sp = np.cos(flow.pitch_rad)[:, None], np.sin(flow.pitch_rad)[:, None]
        turn_cos = cp * self.cos_twist - sp * self.sin_twist
        turn_sin = sp * self.cos_twist + cp * self.sin_twist
        np.multiply(turn_cos, tangential, out=cosine)
        np.multiply(turn_sin, through, out=work)
        cosine += work
        np.multiply(turn_sin, tangential, out=sine)
        np.multiply(turn_cos, through, out=work)
        sine -= work
        place = self._pseudo_angle(cosine, sine, work)
        corner, cell = self._whole
        np.copyto(cell, place, casting="unsafe")
        place -= cell
        np.add(cell, self._row_start, out=corner)
        if self._tables.mach_planes == 1:
            return self._between(corner, place, self._complex[0])
        mach = self._real[4]
        np.multiply(speed, (self._tables.per_mach / sound_m_s)[:, None], out=mach)
        mach -= self._tables.lowest_mach * self._tables.per_mach
        np.clip(mach, 0.0, self._tables.mach_planes - 1.001, out=mach)
        np.copyto(cell, mach, casting="unsafe")
        mach -= cell
        cell *= CELLS + 1
        corner += cell
        low = self._between(corner, place, self._complex[0])
        corner += CELLS + 1
        high = self._between(corner, place, self._complex[2])
        high -= low
        high *= mach
        low += high
        return low

    def _pseudo_angle(self, cosine: Array, sine: Array, work: Array) -> Array:
        """Place in the table's cells, from 0 to less than their number; overwrites all three."""
        np.abs(cosine, out=work)
        spare = self._real[6]
        np.abs(sine, out=spare)
        work += spare
        work += LEAST_SPEED_M_S
        np.divide(sine, work, out=work)
        behind = cosine < 0.0
        np.copysign(2.0, sine, out=spare)
        spare -= work
        np.copyto(work, spare, where=behind)
        work += 2.0
        work *= 0.25 * CELLS
        np.minimum(work, CELLS - 0.001, out=work)
        np.copyto(cosine, work)
        return cosine

    def _between(
        self, corner: NDArray[np.int32], share: Array, into: NDArray[np.complexfloating[Any]]
    ) -> NDArray[np.complexfloating[Any]]:
        flat = self._tables.flat
        other = self._complex[1]
        flat.take(corner, out=into, mode="clip")
        flat[1:].take(corner, out=other, mode="clip")
        other -= into
        other *= share
        into += other
        return into
