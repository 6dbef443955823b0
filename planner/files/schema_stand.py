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
        description="Motor turns for one rotor turn; kept for the record, not used yet."
    )
    torque_rating: Annotated[float, Quantity("moment", positive=True, example="22 kN m")] = Field(
        description="Continuous torque at the rotor shaft."
    )
    power_rating: Annotated[float, Quantity("power", positive=True, example="950 kW")] = Field(
        description="Continuous power."
    )
    maximum_speed: PositiveSpeed = Field(description="Highest rotor speed of the drive.")
    inertia: Annotated[float, Quantity("inertia", positive=True, example="90 kg m2")] = Field(
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


class ModeTable(Table):
    """A stand or shaft mode, measured or calculated elsewhere."""

    name: Label = Field(description="Name of the mode.")
    family: Annotated[Literal["stand", "shaft"], Choice(("stand", "shaft"))] = Field(
        description='"stand" for the structure, "shaft" for the drive train.'
    )
    frequency: Annotated[float, Quantity("frequency", positive=True, example="3.1 Hz")] = Field(
        description="Natural frequency."
    )
    damping: Annotated[float, Quantity("share", minimum="0 %", maximum="100 %", example="2 %")] = (
        Field(description="Damping, share of critical.")
    )
    direction: Label = Field(description="Direction of motion, such as lateral.")
    rotor_fitted: Annotated[bool, Flag()] | None = Field(
        default=None,
        description="Was the rotor's mass fitted? Left out, the mode cannot be judged.",
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
