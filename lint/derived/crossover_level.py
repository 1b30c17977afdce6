"""The level that a crossover makes, corner by corner over the range of temperature."""

from __future__ import annotations

import itertools
from collections.abc import Callable, Iterator, Mapping, Sequence
from dataclasses import dataclass
from functools import cached_property
from typing import Final

from tidegate.lint.case import Case, Facts
from tidegate.lint.description.model.detector import Comparator, Crossover
from tidegate.lint.physics.crossing_point import (
    Device,
    branch_level_v,
    diode_connected_at,
    divider_crossing_v,
    junction_at,
    slope_factor_of_swing,
)

_POINTS: Final = 5
_FINER_POINTS: Final = 9
_REFINEMENTS: Final = 2
"""A level is all but straight over temperature: few points find the corner, finer ones the place of the extreme."""

Corner = Mapping[str, float]
DeviceAt = Callable[[Corner, float], Device]


@dataclass(frozen=True, slots=True)
class Place:
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


def divider_level(case: Case, comparator: Comparator) -> CrossoverLevel:
    """The level of a divider against a diode or a MOS device, which is the rising one.

    Every span is taken at its ends, at every temperature.
    Raises: MissingFactsError: where a fact is missing.
    """
    own, crossover = case.of(comparator), comparator.crossover
    assert crossover is not None
    ratio, offset_v = own.number("crossover.ratio"), own.most("crossover.offset")
    spans = {"resistance": _ends(own, "crossover.resistance"), "offset": (-offset_v, offset_v)}
    return _level(
        case, comparator, crossover, spans,
        lambda device, corner: divider_crossing_v(
            device, series_ohm=corner["resistance"], divider_ratio=ratio, offset_v=corner["offset"]
        ),
    )  # fmt: skip


def second_crossing_level(case: Case, comparator: Comparator) -> CrossoverLevel:
    """The supply at which a crude current, mirrored, overtakes the reference current it is compared with.

    Raises: MissingFactsError: where a fact is missing.
    """
    own, crossover = case.of(comparator), comparator.crossover
    assert crossover is not None
    mirror = own.number("crossover.mirror")
    spans = {
        "resistance": _ends(own, "crossover.resistance"),
        "reference current": _ends(own, "crossover.reference_current"),
    }
    return _level(
        case, comparator, crossover, spans,
        lambda device, corner: branch_level_v(
            device, series_ohm=corner["resistance"], current_a=corner["reference current"] / mirror
        ),
    )  # fmt: skip


def _level(
    case: Case, comparator: Comparator, crossover: Crossover, spans: dict[str, tuple[float, ...]],
    level_v: Callable[[Device, Corner], float],
) -> CrossoverLevel:  # fmt: skip
    whole = case.whole
    temperature_k = whole.least("conditions.junction_temperature"), whole.most("conditions.junction_temperature")
    crude = crossover.kind == "crude_current"
    by_diode = crossover.diode is not None and crossover.device is None if crude else crossover.kind == "divider_diode"
    device_spans, device_at = (_diode if by_diode else _mos)(case, comparator)
    case.settle()
    return CrossoverLevel(
        spans={**device_spans, **spans},
        temperature_k=temperature_k,
        at_v=lambda corner, t_k: level_v(device_at(corner, t_k), corner),
    )


def _diode(case: Case, comparator: Comparator) -> tuple[dict[str, tuple[float, ...]], DeviceAt]:
    name = case.of(comparator).must("crossover.diode")
    process = case.description.process
    assert process is not None  # the loader refuses a name that points nowhere
    facts = case.part(process.diodes[name], f"process.diodes.{name}")
    spans = {"saturation current": _ends(facts, "saturation")}
    t_ref_k, gap_ev = facts.middle("reference_temperature"), facts.middle("band_gap")
    exponent, emission = facts.number("temperature_exponent"), facts.number("emission")
    return spans, lambda corner, t_k: junction_at(
        t_k=t_k, saturation_ref_a=corner["saturation current"], t_ref_k=t_ref_k, temperature_exponent=exponent,
        gap_ev=gap_ev, emission=emission,
    )  # fmt: skip


def _mos(case: Case, comparator: Comparator) -> tuple[dict[str, tuple[float, ...]], DeviceAt]:
    own = case.of(comparator)
    name = own.must("crossover.device")
    process = case.description.process
    assert process is not None  # the loader refuses a name that points nowhere
    facts = case.part(process.devices[name], f"process.devices.{name}")
    spans = {
        "threshold": _ends(facts, "threshold"),
        "threshold slope": _ends(facts, "threshold_slope"),
        "gain": _ends(own, "crossover.gain"),
    }
    t_ref_k, swing_v = facts.middle("reference_temperature"), facts.middle("swing")
    case.settle()
    slope_factor = slope_factor_of_swing(swing_v_per_decade=swing_v, t_k=t_ref_k)
    return spans, lambda corner, t_k: diode_connected_at(
        t_k=t_k, threshold_ref_v=corner["threshold"], t_ref_k=t_ref_k, fall_v_per_k=corner["threshold slope"],
        slope_factor=slope_factor, gain_a_per_v2=corner["gain"],
    )  # fmt: skip


def _ends(facts: Facts, fact: str) -> tuple[float, ...]:
    """Least and greatest value; one where they are the same."""
    least, most = facts.least(fact), facts.most(fact)
    return (least,) if least == most else (least, most)
