"""Whether a stage behind a held one is alive whenever that hold is needed."""

from __future__ import annotations

from tidegate.lint.case import Case
from tidegate.lint.derived.rail_of import rail_of
from tidegate.lint.derived.rail_order import rails_before
from tidegate.lint.description.model.reset_path import OutputStage
from tidegate.lint.description.model.supply import Domain, Rail


def why_not_alive(case: Case, stage: OutputStage, *, held_rail: Rail) -> str:
    """Why a stage may be dead while a stage on another rail, or on the same, is held; empty where it is alive.

    It is alive where nothing gates it and it lives in a domain that is always on, on the same rail or on one that is
    up before it.  Facts that are missing are noted; the answer is then of no use.
    """
    if stage.gated_by is not None:
        return f"works only when {stage.gated_by} enables it"
    domain = case.of(stage).element("domain")
    assert isinstance(domain, Domain)
    kind, rail = case.gather(lambda: case.of(domain).must("kind"), lambda: rail_of(case, stage))
    if kind == "switched":
        return f"lives in {domain.id}, which is switched"
    if rail is held_rail or rail.id in rails_before(case, held_rail):
        return ""
    if held_rail.id in rails_before(case, rail):
        return f"lives on {rail.id}, which comes up after {held_rail.id}"
    if held_rail.after is None and held_rail.made_by is None:
        case.of(held_rail).lacks("after")
    return f"lives on {rail.id}, which is not among the rails that are up before {held_rail.id}"
