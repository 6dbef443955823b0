"""Kept results in a folder: bit for bit, or not at all."""

from __future__ import annotations

import json
import math
import os
import pathlib
import sys
from dataclasses import fields, replace

import numpy as np
import pytest

from planner.files import kept
from planner.files.kept import FolderStore, kept_folder
from planner.model.canonical import digest_of_plain
from planner.model.results import Labels, Prediction, Status
from planner.predict import run
from planner.predict.kept import NOTHING_KEPT
from planner.record.layout import build, to_bytes
from tests.conftest import unmarched

ODD = (math.nan, math.inf, -math.inf, -0.0, 5e-324, 0.1 + 0.2, 1.7976931348623157e308)
ARRAYS = ("value", "low", "high", "speed_rad_s", "hand")


def prediction(quantity: str = "thrust") -> Prediction:
    numbers = {name: np.roll(np.array(ODD), i) for i, name in enumerate(ARRAYS)}
    return Prediction(
        quantity=quantity,
        study="holds",
        labels=tuple(
            Labels(**{f.name: f"{f.name} {i} β" for f in fields(Labels)}) for i in range(7)
        ),
        status=(*Status, Status.OK),
        reasons=("", 'with "quotes"\n', "ψ = 40°", "", "", "", ""),
        **numbers,
    )


def same(one: Prediction, other: Prediction) -> bool:
    return all(
        getattr(one, f.name).tobytes() == getattr(other, f.name).tobytes()
        and getattr(one, f.name).dtype == getattr(other, f.name).dtype
        if f.name in ARRAYS
        else getattr(one, f.name) == getattr(other, f.name)
        for f in fields(Prediction)
    )


@pytest.fixture
def store(tmp_path):
    return FolderStore(tmp_path / "deep" / "kept", tell=pytest.fail)


def only_file(store: FolderStore) -> pathlib.Path:
    (path,) = store.folder.iterdir()
    return path


def test_predictions_come_back_bit_for_bit(store, predicted):
    found = dict(predicted("hingeless-model")) | {"odd": prediction("odd")}
    store.put("k", found)
    again = FolderStore(store.folder).get("k")
    assert again is not None
    assert list(again) == list(found)
    assert all(same(again[quantity], found[quantity]) for quantity in found)
    assert store.get("other") is None
    assert store.get_plain("k") is None


def test_every_field_of_a_prediction_is_kept():
    assert len(Status) == 6
    texts = {"quantity", "study", "labels", "status", "reasons"}
    assert {f.name for f in fields(Prediction)} == {*ARRAYS, *texts}


def test_a_record_is_the_same_with_and_without(store, sample, monkeypatch):
    kept = tuple(replace(study, kept=True) for study in unmarched(run.STUDIES))
    monkeypatch.setattr(run, "STUDIES", kept)
    plan, files = sample("hingeless-model"), [("plan.toml", "0" * 64)]
    without, first, second = (
        to_bytes(build(plan, files, store=each)) for each in (NOTHING_KEPT, store, store)
    )
    assert len(list(store.folder.iterdir())) == len(kept)
    assert without == first == second


def test_another_result_is_kept_in_plain_form(store):
    store.put_plain("gate", {"wind_m_s": np.array([1.0, math.nan]), "set by": ("a", 1)})
    assert store.get_plain("gate") == {"wind_m_s": [1.0, None], "set by": ["a", 1]}
    assert store.get("gate") is None
    fresh = FolderStore(store.folder, fresh=True)
    assert fresh.get_plain("gate") is None
    assert fresh.get_plain("gate", even_if_fresh=True) is not None


def test_a_fresh_store_gives_nothing_and_keeps_all(store):
    fresh = FolderStore(store.folder, fresh=True)
    fresh.put("k", {"thrust": prediction()})
    assert fresh.get("k") is None
    assert store.get("k") is not None


def reseal(path: pathlib.Path, **changes: object) -> None:
    """Change a file and set its digest right again."""
    body = json.loads(path.read_bytes())
    del body["digest"]
    told = body["content"]["thrust"]
    told.update({name: value for name, value in changes.items() if name in told})
    body.update({name: value for name, value in changes.items() if name not in told})
    path.write_text(json.dumps({**body, "digest": digest_of_plain(body)}))


