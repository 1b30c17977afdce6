"""The rail that feeds an element."""

from __future__ import annotations

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
