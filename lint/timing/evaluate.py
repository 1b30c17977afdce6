"""Times every element in one scenario, each after what it leans on."""

from __future__ import annotations

from collections.abc import Callable, Iterable, Mapping, Sequence
from typing import Any, Final, NamedTuple, TypeAlias

import msgspec

from tidegate.lint.timing.carry import output_of
from tidegate.lint.timing.detect import decision_of
from tidegate.lint.timing.interval import FOREVER_S, both, either
from tidegate.lint.timing.order import in_order, leans_on, without_started_loops
from tidegate.lint.timing.parts import (
    Bounds,
    ComparatorPart,
    DomainPart,
    LoadPart,
    RailPart,
    ResetPart,
    SourcePart,
    StagePart,
    TimedPart,
    bounds_of,
)
from tidegate.lint.timing.ramps import RailRamp
from tidegate.lint.timing.scenario import Scenario
from tidegate.lint.timing.state import (
    ALWAYS_ON,
    ANY_DECISION,
    ANYTHING,
    ASSERTED,
    KNOWN,
    NEVER_ON,
    NO_DECISION,
    NOTHING_KNOWN,
    RELEASED,
    Decision,
    On,
    all_agree,
    all_on,
    any_asserts,
    lets_go,
    settled,
)
from tidegate.lint.timing.supply import GivenSupply, MadeSupply, Ramp, Supply

_ABOVE_NOTHING_V: Final = 1e-9
"""A supply of 0 V feeds nothing, not even what may work from 0 V on."""


class LoadState(NamedTuple):
    """What a load may be at each time."""

    fed: On
    """Every rail is where the load works, whatever its references do."""
    ready: On
    """Fed, its references and all else it needs up, and its time to be ready over."""
    reset: Decision
    """Reset by any net that guards it."""
    running: On
    """Fed, with what it needs up, and released."""


State: TypeAlias = Supply | On | Decision | LoadState
States: TypeAlias = Mapping[str, State]


class Network(msgspec.Struct, frozen=True):
    """All that can be timed: parts, the order in which they are, and the ramps of rails."""

    parts: Mapping[str, TimedPart]
    order: Sequence[tuple[Sequence[str], bool]]
    ramps: Mapping[str, RailRamp]
    place: Mapping[str, int]
    """Where each element comes in the order."""
    leans_on: Mapping[str, Sequence[str]]
    """What the state of each element follows from, beside the scenario."""
    others: Mapping[str, Sequence[TimedPart]] = {}
    """What else an element may be, where a word is missing."""
    best: bool = False
    """Whether what is not known is taken for the best: what then may be so may be so whatever it turns out to be."""

    def among(self, names: Iterable[str]) -> Network:
        """The same network, with the order of some elements alone; of what leans on itself, all."""
        order = [self.order[place] for place in sorted({self.place[name] for name in names if name in self.place})]
        parts = {name: self.parts[name] for group, _ in order for name in group}
        return msgspec.structs.replace(self, parts=parts, order=order)

    def pinned(self, ends: Mapping[str, bool]) -> Network:
        """The same network with the tolerances of some elements at their least (False) or greatest (True) ends."""
        parts, others = dict(self.parts), dict(self.others)
        for name, greatest in ends.items():
            if name in parts:
                parts[name] = _at_end(parts[name], greatest)
            if name in others:
                others[name] = [_at_end(other, greatest) for other in others[name]]
        return msgspec.structs.replace(self, parts=parts, others=others)


def network(
    parts: Mapping[str, TimedPart], ramps: Mapping[str, RailRamp],
    others: Mapping[str, Sequence[TimedPart]] | None = None, *, best: bool = False,
) -> Network:  # fmt: skip
    """The network of some parts."""
    parts = without_started_loops(parts)
    order = in_order(parts)
    place = {name: number for number, (group, _) in enumerate(order) for name in group}
    leant_on = {name: leans_on(part) for name, part in parts.items()}
    return Network(parts, order, ramps, place, leant_on, others or {}, best)


def _at_end(part: TimedPart, greatest: bool) -> TimedPart:
    """A part with each quantity at one end; one of which an end is not known stays as it is."""
    changes = {}
    for name, value in bounds_of(part):
        if -FOREVER_S < value.least <= value.most < FOREVER_S:
            end = value.most if greatest else value.least
            changes[name] = Bounds(end, end)
    return msgspec.structs.replace(part, **changes)


def evaluate(
    net: Network,
    scenario: Scenario,
    known: States | None = None,
    forced: States | None = None,
    found: Found | None = None,
) -> dict[str, State]:
    """The state of every element in a scenario; ``known`` is taken for what the network does not order anew.

    What is ``forced`` has that state whatever it leans on, as an override forces it.  ``found`` holds what was found
    in other scenarios of the same network: what follows from the same states is not worked out anew.
    """
    states = _States(known or {}, NOTHING_KNOWN if net.best else ANYTHING)
    times = _Timing(net, scenario, states, forced or {})
    for group, leans_on_itself in net.order:
        if leans_on_itself:
            times.settle_loop(group)
            continue
        part = net.parts[group[0]]
        states[part.id] = times.state(part) if found is None else found.state(part, times)
    return states


