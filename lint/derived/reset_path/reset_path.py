"""The ways on which the level of an output stage reaches the reset nets."""

from __future__ import annotations

from collections import deque
from collections.abc import Iterator
from typing import Final

import msgspec

from tidegate.lint.case import Case
from tidegate.lint.description.model.reset_path import OutputStage, Reset
from tidegate.lint.graph.edge import Hop, Path
from tidegate.lint.graph.paths import Reach, driven_by, drives

_SAID_BY_KIND: Final = {"inverter": True, "buffer": False}


class Onward(msgspec.Struct, frozen=True):
    """What lies between an output stage and the reset nets behind it, the stage itself left out."""

    stages: tuple[OutputStage, ...]
    resets: tuple[Reset, ...]
    reach: Reach

    def path(self, element: str) -> Path:
        """The shortest way from the stage to one of them."""
        return self.reach.path(element)


def onward(case: Case, stage: OutputStage) -> Onward:
    """The stages and reset nets behind an output stage, nearest first; stages that lead to no reset net left out."""
    ahead = Reach(stage.id, drives(case.graph))
    resets = tuple(case.description.resets[name] for name in ahead if name in case.description.resets)
    back = driven_by(case.graph)
    leading = {reset.id for reset in resets}
    waiting = list(leading)
    while waiting:
        for name, _, _ in back(waiting.pop()):
            if name in ahead and name not in leading:
                leading.add(name)
                waiting.append(name)
    stages = case.description.output_stages
    between = tuple(stages[name] for name in ahead if name in leading and name in stages and name != stage.id)
    return Onward(between, resets, ahead)


class Arrival(msgspec.Struct, frozen=True):
    """A level that reaches a reset net, as it is or inverted, and the shortest way on which it does."""

    reset: Reset
    inverted: bool
    path: Path


def arrivals(case: Case, stage: OutputStage, behind: Onward) -> tuple[Arrival, ...]:
    """How the level of a stage's output reaches each reset net; twice where ways with and without inversion lead there.

    Where it is not given whether a stage on a way inverts, either is tried.
    """
    inverted_by = {after.id: inverts(case, after) for after in behind.stages}
    return tuple(_walk(case, stage, behind, inverted_by))


_State = tuple[str, bool]  # an element, and whether the level at its output is the inverse of where it began


def _walk(case: Case, stage: OutputStage, behind: Onward, inverted_by: dict[str, bool]) -> Iterator[Arrival]:
    resets = {reset.id: reset for reset in behind.resets}
    onto = drives(case.graph)
    start: _State = (stage.id, False)
    came: dict[_State, tuple[_State | None, str]] = {start: (None, "")}
    waiting = deque((start,))
    while waiting:
        here = waiting.popleft()
        for name, words, _ in onto(here[0]):
            state = (name, here[1] ^ inverted_by.get(name, False))
            if state in came or not (name in resets or name in inverted_by):
                continue
            came[state] = (here, words)
            if name in resets:
                yield Arrival(resets[name], state[1], _path(came, state))
            else:
                waiting.append(state)


def _path(came: dict[_State, tuple[_State | None, str]], end: _State) -> Path:
    hops: list[Hop] = []
    here: _State | None = end
    while here is not None:
        before, words = came[here]
        hops.append(Hop(here[0], words))
        here = before
    return tuple(reversed(hops))


def inverts(case: Case, stage: OutputStage) -> bool:
    """Whether a stage inverts: as stated, or as its kind says; where neither does, either is tried."""
    said = stage.inverting if stage.inverting is not None else _SAID_BY_KIND.get(stage.kind or "")
    return case.of(stage).inverting.must() if said is None else said
