"""Kept results in a folder: one JSON file for each, found again by the digest of its key.

The folder is the one named on the command line, else by the environment variable
``WHIRLCARD_KEPT``, else ``whirlcard/kept`` in the user's cache folder (``LOCALAPPDATA`` on
Windows, ``XDG_CACHE_HOME`` or ``~/.cache`` elsewhere). It may be deleted at any time.

    layout     1
    kind       "predictions" or "plain"
    key        what the result depends on, as its maker says
    program    digest of this program's own source and kind of machine
    content    quantity -> prediction, or the plain result
    digest     SHA-256 of everything above

A result is used only when its file is whole, its digest is right, it was made under the same key
by the very same program, and every value is of its kind. Anything else is as if it were not there:
it is computed anew and written over. The digest shows damage, not who wrote the file: whoever may
write to the folder is trusted, as with the program itself.

Numbers come back bit for bit: JSON holds the shortest text that reads back to the same float;
NaN is null, infinities are text. At most 500 files stay, those used last; files of other names in
the folder are left alone. A folder that cannot be written is told once and then does without.
"""

from __future__ import annotations

import functools
import hashlib
import json
import math
import os
import platform
import re
import sys
from contextlib import suppress
from dataclasses import fields
from pathlib import Path
from typing import TYPE_CHECKING, Any

import numpy as np

import planner
from planner.files.write import write_whole
from planner.model.canonical import digest_of_plain, plain
from planner.model.results import Labels, Prediction, Status

if TYPE_CHECKING:
    from collections.abc import Callable, Mapping

    from numpy.typing import NDArray

VARIABLE = "WHIRLCARD_KEPT"
LAYOUT = 1
MOST_FILES = 500
_OURS = re.compile(r"\.?[0-9a-f]{64}\.json(\.[0-9a-f]{8}\.part)?")
"""A kept result, or the part of one that a killed program left."""
_NUMBERS = ("value", "low", "high", "speed_rad_s", "hand")
_DAMAGE = (OSError, ValueError, KeyError, TypeError, AttributeError, RecursionError)
"""What reading a file raises that is not a kept result."""


class FolderStore:
    """A store of kept results in a folder; see `planner.predict.kept.Store`."""

    def __init__(
        self,
        folder: Path,
        *,
        fresh: bool = False,
        tell: Callable[[str], None] = lambda _: None,
        most_files: int = MOST_FILES,
    ) -> None:
        """Name the folder; nothing is made before there is something to keep.

        Args:
            folder: where the files are.
            fresh: give no result back, so that all is computed anew; it is kept all the same.
            tell: called with one line when the folder cannot be written.
            most_files: the oldest beyond this number are deleted.
        """
        self.folder = folder
        self.fresh = fresh
        self._tell = tell
        self._most_files = most_files
        self._writes = True

    def get(self, key: str) -> Mapping[str, Prediction] | None:
        """Predictions kept under a key; None where there are none, or not whole."""
        content = None if self.fresh else self._read("predictions", key)
        try:
            return content and {name: _prediction(told) for name, told in content.items()}
        except _DAMAGE:
            return None

    def put(self, key: str, predictions: Mapping[str, Prediction]) -> None:
        """Keep the predictions of one study."""
        self._write("predictions", key, {name: _told(p) for name, p in predictions.items()})

    def get_plain(self, key: str, *, even_if_fresh: bool = False) -> Mapping[str, Any] | None:
        """Another kept result; from a fresh store only where it is merely looked up."""
        return None if self.fresh and not even_if_fresh else self._read("plain", key)

    def put_plain(self, key: str, content: Mapping[str, Any]) -> None:
        """Keep another result in its plain form."""
        self._write("plain", key, plain(content))

    def _path(self, kind: str, key: str) -> Path:
        return self.folder / f"{digest_of_plain([LAYOUT, kind, key, program_digest()])}.json"

    def _read(self, kind: str, key: str) -> dict[str, Any] | None:
        try:
            path = self._path(kind, key)
            found = json.loads(path.read_bytes())
            content = found["content"]
            whole = isinstance(content, dict) and found == _sealed(kind, key, content)
        except _DAMAGE:
            return None
        if not whole:
            return None
        with suppress(OSError):
            os.utime(path)
        return dict(content)

    def _write(self, kind: str, key: str, content: Mapping[str, Any]) -> None:
        if not self._writes:
            return
        try:
            data = json.dumps(_sealed(kind, key, content), allow_nan=False).encode()
            self.folder.mkdir(mode=0o700, parents=True, exist_ok=True)
            write_whole(self._path(kind, key), data)
            self._prune()
        except (OSError, ValueError) as fault:
            self._writes = False
            words = getattr(fault, "strerror", None) or fault
            self._tell(
                f"{self.folder}: expected a folder to keep results in, found: {words}; nothing "
                f"more is kept in this run; name another folder with --kept or {VARIABLE}"
            )

    def _prune(self) -> None:
        """Delete the files that were used longest ago, beyond the greatest number."""
        ours = [path for path in self.folder.iterdir() if _OURS.fullmatch(path.name)]
        if len(ours) > self._most_files:
            ours.sort(key=_last_used)
            for path in ours[: -self._most_files]:
                with suppress(OSError):
                    path.unlink()