class Found:
    """States that were found in other scenarios, by the states from which they follow.

    In the scenarios of one description most elements see what they have seen in another one; a state that equals one
    found before is replaced by it, so that what leans on it sees the very same.
    """

    def __init__(self) -> None:
        self._same: dict[str, dict[object, State]] = {}
        self._following: dict[str, dict[tuple[int, ...], tuple[Sequence[State], State]]] = {}

    def state(self, part: TimedPart, times: _Timing) -> State:
        """The state of an element, from those of what it leans on."""
        name = part.id
        same = self._same.setdefault(name, {})
        if isinstance(part, RailPart):  # it follows from the scenario, too
            state = times.state(part)
            return same.setdefault(_comparable(state), state)
        causes = [times.states[needed] for needed in times.net.leans_on[name]]
        key = tuple(map(id, causes))
        following = self._following.setdefault(name, {})
        followed = following.get(key)
        if followed is None:
            state = times.state(part)
            followed = following[key] = causes, same.setdefault(_comparable(state), state)
        return followed[1]


class _States(dict[str, State]):
    """States as they are found; what is not timed anew is as it was known, and of what is not known at all, anything
    may be so, or at the best corner nothing that could be told."""

    def __init__(self, known: States, unknown: On) -> None:
        super().__init__()
        self.known = known
        self.unknown = unknown

    def __missing__(self, name: str) -> State:
        try:
            return self.known[name]
        except KeyError:
            return self.unknown


