"""What reports say of margins that are not known to the end, and of what missing facts must keep."""

from __future__ import annotations

from collections import Counter
from collections.abc import Sequence
from typing import Final

from tidegate.lint.account import term_name
from tidegate.lint.corners import choice_text
from tidegate.lint.derived.borne import BreakEven
from tidegate.lint.derived.safe_rounding import show_down, show_up
from tidegate.lint.facts.names import dimension_at, listed, named
from tidegate.lint.judgement import Judgement, difference
from tidegate.lint.must_keep import MustKeep, waiting

_MOST_FACTS: Final = 3
_HOW: Final = {"ripple": " peak to peak"}


def limit_text(kept: BreakEven) -> str:
    """The value that a fact must keep: ``at most 17.6 mV peak to peak``; empty where it has no unit to be told in."""
    value = _value(kept)
    return f"at {'most' if kept.at_most else 'least'} {value}" if value else ""


def _value(kept: BreakEven) -> str:
    dimension = dimension_at(kept.fact)
    if dimension is None:
        return ""
    name = named(kept.fact)
    return f"{(show_down if kept.at_most else show_up)(kept.value, dimension)}{_HOW.get(name.stem, '')}"


def keep_text(judgement: Judgement, kept: MustKeep | None, *, by_name: bool = False) -> str:
    """What the missing facts of a judgement must keep: ``together at most 8.8 mV; ripple alone up to 17.6 mV``.

    ``by_name`` names the terms that the first part is about, where no sentence before it does.
    """
    if kept is None:
        return ""
    facts = [each for each in kept.facts if limit_text(each)]
    only = facts[0] if len(facts) == 1 and facts[0].alone else None
    if only is not None:
        return f"holds with {named(only.fact).short} {limit_text(only)}"
    parts = [_room_text(judgement, kept, by_name=by_name)]
    shorts = Counter(named(each.fact).short for each in facts)
    for each in facts[:_MOST_FACTS]:
        name = named(each.fact)
        what = name.short if shorts[name.short] == 1 else name.text
        parts.append(f"{what} alone {'up' if each.at_most else 'down'} to {_value(each)}")
    if kept.choice is not None:
        parts.append(choice_words(kept.choice))
    return "; ".join(part for part in parts if part)


def choice_words(choice: tuple[str, object]) -> str:
    """With which value of a missing word a judgement holds."""
    return f"holds where {named(choice[0]).short} is {choice_text(choice[1])}"


def _room_text(judgement: Judgement, kept: MustKeep, *, by_name: bool) -> str:
    """The room that is left for everything that is not known."""
    measure = judgement.measure
    lines = waiting(judgement)
    if kept.room is None or measure is None or not lines:
        return ""
    named_already = {fact for line in lines for fact in line.waits}
    many = len(kept.terms) + sum(1 for fact in judgement.missing if fact not in named_already) > 1
    more = " more" if any(line.best for line in lines) else ""
    name = f"{terms_text(kept.terms)} " if by_name else ""
    return f"{name}{'together ' if many else ''}at most {show_down(kept.room, difference(measure.dimension))}{more}"


def terms_text(terms: Sequence[str]) -> str:
    """Terms of an account as a sentence lists them."""
    return listed(map(term_name, terms))


def margin_words(judgement: Judgement) -> str:
    """The margin of a judgement as far as it is known; empty where it has no number."""
    return "" if judgement.measure is None else judgement.measure.margin_words(judgement.kind)


def judgements_text(judgements: Sequence[Judgement]) -> str:
    """Judgements by rule and element, those of one element together, each with its margin."""
    by_subject: dict[str, list[str]] = {}
    for judgement in judgements:
        margin = margin_words(judgement)
        by_subject.setdefault(judgement.subject, []).append(f"{judgement.rule}{f' ({margin})' if margin else ''}")
    alike: dict[str, list[str]] = {}
    for subject, rules in by_subject.items():
        alike.setdefault(listed(rules), []).append(subject)
    return "; ".join(f"{rules} of {listed(subjects)}" for rules, subjects in alike.items())
