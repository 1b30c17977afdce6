"""Ids: unique in the description, and every name points to something of the right kind.

Which fields name what is read from the schema (``x-names``), so that the schema stays the one truth.
"""

from __future__ import annotations

from collections.abc import Iterator, Mapping, Sequence
from typing import Any, Final

import msgspec

from tidegate.lint.description.place import Fault, Path, dotted
from tidegate.lint.description.schema_tree import Schema, Way, values_below
from tidegate.lint.description.sources import Sources
from tidegate.lint.found import escaped, quoted
from tidegate.lint.limits import MOST_FAULTS

NAMED_SECTIONS: Final = (
    "rails", "domains", "references", "biases", "comparators", "output_stages", "resets", "loads", "bypasses",
    "neighbours",
)  # fmt: skip
"""Sections whose entries share one namespace, in the order in which the supply meets them."""

MOST_SUGGESTIONS: Final = 50
"""How many wrong names of one description are compared with all the right ones."""

_PROCESS_NAMES: Final = {
    ("output_stages", "output", "layer"): "layers",
    ("output_stages", "output", "via"): "vias",
    ("output_stages", "nmos", "family"): "devices",
    ("output_stages", "pmos", "family"): "devices",
    ("comparators", "crossover", "diode"): "diodes",
    ("comparators", "crossover", "device"): "devices",
    ("comparators", "crossover", "resistor"): "resistors",
}

_KINDS: Final = {
    "layers": "layer of the process", "vias": "via of the process", "devices": "transistor family of the process",
    "diodes": "diode of the process", "resistors": "resistor of the process",
}  # fmt: skip

_SINGULAR: Final = {
    "biases": "a bias", "output_stages": "an output stage", "bypasses": "a bypass", "loads": "a load",
    "resets": "a reset net", "rails": "a rail", "domains": "a domain", "references": "a reference",
    "comparators": "a comparator", "neighbours": "a pair of neighbours",
}  # fmt: skip


class NameField(msgspec.Struct, frozen=True):
    """A field that names elements: the way to it and the sections it may point into."""

    way: Way
    sections: tuple[str, ...]
    or_none: bool = False
    """Whether ``none`` says that there is no such element."""


def name_fields(schema: Schema) -> tuple[NameField, ...]:
    """Every field of the schema that names elements; a list of names ends at every one of them."""
    return tuple(
        NameField((*way, "*") if node.get("type") == "array" else way, tuple(node["x-names"]), "x-none" in node)
        for way, node in values_below(schema)
        if "x-names" in node
    )


def unique_lists(schema: Schema) -> tuple[Way, ...]:
    """The way to every list that holds nothing twice."""
    return tuple(way for way, node in values_below(schema) if node.get("uniqueItems"))


def name_faults(data: Mapping[str, Any], fields: Sequence[NameField], sources: Sources) -> list[Fault]:
    """Ids given twice, and names that point nowhere or to the wrong kind of element.

    The data may have other faults; what is no name is left to the schema.
    """
    home, faults = _homes(data, sources)
    advice = _Advice()
    for field in fields:
        choices: list[str] | None = None
        for path, name in _values(data, field.way, ()):
            if name == "none" and field.or_none:
                continue
            if isinstance(name, str) and home.get(name) not in field.sections:
                if len(faults) > MOST_FAULTS:
                    return faults
                if choices is None:
                    choices = [known for known, section in home.items() if section in field.sections]
                problem = _problem(name, field, home)
                missing = "none is described yet" if name in home else "describe it, or correct the name"
                faults.append(Fault(sources.place(path), dotted(path), problem, advice.about(name, choices, missing)))
    for path, name, kind, known in _names_of_parts(data):
        if name not in known:
            if len(faults) > MOST_FAULTS:
                return faults
            problem = f"no {kind} is called {quoted(name)}"
            missing = "describe it, or correct the name"
            faults.append(Fault(sources.place(path), dotted(path), problem, advice.about(name, list(known), missing)))
    return faults


