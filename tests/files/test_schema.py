"""The JSON Schemas say the same as the reader."""

import json
import re
import tomllib
from collections.abc import Iterator
from typing import Any

import pytest

from planner.files.schema import json_schemas

KINDS = ["plan", "rotor", "stand", "rules"]


Node = dict[str, Any]
TYPES = {"object": dict, "array": list, "string": str, "boolean": bool, "integer": int}


def resolved(node: Node, root: Node) -> Node:
    while "$ref" in node:
        rest = {key: value for key, value in node.items() if key != "$ref"}
        node = {**root["$defs"][node["$ref"].rpartition("/")[2]], **rest}
    return node


def complaints(value: Any, node: Node, root: Node, where: str = "") -> list[str]:
    """Judge a value by the few keywords that the schemas use."""
    node = resolved(node, root)
    options = node.get("anyOf") or node.get("oneOf")
    if options:
        return min((complaints(value, option, root, where) for option in options), key=len)
    wanted = TYPES.get(node.get("type", ""), int | float)
    number = wanted not in {dict, list, str, bool}
    if "type" in node and (not isinstance(value, wanted) or (number and value is True)):
        return [f"{where}: no {node['type']}"]
    found = told(f"{where}: not listed", when=value not in node.get("enum", [value]))
    found += told(f"{where}: another kind", when=value != node.get("const", value))
    if isinstance(value, str) and not re.search(node.get("pattern", ""), value):
        found.append(f"{where}: {value!r} against {node['pattern']}")
    if isinstance(value, dict):
        found += table_complaints(value, node, root, where)
    if isinstance(value, list):
        rows = node.get("prefixItems", [node.get("items", {})] * len(value))
        found += told(f"{where}: too short", when=len(value) < node.get("minItems", 0))
        for item, row in zip(value, rows, strict=False):
            found += complaints(item, row, root, where)
    return found


def told(text: str, *, when: bool) -> list[str]:
    return [text] if when else []


def table_complaints(value: Node, node: Node, root: Node, where: str) -> list[str]:
    known = node["properties"]
    assert node["additionalProperties"] is False
    found = [f"{where}.{key}: missing" for key in node.get("required", []) if key not in value]
    found += [f"{where}.{key}: unknown" for key in value if key not in known]
    for key in set(value) & set(known):
        found += complaints(value[key], known[key], root, f"{where}.{key}")
    return found


def test_there_is_one_schema_for_each_kind_of_file():
    assert list(json_schemas()) == [f"{kind}.schema.json" for kind in KINDS]


@pytest.mark.parametrize("kind", KINDS)
def test_a_sound_file_satisfies_its_schema(folder, kind):
    schema = json_schemas()[f"{kind}.schema.json"]
    text = (folder.path / f"{kind}.toml").read_text("utf-8")
    data = json.loads(json.dumps(tomllib.loads(text), default=str))
    assert complaints(data, schema, schema) == []


@pytest.mark.parametrize(
    ("kind", "old", "new"),
    [
        ("rotor", '"5.3 m"', '"5.3 kg"'),
        ("rotor", '"2.5 kg"', '"-2.5 kg"'),
        ("rotor", "blades = 4", 'blades = "4"'),
        ("rotor", "aero_root", "areo_root"),
        ("stand", "gear_ratio = 4", "gear_ratio = true"),
        ("stand", '"axis level"', '"level"'),
        ("plan", 'cyclic = "trim"\nramp_time = "30 s"', 'cyclic = "trimmed"\nramp_time = "30 s"'),
        ("plan", '"60 %"', '"60"'),
        ("rules", "when =", "whenever ="),
        ("rules", '["0 rpm", "2.5 deg"]', '["0 m", "2.5 deg"]'),
    ],
)
def test_a_faulty_file_is_marked_by_the_schema_and_refused_by_the_reader(folder, kind, old, new):
    folder.edit(f"{kind}.toml", old, new)
    schema = json_schemas()[f"{kind}.schema.json"]
    data = tomllib.loads((folder.path / f"{kind}.toml").read_text("utf-8"))
    data = json.loads(json.dumps(data, default=str))
    assert complaints(data, schema, schema)
    assert folder.faults()


def nodes(node: Any) -> Iterator[Any]:
    yield node
    for value in node.values() if isinstance(node, dict) else node:
        if isinstance(value, dict | list):
            yield from nodes(value)


@pytest.mark.parametrize("kind", KINDS)
def test_every_key_has_hover_help_and_fitting_examples(kind):
    schema = json_schemas()[f"{kind}.schema.json"]
    text = json.dumps(schema)
    assert '"null"' not in text
    assert '"discriminator"' not in text
    for node in nodes(schema):
        for name, field in node.get("properties", {}).items() if isinstance(node, dict) else ():
            if isinstance(field, dict) and name != "properties":
                assert field.get("description"), name
        if isinstance(node, dict) and "pattern" in node and "examples" in node:
            assert all(re.search(node["pattern"], example) for example in node["examples"])


def test_temperatures_below_zero_are_no_negative_values():
    site = json_schemas()["plan.schema.json"]["$defs"]["SiteTable"]["properties"]
    assert re.search(site["temperature"]["pattern"], "-12.5 degC")
    assert not re.search(site["wind_mean"]["pattern"], "-3 m/s")


@pytest.mark.parametrize(
    ("kind", "table", "key", "example"),
    [
        ("rotor", "BladeTable", "stations", "blade.csv"),
        ("rotor", "PolarTable", "polar", "polar.csv"),
        ("plan", "", "rotor", "rotor.toml"),
        ("plan", "", "stand", "stand.toml"),
    ],
)
def test_file_names_have_examples_of_their_own(kind, table, key, example):
    schema = json_schemas()[f"{kind}.schema.json"]
    owner = schema["$defs"][table] if table else schema
    assert owner["properties"][key]["examples"] == [example]


@pytest.mark.parametrize(
    ("kind", "table", "key"),
    [
        ("rotor", "Station", "ac_offset"),
        ("stand", "", "position"),
    ],
)
def test_keys_that_change_no_number_say_so(kind, table, key):
    schema = json_schemas()[f"{kind}.schema.json"]
    owner = schema["$defs"][table] if table else schema
    description = owner["properties"][key]["description"]
    assert description.endswith(" kept for the record, not used yet.")
