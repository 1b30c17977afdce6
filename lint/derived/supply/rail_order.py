"""The rails that feed a rail or come up before it.

Only supply counts here, not control: a regulator that waits for a reset net proves nothing about the rails behind that
net, because a net whose stages are dead may let it go.
"""

from __future__ import annotations

from collections.abc import Iterator

from tidegate.lint.case import Case
from tidegate.lint.description.model.reset_path import Load
from tidegate.lint.description.model.supply import Rail


def rails_before(case: Case, rail: Rail) -> frozenset[str]:
    """The rails that are up before a rail: those it comes after, and those that feed what makes it."""
    found: set[str] = set()
    waiting = [rail]
    while waiting:
        for before in _directly_before(case, waiting.pop()):
            if before not in found:
                found.add(before)
                waiting.append(case.description.rails[before])
    return frozenset(found)


def _directly_before(case: Case, rail: Rail) -> Iterator[str]:
    if rail.after is not None:
        yield rail.after
    if rail.made_by is None:
        return
    maker = case.graph.elements[rail.made_by]
    if isinstance(maker, Load):
        yield from (need.rail for need in maker.needs)
    domain = case.description.domains.get(getattr(maker, "domain", None) or "")
    if domain is not None and domain.rail is not None:
        yield domain.rail