class _Timing:
    """One scenario in the making."""

    def __init__(self, net: Network, scenario: Scenario, states: dict[str, State], forced: States) -> None:
        self.net = net
        self.scenario = scenario
        self.states = states
        self.forced = forced
        self.unknown = NOTHING_KNOWN if net.best else ANYTHING
        self.any_decision = NO_DECISION if net.best else ANY_DECISION

    def settle_loop(self, group: Sequence[str]) -> None:
        """What leans on itself: nothing is on at first; what follows is followed till it rests, at most twice round."""
        for name in group:
            self.states[name] = _at_rest(self.net.parts[name])
        for _ in range(2 * len(group) + 2):
            before = [_comparable(self.states[name]) for name in group]
            for name in group:
                self.states[name] = self.state(self.net.parts[name])
            if before == [_comparable(self.states[name]) for name in group]:
                return
        for name in group:
            part = self.net.parts[name]
            given = isinstance(part, RailPart) and name in self.scenario.waveforms and not self.scenario.in_sequence
            self.states[name] = self.state(part) if given else self._anything(part)

    def _anything(self, part: TimedPart) -> State:
        match part:
            case StagePart() | ResetPart() | ComparatorPart():
                return self.any_decision
            case LoadPart():
                return LoadState(self.unknown, self.unknown, self.any_decision, self.unknown)
            case _:
                return self.unknown

    def state(self, part: TimedPart) -> State:
        """The state of one element, from those of what it leans on."""
        if part.id in self.forced:
            return self.forced[part.id]
        state = _TIMED[type(part)](self, part)
        for other in self.net.others.get(part.id, ()):
            state = one_or_other(state, _TIMED[type(other)](self, other), surely=self.net.best)
        return state

    def _rail(self, part: RailPart) -> State:
        scenario = self.scenario
        waveform = scenario.waveforms.get(part.id)
        ramp = self.net.ramps.get(part.id)
        if waveform is not None:
            least_s = most_s = 0.0
            if scenario.in_sequence and part.after is not None:
                up_s = self._up(part.after)
                least_s, most_s = up_s[0] + part.delay.least, up_s[1] + part.delay.most
            if most_s == FOREVER_S:
                return self.unknown
            return GivenSupply(waveform, least_s=least_s, most_s=most_s)
        if part.made_by is None or ramp is None:
            return self.unknown
        maker = self._gate(part.made_by)
        return MadeSupply(maker, Ramp(ramp.nominal_v, *ramp.at_pace(fast=scenario.fast), part.delay))

    def _up_on(self, rail: str) -> On:
        """When a rail has come up."""
        ramp = self.net.ramps.get(rail)
        return self.unknown if ramp is None else self._above(rail, ramp.up)

    def _up(self, rail: str) -> tuple[float, float]:
        """The earliest and the latest time at which a rail comes up, in s."""
        up = self._up_on(rail)
        least_s = up.may_be_on[0][0] if up.may_be_on else FOREVER_S
        most_s = up.may_be_off[0][1] if up.may_be_off else -FOREVER_S
        return max(least_s, 0.0), max(most_s, 0.0)

    def _above(self, rail: str, level: Bounds) -> On:
        """When a rail may be above a level that lies between two bounds, and when it may not be."""
        supply = self.states[rail]
        if isinstance(supply, On):
            return supply
        if not isinstance(supply, Supply):
            return self.unknown
        if level.least < _ABOVE_NOTHING_V:
            level = Bounds(_ABOVE_NOTHING_V, max(level.most, _ABOVE_NOTHING_V))
        return supply.above(level)

    def _gate(self, name: str) -> On:
        """Whether what an element gates is enabled."""
        state = self.states[name]
        if isinstance(state, On):
            return state
        if isinstance(state, Decision):
            return lets_go(state)
        if isinstance(state, LoadState):
            return state.running
        return self._up_on(name)

    def _all_gates(self, names: Iterable[str]) -> On:
        return all_on(map(self._gate, names)) if names else ALWAYS_ON

    def _fed(self, part: SourcePart | ComparatorPart | StagePart) -> On:
        """Whether an element has its supply, and all that it needs is up."""
        fed = self._above(part.rail, part.works_from)
        if self.states[part.domain] is not ALWAYS_ON:
            fed = all_on((fed, self._gate(part.domain)))
        return all_on((fed, *map(self._gate, part.needs))) if part.needs else fed

    def _source(self, part: SourcePart) -> On:
        return settled(self._fed(part), least_s=part.settling.least, most_s=part.settling.most)

    def _comparator(self, part: ComparatorPart) -> Decision:
        watched = self.states[part.watches]
        if not isinstance(watched, Supply):
            return self.any_decision
        return decision_of(part, watched=watched, valid=self._fed(part), armed=self._all_gates(part.armed_by))

    def _stage(self, part: StagePart) -> Decision:
        return output_of(part, given=self._combined(part), alive=self._fed(part))

    def _combined(self, part: StagePart | ResetPart) -> Decision:
        drivers = [self._decision(name) for name in part.driven_by]
        return all_agree(drivers) if part.all_agree else any_asserts(drivers)

    def _decision(self, name: str) -> Decision:
        state = self.states[name]
        return state if isinstance(state, Decision) else self.any_decision

    def _load(self, part: LoadPart) -> LoadState:
        fed = all_on(self._within(rail, works) for rail, works in part.works)
        if part.may_work:
            fed = On(all_on(self._within(rail, works) for rail, works in part.may_work).may_be_on, fed.may_be_off)
        up = fed
        if part.needs or part.domain is not None:
            gates = () if part.domain is None else (self._gate(part.domain),)
            up = all_on((fed, *gates, *map(self._gate, part.needs)))
        ready = settled(up, least_s=part.ready.least, most_s=part.ready.most)
        if not part.resets and not part.may_have_more_resets:
            return LoadState(fed, ready, RELEASED, up)
        more = [NO_DECISION if self.net.best else KNOWN] if part.may_have_more_resets else []
        reset = any_asserts([*(self._decision(name) for name in part.resets), *more])
        return LoadState(fed, ready, reset, all_on((up, lets_go(reset))))

    def _within(self, rail: str, works: Bounds) -> On:
        above = self._above(rail, Bounds(works.least, works.least))
        if works.most == FOREVER_S:
            return above
        top_v = works.most * (1 + 1e-12)
        too_high = self._above(rail, Bounds(top_v, top_v))
        if not too_high.may_be_on:
            return above
        return On(both(above.may_be_on, too_high.may_be_off), either(above.may_be_off, too_high.may_be_on))


_TIMED: Final[Mapping[type, Callable[[_Timing, Any], State]]] = {
    RailPart: _Timing._rail,
    DomainPart: lambda times, part: times._all_gates(part.switched_by),
    SourcePart: _Timing._source,
    ComparatorPart: _Timing._comparator,
    StagePart: _Timing._stage,
    ResetPart: _Timing._combined,
    LoadPart: _Timing._load,
}


def _at_rest(part: TimedPart) -> State:
    """An element that nothing has brought up yet."""
    match part:
        case StagePart() | ResetPart() | ComparatorPart():
            return ASSERTED
        case LoadPart():
            return LoadState(NEVER_ON, NEVER_ON, ASSERTED, NEVER_ON)
        case _:
            return NEVER_ON


def one_or_other(first: Any, second: Any, *, surely: bool) -> Any:
    """What may be so where an element is one or the other; ``surely``: what may be so whichever of the two it is."""
    if isinstance(first, LoadState):
        return LoadState(*(one_or_other(*pair, surely=surely) for pair in zip(first, second, strict=True)))
    join = both if surely else either
    return type(first)(*map(join, first, second))


def _comparable(state: State) -> object:
    """A state in a form that can be told from another."""
    if isinstance(state, MadeSupply):
        return state.maker, state.ramp
    if isinstance(state, GivenSupply):
        return state.waveform, state.least_s, state.most_s
    return state
