"""The level that a crossover makes over every corner and temperature at once; needs NumPy.

A review solves the same corners one by one (``crossover_level``), so that it need not load NumPy.
"""

from __future__ import annotations

from collections.abc import Callable
from typing import Final, TypeVar

import msgspec
import numpy as np

from tidegate.lint.case import Case
from tidegate.lint.derived.asking import NoAnswerError, Unknown, ask
from tidegate.lint.derived.crossover.crossover_facts import (
    Crossing,
    CrossoverFacts,
    JunctionFacts,
    TransistorFacts,
    release_facts,
    second_crossing_facts,
)
from tidegate.lint.derived.crossover.crossover_words import NO_LEVEL
from tidegate.lint.derived.levels.at_code import as_shipped
from tidegate.lint.derived.levels.follower_lines import FollowerLine, follower_lines, most_demanding
from tidegate.lint.derived.levels.follower_supplies import follower_supplies
from tidegate.lint.derived.levels.trip_levels import has_no_hysteresis, hysteresis_window
from tidegate.lint.description.model.description import Description
from tidegate.lint.description.model.detector import Comparator
from tidegate.lint.graph.dependency import Graph
from tidegate.lint.physics import crossover, mos_threshold, silicon
from tidegate.lint.physics.array_domain import FloatArray, Reals
from tidegate.lint.physics.corner_spread import TEMPERATURE, Corner, LevelOf, Spread, spread_over_corners
from tidegate.lint.physics.crossover import NoCrossingError
from tidegate.lint.physics.domain import DomainError
from tidegate.lint.physics.fed_branch import Branch, DiodeBranch, MosBranch
from tidegate.lint.physics.resistor import resistance_ohm

_POINTS: Final = 33
"""Temperatures of the first grid: about 5 K apart over the usual range."""

_A = TypeVar("_A")


class Tracking(msgspec.Struct, frozen=True):
    """The least room between the level and what must work once it lets go, at equal temperature and corner.

    Symbols:
        margin            the room over all corners, in V
        element           what needs most where the room is least
        need_v         V  the supply that it needs there
        hysteresis_v   V  greatest hysteresis, which the falling level lies below
    """

    margin: Spread
    element: str
    need_v: float
    hysteresis_v: float


class SecondCrossing(msgspec.Struct, frozen=True):
    """Where a crude current overtakes the reference again, and the highest supply in service.

    Symbols:
        level           supply of the second crossing over all corners, in V
        in_service_v V  highest supply delivered, with half the ripple
    """

    level: Spread
    in_service_v: float


class CrossoverSweep(msgspec.Struct, frozen=True):
    """What the components of a crossover make; None where there is no such question."""

    level: Spread | Unknown
    nominal_k: float | None
    tracking: Tracking | Unknown | None
    second: SecondCrossing | Unknown | None


def crossover_sweep(description: Description, graph: Graph, comparator: Comparator) -> CrossoverSweep:
    """Answer for one detector with a crossover; what is not known is said so."""
    assert comparator.crossover is not None

    def answer(question: Callable[[Case], _A]) -> _A | Unknown:
        return ask(description, graph, comparator, lambda case: _within_range(lambda: question(case)))

    facts = answer(lambda case: release_facts(case, comparator))
    level = facts if isinstance(facts, Unknown) else answer(lambda _: _spread(facts, level_of(facts)))
    tracking = None
    if comparator.role == "power_on" and not isinstance(facts, Unknown) and not isinstance(level, Unknown):
        tracking = answer(lambda case: _tracking(case, comparator, facts))
    crude = comparator.crossover.kind == "crude_current"
    return CrossoverSweep(
        level=level,
        nominal_k=None if isinstance(facts, Unknown) else facts.nominal_k,
        tracking=tracking,
        second=answer(lambda case: _second(case, comparator)) if crude else None,
    )


def _within_range(work: Callable[[], _A]) -> _A:
    """What a function returns.

    Raises: DomainError: where a number on the way is more than a float can hold.
    """
    try:
        with np.errstate(over="raise", divide="raise", invalid="raise"):
            return work()
    except FloatingPointError:
        raise DomainError("the facts of the crossover lead beyond the range of a number") from None


def _spread(facts: CrossoverFacts, level_v: LevelOf) -> Spread:
    try:
        return spread_over_corners(
            level_v,
            nominal={**facts.nominal, TEMPERATURE: facts.nominal_k},
            spans=facts.spans,
            temperature_k=facts.temperature_k,
            temperature_points=_POINTS,
        )
    except NoCrossingError:
        raise NoAnswerError(NO_LEVEL[facts.crossing]) from None


