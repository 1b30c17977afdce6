"""Every family that comes with the tool, in the order in which a reviewer asks."""

from __future__ import annotations

from typing import Final

from tidegate.lint.rule import Rule
from tidegate.rules import (
    budget,
    bypass,
    claims,
    coupling,
    coverage,
    crossing,
    description,
    electromigration,
    evidence,
    hand_over,
    hysteresis,
    modes,
    own_range,
    passive_default,
    reach,
    rearming,
    self_bias,
    start_up,
    trip_window,
)

FAMILIES: Final[tuple[tuple[Rule, ...], ...]] = (
    hysteresis.RULES,
    trip_window.RULES,
    own_range.RULES,
    passive_default.RULES,
    self_bias.RULES,
    start_up.RULES,
    hand_over.RULES,
    rearming.RULES,
    modes.RULES,
    reach.RULES,
    coverage.RULES,
    crossing.RULES,
    coupling.RULES,
    bypass.RULES,
    electromigration.RULES,
    budget.RULES,
    claims.RULES,
    evidence.RULES,
    description.RULES,
)
