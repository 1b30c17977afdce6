"""Self-bias: what feeds itself, and what waits for itself, has something that starts it."""

from __future__ import annotations

import math
from itertools import pairwise
from typing import Any, Final

from tidegate.lint.case import Case
from tidegate.lint.derived.at_corner import at_corner
from tidegate.lint.derived.safe_rounding import show_down
from tidegate.lint.derived.supply.rail_of import domain_rail
from tidegate.lint.description.model.detector import Bias, Reference
from tidegate.lint.description.model.supply import Domain, Rail
from tidegate.lint.facts.reading import Better
from tidegate.lint.graph.edge import Path, path_text
from tidegate.lint.graph.leaning_gaps import before_loop_gaps, leaning_gaps
from tidegate.lint.graph.leaning_loops import STARTED_WITHOUT, SUBJECTS, LeaningLoop, leaning_loops, without_detectors
from tidegate.lint.graph.paths import Reach
from tidegate.lint.judgement import Judgement, Level
from tidegate.lint.physics.ramp import ramp_slope_v_per_s
from tidegate.lint.quantity import Dimension, show
from tidegate.lint.rule import Example, Rule, rule

_IDLE_STATE: Final = (
    "P. R. Gray, P. J. Hurst, S. H. Lewis, R. G. Meyer, Analysis and Design of Analog Integrated Circuits: a "
    "self-biased circuit has a second stable state in which nothing flows, and needs a start-up circuit "
    "(value from memory)"
)
_STARTS_PROVES: Final = (
    "A source that feeds its own bias has a start-up circuit that takes it out of the state in which nothing flows, "
    "and that circuit works on the slowest ramp of the rail that feeds it (the nominal level over the longest rise "
    "time). Where the source is switched on by another element, the ramp it sees is not that of the rail, and a "
    "person must look."
)
_STARTS_MEND: Final = "a start-up circuit that works on any ramp, and is cut off once the output is up"


def _start_facts(section: str, what: str) -> tuple[str, ...]:
    return (
        f"{section}.*.{what}", f"{section}.*.start_up", f"{section}.*.start_up.least_slope",
        "the domain, its kind, and its rail's nominal and rise, where that slope is above zero",
    )  # fmt: skip


@rule(
    "self_bias/reference_starts",
    title="a self-biased reference has a start-up circuit that works on the slowest ramp",
    level=Level.ERROR,
    applies_to="references",
    proves=_STARTS_PROVES,
    facts=_start_facts("references", "self_biased"),
    mend=_STARTS_MEND,
    sources=(_IDLE_STATE,),
    example=Example(
        fails="references: {ref_fast: {start_up: none}}",
        holds="references: {ref_fast: {start_up: {least_slope: 80 V/s}}}",
    ),
    formulas=(ramp_slope_v_per_s,),
)
def self_biased_reference_starts(reference: Reference, case: Case) -> Judgement:
    """Judge the start-up circuit of a self-biased reference."""
    if reference.self_biased is None and reference.kind in ("divider", "external"):
        return case.not_applicable(f"a reference of the kind {reference.kind} does not feed itself")
    if not case.of(reference).self_biased.must():
        return case.not_applicable("it is not self-biased")
    return _starts(reference, case)


@rule(
    "self_bias/bias_starts",
    title="a self-biased source of bias has a start-up circuit that works on the slowest ramp",
    level=Level.ERROR,
    applies_to="biases",
    proves=_STARTS_PROVES,
    facts=_start_facts("biases", "kind"),
    mend=_STARTS_MEND,
    sources=(_IDLE_STATE,),
    example=Example(
        fails="biases: {bias_start: {kind: self_biased, start_up: none}}",
        holds="biases: {bias_start: {kind: self_biased, start_up: {by: a leak, least_slope: 0 V/s}}}",
    ),
    formulas=(ramp_slope_v_per_s,),
)
def self_biased_bias_starts(bias: Bias, case: Case) -> Judgement:
    """Judge the start-up circuit of a self-biased source of bias."""
    kind = case.of(bias).kind.must()
    if kind != "self_biased":
        return case.not_applicable(f"a bias of the kind {kind} does not feed itself")
    return _starts(bias, case)


