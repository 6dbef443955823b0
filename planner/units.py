"""Text to SI and back: the only place where units convert.

A plan writes every dimensioned value as text with its unit (``"12 deg"``, ``"245 rpm"``). Inside,
everything is SI and radians. Each dimension has a closed list of unit names: an unknown or
mismatched unit is an error, never a guess.
"""

from __future__ import annotations

import difflib
import math
import re
from dataclasses import dataclass

_TURN = 2.0 * math.pi
_DEGREE = math.pi / 180.0
_FOOT = 0.3048
_POUND = 0.45359237
_POUND_FORCE = _POUND * 9.80665
_KNOT = 1852.0 / 3600.0


@dataclass(frozen=True)
class Unit:
    """One unit name: SI value = (number + offset) * factor."""

    factor: float
    offset: float = 0.0


DIMENSIONS: dict[str, dict[str, Unit]] = {
    "length": {
        "m": Unit(1.0),
        "mm": Unit(1e-3),
        "cm": Unit(1e-2),
        "km": Unit(1e3),
        "ft": Unit(_FOOT),
        "in": Unit(_FOOT / 12.0),
    },
    "mass": {"kg": Unit(1.0), "g": Unit(1e-3), "lb": Unit(_POUND)},
    "mass per length": {"kg/m": Unit(1.0), "g/mm": Unit(1.0), "lb/ft": Unit(_POUND / _FOOT)},
    "pitch inertia per length": {"kg m": Unit(1.0), "kg mm": Unit(1e-3), "g m": Unit(1e-3)},
    "angle": {"deg": Unit(_DEGREE), "rad": Unit(1.0)},
    "rotor speed": {"rpm": Unit(_TURN / 60.0), "rad/s": Unit(1.0)},
    "relative speed": {"% rpm": Unit(0.01)},
    "speed rate": {"rpm/s": Unit(_TURN / 60.0), "rad/s2": Unit(1.0)},
    "relative rate": {"% rpm/s": Unit(0.01)},
    "angle rate": {"deg/s": Unit(_DEGREE)},
    "time": {"s": Unit(1.0), "min": Unit(60.0), "h": Unit(3600.0)},
    "speed": {
        "m/s": Unit(1.0),
        "kt": Unit(_KNOT),
        "km/h": Unit(1.0 / 3.6),
        "ft/s": Unit(_FOOT),
    },
    "pressure": {"Pa": Unit(1.0), "hPa": Unit(100.0), "kPa": Unit(1000.0), "inHg": Unit(3386.389)},
    "temperature": {
        "K": Unit(1.0),
        "degC": Unit(1.0, 273.15),
        "degF": Unit(5.0 / 9.0, 459.67),
    },
    "temperature difference": {"K": Unit(1.0), "degC": Unit(1.0), "degF": Unit(5.0 / 9.0)},
    "share": {"%": Unit(0.01)},
    "frequency": {"Hz": Unit(_TURN), "rad/s": Unit(1.0)},
    "bending stiffness": {
        "N m2": Unit(1.0),
        "kN m2": Unit(1e3),
        "lb in2": Unit(_POUND_FORCE * (_FOOT / 12.0) ** 2),
    },
    "angular stiffness": {
        "N m/rad": Unit(1.0),
        "kN m/rad": Unit(1e3),
        "N m/deg": Unit(1.0 / _DEGREE),
    },
    "angular damping": {"N m s/rad": Unit(1.0), "kN m s/rad": Unit(1e3)},
    "moment": {"N m": Unit(1.0), "kN m": Unit(1e3), "lb ft": Unit(_POUND_FORCE * _FOOT)},
    "force": {"N": Unit(1.0), "kN": Unit(1e3), "lbf": Unit(_POUND_FORCE)},
    "energy": {"J": Unit(1.0), "kJ": Unit(1e3)},
    "power": {"W": Unit(1.0), "kW": Unit(1e3), "hp": Unit(550.0 * _POUND_FORCE * _FOOT)},
    "inertia": {"kg m2": Unit(1.0)},
    "first moment": {"kg m": Unit(1.0), "kg mm": Unit(1e-3), "g m": Unit(1e-3)},
    "balance grade": {"mm/s": Unit(1e-3)},
    "density": {"kg/m3": Unit(1.0)},
    "per angle": {"/rad": Unit(1.0), "/deg": Unit(1.0 / _DEGREE)},
    "per angle squared": {"/rad2": Unit(1.0), "/deg2": Unit(1.0 / _DEGREE**2)},
    "number": {"": Unit(1.0)},
}
"""Dimension name to its unit names."""

