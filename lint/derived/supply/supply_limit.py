"""The highest level that a rail made on the chip can reach, whatever its maker does."""

from __future__ import annotations

import msgspec

from tidegate.lint.case import Case
from tidegate.lint.description.model.reset_path import Load
from tidegate.lint.description.model.supply import Rail


class SupplyLimit(msgspec.Struct, frozen=True):
    """A level in V that a rail cannot pass, and the rail that sets it."""

    level_v: float
    rail: str


def supply_limit(case: Case, rail: Rail) -> SupplyLimit | None:
    """The highest level guaranteed on the rails that feed the maker of a rail, which a failing maker may pass on.

    None where the rail itself lies above them, as behind a maker that steps up, or where no rail is named that feeds
    the maker. The guaranteed range of the feeding rails, and the nominal level of the rail, are noted where not given.
    """
    maker = case.graph.elements[rail.made_by or ""]
    feeding = [need.rail for need in maker.needs] if isinstance(maker, Load) else []
    domain = case.description.domains.get(getattr(maker, "domain", None) or "")
    if domain is not None and domain.rail is not None:
        feeding.append(domain.rail)
    feeding = [name for name in dict.fromkeys(feeding) if name != rail.id]
    if not feeding:
        return None
    limits = [SupplyLimit(case.of(case.description.rails[name]).most("guaranteed"), name) for name in feeding]
    highest = max(limits, key=lambda limit: limit.level_v)
    nominal_v = case.of(rail).middle("nominal")
    return highest if not nominal_v > highest.level_v else None
