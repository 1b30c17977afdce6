"""One judgement out of several readings: what is certain although facts are missing, and what is open.

A rule whose facts are all known is read once.  Otherwise it is read at the sure and at the best corner, and with every
choice of the words that are missing.  Where all readings say the same, that is said, with the margin as the interval
from its sure end to its best end; where they differ, the judgement is open, with the margin so far and what it waits
for.
"""

from __future__ import annotations

import math
import re
from collections.abc import Callable, Sequence
from typing import Final, TypeAlias

import msgspec
from msgspec.structs import replace

from tidegate.lint.account import Line, term_name
from tidegate.lint.facts.names import listed, spoken, spoken_together
from tidegate.lint.facts.reading import MOST_CHOICES, Corner, MissingFactsError, Reading, other_choices
from tidegate.lint.judgement import Judgement, Kind, Measure, difference
from tidegate.lint.physics.domain import DomainError
from tidegate.lint.quantity import NO_END, Dimension, show

_MOST_NAMED: Final = 3
_WITHOUT_END: Final = re.compile(rf"-?{NO_END}")
_MOST_TERMS: Final = 5
_UNNAMED: Final = frozenset({Kind.PASS, Kind.NOT_APPLICABLE})

Ask: TypeAlias = Callable[[Reading], Judgement]
"""A rule on an element in a reading; raises MissingFactsError or DomainError where nothing can be computed."""


class Outcome(msgspec.Struct, frozen=True):
    """What one reading gave: a judgement, or why there is none."""

    reading: Reading
    said: Judgement | None
    missing: tuple[str, ...] = ()
    refused: str = ""

    @property
    def margin(self) -> float | None:
        """Its margin; without end where it has none; None where nothing is known."""
        if self.said is None:
            return None
        if self.said.measure is not None:
            margin = self.said.measure.margin
            return None if math.isnan(margin) else margin
        return -math.inf if self.said.kind is Kind.FAIL else math.inf

    @property
    def best_margin(self) -> float | None:
        """Its margin as far as it may be more than what is judged by."""
        margin = self.margin
        if margin is None or self.said is None or self.said.measure is None:
            return margin
        return self.said.measure.best_margin

    @property
    def kind(self) -> Kind:
        """What it says; open where nothing can be computed."""
        if self.said is None or self.margin is None:
            return Kind.OPEN
        return self.said.kind


def judged(ask: Ask, opened: Callable[[Sequence[str], str], Judgement]) -> Judgement:
    """What a rule says about an element, whatever the missing facts are.

    ``opened`` makes an open judgement from the facts that are missing and, where there is one, a sentence.
    """
    first = _outcome(ask, Reading())
    if first.reading.exact:
        if first.said is not None:
            return first.said
        return opened(first.missing, first.refused)
    outcomes, all_tried = _outcomes(ask, first)
    said = _joined(outcomes, opened, all_tried=all_tried)
    return replace(said, message=_known(said.message), why=_known(said.why), mend=_known(said.mend))


def _known(text: str) -> str:
    """A sentence from a reading in which something is missing: what has no end in it is not known."""
    return _WITHOUT_END.sub("what is not known", text) if NO_END in text else text


def _outcome(ask: Ask, reading: Reading) -> Outcome:
    try:
        return Outcome(reading, ask(reading))
    except MissingFactsError as error:
        return Outcome(reading, None, error.missing)
    except DomainError as error:
        return Outcome(reading, None, (), f"the numbers given lie outside the range of the formula: {error}")


def _outcomes(ask: Ask, first: Outcome) -> tuple[list[Outcome], bool]:
    """Every reading that differs: both corners, and every choice of missing words, as far as so many are tried."""
    found = [first]
    corners = (Corner.SURE, Corner.BEST)
    waiting: list[tuple[Corner, dict[str, object]]] = [(Corner.BEST, {}), *other_choices(first.reading, {})]
    while waiting:
        if len(found) >= len(corners) * MOST_CHOICES:
            return found, False
        corner, chosen = waiting.pop()
        outcome = _outcome(ask, Reading(corner, chosen=chosen))
        found.append(outcome)
        waiting += other_choices(outcome.reading, chosen)
    return found, True


