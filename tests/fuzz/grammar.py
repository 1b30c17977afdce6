"""A grammar of whole descriptions, walked from the schema: every section, element kind, field, name, unit and form.

A value begins at the schema's own example of its field and is scaled, so that rules find something to judge; a name
points to an element that is there, now and then to a wrong one or to none.  The chooser is a ``random.Random``: that of
a seed in a campaign, that of hypothesis (``st.randoms()``) in a test, which can then shrink what it finds.
"""

from __future__ import annotations

import json
import random
from collections.abc import Mapping
from decimal import Decimal
from functools import cache
from pathlib import Path
from typing import Any, Final

from hypothesis import strategies as st

from tidegate.lint.quantity import QuantityError, parse
from tidegate.lint.units import POWERS, SCALED, Dimension

ROOT: Final = Path(__file__).resolve().parents[2]
SCHEMA: Final[Mapping[str, Any]] = json.loads((ROOT / "schema" / "description.schema.json").read_text("utf-8"))
DEFS: Final[Mapping[str, Any]] = SCHEMA["$defs"]
SECTIONS: Final = {
    key: section["additionalProperties"]
    for key, node in SCHEMA["properties"].items()
    if "propertyNames" in (section := node.get("anyOf", (node,))[-1])
}
"""What an entry is, of each section whose entries have names."""
NAMED: Final = tuple(SECTIONS)

_WORDS: Final = {
    "rails": ("avdd", "vcore", "vio", "vbat"), "domains": ("aon", "sw", "core", "analog"),
    "references": ("ref", "ref_b", "vbg"), "biases": ("ib", "ib_b", "start"),
    "comparators": ("por", "uv", "ov", "ready", "uv_b"), "output_stages": ("st", "st_b", "buf", "lvl", "lat"),
    "resets": ("por_n", "rst_b", "rst_c"), "loads": ("cpu", "ram", "pll"), "modes": ("run", "sleep", "test"),
    "bypasses": ("skip", "force", "tmode"), "neighbours": ("near", "near_b"), "scenarios": ("dip_a", "odd_b"),
}  # fmt: skip
_ODD_NAMES: Final = ("off", "no", "y", "null_", "true", "_", "a-b", "N", "e1", "x_", "A" * 64)
_OF_PROCESS: Final = {
    "layer": "layers", "via": "vias", "family": "devices", "device": "devices", "resistor": "resistors",
    "diode": "diodes",
}  # fmt: skip
_TEXTS: Final = ("measured", "house rule", "why: because", "a #1 | `x` <b>", "\u00b5 \u03a9 \u6e2f", "0", "none")
_DATES: Final = ("2024-02-29", "2999-12-31", "2025-02-30", "2026-06-30")
_EXTREME: Final = (0.0, 1e-30, 1e-12, 1e12, 1e30)
_LEFT_OUT: Final = object()
"""What stands for a fact that cannot be given, as there is nothing that it could name."""


@cache
def _rules() -> tuple[str, ...]:
    from tidegate.rules.catalogue import FAMILIES

    return tuple(rule.id for family in FAMILIES for rule in family)


