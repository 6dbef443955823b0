"""A rule book, as a safety office writes it."""

from __future__ import annotations

from typing import Annotated, Any, Literal, get_args

from pydantic import Discriminator, Field, Tag

from planner.files.schema_texts import Identifier, Text
from planner.files.schema_values import (
    Amount,
    Choice,
    Flag,
    Measured,
    Quantity,
    SpeedAndAmount,
    Table,
    Unknown,
    Whole,
)
from planner.model.rules import Sense, Where

Prose = Annotated[str, Text()]
Label = Annotated[str, Text(longest=120)]
Id = Annotated[str, Identifier()]
Share = Annotated[float, Quantity("share", positive=True, example="95 %")]
WindSpeed = Annotated[float, Quantity("speed", positive=True, example="12 m/s")]
Part = Annotated[Where, Choice(get_args(Where))]


class ShareTable(Table):
    """A share of a reference value."""

    share: Share = Field(description="Share of the reference value.")
    of: Id = Field(description="Id of the reference value, such as design_maximum_speed.")


class OverSpeedTable(Table):
    """A limit that depends on rotor speed."""

    over_rpm: list[Annotated[tuple[Measured, str | float], SpeedAndAmount()]] = Field(
        description='Rows of speed and value, speed increasing: ["245 rpm", "2 deg"].',
        min_length=2,
    )


def _limit_form(value: Any) -> str:  # noqa: ANN401 (anything may stand in the file)
    if isinstance(value, dict):
        return "<over_rpm>" if "over_rpm" in value else "<share>"
    return "<value>"


LimitValue = Annotated[
    Annotated[str | float | Unknown, Amount(), Tag("<value>")]
    | Annotated[ShareTable, Tag("<share>")]
    | Annotated[OverSpeedTable, Tag("<over_rpm>")],
    Discriminator(_limit_form),
]


def _end_form(value: Any) -> str:  # noqa: ANN401 (anything may stand in the file)
    return "<share>" if isinstance(value, dict) else "<value>"


RangeEnd = Annotated[
    Annotated[
        Measured,
        Quantity("rotor speed", "relative speed", minimum="0 rpm", example="62 % rpm"),
        Tag("<value>"),
    ]
    | Annotated[ShareTable, Tag("<share>")],
    Discriminator(_end_form),
]


class RuleTable(Table):
    """What every rule has."""

    id: Id = Field(description="Id of the rule; unique over all books of a plan.")
    class_: Id = Field(alias="class", description="Hazard class that this rule belongs to.")
    title: Label = Field(description="The rule in a few words.")
    why: Prose = Field(description="What goes wrong beyond the limit.")
    basis: Prose = Field(description='A source, or "common practice".')
    where: list[Part] = Field(
        description="Parts of the run: hold, ramp, stop, abort, run.", min_length=1
    )


class PredictedTable(RuleTable):
    """A rule that is judged against a predicted quantity."""

    kind: Literal["predicted"] = Field(description='"predicted", "watched" or "confirmed".')
    quantity: Id = Field(description="Id of the quantity.")
    sense: Annotated[Sense, Choice(get_args(Sense))] = Field(
        description="Which side of the limit is allowed."
    )
    limit: LimitValue = Field(
        description="A value with its unit, a share of a reference, or a table over rotor speed."
    )
    caution: LimitValue | None = Field(
        default=None, description="From here on a named person must accept; same forms as limit."
    )
    from_: RangeEnd | None = Field(
        default=None, alias="from", description="Speed from which the rule applies."
    )
    to: RangeEnd | None = Field(default=None, description="Speed up to which the rule applies.")
    family: Annotated[str, Choice(("flap", "lag", "torsion", "stand", "shaft"))] | None = Field(
        default=None, description="Family of modes that the rule covers."
    )
    orders: list[Annotated[int, Whole(1, 20)]] = Field(
        default=[], description="Modes of the family, counted from one; left out: all."
    )
    harmonics: list[Annotated[int, Whole(1, 20)]] = Field(
        default=[], description="Rotor harmonics that the rule covers; left out: all."
    )
    exempt_damping: Share | None = Field(
        default=None, description="Modes damped at least this much are exempt."
    )
    caution_acceptor: Label | None = Field(default=None, description="Who may accept a caution.")
    channel: Label | None = Field(default=None, description="Channel on the console.")
    watcher: Label | None = Field(default=None, description="Who watches that channel.")


class WatchedTable(RuleTable):
    """A rule about a channel that someone watches during the run."""

    kind: Literal["watched"] = Field(description='"predicted", "watched" or "confirmed".')
    channel: Label = Field(description="Channel on the console.")
    watcher: Label = Field(description="Who watches it.")
    caution: Label = Field(description="Panel value for a caution, with its unit.")
    abort: Label = Field(description="Panel value for an abort, with its unit.")


class ConfirmedTable(RuleTable):
    """A rule that someone initials."""

    kind: Literal["confirmed"] = Field(description='"predicted", "watched" or "confirmed".')
    when: Label = Field(description="When it is initialled.")


class ClassTable(Table):
    """A hazard class that the book adds."""

    id: Id = Field(description="Id of the class.")
    title: Label = Field(description="Title of the class.")


class AllowanceTable(Table):
    """How far a prediction may be from the truth."""

    id: Id = Field(description="Id of the allowance.")
    low: Share = Field(description="The true value is at least this share of the prediction.")
    high: Share = Field(description="The true value is at most this share of the prediction.")
    basis: Prose = Field(description="Where these shares come from.")


class WindCapTable(Table):
    """Highest wind at the anemometer in which a run may begin."""

    mean: WindSpeed = Field(description="Cap of the mean wind.")
    gust: WindSpeed = Field(description="Cap of the gusts.")
    basis: Prose = Field(description='A source, or "common practice".')


class RulesFile(Table):
    """Rules with the office that owns them."""

    name: Label = Field(description="Name of the rule book.")
    revision: Label = Field(description="Revision of the rule book.")
    owner: Label = Field(description="Office that owns the rule book.")
    approved: Annotated[bool, Flag()] = Field(
        description="False for an example book; every sheet then says so."
    )
    stop_free_margin: (
        Annotated[float, Quantity("share", minimum="0 %", maximum="100 %", example="10 %")] | None
    ) = Field(
        default=None,
        description="Share above lift-off speed from which fixed stops count as left behind.",
    )
    wind_cap: WindCapTable | None = Field(
        default=None, description="Highest wind in which a run may begin."
    )
    class_: list[ClassTable] = Field(
        default=[], alias="class", description="Hazard classes that this book adds."
    )
    allowance: list[AllowanceTable] = Field(
        default=[], description="How far predictions may be from the truth."
    )
    rule: list[
        Annotated[PredictedTable | WatchedTable | ConfirmedTable, Field(discriminator="kind")]
    ] = Field(default=[], description="The rules.")
