"""The rail that feeds an element, and what it delivers."""

from __future__ import annotations

from typing import Literal, TypeAlias

from tidegate.lint.case import Case
from tidegate.lint.description.model.detector import Bias, Comparator, Reference
from tidegate.lint.description.model.reset_path import Bypass, Load, OutputStage, Reset
from tidegate.lint.description.model.supply import Domain, Rail

Housed: TypeAlias = Reference | Bias | Comparator | OutputStage | Reset | Load | Bypass
"""What lives in a domain."""


def rail_of(case: Case, element: Housed) -> Rail:
    """The rail of the domain that an element lives in.

    Raises: MissingFactsError: where its domain, or the domain's rail, is not given.
    """
    domain = case.of(element).domain.element()
    assert isinstance(domain, Domain)
    return domain_rail(case, domain)


def domain_rail(case: Case, domain: Domain) -> Rail:
    """The rail of a domain.

    Raises: MissingFactsError: where it is not given.
    """
    rail = case.of(domain).rail.element()
    assert isinstance(rail, Rail)
    return rail


def delivered_v(case: Case, element: Housed, end: Literal["least", "most"]) -> float:
    """The least or the greatest supply delivered to an element, in V.

    Raises: MissingFactsError: where its domain, or the domain's rail, is not given.
    """
    facts = case.of(rail_of(case, element))
    return facts.delivered.least() if end == "least" else facts.delivered.most()
