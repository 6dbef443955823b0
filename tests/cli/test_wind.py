"""The command ``wind`` with a gate that is given: keeping it, telling it, and the exit status."""

from __future__ import annotations

import json
import pathlib

import pytest
from typer.testing import CliRunner

from planner.cli import wind as subject
from planner.cli.app import app
from tests.paper.sample_record import sample_record
from tests.paper.test_wind_gate import gate_of

SAMPLE = pathlib.Path(__file__).parent.parent.parent / "sample_plans" / "hingeless-model"


def call(*arguments: object):
    return CliRunner().invoke(app, ["wind", *(str(argument) for argument in arguments)])


def gate_for(record, planned: float = 3.0, **sector: object):
    gate = gate_of(record) | {"planned": {"mean_m_s": planned, "gust_m_s": planned}}
    gate["sectors"][0].update(sector)
    return gate


class Command:
    """Calls on a sample whose gate takes no time; the steps asked for are kept."""

    def __init__(self, folder: pathlib.Path) -> None:
        self.folder, self.steps, self.record = folder, list[float](), sample_record(2)
        self.gate = gate_for(self.record, cautions=["droop-stop-peak at 1.1r"])

    def found(self, _plan: object, _desk: object, step_m_s: float):
        self.steps.append(step_m_s)
        return self.gate | {"step_m_s": step_m_s}

    def __call__(self, *arguments: object):
        out = self.folder / "wind.pdf"
        return call(SAMPLE, "--kept", self.folder, "--out", out, *arguments)


@pytest.fixture
def command(monkeypatch, tmp_path) -> Command:
    made = Command(tmp_path)
    monkeypatch.setattr(subject, "wind_gate", made.found)
    monkeypatch.setattr(subject, "load_record", lambda *_: made.record)
    return made


def test_gate_is_found_told_drawn_and_kept(command, tmp_path):
    first, second = command(), command()
    assert command.steps == [1.0]
    assert first.exit_code == 0
    assert first.stdout == second.stdout
    assert (tmp_path / "wind.pdf").read_bytes().startswith(b"%PDF")
    lines = first.stdout.splitlines()
    assert "      CAUTION at the gate: droop-stop-peak at 1.1r" in lines
    assert "Wind gate, read at the anemometer over 120 s" in lines[0]
    assert any(line.split()[:3] == ["field", "3.7", "m/s"] for line in lines)
    assert "      limited by up-stop-peak; first fails at 6.0 m/s" in lines
    assert "Planned wind is inside the gate" in lines
    assert max(len(line) for line in lines[:-1]) <= 80


def test_another_step_and_fresh_find_it_anew(command):
    for arguments in (
        (),
        ("--step", "2 m/s"),
        ("--step", "2 m/s"),
        ("--step", "2 m/s", "--fresh"),
    ):
        command(*arguments)
    assert command.steps == [1.0, 2.0, 2.0]


@pytest.mark.parametrize(
    ("planned", "sector", "status"),
    [
        (3.7, {}, 0),
        (3.8, {}, 3),
        (3.8, {"is_assessed": False}, 4),
        (0.0, {"mean_m_s": None, "gust_m_s": None}, 3),
        (0.0, {"mean_m_s": None, "gust_m_s": None, "is_assessed": False}, 4),
    ],
)
def test_status_says_where_the_planned_wind_lies(command, planned, sector, status):
    command.gate = gate_for(command.record, planned, **sector)
    assert command().exit_code == status


def test_gate_of_a_record_is_drawn_as_a_table(command, tmp_path):
    command.record["wind_gate"] = gate_for(command.record)
    (tmp_path / "card.json").write_text(json.dumps(command.record))
    result = call(tmp_path / "card.json", "--out", tmp_path / "wind.csv")
    assert result.exit_code == 0
    assert (tmp_path / "wind.csv").read_text().startswith("sector,mean wind [m/s]")
    assert command.steps == []


@pytest.mark.parametrize(
    ("arguments", "message"),
    [
        (("--step", "1"), '--step: expected a wind speed with its unit, such as "1 m/s"'),
        (("--step", "1 rpm"), "--step: expected a wind speed with its unit"),
        (("--step", "0 m/s"), "--step: expected a wind speed from 0.12 m/s to 2 m/s, found 0 m/s"),
        (("--out", "gate.txt"), "--out: expected a file name ending in .pdf or .csv"),
    ],
)
def test_wrong_usage_is_told_and_nothing_computed(command, arguments, message):
    result = command(*arguments)
    assert result.exit_code == 2
    assert message in " ".join(result.stderr.split())
    assert command.steps == []


def test_record_without_a_gate_says_where_to_get_one(command, tmp_path):
    command.record["wind_gate"] = None
    result = call(tmp_path / "card.json", "--out", tmp_path / "wind.pdf")
    assert result.exit_code == 2
    assert "expected a record that holds a wind gate, found none" in result.stderr
