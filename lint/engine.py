"""Runs rules over a description: every rule on every element it applies to, then settings, waivers and order."""

from __future__ import annotations

import datetime
import math
from collections import Counter
from collections.abc import Container, Iterable, Iterator, Mapping, Sequence
from typing import Final

import msgspec

from tidegate.lint.case import Case, MissingFactsError
from tidegate.lint.description.load import Loaded
from tidegate.lint.description.model.description import Conditions, Description, Waiver
from tidegate.lint.description.place import DescriptionError, Fault, Place
from tidegate.lint.found import quoted, raised
from tidegate.lint.graph.bounded import bounded_graph
from tidegate.lint.graph.dependency import SECTIONS, Element, Graph
from tidegate.lint.judgement import Judgement, Kind, Level, difference, least_margin
from tidegate.lint.physics.domain import DomainError
from tidegate.lint.quantity import QuantityError
from tidegate.lint.rule import Rule
from tidegate.lint.settings import Settings, name_faults
from tidegate.lint.waivers import STILL_RIGHT, PlacedWaiver, Surroundings, apply_waivers, placed_waivers


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
                if rule.id in self.rules or rule.id == STILL_RIGHT.id:
                    raise ValueError(f"two rules are called {rule.id}")
                if rule.applies_to not in self._by_section:
                    raise ValueError(f"{rule.id} applies to {rule.applies_to}, which is no section of elements")
                self.rules[rule.id] = rule
                self._by_section[rule.applies_to].append(rule)
        self.rules[STILL_RIGHT.id] = STILL_RIGHT

    def for_section(self, section: str) -> Sequence[Rule]:
        """The rules that apply to the elements of a section."""
        return self._by_section[section]


class RuleFault(msgspec.Struct, frozen=True):
    """A rule that raised instead of answering, or gave no proper answer: its own fault, which fails the run."""

    rule: str
    subject: str
    error: str


class Review(msgspec.Struct, frozen=True):
    """All that the rules said about one description."""

    loaded: Loaded
    graph: Graph
    settings: Settings
    judgements: tuple[Judgement, ...]
    faults: tuple[RuleFault, ...]

    @property
    def counts(self) -> Mapping[Kind, int]:
        """How many judgements there are of each kind."""
        return Counter(judgement.kind for judgement in self.judgements)

    def place(self, judgement: Judgement) -> Place:
        """Where what a judgement is about stands."""
        return judgement.place or self.loaded.place(judgement.at)

    def findings(self, fail_at: Level, also: Iterable[str]) -> Iterator[Judgement]:
        """Failures that weigh at least so much, and judgements of other kinds that are to count, less the waived."""
        least, kinds = WEIGHT[fail_at], {Kind(kind) for kind in also}
        for judgement in self.judgements:
            failure = judgement.kind is Kind.FAIL and WEIGHT[judgement.level] >= least
            if not judgement.waiver and (failure or judgement.kind in kinds):
                yield judgement


WEIGHT: Final = {Level.NOTE: 0, Level.WARNING: 1, Level.ERROR: 2}
"""Levels by weight."""


def review(loaded: Loaded, catalogue: Catalogue, *, today: datetime.date, settings: Settings | None = None) -> Review:
    """Judge a description: one judgement for every rule and every element it applies to.

    Raises: DescriptionError: if the settings name a rule that nobody has, or a margin of the wrong dimension; if the
    graph is beyond the limits.
    """
    settings = settings or Settings()
    faults = name_faults(settings, catalogue.rules)
    if faults:
        raise DescriptionError(faults)
    loaded = _with_conditions(loaded, settings.conditions)
    graph = bounded_graph(loaded)
    judgements: list[Judgement] = []
    rule_faults: list[RuleFault] = []
    for section in SECTIONS:
        rules = [
            _InForce.under(settings, rule) for rule in catalogue.for_section(section) if not settings.leaves_out(rule)
        ]
        for element in getattr(loaded.description, section).values():
            for rule in rules:
                answer = _judge(rule, element, loaded.description, graph)
                if isinstance(answer, Judgement):
                    judgements.append(answer)
                elif isinstance(answer, RuleFault):
                    rule_faults.append(answer)
                else:
                    faults.append(answer)
    if faults:
        raise DescriptionError(faults)
    around = Surroundings(
        today=today, rules=catalogue.rules, elements=graph.elements, subsystem=loaded.description.subsystem,
        left_out={rule.id for rule in catalogue.rules.values() if settings.leaves_out(rule)},
    )  # fmt: skip
    judgements, on_waivers = apply_waivers(
        judgements, _waivers(loaded, settings), around, settings.level_of(STILL_RIGHT)
    )
    if not settings.leaves_out(STILL_RIGHT):
        judgements += on_waivers
    return Review(loaded, graph, settings, tuple(judgements), tuple(rule_faults))


