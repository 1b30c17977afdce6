"""Spread of a level over corners: every combination, the temperature in between, and what makes most of it."""

from __future__ import annotations

from collections.abc import Callable, Mapping, Sequence
from typing import Final, TypeAlias

import msgspec
import numpy as np
from numpy.typing import NDArray

from tidegate.lint.physics.array_domain import FloatArray
from tidegate.lint.physics.domain import DomainError, require_finite, require_positive

TEMPERATURE: Final = "t_k"
"""Name under which a level asks for the temperature, K."""

_REFINED_POINTS: Final = 9
_REFINEMENTS: Final = 5

Corner: TypeAlias = Mapping[str, FloatArray]
LevelOf: TypeAlias = Callable[[Corner], FloatArray]
_BestOf: TypeAlias = Callable[..., np.intp | NDArray[np.intp]]


class Swing(msgspec.Struct, frozen=True):
    """What one parameter does on its own, all others nominal.

    Symbols:
        name        the parameter
        least_v  V  lowest level over its span
        most_v   V  highest level over its span
    """

    name: str
    least_v: float
    most_v: float

    @property
    def width_v(self) -> float:
        """Distance between the two, V."""
        return self.most_v - self.least_v


class Spread(msgspec.Struct, frozen=True):
    """Window of a level over all corners.

    Symbols:
        least_v        V    lowest level
        nominal_v      V    level with everything nominal
        most_v         V    highest level
        least_at            parameters at the lowest level, temperature included
        most_at             parameters at the highest level, temperature included
        swings              one for each parameter, widest first
        slope_v_per_k  V/K  mean slope over the temperature range, all else nominal; None where that is one point
    """

    least_v: float
    nominal_v: float
    most_v: float
    least_at: Mapping[str, float]
    most_at: Mapping[str, float]
    swings: tuple[Swing, ...]
    slope_v_per_k: float | None


def factorial_corners(spans: Mapping[str, Sequence[float]]) -> dict[str, FloatArray]:
    """Every combination of the values of every parameter.

    Formula: the Cartesian product of the spans
    Symbols:
        spans  values of each parameter, at least one
    Returns: for each parameter an array over the corners, all of one length; the last parameter varies fastest.
    Valid: products that fit in memory.
    Source: definition.
    Raises: DomainError: a parameter with no value, or with one that is not finite.
    """
    for name, values in spans.items():
        if not values:
            raise DomainError(f"{name} must have at least one value")
        for value in values:
            require_finite(**{name: value})
    grid = np.meshgrid(*(np.asarray(v, dtype=np.float64) for v in spans.values()), indexing="ij")
    return {name: axis.ravel() for name, axis in zip(spans, grid, strict=True)}


def spread_over_corners(
    level_v: LevelOf,
    *,
    nominal: Mapping[str, float],
    spans: Mapping[str, Sequence[float]],
    temperature_k: tuple[float, float],
    temperature_points: int,
) -> Spread:
    """Window of a level over every combination of its parameters and every temperature.

    The level may be a margin: the trip level less the lowest supply something works at, both worked out at the corner
    asked for, gives the tracking between the two.

    Formula: least and most of level(corner, T) over the factorial corners and T1 <= T <= T2; T on a grid, then on
             finer ones about the best point of each corner
    Symbols:
        level_v                     gives the level in V for arrays of the parameters and of t_k, which broadcast
        nominal                     nominal value of every parameter, t_k among them
        spans                       values each parameter takes at its corners; t_k not among them
        temperature_k       T1, T2  K  lowest and highest temperature, > 0; they may be equal
        temperature_points          points of the first grid, at least 3
    Returns: the window in V, where its ends lie, and what each parameter does on its own.
    Valid: a level that is monotonic between the values of each span, the temperature excepted, and that has at most one
        turn within two steps of the first grid.
    Source: exhaustive search.
    Raises: DomainError: names that differ; fewer than 3 points; T2 below T1; what level_v raises.
    """
    least_k, most_k = temperature_k
    require_positive(least_k=least_k, most_k=most_k)
    if most_k < least_k:
        raise DomainError(f"most_k must be at least least_k, {least_k!r} (found {most_k!r})")
    if temperature_points < 3:
        raise DomainError(f"temperature_points must be at least 3 (found {temperature_points!r})")
    if set(nominal) != {*spans, TEMPERATURE}:
        raise DomainError(f"nominal must name the parameters of spans and {TEMPERATURE} (found {sorted(nominal)})")
    grid_k = np.linspace(least_k, most_k, temperature_points)

    def extremes(values: Mapping[str, Sequence[float]]) -> _Extremes:
        return _extremes(level_v, corners=factorial_corners(values), grid_k=grid_k)

    whole = extremes(spans)
    swings = [_temperature_swing(extremes({name: (nominal[name],) for name in spans}))]
    for moved in spans:
        swings.append(_swing(level_v, nominal=nominal, moved=moved, values=spans[moved]))
    ends_v = _level_at(level_v, nominal, {TEMPERATURE: np.array(temperature_k)})
    return Spread(
        least_v=whole.least_v,
        nominal_v=_level_at(level_v, nominal, {}).item(),
        most_v=whole.most_v,
        least_at=whole.least_at,
        most_at=whole.most_at,
        swings=tuple(sorted(swings, key=lambda swing: -swing.width_v)),
        slope_v_per_k=float((ends_v[1] - ends_v[0]) / (most_k - least_k)) if most_k > least_k else None,
    )


