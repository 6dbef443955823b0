"""The stand file: mounting, drive, ratings, modes and surroundings, as people write them."""

from __future__ import annotations

from typing import Annotated, Literal, get_args

from pydantic import Field

from planner.files.schema_texts import Text
from planner.files.schema_values import (
    Choice,
    Flag,
    Measured,
    Number,
    Quantity,
    SpeedAndQuantity,
    Table,
)
from planner.model.stand import Mounting

Label = Annotated[str, Text(longest=120)]
PositiveLength = Annotated[float, Quantity("length", positive=True, example="12 m")]
Frequency = Annotated[float, Quantity("frequency", positive=True, example="3.1 Hz")]
Accuracy = Annotated[float, Quantity("share", positive=True, maximum="10 %", example="1 %")]
PositiveMass = Annotated[float, Quantity("mass", positive=True, example="900 kg")]
Inertia = Annotated[float, Quantity("inertia", positive=True, example="90 kg m2")]
Damping = Annotated[float, Quantity("share", minimum="0 %", maximum="100 %", example="2 %")]
Turns = Annotated[float, Number(positive=True, example=4.1)]
PositiveSpeed = Annotated[
    Measured, Quantity("rotor speed", "relative speed", positive=True, example="450 rpm")
]
SpeedAndTorque = Annotated[
    tuple[Measured, float],
    SpeedAndQuantity(Quantity("moment", minimum="0 N m", example="30 kN m")),
]


class DriveTable(Table):
    """Motor and gearing, referred to the rotor shaft."""

    name: Label = Field(description="Name of the drive.")
    gear_ratio: Annotated[float, Number(positive=True, example=4.0)] = Field(
        description="Motor turns for one rotor turn; printed, and [drive_train] must agree."
    )
    torque_rating: Annotated[float, Quantity("moment", positive=True, example="22 kN m")] = Field(
        description="Continuous torque at the rotor shaft."
    )
    power_rating: Annotated[float, Quantity("power", positive=True, example="950 kW")] = Field(
        description="Continuous power."
    )
    maximum_speed: PositiveSpeed = Field(description="Highest rotor speed of the drive.")
    inertia: Inertia = Field(
        description="Inertia of motor, gearing and hub at the rotor shaft, without blades."
    )
    overspeed_trip: PositiveSpeed | None = Field(
        default=None, description="Rotor speed where the trip removes torque."
    )
    friction: Annotated[float, Quantity("moment", minimum="0 N m", example="300 N m")] | None = (
        Field(
            default=None,
            description="Drag torque of drive and bearings at the rotor shaft while coasting;"
            " without it no run-down is computed.",
        )
    )
    torque_by_speed: list[SpeedAndTorque] | None = Field(
        default=None,
        description="Greatest torque at the rotor shaft by rotor speed, from 0 rpm to"
        " maximum_speed, with straight lines between rows; left out, torque_rating and"
        " power_rating bound it.",
        min_length=2,
    )


class BrakeTable(Table):
    """The rotor brake."""

    below: PositiveSpeed = Field(description="Speed below which the brake may be used.")
    torque: Annotated[float, Quantity("moment", positive=True, example="1.3 kN m")] | None = Field(
        default=None,
        description="Torque of the brake at the rotor shaft; without it no braking is computed.",
    )


class RatingsTable(Table):
    """What the stand carries at the hub."""

    thrust: Annotated[float, Quantity("force", positive=True, example="60 kN")] = Field(
        description="Thrust that the stand carries, either direction."
    )
    hub_moment: Annotated[float, Quantity("moment", positive=True, example="15 kN m")] = Field(
        description="Hub moment that the stand carries."
    )
    hub_amplitude: PositiveLength | None = Field(
        default=None,
        description="Sway of the hub, to either side, that the stand bears while a resonance is"
        " passed.",
    )


class ModeTable(Table):
    """A stand or shaft mode, measured or calculated elsewhere."""

    name: Label = Field(description="Name of the mode.")
    family: Annotated[Literal["stand", "shaft"], Choice(("stand", "shaft"))] = Field(
        description='"stand" for the structure, "shaft" for the drive train.'
    )
    frequency: Frequency = Field(description="Natural frequency.")
    damping: Damping = Field(description="Damping, share of critical.")
    direction: Label = Field(description="Direction of motion, such as lateral.")
    rotor_fitted: Annotated[bool, Flag()] | None = Field(
        default=None,
        description="Was the rotor's mass fitted? Left out, the mode cannot be judged.",
    )
    modal_mass: PositiveMass | None = Field(
        default=None,
        description="Mass at the hub that moves with a stand mode as it was found; without it no"
        " passage of the mode is assessed.",
    )
    missing_mass: PositiveMass | None = Field(
        default=None,
        description="Mass at the hub that was not fitted when a stand mode was found: blades, or"
        " blades and hub; only with rotor_fitted = false, which it mends together with"
        " modal_mass.",
    )
    source: Label = Field(description="Where the numbers come from.")


