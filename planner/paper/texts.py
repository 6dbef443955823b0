"""Numbers with their units, rounded toward danger, and text that prints in full or is refused."""

from __future__ import annotations

import math
import unicodedata
from functools import cache
from pathlib import Path
from typing import TYPE_CHECKING, Literal

from planner.units import from_si

if TYPE_CHECKING:
    from reportlab.pdfbase.ttfonts import TTFont

Rounding = Literal["up", "down", "nearest"]

FONT_FOLDER = Path(__file__).parent / "fonts"
FONT_FILES = {"DejaVuSans": "DejaVuSans.ttf", "DejaVuSans-Bold": "DejaVuSans-Bold.ttf"}
MINUS = "\N{MINUS SIGN}"
GLUE = "\N{NO-BREAK SPACE}"
"""Drawn as a space; a line is never broken at it, so that a unit stays with its number."""
NOT_ASSESSED = "NOT ASSESSED"
"""Printed wherever a number is missing, with the reason in brackets."""
DOES_NOT_APPLY = "does not apply"

_MARKS = {
    "deg": "°",
    "degC": "°C",
    "degF": "°F",
    "% rpm": "%",
    "% rpm/s": "%/s",
    "kg/m3": "kg/m³",
    "kg m2": "kg m²",
    "N m2": "N m²",
    "kN m2": "kN m²",
    "lb in2": "lb in²",
    "rad/s2": "rad/s²",
    "/rad2": "/rad²",
    "/deg2": "/deg²",
}
_DECIMALS = {"deg": (0, 1), "%": (0, 1), "rpm": (0, 1), "s": (0, 1), "m/s": (0, 1), "Hz": (0, 2)}
"""Fewest and most decimals by unit; between them three significant digits."""
_ANY_DECIMALS = (-9, 4)
_SECONDS_ONLY_BELOW = 120.0

_TOWARD: dict[str, Rounding] = {"high": "up", "low": "down"}

_ALLOWED_CONTROLS = {"\n", "\t"}
_REFUSED_CATEGORIES = {"Cc", "Cf", "Cs", "Co", "Cn", "Zl", "Zp"}
_RIGHT_TO_LEFT = {"R", "AL", "AN"}


class UnprintableError(ValueError):
    """Text holds characters that the printed fonts cannot show as they were written."""


def unit_mark(unit: str) -> str:
    """Give a unit as paper shows it.

    Example:
        >>> unit_mark("kg/m3"), unit_mark("rpm")
        ('kg/m³', 'rpm')
    """
    return _MARKS.get(unit, unit)


def number(value_si: float, unit: str, rounding: Rounding = "nearest") -> str:
    """Print an SI number in a unit with the fewest useful digits.

    Args:
        value_si: the number in SI.
        unit: name of the unit to print in.
        rounding: towards which side the dropped digits go.

    Raises:
        ValueError: the number is not finite; a missing number has a status, not a value.

    Example:
        >>> number(0.0351, "deg", "up"), number(0.0351, "deg", "down")
        ('2.1°', '2.0°')
    """
    shown = _in_unit(value_si, unit)
    return _with_mark(_digits(shown, _decimals(shown, unit), rounding), unit)


def toward_danger(value_si: float, unit: str, danger: str) -> str:
    r"""Print a predicted number so that rounding never flatters it.

    Args:
        value_si: the number in SI.
        unit: name of the unit to print in.
        danger: ``high``, ``low``, ``both`` or ``none``.

    Example:
        >>> toward_danger(1231.0, "N m", "high"), toward_danger(1239.0, "N", "low")
        ('1240\xa0N\xa0m', '1230\xa0N')
    """
    if danger == "both":
        return number(value_si, unit, "up" if value_si >= 0.0 else "down")
    return number(value_si, unit, _TOWARD.get(danger, "nearest"))


