"""Every family that comes with the tool, in the order in which a reviewer asks."""

from __future__ import annotations

from typing import Final

from tidegate.lint.rule import Rule
from tidegate.rules import (
    claims,
    coupling,
    description,
    electromigration,
    evidence,
    hysteresis,
    own_range,
    passive_default,
    trip_window,
)

FAMILIES: Final[tuple[tuple[Rule, ...], ...]] = (
    hysteresis.RULES,
    trip_window.RULES,
    own_range.RULES,
    passive_default.RULES,
    coupling.RULES,
    electromigration.RULES,
    claims.RULES,
    evidence.RULES,
    description.RULES,
)
