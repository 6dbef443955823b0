"""The kinds of single values in a plan folder, each with its check and its JSON Schema.

Each kind is one annotation: ``Annotated[float, Quantity("length", positive=True)]``. A refused
value carries what was expected, what was found and the mend, so that a fault line can be printed
from it; the same definition gives editors a pattern, an example and hover help.
"""

from __future__ import annotations

import math
import re
from abc import ABC, abstractmethod
from collections.abc import Callable
from dataclasses import dataclass
from typing import Any, NamedTuple, NoReturn

from pydantic import BaseModel, ConfigDict
from pydantic_core import PydanticCustomError, core_schema

from planner import units
from planner.files.faults import did_you_mean, listed, minus_mend, shown

Printable = Callable[[str], str]
"""Names the characters of a text that paper cannot print, empty when it can print all."""

_LONGEST_VALUE = 80
_LARGEST = 1e300
_PAIR = 2
_NUMBER_PATTERN = r"(\d+(\.\d*)?|\.\d+)([eE][+-]?\d{1,3})?"


class Unknown:
    """Stands for a value that is missing or refused, so that the other checks can go on."""


UNKNOWN = Unknown()


class Measured(NamedTuple):
    """A value that may carry a unit of several dimensions, such as rpm or percent rpm."""

    value_si: float
    dimension: str

    def resolved(self, full: float) -> float:
        """SI value; a relative one refers to ``full`` (speed or speed per second at 100 %)."""
        return self.value_si * full if self.dimension.startswith("relative") else self.value_si


def refuse(expected: str, found: str, mend: str) -> NoReturn:
    """Refuse a value.

    Raises:
        PydanticCustomError: always; it carries the three texts.
    """
    kind = "refused"
    raise PydanticCustomError(
        kind,
        "expected {expected}, found {found}; {mend}",
        {"expected": expected, "found": found, "mend": mend},
    )


class Leaf(ABC):
    """Base of all kinds of values: hooks into pydantic, and stands aside for unknown values."""

    blank: Any = None
    """What an unknown value becomes; comparisons with it find no fault."""

    @abstractmethod
    def read(self, value: object, printable: Printable | None) -> object:
        """Return the value to keep, or refuse it."""

    @abstractmethod
    def json_schema(self) -> dict[str, Any]:
        """Describe the accepted values to an editor."""

    def __get_pydantic_core_schema__(
        self, _source: object, _handler: object
    ) -> core_schema.CoreSchema:
        """Validate by ``read``."""

        def check(value: object, info: core_schema.ValidationInfo) -> object:
            if value is UNKNOWN:
                return self.blank
            context = info.context or {}
            return self.read(value, context.get("printable"))

        return core_schema.with_info_plain_validator_function(check)

    def __get_pydantic_json_schema__(self, _core: object, _handler: object) -> dict[str, Any]:
        """Describe by ``json_schema``."""
        return self.json_schema()


class Table(BaseModel):
    """Base of all tables of a plan folder: unknown keys are refused, nothing is coerced."""

    model_config = ConfigDict(extra="forbid", strict=True, frozen=True, defer_build=True)