def worst_end(low_si: float, high_si: float, sense: str, danger: str) -> tuple[float, str]:
    """Pick the end of a range that a limit looks at, and the danger to round it toward.

    Args:
        low_si: least value.
        high_si: greatest value.
        sense: ``at most`` or ``at least``.
        danger: danger of the quantity; ``both``: the end of the greater size counts.

    Example:
        >>> worst_end(-3.0, 2.0, "at most", "both"), worst_end(-3.0, 2.0, "at most", "high")
        ((-3.0, 'both'), (2.0, 'high'))
    """
    if sense == "at least":
        return low_si, "low"
    if danger == "both":
        return max(low_si, high_si, key=abs), "both"
    return high_si, "high"


def span(low_si: float, high_si: float, unit: str) -> str:
    """Print the two ends of a range, each rounded outward: how far it may go.

    Example:
        >>> span(-0.0351, 0.11, "deg")
        '−2.1 to 6.4°'
    """
    return _range(low_si, high_si, unit, ("down", "up"))


def hold_band(low_si: float, high_si: float, unit: str) -> str:
    """Print the range that readings must stay in, each end rounded inward: leaving it is seen.

    A range narrower than the printed digits is rounded outward instead.

    Example:
        >>> hold_band(-0.0351, 0.11, "deg")
        '−2.0 to 6.3°'
    """
    low, high = _in_unit(low_si, unit), _in_unit(high_si, unit)
    decimals = _decimals(max(abs(low), abs(high)), unit)
    if _steps(low, decimals, "up") >= _steps(high, decimals, "down"):
        return span(low_si, high_si, unit)
    return _range(low_si, high_si, unit, ("up", "down"))


def setting(value_si: float, unit: str) -> str:
    """Print a value that the plan orders, to five digits and without trailing zeros.

    Example:
        >>> setting(25.656340, "rpm").split(), setting(0.0, "deg")
        (['245', 'rpm'], '0°')
    """
    shown = _in_unit(value_si, unit)
    whole_digits = math.floor(math.log10(abs(shown)) + 1e-12) + 1 if shown else 1
    decimals = min(6, max(0, 5 - whole_digits))
    return _with_mark(_trimmed(shown, decimals), unit)


def limit(value_si: float, unit: str, sense: str) -> str:
    """Print a limit: as it stands where three decimals hold it, else rounded to the strict side.

    Args:
        value_si: the limit in SI.
        unit: name of the unit to print in.
        sense: ``at most`` or ``at least``.

    Example:
        >>> limit(0.0349065850398866, "deg", "at least")
        '2°'
    """
    shown = _in_unit(value_si, unit)
    if abs(shown * 1e3 - round(shown * 1e3)) <= 1e-6 * max(1.0, abs(shown)):
        return _with_mark(_trimmed(shown, 3), unit)
    return number(value_si, unit, "down" if sense == "at most" else "up")


def duration(time_s: float) -> str:
    """Print a stretch of time in seconds, or in minutes and seconds from two minutes on.

    Example:
        >>> [duration(time_s).replace(GLUE, "_") for time_s in (90.0, 330.0, 600.0)]
        ['90_s', '5_min 30_s', '10_min']
    """
    if time_s < _SECONDS_ONLY_BELOW:
        return setting(time_s, "s")
    minutes, seconds = divmod(round(time_s, 1), 60.0)
    rest = f" {setting(seconds, 's')}" if seconds > 0.0 else ""
    return f"{minutes:.0f}{GLUE}min{rest}"


def sentence(text: str) -> str:
    """End a text with a full stop, unless it has an end.

    Example:
        >>> sentence("common practice"), sentence("who?")
        ('common practice.', 'who?')
    """
    stripped = text.strip()
    return stripped if stripped.endswith((".", "!", "?")) else f"{stripped}."


def unprintable(text: str) -> str:
    r"""Name the characters that paper cannot show as written; empty when there are none.

    Refused are characters that a printed font lacks, controls other than line feed and tab,
    invisible and direction-changing characters, surrogates, and letters written right to left.

    Example:
        >>> unprintable("β ≥ 2°"), unprintable("a\u202eb")
        ('', 'U+202E RIGHT-TO-LEFT OVERRIDE')
    """
    if text.isascii() and text.isprintable():
        return ""
    found = {character for character in text if not _prints(character)}
    return ", ".join(_character_name(character) for character in sorted(found))


