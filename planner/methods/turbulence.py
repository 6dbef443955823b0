"""Gusty wind near the ground as series of random numbers with a published spectrum."""

import math
from dataclasses import dataclass
from typing import Literal, get_args

import numpy as np
import numpy.typing as npt

from planner.methods.validity import Array, require_within

Component = Literal["u", "v", "w"]
"""Along the mean wind, across it, and up."""

MEAN_RANGE_M_S = (1.0, 75.0)
HEIGHT_RANGE_M = (2.0, 100.0)
INTENSITY_RANGE = (0.0, 0.5)
FREQUENCY_RANGE_HZ = (0.0, 100.0)
DURATION_RANGE_S = (1.0, 7200.0)
STEP_RANGE_S = (1e-3, 60.0)
STEPS_A_PERIOD = 4.0
"""Steps in the shortest period: a straight line between steps then follows it."""
LEAST_SHARE = 0.5
"""Share of a component's variance that the band of a series must hold before it is scaled up."""

_FORMS: dict[Component, tuple[float, float, float, float]] = {
    "u": (105.0, 33.0, 1.0, 5.0 / 3.0),
    "v": (17.0, 9.5, 1.0, 5.0 / 3.0),
    "w": (2.1, 5.3, 5.0 / 3.0, 1.0),
}
"""a, b, p, q of n S / u*^2 = a f / (1 + b f^p)^q."""


@dataclass(frozen=True, slots=True)
class SurfaceWind:
    """Wind at one height over the ground.

    Attributes:
        mean_m_s: Mean wind at that height [m/s], 1 to 75.
        height_m: Height over ground [m], 2 to 100.
        intensity: Standard deviation of the along-wind speed over the mean, 0 to 0.5.
        highest_hz: Highest frequency that a series holds [Hz].
    """

    mean_m_s: float
    height_m: float
    intensity: float
    highest_hz: float


def kaimal_spectrum(
    frequency_hz: npt.ArrayLike,
    height_m: npt.ArrayLike,
    mean_m_s: npt.ArrayLike,
    component: Component,
) -> Array:
    """One-sided spectrum of one wind component, over the square of the friction velocity.

    n S_u / u*^2 = 105 f / (1 + 33 f)^(5/3)
    n S_v / u*^2 = 17 f / (1 + 9.5 f)^(5/3)
    n S_w / u*^2 = 2.1 f / (1 + 5.3 f^(5/3)),  f = n z / V

    Args:
        frequency_hz: Frequency n, 0 to 100 [Hz].
        height_m: Height z over ground [m].
        mean_m_s: Mean wind V at that height [m/s].
        component: u along the wind, v across, w up.

    Returns:
        S / u*^2 [1/Hz], broadcast shape; its integral over n is `kaimal_variance`.

    Raises:
        ValueError: Unknown component; frequency, height or mean wind outside its range.

    Validity:
        Neutral air over flat open ground, 2 m to 100 m (measured to 23 m), from 1 m/s. Not behind
        a building or trees. Convective air has more slow u and v.

    Source:
        J. C. Kaimal, J. C. Wyngaard, Y. Izumi, O. R. Cote: Spectral Characteristics of
        Surface-Layer Turbulence, Quarterly Journal of the Royal Meteorological Society 98, 1972,
        563-589 (from memory).

    Example:
        >>> round(float(kaimal_spectrum(0.1, 10.0, 10.0, "u")), 3)
        9.234
    """
    n = require_within("frequency", frequency_hz, FREQUENCY_RANGE_HZ, "Hz")
    z = require_within("height over ground", height_m, HEIGHT_RANGE_M, "m")
    V = require_within("mean wind", mean_m_s, MEAN_RANGE_M_S, "m/s")
    a, b, p, q = _form(component)
    f = n * z / V
    return np.asarray(a * (z / V) / (1.0 + b * f**p) ** q)


def kaimal_variance(component: Component) -> float:
    """Variance of one wind component, over the square of the friction velocity.

    sigma^2 / u*^2 = integral of a / (1 + b f^p)^q over f
    = (a / p) b^(-1/p) Gamma(1/p) Gamma(q - 1/p) / Gamma(q)

    Args:
        component: u along the wind, v across, w up.

    Returns:
        sigma^2 / u*^2; the deviations stand as 1 to 0.750 to 0.566 for u, v, w.

    Raises:
        ValueError: Unknown component.

    Validity:
        As `kaimal_spectrum`.

    Source:
        Integral of the published spectrum (computed).

    Example:
        >>> [round(kaimal_variance(c), 3) for c in ("u", "v", "w")]
        [4.773, 2.684, 1.53]
    """
    a, b, p, q = _form(component)
    shape = math.gamma(1.0 / p) * math.gamma(q - 1.0 / p) / (p * math.gamma(q))
    return float(a * b ** (-1.0 / p) * shape)


