"""Descriptions of one or two detectors on one rail, with just the numbers that a check is about."""

from __future__ import annotations

from collections.abc import Mapping
from typing import Any

from tidegate.lint.case import Case
from tidegate.lint.description.load import description_of
from tidegate.lint.description.model.description import Description
from tidegate.lint.facts.reading import Reading
from tidegate.lint.graph.dependency import build
from tidegate.lint.judgement import Level

Data = Mapping[str, Any]

AT_ONCE: Data = {"delay": "0 s", "filter": "none", "sampling": "none"}
CALM: Data = {
    "ripple": {"peak_to_peak": "0 V"}, "load_step": "none", "source_impedance": "0 ohm", "collapse": "0 V/s",
    "overshoot": "0 V/s",
}  # fmt: skip
EXACT: Data = {"all": {"of": "total", "amount": "0 V", "is": "bound", "at": "rail"}}


def volts(value_v: float) -> str:
    return f"{value_v:.12g} V"


def span(ends: tuple[float, float]) -> Data:
    return {"min": volts(ends[0]), "max": volts(ends[1])}


def detector(role: str, falling: Any, rising: Any, **more: Any) -> dict[str, Any]:
    """A detector of the rail vdd: levels as ranges of volts or as nominal ones, without error where none is given."""
    trip = {
        name: level if isinstance(level, Mapping | str) else span(level) if isinstance(level, tuple) else volts(level)
        for name, level in (("falling", falling), ("rising", rising))
        if level is not None
    }
    return {"role": role, "watches": "vdd", "trip": trip, "errors": EXACT, **AT_ONCE, **more}


def description(detectors: Mapping[str, Data], *, works: Data | None = None, **rail: Any) -> Description:
    """Detectors of a calm rail, each of which resets one load that works in a range."""
    data = {
        "rails": {"vdd": {**CALM, **rail}},
        "comparators": detectors,
        "output_stages": {"out": {"driven_by": list(detectors)}},
        "resets": {"rst": {"driven_by": ["out"], "active": "low", "guards": ["chip"]}},
        "loads": {"chip": {"needs": [{"rail": "vdd", **({} if works is None else {"works": works})}]}},
    }  # fmt: skip
    found = description_of(data)
    assert found is not None, data
    return found


def case_on(found: Description, element: str, reading: Reading | None = None) -> Case:
    """A case on one of its elements."""
    graph = build(found)
    return Case(
        subject=graph.elements[element], rule="", level=Level.NOTE, description=found, graph=graph, reading=reading
    )
