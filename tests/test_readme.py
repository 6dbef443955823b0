"""README's commands are CI's commands, and its outputs are the real ones."""

from __future__ import annotations

import pathlib

import pytest

from tests import readme_examples

ROOT = pathlib.Path(__file__).parent.parent
TEXT = (ROOT / "README.md").read_text("utf-8")


@pytest.fixture(scope="module")
def folder(tmp_path_factory):
    path = tmp_path_factory.mktemp("readme")
    readme_examples.prepare(path)
    return path


@pytest.mark.parametrize(
    ("words", "text"), [(m["words"], m["text"]) for m in readme_examples.EXAMPLE.finditer(TEXT)]
)
def test_shown_output_is_the_real_one(words, text, folder):
    assert readme_examples.run(words, folder) == text
    assert "nan" not in text.split()


def test_every_command_is_shown():
    shown = {m["words"].split()[0] for m in readme_examples.EXAMPLE.finditer(TEXT)}
    assert shown == {"start", "check", "card", "fan", "method", "python", "speeds"}


def test_continuous_integration_runs_the_test_command_of_the_readme():
    command = next(line for line in TEXT.splitlines() if "pytest" in line)
    assert command in (ROOT / ".ci" / "run").read_text("utf-8").splitlines()
