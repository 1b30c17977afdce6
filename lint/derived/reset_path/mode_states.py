"""Which elements are awake in each operating mode, and which detectors still reset what."""

from __future__ import annotations

from collections.abc import Iterator, Mapping
from typing import Final

import msgspec

from tidegate.lint.description.model.description import Description, Mode
from tidegate.lint.description.model.detector import Comparator
from tidegate.lint.description.model.reset_path import Load
from tidegate.lint.graph.dependency import Graph
from tidegate.lint.graph.edge import Edge, EdgeKind
from tidegate.lint.graph.kept_last import keeps_last
from tidegate.lint.graph.paths import Reach, driven_by

_OFF_WITH: Final = frozenset({EdgeKind.SUPPLIED_BY, EdgeKind.MADE_BY})
_SLEEPS_WITH: Final = frozenset(
    {EdgeKind.SUPPLIED_BY, EdgeKind.BIASED_BY, EdgeKind.TAKES_REFERENCE_FROM, EdgeKind.LEANS_ON, EdgeKind.GATED_BY}
)
"""What an element that leans on a sleeping one cannot do without."""


class Asleep(msgspec.Struct, frozen=True):
    """Why an element does nothing in a mode: what is off, or itself where it is masked."""

    because: str
    masked: bool = False

    def text(self, element: str) -> str:
        """``uv is off``, ``uv is masked``, ``uv leans on ref_fast, which is off``."""
        if self.masked:
            return f"{element} is masked"
        return f"{element} is off" if self.because == element else f"{element} leans on {self.because}, which is off"


class ModeState:
    """One mode."""

    def __init__(self, name: str, mode: Mode, graph: Graph) -> None:
        self.name = name
        self.mode = mode
        self.graph = graph
        self.asleep: Mapping[str, Asleep] = self._asleep()
        self._heard: dict[str, frozenset[str]] = {}

    def _asleep(self) -> dict[str, Asleep]:
        """What is off, and all that cannot do without it."""
        found = {name: Asleep(name) for name in self.mode.off or ()}
        # A maker that is off makes no rail; one that merely lacks its reference is not said to be off.
        self._spread(found, _OFF_WITH)
        self._spread(found, _SLEEPS_WITH)
        return found

    def _spread(self, found: dict[str, Asleep], kinds: frozenset[EdgeKind]) -> None:
        """Add to what sleeps all that leans on it in some ways."""
        waiting = list(found)
        while waiting:
            here = waiting.pop()
            for edge in self.graph.into(here):
                if edge.kind in kinds and edge.tail not in found:
                    found[edge.tail] = Asleep(found[here].because)
                    waiting.append(edge.tail)

    def why_deaf(self, detector: str) -> Asleep | None:
        """Why a detector decides nothing; None where it does."""
        if detector in (self.mode.masked or ()):
            return Asleep(detector, masked=True)
        return self.asleep.get(detector)

    def heard_by(self, net: str) -> frozenset[str]:
        """The detectors that decide and whose decision reaches a net through stages that are awake."""
        if net not in self._heard:
            back = driven_by(self.graph)

            def awake(name: str) -> Iterator[tuple[str, str, Edge]]:
                return (step for step in back(name) if self.why_deaf(step[0]) is None)

            reach = Reach(net, awake)
            self._heard[net] = frozenset(name for name in reach if isinstance(self.graph.elements[name], Comparator))
        return self._heard[net]

    def is_off(self, load: Load) -> bool:
        """Whether a load is off, by itself, with its domain or with a rail whose maker is off."""
        own = load.id in (self.mode.off or ()) or load.domain in self.asleep
        return own or any(need.rail in self.asleep for need in load.needs)


@keeps_last
def mode_states(description: Description, graph: Graph) -> tuple[ModeState, ...]:
    """Every mode, by name; those of the last description asked for are kept."""
    return tuple(ModeState(name, description.modes[name], graph) for name in sorted(description.modes))
