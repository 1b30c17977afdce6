"""A detector whose levels are to be placed: its requirements, read with the levels at one place after another."""

from __future__ import annotations

import math
from collections.abc import Callable, Iterator, Mapping, Sequence
from itertools import count
from typing import ClassVar, Final, TypeAlias

import msgspec
from msgspec.structs import replace

from tidegate.lint.case import Case
from tidegate.lint.derived.levels.at_code import at_code
from tidegate.lint.derived.levels.requirements import Due, Requirement, protects_rail, requirements
from tidegate.lint.derived.monotone_root import monotone_root
from tidegate.lint.description.model.description import Description
from tidegate.lint.description.model.detector import Comparator, Hysteresis, Trip
from tidegate.lint.facts.reading import MOST_CHOICES, Corner, MissingFactsError, Reading, other_choices
from tidegate.lint.graph.dependency import Graph
from tidegate.lint.judgement import Level
from tidegate.lint.physics.domain import DomainError
from tidegate.lint.quantity import Voltage

Changes: TypeAlias = Mapping[str, Callable[[float], float]]
"""What facts are taken for instead, by path."""

_FURTHEST_V: Final = 1e6
_ROUNDING: Final = 4e-15
_SOMEWHERE_V: Final = 1.0


class Place(msgspec.Struct, frozen=True):
    """Where levels are tried: both so much higher than stated, and the rising one so much further from the falling."""

    shift_v: float = 0.0
    apart_v: float = 0.0


AS_STATED: Final = Place()


class Stated(msgspec.Struct, frozen=True):
    """Where the description puts the levels, in V: the point of each that is told of a place.

    Symbols:
        falling_v, rising_v  V  nominal or typical levels, the middle of a range, or its only end; None where not known
        words                   which of these it is; empty for nominal levels
        placed                  whether the description states a level at all; else one is put in to be moved
        ranged                  whether a level is stated as a range, which is moved without changing its width
        apart                   whether it says how far they lie apart
    """

    falling_v: float | None
    rising_v: float | None
    words: str
    placed: bool
    ranged: bool
    apart: bool

    @property
    def hysteresis_v(self) -> float | None:
        """How far apart they are, in V; None where that is not known."""
        return None if self.falling_v is None or self.rising_v is None else self.rising_v - self.falling_v


class Answer(msgspec.Struct, frozen=True):
    """One requirement in one reading: how far it is kept, in V, and on what that rests."""

    margin_v: float
    """Without end where nothing is known: below at the sure corner, above at the best one."""
    reading: Reading
    requirement: Requirement | None
    missing: tuple[str, ...] = ()

    @property
    def waits(self) -> tuple[str, ...]:
        """The facts that it lacks."""
        return (*self.reading.lacking, *self.missing)


