"""Bypass: every reset source can be overridden, by something that leans on no one and rests in its safe state."""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from typing import Final

from tidegate.lint.case import Case
from tidegate.lint.derived.reset_path.override import (
    aimless_overrides,
    behind,
    detectors_in,
    lifted,
    lifted_by_overrides,
    overrides_of,
    perhaps_lifted_by_overrides,
    resets_in,
    unsaid_combinations,
    ways_left,
)
from tidegate.lint.derived.reset_path.path_gaps import gaps_behind, gaps_onward, undriven
from tidegate.lint.derived.unsaid import missing, not_whole, unsaid
from tidegate.lint.description.model.detector import Comparator
from tidegate.lint.description.model.reset_path import Bypass
from tidegate.lint.graph.dependency import Graph
from tidegate.lint.graph.dominators import on_every_way_to_each
from tidegate.lint.graph.edge import EdgeKind
from tidegate.lint.graph.paths import Reach, drives
from tidegate.lint.judgement import Judgement, Level
from tidegate.lint.quantity import Dimension, show
from tidegate.lint.rule import Example, Rule, rule
from tidegate.rules import bypass_control

_COMMON_PRACTICE: Final = (
    "common practice, no source, a policy: a wrong detector must not keep a chip from being brought up"
)


@rule(
    "bypass/present",
    title="every detector that resets the chip can be overridden",
    level=Level.ERROR,
    applies_to="comparators",
    proves="On every way from the detector to every reset net that it drives stands an element that an override forces "
    "released: the detector itself, a stage, or the net. That is a policy of the house, and no law of nature: how much "
    "it weighs is for the settings. It fails only where overrides are said to be complete (or none).",
    facts=(
        "output_stages.*.driven_by", "resets.*.driven_by", "bypasses.*.overrides", "bypasses.*.forces", "complete",
        "output_stages.*.combine and resets.*.combine of what has several drivers",
    ),
    mend="an override on the detector, or on a stage that its decision must pass",
    sources=(_COMMON_PRACTICE,),
    example=Example(
        fails="bypasses: {skip_core: null}",
        holds="bypasses: {skip_core: {overrides: uv_core, forces: released}}",
    ),
)  # fmt: skip
def detector_has_override(comparator: Comparator, case: Case) -> Judgement:
    """Pass if no way to a reset net is left once everything that can be overridden is taken out."""
    graph = case.graph
    reach, gaps = Reach(comparator.id, drives(graph)), gaps_onward(case, comparator.id)
    nets, left = resets_in(graph, reach), ways_left(graph, comparator.id, graph.once(lifted_by_overrides))
    kept = resets_in(graph, left)
    overrides = [override for name in reach for override in overrides_of(graph, name)]
    if not kept and gaps:
        missing(gaps)
    if not nets:
        return case.not_applicable("it drives no reset net")
    if not kept:
        names = [override.id for override in overrides if override.forces == "released"]
        return case.passes(f"can be taken out of the way to {_and(nets)}", why=f"by {_and(names)}" if names else "")
    if lacking := _unsaid_overrides(case, comparator, reach, overrides):
        missing(lacking)
    if others := not_whole(case, "bypasses"):
        return case.open(others, f"nothing is said of an override that takes it out of the way to {_and(kept)}")
    asserting = [override.id for override in overrides if override.forces == "asserted"]
    inside = {name: graph.heads(name, EdgeKind.DRIVES) for name in reach}
    ways = on_every_way_to_each(inside, comparator.id, kept)
    shared = next((name for name in ways[0] if all(name in way for way in ways)), None)
    stage = f", or on {shared}, which every way passes" if shared else ""
    return case.fails(
        f"no override takes it out of the way to {_and(kept)}",
        why=f"{_and(asserting)} can only force the reset, not lift it" if asserting else "",
        mend=f"an override that forces released, on {comparator.id}{stage}",
        path=left.path(kept[0]),
    )


def _unsaid_overrides(case: Case, comparator: Comparator, reach: Reach, overrides: Sequence[Bypass]) -> tuple[str, ...]:
    """The missing facts of what is described with which the detector might be seen to be overridden after all."""
    graph = case.graph
    aimless = tuple(override.fact("overrides") for override in graph.once(aimless_overrides))
    if resets_in(graph, ways_left(graph, comparator.id, graph.once(perhaps_lifted_by_overrides))):
        return aimless
    forces = (override.fact("forces") for override in overrides if override.forces is None)
    combine = (element.fact("combine") for element in unsaid_combinations(graph, reach))
    return (*aimless, *forces, *combine)


