"""A rule pack of an INVENTED house: what a team adds of its own (`tidegate review --pack house_rules.py FILE`)."""

from __future__ import annotations

from typing import Final

from tidegate.lint.case import Case
from tidegate.lint.description.model.detector import Comparator
from tidegate.lint.judgement import Judgement, Level
from tidegate.lint.quantity import Dimension
from tidegate.lint.rule import Example, Rule, rule

QUICK_S: Final = 5e-6  # what the house has agreed on


@rule(
    "house/quick_detectors",
    title="every detector answers within 5 us",
    level=Level.WARNING,
    applies_to="comparators",
    proves="The greatest response delay is at most what the house has agreed on.",
    facts=("comparators.*.delay",),
    mend="more bias current, or less load on the output",
    sources=("house rule, invented for this example",),
    example=Example(
        fails="comparators: {uv: {delay: {min: 1 us, max: 8 us}}}",
        holds="comparators: {uv: {delay: {min: 0.3 us, max: 2 us}}}",
    ),
)
def detector_is_quick(comparator: Comparator, case: Case) -> Judgement:
    """Compare the greatest delay with the house's limit."""
    delay_s = case.of(comparator).delay.most()
    return case.at_most(
        need=QUICK_S,
        have=delay_s,
        dimension=Dimension.DURATION,
        says="answers after",
        mend="at most 5 us, the house's limit",
        at="delay",
    )


RULES: tuple[Rule, ...] = (detector_is_quick,)
