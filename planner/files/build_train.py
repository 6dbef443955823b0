"""Column, drive train and their measured frequencies: checks, and the way into the model."""

from __future__ import annotations

from typing import TYPE_CHECKING

from planner.files.build_measured import check_repeats, nearest_label
from planner.files.faults import listed
from planner.model.rotor import MeasuredMode
from planner.model.stand import (
    COLUMN_MODES,
    Column,
    DriveTrain,
    TrainInertia,
    TrainShaft,
)

if TYPE_CHECKING:
    from planner.files.schema_stand import (
        ColumnTable,
        DriveTrainTable,
        StandFile,
        StandFrequencyTable,
    )
    from planner.files.source import Document

_AGREEMENT = 0.05
"""Share within which the train agrees with what [drive] says of it."""
_FEWEST_BODIES = 2
_ROUNDING = 1e-9


def check_masses(document: Document, file: StandFile) -> None:
    """Add the faults of masses that belong to no mode, or that mend nothing."""
    for i, mode in enumerate(file.mode):
        path = ("mode", i)
        stated = [key for key in ("modal_mass", "missing_mass") if getattr(mode, key) is not None]
        if mode.family == "shaft":
            for key in stated:
                expected = f"no {key}, because a shaft mode turns and moves no mass at the hub"
                document.fault_at_key((*path, key), expected, "remove it", "one")
            continue
        fitted = document.value((*path, "rotor_fitted"))
        if "missing_mass" in stated and (fitted is None or fitted is True):
            expected = "no missing_mass unless rotor_fitted = false"
            mend = "remove it, or say that the rotor was not fitted"
            document.fault_at_key((*path, "missing_mass"), expected, mend, "one")
        elif stated == ["missing_mass"]:
            expected = 'key "modal_mass", without which missing_mass corrects nothing'
            mend = "add modal_mass, or remove missing_mass"
            document.fault_at_key((*path, "modal_mass"), expected, mend, "no such key")


def check_train(document: Document, file: StandFile) -> None:
    """Add the faults between values of the drive train, and between train and drive."""
    train = file.drive_train
    if train is None:
        return
    bodies, shafts = (_count(document, key) for key in ("inertia", "shaft"))
    if bodies >= _FEWEST_BODIES and 0 < shafts != bodies - 1:
        expected = f"{bodies - 1}, one fewer than the {bodies} inertias"
        mend = "give one shaft between each inertia and the next"
        document.fault_at_key(("drive_train", "shaft"), expected, mend, _number_of(shafts))
    for key, entries in (("inertia", train.inertia), ("shaft", train.shaft)):
        names = [entry.name for entry in entries]
        for i, name in enumerate(names):
            if name and name in names[:i]:
                path = ("drive_train", key, i, "name")
                document.fault(path, "a name of its own", "rename one of the two")
    if bodies >= _FEWEST_BODIES and shafts == bodies - 1:
        _check_turns(document, train)
    if bodies >= _FEWEST_BODIES:
        _check_against_drive(document, file, train)


def _check_turns(document: Document, train: DriveTrainTable) -> None:
    """A shaft turns with one of its two neighbours, or between them where a gear is in it."""
    for i, shaft in enumerate(train.shaft):
        low, high = sorted((train.inertia[i].turns, train.inertia[i + 1].turns))
        # a value with a fault of its own is not a number, and not told twice
        if shaft.turns < low * (1.0 - _ROUNDING) or shaft.turns > high * (1.0 + _ROUNDING):
            expected = f"turns of its neighbours, {low:g} to {high:g}"
            mend = "give the turns of the shaft itself: its stiffness counts times turns squared"
            document.fault(("drive_train", "shaft", i, "turns"), expected, mend)


