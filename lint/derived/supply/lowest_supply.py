"""The lowest supply at which a bias or reference works, over temperature."""

from __future__ import annotations

import msgspec

from tidegate.lint.case import Case
from tidegate.lint.description.model.detector import Bias, Reference
from tidegate.lint.physics.domain import product
from tidegate.lint.quantity import Dimension, show


class LowestSupply(msgspec.Struct, frozen=True):
    """The lowest supply at which something works at the worst temperature, and which that is."""

    level_v: float
    at: str
    """Words for a message, such as ``at 125 degC``; empty where the level is given for all temperatures."""


def lowest_supply(case: Case, source: Bias | Reference) -> LowestSupply:
    """Where a bias or reference works from: as stated for the cold end, or what its slope makes of it at the hot end.

    The corner that is worst at the cold end and the steepest slope are taken together.  Without a slope the level is
    stated for all temperatures.
    """
    cold_v = case.of(source).works_from.most()
    if not isinstance(source, Reference) or source.works_from_slope is None:
        return LowestSupply(cold_v, "")
    slope_v_per_k = case.of(source).works_from_slope.most()
    if slope_v_per_k <= 0.0:  # it works from less when it is warm
        return LowestSupply(cold_v, "at the cold end")
    junction = case.whole.conditions.junction_temperature
    hot_k = junction.most()
    rise_v = product(slope_v_per_k, max(hot_k - junction.least(), 0.0))
    return LowestSupply(cold_v + rise_v, f"at {show(hot_k, Dimension.TEMPERATURE)}")
