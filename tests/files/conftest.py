"""A small plan folder to break, one place at a time."""

import shutil
from pathlib import Path

import pytest

from planner.files.faults import Fault, PlanFaults
from planner.files.read import LoadedPlan, read_plan

VOCABULARY: dict[str, tuple[str, tuple[str, ...]]] = {
    "card_speed": ("rpm", ()),
    "lock_number": ("", ()),
    "tip_mach": ("", ("segment",)),
    "thrust": ("N", ("segment",)),
    "droop_stop_clearance": ("deg", ("segment",)),
    "ramp_rate": ("rpm/s", ("segment",)),
    "harmonic_spacing": ("%", ("segment", "mode", "harmonic")),
}
REFERENCES = {
    "design_maximum_speed": "rpm",
    "proven_speed": "rpm",
    "stop_free_speed": "rpm",
    "stand_thrust_rating": "N",
    "flap_travel": "deg",
}
MARK = "¦"
"""Stands in an edit where the fault is expected; it is taken out before the file is written."""


class Folder:
    """A copy of the sound plan folder."""

    def __init__(self, path: Path) -> None:
        self.path = path
        self.marks: list[str] = []

    def edit(self, name: str, old: str, new: str) -> "Folder":
        """Replace a text that stands there exactly once, and note the marked places."""
        file = self.path / name
        text = file.read_text("utf-8")
        assert text.count(old) == 1, f"{old!r} stands {text.count(old)} times in {name}"
        text = text.replace(old, new)
        while MARK in text:
            at = text.index(MARK)
            line = text.count("\n", 0, at) + 1
            self.marks.append(f"{name}:{line}:{at - text.rfind(chr(10), 0, at)}")
            text = text.replace(MARK, "", 1)
        file.write_bytes(text.encode("utf-8", "surrogatepass"))
        return self

    def write(self, name: str, content: bytes) -> "Folder":
        (self.path / name).write_bytes(content)
        return self

    def read(self, **more) -> LoadedPlan:
        return read_plan(self.path, VOCABULARY, REFERENCES, **more)

    def faults(self, **more) -> tuple[Fault, ...]:
        with pytest.raises(PlanFaults, match=r"expected .*, found .*; .+") as caught:
            self.read(**more)
        return caught.value.faults

    def faults_or_none(self) -> tuple[Fault, ...]:
        """Faults of a folder that may happen to be sound."""
        try:
            self.read()
        except PlanFaults as error:
            return error.faults
        return ()

    def lines(self, **more) -> list[str]:
        return [str(fault) for fault in self.faults(**more)]


@pytest.fixture
def folder(tmp_path: Path) -> Folder:
    """A sound plan folder of its own for each test."""
    path = tmp_path / "plan"
    shutil.copytree(Path(__file__).parent / "folder", path)
    return Folder(path)