_NUMBER = re.compile(r"[+-]?(\d+(\.\d*)?|\.\d+)([eE][+-]?\d{1,3})?", re.ASCII)


class UnitError(ValueError):
    """A value's text is not a number with a unit of the wanted dimension.

    ``mend`` says what to write instead; it is part of the message too.
    """

    def __init__(self, message: str, mend: str = "") -> None:
        """Join the message and the mend."""
        super().__init__(f"{message}; {mend}" if mend else message)
        self.mend = mend


def parse(text: str, *dimensions: str) -> tuple[float, str]:
    """Read ``"12 deg"`` as a number in SI.

    Args:
        text: number and unit, separated by a space (the space may be left out before ``%``).
        dimensions: one or more names out of ``DIMENSIONS`` that are allowed.

    Returns:
        The value in SI and the dimension that its unit belongs to.

    Raises:
        UnitError: no number, no unit, a unit of another dimension, or an unknown unit.

    Example:
        >>> parse("180 deg", "angle")
        (3.14159, 'angle')
        >>> parse("62 % rpm", "rotor speed", "relative speed")
        (0.62, 'relative speed')
    """
    stripped = text.strip()
    match = _NUMBER.match(stripped)
    if not match:
        msg = f"must start with a number, got {text!r}"
        raise UnitError(msg, f"write for example {example(*dimensions)}")
    number = float(match.group())
    name = " ".join(stripped[match.end() :].split())
    for dimension in dimensions:
        unit = DIMENSIONS[dimension].get(name)
        if unit is not None:
            return (number + unit.offset) * unit.factor, dimension
    raise _unit_fault(text, name, dimensions)


def to_si(value: float, unit: str) -> float:
    """Convert a number in a known unit to SI.

    Raises:
        UnitError: the unit name is in no dimension.
    """
    found = _find(unit)
    return (value + found.offset) * found.factor


def from_si(value: float, unit: str) -> float:
    """Convert an SI number to a known unit, the inverse of ``to_si``.

    Raises:
        UnitError: the unit name is in no dimension.

    Example:
        >>> from_si(to_si(245.0, "rpm"), "rpm")
        245.0
    """
    found = _find(unit)
    return value / found.factor - found.offset


def dimension_of(unit: str) -> str:
    """Name the first dimension that has this unit.

    Raises:
        UnitError: the unit name is in no dimension.
    """
    for dimension, table in DIMENSIONS.items():
        if unit in table:
            return dimension
    msg = f"unknown unit {unit!r}"
    raise UnitError(msg)


def unit_names(*dimensions: str) -> list[str]:
    """List the unit names that the dimensions allow, each once."""
    return list(dict.fromkeys(name for each in dimensions for name in DIMENSIONS[each]))


def example(*dimensions: str) -> str:
    """Give a sample value of the first dimension, for messages."""
    first = next(iter(DIMENSIONS[dimensions[0]]))
    return f'"12 {first}"' if first else "12"


def _find(unit: str) -> Unit:
    return DIMENSIONS[dimension_of(unit)][unit]


def _unit_fault(text: str, name: str, dimensions: tuple[str, ...]) -> UnitError:
    allowed = ", ".join(unit_names(*dimensions))
    wanted = " or ".join(dimensions)
    if not name:
        return UnitError(f"must carry a unit of {wanted} ({allowed}), got {text!r}")
    close = difflib.get_close_matches(name, unit_names(*dimensions), n=1)
    mend = f"did you mean {close[0]!r}?" if close else ""
    message = f"must be a {wanted} in one of: {allowed}; got unit {name!r} in {text!r}"
    return UnitError(message, mend)
