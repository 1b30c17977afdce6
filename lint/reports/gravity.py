"""How grave a failure is: the one table by which reports order what fails and what is open.

Gravest is what leaves a load unprotected or the chip dead, then what is lost of the margins, then what a house asks for
beyond both.  Within a class the least share of room comes first.  (Common practice, no source.)
"""

from __future__ import annotations

import math
from collections.abc import Iterable, Mapping
from enum import IntEnum
from typing import Final

from tidegate.lint.engine import WEIGHT
from tidegate.lint.judgement import Judgement, Kind, Level


class Gravity(IntEnum):
    """Classes of what a rule is about; the gravest is the greatest."""

    POLICY = 1
    MARGIN = 2
    DANGER = 3


TITLES: Final[Mapping[Gravity, str]] = {
    Gravity.DANGER: "what leaves a load unprotected, or the chip dead",
    Gravity.MARGIN: "what is lost of the margins",
    Gravity.POLICY: "what the house asks for beyond that",
}

_WEIGHTS: Final[Mapping[Gravity, float]] = {Gravity.DANGER: 9.0, Gravity.MARGIN: 3.0, Gravity.POLICY: 1.0}
_USUAL_ROOM: Final = 0.1
"""Share of room at which an open judgement weighs half as much as one at its limit (common practice, no source)."""
_UNKNOWN_ROOM: Final = 0.5
"""What one of which no number is known weighs of one at its limit: as with the usual share of room."""

FAMILIES: Final[Mapping[str, Gravity]] = {
    "passive_default": Gravity.DANGER, "self_bias": Gravity.DANGER, "start_up": Gravity.DANGER,
    "hand_over": Gravity.DANGER, "rearming": Gravity.DANGER, "modes": Gravity.DANGER, "reach": Gravity.DANGER,
    "crossing": Gravity.DANGER, "own_range": Gravity.DANGER, "trip_window": Gravity.DANGER,
    "electromigration": Gravity.DANGER, "hysteresis": Gravity.MARGIN, "coupling": Gravity.MARGIN,
    "description": Gravity.MARGIN, "claims": Gravity.MARGIN, "bypass": Gravity.POLICY, "coverage": Gravity.POLICY,
    "budget": Gravity.POLICY, "evidence": Gravity.POLICY, "waiver": Gravity.POLICY,
}  # fmt: skip
"""The class of each family of rules."""

RULES: Final[Mapping[str, Gravity]] = {
    "hysteresis/present": Gravity.DANGER, "hysteresis/sense": Gravity.DANGER,
    "hysteresis/switches_complementary": Gravity.DANGER, "coupling/ring": Gravity.DANGER,
    "coverage/under_voltage": Gravity.DANGER, "coverage/over_voltage": Gravity.DANGER,
    "description/loads": Gravity.DANGER, "bypass/default_inactive": Gravity.DANGER,
    "bypass/default_held": Gravity.DANGER, "bypass/locked": Gravity.DANGER,
    "bypass/over_voltage_caution": Gravity.DANGER, "bypass/independent": Gravity.MARGIN,
    "bypass/control_up": Gravity.MARGIN, "trip_window/codes": Gravity.MARGIN, "trip_window/order": Gravity.MARGIN,
    "trip_window/spread": Gravity.MARGIN, "trip_window/crossover_level": Gravity.MARGIN,
    "start_up/rail_order": Gravity.MARGIN, "hand_over/armed_when_up": Gravity.MARGIN, "reach/edge": Gravity.MARGIN,
    "reach/synchronised": Gravity.MARGIN, "electromigration/schmitt": Gravity.MARGIN,
    "electromigration/crowbar_droop": Gravity.MARGIN, "budget/bias_above_leakage": Gravity.MARGIN,
    "budget/timing_above_leakage": Gravity.MARGIN,
    "passive_default/holds_within_budget": Gravity.POLICY,
}  # fmt: skip
"""Rules of another class than their family."""


def gravity(judgement: Judgement) -> Gravity:
    """The class of a judgement; what the house calls a note is house policy, whatever the rule is about.

    Rules of other people's packs are about margins, unless they are notes.
    """
    if judgement.level is Level.NOTE:
        return Gravity.POLICY
    family = judgement.rule.partition("/")[0]
    return RULES.get(judgement.rule) or FAMILIES.get(family, Gravity.MARGIN)


def gravest_first(judgements: Iterable[Judgement]) -> list[Judgement]:
    """Judgements by class, and within a class by the least share of room; a failure without a number has none.

    What is open may keep its limit yet: there the class and the share of room are weighed against each other.
    """
    return sorted(judgements, key=_grave)


def _grave(judgement: Judgement) -> tuple[float, float, int]:
    first = -weight(judgement) if judgement.kind is Kind.OPEN else float(-gravity(judgement))
    return first, _room(judgement), -WEIGHT[judgement.level]


def weight(judgement: Judgement) -> float:
    """How much an open judgement weighs: by what it is about, and by how near its limit is."""
    measure = judgement.measure
    near = _UNKNOWN_ROOM
    if measure is not None and math.isfinite(measure.best_margin):
        near = _USUAL_ROOM / (_USUAL_ROOM + max(told_share(judgement), 0.0))
    return _WEIGHTS[gravity(judgement)] * near


def _room(judgement: Judgement) -> float:
    if judgement.measure is None:
        return -math.inf if judgement.kind is Kind.FAIL else math.inf
    return told_share(judgement)


def told_share(judgement: Judgement) -> float:
    """The margin that is told of a judgement with a number, as a share of the need.

    Of what is open what there is so far, of a failure what is surely lost, of what passes the sure end.
    """
    measure = judgement.measure
    assert measure is not None
    if judgement.kind is Kind.OPEN:
        so_far = math.isfinite(measure.best_margin)
        return measure.share(measure.margin if so_far else measure.sure_margin)
    return measure.share(measure.margin if missed(judgement) else measure.sure_margin)


def least_room_first(judgements: Iterable[Judgement]) -> list[Judgement]:
    """The judgements with a number: those that miss their limit, then all others, by the sure end of their margin.

    Of those whose sure ends are alike, as where nothing is sure, that with the least best end comes first.
    """
    return sorted((one for one in judgements if has_number(one)), key=_sure)


def _sure(judgement: Judgement) -> tuple[bool, float, float, str, str]:
    measure = judgement.measure
    assert measure is not None
    ends = measure.share(measure.sure_margin), measure.share(measure.best_margin)
    return (not missed(judgement), *ends, judgement.rule, judgement.subject)


def has_number(judgement: Judgement) -> bool:
    """Whether a judgement has a number of which anything is known."""
    return judgement.measure is not None and judgement.measure.is_known


def missed(judgement: Judgement) -> bool:
    """Whether a number misses its limit, whatever the missing facts are."""
    measure = judgement.measure
    return measure is not None and measure.margin < 0.0 and judgement.kind is not Kind.OPEN
