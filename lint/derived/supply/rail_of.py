"""The rail that feeds an element, and what it delivers."""

from __future__ import annotations

from typing import Literal

from tidegate.lint.case import Case
from tidegate.lint.description.model.supply import Domain, Rail
from tidegate.lint.graph.dependency import Element


def rail_of(case: Case, element: Element) -> Rail:
    """The rail of the domain that an element lives in.

    Raises: MissingFactsError: where its domain, or the domain's rail, is not given.
    """
    domain = case.of(element).element("domain")
    assert isinstance(domain, Domain)
    return domain_rail(case, domain)


def domain_rail(case: Case, domain: Domain) -> Rail:
    """The rail of a domain.

    Raises: MissingFactsError: where it is not given.
    """
    rail = case.of(domain).element("rail")
    assert isinstance(rail, Rail)
    return rail


def delivered_v(case: Case, element: Element, end: Literal["least", "most"]) -> float:
    """The least or the greatest supply delivered to an element, in V; not a number, and noted, where it is not given.

    Raises: MissingFactsError: where its domain, or the domain's rail, is not given.
    """
    facts = case.of(rail_of(case, element))
    return facts.least("delivered") if end == "least" else facts.most("delivered")
