"""The highest level that a rail made on the chip can reach, whatever its maker does."""

from __future__ import annotations

import math

import msgspec

from tidegate.lint.case import Case
from tidegate.lint.derived.unsaid import not_whole
from tidegate.lint.description.model.reset_path import Load
from tidegate.lint.description.model.supply import Rail
from tidegate.lint.facts.reading import Better, MissingFactsError
from tidegate.lint.graph.dependency import Element


class SupplyLimit(msgspec.Struct, frozen=True):
    """A level in V that a rail cannot pass, and the rail that sets it."""

    level_v: float
    rail: str


def supply_limit(case: Case, rail: Rail) -> SupplyLimit | None:
    """The highest level guaranteed on the rails that feed the maker of a rail, which a failing maker may pass on.

    None where the rail itself lies above them, as behind a maker that steps up, or where nothing else feeds the maker.
    Raises: MissingFactsError: where it is not said what feeds the maker.
    """
    maker = case.graph.elements[rail.made_by or ""]
    feeding, gaps = _feeding(case, maker)
    feeding = [name for name in feeding if name != rail.id]
    if gaps and not feeding:
        raise MissingFactsError(gaps)
    if not feeding:
        return None
    nominal_v = case.of(rail).nominal.typical()
    limits = [SupplyLimit(_passes_on_v(case, case.description.rails[name], nominal_v), name) for name in feeding]
    if gaps:
        case.reading.block(gaps)
        if not case.at_best:
            limits.append(SupplyLimit(math.inf, f"another that feeds {maker.id}"))
    highest = max(limits, key=lambda limit: limit.level_v)
    return highest if not nominal_v > highest.level_v else None


def _passes_on_v(case: Case, feeding: Rail, nominal_v: float) -> float:
    """The highest level guaranteed on a feeding rail, in V: the further up it may go, the more a maker passes on.

    Where it is not known it is at its best as high as the rail that is made: below, nothing would limit that.
    """
    log = case.reading.listen()
    level_v = case.of(feeding).guaranteed.most(Better.LESS)
    case.reading.unlisten()
    return max(level_v, nominal_v) if log and case.at_best else level_v


def _feeding(case: Case, maker: Element) -> tuple[list[str], list[str]]:
    """The rails that feed a maker, and what is not said of them."""
    feeding: list[str] = []
    gaps: list[str] = []
    if isinstance(maker, Load):
        feeding = [need.rail for need in maker.needs]
        gaps = [] if maker.needs else [maker.fact("needs")]
    named = getattr(maker, "domain", None)
    domain = case.description.domains.get(named or "")
    if domain is None:
        gaps.append(maker.fact("domain"))
    elif domain.rail is None:
        gaps.append(domain.fact("rail"))
    else:
        feeding.append(domain.rail)
    return list(dict.fromkeys(feeding)), gaps


def unsaid_makers(case: Case) -> tuple[str, ...]:
    """The section of rails, where one of them may be made on the chip without its being said."""
    return not_whole(case, "rails") if any(rail.made_by is None for rail in case.description.rails.values()) else ()