def named_twice(data: Mapping[str, Any], lists: Sequence[Way]) -> bool:
    """Whether any of these lists holds something twice."""
    for way in lists:
        for _, words in _values(data, way, ()):
            if isinstance(words, list) and len(words) > 1 and any(words.count(word) > 1 for word in words):
                return True
    return False


def _homes(data: Mapping[str, Any], sources: Sources) -> tuple[dict[str, str], list[Fault]]:
    """The section of every id, and the ids that are given twice."""
    home: dict[str, str] = {}
    faults: list[Fault] = []
    for section in NAMED_SECTIONS:
        for name in _mapping(data.get(section)):
            if name not in home:
                home[name] = section
                continue
            first = sources.place((home[name], name), key=True)
            problem = f"the id {escaped(name)} is taken (also at {first}, in {home[name]})"
            place = sources.place((section, name), key=True)
            faults.append(Fault(place, section, problem, "ids are unique in the whole description"))
    return home, faults


def _mapping(value: Any) -> Mapping[str, Any]:
    return value if isinstance(value, dict) else {}


def _values(node: Any, way: Way, path: Path) -> Iterator[tuple[Path, Any]]:
    """Every value at the end of a way, with its path."""
    if not way:
        yield path, node
    elif way[0] != "*":
        if isinstance(node, dict) and way[0] in node:
            yield from _values(node[way[0]], way[1:], (*path, way[0]))
    elif isinstance(node, dict):
        for key, child in node.items():
            yield from _values(child, way[1:], (*path, key))
    elif isinstance(node, list):
        for index, child in enumerate(node):
            yield from _values(child, way[1:], (*path, index))


def _problem(name: str, field: NameField, home: Mapping[str, str]) -> str:
    """What is wrong with a name."""
    words = [_SINGULAR[section] for section in field.sections]
    wanted = words[0] if len(words) == 1 else f"{', '.join(words[:-1])} or {words[-1]}"
    if name in home:
        return f"{escaped(name)} is {_SINGULAR[home[name]]} where {wanted} is due"
    thing = wanted.partition(" ")[2] if len(words) == 1 else "element"
    return f"no {thing} is called {quoted(name)}"


class _Advice:
    """What would be right in place of a wrong name; each name is compared once, and not too many of them."""

    def __init__(self) -> None:
        self._given: dict[tuple[str, ...], str] = {}

    def about(self, name: str, choices: Sequence[str], missing: str) -> str:
        """Advice about a name; what is missing where there is no choice at all."""
        if not choices:
            return missing
        key = (name, choices[0], choices[-1])
        if key not in self._given:
            if len(self._given) >= MOST_SUGGESTIONS:
                return "correct the name"
            self._given[key] = _nearest_or_some(name, choices)
        return self._given[key]


def _nearest_or_some(name: str, choices: Sequence[str]) -> str:
    # Loaded here alone: a description without faults does not compare names.
    from tidegate.lint.description.nearest import nearest

    near = nearest(name, choices, most=3)
    if near:
        return f"did you mean {' or '.join(map(escaped, near))}?"
    more = ", ..." if len(choices) > 8 else ""
    return f"there {'is' if len(choices) == 1 else 'are'} {', '.join(map(escaped, choices[:8]))}{more}"


def _names_of_parts(data: Mapping[str, Any]) -> Iterator[tuple[Path, str, str, Mapping[str, Any]]]:
    """Names of layers, vias, transistor families, junctions, resistors and codes, with what they may name."""
    process = _mapping(data.get("process"))
    for (section, *inner), kind in _PROCESS_NAMES.items():
        for path, name in _values(data, (section, "*", *inner), ()):
            if isinstance(name, str):
                yield path, name, _KINDS[kind], _mapping(process.get(kind))
    for path, name in _values(data, ("comparators", "*", "ships_with"), ()):
        if isinstance(name, str):
            yield path, name, "code", _mapping(_mapping(data["comparators"][path[1]]).get("codes"))
