"""Modes of the stand with the rotor on it: as measured, corrected for its mass, or of a column."""

from __future__ import annotations

import math
from dataclasses import dataclass, replace
from typing import TYPE_CHECKING

import numpy as np

from planner.methods.column import column_modes, with_added_mass
from planner.model.results import Status
from planner.model.stand import COLUMN_MODES
from planner.predict.mode_correction import (
    ModelFrequency,
    measured_ends,
    require_known,
    with_allowance,
)
from planner.rotor.blade_views import blade_mass_kg

if TYPE_CHECKING:
    from collections.abc import Sequence

    from planner.model.rotor import MeasuredMode, Rotor
    from planner.model.stand import Column, GivenMode
    from planner.predict.mode_correction import Ends
    from planner.predict.study import Inputs

TAKES = ("rotor", "stand.modes", "stand.column", "stand.measured_modes")
"""Model paths that the stand's modes follow from."""
LEAST_SHARE_OF_BLADES = 0.95
"""A mass that holds the blades is at least this share of their own."""
_NOT_SAID = (
    "the stand file does not say whether the rotor's mass was fitted when this mode was found "
    "(rotor_fitted)"
)
_NOT_CORRECTED = (
    "the mode was found without the rotor's mass and is not corrected for it; state modal_mass "
    "and missing_mass, or give the mode with the rotor fitted"
)


@dataclass(frozen=True)
class StandMode:
    """One mode of the stand; numbers are not numbers where its status is not OK."""

    label: str
    ends: Ends
    """One lane: it does not change with rotor speed."""
    damping_ratio: float
    modal_mass_kg: float
    """At the hub, rotor included; not a number where none is stated."""
    status: Status = Status.OK
    reason: str = ""

    @property
    def frequencies_rad_s(self) -> tuple[float, float, float]:
        """Nominal, lowest and highest."""
        ends = self.ends
        return (
            float(ends.frequency_rad_s[0]),
            float(ends.low_rad_s[0]),
            float(ends.high_rad_s[0]),
        )


def stand_modes(inputs: Inputs) -> tuple[StandMode, ...]:
    """All modes of the stand, those that cannot be judged with their reason.

    Raises:
        NotAssessedError: the rule book states no frequency allowance.
        ValueError: a measurement that does not fit the column, or a column out of range.
    """
    allowance = inputs.allowance("frequency")
    rotor: Rotor = inputs["rotor"]
    given = [mode for mode in inputs["stand.modes"] if mode.family == "stand"]
    found = [_given(mode, rotor, allowance) for mode in given]
    column: Column | None = inputs["stand.column"]
    if column is not None:
        found += _of_column(column, rotor, inputs["stand.measured_modes"], allowance)
    return tuple(found)


def mode_fault(mode: GivenMode, rotor: Rotor) -> tuple[Status, str]:
    """Why a given mode cannot be judged; OK where it can."""
    if mode.rotor_fitted is None:
        return Status.NOT_STATED, _NOT_SAID
    if not mode.counts_rotor:
        return Status.NOT_COMPUTED, _NOT_CORRECTED
    blades = rotor.n_blades * blade_mass_kg(rotor.blade)
    key = "missing_mass" if mode.is_corrected else "modal_mass"
    stated = mode.missing_mass_kg if mode.is_corrected else mode.modal_mass_kg
    if stated is not None and stated < LEAST_SHARE_OF_BLADES * blades:
        words = (
            f"{key} {stated:g} kg is less than the {rotor.n_blades} blades weigh by "
            f"their table, {blades:.4g} kg; correct one of the two"
        )
        return Status.OUTSIDE_VALIDITY, words
    return Status.OK, ""


def _given(mode: GivenMode, rotor: Rotor, allowance: tuple[float, float]) -> StandMode:
    status, reason = mode_fault(mode, rotor)
    frequency, mass = mode.frequency_rad_s, mode.modal_mass_kg or math.nan
    if status is Status.OK and mode.is_corrected:
        added = mode.missing_mass_kg or 0.0
        frequency = float(with_added_mass(frequency, mass, added))
        mass += added
    if status is not Status.OK:
        frequency = math.nan
    ends = with_allowance(np.array([frequency]), allowance)
    return StandMode(mode.label, ends, mode.damping_ratio, mass, status, reason)


def _of_column(
    column: Column,
    rotor: Rotor,
    measured: Sequence[MeasuredMode],
    allowance: tuple[float, float],
) -> list[StandMode]:
    """Bending modes of the column with head, hub and blades at its top."""
    top = column.head_mass_kg + rotor.n_blades * blade_mass_kg(rotor.blade)
    found = column_modes(
        column.height_m, column.bending_stiffness_N_m2, column.mass_kg, top, COLUMN_MODES
    )
    modes = []
    for order, (frequency, mass) in enumerate(
        zip(found.frequency_rad_s.tolist(), found.modal_mass_kg.tolist(), strict=True), start=1
    ):
        label = f"stand column {order}"
        own = [m for m in measured if m.mode == label]
        one, each = np.array([frequency]), np.full(len(own), frequency)
        ends = measured_ends(ModelFrequency(np.zeros(1), one, one, each, each), own, allowance)
        status = Status.OUTSIDE_VALIDITY if ends.fault else Status.OK
        modes.append(StandMode(label, ends, column.damping_ratio, float(mass), status, ends.fault))
    of_stand = [m for m in measured if m.mode.startswith("stand ")]
    require_known(of_stand, [mode.label for mode in modes])
    return modes


def without_mass(mode: StandMode) -> StandMode:
    """The mode flagged where its modal mass is not stated."""
    if mode.status is Status.OK and not math.isfinite(mode.modal_mass_kg):
        words = "the stand file states no modal_mass of this mode"
        return replace(mode, status=Status.NOT_STATED, reason=words)
    return mode
