"""How far levels of two detectors lie apart: what moves both parts them by the difference of its sizes alone."""

from __future__ import annotations

import math
from collections.abc import Callable, Iterator, Sequence
from functools import partial

import msgspec

from tidegate.lint.account import Sum, Term, plus
from tidegate.lint.case import Case
from tidegate.lint.derived.levels.trip_causes import (
    NOT_DESCRIBED,
    Cause,
    between_detectors,
    cause,
    is_complete,
    norm_v,
    rest_v,
    size,
)
from tidegate.lint.derived.levels.trip_levels import Which, level_end, nominal_fact
from tidegate.lint.derived.policy import combination
from tidegate.lint.description.model.detector import Comparator
from tidegate.lint.physics.trip_window import Combination


class Distance(msgspec.Struct, frozen=True):
    """Two levels at their nearest, in V at the rail: the lower one as high as it comes, seen from the other one.

    Symbols:
        shared   the reference that is known to move both; empty where there is none
    """

    below: Sum
    above: Sum
    shared: str

    @property
    def gap_v(self) -> float:
        """How far they are apart; below 0 they may change places."""
        return self.above.value - self.below.value


class _Pair(msgspec.Struct, frozen=True):
    """Two nominal levels, and which of their errors are errors of one reference.

    Symbols:
        shared          the reference that both take their level from; empty where none is known
        both            names of the errors, of either detector, that are errors of that reference
        maybe           names of those that might be, as it is not said what they are of, or which reference it is
        unsaid          the facts that say so
    """

    detectors: tuple[Comparator, Comparator]
    levels_v: tuple[float, float]
    shared: str
    both: tuple[frozenset[str], frozenset[str]]
    maybe: tuple[frozenset[str], frozenset[str]]
    unsaid: tuple[str, ...]

    @property
    def each(self) -> Iterator[tuple[Comparator, float, frozenset[str], frozenset[str]]]:
        """Either side: the detector, its level, and the errors that are and that might be of one reference."""
        return zip(self.detectors, self.levels_v, self.both, self.maybe, strict=True)


def distance(case: Case, below: Comparator, low: Which, above: Comparator, high: Which) -> Distance:
    """How near a level of one detector comes to a level of another one, at the codes that they ship with.

    Levels that are stated as nominal values are parted by their causes of error; any others worst against worst, where
    what one reference moves of both may help, by nobody knows how much.
    Raises: MissingFactsError: where a fact without which there is no number is missing.
    """
    down, up = nominal_fact(case, below, low), nominal_fact(case, above, high)
    if down is None or up is None:
        return _worst_against_worst(case, below, low, above, high)
    pair = _paired(case, (below, above), (down.typical(), up.typical()))
    low_v, high_v = pair.levels_v
    nearest = case.sum(plus(f"{low} level of {below.id}", lambda: low_v, of=down), *_apart(case, pair))
    return Distance(nearest, case.sum(plus(f"{high} level of {above.id}", lambda: high_v, of=up)), pair.shared)


def _worst_against_worst(case: Case, below: Comparator, low: Which, above: Comparator, high: Which) -> Distance:
    """Extreme against extreme; they need not meet where one reference moves both: then both are high, or both low."""
    nearest, there = level_end(case, below, low, "most"), level_end(case, above, high, "least")
    worst_v = there.value - nearest.value
    if not _may_share(below, above) or not math.isfinite(worst_v):
        return Distance(nearest, there, "")
    low_v = _known_v(case, lambda: level_end(case, below, low, "least"))
    high_v = _known_v(case, lambda: level_end(case, above, high, "most"))
    together_v = min(
        math.inf if low_v is None else there.value - low_v, math.inf if high_v is None else high_v - nearest.value
    )
    loose = nearest.loose + max(together_v - worst_v, 0.0)
    return Distance(msgspec.structs.replace(nearest, loose=loose), there, "")


def _known_v(case: Case, ask: Callable[[], Sum]) -> float | None:
    """An end that only helps, where it is exactly known."""
    log = case.reading.listen()
    value = ask().value
    case.reading.unlisten()
    return None if log else value


def _may_share(below: Comparator, above: Comparator) -> bool:
    """Whether two detectors take their levels from one reference, as far as is said."""
    named = {below.reference, above.reference}
    return "none" not in named and len(named - {None}) <= 1