class Quantity(Leaf):
    """Text with a number and a unit; becomes SI, or ``Measured`` for several dimensions."""

    def __init__(
        self,
        *dimensions: str,
        positive: bool = False,
        minimum: str | None = None,
        maximum: str | None = None,
        example: str | None = None,
    ) -> None:
        """State the dimensions, the bounds as text with unit, and a sample for messages."""
        self.dimensions = dimensions
        self.positive = positive
        self.minimum = minimum
        self.maximum = maximum
        self.example = example or units.example(*dimensions).strip('"')
        self._low = units.parse(minimum, *dimensions)[0] if minimum else -math.inf
        self._high = units.parse(maximum, *dimensions)[0] if maximum else math.inf
        self.blank = math.nan if len(dimensions) == 1 else Measured(math.nan, dimensions[0])

    @property
    def expected(self) -> str:
        """The accepted values in words."""
        name = " or ".join(self.dimensions)
        article = "an" if name[0] in "aeiou" else "a"
        bounds = [
            *(["above 0"] if self.positive else []),
            *([f"of at least {self.minimum}"] if self.minimum else []),
            *([f"of at most {self.maximum}"] if self.maximum else []),
        ]
        bound = "".join(f" {text}" for text in [" and ".join(bounds)] if text)
        return (
            f"{article} {name}{bound} in {listed(units.unit_names(*self.dimensions))},"
            f' such as "{self.example}"'
        )

    def read(self, value: object, printable: Printable | None) -> float | Measured:
        """Parse, then check that the value is finite and within its bounds."""
        del printable
        if not isinstance(value, str):
            refuse(self.expected, shown(value), "write number and unit as one text in quotes")
        if len(value) > _LONGEST_VALUE:
            refuse(self.expected, f"{len(value)} characters", "write one number and its unit")
        try:
            number, dimension = units.parse(value, *self.dimensions)
        except units.UnitError as error:
            refuse(self.expected, shown(value), _unit_mend(value, error.mend))
        if not math.isfinite(number):
            refuse(self.expected, shown(value), "write a finite number")
        outside = not self._low <= number <= self._high
        if outside or (self.positive and not number > 0.0):
            refuse(self.expected, shown(value), "correct the value")
        return Measured(number, dimension) if len(self.dimensions) > 1 else number

    def json_schema(self) -> dict[str, Any]:
        """Text whose pattern lists the units; no minus sign where none can be meant."""
        names = sorted(units.unit_names(*self.dimensions), key=len, reverse=True)
        wanted = "|".join(re.escape(name).replace(r"\ ", r"\s+") for name in names)
        # an offset scale, such as degC, is below zero without being negative
        plain = all(u.offset == 0.0 for d in self.dimensions for u in units.DIMENSIONS[d].values())
        sign = "[+]?" if plain and (self.positive or self._low >= 0.0) else "[+-]?"
        return {
            "type": "string",
            "pattern": rf"^\s*{sign}{_NUMBER_PATTERN}\s*({wanted.replace('/', '[/]')})\s*$",
            "examples": [self.example],
        }


@dataclass(frozen=True)
class Number(Leaf):
    """A bare number that has no unit."""

    minimum: float = -math.inf
    maximum: float = math.inf
    positive: bool = False
    example: float = 0.14
    blank: Any = math.nan

    def read(self, value: object, printable: Printable | None) -> float:
        """Refuse texts, booleans, NaN, infinities and values out of bounds."""
        del printable
        bounds = f" from {self.minimum:g} to {self.maximum:g}" if self._bounded else ""
        expected = f"a bare number{' above 0' if self.positive else ''}{bounds}"
        if isinstance(value, bool) or not isinstance(value, int | float):
            refuse(expected, shown(value), f"write for example {self.example:g}, without quotes")
        if not abs(value) < _LARGEST:
            refuse(expected, shown(value), "write a finite number")
        if not self.minimum <= value <= self.maximum or (self.positive and not value > 0.0):
            refuse(expected, shown(value), "correct the value")
        return float(value)

    @property
    def _bounded(self) -> bool:
        return math.isfinite(self.minimum) and math.isfinite(self.maximum)

    def json_schema(self) -> dict[str, Any]:
        """Number with its bounds."""
        schema: dict[str, Any] = {"type": "number", "examples": [self.example]}
        if self._bounded:
            schema |= {"minimum": self.minimum, "maximum": self.maximum}
        return schema | ({"exclusiveMinimum": 0} if self.positive else {})


@dataclass(frozen=True)
class Whole(Leaf):
    """A whole number within bounds."""

    minimum: int
    maximum: int
    blank: Any = 0

    def read(self, value: object, printable: Printable | None) -> int:
        """Refuse anything but an integer within the bounds."""
        del printable
        within = isinstance(value, int) and self.minimum <= value <= self.maximum
        if isinstance(value, bool) or not isinstance(value, int) or not within:
            expected = f"a whole number from {self.minimum} to {self.maximum}"
            refuse(expected, shown(value), f"write for example {self.minimum}, without quotes")
        return value

    def json_schema(self) -> dict[str, Any]:
        """Integer with its bounds."""
        return {"type": "integer", "minimum": self.minimum, "maximum": self.maximum}


@dataclass(frozen=True)
class Flag(Leaf):
    """Either true or false."""

    def read(self, value: object, printable: Printable | None) -> bool:
        """Refuse anything but a TOML boolean."""
        del printable
        if not isinstance(value, bool):
            refuse("true or false", shown(value), "write true or false, without quotes")
        return value

    def json_schema(self) -> dict[str, Any]:
        """Boolean."""
        return {"type": "boolean"}


