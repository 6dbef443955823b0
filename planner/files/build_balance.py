"""Unbalance and measured frequencies of the rotor: checks, and the way into the model."""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np

from planner.files.build_measured import check_repeats, nearest_label
from planner.files.faults import listed
from planner.files.schema_rotor import TeeteringTable
from planner.model.rotor import Balance, MeasuredMode
from planner.units import from_si

if TYPE_CHECKING:
    from numpy.typing import NDArray

    from planner.files.schema_rotor import BalanceTable, BladeFrequencyTable, RotorFile
    from planner.files.source import Document

_MODES = {"flap": 4, "lag": 2, "torsion": 2}
"""Family to how many of its modes are computed."""
_MOTIONS = (" cyclic", " collective")
"""A teetering pair's blades move opposite, or alike."""
_ROUNDING = 1e-9


def check_balance(document: Document, file: RotorFile) -> None:
    """Add the faults of a table that is neither a grade nor a measured unbalance."""
    balance = file.balance
    if balance is None:
        return
    speed, highest = balance.reference_speed, file.design_maximum_speed
    if speed is not None and speed > highest * (1.0 + _ROUNDING):
        expected = f"at most design_maximum_speed {from_si(highest, 'rpm'):g} rpm"
        mend = "give the highest speed in service, to which a grade refers"
        document.fault(("balance", "reference_speed"), expected, mend)
    if (balance.grade is None) == (balance.measured is None):
        found = "neither" if balance.grade is None else "both"
        mend = "add one" if balance.grade is None else "remove one"
        document.fault_at_key(("balance",), "exactly one of grade and measured", mend, found)
        return
    for key in ("mass", "reference_speed"):
        stated = getattr(balance, key) is not None
        if balance.grade is not None and not stated:
            expected = f'key "{key}", because a grade refers to a mass and a speed'
            document.fault_at_key(("balance", key), expected, f"add {key}", "no such key")
        if balance.measured is not None and stated:
            expected = f"no {key}, because a measured unbalance refers to none"
            mend = "remove it, or give a grade instead of measured"
            document.fault_at_key(("balance", key), expected, mend, "one")


def check_balanced_mass(
    document: Document, file: RotorFile, stations: dict[str, NDArray[np.float64]]
) -> None:
    """Add a fault where the balanced mass is below that of the blades by their table."""
    mass = file.balance.mass if file.balance is not None else None
    if mass is None:
        return
    one = float(np.trapezoid(stations["mass"], stations["radius"]))
    one += sum(point.mass for point in file.blade.point_mass)
    blades = file.blades * one
    if mass < blades * (1.0 - _ROUNDING):
        expected = f"at least {blades:.6g} kg, what {file.blades} blades weigh by their table"
        mend = "give the mass of blades and hub together, or correct the blade table"
        document.fault(("balance", "mass"), expected, mend)


def check_point_offsets(
    document: Document, file: RotorFile, stations: dict[str, NDArray[np.float64]]
) -> None:
    """Add a fault for each point mass that lies beyond the section: a wrong unit, most likely."""
    chord = float(np.max(stations["chord"]))
    for i, point in enumerate(file.blade.point_mass):
        if point.offset is not None and abs(point.offset) > chord:
            expected = f"an offset of at most the greatest chord {chord:g} m, either way"
            mend = "correct the offset or its unit"
            document.fault(("blade", "point_mass", i, "offset"), expected, mend)


def check_blade_frequencies(document: Document, file: RotorFile) -> None:
    """Add a fault for each measured frequency of no mode of this hub, and for repeats."""
    labels = blade_labels(file)
    for i, entry in enumerate(file.measured_mode):
        if entry.mode and entry.mode not in labels:
            mend = nearest_label(entry.mode, labels) or "write one of these"
            if f"{entry.mode}{_MOTIONS[0]}" in labels:
                mend = "say which of the two motions was measured"
            document.fault(("measured_mode", i, "mode"), _expected_labels(file), mend)
    rows = [(entry.mode, entry.speed, entry.collective) for entry in file.measured_mode]
    check_repeats(document, rows, "one speed and collective")


def blade_labels(file: RotorFile) -> list[str]:
    """Labels of the blade modes that are computed for this hub."""
    motions = _MOTIONS if isinstance(file.hub, TeeteringTable) else ("",)
    return [
        f"{family} {order}{motion}"
        for motion in motions
        for family, most in _MODES.items()
        for order in range(1, most + 1)
    ]


def _expected_labels(file: RotorFile) -> str:
    each = listed(f'"{family} 1" to "{family} {most}"' for family, most in _MODES.items())
    if not isinstance(file.hub, TeeteringTable):
        return f"a mode of this hub, {each}"
    words = listed(f'"{motion.strip()}"' for motion in _MOTIONS)
    return f"a mode of this hub, {each}, each followed by {words}"


def balance_of(balance: BalanceTable | None) -> Balance | None:
    """Build the model from a table without faults."""
    if balance is None:
        return None
    return Balance(
        static_moment_spread_kg_m=balance.static_moment_spread,
        lag_angle_spread_rad=balance.lag_angle_spread,
        source=balance.source,
        grade_m_s=balance.grade,
        mass_kg=balance.mass,
        reference_rad_s=balance.reference_speed,
        measured_kg_m=balance.measured,
    )


def blade_frequency_of(entry: BladeFrequencyTable) -> MeasuredMode:
    """Build the model from an entry without faults."""
    return MeasuredMode(
        mode=entry.mode,
        frequency_rad_s=entry.frequency,
        speed_rad_s=entry.speed,
        collective_rad=entry.collective,
        accuracy=entry.accuracy,
        source=entry.source,
    )
