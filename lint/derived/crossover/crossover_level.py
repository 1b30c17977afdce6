"""The level that a crossover makes, corner by corner over the range of temperature."""

from __future__ import annotations

import itertools
from collections.abc import Callable, Iterator, Mapping, Sequence
from functools import cached_property, partial
from typing import Final

import msgspec

from tidegate.lint.case import Case
from tidegate.lint.derived.answered_once import answered_once
from tidegate.lint.derived.crossover.crossover_facts import (
    Crossing,
    CrossoverFacts,
    JunctionFacts,
    release_facts,
    second_crossing_facts,
)
from tidegate.lint.description.model.detector import Comparator
from tidegate.lint.physics.crossing_point import branch_level_v, divider_crossing_v, reference_crossing_v
from tidegate.lint.physics.device_at_corner import Device, diode_connected_at, junction_at, series_ohm_at
from tidegate.lint.physics.domain import DomainError

_POINTS: Final = 5
_FINER_POINTS: Final = 9
_REFINEMENTS: Final = 3
"""A level is all but straight over temperature: few points find the corner, finer ones the place of the extreme."""

Corner = Mapping[str, float]


class Place(msgspec.Struct, frozen=True):
    """A level at one corner and temperature.

    Symbols:
        level_v  V  the level
        t_k      K  temperature
        corner      the value of every parameter
    """

    level_v: float
    t_k: float
    corner: Corner


class CrossoverLevel:
    """A level as a function of its parameters and of temperature, with the values that each takes at its corners."""

    def __init__(
        self,
        *,
        spans: Mapping[str, tuple[float, ...]],
        temperature_k: tuple[float, float],
        at_v: Callable[[Corner, float], float],
    ) -> None:
        self.spans = spans
        self.temperature_k = temperature_k
        self.at_v = at_v

    @cached_property
    def _grid(self) -> tuple[Place, ...]:
        """Every corner at temperatures over the whole range."""
        corners = [dict(zip(self.spans, values, strict=True)) for values in itertools.product(*self.spans.values())]
        return tuple(self._solved(corners, *self.temperature_k, _POINTS))

    def least(self) -> Place:
        """The lowest level over all corners and temperatures.

        Raises: NoCrossingError: a corner at which there is none.
        """
        return self.where_least(lambda place: place.level_v)

    def most(self) -> Place:
        """The highest level over all corners and temperatures.

        Raises: NoCrossingError: a corner at which there is none.
        """
        return self.where_least(lambda place: -place.level_v)

    def where_least(self, of: Callable[[Place], float]) -> Place:
        """Where something made of the level is least: every corner on a grid, the best corner on finer ones.

        Raises: NoCrossingError: a corner at which there is no level.
        """
        best = min(self._grid, key=of)
        (low_k, high_k), step_k = self.temperature_k, (self.temperature_k[1] - self.temperature_k[0]) / (_POINTS - 1)
        for _ in range(_REFINEMENTS):
            from_k, to_k = max(low_k, best.t_k - step_k), min(high_k, best.t_k + step_k)
            best = min(best, *self._solved([best.corner], from_k, to_k, _FINER_POINTS), key=of)
            step_k = (to_k - from_k) / (_FINER_POINTS - 1)
        return best

    def swings_v(self) -> list[tuple[str, float]]:
        """How far each parameter alone moves the level, all others in the middle of their spans; widest first."""
        middle = {name: (values[0] + values[-1]) / 2 for name, values in self.spans.items()}
        middle_k = sum(self.temperature_k) / 2
        alone = [place.level_v for place in self._solved([middle], *self.temperature_k, _POINTS)]
        found = [("temperature", max(alone) - min(alone))]
        for name, values in self.spans.items():
            if len(values) > 1:
                ends_v = [self.at_v({**middle, name: value}, middle_k) for value in values]
                found.append((name, max(ends_v) - min(ends_v)))
        return sorted(found, key=lambda swing: -swing[1])

    def _solved(self, corners: Sequence[Corner], low_k: float, high_k: float, points: int) -> Iterator[Place]:
        count = points if high_k > low_k else 1
        temperatures_k = [low_k + (high_k - low_k) * index / max(count - 1, 1) for index in range(count)]
        for corner in corners:
            for t_k in temperatures_k:
                yield Place(self.at_v(corner, t_k), t_k, corner)


