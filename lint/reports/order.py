"""What every report shows, in the order in which the supply meets the elements."""

from __future__ import annotations

from collections.abc import Iterable, Iterator
from itertools import groupby
from typing import Final

from tidegate.lint.description.place import Place
from tidegate.lint.engine import WEIGHT, Review
from tidegate.lint.judgement import Judgement, Kind

NOUNS: Final = {
    "rails": "rail", "domains": "domain", "references": "reference", "biases": "bias", "comparators": "comparator",
    "output_stages": "output stage", "resets": "reset net", "loads": "load", "bypasses": "bypass",
    "neighbours": "neighbours",
}  # fmt: skip
"""What an element of each section is called."""

_KIND_ORDER: Final = {Kind.FAIL: 0, Kind.REVIEW: 1, Kind.OPEN: 2, Kind.PASS: 3, Kind.NOT_APPLICABLE: 4}


def by_element(judgements: Iterable[Judgement]) -> Iterator[tuple[str, list[Judgement]]]:
    """Judgements grouped by element, the elements as they come, the weightiest judgement of each first."""
    for subject, group in groupby(judgements, key=lambda judgement: judgement.subject):
        yield subject, sorted(group, key=_weight)


def _weight(judgement: Judgement) -> tuple[int, int, str]:
    return _KIND_ORDER[judgement.kind], -WEIGHT[judgement.level], judgement.rule


def described(review: Review, subject: str) -> tuple[str, Place]:
    """What a subject is called, and where it stands: an element, or a waiver."""
    element = review.graph.elements.get(subject)
    if element is not None:
        return NOUNS[element.section], review.loaded.sources.place((element.section, subject), key=True)
    first = next(judgement for judgement in review.judgements if judgement.subject == subject)
    return "waiver", review.place(first)


def kind_word(kind: Kind) -> str:
    """The word for a kind in running text."""
    return {Kind.NOT_APPLICABLE: "not applicable", Kind.REVIEW: "to look at"}.get(kind, kind.value)


def explained_by(judgements: Iterable[Judgement]) -> dict[int, list[Judgement]]:
    """By the identity of each failure, the failures that are told under it.

    Where the rule above fails on several elements, that on the same one counts, else the first on the way to it.
    """
    every = list(judgements)
    failed: dict[str, list[Judgement]] = {}
    for judgement in every:
        if judgement.kind is Kind.FAIL and not judgement.waiver:
            failed.setdefault(judgement.rule, []).append(judgement)
    found: dict[int, list[Judgement]] = {}
    for judgement in every:
        above = failed.get(judgement.under, ()) if judgement.under else ()
        if above:
            near = {judgement.subject, *(hop.element for hop in judgement.path)}
            first = next((one for one in above if one.subject == judgement.subject), None)
            first = first or next((one for one in above if one.subject in near), above[0])
            found.setdefault(id(first), []).append(judgement)
    return found


def verdict(review: Review) -> str:
    """The verdict in a few words."""
    kinds = {judgement.kind for judgement in review.judgements if not judgement.waiver}
    if review.faults:
        return "NOT JUDGED IN FULL"
    if Kind.FAIL in kinds:
        return "NOT KEPT"
    if Kind.OPEN in kinds:
        return "KEPT SO FAR" if Kind.PASS in kinds else "NOTHING JUDGED YET"
    return "KEPT, WITH QUESTIONS" if Kind.REVIEW in kinds else "KEPT"


CAUTION: Final = (
    "A clean review says that the description keeps the rules, not that the circuit is what the description says: it "
    "is no circuit simulation and no sign-off. Supply monitors in safety-related products answer to the standards that "
    "apply (ISO 26262, IEC 61508 and others) and to the people qualified to judge them."
)
