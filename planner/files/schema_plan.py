"""The plan file: papers, site, schedule, abort and shutdown, as people write them."""

from __future__ import annotations

from typing import Annotated, Any, get_args

from pydantic import Discriminator, Field, Tag

from planner.files.schema_texts import Day, FileName, Identifier, Moment, Text
from planner.files.schema_values import Choice, Flag, Measured, Number, Quantity, Table, Whole
from planner.model.plan import BlockKind
from planner.model.rules import Where

Prose = Annotated[str, Text()]
Label = Annotated[str, Text(longest=120)]
Id = Annotated[str, Identifier()]
Date = Annotated[str, Moment()]
RuleBookFile = Annotated[str, FileName(example="rules.toml")]
Angle = Annotated[float, Quantity("angle", minimum="-90 deg", maximum="90 deg", example="8 deg")]
Speed = Annotated[
    Measured, Quantity("rotor speed", "relative speed", minimum="0 rpm", example="245 rpm")
]
Time = Annotated[float, Quantity("time", positive=True, example="60 s")]
RampTime = Annotated[float, Quantity("time", minimum="0 s", example="30 s")]
Wind = Annotated[float, Quantity("speed", minimum="0 m/s", example="4 m/s")]
Part = Annotated[Where, Choice(get_args(Where))]
Intensity = Annotated[float, Quantity("share", minimum="0 %", maximum="60 %", example="15 %")]
Bearing = Annotated[float, Quantity("angle", minimum="0 deg", maximum="360 deg", example="90 deg")]


class SiteTable(Table):
    """Air and wind for which the run is planned."""

    elevation: Annotated[float, Quantity("length", example="120 m")] | None = Field(
        default=None, description="Site elevation above sea level; or give pressure."
    )
    pressure: Annotated[float, Quantity("pressure", positive=True, example="1005 hPa")] | None = (
        Field(default=None, description="Air pressure at the site; or give elevation.")
    )
    temperature: Annotated[float, Quantity("temperature", positive=True, example="15 degC")] = (
        Field(description="Air temperature.")
    )
    temperature_spread: Annotated[
        float, Quantity("temperature difference", minimum="0 K", example="8 K")
    ] = Field(description="The card covers temperatures this far to either side.")
    relative_humidity: Annotated[
        float, Quantity("share", minimum="0 %", maximum="100 %", example="60 %")
    ] = Field(description="Relative humidity.")
    wind_mean: Wind = Field(description="Mean wind at the anemometer.")
    wind_gust: Wind = Field(description="Gust at the anemometer.")
    averaging_time: Time = Field(description="Averaging time of the mean wind.")
    anemometer_height: Annotated[float, Quantity("length", positive=True, example="12 m")] = Field(
        description="Anemometer height above ground."
    )
    anemometer_error: Wind = Field(description="Largest error of the anemometer, either way.")
    shear_exponent: Annotated[float, Number(minimum=0.0, maximum=1.0)] | None = Field(
        default=None,
        description="Exponent of the wind profile; needed unless the anemometer is at hub height.",
    )


class GustTable(Table):
    """The discrete gust: up and down again as one minus a cosine, to wind_gust and back."""

    shortest: Time = Field(description="Shortest gust from start to end; the worst is sought.")
    longest: Time = Field(description="Longest gust from start to end.")


class TurbulenceTable(Table):
    """Series of gusty wind beside the discrete gust."""

    intensity: Intensity = Field(
        description="Turbulence intensity: standard deviation of the wind over its mean."
    )
    series: Annotated[int, Whole(1, 100)] = Field(description="Number of series to march.")
    seed: Annotated[int, Whole(0, 2**31 - 1)] = Field(
        description="Seed of the random series; the same seed gives the same wind."
    )


