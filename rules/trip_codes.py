"""Trip levels that are chosen by code: which codes suit the rail."""

from __future__ import annotations

from collections.abc import Callable
from functools import partial
from typing import Final

from tidegate.lint.case import Case
from tidegate.lint.derived.levels.at_code import at_code
from tidegate.lint.derived.levels.level_margins import LevelMargin, comes_back, guarantee, quiet
from tidegate.lint.derived.levels.placement_facts import NOT_PLACED, PLACED_ROLES
from tidegate.lint.description.model.detector import Comparator
from tidegate.lint.judgement import Judgement, Level
from tidegate.lint.quantity import Dimension, show
from tidegate.lint.rule import Example, Rule, rule

_V: Final = Dimension.VOLTAGE
_CHECKS: Final[tuple[tuple[str, Callable[[Case, Comparator], LevelMargin | None]], ...]] = (
    ("guarantee", guarantee), ("nuisance", quiet), ("release", comes_back),
)  # fmt: skip


@rule(
    "trip_window/codes",
    title="every code that can be chosen suits the rail",
    level=Level.WARNING,
    applies_to="comparators",
    proves="trip_window/guarantee, nuisance and release hold at every code, not only at the one the part ships with. "
    "Codes that do not suit the rail are named with what they are short of: a person must look whether they can be "
    "chosen here, by a register, a fuse or a strap.",
    facts=("comparators.*.codes", "comparators.*.ships_with", "and the facts of those three rules"),
    mend="keep a code that does not suit the rail from being chosen",
    sources=("common practice, no source: a level that can be selected is judged at every selection",),
    example=Example(
        fails="comparators: {uv: {ships_with: high, codes: {low: {rising: 1.6 V, falling: 1.55 V}, "
        "high: {rising: 1.677 V, falling: 1.627 V}}}}",
        holds="comparators: {uv: {ships_with: high, codes: {mid: {rising: 1.672 V, falling: 1.622 V}, "
        "high: {rising: 1.677 V, falling: 1.627 V}}}}",
    ),
)
def every_code_suits(comparator: Comparator, case: Case) -> Judgement:
    """Judge the three margins at every code."""
    if comparator.role not in PLACED_ROLES:
        return case.not_applicable(NOT_PLACED)
    if not comparator.codes:
        return case.not_applicable("its levels cannot be chosen")
    case.own.must("ships_with")
    found = _shortfalls(comparator, case)
    usable = [code for code, short in found.items() if not short]
    unusable = [code for code, short in found.items() if short]
    rail, shipped = comparator.watches, comparator.ships_with
    if not unusable:
        return case.passes(f"every code suits {rail}: {', '.join(usable)}", at="codes")
    why = "; ".join(f"{code}: {found[code]}" for code in unusable)
    if not usable:
        return case.fails(f"no code suits {rail}", why=why, mend="a code between the limits", at="codes")
    ships = f"{shipped}, which it ships with, {'does not' if shipped in unusable else 'does'}"
    return case.asks(
        f"these codes suit {rail}: {', '.join(usable)}; these do not: {', '.join(unusable)} ({ships})",
        why=why,
        mend=f"ship with {' or '.join(usable)}" if shipped in unusable else f"lock out {', '.join(unusable)}",
        at="codes",
    )


def _shortfalls(comparator: Comparator, case: Case) -> dict[str, str]:
    """What each code is short of; empty where it suits."""
    asked = [(code, name, check) for code in comparator.codes for name, check in _CHECKS]
    margins = case.gather_all([partial(check, case, at_code(comparator, code)) for code, _, check in asked])
    short: dict[str, list[str]] = {code: [] for code in comparator.codes}
    for (code, name, _), found in zip(asked, margins, strict=True):
        if found is not None and not found.is_kept:
            short[code].append(f"{show(-found.margin_v, _V)} short of trip_window/{name}")
    return {code: ", ".join(texts) for code, texts in short.items()}


RULES: Final[tuple[Rule, ...]] = (every_code_suits,)
