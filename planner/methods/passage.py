"""Passing a resonance of the stand: peak response and turns spent in a speed band.

A mode of the stand is one degree of freedom, driven by the rotor's unbalance while the speed
follows a given history. The history is a table at even times, straight between its points.
"""

from dataclasses import dataclass
from typing import Literal

import numpy as np
import numpy.typing as npt

from planner.methods.validity import Array, require_within

Complex = npt.NDArray[np.complex128]
Excitation = Literal["unbalance", "constant force"]

SPEED_RANGE_RAD_S = (0.0, 1e4)
STEP_RANGE_S = (1e-6, 1e4)
FREQUENCY_RANGE_RAD_S = (1e-2, 1e4)
DAMPING_RANGE = (1e-7, 0.5)
LONGEST_TURN_RAD = 1.0
"""Turn of rotor and mode together within one step of the march."""
LARGEST_PHASE_ERROR_RAD = 0.1
ELEMENTS_AT_ONCE = 1 << 16
NODES = np.array([0.5 - np.sqrt(0.15), 0.5, 0.5 + np.sqrt(0.15)])
WEIGHTS = np.array([5.0, 8.0, 5.0]) / 18.0


@dataclass(frozen=True, slots=True, eq=False)
class SpeedTable:
    """Rotor speed at even times, straight between them.

    Attributes:
        speed_rad_s: Speed (lanes, points), zero or above, 2 points or more [rad/s].
        step_s: Time between points, one for all or one a lane (lanes,) [s].
    """

    speed_rad_s: Array
    step_s: float | Array


@dataclass(frozen=True, slots=True, eq=False)
class PassagePeak:
    """Largest response over the table, each (lanes, modes).

    Attributes:
        amplitude: Amplitude over unbalance offset; over static deflection for a constant force.
        speed_rad_s: Rotor speed when it is reached [rad/s].
        time_s: Time from the table's start when it is reached [s].
        held_amplitude: Bound of what comes after the table if its last speed is then held: steady
            response there and all that still rings. Above the amplitude where a table ends before
            the mode has had its say.
    """

    amplitude: Array
    speed_rad_s: Array
    time_s: Array
    held_amplitude: Array


@dataclass(frozen=True, slots=True, eq=False)
class _Ramp:
    """Straight pieces of the history, time first: (pieces, lanes); step (lanes,)."""

    start_rad_s: Array
    slope_rad_s2: Array
    phase_rad: Array
    step_s: Array


@dataclass(frozen=True, slots=True, eq=False)
class _Mode:
    """Both roots of the modes (2, lanes, modes) and what the force is multiplied by."""

    root: Complex
    scale: Array
    unbalance: bool


def passage_peak(
    table: SpeedTable,
    frequency_rad_s: npt.ArrayLike,
    damping_ratio: npt.ArrayLike,
    excitation: Excitation = "unbalance",
) -> PassagePeak:
    """Peak response of modes of the stand while the rotor follows a speed history.

    x'' + 2 zeta w x' + w^2 x = (Omega^2 - i Omega') e^(i psi), psi' = Omega

    Real and imaginary part of x are two starting angles of the unbalance a quarter turn apart, so
    that |x| is the worst over every angle. x splits into two parts with one root each,
    y' = lambda y + force, marched with e^(lambda h) exactly; the force is integrated over each
    step by three Gauss points, with speed and angle exact on the straight line.

    The start is the steady response at the first speed. With a constant force, w^2 e^(i psi),
    the table may hold a multiple of rotor speed: a force n times a turn sweeps n times as fast.

    Args:
        table: Speed history (lanes, points).
        frequency_rad_s: Undamped frequency w, (modes,) or (lanes, modes) [rad/s].
        damping_ratio: Part of critical damping zeta, same shape or one number.
        excitation: Unbalance of unit offset, or a force of constant size that would deflect the
            mode by one at rest.

    Returns:
        Peaks (lanes, modes). A lane's numbers do not depend on its companions.

    Raises:
        ValueError: An input outside its range, or a table too coarse for its own curvature.

    Validity:
        One mode at a time, linear, damping 1e-7 to 0.5 of critical; drive not slowed by the
        vibration. Peak within 0.02 % of the same equation integrated adaptively, speed at the peak
        within 1 %, for the table as straight lines. A curved history loses phase between points,
        step * (sum of |changes of slope|) / 12; above 0.1 rad it is refused, below that the
        peak errs by less than 1 %.

    Source:
        Newton's law for a mass that turns with the rotor; exact solution (computed).

    Example:
        >>> slow = SpeedTable(np.linspace(8.0, 12.0, 401)[None, :], 2.0)
        >>> round(float(passage_peak(slow, [10.0], 0.05).amplitude[0, 0]), 2)
        10.03
    """
    speed, step = _checked(table)
    _require_fine(speed, step)
    w, zeta = _modes(frequency_rad_s, damping_ratio, len(speed))
    turn = (w.max(axis=1, initial=0.0) + speed.max(axis=1)) * step
    pieces = 2 ** np.ceil(np.log2(np.maximum(turn / LONGEST_TURN_RAD, 1.0))).astype(np.int64)
    found = np.zeros((4, *w.shape))
    for count in np.unique(pieces):
        lanes = pieces == count
        root = w[lanes] * (-zeta[lanes] + 1j * np.sqrt(1.0 - zeta[lanes] ** 2))
        unbalance = excitation == "unbalance"
        scale = np.ones_like(w[lanes]) if unbalance else w[lanes] ** 2
        mode = _Mode(np.stack([root, root.conj()]), scale, unbalance)
        found[:, lanes] = _march(_ramp(speed[lanes], step[lanes]), mode, int(count))
    return PassagePeak(*found)


