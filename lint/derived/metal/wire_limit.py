"""What a line or its vias may carry on this chip: limits of the process, carried to its temperature and life."""

from __future__ import annotations

import math
from collections.abc import Callable, Sequence
from typing import Final

import msgspec

from tidegate.lint.case import Case, Facts
from tidegate.lint.description.model.process import LayerLimit, ViaLimit
from tidegate.lint.physics.electromigration import Wear, carried_limit
from tidegate.lint.quantity import Dimension, show

_SAME: Final = 1e-9  # far above what rounding leaves, far below what a process tells apart


class DirectLimit(msgspec.Struct, frozen=True):
    """Most direct current: as stated, and for the hottest junction and the service life of this chip.

    In the unit in which the process states it: A for each via or narrow line, A/m for each width of a line.
    """

    stated: float
    stated_k: float
    stated_life_s: float
    here: float
    hottest_k: float

    def of(self, conductor: Callable[[float], float]) -> DirectLimit:
        """The limit, in A, of a conductor that makes so much of what is stated for its width, or for one via."""
        here_a, stated_a = conductor(self.here), conductor(self.stated)
        return DirectLimit(stated_a, self.stated_k, self.stated_life_s, here_a, self.hottest_k)

    def text(self) -> str:
        """Under which conditions it is stated, and whether it was carried from there."""
        stated_for = f"{show(self.stated_k, Dimension.TEMPERATURE)} and {show(self.stated_life_s, Dimension.DURATION)}"
        if math.isclose(self.here, self.stated, rel_tol=_SAME):
            return f"limit of {stated_for}"
        return f"limit carried from {stated_for} to {show(self.hottest_k, Dimension.TEMPERATURE)} by Black's law"


class LimitEntry(msgspec.Struct, frozen=True):
    """The entry of a process table that a limit is taken from, and where it stands."""

    entry: LayerLimit | ViaLimit
    facts: Facts


def entry_at(case: Case, limits: Sequence[LayerLimit | ViaLimit], table: Facts, index: int) -> LimitEntry:
    """One entry of a table."""
    return LimitEntry(limits[index], case.part(limits[index], table.path(f"limits.{index}")))


def chosen_entry(case: Case, limits: Sequence[LayerLimit | ViaLimit], table: Facts) -> LimitEntry:
    """Of the entries with a direct current: the coolest that is not cooler than the chip at its hottest, else the
    hottest.

    Raises: MissingFactsError: where there is none, or the temperature of one is not given.
    """
    hottest_k = case.whole.most("conditions.junction_temperature")
    known = [entry_at(case, limits, table, index) for index, entry in enumerate(limits) if entry.dc is not None]
    if not known:
        table.lacks("limits.0.dc" if limits else "limits")
    stated = [(found.facts.least("temperature"), found) for found in known]
    case.settle()
    above = [at for at in stated if at[0] >= hottest_k * (1.0 - _SAME)]
    at = min(above, key=lambda at: at[0]) if above else max(stated, key=lambda at: at[0])
    return at[1]


def table_limit(case: Case, limits: Sequence[LayerLimit | ViaLimit], table: Facts) -> tuple[LimitEntry, DirectLimit]:
    """The entry that counts for this chip, and its direct current carried to it.

    Raises: MissingFactsError: where a fact is missing.
    """
    entry, _ = case.gather(
        lambda: chosen_entry(case, limits, table), lambda: case.whole.most("conditions.service_life")
    )
    return entry, direct_limit(case, entry, entry.facts.least("dc"))


def direct_limit(case: Case, found: LimitEntry, stated: float) -> DirectLimit:
    """A direct current stated for the temperature and life of an entry, carried to those of this chip by Black's law.

    Where the law's constants are not given, a limit that is stated for a junction as hot and a life as long, or more,
    stands as it is.
    Raises: MissingFactsError: where a fact is missing.
    """
    stated_k, stated_life_s = found.facts.least("temperature"), found.facts.least("life")
    hottest_k = case.whole.most("conditions.junction_temperature")
    life_s = case.whole.most("conditions.service_life")
    case.settle()
    as_hot, as_long = stated_k >= hottest_k * (1.0 - _SAME), stated_life_s >= life_s * (1.0 - _SAME)
    alike = math.isclose(stated_k, hottest_k, rel_tol=_SAME) and math.isclose(stated_life_s, life_s, rel_tol=_SAME)
    wear = case.attempt(lambda: wear_of(case, stated_k=stated_k, hottest_k=hottest_k))
    if alike or (wear is None and as_hot and as_long):
        return DirectLimit(stated, stated_k, stated_life_s, stated, hottest_k)
    wear = wear or wear_of(case, stated_k=stated_k, hottest_k=hottest_k)
    here = carried_limit(
        limit=stated, wear=wear, stated_k=stated_k, use_k=hottest_k, stated_life_s=stated_life_s, use_life_s=life_s
    )
    return DirectLimit(stated, stated_k, stated_life_s, here, hottest_k)


def wear_of(case: Case, *, stated_k: float, hottest_k: float) -> Wear:
    """How the metal wears, with the activation energy that is worst for this chip.

    Where the chip is cooler than the limit is stated for, a small one gains it least; where it is hotter, a large one
    costs it most.
    Raises: MissingFactsError: where a constant of the law is not given.
    """
    whole = case.whole
    fact = "process.activation_energy"
    energy_ev = whole.least(fact) if stated_k >= hottest_k else whole.most(fact)
    exponent = whole.number("process.current_exponent")
    case.settle()
    return Wear(activation_energy_ev=energy_ev, current_exponent=exponent)
