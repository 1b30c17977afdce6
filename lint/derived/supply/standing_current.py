"""What the elements of a domain take from its rail at rest."""

from __future__ import annotations

import math
from collections.abc import Callable, Iterable, Iterator
from functools import partial

import msgspec

from tidegate.lint.account import Sum, plus
from tidegate.lint.case import Case
from tidegate.lint.derived.at_corner import at_corner
from tidegate.lint.derived.supply.rail_of import domain_rail
from tidegate.lint.description.model.detector import Bias, Comparator, Reference
from tidegate.lint.description.model.reset_path import Hold, OutputStage
from tidegate.lint.description.model.supply import Domain
from tidegate.lint.graph.dependency import Graph
from tidegate.lint.graph.edge import EdgeKind
from tidegate.lint.physics.hold import hold_current_a
from tidegate.lint.quantity import Dimension, show

Drawing = Reference | Bias | Comparator | OutputStage
"""What takes current from its domain at rest and counts in its budget; loads do not."""


class Draw(msgspec.Struct, frozen=True):
    """Something that takes current at rest: the question how much, in A, and where the answer stands."""

    name: str
    owner: str
    """The element that takes it."""
    current_a: Callable[[], float]
    of: str


def hanging_on(case: Case, domain: Domain) -> Iterator[tuple[Drawing, bool]]:
    """What hangs on a domain, and whether that is sure: what is said to, and what does not say on which it does."""
    for name in case.graph.tails(domain.id, EdgeKind.SUPPLIED_BY):
        element = case.graph.elements[name]
        if isinstance(element, Drawing):
            yield element, True
    yield from ((element, False) for element in case.graph.once(without_domain))


def without_domain(graph: Graph) -> tuple[Drawing, ...]:
    """What takes current on the chip and does not say in which domain it lives."""
    return tuple(
        element
        for element in graph.elements.values()
        if isinstance(element, Drawing)
        and element.domain is None
        and not (isinstance(element, Reference | Bias) and element.kind == "external")
    )


def perhaps_taken_a(case: Case, element: Drawing, *, surely: bool, current_a: Callable[[], float]) -> float:
    """What an element takes from a domain, in A; nothing at the best where it need not hang on it."""
    if surely:
        return current_a()
    case.reading.block((element.fact("domain"),))
    return 0.0 if case.at_best else current_a()


def stages_in(case: Case, domain: Domain) -> list[OutputStage]:
    """The output stages that live in a domain."""
    stages = case.description.output_stages
    return [stages[name] for name in case.graph.tails(domain.id, EdgeKind.SUPPLIED_BY) if name in stages]


def hold_draws(case: Case, domain: Domain) -> Iterator[Draw]:
    """What each hold in a domain takes at the greatest supply, while its stage drives against it."""
    for stage, surely in hanging_on(case, domain):
        if isinstance(stage, OutputStage) and stage.hold != "none":
            ask = partial(_held_a, case, domain, stage)
            yield Draw(
                f"hold of {stage.id}", stage.id,
                partial(perhaps_taken_a, case, stage, surely=surely, current_a=ask), stage.fact("hold"),
            )  # fmt: skip


def _held_a(case: Case, domain: Domain, stage: OutputStage) -> float:
    if not isinstance(stage.hold, Hold):  # whether it has one is not said
        case.reading.block((stage.fact("hold"),))
        return 0.0 if case.at_best else math.inf
    return through_a(case, domain, case.of(stage).hold.resistance.least)


def through_a(case: Case, domain: Domain, ohm: Callable[[], float]) -> float:
    """What flows through a resistance at the greatest supply of a domain, in A."""

    def flows_a() -> float:
        supply_v = case.of(domain_rail(case, domain)).delivered.most()
        return hold_current_a(supply_v=supply_v, hold_ohm=ohm())

    return at_corner(case, flows_a, sure=math.inf, best=0.0)


def circuit_draws(case: Case, domain: Domain) -> Iterator[Draw]:
    """What each reference, bias, comparator and output stage in a domain is said to take, hold not included."""
    for element, surely in hanging_on(case, domain):
        fact = case.of(element).consumes
        yield Draw(
            element.id, element.id,
            partial(perhaps_taken_a, case, element, surely=surely, current_a=fact.most), fact.path,
        )  # fmt: skip


def drawn(case: Case, draws: Iterable[Draw]) -> Sum:
    """What draws add up to, in A, with the account of it."""
    return case.sum(*(plus(draw.name, draw.current_a, of=draw.of, floor=0.0) for draw in draws))


def largest_first(total: Sum, shown: int) -> str:
    """The largest terms of a sum of currents by name, what is left of the rest, and what is not known."""
    known = [line for line in total.lines if line.value > 0.0 and not line.waits]
    ordered = sorted(known, key=lambda line: -line.value)
    texts = [f"{line.name} {show(line.value, Dimension.CURRENT)}" for line in ordered[:shown]]
    rest = ordered[shown:]
    if rest:
        texts.append(f"{len(rest)} more {show(sum(line.value for line in rest), Dimension.CURRENT)}")
    texts += [f"{line.name} (not known)" for line in total.lines if line.waits]
    return ", ".join(texts)
