"""Where trip levels may lie, for people: one block of text a detector, at 80 columns, ready to be pasted."""

from __future__ import annotations

import math
import re
from collections.abc import Iterator, Sequence
from typing import Final

from tidegate.lint.account import term_name
from tidegate.lint.derived.levels.detector_placement import Borne, DetectorPlacement, Needed
from tidegate.lint.derived.levels.level_placement import ROUNDING_V, Kept, LevelPlacement, Limit
from tidegate.lint.derived.safe_rounding import show_down
from tidegate.lint.facts.names import dimension_at, listed, spoken, spoken_together
from tidegate.lint.quantity import Dimension, show
from tidegate.lint.reports.columns import columns, wrapped
from tidegate.lint.reports.plain_text import plain

WIDTH: Final = 80
FEW_LEVERS: Final = 3
"""How many levers are shown of each detector where there are several."""

_LABEL: Final = 11
_V: Final = Dimension.VOLTAGE
_HELD: Final = "\xa0"  # a space at which no line is broken
_NUMBER_AND_UNIT: Final = re.compile(r"(?<=[0-9]) (?=[A-Za-z%])")
_GRID: Final = 10_000  # levels are shown in tenths of a millivolt
_MOST_ON_GRID_V: Final = 1e9  # no float tells tenths of a millivolt apart much above
_NOUNS: Final = {"power_on": "power-on", "under_voltage": "under-voltage", "over_voltage": "over-voltage"}


def placement_lines(placed: DetectorPlacement, place: str, *, most_levers: int) -> Iterator[str]:
    """The block of one detector."""
    comparator, found = placed.comparator, placed.found
    title = f"{comparator.id}, {_NOUNS[comparator.role]} detector of {comparator.watches}"
    place = plain(place)
    yield f"{title}{' ' * max(2, WIDTH - len(title) - columns(place))}{place}"
    yield from _levels(found)
    if found.waits:
        yield from row("surely", _surely(found))
        yield from row("waits for", _facts(found.waits))
    for label, limit in (("lowest by", found.best.below), ("highest by", found.best.above)):
        yield from row(label, "nothing that is known" if limit is None else limit_text(limit))
    yield from row("hysteresis", _hysteresis(placed))
    if placed.errors_here is not None or placed.errors_anywhere is not None:
        yield from row("range" if found.stated.ranged else "errors", _errors(placed))
    if found.kept:
        parts = [_kept(each) for each in found.kept]
        yield from row("margins", ("; " if any("," in part for part in parts) else ", ").join(parts))
    if placed.borne:
        yield from row("bears", "; ".join(_borne(placed.borne)))
    if placed.usable:
        yield from row("codes", _codes(placed))
    yield from _levers(placed, most_levers)


def row(label: str, text: str) -> Iterator[str]:
    """A label, and a text that keeps clear of it on every line; a number stays with its unit."""
    together = _NUMBER_AND_UNIT.sub(_HELD, plain(text))
    lines = wrapped(together, WIDTH - 2 - _LABEL) or [""]
    for number, line in enumerate(lines):
        yield f"  {label if number == 0 else '':<{_LABEL}}{line}".replace(_HELD, " ")


def _levels(found: LevelPlacement) -> Iterator[str]:
    """Both intervals, and where the levels stand today."""
    stated, ends = found.stated, found.best
    so_far = " so far" if found.waits else ""
    if ends.is_empty:
        short = f"{millivolts(-ends.room_v)} short" if math.isfinite(ends.room_v) else "nothing fits"
        yield from row("no place", f"{short}, whatever is missing" if found.waits else short)
    for label, point_v in (("falling", stated.falling_v), ("rising", stated.rising_v)):
        if point_v is None:
            continue
        least_v, most_v = point_v + ends.least_v, point_v + ends.most_v
        text = f"{_interval(least_v, most_v)}{so_far}"
        if label == "falling" and math.isfinite(ends.room_v) and not ends.is_empty:
            text += f", room {millivolts(ends.room_v)}"
        today = _today(point_v, least_v, most_v, stated.words) if stated.placed else "not placed yet"
        yield from row(label, f"{text}; {today}")


