"""From a TOML document to its typed tables, with every fault of the document at once.

pydantic walks the tables and gathers what is missing, unknown or refused. Refused values are then
set aside and the document is validated again, so that the checks between values can still judge
whatever is sound.
"""

from __future__ import annotations

import copy
import types
import typing
from typing import Annotated, Any, TypeVar

from pydantic import ValidationError

from planner.files.faults import did_you_mean, listed, shown
from planner.files.schema_values import UNKNOWN, Printable, Quantity, Table

if typing.TYPE_CHECKING:
    from collections.abc import Mapping

    from pydantic_core import ErrorDetails

    from planner.files.positions import KeyPath
    from planner.files.source import Document

_ROUNDS = 8
_AnyTable = TypeVar("_AnyTable", bound=Table)


def validated(
    document: Document, model: type[_AnyTable], printable: Printable | None
) -> _AnyTable | None:
    """Validate a document; faults go to its list.

    Returns:
        The tables. Values with faults are blank (NaN, empty): every comparison with them is
        false, and the faults keep the plan from being built. None where even that fails.
    """
    data: Any = document.data
    context = {"printable": printable}
    for attempt in range(_ROUNDS):
        try:
            return model.model_validate(data, context=context)
        except ValidationError as error:
            details = error.errors(include_url=False, include_input=False)
        places = [(detail, _path(detail, model, data)) for detail in details]
        if attempt == 0:
            for detail, path in places:
                _note(document, model, detail, path)
            data = copy.deepcopy(data)
        for detail, path in places:
            _set_aside(data, detail, path)
    return None


def _path(detail: ErrorDetails, model: type[Table], data: object) -> KeyPath:
    """Turn pydantic's location into a key path: names of union members are left out."""
    path: list[str | int] = []
    at: Any = data
    tagged = False
    *inner, last = detail["loc"] or ("",)
    for part in inner:
        kinds = {} if tagged else _kinds(model, data, tuple(path))
        tagged = len(kinds) > 1
        if tagged:
            continue
        if part in at if isinstance(at, dict) else isinstance(at, list) and isinstance(part, int):
            at = at[part]
            path.append(part)
    absent = detail["type"] == "missing"
    if absent or isinstance(last, int) or (isinstance(at, dict) and last in at):
        path.append(last)
    return tuple(path)


def _kinds(model: type[Table], data: object, path: KeyPath) -> dict[str, type[Table]]:
    """Tables that the key ``kind`` chooses between at a path."""
    if path and isinstance(path[-1], str) and _holds_array(model, data, path):
        return {}
    tables = _tables_at(model, data, path, every_kind=True)
    return {_kind(table): table for table in tables if _kind(table)}


def _holds_array(model: type[Table], data: object, path: KeyPath) -> bool:
    *outer, name = path
    tables = _tables_at(model, data, tuple(outer), every_kind=True)
    fields = [_fields(table).get(str(name)) for table in tables]
    return any(typing.get_origin(field.annotation) is list for field in fields if field)


def _set_aside(data: Any, detail: ErrorDetails, path: KeyPath) -> None:  # noqa: ANN401 (a tree)
    at = data
    for part in path[:-1]:
        at = at[part]
    if not path:
        return
    last: Any = path[-1]
    match detail["type"]:
        case "extra_forbidden" if isinstance(at, dict):
            at.pop(last, None)
        case "model_type":
            at[last] = {}
        case "list_type":
            at[last] = []
        case "too_short":
            at[last] = [{} for _ in range(detail.get("ctx", {}).get("min_length", 1))]
        case _:
            at[last] = UNKNOWN


def _note(document: Document, model: type[Table], detail: ErrorDetails, path: KeyPath) -> None:
    context: Mapping[str, Any] = detail.get("ctx", {})
    match detail["type"]:
        case "refused":
            document.fault(path, context["expected"], context["mend"], context["found"])
        case "missing":
            _note_missing(document, model, path)
        case "extra_forbidden":
            _note_unknown_key(document, model, path)
        case "union_tag_not_found" | "union_tag_invalid":
            _note_kind(document, list(_kinds(model, document.data, path)), path)
        case "model_type" | "model_attributes_type" | "dict_type":
            document.fault(path, "a table", "write it as a table with its keys")
        case "list_type":
            document.fault(path, "an array", "write the values in brackets [ ], or repeat [[ ]]")
        case "too_short":
            least = context.get("min_length", 1)
            document.fault(path, f"at least {least}", "add what is missing")
        case _:
            document.fault(path, detail["msg"].lower(), "correct the value")


