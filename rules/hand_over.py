"""Hand-over: from one detector of a rail to the next, reset is held at every supply on the way."""

from __future__ import annotations

from functools import partial
from typing import Final

from tidegate.lint.case import Case
from tidegate.lint.derived.crossover.crossover_level import level_is_known
from tidegate.lint.derived.levels.held_span import Step, Way, held_span, steps
from tidegate.lint.derived.levels.trip_causes import LEVEL_FORMULAS
from tidegate.lint.derived.reset_path.guarding_nets import LOW_ROLES, detectors_behind_nets, nets_of_detectors, watching
from tidegate.lint.derived.reset_path.path_gaps import undriven
from tidegate.lint.derived.safe_rounding import show_down, show_up
from tidegate.lint.description.model.detector import Comparator
from tidegate.lint.description.model.supply import Rail
from tidegate.lint.graph.edge import EdgeKind, Hop
from tidegate.lint.judgement import Judgement, Kind, Level
from tidegate.lint.physics import device_at_corner
from tidegate.lint.quantity import Dimension, show
from tidegate.lint.rule import Example, Rule, rule
from tidegate.lint.timing.interval import FOREVER_S
from tidegate.lint.timing.judging import judged_in_time
from tidegate.lint.timing.parts import ComparatorPart
from tidegate.lint.timing.scenario import Scene
from tidegate.lint.timing.slack import Slack, worst
from tidegate.lint.timing.state import Decision, On, lets_go
from tidegate.lint.timing.supply import Supply
from tidegate.lint.timing.timeline import Timeline, Timelines, timelines

_V: Final = Dimension.VOLTAGE
_T: Final = Dimension.DURATION
_WORDS: Final = {"up": "rising", "down": "falling"}
_WAYS: Final[tuple[Way, ...]] = ("up", "down")
_LOWER: Final = """comparators: {{por: {{crossover: null, reference: ref_early,
  divider: {{ratio: 0.5, top: 10 Mohm, bottom: 10 Mohm}},
  trip: {{rising: {{min: {rising}, max: 1.49 V}}, falling: {{min: {falling}, max: 1.43 V}}}}}}}}
references: {{ref_early: {{kind: threshold, voltage: {{min: 0.48 V, typ: 0.6 V, max: 0.75 V}}, works_from: 0.7 V,
  settling: 5 us, decoupling: 10 pF, source_resistance: 20 kohm, domain: aon, self_biased: false, bias: bias_start,
  consumes: 0.1 uA}}}}
"""  # the lower of two detectors, with a reference of its own


