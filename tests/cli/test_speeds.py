"""The command ``speeds``: what it prints and writes, and its exit status."""

from __future__ import annotations

import math
import pathlib

import pytest
from typer.testing import CliRunner

from planner.cli import speeds as subject
from planner.cli.app import app
from planner.explore.speed_advice import Advice, Better
from planner.model.results import Verdict

SAMPLE = pathlib.Path(__file__).parent.parent.parent / "sample_plans" / "hingeless-model"
RPM = 2.0 * math.pi / 60.0
REASONS = ("flap-low-spacing", "stand-spacing", "shaft-spacing", "keep-out-distance") * 2
BELOW = Better(10_485.3 * RPM, Verdict.CAUTION)
ABOVE = Better(10_700.0 * RPM, Verdict.GO)


def call(*arguments: object):
    return CliRunner().invoke(app, ["speeds", *(str(argument) for argument in arguments)])


@pytest.fixture
def advised(monkeypatch):
    """Let the command find this advice."""

    def found(*advice: Advice) -> None:
        monkeypatch.setattr(subject, "advise", lambda _plan: advice)

    return found


def hold(verdict: Verdict = Verdict.NO_GO, below: Better | None = BELOW) -> Advice:
    return Advice("10.12h", 10_600.0 * RPM, verdict, REASONS, below, ABOVE)


def test_each_hold_is_told_with_speeds_reasons_and_reservation(advised):
    advised(hold(), hold(Verdict.NOT_ASSESSED, below=None))
    lines = call(SAMPLE).stdout.splitlines()
    assert max(len(line) for line in lines) <= 80
    assert "Other rules" in " ".join(lines)
    assert "check the plan again after a change" in " ".join(lines)
    row = next(line for line in lines if line.endswith("NO-GO"))
    assert row.split() == (
        ["10.12h", "10600.0", "rpm", "10485.3", "rpm", "(CAUTION)", "10700.0", "rpm", "NO-GO"]
    )
    row = next(line for line in lines if line.endswith("NOT ASSESSED"))
    assert "none within reach" in row
    assert sum("keep-out-distance" in line for line in lines) >= 2


def test_hold_that_is_not_assessed_says_why_no_speed_was_looked_for(advised):
    why = "stand-spacing: the stand file does not say whether the rotor's mass was fitted"
    one = Advice("1.1h", 500.0 * RPM, Verdict.NOT_ASSESSED, REASONS, open_for=(why,))
    advised(one, one)
    result = call(SAMPLE)
    assert result.exit_code == 4
    assert result.stdout.count("not looked for  ") == 4
    assert " ".join(result.stdout.split()).count(why) == 1
    assert max(len(line) for line in result.stdout.splitlines()) <= 80


@pytest.mark.parametrize(
    ("verdicts", "status"),
    [
        ((), 0),
        ((Verdict.CAUTION,), 0),
        ((Verdict.CAUTION, Verdict.NO_GO), 3),
        ((Verdict.NOT_ASSESSED, Verdict.CAUTION), 4),
        ((Verdict.NOT_ASSESSED, Verdict.NO_GO), 3),
    ],
)
def test_status_is_that_of_the_worst_hold(advised, verdicts, status):
    advised(*(hold(verdict) for verdict in verdicts))
    result = call(SAMPLE)
    assert result.exit_code == status
    assert ("Every hold satisfies" in result.stdout) is (not verdicts)


def test_table_holds_the_same_and_empty_cells_where_nothing_was_found(advised, tmp_path):
    advised(hold(), hold(Verdict.NOT_ASSESSED, below=None))
    target = tmp_path / "better.csv"
    result = call(SAMPLE, "--out", target)
    assert f"Wrote {target}" in result.stdout.replace("\n", "")
    head, first, second = target.read_text("utf-8").splitlines()
    assert head.split(",")[:3] == ["hold", "speed [rpm]", "verdict"]
    words = " ".join(REASONS)
    assert first == f"10.12h,10600,NO-GO,10485.3,CAUTION,10700,GO,{words}"
    assert second == f"10.12h,10600,NOT ASSESSED,,,10700,GO,{words}"


@pytest.mark.parametrize(
    ("arguments", "message"),
    [
        (("card.json",), "card.json: expected a plan folder, found a record; name the folder"),
        (("no-such-folder",), "no-such-folder"),
        ((SAMPLE, "--out", "better.pdf"), "--out: expected a file name ending in .csv"),
    ],
)
def test_wrong_usage_is_status_two_and_nothing_is_searched(
    advised, monkeypatch, tmp_path, arguments, message
):
    monkeypatch.chdir(tmp_path)
    advised(hold())
    result = call(*arguments)
    assert result.exit_code == 2
    assert message in " ".join(result.stderr.split())
    assert result.stdout == ""
    assert list(tmp_path.iterdir()) == []


def test_sample_keeps_all_its_speeds():
    result = call(SAMPLE)
    assert result.exit_code == 0
    assert result.stdout == "Every hold satisfies every rule of frequency.\n"