def _note_missing(document: Document, model: type[Table], path: KeyPath) -> None:
    *outer, name = path
    tables = _tables_at(model, document.data, tuple(outer))
    field = next((f for table in tables for n, f in _fields(table).items() if n == name), None)
    example = _example(field.annotation, field.metadata) if field else ""
    mend = f'add for example {name} = "{example}"' if example else f"add {name}"
    description = (field.description or "").rstrip(".") if field else ""
    expected = f'key "{name}"' + (
        f" ({description[:1].lower()}{description[1:]})" if field else ""
    )
    document.fault_at_key(path, expected, mend, "no such key")


def _note_unknown_key(document: Document, model: type[Table], path: KeyPath) -> None:
    *outer, name = path
    if not isinstance(name, str):
        return
    siblings = _tables_at(model, document.data, tuple(outer), every_kind=True)
    chosen = _tables_at(model, document.data, tuple(outer))
    known = list(dict.fromkeys(key for table in chosen for key in _fields(table)))
    present = document.value(tuple(outer))
    free = [key for key in known if not (isinstance(present, dict) and key in present)]
    owners = [_kind(table) for table in siblings if name in _fields(table) and _kind(table)]
    if owners and name not in known:
        mend = f"it belongs to kind {listed(owners)}: remove it or change kind"
    else:
        mend = did_you_mean(name, free) or did_you_mean(name, known) or "remove it"
    document.fault_at_key(path, f"one of the keys {listed(known)}", mend, f"key {shown(name)}")


def _note_kind(document: Document, kinds: list[str], path: KeyPath) -> None:
    table = document.value(path)
    if isinstance(table, dict) and "kind" in table:
        kind = table["kind"]
        names = [name.strip('"') for name in kinds]
        hint = did_you_mean(kind, names) if isinstance(kind, str) else ""
        document.fault((*path, "kind"), listed(kinds), hint or "write one of these")
    else:
        expected = f"key kind = {listed(kinds)}"
        document.fault_at_key((*path, "kind"), expected, "add it", "no such key")


def _fields(table: type[Table]) -> dict[str, Any]:
    return {field.alias or name: field for name, field in table.model_fields.items()}


def _kind(table: type[Table]) -> str:
    field = table.model_fields.get("kind")
    options = typing.get_args(field.annotation) if field else ()
    return f'"{options[0]}"' if options else ""


def tables_in(annotation: Any) -> list[type[Table]]:  # noqa: ANN401 (any annotation)
    """List the tables that an annotation may hold, through arrays, options and unions."""
    if isinstance(annotation, type) and issubclass(annotation, Table):
        return [annotation]
    origin = typing.get_origin(annotation)
    if origin is Annotated:
        return tables_in(typing.get_args(annotation)[0])
    if origin in {list, types.UnionType, typing.Union}:
        return [table for part in typing.get_args(annotation) for table in tables_in(part)]
    return []


def _tables_at(
    model: type[Table], data: object, path: KeyPath, *, every_kind: bool = False
) -> list[type[Table]]:
    """Find the tables that may stand at a path, narrowed by ``kind`` where the data has it."""
    tables = [model]
    at: Any = data
    for part in path:
        try:
            at = at[part]
        except (KeyError, IndexError, TypeError):
            at = None
        if isinstance(part, str):
            annotations = [_fields(t)[part].annotation for t in tables if part in _fields(t)]
            tables = [table for annotation in annotations for table in tables_in(annotation)]
    if every_kind or not isinstance(at, dict):
        return tables
    narrowed = [table for table in tables if _kind(table) == f'"{at.get("kind")}"']
    return narrowed or [table for table in tables if set(at) & set(_fields(table))] or tables


def _example(annotation: Any, metadata: list[Any]) -> str:  # noqa: ANN401 (any annotation)
    """Give the sample text of a quantity."""
    return next((part.example for part in metadata if isinstance(part, Quantity)), "") or next(
        (
            part.example
            for option in typing.get_args(annotation)
            for part in typing.get_args(option)
            if isinstance(part, Quantity)
        ),
        "",
    )


def documentation(model: type[Table], data: object, path: KeyPath) -> str:
    """Description of the key at a path, empty where the schema has no such key."""
    *outer, name = path
    for table in _tables_at(model, data, tuple(outer)):
        field = _fields(table).get(str(name))
        if field is not None:
            return str(field.description or "")
    return ""
