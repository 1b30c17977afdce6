"""Where a comparator's trip levels and its hysteresis lie: at the code it ships with, where they are chosen by code.

Each end is told by what is stated of it, and by the other level and the hysteresis where that is stated; where several
ways lead to one end, it lies in what they have in common.
"""

from __future__ import annotations

import math
from collections.abc import Callable, Sequence
from functools import partial
from typing import Final, Literal

import msgspec

from tidegate.lint.account import Sum, Term, less, plus
from tidegate.lint.case import Case
from tidegate.lint.derived.answered_once import answered_once
from tidegate.lint.derived.levels.at_code import as_far_as_said, as_shipped
from tidegate.lint.derived.levels.trip_causes import (
    between_levels,
    cause_terms,
    is_complete,
    norm_v,
    rest_v,
)
from tidegate.lint.description.model.detector import Comparator, Hysteresis
from tidegate.lint.facts.reading import Better, Corner, MissingFactsError, Wait
from tidegate.lint.facts.view import Number
from tidegate.lint.facts.views.detector import TripFacts
from tidegate.lint.quantity import Voltage

Which = Literal["rising", "falling"]
End = Literal["least", "most"]
_OTHER: Final[dict[Which, Which]] = {"rising": "falling", "falling": "rising"}
_OPPOSITE: Final[dict[End, End]] = {"least": "most", "most": "least"}
OWN_TOLERANCE: Final = "its own tolerance"
_HELPS: Final[dict[End, Better]] = {"least": Better.MORE, "most": Better.LESS}


class TripLevel:
    """One level of a detector: its ends in V at the rail, each worked out when it is asked for."""

    __slots__ = ("_case", "_detector", "which")

    def __init__(self, case: Case, detector: Comparator, which: Which) -> None:
        self._case = case
        self._detector = detector
        self.which: Which = which

    @property
    def least_v(self) -> float:
        """The lowest that it can lie."""
        return level_end(self._case, self._detector, self.which, "least").value

    @property
    def most_v(self) -> float:
        """The highest that it can lie."""
        return level_end(self._case, self._detector, self.which, "most").value

    def end(self, end: End) -> Sum:
        """One end, with the account of what makes it."""
        return level_end(self._case, self._detector, self.which, end)


class TripHysteresis:
    """The difference between rising and falling level of one part, in V at the rail."""

    __slots__ = ("_case", "_detector")

    def __init__(self, case: Case, detector: Comparator) -> None:
        self._case = case
        self._detector = detector

    @property
    def least_v(self) -> float:
        """The smallest that it can be."""
        return hysteresis_end(self._case, self._detector, "least").value

    @property
    def most_v(self) -> float:
        """The greatest that it can be."""
        return hysteresis_end(self._case, self._detector, "most").value

    def end(self, end: End) -> Sum:
        """One end, with the account of what makes it."""
        return hysteresis_end(self._case, self._detector, end)


def falling_window(case: Case, comparator: Comparator) -> TripLevel:
    """Where the falling level lies."""
    return TripLevel(case, as_shipped(case, comparator), "falling")


def rising_window(case: Case, comparator: Comparator) -> TripLevel:
    """Where the rising level lies."""
    return TripLevel(case, as_shipped(case, comparator), "rising")


def hysteresis_window(case: Case, comparator: Comparator) -> TripHysteresis:
    """Where the difference between rising and falling level lies; at which code, matters where the levels make it."""
    amount = _amount(comparator)
    stated = has_no_hysteresis_said(comparator) or (amount is not None and None not in (amount.least, amount.most))
    return TripHysteresis(case, comparator if stated else as_shipped(case, comparator))


