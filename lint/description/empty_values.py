"""Keys without a value: a fact that is not given yet, or an element of which nothing is known yet."""

from __future__ import annotations

from typing import Any

from tidegate.lint.description.place import Fault, Path, Place, dotted
from tidegate.lint.description.schema_tree import Schema, object_at
from tidegate.lint.description.sources import Sources
from tidegate.lint.description.unknown_key import unknown_key


def fill_empty(sources: Sources, schema: Schema) -> list[Fault]:
    """Give each empty element an empty mapping in the data; empty facts stay out of it, and so do spans of them.

    Returns: a fault for each empty key that the schema does not know.
    """
    faults: list[Fault] = []
    for file in sources.files:
        for path in file.empty:
            above = object_at(schema, path[:-1])
            key = str(path[-1])
            if above is None or key.startswith("x-"):
                continue
            if key in above.get("properties", {}):
                if "min" in above["properties"]:
                    _drop_empty_span(sources.data, path[:-1])
            elif isinstance(above.get("additionalProperties"), dict):
                entries = _value_at(sources.data, path[:-1])
                if "properties" not in (object_at(schema, path) or {}):
                    place = file.place(path, key=True) or Place(file.name)
                    faults.append(Fault(place, dotted(path), "no value", "give it one, or remove the key"))
                elif isinstance(entries, dict):
                    entries.setdefault(key, {})
            else:
                place = file.place(path, key=True) or Place(file.name)
                faults.append(unknown_key(place, dotted(path[:-1]), key, above))
    return faults


def _drop_empty_span(data: dict[str, Any], path: Path) -> None:
    """Take out a span of which neither least nor typical nor greatest is given yet."""
    above = _value_at(data, path[:-1])
    if isinstance(above, dict) and above.get(path[-1]) == {}:
        del above[path[-1]]


def _value_at(data: Any, path: Path) -> Any:
    """The value at a path; None where nothing stands."""
    for step in path:
        if isinstance(step, int):
            data = data[step] if isinstance(data, list) and step < len(data) else None
        else:
            data = data.get(step) if isinstance(data, dict) else None
    return data