def printable(text: str) -> str:
    """Pass text on, or refuse it.

    Raises:
        UnprintableError: the text holds characters that paper cannot show.
    """
    names = unprintable(text)
    if names:
        start = text.encode("ascii", "backslashreplace").decode("ascii")[:60]
        msg = f"text must print as written, got {names} in {start!r}; replace these characters"
        raise UnprintableError(msg)
    return text


def _prints(character: str) -> bool:
    if character in _ALLOWED_CONTROLS or " " <= character <= "~":
        return True
    if unicodedata.category(character) in _REFUSED_CATEGORIES:
        return False
    if unicodedata.bidirectional(character) in _RIGHT_TO_LEFT:
        return False
    return ord(character) in _font_characters()


@cache
def shipped_fonts() -> dict[str, TTFont]:
    """Read the shipped fonts and make them known to the PDF library, once."""
    from reportlab.pdfbase import pdfmetrics, ttfonts  # noqa: PLC0415  # slow, only printing pays

    fonts = {
        name: ttfonts.TTFont(name, str(FONT_FOLDER / file)) for name, file in FONT_FILES.items()
    }
    for font in fonts.values():
        pdfmetrics.registerFont(font)
    return fonts


@cache
def _font_characters() -> frozenset[int]:
    tables = [font.face.charToGlyph for font in shipped_fonts().values()]
    return frozenset(tables[0]).intersection(*tables[1:])


def _character_name(character: str) -> str:
    name = unicodedata.name(character, "")
    return f"U+{ord(character):04X} {name}".rstrip()


def _in_unit(value_si: float, unit: str) -> float:
    if not math.isfinite(value_si):
        msg = f"a printed number must be finite, got {value_si!r} {unit}; print its status instead"
        raise ValueError(msg)
    return from_si(value_si, unit)


def _decimals(shown: float, unit: str) -> int:
    fewest, most = _DECIMALS.get(unit, _ANY_DECIMALS)
    if shown == 0.0:
        return max(fewest, min(most, 1))
    return max(fewest, min(most, 2 - math.floor(math.log10(abs(shown)) + 1e-12)))


def _steps(shown: float, decimals: int, rounding: Rounding) -> int:
    scaled = shown * 10.0**decimals
    nearest = round(scaled)
    if rounding == "nearest" or abs(scaled - nearest) <= 1e-9 * max(1.0, abs(scaled)):
        return nearest
    return math.ceil(scaled) if rounding == "up" else math.floor(scaled)


def _digits(shown: float, decimals: int, rounding: Rounding) -> str:
    steps = _steps(shown, decimals, rounding)
    size = abs(steps) * 10 ** max(-decimals, 0)
    if decimals > 0:
        whole, part = divmod(abs(steps), 10**decimals)
        text = f"{whole}.{part:0{decimals}d}"
    else:
        text = str(size)
    return (MINUS if steps < 0 else "") + text


def _trimmed(shown: float, decimals: int) -> str:
    text = _digits(shown, decimals, "nearest")
    return text.rstrip("0").rstrip(".") if "." in text else text


def _range(low_si: float, high_si: float, unit: str, ends: tuple[Rounding, Rounding]) -> str:
    low, high = _in_unit(low_si, unit), _in_unit(high_si, unit)
    decimals = _decimals(max(abs(low), abs(high)), unit)
    texts = _digits(low, decimals, ends[0]), _digits(high, decimals, ends[1])
    return _with_mark(f"{texts[0]} to {texts[1]}", unit)


def _with_mark(text: str, unit: str) -> str:
    mark = unit_mark(unit).replace(" ", GLUE)
    return f"{text}{'' if mark in {'°', ''} else GLUE}{mark}"
