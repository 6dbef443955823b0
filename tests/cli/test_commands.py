"""Commands as a user runs them: each sample plan, broken input, terminals and pipes."""

from __future__ import annotations

import json
import os
import pathlib
import shutil
import subprocess
import sys

import pytest
from typer.testing import CliRunner

from planner.cli import screen
from planner.cli.app import app
from planner.judge.status import ExitStatus

SAMPLES = pathlib.Path(__file__).parent.parent.parent / "sample_plans"
VERDICTS = {
    "articulated-run-up": ("GO", 0),
    "articulated-gusty": ("NO-GO", 3),
    "articulated-gusty-start": ("NO-GO", 3),
    "hingeless-model": ("GO", 0),
    "teetering-pair": ("CAUTION", 0),
}


def call(*arguments: object):
    return CliRunner().invoke(app, [str(argument) for argument in arguments])


def whirlcard(*arguments: object, cwd: pathlib.Path | None = None, **environment: str):
    code = "from planner.cli import run; run()"
    return subprocess.run(
        [sys.executable, "-c", code, *(str(argument) for argument in arguments)],
        capture_output=True,
        text=True,
        cwd=cwd,
        check=False,
        env={**os.environ, **environment},
    )


@pytest.fixture
def folder(tmp_path):
    """A plan folder of one's own, beside the rule book it names."""
    shutil.copytree(SAMPLES.parent / "rules", tmp_path / "rules")
    shutil.copytree(SAMPLES / "articulated-run-up", tmp_path / "sample_plans" / "mine")
    return tmp_path / "sample_plans" / "mine"


@pytest.mark.parametrize(("name", "expected"), VERDICTS.items())
def test_each_sample_has_its_verdict_and_status(name, expected):
    result = call("check", SAMPLES / name, "--json")
    assert json.loads(result.stdout)["verdict"] == expected[0]
    assert result.exit_code == expected[1]
    assert result.stderr == ""


@pytest.mark.parametrize("name", VERDICTS)
@pytest.mark.parametrize("paper", ["a4", "letter"])
def test_each_sample_prints_a_card_and_a_record(name, paper, tmp_path):
    target = tmp_path / "card.pdf"
    result = call("card", SAMPLES / name, "--out", target, "--paper", paper)
    assert result.exit_code == VERDICTS[name][1]
    assert target.read_bytes().startswith(b"%PDF")
    assert json.loads(target.with_suffix(".json").read_text())["verdict"] == VERDICTS[name][0]
    assert sorted(p.name for p in tmp_path.iterdir()) == ["card.json", "card.pdf"]


def test_a_card_prints_from_its_record_alone(tmp_path):
    first, second = tmp_path / "one.pdf", tmp_path / "two.pdf"
    call("card", SAMPLES / "articulated-run-up", "--out", first)
    result = call("card", tmp_path / "one.json", "--out", second)
    assert result.exit_code == 0
    assert first.read_bytes() == second.read_bytes()


def test_go_is_never_printed_without_its_reservation():
    result = call("check", SAMPLES / "articulated-run-up")
    assert "PLAN GO, not clearance to run" in result.stdout
    assert "gives nobody clearance to run" in " ".join(result.stdout.split())


@pytest.mark.parametrize("name", VERDICTS)
def test_check_fits_eighty_columns_when_piped(name):
    result = call("check", SAMPLES / name)
    assert max(len(line) for line in result.stdout.splitlines()) <= 80
    assert "\033" not in result.stdout


def test_no_color_is_honoured_and_output_survives_a_poor_terminal(folder):
    result = whirlcard("check", folder, NO_COLOR="1", PYTHONIOENCODING="ascii")
    assert result.returncode == 0
    assert "\033" not in result.stdout
    assert "Traceback" not in result.stderr


def test_start_writes_a_folder_that_runs_as_it_is(tmp_path):
    result = call("start", tmp_path / "new")
    assert result.exit_code == 0
    assert "Next: whirlcard check" in result.stdout
    checked = call("check", tmp_path / "new", "--json")
    assert json.loads(checked.stdout)["verdict"] == "GO"
    again = call("start", tmp_path / "new")
    assert again.exit_code == 2
    assert "expected an empty folder" in again.stderr


@pytest.mark.parametrize(
    ("file", "old", "new", "message"),
    [
        (
            "plan.toml",
            'rpm = "25 % rpm"',
            "rpm = 90",
            "plan.toml:153:7: block.step.rpm: expected",
        ),
        ("plan.toml", "temperature = ", "temprature = ", "did you mean"),
        ("rotor.toml", 'radius = "5.6 m"', 'radius = "5.6 kg"', "rotor.toml:5:"),
        ("rotor.toml", 'angle = "16 deg"', 'angle = "-9 deg"', "rotor.toml:"),
        ("stand.toml", 'full_speed = "360 rpm"', "", "full_speed"),
        ("blade.csv", "0.35, 0.12", "0.15, 0.12", "blade.csv:5:"),
    ],
)
def test_broken_input_names_the_place_and_writes_nothing(
    folder, tmp_path, file, old, new, message
):
    path = folder / file
    text = path.read_text()
    assert text.count(old) >= 1
    path.write_text(text.replace(old, new, 1))
    target = tmp_path / "card.pdf"
    result = call("card", folder, "--out", target)
    assert result.exit_code == 2
    assert message in result.stderr
    assert "Traceback" not in result.stderr
    assert result.stdout == ""
    assert not target.exists()


