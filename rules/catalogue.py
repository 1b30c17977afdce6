"""Every family that comes with the tool, in the order in which a reviewer asks."""

from __future__ import annotations

from typing import Final

from tidegate.lint.rule import Rule
from tidegate.rules import hysteresis

FAMILIES: Final[tuple[tuple[Rule, ...], ...]] = (hysteresis.RULES,)


def families() -> tuple[tuple[Rule, ...], ...]:
    """The families; a function, so that another process can be told where to find them."""
    return FAMILIES
