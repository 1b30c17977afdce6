"""Facts by the kind of evidence they rest on."""

from __future__ import annotations

from collections.abc import Iterator
from typing import Any, Final

from tidegate.lint.description.model.description import Description
from tidegate.lint.description.model.part import Part
from tidegate.lint.quantity import Basis, Span
from tidegate.lint.reports.page.contents import BasedFact, BasisRow, Evidence

_SECTIONS: Final = (
    "conditions", "process", "rails", "domains", "references", "biases", "comparators", "output_stages", "resets",
    "loads", "bypasses", "neighbours", "scenarios",
)  # fmt: skip
_KINDS: Final = ("measured", "simulated", "calculated", "published", "")
MOST_FACTS: Final = 400
_COVERS: Final = (
    ("corners", "corners"), ("temperatures", "temperatures"), ("ramps", "ramps"), ("reference", "reference"),
)  # fmt: skip


def evidence(description: Description) -> Evidence:
    """How many numbers of each section rest on what, and every number that says so."""
    counts = {kind: dict.fromkeys(_SECTIONS, 0) for kind in _KINDS}
    facts: list[BasedFact] = []
    for section in _SECTIONS:
        for path, span in _numbers(getattr(description, section), section):
            basis = span.basis
            counts[(basis.by if basis else None) or ""][section] += 1
            if basis is not None:
                facts.append(BasedFact(path, basis.by or "not said", _covers(basis), basis.source or ""))
    sections = tuple(section for section in _SECTIONS if any(row[section] for row in counts.values()))
    rows = tuple(
        BasisRow(kind or "not said", tuple(row[section] for section in sections))
        for kind, row in counts.items()
        if any(row.values())
    )
    return Evidence(
        sections=tuple(section.replace("_", " ") for section in sections), rows=rows, facts=tuple(facts[:MOST_FACTS]),
        left_out=max(len(facts) - MOST_FACTS, 0),
    )  # fmt: skip


def _numbers(value: Any, path: str) -> Iterator[tuple[str, Span]]:
    """Every quantity below a part of the description, with its path."""
    if isinstance(value, Span):
        yield path, value
    elif isinstance(value, Part):
        for field in value.__struct_fields__:
            yield from _numbers(getattr(value, field), f"{path}.{'is' if field == 'is_' else field}")
    elif isinstance(value, dict):
        for key, inner in value.items():
            yield from _numbers(inner, f"{path}.{key}")
    elif isinstance(value, tuple):
        for index, inner in enumerate(value):
            yield from _numbers(inner, f"{path}[{index}]")


def _covers(basis: Basis) -> str:
    said = [(word, getattr(basis, field)) for field, word in _COVERS]
    return ", ".join(f"{word}: {value}" for word, value in said if value)