def _joined(
    outcomes: Sequence[Outcome], opened: Callable[[Sequence[str], str], Judgement], *, all_tried: bool
) -> Judgement:
    kinds = {outcome.kind for outcome in outcomes}
    if not all_tried:
        kinds.add(Kind.OPEN)
    waits = _waits(outcomes)
    if kinds == {Kind.FAIL}:
        told = max(outcomes, key=lambda outcome: (_margin(outcome), outcome.reading.corner is Corner.BEST))
        return _bounded(told, outcomes, waits)
    if (kinds <= _UNNAMED and _by_words_alone(outcomes)) or kinds == {Kind.REVIEW}:
        # What passes wherever it applies, passes: that it may not apply takes nothing from that.
        kind = next(kind for kind in (Kind.PASS, Kind.REVIEW, Kind.NOT_APPLICABLE) if kind in kinds)
        told = min((outcome for outcome in outcomes if outcome.kind is kind), key=_margin)
        return _bounded(told, outcomes, waits) if kind is not Kind.NOT_APPLICABLE else _said(told)
    return _open(outcomes, opened, waits)


def _by_words_alone(outcomes: Sequence[Outcome]) -> bool:
    """Whether a rule that applies in some readings alone does so by what is chosen, at either corner.

    Where a number decides whether it applies, what it would say in between is not known.
    """
    kinds: dict[tuple[object, ...], set[Kind]] = {}
    for outcome in outcomes:
        kinds.setdefault(tuple(outcome.reading.chosen.items()), set()).add(outcome.kind)
    return all(len(found) == 1 for found in kinds.values())


def _margin(outcome: Outcome) -> float:
    return -math.inf if outcome.margin is None else outcome.margin


def _said(outcome: Outcome) -> Judgement:
    assert outcome.said is not None
    return outcome.said


def _waits(outcomes: Sequence[Outcome]) -> tuple[str, ...]:
    """Everything that some reading lacks."""
    found: dict[str, None] = {}
    for outcome in outcomes:
        found.update(dict.fromkeys((*outcome.reading.lacking, *outcome.missing)))
    return tuple(found)


def _ends(outcomes: Sequence[Outcome]) -> tuple[float, float]:
    """The sure and the best end of the margin."""
    sure = [outcome.margin for outcome in outcomes if outcome.reading.corner is Corner.SURE]
    best = [outcome.best_margin for outcome in outcomes if outcome.reading.corner is Corner.BEST]
    if not best:  # nothing but words is missing, or nothing at all
        best = [outcome.best_margin for outcome in outcomes]
    low = min((-math.inf if margin is None else margin for margin in sure), default=-math.inf)
    high = max((math.inf if margin is None else margin for margin in best), default=math.inf)
    return min(low, high), high


def _bounded(told: Outcome, outcomes: Sequence[Outcome], waits: tuple[str, ...]) -> Judgement:
    """A judgement that holds whatever is missing, with both ends of its margin."""
    said = _said(told)
    if said.measure is None:
        return said
    sure, best = _ends(outcomes)
    if (sure, best) == (said.measure.sure_margin, said.measure.best_margin):
        return said
    measure = replace(said.measure, sure=sure, best=best)
    account = _with_ends(said.account, outcomes)
    if said.kind is not Kind.FAIL:
        return replace(said, measure=measure, account=account, missing=waits)
    short = show(-told.margin if told.margin is not None else -best, difference(measure.dimension))
    message = f"{said.message}: at least {short} short, whatever {_named(waits)} may be"
    return replace(said, measure=measure, account=account, message=message, missing=waits)


def _named(facts: Sequence[str]) -> str:
    """Facts as a sentence names them: ``ripple of vdd and hysteresis of sup``."""
    shown = spoken_together(facts[:_MOST_NAMED])
    more = len(facts) - _MOST_NAMED
    return f"{', '.join(shown)} and {more} more {'fact' if more == 1 else 'facts'}" if more > 0 else listed(shown)


