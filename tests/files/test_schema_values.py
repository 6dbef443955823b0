"""Single values: what the printing font lacks, and that blanks find no faults."""

import math
from typing import Annotated

import pytest

from planner.files.schema_texts import Text, moment_of
from planner.files.schema_values import UNKNOWN, Measured, Quantity, Table


def lacking_greek(text):
    return ", ".join(f"U+{ord(c):04X} letter" for c in text if c in "βΩ")


def test_characters_that_paper_lacks_are_refused(folder):
    folder.edit("plan.toml", '"Climb in steps"', '¦"Ω of βeta"')
    assert folder.read().plan.objective == "Ω of βeta"
    (line,) = folder.lines(printable=lacking_greek)
    assert line == (
        f"{folder.marks[0]}: objective: expected characters that the printed card has,"
        " found U+03A9 letter, U+03B2 letter; write them in other characters"
    )


def test_line_ends_and_blanks_become_one_space(folder):
    folder.edit("plan.toml", '"Climb in steps"', '"""\nClimb\n\tin   steps \n"""')
    assert folder.read().plan.objective == "Climb in steps"


def test_percent_values_refer_to_full_speed():
    assert Measured(0.5, "relative speed").resolved(40.0) == 20.0
    assert Measured(0.5, "rotor speed").resolved(40.0) == 0.5


@pytest.mark.parametrize("text", ["2 deg", " +2.0  deg", "2e0 deg", "2deg", ".2e1 deg"])
def test_numbers_may_be_written_in_several_ways(text):
    assert Quantity("angle").read(text, None) == pytest.approx(math.radians(2.0))


def test_bounds_are_included():
    quantity = Quantity("angle", minimum="-90 deg", maximum="90 deg")
    assert quantity.read("90 deg", None) == pytest.approx(math.pi / 2)


def test_a_very_long_value_is_refused():
    with pytest.raises(ValueError, match=r"found 4007 characters; write one number and its unit"):
        Quantity("angle").read("1" + "0" * 4002 + " deg", None)


def test_an_empty_text_is_allowed_only_where_said():
    assert Text(empty=True).read(" \n ", None) == ""
    with pytest.raises(ValueError, match=r"expected a text that is not empty, found \" \"; fill"):
        Text().read(" ", None)


def test_an_unknown_value_becomes_a_blank_that_no_comparison_faults():
    class Sample(Table):
        angle: Annotated[float, Quantity("angle")]

    assert math.isnan(Sample.model_validate({"angle": UNKNOWN}).angle)


def test_moments_compare_over_zones():
    assert moment_of("2026-12-01 09:00 UTC") == moment_of("2026-12-01 10:00 +01:00")