def kept_folder(named: Path | None, environment: Mapping[str, str]) -> Path | None:
    """Folder for kept results: named, from the environment, or in the user's cache folder.

    Returns:
        The folder, which need not exist; None where the user has no folder of his own.
    """
    if named is not None:
        return named
    if environment.get(VARIABLE):
        return Path(environment[VARIABLE])
    if sys.platform == "win32":
        caches = environment.get("LOCALAPPDATA", "")
    else:
        caches = environment.get("XDG_CACHE_HOME", "")
    if caches and Path(caches).is_absolute():
        return Path(caches) / "whirlcard" / "kept"
    try:
        return Path.home() / ".cache" / "whirlcard" / "kept"
    except RuntimeError:
        return None


@functools.cache
def program_digest() -> str:
    """Digest of this program's own files and the kind of machine.

    A change of any line of the program is another program, whose results are its own.
    """
    top = Path(planner.__file__).parent
    found = hashlib.sha256(f"{sys.platform} {platform.machine()}".encode())
    for path in sorted(top.rglob("*")):
        if path.is_file() and "__pycache__" not in path.parts:
            content = hashlib.sha256(path.read_bytes()).hexdigest()
            found.update(f"{path.relative_to(top).as_posix()} {content}\n".encode())
    return found.hexdigest()


def _sealed(kind: str, key: str, content: Mapping[str, Any]) -> dict[str, Any]:
    """All that a file holds, with its digest."""
    body = {
        "layout": LAYOUT,
        "kind": kind,
        "key": key,
        "program": program_digest(),
        "content": content,
    }
    return {**body, "digest": digest_of_plain(body)}


def _last_used(path: Path) -> float:
    try:
        return path.stat().st_mtime
    except OSError:
        return -math.inf


def _told(prediction: Prediction) -> dict[str, Any]:
    """A prediction in JSON values, nothing lost."""
    numbers = {name: [_out(x) for x in getattr(prediction, name).tolist()] for name in _NUMBERS}
    return {
        **numbers,
        "quantity": prediction.quantity,
        "study": prediction.study,
        "labels": [
            {field.name: getattr(label, field.name) for field in fields(Labels)}
            for label in prediction.labels
        ],
        "status": [status.value for status in prediction.status],
        "reasons": list(prediction.reasons),
    }


def _prediction(told: Mapping[str, Any]) -> Prediction:
    """A prediction from its JSON values.

    Raises:
        ValueError: a value is not of its kind, or the rows do not match.
    """
    labels = tuple(Labels(**_texts(label)) for label in told["labels"])
    reasons = tuple(_texts(dict(enumerate(told["reasons"]))).values())
    status = tuple(Status(value) for value in told["status"])
    numbers = {name: _array(told[name]) for name in _NUMBERS}
    if len({len(column) for column in (labels, status, reasons, *numbers.values())}) != 1:
        msg = "expected as many labels, statuses and reasons as numbers"
        raise ValueError(msg)
    names = _texts({"quantity": told["quantity"], "study": told["study"]})
    return Prediction(
        quantity=names["quantity"],
        study=names["study"],
        labels=labels,
        status=status,
        reasons=reasons,
        value=numbers["value"],
        low=numbers["low"],
        high=numbers["high"],
        speed_rad_s=numbers["speed_rad_s"],
        hand=numbers["hand"],
    )


def _texts(values: Mapping[Any, Any]) -> dict[Any, str]:
    wrong = [value for value in values.values() if not isinstance(value, str)]
    if wrong:
        msg = f"expected text, found {wrong[0]!r}"
        raise ValueError(msg)
    return dict(values)


def _array(values: list[Any]) -> NDArray[np.float64]:
    return np.array([_in(value) for value in values], dtype=np.float64)


def _out(value: float) -> float | str | None:
    if math.isnan(value):
        return None
    return value if math.isfinite(value) else str(value)


def _in(value: object) -> float:
    if value is None:
        return math.nan
    if isinstance(value, float) and math.isfinite(value):
        return value
    if value in {"inf", "-inf"}:
        return float(str(value))
    msg = f"expected a number, found {value!r}"
    raise ValueError(msg)
