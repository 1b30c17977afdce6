"""The levels that ``tidegate place --apply`` chooses, and their way into the files."""

from __future__ import annotations

import math
from collections.abc import Sequence
from pathlib import Path as FilePath
from typing import Final

from tidegate.lint.derived.levels.detector_placement import DetectorPlacement
from tidegate.lint.derived.levels.placing import Place as LevelPlace
from tidegate.lint.description.load import Loaded
from tidegate.lint.description.place import DescriptionError, Fault, Path, Place, dotted
from tidegate.lint.description.reading import read_file
from tidegate.lint.description.rewrite import replace_file, rewritten
from tidegate.lint.facts.reading import Corner

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

    if comparator.trip is None and comparator.codes:
        raise fault("its levels are chosen by code", "choose a code that is usable")
    if found.stated.words == "typical":
        raise fault("its levels are stated as typical values", "state nominal levels with their errors")
    if found.stated.ranged:
        raise fault("its levels are stated as a range", "move the circuit, and state the range that it has then")
    if found.best.is_empty:
        raise fault("no level keeps every limit", "see what would buy room")
    if found.sure.is_empty:
        raise fault(f"no level surely keeps every limit without {', '.join(found.waits)}", "nothing was written")
    chosen = chosen_levels_mv(placed)
    if chosen is None:
        raise fault("no whole millivolt lies in the interval", "write the level yourself")
    trip = comparator.trip
    falling, rising = (None, None) if trip is None else (trip.falling, trip.rising)
    new = {"falling": chosen[0], "rising": chosen[1]}
    given = {which: span for which, span in (("falling", falling), ("rising", rising)) if span is not None}
    # keys without a value yet: rewriting says so where there is no key
    return {
        (*base, "trip", which): level_mv
        for which, level_mv in new.items()
        if not given or (which in given and given[which].typical != level_mv / _PER_VOLT)
    }


def chosen_levels_mv(placed: DetectorPlacement) -> tuple[int, int] | None:
    """Falling and rising level in whole millivolts, the nearest the middle that surely keep every limit.

    Of a detector that states one level, the other one is as far away as its hysteresis says.
    Returns: None where none do, or where it is not known how far the levels lie apart or where either end is.
    """
    stated, middle_v = placed.found.stated, placed.found.sure.middle_v
    if stated.falling_v is None or stated.hysteresis_v is None or not math.isfinite(middle_v):
        return None
    middle = round((stated.falling_v + middle_v) * _PER_VOLT)
    apart = stated.hysteresis_v * _PER_VOLT
    whole = [round(apart)] if math.isclose(round(apart), apart, abs_tol=1e-6) else [math.floor(apart), math.ceil(apart)]
    for step in range(_MOST_TRIED):
        for falling in dict.fromkeys((middle - step, middle + step)):
            for between in sorted(whole, key=lambda each: abs(each - apart)):
                if _is_kept(placed, falling / _PER_VOLT, (falling + between) / _PER_VOLT):
                    return falling, falling + between
    return None


def _is_kept(placed: DetectorPlacement, falling_v: float, rising_v: float) -> bool:
    """Whether levels keep every limit, whatever is missing."""
    placing, stated, trip = placed.placing, placed.found.stated, placed.comparator.trip
    assert stated.falling_v is not None and stated.rising_v is not None
    place = LevelPlace(falling_v - stated.falling_v, (rising_v - falling_v) - (stated.rising_v - stated.falling_v))
    if trip is not None and (trip.falling is None) is not (trip.rising is None):
        place = LevelPlace(rising_v - stated.rising_v if trip.falling is None else falling_v - stated.falling_v)
    return all(placing.margin(due, Corner.SURE, place).margin_v >= 0.0 for due in placing.dues)


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
