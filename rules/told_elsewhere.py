"""Faults that leave what hangs on them undecided or late, each told by one rule: the failures of others yield to it."""

from __future__ import annotations

from collections.abc import Iterable, Iterator
from typing import Any, Final

from tidegate.lint.derived.reset_path.guarding_nets import detectors_behind_nets, guarding_nets, watching
from tidegate.lint.description.model.description import Description
from tidegate.lint.description.model.reset_path import Load
from tidegate.lint.graph.dependency import Graph, build
from tidegate.lint.graph.kept_last import keeps_last
from tidegate.lint.graph.paths import Reach
from tidegate.lint.rule import Yield


@keeps_last
def _kept(description: Description, _: object) -> Graph:
    return build(description)


def graph_of(description: Description) -> Graph:
    """The graph of a description, kept for whoever asks next: a yield is told no more than the description."""
    return _kept(description, None)  # type: ignore[arg-type]  # nothing else tells graphs apart


def hangs_on(element: Any, description: Description) -> Iterator[str]:
    """The element and all that it leans on."""
    graph = graph_of(description)
    return iter(Reach(element.id, graph.needs))


def rails_needed(load: Load, _: Description) -> Iterable[str]:
    """The rails that a load needs."""
    return [need.rail for need in load.needs]


def detectors_resetting(load: Load, description: Description) -> Iterator[str]:
    """The under-voltage detectors of the rails that a load needs whose decision reaches a net that guards it."""
    graph = graph_of(description)
    behind = graph.once(detectors_behind_nets)
    heard = {detector.id for net in guarding_nets(graph, load) for detector in behind[net]}
    for rail in rails_needed(load, description):
        yield from (one.id for one in watching(graph, rail, ("under_voltage",)) if one.id in heard)


NEVER_KNOWN: Final = tuple(
    Yield(rule, on=hangs_on) for rule in ("self_bias/loop_starts", "self_bias/no_loop", "passive_default/latch_state")
)
"""What waits for itself, or comes up either way: nothing that hangs on it can be relied on."""

DECIDES_TOO_LATE: Final = tuple(
    Yield(rule, on=detectors_resetting) for rule in ("trip_window/guarantee", "trip_window/placement_sense")
)
"""A detector that decides too late by itself."""

NOBODY_JUDGES: Final = (Yield("coverage/under_voltage", on=rails_needed), Yield("reach/every_rail"))
"""No detector of a rail resets the load."""
