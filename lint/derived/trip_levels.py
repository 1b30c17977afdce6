"""Where a comparator's trip levels and its hysteresis lie."""

from __future__ import annotations

from typing import Final

from tidegate.lint.case import Case, Facts
from tidegate.lint.description.model.detector import Comparator, Contributor, Hysteresis
from tidegate.lint.physics import tolerance
from tidegate.lint.physics.tolerance import Kind, refer_offset_to_rail_v, refer_relative_to_level_v
from tidegate.lint.physics.trip_window import Combination, Window, combined_error_v
from tidegate.lint.quantity import Voltage

_PLAIN_SIGMA: Final = 1.0


def falling_window(case: Case, comparator: Comparator) -> Window:
    """Where the falling level lies, in V at the rail."""
    return _level_window(case, comparator, "falling")


def rising_window(case: Case, comparator: Comparator) -> Window:
    """Where the rising level lies, in V at the rail."""
    return _level_window(case, comparator, "rising")


def hysteresis_window(case: Case, comparator: Comparator) -> Window:
    """Where the difference between rising and falling level lies, in V at the rail.

    As stated where an amount is; else from the levels: errors that track move both and cancel.
    """
    facts = case.of(comparator)
    if isinstance(comparator.hysteresis, Hysteresis) and comparator.hysteresis.amount is not None:
        least_v, most_v = facts.least("hysteresis.amount"), facts.most("hysteresis.amount")
        case.settle()
        return Window(least_v, most_v)
    rising, falling = _nominal(comparator, "rising"), _nominal(comparator, "falling")
    if rising is not None and falling is not None:
        apart_v = 2.0 * _error_v(case, comparator, max(rising, falling), untracked_only=True)
        return _ordered(rising - falling - apart_v, rising - falling + apart_v)
    up, down = rising_window(case, comparator), falling_window(case, comparator)
    if facts.must("tracked"):
        return _ordered(up.least_v - down.least_v, up.most_v - down.most_v)
    return _ordered(up.least_v - down.most_v, up.most_v - down.least_v)


def _ordered(first_v: float, second_v: float) -> Window:
    return Window(min(first_v, second_v), max(first_v, second_v))


def _level_window(case: Case, comparator: Comparator, which: str) -> Window:
    """A level as stated: a range as it stands, a nominal value with the error contributors about it.

    A level that is not given is the other one and the hysteresis between them.
    """
    facts = case.of(comparator)
    other = "rising" if which == "falling" else "falling"
    stated = _span(comparator, which)
    if stated is None and _span(comparator, other) is not None and isinstance(comparator.hysteresis, Hysteresis):
        base, apart = _level_window(case, comparator, other), hysteresis_window(case, comparator)
        if which == "falling":
            return Window(base.least_v - apart.most_v, base.most_v - apart.least_v)
        return Window(base.least_v + apart.least_v, base.most_v + apart.most_v)
    facts.must("trip")
    facts.must(f"trip.{which}")
    nominal_v = _nominal(comparator, which)
    if nominal_v is not None:
        error_v = _error_v(case, comparator, nominal_v, untracked_only=False)
        return Window(nominal_v - error_v, nominal_v + error_v)
    least_v, most_v = facts.least(f"trip.{which}"), facts.most(f"trip.{which}")
    case.settle()
    return Window(least_v, most_v)


def _span(comparator: Comparator, which: str) -> Voltage | None:
    return None if comparator.trip is None else getattr(comparator.trip, which)


def _nominal(comparator: Comparator, which: str) -> float | None:
    """The level, where a nominal value and no range is stated."""
    span = _span(comparator, which)
    if span is None or span.typical is None:
        return None
    ranged = span.least != span.most
    return None if ranged else span.typical


def _error_v(case: Case, comparator: Comparator, level_v: float, *, untracked_only: bool) -> float:
    """The combined error of one level, in V at the rail."""
    facts = case.of(comparator)
    if not comparator.errors:
        facts.lacks("errors")
        case.settle()
    contributors = [
        _contributor(case, facts, comparator, name, level_v, needs_tracking=untracked_only)
        for name in comparator.errors
    ]
    whole = case.whole
    method = Combination[whole.must("conditions.combine").upper()]
    needs_coverage = method is Combination.ROOT_SUM_SQUARE or any(e.is_ == "sigma" for e in comparator.errors.values())
    coverage = whole.number("conditions.coverage") if needs_coverage else _PLAIN_SIGMA
    case.settle()
    chosen = [c for c in contributors if not (untracked_only and c.tracks)]
    return combined_error_v(chosen, coverage=coverage, method=method)


def _contributor(
    case: Case, facts: Facts, comparator: Comparator, name: str, level_v: float, *, needs_tracking: bool
) -> tolerance.Contributor:
    error = comparator.errors[name]
    path = f"errors.{name}"
    size_v = _size_at_rail_v(facts, comparator, error, path, level_v)
    kind = Kind(facts.must(f"{path}.is"))
    tracks = error.tracks if error.tracks is not None else comparator.tracked
    if tracks is None and needs_tracking:
        facts.lacks(f"{path}.tracks")
    case.settle()
    return tolerance.Contributor(
        name=name,
        at_rail_v=size_v,
        kind=kind,
        coverage=_PLAIN_SIGMA if kind is Kind.SIGMA else None,
        rectangular=False,
        tracks=bool(tracks),
    )


def _size_at_rail_v(facts: Facts, comparator: Comparator, error: Contributor, path: str, level_v: float) -> float:
    if error.share is not None and error.amount is None:
        return refer_relative_to_level_v(share=facts.most(f"{path}.share"), level_v=level_v)
    size_v = facts.most(f"{path}.amount")
    if facts.must(f"{path}.at") == "rail" or comparator.divider is None:
        return size_v
    return refer_offset_to_rail_v(offset_v=size_v, divider_ratio=facts.number("divider.ratio"))
