"""Evidence: numbers that were obtained at one corner, one temperature, one ramp or with an ideal reference."""

from __future__ import annotations

from collections.abc import Iterator
from typing import Any, Final

from tidegate.lint.case import Case
from tidegate.lint.description.model.part import Element, Part
from tidegate.lint.judgement import Judgement, Level
from tidegate.lint.quantity import Basis, Span
from tidegate.lint.rule import Example, Rule, rule

_NARROW: Final = (
    ("corners", "one", "at one corner"),
    ("temperatures", "one", "at one temperature"),
    ("ramps", "one", "at one ramp"),
    ("reference", "ideal", "with an ideal reference"),
)
"""What a basis says of a number: the word for less than all of it, and how that is told."""


@rule(
    "evidence/covers",
    title="the numbers of an element cover corners, temperatures and ramps",
    level=Level.NOTE,
    applies_to=(
        "rails", "references", "biases", "comparators", "output_stages", "resets", "loads", "bypasses", "neighbours",
    ),
    proves="Every number of the element says over which corners, temperatures and ramps it was obtained and with which "
    "reference (basis), and none of it was one alone, or ideal. What is judged from such a number rests on the "
    "assumption that it holds elsewhere too, which a person must look at. A number that does not say all this is no "
    "evidence: where there is one, the rule has nothing to say of the element but how many there are.",
    facts=("the basis of every number of the element",),
    mend="obtain the number over all corners, temperatures and ramps with the real reference",
    sources=("common practice, no source: a limit is worth what the conditions cover for which it was obtained",),
    example=Example(
        fails="comparators: {uv: {delay: {min: 0.3 us, max: 2 us, basis: {by: simulated, corners: one}}}}",
        holds="comparators: {uv: {delay: {min: 0.3 us, max: 2 us, basis: {by: simulated, corners: all}}}}",
    ),
)  # fmt: skip
def numbers_cover_what_they_are_used_for(element: Element, case: Case) -> Judgement:
    """Ask a person to look at every number whose basis says that it covers less than what it is used for."""
    numbers = list(_numbers(element, ""))
    narrow = [(path, words) for path, basis in numbers if basis is not None and (words := _covers_only(basis))]
    if narrow:
        facts = "; ".join(f"{element.fact(path)} {words}" for path, words in narrow)
        count = f"{len(narrow)} of its numbers rest" if len(narrow) > 1 else "one of its numbers rests"
        return case.asks(
            f"{count} on less than all corners, temperatures and ramps",
            why=f"obtained {facts}" if len(narrow) == 1 else facts,
            mend="obtain them over all corners, temperatures and ramps with the real reference, or say why that is "
            "enough",
            at=narrow[0][0],
        )
    unsaid = sum(basis is None or not _says_all(basis) for _, basis in numbers)
    if unsaid:
        return case.not_applicable(f"of its {len(numbers)} numbers {unsaid} do not say what they cover (basis)")
    if not numbers:
        return case.not_applicable("states no number")
    return case.passes("every number says what it covers, and covers all that it is used for")


def _numbers(value: Any, path: str) -> Iterator[tuple[str, Basis | None]]:
    """Every quantity below a part of the description: its path, and its basis where it says one."""
    if isinstance(value, Span):
        yield path, value.basis
    elif isinstance(value, Part):
        for field in value.__struct_fields__:
            inner = getattr(value, field)
            if inner is not None and not isinstance(inner, str):
                yield from _numbers(inner, f"{path}.{field}" if path else field)
    elif isinstance(value, dict):
        for key, inner in value.items():
            yield from _numbers(inner, f"{path}.{key}")
    elif isinstance(value, tuple):
        for index, inner in enumerate(value):
            yield from _numbers(inner, f"{path}.{index}")


def _covers_only(basis: Basis) -> str:
    return " and ".join(words for field, narrow, words in _NARROW if getattr(basis, field) == narrow)


def _says_all(basis: Basis) -> bool:
    return all(getattr(basis, field) is not None for field, _, _ in _NARROW)


RULES: Final[tuple[Rule, ...]] = (numbers_cover_what_they_are_used_for,)
