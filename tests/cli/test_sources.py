"""Records from plan folders, with kept results and without."""

from __future__ import annotations

import shutil
from dataclasses import replace

import pytest

from planner.cli.sources import Keeping, load_record
from planner.predict import run
from tests.conftest import SAMPLES, unmarched

FILES = ("files", "files_digest", "content_digest")


@pytest.fixture
def ran(monkeypatch):
    """All studies but the marches keep what they find; the list of those that ran."""
    ran: list[str] = []

    def kept(study):
        def run_it(inputs):
            ran.append(study.id)
            return study.run(inputs)

        return replace(study, kept=True, run=run_it)

    monkeypatch.setattr(run, "STUDIES", tuple(map(kept, unmarched(run.STUDIES))))
    return ran


@pytest.fixture
def folder(tmp_path):
    shutil.copytree(SAMPLES.parent / "rules", tmp_path / "rules")
    return shutil.copytree(SAMPLES / "hingeless-model", tmp_path / "sample_plans" / "mine")


def test_a_changed_comment_finds_all_and_fresh_computes_all(folder, tmp_path, ran, capsys):
    keeping = Keeping(tmp_path / "kept")
    first = load_record(folder, keeping)
    everything = list(ran)
    plan = folder / "plan.toml"
    plan.write_text(f"# another comment\n{plan.read_text('utf-8')}", "utf-8")
    ran.clear()
    second = load_record(folder, keeping)
    assert ran == []
    assert {k: v for k, v in first.items() if k not in FILES} == {
        k: v for k, v in second.items() if k not in FILES
    }
    assert load_record(folder, replace(keeping, fresh=True)) == second
    assert ran == everything
    assert capsys.readouterr() == ("", "")


def test_a_folder_that_cannot_be_used_is_one_line_and_no_fault(tmp_path, ran, capsys):
    (tmp_path / "file").write_text("")
    record = load_record(SAMPLES / "hingeless-model", Keeping(tmp_path / "file"))
    assert record["findings"]
    out, err = capsys.readouterr()
    assert out == ""
    assert err.count("\n") == 1
    assert "expected a folder to keep results in" in err
    assert ran