def _and(names: Iterable[str]) -> str:
    return " and ".join(dict.fromkeys(names))


@rule(
    "bypass/default_inactive",
    title="an override is inactive unless somebody sets it",
    level=Level.ERROR,
    applies_to="bypasses",
    proves="When nobody sets the override, the detector that it takes out is in force.",
    facts=("bypasses.*.default",),
    mend="make inactive the default",
    sources=("common practice, no source: a protection is on unless it is switched off",),
    example=Example(
        fails="bypasses: {skip_core: {default: active}}",
        holds="bypasses: {skip_core: {default: inactive}}",
    ),
)
def override_rests_inactive(bypass: Bypass, case: Case) -> Judgement:
    """Pass if the default is inactive."""
    if case.of(bypass).default.must() == "inactive":
        return case.passes("inactive unless set", at="default")
    return case.fails(
        "active when nobody sets it: what it overrides is out of force in every chip",
        mend="make inactive the default",
        at="default",
    )


@rule(
    "bypass/default_held",
    title="something holds the default of an override",
    level=Level.ERROR,
    applies_to="bypasses",
    proves="A control that comes from outside (a pin, a test port) is held at a level of known strength when nobody "
    "drives it, and a control register is cleared by a reset net that is named. A fuse holds its own state. Which "
    "level means inactive the description does not say: bypass/default_inactive judges what the author states.",
    facts=("bypasses.*.controlled_by", "bypasses.*.hold", "bypasses.*.reset_by of a register"),
    mend="a hold resistor to the inactive level; for a register, a reset net that clears it",
    sources=("common practice, no source: what nothing drives is held in its safe state",),
    example=Example(
        fails="bypasses: {skip_core: {hold: none}}",
        holds="bypasses: {skip_core: {hold: {to: low, through: resistor, resistance: 100 kohm}}}",
    ),
    yields=("bypass/default_inactive",),
)
def default_is_held(bypass: Bypass, case: Case) -> Judgement:
    """Pass if a hold of known strength is there; for a register, if a reset net clears it."""
    control = case.of(bypass).controlled_by.must()
    if control == "fuse":
        return case.not_applicable("a fuse holds its own state")
    if control == "register" and bypass.reset_by is None:
        missing((bypass.fact("reset_by" if bypass.controlled_by else "controlled_by"),))
    if control == "register":
        return case.passes(f"{bypass.reset_by} clears the register", at="reset_by")
    if bypass.hold == "none":
        return case.fails(
            f"nothing holds its default: a {control.replace('_', ' ')} that nobody drives floats",
            mend="a hold resistor to the inactive level",
            at="hold",
        )
    held = case.of(bypass).hold
    held.must()
    if held.to.given is None:
        held.lacks("to")
    span = held.resistance.given
    if span is None or span.most is None:
        held.lacks("resistance" if span is None else "resistance.max")
    case.settle()
    weakest = show(held.resistance.most(), Dimension.RESISTANCE)
    return case.passes(f"held {held.to.given} through at most {weakest}", at="hold")


@rule(
    "bypass/locked",
    title="an override is locked outside test",
    level=Level.ERROR,
    applies_to="bypasses",
    proves="No software and no stray level in the field can take a detector out.",
    facts=("bypasses.*.locked_outside_test",),
    mend="let the override act only in test",
    sources=("common practice, no source: what disables a protection is out of reach in the field",),
    example=Example(
        fails="bypasses: {skip_core: {locked_outside_test: false}}",
        holds="bypasses: {skip_core: {locked_outside_test: true}}",
    ),
)
def override_is_locked(bypass: Bypass, case: Case) -> Judgement:
    """Pass if it is locked outside test."""
    if case.of(bypass).locked_outside_test.must():
        return case.passes("locked outside test", at="locked_outside_test")
    return case.fails(
        f"can be set outside test: {bypass.overrides or 'what it overrides'} can be taken out in the field",
        mend="let it act only in test",
        at="locked_outside_test",
    )


@rule(
    "bypass/readable",
    title="the state of an override can be read back",
    level=Level.WARNING,
    applies_to="bypasses",
    proves="Whoever tests or diagnoses the chip can see whether the override is active.",
    facts=("bypasses.*.readable",),
    mend="a status bit, or a pin that shows the state",
    sources=("common practice, no source: a protection that is switched off says so",),
    example=Example(
        fails="bypasses: {skip_core: {readable: false}}",
        holds="bypasses: {skip_core: {readable: true}}",
    ),
)
def override_is_readable(bypass: Bypass, case: Case) -> Judgement:
    """Pass if its state can be read back."""
    if case.of(bypass).readable.must():
        return case.passes("its state can be read back", at="readable")
    return case.fails(
        "its state cannot be read back: an override left active is not noticed",
        mend="a status bit, or a pin that shows the state",
        at="readable",
    )


