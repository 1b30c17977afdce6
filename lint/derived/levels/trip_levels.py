"""Where a comparator's trip levels and its hysteresis lie: at the code it ships with, where they are chosen by code."""

from __future__ import annotations

from functools import partial
from typing import Final, Literal

from tidegate.lint.case import Case, Facts
from tidegate.lint.derived.answered_once import answered_once
from tidegate.lint.derived.disturbance.input_share import input_share
from tidegate.lint.derived.levels.at_code import as_far_as_said, as_shipped
from tidegate.lint.description.model.detector import Comparator, Contributor, Hysteresis
from tidegate.lint.physics import tolerance
from tidegate.lint.physics.tolerance import Kind, refer_offset_to_rail_v, refer_relative_to_level_v
from tidegate.lint.physics.trip_window import (
    Combination,
    Window,
    combined_error_v,
    window_from_contributors,
    window_from_falling,
    window_from_ranges,
    window_from_rising,
)
from tidegate.lint.quantity import Voltage

_PLAIN_SIGMA: Final = 1.0
_Level = Literal["rising", "falling"]


@answered_once
def falling_window(case: Case, comparator: Comparator) -> Window:
    """Where the falling level lies, in V at the rail."""
    return _level_window(case, as_shipped(case, comparator), "falling")


@answered_once
def rising_window(case: Case, comparator: Comparator) -> Window:
    """Where the rising level lies, in V at the rail."""
    return _level_window(case, as_shipped(case, comparator), "rising")


@answered_once
def hysteresis_window(case: Case, comparator: Comparator) -> Window:
    """Where the difference between rising and falling level lies, in V at the rail.

    As stated where an amount is; else from the levels: errors that track move both and cancel.
    """
    facts = case.of(comparator)
    if _amount(comparator) is not None:
        least_v, most_v = facts.least("hysteresis.amount"), facts.most("hysteresis.amount")
        case.settle()
        return Window(least_v, most_v)
    comparator = as_shipped(case, comparator)
    rising, falling = _span(comparator, "rising"), _span(comparator, "falling")
    if rising is None or falling is None:
        facts.lacks("hysteresis.amount")
        case.settle()
    up_v, down_v = _nominal_v(rising), _nominal_v(falling)
    if up_v is not None and down_v is not None:
        contributors, coverage, method = level_errors(case, comparator, max(up_v, down_v), tracking_matters=True)
        return window_from_contributors(
            rising_v=up_v, falling_v=down_v, contributors=contributors, hysteresis_error_v=0.0, coverage=coverage,
            method=method,
        ).hysteresis  # fmt: skip
    up, down, tracked = case.gather(
        lambda: rising_window(case, comparator),
        lambda: falling_window(case, comparator),
        lambda: bool(facts.must("tracked")),
    )
    return window_from_ranges(rising=up, falling=down, hysteresis=None, tracked=tracked).hysteresis


def typical_hysteresis_v(comparator: Comparator) -> float | None:
    """Hysteresis as far as it is said at all, in V: what is stated of it, or how far apart the levels typically are.

    None where it is not said, or not at which code the comparator ships.
    """
    amount = _amount(comparator)
    if amount is not None:
        return next((size_v for size_v in (amount.middle, amount.least, amount.most) if size_v is not None), None)
    shipped = as_far_as_said(comparator)
    rising, falling = _span(shipped, "rising"), _span(shipped, "falling")
    if rising is None or falling is None or rising.middle is None or falling.middle is None:
        return None
    return rising.middle - falling.middle


def levels_bound_hysteresis(comparator: Comparator, which: _Level, end: Literal["least", "most"]) -> bool:
    """Whether the levels say how far apart they can be: no amount is stated, or this end of this level is a bound.

    A level that is bounded is not the other one and the hysteresis once more.
    """
    span = _span(as_far_as_said(comparator), which)
    bounded = span is not None and _nominal_v(span) is None and getattr(span, end) is not None
    return bounded or _amount(comparator) is None


def has_no_hysteresis(comparator: Comparator) -> bool:
    """Whether the description says that there is none: outright, as an amount of 0 V, or as two equal levels."""
    if comparator.hysteresis == "none":
        return True
    amount = _amount(comparator)
    if amount is not None:
        return amount.most == 0.0
    shipped = as_far_as_said(comparator)
    rising, falling = _span(shipped, "rising"), _span(shipped, "falling")
    return rising is not None and falling is not None and rising.middle is not None and rising.middle == falling.middle


