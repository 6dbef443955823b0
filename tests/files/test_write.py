"""Files are written whole or not at all."""

import os

import pytest

from planner.files.write import write_whole


def test_a_file_is_written_and_replaced(tmp_path):
    path = tmp_path / "card.pdf"
    write_whole(path, b"first")
    write_whole(path, b"second")
    assert path.read_bytes() == b"second"
    assert list(tmp_path.iterdir()) == [path]


def test_a_new_file_has_the_usual_permissions(tmp_path):
    write_whole(tmp_path / "card.pdf", b"x")
    (tmp_path / "plain").write_bytes(b"x")
    assert (tmp_path / "card.pdf").stat().st_mode == (tmp_path / "plain").stat().st_mode


def test_a_failure_keeps_the_old_file_and_leaves_no_part(tmp_path, monkeypatch):
    path = tmp_path / "card.pdf"
    write_whole(path, b"old")

    def fail(_descriptor):
        raise OSError(28, "No space left on device")

    monkeypatch.setattr(os, "fsync", fail)
    with pytest.raises(OSError, match=r"No space left on device"):
        write_whole(path, b"new")
    assert path.read_bytes() == b"old"
    assert list(tmp_path.iterdir()) == [path]


def test_a_missing_folder_is_an_error(tmp_path):
    with pytest.raises(FileNotFoundError, match=r"nowhere"):
        write_whole(tmp_path / "nowhere" / "card.pdf", b"x")


def test_a_directory_is_not_replaced(tmp_path):
    (tmp_path / "card.pdf").mkdir()
    with pytest.raises(OSError, match=r"card.pdf"):
        write_whole(tmp_path / "card.pdf", b"x")
    assert [path.name for path in tmp_path.iterdir()] == ["card.pdf"]
