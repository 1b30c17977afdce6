"""The lowest supply at which a bias or reference works, over temperature."""

from __future__ import annotations

import msgspec

from tidegate.lint.case import Case
from tidegate.lint.description.model.detector import Bias, Reference
from tidegate.lint.quantity import Dimension, show


class LowestSupply(msgspec.Struct, frozen=True):
    """The lowest supply at which something works at the worst temperature, and which that is."""

    level_v: float
    at: str
    """Words for a message, such as ``at 125 degC``; empty where the level is given for all temperatures."""


def lowest_supply(case: Case, source: Bias | Reference) -> LowestSupply:
    """Where a bias or reference works from: as stated for the cold end, or what its slope makes of it at the hot end.

    The corner that is worst at the cold end and the steepest slope are taken together.
    Raises: MissingFactsError: where a fact is not given.
    """
    facts = case.of(source)
    cold_v = facts.most("works_from")
    if not isinstance(source, Reference) or source.works_from_slope is None:
        case.settle()
        return LowestSupply(cold_v, "")
    slope_v_per_k = facts.most("works_from_slope")
    if slope_v_per_k <= 0.0:  # not above zero: it works from less when it is warm
        case.settle()
        return LowestSupply(cold_v, "at the cold end")
    cold_k, hot_k = (
        case.whole.least("conditions.junction_temperature"), case.whole.most("conditions.junction_temperature"),
    )  # fmt: skip
    case.settle()
    return LowestSupply(cold_v + slope_v_per_k * (hot_k - cold_k), f"at {show(hot_k, Dimension.TEMPERATURE)}")