def _interval(least_v: float, most_v: float) -> str:
    if least_v == math.inf:
        other = "any is low enough" if most_v == math.inf else f"at most {down_text(most_v)}"
        return f"no level is high enough; {other}"
    if least_v > most_v:
        return f"at least {up_text(least_v)}, and at most {down_text(most_v)}"
    if math.isinf(least_v) and math.isinf(most_v):
        return "anywhere"
    if math.isinf(least_v):
        return f"up to {down_text(most_v)}"
    return f"from {up_text(least_v)}" if math.isinf(most_v) else f"{up_text(least_v)} to {down_text(most_v)}"


def _today(today_v: float, least_v: float, most_v: float, words: str) -> str:
    said = f"today {show(today_v, _V, digits=5)}{f', {words}' if words else ''}"
    if today_v < least_v == math.inf:
        return f"{said}, too low whatever it is"
    if today_v > most_v == -math.inf:
        return f"{said}, too high whatever it is"
    if today_v < least_v - ROUNDING_V:
        return f"{said}, {millivolts(least_v - today_v)} too low"
    if today_v > most_v + ROUNDING_V:
        return f"{said}, {millivolts(today_v - most_v)} too high"
    return said


def _surely(found: LevelPlacement) -> str:
    """What is kept whatever is missing."""
    ends, point_v = found.sure, found.stated.falling_v
    if ends.is_empty or point_v is None:
        return "none, before what is missing is known"
    return f"falling {_interval(point_v + ends.least_v, point_v + ends.most_v)}, whatever is missing"


def _facts(facts: Sequence[str]) -> str:
    """Facts as people name them, those of one element together."""
    return "; ".join(spoken_together(facts))


def limit_text(limit: Limit) -> str:
    """The numbers behind a limit, and the fact it rests on."""
    error = f"error of the {limit.which} level {millivolts(limit.error_v)}" if math.isfinite(limit.error_v) else ""
    return f"{limit.name}: {'; '.join(filter(None, (limit.why, error)))} ({limit.fact})"


def _hysteresis(placed: DetectorPlacement) -> str:
    stated, largest_v = placed.found.stated, placed.largest_hysteresis_v
    now_v = stated.hysteresis_v if stated.apart else None
    parts = ["not given" if now_v is None else f"{millivolts(now_v)} nominal"]
    parts.append(_needed(placed.least_hysteresis))
    if largest_v is not None:
        so_far = " so far" if placed.found.waits else ""
        fit = f"{millivolts(largest_v)} at most fit" if largest_v >= 0.0 else "not even none fits"
        parts.append(f"{fit}{so_far}")
    return "; ".join(parts)


def _needed(needed: Needed) -> str:
    facts = _facts(needed.missing)
    if needed.sure_v is not None:
        return f"{millivolts(needed.sure_v)} or more needed{' at the worst' if facts else ''}"
    if not needed.best_v:
        return f"least needed not known without {facts}" if facts else "least needed not known"
    return f"{millivolts(needed.best_v)} or more needed, and what may come with {facts}"


def _errors(placed: DetectorPlacement) -> str:
    """How large the errors may be where the levels stand, and anywhere: as a size, or as times what they are."""
    said, unit = _size(placed)
    sign = "+-" if placed.found.stated.ranged else ""

    def largest(times: float) -> str:
        if times < 0.0:
            return "none fits"
        return f"up to {sign}{show_down(said * times, unit)}" if said else f"up to {_times(times)} times"

    fits = [
        f"{largest(times)} {where}"
        for where, times in (("here", placed.errors_here), ("at the best place", placed.errors_anywhere))
        if times is not None
    ]
    now = f"{sign}{show(said, unit)} now; " if said else ""
    return f"{now}{', '.join(fits)}{' so far' if placed.found.waits else ''}"


def _times(times: float) -> str:
    return f"{math.floor(times * 100 + 1e-9) / 100:.2f}" if times < 1e6 else f"{times:.3g}"


def _size(placed: DetectorPlacement) -> tuple[float, Dimension]:
    """The size of the errors, where it is one number: of the only error, or the half of the range; else nothing."""
    detector, stated = placed.placing.detector, placed.found.stated
    trip = detector.trip
    spans = [span for span in ((trip.falling, trip.rising) if trip is not None else ()) if span is not None]
    if stated.ranged:
        halves = {round((s.most - s.least) / 2, 9) for s in spans if s.most is not None and s.least is not None}
        return (halves.pop() if len(halves) == 1 else 0.0), _V
    errors = list(detector.errors.values())
    sizes = [(each.share, Dimension.RATIO) for each in errors] + [(each.amount, _V) for each in errors]
    given = [(size.most, unit) for size, unit in sizes if size is not None and size.most is not None]
    return given[0] if len(given) == 1 == len(errors) else (0.0, _V)