class SectorTable(Table):
    """Bearings from which the wind comes over ground of one kind."""

    name: Label = Field(description="Name of the sector, such as what stands upwind.")
    from_: Bearing = Field(
        alias="from",
        description="First bearing that the wind comes from, clockwise from north; all sectors"
        " together cover the circle once.",
    )
    to: Bearing = Field(
        description="Last bearing, clockwise from the first; may lie beyond north."
    )
    upflow: Annotated[
        float, Quantity("angle", minimum="-30 deg", maximum="30 deg", example="3 deg")
    ] = Field(description="Angle of the wind above the horizontal, up positive.")
    turbulence_intensity: Intensity | None = Field(
        default=None,
        description="Turbulence intensity here; left out, that of [turbulence], which does not"
        " hold behind a tall obstruction near by.",
    )
    shelter: Annotated[float, Quantity("share", positive=True, example="85 %")] | None = Field(
        default=None,
        description="Share of the wind that arrives, below 100 %; only where it was measured.",
    )
    shelter_source: Label | None = Field(
        default=None, description="The measurement of the shelter; with shelter."
    )


class RoleTable(Table):
    """A person's part in the run."""

    role: Label = Field(description="Role, such as test conductor.")
    name: Annotated[str, Text(empty=True, longest=120)] = Field(
        description='Name of the person; "" leaves a blank for ink.'
    )
    duties: Prose = Field(description="What this role does.")
    may_abort: Annotated[bool, Flag()] = Field(description="May this role call an abort?")


class KeepOutTable(Table):
    """A speed band that is passed without stopping."""

    id: Id = Field(description="Id of the band, printed on the card.")
    from_: Speed = Field(alias="from", description="Lower end of the band.")
    to: Speed = Field(description="Upper end of the band.")
    why: Prose = Field(description="Why no hold is allowed here.")


class DocumentTable(Table):
    """An approved document that closes a hazard class which this tool did not assess."""

    class_: Id = Field(alias="class", description="Hazard class that the document closes.")
    where: list[Part] = Field(
        description="Parts of the run it covers: hold, ramp, stop, abort, run.", min_length=1
    )
    title: Label = Field(description="Title of the document.")
    number: Label = Field(description="Number of the document.")
    revision: Label = Field(description="Revision of the document.")
    approver: Label = Field(description="Who approved it.")
    date: Annotated[str, Day()] = Field(description="Date of approval.")
    wind_limit: Wind = Field(description="Highest wind that the document covers.")
    speed_limit: Speed = Field(description="Highest rotor speed that the document covers.")


class AbortTable(Table):
    """What the crew does on an abort, most urgent first."""

    collective: Angle = Field(description="Collective to set.")
    cyclic: Label = Field(description="What to do with cyclic.")
    collective_rate: (
        Annotated[float, Quantity("angle rate", positive=True, example="1 deg/s")] | None
    ) = Field(default=None, description="Rate at which collective is set on an abort.")
    reaction_time: Annotated[float, Quantity("time", minimum="0 s", example="2 s")] | None = Field(
        default=None, description="Time from the cause to the crew's first action."
    )
    brake: Annotated[bool, Flag()] = Field(
        default=False, description="Is the rotor brake used on an abort?"
    )
    brake_from: Speed | None = Field(
        default=None, description="Speed where the brake is applied; only with brake = true."
    )
    reentries: Annotated[int, Whole(0, 20)] | None = Field(
        default=None,
        description="How many aborts, each with a way back to where it began, this card allows"
        " for; they count towards time and turns in keep-out bands.",
    )
    actions: list[Prose] = Field(description="Actions in order.", min_length=1)


class CyclicTable(Table):
    """Fixed cyclic pitch."""

    cosine: Angle = Field(description="Cosine part of blade pitch, azimuth zero downwind.")
    sine: Angle = Field(description="Sine part of blade pitch.")


def _cyclic_form(value: Any) -> str:  # noqa: ANN401 (anything may stand in the file)
    return "<fixed>" if isinstance(value, dict) else "<trim>"


CyclicValue = Annotated[
    Annotated[str, Choice(("trim",)), Tag("<trim>")] | Annotated[CyclicTable, Tag("<fixed>")],
    Discriminator(_cyclic_form),
]