def turns_inside(table: SpeedTable, low_rad_s: npt.ArrayLike, high_rad_s: npt.ArrayLike) -> Array:
    """Turns of the rotor while its speed lies inside a band.

    N = (1 / 2 pi) int Omega dt over low <= Omega <= high

    Args:
        table: Speed history (lanes, points).
        low_rad_s: Lower edge of the band, one or one a lane [rad/s].
        high_rad_s: Upper edge of the band, one or one a lane [rad/s].

    Returns:
        Turns (lanes,); exact for the table as straight lines, every passage counted.

    Raises:
        ValueError: A band whose lower edge is above its upper, or an input outside its range.

    Source:
        Definition.

    Example:
        >>> ramp = SpeedTable(np.array([[0.0, 10.0, 20.0]]), 1.0)
        >>> round(float(turns_inside(ramp, 5.0, 15.0)[0] * 2.0 * np.pi), 3)
        10.0
    """
    speed, step = _checked(table)
    low, high = (
        np.broadcast_to(require_within(name, edge, SPEED_RANGE_RAD_S, "rad/s"), len(speed))
        for name, edge in (("band's lower edge", low_rad_s), ("band's upper edge", high_rad_s))
    )
    if np.any(low > high):
        wrong = int(np.argmax(low > high))
        message = (
            f"speed band: expected a lower edge up to the upper, found {low[wrong]:g} to "
            f"{high[wrong]:g} rad/s; give the lower edge first"
        )
        raise ValueError(message)
    low, high = low[:, None], high[:, None]
    inside = np.clip(speed, low, high)
    change = np.diff(speed, axis=1)
    flat = change == 0.0
    held = ((speed >= low) & (speed <= high))[:, 1:].astype(np.float64)
    share = np.where(flat, held, np.diff(inside, axis=1) / np.where(flat, 1.0, change))
    mean = 0.5 * (inside[:, 1:] + inside[:, :-1])
    return np.asarray((share * mean).sum(axis=1) * step / (2.0 * np.pi))


def _checked(table: SpeedTable) -> tuple[Array, Array]:
    """Speed (lanes, points) and step (lanes,), or a refusal."""
    speed = require_within("rotor speed", table.speed_rad_s, SPEED_RANGE_RAD_S, "rad/s")
    if speed.ndim != 2 or speed.shape[1] < 2:  # noqa: PLR2004
        message = (
            f"speed table: expected lanes by 2 points or more, found shape {speed.shape}; "
            "give one row a lane"
        )
        raise ValueError(message)
    step = require_within("speed table step", table.step_s, STEP_RANGE_S, "s")
    return speed, np.array(np.broadcast_to(step, len(speed)))


def _require_fine(speed: Array, step: Array) -> None:
    """Refuse a table whose curvature shifts the phase between its points."""
    error = step * np.abs(np.diff(speed, 2, axis=1)).sum(axis=1) / 12.0
    worst = float(error.max(initial=0.0))
    if worst > LARGEST_PHASE_ERROR_RAD:
        message = (
            f"speed table step: expected a phase error up to {LARGEST_PHASE_ERROR_RAD:g} rad "
            f"between points, found {worst:.3g} rad; give the speed at shorter steps"
        )
        raise ValueError(message)


