"""The house: who may import whom, how large a room may be, and that sources stay apart."""

from __future__ import annotations

import ast
import pathlib

import pytest

PACKAGE = pathlib.Path(__file__).parent.parent / "planner"
ALLOWED = {
    "units": set(),
    "model": {"units"},
    "methods": set(),
    "files": {"model", "units"},
    "rotor": {"methods", "model", "units"},
    "predict": {"rotor", "methods", "model", "units"},
    "judge": {"predict", "model", "units"},
    "explore": {"judge", "predict", "model", "units"},
    "record": {"judge", "predict", "model", "units"},
    "paper": {"record", "model", "units"},
    "cli": {"paper", "record", "explore", "judge", "predict", "files", "model", "units"},
}
LONGEST_MODULE = 400
MODULES = sorted(PACKAGE.rglob("*.py"))


def imported_rooms(path: pathlib.Path) -> set[str]:
    rooms = set()
    for node in ast.walk(ast.parse(path.read_text(encoding="utf-8"))):
        names = []
        if isinstance(node, ast.Import):
            names = [alias.name for alias in node.names]
        elif isinstance(node, ast.ImportFrom) and node.module:
            assert node.level == 0, f"{path.name}: imports are absolute"
            names = [node.module, *(f"{node.module}.{alias.name}" for alias in node.names)]
        rooms |= {name.split(".")[1] for name in names if name.startswith("planner.")}
    return rooms


def room_of(path: pathlib.Path) -> str:
    return path.relative_to(PACKAGE).parts[0].removesuffix(".py")


@pytest.mark.parametrize("path", MODULES, ids=lambda p: str(p.relative_to(PACKAGE)))
def test_imports_go_one_way(path: pathlib.Path) -> None:
    room = room_of(path)
    if room == "__init__":
        return
    strangers = imported_rooms(path) - ALLOWED[room] - {room}
    assert not strangers, f"{room} may not import {', '.join(sorted(strangers))}"


@pytest.mark.parametrize("path", MODULES, ids=lambda p: str(p.relative_to(PACKAGE)))
def test_modules_stay_small(path: pathlib.Path) -> None:
    assert len(path.read_text(encoding="utf-8").splitlines()) <= LONGEST_MODULE


def test_hand_checks_share_nothing_with_the_main_path() -> None:
    for path in PACKAGE.rglob("hand_checks*.py"):
        if path.parent.name != "methods":
            continue
        assert not imported_rooms(path), f"{path.name} imports from the main path"


def test_allow_list_knows_every_room() -> None:
    assert {room_of(path) for path in MODULES} - {"__init__"} == set(ALLOWED)
