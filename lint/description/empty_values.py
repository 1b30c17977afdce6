"""Keys without a value: a fact that is not given yet, or an element of which nothing is known yet."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from typing import Any

from tidegate.lint.description.place import Fault
from tidegate.lint.description.sources import Sources
from tidegate.lint.description.yaml_text import Step, dotted


def fill_empty(sources: Sources, schema: Mapping[str, Any]) -> list[Fault]:
    """Give each empty element an empty mapping in the data; empty facts stay out of it.

    Returns: a fault for each empty key that the schema does not know.
    """
    faults: list[Fault] = []
    for file in sources.files:
        for path in file.empty:
            above = _schema_at(schema, path[:-1])
            key = str(path[-1])
            if above is None or key in above.get("properties", {}) or key.startswith("x-"):
                continue
            if isinstance(above.get("additionalProperties"), dict):
                _put(sources.data, path)
            else:
                faults.append(_unknown(sources, path, above))
    return faults


def _unknown(sources: Sources, path: tuple[Step, ...], above: Mapping[str, Any]) -> Fault:
    from tidegate.lint.description.schema_faults import nearest_key

    key = str(path[-1])
    advice = nearest_key(key, list(above.get("properties", {})))
    return Fault(sources.place(path, key=True), dotted(path[:-1]), f"unknown key {key!r}", advice)


def _schema_at(schema: Mapping[str, Any], path: Sequence[Step]) -> Mapping[str, Any] | None:
    """The schema of the object at a path; None where the schema knows no object there."""
    node: Mapping[str, Any] | None = schema
    for step in path:
        if node is None:
            return None
        if isinstance(step, int):
            child = node.get("items")
        else:
            child = node.get("properties", {}).get(step, node.get("additionalProperties"))
        node = _object_behind(child, schema["$defs"]) if isinstance(child, dict) else None
    return node


def _object_behind(node: Mapping[str, Any], defs: Mapping[str, Any]) -> Mapping[str, Any]:
    """Follow references and choices to the schema of an object or list."""
    while "$ref" in node or "anyOf" in node:
        node = defs[node["$ref"].rpartition("/")[2]] if "$ref" in node else node["anyOf"][-1]
    return node


def _put(data: dict[str, Any], path: tuple[Step, ...]) -> None:
    """Put an empty mapping at a path, making the mappings above it where they are missing."""
    node: Any = data
    for step in path[:-1]:
        node = node.setdefault(step, {}) if isinstance(node, dict) else node[step]
    node.setdefault(path[-1], {})
