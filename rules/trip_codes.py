"""Trip levels that are chosen by code: which codes suit the rail."""

from __future__ import annotations

import math
from collections.abc import Callable, Iterator, Sequence
from functools import partial
from typing import Final, TypeAlias

import msgspec

from tidegate.lint.case import Case
from tidegate.lint.derived.levels.at_code import at_code
from tidegate.lint.derived.levels.placed_roles import NOT_PLACED, PLACED_ROLES
from tidegate.lint.derived.levels.requirements import Requirement, comes_back, protects, quiet
from tidegate.lint.derived.levels.trip_causes import LEVEL_FORMULAS
from tidegate.lint.derived.other_corner import read_at
from tidegate.lint.description.model.detector import Comparator
from tidegate.lint.facts.reading import Corner, MissingFactsError
from tidegate.lint.judgement import Judgement, Level
from tidegate.lint.physics import hysteresis, trip_window
from tidegate.lint.quantity import Dimension, show
from tidegate.lint.rule import Example, Rule, rule

_V: Final = Dimension.VOLTAGE
_Check: TypeAlias = Callable[[Case, Comparator], Requirement | None]
_CHECKS: Final[tuple[tuple[str, _Check], ...]] = (
    ("guarantee", protects), ("nuisance", quiet), ("release", comes_back),
)  # fmt: skip


class _Margin(msgspec.Struct, frozen=True):
    """One of the three margins of a code, in V, with all that is missing at either corner."""

    rule: str
    sure_v: float
    best_v: float
    requirement: Requirement | None
    """At the corner of the reading; None where nothing is known."""


class _Checked(msgspec.Struct, frozen=True):
    """A requirement worked out; None where there is nothing to keep."""

    requirement: Requirement | None

    @property
    def margin_v(self) -> float:
        """How far it is kept, in V."""
        return math.inf if self.requirement is None else self.requirement.margin_v


class _Code(msgspec.Struct, frozen=True):
    """A code and its margins."""

    name: str
    margins: tuple[_Margin, ...]

    @property
    def suits(self) -> bool | None:
        """Whether it suits the rail; None where what is missing decides."""
        if any(margin.best_v < 0.0 for margin in self.margins):
            return False
        return True if all(margin.sure_v >= 0.0 for margin in self.margins) else None

    @property
    def short(self) -> str:
        """What it is surely short of."""
        return ", ".join(
            f"{'' if margin.sure_v == margin.best_v else 'at least '}{show(-margin.best_v, _V)} short of "
            f"trip_window/{margin.rule}"
            for margin in self.margins
            if margin.best_v < 0.0
        )


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
    formulas=(
        *LEVEL_FORMULAS,
        hysteresis.release_droop_v,
        trip_window.response_time_s,
        trip_window.droop_during_response_v,
    ),
)
def every_code_suits(comparator: Comparator, case: Case) -> Judgement:
    """Judge the three margins at every code."""
    if comparator.role not in PLACED_ROLES:
        return case.not_applicable(NOT_PLACED)
    if not comparator.codes:
        if comparator.trip is None and comparator.crossover is None:
            raise MissingFactsError([f"comparators.{comparator.id}.codes"])  # its levels may be chosen by code
        return case.not_applicable("its levels cannot be chosen")
    codes = [_Code(name, tuple(_margins(case, at_code(comparator, name)))) for name in comparator.codes]
    good, bad, open_ = (_names(codes, suits) for suits in (True, False, None))
    rail, ships = comparator.watches, comparator.ships_with
    why = "; ".join(f"{code.name}: {code.short}" for code in codes if code.suits is False)
    code, narrowest = min(
        ((code, margin) for code in codes for margin in code.margins),
        key=lambda found: found[1].best_v if case.at_best else found[1].sure_v,
    )
    suiting = good + open_ if case.at_best else good
    if suiting and len(suiting) < len(codes):
        shipped = f" ({ships}, which it ships with, {_does(ships, good, bad)})" if ships else ""
        mend = f"ship with {' or '.join(good or open_)}" if ships in bad else f"lock out {', '.join(bad or open_)}"
        measure = None if narrowest.requirement is None else narrowest.requirement.measure
        return case.asks(f"{_told(rail, good, bad, open_)}{shipped}", why=why, mend=mend, at="codes", measure=measure)
    says = f"no code suits {rail}" if len(bad) == len(codes) else _told(rail, good, bad, open_)
    return _measured(case, narrowest, f"{says}; narrowest at {code.name}:", why)


def _does(ships: str, good: list[str], bad: list[str]) -> str:
    return "does" if ships in good else "does not" if ships in bad else "is not known to"


def _names(codes: Sequence[_Code], suits: bool | None) -> list[str]:
    return [code.name for code in codes if code.suits is suits]


def _told(rail: str, good: Sequence[str], bad: Sequence[str], open_: Sequence[str]) -> str:
    """Which codes suit a rail, which do not, and of which it is not known."""
    if not bad and not open_:
        return f"every code suits {rail}: {', '.join(good)}"
    parts = [f"these codes suit {rail}: {', '.join(good)}" if good else f"no code surely suits {rail}"]
    parts += [f"these do not: {', '.join(bad)}"] if bad else []
    return "; ".join(parts + ([f"not known yet of {', '.join(open_)}"] if open_ else []))


def _measured(case: Case, narrowest: _Margin, says: str, why: str) -> Judgement:
    """A judgement by the narrowest margin."""
    found, mend = narrowest.requirement, "a code between the limits"
    if found is None:
        margin_v = narrowest.best_v if case.at_best else narrowest.sure_v
        return case.at_least(need=0.0, have=margin_v, dimension=_V, says=says, why=why, mend=mend, at="codes")
    answer = case.at_least if found.end == "least" else case.at_most
    return answer(
        need=found.need, have=found.have, dimension=_V, says=f"{says} {found.says}", why=why or found.why, mend=mend,
        at="codes",
    )  # fmt: skip


def _margins(case: Case, comparator: Comparator) -> Iterator[_Margin]:
    """The three margins of a detector at a code; without end where nothing is known."""
    for name, check in _CHECKS:
        found = {corner: read_at(case, corner, partial(_checked, check, case, comparator)) for corner in Corner}
        sure, best = found[Corner.SURE], found[Corner.BEST]
        here = best if case.at_best else sure
        yield _Margin(
            name, -math.inf if sure is None else sure.margin_v, math.inf if best is None else best.margin_v,
            None if here is None else here.requirement,
        )  # fmt: skip


def _checked(check: _Check, case: Case, comparator: Comparator) -> _Checked:
    return _Checked(check(case, comparator))


RULES: Final[tuple[Rule, ...]] = (every_code_suits,)
