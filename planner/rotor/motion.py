"""Rotor freedoms to blade motion over the azimuth, as matrices."""

from __future__ import annotations

from dataclasses import dataclass
from functools import lru_cache
from typing import TYPE_CHECKING

import numpy as np

if TYPE_CHECKING:
    from numpy.typing import NDArray

    from planner.rotor.setup import HubFreedom

    FloatArray = NDArray[np.float64]


@dataclass(frozen=True, eq=False)
class Motion:
    """Flap of a blade over the azimuth as a fixed part plus basis times freedoms.

    Attributes:
        n_turn: Azimuths in one turn.
        azimuth_rad: Collocation azimuths, of one turn or two, (azimuths,).
        basis: Flap for unit freedoms, (azimuths, freedoms).
        basis_slope: Its first derivative with azimuth.
        basis_curvature: Its second derivative with azimuth.
        projection: Takes a moment over the azimuth to the freedoms' equations,
            (freedoms, azimuths).
        has_first_harmonic: The first two freedoms are the first harmonic, cosine and sine.
    """

    n_turn: int
    azimuth_rad: FloatArray
    basis: FloatArray
    basis_slope: FloatArray
    basis_curvature: FloatArray
    projection: FloatArray
    has_first_harmonic: bool

    @property
    def n_freedoms(self) -> int:
        """Number of freedoms."""
        return int(self.basis.shape[1])


def free_motion(hub: HubFreedom, n_azimuths: int, n_harmonics: int) -> Motion:
    """Periodic flap of the hub's freedoms.

    A blade that flaps alone has the mean and all harmonics. Of a rigid pair of opposite blades in
    periodic motion one flaps as the other did half a turn before, and their flap adds up to twice
    the built-in angle: only odd harmonics remain. The projection of a pair's moment on odd
    harmonics is the moment about its common hinge.

    Args:
        hub: Freedom of flap.
        n_azimuths: Collocation azimuths in one turn.
        n_harmonics: Highest harmonic.

    Returns:
        The motion; the first harmonic comes first, then the mean if free, then the others.
    """
    is_pair = hub.pair > 0.0
    orders = [n for n in range(2, n_harmonics + 1) if not is_pair or n % 2 == 1]
    order = np.array([1] + ([] if is_pair else [0]) + orders)
    return _harmonics(n_azimuths, order)


def held_motion(hub: HubFreedom, n_azimuths: int) -> Motion:
    """Blades that keep their flap angle: no freedoms.

    For a pair the azimuths run through two turns, the first for the lower blade, the second for
    the upper one.

    Args:
        hub: Freedom of flap.
        n_azimuths: Azimuths in one turn.

    Returns:
        The motion, without freedoms.
    """
    turn = _harmonics(n_azimuths, np.array([1])).azimuth_rad
    azimuth = np.concatenate([turn] * (2 if hub.pair > 0.0 else 1))
    none = np.zeros((azimuth.size, 0))
    return Motion(n_azimuths, azimuth, none, none, none, none.T, has_first_harmonic=False)


def held_flap_rad(
    hub: HubFreedom,
    droop_rad: FloatArray,
    up_rad: FloatArray,
    n_azimuths: int,
    *,
    on_up: bool = False,
) -> FloatArray:
    """Flap of blades at rest on their stop.

    A pair comes to rest on whichever stop it reaches first: the lower blade on its droop stop or
    the upper one on its up stop.

    Args:
        hub: Freedom of flap.
        droop_rad: Angle of the droop stop, (cases,).
        up_rad: Angle of the up stop, (cases,).
        n_azimuths: Azimuths in one turn.
        on_up: Blades that flap alone lie on the up stop, as gravity makes them when inverted.

    Returns:
        Flap over the azimuths of `held_motion`, (cases, azimuths).
    """
    if hub.pair == 0.0:
        return np.repeat((up_rad if on_up else droop_rad)[:, None], n_azimuths, axis=1)
    lower = np.fmax(droop_rad, 2.0 * hub.fixed_flap_rad - up_rad)
    both = np.stack([lower, 2.0 * hub.fixed_flap_rad - lower], axis=1)
    return np.repeat(both, n_azimuths, axis=1)


