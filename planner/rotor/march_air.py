"""Air load of marched blades: one evaluation of every station of every blade."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING, Any

import numpy as np

from planner.rotor.march_sections import CELLS

if TYPE_CHECKING:
    from numpy.typing import NDArray

    from planner.rotor.flap_unit import FlapUnit
    from planner.rotor.march_sections import PseudoTables
    from planner.rotor.setup import RotorArrays

    FloatArray = NDArray[np.float64]
    Array = NDArray[np.floating[Any]]
    ComplexArray = NDArray[np.complexfloating[Any]]

TINY_M_S = 1e-30
"""Keeps the direction of no wind at all a number."""


@dataclass(frozen=True, eq=False)
class UnitFlow:
    """What the air load depends on; (cases, blades) unless stated.

    Attributes:
        x: Freedoms and their rates, (cases, units, 2n).
        speed_rad_s: Rotor speed, (cases,).
        along_m_s: Wind along the blade, outward.
        across_m_s: Wind against the blade's motion.
        up_m_s: Upward wind, (cases,).
        sine: Of rigid flap.
        cosine: Of rigid flap.
        pitch_rad: Pitch at the collective radius.
        induced_m_s: Induced velocity averaged over azimuth, (cases, stations).
        tilt: What the induced velocity of the tip differs by from its average, over it.
    """

    x: Array
    speed_rad_s: Array
    along_m_s: Array
    across_m_s: Array
    up_m_s: Array
    sine: Array
    cosine: Array
    pitch_rad: Array
    induced_m_s: Array
    tilt: Array


PER_BLADE = 6
"""Numbers of each blade, beside its freedoms, that its flow is linear in."""


class MarchAir:
    """Blade-element loads with work space kept from step to step.

    Flow and forces are complex: in the plane of the disc as real part, through it as imaginary
    part, so that turning the flow and turning lift and drag is one product each.
    """

    def __init__(
        self,
        arrays: RotorArrays,
        unit: FlapUnit,
        tables: PseudoTables,
        shape: tuple[int, int],
    ) -> None:
        """Prepare work space for a number of cases and blades of each."""
        self._tables, dtype = tables, tables.flat.real.dtype
        whole, self._n = (*shape, arrays.chord_m.size), unit.n_freedoms
        kind = tables.flat.dtype
        self._real = [np.empty(whole, dtype) for _ in range(3)]
        self._complex = [np.empty(whole, kind) for _ in range(4)]
        self._corner = np.empty(whole, np.intp)
        self._pitch = np.empty(shape, kind)
        self._row_start = tables.row_start.astype(dtype)
        self._one_row = not np.any(tables.row_start)
        self._twist = np.exp(-1j * arrays.twist_rad).astype(kind)
        self._half_chord = (0.5 * arrays.chord_m).astype(dtype)
        matrix = flow_matrix(arrays, unit)
        edge = 2 * arrays.chord_m.size * unit.n_blades
        self._of_motion = np.ascontiguousarray(matrix[:, :edge]).astype(dtype)
        self._of_induced = np.ascontiguousarray(matrix[:, edge:]).astype(dtype)
        self._row = np.empty((shape[0], shape[1] // unit.n_blades, matrix.shape[0]), dtype)

    def loads(
        self, flow: UnitFlow, sound_m_s: Array, load_factor: Array | None
    ) -> tuple[Array, ComplexArray]:
        """Forces per length over air density at every station.

        The same equations as `planner.rotor.airload`: u_T, u_P and the section's lift and drag
        turned into the blade's axes.

        Args:
            flow: State of the blades.
            sound_m_s: Speed of sound, (cases,).
            load_factor: Multiplies lift but for the momentum balance, (cases,); None for 1.

        Returns:
            Thrust of all blades that the momentum balance sees, (cases, stations), and force
            normal to the blade + i force against rotation, (cases, blades, stations)
            [m3/s2]. The latter is overwritten by the next call.
        """
        air = self._velocities(flow)
        speed = np.abs(air, out=self._real[0])
        coefficients = self._sections(flow.pitch_rad, air, speed, sound_m_s)
        speed *= self._half_chord
        air *= speed
        force = np.multiply(coefficients, air, out=self._complex[3])
        cosine = flow.cosine[:, :, None]
        ring: Array = force.real[:, 0] * cosine[:, 0]
        for blade in range(1, cosine.shape[1]):
            ring += force.real[:, blade] * cosine[:, blade]
        if load_factor is not None:
            coefficients.real *= load_factor[:, None, None]
            np.multiply(coefficients, air, out=force)
        return ring, force

    def _velocities(self, flow: UnitFlow) -> ComplexArray:
        """Air from ahead + i air through the disc, against the axis of the blade."""
        row, n = self._row, self._n
        units = row.shape[:2]
        row[..., : 2 * n] = flow.x
        of_blades = row[..., 2 * n :].reshape(*units, -1, n + PER_BLADE)
        per_blade = (*units, -1)
        along = flow.along_m_s.reshape(per_blade)
        np.multiply(flow.x[:, :, None, :n], along[..., None], out=of_blades[..., :n])
        even = flow.along_m_s * flow.sine - flow.up_m_s[:, None] * flow.cosine
        speed = flow.speed_rad_s[:, None]
        of_blades[..., n] = (speed * flow.cosine).reshape(per_blade)
        of_blades[..., n + 1] = speed[:, :, None]
        of_blades[..., n + 2] = flow.across_m_s.reshape(per_blade)
        of_blades[..., n + 3] = even.reshape(per_blade)
        of_blades[..., n + 4] = flow.cosine.reshape(per_blade)
        of_blades[..., n + 5] = (flow.cosine * flow.tilt).reshape(per_blade)
        shape = self._pitch.shape
        moving = np.matmul(row, self._of_motion)
        air: ComplexArray = moving.view(self._twist.dtype).reshape(*shape, -1)
        through = np.matmul(row, self._of_induced).reshape(*shape, -1)
        through *= flow.induced_m_s[:, None, :]
        air.imag += through
        return air

    def _sections(
        self, pitch_rad: Array, air: ComplexArray, speed: Array, sound_m_s: Array
    ) -> ComplexArray:
        """Lift + i drag from the direction of the flow, turned by pitch and twist."""
        np.cos(pitch_rad, out=self._pitch.real)
        np.sin(-pitch_rad, out=self._pitch.imag)
        turned = np.multiply(self._pitch[:, :, None], self._twist, out=self._complex[1])
        turned *= air
        place = self._pseudo_angle(turned)
        cell = np.floor(place, out=self._real[1])
        place -= cell
        if not self._one_row:
            cell += self._row_start
        if self._tables.mach_planes == 1:
            return self._between(cell, place, self._complex[1])
        mach = speed * (self._tables.per_mach / sound_m_s)[:, None, None]
        mach -= self._tables.lowest_mach * self._tables.per_mach
        np.clip(mach, 0.0, self._tables.mach_planes - 1.001, out=mach)
        plane = np.floor(mach)
        mach -= plane
        plane *= CELLS + 1
        cell += plane
        low = self._between(cell, place, self._complex[1])
        high = self._between(None, place, self._complex[3])
        high -= low
        high *= mach
        low += high
        return low

    def _pseudo_angle(self, turned: ComplexArray) -> Array:
        """Place in the table's cells, from 0 to their number."""
        place, work = self._real[2], self._real[1]
        np.abs(turned.real, out=work)
        np.abs(turned.imag, out=place)
        place += work
        place += TINY_M_S
        np.divide(turned.real, place, out=place)
        place *= -0.25 * CELLS
        place += 0.25 * CELLS
        np.copysign(place, turned.imag, out=place)
        place += 0.5 * CELLS
        return place

    def _between(self, cell: Array | None, share: Array, into: ComplexArray) -> ComplexArray:
        """Coefficients within a cell; without one, in the next plane over the cell before."""
        first = 0 if cell is not None else CELLS + 1
        if cell is not None:
            np.copyto(self._corner, cell, casting="unsafe")
        self._tables.flat[first:].take(self._corner, out=into, mode="clip")
        rise = self._tables.rise[first:].take(self._corner, out=self._complex[2], mode="clip")
        rise *= share
        into += rise
        return into


