"""Runs rules over a description: every rule on every element it applies to, then waivers and order."""

from __future__ import annotations

import datetime
from collections import Counter
from collections.abc import Iterable, Iterator, Mapping, Sequence
from typing import Final

import msgspec

from tidegate.lint.case import Case, MissingFactsError
from tidegate.lint.description.load import Loaded
from tidegate.lint.graph.dependency import SECTIONS, Element, Graph, build
from tidegate.lint.judgement import Judgement, Kind, Level
from tidegate.lint.physics.domain import DomainError
from tidegate.lint.rule import Rule
from tidegate.lint.waivers import waived


class Catalogue:
    """The rules in force, by id and by the section they apply to."""

    def __init__(self, families: Iterable[Sequence[Rule]]) -> None:
        """Join the families.

        Raises: ValueError: if an id is given twice, or a rule applies to no section of elements.
        """
        self.rules: dict[str, Rule] = {}
        self._by_section: dict[str, list[Rule]] = {section: [] for section in SECTIONS}
        for family in families:
            for rule in family:
                if rule.id in self.rules:
                    raise ValueError(f"two rules are called {rule.id}")
                if rule.applies_to not in self._by_section:
                    raise ValueError(f"{rule.id} applies to {rule.applies_to}, which is no section of elements")
                self.rules[rule.id] = rule
                self._by_section[rule.applies_to].append(rule)

    def for_section(self, section: str) -> Sequence[Rule]:
        """The rules that apply to the elements of a section."""
        return self._by_section[section]


class RuleFault(msgspec.Struct, frozen=True):
    """A rule that raised instead of answering: its own fault, which fails the run."""

    rule: str
    subject: str
    error: str


class Review(msgspec.Struct, frozen=True):
    """All that the rules said about one description."""

    loaded: Loaded
    graph: Graph
    judgements: tuple[Judgement, ...]
    faults: tuple[RuleFault, ...]

    @property
    def counts(self) -> Mapping[Kind, int]:
        """How many judgements there are of each kind."""
        return Counter(judgement.kind for judgement in self.judgements)

    def findings(self) -> Iterator[Judgement]:
        """Judgements that somebody must act on."""
        return (judgement for judgement in self.judgements if judgement.is_finding)

    def reaches(self, level: Level) -> bool:
        """Whether a finding weighs as much as a level, or more."""
        return any(WEIGHT[judgement.level] >= WEIGHT[level] for judgement in self.findings())


WEIGHT: Final = {Level.NOTE: 0, Level.WARNING: 1, Level.ERROR: 2}
"""Levels by weight."""


def review(loaded: Loaded, catalogue: Catalogue, *, today: datetime.date) -> Review:
    """Judge a description: one judgement for every rule and every element it applies to."""
    graph = build(loaded.description)
    judgements: list[Judgement] = []
    faults: list[RuleFault] = []
    for section in SECTIONS:
        rules = catalogue.for_section(section)
        for element in getattr(loaded.description, section).values():
            for rule in rules:
                answer = _judge(rule, element, loaded, graph)
                if isinstance(answer, Judgement):
                    judgements.append(answer)
                else:
                    faults.append(answer)
    judgements = waived(judgements, loaded.description.waivers, today=today)
    return Review(loaded, graph, tuple(judgements), tuple(faults))


def _judge(rule: Rule, element: Element, loaded: Loaded, graph: Graph) -> Judgement | RuleFault:
    case = Case(subject=element, rule=rule.id, level=rule.level, description=loaded.description, graph=graph)
    try:
        answer: object = rule.judge(element, case)
    except MissingFactsError as error:
        return case.open(error.missing)
    except DomainError as error:
        return case.open((), f"the numbers given lie outside the range of the formula: {error}")
    except Exception as error:  # whatever a rule does wrong is reported as its fault, and hides no finding
        return RuleFault(rule.id, element.id, f"{type(error).__name__}: {error}")
    if not isinstance(answer, Judgement):
        return RuleFault(rule.id, element.id, f"answered {type(answer).__name__}, not a judgement")
    return answer