class Placing:
    """A detector and all that its levels must keep; every question is one plain reading of the requirements."""

    def __init__(self, description: Description, graph: Graph, comparator: Comparator, code: str | None = None) -> None:
        """Take the levels of a code, or of the one it ships with, where they are chosen by code."""
        self.description = description
        self.graph = graph
        code = code or comparator.ships_with
        said = comparator.trip is not None or not comparator.codes or code in comparator.codes
        if not said and all(_is_nominal(trip) for trip in comparator.codes.values()):
            code = next(iter(comparator.codes))  # nominal levels are moved alike, whichever they are
        by_code = comparator.trip is None and code in comparator.codes
        shipped = at_code(comparator, str(code)) if by_code else comparator
        base = f"comparators.{comparator.id}"
        self.detector, stated = _with_levels(shipped, self._somewhere_v(comparator))
        self.stated = stated if said else replace(stated, placed=False)
        levels = f"{base}.codes.{code}" if by_code and self.detector.trip is shipped.trip else f"{base}.trip"
        self.falling, self.rising, self.amount = f"{levels}.falling", f"{levels}.rising", f"{base}.hysteresis.amount"
        """Where the levels and the hysteresis stand in the description."""
        self.unsaid: tuple[str, ...] = () if said else (f"{base}.ships_with",)
        """What is missing to know which levels are meant."""
        self.dues = requirements(comparator)
        self._words: dict[tuple[str, Corner], tuple[Mapping[str, object], ...]] = {}
        self._found_v: dict[tuple[str, Corner], tuple[float, float]] = {}
        self._exact: dict[str, bool] = {}
        self._reads: dict[tuple[str, Corner], frozenset[str]] = {}

    def _somewhere_v(self, comparator: Comparator) -> float:
        """A level to begin with, where none is stated: the end of what is delivered, or any."""
        delivered = self.description.rails[comparator.watches].delivered
        ends = () if delivered is None else (delivered.least, delivered.most)
        return next((level_v for level_v in ends if level_v), _SOMEWHERE_V)

    @property
    def scale_v(self) -> float:
        """The size of the levels, in V."""
        stated = self.stated
        return max(abs(stated.falling_v or 0.0), abs(stated.rising_v or 0.0)) or _SOMEWHERE_V

    # One requirement at one place

    def margin(self, due: Due, corner: Corner, place: Place = AS_STATED, changes: Changes | None = None) -> Answer:
        """How far a requirement is kept at a place; of the words that are missing, those that decide the corner."""
        instead = self._instead(place, changes or {})
        if self._exact.get(due.name):
            return self._read(due, Reading(Corner.SURE, instead=instead))
        words = self._words.get((due.name, corner))
        if words is None:
            return self._first(due, corner, instead)
        answers = [self._read(due, Reading(corner, chosen=chosen, instead=instead)) for chosen in words]
        return _decisive(answers, corner)

    def _first(self, due: Due, corner: Corner, instead: Changes) -> Answer:
        """A requirement at a corner for the first time: with every choice of the words that are missing."""
        answers, waiting, all_tried = list[Answer](), list[dict[str, object]]([{}]), True
        while waiting and all_tried:
            chosen = waiting.pop()
            answer = self._read(due, Reading(corner, chosen=chosen, instead=instead))
            answers.append(answer)
            waiting += [then for _, then in other_choices(answer.reading, chosen)]
            all_tried = len(answers) < MOST_CHOICES
        if not all_tried:
            answers.append(Answer(_nothing_known_v(corner), answers[0].reading, None))
        self._words[due.name, corner] = tuple(dict(answer.reading.chosen) for answer in answers)
        self._exact[due.name] = len(answers) == 1 and answers[0].reading.exact and not answers[0].missing
        return _decisive(answers, corner)

    def read_at(self, due: Due, place: Place, reading: Reading) -> Answer:
        """A requirement at a place, with what a reading chooses and tries for what is missing."""
        instead = self._instead(place, reading.instead)
        return self._read(due, Reading(reading.corner, chosen=reading.chosen, tried=reading.tried, instead=instead))

    def _read(self, due: Due, reading: Reading) -> Answer:
        case = Case(
            subject=self.detector, rule="", level=Level.NOTE, description=self.description, graph=self.graph,
            reading=reading,
        )  # fmt: skip
        try:
            found = due.work_out(case, self.detector)
            if found is None and due.name == "protects":
                found = protects_rail(case, self.detector)
        except MissingFactsError as error:
            return Answer(_nothing_known_v(reading.corner), reading, None, error.missing)
        except DomainError:
            exact = reading.exact and not case.missing
            return Answer(-math.inf if exact else _nothing_known_v(reading.corner), reading, None)
        if found is None:
            return Answer(math.inf, reading, None)
        have_v, need_v = found.have.value, found.need.value
        margin_v = have_v - need_v if found.end == "least" else need_v - have_v
        return Answer(_nothing_known_v(reading.corner) if math.isnan(margin_v) else margin_v, reading, found)

    def _instead(self, place: Place, changes: Changes) -> Changes:
        moves = (
            (self.falling, place.shift_v), (self.rising, place.shift_v + place.apart_v), (self.amount, place.apart_v),
        )  # fmt: skip
        moved = {path: _moved(changes.get(path), by_v) for path, by_v in moves if by_v}
        return {**changes, **moved} if moved else changes

    def reads(self, due: Due, corner: Corner) -> frozenset[str]:
        """The paths of the known numbers that a requirement reads: what else is changed does not touch it."""
        key = (due.name, corner)
        if key not in self._reads:
            self._reads[key] = frozenset().union(*(self._noted(due, corner, chosen) for chosen in self._chosen(*key)))
        return self._reads[key]

    def _chosen(self, name: str, corner: Corner) -> tuple[Mapping[str, object], ...]:
        return self._words.get((name, corner), ({},))

    def _noted(self, due: Due, corner: Corner, chosen: Mapping[str, object]) -> set[str]:
        noting = _Noting()
        self._read(due, Reading(corner, chosen=chosen, instead=noting))
        return noting.seen

    # Where requirements begin and cease to hold

    def limit_v(self, due: Due, corner: Corner, *, apart_v: float = 0.0, changes: Changes | None = None) -> float:
        """How far the levels are moved where a requirement is just kept, in V.

        Returns: an infinity where it is kept at every place, or at none.
        """

        key = (due.name, corner)
        if changes and not apart_v and key in self._found_v and self.reads(due, corner).isdisjoint(changes):
            return self._found_v[key][0]
        seen: list[tuple[float, float]] = []

        def margin_v(shift_v: float) -> float:
            found_v = self.margin(due, corner, Place(shift_v, apart_v), changes).margin_v
            seen.append((shift_v, found_v))
            return found_v

        stated, scale_v = self.stated, self.scale_v
        known = [level_v for level_v in (stated.falling_v, stated.rising_v) if level_v is not None]
        before = self._found_v.get(key, (0.0, 1.0 if due.end == "least" else -1.0))
        found_v = monotone_root(
            margin_v, start=before[0], slope=before[1], low=-min(known, default=0.0), high=_FURTHEST_V * scale_v,
            tolerance=_ROUNDING * scale_v,
        )  # fmt: skip
        if not changes and not apart_v and math.isfinite(found_v):
            # what a change does not touch has the same answer, and most of what it does goes the same way
            self._found_v[key] = (found_v, _slope(seen) or before[1])
        return found_v

    def interval_v(
        self, corner: Corner, *, apart_v: float = 0.0, changes: Changes | None = None
    ) -> tuple[float, float]:
        """How far the levels may be moved, in V: the least and the most; the wrong way round where nothing fits."""
        limits = [(due.end, self.limit_v(due, corner, apart_v=apart_v, changes=changes)) for due in self.dues]
        least_v = max((limit_v for end, limit_v in limits if end == "least"), default=-math.inf)
        return least_v, min((limit_v for end, limit_v in limits if end == "most"), default=math.inf)

    def room_v(self, corner: Corner, *, apart_v: float = 0.0, changes: Changes | None = None) -> float:
        """How far the levels can be moved, in V; below 0 by what is short."""
        least_v, most_v = self.interval_v(corner, apart_v=apart_v, changes=changes)
        return most_v - least_v if most_v != least_v else 0.0


