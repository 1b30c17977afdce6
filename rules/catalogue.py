"""Every family that comes with the tool, in the order in which a reviewer asks."""

from __future__ import annotations

from typing import Final

from tidegate.lint.rule import Rule
from tidegate.rules import (
    bypass,
    claims,
    coupling,
    description,
    electromigration,
    evidence,
    hysteresis,
    own_range,
    passive_default,
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
    coupling.RULES,
    bypass.RULES,
    electromigration.RULES,
    claims.RULES,
    evidence.RULES,
    description.RULES,
)
