"""The starter folder: complete, commented, whole or not at all."""

import json
import tomllib

import pytest

from planner.files import start
from planner.files.schema import MODELS
from planner.files.source import Shelf
from planner.files.start import StarterRefusedError, commented, write_starter
from planner.files.validate import validated
from planner.files.write import write_whole

NAMES = [
    "plan.toml", "rotor.toml", "stand.toml", "blade.csv", "rules.toml",
    "plan.schema.json", "rotor.schema.json", "stand.schema.json", "rules.schema.json",
]  # fmt: skip


def test_a_starter_has_all_its_files_and_names_its_schemas(tmp_path):
    folder = tmp_path / "new" / "plan"
    assert write_starter(folder) == [folder / name for name in NAMES]
    for kind in MODELS:
        first = (folder / f"{kind}.toml").read_text("utf-8").partition("\n")[0]
        assert first == f"#:schema ./{kind}.schema.json"
        assert json.loads((folder / f"{kind}.schema.json").read_text("utf-8"))["properties"]
    assert sorted(path.name for path in folder.iterdir()) == sorted(NAMES)


def test_a_starter_reads_without_faults(tmp_path, folder):
    write_starter(tmp_path / "plan-to-be")
    rules = (folder.path / "rules.toml").read_bytes()
    folder.path = tmp_path / "plan-to-be"
    folder.edit("plan.toml", "rule_books =", 'extra_classes = ["noise"]\nrule_books =')
    plan = folder.write("rules.toml", rules).read().plan
    assert plan.rotor.n_blades == 4
    assert plan.rotor.blade.radius_m == 5.6
    assert plan.rotor.droop_stop.retraction is not None
    assert not plan.rule_book.approved
    closed = {document.hazard_class for document in plan.documents}
    assert closed == {"lag and stand stability", "pitch and flap stability", "people"}


def test_a_starter_says_that_it_is_invented(tmp_path):
    write_starter(tmp_path)
    for name in ("plan.toml", "rotor.toml", "stand.toml", "blade.csv"):
        assert "INVENTED" in (tmp_path / name).read_text("utf-8")


def test_every_key_is_commented_once(tmp_path):
    write_starter(tmp_path)
    text = (tmp_path / "plan.toml").read_text("utf-8")
    assert text.count("# Rotor speed of the hold, in rpm or % rpm.\n") == 1
    assert '# Title of the run.\ntitle = "' in text
    for kind in MODELS:
        shelf = Shelf(tmp_path)
        document = shelf.toml(f"{kind}.toml", None)
        assert document is not None
        assert validated(document, MODELS[kind], None) is not None
        assert shelf.faults == []


def test_comments_change_no_value():
    text = 'name = "x"\n\n[brake]\n# mine\nbelow = "1 rpm"\n'
    result = commented(text, MODELS["stand"])
    assert tomllib.loads(result) == tomllib.loads(text)
    assert result == (
        '# Name of the stand.\nname = "x"\n\n[brake]\n# mine\n'
        '# Speed below which the brake may be used.\nbelow = "1 rpm"\n'
    )


def test_a_folder_with_something_in_it_is_refused(tmp_path):
    (tmp_path / "plan.toml").write_text("mine")
    with pytest.raises(StarterRefusedError, match=r"expected an empty folder, found files in it"):
        write_starter(tmp_path)
    assert (tmp_path / "plan.toml").read_text() == "mine"


def test_a_file_is_refused(tmp_path):
    (tmp_path / "plan").write_text("mine")
    with pytest.raises(StarterRefusedError, match=r"plan: expected a folder, found a file; name"):
        write_starter(tmp_path / "plan")


def test_a_failure_half_way_leaves_nothing(tmp_path, monkeypatch):
    real = write_whole

    def fail_late(path, content):
        if path.name == "rules.toml":
            raise OSError(28, "No space left on device")
        real(path, content)

    monkeypatch.setattr(start, "write_whole", fail_late)
    with pytest.raises(OSError, match=r"No space left on device"):
        write_starter(tmp_path / "plan")
    assert list(tmp_path.iterdir()) == []
