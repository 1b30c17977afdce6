"""What the hysteresis of a comparator must cover, at the rail: one sum of named terms, noise counted in two ways.

With noise at its coverage it is what the least hysteresis must be for one crossing to give one decision; with the
distance at which noise trips it seldom enough, what it must be over a service life.
"""

from __future__ import annotations

from collections.abc import Iterator
from functools import partial

import msgspec

from tidegate.lint.account import Sum, Term, plus
from tidegate.lint.case import Case
from tidegate.lint.derived.disturbance.disturbance import neighbour_terms, unsaid_neighbours
from tidegate.lint.derived.disturbance.doubt import can_be
from tidegate.lint.derived.levels.requirements import step_v
from tidegate.lint.derived.levels.trip_levels import falling_window, rising_window
from tidegate.lint.derived.policy import coverage, false_trips
from tidegate.lint.description.model.detector import Comparator
from tidegate.lint.facts.views.supply import RailFacts
from tidegate.lint.physics.domain import product
from tidegate.lint.physics.noise import false_trip_distance_v

_DIP = "dip of the ramp"


def need_at_coverage(case: Case, comparator: Comparator, *, placed: bool = True) -> Sum:
    """All that moves the supply or the level while it should rest, noise at its coverage, in V at the rail.

    Raises: DomainError: where a formula refuses its numbers.
    """
    rms = case.of(comparator).noise.rms
    return _need(case, comparator, plus("noise", lambda: product(coverage(case), rms.most()), of=rms), placed=placed)


def need_over_life(case: Case, comparator: Comparator, *, placed: bool = True) -> Sum:
    """The same with the distance at which noise trips it no more often than accepted, in V at the rail.

    Raises: DomainError: where a formula refuses its numbers.
    """
    rms = case.of(comparator).noise.rms
    distance = plus("distance from noise", partial(_distance_v, case, comparator), of=rms, floor=0.0)
    return _need(case, comparator, distance, placed=placed)


def _distance_v(case: Case, comparator: Comparator) -> float:
    noise = case.of(comparator).noise
    sigma_v = noise.rms.most()
    if sigma_v == 0.0:
        return 0.0
    return false_trip_distance_v(
        sigma_v=sigma_v, bandwidth_hz=noise.bandwidth.most(), life_s=case.whole.conditions.service_life.most(),
        allowed_trips=false_trips(case),
    )  # fmt: skip


def _need(case: Case, comparator: Comparator, noise: Term, *, placed: bool) -> Sum:
    """``placed`` says whether there are levels between which a dip can fall; without, one counts wherever it is."""
    rail = case.of(case.description.rails[comparator.watches])
    gate = _Dip(case, comparator, rail)
    need = case.sum(
        plus("ripple", rail.ripple.peak_to_peak.most, of=rail.ripple.peak_to_peak),
        plus(_DIP, gate.counts_v if placed else rail.dip.depth.most, of=rail.dip.depth),
        *_droop(comparator, rail),
        *neighbour_terms(case, comparator),
        *unsaid_neighbours(case, comparator),
        noise,
    )
    return msgspec.structs.replace(need, loose=need.loose + gate.loose_v)


def _droop(comparator: Comparator, rail: RailFacts) -> Iterator[Term]:
    """Droop of the supply when reset is released: for an over-voltage detector, away from its level."""
    if comparator.role != "over_voltage":
        yield plus("droop at release", lambda: step_v(rail), of=rail.load_step)


class _Dip:
    """The non-monotonic dip of the ramp: it counts where it can fall between the levels."""

    def __init__(self, case: Case, comparator: Comparator, rail: RailFacts) -> None:
        self._case = case
        self._comparator = comparator
        self._facts = rail.dip
        self.loose_v = 0.0
        """What counts of it by extremes alone that are not known to meet."""

    def counts_v(self) -> float:
        """How deep it is, in V; nothing where it cannot fall between the levels."""
        depth_v = self._facts.depth.most()
        return depth_v if depth_v > 0.0 and can_be(self._case, partial(self._can_fall_between, depth_v)) else 0.0

    def _can_fall_between(self, depth_v: float) -> bool:
        down = falling_window(self._case, self._comparator).end("least")
        up = rising_window(self._case, self._comparator).end("most")
        begins_v, lowest_v = self._facts.at.most(), self._facts.at.least() - depth_v
        if not (lowest_v <= up.value and begins_v >= down.value):
            return False
        if not (lowest_v <= up.value - up.loose and begins_v >= down.value + down.loose):
            self.loose_v = depth_v
        return True
