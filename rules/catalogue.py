"""Every family that comes with the tool, in the order in which a reviewer asks."""

from __future__ import annotations

from typing import Final

from tidegate.lint.rule import Rule
from tidegate.rules import electromigration, hysteresis, passive_default

FAMILIES: Final[tuple[tuple[Rule, ...], ...]] = (
    hysteresis.RULES,
    passive_default.RULES,
    electromigration.RULES,
)
