"""The stand: mounting, modes, drive, brake, ratings, surroundings. SI, frozen, no I/O."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING, Literal

if TYPE_CHECKING:
    from planner.model.rotor import MeasuredMode

COLUMN_MODES = 1
"""Bending modes of a column that are computed: higher ones hang on how head and foot turn, which
a simple column does not tell."""

Mounting = Literal["upright", "inverted", "axis level"]


@dataclass(frozen=True)
class GivenMode:
    """A stand or shaft mode as measured or calculated elsewhere."""

    name: str
    family: Literal["stand", "shaft"]
    frequency_rad_s: float
    damping_ratio: float
    direction: str
    rotor_fitted: bool | None
    """Was the rotor's mass fitted? None: not stated, so the mode cannot be judged."""
    source: str
    modal_mass_kg: float | None = None
    """Mass at the hub that moves with the mode as it was found, in its direction."""
    missing_mass_kg: float | None = None
    """Mass at the hub that was not fitted when the mode was found: blades, or blades and hub."""

    @property
    def label(self) -> str:
        """What rules, rows and charts call it."""
        return f"{self.family} {self.name}"

    @property
    def is_corrected(self) -> bool:
        """A stand mode found without the rotor, with both masses that mend this stated."""
        masses = (self.modal_mass_kg, self.missing_mass_kg)
        is_without = self.family == "stand" and self.rotor_fitted is False
        return is_without and None not in masses

    @property
    def counts_rotor(self) -> bool:
        """Its frequency is the one with the rotor on, measured so or corrected."""
        return self.rotor_fitted is True or self.is_corrected


@dataclass(frozen=True)
class Column:
    """A uniform column, built in at its foot, that carries head and rotor at its top, the hub."""

    height_m: float
    """From its foot to the hub."""
    bending_stiffness_N_m2: float
    """EI, the same in every direction."""
    mass_kg: float
    """Of the column alone."""
    head_mass_kg: float
    """All that sits at the top except the blades."""
    damping_ratio: float
    source: str


@dataclass(frozen=True)
class TrainInertia:
    """A body that turns in the drive train; without blades."""

    name: str
    inertia_kg_m2: float
    """About its own axis, not referred."""
    turns: float
    """Turns for one rotor turn."""


@dataclass(frozen=True)
class TrainShaft:
    """A shaft between two bodies of the drive train."""

    name: str
    stiffness_N_m_rad: float
    """Along its own axis, not referred."""
    turns: float
    """Turns for one rotor turn."""


@dataclass(frozen=True)
class DriveTrain:
    """Torsional chain from the motor to the hub."""

    inertias: tuple[TrainInertia, ...]
    """From the motor to the hub, which is last."""
    shafts: tuple[TrainShaft, ...]
    """Between each inertia and the next; one fewer."""
    damping_ratio: float
    source: str


@dataclass(frozen=True)
class Drive:
    """Motor and gearing, referred to the rotor shaft."""

    name: str
    gear_ratio: float
    """Motor turns for one rotor turn."""
    torque_rating_N_m: float
    power_rating_W: float
    maximum_rad_s: float
    inertia_kg_m2: float
    """Rotating inertia of motor, gearing and hub, referred to the rotor shaft; without blades."""
    overspeed_trip_rad_s: float | None
    friction_N_m: float | None = None
    """Drag torque of drive and bearings at the rotor shaft while coasting."""
    torque_by_speed: tuple[tuple[float, float], ...] = ()
    """Greatest torque [N m] by rotor speed [rad/s], both at the rotor shaft, speed increasing.

    Empty: torque rating and power rating bound it.
    """


@dataclass(frozen=True)
class Ratings:
    """What the stand carries at the hub."""

    thrust_N: float
    hub_moment_N_m: float
    hub_amplitude_m: float | None = None
    """Sway of the hub to either side that the stand bears while a resonance is passed."""


@dataclass(frozen=True)
class Obstruction:
    """Something within reach of a blade, or a place where people stay."""

    name: str
    bearing_rad: float
    distance_m: float
    height_m: float


@dataclass(frozen=True)
class Stand:
    """The whirl stand as it is built."""

    name: str
    hub_height_m: float
    mounting: Mounting
    full_speed_rad_s: float
    """Rotor speed that reads 100 % rpm."""
    speed_gauge_error_rad_s: float
    modes: tuple[GivenMode, ...]
    drive: Drive
    brake_below_rad_s: float | None
    ratings: Ratings
    obstructions: tuple[Obstruction, ...]
    positions: tuple[Obstruction, ...]
    brake_torque_N_m: float | None = None
    """Torque of the brake at the rotor shaft."""
    column: Column | None = None
    drive_train: DriveTrain | None = None
    measured_modes: tuple[MeasuredMode, ...] = ()
    """Frequencies found on the stand, of modes of column and drive train."""

    def mode_labels(self, family: str) -> tuple[str, ...]:
        """Labels of all modes of a family that the stand file gives or that follow from it."""
        return mode_labels(family, self.modes, self.column, self.drive_train)


def mode_labels(
    family: str,
    modes: tuple[GivenMode, ...],
    column: Column | None,
    train: DriveTrain | None,
) -> tuple[str, ...]:
    """Labels of all modes of a family that are given or follow from a column or drive train."""
    found = [mode.label for mode in modes if mode.family == family]
    if family == "stand" and column is not None:
        found += [f"stand column {order + 1}" for order in range(COLUMN_MODES)]
    if family == "shaft" and train is not None:
        found += [f"shaft train {k + 1}" for k in range(len(train.inertias))]
    return tuple(found)