class _Noting(dict[str, Callable[[float], float]]):
    """Changes nothing, and notes what is read."""

    _count: ClassVar[Iterator[int]] = count()

    def __init__(self) -> None:
        super().__init__({f"noting {next(self._count)}": float})  # of its own: what others were answered notes nothing
        self.seen: set[str] = set()

    def get(self, path: str, default: object = None) -> None:  # type: ignore[override]
        self.seen.add(path)


def _slope(seen: Sequence[tuple[float, float]]) -> float:
    """How fast a margin goes with the place, from its first to its last look; 0 where that is not known."""
    (place_v, margin_v), (then_v, found_v) = seen[0], seen[-1]
    slope = (found_v - margin_v) / (then_v - place_v) if then_v != place_v else 0.0
    return slope if math.isfinite(slope) else 0.0


def _moved(change: Callable[[float], float] | None, by_v: float) -> Callable[[float], float]:
    if change is None:
        return lambda value: value + by_v
    return lambda value: change(value) + by_v


def _nothing_known_v(corner: Corner) -> float:
    return -math.inf if corner is Corner.SURE else math.inf


def _decisive(answers: Sequence[Answer], corner: Corner) -> Answer:
    if len(answers) == 1:
        return answers[0]
    return (min if corner is Corner.SURE else max)(answers, key=lambda answer: answer.margin_v)


def _with_levels(shipped: Comparator, somewhere_v: float) -> tuple[Comparator, Stated]:
    """A detector with what its levels are moved by, and where it puts them: nominal ones where none are stated.

    A hysteresis that is not given, where the levels do not tell it, is 0 V or more.
    """
    trip = shipped.trip or Trip()
    placed = trip.falling is not None or trip.rising is not None
    if not placed:
        trip = replace(trip, falling=Voltage(somewhere_v, somewhere_v, somewhere_v, plain=True))
    if shipped.hysteresis == "none":  # one level is the other
        trip = replace(trip, falling=trip.falling or trip.rising, rising=trip.rising or trip.falling)
    amount = shipped.hysteresis.amount if isinstance(shipped.hysteresis, Hysteresis) else None
    both = trip.falling is not None and trip.rising is not None
    apart = both or amount is not None
    if amount is None and not both:
        amount = Voltage(0.0, None, None)
        given = shipped.hysteresis if isinstance(shipped.hysteresis, Hysteresis) else Hysteresis()
        shipped = replace(shipped, hysteresis=replace(given, amount=amount))
    if trip != shipped.trip:
        shipped = replace(shipped, trip=trip)
    apart_v = _point(amount)
    falling_v, rising_v = _point(trip.falling), _point(trip.rising)
    if falling_v is None and rising_v is not None and apart_v is not None:
        falling_v = rising_v - apart_v
    if rising_v is None and falling_v is not None and apart_v is not None:
        rising_v = falling_v + apart_v
    spans = [span for span in (trip.falling, trip.rising) if span is not None]
    words = next((_which_point(span) for span in spans if not span.plain), "")
    ranged = any(not span.plain for span in spans)
    return shipped, Stated(falling_v, rising_v, words, placed=placed, ranged=ranged, apart=apart)


def _is_nominal(trip: Trip) -> bool:
    """Whether both levels are stated as nominal values."""
    return all(span is not None and span.plain for span in (trip.falling, trip.rising))


def _point(span: Voltage | None) -> float | None:
    """The point of a range that stands for it."""
    if span is None:
        return None
    return next((value for value in (span.middle, span.least, span.most) if value is not None), None)


def _which_point(span: Voltage) -> str:
    if span.typical is not None:
        return "typical"
    if span.least is not None and span.most is not None:
        return "mid-range"
    return "at its lowest" if span.most is None else "at its highest"
