"""Facts as people name them, and what they measure.

``rails.vdd.ripple.peak_to_peak`` is the ripple of vdd, in volts.
"""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from functools import cache
from types import UnionType
from typing import Annotated, Any, Final, Union, get_args, get_origin, get_type_hints

import msgspec

from tidegate.lint.description.model.description import Description
from tidegate.lint.description.model.part import Part
from tidegate.lint.quantity import Dimension, Span

_ENDS: Final = {"min": "least", "max": "greatest", "typ": "typical"}
_ENDS_OF_A_RANGE: Final = {"min": "lower end of the", "max": "upper end of the", "typ": "middle of the"}
_SHORT: Final = {
    "ripple.peak_to_peak": "ripple", "dip.depth": "depth of dips", "dip.at": "level of dips",
    "hysteresis.amount": "hysteresis", "hysteresis.made_by": "making of the hysteresis",
    "hysteresis.feedback": "feedback of the hysteresis",
    "hysteresis.switches": "switches of the hysteresis", "hysteresis.feedback_delay": "delay of the hysteresis",
    "noise.rms": "noise", "noise.bandwidth": "bandwidth of the noise", "trip.rising": "rising level",
    "trip.falling": "falling level", "rising": "rising level", "falling": "falling level",
    "errors": "other errors", "delivered": "delivered range", "guaranteed": "guaranteed range",
    "damage": "damage level", "works": "working range", "works_from": "minimum supply", "works_to": "maximum supply",
    "start_up.by": "start-up circuit", "start_up": "start-up circuit", "ships_with": "shipped code",
    "gated_by": "gating", "armed_by": "arming", "driven_by": "drivers", "guards": "guarded elements",
    "leans_on": "other needs", "made_by": "maker", "after": "place in the order", "rearms_below": "level of re-arming",
    "undecided": "undecided output", "consumes": "consumption", "power_up": "power-up state",
    "watches": "watched rail", "receivers.count": "number of receivers", "is": "kind",
    "controlled_by": "control", "reset_by": "reset", "locked_outside_test": "lock outside test",
    "readable": "read-back", "clocked": "clock", "synchronised": "synchronisation", "self_biased": "self-bias",
    "ready": "time to be ready", "rise": "rise time", "fall": "fall time",
}  # fmt: skip
"""What reads badly when it is read off the path."""
_RANGES: Final = frozenset({"delivered range", "guaranteed range", "working range"})
_TOLD_APART: Final = frozenset({"trip", "needs", "hysteresis"})
"""What is told by its parts, however many of them are named."""
_OF_A_LIST: Final = {"errors": "of the error", "codes": "at code", "switches": "of switch"}


class Named(msgspec.Struct, frozen=True):
    """A fact by its path: its section, the element it is of, what it is of that element, and which end of it."""

    section: str
    owner: str
    steps: tuple[str, ...]
    end: str = ""

    @property
    def head(self) -> str:
        """The first step: ``ripple`` of ``ripple.peak_to_peak``; empty for an element or a section as a whole."""
        return self.steps[0] if self.steps else ""

    @property
    def stem(self) -> str:
        """What it is, without its element and its end: ``ripple``."""
        return _stem(self.steps)

    @property
    def short(self) -> str:
        """What it is, with its end: ``greatest hysteresis``."""
        return short(self.stem, self.end)

    @property
    def text(self) -> str:
        """The whole name: ``greatest hysteresis of sup``."""
        if not self.steps:
            return self.owner or self.section.replace("_", " ")
        return f"{self.short} of {self.owner}" if self.owner else self.short


def short(stem: str, end: str) -> str:
    """What a fact is, with its end: ``greatest hysteresis``, ``lower end of the working range``."""
    words = _ENDS_OF_A_RANGE if stem in _RANGES else _ENDS
    return f"{words[end]} {stem}" if end else stem