class ColumnTable(Table):
    """A uniform column, built in at its foot, with head and rotor at its top, the hub."""

    height: PositiveLength = Field(description="Height from its foot to the hub.")
    bending_stiffness: Annotated[
        float, Quantity("bending stiffness", positive=True, example="10000 kN m2")
    ] = Field(description="Bending stiffness EI, the same in every direction.")
    mass: PositiveMass = Field(description="Mass of the column alone.")
    head_mass: Annotated[float, Quantity("mass", minimum="0 kg", example="240 kg")] = Field(
        description="Mass of all that sits at the top except the blades."
    )
    damping: Damping = Field(description="Damping of its modes, share of critical.")
    source: Label = Field(description="Where the numbers come from.")


class TrainInertiaTable(Table):
    """A body that turns in the drive train."""

    name: Label = Field(description="Name of the body.")
    inertia: Inertia = Field(description="Inertia about its own axis, not referred to the rotor.")
    turns: Turns = Field(description="Turns of the body for one rotor turn; of the hub 1.")


class TrainShaftTable(Table):
    """A shaft between two bodies of the drive train."""

    name: Label = Field(description="Name of the shaft.")
    stiffness: Annotated[
        float, Quantity("angular stiffness", positive=True, example="80 kN m/rad")
    ] = Field(description="Torsional stiffness along its own axis, not referred to the rotor.")
    turns: Turns = Field(description="Turns of the shaft for one rotor turn.")


class DriveTrainTable(Table):
    """Torsional chain from the motor to the hub."""

    damping: Damping = Field(description="Damping of its modes, share of critical.")
    source: Label = Field(description="Where the numbers come from.")
    inertia: list[TrainInertiaTable] = Field(
        description="Bodies from the motor to the hub, which is last and without blades.",
        min_length=2,
    )
    shaft: list[TrainShaftTable] = Field(
        description="Shafts between each body and the next: one fewer than bodies.", min_length=1
    )


class StandFrequencyTable(Table):
    """A natural frequency of column or drive train, found on the stand."""

    mode: Label = Field(
        description='Mode, such as "stand column 1" or "shaft train 2"; a mode of [[mode]] has its'
        " frequency there."
    )
    frequency: Frequency = Field(
        description="Natural frequency with the rotor on; it corrects the model."
    )
    speed: Annotated[
        Measured, Quantity("rotor speed", "relative speed", minimum="0 rpm", example="0 rpm")
    ] = Field(description='Rotor speed where it was found; "0 rpm" for a tap test.')
    accuracy: Accuracy = Field(
        description="Error of the measured frequency, either way, above 0 and up to 10 %."
    )
    source: Label = Field(description="Where the numbers come from.")


class PlaceTable(Table):
    """Something within reach, or a place where people stay."""

    name: Label = Field(description="What or who is there.")
    bearing: Annotated[
        float, Quantity("angle", minimum="-360 deg", maximum="360 deg", example="90 deg")
    ] = Field(description="Bearing from the stand's axis, clockwise from north.")
    distance: PositiveLength = Field(description="Distance from the shaft axis.")
    height: Annotated[float, Quantity("length", example="1.7 m")] = Field(
        description="Height above the stand's ground."
    )


class StandFile(Table):
    """The whirl stand as it is built."""

    name: Label = Field(description="Name of the stand.")
    hub_height: PositiveLength = Field(description="Hub height above ground.")
    mounting: Annotated[Mounting, Choice(get_args(Mounting))] = Field(
        description="Shaft attitude: thrust up, thrust down, or shaft level."
    )
    full_speed: Annotated[float, Quantity("rotor speed", positive=True, example="380 rpm")] = (
        Field(description="Rotor speed that reads 100 % rpm.")
    )
    speed_gauge_error: Annotated[
        Measured, Quantity("rotor speed", "relative speed", minimum="0 rpm", example="1 rpm")
    ] = Field(description="Largest error of the rotor speed gauge, either way.")
    drive: DriveTable = Field(description="Motor and gearing.")
    brake: BrakeTable | None = Field(default=None, description="Rotor brake, if there is one.")
    ratings: RatingsTable = Field(description="What the stand carries.")
    mode: list[ModeTable] = Field(default=[], description="Stand and shaft modes.")
    column: ColumnTable | None = Field(
        default=None,
        description="A plain column whose bending mode is computed, where no mode was measured.",
    )
    drive_train: DriveTrainTable | None = Field(
        default=None,
        description="Torsional chain from motor to hub, whose modes are computed with the blades.",
    )
    measured_mode: list[StandFrequencyTable] = Field(
        default=[],
        description="Measured frequencies of column and drive train; they correct the model.",
    )
    obstruction: list[PlaceTable] = Field(
        default=[],
        description="Things near the rotor; refused inside its disc, otherwise the blade tips'"
        " clearance to them is computed.",
    )
    position: list[PlaceTable] = Field(
        default=[],
        description="Places where people stay; refused inside the rotor disc,"
        " otherwise kept for the record, not used yet.",
    )
