"""What moves a trip level from its nominal: named causes with their sizes, and how they combine.

One vector of causes serves the ends of a level, the hysteresis between two levels of one comparator and the distance
between the levels of two: what moves both together counts with the difference of its sizes alone.
"""

from __future__ import annotations

import math
from collections.abc import Iterator, Sequence
from functools import partial
from typing import Final

import msgspec

from tidegate.lint.account import Term, less, plus
from tidegate.lint.case import Case
from tidegate.lint.derived.answered_once import answered_once
from tidegate.lint.derived.crossover.crossover_error import crossover_error_v, stated_centre_v
from tidegate.lint.derived.disturbance.input_share import input_share
from tidegate.lint.derived.policy import combination, coverage
from tidegate.lint.description.model.detector import Comparator
from tidegate.lint.facts.reading import Better, Wait
from tidegate.lint.physics import tolerance
from tidegate.lint.physics.tolerance import Kind, refer_offset_to_rail_v, refer_relative_to_level_v
from tidegate.lint.physics.trip_window import Combination, combined_error_v

_PLAIN_SIGMA: Final = 1.0
NOT_DESCRIBED: Final = "errors not described"
LEVEL_FORMULAS: Final = (refer_relative_to_level_v, refer_offset_to_rail_v, combined_error_v)
"""What a rule runs that asks where a level lies."""


class Cause(msgspec.Struct, frozen=True):
    """One cause of error of a level.

    Symbols:
        name            what the description calls it
        share       -   part of the level
        amount_v    V   part that does not scale with the level, at the rail
        kind            bound, or standard deviation
        shared          what it is an error of, where others have it too: the id of a reference; empty for its own
        fact            where it stands
    """

    name: str
    share: float
    amount_v: float
    kind: Kind
    shared: str
    fact: str

    def at_v(self, level_v: float) -> float:
        """Its size where the level lies at ``level_v``, in V."""
        return refer_relative_to_level_v(share=self.share, level_v=level_v) + self.amount_v


def is_complete(comparator: Comparator) -> bool:
    """Whether nothing but what is described moves the levels: a total, or reference, divider and offset by name.

    A level that is made without a reference has the errors of its crossover too, which no list of them tells.
    """
    kinds = {error.of for error in comparator.errors.values()}
    if "total" in kinds:
        return True
    if comparator.crossover is not None:
        return False
    due = {"reference", "offset"} if comparator.reference != "none" else {"offset"}
    if comparator.divider is None or comparator.divider.ratio != 1.0:
        due.add("divider")
    return due <= kinds


def cause_terms(case: Case, comparator: Comparator, level_v: float, *, sign: float) -> Iterator[Term]:
    """The errors of a level as terms: each by itself in the worst case, all as one where they add as squares."""
    term = plus if sign > 0 else less
    names = list(case.of(comparator).errors)
    if combination(case) is Combination.WORST_CASE:
        for name, facts in zip(comparator.errors, names, strict=True):
            yield term(name, partial(_alone_v, case, comparator, name, level_v), of=facts)
    elif names:
        yield term(
            "errors as root sum square",
            lambda: norm_v(case, [size(each, level_v) for each in causes(case, comparator)]),
            of=case.of(comparator).errors,
        )
    if not is_complete(comparator) and stated_centre_v(comparator) is not None:
        ask = partial(crossover_error_v, case, comparator, upwards=sign > 0)
        yield term("components of the crossover", ask, of=case.of(comparator).crossover, floor=0.0)
    elif not is_complete(comparator):
        yield term(NOT_DESCRIBED, lambda: rest_v(case, comparator), of=case.of(comparator).errors)


def _alone_v(case: Case, comparator: Comparator, name: str, level_v: float) -> float:
    """What one cause comes to by itself, in V."""
    return norm_v(case, [size(cause(case, comparator, name), level_v)])


def causes(case: Case, comparator: Comparator) -> list[Cause]:
    """All described causes of a detector.

    Raises: MissingFactsError: where a fact without which one has no size is missing.
    """
    return [cause(case, comparator, name) for name in comparator.errors]