def _level_window(case: Case, comparator: Comparator, which: _Level) -> Window:
    """A level as stated: a nominal value with the error contributors about it, or a range as it stands.

    An end that is not stated is the other level and the hysteresis between them. An end that is stated stays where it
    is: a bounded level is not the other one and the hysteresis once more.
    """
    stated = _span(comparator, which)
    nominal_v = _nominal_v(stated)
    if nominal_v is not None:
        contributors, coverage, method = level_errors(case, comparator, nominal_v, tracking_matters=False)
        error_v = combined_error_v(contributors, coverage=coverage, method=method)
        return Window(nominal_v - error_v, nominal_v + error_v)
    least_v, most_v = (None, None) if stated is None else (stated.least, stated.most)
    if least_v is not None and most_v is not None:
        return Window(least_v, most_v)
    reached = _from_other_level(case, comparator, which)
    return Window(reached.least_v if least_v is None else least_v, reached.most_v if most_v is None else most_v)


def _from_other_level(case: Case, comparator: Comparator, which: _Level) -> Window:
    """A level from the other one, which must stand by itself, and the hysteresis, which must be stated."""
    other: _Level = "rising" if which == "falling" else "falling"
    span = _span(comparator, other)
    stands = span is not None and (_nominal_v(span) is not None or None not in (span.least, span.most))
    if not stands or _amount(comparator) is None:
        facts, stated = case.of(comparator), _span(comparator, which)
        level = f"{_stands_at(case, comparator)}.{which}"
        if stated is None:
            facts.lacks(level)
        else:
            facts.least(level)
            facts.most(level)
        case.settle()
    base, apart = case.gather(
        lambda: _level_window(case, comparator, other), lambda: hysteresis_window(case, comparator)
    )
    if which == "falling":
        return window_from_rising(rising=base, hysteresis=apart).falling
    return window_from_falling(falling=base, hysteresis=apart).rising


def _stands_at(case: Case, comparator: Comparator) -> str:
    """Where the levels of a detector at some code stand in the description: ``trip``, or ``codes.b``."""
    codes = case.description.comparators[comparator.id].codes.items()
    return next((f"codes.{code}" for code, trip in codes if trip is comparator.trip), "trip")


def _amount(comparator: Comparator) -> Voltage | None:
    return comparator.hysteresis.amount if isinstance(comparator.hysteresis, Hysteresis) else None


def _span(comparator: Comparator, which: _Level) -> Voltage | None:
    return None if comparator.trip is None else getattr(comparator.trip, which)


def _nominal_v(span: Voltage | None) -> float | None:
    """The level, where a nominal value and no range is stated."""
    return None if span is None or span.least != span.most else span.typical


def level_errors(
    case: Case, comparator: Comparator, level_v: float, *, tracking_matters: bool
) -> tuple[list[tolerance.Contributor], float, Combination]:
    """What moves a level that lies at ``level_v``, at which coverage, and how it is combined."""
    facts, whole = case.of(comparator), case.whole
    if not comparator.errors:
        facts.lacks("errors")
    sizes = [
        partial(_contributor, case, comparator, name, level_v, tracking_matters=tracking_matters)
        for name in comparator.errors
    ]
    conditions = case.description.conditions
    squares = conditions is not None and conditions.combine == "root_sum_square"
    covered = squares or any(error.is_ == "sigma" for error in comparator.errors.values())
    contributors, method, coverage = case.gather(
        lambda: case.gather_all(sizes),
        lambda: Combination[whole.must("conditions.combine").upper()],
        lambda: whole.number("conditions.coverage") if covered else _PLAIN_SIGMA,
    )
    return contributors, coverage, method


def _contributor(
    case: Case, comparator: Comparator, name: str, level_v: float, *, tracking_matters: bool
) -> tolerance.Contributor:
    error, facts, path = comparator.errors[name], case.of(comparator), f"errors.{name}"
    tracks = error.tracks if error.tracks is not None else comparator.tracked
    if tracks is None and tracking_matters:
        facts.lacks(f"{path}.tracks")
    size_v, kind = case.gather(
        lambda: _size_at_rail_v(case, comparator, error, path, level_v), lambda: Kind(facts.must(f"{path}.is"))
    )
    return tolerance.Contributor(
        name=name,
        at_rail_v=size_v,
        kind=kind,
        coverage=_PLAIN_SIGMA if kind is Kind.SIGMA else None,
        rectangular=False,
        tracks=bool(tracks),
    )


def _size_at_rail_v(case: Case, comparator: Comparator, error: Contributor, path: str, level_v: float) -> float:
    """The part that scales with the level and the part that does not; one cause moves both the same way."""
    facts: Facts = case.of(comparator)
    share = facts.most(f"{path}.share") if error.share is not None else 0.0
    amount_v = facts.most(f"{path}.amount") if error.amount is not None or error.share is None else 0.0
    divided = error.amount is not None and not (comparator.divider is None and comparator.crossover is None)
    ratio = input_share(case, comparator) if divided and facts.must(f"{path}.at") == "input" else 1.0
    case.settle()
    return refer_relative_to_level_v(share=share, level_v=level_v) + refer_offset_to_rail_v(
        offset_v=amount_v, divider_ratio=ratio
    )
