"""Shipped data is found in an installation and in a checkout."""

import pytest

from planner.files.shipped import shipped


def test_a_checkout_uses_the_folder_beside_the_package(tmp_path):
    (tmp_path / "planner").mkdir()
    (tmp_path / "rules").mkdir()
    assert shipped("rules", tmp_path / "planner") == tmp_path / "rules"


def test_an_installation_uses_its_own_copy(tmp_path):
    inside = tmp_path / "planner" / "_data" / "rules"
    inside.mkdir(parents=True)
    (tmp_path / "rules").mkdir()
    assert shipped("rules", tmp_path / "planner") == inside


def test_missing_data_says_so(tmp_path):
    with pytest.raises(FileNotFoundError, match=r"^rules: expected to be shipped .* install it"):
        shipped("rules", tmp_path / "planner")


def test_the_example_book_is_shipped():
    assert shipped("rules/example_book.toml").is_file()
