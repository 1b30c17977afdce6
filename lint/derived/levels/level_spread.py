"""How far a trip level may lie from its nominal, wherever that is placed."""

from __future__ import annotations

import math
from typing import Final

import msgspec
from msgspec.structs import replace

from tidegate.lint.case import Case
from tidegate.lint.derived.asking import NoAnswerError
from tidegate.lint.derived.levels.trip_levels import falling_window, hysteresis_window, level_errors, rising_window
from tidegate.lint.description.model.detector import Comparator, Hysteresis
from tidegate.lint.physics.domain import DomainError
from tidegate.lint.physics.tolerance import Contributor
from tidegate.lint.physics.trip_window import Combination, combined_error_v
from tidegate.lint.quantity import Voltage

_MOST_STEPS: Final = 200
_SETTLED: Final = 1e-15
_RESTED: Final = 1e-9
"""Share of the level by which the last step may still have moved it: rounding moves it by less."""


class PlacedError(msgspec.Struct, frozen=True):
    """An error contributor, for any place of the level: a part that stays, in V, and a share of the level."""

    at_zero: Contributor
    share: float

    def at(self, level_v: float) -> Contributor:
        """The contributor where the level lies at ``level_v``."""
        return replace(self.at_zero, at_rail_v=self.at_zero.at_rail_v + self.share * abs(level_v))

    def scaled(self, factor: float) -> PlacedError:
        """The same error, larger or smaller."""
        smaller = replace(self.at_zero, at_rail_v=self.at_zero.at_rail_v * factor)
        return PlacedError(smaller, self.share * factor)


class LevelSpread(msgspec.Struct, frozen=True):
    """Error of one level either way: a fixed half-width, and contributors that may scale with the level.

    The contributors are those of a level ``above_base_v`` further down: that of the other level, where this one is
    only stated as the other and the hysteresis.
    """

    half_v: float
    errors: tuple[PlacedError, ...]
    coverage: float
    method: Combination
    above_base_v: float

    def at_v(self, level_v: float) -> float:
        """Error of the level where its nominal lies at ``level_v``, in V."""
        moved = [error.at(level_v - self.above_base_v) for error in self.errors]
        return self.half_v + combined_error_v(moved, coverage=self.coverage, method=self.method)

    def lowest_nominal_v(self, floor_v: float) -> float:
        """The lowest nominal that stays at or above a floor, in V: V - E(V) = floor."""
        return self._nominal_v(floor_v, 1.0)

    def highest_nominal_v(self, ceiling_v: float) -> float:
        """The highest nominal that stays at or below a ceiling, in V: V + E(V) = ceiling."""
        return self._nominal_v(ceiling_v, -1.0)

    def _nominal_v(self, end_v: float, side: float) -> float:
        """Steps from the end by the error where the last step led; each step is smaller by the share of the level.

        Raises: DomainError: where they are not, and lead nowhere.
        """
        level_v = end_v
        for _ in range(_MOST_STEPS):
            before_v, level_v = level_v, end_v + side * self.at_v(level_v)
            if abs(level_v - before_v) <= _SETTLED * abs(level_v):
                break
        if not math.isfinite(level_v) or abs(level_v - before_v) > _RESTED * abs(level_v):
            raise DomainError("the errors must be finite, and their share well below 100 %: the level has no place")
        return level_v


class LevelSpreads(msgspec.Struct, frozen=True):
    """The spreads of both levels, how far apart they are, and where the description places them today, in V."""

    falling: LevelSpread
    rising: LevelSpread
    hysteresis_v: float
    falling_v: float | None
    rising_v: float | None
    ranged: bool
    """Whether a level is stated as a range: it is placed as if it moved without changing its width."""


def level_spreads(case: Case, comparator: Comparator) -> LevelSpreads:
    """The spreads of both levels, in the form in which the description states them.

    Raises:
        MissingFactsError: where an error, or what lies between the levels, is not given.
        NoAnswerError: where a crossover makes the level, and the description does not say where.
    """
    trip = comparator.trip
    down, up = (trip.falling, trip.rising) if trip is not None else (None, None)
    if down is None and up is None:
        if comparator.crossover is not None:
            raise NoAnswerError("its level is made by a crossover; state as trip where that puts it")
        own, (apart_v, _) = case.gather(lambda: _by_errors(case, comparator), lambda: _apart(case, comparator))
        return LevelSpreads(own, own, apart_v, None, None, ranged=False)
    falling, rising, (apart_v, apart_half_v) = case.gather(
        lambda: None if down is None else _stated(case, comparator, "falling", down),
        lambda: None if up is None else _stated(case, comparator, "rising", up),
        lambda: (0.0, 0.0) if down is not None and up is not None else _apart(case, comparator),
    )
    if falling is None:
        assert rising is not None
        spread, level_v = rising
        below = replace(spread, half_v=spread.half_v + apart_half_v, above_base_v=-apart_v)
        falling = below, level_v - apart_v
    if rising is None:
        spread, level_v = falling
        above = replace(spread, half_v=spread.half_v + apart_half_v, above_base_v=apart_v)
        rising = above, level_v + apart_v
    ranged = any(span is not None and not is_nominal(span) for span in (down, up))
    return LevelSpreads(falling[0], rising[0], rising[1] - falling[1], falling[1], rising[1], ranged)


def is_nominal(span: Voltage) -> bool:
    """Whether a level is stated as a nominal value, which takes the error contributors."""
    return span.typical is not None and span.least == span.most


def _apart(case: Case, comparator: Comparator) -> tuple[float, float]:
    """How far rising lies above falling, as it is stated: nominal and half its tolerance, in V."""
    if comparator.hysteresis == "none":
        return 0.0, 0.0
    if not isinstance(comparator.hysteresis, Hysteresis) or comparator.hysteresis.amount is None:
        case.of(comparator).lacks("hysteresis.amount")
        case.settle()
    window = hysteresis_window(case, comparator)
    return (window.least_v + window.most_v) / 2, (window.most_v - window.least_v) / 2


def _stated(case: Case, comparator: Comparator, which: str, span: Voltage) -> tuple[LevelSpread, float]:
    if is_nominal(span):
        assert span.typical is not None
        return _by_errors(case, comparator), span.typical
    window = (falling_window if which == "falling" else rising_window)(case, comparator)
    half_v = (window.most_v - window.least_v) / 2
    return LevelSpread(half_v, (), 1.0, Combination.WORST_CASE, 0.0), (window.most_v + window.least_v) / 2


def _by_errors(case: Case, comparator: Comparator) -> LevelSpread:
    at_zero, coverage, method = level_errors(case, comparator, 0.0, tracking_matters=False)
    at_one, _, _ = level_errors(case, comparator, 1.0, tracking_matters=False)
    errors = tuple(PlacedError(zero, one.at_rail_v - zero.at_rail_v) for zero, one in zip(at_zero, at_one, strict=True))
    return LevelSpread(0.0, errors, coverage, method, 0.0)