class Writer:
    """Writes one description: how full it is, how far its values stray, how often it does something odd.

    A full one leaves out no fact, no end of a range and no list: only then have the deeper formulas all they need.
    """

    def __init__(self, choose: random.Random, *, full: float, stray: float, odd: float) -> None:
        self.choose = choose
        self.full = full
        self.one_sided = 0.0 if full == 1.0 else 0.5
        self.stray = stray
        self.odd = odd
        self.ids: dict[str, list[str]] = {}
        self.process: dict[str, list[str]] = {}

    def chance(self, probability: float) -> bool:
        return self.choose.random() < probability

    def description(self) -> dict[str, Any]:
        """The data of a whole description."""
        self._name_all()
        data: dict[str, Any] = {}
        for key, node in SCHEMA["properties"].items():
            value = self._section(key, node)
            if value:
                data[key] = value
        if not self.chance(self.odd / 4):
            _without_contradictions(data)
        return data

    def _name_all(self) -> None:
        """Choose the elements and the entries of the process before anything names them."""
        most = 1 + round(3 * self.full)
        for section in NAMED:
            self.ids[section] = self._names(_WORDS[section], self.choose.randint(0, most))
        if not self.ids["rails"] and (self.ids["comparators"] or self.chance(0.9)):
            self.ids["rails"] = ["avdd"]
        if not self.ids["comparators"]:
            self.ids["neighbours"] = []  # they have a victim
        if self.chance(max(0.8, self.full)):
            for key, node in DEFS["process"]["properties"].items():
                if "propertyNames" in node:
                    self.process[key] = self._names(("m1", "m2", "hv"), self.choose.randint(int(self.full), 2))

    def _section(self, key: str, node: Mapping[str, Any]) -> Any:
        """A section, or a fact of the description itself; None where it is left out."""
        if key in self.ids:
            if not self.ids[key] and "x-none" in node and self.chance(0.3):
                return "none"
            return {name: self.value(SECTIONS[key], (key, name)) for name in self.ids[key]}
        if key == "waivers":
            count = self.choose.randint(0, 3) if self.chance(0.3) else 0
            return [self.value(node["items"], (key, 0)) for _ in range(count)]
        if key == "process":
            return {**self.value(node, (key,)), **self._process()} if self.process else None
        return self.value(node, (key,)) if key != "include" and self.chance(self.full) else None

    def _process(self) -> dict[str, Any]:
        """The entries of the process that other facts name."""
        known = DEFS["process"]["properties"]
        return {
            key: {name: self.value(known[key]["additionalProperties"], ("process", key, name)) for name in names}
            for key, names in self.process.items()
        }

    def _names(self, words: tuple[str, ...], count: int) -> list[str]:
        names: list[str] = []
        for word in words[:count]:
            name = self.choose.choice(_ODD_NAMES) if self.chance(self.odd / 4) else word
            taken = {each for section in self.ids.values() for each in section}
            if name not in taken and name not in names:
                names.append(name)
        return names

    def value(self, node: Mapping[str, Any], path: tuple[Any, ...]) -> Any:
        """A value that the schema accepts at a path (unless it is to be odd)."""
        node = resolved(node)
        if "x-names" in node:
            return self._name_value(node, path)
        if "x-quantity" in node:
            return self.quantity(Dimension(node["x-quantity"]), node.get("examples", ()))
        if "anyOf" in node:
            branch = node["anyOf"][1] if self.chance(0.8 + 0.15 * (self.full == 1.0)) else node["anyOf"][0]
            return self.value({**branch, "examples": node.get("examples", ())}, path)
        if "const" in node or "enum" in node:
            return self._choice_of(node.get("enum") or [node["const"]])
        match node.get("type"):
            case "object":
                return self._mapping(node, path)
            case "array":
                least = max(node.get("minItems", 0), self.full == 1.0)
                if path[-1] == "points" and not self.chance(self.odd / 10):
                    return self._points()
                values = [self.value(node["items"], (*path, i)) for i in range(self.choose.randint(least, 3))]
                return list(dict.fromkeys(values)) if node.get("uniqueItems") else values
            case "boolean":
                return self.chance(0.5)
            case "number" | "integer":
                return self._number(node)
            case _:
                return self._text(path)

    def _points(self) -> list[Any]:
        """Points of a waveform in the order of their times; two at one time are a step."""
        at_s = 0.0
        points = []
        for _ in range(self.choose.randint(1, 6)):
            at_s += self.choose.choice((0.0, 1e-6, 1e-4, 1e-3, 0.1)) * self._factor()
            level_v = self.choose.choice((0.0, 0.5, 1.2, 1.8, 3.3)) * self._factor()
            at = f"{at_s:.9g} s"
            points.append({"at": at, "level": self._written(level_v, Dimension.VOLTAGE)})
        return points

    def _choice_of(self, values: list[Any]) -> Any:
        return self.choose.choice(values)

    def _mapping(self, node: Mapping[str, Any], path: tuple[Any, ...]) -> dict[str, Any]:
        if isinstance(node.get("additionalProperties"), dict):
            names = self._names(("a", "b", "c"), self.choose.randint(1, 3)) if path[0] != "process" else []
            return {name: self.value(node["additionalProperties"], (*path, name)) for name in names}
        data: dict[str, Any] = {}
        needed = node.get("required", ())
        for key, child in node.get("properties", {}).items():
            keep = 0.1 if key in ("note", "kit") else self.full
            if key in needed or self.chance(keep):
                value = self.value(child, (*path, key))
                if value is not _LEFT_OUT:
                    data[key] = value
        if data.get("codes") and "ships_with" in node["properties"]:
            data["ships_with"] = self.choose.choice([*data["codes"], *(["z"] if self.chance(self.odd / 4) else [])])
        if self.chance(self.odd / 20):
            data["x-own"] = self.choose.choice(_TEXTS)
        return data

    def _name_value(self, node: Mapping[str, Any], path: tuple[Any, ...]) -> Any:
        sections = node["x-names"]
        known = [name for section in sections for name in self.ids.get(section, ()) if name not in path]
        if node.get("type") == "array":
            count = self.choose.randint(node.get("minItems", 0), 3)
            picked = {self._one_name(known, path) for _ in range(count)} - {_LEFT_OUT}
            return sorted(picked) if picked or not node.get("minItems") else _LEFT_OUT
        if "anyOf" in node and self.chance(0.15):
            return "none"
        name = self._one_name(known, path)
        return "nobody" if name is _LEFT_OUT and path[-1] in ("rail", "watches", "aggressor", "victim") else name

    def _one_name(self, known: list[str], path: tuple[Any, ...]) -> Any:
        if self.chance(self.odd / 100):
            every = [name for names in self.ids.values() for name in names]
            own = [path[1]] if len(path) > 1 and isinstance(path[1], str) else []
            return self.choose.choice([*every, *own, "nobody"])
        return self.choose.choice(known) if known else _LEFT_OUT

    def _number(self, node: Mapping[str, Any]) -> float | int:
        base = float(next(iter(node.get("examples", ())), 1))
        number = base * self._factor()
        number = max(number, node.get("minimum", 0), 1e-3 if "exclusiveMinimum" in node else 0)
        number = min(number, node.get("maximum", 1e15))
        return round(number) or 1 if node.get("type") == "integer" else float(f"{number:.4g}")

    def _factor(self) -> float:
        if self.chance(self.odd / 15):
            return float(self.choose.choice(_EXTREME))
        bell = 2.0 * sum(self.choose.random() for _ in range(3)) - 3.0
        return float(10.0 ** (self.stray * bell))

    def _text(self, path: tuple[Any, ...]) -> Any:
        key = path[-1]
        if path[0] == "waivers":
            return self._waiver_text(str(key))
        if key == "ships_with":
            return _LEFT_OUT  # added where there are codes
        if key in _OF_PROCESS:
            known = self.process.get(_OF_PROCESS[key], [])
            return "m9" if self.chance(self.odd / 40) else self.choose.choice(known) if known else _LEFT_OUT
        return self.choose.choice(_TEXTS)

    def _waiver_text(self, key: str) -> str:
        every = [name for names in self.ids.values() for name in names] or ["nobody"]
        texts = {
            "rule": _rules(), "element": every, "until": _DATES,
            "margin": ("-3 mV", "0 V", "1 %", "-2", "+1e3 V", "- 3 mV", "nothing", "-5 us"),
        }  # fmt: skip
        return str(self.choose.choice(texts.get(key, _TEXTS)))

    def quantity(self, dimension: Dimension, examples: Any) -> Any:
        """A quantity in any of its forms, near one of the examples."""
        examples = list(examples)
        example = self.choose.choice(examples) if examples else dimension.example
        form = self.choose.random()
        if isinstance(example, dict):
            ends = [example[key] for key in ("min", "typ", "max") if key in example]
            example = self.choose.choice(ends) if ends else dimension.example
            form *= 0.7
        try:
            middle = parse(str(example), dimension)
        except QuantityError:
            middle = parse(dimension.example, dimension)
        middle *= self._factor() if dimension is not Dimension.TEMPERATURE else self.choose.uniform(0.8, 1.2)
        if form >= 0.6:
            return self._written(middle, dimension)
        width = self.choose.choice((0.0, 0.01, 0.05, 0.2))
        ends = sorted((middle * (1 - width), middle * (1 + width)))
        parts = {"min": ends[0], "typ": middle, "max": ends[1]}
        kept = self.choose.choice((("min", "max"), ("min", "typ", "max")))
        if self.chance(self.one_sided):
            kept = self.choose.choice((("max",), ("min",), ("typ",), ("typ", "max"), ("min", "typ")))
        unit = self._unit(dimension, middle)
        digits = self._digits()
        data: dict[str, Any] = {key: self._written(parts[key], dimension, unit, digits) for key in kept}
        if self.chance(0.1):
            data["basis"] = self.value({"$ref": "#/$defs/basis"}, ("basis",))
        return data

    def _unit(self, dimension: Dimension, value: float) -> str:
        """A unit in which the value has few digits, or any at all."""
        units = dimension.units
        if self.chance(0.2) or value == 0.0:
            return str(self.choose.choice(units))
        fitting = [unit for unit in units if 0.01 <= abs(value) / _size(dimension, unit) < 1e5]
        return str(self.choose.choice(fitting or units))

    def _digits(self) -> int:
        return int(self.choose.choice((3, 5, 9)))

    def _written(self, value: float, dimension: Dimension, unit: str | None = None, digits: int | None = None) -> str:
        unit = unit or self._unit(dimension, value)
        size = _size(dimension, unit)
        offset = 273.15 if unit == "degC" else 0.0
        text = f"{(value - offset) / size:.{digits or self._digits()}g}"
        if "e" in text and self.chance(0.5) and abs(Decimal(text).adjusted()) < 25:
            text = f"{Decimal(text):f}"
        text = text.replace("-", "") if text.startswith("-") and not dimension.signed else text
        text = f"+{text}" if self.chance(0.02) and not text.startswith("-") else text
        gap = "" if self.chance(0.05) and not unit.startswith("1") else " "
        return f"{text}{gap}{unit}"


