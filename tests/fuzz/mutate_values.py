"""Mutations of single values of a description: quantities, names, flags, words, lists.

Some can only be wrong, whatever else the description says (a unit of another dimension, ends of a range the wrong way
round, a name of nothing): these must be refused.
"""

from __future__ import annotations

import copy
import random
import re
from collections.abc import Mapping
from typing import Any, Final

from tests.fuzz.grammar import SCHEMA, resolved
from tests.fuzz.mutate_nodes import Path, at, paths
from tidegate.lint.units import Dimension

_PARTS: Final = ("min", "typ", "max")


def schema_at(path: Path) -> Mapping[str, Any] | None:
    """The schema of the value at a path; None where the language has none."""
    node: Mapping[str, Any] = SCHEMA
    for step in path:
        node = resolved(node)
        if "anyOf" in node:
            node = resolved(node["anyOf"][-1])
        child = node.get("items") if isinstance(step, int) else node.get("properties", {}).get(step)
        child = child if child is not None else node.get("additionalProperties")
        if not isinstance(child, dict):
            return None
        node = child
    return resolved(node)


def dimension_at(path: Path) -> Dimension | None:
    """The dimension of the text at a path; None where it is no quantity, or a whole span."""
    node = schema_at(path[:-1] if path[-1] in _PARTS else path)
    if node is not None and "x-none" in node:
        node = resolved(node["anyOf"][-1])
    return Dimension(node["x-quantity"]) if node is not None and "x-quantity" in node else None


def mutated(choose: random.Random, data: dict[str, Any]) -> tuple[dict[str, Any], str]:
    """A copy after one to four mutations, and why it must be refused (empty where it may be good)."""
    data = copy.deepcopy(data)
    wrong: list[tuple[Path, Any, str]] = []
    for _ in range(choose.choice((1, 1, 2, 4))):
        known = [path for path in paths(data) if not any(str(step).startswith("x-") for step in path)]
        path = choose.choice(known)
        reason = _mutate(choose, data, path, at(data, path))
        if reason:
            wrong.append((path, at(data, path), reason))
    still = {path: at(data, path) for path in paths(data)}
    return data, next((reason for path, value, reason in wrong if still.get(path) == value), "")


def _mutate(choose: random.Random, data: Any, path: Path, value: Any) -> str:
    node = schema_at(path)
    dimension = dimension_at(path)
    put = at(data, path[:-1])
    if isinstance(value, dict) and dimension is not None:
        return _span(choose, value)
    if isinstance(value, str) and dimension is not None:
        put[path[-1]], reason = _quantity(choose, value, dimension)
        return reason
    if isinstance(value, bool):
        put[path[-1]] = not value
    elif isinstance(value, int | float):
        put[path[-1]] = choose.choice((0, 0.5 * value, 2 * value, 10 * value, 1e15, -value, 1e-9))
    elif isinstance(value, list):
        put[path[-1]] = choose.choice(([], value[:1], value[::-1], value + value, value[1:]))
    elif node is not None and "enum" in node:
        put[path[-1]] = choose.choice(node["enum"])
    elif any(each is not None and "x-names" in each for each in (node, schema_at(path[:-1]))) and isinstance(
        value, str
    ):
        put[path[-1]] = _name(choose, data, path)
        return "a name of nothing" if put[path[-1]] == "nobody_at_all" else ""
    return ""


def _name(choose: random.Random, data: Any, path: Path) -> str:
    every = [name for section in data.values() if isinstance(section, dict) for name in section]
    return str(
        choose.choice(
            (choose.choice(every), choose.choice(every), path[min(1, len(path) - 1)], "none", "nobody_at_all")
        )
    )


def _span(choose: random.Random, span: dict[str, Any]) -> str:
    ends = [span.get("min"), span.get("max")]
    if not all(isinstance(end, str) for end in ends):
        return ""
    match choose.randint(0, 2):
        case 0:
            span["min"], span["max"] = ends[1], ends[0]
        case 1:
            span["max"] = span["min"]
        case _:
            span.pop(choose.choice(("min", "max")))
    return ""


def _quantity(choose: random.Random, text: str, dimension: Dimension) -> tuple[str, str]:
    match = re.match(r"([+-]?[0-9.]+(?:[eE][+-]?[0-9]+)?) ?(.*)", text)
    if match is None:
        return text, ""
    number, unit = match.groups()
    other = choose.choice([each for each in Dimension if each is not dimension and each.units])
    alien = choose.choice([each for each in other.units if each not in dimension.units])
    return choose.choice(
        (
            (f"0 {unit}", ""),
            (f"{float(number) * choose.choice((0.1, 0.5, 0.9, 1.1, 2, 10, 1000)):.12g} {unit}", ""),
            (f"{float(number) * choose.choice((1e-9, 1e-30, 1e9, 1e30, 1e250)):.12g} {unit}", ""),
            (f"{number} {choose.choice(dimension.units)}", ""),
            (f"{number}e{choose.choice((-400, 400, 99999999))} {unit}".replace("ee", "e"), ""),
            (f"-{number.lstrip('+-')} {unit}", "" if dimension.signed else "a magnitude below zero"),
            (f"{number} {alien}", "a unit of another dimension"),
            (number, "a number without its unit"),
            (choose.choice((f"nan {unit}", f"inf {unit}", f".inf {unit}", "nan")), "not a number"),
        )
    )
