from __future__ import annotations

import math
import unicodedata

import pytest
from hypothesis import given
from hypothesis import strategies as st
from reportlab.pdfbase.ttfonts import TTFontFile

from planner.paper import texts
from planner.paper.ink import BODY, lines_of, width_of
from planner.units import DIMENSIONS, from_si, to_si

UNITS = sorted({u for table in DIMENSIONS.values() for u in table if u})


def shown_number(text: str) -> float:
    return float(text.split(maxsplit=1)[0].rstrip("°CF").replace(texts.MINUS, "-"))


@given(st.floats(-1e7, 1e7), st.sampled_from(UNITS))
def test_rounding_toward_danger_never_flatters(value: float, unit: str) -> None:
    shown = from_si(value, unit)
    slack = 1e-9 * max(1.0, abs(shown)) * 1.01
    assert shown_number(texts.toward_danger(value, unit, "high")) >= shown - slack
    assert shown_number(texts.toward_danger(value, unit, "low")) <= shown + slack


@given(st.floats(-1e5, 1e5), st.floats(0.0, 1e4))
def test_hold_band_lies_inside_or_is_narrower_than_its_digits(low: float, width: float) -> None:
    text = texts.hold_band(low, low + width, "N")
    first, second = text.removesuffix(f"{texts.GLUE}N").replace(texts.MINUS, "-").split(" to ")
    ends = float(first), float(second)
    assert ends[0] <= ends[1]
    inside = ends[0] >= low - 1e-3 and ends[1] <= low + width + 1e-3
    outside = ends[0] <= low + 1e-3 and ends[1] >= low + width - 1e-3
    assert inside or outside


@pytest.mark.parametrize(
    ("value", "unit", "sense", "expected"),
    [
        (to_si(2.0, "deg"), "deg", "at least", "2°"),
        (to_si(380.0, "kW"), "kW", "at most", "380 kW"),
        (to_si(-4.25, "deg"), "deg", "at least", "−4.25°"),
        (to_si(233.14159, "rpm"), "rpm", "at most", "233 rpm"),
        (to_si(233.14159, "rpm"), "rpm", "at least", "234 rpm"),
    ],
)
def test_limit_is_exact_or_strict(value: float, unit: str, sense: str, expected: str) -> None:
    assert texts.limit(value, unit, sense).replace(texts.GLUE, " ") == expected


@pytest.mark.parametrize("value", [math.nan, math.inf, -math.inf])
def test_missing_number_is_refused_not_printed(value: float) -> None:
    with pytest.raises(ValueError, match=r"must be finite, got (nan|inf|-inf) deg"):
        texts.number(value, "deg")


def test_zero_carries_no_sign_and_a_hair_below_zero_shows() -> None:
    assert texts.number(-0.0, "deg") == "0.0°"
    assert texts.number(-1e-6, "deg", "down") == "−0.1°"
    assert texts.setting(-1e-12, "deg") == "0°"


@pytest.mark.parametrize(
    ("value", "expected"),
    [(62.0, "62 s"), (179.99999, "3 min"), (3600.0, "60 min"), (119.9, "119.9 s")],
)
def test_duration_carries_whole_minutes(value: float, expected: str) -> None:
    assert texts.duration(value).replace(texts.GLUE, " ") == expected


@pytest.mark.parametrize("unit", UNITS)
def test_unit_never_leaves_its_number(unit: str) -> None:
    for text in (
        texts.number(1.0, unit),
        texts.setting(1.0, unit),
        texts.limit(1.0, unit, "at most"),
        texts.span(1.0, 2.0, unit).rsplit(" ", maxsplit=1)[1],
        texts.hold_band(1.0, 2.0, unit).rsplit(" ", maxsplit=1)[1],
    ):
        assert " " not in text
        assert lines_of(text, BODY, 1.0e4) == (text,)
        assert text.split()[-1] == text.split(texts.GLUE)[-1]


def test_no_break_space_is_drawn_and_holds_a_line_together() -> None:
    text = f"at most {texts.number(29600.0, 'N m')}"
    assert lines_of(text, BODY, width_of("29600 N m", BODY) + 1.0) == (
        "at most",
        f"29600{texts.GLUE}N{texts.GLUE}m",
    )


@pytest.mark.parametrize(
    ("text", "name"),
    [
        ("a\u202eb", "U+202E"),
        ("a\x00b", "U+0000"),
        ("zero\u200bwidth", "U+200B"),
        ("soft\u00adhyphen", "U+00AD"),
        ("漢", "U+6F22"),
        ("🚁", "U+1F681"),
        ("\ud800", "U+D800"),
        ("שלום", "U+05DD"),
        ("\r", "U+000D"),
        ("\ue000", "U+E000"),
        ("line\u2028break", "U+2028"),
    ],
)
def test_unprintable_is_named_and_refused(text: str, name: str) -> None:
    assert name in texts.unprintable(text)
    with pytest.raises(texts.UnprintableError, match=r"must print as written, got .*U\+"):
        texts.printable(text)


@pytest.mark.parametrize("text", ["θ ψ β ° ≤ ≥ ± − δ₃ γ ζ μ Ω", "a\n\tb", "Łódź Ångström ½", ""])
def test_technical_and_european_text_prints(text: str) -> None:
    assert not texts.unprintable(text)


@given(st.characters())
def test_what_is_passed_is_in_both_fonts(character: str) -> None:
    if texts.unprintable(character) or character in "\n\t":
        return
    for file in texts.FONT_FILES.values():
        assert ord(character) in FONTS[file]
    assert unicodedata.category(character)[0] != "C"


FONTS = {
    file: TTFontFile(str(texts.FONT_FOLDER / file)).charToGlyph
    for file in texts.FONT_FILES.values()
}
