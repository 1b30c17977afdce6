"""Ids: unique in the description, and every name points to something of the right kind.

Which fields name what is read from the schema (``x-names``), so that the schema stays the one truth.
"""

from __future__ import annotations

from collections.abc import Iterator, Mapping, Sequence
from dataclasses import dataclass
from difflib import get_close_matches
from typing import Any, Final

from tidegate.lint.description.place import Fault
from tidegate.lint.description.sources import Sources
from tidegate.lint.description.yaml_text import Step, dotted

NAMED_SECTIONS: Final = (
    "rails", "domains", "references", "biases", "comparators", "output_stages", "resets", "loads", "bypasses",
    "neighbours",
)  # fmt: skip
"""Sections whose entries share one namespace."""

_PROCESS_NAMES: Final = {
    ("output_stages", "output", "layer"): "layers",
    ("output_stages", "output", "via"): "vias",
    ("output_stages", "nmos", "family"): "devices",
    ("output_stages", "pmos", "family"): "devices",
    ("comparators", "crossover", "diode"): "diodes",
    ("comparators", "crossover", "device"): "devices",
}


@dataclass(frozen=True, slots=True)
class NameField:
    """A field that names elements: the way to it (``*`` for every entry) and the sections it may point into."""

    way: tuple[str, ...]
    sections: frozenset[str]
    wanted: str


def name_fields(schema: Mapping[str, Any]) -> tuple[NameField, ...]:
    """Every field of the schema that names elements."""
    return tuple(_fields_below(schema, schema["$defs"], ()))


def _fields_below(node: Mapping[str, Any], defs: Mapping[str, Any], way: tuple[str, ...]) -> Iterator[NameField]:
    if "x-names" in node:
        sections = node["x-names"]
        yield NameField((*way, "*") if node.get("type") == "array" else way, frozenset(sections), _wanted(sections))
        return
    if "$ref" in node:
        yield from _fields_below(defs[node["$ref"].rpartition("/")[2]], defs, way)
    for branch in node.get("anyOf", ()):
        yield from _fields_below(branch, defs, way)
    for key, child in node.get("properties", {}).items():
        yield from _fields_below(child, defs, (*way, key))
    for inside in ("additionalProperties", "items"):
        if isinstance(node.get(inside), dict):
            yield from _fields_below(node[inside], defs, (*way, "*"))


_SINGULAR: Final = {
    "biases": "a bias", "output_stages": "an output stage", "bypasses": "a bypass", "loads": "a load",
    "resets": "a reset net", "rails": "a rail", "domains": "a domain", "references": "a reference",
    "comparators": "a comparator", "neighbours": "a pair of neighbours",
}  # fmt: skip


def _wanted(sections: Sequence[str]) -> str:
    words = [_SINGULAR[section] for section in sections]
    return words[0] if len(words) == 1 else ", ".join(words[:-1]) + " or " + words[-1]


def name_faults(data: Mapping[str, Any], fields: Sequence[NameField], sources: Sources) -> list[Fault]:
    """Ids given twice, and names that point nowhere or to the wrong kind of element."""
    home: dict[str, str] = {}
    faults: list[Fault] = []
    for section in NAMED_SECTIONS:
        for name in data.get(section, ()):
            if name in home:
                first = sources.place((home[name], name), key=True)
                problem = f"the id {name} is taken (first at {first}, in {home[name]})"
                place = sources.place((section, name), key=True)
                faults.append(Fault(place, section, problem, "ids are unique in the whole description"))
            else:
                home[name] = section
    for field in fields:
        for path, name in _values(data, field.way, ()):
            if home.get(name) not in field.sections and isinstance(name, str):
                faults.append(_dangling(name, field, home, sources, path))
    faults.extend(_process_faults(data, sources))
    return faults


def _values(node: Any, way: tuple[str, ...], path: tuple[Step, ...]) -> Iterator[tuple[tuple[Step, ...], Any]]:
    if not way:
        yield path, node
    elif way[0] != "*":
        if isinstance(node, dict) and way[0] in node:
            yield from _values(node[way[0]], way[1:], (*path, way[0]))
    elif isinstance(node, dict):
        for key, child in node.items():
            if not key.startswith("x-"):
                yield from _values(child, way[1:], (*path, key))
    elif isinstance(node, list):
        for index, child in enumerate(node):
            yield from _values(child, way[1:], (*path, index))


def _dangling(name: str, field: NameField, home: Mapping[str, str], sources: Sources, path: tuple[Step, ...]) -> Fault:
    choices = [known for known, section in home.items() if section in field.sections]
    if name in home:
        problem = f"{name} is {_SINGULAR[home[name]]}; {field.wanted} is due"
    else:
        problem = f"no element is called {name!r}"
    return Fault(sources.place(path), dotted(path), problem, _suggestion(name, choices, field.wanted))


def _suggestion(name: str, choices: Sequence[str], wanted: str) -> str:
    near = get_close_matches(name, choices, 3, 0.5)
    if near:
        return f"did you mean {' or '.join(near)}?"
    if choices:
        more = ", ..." if len(choices) > 8 else ""
        return f"described here: {', '.join(choices[:8])}{more}"
    return f"describe {wanted} of that name"


def _process_faults(data: Mapping[str, Any], sources: Sources) -> Iterator[Fault]:
    """Names of layers, vias, transistor families and junctions."""
    process = data.get("process", {})
    for (section, *inner), kind in _PROCESS_NAMES.items():
        known = process.get(kind, {})
        for path, name in _values(data, (section, "*", *inner), ()):
            if name not in known:
                near = get_close_matches(name, known, 1)
                advice = f"did you mean {near[0]}?" if near else f"described: {', '.join(known) or 'none'}"
                yield Fault(sources.place(path), dotted(path), f"process.{kind} has no {name!r}", advice)
