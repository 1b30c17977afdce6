"""What a line or its vias may carry on this chip: limits of the process, carried to its temperature and to a time."""

from __future__ import annotations

import math
from collections.abc import Callable
from typing import Final

import msgspec

from tidegate.lint.case import Case
from tidegate.lint.derived.at_corner import at_corner
from tidegate.lint.facts.reading import Better, MissingFactsError
from tidegate.lint.facts.view import Number
from tidegate.lint.facts.views.process import LayerFacts, LayerLimitFacts, ViaKindFacts, ViaLimitFacts
from tidegate.lint.physics import electromigration
from tidegate.lint.physics.electromigration import Exposure, Wear
from tidegate.lint.quantity import Dimension, show

_SAME: Final = 1e-9  # far above what rounding leaves, far below what a process tells apart
_ANY: Final = 1.0
"""What stands for a constant of the law where it changes nothing."""

Seconds = Callable[[], float]


class StatedLimit(msgspec.Struct, frozen=True):
    """A direct current that the process states for the temperature and life of an entry of one of its tables.

    In the unit in which it is stated: A for each via or narrow line, A/m for each width of a line.
    """

    dc: Number
    entry: LayerLimitFacts | ViaLimitFacts

    def text(self, case: Case) -> str:
        """Under which conditions it is stated, and whether it is carried from there."""
        stated_k, hottest_k = self._temperatures_k(case)
        stated_s, life_s = self.entry.life.least(), case.whole.conditions.service_life.most()
        stated = f"{show(stated_k, Dimension.TEMPERATURE)} and {show(stated_s, Dimension.DURATION)}"
        if _is_same(stated_k, hottest_k) and _is_same(stated_s, life_s):
            return f"limit of {stated}"
        return f"limit carried from {stated} to {show(hottest_k, Dimension.TEMPERATURE)} by Black's law"

    def carried(self, case: Case, time_s: Seconds) -> float:
        """The current that may flow for so long at the hottest junction of this chip, in the unit of the limit.

        A constant of the law that is not given stands at its least and at its most favourable: a small activation
        energy gains a cooler chip least, and costs a hotter one least.
        """
        if time_s() == 0.0:
            return math.inf
        stated = self.dc.least()
        if stated in (0.0, math.inf):
            return stated

        def here() -> float:
            stated_k, hottest_k = self._temperatures_k(case)
            stated_life_s, used_s = self.entry.life.least(), time_s()
            energy_ev, exponent = self._energy_ev(case), case.whole.process.current_exponent
            if not _is_same(stated_k, hottest_k):
                exponent.number(Better.LESS)  # named beside the energy, whatever that leads to
            life_s = electromigration.life_s(
                current=stated, limit=stated, wear=Wear(energy_ev, _ANY), stated_k=stated_k, use_k=hottest_k,
                stated_life_s=stated_life_s,
            )  # fmt: skip
            if _is_same(life_s, used_s):
                return stated
            steepness = exponent.number(Better.LESS if life_s > used_s else Better.MORE)
            return electromigration.carried_limit(
                limit=stated, wear=Wear(energy_ev, steepness), stated_k=stated_k, use_k=hottest_k,
                stated_life_s=stated_life_s, use_life_s=used_s,
            )  # fmt: skip

        return at_corner(case, here, sure=0.0, best=math.inf)

    def damage(self, case: Case, current: float, time_s: Seconds) -> float:
        """The share of the life that a current uses up in so long, on what the limit is stated for."""
        if time_s() == 0.0:
            return 0.0

        def used() -> float:
            stated, (stated_k, hottest_k) = self.dc.least(), self._temperatures_k(case)
            exponent = case.whole.process.current_exponent.number(Better.LESS if current > stated else Better.MORE)
            return electromigration.damage_share(
                exposures=[Exposure(time_s=time_s(), current=current)], limit=stated,
                wear=Wear(self._energy_ev(case), exponent), stated_k=stated_k, use_k=hottest_k,
                stated_life_s=self.entry.life.least(),
            )  # fmt: skip

        return at_corner(case, used, sure=math.inf, best=0.0)

    def _temperatures_k(self, case: Case) -> tuple[float, float]:
        return self.entry.temperature.least(), case.whole.conditions.junction_temperature.most()

    def _energy_ev(self, case: Case) -> float:
        stated_k, hottest_k = self._temperatures_k(case)
        if _is_same(stated_k, hottest_k):
            return _ANY
        energy = case.whole.process.activation_energy
        return energy.least() if stated_k >= hottest_k else energy.most()


def _is_same(first: float, second: float) -> bool:
    return math.isclose(first, second, rel_tol=_SAME)


def chosen_entry(case: Case, table: LayerFacts | ViaKindFacts) -> LayerLimitFacts | ViaLimitFacts:
    """Of the entries of a table: the coolest that is not cooler than the chip at its hottest, else the hottest.

    Raises: MissingFactsError: where there is none, or the temperature of one is not given.
    """
    conditions = case.whole.conditions
    hottest_k, _ = conditions.junction_temperature.most(), conditions.service_life.most()  # all that is due is named
    entries: list[LayerLimitFacts | ViaLimitFacts] = [*table.limits]
    if not entries:
        raise MissingFactsError([table.limits.path])
    unsaid = [entry.temperature.path for entry in entries if entry.temperature.given is None]
    if unsaid:
        raise MissingFactsError(unsaid)
    stated = [(entry.temperature.least(), entry) for entry in entries]
    above = [at for at in stated if at[0] >= hottest_k * (1.0 - _SAME)]
    return min(above, key=lambda at: at[0])[1] if above else max(stated, key=lambda at: at[0])[1]