def _check_against_drive(document: Document, file: StandFile, train: DriveTrainTable) -> None:
    """The chain must turn as [drive] says, weigh as [drive] says, and end at the hub."""
    path = ("drive_train", "inertia")
    last = len(train.inertia) - 1
    if abs(train.inertia[last].turns - 1.0) > _ROUNDING:
        mend = "let the hub be the last inertia, or correct its turns"
        document.fault((*path, last, "turns"), "1, because the last inertia is the hub", mend)
    ratio = file.drive.gear_ratio
    if _disagree(train.inertia[0].turns, ratio):
        expected = f"drive.gear_ratio {ratio:g} within {_AGREEMENT:.0%}: the first is the motor"
        document.fault((*path, 0, "turns"), expected, "correct one of the two")
    total = sum(body.inertia * body.turns**2 for body in train.inertia)
    if _disagree(total, file.drive.inertia):
        expected = (
            f"inertias that come to drive.inertia {file.drive.inertia:g} kg m2 within"
            f" {_AGREEMENT:.0%}, each times its turns squared"
        )
        mend = "correct the inertias, their turns or drive.inertia"
        document.fault_at_key(path, expected, mend, f"{total:.4g} kg m2")


def _disagree(value: float, stated: float) -> bool:
    return abs(value - stated) > (_AGREEMENT + _ROUNDING) * stated


def _count(document: Document, key: str) -> int:
    """How many tables stand in the file; those with faults are replaced by as many as needed."""
    tables = document.value(("drive_train", key))
    return len(tables) if isinstance(tables, list) else 0


def _number_of(shafts: int) -> str:
    return "1 shaft" if shafts == 1 else f"{shafts} shafts"


def computed_labels(file: StandFile) -> list[str]:
    """Labels of the modes that follow from column and drive train."""
    column = [f"stand column {k + 1}" for k in range(COLUMN_MODES)] if file.column else []
    bodies = file.drive_train.inertia if file.drive_train else []
    return [*column, *(f"shaft train {k + 1}" for k in range(len(bodies)))]


def check_labels(document: Document, file: StandFile) -> None:
    """Add a fault for each given mode that goes by the name of a computed one."""
    computed = computed_labels(file)
    for i, mode in enumerate(file.mode):
        if f"{mode.family} {mode.name}" in computed:
            table = "column" if mode.family == "stand" else "drive_train"
            expected = f"a name that is not that of a computed mode of [{table}]"
            document.fault(("mode", i, "name"), expected, f"rename it, or remove [{table}]")


def check_stand_frequencies(document: Document, file: StandFile) -> None:
    """Add a fault for each measured frequency of no computed mode, and for repeats."""
    labels = computed_labels(file)
    words = listed(f'"{label}"' for label in labels)
    given = {f"{mode.family} {mode.name}" for mode in file.mode}
    for i, entry in enumerate(file.measured_mode):
        if not entry.mode or entry.mode in labels:
            continue
        expected = f"a mode of column or drive train, {words}"
        if not labels:
            expected = "a mode of [column] or [drive_train], of which there is none"
        mend = nearest_label(entry.mode, labels) or "give any other mode as [[mode]]"
        if entry.mode in given:
            mend = "write the measured frequency of this mode into its [[mode]]"
        document.fault(("measured_mode", i, "mode"), expected, mend)
    rows = [(e.mode, e.speed.resolved(file.full_speed), 0.0) for e in file.measured_mode]
    check_repeats(document, rows, "one speed")


def column_of(column: ColumnTable | None) -> Column | None:
    """Build the model from a table without faults."""
    if column is None:
        return None
    return Column(
        height_m=column.height,
        bending_stiffness_N_m2=column.bending_stiffness,
        mass_kg=column.mass,
        head_mass_kg=column.head_mass,
        damping_ratio=column.damping,
        source=column.source,
    )


def train_of(train: DriveTrainTable | None) -> DriveTrain | None:
    """Build the model from a table without faults."""
    if train is None:
        return None
    return DriveTrain(
        inertias=tuple(TrainInertia(b.name, b.inertia, b.turns) for b in train.inertia),
        shafts=tuple(TrainShaft(s.name, s.stiffness, s.turns) for s in train.shaft),
        damping_ratio=train.damping,
        source=train.source,
    )


def stand_frequency_of(entry: StandFrequencyTable, full_speed: float) -> MeasuredMode:
    """Build the model from an entry without faults; the stand knows no collective."""
    return MeasuredMode(
        mode=entry.mode,
        frequency_rad_s=entry.frequency,
        speed_rad_s=entry.speed.resolved(full_speed),
        collective_rad=0.0,
        accuracy=entry.accuracy,
        source=entry.source,
    )
