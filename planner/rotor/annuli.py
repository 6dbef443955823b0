"""Induced velocity annulus by annulus, and its gradient over the disc."""

from __future__ import annotations

from typing import TYPE_CHECKING, Literal

import numpy as np

from planner.methods.hover import closed_form_inflow_ratio
from planner.methods.inflow import (
    coleman_gradient,
    edgewise_induced_velocity_m_s,
    pitt_peters_gradient,
    root_loss_factor,
    tip_loss_factor,
)

if TYPE_CHECKING:
    from numpy.typing import NDArray

    from planner.rotor.case import Cases
    from planner.rotor.setup import RotorArrays

    FloatArray = NDArray[np.float64]

Gradient = Literal["pitt-peters", "coleman", "none"]

VELOCITY_STEP_SHARE = 1e-6
LEAST_VELOCITY_M_S = 1e-6
START_LIFT_SLOPE_PER_RAD = 5.7


def wake_force_n_m(rotor: RotorArrays, cases: Cases, induced_m_s: FloatArray) -> FloatArray:
    """Thrust per length that the momentum of each annulus takes up.

    dT/dr = 4 pi r F rho v sqrt(V^2 + v^2), F = F_tip F_root with sin phi = |v| / sqrt((Omega r)^2
    + v^2). In hover this is blade-element momentum theory; at speed Glauert's hypothesis, taken
    ring by ring. Changes sign with v, so that downward thrust is treated alike.

    Args:
        rotor: The rotor.
        cases: Held states.
        induced_m_s: Induced velocity v averaged over azimuth, (cases, stations).

    Returns:
        Thrust per length [N/m], (cases, stations).

    Validity:
        Wake carried away by v and V; the tilt of the disc against the wind and swirl are left
        out. The loss factors are those of hover also in wind.

    Source:
        Gessow & Myers 1952 and Leishman 2006 (classical theory, from memory).
    """
    r = rotor.station_radius_m
    x = r / rotor.radius_m
    rotation = cases.speed_rad_s[:, None] * r
    flow = np.sqrt(rotation * rotation + induced_m_s * induced_m_s)
    sine = np.abs(induced_m_s) / np.maximum(flow, LEAST_VELOCITY_M_S)
    loss = tip_loss_factor(rotor.n_blades, x, sine)
    loss *= root_loss_factor(rotor.n_blades, x, rotor.aero_root_m / rotor.radius_m, sine)
    V = cases.wind_m_s[:, None]
    carried = induced_m_s * np.sqrt(V * V + induced_m_s * induced_m_s)
    force: FloatArray = 4.0 * np.pi * r * cases.air_density_kg_m3[:, None] * loss * carried
    return force


def wake_force_slope(
    rotor: RotorArrays, cases: Cases, induced_m_s: FloatArray, force_N_m: FloatArray
) -> FloatArray:
    """Derivative of `wake_force_n_m` with the induced velocity, by difference quotient.

    Args:
        rotor: The rotor.
        cases: Held states.
        induced_m_s: Induced velocity, (cases, stations).
        force_N_m: `wake_force_n_m` there.

    Returns:
        Slope [N/m per m/s], (cases, stations), never negative.
    """
    step = VELOCITY_STEP_SHARE * np.maximum(np.abs(induced_m_s), LEAST_VELOCITY_M_S)
    step = np.where(induced_m_s < 0.0, -step, step)
    stepped = wake_force_n_m(rotor, cases, induced_m_s + step)
    slope: FloatArray = np.maximum((stepped - force_N_m) / step, 0.0)
    return slope


def gradient_over_disc(
    rotor: RotorArrays, cases: Cases, induced_m_s: FloatArray, gradient: Gradient
) -> FloatArray:
    """Fore-aft gradient kx of the induced velocity, from the skew of the mean wake.

    v(r, psi) = v(r) (1 + kx (r/R) cos psi)

    Args:
        rotor: The rotor.
        cases: Held states.
        induced_m_s: Induced velocity averaged over azimuth, (cases, stations).
        gradient: Which formula; "none" leaves the inflow even over azimuth.

    Returns:
        Gradient kx, (cases,), with the sign of the wind.
    """
    if gradient == "none":
        return np.zeros(cases.count)
    mean = mean_induced_m_s(rotor, induced_m_s)
    wind = np.abs(cases.wind_m_s)
    formula = pitt_peters_gradient if gradient == "pitt-peters" else coleman_gradient
    return np.asarray(np.where(wind > 0.0, np.sign(cases.wind_m_s) * formula(wind, mean), 0.0))


def mean_induced_m_s(rotor: RotorArrays, induced_m_s: FloatArray) -> FloatArray:
    """Induced velocity averaged over the area of the lifting annulus.

    Args:
        rotor: The rotor.
        induced_m_s: Induced velocity averaged over azimuth, (cases, stations).

    Returns:
        Mean [m/s], (cases,).
    """
    mean: FloatArray = np.sum(induced_m_s * mean_weights(rotor), axis=-1)
    return mean


def mean_weights(rotor: RotorArrays) -> FloatArray:
    """Share of each station in the area of the lifting annulus, (stations,).

    Args:
        rotor: The rotor.

    Returns:
        Shares, summing to 1.
    """
    weight = rotor.station_width_m * rotor.station_radius_m
    share: FloatArray = weight / np.sum(weight)
    return share


def starting_induced_m_s(rotor: RotorArrays, cases: Cases) -> FloatArray:
    """Closed-form first guess: hover inflow of a straight lift curve, thinned by the wind.

    Args:
        rotor: The rotor.
        cases: Held states.

    Returns:
        Induced velocity, (cases, stations) [m/s].
    """
    x = rotor.station_radius_m / rotor.radius_m
    solidity = rotor.n_blades * rotor.chord_m / (np.pi * rotor.radius_m)
    pitch = cases.collective_rad[:, None] + rotor.twist_rad
    ratio = closed_form_inflow_ratio(x, pitch, solidity * START_LIFT_SLOPE_PER_RAD, 1.0)
    hover = ratio * cases.speed_rad_s[:, None] * rotor.radius_m
    return edgewise_induced_velocity_m_s(2.0 * hover * np.abs(hover), 1.0, cases.wind_m_s[:, None])
