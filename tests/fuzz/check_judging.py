"""What judging must keep: no rule fails itself, numbers agree with what is said, nothing known is lacking."""

from __future__ import annotations

import datetime
import json
import math
import random
import re
from collections import Counter
from collections.abc import Iterator
from pathlib import Path
from typing import Any, Final, get_args

from tests.fuzz.check_loading import given_at
from tests.fuzz.trouble import Trouble, no_constant, no_number
from tidegate.lint.description.load import Loaded, load
from tidegate.lint.description.model.description import CompleteSection
from tidegate.lint.engine import Catalogue, Review, review
from tidegate.lint.judgement import Judgement, Kind
from tidegate.lint.reports.json_report import json_text, review_entry
from tidegate.lint.settings import Settings
from tidegate.rules.catalogue import FAMILIES

CATALOGUE: Final = Catalogue(FAMILIES)
_LISTS: Final = frozenset(("errors", *get_args(CompleteSection)))
"""What holds as many entries as are described, and perhaps others."""
TODAY: Final = datetime.date(2026, 1, 1)


def judged(loaded: Loaded, given: str, found: list[Trouble], settings: Settings | None = None) -> Review:
    """The review of a description; what is wrong with it goes to ``found``."""
    result = review(loaded, CATALOGUE, today=TODAY, settings=settings)
    for fault in result.faults:
        found.append(Trouble("rule fault", fault.rule, f"{fault.error}\non {fault.subject}"))
    seen = Counter((judgement.rule, judgement.subject) for judgement in result.judgements)
    for (rule, subject), times in seen.items():
        if times > 1:
            found.append(Trouble("said twice", rule, f"of one element\n{subject}"))
    for judgement in result.judgements:
        for problem in _problems(judgement, result, given, own=settings is None):
            found.append(Trouble("odd judgement", judgement.rule, f"{problem}\n{judgement}"))
    return result


def _problems(judgement: Judgement, result: Review, given: str, *, own: bool) -> Iterator[str]:
    yield from _wrong_numbers(judgement, own=own)
    yield from _wrongly_missing(judgement, result)
    yield from _wrong_texts(judgement, given)
    if result.place(judgement).line < 1 and judgement.rule != "waiver/still_right":
        yield "no place"


def _wrong_numbers(judgement: Judgement, *, own: bool) -> Iterator[str]:
    """Numbers that are none, or do not agree with the kind; under settings, a margin may be asked for beside them."""
    measure = judgement.measure
    if measure is None:
        return
    numbers = (measure.need, measure.have)
    holds = measure.margin >= 0.0
    if any(math.isnan(number) for number in numbers):
        yield "a number that is none"
    if holds != measure.holds:
        yield "margin and verdict differ"
    if own and judgement.kind in (Kind.PASS, Kind.FAIL) and holds != (judgement.kind is Kind.PASS):
        yield f"says {judgement.kind.value} against its number"
    if all(map(math.isfinite, numbers)) and not math.isfinite(measure.margin):
        yield "a margin without end between two numbers"


def _wrongly_missing(judgement: Judgement, result: Review) -> Iterator[str]:
    """What is lacking and there all the same; a list that is given may lack entries."""
    if judgement.kind is Kind.OPEN and not judgement.missing and "outside the range" not in judgement.message:
        yield "open without a reason"
    for path in judgement.missing:
        if path.rpartition(".")[2] not in _LISTS and given_at(result.loaded.sources.data, path):
            section, *rest = path.split(".")
            yield f"lacks what is given: {section} {'.'.join(rest[1:])}"


def _wrong_texts(judgement: Judgement, given: str) -> Iterator[str]:
    if judgement.kind in (Kind.FAIL, Kind.REVIEW) and not judgement.mend:
        yield "says nothing of what would mend it"
    if not judgement.message or "\n" in judgement.message:
        yield "an odd message"
    for text in (judgement.message, judgement.why, judgement.mend):
        shown = no_number(text, given)
        if shown:
            yield f"shows what is no number: {shown}"
        if "None" in text and "None" not in given:
            yield f"shows None: {text}"


def report(result: Review) -> dict[str, Any]:
    """The report for machines of one description, read back."""
    text = json_text([review_entry(result)], settings="defaults", fail_at="warning")
    read: dict[str, Any] = json.loads(text, parse_constant=no_constant)
    return read


def same_in_any_order(
    data: dict[str, Any], file: Path, choose: random.Random, result: Review, found: list[Trouble]
) -> None:
    """The order of sections, elements and facts in the file changes no judgement."""
    shuffled = file.with_name("shuffled.yaml")
    shuffled.write_text(json.dumps(_shuffled(data, choose)), "utf-8")
    other = review(load(shuffled), CATALOGUE, today=TODAY, settings=result.settings)
    first, second = _essence(result), _essence(other)
    for rule in first.keys() | second.keys():
        if first.get(rule) != second.get(rule):
            story = f"in what is said\n{first.get(rule)}, then {second.get(rule)}"
            found.append(Trouble("order matters", rule, story))


def _shuffled(node: Any, choose: random.Random) -> Any:
    if isinstance(node, dict):
        keys = list(node)
        choose.shuffle(keys)
        return {key: _shuffled(node[key], choose) for key in keys}
    return [_shuffled(each, choose) for each in node] if isinstance(node, list) else node


def _essence(result: Review) -> dict[str, Counter[Any]]:
    """What the judgements of each rule come to; of a loop, the member that comes first answers for all."""
    essence: dict[str, Counter[Any]] = {}
    for said in result.judgements:
        margin = f"{said.measure.margin:.9g}" if said.measure is not None else ""
        # A loop through elements of several sections is judged by the rule of the one that comes first.
        rule = re.sub(r"/\w+_loop_starts$", "/loop_starts", said.rule)
        if said.rule != "waiver/still_right":
            essence.setdefault(rule, Counter())[said.kind, margin, tuple(sorted(set(said.missing)))] += 1
    return essence


def same_twice(file: Path, result: Review, found: list[Trouble]) -> None:
    """Read and judged again, the same comes out."""
    again = review(load(file, shown=file.name), CATALOGUE, today=TODAY, settings=result.settings)
    first, second = report(result), report(again)
    if first != second:
        found.append(Trouble("not the same twice", "review", "two runs differ"))