def test_faults_of_all_files_come_at_once(folder):
    for file, old in (
        ("plan.toml", "temperature_spread"),
        ("rotor.toml", "proven_speed"),
        ("stand.toml", "hub_height"),
    ):
        path = folder / file
        path.write_text(path.read_text().replace(old, "x" + old, 1))
    result = call("check", folder)
    assert result.exit_code == 2
    for file in ("plan.toml", "rotor.toml", "stand.toml"):
        assert f"{file}:" in result.stderr


def test_missing_folder_is_said():
    result = call("check", "no-such-folder")
    assert result.exit_code == 2
    assert "no-such-folder" in result.stderr


def test_unwritable_target_is_said_and_leaves_nothing(tmp_path):
    target = tmp_path / "missing" / "card.pdf"
    result = call("card", SAMPLES / "articulated-run-up", "--out", target)
    assert result.exit_code == 2
    assert "missing" in result.stderr
    assert list(tmp_path.iterdir()) == []


@pytest.mark.parametrize("suffix", ["pdf", "svg", "csv"])
def test_fan_is_drawn_in_each_form(tmp_path, suffix):
    target = tmp_path / f"fan.{suffix}"
    result = call("fan", SAMPLES / "hingeless-model", "--out", target)
    assert result.exit_code == 0
    assert target.stat().st_size > 1000


@pytest.mark.parametrize("name", ["plan.toml", "", ".", "/", "x.json"])
def test_card_is_written_as_a_pdf_only(folder, name):
    before = (folder / "plan.toml").read_bytes()
    target = folder / name if name == "plan.toml" else name
    result = call("card", folder, "--out", target)
    assert result.exit_code == 2
    assert "expected a file name ending in .pdf" in result.stderr
    assert (folder / "plan.toml").read_bytes() == before


def test_card_replaces_no_directory(tmp_path):
    (tmp_path / "card.pdf").mkdir()
    result = call("card", SAMPLES / "hingeless-model", "--out", tmp_path / "card.pdf")
    assert result.exit_code == 2
    assert "expected a regular file to replace" in result.stderr


def test_a_reader_that_goes_away_does_not_change_the_status():
    code = "from planner.cli import run; run()"
    command = [sys.executable, "-c", code, "check", str(SAMPLES / "articulated-gusty")]
    with subprocess.Popen(command, stdout=subprocess.PIPE, stderr=subprocess.PIPE) as process:
        assert process.stdout is not None
        assert process.stderr is not None
        process.stdout.close()
        assert process.wait() == 3
        assert process.stderr.read() == b""


def test_a_full_output_is_status_two():
    with pathlib.Path("/dev/full").open("w") as full:
        code = "from planner.cli import run; run()"
        command = [sys.executable, "-c", code, "method", "thrust"]
        done = subprocess.run(command, stdout=full, stderr=subprocess.PIPE, check=False, text=True)
    assert done.returncode == 2
    assert "standard output: " in done.stderr
    assert "Traceback" not in done.stderr


def test_json_is_json_on_any_terminal(folder):
    done = whirlcard("check", folder, "--json", PYTHONIOENCODING="ascii")
    assert json.loads(done.stdout)["verdict"] == "GO"


@pytest.mark.usefixtures("without_marches")
def test_states_without_a_solution_print_without_a_number(folder):
    path = folder / "plan.toml"
    text = path.read_text("utf-8").replace(
        'window_collective = "0.3 deg"', 'window_collective = "9 deg"'
    )
    path.write_text(text, "utf-8")
    result = call("check", folder)
    assert result.exit_code in {3, 4}
    assert "nan" not in result.stdout.split()


def test_screen_status_is_the_one_of_all():
    assert screen.BAD_INPUT == ExitStatus.BAD_INPUT


def test_fan_refuses_another_form(tmp_path):
    result = call("fan", SAMPLES / "hingeless-model", "--out", tmp_path / "fan.png")
    assert result.exit_code == 2
    assert "expected a file name ending in .pdf or .svg or .csv" in result.stderr


def test_method_tells_how_a_number_is_computed():
    result = call("method", "thrust")
    assert result.exit_code == 0
    for word in ("method", "validity", "source", "hand check", "NACA TN 626", "NASA TM-81232"):
        assert word in result.stdout
    assert max(len(line) for line in result.stdout.splitlines()) <= 100


def test_method_lists_and_suggests():
    assert "harmonic_spacing" in call("method").stdout
    result = call("method", "thrsut")
    assert result.exit_code == 2
    assert "Did you mean 'thrust'?" in result.stderr


def test_version_and_usage():
    assert call("--version").stdout.startswith("whirlcard ")
    assert call("no-such-command").exit_code == 2
    help_text = call("--help").stdout
    for command in ("start", "check", "card", "fan", "method"):
        assert command in help_text


def test_help_loads_no_heavy_library():
    code = (
        "import sys; sys.argv=['whirlcard','--help']\n"
        "from planner.cli import run\n"
        "try: run()\n"
        "except SystemExit: pass\n"
        "print([m for m in ('numpy','scipy','reportlab') if m in sys.modules])"
    )
    result = subprocess.run(
        [sys.executable, "-c", code], capture_output=True, text=True, check=True
    )
    assert result.stdout.strip().endswith("[]")
