"""The levels that ``tidegate place --apply`` chooses, and their way into the files."""

from __future__ import annotations

import math
from collections.abc import Sequence
from pathlib import Path as FilePath
from typing import Final

from tidegate.lint.derived.asking import Unknown
from tidegate.lint.derived.levels.detector_placement import DetectorPlacement
from tidegate.lint.derived.levels.level_placement import LevelPlacement, margins_v, windows_at
from tidegate.lint.derived.levels.level_spread import is_nominal
from tidegate.lint.description.load import Loaded
from tidegate.lint.description.place import DescriptionError, Fault, Path, Place, dotted
from tidegate.lint.description.reading import read_file
from tidegate.lint.description.rewrite import replace_file, rewritten
from tidegate.lint.quantity import Voltage

_PER_VOLT: Final = 1000  # levels are chosen in whole millivolts
_MOST_TRIED: Final = 3


def write_levels(loaded: Loaded, placed: Sequence[DetectorPlacement]) -> tuple[list[str], list[Fault]]:
    """Write the levels of each detector that has a place into the file where they stand.

    Returns: what was written, and what could not be.
    """
    values: dict[str, dict[Path, str]] = {}
    faults: list[Fault] = []
    for each in placed:
        try:
            for path, level_mv in _chosen(loaded, each).items():
                place = loaded.sources.place(path)
                values.setdefault(place.file, {})[path] = _text(loaded, path, level_mv)
        except DescriptionError as error:
            faults += error.faults
    written: list[str] = []
    for file, of_file in values.items():
        try:
            replace_file(FilePath(file), rewritten(file, read_file(FilePath(file)), of_file))
        except DescriptionError as error:
            faults += error.faults
        except OSError as error:
            reason = error.strerror or "no reason given"
            faults.append(Fault(Place(file), "", f"cannot be written ({reason})", "nothing in it was changed"))
        else:
            written += [f"{file}: wrote {dotted(path)}: {value}" for path, value in of_file.items()]
    return written, faults


def _chosen(loaded: Loaded, placed: DetectorPlacement) -> dict[Path, int]:
    """The paths and levels to write, in millivolts.

    Raises: DescriptionError: where there is no place for the levels, or they are not stated as nominal values.
    """
    comparator, found = placed.comparator, placed.found
    base: Path = ("comparators", comparator.id)

    def fault(problem: str, advice: str) -> DescriptionError:
        return DescriptionError([Fault(loaded.sources.place((*base, "trip")), dotted(base), problem, advice)])

    if isinstance(found, Unknown):
        raise fault(f"cannot be placed ({found.text()})", "nothing was written")
    if comparator.trip is None and comparator.codes:
        raise fault("its levels are chosen by code", "choose a code that is usable")
    if found.facts.levels.ranged:
        raise fault("its levels are stated as a range", "move the circuit, and state the range that it has then")
    if found.falling.short_v > 0.0:
        raise fault("no level keeps every limit", "see what would buy room")
    chosen = chosen_levels_mv(found)
    if chosen is None:
        raise fault("no whole millivolt lies in the interval", "write the level yourself")
    trip = comparator.trip
    spans = (("falling", trip and trip.falling, chosen[0]), ("rising", trip and trip.rising, chosen[1]))
    given = [(which, span, level_mv) for which, span, level_mv in spans if isinstance(span, Voltage)]
    if not given:  # keys without a value yet: rewriting says so where there is no key
        return {(*base, "trip", which): level_mv for which, _, level_mv in spans}
    return {
        (*base, "trip", which, *_to_value(span)): level_mv
        for which, span, level_mv in given
        if span.typical != level_mv / _PER_VOLT
    }


def _to_value(span: Voltage) -> Path:
    """The rest of the way to the value of a nominal level, which may be stated as ``{typ: ...}``."""
    assert is_nominal(span)
    return () if span.least is not None else ("typ",)


def chosen_levels_mv(found: LevelPlacement) -> tuple[int, int] | None:
    """Falling and rising level in whole millivolts, the nearest the middle that keep every limit; None if none do."""
    middle = round(found.middle_v * _PER_VOLT)
    apart = found.facts.levels.hysteresis_v * _PER_VOLT
    whole = [round(apart)] if math.isclose(round(apart), apart, abs_tol=1e-6) else [math.floor(apart), math.ceil(apart)]
    for step in range(_MOST_TRIED):
        for falling in dict.fromkeys((middle - step, middle + step)):
            for between in sorted(whole, key=lambda each: abs(each - apart)):
                windows = windows_at(found.facts, falling / _PER_VOLT, (falling + between) / _PER_VOLT)
                if min(margins_v(found.facts, windows).values()) >= 0.0:
                    return falling, falling + between
    return None


def _text(loaded: Loaded, path: Path, level_mv: int) -> str:
    """The level in the unit in which it stands: millivolts or volts."""
    now = _value(loaded.sources.data, path)
    if isinstance(now, str) and now.endswith("mV"):
        return f"{level_mv} mV"
    return f"{level_mv / _PER_VOLT:.3f} V"


def _value(data: object, path: Path) -> object:
    for step in path:
        if not isinstance(data, dict):
            return None
        data = data.get(step)
    return data