@rule(
    "bypass/over_voltage_caution",
    title="no override lifts the reset of an over-voltage detector unnoticed",
    level=Level.WARNING,
    applies_to="bypasses",
    proves="The override takes no over-voltage detector out. Where it does, a person must agree: while it is active, "
    "the reset nets that hang on the detector through it alone are not held however high the rail, and the bench "
    "supply must be limited below the level that damages.",
    facts=("bypasses.*.overrides", "bypasses.*.forces", "rails.*.damage of the rail that the detector watches"),
    mend="limit the bench supply below the damage level while the override is active, and have that agreed",
    sources=("common practice, no source: an override of a protection comes with a limit on the bench",),
    example=Example(
        fails="bypasses: {skip_core: {overrides: core_out}}",
        holds="bypasses: {skip_core: {overrides: uv_core}}",
    ),
)
def over_voltage_stays_in_force(bypass: Bypass, case: Case) -> Judgement:
    """Ask a person where the override lifts the reset of an over-voltage detector."""
    if case.of(bypass).forces.must() == "asserted":
        return case.not_applicable("it forces the reset, and lifts none")
    graph, element = case.graph, case.of(bypass).overrides.must()
    reach = behind(graph, element)
    over = [detector for detector in detectors_in(graph, reach) if detector.role == "over_voltage"]
    if lost := _lost(graph, over, element, unsaid_agree=False):
        return _asks_for_limit(case, lost, reach)
    if lacking := _unsaid_lifts(case, element, over):
        missing(lacking)
    still = [one.id for one in over if resets_in(graph, Reach(one.id, drives(graph)))]
    if still:
        return case.passes(f"{_and(still)} still {'reach' if len(still) > 1 else 'reaches'} every reset net without it")
    return case.passes("lifts the reset of no over-voltage detector")


def _unsaid_lifts(case: Case, element: str, over: Sequence[Comparator]) -> tuple[str, ...]:
    """The missing facts with which the override might be seen to lift the reset of an over-voltage detector."""
    graph = case.graph
    if not over:
        return gaps_behind(case, element)
    combine: list[str] = []
    if _lost(graph, over, element, unsaid_agree=True):
        ways = (Reach(detector.id, drives(graph)) for detector in over)
        combine = [one.fact("combine") for way in ways for one in unsaid_combinations(graph, way)]
    return (*graph.once(undriven), *unsaid(case, "resets"), *combine)


def _lost(
    graph: Graph, over: Sequence[Comparator], element: str, *, unsaid_agree: bool
) -> list[tuple[Comparator, list[str]]]:
    """The detectors that cannot assert some reset nets once an element is forced released, with those nets."""
    found = []
    out = lifted(graph, (element,), unsaid_agree=unsaid_agree) if over else frozenset[str]()
    for detector in over:
        left = ways_left(graph, detector.id, out)
        nets = [net for net in resets_in(graph, Reach(detector.id, drives(graph))) if net not in left]
        if nets:
            found.append((detector, nets))
    return found


def _asks_for_limit(case: Case, lost: Sequence[tuple[Comparator, list[str]]], reach: Reach) -> Judgement:
    detectors = _and(detector.id for detector, _ in lost)
    nets = _and(net for _, nets in lost for net in nets)
    limits = dict.fromkeys(_limit(case, detector) for detector, _ in lost)
    return case.asks(
        f"lifts {nets} past {detectors}: while it is active, no reset protects the loads against over-voltage",
        why=f"{detectors} cannot assert {nets} then, however high the supply",
        mend=f"limit the bench supply while it is active: {_and(limits)}",
        path=reach.path(lost[0][0].id),
    )


def _limit(case: Case, detector: Comparator) -> str:
    """The level below which a rail must be kept; an unknown one is no reason to leave the caution out."""
    rail = case.description.rails[detector.watches]
    damage_v = case.if_known(case.of(rail).damage.least)
    level = (
        f"{show(damage_v, Dimension.VOLTAGE)}, which damages"
        if damage_v is not None
        else "its damage level (not given)"
    )
    return f"{rail.id} below {level}"


RULES: Final[tuple[Rule, ...]] = (
    detector_has_override,
    *bypass_control.RULES,
    override_rests_inactive,
    default_is_held,
    override_is_locked,
    override_is_readable,
    over_voltage_stays_in_force,
)
