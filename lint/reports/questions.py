"""What to find out next: the missing facts as questions, those first that settle most and gravest.

What belongs together is one question, as a data sheet or a colleague answers it: ripple, load step and source impedance
of a rail.  A question that several elements of a section share is asked once for all of them.
"""

from __future__ import annotations

import math
from collections.abc import Iterable, Mapping, Sequence
from typing import Final

import msgspec

from tidegate.lint.derived.borne import BreakEven
from tidegate.lint.engine import Review
from tidegate.lint.facts.names import Named, listed, named, names_of
from tidegate.lint.judgement import Judgement, Kind
from tidegate.lint.must_keep import MustKeep, must_keep
from tidegate.lint.reports.gravity import gravest_first, weight

MOST_QUESTIONS: Final = 5
"""How many questions a report asks; of the rest it tells how many there are."""

_MOST_OWNERS: Final = 6

TOPICS: Final[Mapping[str, tuple[frozenset[str], ...]]] = {
    "conditions": (frozenset({"service_life", "power_cycles", "junction_temperature"}),),
    "rails": (
        frozenset({"ripple", "load_step", "source_impedance"}),
        frozenset({"collapse", "overshoot", "hold_up"}),
        frozenset({"rise", "fall", "dip", "residual", "off_time"}),
        frozenset({"nominal", "delivered", "guaranteed", "damage", "made_by"}),
        frozenset({"after", "delay"}),
    ),
    "domains": (frozenset({"rail", "kind", "switched_by"}),),
    "references": (
        frozenset({"works_from", "works_from_slope", "settling", "self_biased", "start_up"}),
        frozenset({"source_resistance", "decoupling"}),
        frozenset({"domain", "bias", "leans_on", "gated_by"}),
    ),
    "biases": (
        frozenset({"works_from", "settling", "start_up"}), frozenset({"domain", "source", "leans_on", "gated_by"}),
    ),
    "comparators": (
        frozenset({"delay", "filter", "sampling", "timing"}),
        frozenset({"trip", "codes", "ships_with", "tracked", "crossover"}),
        frozenset({"hysteresis.amount"}),
        frozenset({"errors", "divider"}),
        frozenset({"domain", "bias", "reference", "armed_by", "gated_by"}),
        frozenset({"works_from", "works_to", "undecided"}),
        frozenset({"output", "pulse", "rearms_below"}),
        frozenset({"kick", "switching_current"}),
    ),
    "output_stages": (
        frozenset({"driven_by", "domain", "kind", "inverting", "combine", "combined_against"}),
        frozenset({"hold", "works_from", "power_up"}),
        frozenset({"nmos", "pmos", "drive", "crowbar_peak", "input_edge", "threshold", "dwell", "edges_per_cycle"}),
        frozenset({"delay", "release_delay", "discharge", "timing"}),
        frozenset({"output"}), frozenset({"load", "leakage"}),
    ),
    "resets": (
        frozenset({"driven_by", "guards", "active", "domain", "combine", "combined_against"}), frozenset({"receivers"}),
    ),
    "loads": (
        frozenset({"ready", "start", "clocked", "synchronised"}), frozenset({"domain", "references", "leans_on"}),
    ),
    "bypasses": (
        frozenset({"overrides", "forces", "controlled_by", "domain", "leans_on"}),
        frozenset({"default", "hold", "reset_by", "locked_outside_test", "readable"}),
    ),
    "neighbours": (
        frozenset({"capacitance", "step", "edge", "node", "mutual", "at"}), frozenset({"impedance", "current_step"}),
    ),
}  # fmt: skip
"""By section, the facts that are asked together; every other fact is asked by itself."""


class Limit(msgspec.Struct, frozen=True):
    """The value that a fact must keep, and the judgement that asks most of it."""

    kept: BreakEven
    judgement: Judgement


class Question(msgspec.Struct, frozen=True):
    """Facts of one or more elements that are asked together."""

    section: str
    owners: tuple[str, ...]
    facts: tuple[str, ...]
    """Their paths."""
    settles: tuple[Judgement, ...]
    """The open judgements that wait for nothing else, the gravest and nearest first."""
    helps: tuple[Judgement, ...]
    """Those that wait for something else too."""
    limits: tuple[Limit, ...]
    """The tightest value of each fact that has one by itself."""
    weight: float

    @property
    def what(self) -> str:
        """What is asked, in words: ``ripple, load step and source impedance of vdd``."""
        names = listed(names_of(self.facts))
        owners = some([owner for owner in self.owners if owner])
        if not names and not owners:
            return f"{self.section.replace('_', ' ')}, of which nothing is said"
        return f"{names} of {owners}" if owners and names else names or owners


def some(owners: Sequence[str]) -> str:
    """Elements as a sentence lists them, the first of them where there are many."""
    more = len(owners) - _MOST_OWNERS
    return f"{', '.join(owners[:_MOST_OWNERS])} and {more} more" if more > 1 else listed(owners)


