"""Timelines of a description: every element in every scenario, and the facts that are missing for them.

    lines = timelines(description, graph)
    for line in lines.starts:                     # fastest and slowest ramp, late rails, residual charge, ...
        line.scenario.name, line.scenario.about
        line.states["por_n"]                      # Decision: may_assert, may_release, may_be_unknown, may_be_held
        line.states["ref_fast"]                   # On: may_be_on, may_be_off
        line.states["adc"]                        # LoadState: fed, ready, reset, running
    lines.at_best                                 # the same with all that is missing taken for the best
    lines.gaps("por_n", scenes=(Scene.START,))    # what is missing for an element, and what cannot be tried

Everything is computed when it is first asked for, and kept.  What *may* be is known of each time; what *surely* is, is
what may not be otherwise.  What is missing may be anything here, so that what is sure is so whatever it turns out to
be; ``at_best``, only what may be so whatever is missing may be so.  Intervals are exact where the graph does not
reconverge; where two ways share a tolerance, they may be wider, and ``pinned`` times the network with that tolerance at
one end.
"""

from __future__ import annotations

from collections.abc import Collection, Container, Iterable, Iterator, Mapping, Sequence
from functools import cached_property
from typing import Final

import msgspec
from msgspec.structs import replace

from tidegate.lint.description.model.description import Description
from tidegate.lint.description.model.detector import Comparator
from tidegate.lint.description.model.reset_path import Bypass
from tidegate.lint.description.model.supply import Rail
from tidegate.lint.facts.reading import Corner
from tidegate.lint.graph.dependency import Graph
from tidegate.lint.graph.edge import EdgeKind
from tidegate.lint.graph.kept_last import keeps_last
from tidegate.lint.timing.evaluate import Found, Network, States, evaluate, network
from tidegate.lint.timing.falls import alone, dips, together
from tidegate.lint.timing.interval import FOREVER_S
from tidegate.lint.timing.order import leans_on, rails_of, reached
from tidegate.lint.timing.parts import Lacks, RailPart, TimedPart, exact_ends, times_of, with_lone_spread
from tidegate.lint.timing.published import published
from tidegate.lint.timing.ramps import Ramps, read_ramps
from tidegate.lint.timing.reading import Parts, read_parts
from tidegate.lint.timing.scenario import Scenario, Scene
from tidegate.lint.timing.starts import Setting, Untried, starts, untried
from tidegate.lint.timing.state import ASSERTED, RELEASED
from tidegate.lint.timing.waveform import Waveform

_LEAST_LONG_S: Final = 1.0
_MANY_TIMES: Final = 100.0


class Timeline(msgspec.Struct, frozen=True):
    """All elements in one scenario."""

    scenario: Scenario
    states: States


