"""Facts of the description into parts for the timing at one corner, with every fact that is missing.

A quantity of which an end is not known stands with that end at the corner; an element of which a word is missing is
several parts, one for each word; and an element that is not named is one of which nothing is known.
"""

from __future__ import annotations

from collections.abc import Callable, Iterator, Mapping
from itertools import product
from typing import Any, Final

import msgspec
from msgspec.structs import replace

from tidegate.lint.derived.levels.trip_levels import falling_window, rising_window
from tidegate.lint.derived.reset_path.guarding_nets import guarding_nets, nets_without_guards
from tidegate.lint.description.model.description import Description
from tidegate.lint.description.model.detector import Bias, Comparator, Reference, StartUp
from tidegate.lint.description.model.reset_path import Discharge, Hold, Load, OutputStage, Reset
from tidegate.lint.description.model.supply import Domain, Rail
from tidegate.lint.facts.reading import Corner
from tidegate.lint.graph.dependency import Graph
from tidegate.lint.graph.leaning_gaps import source_gaps
from tidegate.lint.physics.domain import DomainError
from tidegate.lint.timing.ends import Ends, names
from tidegate.lint.timing.parts import (
    NOT_NAMED,
    NOTHING,
    Bounds,
    ComparatorPart,
    DomainPart,
    Lacks,
    LoadPart,
    RailPart,
    ResetPart,
    SourcePart,
    StagePart,
    TimedPart,
)
from tidegate.lint.timing.polarity import Polarity, polarity

_INFINITE: Final = float("inf")
_TIMED: Final = (
    "rails", "domains", "references", "biases", "comparators", "output_stages", "resets", "loads",
)  # fmt: skip
_HOLDS: Final = ("none", "asserts", "releases")


class Parts(msgspec.Struct, frozen=True):
    """What could be read: parts by id, what is missing of each, and numbers that cannot be."""

    parts: Mapping[str, TimedPart]
    """The elements of which every name and word is given."""
    every: Mapping[str, TimedPart]
    others: Mapping[str, tuple[TimedPart, ...]]
    """What else an element may be, where a word is missing."""
    lacks: Mapping[str, Lacks]
    refused: Mapping[str, DomainError]

    @property
    def exact(self) -> bool:
        """Whether everything is known."""
        return not self.lacks


def read_parts(description: Description, graph: Graph, corner: Corner = Corner.SURE) -> Parts:
    """Every element that takes part in the timing."""
    every: dict[str, TimedPart] = {}
    others: dict[str, tuple[TimedPart, ...]] = {}
    lacks: dict[str, Lacks] = {}
    refused: dict[str, DomainError] = {}
    levels = polarity(description, graph)
    for section in _TIMED:
        read = _READERS[section]
        for element in getattr(description, section).values():
            ends = Ends(element, description, graph, corner)
            try:
                first, *rest = read(ends, element, levels)
            except DomainError as error:
                refused[element.id] = error
                continue
            every[element.id] = first
            if rest:
                others[element.id] = tuple(rest)
            missing = ends.lacks
            if missing.whole or missing.least or missing.most or missing.own:
                lacks[element.id] = missing
    named = {name: part for name, part in every.items() if name not in lacks or not lacks[name].whole}
    return Parts(named, every, others, lacks, refused)


def _rail(ends: Ends, rail: Rail, _: Polarity) -> Iterator[RailPart]:
    waits = rail.after is not None or rail.made_by is not None
    delay = ends.bounds(ends.case.of(rail).delay) if waits else NOTHING
    yield RailPart(rail.id, rail.after, rail.made_by, delay)


def _domain(ends: Ends, domain: Domain, _: Polarity) -> Iterator[DomainPart]:
    rail = ends.named(domain.rail, "rail")
    if domain.kind is None:
        ends.without("kind")
    if domain.kind != "always_on":
        switch = NOT_NAMED if domain.kind is None else ends.named(domain.switched_by, "switched_by")
        yield DomainPart(domain.id, rail, (domain.switched_by or switch,))
    if domain.kind != "switched":
        yield DomainPart(domain.id, rail, ())