@answered_once
def level_end(case: Case, comparator: Comparator, which: Which, end: End) -> Sum:
    """One end of a level, as stated or through the other level.

    Raises: MissingFactsError: where a fact without which an error has no size is missing.
    """
    if has_no_hysteresis_said(comparator) and _span(comparator, which) is None:
        which = _OTHER[which]
    stated = _span(comparator, which)
    if stated is not None and (_nominal_v(stated) is not None or getattr(stated, end) is not None):
        return _stated(case, comparator, which, end)
    if not _stands(_span(comparator, _OTHER[which])) or _amount(comparator) is None:
        return _stated(case, comparator, which, end)
    if stated is None:
        return _through_other(case, comparator, which, end)
    ways = [partial(_stated, case, comparator, which, end), partial(_through_other, case, comparator, which, end)]
    return tightest(case, ways, _HELPS[end])


def nominal_fact(case: Case, comparator: Comparator, which: Which) -> Number | None:
    """The fact that states a level as a nominal value; None where it is stated otherwise."""
    return None if _nominal_v(_span(comparator, which)) is None else _fact(case, comparator, which)


def _stated(case: Case, comparator: Comparator, which: Which, end: End) -> Sum:
    """A level as stated: a nominal value with the errors about it, or an end of a range as it stands."""
    fact, span = _fact(case, comparator, which), _span(comparator, which)
    if span is None or not span.is_nominal:
        return case.sum(plus(f"{which} level, {end}", fact.least if end == "least" else fact.most, of=fact))
    nominal_v = fact.typical()
    errors = cause_terms(case, comparator, nominal_v, sign=-1.0 if end == "least" else 1.0)
    return case.sum(plus(f"{which} level", lambda: nominal_v, of=fact), *errors)


def _through_other(case: Case, comparator: Comparator, which: Which, end: End) -> Sum:
    """An end of a level from the other level and the stated hysteresis.

    Which part has the greatest hysteresis is not said: the sure end takes extreme with extreme.
    """
    other = _OTHER[which]
    near, far = (_stated(case, comparator, other, each) for each in (end, _OPPOSITE[end]))
    small, large = hysteresis_end(case, comparator, "least"), hysteresis_end(case, comparator, "most")
    if which == "falling":
        small, large = large, small
    here, there = (small, large) if end == "least" else (large, small)
    reached = near.plus(here) if which == "rising" else near.less(here)
    sign = 1.0 if which == "rising" else -1.0
    crossed = (near.value + sign * there.value, far.value + sign * here.value)
    helps = min(crossed) - reached.value if end == "least" else reached.value - max(crossed)
    return msgspec.structs.replace(reached, loose=max(helps, 0.0) if math.isfinite(helps) else 0.0)


@answered_once
def hysteresis_end(case: Case, comparator: Comparator, end: End) -> Sum:
    """One end of the hysteresis: as stated where an amount is, else as the levels leave it possible.

    Raises: MissingFactsError: where a fact without which an error has no size is missing.
    """
    if has_no_hysteresis(comparator):
        return Sum(0.0, ())
    amount, fact = _amount(comparator), case.of(comparator).hysteresis.amount

    def as_said() -> Sum:
        return case.sum(plus(f"hysteresis, {end}", fact.least if end == "least" else fact.most, of=fact))

    rising, falling = _span(comparator, "rising"), _span(comparator, "falling")
    if rising is None or falling is None or (amount is not None and getattr(amount, end) is not None):
        return as_said()
    between = _between_nominal if rising.is_nominal and falling.is_nominal else _between_ranges
    from_levels = partial(between, case, comparator, end)
    if amount is None:
        return from_levels()
    if comparator.tracked:
        return tightest(case, [as_said, from_levels], _HELPS[end])
    return _within_levels(case, comparator, end, as_said())


def _within_levels(case: Case, comparator: Comparator, end: End, said: Sum) -> Sum:
    """An end of the hysteresis of which something else is stated: no further than the levels leave it possible.

    Some part has each end of a level, so that the least hysteresis is no more than lies between two alike ends.
    """
    least = end == "least"
    if case.at_best:
        levels, pick = case.if_known(lambda: _at_ends(case, comparator, end)), min if least else max
    else:
        levels, pick = case.if_known(lambda: _apart(case, comparator, end)), max if least else min
    return said if levels is None else pick(said, levels, key=lambda each: each.value)


