"""A key that the schema does not know, and the known one that was perhaps meant."""

from __future__ import annotations

import re
from typing import Final

from tidegate.lint.description.place import Fault, Place
from tidegate.lint.description.schema_tree import Schema
from tidegate.lint.found import quoted


def unknown_key(place: Place, path: str, key: str, above: Schema) -> Fault:
    """The fault of a key in a mapping with this schema."""
    # Loaded here alone: a description without faults does not compare keys.
    from tidegate.lint.description.nearest import nearest

    known = list(above.get("properties", {}))
    near = [each for each in nearest(key, known) if _is_near(key, each)]
    if re.fullmatch(r"[0-9]+(?: ?[A-Za-z%/]+)?", key) and not near:
        advice = "write a point in a decimal number: a comma parts entries"
    else:
        advice = f"did you mean {near[0]}?" if near else f"known here: {', '.join(known)}; your own keys begin with x-"
    return Fault(place, path, f"unknown key {quoted(key)}", advice)


def _is_near(key: str, known: str) -> bool:
    """Whether a short key may be a known one mistyped: it shares its first letter, or most of its letters."""
    word = key.casefold()
    return len(key) > _SHORT or known in word or word[:1] == known[:1] or sorted(word) == sorted(known)


_SHORT: Final = 6
