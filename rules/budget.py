"""Budget: what a domain takes at rest stays within its budget, and no small current drowns in leakage."""

from __future__ import annotations

import math
from collections.abc import Sequence
from typing import Any, Final

from tidegate.lint.case import Case
from tidegate.lint.derived.safe_rounding import show_down, show_up
from tidegate.lint.derived.supply.divider_current import divider_takers
from tidegate.lint.derived.supply.rail_of import delivered_v
from tidegate.lint.derived.supply.standing_current import Taker, circuit_takers, hold_takers, largest_first
from tidegate.lint.description.model.detector import Bias, Comparator
from tidegate.lint.description.model.reset_path import OutputStage
from tidegate.lint.description.model.supply import Domain
from tidegate.lint.judgement import Judgement, Level, Measure, Relation
from tidegate.lint.physics import hold
from tidegate.lint.physics.domain import require_positive
from tidegate.lint.quantity import Dimension, show
from tidegate.lint.rule import Example, Rule, rule

_A: Final = Dimension.CURRENT
_TAKERS_SHOWN: Final = 5
_MODES_SHOWN: Final = 3
LEAST_RATIO: Final = 10.0
"""A current so many times its leakage is off by less than a tenth."""
_DROWNS: Final = "common practice, no source: a current that is to be trusted is ten times what leaks on its node"


@rule(
    "budget/within",
    title="everything in a domain together stays within its budget at rest",
    level=Level.ERROR,
    applies_to="domains",
    proves="With every stage driven against its least hold, at the greatest supply delivered and the hottest corner, "
    "the holds, the input dividers at their least resistance, what the references, biases and comparators of the "
    "domain take at most, and what its stages are said to take and to leak stay within the budget. All of it is taken "
    "to be on at once; what is off in a mode makes that mode take less, which the numbers tell. A divider that hangs "
    "on another rail than its detector counts in each always-on domain of that rail; the branch of a crossover counts "
    "in what its detector takes. Loads are not counted. Where the holds and circuits alone pass the budget, "
    "passive_default/holds_within_budget says so.",
    facts=(
        "domains.*.budget", "domains.*.rail", "rails.*.delivered", "references.*.consumes", "biases.*.consumes",
        "comparators.*.consumes", "comparators.*.divider.top and bottom", "output_stages.*.hold", "modes.*.off",
    ),
    mend="larger dividers and holds, circuits that take less, or a larger budget",
    sources=("Ohm's law; currents into one domain add up",),
    example=Example(
        fails="domains: {aon: {budget: 9 uA}}",
        holds="domains: {aon: {budget: 12 uA}}",
    ),
    formulas=(hold.hold_current_a,),
)  # fmt: skip
def domain_stays_within_budget(domain: Domain, case: Case) -> Judgement:
    """Compare all that the domain takes with its budget."""
    if domain.budget is None and domain.kind == "switched":
        return case.not_applicable("it is switched, and no budget is stated")
    budget_a = case.own.most("budget")
    holds, circuits, dividers = case.gather(
        lambda: hold_takers(case, domain), lambda: circuit_takers(case, domain), lambda: divider_takers(case, domain)
    )
    takers = [*holds, *circuits, *dividers]
    total_a = _sum_a(takers)
    if holds and not Measure(budget_a, _sum_a([*holds, *circuits]), _A, Relation.AT_MOST).holds:
        return case.not_applicable("its holds and circuits alone pass it (passive_default/holds_within_budget says so)")
    modes = _in_modes(case, domain, takers, total_a)
    return case.at_most(
        need=budget_a, have=total_a, dimension=_A, says="takes at rest",
        why="; ".join([largest_first(takers, _TAKERS_SHOWN) or "nothing in it takes current", *modes]),
        mend=f"take {show_up(total_a - budget_a, _A)} less, or a budget of at least {show_up(total_a, _A)}",
        at="budget",
    )  # fmt: skip


def _sum_a(takers: Sequence[Taker]) -> float:
    return math.fsum(taker.current_a for taker in takers)


def _in_modes(case: Case, domain: Domain, takers: Sequence[Taker], total_a: float) -> list[str]:
    """What the domain takes in the modes in which something of it is off, the thriftiest first."""
    found = []
    for name, mode in case.description.modes.items():
        off = set(mode.off or ())
        left_a = 0.0 if domain.id in off else _sum_a([taker for taker in takers if _owner(taker) not in off])
        if left_a < total_a:
            found.append((left_a, f"{show(left_a, _A)} in {name}"))
    return [text for _, text in sorted(found)[:_MODES_SHOWN]]


