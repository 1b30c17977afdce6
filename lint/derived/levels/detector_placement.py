"""The whole answer to where the levels of one detector may lie: interval, hysteresis, errors, codes and levers."""

from __future__ import annotations

import math
from collections.abc import Iterator, Mapping, Sequence
from functools import partial

import msgspec

from tidegate.lint.case import Case
from tidegate.lint.derived.borne import BreakEven, break_even
from tidegate.lint.derived.levels.largest_fits import largest_errors, largest_hysteresis_v
from tidegate.lint.derived.levels.least_hysteresis import nominal_hysteresis_needed_v
from tidegate.lint.derived.levels.level_placement import LevelPlacement, kept_by, place_levels, stands
from tidegate.lint.derived.levels.levers import Lever, levers
from tidegate.lint.derived.levels.placing import Place, Placing
from tidegate.lint.derived.levels.requirements import Due
from tidegate.lint.description.model.description import Description
from tidegate.lint.description.model.detector import Comparator
from tidegate.lint.facts.reading import Corner, MissingFactsError, Reading
from tidegate.lint.graph.dependency import Graph
from tidegate.lint.judgement import Level
from tidegate.lint.physics.domain import DomainError


class Needed(msgspec.Struct, frozen=True):
    """The least hysteresis needed, as a nominal value.

    Symbols:
        sure_v   V  what is enough whatever is missing; None where nothing surely is
        best_v   V  what is needed at least; None where nothing is known
        missing     the facts that are missing
    """

    sure_v: float | None
    best_v: float | None
    missing: tuple[str, ...]


class Borne(msgspec.Struct, frozen=True):
    """What a term that is not known may come to before a requirement is used up.

    Symbols:
        requirement     which
        term            the term of the requirement
        room_v       V  what the term may come to, where no other is missing; with others, all of them together
        fact            the fact behind the term and the value that it must keep; None where several facts make it
        alone           whether nothing else is missing: what keeps it then is enough
    """

    requirement: str
    term: str
    room_v: float
    fact: BreakEven | None
    alone: bool


class DetectorPlacement(msgspec.Struct, frozen=True):
    """One detector, and what can be said about its levels.

    Symbols:
        placing                the detector with its requirements, to be asked more
        found                  the interval, as far as is known
        largest_hysteresis_v   V  largest nominal hysteresis that fits; below 0 where none does, None where not limited
        least_hysteresis       what is needed at least
        errors_here            how many times as large the errors, and ranges, may be with the levels where they stand
        errors_anywhere        the same with the levels at the best place; both None where not limited, or not known
        borne                  what is missing, and what it may come to with the levels where they stand
        usable                 of each code that the levels can be chosen by: whether it keeps every limit; None where
                               that is not known
        levers                 what would buy room, the best first
    """

    comparator: Comparator
    placing: Placing
    found: LevelPlacement
    largest_hysteresis_v: float | None
    least_hysteresis: Needed
    errors_here: float | None
    errors_anywhere: float | None
    borne: tuple[Borne, ...]
    usable: Mapping[str, bool | None]
    levers: tuple[Lever, ...]


def detector_placement(description: Description, graph: Graph, comparator: Comparator) -> DetectorPlacement:
    """Answer for one detector, as far as is known."""
    placing = Placing(description, graph, comparator)
    found = place_levels(placing)
    needed = _needed(placing)
    return DetectorPlacement(
        comparator=comparator,
        placing=placing,
        found=found,
        largest_hysteresis_v=largest_hysteresis_v(placing, Corner.BEST),
        least_hysteresis=needed,
        errors_here=largest_errors(placing, Corner.BEST, anywhere=False),
        errors_anywhere=largest_errors(placing, Corner.BEST, anywhere=True),
        borne=tuple(_borne(placing, found)),
        usable={code: stands(kept_by(Placing(description, graph, comparator, code))) for code in comparator.codes},
        levers=levers(placing, found, least_hysteresis_v=needed.sure_v),
    )


def _needed(placing: Placing) -> Needed:
    found = {corner: _needed_at(placing, corner) for corner in Corner}
    missing = dict.fromkeys(fact for _, facts in found.values() for fact in facts)
    return Needed(found[Corner.SURE][0], found[Corner.BEST][0], tuple(missing))


def _needed_at(placing: Placing, corner: Corner) -> tuple[float | None, Sequence[str]]:
    """The least hysteresis with all that is missing at a corner, and what that is."""
    reading, detector, missing = Reading(corner), placing.detector, list[str]()
    case = Case(
        subject=detector, rule="", level=Level.NOTE, description=placing.description, graph=placing.graph,
        reading=reading,
    )  # fmt: skip
    value_v = math.nan
    try:
        value_v = nominal_hysteresis_needed_v(
            case, detector, nominal_v=placing.stated.hysteresis_v or 0.0, anywhere=not placing.stated.placed
        )
    except MissingFactsError as error:
        missing += error.missing
    except DomainError:
        pass  # numbers that the formula refuses, or that are not known
    known = value_v if math.isfinite(value_v) else None
    return known, (*reading.lacking, *case.missing, *missing)


def _borne(placing: Placing, found: LevelPlacement) -> Iterator[Borne]:
    """For each requirement that waits and may hold: each term that is not known, and what it may come to."""
    place = Place() if found.stated.placed else Place(found.best.middle_v)
    for due in placing.dues:
        if math.isfinite(place.shift_v):
            yield from _borne_by(placing, due, place)


def _borne_by(placing: Placing, due: Due, place: Place) -> Iterator[Borne]:
    answer = placing.margin(due, Corner.BEST, place)
    requirement, reading = answer.requirement, answer.reading
    if requirement is None or not answer.waits or not 0.0 <= answer.margin_v < math.inf:
        return
    terms = [line for line in (*requirement.have.lines, *requirement.need.lines) if line.waits]
    alone = len(terms) == 1
    for line in terms:
        waits = [reading.waits[fact] for fact in line.waits if fact in reading.waits]
        kept = None
        if len(line.waits) == 1 == len(waits):
            ask = partial(_margin_v, placing, due, place)
            kept = break_even(ask, waits[0], reading.chosen, alone=alone)
        yield Borne(due.name, line.name, answer.margin_v, kept, alone)


def _margin_v(placing: Placing, due: Due, place: Place, reading: Reading) -> float:
    return placing.read_at(due, place, reading).margin_v
