"""Text to SI: the only place where units convert."""

from __future__ import annotations

import math

import pytest

from planner import units


@pytest.mark.parametrize(
    ("text", "dimension", "expected"),
    [
        ("250 rpm", "rotor speed", 250.0 * 2.0 * math.pi / 60.0),
        ("12 deg", "angle", math.radians(12.0)),
        ("-2.5 deg", "angle", math.radians(-2.5)),
        ("15 kt", "speed", 15.0 * 1852.0 / 3600.0),
        ("59 degF", "temperature", 288.15),
        ("15 degC", "temperature", 288.15),
        ("5 degC", "temperature difference", 5.0),
        ("9 degF", "temperature difference", 5.0),
        ("29.921 inHg", "pressure", 101325.0),
        ("0.4 kg/m", "mass per length", 0.4),
        ("3.1 Hz", "frequency", 3.1 * 2.0 * math.pi),
        ("5.73 /rad", "per angle", 5.73),
        ("0.1 /deg", "per angle", 0.1 * 180.0 / math.pi),
        ("62 %", "share", 0.62),
        ("62%", "share", 0.62),
        ("62 % rpm", "relative speed", 0.62),
        ("1e3 N m/rad", "angular stiffness", 1000.0),
        ("1 hp", "power", 745.699872),
        ("12 deg/s", "angle rate", math.radians(12.0)),
        ("2.5 kJ", "energy", 2500.0),
    ],
)
def test_parse_reads_text_as_si(text: str, dimension: str, expected: float) -> None:
    value, found = units.parse(text, dimension)
    assert found == dimension
    assert value == pytest.approx(expected, rel=2e-5)


@pytest.mark.parametrize(
    ("text", "dimensions", "message"),
    [
        ("250", ("rotor speed",), r"must carry a unit of rotor speed \(rpm, rad/s\), got '250'"),
        ("12 degrees", ("angle",), r"got unit 'degrees' in '12 degrees'; did you mean 'deg'\?"),
        ("1,5 m", ("length",), r"must be a length in one of: m, .*; got unit ',5 m'"),
        ("12 kg", ("length",), r"must be a length .*; got unit 'kg'"),
        (
            "fast",
            ("speed",),
            r'must start with a number, got \'fast\'; write for example "12 m/s"',
        ),
        ("nan m", ("length",), r"must start with a number"),
        ("9**9**9 m", ("length",), r"got unit '\*\*9\*\*9 m'"),
        ("40 % rpm", ("rotor speed",), r"must be a rotor speed"),
    ],
)
def test_parse_refuses_what_is_not_a_value(
    text: str, dimensions: tuple[str, ...], message: str
) -> None:
    with pytest.raises(units.UnitError, match=message):
        units.parse(text, *dimensions)


def test_rpm_is_a_rate_of_turns_not_of_radians() -> None:
    assert units.to_si(60.0, "rpm") == pytest.approx(2.0 * math.pi)


@pytest.mark.parametrize("unit", sorted({u for t in units.DIMENSIONS.values() for u in t}))
def test_every_unit_converts_both_ways(unit: str) -> None:
    assert units.from_si(units.to_si(3.7, unit), unit) == pytest.approx(3.7)


def test_a_unit_name_means_one_factor_wherever_it_appears() -> None:
    for name in {u for t in units.DIMENSIONS.values() for u in t}:
        homes = [t[name] for t in units.DIMENSIONS.values() if name in t]
        factors = {unit.factor for unit in homes}
        assert len(factors) == 1, name


def test_unknown_unit_is_named() -> None:
    with pytest.raises(units.UnitError, match=r"unknown unit 'furlong'"):
        units.from_si(1.0, "furlong")