def _modes(frequency: npt.ArrayLike, damping: npt.ArrayLike, lanes: int) -> tuple[Array, Array]:
    """Frequency and damping, each (lanes, modes)."""
    w = require_within("frequency", frequency, FREQUENCY_RANGE_RAD_S, "rad/s")
    zeta = require_within("damping ratio", damping, DAMPING_RANGE, "")
    shape = (lanes, np.broadcast_shapes(w.shape, zeta.shape, (1, 1))[-1])
    return np.array(np.broadcast_to(w, shape)), np.array(np.broadcast_to(zeta, shape))


def _ramp(speed: Array, step: Array) -> _Ramp:
    """Straight pieces of a table, time first."""
    start, change = speed[:, :-1].T, np.diff(speed, axis=1).T
    turned = np.cumsum((start + 0.5 * change) * step, axis=0)
    phase = np.concatenate([np.zeros((1, len(step))), turned[:-1]])
    return _Ramp(np.ascontiguousarray(start), change / step, phase, step)


def _march(ramp: _Ramp, mode: _Mode, count: int) -> Array:
    """Fields of a `PassagePeak`, (4, lanes, modes); count steps in a piece."""
    h = ramp.step_s[:, None] / count
    decay = np.exp(mode.root * h)
    reach = (1.0 - NODES)[:, None, None, None]
    weights = h * WEIGHTS[:, None, None, None] * np.exp(mode.root * h * reach)
    first = ramp.start_rad_s[0]
    y = _steady(first, 0.0 * first, mode)
    gain = mode.scale / np.abs(mode.root[0] - mode.root[1])
    peak = np.stack([np.abs(y[0] - y[1]) * gain, first[:, None] + 0.0 * gain, 0.0 * gain])
    block = max(1, ELEMENTS_AT_ONCE // (count * max(gain.size, 1)))
    for begin in range(0, len(ramp.phase_rad), block):
        part = slice(begin, begin + block)
        drive = np.einsum("gsln,tgl->tsln", weights, _force(ramp, part, count, mode.unbalance))
        for force_of_step in drive:
            force_of_step += decay * y  # noqa: PLW2901
            y = force_of_step
        _keep_larger(peak, np.abs(drive[:, 0] - drive[:, 1]) * gain, ramp, begin, count)
    start, change = ramp.start_rad_s[-1], ramp.slope_rad_s2[-1] * ramp.step_s
    phase = ramp.phase_rad[-1] + (start + 0.5 * change) * ramp.step_s
    held = _steady(start + change, phase, mode)
    bound = np.abs(held[0] - held[1]) + np.abs(y - held).sum(axis=0)
    return np.concatenate([peak, (bound * gain)[None]])


def _steady(speed: Array, phase: Array, mode: _Mode) -> Complex:
    """Both parts of the steady response at a held speed (2, lanes, modes)."""
    force = np.exp(1j * phase) * (speed**2 if mode.unbalance else 1.0)
    return np.asarray(force[:, None] / (1j * speed[:, None] - mode.root))


def _force(ramp: _Ramp, part: slice, count: int, unbalance: bool) -> Complex:  # noqa: FBT001
    """Force at the Gauss points of each step, (steps, 3, lanes)."""
    share = (np.arange(count)[:, None] + NODES) / count
    t = share[:, :, None] * ramp.step_s
    start, slope, phase = (
        value[part][:, None, None, :]
        for value in (ramp.start_rad_s, ramp.slope_rad_s2, ramp.phase_rad)
    )
    turning = np.exp(1j * (phase + (start + 0.5 * slope * t) * t))
    if unbalance:
        turning *= (start + slope * t) ** 2 - 1j * slope
    return np.asarray(turning.reshape(-1, *turning.shape[2:]))


def _keep_larger(peak: Array, size: Array, ramp: _Ramp, begin: int, count: int) -> None:
    """Replace the peak, in place, where a block's largest size (steps, lanes, modes) tops it."""
    at = size.argmax(axis=0)
    best = np.take_along_axis(size, at[None], axis=0)[0]
    piece, lane = begin + at // count, np.arange(size.shape[1])[:, None]
    h = ramp.step_s[:, None] / count
    within = (at % count + 1) * h
    speed = ramp.start_rad_s[piece, lane] + ramp.slope_rad_s2[piece, lane] * within
    time = piece * ramp.step_s[:, None] + within
    peak[:] = np.where(best > peak[0], np.stack([best, speed, time]), peak)
