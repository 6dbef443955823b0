import pytest

from planner.judge.status import ExitStatus, exit_status
from planner.model.results import Verdict


@pytest.mark.parametrize(
    ("verdict", "number"),
    [(Verdict.GO, 0), (Verdict.CAUTION, 0), (Verdict.NOT_ASSESSED, 4), (Verdict.NO_GO, 3)],
)
def test_verdict_has_its_exit_status(verdict, number):
    assert exit_status(verdict) == number


def test_one_is_left_to_crashes():
    assert {int(status) for status in ExitStatus} == {0, 2, 3, 4, 5}
