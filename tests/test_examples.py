"""The examples that come with the tool: one keeps every rule, one breaks every rule, one is yet to be filled in."""

from __future__ import annotations

import datetime
import math
from collections.abc import Mapping
from functools import cache
from pathlib import Path
from typing import Final

import pytest
import yaml

from tidegate.lint.description.load import load
from tidegate.lint.engine import Catalogue, Review, review
from tidegate.lint.judgement import Kind
from tidegate.rules.catalogue import FAMILIES

EXAMPLES: Final = Path(__file__).parents[1] / "examples"
TODAY: Final = datetime.date(2026, 1, 1)
FINDINGS: Final = (Kind.FAIL, Kind.REVIEW)


@cache
def reviewed(name: str) -> Review:
    result = review(load(EXAMPLES / name, shown=name), Catalogue(FAMILIES), today=TODAY)
    assert result.faults == ()
    return result


@cache
def findings(name: str) -> Mapping[str, list[str]]:
    """The elements on which each rule finds something; what is waived included."""
    found: dict[str, list[str]] = {rule: [] for rule in Catalogue(FAMILIES).rules}
    for judgement in reviewed(name).judgements:
        if judgement.kind in FINDINGS:
            found[judgement.rule].append(judgement.subject)
    return found


@pytest.mark.parametrize("rule", Catalogue(FAMILIES).rules)
def test_every_rule_finds_something_in_the_faulty_example(rule: str) -> None:
    assert findings("faulty.yaml")[rule]


def test_nothing_of_the_faulty_example_is_left_open() -> None:
    assert [said.rule for said in reviewed("faulty.yaml").judgements if said.kind is Kind.OPEN] == []


def test_faults_are_marked_where_they_are_made() -> None:
    """A reader who looks for a fault finds a comment; there are fewer than findings, since one leads to others."""
    lines = (EXAMPLES / "faulty.yaml").read_text("utf-8").splitlines()
    assert max(map(len, lines)) <= 120
    marks = sum("# fault: " in line or "# faults: " in line for line in lines)
    count = sum(map(len, findings("faulty.yaml").values()))
    assert 80 <= marks < count


def test_the_sound_example_keeps_every_rule() -> None:
    found = {rule: elements for rule, elements in findings("sound.yaml").items() if elements}
    assert found == {"bypass/over_voltage_caution": ["skip_resets"]}
    (caution,) = (said for said in reviewed("sound.yaml").judgements if said.kind in FINDINGS)
    assert caution.waiver
    assert [said.rule for said in reviewed("sound.yaml").judgements if said.kind is Kind.OPEN] == []


def test_the_starter_is_readable_and_all_of_it_is_open() -> None:
    """Nothing is known of it, so nothing is wrong with it; and the rules that need no more than its skeleton pass."""
    kinds = {said.kind for said in reviewed("starter.yaml").judgements}
    assert Kind.OPEN in kinds and not kinds & {*FINDINGS}
    measures = [said.measure for said in reviewed("starter.yaml").judgements if said.measure is not None]
    assert not any(math.isfinite(measure.sure_margin) for measure in measures)


@pytest.mark.parametrize("name", sorted(file.name for file in EXAMPLES.glob("*.yaml")))
def test_what_is_invented_says_so(name: str) -> None:
    text = (EXAMPLES / name).read_text("utf-8")
    data = yaml.safe_load(text)
    if "subsystem" in data and name != "starter.yaml":
        assert data["invented"] is True
    if name != "starter.yaml":
        assert "INVENTED" in text.split("\n\n")[0]
