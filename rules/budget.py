"""Budget: what a domain takes at rest stays within its budget, and no small current drowns in leakage."""

from __future__ import annotations

import math
from collections.abc import Sequence
from typing import Any, Final

from tidegate.lint.account import Sum
from tidegate.lint.case import Case
from tidegate.lint.derived.at_corner import at_corner
from tidegate.lint.derived.safe_rounding import show_down, show_up
from tidegate.lint.derived.supply.divider_current import divider_draws
from tidegate.lint.derived.supply.rail_of import delivered_v
from tidegate.lint.derived.supply.standing_current import Draw, circuit_draws, drawn, hold_draws, largest_first
from tidegate.lint.description.model.detector import Bias, Comparator
from tidegate.lint.description.model.reset_path import OutputStage
from tidegate.lint.description.model.supply import Domain
from tidegate.lint.facts.reading import Better
from tidegate.lint.facts.view import Number
from tidegate.lint.judgement import Judgement, Level
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
    "the holds, the input dividers at their least resistance, and what the references, biases, comparators and stages "
    "of the domain take at most stay within the budget. All of it is taken to be on at once; what is off in a mode "
    "makes that mode take less, which the numbers tell. A divider that hangs on another rail than its detector counts "
    "in each always-on domain of that rail; the branch of a crossover counts in what its detector takes. What does not "
    "say in which domain it lives may live in this one. Loads are not counted.",
    facts=(
        "domains.*.budget", "domains.*.rail", "rails.*.delivered", "references.*.consumes", "biases.*.consumes",
        "comparators.*.consumes", "comparators.*.divider.top and bottom", "output_stages.*.consumes",
        "output_stages.*.hold", "the domain of each of them", "modes.*.off",
    ),
    mend="larger dividers and holds, circuits that take less, or a larger budget",
    sources=("Ohm's law; currents into one domain add up",),
    example=Example(
        fails="domains: {aon: {budget: 9 uA}}",
        holds="domains: {aon: {budget: 12 uA}}",
    ),
    formulas=(hold.hold_current_a,),
    yields=("passive_default/holds_within_budget",),
)  # fmt: skip
def domain_stays_within_budget(domain: Domain, case: Case) -> Judgement:
    """Compare all that the domain takes with its budget."""
    budget_a = case.of(domain).budget.most(Better.MORE)
    draws = [*hold_draws(case, domain), *circuit_draws(case, domain), *divider_draws(case, domain)]
    total = drawn(case, draws)
    largest = largest_first(total, _TAKERS_SHOWN) or "nothing in it takes current"
    return case.at_most(
        need=budget_a, have=total, dimension=_A, says="takes at rest",
        why="; ".join([largest, *_in_modes(case, domain, draws, total)]),
        mend=f"take {show_up(total.value - budget_a, _A)} less, or a budget of at least {show_up(total.value, _A)}",
        at="budget",
    )  # fmt: skip


def _in_modes(case: Case, domain: Domain, draws: Sequence[Draw], total: Sum) -> list[str]:
    """What the domain takes in the modes in which something of it is off, the thriftiest first."""
    taken = [(draw.owner, line.value) for draw, line in zip(draws, total.lines, strict=True)]
    found = []
    for name, mode in case.description.modes.items():
        off = set(mode.off or ())
        left_a = math.fsum(current_a for owner, current_a in taken if not off & {owner, domain.id})
        if left_a < total.value:
            found.append((left_a, f"{show(left_a, _A)} in {name}"))
    return [text for _, text in sorted(found)[:_MODES_SHOWN]]


def _above_leakage(case: Case, current_a: float, *, leakage: Number, at: str, what: str) -> Judgement:
    leakage_a = leakage.most()
    return case.at_least(
        need=LEAST_RATIO * leakage_a, have=current_a, dimension=_A, says=f"{what} at its least",
        why=f"{LEAST_RATIO:g} times {show(leakage_a, _A)}, which leaks on its node at the hottest corner",
        mend=f"a current of at least {show_up(LEAST_RATIO * leakage_a, _A)}, or leakage of at most "
        f"{show_down(current_a / LEAST_RATIO, _A)}", at=at,
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
    own = case.of(bias)
    if own.kind.must() == "external":
        return case.not_applicable("it is made off the chip")
    return _above_leakage(case, own.current.least(), leakage=own.leakage, at="current", what="its current")


@rule(
    "budget/timing_above_leakage",
    title="a current that makes a time stands well above what leaks on its capacitor",
    level=Level.WARNING,
    applies_to=("comparators", "output_stages"),
    proves="The least current that charges the capacitor, given or through the resistance from the least supply "
    "delivered at the threshold, is at least ten times the most that leaks there at the hottest corner.",
    facts=(
        "timing.current of comparators.* and output_stages.*, or timing.resistance and threshold with "
        "rails.*.delivered", "timing.leakage",
    ),
    mend="more current with a larger capacitor, or less leakage",
    sources=(_DROWNS,),
    example=Example(
        fails="comparators: {uv: {timing: {leakage: {max: 5 nA}}}}",
        holds="comparators: {uv: {timing: {leakage: {max: 3 nA}}}}",
    ),
)  # fmt: skip
def timing_stands_above_leakage(element: Any, case: Case) -> Judgement:
    """Compare the least charging current with ten times what leaks."""
    assert isinstance(element, Comparator | OutputStage)
    timing, facts = element.timing, case.of(element).timing
    if timing is None:
        return case.not_applicable("does not say what makes a time of it (timing)")
    if timing.count is not None or timing.period is not None:
        return case.not_applicable("its time is counted, and leakage does not change it")
    if timing.current is None and timing.resistance is not None:
        return _above_leakage(
            case, _least_charging_a(element, case), leakage=facts.leakage, at="timing.resistance",
            what="the current through its resistance, at the threshold,",
        )  # fmt: skip
    return _above_leakage(
        case, facts.current.least(), leakage=facts.leakage, at="timing.current", what="the current that times it"
    )


def _least_charging_a(element: Comparator | OutputStage, case: Case) -> float:
    """The least current through a resistance into a capacitor that has reached its threshold, in A."""
    facts = case.of(element).timing

    def charging_a() -> float:
        over_v = max(delivered_v(case, element, "least") - facts.threshold.most(), 0.0)
        ohm = facts.resistance.most()
        require_positive(r_ohm=ohm)
        return over_v / ohm

    return at_corner(case, charging_a, sure=0.0, best=math.inf)


RULES: Final[tuple[Rule, ...]] = (
    domain_stays_within_budget,
    bias_stands_above_leakage,
    timing_stands_above_leakage,
)
