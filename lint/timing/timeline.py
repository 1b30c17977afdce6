"""Timelines of a description: every element in every scenario, and the facts that are missing for them.

    lines = timelines(description, graph)
    for line in lines.starts:                     # fastest and slowest ramp, late rails, residual charge, ...
        line.scenario.name, line.scenario.about
        line.states["por_n"]                      # Decision: may_assert, may_release, may_be_unknown, may_be_held
        line.states["ref_fast"]                   # On: may_be_on, may_be_off
        line.states["adc"]                        # LoadState: fed, ready, reset, running
    lines.missing("por_n", latest=True, falls=True)   # paths of facts; () where all are there

Everything is computed when it is first asked for, and kept.  What *may* be is known of each time; what *surely* is, is
what may not be otherwise.  Intervals are exact where the graph does not reconverge; where two ways share a tolerance,
they may be wider, and ``pinned`` times the network with that tolerance at one end.
"""

from __future__ import annotations

from collections.abc import Collection, Iterable, Mapping, Sequence
from functools import cached_property
from typing import Final

import msgspec

from tidegate.lint.description.model.description import Description
from tidegate.lint.description.model.detector import Comparator
from tidegate.lint.description.model.reset_path import Bypass
from tidegate.lint.description.model.supply import Rail
from tidegate.lint.graph.dependency import Graph
from tidegate.lint.graph.edge import EdgeKind
from tidegate.lint.graph.kept_last import keeps_last
from tidegate.lint.timing.evaluate import Found, Network, States, evaluate, network
from tidegate.lint.timing.falls import alone, dips, together
from tidegate.lint.timing.interval import FOREVER_S
from tidegate.lint.timing.order import leans_on, rails_of, reached
from tidegate.lint.timing.parts import Lacks, TimedPart, times_of
from tidegate.lint.timing.published import published
from tidegate.lint.timing.ramps import Ramps, read_ramps
from tidegate.lint.timing.reading import Parts, read_parts
from tidegate.lint.timing.scenario import Scenario, Scene
from tidegate.lint.timing.starts import Setting, starts, untried
from tidegate.lint.timing.state import ASSERTED, RELEASED
from tidegate.lint.timing.waveform import Waveform

_LEAST_LONG_S: Final = 1.0
_MANY_TIMES: Final = 100.0


class Timeline(msgspec.Struct, frozen=True):
    """All elements in one scenario."""

    scenario: Scenario
    states: States