@answered_once
def release_level(case: Case, comparator: Comparator) -> CrossoverLevel:
    """The level at which a detector lets go: of a divider, or of a reference current as it comes up.

    Every span is taken at its ends, at every temperature.
    Raises: MissingFactsError: where a fact is missing.
    """
    return level_of(release_facts(case, comparator))


def level_is_known(case: Case, comparator: Comparator) -> bool:
    """Whether the components say enough for the level of a crossover to be worked out at each temperature."""
    return case.if_known(lambda: release_facts(case, comparator)) is not None


@answered_once
def second_crossing_level(case: Case, comparator: Comparator) -> CrossoverLevel:
    """The supply at which a crude current, mirrored, overtakes the reference current it is compared with.

    Raises: MissingFactsError: where a fact is missing.
    """
    return level_of(second_crossing_facts(case, comparator))


def level_of(facts: CrossoverFacts) -> CrossoverLevel:
    """The level of a crossing, solved corner by corner; ``crossover_sweep`` solves all corners at once."""
    return CrossoverLevel(spans=facts.spans, temperature_k=facts.temperature_k, at_v=partial(_at_v, facts))


def _at_v(facts: CrossoverFacts, corner: Corner, t_k: float) -> float:
    """The level at one corner and temperature.

    Raises: DomainError: where a formula refuses its numbers, or they lead beyond what a float can hold.
    """
    try:
        return _crossing_v(facts, corner, t_k)
    except DomainError:
        raise
    except (ArithmeticError, ValueError):
        raise DomainError("the facts of the crossover lead beyond the range of a number") from None


def _crossing_v(facts: CrossoverFacts, corner: Corner, t_k: float) -> float:
    device, series_ohm = _device_at(facts, corner, t_k), _series_ohm(facts, corner, t_k)
    if facts.crossing is Crossing.DIVIDER:
        return divider_crossing_v(device, series_ohm=series_ohm, divider_ratio=facts.ratio, offset_v=corner["offset"])
    current_a = corner["reference current"]
    if facts.crossing is Crossing.CRUDE:
        return branch_level_v(device, series_ohm=series_ohm, current_a=current_a / facts.ratio)
    return reference_crossing_v(
        device,
        series_ohm=series_ohm,
        mirror_ratio=facts.ratio,
        start_v=corner["reference start"],
        rise_v=corner["reference rise"],
        regulated_a=current_a,
    )


def _device_at(facts: CrossoverFacts, corner: Corner, t_k: float) -> Device:
    device = facts.device
    if isinstance(device, JunctionFacts):
        return junction_at(
            t_k=t_k,
            saturation_ref_a=corner["saturation current"],
            t_ref_k=device.t_ref_k,
            temperature_exponent=device.temperature_exponent,
            gap_ev=device.gap_ev,
            emission=device.emission,
        )
    return diode_connected_at(
        t_k=t_k,
        threshold_ref_v=corner["threshold"],
        t_ref_k=device.t_ref_k,
        fall_v_per_k=corner["threshold slope"],
        slope_factor=device.slope_factor,
        gain_a_per_v2=corner["gain"],
    )


def _series_ohm(facts: CrossoverFacts, corner: Corner, t_k: float) -> float:
    if facts.resistor_ref_k is None:
        return corner["resistance"]
    return series_ohm_at(
        t_k=t_k,
        r_ref_ohm=corner["resistance"],
        t_ref_k=facts.resistor_ref_k,
        tc1_per_k=corner["tc1"],
        tc2_per_k2=corner["tc2"],
    )
