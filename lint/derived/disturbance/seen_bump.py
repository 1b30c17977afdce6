"""A bump as its victim sees it, beside the distance that the victim's level keeps."""

from __future__ import annotations

from collections.abc import Callable, Iterable

import msgspec

from tidegate.lint.case import Case
from tidegate.lint.derived.disturbance.disturbance import Bump, ignored_s
from tidegate.lint.derived.levels.trip_levels import hysteresis_window
from tidegate.lint.description.model.detector import Comparator
from tidegate.lint.judgement import Measure, Relation
from tidegate.lint.quantity import Dimension, show


class SeenBump(msgspec.Struct, frozen=True):
    """In V at the rail that the victim watches."""

    victim: Comparator
    bump: Bump
    seen_v: float
    """What its filter lets it see."""
    kept_v: float
    """Its least hysteresis; 0 or less where its level keeps no distance."""

    @property
    def is_kept(self) -> bool:
        """Whether the level keeps the distance that the bump needs; at the limit, it does."""
        return Measure(self.kept_v, self.seen_v, Dimension.VOLTAGE, Relation.AT_MOST).holds

    @property
    def spare_v(self) -> float:
        """What the bump leaves of the distance, V."""
        return self.kept_v - self.seen_v

    def text(self) -> str:
        """The bump, and how much of it the filter lets through."""
        peak = f"a peak of {show(self.bump.peak_v, Dimension.VOLTAGE)} at the rail"
        filter_s = self.victim.filter.least if self.victim.filter is not None else None
        if filter_s is None or self.seen_v == self.bump.peak_v:
            return peak
        seen, ignored = show(self.seen_v, Dimension.VOLTAGE), show(filter_s, Dimension.DURATION)
        return f"{peak}, {seen} after the {ignored} that the filter ignores"


def seen_bumps(case: Case, victim: Comparator, asks: Iterable[Callable[[], Bump]]) -> list[SeenBump]:
    """Work out bumps on one victim, what it sees of each and the distance that its level keeps.

    Raises: MissingFactsError: where a fact of any of them is missing, with all that is.
    """
    bumps, lasts_s, kept_v = case.gather(
        lambda: case.gather_all(asks),
        lambda: ignored_s(case, victim),
        lambda: hysteresis_window(case, victim).least_v,
    )
    return [SeenBump(victim, bump, bump.lasting_v(lasts_s), kept_v) for bump in bumps]
