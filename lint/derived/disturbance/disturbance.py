"""What neighbours do to a comparator's supply or level while it should stay still, at the rail."""

from __future__ import annotations

import math
from collections.abc import Callable, Iterator, Sequence
from functools import partial
from typing import Final

import msgspec

from tidegate.lint.account import Term, plus
from tidegate.lint.case import Case
from tidegate.lint.derived.answered_once import answered_once
from tidegate.lint.derived.disturbance.disturbed_node import at_rail_v, coupled_edge, kick_v, rail_share
from tidegate.lint.derived.disturbance.doubt import holds
from tidegate.lint.derived.disturbance.input_share import input_share
from tidegate.lint.derived.disturbance.who_disturbs import Disturber, disturbers
from tidegate.lint.description.model.detector import Comparator
from tidegate.lint.description.model.reset_path import Neighbour
from tidegate.lint.facts.reading import Better, MissingFactsError, Wait
from tidegate.lint.facts.view import factors
from tidegate.lint.physics import coupling
from tidegate.lint.physics.lasting_bump import decayed_kick_v, lasting_bump_v

BUMP_FORMULAS: Final = (
    coupling.bump_peak_v, lasting_bump_v, decayed_kick_v, coupling.charge_kick_v, coupling.shared_impedance_bump_v,
)  # fmt: skip
"""The formulas by which a bump is worked out."""

_MOST_NAMED: Final = 8
"""How many comparators that kick one reference are told one by one."""


class Bump(msgspec.Struct, frozen=True):
    """A disturbance that one element leaves on the level of another, in V at the rail that the victim watches."""

    peak_v: float
    seen_v: float
    """What the victim's filter lets it see: the highest level above which it can stay for as long as that takes."""


@answered_once
def bump(case: Case, disturber: Disturber) -> Bump:
    """The bump of a disturber; none where it is only said that it might disturb, and that would harm.

    Raises:
        MissingFactsError: where it is not said onto which reference a charge goes.
        DomainError: where a formula refuses its numbers.
    """
    if not holds(case, disturber.doubt):
        return Bump(0.0, 0.0)
    victim = case.graph.elements[disturber.victim]
    assert isinstance(victim, Comparator)
    lasts_s = ignored_s(case, victim)
    if disturber.pair is None:
        aggressor = case.graph.elements[disturber.aggressor]
        assert isinstance(aggressor, Comparator)
        charge_c, lacks = case.of(aggressor).kick.most(), victim.fact("reference")
        return _kick(case, victim, disturber.reference, charge_c, lasts_s, lacks=lacks)
    return _pair_bump(case, disturber.pair, victim, lasts_s)


def own_kick(case: Case, comparator: Comparator) -> Bump:
    """The bump that a comparator's decision leaves on the reference that its own level is taken from.

    Raises: DomainError: where a formula refuses its numbers.
    """
    charge_c, lasts_s = case.of(comparator).kick.most(), ignored_s(case, comparator)
    return _kick(case, comparator, comparator.reference, charge_c, lasts_s, lacks=comparator.fact("reference"))


def _kick(
    case: Case, victim: Comparator, reference: str | None, charge_c: float, lasts_s: float, *, lacks: str
) -> Bump:
    """What a charge on a reference does to the level of a comparator that takes it; ``lacks`` says which it would."""
    if charge_c == 0.0:
        return Bump(0.0, 0.0)
    if reference is None:
        raise MissingFactsError([lacks])
    node, share = case.description.references[reference], input_share(case, victim)
    peak_v, seen_v = (kick_v(case, node, charge_c=charge_c, lasts_s=time_s) for time_s in (0.0, lasts_s))
    return Bump(at_rail_v(peak_v, share), at_rail_v(seen_v, share))


def _pair_bump(case: Case, pair: Neighbour, victim: Comparator, lasts_s: float) -> Bump:
    """The bump of a described pair of neighbours on one of the two."""
    facts = case.of(pair)
    if pair.kind == "shared_reference":
        return _kick(case, victim, pair.reference, facts.charge.most(), lasts_s, lacks=facts.reference.path)
    share = rail_share(case, facts, victim)
    if pair.kind == "capacitance":
        edge = coupled_edge(case, pair, lasts_s)
        return Bump(at_rail_v(edge.peak_v, share), at_rail_v(edge.lasting_v(lasts_s), share))
    step_a, impedance_ohm = factors(facts.current_step, facts.impedance)
    step_v = at_rail_v(coupling.shared_impedance_bump_v(step_a=step_a, impedance_ohm=impedance_ohm), share)
    return Bump(step_v, step_v)  # a step of current that stays: no filter waits it out


def size_of(disturber: Disturber) -> str:
    """The path of the fact that the size of a bump rests on most."""
    if disturber.pair is None:
        return f"comparators.{disturber.aggressor}.kick"
    return disturber.pair.fact(_SIZES[disturber.pair.kind])


_SIZES: Final = {
    "capacitance": "capacitance", "shared_reference": "charge", "supply_impedance": "impedance",
    "shared_return": "impedance",
}  # fmt: skip


def neighbour_terms(case: Case, comparator: Comparator) -> list[Term]:
    """What a comparator sees of every neighbour, as terms in V at its rail: they are no more than all of it at once."""
    found = disturbers(case.graph)
    described = [each for each in found.of(comparator.id) if each.pair is not None]
    sharers = found.sharers(comparator.id)
    terms = [seen_term(case, each) for each in described]
    if len(sharers) <= _MOST_NAMED:
        return [*terms, *(seen_term(case, each) for each in sharers)]
    name = f"{len(sharers)} others through {sharers[0].via}"
    return [*terms, plus(name, partial(_together_v, case, sharers), of=f"comparators.{comparator.id}.reference")]


def seen_term(case: Case, disturber: Disturber) -> Term:
    """What a comparator sees of one neighbour, as a term in V at its rail."""
    return plus(disturber.name, lambda: bump(case, disturber).seen_v, of=size_of(disturber), floor=0.0)


def _together_v(case: Case, each: Sequence[Disturber]) -> float:
    return math.fsum(bump(case, disturber).seen_v for disturber in each)


def unsaid_neighbours(case: Case, comparator: Comparator) -> Iterator[Term]:
    """What neighbours that are not described may add: nothing is known of it, unless it is said that there are none."""
    if "neighbours" in case.description.complete or not disturbers(case.graph).may_have_more(comparator.id):
        return
    unsaid: Callable[[], float] = partial(case.reading.end, Wait("neighbours", 0.0, math.inf, Better.LESS))
    yield plus("neighbours not described", unsaid, of="neighbours")


def ignored_s(case: Case, comparator: Comparator) -> float:
    """For how long a crossing may last and is surely not seen, in s: what the filter keeps off; 0 s without one."""
    return case.of(comparator).filter.least()