class Rest(msgspec.Struct, frozen=True):
    """What else is missing in a section: how many facts, of which elements, and how many judgements wait for them."""

    section: str
    facts: int
    owners: tuple[str, ...]
    waiting: int
    nothing_said: bool
    """Whether the section as a whole is not described."""


def questions(review: Review) -> list[Question]:
    """Everything that is missing for open judgements, as questions, the one that settles most first."""
    waiting = [one for one in review.judgements if one.kind is Kind.OPEN and one.missing]
    asked = _asked(waiting)
    groups: dict[str, list[str]] = {}
    for fact, group in asked.items():
        groups.setdefault(group, []).append(fact)
    by_group: dict[str, list[Judgement]] = {group: [] for group in groups}
    shares: dict[tuple[str, str], int] = {}
    for judgement in waiting:
        its = dict.fromkeys(asked[fact] for fact in judgement.missing)
        shares[judgement.rule, judgement.subject] = len(its)
        for group in its:
            by_group[group].append(judgement)
    kept = {(one.rule, one.subject): must_keep(review, one) for one in waiting}
    found = [_question(facts, gravest_first(by_group[group]), shares, kept) for group, facts in groups.items()]
    return sorted(found, key=lambda question: -question.weight)


def rest(left: Sequence[Question]) -> list[Rest]:
    """What is left of the questions, section by section, in the order in which the supply meets them."""
    by_section: dict[str, list[Question]] = {}
    for question in left:
        by_section.setdefault(question.section, []).append(question)
    found = []
    for section, several in by_section.items():
        waiting = {(j.rule, j.subject) for question in several for j in (*question.settles, *question.helps)}
        facts = [fact for question in several for fact in question.facts]
        owners = dict.fromkeys(owner for question in several for owner in question.owners if owner)
        nothing = any(not named(fact).owner and not named(fact).steps for fact in facts)
        found.append(Rest(section, len(facts), tuple(owners), len(waiting), nothing))
    order = list(TOPICS)
    return sorted(found, key=lambda one: order.index(one.section) if one.section in order else len(order))


def _asked(waiting: Sequence[Judgement]) -> dict[str, str]:
    """The question to which each missing fact belongs, by a key that questions of several elements share."""
    facts = dict.fromkeys(fact for judgement in waiting for fact in judgement.missing)
    by_topic: dict[tuple[str, str, str], list[str]] = {}
    for fact in facts:
        name = named(fact)
        by_topic.setdefault((name.section, name.owner, _topic(name)), []).append(fact)
    found: dict[str, str] = {}
    for (section, owner, topic), several in by_topic.items():
        # Elements that lack the very same facts are asked about together.
        parts = sorted(".".join((*named(fact).steps, named(fact).end)) for fact in several)
        key = "\0".join((section, topic, *parts)) if owner and topic else "\0".join((section, owner, topic))
        found |= dict.fromkeys(several, key)
    return found


def _topic(name: Named) -> str:
    """The first of the facts with which a fact is asked, or the fact itself."""
    if not name.section:
        return name.owner
    part = ".".join(name.steps[:2])
    together = next((topic for topic in TOPICS.get(name.section, ()) if topic & {name.head, part}), None)
    return min(together) if together else name.head


def _question(
    facts: Sequence[str], judgements: Sequence[Judgement], shares: Mapping[tuple[str, str], int],
    kept: Mapping[tuple[str, str], MustKeep | None],
) -> Question:  # fmt: skip
    first = named(facts[0])
    its = set(facts)
    settles = [one for one in judgements if its.issuperset(one.missing)]
    settled = {id(one) for one in settles}
    return Question(
        section=first.section,
        owners=tuple(dict.fromkeys(named(fact).owner for fact in facts)),
        facts=_in_order(facts),
        settles=tuple(settles),
        helps=tuple(one for one in judgements if id(one) not in settled),
        limits=tuple(_limits(its, judgements, kept)),
        weight=math.fsum(weight(one) / shares[one.rule, one.subject] for one in judgements),
    )


def _in_order(facts: Sequence[str]) -> tuple[str, ...]:
    """The facts of the first element first, each element's in the order in which they were met."""
    owners = {owner: number for number, owner in enumerate(dict.fromkeys(named(fact).owner for fact in facts))}
    heads = {head: number for number, head in enumerate(dict.fromkeys(named(fact).head for fact in facts))}
    return tuple(sorted(facts, key=lambda fact: (owners[named(fact).owner], heads[named(fact).head])))


def _limits(
    facts: set[str], judgements: Sequence[Judgement], kept: Mapping[tuple[str, str], MustKeep | None]
) -> Iterable[Limit]:
    """The tightest value of each fact, with the judgement that asks for it."""
    tightest: dict[tuple[str, bool], Limit] = {}
    for judgement in judgements:
        its = kept[judgement.rule, judgement.subject]
        for each in () if its is None else its.facts:
            if each.fact not in facts:
                continue
            key, sign = (each.fact, each.at_most), 1.0 if each.at_most else -1.0
            before = tightest.get(key)
            if before is None or sign * each.value < sign * before.kept.value:
                tightest[key] = Limit(each, judgement)
    return tightest.values()