def _at_ends(case: Case, comparator: Comparator, end: End) -> Sum | None:
    """What lies between two alike ends of the levels: the least of it, or the most; None where no two are stated."""
    rising, falling = _span(comparator, "rising"), _span(comparator, "falling")
    assert rising is not None and falling is not None
    alike = [(rising.typical, falling.typical)]
    if not rising.is_nominal and not falling.is_nominal:
        alike += [(rising.least, falling.least), (rising.most, falling.most)]
    between_v = [up_v - down_v for up_v, down_v in alike if up_v is not None and down_v is not None]
    if not between_v:
        return None
    value = min(between_v) if end == "least" else max(between_v)
    return case.sum(plus("between the levels, end to end", lambda: value, of=_fact(case, comparator, "rising")))


def _apart(case: Case, comparator: Comparator, end: End) -> Sum:
    """What both levels leave possible for the hysteresis, whatever moves them together."""
    return _stated(case, comparator, "rising", end).less(_stated(case, comparator, "falling", _OPPOSITE[end]))


def _between_nominal(case: Case, comparator: Comparator, end: End) -> Sum:
    """An end of the hysteresis between two nominal levels.

    What tracks shrinks and stretches it with the level.  A tolerance of its own is not said by the levels, but that
    they stay within their errors, unless the detector is said to move both together.
    """
    up, down = _fact(case, comparator, "rising"), _fact(case, comparator, "falling")
    up_v, down_v, complete = up.typical(), down.typical(), is_complete(comparator)

    def apart_v(*, together: bool) -> float:
        return norm_v(case, between_levels(case, comparator, rising_v=up_v, falling_v=down_v, together=together))

    def own_v() -> float:
        if comparator.tracked and complete:
            return 0.0
        room_v = apart_v(together=False) - apart_v(together=True) if complete else math.inf
        if end == "least" and comparator.tracked:  # levels that track do not cross
            room_v = min(room_v, max(0.0, up_v - down_v - apart_v(together=True)))
        unsaid_v = _unsaid_v(case, comparator, room_v)
        return unsaid_v if complete or room_v <= 0.0 else max(unsaid_v, rest_v(case, comparator, most_v=room_v))

    term, errors = less if end == "least" else plus, case.of(comparator).errors
    terms: list[Term] = [plus("rising level", lambda: up_v, of=up), less("falling level", lambda: down_v, of=down)]
    if comparator.errors:
        terms.append(term("what moves them apart", partial(apart_v, together=True), of=errors))
    return case.sum(*terms, term(OWN_TOLERANCE, own_v, of=case.of(comparator).hysteresis.amount))


def _between_ranges(case: Case, comparator: Comparator, end: End) -> Sum:
    """An end of the hysteresis between two levels of which at least one is a range.

    Where they track, the lowest go together and so do the highest.
    """
    if not case.of(comparator).tracked.must():
        return _apart(case, comparator, end)
    least = end == "least"

    def between_v(which_end: End) -> float:
        up_helps, down_helps = (Better.MORE, Better.LESS) if least else (Better.LESS, Better.MORE)
        high_v = _end_v(case, comparator, "rising", which_end, up_helps)
        return high_v - _end_v(case, comparator, "falling", which_end, down_helps)

    def ends_v() -> float:
        ends = between_v("least"), between_v("most")
        return max(0.0, min(ends)) if least and comparator.tracked else min(ends) if least else max(ends)

    def own_v() -> float:
        if comparator.tracked:
            return 0.0
        surely = case.if_known(lambda: _apart(case, comparator, end))
        if least:
            floor_v = max(-math.inf if surely is None else surely.value, 0.0 if comparator.tracked else -math.inf)
            return _unsaid_v(case, comparator, ends_v() - floor_v)
        return _unsaid_v(case, comparator, math.inf if surely is None else surely.value - ends_v())

    return case.sum(
        plus("between the levels, which track", ends_v, of=_fact(case, comparator, "rising")),
        (less if least else plus)(OWN_TOLERANCE, own_v, of=case.of(comparator).hysteresis.amount),
    )