def _without_contradictions(data: dict[str, Any]) -> None:
    """Take out the facts that exclude others."""
    data = {section: entries for section, entries in data.items() if entries != "none"}
    for domain in data.get("domains", {}).values():
        if domain.get("kind") == "always_on":
            domain.pop("switched_by", None)
    for mode in data.get("modes", {}).values():
        for name in mode.get("sampled", ()):
            data.get("comparators", {}).get(name, {}).pop("sampling", None)
    for name, pair in list(data.get("neighbours", {}).items()):
        if pair["aggressor"] == pair["victim"]:
            del data["neighbours"][name]
    for scenario in data.get("scenarios", {}).values():
        waveforms = {waveform["rail"]: waveform for waveform in scenario.get("waveforms", ())}
        if waveforms:
            scenario["waveforms"] = list(waveforms.values())
    for load in data.get("loads", {}).values():
        needs = {need["rail"]: need for need in load.get("needs", ())}
        if needs:
            load["needs"] = list(needs.values())


def resolved(node: Mapping[str, Any]) -> Mapping[str, Any]:
    """The node with what it refers to under it: its own examples and names win."""
    while "$ref" in node:
        own = {key: value for key, value in node.items() if key != "$ref"}
        node = {**DEFS[node["$ref"].rpartition("/")[2]], **own}
    return node