@cache
def named(path: str) -> Named:
    """The fact at a path; what is no path of the language is taken as a name."""
    section, *rest = path.split(".")
    if section not in Description.__struct_fields__:
        return Named("", path, ())
    end = rest.pop() if len(rest) > 1 and rest[-1] in _ENDS else ""
    if section == "conditions":
        return Named(section, "", tuple(rest), end)
    if section == "process":
        return Named(section, rest[1] if len(rest) > 2 else "", tuple(rest[2:] if len(rest) > 2 else rest), end)
    return Named(section, rest[0] if rest else "", tuple(rest[1:]), end)


def spoken(path: str) -> str:
    """A fact as people name it."""
    return named(path).text


def names_of(paths: Iterable[str]) -> list[str]:
    """What facts are, without their elements, each once.

    Both ends of one are told together, and several parts of one by what they are parts of.
    """
    names = [name for name in map(named, paths) if name.steps]
    parts: dict[str, set[str]] = {}
    for name in names:
        parts.setdefault(name.head, set()).add(name.stem)
    found: dict[str, dict[str, None]] = {}
    for name in names:
        as_whole = len(parts[name.head]) > 1 and name.head not in _TOLD_APART
        stem, end = (_stem((name.head,)), "") if as_whole else (name.stem, name.end)
        found.setdefault(stem, {})[end] = None
    return [short(stem, next(iter(ends)) if len(ends) == 1 else "") for stem, ends in found.items()]


def spoken_together(paths: Iterable[str]) -> list[str]:
    """Facts as people name them, those of one element together: ``ripple and load step of vdd``."""
    by_owner: dict[tuple[str, str], list[str]] = {}
    for path in paths:
        name = named(path)
        by_owner.setdefault((name.section, name.owner) if name.steps else ("", path), []).append(path)
    found = []
    for (_, owner), several in by_owner.items():
        names = names_of(several)
        found.append(f"{listed(names)} of {owner}" if names and owner else listed(names) if names else spoken(owner))
    return found


def listed(words: Iterable[str], *, last: str = "and") -> str:
    """Words as a sentence lists them: ``a, b and c``; nothing for none."""
    *first, end = list(dict.fromkeys(words)) or [""]
    return f"{', '.join(first)} {last} {end}" if first else end


def _stem(steps: Sequence[str]) -> str:
    bare = [step for step in steps if not step.isdecimal() and step != "needs"]
    if len(bare) > 2 and bare[0] in _OF_A_LIST:
        return f"{_stem(bare[2:])} {_OF_A_LIST[bare[0]]} {bare[1]}"
    return _SHORT.get(".".join(bare)) or " ".join(bare).replace("_", " ")


@cache
def dimension_at(path: str) -> Dimension | None:
    """What the number at a path measures; None where no number of the language stands there.

    What a list of errors leaves out is a voltage at the rail.
    """
    *above, last = path.split(".")
    if last == "errors" and len(above) == 2 and above[0] == "comparators":
        return Dimension.VOLTAGE
    hint: Any = Description
    for step in [*above, last]:
        hint = _plain(hint)
        if isinstance(hint, type) and issubclass(hint, Span):
            return hint.dimension if step == last and step in _ENDS else None
        hint = _below(hint, step)
        if hint is None:
            return None
    hint = _plain(hint)
    if isinstance(hint, type) and issubclass(hint, Span):
        return hint.dimension
    return Dimension.COUNT if hint in (float, int) else None


def _below(hint: Any, step: str) -> Any:
    """The type of what stands at a step below; None where nothing does."""
    if isinstance(hint, type) and issubclass(hint, Part):
        hints = get_type_hints(hint, include_extras=True)
        return hints.get("is_" if step == "is" else step)
    origin = get_origin(hint)
    if origin is dict:
        return get_args(hint)[1]
    if origin is tuple:
        return get_args(hint)[0] if step.isdecimal() else None
    return None


def _plain(hint: Any) -> Any:
    """A type without what it is annotated with, and of several the one that holds something: a part, or a quantity."""
    while get_origin(hint) is Annotated:
        hint = get_args(hint)[0]
    if get_origin(hint) in (Union, UnionType):
        kinds = [_plain(kind) for kind in get_args(hint) if kind is not type(None)]
        return next((kind for kind in kinds if isinstance(kind, type)), kinds[0])
    return hint
