"""The whole answer to where the levels of one detector may lie: interval, hysteresis, codes and levers."""

from __future__ import annotations

from collections.abc import Mapping

import msgspec
from msgspec.structs import replace

from tidegate.lint.case import Case
from tidegate.lint.derived.asking import Unknown, ask
from tidegate.lint.derived.levels.at_code import as_shipped, at_code
from tidegate.lint.derived.levels.least_hysteresis import least_hysteresis_v
from tidegate.lint.derived.levels.level_placement import LevelPlacement, place_levels
from tidegate.lint.derived.levels.level_spread import level_spreads
from tidegate.lint.derived.levels.levers import Lever, levers
from tidegate.lint.derived.levels.placement_facts import PlacementFacts, placement_facts
from tidegate.lint.derived.levels.trip_levels import hysteresis_window
from tidegate.lint.description.model.description import Description
from tidegate.lint.description.model.detector import Comparator
from tidegate.lint.graph.dependency import Graph


class DetectorPlacement(msgspec.Struct, frozen=True):
    """One detector, and what can be said about its levels.

    Symbols:
        found                  the interval, or why there is none
        least_hysteresis_v  V  least hysteresis needed, as a nominal value; or why it is not known
        usable                 of each code that the levels can be chosen by: whether it keeps every limit
        levers                 what would buy room, the best first
    """

    comparator: Comparator
    found: LevelPlacement | Unknown
    least_hysteresis_v: float | Unknown
    usable: Mapping[str, bool]
    levers: tuple[Lever, ...]

    @property
    def stands(self) -> bool | None:
        """Whether the levels of today keep every limit; None where there are none, or no limits to hold them to."""
        if isinstance(self.found, Unknown) or not self.found.margins_v:
            return None
        return min(self.found.margins_v.values()) >= -_ROUNDING_V


_ROUNDING_V = 1e-12
"""What rounding leaves of a level at its limit."""


def detector_placement(description: Description, graph: Graph, comparator: Comparator) -> DetectorPlacement:
    """Answer for one detector; what is not known is said so."""
    found = ask(description, graph, comparator, lambda case: place_levels(placement_facts(case, comparator)))
    least = ask(description, graph, comparator, lambda case: _nominal_needed_v(case, comparator))
    if isinstance(found, Unknown):
        return DetectorPlacement(comparator, found, least, {}, ())
    usable = ask(description, graph, comparator, lambda case: _usable_codes(case, comparator, found.facts))
    return DetectorPlacement(
        comparator=comparator,
        found=found,
        least_hysteresis_v=least,
        usable={} if isinstance(usable, Unknown) else usable,
        levers=tuple(
            levers(
                found,
                detector=comparator.id,
                rail=comparator.watches,
                least_hysteresis_v=None if isinstance(least, Unknown) else least,
            )
        ),
    )


def _nominal_needed_v(case: Case, comparator: Comparator) -> float:
    """The nominal hysteresis whose least value is what is needed, with the tolerance that it has today."""
    shipped = as_shipped(case, comparator)
    needed_v, window, spreads = case.gather(
        lambda: least_hysteresis_v(case, shipped),
        lambda: hysteresis_window(case, shipped),
        lambda: level_spreads(case, shipped),
    )
    return needed_v + max(0.0, spreads.hysteresis_v - window.least_v)


def _usable_codes(case: Case, comparator: Comparator, facts: PlacementFacts) -> dict[str, bool]:
    found = {}
    for code in comparator.codes:
        placed = place_levels(replace(facts, levels=level_spreads(case, at_code(comparator, code))))
        found[code] = bool(placed.margins_v) and min(placed.margins_v.values()) >= -_ROUNDING_V
    return found