@dataclass(frozen=True)
class Choice(Leaf):
    """One text out of a closed list."""

    names: tuple[str, ...]
    blank: Any = ""

    def read(self, value: object, printable: Printable | None) -> str:
        """Refuse any other text."""
        del printable
        if not isinstance(value, str) or value not in self.names:
            hint = did_you_mean(value, self.names) if isinstance(value, str) else ""
            quoted = [f'"{name}"' for name in self.names]
            refuse(listed(quoted), shown(value), hint or "write one of these")
        return value

    def json_schema(self) -> dict[str, Any]:
        """Enumeration."""
        return {"type": "string", "enum": list(self.names)}


@dataclass(frozen=True)
class Amount(Leaf):
    """A value whose unit depends on another key: text with a unit, or a bare number for none."""

    blank: Any = UNKNOWN

    def read(self, value: object, printable: Printable | None) -> str | float:
        """Keep text and finite numbers for the check that knows the unit."""
        del printable
        if isinstance(value, str) and len(value) <= _LONGEST_VALUE:
            return value
        if isinstance(value, bool) or not isinstance(value, int | float):
            refuse('a number with its unit, such as "2 deg"', shown(value), "write it as text")
        if not abs(value) < _LARGEST:
            refuse("a finite number", shown(value), "write a finite number")
        return float(value)

    def json_schema(self) -> dict[str, Any]:
        """String that starts with a number, or a number."""
        text = {"type": "string", "pattern": rf"^\s*[+-]?{_NUMBER_PATTERN}", "examples": ["2 deg"]}
        return {"anyOf": [text, {"type": "number"}]}


SPEED = Quantity("rotor speed", "relative speed", minimum="0 rpm", example="245 rpm")


@dataclass(frozen=True)
class SpeedAndAmount(Leaf):
    """One row of a table over rotor speed: ``["245 rpm", "2 deg"]``."""

    blank: Any = (SPEED.blank, UNKNOWN)

    def read(self, value: object, printable: Printable | None) -> tuple[Measured, str | float]:
        """Refuse what is not a pair of a speed and a value."""
        if not isinstance(value, list) or len(value) != _PAIR:
            expected = 'a speed and a value, such as ["245 rpm", "2 deg"]'
            refuse(expected, shown(value), "write two texts in brackets")
        speed = SPEED.read(value[0], printable)
        if not isinstance(speed, Measured):
            raise TypeError
        return speed, Amount().read(value[1], printable)

    def json_schema(self) -> dict[str, Any]:
        """Array of exactly two."""
        rows = [SPEED.json_schema(), Amount().json_schema()]
        return {"type": "array", "prefixItems": rows, "minItems": 2, "maxItems": 2}


@dataclass(frozen=True)
class SpeedAndQuantity(Leaf):
    """One row of a table over rotor speed whose unit is known: ``["245 rpm", "30 kN m"]``."""

    quantity: Quantity

    @property
    def blank(self) -> Any:  # noqa: ANN401 (as for every leaf)
        """Unknown on both sides."""
        return SPEED.blank, self.quantity.blank

    def read(self, value: object, printable: Printable | None) -> tuple[Measured, object]:
        """Refuse what is not a pair of a speed and a value."""
        if not isinstance(value, list) or len(value) != _PAIR:
            expected = f'a speed and a value, such as ["245 rpm", "{self.quantity.example}"]'
            refuse(expected, shown(value), "write two texts in brackets")
        speed = SPEED.read(value[0], printable)
        if not isinstance(speed, Measured):
            raise TypeError
        return speed, self.quantity.read(value[1], printable)

    def json_schema(self) -> dict[str, Any]:
        """Array of exactly two."""
        rows = [SPEED.json_schema(), self.quantity.json_schema()]
        return {"type": "array", "prefixItems": rows, "minItems": 2, "maxItems": 2}


def _unit_mend(text: str, mend: str) -> str:
    if re.match(r"\s*[+-]?\d+,\d", text):
        return "use a point as decimal sign"
    if re.fullmatch(r"\s*[+-]?[\d.eE+-]+\s*", text):
        return "add the unit"
    return minus_mend(text) or mend.replace("'", '"') or "use one of these units"
