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

_EXAMPLES: Final = {
    "rails": ("avdd", "rise: {min: 50 us, max: 20 ms, basis: {by: measured, ramps: WHICH}}"),
    "references": ("ref_fast", "works_from: {max: 1.06 V, basis: {by: simulated, temperatures: WHICH}}"),
    "biases": ("bias_start", "works_from: {max: 0.85 V, basis: {by: simulated, corners: WHICH}}"),
    "comparators": ("uv", "delay: {min: 0.3 us, max: 2 us, basis: {by: simulated, corners: WHICH}}"),
    "output_stages": ("gather", "leakage: {max: 10 nA, basis: {by: measured, temperatures: WHICH}}"),
    "resets": ("por_n", "receivers: {leakage: {max: 2 nA, basis: {by: measured, temperatures: WHICH}}}"),
    "loads": ("adc", "ready: {max: 60 us, basis: {by: simulated, corners: WHICH}}"),
    "bypasses": ("skip_core", "hold: {resistance: {min: 80 kohm, max: 120 kohm, basis: {corners: WHICH}}}"),
    "neighbours": ("core_return", "impedance: {max: 3 ohm, basis: {by: simulated, corners: WHICH}}"),
}
"""Of each section whose elements have numbers: an element of the sound example, and a number of it."""


def _judge(element: Element, case: Case) -> Judgement:
    """Ask a person to look at every number whose basis says that it covers less than what it is used for."""
    found = [(path, basis) for path, basis in _bases(element, "")]
    narrow = [(path, words) for path, basis in found if (words := _covers_only(basis))]
    if narrow:
        facts = "; ".join(f"{case.own.path(path)} {words}" for path, words in narrow)
        count = f"{len(narrow)} of its numbers rest" if len(narrow) > 1 else "one of its numbers rests"
        return case.asks(
            f"{count} on less than all corners, temperatures and ramps",
            why=f"obtained {facts}" if len(narrow) == 1 else facts,
            mend="obtain them over all corners, temperatures and ramps with the real reference, or say why that is "
            "enough",
            at=narrow[0][0],
        )
    if found:
        return case.passes("every number that says where it comes from covers all that it is used for")
    return case.not_applicable("no number of it says where it comes from (basis)")


def _bases(value: Any, path: str) -> Iterator[tuple[str, Basis]]:
    """Every basis below a part of the description, with the path of its number."""
    if isinstance(value, Span):
        if value.basis is not None:
            yield path, value.basis
    elif isinstance(value, Part):
        for field in value.__struct_fields__:
            inner = getattr(value, field)
            if inner is not None and not isinstance(inner, str):
                yield from _bases(inner, f"{path}.{field}" if path else field)
    elif isinstance(value, dict):
        for key, inner in value.items():
            yield from _bases(inner, f"{path}.{key}")
    elif isinstance(value, tuple):
        for index, inner in enumerate(value):
            yield from _bases(inner, f"{path}.{index}")


def _covers_only(basis: Basis) -> str:
    return " and ".join(words for field, narrow, words in _NARROW if getattr(basis, field) == narrow)


def _covered(section: str) -> Rule:
    subject, fact = _EXAMPLES[section]

    def example(which: str) -> str:
        return f"{section}: {{{subject}: {{{fact.replace('WHICH', which)}}}}}"

    noun = section.replace("_", " ")
    return rule(
        f"evidence/{section}",
        title=f"the numbers of {noun} cover corners, temperatures and ramps",
        level=Level.NOTE,
        applies_to=section,
        proves="No number of the element was obtained at one corner, one temperature or one ramp only, or with an "
        "ideal reference, as far as its basis says. A number without a basis is not judged. What is judged from such a "
        "number rests on the assumption that it holds elsewhere too.",
        facts=(f"the basis of every number of {section}.*",),
        mend="obtain the number over all corners, temperatures and ramps with the real reference",
        sources=("common practice, no source: a limit is worth what the conditions cover for which it was obtained",),
        example=Example(fails=example("one"), holds=example("all")),
    )(_judge)


RULES: Final[tuple[Rule, ...]] = tuple(_covered(section) for section in _EXAMPLES)
