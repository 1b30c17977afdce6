"""Input levels that a logic input surely reads as low or as high: the JEDEC JESD8 family.

JEDEC hands out the texts to registered readers, so each entry says where its numbers were seen instead.
"""

from __future__ import annotations

from collections.abc import Mapping
from types import MappingProxyType
from typing import Final

import msgspec

from tidegate.lint.physics.domain import DomainError, require_within


class SupplyRange(msgspec.Struct, frozen=True):
    """Supply voltages for which a standard is written."""

    least_v: float
    most_v: float


class InputLevels(msgspec.Struct, frozen=True):
    """What an input surely reads, in V from its ground."""

    low_most_v: float
    """Highest input that is surely read as low, V."""
    high_least_v: float
    """Lowest input that is surely read as high, V."""


class InputShares(msgspec.Struct, frozen=True):
    """What an input surely reads, as shares of its supply."""

    low_most: float
    """Highest input that is surely read as low, as a share of the supply."""
    high_least: float
    """Lowest input that is surely read as high, as a share of the supply."""


class LogicStandard(msgspec.Struct, frozen=True):
    """One standard of the family: its name, its supply ranges and its input levels."""

    name: str
    normal: SupplyRange
    wide: SupplyRange
    inputs: InputLevels | InputShares


_CMOS_SHARES: Final = InputShares(low_most=0.35, high_least=0.65)

STANDARDS: Final[Mapping[str, LogicStandard]] = MappingProxyType(
    {
        standard.name: standard
        for standard in (
            # Levels and wide (there: "extended") range second-hand; normal range from memory.
            LogicStandard(
                name="JESD8C.01",
                normal=SupplyRange(least_v=3.0, most_v=3.6),
                wide=SupplyRange(least_v=2.7, most_v=3.6),
                inputs=InputLevels(low_most_v=0.8, high_least_v=2.0),
            ),
            # Levels and wide range second-hand; normal range from memory.
            LogicStandard(
                name="JESD8-5A.01",
                normal=SupplyRange(least_v=2.3, most_v=2.7),
                wide=SupplyRange(least_v=1.8, most_v=2.7),
                inputs=InputLevels(low_most_v=0.7, high_least_v=1.7),
            ),
            # Ranges from the title as quoted, levels second-hand.
            LogicStandard(
                name="JESD8-7A",
                normal=SupplyRange(least_v=1.65, most_v=1.95),
                wide=SupplyRange(least_v=1.2, most_v=1.95),
                inputs=_CMOS_SHARES,
            ),
            # Ranges from the title of the minor revision JESD8-11A.01 as quoted, levels from a vendor's page.
            LogicStandard(
                name="JESD8-11A",
                normal=SupplyRange(least_v=1.4, most_v=1.6),
                wide=SupplyRange(least_v=0.9, most_v=1.6),
                inputs=_CMOS_SHARES,
            ),
            # Ranges from the title as quoted, levels from a vendor's page and JESD220G table 6.3 as quoted.
            LogicStandard(
                name="JESD8-12A.01",
                normal=SupplyRange(least_v=1.1, most_v=1.3),
                wide=SupplyRange(least_v=0.8, most_v=1.3),
                inputs=_CMOS_SHARES,
            ),
        )
    }
)
"""The standards by name."""


def input_levels_v(*, standard: str, supply_v: float) -> InputLevels:
    """What an input built to a standard surely reads as low and as high, at one supply voltage.

    Formula: the standard's levels in V, or its shares times VDD
    Symbols:
        standard  -    -  name of the standard, a key of STANDARDS
        supply_v  VDD  V  supply of the input, within the wide range of the standard
    Returns: the highest sure low and the lowest sure high, in V.
    Valid: DC levels at a chip's pin. They were seen for the normal range; that they also hold in the rest of
        the wide range is an assumption.
    Source: JEDEC JESD8 family, as quoted by others; see STANDARDS for each entry.
    Raises: DomainError: if the standard is unknown, or VDD lies outside its wide range.
    """
    if standard not in STANDARDS:
        raise DomainError(f"standard must be one of {', '.join(STANDARDS)} (found {standard!r})")
    found = STANDARDS[standard]
    require_within(least=found.wide.least_v, most=found.wide.most_v, supply_v=supply_v)
    if isinstance(found.inputs, InputLevels):
        return found.inputs
    return InputLevels(low_most_v=found.inputs.low_most * supply_v, high_least_v=found.inputs.high_least * supply_v)