def _unsaid_v(case: Case, comparator: Comparator, room_v: float) -> float:
    """What the tolerance of the hysteresis, which is not stated, may take up to a size, in V."""
    if not room_v > 0.0:
        return 0.0
    return case.reading.end(Wait(case.of(comparator).hysteresis.amount.path, 0.0, room_v, Better.LESS))


def _end_v(case: Case, comparator: Comparator, which: Which, end: End, better: Better) -> float:
    """An end of a level as stated, in V, for whoever wants it to be more, or less, where it is not known."""
    fact, span = _fact(case, comparator, which), _span(comparator, which)
    if span is None or span.is_nominal:
        return _stated(case, comparator, which, end).value
    return fact.least(better) if end == "least" else fact.most(better)


def tightest(case: Case, ways: Sequence[Callable[[], Sum]], helps: Better) -> Sum:
    """What several ways to one number have in common: an exact way decides, else the bound that says most.

    Raises: MissingFactsError: where none of the ways can be gone.
    """
    outer, found = case.reading, []
    for way in ways:
        case.asked.reading = outer.again()
        try:
            found.append((way(), case.reading))
        except MissingFactsError as error:
            lacking = error
        finally:
            case.asked.reading = outer
    exact = [answer for answer, reading in found if reading.exact]
    if exact:
        return exact[0]
    if not found:
        raise lacking
    for _, reading in found:
        outer.replay(reading.waits, reading.options)
    upwards = (helps is Better.MORE) == (case.reading.corner is Corner.SURE)
    return (max if upwards else min)((answer for answer, _ in found), key=lambda answer: answer.value)


def levels_bound_hysteresis(comparator: Comparator, which: Which) -> bool:
    """Whether a level says how far it can be from the other one: it is stated as a range.

    A level that is bounded is not the other one and the hysteresis once more.
    """
    span = _span(as_far_as_said(comparator), which)
    return span is not None and not span.is_nominal


def has_no_hysteresis_said(comparator: Comparator) -> bool:
    """Whether the description says outright that there is no hysteresis."""
    return comparator.hysteresis == "none"


def has_no_hysteresis(comparator: Comparator) -> bool:
    """Whether the description says that there is none: outright, as an amount of 0 V, or as two equal levels."""
    if has_no_hysteresis_said(comparator):
        return True
    amount = _amount(comparator)
    if amount is not None:
        return amount.most == 0.0
    shipped = as_far_as_said(comparator)
    rising, falling = _span(shipped, "rising"), _span(shipped, "falling")
    up_v, down_v = _nominal_v(rising), _nominal_v(falling)
    return up_v is not None and up_v == down_v


def _fact(case: Case, comparator: Comparator, which: Which) -> Number:
    """The fact that states a level, at the code where it stands."""
    trip = _trip(case, comparator)
    return trip.rising if which == "rising" else trip.falling


def _trip(case: Case, comparator: Comparator) -> TripFacts:
    """Where the levels of a detector at some code stand: ``trip``, or ``codes.b``."""
    described = case.description.comparators.get(comparator.id)
    for code, trip in described.codes.items() if described is not None else ():
        if trip is comparator.trip:
            return case.of(described).codes[code] if described is not None else case.of(comparator).trip
    return case.of(comparator).trip


def _stands(span: Voltage | None) -> bool:
    """Whether something is stated of a level by itself."""
    return span is not None


def _amount(comparator: Comparator) -> Voltage | None:
    return comparator.hysteresis.amount if isinstance(comparator.hysteresis, Hysteresis) else None


def _span(comparator: Comparator, which: Which) -> Voltage | None:
    return None if comparator.trip is None else getattr(comparator.trip, which)


def _nominal_v(span: Voltage | None) -> float | None:
    """The level, where a nominal value and no range is stated."""
    return span.typical if span is not None and span.is_nominal else None