def _size(dimension: Dimension, unit: str) -> float:
    if unit in POWERS[dimension]:
        return float(10.0 ** POWERS[dimension][unit])
    factor, divisor, _ = SCALED[dimension][unit]
    return float(factor) / float(divisor)


def description(choose: random.Random) -> dict[str, Any]:
    """A description, from tiny to rich."""
    full = choose.choice((0.15, 0.5, 0.8, 0.95, 1.0, 1.0))
    stray = choose.choice((0.02, 0.1, 0.3, 1.0))
    odd = choose.choice((0.0, 0.0, 0.1, 0.5))
    return Writer(choose, full=full, stray=stray, odd=odd).description()


def descriptions() -> st.SearchStrategy[dict[str, Any]]:
    """The same as a strategy: what hypothesis finds, it shrinks."""
    return st.builds(description, st.randoms(use_true_random=False))


def settings(choose: random.Random) -> dict[str, Any]:
    """A settings file that names rules and families that are there."""
    rules = _rules()
    names = [*rules, *{rule.partition("/")[0] for rule in rules}]
    writer = Writer(choose, full=0.7, stray=0.3, odd=0.0)

    def some(most: int) -> list[str]:
        return choose.sample(names, choose.randint(0, most))

    data = {
        "levels": {name: choose.choice(("error", "warning", "note")) for name in some(4)},
        "least_margins": {name: choose.choice(("1 %", "0 %", "100 ppm", "30 %")) for name in some(3)},
        "leave_out": some(4),
        "fail_at": choose.choice(("error", "warning", "note")),
        "also": choose.sample(("open", "review"), choose.randint(0, 2)),
        "conditions": writer.value(DEFS["conditions"], ("conditions",)),
    }
    return {key: value for key, value in data.items() if choose.random() < 0.7}
