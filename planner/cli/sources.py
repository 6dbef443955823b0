"""Getting a record from what the person named, and writing files; faults end with status 2."""

from __future__ import annotations

import sys
import time
from contextlib import contextmanager
from typing import TYPE_CHECKING, Any

from planner.cli.screen import fail
from planner.files.faults import PlanFaults
from planner.files.read import read_plan
from planner.files.start import StarterRefusedError
from planner.files.write import write_whole
from planner.paper.texts import unprintable
from planner.predict.register import REFERENCES, REGISTER
from planner.record.layout import RecordError, build, from_bytes

if TYPE_CHECKING:
    from collections.abc import Iterator
    from pathlib import Path

PATIENCE_S = 1.0


@contextmanager
def stop_on_fault() -> Iterator[None]:
    """Turn faults of input and output into messages and exit status 2."""
    try:
        yield
    except (PlanFaults, RecordError, StarterRefusedError) as fault:
        fail(str(fault))
    except OSError as fault:
        fail(f"{fault.filename or 'file'}: {fault.strerror or fault}")


def load_record(source: Path) -> dict[str, Any]:
    """Read a record, or read a plan folder and build its record."""
    with stop_on_fault():
        if source.suffix.lower() == ".json" and not source.is_dir():
            return from_bytes(source.read_bytes(), str(source))
        vocabulary = {entry.id: (entry.unit, entry.axes) for entry in REGISTER.values()}
        loaded = read_plan(source, vocabulary, REFERENCES, unprintable)
        files = [(file.name, file.sha256) for file in loaded.files]
        return build(loaded.plan, files, Progress())


def write(path: Path, data: bytes) -> None:
    """Write a file whole or not at all; a fault ends with status 2."""
    try:
        write_whole(path.resolve(), data)
    except OSError as fault:
        fail(f"{path}: {fault.strerror or fault}")


class Progress:
    """Names the part in work on stderr, on a terminal, once a second has passed."""

    def __init__(self) -> None:
        """Start the clock."""
        self._begin = time.monotonic()

    def __call__(self, part: str) -> None:
        """Say which part starts now."""
        if (
            sys.stderr is not None
            and sys.stderr.isatty()
            and time.monotonic() - self._begin > PATIENCE_S
        ):
            print(f"whirlcard: {part} ...", file=sys.stderr)
