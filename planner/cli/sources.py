"""Getting a record from what the person named, and writing files; faults end with status 2."""

from __future__ import annotations

import os
from contextlib import contextmanager
from dataclasses import dataclass
from typing import TYPE_CHECKING, Any

from planner.cli.progress import ProgressLine
from planner.cli.screen import fail, mention
from planner.files.faults import PlanFaults
from planner.files.kept import FolderStore, kept_folder
from planner.files.read import read_plan
from planner.files.start import StarterRefusedError
from planner.files.write import write_whole
from planner.paper.texts import unprintable
from planner.predict.kept import NOTHING_KEPT
from planner.predict.register import REFERENCES, REGISTER
from planner.record.layout import RecordError, build, from_bytes

if TYPE_CHECKING:
    from collections.abc import Callable, Iterator
    from pathlib import Path

    from planner.predict.kept import Store


@dataclass(frozen=True)
class Keeping:
    """What the command line says of kept results."""

    folder: Path | None = None
    """Where they are; None: as the environment says, or the user's cache folder."""
    fresh: bool = False
    """Compute all anew, and keep it."""


USUAL = Keeping()


@contextmanager
def stop_on_fault() -> Iterator[None]:
    """Turn faults of input and output into messages and exit status 2."""
    try:
        yield
    except (PlanFaults, RecordError, StarterRefusedError) as fault:
        fail(str(fault))
    except OSError as fault:
        fail(f"{fault.filename or 'file'}: {fault.strerror or fault}")


def load_record(source: Path, keeping: Keeping = USUAL) -> dict[str, Any]:
    """Read a record, or read a plan folder and build its record.

    A folder for kept results that cannot be written is mentioned on stderr and changes nothing.
    """
    with stop_on_fault():
        if source.suffix.lower() == ".json" and not source.is_dir():
            return from_bytes(source.read_bytes(), str(source))
        vocabulary = {entry.id: (entry.unit, entry.axes) for entry in REGISTER.values()}
        loaded = read_plan(source, vocabulary, REFERENCES, unprintable)
        files = [(file.name, file.sha256) for file in loaded.files]
        notes: list[str] = []
        with ProgressLine() as progress:
            record = build(loaded.plan, files, progress, open_store(keeping, notes.append))
        for note in notes:
            mention(note)
        return record


def open_store(keeping: Keeping, tell: Callable[[str], None]) -> Store:
    """The store of kept results that the command line and the environment name.

    Args:
        keeping: what the command line says.
        tell: called with one line when nothing can be kept.
    """
    folder = kept_folder(keeping.folder, os.environ)
    if folder is None:
        tell("kept results: expected a home folder to keep them in, found none; name one: --kept")
        return NOTHING_KEPT
    return FolderStore(folder, fresh=keeping.fresh, tell=tell)


def write(path: Path, data: bytes) -> None:
    """Write a file whole or not at all; a fault ends with status 2."""
    try:
        write_whole(path.resolve(), data)
    except OSError as fault:
        fail(f"{path}: {fault.strerror or fault}")
