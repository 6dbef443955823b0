"""Writes a starter folder: a plan that reads as it is, commented from the schema."""

from __future__ import annotations

import json
import tomllib
from typing import TYPE_CHECKING

from planner.files.faults import visible
from planner.files.positions import index
from planner.files.schema import MODELS, json_schemas
from planner.files.shipped import shipped
from planner.files.validate import documentation
from planner.files.write import write_whole

if TYPE_CHECKING:
    from pathlib import Path

    from planner.files.schema_values import Table

_MODEL_PLAN = "sample_plans/articulated-run-up"
_BOOK = "rules/example_book.toml"
_NOTE = """\
# INVENTED DATA: the rotor, the stand, the people and the documents of this folder do not exist.
# Put your own in their place, then run "whirlcard check" in this folder.
#
# Values with a unit are text: "12 deg", "245 rpm", "62 % rpm", "8 kt". A number without its unit
# is refused. All radii count from the shaft axis.
"""


class StarterRefusedError(Exception):
    """The folder cannot take a starter; nothing was written."""


def write_starter(folder: Path) -> list[Path]:
    """Write a plan folder to begin from.

    Args:
        folder: A folder that is empty or does not exist yet.

    Returns:
        The files written, the plan first.

    Raises:
        StarterRefusedError: The folder holds something, or is no folder.
        OSError: A file cannot be written; those already written are removed again.
    """
    _refuse_unless_free(folder)
    contents = _contents()
    new = not folder.exists()
    folder.mkdir(parents=True, exist_ok=True)
    written: list[Path] = []
    try:
        for name, text in contents.items():
            write_whole(folder / name, text.encode())
            written.append(folder / name)
    except BaseException:
        for path in written:
            path.unlink(missing_ok=True)
        if new:
            folder.rmdir()
        raise
    return written


def commented(text: str, model: type[Table]) -> str:
    """Put the schema's description above the first use of each key of a TOML text."""
    data = tomllib.loads(text)
    lines = text.split("\n")
    above: dict[int, str] = {}
    done: set[tuple[str, ...]] = set()
    for path, (line, column) in index(text).keys.items():
        names = tuple(part for part in path if isinstance(part, str))
        if column > 1 or isinstance(path[-1], int) or names in done:
            continue
        done.add(names)
        above[line] = documentation(model, data, path)
    result: list[str] = []
    for number, content in enumerate(lines, start=1):
        if above.get(number):
            result.append(f"# {above[number]}")
        result.append(content)
    return "\n".join(result)


def _contents() -> dict[str, str]:
    contents = {f"{kind}.toml": _commented_sample(kind) for kind in ("plan", "rotor", "stand")}
    contents["blade.csv"] = shipped(f"{_MODEL_PLAN}/blade.csv").read_text("utf-8")
    contents["rules.toml"] = "#:schema ./rules.schema.json\n" + shipped(_BOOK).read_text("utf-8")
    for name, schema in json_schemas().items():
        contents[name] = json.dumps(schema, indent=2, ensure_ascii=False) + "\n"
    return contents


def _commented_sample(kind: str) -> str:
    """A file of the shipped sample plan, pointed at the starter's own rule book."""
    text = shipped(f"{_MODEL_PLAN}/{kind}.toml").read_text("utf-8")
    text = text.replace("../../rules/example_book.toml", "rules.toml")
    body = text[text.index("\n\n") + 2 :]
    return f"#:schema ./{kind}.schema.json\n#\n{_NOTE}\n{commented(body, MODELS[kind])}"


def _refuse_unless_free(folder: Path) -> None:
    shown = visible(str(folder))
    if folder.exists() and not folder.is_dir():
        msg = f"{shown}: expected a folder, found a file; name a new folder"
        raise StarterRefusedError(msg)
    if folder.is_dir() and any(folder.iterdir()):
        msg = f"{shown}: expected an empty folder, found files in it; name a new folder"
        raise StarterRefusedError(msg)