class StepTable(Table):
    """Go to a speed and pitch, then hold."""

    rpm: Speed = Field(description="Rotor speed of the hold, in rpm or % rpm.")
    collective: Angle = Field(description="Collective pitch of the hold.")
    cyclic: CyclicValue = Field(
        description='"trim" for no once-per-revolution flapping, or { cosine = ..., sine = ... }.'
    )
    ramp_time: RampTime | None = Field(
        default=None,
        description="Time of the ramp into this step; or give ramp_rate or ramp.",
    )
    ramp_rate: (
        Annotated[
            Measured, Quantity("speed rate", "relative rate", positive=True, example="5 rpm/s")
        ]
        | None
    ) = Field(default=None, description="Speed rate of the ramp; or give ramp_time or ramp.")
    ramp: Annotated[str, Choice(("drive",))] | None = Field(
        default=None,
        description='"drive" for the drive\'s own run-up, whose time is found; or give ramp_time'
        " or ramp_rate.",
    )
    hold_time: Time = Field(description="Time of the hold.")
    window_rpm: Speed = Field(description="Hold rotor speed within this, either way.")
    window_collective: Annotated[
        float, Quantity("angle", minimum="0 deg", maximum="10 deg", example="0.2 deg")
    ] = Field(description="Hold collective within this, either way.")
    note: Annotated[str, Text(empty=True)] = Field(
        default="", description="Printed beside the step."
    )


class BlockTable(Table):
    """Steps run as one part of the card."""

    name: Label = Field(description="Name of the block.")
    kind: Annotated[BlockKind, Choice(get_args(BlockKind))] = Field(
        description='"first of day", "track and balance", "pitch sweep", "endurance" or'
        ' "hot restart".'
    )
    repeat: Annotated[int, Whole(1, 1000)] = Field(
        default=1, description="How often the steps are run through."
    )
    step: list[StepTable] = Field(description="The steps in order.", min_length=1)


class ShutdownTable(Table):
    """The way from the last hold to zero speed."""

    time: Annotated[float, Quantity("time", minimum="1 s", example="60 s")] = Field(
        description="Time to zero speed."
    )
    collective: Angle = Field(description="Collective during the run-down.")
    powered: Annotated[bool, Flag()] = Field(description="Does the drive control the run-down?")
    brake: Annotated[bool, Flag()] = Field(description="Is the rotor brake used?")
    brake_from: Speed | None = Field(
        default=None, description="Speed where the brake is applied; only with brake = true."
    )


class PlanFile(Table):
    """One planned run."""

    title: Label = Field(description="Title of the run.")
    card: Label = Field(description="Card number, printed on every sheet.")
    revision: Label = Field(description="Revision of the card.")
    issued: Date = Field(description="Date and time of issue, with zone.")
    objective: Prose = Field(description="What the run is for.")
    planned_start: Date = Field(description="Planned start, with zone.")
    planned_finish: Date = Field(description="Planned finish, with zone.")
    rotor: Annotated[str, FileName()] = Field(description="Rotor file, relative to this file.")
    stand: Annotated[str, FileName(example="stand.toml")] = Field(
        description="Stand file, relative to this file."
    )
    rule_books: list[RuleBookFile] = Field(
        description="Rule books, relative to this file; several are merged.", min_length=1
    )
    extra_classes: list[Id] = Field(
        default=[], description="Hazard classes that this plan adds to those of the books."
    )
    site: SiteTable = Field(description="Air and wind.")
    gust: GustTable | None = Field(
        default=None, description="Lengths of the discrete gust; without it no gust is marched."
    )
    turbulence: TurbulenceTable | None = Field(
        default=None, description="Gusty wind; without it marches in wind are not assessed."
    )
    sector: list[SectorTable] = Field(
        default=[],
        description="Bearings with upflow, turbulence and shelter of their own; without them the"
        " wind is level and the same from everywhere.",
    )
    role: list[RoleTable] = Field(description="People's parts in the run.", min_length=1)
    keep_out: list[KeepOutTable] = Field(
        default=[], description="Speed bands that are passed without stopping."
    )
    outside_document: list[DocumentTable] = Field(
        default=[], description="Approved documents that close hazard classes not assessed here."
    )
    abort: AbortTable = Field(description="What the crew does on an abort.")
    block: list[BlockTable] = Field(description="The schedule.", min_length=1)
    shutdown: ShutdownTable = Field(description="The way to zero speed.")