@rule(
    "hand_over/no_hole",
    title="at every supply below the highest level, some detector of the stack holds reset",
    level=Level.ERROR,
    applies_to="rails",
    proves="Among the under-voltage and power-on detectors of the rail that assert one reset net, each lets go "
    "(rising, at its lowest rising level; falling, at its lowest falling level) no lower than the supply from which "
    "the next one decides: the highest of what it, its bias and its references need, as far as the rail feeds them. A "
    "detector that is said to assert while it cannot decide holds from 0 V on. A detector that another one of the "
    "stack arms takes over when that one lets go. Below the lowest of them, the hold of the net is judged by "
    "passive_default/held. The span of a hole counts with the slowest ramp. A lower detector without a reference is "
    "judged at equal temperature by trip_window/crossover_tracks; without its components, a person must look.",
    facts=(
        "comparators.*.trip", "comparators.*.works_from", "comparators.*.undecided", "references.*.works_from",
        "biases.*.works_from", "domains.*.rail", "rails.*.nominal, rise and fall, for the time in a hole",
    ),
    mend="a higher level of the lower detector, or an upper one that decides from a lower supply",
    sources=("the union of the spans in which detectors hold reset (derived)",),
    example=Example(
        fails=_LOWER.format(rising="1.02 V", falling="0.96 V"),
        holds=_LOWER.format(rising="1.17 V", falling="1.11 V"),
    ),
    formulas=(*LEVEL_FORMULAS, device_at_corner.slope_factor_of_swing),
)  # fmt: skip
def stack_has_no_hole(rail: Rail, case: Case) -> Judgement:
    """Find the narrowest hand-over of every stack of the rail."""
    stacks = _stacks(case, rail)
    if not stacks:
        return _no_stack(case, rail)
    members = {detector.id: detector for stack in stacks for detector in stack}
    asks = [(way, partial(held_span, case, detector, way)) for detector in members.values() for way in _WAYS]
    found = case.each(ask for _, ask in asks)
    spans = {(way, span.detector): span for (way, _), span in zip(asks, found, strict=True)}
    handed = [
        step
        for stack in stacks
        for way in _WAYS
        for step in steps([spans[way, detector.id] for detector in stack], way, sure=not case.at_best)
    ]
    if not handed:
        return case.passes("one detector alone holds reset up to the highest level")
    step = min(handed, key=lambda step: (step.overlap_v, step.below.detector, step.above.detector))
    lower, upper = members[step.below.detector], members[step.above.detector]
    made_without_reference = lower.role == "power_on" and lower.crossover is not None
    if step.overlap_v < 0.0 and made_without_reference and level_is_known(case, lower):
        return case.not_applicable(
            f"extreme against extreme {lower.id} can let go {show(-step.overlap_v, _V)} below where {upper.id} "
            "decides; both move with temperature, and trip_window/crossover_tracks compares them at the same one"
        )
    return case.at_least(
        need=step.above.from_v, have=step.below.to or step.below.to_v, dimension=_V,
        says=f"{_WORDS[step.way]}, {step.below.detector} surely holds reset up to", why=_why(case, rail, step),
        mend=f"a level of {step.below.detector} {show_up(-step.overlap_v, _V)} higher, or "
        f"{step.above.by} working from {show_down(step.below.to_v, _V)} or less",
        path=(Hop(rail.id, ""), Hop(step.below.detector, EdgeKind.WATCHES.backwards)),
        # Without its components nobody can say whether its level tracks: then a person must look at the extremes.
        otherwise=Kind.REVIEW if made_without_reference else Kind.FAIL,
    )  # fmt: skip


def _no_stack(case: Case, rail: Rail) -> Judgement:
    """What is said of a rail no two detectors of which assert one net, where that is known."""
    if len(watching(case.graph, rail.id, LOW_ROLES)) > 1:
        case.missing.extend(case.graph.once(undriven))
        case.settle()
    return case.not_applicable("no two detectors of it assert one reset net")


def _stacks(case: Case, rail: Rail) -> list[tuple[Comparator, ...]]:
    """The detectors of the rail that assert one net, for every net; each stack once."""
    by_net, nets = case.graph.once(detectors_behind_nets), case.graph.once(nets_of_detectors)
    names = dict.fromkeys(net for one in watching(case.graph, rail.id, LOW_ROLES) for net in nets.get(one.id, ()))
    stacks = {
        frozenset(one.id for one in stack): stack
        for net in names
        if len(stack := tuple(one for one in by_net[net] if one.watches == rail.id and one.role in LOW_ROLES)) > 1
    }
    return list(stacks.values())


def _why(case: Case, rail: Rail, step: Step) -> str:
    by = step.above.by
    source = f" ({by} does)" if by and by != step.above.detector else ""
    decides = f"{step.above.detector} decides from {show(step.above.from_v, _V)} on{source}"
    if step.overlap_v >= 0.0:
        return decides
    hole = f"between {show(step.below.to_v, _V)} and {show(step.above.from_v, _V)} no detector holds reset"
    dwell_s = _dwell_s(case, rail, step)
    dwells = "" if dwell_s is None else f", and {rail.id} may take {show(dwell_s, _T)} to pass"
    typical_v = step.typical_overlap_v
    typically = "" if typical_v is None or typical_v < 0.0 else f"; typically they overlap by {show(typical_v, _V)}"
    return f"{decides}; {hole}{dwells}{typically}"


def _dwell_s(case: Case, rail: Rail, step: Step) -> float | None:
    """How long the slowest ramp of the rail stays in a hole, in s; None where it is not given."""
    facts = case.of(rail)
    ramp = facts.rise if step.way == "up" else facts.fall
    slowest = case.if_known(lambda: (facts.nominal.typical(), ramp.most()))
    return None if slowest is None or slowest[0] <= 0.0 else -step.overlap_v / slowest[0] * slowest[1]