def _source(ends: Ends, source: Reference | Bias, _: Polarity) -> Iterator[SourcePart]:
    facts = ends.case.of(source)
    leant_on = source.bias if isinstance(source, Reference) else source.source
    domain = ends.named(source.domain, "domain")
    yield SourcePart(
        id=source.id, rail=ends.rail_of(domain), domain=domain,
        needs=(*names(leant_on, source.leans_on, source.gated_by), *_sources_not_named(ends, source)),
        works_from=ends.level(facts.works_from), settling=ends.bounds(facts.settling),
        starts_itself=isinstance(source.start_up, StartUp),
    )  # fmt: skip


def _sources_not_named(ends: Ends, element: Reference | Bias | Comparator) -> list[str]:
    """As many names of none as it is not said of what bias and reference an element leans on."""
    gaps = list(source_gaps(element))
    ends.without(*gaps)
    return [NOT_NAMED] * len(gaps)


def _comparator(ends: Ends, comparator: Comparator, _: Polarity) -> Iterator[ComparatorPart]:
    facts = ends.case.of(comparator)
    domain = ends.named(comparator.domain, "domain")
    ignores, sample = ends.bounds(facts.filter), ends.bounds(facts.sampling)
    whole = ComparatorPart(
        id=comparator.id, rail=ends.rail_of(domain), domain=domain, watches=comparator.watches,
        needs=(
            *names(comparator.bias, comparator.reference, comparator.gated_by), *_sources_not_named(ends, comparator)
        ),
        armed_by=names(comparator.armed_by), over=comparator.role == "over_voltage",
        works_from=ends.level(facts.works_from), rising=ends.window(rising_window, comparator), falling=NOTHING,
        filter=Bounds(ignores.least, ignores.most + sample.most), delay=ends.bounds(facts.delay), pulse=NOTHING,
        undecided=comparator.undecided or "undefined",
    )  # fmt: skip
    if comparator.output is None:
        ends.without("output")
    if comparator.output != "pulse":
        yield replace(whole, falling=ends.window(falling_window, comparator))
    if comparator.output != "level":
        yield replace(whole, falling=ends.bounds(facts.rearms_below), pulse=ends.bounds(facts.pulse))


def _stage(ends: Ends, stage: OutputStage, levels: Polarity) -> Iterator[StagePart]:
    facts = ends.case.of(stage)
    domain = ends.named(stage.domain, "domain")
    works_from = ends.level(facts.works_from)
    if stage.works_from is not None and stage.works_from.least is None and stage.works_from.most is not None:
        # A stage is held up to the one level that is given, not perhaps alive from 0 V on.
        ends.lacks.least.pop()
        works_from = Bounds(works_from.most, works_from.most)
    timer, discharge_s = _timer(ends, stage)
    drivers, agreements = _drivers(ends, stage)
    whole = StagePart(
        id=stage.id, rail=ends.rail_of(domain), domain=domain, needs=names(stage.gated_by), driven_by=drivers,
        all_agree=False, works_from=works_from, hold="none", latches=False, power_up="undefined",
        delay=ends.bounds(facts.delay), release_delay=timer, discharge_s=discharge_s,
    )  # fmt: skip
    for all_agree, hold, (latches, power_up) in product(agreements, _holds(ends, stage, levels), _latches(ends, stage)):
        yield replace(whole, all_agree=all_agree, hold=hold, latches=latches, power_up=power_up)


def _latches(ends: Ends, stage: OutputStage) -> list[tuple[bool, Any]]:
    """Whether a stage is a latch, and how it comes up then."""
    found: list[tuple[bool, Any]] = []
    if stage.kind is None:
        ends.without("kind")
    if stage.kind != "latch":
        found.append((False, stage.power_up or "undefined"))
    if stage.kind in (None, "latch"):
        if stage.power_up is None and stage.kind == "latch":
            ends.without("power_up")
        found += [(True, word) for word in ((stage.power_up,) if stage.power_up else ("undefined", *_HOLDS[1:]))]
    return found


