"""A mode's frequencies corrected by measurements, and the allowance that they leave.

What a frequency at speed has from structure, and what from rotation, stand apart in its square.
Measurements scale the structure's part; rotation's part follows from mass and geometry.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

from planner.methods.validity import require_within

if TYPE_CHECKING:
    from numpy.typing import ArrayLike, NDArray

    FloatArray = NDArray[np.float64]

FREQUENCY_RANGE_RAD_S = (0.0, 1e5)
SPEED_RANGE_RAD_S = (0.0, 1e4)
ACCURACY_RANGE = (0.0, 0.1)
SMALLEST_ACCURACY = 1e-3
"""Finer accuracies do not weigh more in the fit."""
FURTHEST_MEASURED = 0.2
"""Share by which a measurement may differ from the model and still be the same mode."""
STRUCTURAL_RANGE = ((1.0 - FURTHEST_MEASURED) ** 2, (1.0 + FURTHEST_MEASURED) ** 2)
SMALLEST_PART = 1e-3
"""Share of the squared frequency below which structure's part says nothing: a free hinge."""


@dataclass(frozen=True, eq=False)
class Measured:
    """Measurements of one mode and what the model says there, each (measurements,).

    Attributes:
        speed_rad_s: Rotor speeds at which it was found [rad/s].
        frequency_rad_s: Frequencies found [rad/s].
        accuracy: Accuracy of each, share of the frequency.
        model_rad_s: Model's frequency at that speed and pitch [rad/s].
        model_at_rest_rad_s: Model's frequency at rest, same pitch [rad/s].
    """

    speed_rad_s: FloatArray
    frequency_rad_s: FloatArray
    accuracy: FloatArray
    model_rad_s: FloatArray
    model_at_rest_rad_s: FloatArray


@dataclass(frozen=True, eq=False)
class Corrected:
    """The corrected mode.

    Attributes:
        frequency_rad_s: Corrected frequencies, shape (lanes,) [rad/s].
        low_rad_s: Lowest that they may be, shape (lanes,) [rad/s].
        high_rad_s: Highest that they may be, shape (lanes,) [rad/s].
        correction: Share by which the frequency changed where it was measured first.
        residual: Largest share by which a measurement still differs, and the accuracy on top.
        structural_factor: What structure's part of the squared frequency was multiplied by.
    """

    frequency_rad_s: FloatArray
    low_rad_s: FloatArray
    high_rad_s: FloatArray
    correction: float
    residual: float
    structural_factor: float


def correct(
    measured: Measured,
    speed_rad_s: ArrayLike,
    model_rad_s: ArrayLike,
    model_at_rest_rad_s: ArrayLike,
    allowance: tuple[float, float],
) -> Corrected:
    """Model frequencies with their structural part fitted to measurements.

    f_c² = f² + (s - 1) f₀², s by least squares of f_i² / f² - 1 with the weights 1 / accuracy²
    residual r = max |f_i / f_c - 1| + max accuracy, the allowance between measured speeds.
    Above the highest measured speed what is gained since then keeps the rule book's allowance
    where that is the wider: low² = f_c²(highest) (1 - r)² + gain · low_book², high alike. Below
    the lowest measured speed, where structure's part f₀²/f² is larger than it was in any
    measurement, the rule book's allowance on the uncorrected model counts as well.

    Args:
        measured: Measurements of this mode, and the model there.
        speed_rad_s: Rotor speeds wanted, (lanes,) [rad/s].
        model_rad_s: Model's frequencies f there, (lanes,) [rad/s].
        model_at_rest_rad_s: Model's frequencies at rest f₀, same pitch, (lanes,) [rad/s].
        allowance: The rule book's factors on a frequency that nobody measured, low and high.

    Returns:
        Corrected frequencies with both ends of their allowance.

    Raises:
        ValueError: An input outside its range, a measurement more than 20 % from the model, or
            no frequency left after the correction.

    Validity:
        One stiffness error for the whole structure. s stays from 0.64 to 1.44, the same 20 % at
        rest; what it cannot mend stays in the residual. So does all of it where structure has
        no part in the frequency, as with a free hinge.

    Source:
        Southwell's separation of structure and rotation in the squared frequency (from memory);
        weighted least squares.

    Example:
        >>> rap = Measured(*(np.array([v]) for v in (0.0, 21.0, 0.01, 20.0, 20.0)))
        >>> found = correct(rap, [0.0, 30.0], [20.0, 40.0], [20.0, 20.0], (0.95, 1.05))
        >>> found.frequency_rad_s.round(3).tolist(), round(found.residual, 3)
        ([21.0, 40.509], 0.01)
    """
    known = _checked(measured)
    speed, f, f0 = _wanted(speed_rad_s, model_rad_s, model_at_rest_rad_s)
    s = _structural_factor(known)
    there = _corrected(known.model_rad_s, known.model_at_rest_rad_s, s)
    wanted = _corrected(f, f0, s)
    r = float(np.max(np.abs(known.frequency_rad_s / there - 1.0)) + np.max(known.accuracy))
    last = int(np.argmax(known.speed_rad_s))
    low, high = (np.array([1.0 - r, 1.0 + r]) * wanted[:, None]).T
    beyond = speed > known.speed_rad_s[last]
    reached = _beyond(wanted, float(there[last]), r, allowance)
    below = (speed < known.speed_rad_s.min()) & (
        _structural_part(f, f0)
        > _structural_part(known.model_rad_s, known.model_at_rest_rad_s).max()
    )
    low = np.where(beyond, reached[0], low)
    high = np.where(beyond, reached[1], high)
    low = np.where(below, np.minimum(low, allowance[0] * f), low)
    high = np.where(below, np.maximum(high, allowance[1] * f), high)
    correction = float(there[0] / known.model_rad_s[0] - 1.0)
    return Corrected(wanted, low, high, correction, r, s)


