"""What the elements of a domain take from its rail at rest."""

from __future__ import annotations

from collections.abc import Sequence

import msgspec

from tidegate.lint.case import Case
from tidegate.lint.derived.supply.rail_of import domain_rail
from tidegate.lint.description.model.detector import Bias, Comparator, Reference
from tidegate.lint.description.model.reset_path import Hold, OutputStage
from tidegate.lint.description.model.supply import Domain
from tidegate.lint.graph.edge import EdgeKind
from tidegate.lint.physics.hold import hold_current_a
from tidegate.lint.quantity import Dimension, show


class Taker(msgspec.Struct, frozen=True):
    """Something that takes current at rest, and how much, in A."""

    name: str
    current_a: float


def stages_in(case: Case, domain: Domain) -> list[OutputStage]:
    """The output stages that live in a domain."""
    stages = case.description.output_stages
    return [stages[name] for name in case.graph.tails(domain.id, EdgeKind.SUPPLIED_BY) if name in stages]


def hold_takers(case: Case, domain: Domain) -> list[Taker]:
    """What each hold in a domain takes at the greatest supply, while its stage drives against it.

    Raises: MissingFactsError: where it is not given whether a stage has a hold, or how large it is, or the supply.
    """
    held: list[tuple[str, float]] = []
    for stage in stages_in(case, domain):
        if stage.hold is None:
            case.of(stage).lacks("hold")
        elif isinstance(stage.hold, Hold):
            held.append((stage.id, case.of(stage).least("hold.resistance")))
    supply_v = case.of(domain_rail(case, domain)).most("delivered")
    case.settle()
    return [Taker(f"hold of {name}", hold_current_a(supply_v=supply_v, hold_ohm=ohm)) for name, ohm in held]


def circuit_takers(case: Case, domain: Domain) -> list[Taker]:
    """What each reference, bias, comparator and output stage in a domain takes, hold not included.

    A stage takes what is given: CMOS at rest takes its leakage alone.
    Raises: MissingFactsError: where it is not given what a reference, a bias or a comparator takes.
    """
    takers: list[Taker] = []
    for name in case.graph.tails(domain.id, EdgeKind.SUPPLIED_BY):
        element = case.graph.elements[name]
        facts = case.of(element)
        if isinstance(element, Reference | Bias | Comparator):
            takers.append(Taker(name, facts.most("consumes")))
        elif isinstance(element, OutputStage):
            given = [fact for fact in ("consumes", "leakage") if getattr(element, fact) is not None]
            takers.append(Taker(name, sum(facts.most(fact) for fact in given)))
    case.settle()
    return takers


def largest_first(takers: Sequence[Taker], shown: int) -> str:
    """The largest takers by name, and what is left of the rest."""
    ordered = sorted((taker for taker in takers if taker.current_a > 0.0), key=lambda taker: -taker.current_a)
    texts = [f"{taker.name} {show(taker.current_a, Dimension.CURRENT)}" for taker in ordered[:shown]]
    rest = ordered[shown:]
    if rest:
        texts.append(f"{len(rest)} more {show(sum(taker.current_a for taker in rest), Dimension.CURRENT)}")
    return ", ".join(texts)
