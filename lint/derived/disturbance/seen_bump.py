"""A bump as its victim sees it, beside the distance that the victim's level keeps."""

from __future__ import annotations

from collections.abc import Callable

import msgspec

from tidegate.lint.account import Sum
from tidegate.lint.case import Case
from tidegate.lint.derived.disturbance.disturbance import Bump, bump, seen_term
from tidegate.lint.derived.disturbance.kept_distance import kept
from tidegate.lint.derived.disturbance.who_disturbs import Disturber
from tidegate.lint.description.model.detector import Comparator
from tidegate.lint.judgement import Measure, Relation
from tidegate.lint.quantity import Dimension, show


class SeenBump(msgspec.Struct, frozen=True):
    """In V at the rail that the victim watches."""

    disturber: Disturber
    victim: Comparator
    seen: Sum
    """What its filter lets it see."""
    kept: Sum
    """Its least hysteresis; 0 where its level keeps no distance."""

    @property
    def measure(self) -> Measure:
        """What it sees against what it keeps; at the limit, it keeps its distance."""
        return Measure(self.kept.value, self.seen.value, Dimension.VOLTAGE, Relation.AT_MOST)

    def text(self, case: Case) -> str:
        """The bump, and how much of it the filter lets through; empty where it is not known."""
        return bump_text(case, self.victim, lambda: bump(case, self.disturber))


def bump_text(case: Case, victim: Comparator, ask: Callable[[], Bump]) -> str:
    """A bump in words; empty where it is not known."""
    known = case.if_known(ask)
    if known is None:
        return ""
    peak = f"a peak of {show(known.peak_v, Dimension.VOLTAGE)} at the rail"
    filter_s = case.if_known(case.of(victim).filter.least)
    if not filter_s or known.seen_v == known.peak_v:
        return peak
    seen, ignored = show(known.seen_v, Dimension.VOLTAGE), show(filter_s, Dimension.DURATION)
    return f"{peak}, {seen} after the {ignored} that the filter ignores"


def seen_bump(case: Case, victim: Comparator, disturber: Disturber) -> SeenBump:
    """What a comparator sees of a disturber, and the distance that its level keeps.

    Raises:
        MissingFactsError: where it is not said at which code the levels are, and they make the hysteresis.
        DomainError: where a formula refuses its numbers.
    """
    return SeenBump(disturber, victim, case.sum(seen_term(case, disturber)), kept(case, victim))
