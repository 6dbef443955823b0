"""Frequencies with their allowance: the rule book's, or what a measurement leaves of it."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

from planner.methods.frequency_correction import Measured, correct
from planner.units import from_si

if TYPE_CHECKING:
    from collections.abc import Sequence

    from numpy.typing import NDArray

    from planner.model.rotor import MeasuredMode

    FloatArray = NDArray[np.float64]


@dataclass(frozen=True, eq=False)
class Ends:
    """A frequency with both ends of its allowance, shape (lanes,)."""

    frequency_rad_s: FloatArray
    low_rad_s: FloatArray
    high_rad_s: FloatArray
    correction: float = float("nan")
    """Of the frequency, where it was measured first; not a number: nothing was measured."""
    residual: float = float("nan")
    fault: str = ""
    """Why the mode cannot be judged; its frequencies are then not numbers."""


@dataclass(frozen=True, eq=False)
class ModelFrequency:
    """What the model says of one mode: where it is wanted, at rest, and where it was measured."""

    speed_rad_s: FloatArray
    frequency_rad_s: FloatArray
    at_rest_rad_s: FloatArray
    """Of each lane: the model at rest with the same pitch."""
    where_measured_rad_s: FloatArray
    at_rest_where_measured_rad_s: FloatArray


def with_allowance(frequency_rad_s: FloatArray, allowance: tuple[float, float]) -> Ends:
    """The rule book's allowance on a frequency that nobody measured."""
    return Ends(frequency_rad_s, frequency_rad_s * allowance[0], frequency_rad_s * allowance[1])


def measured_ends(
    model: ModelFrequency, measured: Sequence[MeasuredMode], allowance: tuple[float, float]
) -> Ends:
    """The model corrected by measurements, whose residual is the allowance.

    Measurements that are too far from the model to be of the same mode leave it with a fault.
    """
    if not measured:
        return with_allowance(model.frequency_rad_s, allowance)
    try:
        return _corrected(model, measured, allowance)
    except ValueError:
        unknown = np.full(model.frequency_rad_s.shape, np.nan)
        fault = _apart(measured, model.where_measured_rad_s)
        return Ends(unknown, unknown, unknown, fault=fault)


def _apart(measured: Sequence[MeasuredMode], model_rad_s: FloatArray) -> str:
    """Measured and computed frequencies of a mode side by side, in words."""
    pairs = [
        f"{from_si(m.frequency_rad_s, 'Hz'):.3f} Hz measured at "
        f"{from_si(m.speed_rad_s, 'rpm'):.4g} rpm, {from_si(w, 'Hz'):.3f} Hz computed"
        for m, w in zip(measured, model_rad_s.tolist(), strict=True)
    ]
    return (
        f"measured_mode {measured[0].mode}: expected a measurement within 20 % of the model, "
        f"found {'; '.join(pairs)}; check which mode it is, and the blade's or stand's stiffness "
        "and mass"
    )


def _corrected(
    model: ModelFrequency, measured: Sequence[MeasuredMode], allowance: tuple[float, float]
) -> Ends:
    found = correct(
        Measured(
            speed_rad_s=np.array([m.speed_rad_s for m in measured]),
            frequency_rad_s=np.array([m.frequency_rad_s for m in measured]),
            accuracy=np.array([m.accuracy for m in measured]),
            model_rad_s=model.where_measured_rad_s,
            model_at_rest_rad_s=model.at_rest_where_measured_rad_s,
        ),
        model.speed_rad_s,
        model.frequency_rad_s,
        model.at_rest_rad_s,
        allowance,
    )
    return Ends(
        found.frequency_rad_s,
        found.low_rad_s,
        found.high_rad_s,
        found.correction,
        found.residual,
    )


def require_known(measured: Sequence[MeasuredMode], labels: Sequence[str]) -> None:
    """Refuse a measurement of a mode that is not computed.

    Raises:
        ValueError: it would correct nothing, in silence.
    """
    for one in measured:
        if one.mode not in labels:
            msg = (
                f"measured mode: expected one of {', '.join(labels)}, found {one.mode!r}; name "
                "the mode as it is computed"
            )
            raise ValueError(msg)