@pytest.mark.parametrize(
    "damage",
    [
        lambda path: path.write_bytes(b""),
        lambda path: path.write_bytes(path.read_bytes()[:-40]),
        lambda path: path.write_bytes(
            path.read_bytes().replace(b"0.30000000000000004", b"0.3", 1)
        ),
        lambda path: path.write_bytes(b"\xff\xfe\x00"),
        lambda path: path.write_bytes(b"[" * 100_000),
        lambda path: path.write_bytes(b"[1]"),
        lambda path: path.write_bytes(b'{"content": {}}'),
        lambda path: (path.unlink(), path.mkdir()),
        lambda path: reseal(path, layout=2),
        lambda path: reseal(path, key="other"),
        lambda path: reseal(path, kind="plain"),
        lambda path: reseal(path, program="other"),
        lambda path: reseal(path, content=[]),
        lambda path: reseal(path, value=[1.0]),
        lambda path: reseal(path, value=[True] * 7),
        lambda path: reseal(path, value=["1.0"] * 7),
        lambda path: reseal(path, status=["fine"] * 7),
        lambda path: reseal(path, reasons=[None] * 7),
        lambda path: reseal(path, labels=[{"colour": "red"}] * 7),
        lambda path: reseal(path, labels=["1.1h"] * 7),
        lambda path: reseal(path, study=None),
    ],
)
def test_a_damaged_file_is_as_if_it_were_not_there(store, damage):
    store.put("k", {"thrust": prediction()})
    damage(only_file(store))
    assert store.get("k") is None


def test_a_sealed_file_is_used(store):
    store.put("k", {"thrust": prediction()})
    reseal(only_file(store), value=[2.0] * 7)
    assert store.get("k")["thrust"].value.tolist() == [2.0] * 7


def test_another_program_finds_nothing(store, monkeypatch):
    store.put("k", {"thrust": prediction()})
    monkeypatch.setattr(kept, "program_digest", lambda: "another")
    assert store.get("k") is None


def test_a_folder_that_cannot_be_written_is_told_once(tmp_path):
    (tmp_path / "file").write_text("")
    told: list[str] = []
    store = FolderStore(tmp_path / "file", tell=told.append)
    for key in "ab":
        store.put(key, {"thrust": prediction()})
        assert store.get(key) is None
    assert len(told) == 1
    assert "expected a folder to keep results in, found: File exists" in told[0]
    assert "name another folder with --kept or WHIRLCARD_KEPT" in told[0]


def test_only_the_files_used_last_stay_and_no_other_is_touched(tmp_path):
    store = FolderStore(tmp_path, most_files=3)
    for name in ("record.json", f".{'0' * 64}.json.0123abcd.part"):
        (tmp_path / name).write_text("")
        os.utime(tmp_path / name, (1, 1))
    for i in range(3):
        store.put_plain(str(i), {"i": i})
        for path in tmp_path.iterdir():
            if path.stat().st_mtime > 100:
                os.utime(path, (10 + i, 10 + i))
    assert store.get_plain("0") == {"i": 0}  # used just now
    store.put_plain("3", {"i": 3})
    there = [i for i in range(4) if store.get_plain(str(i)) is not None]
    assert there == [0, 2, 3]
    assert len(list(tmp_path.iterdir())) == 4
    assert (tmp_path / "record.json").exists()


def test_the_folder_is_the_one_named_first(monkeypatch):
    home, caches = pathlib.Path("/home/someone"), {"XDG_CACHE_HOME": "/caches"}
    monkeypatch.setattr(sys, "platform", "linux")
    monkeypatch.setattr(pathlib.Path, "home", lambda: home)
    named = pathlib.Path("mine")
    assert kept_folder(named, {"WHIRLCARD_KEPT": "/kept"}) == named
    assert kept_folder(None, {"WHIRLCARD_KEPT": "/kept", **caches}) == pathlib.Path("/kept")
    assert kept_folder(None, caches) == pathlib.Path("/caches/whirlcard/kept")
    own = home / ".cache" / "whirlcard" / "kept"
    assert kept_folder(None, {"WHIRLCARD_KEPT": "", "XDG_CACHE_HOME": "relative"}) == own
    monkeypatch.setattr(sys, "platform", "win32")
    assert kept_folder(None, {"LOCALAPPDATA": "/local"}) == pathlib.Path("/local/whirlcard/kept")