class Timelines:
    """All scenarios of one description, with all that is missing at one corner."""

    def __init__(self, description: Description, graph: Graph) -> None:
        self._begin(description, graph, read_parts(description, graph), read_ramps(description, graph))
        parts = [*self.read.every.values(), *(other for others in self.read.others.values() for other in others)]
        self.setting = Setting(description, self.ramps.by_rail, _by_rail(parts), self._long_s())

    def _begin(self, description: Description, graph: Graph, read: Parts, ramps: Ramps, *, best: bool = False) -> None:
        self.description = description
        self.graph = graph
        self.read = read
        self.ramps = ramps
        self.network: Network = network(read.every, ramps.by_rail, read.others, best=best)
        self._alone: dict[str, Timeline | None] = {}
        self._dips: dict[str, Sequence[Timeline]] = {}
        self._cones: dict[str, Network] = {}

    @cached_property
    def at_best(self) -> Timelines:
        """The same with all that is missing as favourable as it may be, whoever reads it."""
        if self.read.exact and self.ramps.exact:
            return self
        ramps = read_ramps(self.description, self.graph, Corner.BEST)
        return self._like(self._best_parts, ramps)

    @cached_property
    def lone_spread(self) -> Timelines:
        """As ``at_best``, but for least ends that are missing where the greatest is given: those may be anything."""
        return self._spread(self.read.every)

    def spread_of(self, element: str) -> Timelines:
        """The same for one element alone; not kept."""
        return self._spread((element,))

    def _spread(self, elements: Iterable[str]) -> Timelines:
        parts = dict(self._best_parts.every)
        for name in elements:
            if name in parts and name in self.read.every:
                parts[name] = with_lone_spread(self.read.every[name], parts[name])
        return self._like(replace(self._best_parts, every=parts), self.at_best.ramps)

    @cached_property
    def _best_parts(self) -> Parts:
        return read_parts(self.description, self.graph, Corner.BEST)

    def _like(self, read: Parts, ramps: Ramps) -> Timelines:
        """Timelines over what may happen whatever is missing, with other numbers."""
        made = Timelines.__new__(Timelines)
        made._begin(self.description, self.graph, read, ramps, best=True)
        made.setting = replace(
            self.setting, ramps=ramps.by_rail, by_rail=_by_rail(self._exact_parts()), certain=True
        )  # fmt: skip
        return made

    def _exact_parts(self) -> Iterator[TimedPart]:
        """All that can be timed, with the ends that are known."""
        best = self._best_parts
        for name in self.read.every.keys() & best.every.keys():
            sure = (self.read.every[name], *self.read.others.get(name, ()))
            inner = (best.every[name], *best.others.get(name, ()))
            yield from map(exact_ends, sure, inner)

    def _long_s(self) -> float:
        """A time after which everything has come to rest."""
        times = (time for part in self.read.every.values() for time in times_of(part))
        longest_s = max((time.most for time in times if time.most < FOREVER_S), default=0.0)
        return max(_LEAST_LONG_S, _MANY_TIMES * longest_s)

    @cached_property
    def starts(self) -> Sequence[Timeline]:
        """Start-ups, off and on again, and the description's own scenarios."""
        return self._all_at(starts(self.setting))

    @cached_property
    def falls(self) -> Sequence[Timeline]:
        """Power-down of all rails at once, fastest and slowest."""
        return self._all_at(together(self.setting))

    @cached_property
    def settled(self) -> States:
        """Every element with every rail at its nominal level, since long ago."""
        rails = self.description.rails.values()
        waveforms = {
            rail.id: Waveform(((0.0, self.ramps.by_rail[rail.id].nominal_v),))
            for rail in rails
            if rail.id in self.ramps.by_rail
        }
        return evaluate(self.network, Scenario("in service", "every rail at nominal", Scene.START, waveforms))

    def alone(self, rail: str) -> Timeline | None:
        """One rail falls while the others stay; None where its fall is not known. Elements it does not reach stay."""
        if rail not in self._alone:
            scenario = alone(self.setting, rail)
            self._alone[rail] = None if scenario is None else self.at(scenario)
        return self._alone[rail]

    def dips(self, rail: str) -> Sequence[Timeline]:
        """Dips of one rail to every critical level, for long and for short."""
        if rail not in self._dips:
            self._dips[rail] = [self.at(scenario) for scenario in dips(self.setting, rail)]
        return self._dips[rail]

    @cached_property
    def published(self) -> Sequence[Timeline]:
        """Profiles that a standard publishes; no rule judges by them, since no rail says that it sees them."""
        return self._all_at(published(self.setting))

    def _all_at(self, scenarios: Iterable[Scenario]) -> Sequence[Timeline]:
        """The timelines of scenarios of the whole network, in which many elements see what they saw in another."""
        found = Found()
        return [Timeline(scenario, evaluate(self.network, scenario, found=found)) for scenario in scenarios]

    def _seen_by(self, scenario: Scenario) -> tuple[Network, States | None]:
        """What a scenario reaches, and the states of the rest; None where it reaches all."""
        return (self._cone(scenario.rail), self.settled) if scenario.rail else (self.network, None)

    def at(self, scenario: Scenario) -> Timeline:
        """The timeline of any scenario."""
        net, known = self._seen_by(scenario)
        return Timeline(scenario, evaluate(net, scenario, known))

    def between(self, first: Iterable[str], last: str, *, rail: str) -> Network:
        """The network of what hangs on some elements and is behind another one; of what a rail reaches, where given."""
        behind = self.behind(last)
        names = {name for start in first for name in reached(self._leant_on_by, start) if name in behind}
        return self.network.among(names & self._cone(rail).parts.keys() if rail else names)

    def with_override(self, line: Timeline, bypass: Bypass) -> Timeline:
        """A timeline with an override active all the time: what it overrides decides as it forces."""
        assert bypass.overrides is not None
        forced = {bypass.overrides: ASSERTED if bypass.forces == "asserted" else RELEASED}
        net = self.network.among({bypass.overrides, *reached(self._leant_on_by, bypass.overrides)})
        return Timeline(line.scenario, {**line.states, **evaluate(net, line.scenario, line.states, forced)})

    def _cone(self, rail: str) -> Network:
        """The network of what a rail reaches; in a scenario of that rail the rest stays as it is in service."""
        if rail not in self._cones:
            self._cones[rail] = self.network.among(reached(self._leant_on_by, rail))
        return self._cones[rail]

    @cached_property
    def _leant_on_by(self) -> Mapping[str, Sequence[str]]:
        leant: dict[str, list[str]] = {}
        for name, part in self.read.every.items():
            for needed in leans_on(part):
                leant.setdefault(needed, []).append(name)
        return leant

    def up_v(self, rail: str) -> float:
        """The level from which on a rail is up, in V; of one that has a nominal level."""
        return self.ramps.by_rail[rail].up_v

    # Missing facts

    @cached_property
    def untried(self) -> Sequence[Untried]:
        """Scenarios that are not tried for want of a fact."""
        return list(untried(self.setting))

    def gaps(
        self, element: str, *, scenes: Container[Scene] = (), falling: Iterable[str] = (), dipping: Iterable[str] = (),
        power_down: bool = False, own: bool = False, rails_forced: bool = False,
    ) -> Gaps:  # fmt: skip
        """What is not known of an element and all it leans on, and what of its rails cannot be tried.

        ``scenes``: kinds of start-ups; ``falling`` and ``dipping``: rails that fall, or dip, alone; ``power_down``: all
        rails at once; ``own``: what matters where the element itself is judged; ``rails_forced``: of what makes a rail
        nothing matters.
        Raises: DomainError: where one of them has numbers that cannot be.
        """
        facts, lone, not_tried = ({}, {}, {})  # type: tuple[dict[str, None], dict[str, None], dict[str, None]]
        names = self._behind(element, readiness=False, through_rails=not rails_forced)
        rails = [name for name in names if name in self.description.rails]
        for name in names:
            if name in self.read.refused:
                raise self.read.refused[name]
            if name in rails and rails_forced:
                continue
            lacks = self.read.lacks.get(name, _NO_LACKS)
            counted = (*lacks.whole, *lacks.most, *(lacks.own if own and name == element else ()))
            facts.update(dict.fromkeys((*counted, *self._up_lacks(name))))
            lone.update(dict.fromkeys(path for path in lacks.least if path not in counted))
        for name in rails:
            if name in self.ramps.refused:
                raise self.ramps.refused[name]
            not_tried.update(dict.fromkeys(self.ramps.lacks.get(name, ())))
            if power_down and (ramp := self.ramps.by_rail.get(name)) is not None:
                not_tried.update(dict.fromkeys((*ramp.lacks.fast_fall, *ramp.lacks.slow_fall)))
        if scenes:
            behind = set(rails)
            not_tried.update({one.fact: None for one in self.untried if one.scene in scenes and one.rail in behind})
            for name in rails:
                facts.update(dict.fromkeys(self._made_lacks(name)))
        for name in (*falling, *dipping):
            if (ramp := self.ramps.by_rail.get(name)) is not None:
                # Less steep may be worse for how it comes back, not for how it goes.
                (not_tried if scenes or not ramp.can_fall else facts).update(dict.fromkeys(ramp.lacks.steepest))
                not_tried.update(dict.fromkeys(ramp.lacks.fast_rise if name in dipping else ()))
        return Gaps(tuple(facts), tuple(lone), tuple(not_tried))

    def _up_lacks(self, name: str) -> Sequence[str]:
        """What is missing of the level from which on rails are up that an element waits for."""
        part = self.read.every.get(name)
        waited_for = [part.after] if isinstance(part, RailPart) else getattr(part, "needs", ())
        ramps = (self.ramps.by_rail.get(rail or "") for rail in waited_for)
        return [path for ramp in ramps if ramp is not None for path in ramp.lacks.up]

    def _made_lacks(self, rail: str) -> Sequence[str]:
        """What is missing of the ramps of a rail that the chip makes."""
        ramp = self.ramps.by_rail.get(rail)
        if ramp is None or self.description.rails[rail].made_by is None:
            return ()
        return (*ramp.lacks.rise, *ramp.lacks.fast_fall, *ramp.lacks.slow_fall)

    def behind(self, element: str, *, readiness: bool = False) -> Collection[str]:
        """An element and all it leans on, watched rails included; ``readiness`` leaves out what resets a load."""
        return self._behind(element, readiness=readiness, through_rails=True)

    def _behind(self, element: str, *, readiness: bool, through_rails: bool) -> Collection[str]:
        found = {element: None}
        waiting = [element]
        for name in waiting:
            if not through_rails and name in self.description.rails:
                continue
            for other in self._needs(name, guards=not (readiness and name == element)):
                if other not in found:
                    found[other] = None
                    waiting.append(other)
        return found.keys()

    def _needs(self, name: str, *, guards: bool) -> Sequence[str]:
        needed = [other for other, _, edge in self.graph.needs(name) if guards or edge.kind is not EdgeKind.GUARDS]
        element = self.graph.elements[name]
        if isinstance(element, Comparator):
            needed.append(element.watches)
        elif isinstance(element, Rail) and element.after is not None:
            needed.append(element.after)
        return needed


def _by_rail(parts: Iterable[TimedPart]) -> Mapping[str, Sequence[TimedPart]]:
    """What hangs on each rail."""
    found: dict[str, list[TimedPart]] = {}
    for part in parts:
        for rail in rails_of(part):
            found.setdefault(rail, []).append(part)
    return found


_NO_LACKS: Final = Lacks()


class Gaps(msgspec.Struct, frozen=True):
    """What is not known for an element, as paths of facts."""

    facts: tuple[str, ...]
    """Names, words and ends of quantities."""
    lone: tuple[str, ...]
    """Least ends that are missing where the greatest is given: they seldom matter."""
    untried: tuple[str, ...]
    """Without these, something that the supplies may do cannot be tried."""


@keeps_last
def timelines(description: Description, graph: Graph) -> Timelines:
    """The timelines of a description; those of the last one asked for are kept, so that every rule reads the same."""
    return Timelines(description, graph)
