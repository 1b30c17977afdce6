"""``tidegate start``: a starter description, its keys explained, its facts still to be filled in."""

from __future__ import annotations

import argparse
import re
import textwrap
from collections.abc import Iterator, Mapping, Sequence
from difflib import get_close_matches
from typing import Any, Final

import msgspec

from tidegate.lint.commands.streams import Exit, Streams
from tidegate.lint.description.load import description_schema
from tidegate.lint.description.said_none import NONE
from tidegate.lint.found import quoted
from tidegate.lint.limits import MOST_NAME
from tidegate.lint.quantity import Dimension, QuantityError, parse

_ROLES: Final = {
    "power-on": ("power_on", "por"),
    "under": ("under_voltage", "uv"),
    "over": ("over_voltage", "ov"),
    "reference-ready": ("reference_ready", "ready"),
}
_USUAL_RAILS: Final = ("avdd=1.8V",)
_USUAL_WATCHES: Final = ("avdd=power-on,under",)

_NAME: Final = re.compile(r"[A-Za-z_][A-Za-z0-9_-]{0,63}")
_OTHERS: Final = ("aon", "ref_fast", "bias_start")
"""Elements of a starter beside its rails and detectors."""
_LETTERS: Final = "kmunV"
_DIGITS: Final = "+-0123456789.eE"

# Facts that a first sketch can do without; the reference of the language names them all.
_LATER: Final = frozenset(
    {
        "note", "leans_on", "gated_by", "armed_by", "crossover", "codes", "ships_with", "pulse", "made_by",
        "works_from_slope", "switched_by", "reset_by", "current", "crowbar_peak", "power_up", "references",
    }
)  # fmt: skip


class Plan(msgspec.Struct, frozen=True):
    """Rails with their nominal voltages, and the roles of the detectors wanted on each."""

    rails: Mapping[str, str]
    watches: tuple[tuple[str, str], ...]


class PlanError(ValueError):
    """A rail or a detector is asked for in a way that cannot be understood."""


def configure(parser: argparse.ArgumentParser) -> None:
    """Declare the options."""
    parser.add_argument(
        "--rail", action="append", default=[], metavar="NAME=VOLTAGE",
        help="a supply rail and its nominal voltage, such as avdd=1.8V; may be given again",
    )  # fmt: skip
    parser.add_argument(
        "--watch", action="append", default=[], metavar="RAIL=ROLE,...",
        help=f"detectors wanted on a rail: {', '.join(_ROLES)}; may be given again",
    )  # fmt: skip


def run(options: argparse.Namespace, streams: Streams) -> int:
    """Print the starter."""
    try:
        plan = planned(options.rail, options.watch)
    except PlanError as error:
        streams.say(f"tidegate start: {error}")
        return Exit.UNUSABLE
    streams.out.write(starter(plan))
    return Exit.KEPT


def planned(rails: Sequence[str], watches: Sequence[str]) -> Plan:
    """What is asked for; the usual rail and detectors where nothing is.

    Raises: PlanError: saying what cannot be understood and what would be right.
    """
    chosen: dict[str, str] = {}
    for text in rails or _USUAL_RAILS:
        name, equals, voltage = text.partition("=")
        if not equals or not _NAME.fullmatch(name) or name == NONE or name.startswith("x-"):
            raise PlanError(f"--rail {text}: name and nominal voltage are due, such as avdd=1.8V")
        if name in chosen:
            raise PlanError(f"--rail {text}: the rail {name} is given twice")
        try:
            parse(voltage, Dimension.VOLTAGE)
        except QuantityError as error:
            raise PlanError(f"--rail {text}: {error}") from None
        chosen[name] = voltage if " " in voltage else f"{voltage.rstrip(_LETTERS)} {voltage.lstrip(_DIGITS)}"
    wanted: list[tuple[str, str]] = []
    for text in watches or ([] if rails else _USUAL_WATCHES):
        rail, _, roles = text.partition("=")
        if rail not in chosen:
            raise PlanError(f"--watch {text}: no rail is called {rail!r}; give it with --rail {rail or 'avdd'}=1.8V")
        wanted += [(rail, _role(text, role)) for role in roles.split(",")]
    if len(set(wanted)) < len(wanted):
        raise PlanError("--watch: a role is asked for twice on one rail")
    detectors = [f"{_ROLES[role][1]}_{rail}" for rail, role in wanted]
    others = {*_OTHERS, *detectors, *(f"{detector}_out" for detector in detectors)}
    for name in chosen:
        if name in others:
            raise PlanError(f"--rail {name}: the starter has another element of this name; give the rail another one")
    for name in others:
        if len(name) > MOST_NAME:
            raise PlanError(f"{quoted(name)} would be longer than {MOST_NAME} characters; give the rail a shorter name")
    return Plan(chosen, tuple(wanted))


def _role(text: str, role: str) -> str:
    if role in _ROLES:
        return role
    near = get_close_matches(role, _ROLES, 1)
    hint = f"did you mean {near[0]}?" if near else f"roles are {', '.join(_ROLES)}"
    raise PlanError(f"--watch {text}: no role is called {role!r}; {hint}")


def starter(plan: Plan) -> str:
    """The text of a starter: every element that the plan needs, joined up, each fact with what it means."""
    return "\n".join([*_head(), *_sections(plan)]) + "\n"


def _head() -> Iterator[str]:
    about = (
        "A reset and supply-monitor subsystem, to be filled in. A key without a value is a fact that is not given yet: "
        "tidegate review says which judgements wait for it. Write none where there is nothing (hold: none), and a "
        "range as {min: ..., typ: ..., max: ...}. Keys of your own begin with x-."
    )
    yield from (f"# {line}" for line in textwrap.wrap(about, 100))
    yield ""
    yield "subsystem: my supervisor"
    yield "revision: A1"