def _with_conditions(loaded: Loaded, offered: Conditions | None) -> Loaded:
    """The description with the conditions of the settings where it leaves them out."""
    if offered is None:
        return loaded
    own = loaded.description.conditions or Conditions()
    fields = {
        name: getattr(own, name) if getattr(own, name) is not None else getattr(offered, name)
        for name in Conditions.__struct_fields__
    }
    description = msgspec.structs.replace(loaded.description, conditions=Conditions(**fields))
    return Loaded(description, loaded.sources)


def _waivers(loaded: Loaded, settings: Settings) -> list[PlacedWaiver]:
    own = placed_waivers(
        loaded.description.waivers,
        lambda index: f"waivers[{index}]",
        lambda index: loaded.sources.place(("waivers", index)),
    )
    elements = {element for section in SECTIONS for element in getattr(loaded.description, section)}
    return [*own, *(placed for placed in settings.waived if _meant(placed.waiver, loaded.description, elements))]


def _meant(waiver: Waiver, description: Description, elements: Container[str]) -> bool:
    """Whether a waiver from a file for several descriptions is for this one: its subsystem says so, or its element."""
    if waiver.subsystem is not None:
        return waiver.subsystem == description.subsystem
    return waiver.element in elements


class _InForce(msgspec.Struct, frozen=True):
    """A rule as the settings want it."""

    rule: Rule
    settings: Settings
    level: Level
    least_margin: tuple[str, str] | None

    @classmethod
    def under(cls, settings: Settings, rule: Rule) -> _InForce:
        """The rule under some settings."""
        return cls(rule, settings, settings.level_of(rule), settings.least_margin_of(rule))


def _judge(asked: _InForce, element: Element, description: Description, graph: Graph) -> Judgement | RuleFault | Fault:
    """What a rule says about an element, or whose fault it is that it says nothing: the rule's, or the settings'."""
    rule = asked.rule
    case = Case(subject=element, rule=rule.id, level=asked.level, description=description, graph=graph)
    try:
        answer: object = rule.judge(element, case)
    except MissingFactsError as error:
        return case.open(error.missing)
    except DomainError as error:
        if case.missing:  # a number that is not there yet may be what the formula refused
            return case.open(dict.fromkeys(case.missing))
        return case.open((), f"the numbers given lie outside the range of the formula: {error}")
    except KeyboardInterrupt:
        raise
    except BaseException as error:  # whatever a rule does wrong is its fault and hides no finding, nor ends the run
        return RuleFault(rule.id, element.id, raised(error))
    if not isinstance(answer, Judgement):
        return RuleFault(rule.id, element.id, f"answered {type(answer).__name__}, not a judgement")
    problem = _improper(answer, case)
    if problem:
        return RuleFault(rule.id, element.id, problem)
    if asked.least_margin is None or answer.kind is not Kind.PASS or answer.measure is None:
        return answer
    name, margin = asked.least_margin
    try:
        return least_margin(answer, margin)
    except QuantityError:
        dimension = difference(answer.measure.dimension).value.replace("_", " ")
        problem = f"the margin of {rule.id} is a {dimension} (found {quoted(margin)})"
        advice = f"write a {dimension}, such as {answer.measure.margin_text()}, or a share of the need, such as 2 %"
        return Fault(asked.settings.place("least_margins", name), f"least_margins.{name}", problem, advice)


def _improper(answer: Judgement, case: Case) -> str:
    """Why a judgement cannot be what the rule says about the element; empty where it can."""
    if (answer.rule, answer.subject) != (case.rule, case.subject.id):
        return f"answered for {answer.rule} on {answer.subject}"
    if answer.waiver:
        return "waived its own finding"
    if answer.measure is not None and (math.isnan(answer.measure.need) or math.isnan(answer.measure.have)):
        return "answered with a number that is none"
    return ""
