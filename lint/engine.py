"""Runs rules over a description: every rule on every element it applies to, then settings, waivers and order."""

from __future__ import annotations

import datetime
import math
from collections import Counter
from collections.abc import Container, Iterable, Iterator, Mapping, Sequence
from functools import partial
from typing import Final

import msgspec

from tidegate.lint.case import Case
from tidegate.lint.corners import Ask, judged
from tidegate.lint.description.load import Loaded
from tidegate.lint.description.model.description import Conditions, Description, Waiver
from tidegate.lint.description.place import DescriptionError, Fault, Place
from tidegate.lint.facts.reading import Reading
from tidegate.lint.found import quoted, raised
from tidegate.lint.graph.bounded import bounded_graph
from tidegate.lint.graph.dependency import SECTIONS, Element, Graph
from tidegate.lint.judgement import Judgement, Kind, Level, difference, least_margin, under
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
                for section in rule.applies_to:
                    if section not in self._by_section:
                        raise ValueError(f"{rule.id} applies to {section}, which is no section of elements")
                    self._by_section[section].append(rule)
                self.rules[rule.id] = rule
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
    rules: Mapping[str, Rule] = {}
    """Every rule that was asked, by id."""

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
    judgements = _yielded(judgements, catalogue.rules, loaded.description, graph)
    if not settings.leaves_out(STILL_RIGHT):
        judgements += on_waivers
    return Review(loaded, graph, settings, tuple(judgements), tuple(rule_faults), catalogue.rules)


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


def _yielded(
    judgements: Sequence[Judgement], rules: Mapping[str, Rule], description: Description, graph: Graph
) -> list[Judgement]:
    """The judgements, with each failure that another failure explains told under that one."""
    failed = {(one.rule, one.subject): one for one in judgements if one.kind is Kind.FAIL and not one.waiver}

    def above(judgement: Judgement) -> str:
        """The rule whose failure explains one; empty where none does."""
        for each in rules[judgement.rule].yields:
            element = graph.elements[judgement.subject]
            for subject in (judgement.subject,) if each.on is None else each.on(element, description):
                other = failed.get((each.to, subject))
                if other is not None:
                    return above(other) or other.rule
        return ""

    found = []
    for judgement in judgements:
        rule = above(judgement) if (judgement.rule, judgement.subject) in failed else ""
        found.append(judgement if not rule else under(judgement, rule))
    return found


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
    ask = asker(rule, element, description, graph, asked.level)
    opened = partial(
        _opened, Case(subject=element, rule=rule.id, level=asked.level, description=description, graph=graph)
    )
    try:
        answer = judged(ask, opened)
    except KeyboardInterrupt:
        raise
    except _RuleError as error:
        return RuleFault(rule.id, element.id, str(error))
    except BaseException as error:  # whatever a rule does wrong is its fault and hides no finding, nor ends the run
        return RuleFault(rule.id, element.id, raised(error))
    if asked.least_margin is None or answer.kind not in (Kind.PASS, Kind.OPEN) or answer.measure is None:
        return answer
    name, margin = asked.least_margin
    try:
        return least_margin(answer, margin)
    except QuantityError:
        dimension = difference(answer.measure.dimension).value.replace("_", " ")
        problem = f"the margin of {rule.id} is a {dimension} (found {quoted(margin)})"
        advice = f"write a {dimension}, such as {answer.measure.margin_text()}, or a share of the need, such as 2 %"
        return Fault(asked.settings.place("least_margins", name), f"least_margins.{name}", problem, advice)


def _opened(case: Case, missing: Sequence[str], says: str) -> Judgement:
    return case.open(missing, says)


def asker(rule: Rule, element: Element, description: Description, graph: Graph, level: Level) -> Ask:
    """A rule on an element, to be asked in one reading or another."""

    def ask(reading: Reading) -> Judgement:
        case = Case(subject=element, rule=rule.id, level=level, description=description, graph=graph, reading=reading)
        answer: object = rule.judge(element, case)
        if not isinstance(answer, Judgement):
            raise _RuleError(f"answered {type(answer).__name__}, not a judgement")
        problem = _improper(answer, case)
        if problem:
            raise _RuleError(problem)
        return answer

    return ask


class _RuleError(Exception):
    """What a rule answered is no proper answer."""


def _improper(answer: Judgement, case: Case) -> str:
    """Why a judgement cannot be what the rule says about the element; empty where it can."""
    if (answer.rule, answer.subject) != (case.rule, case.subject.id):
        return f"answered for {answer.rule} on {answer.subject}"
    if answer.waiver:
        return "waived its own finding"
    unknown = answer.measure is not None and (math.isnan(answer.measure.need) or math.isnan(answer.measure.have))
    if unknown and case.reading.exact:
        return "answered with a number that is none"
    return ""
