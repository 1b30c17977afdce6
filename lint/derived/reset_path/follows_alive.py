"""Whether the stages behind a held one are alive whenever that hold is needed."""

from __future__ import annotations

from collections.abc import Iterable

from tidegate.lint.case import Case
from tidegate.lint.derived.supply.rail_of import rail_of
from tidegate.lint.derived.supply.rail_order import rails_before
from tidegate.lint.description.model.reset_path import OutputStage
from tidegate.lint.description.model.supply import Domain
from tidegate.lint.facts.reading import MissingFactsError


def why_not_alive(case: Case, stage: OutputStage, *, held: OutputStage) -> str:
    """Why a stage may be dead while one before it is held; empty where it is alive.

    It is alive where nothing gates it and it lives in a domain that is always on, on the rail of the held one or on one
    that is up before it.
    Raises: MissingFactsError: where that is not given.
    """
    if stage.gated_by is not None:
        return f"works only when {stage.gated_by} enables it"
    domain = case.of(stage).domain.element()
    assert isinstance(domain, Domain)
    if case.of(domain).kind.must() == "switched":
        return f"lives in {domain.id}, which is switched"
    rail, held_rail = rail_of(case, stage), rail_of(case, held)
    before = rails_before(case, held_rail)
    if rail is held_rail or rail.id in before:
        return ""
    if held_rail.id in rails_before(case, rail):
        return f"lives on {rail.id}, which comes up after {held_rail.id}"
    if gaps := order_gaps(case, (held_rail.id, *before)):
        raise MissingFactsError(gaps)
    return f"lives on {rail.id}, which is not among the rails that are up before {held_rail.id}"


def order_gaps(case: Case, rails: Iterable[str]) -> tuple[str, ...]:
    """Of some rails, the facts that might say that further ones come up before them; none where all rails are told."""
    if "rails" in case.description.complete:
        return ()
    named = set(rails)
    return tuple(rail.fact("after") for rail in case.description.rails.values() if rail.id in named and not rail.after)
