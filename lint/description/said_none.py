"""``none`` as a value: what is said not to be there, which is more than not given.

Where it may stand, and what the description then reads as, stands in the schema (``x-none``): no ripple is one of 0 V.
Where the word itself is what rules ask for, as with no start-up circuit, ``x-none`` is ``none`` and nothing changes.
A section that is said to have no entries is complete.
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from typing import Any, Final

from tidegate.lint.description.schema_tree import Schema, Way, values_below

NONE: Final = "none"

NoneFields = Mapping[Way, Mapping[str, Any]]
"""By the way to a mapping of the description: its keys of which ``none`` can be said, with what it reads as."""


def none_fields(schema: Schema) -> NoneFields:
    """Every key of the schema that ``none`` is exchanged for something at."""
    fields: dict[Way, dict[str, Any]] = {}
    for way, node in values_below(schema):
        if node.get("x-none", NONE) != NONE:
            fields.setdefault(way[:-1], {})[way[-1]] = node["x-none"]
    return fields


def without_none(data: Mapping[str, Any], fields: NoneFields) -> dict[str, Any]:
    """The data as they read where ``none`` is said; what is changed is copied, and all else stays the same object."""
    read: dict[str, Any] = dict(data)
    none = [key for key in fields.get((), ()) if data.get(key) == NONE]
    for way, means in fields.items():
        read = _exchanged(read, way, means)
    complete = read.get("complete", [])
    if none and isinstance(complete, list):
        read["complete"] = [*complete, *(section for section in none if section not in complete)]
    return read


def _exchanged(node: Any, way: Way, means: Mapping[str, Any]) -> Any:
    """A value with ``none`` exchanged in every mapping at the end of a way."""
    if not isinstance(node, dict):
        return node
    if not way:
        said = [key for key in means if node.get(key) == NONE] if NONE in node.values() else ()
        return {**node, **{key: means[key] for key in said}} if said else node
    steps: Sequence[Any] = tuple(node) if way[0] == "*" else (way[0],) if way[0] in node else ()
    changed = {}
    for step in steps:
        inside = _exchanged(node[step], way[1:], means)
        if inside is not node[step]:
            changed[step] = inside
    return {**node, **changed} if changed else node


def can_be_none(above: Schema | None) -> Sequence[str]:
    """The keys of a mapping with this schema of which ``none`` can be said."""
    return [key for key, child in (above or {}).get("properties", {}).items() if "x-none" in child]