class Timelines:
    """All scenarios of one description."""

    def __init__(self, description: Description, graph: Graph) -> None:
        self.description = description
        self.graph = graph
        self.read: Parts = read_parts(description, graph)
        self.ramps: Ramps = read_ramps(description)
        self.network: Network = network(self.read.parts, self.ramps.by_rail)
        self.setting = Setting(description, self.ramps.by_rail, self._by_rail(), self._long_s())
        self._alone: dict[str, Timeline | None] = {}
        self._dips: dict[str, Sequence[Timeline]] = {}
        self._cones: dict[str, Network] = {}

    def _by_rail(self) -> Mapping[str, Sequence[TimedPart]]:
        found: dict[str, list[TimedPart]] = {}
        for part in self.read.parts.values():
            for rail in rails_of(part):
                found.setdefault(rail, []).append(part)
        return found

    def _long_s(self) -> float:
        """A time after which everything has come to rest."""
        times = (time for part in self.read.parts.values() for time in times_of(part))
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

    def as_if_given(self, scenario: Scenario, elements: Iterable[str]) -> Timeline:
        """The timeline with each least value that is missing as great as the greatest: the best that it can be."""
        net, known = self._seen_by(scenario)
        lacking = [name for name in elements if name in self.read.lacks and self.read.lacks[name].least]
        return Timeline(scenario, evaluate(net.without_spread_from_nothing(lacking), scenario, known))

    def _cone(self, rail: str) -> Network:
        """The network of what a rail reaches; in a scenario of that rail the rest stays as it is in service."""
        if rail not in self._cones:
            self._cones[rail] = self.network.among(reached(self._leant_on_by, rail))
        return self._cones[rail]

    @cached_property
    def _leant_on_by(self) -> Mapping[str, Sequence[str]]:
        leant: dict[str, list[str]] = {}
        for name, part in self.read.parts.items():
            for needed in leans_on(part):
                leant.setdefault(needed, []).append(name)
        return leant

    def up_v(self, rail: str) -> float:
        """The level from which on a rail is up, in V; of one that has a nominal level."""
        return self.ramps.by_rail[rail].up_v

    # Missing facts

    @cached_property
    def untried(self) -> Sequence[tuple[str, str]]:
        """Scenarios that are not tried for want of a fact: the name, and the fact."""
        return list(untried(self.setting))

    def missing(
        self, element: str, *, latest: bool = False, earliest: bool = False, starts: bool = False,
        falls: bool = False, slow_falls: bool = False, readiness: bool = False, rails_forced: bool = False,
    ) -> tuple[str, ...]:  # fmt: skip
        """The facts that are missing for an element and all it leans on, as paths.

        ``latest``: the greatest values too, ``earliest``: the least ones; ``starts``, ``falls`` and ``slow_falls``:
        those of the ramps up and down; ``readiness``: of what a load needs alone, not of the nets that reset it, and
        of its time to be ready; ``rails_forced``: of what makes a rail, no greatest or least values.
        Raises: DomainError: where one of them has numbers that cannot be.
        """
        ramps = (starts or falls or slow_falls) and self._any_ramp_lacks
        if not (ramps or self._anything_lacks(latest=latest, earliest=earliest, readiness=readiness)):
            return ()
        found: dict[str, None] = {}
        near = self._behind(element, readiness=readiness, through_rails=False) if rails_forced else None
        for name in self._behind(element, readiness=readiness, through_rails=True):
            if name in self.read.refused:
                raise self.read.refused[name]
            lacks = self.read.lacks.get(name, _NO_LACKS)
            counts = near is None or name in near
            wanted = (True, latest and counts, earliest and counts, readiness and name == element)
            groups = (lacks.whole, lacks.most, lacks.least, lacks.ready)
            for paths in (group for group, is_wanted in zip(groups, wanted, strict=True) if is_wanted):
                found.update(dict.fromkeys(paths))
            if ramps:
                found.update(dict.fromkeys(self._ramp_lacks(name, starts=starts, falls=falls, slow_falls=slow_falls)))
        return tuple(found)

    def _ramp_lacks(self, name: str, *, starts: bool, falls: bool, slow_falls: bool) -> Sequence[str]:
        if name in self.ramps.refused:
            raise self.ramps.refused[name]
        if name in self.ramps.lacks:
            return self.ramps.lacks[name]
        ramp = self.ramps.by_rail.get(name)
        if ramp is None:
            return ()
        groups = ((starts, ramp.start_lacks), (falls, ramp.fast_fall_lacks), (slow_falls, ramp.slow_fall_lacks))
        return [path for wanted, paths in groups if wanted for path in paths]

    def _anything_lacks(self, *, latest: bool, earliest: bool, readiness: bool) -> bool:
        """Whether any element at all lacks what is asked for: mostly none does, and nobody need look behind any."""
        lacks = self._lacks_anywhere
        return (
            bool(self.read.refused)
            or lacks.whole
            or (latest and lacks.most)
            or (earliest and lacks.least)
            or (readiness and lacks.ready)
        )

    @cached_property
    def _lacks_anywhere(self) -> _Anywhere:
        lacks = self.read.lacks.values()
        return _Anywhere(
            whole=any(lack.whole for lack in lacks),
            most=any(lack.most for lack in lacks),
            least=any(lack.least for lack in lacks),
            ready=any(lack.ready for lack in lacks),
        )

    @cached_property
    def _any_ramp_lacks(self) -> bool:
        ramps = self.ramps.by_rail.values()
        return bool(self.ramps.lacks or self.ramps.refused) or any(
            ramp.start_lacks or ramp.fast_fall_lacks or ramp.slow_fall_lacks for ramp in ramps
        )

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


_NO_LACKS: Final = Lacks()


class _Anywhere(msgspec.Struct, frozen=True):
    """Which groups of facts any element lacks."""

    whole: bool
    most: bool
    least: bool
    ready: bool


@keeps_last
def timelines(description: Description, graph: Graph) -> Timelines:
    """The timelines of a description; those of the last one asked for are kept, so that every rule reads the same."""
    return Timelines(description, graph)