def _owner(taker: Taker) -> str:
    """The element that takes it: ``uv`` of the divider of uv."""
    return taker.name.rpartition(" ")[2]


def _leakage_judgement(case: Case, *, current: str, leakage: str, what: str) -> Judgement:
    return _above_leakage(case, case.own.least(current), current=current, leakage=leakage, what=what)


def _above_leakage(case: Case, current_a: float, *, current: str, leakage: str, what: str) -> Judgement:
    leakage_a = case.own.most(leakage)
    case.settle()
    return case.at_least(
        need=LEAST_RATIO * leakage_a, have=current_a, dimension=_A, says=f"{what} at its least",
        why=f"{LEAST_RATIO:g} times {show(leakage_a, _A)}, which leaks on its node at the hottest corner",
        mend=f"a current of at least {show_up(LEAST_RATIO * leakage_a, _A)}, or leakage of at most "
        f"{show_down(current_a / LEAST_RATIO, _A)}", at=current,
    )  # fmt: skip


@rule(
    "budget/bias_above_leakage",
    title="a bias current stands well above what leaks on its node",
    level=Level.WARNING,
    applies_to="biases",
    proves="The least bias current is at least ten times the most that leaks from the node it feeds at the hottest "
    "corner.",
    facts=("biases.*.current", "biases.*.leakage"),
    mend="more current, or smaller junctions on the node",
    sources=(_DROWNS,),
    example=Example(
        fails="biases: {bias_start: {leakage: {max: 6 nA}}}",
        holds="biases: {bias_start: {leakage: {max: 4 nA}}}",
    ),
)
def bias_stands_above_leakage(bias: Bias, case: Case) -> Judgement:
    """Compare the least current with ten times its leakage."""
    if bias.kind == "external":
        return case.not_applicable("it is made off the chip")
    return _leakage_judgement(case, current="current", leakage="leakage", what="its current")


def _timing_rule(section: str, word: str, example: Example) -> Rule:
    return rule(
        f"budget/{word}_timing_above_leakage",
        title=f"a current that times a {word} stands well above what leaks on its capacitor",
        level=Level.WARNING,
        applies_to=section,
        proves="The least current that charges the capacitor, given or through the resistance from the least supply "
        "delivered at the threshold, is at least ten times the most that leaks there at the hottest corner.",
        facts=(f"{section}.*.timing.current, or timing.resistance and threshold with rails.*.delivered",
               f"{section}.*.timing.leakage"),
        mend="more current with a larger capacitor, or less leakage",
        sources=(_DROWNS,),
        example=example,
    )(_judge_timing)  # fmt: skip


def _judge_timing(element: Any, case: Case) -> Judgement:
    """Compare the least charging current with ten times what leaks."""
    assert isinstance(element, Comparator | OutputStage)
    timing = element.timing
    if timing is None:
        return case.not_applicable("does not say what makes a time of it (timing)")
    if timing.count is not None or timing.period is not None:
        return case.not_applicable("its time is counted, and leakage does not change it")
    if timing.current is None and timing.resistance is not None:
        threshold_v, ohm = case.own.most("timing.threshold"), case.own.most("timing.resistance")
        supply_v, _ = case.gather(lambda: delivered_v(case, element, "least"), lambda: case.own.most("timing.leakage"))
        require_positive(r_ohm=ohm)
        return _above_leakage(
            case, max(supply_v - threshold_v, 0.0) / ohm, current="timing.resistance", leakage="timing.leakage",
            what="the current through its resistance, at the threshold,",
        )  # fmt: skip
    return _leakage_judgement(
        case, current="timing.current", leakage="timing.leakage", what="the current that times it"
    )


RULES: Final[tuple[Rule, ...]] = (
    domain_stays_within_budget,
    bias_stands_above_leakage,
    _timing_rule(
        "comparators",
        "detector",
        Example(
            fails="comparators: {uv: {timing: {leakage: {max: 5 nA}}}}",
            holds="comparators: {uv: {timing: {leakage: {max: 3 nA}}}}",
        ),
    ),
    _timing_rule(
        "output_stages",
        "stage",
        Example(
            fails="output_stages: {core_out: {timing: {current: {min: 10 nA, max: 20 nA}, leakage: 2 nA, "
            "capacitance: 25 pF, threshold: 0.8 V}}}",
            holds="output_stages: {core_out: {timing: {current: {min: 10 nA, max: 20 nA}, leakage: 1 nA, "
            "capacitance: 25 pF, threshold: 0.8 V}}}",
        ),
    ),
)