def _starts(source: Reference | Bias, case: Case) -> Judgement:
    if case.of(source).start_up.must() == "none":
        return case.fails(
            "feeds itself and has no start-up circuit: it may stay in the state in which nothing flows",
            mend=_STARTS_MEND,
            at="start_up",
        )
    least_v_per_s = case.of(source).start_up.least_slope.most()
    if least_v_per_s == 0.0:
        return case.passes("its start-up circuit works on any ramp", at="start_up.least_slope")
    domain = case.of(source).domain.element()
    assert isinstance(domain, Domain)
    kind, rail = case.of(domain).kind.must(), domain_rail(case, domain)
    switch = source.gated_by or (domain.switched_by if kind == "switched" else None)
    if switch is not None or kind == "switched":
        return _asks_for_switched_ramp(case, rail, domain, switch, least_v_per_s)
    nominal, rise = case.of(rail).nominal, case.of(rail).rise
    slowest_v_per_s = at_corner(
        case,
        lambda: ramp_slope_v_per_s(rise_v=nominal.typical(Better.MORE), rise_s=rise.most()),
        sure=0.0,
        best=math.inf,
    )
    nominal_v, rise_s = nominal.typical(Better.MORE), rise.most()
    return case.at_most(
        need=slowest_v_per_s,
        have=least_v_per_s,
        dimension=Dimension.SLOPE,
        says="its start-up circuit needs a ramp of",
        why=f"slowest ramp of {rail.id}: {show(nominal_v, Dimension.VOLTAGE)} in {show(rise_s, Dimension.DURATION)}",
        mend=f"a start-up circuit that works on {show_down(slowest_v_per_s, Dimension.SLOPE)} or less; now "
        f"{show(least_v_per_s, Dimension.SLOPE)}; or a rise of {rail.id} in "
        f"{show_down(nominal_v / least_v_per_s, Dimension.DURATION)} or less; now {show(rise_s, Dimension.DURATION)}",
        at="start_up.least_slope",
    )


def _asks_for_switched_ramp(
    case: Case, rail: Rail, domain: Domain, switch: str | None, least_v_per_s: float
) -> Judgement:
    by = f"by {switch}" if switch else f"with {domain.id}"
    return case.asks(
        f"its start-up circuit needs a ramp of {show(least_v_per_s, Dimension.SLOPE)}, and it is switched on {by}",
        why=f"when it is switched on, {rail.id} may stand still; the ramp it sees is that of the switch, which is not "
        "described",
        mend=_STARTS_MEND,
        at="start_up.least_slope",
    )


@rule(
    "self_bias/loop_starts",
    title="nothing waits for itself, unless a start-up circuit breaks the loop",
    level=Level.ERROR,
    applies_to=SUBJECTS,
    proves="Every closed way of elements that lean on each other holds a bias or a reference whose start-up circuit "
    "stands in for what it is biased by. A start-up circuit stands in for no supply and no enable. Each loop is judged "
    "once, at its first element in the order of ids. Ways through a detector's output are judged by self_bias/no_loop.",
    facts=(
        "every fact that says what an element leans on: domain, bias, source, leans_on, gated_by, driven_by, made_by, "
        "after, switched_by, guards",
        "references.*.start_up and biases.*.start_up of those in a loop",
    ),
    mend="a start-up circuit in the loop, or one step of it taken out",
    sources=("a closed way in the graph of who leans on whom has no first step (derived)", _IDLE_STATE),
    example=Example(
        fails="loads: {core_regulator: {domain: core}}",
        holds="loads: {core_regulator: {domain: aon}}",
    ),
)  # fmt: skip
def loop_starts(element: Any, case: Case) -> Judgement:
    """Judge the loop that an element is in, at the first element of the loop."""
    loop = case.graph.once(leaning_loops).get(element.id)
    cycle = () if loop is None else loop.deadlock or loop.doubtful
    if loop is None or not cycle:
        _note_gaps(case)
        case.settle()
        return case.passes(
            "leans on nothing that leans on it" if loop is None else f"is in a loop that {_starters(loop)}"
        )
    if cycle[0].element != element.id:
        return case.not_applicable(f"its loop is judged at {cycle[0].element}")
    if not loop.deadlock:
        for member in loop.unknown:
            case.of(case.graph.elements[member]).lacks("start_up")
        case.settle()
    return case.fails(
        f"waits for itself, and nothing starts it: {path_text(cycle)}",
        why=f"{_starters(loop)} other ways of the loop" if loop.started_by else "",
        mend=_mend(case, cycle),
        path=cycle,
    )


def _mend(case: Case, cycle: Path) -> str:
    """Where a start-up circuit would break a cycle; where none can, a step of it must go."""
    for here, step in pairwise(cycle):
        source = isinstance(case.graph.elements[here.element], Reference | Bias)
        if source and step.by in {kind.forwards for kind in STARTED_WITHOUT}:
            return f"a start-up circuit in {here.element}, which stands in for {step.element}"
    return f"one step of the loop taken out, such as: {cycle[-2].element} {cycle[-1].by} {cycle[-1].element}"


def _starters(loop: LeaningLoop) -> str:
    return f"{' and '.join(loop.started_by)} {'start' if len(loop.started_by) > 1 else 'starts'}"


def _note_gaps(case: Case) -> None:
    """Note the missing facts that could hide a loop: of all that the element leans on, other than detectors."""
    if case.subject.id not in case.graph.once(before_loop_gaps):
        return
    for name in Reach(case.subject.id, without_detectors(case.graph)):
        element = case.graph.elements[name]
        for fact in leaning_gaps(element):
            case.of(element).lacks(fact)


RULES: Final[tuple[Rule, ...]] = (self_biased_reference_starts, self_biased_bias_starts, loop_starts)
