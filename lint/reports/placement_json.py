"""Where trip levels may lie, for machines: every number as value and unit, null where it has no end or is not known."""

from __future__ import annotations

import math
from collections.abc import Mapping, Sequence
from typing import TYPE_CHECKING, Any, Final

from tidegate.lint.derived.asking import Unknown
from tidegate.lint.derived.levels.detector_placement import Borne, DetectorPlacement
from tidegate.lint.derived.levels.level_placement import Ends, Kept, LevelPlacement, Limit
from tidegate.lint.description.place import Place
from tidegate.lint.facts.names import dimension_at
from tidegate.lint.quantity import Dimension
from tidegate.lint.reports.json_form import json_form
from tidegate.lint.reports.placement_text import limit_text
from tidegate.lint.version import VERSION

if TYPE_CHECKING:
    from tidegate.lint.physics.yield_estimate import FailureShare, YieldEstimate

PLACEMENT_FORM: Final = "urn:tidegate:placement:2"
"""The version of this form."""


def placement_text_json(file: str, written: Sequence[str], entries: Sequence[dict[str, Any]]) -> str:
    """The whole answer as text."""
    answer = {
        "schema": PLACEMENT_FORM,
        "tool": {"name": "tidegate", "version": VERSION},
        "file": file,
        "written": list(written),
        "detectors": list(entries),
    }
    return json_form(answer) + "\n"


def placement_entry(
    placed: DetectorPlacement, place: Place, estimate: YieldEstimate | Unknown | None
) -> dict[str, Any]:
    """One detector; what is not known is null, and the facts that are missing stand beside it."""
    comparator, found, least = placed.comparator, placed.found, placed.least_hysteresis
    stated = found.stated
    entry: dict[str, Any] = {
        "id": comparator.id,
        "role": comparator.role,
        "watches": comparator.watches,
        "place": {"file": place.file, "line": place.line, "column": place.column},
        "missing": list(found.waits),
        "stands": found.stands,
        **_found(found),
        "hysteresis": {
            "now": _volts(stated.hysteresis_v if stated.apart else None),
            "least": _volts(least.best_v),
            "enough": _volts(least.sure_v),
            "least_missing": list(least.missing),
            "most": _volts(placed.largest_hysteresis_v),
        },
        "errors": {"times_here": _times(placed.errors_here), "times_anywhere": _times(placed.errors_anywhere)},
        "bears": [_borne(each) for each in placed.borne],
        "codes": dict(placed.usable),
        "levers": [
            {"what": lever.what, "change": lever.change, "fact": lever.fact, "gain": _volts(lever.gain_v)}
            for lever in placed.levers
        ],
    }
    if estimate is not None:
        entry["yield"] = _estimate(estimate)
    return entry


def _found(found: LevelPlacement) -> dict[str, Any]:
    best = found.best
    return {
        "falling": _interval(found, found.stated.falling_v),
        "rising": _interval(found, found.stated.rising_v),
        "room": _volts(best.room_v),
        "short": _volts(max(0.0, -best.room_v)),
        "lowest_by": _limit(best.below),
        "highest_by": _limit(best.above),
        "margins": {kept.name: _kept(kept) for kept in found.kept},
    }


def _interval(found: LevelPlacement, point_v: float | None) -> dict[str, Any] | None:
    """Where a level may lie, as far as is known, and surely; null where nothing says how far it is from the other."""
    if point_v is None:
        return None
    return {
        **_ends(found.best, point_v),
        "now": _volts(point_v) if found.stated.placed else None,
        "surely": None if found.sure.is_empty else _ends(found.sure, point_v),
    }


def _ends(ends: Ends, point_v: float) -> dict[str, Any]:
    return {"least": _volts(point_v + ends.least_v), "most": _volts(point_v + ends.most_v)}


def _limit(limit: Limit | None) -> dict[str, Any] | None:
    if limit is None:
        return None
    return {
        "requirement": limit.name,
        "level": limit.which,
        "limit": _volts(limit.limit_v),
        "fact": limit.fact,
        "why": limit_text(limit),
    }


def _kept(kept: Kept) -> dict[str, Any]:
    return {"surely": _volts(kept.sure_v), "at_best": _volts(kept.best_v), "not_known": list(kept.terms)}


def _borne(borne: Borne) -> dict[str, Any]:
    fact = borne.fact
    kept = None
    if fact is not None:
        value = {"value": fact.value, "unit": (dimension_at(fact.fact) or Dimension.VOLTAGE).unit}
        kept = {"fact": fact.fact, "relation": "at most" if fact.at_most else "at least", **value}
    return {
        "requirement": borne.requirement, "term": borne.term, "room": _volts(borne.room_v), "alone": borne.alone,
        "kept": kept,
    }  # fmt: skip


def _estimate(estimate: YieldEstimate | Unknown) -> dict[str, Any]:
    if isinstance(estimate, Unknown):
        return {"missing": list(estimate.missing), "problem": estimate.problem, "demands": {}, "detector": None}
    demands: Mapping[tuple[str, str], FailureShare] = estimate.by_demand
    return {
        "missing": [],
        "problem": "",
        "demands": {name: _share(share) for (_, name), share in demands.items()},
        "detector": _share(estimate.whole),
    }


def _share(share: FailureShare) -> dict[str, Any]:
    parts = {"ppm": share.ppm, "least_ppm": share.least_ppm, "most_ppm": share.most_ppm, "normal_ppm": share.normal_ppm}
    return {"failures": share.failures, "samples": share.samples, **parts}


def _times(times: float | None) -> float | None:
    return times if times is not None and math.isfinite(times) else None


def _volts(value_v: float | None) -> dict[str, Any]:
    return {"value": _times(value_v), "unit": "V"}
