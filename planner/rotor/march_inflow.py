"""Induced velocity of marched cases: momentum of each ring, and the mass of air in it."""

from __future__ import annotations

from typing import TYPE_CHECKING, Any

import numpy as np

from planner.methods.dynamic_inflow import APPARENT_MASS_SHARE

if TYPE_CHECKING:
    from numpy.typing import NDArray

    from planner.rotor.setup import RotorArrays

    Array = NDArray[np.floating[Any]]

LOSS_EVERY = 4
"""Steps between renewals of the tip and root loss factors, which change slowly."""
LEAST_M_S = 1e-6
GRADIENT_SHARE = 15.0 * np.pi / 32.0


class MarchInflow:
    """Rates of induced velocity ring by ring, and its gradient over the disc.

    (8/(3 pi)) R dv/dt = T'/(2 pi r rho) - 2 F v sqrt(V^2 + (v - w)^2): the steady state is that
    of `planner.rotor.annuli`, the mass that of Carpenter and Fridovich spread over the disc.
    """

    def __init__(
        self, arrays: RotorArrays, dtype: type[np.floating[Any]], *, gradient: bool
    ) -> None:
        """Take what the rotor gives."""
        r = arrays.station_radius_m
        self._n_blades = arrays.n_blades
        self._radius = r.astype(dtype)
        self._share = (r / arrays.radius_m).astype(dtype)
        mass = APPARENT_MASS_SHARE * arrays.radius_m
        self._by_force = (1.0 / (2.0 * np.pi * r * mass)).astype(dtype)
        self._by_momentum = dtype(2.0 / mass)
        x = r / arrays.radius_m
        root = arrays.aero_root_m / arrays.radius_m
        half = 0.5 * arrays.n_blades
        self._tip_spacing = (half * (1.0 - x) / x).astype(dtype)
        self._root_spacing = (half * np.maximum(x - root, 0.0) / x).astype(dtype)
        weight = arrays.station_width_m * r
        self._weight = (weight / np.sum(weight)).astype(dtype)
        self._has_gradient = gradient

    def loss(self, induced_m_s: Array, speed_rad_s: Array) -> Array:
        """Tip times root loss factor after Prandtl, (cases, stations)."""
        rotation = speed_rad_s[:, None] * self._radius
        flow = np.sqrt(rotation * rotation + induced_m_s * induced_m_s)
        sine = np.maximum(np.abs(induced_m_s), LEAST_M_S) / np.maximum(flow, LEAST_M_S)
        tip = np.arccos(np.exp(-self._tip_spacing / sine))
        tip *= np.arccos(np.exp(-self._root_spacing / sine))
        tip *= (2.0 / np.pi) ** 2
        return tip

    def rate(
        self, induced_m_s: Array, loss: Array, ring_force_N_m: Array, wind: tuple[Array, Array]
    ) -> Array:
        """Rate of induced velocity, (cases, stations) [m/s2].

        Args:
            induced_m_s: Induced velocity averaged over azimuth, (cases, stations).
            loss: Loss factor there.
            ring_force_N_m: Thrust per length of all blades over air density, (cases, stations).
            wind: In the disc plane, its size, and upward, each (cases,).

        Returns:
            The rate.
        """
        plane, up = wind
        carried = induced_m_s - up[:, None]
        carried *= carried
        carried += (plane * plane)[:, None]
        np.sqrt(carried, out=carried)
        carried *= induced_m_s
        carried *= loss
        carried *= self._by_momentum
        result: Array = ring_force_N_m * self._by_force
        result -= carried
        return result

    def gradient(self, induced_m_s: Array, wind_m_s: Array) -> Array:
        """Fore-aft gradient kx after Pitt and Peters, (cases,): (15 pi/32) tan(chi/2)."""
        if not self._has_gradient:
            return np.zeros_like(wind_m_s)
        mean = np.abs(np.matmul(induced_m_s[:, None, :], self._weight[:, None])[:, 0, 0])
        wind = np.abs(wind_m_s)
        size = np.sqrt(wind * wind + mean * mean) + mean
        kx: Array = GRADIENT_SHARE * wind_m_s / np.maximum(size, LEAST_M_S)
        return kx

    def over_disc(self, induced_m_s: Array, kx: Array, cosine: Array) -> Array:
        """Induced velocity at blades, (cases, blades, stations).

        Args:
            induced_m_s: Averaged over azimuth, (cases, stations).
            kx: Gradient, (cases,).
            cosine: Cosine of the blades' azimuth, (cases, blades).

        Returns:
            v (1 + kx (r/R) cos psi).
        """
        tilt: Array = (kx[:, None] * cosine)[:, :, None] * self._share
        tilt += 1.0
        tilt *= induced_m_s[:, None, :]
        return tilt
