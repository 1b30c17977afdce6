"""The schema, looked up by the path of a value, and beside the data."""

from __future__ import annotations

from collections.abc import Iterator, Mapping, Sequence
from typing import Any, TypeAlias

from tidegate.lint.description.place import Step

Schema: TypeAlias = "Mapping[str, Any]"
Way: TypeAlias = "tuple[str, ...]"
"""The keys on the way to a value; ``*`` stands for every entry of a section or list."""


def values_below(schema: Schema, node: Schema | None = None, way: Way = ()) -> Iterator[tuple[Way, Schema]]:
    """Every value of the data, by the way to it, with each schema that it meets there; a quantity is one value."""
    node = schema if node is None else node
    yield way, node
    if "$ref" in node:
        yield from values_below(schema, schema["$defs"][node["$ref"].rpartition("/")[2]], way)
    if "x-quantity" in node:
        return
    for branch in node.get("anyOf", ()):
        yield from values_below(schema, branch, way)
    for key, child in node.get("properties", {}).items():
        yield from values_below(schema, child, (*way, key))
    for inside in ("additionalProperties", "items"):
        if isinstance(node.get(inside), dict):
            yield from values_below(schema, node[inside], (*way, "*"))


def object_at(schema: Schema, path: Sequence[Step]) -> Schema | None:
    """The schema of the mapping at a path; None where the schema knows none there."""
    node: Schema | None = schema
    for step in path:
        node = child_of(node, step) if node is not None else None
        node = _object_behind(node, schema["$defs"]) if node is not None else None
    return node


def child_of(node: Schema, step: Step) -> Schema | None:
    """The schema of one value of a mapping or list, references not followed."""
    child = node.get("items") if isinstance(step, int) else node.get("properties", {}).get(step)
    if child is None and isinstance(step, str):
        child = node.get("additionalProperties")
    return child if isinstance(child, dict) else None


def without_own_keys(data: Any, schema: Schema, node: Schema | None = None) -> Any:
    """The data without the keys of the author's own (``x-``), wherever the schema lets such keys stand."""
    node = _object_behind(schema if node is None else node, schema["$defs"])
    if isinstance(data, list) and "items" in node:
        return [without_own_keys(item, schema, node["items"]) for item in data]
    if not isinstance(data, dict):
        return data
    kept = {}
    for key, value in data.items():
        child = child_of(node, key)
        if child is not None:
            kept[key] = without_own_keys(value, schema, child)
        elif not (key.startswith("x-") and "patternProperties" in node):
            kept[key] = value
    return kept


def example_at(schema: Schema, path: Sequence[Step]) -> Any:
    """An example of the value at a path; None where the schema gives none."""
    above = object_at(schema, path[:-1]) if path else None
    for node in _with_references(child_of(above, path[-1]) if above else None, schema["$defs"]):
        if node.get("examples"):
            return node["examples"][0]
    if len(path) > 1:  # an entry of a list or of a section, whose example holds one
        around = example_at(schema, path[:-1])
        if isinstance(around, list) and around:
            return around[0]
        if isinstance(around, dict) and around and above and path[-1] not in above.get("properties", {}):
            return next(iter(around.values()))
    return None


def _with_references(node: Schema | None, defs: Schema) -> Iterator[Schema]:
    while node is not None:
        yield node
        node = defs[node["$ref"].rpartition("/")[2]] if "$ref" in node else None


def _object_behind(node: Schema, defs: Schema) -> Schema:
    """Follow references and choices to the schema of a mapping or list."""
    while "$ref" in node or "anyOf" in node:
        node = defs[node["$ref"].rpartition("/")[2]] if "$ref" in node else node["anyOf"][-1]
    return node