def _tracking(case: Case, comparator: Comparator, facts: CrossoverFacts) -> Tracking | None:
    bounds, kept_v = (
        follower_supplies(case, comparator),
        (0.0 if has_no_hysteresis(comparator) else hysteresis_window(case, as_shipped(case, comparator)).most_v),
    )
    if not bounds:
        return None
    lines, cold_k, trip_v = follower_lines(case, bounds), facts.temperature_k[0], level_of(facts)

    def room_v(corner: Corner) -> FloatArray:
        return np.asarray(trip_v(corner) - kept_v - _needs_v(lines, corner[TEMPERATURE], cold_k))

    margin = _spread(facts, room_v)
    at_k = margin.least_at[TEMPERATURE]
    worst = most_demanding(lines, at_k, cold_k)
    return Tracking(margin, worst.element, worst.needs_v(at_k, cold_k), kept_v)


def _needs_v(lines: list[FollowerLine], t_k: FloatArray, cold_k: float) -> FloatArray:
    most_v = np.full_like(t_k, -np.inf)
    for line in lines:
        most_v = np.maximum(most_v, line.at_cold_v + line.slope_v_per_k * (t_k - cold_k))
    return most_v


def _second(case: Case, comparator: Comparator) -> SecondCrossing:
    rail = case.of(case.description.rails[comparator.watches])
    facts, in_service_v = (
        second_crossing_facts(case, comparator),
        rail.delivered.most() + rail.ripple.peak_to_peak.most() / 2,
    )
    return SecondCrossing(_spread(facts, level_of(facts)), in_service_v)


def level_of(facts: CrossoverFacts) -> LevelOf:
    """The level of a crossing in V as a function of arrays of its parameters and of the temperature."""

    def level_v(corner: Corner) -> FloatArray:
        branch = _branch(facts, corner)
        if facts.crossing is Crossing.DIVIDER:
            return _divider_v(branch, facts.ratio, corner["offset"])
        current_a = corner["reference current"]
        if facts.crossing is Crossing.CRUDE:
            return crossover.crude_overtakes_v(branch, mirror_ratio=facts.ratio, regulated_a=current_a)
        return crossover.reference_overtakes_v(
            branch,
            mirror_ratio=facts.ratio,
            start_v=corner["reference start"],
            rise_v=corner["reference rise"],
            regulated_a=current_a,
        )

    return level_v


def _divider_v(branch: Branch, ratio: float, offset_v: Reals) -> FloatArray:
    if isinstance(branch, DiodeBranch):
        return crossover.divider_diode_trip_v(branch, divider_ratio=ratio, offset_v=offset_v)
    assert isinstance(branch, MosBranch)
    return crossover.divider_mos_trip_v(branch, divider_ratio=ratio, offset_v=offset_v)


def _branch(facts: CrossoverFacts, corner: Corner) -> Branch:
    series_ohm = _series_ohm(facts, corner)
    if isinstance(facts.device, JunctionFacts):
        return _diode_branch(facts.device, corner, series_ohm)
    return _mos_branch(facts.device, corner, series_ohm)


def _diode_branch(device: JunctionFacts, corner: Corner, series_ohm: FloatArray) -> DiodeBranch:
    t_k = corner[TEMPERATURE]
    saturation_a = silicon.saturation_current_a(
        t_k=t_k,
        is_ref_a=corner["saturation current"],
        t_ref_k=device.t_ref_k,
        xti=device.temperature_exponent / device.emission,
        gap_ev=device.gap_ev / device.emission,
    )
    return DiodeBranch(series_ohm, saturation_a, np.asarray(device.emission * silicon.thermal_voltage_v(t_k=t_k)))


def _mos_branch(device: TransistorFacts, corner: Corner, series_ohm: FloatArray) -> MosBranch:
    t_k = corner[TEMPERATURE]
    return MosBranch(
        series_ohm=series_ohm,
        threshold_v=mos_threshold.threshold_linear_v(
            t_k=t_k,
            threshold_ref_v=corner["threshold"],
            t_ref_k=device.t_ref_k,
            fall_v_per_k=corner["threshold slope"],
        ),
        slope_factor=device.slope_factor,
        specific_a=mos_threshold.specific_current_a(t_k=t_k, gain=corner["gain"], slope_factor=device.slope_factor),
        thermal_v=silicon.thermal_voltage_v(t_k=t_k),
    )


def _series_ohm(facts: CrossoverFacts, corner: Corner) -> FloatArray:
    if facts.resistor_ref_k is None:
        return corner["resistance"]
    return resistance_ohm(
        t_k=corner[TEMPERATURE],
        r_ref_ohm=corner["resistance"],
        t_ref_k=facts.resistor_ref_k,
        tc1_per_k=corner["tc1"],
        tc2_per_k2=corner["tc2"],
    )