def _paired(case: Case, detectors: tuple[Comparator, Comparator], levels_v: tuple[float, float]) -> _Pair:
    """What two detectors have in common, and what they might have."""
    below, above = detectors
    nothing: tuple[frozenset[str], frozenset[str]] = (frozenset(), frozenset())
    if not _may_share(below, above):
        return _Pair(detectors, levels_v, "", nothing, nothing, ())
    said = tuple(_of(detector, "reference") for detector in detectors)
    unsaid = tuple(_of(detector, None) for detector in detectors)
    any_of = tuple(a | b for a, b in zip(said, unsaid, strict=True))
    missing = [
        case.of(one).errors[name].of.path for one, names in zip(detectors, unsaid, strict=True) for name in names
    ]
    if below.reference is None or above.reference is None:
        missing += [case.of(one).reference.path for one in detectors if one.reference is None]
        maybe = (any_of[0], any_of[1]) if all(any_of) else nothing
        return _Pair(detectors, levels_v, "", nothing, maybe, tuple(missing))
    shared = str(below.reference)
    if all(said):
        return _Pair(detectors, levels_v, shared, (said[0], said[1]), (unsaid[0], unsaid[1]), tuple(missing))
    maybe = (any_of[0], any_of[1]) if all(any_of) else nothing
    return _Pair(detectors, levels_v, shared if all(any_of) else "", nothing, maybe, tuple(missing))


def _of(detector: Comparator, what: str | None) -> frozenset[str]:
    return frozenset(name for name, error in detector.errors.items() if error.of == what)


def _apart(case: Case, pair: _Pair) -> Iterator[Term]:
    """What moves two levels towards each other."""
    if combination(case) is Combination.WORST_CASE:
        for detector, level_v, both, maybe in pair.each:
            for name in detector.errors:
                if name not in both:
                    unsaid = pair.unsaid if name in maybe else ()
                    alone = partial(_alone_v, case, detector, name, level_v, unsaid)
                    yield plus(f"{name} of {detector.id}", alone, of=case.of(detector).errors[name])
        if all(pair.both):
            yield plus(f"{pair.shared}, which moves both", partial(_parted_v, case, pair), of=pair.shared)
    elif any(detector.errors for detector in pair.detectors):
        yield plus("errors as root sum square", partial(_squares_v, case, pair))
    for detector in pair.detectors:
        if not is_complete(detector):
            yield plus(
                f"{NOT_DESCRIBED} of {detector.id}", partial(rest_v, case, detector), of=case.of(detector).errors
            )


def _alone_v(case: Case, detector: Comparator, name: str, level_v: float, unsaid: Sequence[str]) -> float:
    """What one error parts the levels by; nothing, at best, where it might be one that moves both."""
    case.reading.block(unsaid)
    found_v = norm_v(case, [size(cause(case, detector, name), level_v)])
    return 0.0 if unsaid and case.at_best else found_v


def _parted_v(case: Case, pair: _Pair) -> float:
    """What the errors of one reference part the levels by."""
    doubtful = any(pair.maybe)
    if doubtful:
        case.reading.block(pair.unsaid)
    log = case.reading.listen()
    below, above = ([cause(case, detector, name) for name in sorted(both)] for detector, _, both, _ in pair.each)
    case.reading.unlisten()
    if (log or doubtful) and case.at_best:
        return 0.0  # sizes that are not known may be alike, and what might move both may make them so
    return _norm_v(case, pair, below, above)


def _squares_v(case: Case, pair: _Pair) -> float:
    """What all errors part the levels by, as root sum square."""
    if any(pair.maybe):
        case.reading.block(pair.unsaid)
    log = case.reading.listen()
    below, above = ([cause(case, detector, name) for name in detector.errors] for detector in pair.detectors)
    case.reading.unlisten()
    if case.at_best and (any(pair.maybe) or (log and all(pair.both))):
        left = [
            [each for each in side if each.name not in both | maybe]
            for side, (_, _, both, maybe) in zip((below, above), pair.each, strict=True)
        ]
        return _norm_v(case, pair, *left)
    return _norm_v(case, pair, below, above)


def _norm_v(case: Case, pair: _Pair, below: Sequence[Cause], above: Sequence[Cause]) -> float:
    low_v, high_v = pair.levels_v
    return norm_v(case, between_detectors(case, below, above, below_v=low_v, above_v=high_v))
