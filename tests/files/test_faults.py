"""How faults print and sort."""

import pytest

from planner.files.faults import Fault, PlanFaults, did_you_mean, listed, shown, visible


def fault(
    file: str = "plan.toml", line: int = 12, column: int = 8, key: str = "block.step.rpm"
) -> Fault:
    return Fault(file, line, column, key, "a speed", "245", "add the unit")


def test_a_fault_prints_place_key_and_mend():
    assert str(fault()) == (
        "plan.toml:12:8: block.step.rpm: expected a speed, found 245; add the unit"
    )


def test_a_fault_of_a_whole_file_has_no_key():
    assert str(fault(key="")) == "plan.toml:12:8: expected a speed, found 245; add the unit"


def test_nothing_unprintable_reaches_the_terminal():
    assert str(fault(file="a\x1b[2J.toml", key="k\u202e")).isprintable()
    assert visible("a\x1bb\ud800") == "a<U+001B>b<U+D800>"
    assert shown("x" * 100) == '"' + "x" * 60 + '..."'


def test_faults_sort_by_file_then_place_and_lose_repeats():
    faults = [fault("b"), fault("a", 3), fault("b", 2), fault("a", 3), fault("b", 12, 1)]
    with pytest.raises(PlanFaults, match=r"^b:2:8.*\nb:12:1.*\nb:12:8.*\na:3:8.*$") as caught:
        raise PlanFaults(faults)
    assert len(caught.value.faults) == 4


def test_a_far_word_has_no_suggestion():
    assert did_you_mean("zzz", ["radius"]) == ""
    assert listed(["a"]) == "a"
    assert listed([]) == "none"