def _kept(kept: Kept) -> str:
    """A margin, as far as it is known."""
    if kept.is_exact:
        return f"{kept.name} {signed(kept.best_v)}"
    terms = listed(map(_term, kept.terms))
    if math.isinf(kept.best_v):
        known = math.isfinite(kept.sure_v)
        return f"{kept.name} {signed(kept.sure_v)} at the worst" if known else f"{kept.name} not known without {terms}"
    if math.isfinite(kept.sure_v):
        return f"{kept.name} between {signed(kept.sure_v)} and {signed(kept.best_v)}, by {terms}"
    if kept.best_v < -ROUNDING_V:
        return f"{kept.name} {signed(kept.best_v)} or worse"
    return f"{kept.name} {signed(kept.best_v)} before {terms}"


def _term(name: str) -> str:
    """A term as a sentence names it, or a fact that no term of the account has."""
    return term_name(name) if " " in name or "." not in name else spoken(name)


def _borne(borne: Sequence[Borne]) -> Iterator[str]:
    """What each requirement leaves for what is missing: for all of it together, and for each fact by itself."""
    for requirement in dict.fromkeys(each.requirement for each in borne):
        terms = [each for each in borne if each.requirement == requirement]
        names = listed(_term(each.term) for each in terms)
        together = " together" if len(terms) > 1 else ""
        text = f"{requirement}: {show_down(terms[0].room_v, _V)} for {names}{together}"
        facts = [
            f"{spoken(each.fact.fact)} {'up to' if each.fact.at_most else 'from'} "
            f"{show_down(each.fact.value, dimension_at(each.fact.fact) or _V)}"
            for each in terms
            if each.fact is not None
        ]
        yield f"{text} ({', '.join(facts)}{' by itself' if together else ''})" if facts else text


def _codes(placed: DetectorPlacement) -> str:
    usable = [code for code, holds in placed.usable.items() if holds]
    unsure = [code for code, holds in placed.usable.items() if holds is None]
    ships = placed.comparator.ships_with
    parts = [f"{', '.join(usable) or 'none'} usable of {', '.join(placed.usable)}"]
    if unsure:
        others = len(unsure) < len(placed.usable)
        parts = [*(parts if others else ()), f"not known yet of {', '.join(unsure)}"]
    return "; ".join([*parts, f"ships with {ships}"] if ships else parts)


def _levers(placed: DetectorPlacement, most: int) -> Iterator[str]:
    for number, lever in enumerate(placed.levers[:most]):
        change = f", {lever.change}" if lever.change else ""
        label = "buys room" if number == 0 else ""
        first, *others = row(label, f"{signed(lever.gain_v):<9} {lever.what}{change}")
        yield first
        yield from (f"{'':{2 + _LABEL + 10}}{line.strip()}" for line in others)
    if not placed.levers:
        yield from row("buys room", "nothing that is known here")


def signed(value_v: float) -> str:
    """A margin or gain, to a tenth of a millivolt: ``+12.4 mV``."""
    return f"{'-' if value_v < -5e-8 else '+'}{millivolts(abs(value_v))}"


def millivolts(value_v: float) -> str:
    """A difference of levels, to a tenth of a millivolt: ``12.4 mV``."""
    text = f"{value_v * 1e3:.1f}".removesuffix(".0")
    return f"{'0' if text == '-0' else text} mV"


def up_text(level_v: float) -> str:
    """A least level: the next tenth of a millivolt up."""
    if not abs(level_v) <= _MOST_ON_GRID_V:
        return show(level_v, _V)
    return f"{math.ceil(level_v * _GRID - 1e-6) / _GRID:.4f} V"


def down_text(level_v: float) -> str:
    """A greatest level: the next tenth of a millivolt down."""
    if not abs(level_v) <= _MOST_ON_GRID_V:
        return show(level_v, _V)
    return f"{math.floor(level_v * _GRID + 1e-6) / _GRID:.4f} V"


def all_levers(placed: Sequence[DetectorPlacement]) -> int:
    """How many levers to show of each: all where one detector is asked for, a few where several are."""
    return 100 if len(placed) == 1 else FEW_LEVERS