def _sections(plan: Plan) -> Iterator[str]:
    fill = _Filler(description_schema())
    yield from ("", *fill.part("conditions", "conditions", 0, {"combine": "worst_case", "coverage": "3"}))
    yield from _process()
    yield from ("", "rails:")
    for name, voltage in plan.rails.items():
        yield from fill.element(name, "rail", {"nominal": voltage})
    first = next(iter(plan.rails))
    yield from ("", "domains:", *fill.element("aon", "domain", {"rail": first, "kind": "always_on"}))
    yield from _sources(plan, fill)
    yield from _detectors(plan, fill)
    for section in ("neighbours", "modes", "complete"):
        yield from ("", *fill.section(section))


def _process() -> Iterator[str]:
    yield from (
        "",
        "process:",
        "  # kit: ihp-sg13g2        # ready-made data of an open process kit (or gf180mcu); or your own, here:",
        "  activation_energy:       # of electromigration, such as 0.9 eV",
        "  current_exponent:        # of electromigration, such as 2",
        "  plain_edge:              # slowest edge for a stage without hysteresis, such as 100 ns",
    )


def _sources(plan: Plan, fill: _Filler) -> Iterator[str]:
    if not plan.watches:
        return
    if any(role != "power-on" for _, role in plan.watches):
        yield from ("", "references:", *fill.element("ref_fast", "reference", {"domain": "aon"}))
    yield from ("", "biases:", *fill.element("bias_start", "bias", {"kind": "resistor", "domain": "aon"}))


def _detectors(plan: Plan, fill: _Filler) -> Iterator[str]:
    if not plan.watches:
        return
    names = [f"{_ROLES[role][1]}_{rail}" for rail, role in plan.watches]
    yield from ("", "comparators:")
    for name, (rail, role) in zip(names, plan.watches, strict=True):
        facts = {"role": _ROLES[role][0], "watches": rail, "domain": "aon", "bias": "bias_start", "output": "level"}
        if role != "power-on":
            facts["reference"] = "ref_fast"
        yield from fill.element(name, "comparator", facts)
    yield from ("", "output_stages:")
    for name in names:
        yield from fill.element(f"{name}_out", "output_stage", {"driven_by": f"[{name}]", "domain": "aon"})
    outputs = ", ".join(f"{name}_out" for name in names)
    facts = {"driven_by": f"[{outputs}]", "domain": "aon"}
    if len(names) > 1:
        facts["combine"] = "any_asserts"
    yield from fill.element("reset_out", "output_stage", facts)
    net = {"driven_by": "[reset_out]", "active": "low", "guards": "[logic]", "domain": "aon"}
    yield from ("", "resets:", *fill.element("reset_n", "reset", net))
    needs = ", ".join(f"{{rail: {rail}}}" for rail in plan.rails)
    yield from ("", "loads:", *fill.element("logic", "load", {"needs": f"[{needs}]", "domain": "aon"}))
    override = {"overrides": "reset_out", "forces": "released", "default": "inactive", "domain": "aon"}
    yield from ("", "bypasses:", *fill.element("skip_reset", "bypass", override))


class _Filler:
    """Writes out the keys of an object of the schema, those that are known with their value, the others explained."""

    def __init__(self, schema: Mapping[str, Any]) -> None:
        self._sections: Mapping[str, Any] = schema["properties"]
        self._defs: Mapping[str, Any] = schema["$defs"]

    def section(self, name: str) -> Iterator[str]:
        """A section that is still to be written."""
        yield from self._asked(name, self._sections[name], 0)

    def element(self, name: str, kind: str, facts: Mapping[str, str]) -> Iterator[str]:
        """One element of a section."""
        yield from self.part(name, kind, 1, facts)

    def part(self, name: str, kind: str, depth: int, facts: Mapping[str, str]) -> Iterator[str]:
        """An object under its key."""
        margin = "  " * depth
        yield f"{margin}{name}:"
        for key, child in self._defs[kind]["properties"].items():
            if key in facts:
                yield f"{margin}  {key}: {facts[key]}"
            elif key not in _LATER:
                yield from self._asked(key, child, depth + 1)

    def _asked(self, key: str, child: Mapping[str, Any], depth: int) -> Iterator[str]:
        """A fact to be filled in, with what it means and how it is written."""
        start = f"{'  ' * depth}{key}:"
        told = f"{start.ljust(28)} # {child['description'].rstrip('.')}"
        or_none = child.get("x-none", NONE) != NONE
        behind = child["anyOf"][1] if or_none else child
        inner = behind.get("$ref", "").rpartition("/")[2]
        if "properties" in self._defs.get(inner, {}):
            yield told if or_none else start
            for name, grandchild in self._defs[inner]["properties"].items():
                if name not in _LATER:
                    yield from self._asked(name, grandchild, depth + 1)
            return
        yield f"{told}, such as {_example(child)}"


def _example(child: Mapping[str, Any]) -> str:
    """An example as it is written in YAML, on one line."""
    return _flow(child["examples"][0])


def _flow(value: Any) -> str:
    if isinstance(value, bool):
        return "true" if value else "false"
    if isinstance(value, dict):
        return "{" + ", ".join(f"{key}: {_flow(inner)}" for key, inner in value.items()) + "}"
    if isinstance(value, list):
        return "[" + ", ".join(map(_flow, value)) + "]"
    return str(value)
