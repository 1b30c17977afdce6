"""What reports say of the questions that are left: what an answer settles, must keep, and where it is written."""

from __future__ import annotations

from collections.abc import Sequence
from typing import Final

from tidegate.lint.facts.names import named
from tidegate.lint.reports.questions import Limit, Question, Rest, some
from tidegate.lint.reports.words import judgements_text, limit_text

_MOST_NAMED: Final = 3
_MOST_LIMITS: Final = 3
_MOST_PATHS: Final = 8


def settles_text(question: Question) -> str:
    """What the answer settles, and how much else waits for it."""
    told = question.settles[:_MOST_NAMED]
    more = len(question.settles) - len(told)
    text = f"{judgements_text(told)}{f' and {more} more' if more else ''}"
    waits = len(question.helps)
    if not told:
        return f"nothing alone; {waits} {'judgement waits' if waits == 1 else 'judgements wait'} for it among others"
    return f"{text}; {waits} more {'waits' if waits == 1 else 'wait'} for it among others" if waits else text


def limits_text(limits: Sequence[Limit]) -> str:
    """The values that the answer must keep, each with the judgement that asks most."""
    told = [(limit, limit_text(limit.kept)) for limit in limits]
    known = [(limit, text) for limit, text in told if text]
    owners = {named(limit.kept.fact).owner for limit, _ in known}
    parts = []
    for limit, text in known[:_MOST_LIMITS]:
        name = named(limit.kept.fact)
        what = name.text if len(owners) > 1 else name.short
        alone = "" if limit.kept.alone else " alone"
        parts.append(f"{what}{alone} {text}, for {limit.judgement.rule} of {limit.judgement.subject}")
    more = len(known) - len(parts)
    return "; ".join([*parts, *([f"and {more} more"] if more else [])])


def paths_text(question: Question) -> str:
    """Where the answer is written, as paths: those of one element behind its own."""
    by_owner: dict[str, list[str]] = {}
    for fact in question.facts:
        name = named(fact)
        above = ".".join(part for part in (name.section, name.owner) if part)
        inside = fact.removeprefix(above).lstrip(".")
        by_owner.setdefault(above if inside else "", []).append(inside or fact)
    alike: dict[tuple[str, ...], list[str]] = {}
    for above, paths in by_owner.items():
        alike.setdefault(tuple(paths), []).append(above)
    parts = []
    for paths_of_each, owners in alike.items():
        shown, more = paths_of_each[:_MOST_PATHS], len(paths_of_each) - _MOST_PATHS
        text = f"{', '.join(shown)}{f' and {more} more' if more > 0 else ''}"
        named_owners = some([owner for owner in owners if owner])
        parts.append(f"{named_owners}: {text}" if named_owners else text)
    return "; ".join(parts)


def rest_text(one: Rest) -> str:
    """What else is missing in a section, and how much waits for it."""
    section = one.section.replace("_", " ") or "else"
    waits = f"{one.waiting} {'judgement waits' if one.waiting == 1 else 'judgements wait'}"
    if one.nothing_said:
        return f"{section}: nothing is said; {waits}"
    owners = ", ".join(one.owners[:_MOST_NAMED]) + (" and others" if len(one.owners) > _MOST_NAMED else "")
    facts = f"{one.facts} {'fact' if one.facts == 1 else 'facts'}"
    return f"{section}: {facts}{f' of {owners}' if owners else ''}; {waits}"
