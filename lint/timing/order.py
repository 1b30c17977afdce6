"""The order in which elements are timed: each after whatever it leans on; what leans on itself, together."""

from __future__ import annotations

from collections.abc import Iterable, Mapping

import msgspec

from tidegate.lint.graph.cycles import strong_components
from tidegate.lint.timing.parts import (
    ComparatorPart,
    DomainPart,
    LoadPart,
    RailPart,
    ResetPart,
    SourcePart,
    StagePart,
    TimedPart,
)


def leans_on(part: TimedPart) -> tuple[str, ...]:
    """What the timing of an element needs the timing of."""
    match part:
        case RailPart():
            return tuple(name for name in (part.after, part.made_by) if name is not None)
        case DomainPart():
            return (part.rail, *part.switched_by)
        case SourcePart():
            return (part.rail, part.domain, *part.needs)
        case ComparatorPart():
            return (part.rail, part.domain, part.watches, *part.needs, *part.armed_by)
        case StagePart():
            return (part.rail, part.domain, *part.needs, *part.driven_by)
        case ResetPart():
            return part.driven_by
        case LoadPart():
            return (*readiness_of(part), *part.resets)


def rails_of(part: TimedPart) -> set[str]:
    """The rails that feed an element, that it watches or needs."""
    match part:
        case ComparatorPart():
            return {part.rail, part.watches}
        case SourcePart() | StagePart():
            return {part.rail}
        case LoadPart():
            return {rail for rail, _ in part.works}
        case _:
            return set()


def readiness_of(load: LoadPart) -> tuple[str, ...]:
    """What a load needs before it is ready."""
    rails = tuple(rail for rail, _ in load.works)
    return (*rails, *load.needs) if load.domain is None else (*rails, load.domain, *load.needs)


def without_started_loops(parts: Mapping[str, TimedPart]) -> dict[str, TimedPart]:
    """The parts, with each source that a start-up circuit starts no longer waiting for what leans on it."""
    needs = {name: leans_on(part) for name, part in parts.items()}
    freed = dict(parts)
    for group in strong_components(needs):
        inside = set(group)
        for name in group:
            part = parts[name]
            if isinstance(part, SourcePart) and part.starts_itself and inside.intersection(part.needs):
                kept = tuple(needed for needed in part.needs if needed not in inside)
                freed[name] = msgspec.structs.replace(part, needs=kept)
    return freed


def in_order(parts: Mapping[str, TimedPart]) -> list[tuple[list[str], bool]]:
    """Groups of elements, each after what it needs; with each, whether it leans on itself."""
    needs = {name: leans_on(part) for name, part in parts.items()}
    groups = strong_components(needs)
    return [(sorted(group), len(group) > 1 or group[0] in needs[group[0]]) for group in groups]


def reached(successors: Mapping[str, Iterable[str]], start: str) -> list[str]:
    """Everything that can be reached from an element; the element first."""
    found = [start]
    seen = {start}
    for name in found:
        for other in successors.get(name, ()):
            if other not in seen:
                seen.add(other)
                found.append(other)
    return found