def _timer(ends: Ends, stage: OutputStage) -> tuple[Bounds, float]:
    """The release delay of a stage, and how long reset must last for it to begin anew."""
    if stage.release_delay is None:
        return NOTHING, 0.0
    facts = ends.case.of(stage)
    timer = ends.bounds(facts.release_delay)
    if isinstance(stage.discharge, Discharge):
        within_s, lacks = ends.read(facts.discharge.within.most)
        ends.lacks.most += lacks
        return timer, within_s
    if stage.discharge == "none":
        return timer, _INFINITE
    ends.without("discharge")
    return timer, 0.0 if ends.best else _INFINITE


def _drivers(ends: Ends, element: OutputStage | Reset) -> tuple[tuple[str, ...], tuple[bool, ...]]:
    """What drives an element, and whether all of it must agree."""
    if not element.driven_by:
        ends.without("driven_by")
        return (NOT_NAMED,), (False,)
    if len(element.driven_by) > 1 and element.combine is None:
        ends.without("combine")
        return element.driven_by, (False, True)
    return element.driven_by, (element.combine == "all_agree",)


def _holds(ends: Ends, stage: OutputStage, levels: Polarity) -> tuple[Any, ...]:
    """What the hold of a stage may do to the reset nets behind it."""
    if stage.hold == "none":
        return ("none",)
    if not isinstance(stage.hold, Hold):
        ends.without("hold")
        return _HOLDS
    level = levels.level.get(stage.id)
    if stage.hold.to is None:
        ends.without("hold.to")
        return _HOLDS[1:]
    if level is None:
        unsaid = levels.unsaid.get(stage.id, ())
        ends.lacks.whole += unsaid
        # Where nothing is missing, ways lead to nets that differ: what it does is for passive_default/level to ask.
        return _HOLDS[1:] if unsaid else ("asserts",)
    return ("asserts",) if stage.hold.to == level else ("releases",)


def _reset(ends: Ends, reset: Reset, _: Polarity) -> Iterator[ResetPart]:
    domain = ends.named(reset.domain, "domain")
    reads_from_v, lacks = ends.read(ends.case.of(reset).receivers.threshold.least)
    ends.lacks.own += lacks
    drivers, agreements = _drivers(ends, reset)
    whole = ResetPart(
        id=reset.id, driven_by=drivers, all_agree=False, guards=tuple(reset.guards or ()), rail=ends.rail_of(domain),
        reads_from_v=reads_from_v,
    )  # fmt: skip
    for all_agree in agreements:
        yield replace(whole, all_agree=all_agree)


def _load(ends: Ends, load: Load, _: Polarity) -> Iterator[LoadPart]:
    facts = ends.case.of(load)
    ready = ends.bounds(facts.ready)  # the first quantity to be read: what is noted by now is about it alone
    ends.lacks.own, ends.lacks.most, ends.lacks.least = ends.lacks.most, [], []
    ranges = [(need.rail, *ends.range_within(facts.needs[index].works)) for index, need in enumerate(load.needs)]
    if not load.needs:
        ends.without("needs")
    domain = ends.named(load.domain, "domain")
    unsaid = ends.graph.once(nets_without_guards)
    ends.lacks.whole += [net.fact("guards") for net in unsaid]
    leant_on = names(load.references, load.leans_on, load.gated_by)
    yield LoadPart(
        id=load.id, works=tuple((rail, surely) for rail, surely, _ in ranges), domain=domain,
        needs=leant_on if load.needs else (*leant_on, NOT_NAMED), ready=ready,
        resets=tuple(guarding_nets(ends.graph, load)), may_have_more_resets=bool(unsaid),
        may_work=tuple((rail, perhaps) for rail, _, perhaps in ranges) if ends.lacks.most else (),
    )  # fmt: skip


_READERS: Final[Mapping[str, Callable[[Ends, Any, Polarity], Iterator[TimedPart]]]] = {
    "rails": _rail, "domains": _domain, "references": _source, "biases": _source, "comparators": _comparator,
    "output_stages": _stage, "resets": _reset, "loads": _load,
}  # fmt: skip
