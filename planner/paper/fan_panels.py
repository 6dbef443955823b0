"""The panels of the fan chart as data: blade, stand and shaft modes with what excites them."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

from planner.paper import texts
from planner.units import from_si

if TYPE_CHECKING:
    from collections.abc import Iterable

    from planner.paper.reading import Json, Reading

FAMILIES = ("blade", "stand", "shaft")
"""One panel each."""
FRAMES = {"blade": "turning frame", "stand": "fixed frame", "shaft": "torsion"}
"""In which frame a panel's frequencies are seen; torsion is the same in both."""
_PARTS = {"stand": "column", "shaft": "drive_train"}
"""What a stand file may describe for its modes to follow from."""
_SIDES = {"blade": "Blade modes", "stand": "Stand modes", "shaft": "Shaft modes"}


@dataclass(frozen=True)
class Curve:
    """One mode in chart units; the frequency is None where there is none."""

    name: str
    speed_rpm: tuple[float, ...]
    frequency_hz: tuple[float | None, ...]
    doubt: str = ""
    style: int = 0
    """Picks dashes and markers, another for each curve of a panel."""
    is_shifted: bool = False
    """A blade mode as the stand sees it, drawn thin."""
    breaks: frozenset[int] = frozenset()
    """After these speeds the name goes over to another branch: the points are not joined."""

    @property
    def label(self) -> str:
        """Its name, with what makes it doubtful."""
        return f"{self.name} ({self.doubt})" if self.doubt else self.name


@dataclass(frozen=True)
class Panel:
    """One drawing of the fan chart."""

    family: str
    title: str
    curves: tuple[Curve, ...]
    harmonics: tuple[int, ...]
    missing: str
    """Why it has no mode of its own; empty where it has."""
    top_hz: float = 0.0
    """Highest frequency that is drawn; 0: what its curves and harmonics ask for."""


def panels(reading: Reading, families: Iterable[str] = FAMILIES) -> list[Panel]:
    """The panels of a record, in order."""
    return [_panel(reading, family) for family in families]


def _panel(reading: Reading, family: str) -> Panel:
    fan = reading.record["series"]["fan"]
    speed = tuple(from_si(value, "rpm") for value in fan["speed_rad_s"])
    own = [mode for mode in fan["modes"] if mode["panel"] == family]
    seen = fan["shifted"] if family == "stand" else []
    sources = [(mode, False) for mode in own] + [(mode, True) for mode in seen]
    curves = [
        Curve(
            mode["name"],
            speed,
            _hertz(mode),
            "" if is_shifted else _doubt(reading, mode),
            style,
            is_shifted=is_shifted,
            breaks=breaks_of(mode),
        )
        for style, (mode, is_shifted) in enumerate(sources)
    ]
    harmonics = tuple(int(n) for n in fan["harmonics"][family])
    missing = "" if own else _missing(reading, family)
    title = _title(reading, family, has_harmonics=bool(harmonics), has_shifted=bool(seen))
    return Panel(family, title, tuple(curves), harmonics, missing)


def breaks_of(mode: Json) -> frozenset[int]:
    """Speeds after which a mode's name goes over to another branch; older records have none."""
    return frozenset(int(k) for k in mode.get("breaks") or ())


def _hertz(mode: Json) -> tuple[float | None, ...]:
    values = mode["frequency_rad_s"]
    return tuple(None if value is None else from_si(value, "Hz") for value in values)


def _title(reading: Reading, family: str, *, has_harmonics: bool, has_shifted: bool) -> str:
    title = f"{_SIDES[family]}, {FRAMES[family]}"
    pitch = reading.record["series"]["fan"]["collective_rad"]
    if family == "blade" and pitch is not None:
        title += f", pitch {texts.setting(pitch, 'deg')}"
    if has_shifted:
        title += "; thin: blade modes as the stand sees them"
    return title if has_harmonics else f"{title}; harmonics: not in this record"


def _missing(reading: Reading, family: str) -> str:
    if family == "blade":
        return f"no blade mode was computed: {texts.NOT_ASSESSED}"
    stand = reading.plan["stand"]
    given = any(mode["family"] == family for mode in stand["modes"])
    if given or stand.get(_PARTS[family]) is not None:
        return f"no {family} mode was computed: {texts.NOT_ASSESSED}"
    return f"the stand file gives no {family} mode: {texts.NOT_ASSESSED}"


def _doubt(reading: Reading, mode: Json) -> str:
    if mode["doubt"]:
        return str(mode["doubt"])
    for given in reading.plan["stand"]["modes"]:
        is_it = mode["name"] in {given["name"], f"{given['family']} {given['name']}"}
        if is_it and not counts_rotor(given):
            return texts.NOT_ASSESSED
    return str(mode.get("note", ""))


def counts_rotor(given: Json) -> bool:
    """Whether a given mode was found with the rotor on, or has the masses that mend this.

    Example:
        >>> counts_rotor({"rotor_fitted": None, "family": "stand"})
        False
    """
    if given["rotor_fitted"] is not False or given["family"] != "stand":
        return given["rotor_fitted"] is True
    masses = (given.get("modal_mass_kg"), given.get("missing_mass_kg"))
    return None not in masses
