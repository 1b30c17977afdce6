"""Whether the stages behind a held one are alive whenever that hold is needed."""

from __future__ import annotations

from collections.abc import Sequence
from functools import partial

from tidegate.lint.case import Case
from tidegate.lint.derived.supply.rail_of import rail_of
from tidegate.lint.derived.supply.rail_order import rails_before
from tidegate.lint.description.model.reset_path import OutputStage
from tidegate.lint.description.model.supply import Domain, Rail


def not_alive(case: Case, stages: Sequence[OutputStage], *, held_rail: Rail) -> list[tuple[OutputStage, str]]:
    """The stages that may be dead while a stage on ``held_rail`` before them is held, and why.

    A stage is alive where nothing gates it and it lives in a domain that is always on, on that rail or on one that is
    up before it.
    Raises: MissingFactsError: where that is not given.
    """
    whys = case.gather_all(partial(_why, case, stage, held_rail) for stage in stages)
    return [(stage, why) for stage, why in zip(stages, whys, strict=True) if why]


def _why(case: Case, stage: OutputStage, held_rail: Rail) -> str:
    """Why a stage may be dead; empty where it is alive."""
    if stage.gated_by is not None:
        return f"works only when {stage.gated_by} enables it"
    domain = case.of(stage).element("domain")
    assert isinstance(domain, Domain)
    kind = case.of(domain).must("kind")
    if kind == "switched":
        return f"lives in {domain.id}, which is switched"
    rail = rail_of(case, stage)
    if rail is held_rail or rail.id in rails_before(case, held_rail):
        return ""
    if held_rail.id in rails_before(case, rail):
        return f"lives on {rail.id}, which comes up after {held_rail.id}"
    if held_rail.after is None and held_rail.made_by is None:
        case.of(held_rail).lacks("after")
    return f"lives on {rail.id}, which is not among the rails that are up before {held_rail.id}"