@rule(
    "hand_over/armed_when_up",
    title="a detector is armed only once its own rail is up",
    level=Level.WARNING,
    applies_to="comparators",
    proves="In every start from nothing, what arms the detector lets go, at the earliest, no sooner than the rail "
    "that the detector watches has passed the highest rising level, at the latest: else it asserts a reset that was "
    "let go already. Detectors of one rail that arm each other are judged by hand_over/no_hole and trip_window/order.",
    facts=("comparators.*.armed_by", "comparators.*.trip", "rails.*.nominal, rise, after and delay",
           "the path of what arms it"),
    mend="arm it by a detector of its own rail, or later",
    sources=("arrival times over the dependency graph, each the last of what is needed (derived)",),
    example=Example(
        fails="comparators: {uv_core: {armed_by: por}}",
        holds="comparators: {ov: {armed_by: por}}",
    ),
    formulas=(*LEVEL_FORMULAS,),
)  # fmt: skip
def armed_after_its_rail_is_up(comparator: Comparator, case: Case) -> Judgement:
    """Compare the earliest arming with the latest time at which the rail is up."""
    if comparator.armed_by is None:
        return case.not_applicable("nothing arms it")
    arming = case.graph.elements[comparator.armed_by]
    if isinstance(arming, Comparator) and arming.watches == comparator.watches:
        return case.not_applicable(f"{arming.id} watches the same rail (hand_over/no_hole judges the two)")
    wide = timelines(case.description, case.graph)
    gaps = wide.gaps(comparator.id, scenes=(Scene.START,))
    rail = comparator.watches
    path = (Hop(comparator.id, ""), Hop(arming.id, EdgeKind.GATED_BY.forwards))

    def judge(lines: Timelines) -> Judgement:
        part = lines.read.every[comparator.id]
        assert isinstance(part, ComparatorPart)
        least = worst(_arming_slack(line, part, arming.id) for line in lines.starts
                      if line.scenario.scene is Scene.START)  # fmt: skip
        if least is None and lines is wide:
            return case.not_applicable(f"{arming.id} asserts nothing that it lets go of in a start-up")
        if least is None:
            return case.passes(f"it is not known when {arming.id} arms it", at="armed_by")
        if least.first_s == FOREVER_S or least.then_s == -FOREVER_S:
            return case.fails(
                f"{arming.id} may arm it while {rail} is not up ({least.scenario.name})",
                why=least.scenario.about,
                mend="arm it by a detector of its own rail",
                at="armed_by",
                path=path,
            )
        return case.at_least(
            need=least.first_s - least.from_s, have=least.then_s - least.from_s, dimension=_T,
            says=f"{arming.id} arms it ({least.scenario.name}) after",
            why=f"{least.scenario.about}; {rail} has passed {show(part.rising.most, _V)} at the latest after "
            f"{show(least.first_s - least.from_s, _T)}",
            mend=f"arm it {show_up(-least.slack_s, _T)} later, or by a detector of {rail}", at="armed_by", path=path,
        )  # fmt: skip

    return judged_in_time(case, gaps, judge)


def _arming_slack(line: Timeline, part: ComparatorPart, arming: str) -> Slack | None:
    """Between the latest time at which the rail is up and the earliest at which the detector is armed."""
    state, supply = line.states.get(arming), line.states.get(part.watches)
    if not isinstance(state, Decision):
        return None
    if not isinstance(supply, Supply):
        known = not isinstance(supply, On) or not supply.may_be_on
        return None if known else Slack(line.scenario, FOREVER_S, -FOREVER_S)
    armed = lets_go(state).may_be_on
    low = supply.may_be_low(rising_v=part.rising.most, falling_v=part.rising.most)
    if not armed:
        return None
    return Slack(line.scenario, low[0][1] if low else -FOREVER_S, armed[0][0])


RULES: Final[tuple[Rule, ...]] = (stack_has_no_hole, armed_after_its_rail_is_up)
