"""What a change of knowledge may do to judgements: the laws of the design, held against two reviews.

The laws (design of the project; inclusion is that of interval arithmetic, IEEE 1788-2015, and of Kleene's logic):
knowing more gives a margin inside the former interval, a pass stays a pass and a failure a failure; knowing less
widens it, and no requirement vanishes because a fact did.
"""

from __future__ import annotations

import datetime
import math
import re
from collections.abc import Iterator, Mapping
from functools import cache
from pathlib import Path
from types import UnionType
from typing import Annotated, Any, Final, NamedTuple, Union, get_args, get_origin, get_type_hints

from tidegate.lint.description.load import Loaded, description_of, load
from tidegate.lint.description.model.description import Description
from tidegate.lint.description.model.part import Part, use_of
from tidegate.lint.engine import Catalogue, review
from tidegate.lint.graph.dependency import SECTIONS
from tidegate.lint.judgement import Judgement, Kind
from tidegate.rules.catalogue import FAMILIES

EXAMPLES: Final = Path(__file__).parents[2] / "examples"
PUBLISHED: Final = Path(__file__).parents[1] / "published"
TODAY: Final = datetime.date(2026, 1, 1)
_SLACK: Final = 1e-9

Step = str | int
Way = tuple[Step, ...]

_MOVES_TOGETHER: Final = frozenset({"tracked", "tracks", "works_from_slope", "reference", "references", "crossover"})
"""Facts that say with what a number moves: they may show that two extremes do not meet."""


class Margin(NamedTuple):
    """What is known of a margin."""

    sure: float
    best: float


@cache
def catalogue() -> Catalogue:
    """Every rule."""
    return Catalogue(FAMILIES)


@cache
def loaded(path: Path) -> Loaded:
    """A description with its includes."""
    return load(path)


def judged(data: Mapping[str, Any], like: Loaded) -> dict[tuple[str, str], Judgement] | None:
    """What all rules say about data, by rule and subject; None where they are no description."""
    description = description_of(data)
    if description is None:
        return None
    result = review(Loaded(description, like.sources), catalogue(), today=TODAY)
    assert result.faults == (), [f"{fault.rule} on {fault.subject}: {fault.error}" for fault in result.faults]
    return {(one.rule, one.subject): one for one in result.judgements if one.rule != "waiver/still_right"}


def ways(data: Any, way: Way = ()) -> Iterator[Way]:
    """The way to every key below some data; sections, elements and members of lists are other circuits."""
    entries = data.items() if isinstance(data, dict) else enumerate(data) if isinstance(data, list) else ()
    for key, value in entries:
        here = (*way, key)
        element = len(here) == 2 and here[0] in SECTIONS
        if len(here) > 1 and not element and not isinstance(key, int) and here[0] not in _NO_FACTS:
            yield here
        if here[0] not in _NO_FACTS:
            yield from ways(value, here)


_NO_FACTS: Final = frozenset({"waivers", "include", "x-", "note"})


def without(data: Any, way: Way) -> Any:
    """The data with one key left out; all else is the same object."""
    step, *rest = way
    if isinstance(data, list):
        assert isinstance(step, int)
        return [*data[:step], without(data[step], tuple(rest)), *data[step + 1 :]] if rest else [
            *data[:step], *data[step + 1 :]
        ]  # fmt: skip
    if not rest:
        return {key: value for key, value in data.items() if key != step}
    return {**data, step: without(data[step], tuple(rest))}


def margin_of(judgement: Judgement | None) -> Margin | None:
    """The interval of a margin; None where there is no number."""
    if judgement is None or judgement.measure is None:
        return None
    return Margin(judgement.measure.sure_margin, judgement.measure.best_margin)


def status(judgement: Judgement | None) -> Kind:
    """What is said; a failure that is told under another one is still a failure."""
    if judgement is None:
        return Kind.NOT_APPLICABLE
    return Kind.FAIL if judgement.under else judgement.kind


def broken(more: Judgement | None, less: Judgement | None, *, excused: bool) -> str:
    """Which law two judgements break, of which one knows more than the other; empty where none.

    ``excused`` is what a promise, or what moves together, may do: turn the failure of who knows less into a pass.
    """
    known, unknown = status(more), status(less)
    if unknown is Kind.PASS and known not in (Kind.PASS, Kind.NOT_APPLICABLE):
        return f"pass becomes {known.value} once more is known"
    if unknown is Kind.FAIL and known is not Kind.FAIL and not excused and not _by_policy(less):
        return f"fail becomes {known.value} once more is known"
    if unknown is Kind.NOT_APPLICABLE and known in (Kind.FAIL, Kind.REVIEW, Kind.OPEN):
        return f"{known.value} vanishes where less is known"
    now, before = margin_of(less), margin_of(more)
    if now is None or before is None or excused or (unknown is not Kind.OPEN and known is Kind.NOT_APPLICABLE):
        return ""
    slack = _SLACK * max((abs(end) for end in (*now, *before) if math.isfinite(end)), default=0.0)
    if now.sure > before.sure + slack:
        return f"the sure end falls from {now.sure} to {before.sure} once more is known"
    if now.best < before.best - slack:
        return f"the best end rises from {now.best} to {before.best} once more is known"
    return ""


