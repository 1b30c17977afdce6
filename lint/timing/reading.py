"""Facts of the description into parts for the timing, with every fact that is missing."""

from __future__ import annotations

from collections.abc import Callable, Iterable, Mapping
from typing import Any, Final

import msgspec

from tidegate.lint.case import Case, MissingFactsError
from tidegate.lint.derived.levels.trip_levels import falling_window, rising_window
from tidegate.lint.description.model.description import Description
from tidegate.lint.description.model.detector import Bias, Comparator, Reference, StartUp
from tidegate.lint.description.model.reset_path import Hold, Load, OutputStage, Reset
from tidegate.lint.description.model.supply import Domain, Rail
from tidegate.lint.graph.dependency import Element, Graph
from tidegate.lint.graph.edge import EdgeKind
from tidegate.lint.judgement import Level
from tidegate.lint.physics.domain import DomainError
from tidegate.lint.physics.trip_window import Window
from tidegate.lint.timing.parts import (
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
from tidegate.lint.timing.polarity import asserting_levels

_INFINITE: Final = float("inf")
_TIMED: Final = (
    "rails", "domains", "references", "biases", "comparators", "output_stages", "resets", "loads",
)  # fmt: skip


class Parts(msgspec.Struct, frozen=True):
    """What could be read: parts by id, what is missing of each, and numbers that cannot be."""

    parts: Mapping[str, TimedPart]
    lacks: Mapping[str, Lacks]
    refused: Mapping[str, DomainError]


def read_parts(description: Description, graph: Graph) -> Parts:
    """Every element that takes part in the timing."""
    parts: dict[str, TimedPart] = {}
    lacks: dict[str, Lacks] = {}
    refused: dict[str, DomainError] = {}
    levels = asserting_levels(description, graph)
    for section in _TIMED:
        read = _READERS[section]
        for element in getattr(description, section).values():
            reader = _Reader(element, description, graph, levels)
            try:
                part = read(reader, element)
                if not reader.lacks.whole:
                    parts[element.id] = part
            except MissingFactsError as error:
                reader.lacks.whole.extend(error.missing)
            except DomainError as error:
                refused[element.id] = error
            if any((reader.lacks.whole, reader.lacks.least, reader.lacks.most, reader.lacks.ready)):
                lacks[element.id] = reader.lacks
    return Parts(parts, lacks, refused)


class _Reader:
    """The facts of one element; notes what is missing and which end of a quantity it would have been."""

    def __init__(
        self, element: Element, description: Description, graph: Graph, levels: Mapping[str, str | None]
    ) -> None:
        self.element = element
        self.description = description
        self.graph = graph
        self.levels = levels
        self.lacks = Lacks()

    def path(self, fact: str) -> str:
        return self.element.fact(fact)

    def must(self, value: Any, fact: str) -> Any:
        """A fact without which nothing can be said; noted where it is not given."""
        if value is None:
            self.lacks.whole.append(self.path(fact))
        return value

    def bounds(self, fact: str) -> Bounds:
        """A quantity of which something must be known; an end that is not given stands where none can pass it."""
        span = getattr(self.element, fact)
        if span is None:
            self.lacks.least.append(self.path(fact))
            self.lacks.most.append(self.path(fact))
            return Bounds(0.0, _INFINITE)
        least, most = span.least, span.most
        if least is None:
            self.lacks.least.append(self.path(f"{fact}.min"))
        if most is None:
            self.lacks.most.append(self.path(f"{fact}.max"))
        return Bounds(0.0 if least is None else least, _INFINITE if most is None else most)

    def if_given(self, fact: str) -> Bounds:
        """A quantity that is nothing where it is not given."""
        return NOTHING if getattr(self.element, fact) is None else self.bounds(fact)

    def rail_of(self, domain_id: str | None) -> str:
        """The rail of a domain; noted where it is not given."""
        domain = self.description.domains.get(domain_id or "")
        if domain is None:
            return ""
        if domain.rail is None:
            self.lacks.whole.append(domain.fact("rail"))
            return ""
        return domain.rail

    def window(self, ask: Callable[[Case, Comparator], Window], comparator: Comparator) -> Bounds:
        """A trip level between its ends, at the code the part ships with."""
        case = Case(subject=comparator, rule="", level=Level.NOTE, description=self.description, graph=self.graph)
        try:
            found = ask(case, comparator)
        except MissingFactsError as error:
            self.lacks.whole.extend(path for path in error.missing if path not in self.lacks.whole)
            return NOTHING
        return Bounds(found.least_v, found.most_v)


def _names(*groups: str | Iterable[str] | None) -> tuple[str, ...]:
    """Names as they are given, one or many; what is not given, or said to be none, is left out."""
    found: list[str] = []
    for group in groups:
        if isinstance(group, str):
            found += [group] if group != "none" else []
        else:
            found.extend(group or ())
    return tuple(found)


def _rail(reader: _Reader, rail: Rail) -> RailPart:
    delay = NOTHING
    if rail.delay is not None:
        delay = reader.bounds("delay")
    elif rail.made_by is not None and isinstance(maker := reader.graph.elements[rail.made_by], Load):
        delay = _start_of(reader, maker)
    elif rail.after is not None:
        reader.must(None, "delay")
    return RailPart(rail.id, rail.after, rail.made_by, delay)


def _start_of(reader: _Reader, maker: Load) -> Bounds:
    """The start time of a rail's maker stands for the delay of the rail."""
    if maker.start is None:
        reader.lacks.least.append(reader.path("delay"))
        reader.lacks.most.append(reader.path("delay"))
        return Bounds(0.0, _INFINITE)
    most = maker.start.most
    if most is None:
        reader.lacks.most.append(maker.fact("start.max"))
    return Bounds(maker.start.least or 0.0, _INFINITE if most is None else most)


def _domain(reader: _Reader, domain: Domain) -> DomainPart:
    reader.must(domain.rail, "rail")
    kind = reader.must(domain.kind, "kind")
    if kind == "switched":
        reader.must(domain.switched_by, "switched_by")
    return DomainPart(domain.id, domain.rail or "", _names(domain.switched_by) if kind == "switched" else ())


def _source(reader: _Reader, source: Reference | Bias) -> SourcePart:
    domain = reader.must(source.domain, "domain")
    rail = reader.rail_of(domain)
    leant_on = source.bias if isinstance(source, Reference) else source.source
    return SourcePart(
        id=source.id, rail=rail, domain=domain, needs=_names(leant_on, source.leans_on, source.gated_by),
        works_from=reader.bounds("works_from"), settling=reader.bounds("settling"),
        starts_itself=isinstance(source.start_up, StartUp),
    )  # fmt: skip


def _comparator(reader: _Reader, comparator: Comparator) -> ComparatorPart:
    domain = reader.must(comparator.domain, "domain")
    rail = reader.rail_of(domain)
    rising = reader.window(rising_window, comparator)
    pulse = NOTHING
    if reader.must(comparator.output, "output") == "pulse":
        pulse = reader.bounds("pulse")
        falling = reader.bounds("rearms_below")
    else:
        falling = reader.window(falling_window, comparator)
    ignores, sample = reader.if_given("filter"), reader.if_given("sampling")
    return ComparatorPart(
        id=comparator.id, rail=rail, domain=domain, watches=comparator.watches,
        needs=_names(comparator.bias, comparator.reference, comparator.gated_by),
        armed_by=_names(comparator.armed_by), over=comparator.role == "over_voltage",
        works_from=reader.bounds("works_from"), rising=rising, falling=falling,
        filter=Bounds(ignores.least, ignores.most + sample.most), delay=reader.bounds("delay"), pulse=pulse,
        undecided=comparator.undecided or "undefined",
    )  # fmt: skip


def _stage(reader: _Reader, stage: OutputStage) -> StagePart:
    domain = reader.must(stage.domain, "domain")
    rail = reader.rail_of(domain)
    drivers = _drivers(reader, stage)
    works_from = reader.bounds("works_from")
    if stage.works_from is not None and stage.works_from.least is None:
        # A stage is held up to the one level that is given, not perhaps alive from 0 V on.
        reader.lacks.least.clear()
        works_from = Bounds(works_from.most, works_from.most)
    latches = stage.kind == "latch"
    if latches:
        reader.must(stage.power_up, "power_up")
    timer, discharge_s = _timer(reader, stage)
    return StagePart(
        id=stage.id, rail=rail, domain=domain, needs=_names(stage.gated_by), driven_by=drivers,
        all_agree=stage.combine == "all_agree", works_from=works_from, hold=_hold(reader, stage), latches=latches,
        power_up=stage.power_up or "undefined", delay=reader.bounds("delay"), release_delay=timer,
        discharge_s=discharge_s,
    )  # fmt: skip


def _timer(reader: _Reader, stage: OutputStage) -> tuple[Bounds, float]:
    """The release delay of a stage, and how long reset must last for it to begin anew."""
    if stage.release_delay is None:
        return NOTHING, 0.0
    timer = reader.bounds("release_delay")
    if stage.discharge is None:
        reader.must(None, "discharge")
        return timer, _INFINITE
    if stage.discharge == "none":
        return timer, _INFINITE
    within = stage.discharge.within
    if within is None or within.most is None:
        reader.lacks.least.append(reader.path("discharge.within" if within is None else "discharge.within.max"))
        return timer, _INFINITE
    return timer, within.most


def _drivers(reader: _Reader, element: OutputStage | Reset) -> tuple[str, ...]:
    drivers = tuple(element.driven_by or ())
    if not drivers:
        reader.must(None, "driven_by")
    if len(drivers) > 1:
        reader.must(element.combine, "combine")
    return drivers


def _hold(reader: _Reader, stage: OutputStage) -> Any:
    """What the hold of a stage does to the reset nets behind it."""
    hold = reader.must(stage.hold, "hold")
    if not isinstance(hold, Hold):
        return "none"
    level = reader.levels.get(stage.id)
    if reader.must(hold.to, "hold.to") is None or level is None:
        return "asserts"  # what it does is then for passive_default/level to ask
    return "asserts" if hold.to == level else "releases"


def _reset(reader: _Reader, reset: Reset) -> ResetPart:
    domain = reader.must(reset.domain, "domain")
    threshold = reset.receivers.threshold if reset.receivers is not None else None
    return ResetPart(
        id=reset.id, driven_by=_drivers(reader, reset), all_agree=reset.combine == "all_agree",
        guards=tuple(reset.guards or ()), rail=reader.rail_of(domain),
        reads_from_v=(threshold.least if threshold is not None else None) or 0.0,
    )  # fmt: skip


def _load(reader: _Reader, load: Load) -> LoadPart:
    works = []
    for index, need in enumerate(load.needs):
        rail = reader.description.rails[need.rail]
        span = need.works or rail.guaranteed
        least = span.least if span is not None else None
        if least is None:
            reader.must(None, f"needs.{index}.works" if need.works is None else f"needs.{index}.works.min")
            continue
        most = span.most if span is not None else None
        works.append((need.rail, Bounds(least, _INFINITE if most is None else most)))
    if not load.needs:
        reader.must(None, "needs")
    ready = reader.bounds("ready")  # the first quantity to be read: what is noted by now is about it alone
    reader.lacks.ready, reader.lacks.most, reader.lacks.least = reader.lacks.most, [], []
    return LoadPart(
        id=load.id, works=tuple(works), domain=load.domain,
        needs=_names(load.references, load.leans_on, load.gated_by), ready=ready,
        start=reader.if_given("start"), resets=_guards_of(reader.graph, load),
    )  # fmt: skip


def _guards_of(graph: Graph, load: Load) -> tuple[str, ...]:
    """The reset nets that guard a load, or the domain it lives in."""
    nets = graph.tails(load.id, EdgeKind.GUARDS)
    if load.domain is not None:
        nets += graph.tails(load.domain, EdgeKind.GUARDS)
    return tuple(dict.fromkeys(nets))


_READERS: Final[Mapping[str, Callable[[_Reader, Any], TimedPart]]] = {
    "rails": _rail, "domains": _domain, "references": _source, "biases": _source, "comparators": _comparator,
    "output_stages": _stage, "resets": _reset, "loads": _load,
}  # fmt: skip
