"""README's examples, run for real; ``python tests/readme_examples.py`` writes their output."""

from __future__ import annotations

import os
import pathlib
import re
import shutil
import subprocess
import sys
import tempfile

ROOT = pathlib.Path(__file__).resolve().parent.parent
README = ROOT / "README.md"
EXAMPLE = re.compile(r"<!-- output: (?P<words>[^>]+?) -->\n```\n(?P<text>.*?)```\n", re.DOTALL)
PYTHON = re.compile(r"```python\n(?P<code>.*?)```", re.DOTALL)
BREAKS = (
    ("plan.toml", 'temperature = "12 degC"', 'temprature = "12 degC"'),
    ("plan.toml", 'rpm = "50 % rpm"', "rpm = 180"),
    ("rotor.toml", 'angle = "16 deg"', 'angle = "16 kg"'),
)
MOVED = ('rpm = "90 % rpm"', 'rpm = "70 % rpm"')
"""A hold that is moved too near a resonance."""


def prepare(folder: pathlib.Path) -> None:
    """Lay out a folder like the repository's, a broken and a moved plan beside the samples."""
    shutil.copytree(ROOT / "rules", folder / "rules")
    shutil.copytree(ROOT / "sample_plans", folder / "sample_plans")
    broken = folder / "sample_plans" / "broken"
    shutil.copytree(folder / "sample_plans" / "articulated-run-up", broken)
    for name, old, new in BREAKS:
        path = broken / name
        path.write_text(path.read_text("utf-8").replace(old, new, 1), "utf-8")
    moved = folder / "sample_plans" / "moved"
    shutil.copytree(folder / "sample_plans" / "articulated-run-up", moved)
    path = moved / "plan.toml"
    path.write_text(path.read_text("utf-8").replace(*MOVED, 1), "utf-8")


def run(words: str, folder: pathlib.Path) -> str:
    """Output of one example, with the command line above it."""
    environment = {**os.environ, "NO_COLOR": "1", "COLUMNS": "80", "PYTHONIOENCODING": "utf-8"}
    if words == "python":
        found = PYTHON.search(README.read_text("utf-8"))
        assert found is not None, "README has no Python example"
        command, shown = [sys.executable, "-c", found["code"]], ""
    else:
        name, argument = words.split()
        target = argument if name in {"start", "method"} else f"sample_plans/{argument}"
        more = {"card": ["--out", "card.pdf"], "fan": ["--out", "fan.svg"]}.get(name, [])
        arguments = [name, target, *more]
        command = [sys.executable, "-c", "from planner.cli import run; run()", *arguments]
        shown = f"$ whirlcard {' '.join(arguments)}\n"
    done = subprocess.run(
        command,
        capture_output=True,
        text=True,
        cwd=folder,
        env=environment,
        check=False,
        encoding="utf-8",
    )
    assert "Traceback" not in done.stderr, done.stderr
    return shown + done.stdout + done.stderr


def filled(text: str) -> str:
    """README with the output of every example put in."""
    with tempfile.TemporaryDirectory() as name:
        folder = pathlib.Path(name)
        prepare(folder)
        return EXAMPLE.sub(
            lambda m: f"<!-- output: {m['words']} -->\n```\n{run(m['words'], folder)}```\n", text
        )


if __name__ == "__main__":
    README.write_text(filled(README.read_text("utf-8")), "utf-8")