def _open(
    outcomes: Sequence[Outcome], opened: Callable[[Sequence[str], str], Judgement], waits: tuple[str, ...]
) -> Judgement:
    """An open judgement, with the margin so far where there is one."""
    plain = opened(waits, next((o.refused for o in outcomes if o.refused), "") if not waits else "")
    sure, best = _ends(outcomes)
    finite = [o for o in outcomes if o.said is not None and o.said.measure is not None and math.isfinite(_margin(o))]
    choice = _settling_choice(outcomes)
    if not finite:
        hint = f"; it holds where {choice}" if choice else ""
        why = next((o.said.why for o in outcomes if o.said is not None and o.said.why), "")
        return replace(plain, message=f"{plain.message}{hint}", why=why)
    told = max(finite, key=_margin)
    said, measure = _said(told), _said(told).measure
    assert measure is not None
    return replace(
        plain,
        message=f"{said.message}: {_so_far(measure, sure, best, _named_terms(said.account, waits))}",
        why=said.why, at=said.at, path=said.path, account=_with_ends(said.account, outcomes), limits=said.limits,
        measure=replace(measure, sure=sure, best=best),
    )  # fmt: skip


def _so_far(measure: Measure, sure: float, best: float, terms: str) -> str:
    """The margin as far as it is known, and what is not: ``+8.8 mV so far, before half the ripple``."""
    unit = difference(measure.dimension)
    low, high = _with_sign(sure, unit), _with_sign(best, unit)
    if math.isfinite(sure) and math.isfinite(best):
        text, before = f"between {low} and {high}", "depending on"
    elif math.isfinite(best):
        text, before = f"{measure.margin_text()} so far", "before"
    elif math.isfinite(sure):
        text, before = f"{low} or more", "depending on"
    else:
        text, before = f"{measure.margin_text()} for what is known", "without"
    return f"{text}, {before} {terms}" if terms else text


def _with_sign(value: float, unit: Dimension) -> str:
    return f"{'-' if value < 0 else '+'}{show(abs(value), unit)}"


def _named_terms(account: Sequence[Line], waits: Sequence[str]) -> str:
    """What is not known, by term where the account has it, with the facts that no term names."""
    terms = [line for line in account if line.waits]
    covered = {fact for line in terms for fact in line.waits}
    facts = spoken_together(fact for fact in waits if fact not in covered)
    names = list(dict.fromkeys([*(term_name(line.name) for line in terms), *facts]))
    more = len(names) - _MOST_TERMS
    return f"{', '.join(names[:_MOST_TERMS])} and {more} more facts" if more > 1 else listed(names)


def _with_ends(account: tuple[Line, ...], outcomes: Sequence[Outcome]) -> tuple[Line, ...]:
    """The account with each line's value at both corners, where its terms are the same in all readings."""
    sure = _accounts(outcomes, Corner.SURE, account)
    best = _accounts(outcomes, Corner.BEST, account)
    if sure is None or best is None:
        return account
    return tuple(
        replace(
            line, sure=low.value, best=high.value, waits=tuple(dict.fromkeys((*line.waits, *low.waits, *high.waits)))
        )
        if line.waits or low.waits or high.waits
        else line
        for line, low, high in zip(account, sure, best, strict=True)
    )


def _accounts(outcomes: Sequence[Outcome], corner: Corner, like: tuple[Line, ...]) -> tuple[Line, ...] | None:
    """The account of the decisive reading at a corner, if it has the same terms."""
    found = [o for o in outcomes if o.reading.corner is corner and o.said is not None and o.margin is not None]
    if not found:
        return None
    pick = min if corner is Corner.SURE else max
    account = _said(pick(found, key=_margin)).account
    return account if [line.name for line in account] == [line.name for line in like] else None


def _settling_choice(outcomes: Sequence[Outcome]) -> str:
    """The value of a missing word with which all readings pass, in words; empty where there is none."""
    found = _choice(outcomes)
    return "" if found is None else f"{spoken(found[0])} is {choice_text(found[1])}"


def _choice(outcomes: Sequence[Outcome]) -> tuple[str, object] | None:
    """A missing word and the value of it with which all readings pass; None where there is none."""
    by_word: dict[tuple[str, object], list[Outcome]] = {}
    for outcome in outcomes:
        for path, word in outcome.reading.chosen.items():
            by_word.setdefault((path, word), []).append(outcome)
    return next((each for each, found in by_word.items() if all(one.kind in _UNNAMED for one in found)), None)


def choice_text(word: object) -> str:
    """A word as the description has it."""
    return str(word).lower() if isinstance(word, bool) else str(word)


def settling_choice(ask: Ask) -> tuple[str, object] | None:
    """A missing word of a rule on an element, by its path, and the value with which it holds; None without one."""
    first = _outcome(ask, Reading())
    return None if not first.reading.options else _choice(_outcomes(ask, first)[0])