def _by_policy(judgement: Judgement | None) -> bool:
    """Whether a failure is one of extreme with extreme alone, which are not known to meet."""
    margin = margin_of(judgement)
    return margin is not None and margin.best >= 0.0


def is_excused(way: Way) -> bool:
    """Whether a key is a promise, or says with what a number moves."""
    return any(step in _MOVES_TOGETHER for step in way) or bool({"promise", "policy"} & set(_uses(way)))


def is_policy(way: Way) -> bool:
    """Whether a key says how a house judges, and not what is."""
    return way[0] == "conditions" and way[-1] in ("combine", "coverage", "false_trips")


def _field(step: Step) -> str:
    return "is_" if step == "is" else str(step)


def _has(part: type[Part], step: Step) -> bool:
    return _field(step) in part.__struct_fields__


def _uses(way: Way) -> Iterator[str]:
    """What each field on a way is for, by the model's marks."""
    part: Any = Description
    for step in way:
        if isinstance(part, type) and issubclass(part, Part):
            if not _has(part, step):
                return
            yield use_of(part, _field(step))
            part = _plain(get_type_hints(part)[_field(step)])
        elif get_origin(part) in (dict, tuple):
            part = _plain(get_args(part)[-1] if get_origin(part) is dict else get_args(part)[0])
        else:
            return


def _plain(hint: Any) -> Any:
    """A type hint without what may stand in its place: the part, or the collection, that it is of."""
    while get_origin(hint) in (Union, UnionType, Annotated):
        kinds = [kind for kind in get_args(hint) if kind is not type(None)]
        hint = kinds[0]
    return hint


def is_ability(way: Way) -> bool:
    """Whether a key is what a part stands or works with: a narrower one is a worse part."""
    return "ability" in _uses(way)


def narrowed(data: Mapping[str, Any], way: Way) -> Iterator[dict[str, Any]]:
    """The data with a range that has both ends made narrower at either end, by a quarter."""
    value: Any = data
    for step in way:
        value = value[step]
    if not isinstance(value, dict) or not {"min", "max"} <= value.keys() or way[0] == "process":
        return
    ends = [_number(value[key]) for key in ("min", "max")]
    if None in ends or ends[0][1] != ends[1][1] or "typ" in value:  # type: ignore[index]
        return
    (low, unit), (high, _) = ends  # type: ignore[misc]
    for key, end in (("min", low + (high - low) / 4), ("max", high - (high - low) / 4)):
        yield _with(data, way, {**value, key: f"{end:.12g} {unit}"})


def _number(text: Any) -> tuple[float, str] | None:
    """A number and its unit."""
    found = re.fullmatch(r"([+-]?[0-9.]+(?:[eE][+-]?[0-9]+)?) ?(.+)", text) if isinstance(text, str) else None
    return None if found is None else (float(found[1]), found[2])


def _with(data: Any, way: Way, value: Any) -> Any:
    """The data with another value at the end of a way."""
    step, *rest = way
    changed = _with(data[step], tuple(rest), value) if rest else value
    if isinstance(data, list):
        assert isinstance(step, int)
        return [*data[:step], changed, *data[step + 1 :]]
    return {**data, step: changed}


def renamed(data: Mapping[str, Any]) -> dict[str, Any]:
    """The data with another id for every element; process data keep theirs."""
    ids = {name for section in (*SECTIONS, "modes", "scenarios") for name in data.get(section, {})}

    def other(value: Any) -> Any:
        if isinstance(value, dict):
            return {f"{key}_beside" if key in ids else key: other(inner) for key, inner in value.items()}
        if isinstance(value, list):
            return [other(inner) for inner in value]
        return f"{value}_beside" if isinstance(value, str) and value in ids else value

    return {key: other(value) for key, value in data.items() if key not in ("waivers", "process")}


def reordered(data: Any, depth: int = 0) -> Any:
    """The data with the sections, and the elements of each, in the opposite order, and so the ids in each list."""
    if isinstance(data, dict):
        items = [(key, reordered(value, depth + 1)) for key, value in data.items()]
        return dict(reversed(items)) if depth < 2 else dict(items)
    if isinstance(data, list) and all(isinstance(each, str) for each in data):
        return list(reversed(data))
    return [reordered(each, depth + 1) for each in data] if isinstance(data, list) else data
