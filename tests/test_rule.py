from __future__ import annotations

import pytest

from tidegate.lint.case import Case
from tidegate.lint.judgement import Judgement, Level
from tidegate.lint.rule import Example, Rule, rule
from tidegate.rules.catalogue import FAMILIES

RULES = [each for family in FAMILIES for each in family]


def test_a_rule_is_made_of_its_function_and_metadata() -> None:
    @rule(
        "supply/high_enough",
        title="the supply is high enough",
        level=Level.WARNING,
        applies_to="rails",
        proves="It is.",
        facts=["rails.*.nominal"],
        mend="raise it",
        sources=["Ohm's law"],
        example=Example(fails="a", holds="b"),
        formulas=[abs],
    )
    def high_enough(_: object, case: Case) -> Judgement:
        return case.passes("well")

    assert isinstance(high_enough, Rule)
    assert (high_enough.id, high_enough.family, high_enough.level) == ("supply/high_enough", "supply", Level.WARNING)
    assert (high_enough.facts, high_enough.sources, high_enough.formulas) == (
        ("rails.*.nominal",),
        ("Ohm's law",),
        (abs,),
    )


@pytest.mark.parametrize("each", RULES, ids=lambda each: str(each.id))
def test_every_rule_explains_itself(each: Rule) -> None:
    family, _, name = each.id.partition("/")
    assert family and name and each.id == each.id.lower() and " " not in each.id
    assert each.title and each.title[0].islower() and not each.title.endswith(".")
    assert each.proves.endswith(".")
    assert each.facts and each.mend and each.sources
    assert each.example.fails and each.example.holds and each.example.fails != each.example.holds


def test_no_two_rules_say_the_same_title() -> None:
    titles = [each.title for each in RULES]
    assert len(set(titles)) == len(titles)