def pair_moment(hub: HubFreedom, moment: FloatArray) -> FloatArray:
    """Moment about the hinge of what flaps together, for blades at rest.

    Args:
        hub: Freedom of flap.
        moment: Moment of one blade over the azimuths of `held_motion`, (cases, azimuths).

    Returns:
        The same for a blade that flaps alone. For a pair, the lower blade's moment less that of
        the opposite blade half a turn ahead, (cases, azimuths of one turn).
    """
    if hub.pair == 0.0:
        return moment
    half = moment.shape[1] // 2
    opposite = np.roll(moment[:, half:], -(half // 2), axis=1)
    return moment[:, :half] - opposite


def expand(freedoms: FloatArray, basis: FloatArray) -> FloatArray:
    """Basis times freedoms for each case, summed in a fixed order.

    Args:
        freedoms: (cases, freedoms).
        basis: (azimuths, freedoms).

    Returns:
        Values over the azimuth, (cases, azimuths).
    """
    result = np.zeros((freedoms.shape[0], basis.shape[0]))
    for column in range(basis.shape[1]):
        result += freedoms[:, column, None] * basis[:, column]
    return result


def fine_basis(motion: Motion, hub: HubFreedom, n_azimuths: int) -> FloatArray:
    """Basis of a motion on a finer azimuth grid, for its highest and lowest flap.

    Args:
        motion: A motion of `free_motion`.
        hub: Freedom of flap.
        n_azimuths: Azimuths in one turn.

    Returns:
        Flap for unit freedoms, (azimuths, freedoms).
    """
    harmonics = motion.n_freedoms if hub.pair > 0.0 else (motion.n_freedoms - 1) // 2
    return free_motion(hub, n_azimuths, harmonics).basis


@lru_cache(maxsize=8)
def between_azimuths(n_azimuths: int, n_fine: int) -> FloatArray:
    """Matrix that takes values at even azimuths of a turn to a finer grid.

    Trigonometric interpolation with the harmonics below half the number of azimuths.

    Args:
        n_azimuths: Azimuths in one turn.
        n_fine: Azimuths of the finer grid.

    Returns:
        Weights, (finer azimuths, azimuths); rows sum to 1.
    """
    apart = (
        2.0 * np.pi * (np.arange(n_fine)[:, None] / n_fine - np.arange(n_azimuths) / n_azimuths)
    )
    weights = np.ones_like(apart)
    for n in range(1, (n_azimuths + 1) // 2):
        weights += 2.0 * np.cos(n * apart)
    return weights / n_azimuths


def _harmonics(n_azimuths: int, order: NDArray[np.int64]) -> Motion:
    azimuth = 2.0 * np.pi * np.arange(n_azimuths) / n_azimuths
    columns, slopes, weights = [], [], []
    for n in order:
        if n == 0:
            columns.append(np.ones_like(azimuth))
            slopes.append(np.zeros_like(azimuth))
            weights.append(1.0)
            continue
        columns += [np.cos(n * azimuth), np.sin(n * azimuth)]
        slopes += [-n * np.sin(n * azimuth), n * np.cos(n * azimuth)]
        weights += [2.0, 2.0]
    numbers = np.concatenate([[n] if n == 0 else [n, n] for n in order])
    basis = np.stack(columns, axis=1)
    projection = np.ascontiguousarray((basis * np.array(weights)).T) / n_azimuths
    return Motion(
        n_turn=n_azimuths,
        azimuth_rad=azimuth,
        basis=basis,
        basis_slope=np.stack(slopes, axis=1),
        basis_curvature=-(numbers**2) * basis,
        projection=projection,
        has_first_harmonic=True,
    )
