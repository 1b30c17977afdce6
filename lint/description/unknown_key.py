"""A key that the schema does not know, and the known one that was perhaps meant."""

from __future__ import annotations

from tidegate.lint.description.place import Fault, Place
from tidegate.lint.description.schema_tree import Schema
from tidegate.lint.found import quoted


def unknown_key(place: Place, path: str, key: str, above: Schema) -> Fault:
    """The fault of a key in a mapping with this schema."""
    # Loaded here alone: a description without faults does not compare keys.
    from tidegate.lint.description.nearest import nearest

    known = list(above.get("properties", {}))
    near = nearest(key, known)
    if key[:1].isdecimal() and not near:
        advice = "write a point in a decimal number: a comma parts entries"
    else:
        advice = f"did you mean {near[0]}?" if near else f"known here: {', '.join(known)}; your own keys begin with x-"
    return Fault(place, path, f"unknown key {quoted(key)}", advice)
