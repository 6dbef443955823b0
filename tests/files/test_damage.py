"""Damage to any line or table of a plan gives faults, never a crash."""

import copy
import datetime
import json
import random
import tomllib
from typing import Any

import pytest

NAMES = ["plan.toml", "rotor.toml", "stand.toml", "rules.toml"]
ODD_KEYS = ["polar", "predicted", "<share>", "<trim>", "kind", "step", "of", "share", "é", "", "0"]
ODD_VALUES = [
    0, -1, 1.5, True, "", "kind", "step", "trim", "12 deg", "12 % rpm", "predicted", "polar", [],
    {}, [[]], [{}], {"kind": "polar"}, {"share": "1 %", "of": "x"}, {"over_rpm": [["1 rpm", 1]]},
    datetime.date(2026, 1, 1), ["0 rpm", "1 deg"], [["0 rpm", "1 deg"], ["1 rpm"]], 10**400,
]  # fmt: skip


def written(value: object) -> str:
    """Write a value as TOML on one line."""
    if isinstance(value, dict):
        pairs = (f"{json.dumps(key)} = {written(item)}" for key, item in value.items())
        return "{" + ", ".join(pairs) + "}"
    if isinstance(value, list):
        return "[" + ", ".join(written(item) for item in value) + "]"
    if isinstance(value, datetime.date):
        return value.isoformat()
    return hex(value) if isinstance(value, int) and value > 10**18 else json.dumps(value)


def damaged(node: Any, chance: random.Random) -> None:
    """Change one place below a table or an array."""
    places = list(node) if isinstance(node, dict) else list(range(len(node)))
    pick = chance.random()
    if not places or pick < 0.1:
        value = copy.deepcopy(chance.choice(ODD_VALUES))
        if isinstance(node, dict):
            node[chance.choice(ODD_KEYS)] = value
        else:
            node.append(value)
        return
    place = chance.choice(places)
    if pick < 0.7 and isinstance(node[place], dict | list):
        damaged(node[place], chance)
    elif pick < 0.8:
        del node[place]
    else:
        node[place] = copy.deepcopy(chance.choice(ODD_VALUES))


@pytest.mark.parametrize("seed", range(6))
def test_random_damage_gives_faults_or_a_plan(folder, seed):
    chance = random.Random(seed)  # noqa: S311 (test data)
    texts = {name: (folder.path / name).read_text("utf-8") for name in NAMES}
    broken = 0
    for _ in range(30):
        for name, text in texts.items():
            data = tomllib.loads(text)
            for _ in range(chance.choice([0, 1, 3])):
                damaged(data, chance)
            lines = (f"{json.dumps(key)} = {written(value)}" for key, value in data.items())
            folder.write(name, "\n".join(lines).encode())
        faults = folder.faults_or_none()
        broken += bool(faults)
        assert all(fault.line >= 1 and fault.column >= 1 for fault in faults)
        assert all(f"{fault}".isprintable() for fault in faults)
    assert broken > 15


@pytest.mark.parametrize("name", NAMES)
@pytest.mark.parametrize("change", ["gone", "= nan", '= ""', "= []", "= false"])
def test_no_damage_to_any_line_is_read_as_a_plan_or_crashes(folder, name, change):
    """Faults are what a damaged file gives; only some lines may be left out or changed."""
    lines = (folder.path / name).read_text("utf-8").split("\n")
    silent = []
    for i, line in enumerate(lines):
        if " = " not in line:
            continue
        key = line.partition(" = ")[0]
        damaged = [*lines[:i], *([] if change == "gone" else [f"{key} {change}"]), *lines[i + 1 :]]
        folder.write(name, "\n".join(damaged).encode())
        faults = folder.faults_or_none()
        assert all(f.expected and f.found and f.mend for f in faults)
        if not faults:
            silent.append(key)
    assert set(silent) <= SOUND[change]


SOUND = {
    "gone": {
        "extra_classes", "note", "repeat", "rotor_fitted", "overspeed_trip", "stop_free_margin",
        "from", "to", "orders", "family", "exempt_damping", "caution",
    },
    "= nan": set(),
    '= ""': {"name", "note"},
    "= []": {"extra_classes", "orders"},
    "= false": {"may_abort", "powered", "rotor_fitted", "approved"},
}  # fmt: skip