def turbulence_series(
    wind: SurfaceWind, duration_s: float, step_s: float, n_series: int, seed: int
) -> Array:
    """Series of what gusty wind adds to its mean, in three components.

    x(t) = sum over k of A_k cos(2 pi k t / T + phase_k),
    A_k^2 / 2 = c S(k / T) / T,  sum of A_k^2 / 2 = sigma^2,
    sigma_u = I V,  sigma_v and sigma_w from sigma_u in the ratio of `kaimal_variance`

    The amplitudes A are fixed and only the phases are random, so that every series has the whole
    variance. What the spectrum holds below 1/T and above the highest frequency is given to the
    band between by the factor c: no variance is lost, and in the band the series reads high.

    Args:
        wind: Mean V, height, intensity I and highest frequency.
        duration_s: Least length T of a series [s]; a fraction of a step is filled up. Take the
            time over which the intensity was measured, often ten minutes.
        step_s: Step in time [s], at most a quarter of the shortest period.
        n_series: Number of series, at least 1.
        seed: Seed of the phases, 0 or more. Each series has its own stream of random numbers: it
            is the same however many are asked for.

    Returns:
        (series, times, 3): u along the mean wind, v across, w up [m/s], at times 0, 1, 2 ...
        steps. Zero mean, and periodic: the first value follows the last.

    Raises:
        ValueError: An input outside its range; a step too long for the highest frequency; a band
            that holds less than half of a component's variance.

    Validity:
        As `kaimal_spectrum`. Wind at one point, to be taken all over the disc: it is not averaged
        over the rotor, which is severe where gusts are smaller than the disc, and it has no
        gradient over the disc. The phases of the components are independent: the shear stress of
        the ground layer is left out.

    Source:
        Spectrum as `kaimal_spectrum` (from memory); M. Shinozuka, C.-M. Jan: Digital Simulation
        of Random Processes and its Applications, Journal of Sound and Vibration 25, 1972
        (from memory).

    Example:
        >>> found = turbulence_series(SurfaceWind(10.0, 9.0, 0.2, 5.0), 600.0, 0.05, 1, 7)
        >>> found.shape, round(float(found[0, :, 0].std()), 3)
        ((1, 12000, 3), 2.0)
    """
    _check_series(wind, duration_s, step_s)
    if n_series < 1 or seed < 0:
        message = (
            "turbulence series: expected at least 1 series and a seed of 0 or more, "
            f"found {n_series} and {seed}; mend the plan's turbulence"
        )
        raise ValueError(message)
    n_times = math.ceil(duration_s / step_s * (1.0 - 1e-12))
    amplitude = _amplitudes_m_s(wind, n_times, step_s)
    streams = np.random.SeedSequence(seed).spawn(n_series)
    return np.stack([_one_series(amplitude, n_times, stream) for stream in streams])


def _amplitudes_m_s(wind: SurfaceWind, n_times: int, step_s: float) -> Array:
    """Amplitudes of the Fourier components, (3, frequencies); none at zero and above the cut."""
    frequency = np.fft.rfftfreq(n_times, step_s)
    inside = (frequency > 0.0) & (frequency <= wind.highest_hz * (1.0 + 1e-9))
    amplitude = np.zeros((3, frequency.size))
    for i, component in enumerate(_FORMS):
        density = kaimal_spectrum(frequency[inside], wind.height_m, wind.mean_m_s, component)
        held = float(density.sum()) / (n_times * step_s)
        _check_share(held / kaimal_variance(component), component)
        ratio = kaimal_variance(component) / kaimal_variance("u")
        variance = (wind.intensity * wind.mean_m_s) ** 2 * ratio
        amplitude[i, inside] = np.sqrt(2.0 * variance * density / float(density.sum()))
    return amplitude


def _one_series(amplitude: Array, n_times: int, stream: np.random.SeedSequence) -> Array:
    """One series, (times, 3), from its own random phases."""
    phase = np.random.Generator(np.random.PCG64(stream)).uniform(0.0, 2.0 * np.pi, amplitude.shape)
    spectrum = 0.5 * n_times * amplitude * np.exp(1j * phase)
    return np.ascontiguousarray(np.fft.irfft(spectrum, n_times, axis=1).T)


def _check_series(wind: SurfaceWind, duration_s: float, step_s: float) -> None:
    require_within("turbulence intensity", wind.intensity, INTENSITY_RANGE, "")
    require_within("duration of the series", duration_s, DURATION_RANGE_S, "s")
    require_within("step of the series", step_s, STEP_RANGE_S, "s")
    if not wind.highest_hz > 0.0:
        message = (
            f"highest frequency: expected above 0 Hz, found {wind.highest_hz:g}; "
            "give the frequency at which the spectrum is cut"
        )
        raise ValueError(message)
    longest = 1.0 / (STEPS_A_PERIOD * wind.highest_hz)
    if step_s > longest * (1.0 + 1e-9):
        message = (
            f"step of the series: expected at most {longest:g} s for {wind.highest_hz:g} Hz, "
            f"found {step_s:g} s; take a shorter step or a lower highest frequency"
        )
        raise ValueError(message)


def _check_share(share: float, component: Component) -> None:
    if share < LEAST_SHARE:
        message = (
            f"turbulence series: expected {LEAST_SHARE:g} or more of the variance of {component} "
            f"between 1/duration and the highest frequency, found {share:.2f}; take a longer "
            "series or a higher highest frequency"
        )
        raise ValueError(message)


def _form(component: Component) -> tuple[float, float, float, float]:
    if component not in _FORMS:
        message = (
            f"wind component: expected one of {', '.join(get_args(Component))}, "
            f"found {component}; u is along the wind, v across, w up"
        )
        raise ValueError(message)
    return _FORMS[component]
