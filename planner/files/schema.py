"""JSON Schemas for editors, from the same definitions that judge the files."""

from __future__ import annotations

from typing import TYPE_CHECKING, Any

from planner.files.schema_plan import PlanFile
from planner.files.schema_rotor import RotorFile
from planner.files.schema_rules import RulesFile
from planner.files.schema_stand import StandFile

if TYPE_CHECKING:
    from planner.files.schema_values import Table

MODELS: dict[str, type[Table]] = {
    "plan": PlanFile,
    "rotor": RotorFile,
    "stand": StandFile,
    "rules": RulesFile,
}
"""Kind of file to its root table."""


def json_schemas() -> dict[str, dict[str, Any]]:
    """Make the schema of each kind of file, by file name."""
    return {
        f"{kind}.schema.json": {
            "$schema": "https://json-schema.org/draft/2020-12/schema",
            **_plain(model.model_json_schema(by_alias=True)),
            "title": f"whirlcard {kind} file",
        }
        for kind, model in MODELS.items()
    }


def _plain(node: Any) -> Any:  # noqa: ANN401 (a JSON tree)
    """Drop what TOML cannot say: null, and OpenAPI's discriminator."""
    if isinstance(node, list):
        return [_plain(item) for item in node]
    if not isinstance(node, dict):
        return node
    options = node.get("anyOf")
    if isinstance(options, list) and {"type": "null"} in options:
        kept = [option for option in options if option != {"type": "null"}]
        rest = {key: value for key, value in node.items() if key not in {"anyOf", "default"}}
        node = rest | (kept[0] if len(kept) == 1 else {"anyOf": kept})
    return {key: _plain(value) for key, value in node.items() if key != "discriminator"}