@answered_once
def cause(case: Case, comparator: Comparator, name: str) -> Cause:
    """One described cause of a detector."""
    error, facts = comparator.errors[name], case.of(comparator).errors[name]
    alone = error.share is None and error.amount is None
    share = facts.share.most() if error.share is not None or alone else 0.0
    amount_v = facts.amount.most() if error.amount is not None else 0.0
    if amount_v != 0.0 and facts.at.must() == "input":
        amount_v = math.inf if math.isinf(amount_v) else at_rail_v(case, comparator, amount_v)
    kind = Kind(facts.is_.must())
    shared = comparator.reference if error.of == "reference" and comparator.reference not in (None, "none") else ""
    return Cause(name, share, amount_v, kind, shared or "", facts.path)


def at_rail_v(case: Case, comparator: Comparator, offset_v: float) -> float:
    """An error at the input of a comparator, at the rail."""
    ratio = input_share(case, comparator)
    return math.inf if ratio == 0.0 else refer_offset_to_rail_v(offset_v=offset_v, divider_ratio=ratio)


def tracks(case: Case, comparator: Comparator, name: str) -> bool:
    """Whether an error moves both levels of a detector together: as it says, or as the detector says of all of them."""
    facts = case.of(comparator).errors[name]
    if facts.tracks.given is not None:
        return facts.tracks.given
    return facts.tracks.must() if comparator.tracked is None else comparator.tracked


def rest_v(case: Case, comparator: Comparator, *, most_v: float = math.inf) -> float:
    """What causes that are not described may add, in V, up to a size: no more is known than that it does no good."""
    return case.reading.end(Wait(f"comparators.{comparator.id}.errors", 0.0, most_v, Better.LESS))


class Sized(msgspec.Struct, frozen=True):
    """A cause with its size in V on what is looked at."""

    name: str
    size_v: float
    kind: Kind


def size(each: Cause, level_v: float) -> Sized:
    """A cause on a level."""
    return Sized(each.name, each.at_v(level_v), each.kind)


def between_levels(
    case: Case, comparator: Comparator, *, rising_v: float, falling_v: float, together: bool = True
) -> list[Sized]:
    """The causes on the difference of two levels of one comparator; what tracks scales with the difference alone.

    Without ``together`` as if nothing tracked: what the levels leave possible at all.
    """
    sized: list[Sized] = []
    for each in causes(case, comparator):
        up, down = each.at_v(rising_v), each.at_v(falling_v)
        if together and tracks(case, comparator, each.name):
            sized.append(Sized(each.name, abs(up - down), each.kind))
        else:
            sized += [Sized(each.name, up, each.kind), Sized(each.name, down, each.kind)]
    return sized


def between_detectors(
    case: Case, below: Sequence[Cause], above: Sequence[Cause], *, below_v: float, above_v: float
) -> list[Sized]:
    """The causes on the distance of levels of two detectors; the errors of a reference that both use move both.

    All that a detector says of one reference is one error, which the other one has too: they part the levels by the
    difference of their sizes.
    """
    down, up = ({(each.shared, each.kind) for each in side if each.shared} for side in (below, above))
    met = down & up
    sized = [size(each, below_v) for each in below if (each.shared, each.kind) not in met]
    sized += [size(each, above_v) for each in above if (each.shared, each.kind) not in met]
    for shared, kind in sorted(met, key=lambda pair: (pair[0], pair[1].value)):
        low_v, high_v = (
            _together_v(case, [size(each, level_v) for each in side if (each.shared, each.kind) == (shared, kind)])
            for side, level_v in ((below, below_v), (above, above_v))
        )
        apart_v = math.inf if math.isinf(low_v) or math.isinf(high_v) else abs(high_v - low_v)
        sized.append(Sized(shared, apart_v, kind))
    return sized


def _together_v(case: Case, sized: Sequence[Sized]) -> float:
    """The size of several errors of one kind as one."""
    sizes_v = [each.size_v for each in sized]
    return sum(sizes_v) if combination(case) is Combination.WORST_CASE else math.hypot(*sizes_v)


def norm_v(case: Case, sized: Sequence[Sized]) -> float:
    """What causes come to together, in V, as the conditions say that they combine."""
    if any(math.isinf(each.size_v) for each in sized):
        return math.inf
    return combined_error_v(
        [
            tolerance.Contributor(
                name=each.name, at_rail_v=each.size_v, kind=each.kind,
                coverage=_PLAIN_SIGMA if each.kind is Kind.SIGMA else None, rectangular=False, tracks=False,
            )
            for each in sized
        ],
        coverage=coverage(case), method=combination(case),
    )  # fmt: skip
