"""What the input dividers of detectors take from the rails that they hang on."""

from __future__ import annotations

import math
from collections.abc import Iterator
from functools import partial

from tidegate.lint.case import Case
from tidegate.lint.derived.supply.rail_of import domain_rail
from tidegate.lint.derived.supply.standing_current import Draw, through_a
from tidegate.lint.description.model.detector import Comparator
from tidegate.lint.description.model.supply import Domain
from tidegate.lint.graph.dependency import Graph


def divider_draws(case: Case, domain: Domain) -> Iterator[Draw]:
    """What each divider that may count in a domain takes, at the greatest supply and its least resistance.

    It counts in the domain of its detector where that is fed from the rail on which the divider hangs; else in each
    domain of that rail that is always on.
    """
    for comparator in case.graph.once(divided):
        if _may_hang(case, domain, comparator):
            yield Draw(
                f"divider of {comparator.id}", comparator.id, partial(_taken_a, case, domain, comparator),
                comparator.fact("divider"),
            )  # fmt: skip


def divided(graph: Graph) -> tuple[Comparator, ...]:
    """The detectors with a divider at their input, or of which it is not said whether they have one."""
    return tuple(element for element in graph.elements.values() if isinstance(element, Comparator) and _may(element))


def _may(comparator: Comparator) -> bool:
    """Whether a divider may stand between rail and input; none is a ratio of 1 without resistances."""
    divider = comparator.divider
    if divider is None:
        return comparator.crossover is None  # the branch of a crossover counts in what its detector takes
    return divider.ratio != 1.0 or divider.top is not None or divider.bottom is not None


def _may_hang(case: Case, domain: Domain, comparator: Comparator) -> bool:
    """Whether a divider may count in a domain, for all that is said."""
    if domain.rail is None:
        return True
    if comparator.watches != domain.rail:
        return False
    home = case.description.domains.get(comparator.domain or "")
    if home is None or home.rail is None or home is domain:
        return True
    return home.rail != domain.rail and domain.kind != "switched"


def _taken_a(case: Case, domain: Domain, comparator: Comparator) -> float:
    """What a divider takes from a domain, in A; nothing at the best where it need not hang there."""
    rail = domain_rail(case, domain)
    home = case.description.domains.get(comparator.domain or "")
    if home is None or home.rail is None:
        case.reading.block((comparator.fact("domain") if home is None else home.fact("rail"),))
        if case.at_best:
            return 0.0
    elif home.rail != rail.id and case.of(domain).kind.must() != "always_on":
        return 0.0
    if comparator.divider is None:
        case.reading.block((comparator.fact("divider"),))
        return 0.0 if case.at_best else math.inf
    facts = case.of(comparator).divider
    return through_a(case, domain, lambda: facts.top.least() + facts.bottom.least())