class _Extremes(msgspec.Struct, frozen=True):
    least_v: float
    most_v: float
    least_at: Mapping[str, float]
    most_at: Mapping[str, float]


def _level_at(level_v: LevelOf, nominal: Mapping[str, float], moved: Corner) -> FloatArray:
    corner = {name: np.atleast_1d(np.asarray(value, dtype=np.float64)) for name, value in nominal.items()}
    return np.atleast_1d(level_v({**corner, **moved}))


def _swing(level_v: LevelOf, *, nominal: Mapping[str, float], moved: str, values: Sequence[float]) -> Swing:
    levels_v = _level_at(level_v, nominal, {moved: np.asarray(values, dtype=np.float64)})
    return Swing(moved, least_v=float(np.min(levels_v)), most_v=float(np.max(levels_v)))


def _temperature_swing(alone: _Extremes) -> Swing:
    return Swing(TEMPERATURE, least_v=alone.least_v, most_v=alone.most_v)


def _extremes(level_v: LevelOf, *, corners: dict[str, FloatArray], grid_k: FloatArray) -> _Extremes:
    count = max((len(axis) for axis in corners.values()), default=1)
    t_k = np.broadcast_to(grid_k[:, np.newaxis], (len(grid_k), count))
    levels_v = _levels(level_v, corners, t_k)
    found: list[tuple[float, dict[str, float]]] = []
    for best_of in (np.argmin, np.argmax):
        best_v, best_k = _refined(level_v, corners, t_k, levels_v, best_of)
        index = int(best_of(best_v))
        at = {name: float(axis[index]) for name, axis in corners.items()}
        found.append((float(best_v[index]), {**at, TEMPERATURE: float(best_k[index])}))
    (least_v, least_at), (most_v, most_at) = found
    return _Extremes(least_v=least_v, most_v=most_v, least_at=least_at, most_at=most_at)


def _levels(level_v: LevelOf, corners: dict[str, FloatArray], t_k: FloatArray) -> FloatArray:
    return np.broadcast_to(level_v({**corners, TEMPERATURE: t_k}), t_k.shape)


def _refined(
    level_v: LevelOf, corners: dict[str, FloatArray], t_k: FloatArray, levels_v: FloatArray, best_of: _BestOf
) -> tuple[FloatArray, FloatArray]:
    """Best level of each corner over the temperature, and where; axis 0 is the temperature."""
    every = np.arange(t_k.shape[1])
    for _ in range(_REFINEMENTS):
        best = np.asarray(best_of(levels_v, axis=0))
        low_k, high_k = t_k[np.maximum(best - 1, 0), every], t_k[np.minimum(best + 1, len(t_k) - 1), every]
        t_k = np.linspace(low_k, high_k, _REFINED_POINTS)
        levels_v = _levels(level_v, corners, t_k)
    best = np.asarray(best_of(levels_v, axis=0))
    return levels_v[best, every], t_k[best, every]