def _checked(measured: Measured) -> Measured:
    """The measurements, or a refusal."""
    fields = (
        ("measured speed", measured.speed_rad_s, SPEED_RANGE_RAD_S, "rad/s"),
        ("measured frequency", measured.frequency_rad_s, FREQUENCY_RANGE_RAD_S, "rad/s"),
        ("accuracy", measured.accuracy, ACCURACY_RANGE, ""),
        ("model frequency", measured.model_rad_s, FREQUENCY_RANGE_RAD_S, "rad/s"),
        ("model frequency at rest", measured.model_at_rest_rad_s, FREQUENCY_RANGE_RAD_S, "rad/s"),
    )
    known = Measured(*(require_within(*field) for field in fields))
    if known.speed_rad_s.ndim != 1 or not known.speed_rad_s.size:
        shape = known.speed_rad_s.shape
        msg = f"measurements: expected a row of 1 or more, found shape {shape}; give one a mode"
        raise ValueError(msg)
    off = np.abs(known.frequency_rad_s - known.model_rad_s)
    wrong = off > FURTHEST_MEASURED * known.model_rad_s
    wrong |= known.model_rad_s <= 0.0
    if np.any(wrong):
        i = int(np.argmax(wrong))
        msg = (
            f"measured frequency: expected within {100.0 * FURTHEST_MEASURED:g} % of the model's "
            f"{known.model_rad_s[i]:g} rad/s, found {known.frequency_rad_s[i]:g} rad/s at "
            f"{known.speed_rad_s[i]:g} rad/s of rotor speed; check which mode it is, and the "
            "stiffness and mass that were entered"
        )
        raise ValueError(msg)
    return known


def _wanted(
    speed: ArrayLike, model: ArrayLike, at_rest: ArrayLike
) -> tuple[FloatArray, FloatArray, FloatArray]:
    """Speeds and model frequencies of the lanes, one shape."""
    ranges = (SPEED_RANGE_RAD_S, FREQUENCY_RANGE_RAD_S, FREQUENCY_RANGE_RAD_S)
    names = ("rotor speed", "model frequency", "model frequency at rest")
    speed, model, at_rest = np.broadcast_arrays(
        *(
            np.atleast_1d(require_within(name, value, bounds, "rad/s"))
            for name, value, bounds in zip(names, (speed, model, at_rest), ranges, strict=True)
        )
    )
    return speed, model, at_rest


def _structural_part(model: FloatArray, at_rest: FloatArray) -> FloatArray:
    """Share of structure in the squared frequency, next to none taken as none."""
    part = (at_rest / np.where(model > 0.0, model, np.inf)) ** 2
    result: FloatArray = np.where(part > SMALLEST_PART, part, 0.0)
    return result


def _structural_factor(known: Measured) -> float:
    """Factor on structure's part of the squared frequency."""
    part = _structural_part(known.model_rad_s, known.model_at_rest_rad_s)
    missing = (known.frequency_rad_s / known.model_rad_s) ** 2 - 1.0
    weight = 1.0 / np.maximum(known.accuracy, SMALLEST_ACCURACY) ** 2
    size = float(np.sum(weight * part**2))
    if size == 0.0:
        return 1.0
    factor = 1.0 + float(np.sum(weight * part * missing)) / size
    return float(np.clip(factor, *STRUCTURAL_RANGE))


def _corrected(model: FloatArray, at_rest: FloatArray, s: float) -> FloatArray:
    """Frequencies with structure's part scaled, or a refusal."""
    squared = model**2 + (s - 1.0) * at_rest**2
    if np.any((squared <= 0.0) & (model > 0.0)):
        i = int(np.argmin(squared))
        msg = (
            f"corrected frequency: expected a positive square, found {squared[i]:g} rad²/s² from "
            f"{model[i]:g} rad/s with structure's part times {s:g}; check the measurements"
        )
        raise ValueError(msg)
    result: FloatArray = np.sqrt(squared)
    return result


def _beyond(
    wanted: FloatArray, last: float, r: float, allowance: tuple[float, float]
) -> tuple[FloatArray, FloatArray]:
    """Ends of the allowance above the highest measured speed, from the frequency there."""
    gain = wanted**2 - last**2
    factors = np.array([min(allowance[0], 1.0 - r), max(allowance[1], 1.0 + r)]) ** 2
    ends = gain * factors[:, None]
    low = (last * (1.0 - r)) ** 2 + ends.min(axis=0)
    high = (last * (1.0 + r)) ** 2 + ends.max(axis=0)
    return np.sqrt(np.maximum(low, 0.0)), np.sqrt(high)
