"""Where trip levels may lie, for machines: every number as value and unit."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from typing import TYPE_CHECKING, Any, Final

from tidegate.lint.derived.asking import Unknown
from tidegate.lint.derived.levels.detector_placement import DetectorPlacement
from tidegate.lint.derived.levels.level_placement import LevelPlacement
from tidegate.lint.description.place import Place
from tidegate.lint.physics.placement import Limit
from tidegate.lint.reports.json_form import json_form
from tidegate.lint.reports.placement_text import limit_fact, limit_text
from tidegate.lint.version import VERSION

if TYPE_CHECKING:
    from tidegate.lint.physics.yield_estimate import FailureShare, YieldEstimate

PLACEMENT_FORM: Final = "urn:tidegate:placement:1"
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
    """One detector; what is not known is null, with the facts that are missing."""
    comparator, found, least = placed.comparator, placed.found, placed.least_hysteresis_v
    unknown = found if isinstance(found, Unknown) else None
    entry: dict[str, Any] = {
        "id": comparator.id,
        "role": comparator.role,
        "watches": comparator.watches,
        "place": {"file": place.file, "line": place.line, "column": place.column},
        "missing": list(unknown.missing) if unknown else [],
        "problem": unknown.problem if unknown else "",
        "stands": placed.stands,
    }
    if not isinstance(found, Unknown):
        entry |= _found(found)
        entry["hysteresis"] = {
            "now": _volts(found.facts.levels.hysteresis_v),
            "least": None if isinstance(least, Unknown) else _volts(least),
            "least_missing": list(least.missing) if isinstance(least, Unknown) else [],
            "most": _volts(found.largest_hysteresis_v),
        }
        entry["codes"] = dict(placed.usable)
        entry["levers"] = [
            {"what": lever.what, "change": lever.change, "fact": lever.fact, "gain": _volts(lever.gain_v)}
            for lever in placed.levers
        ]
    if estimate is not None:
        entry["yield"] = _estimate(estimate)
    return entry


def _found(found: LevelPlacement) -> dict[str, Any]:
    levels, falling = found.facts.levels, found.falling
    apart_v = levels.hysteresis_v
    return {
        "falling": _interval(falling.least_v, falling.most_v, levels.falling_v),
        "rising": _interval(falling.least_v + apart_v, falling.most_v + apart_v, levels.rising_v),
        "room": _volts(found.room_v),
        "short": _volts(falling.short_v),
        "lowest_by": _limit(found, found.below),
        "highest_by": _limit(found, found.above),
        "margins": {by.value: _volts(margin_v) for by, margin_v in found.margins_v.items()},
    }


def _interval(least_v: float, most_v: float, now_v: float | None) -> dict[str, Any]:
    return {"least": _volts(least_v), "most": _volts(most_v), "now": None if now_v is None else _volts(now_v)}


def _limit(found: LevelPlacement, limit: Limit) -> dict[str, Any]:
    return {
        "requirement": limit.by.value,
        "level": limit.level.value,
        "limit": _volts(limit.nominal_v),
        "fact": limit_fact(found.facts, limit),
        "why": limit_text(found.facts, limit),
    }


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


def _volts(value_v: float) -> dict[str, Any]:
    return {"value": value_v, "unit": "V"}