def flow_matrix(arrays: RotorArrays, unit: FlapUnit) -> FloatArray:
    """From what moves the air past a unit to the flow at its stations.

    Rows: freedoms and their rates; then of each blade its freedoms times the wind along it,
    speed times cosine of flap, speed, wind across, even wind through, cosine of flap, and that
    times the tilt of the induced velocity. Columns: air from ahead and air through by turns,
    station after station and blade after blade; then what the induced velocity counts.

    Args:
        arrays: Station arrays.
        unit: What flaps together.

    Returns:
        The matrix, (2n + blades (n + 6), blades * stations * 3).
    """
    n, nb, stations = unit.n_freedoms, unit.n_blades, arrays.chord_m.size
    air = np.zeros((2 * n + nb * (n + PER_BLADE), nb, stations, 2))
    induced = np.zeros((*air.shape[:2], stations))
    rising = unit.shape + unit.rigid[:, :, None] * arrays.arm_m
    for blade in range(nb):
        first = 2 * n + blade * (n + PER_BLADE)
        air[n : 2 * n, blade, :, 1] = rising[blade]
        air[first : first + n, blade, :, 1] = unit.slope[blade]
        air[first + n, blade, :, 0] = arrays.arm_m
        air[first + n + 1, blade, :, 0] = arrays.still_m
        air[first + n + 2, blade, :, 0] = 1.0
        air[first + n + 3, blade, :, 1] = 1.0
        induced[first + n + 4, blade] = 1.0
        induced[first + n + 5, blade] = arrays.station_radius_m / arrays.radius_m
    return np.hstack([air.reshape(air.shape[0], -1), induced.reshape(air.shape[0], -1)])
