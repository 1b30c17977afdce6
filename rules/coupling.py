"""Coupling: no neighbour moves a level further than its hysteresis keeps it: alone, together, in a chain, in a ring."""

from __future__ import annotations

import math
from collections.abc import Iterable
from functools import partial
from typing import Final

from tidegate.lint.case import Case
from tidegate.lint.derived.disturbance.coupling_map import Push, coupling_map
from tidegate.lint.derived.disturbance.disturbance import disturbers, own_kick, pair_bump, sharers
from tidegate.lint.derived.disturbance.quieting import quieter_pair, quieter_reference
from tidegate.lint.derived.disturbance.seen_bump import SeenBump, seen_bumps
from tidegate.lint.derived.disturbance.toggle_chain import chain_on, comes_round, joined, two_pushes
from tidegate.lint.derived.levels.trip_levels import has_no_hysteresis, hysteresis_window
from tidegate.lint.derived.safe_rounding import show_down, show_up
from tidegate.lint.derived.supply.rail_of import rail_of
from tidegate.lint.description.model.detector import Comparator
from tidegate.lint.description.model.reset_path import Neighbour
from tidegate.lint.judgement import Judgement, Level, Measure, Relation
from tidegate.lint.physics import coupling, lasting_bump
from tidegate.lint.physics.domain import DomainError
from tidegate.lint.quantity import Dimension, show
from tidegate.lint.rule import Example, Rule, rule

_V: Final = Dimension.VOLTAGE
_NOTHING_KEPT: Final = "its level keeps no distance to hold a bump against (the hysteresis rules say so)"
_NODE: Final = "solution of the node equation (Cc + Cg) dv/dt = Cc dVs/dt - v/R (derived)"
_CHARGE: Final = "definition of capacitance: a charge Q thrown onto C moves it by Q/C"
_SUM: Final = "triangle inequality: bumps at once move a level by no more than the sum of their sizes"
_HYSTERESIS: Final = "comparators.*.hysteresis.amount, or both trip levels"
_KICK_FACTS: Final = (
    "comparators.*.kick", "references.*.decoupling", "references.*.source_resistance, behind a filter",
    "comparators.*.divider.ratio", "comparators.*.filter", _HYSTERESIS,
)  # fmt: skip


@rule(
    "coupling/bump",
    title="no neighbour moves the level of another by more than its hysteresis",
    level=Level.ERROR,
    applies_to="neighbours",
    proves="The bump that one of the two leaves on the other, in the worst corner and referred to the rail, is at most "
    "the least hysteresis. Where the disturbed comparator has a filter, the bump counts with the highest level above "
    "which it can stay for as long as the filter surely ignores, whatever the edge (no slower than stated, where its "
    "greatest duration is). A mutual pair is judged both ways, and the worse is told.",
    facts=(
        "neighbours.*.capacitance, step, edge, node and at; or charge and reference; or impedance, current_step and at",
        "references.*.decoupling", "references.*.source_resistance, behind a filter", "comparators.*.divider.ratio",
        "comparators.*.filter", _HYSTERESIS,
    ),
    mend="more capacitance on what is disturbed, less coupling, or more hysteresis",
    sources=(_NODE, _CHARGE, "Ohm's law, for a shared supply or return"),
    example=Example(
        fails="neighbours: {uv_beside_ov: {capacitance: {max: 4.2 fF}}}",
        holds="neighbours: {uv_beside_ov: {capacitance: {max: 0.8 fF}}}",
    ),
    formulas=(
        coupling.bump_peak_v, lasting_bump.lasting_bump_v, lasting_bump.decayed_kick_v, coupling.charge_kick_v,
        coupling.shared_impedance_bump_v, coupling.decoupling_for_bump_f, coupling.decoupling_for_charge_f,
        coupling.settling_time_s,
    ),
)  # fmt: skip
def bump_is_kept(pair: Neighbour, case: Case) -> Judgement:
    """Compare the worse of the two directions with what the victim's level keeps."""
    comparators = case.description.comparators
    ways = [(comparators[pair.victim], pair.aggressor)]
    if pair.mutual and pair.aggressor in comparators:
        ways.append((comparators[pair.aggressor], pair.victim))
    asks = [
        partial(seen_bumps, case, victim, [partial(pair_bump, case, pair, victim, aggressor)])
        for victim, aggressor in ways
        if not has_no_hysteresis(victim)
    ]
    seen = [way for ways_seen in case.gather_all(asks) for way in ways_seen if way.kept_v > 0.0]
    if not seen:
        return case.not_applicable(_NOTHING_KEPT)
    worst, *others = sorted(seen, key=lambda way: way.spare_v)
    also = "".join(f"; the other way round {show(way.seen_v, _V)} of {show(way.kept_v, _V)}" for way in others)
    loud = [(way.victim, way.kept_v) for way in seen if not way.is_kept]
    return case.at_most(
        need=worst.kept_v,
        have=worst.seen_v,
        dimension=_V,
        says=f"{worst.bump.aggressor} moves the level of {worst.victim.id} by",
        why=worst.text() + also,
        mend=quieter_pair(case, pair, loud) if loud else "",
        at=worst.bump.fact.rpartition(".")[2],
        path=worst.bump.path,
    )


@rule(
    "coupling/shared_reference",
    title="no other comparator on the same reference moves the level by more than its hysteresis",
    level=Level.ERROR,
    applies_to="comparators",
    proves="The largest kick that another comparator leaves on the reference, on the least decoupling and referred to "
    "the rail, is at most the least hysteresis; behind a filter, what is left of it when the filter would see it. A "
    "described pair that shares the reference is judged by coupling/bump instead.",
    facts=_KICK_FACTS,
    mend="more decoupling on the reference, less charge, or a reference of its own",
    sources=(_CHARGE,),
    example=Example(fails="comparators: {uv: {kick: 145 fC}}", holds="comparators: {uv: {kick: 4 fC}}"),
    formulas=(
        coupling.charge_kick_v, lasting_bump.decayed_kick_v, coupling.decoupling_for_charge_f, coupling.settling_time_s,
    ),
)  # fmt: skip
def shared_reference_stays(comparator: Comparator, case: Case) -> Judgement:
    """Compare the largest kick of another comparator with what the level keeps."""
    if comparator.reference is None:
        return case.not_applicable("it takes no reference")
    others = sharers(case, comparator)
    if not others:
        return case.not_applicable(f"no other comparator kicks {comparator.reference}")
    if has_no_hysteresis(comparator):
        return case.not_applicable(_NOTHING_KEPT)
    seen = seen_bumps(case, comparator, [other.bump for other in others])
    worst = max(seen, key=lambda each: each.seen_v)
    return _kick_judged(case, worst, f"{worst.bump.aggressor} kicks {comparator.reference}, which moves its level by")


def _kick_judged(case: Case, seen: SeenBump, says: str) -> Judgement:
    if seen.kept_v <= 0.0:
        return case.not_applicable(_NOTHING_KEPT)
    reference = case.description.references[seen.victim.reference or ""]
    kicking = case.of(case.description.comparators[seen.bump.aggressor])
    charge_c, decoupling_f = kicking.most("kick"), case.of(reference).least("decoupling")
    onto = f"{show(charge_c, Dimension.CHARGE)} onto {show(decoupling_f, Dimension.CAPACITANCE)}"
    loud = not seen.is_kept
    return case.at_most(
        need=seen.kept_v,
        have=seen.seen_v,
        dimension=_V,
        says=says,
        why=f"{onto}: {seen.text()}",
        mend=quieter_reference(case, reference, charge_c, [(seen.victim, seen.kept_v)]) if loud else "",
        at="reference",
        path=seen.bump.path,
    )


@rule(
    "coupling/own_kick",
    title="its own decision does not kick its level back",
    level=Level.ERROR,
    applies_to="comparators",
    proves="The charge that its own decision, the switching of its own level included, throws onto the reference that "
    "the level is taken from moves it by at most the least hysteresis; behind a filter, what is left of the kick when "
    "the filter would see it.",
    facts=_KICK_FACTS,
    mend="more decoupling on the reference, less charge, or more hysteresis",
    sources=(_CHARGE,),
    example=Example(fails="comparators: {ov: {kick: 145 fC}}", holds="comparators: {ov: {kick: 4 fC}}"),
    formulas=(
        coupling.charge_kick_v, lasting_bump.decayed_kick_v, coupling.decoupling_for_charge_f, coupling.settling_time_s,
    ),
)  # fmt: skip
def own_kick_is_kept(comparator: Comparator, case: Case) -> Judgement:
    """Compare a comparator's kick on its own reference with what its level keeps."""
    if comparator.reference is None:
        return case.not_applicable("it takes no reference")
    if has_no_hysteresis(comparator):
        return case.not_applicable(_NOTHING_KEPT)
    (seen,) = seen_bumps(case, comparator, [partial(own_kick, case, comparator)])
    return _kick_judged(case, seen, f"its own decision kicks {comparator.reference}, which moves its level by")


@rule(
    "coupling/together",
    title="all neighbours at once do not move the level by more than its hysteresis",
    level=Level.WARNING,
    applies_to="comparators",
    proves="What a comparator sees of every described neighbour and of every other comparator on its reference, added "
    "up, is at most the least hysteresis. One that is too much alone is left to coupling/bump and to "
    "coupling/shared_reference.",
    facts=("the facts of coupling/bump and of coupling/shared_reference", _HYSTERESIS),
    mend="less of the largest, or more hysteresis",
    sources=(_SUM,),
    example=Example(
        fails="{comparators: {ov: {kick: 120 fC}}, neighbours: {uv_beside_ov: {capacitance: {max: 2.2 fF}}}}",
        holds="{comparators: {ov: {kick: 4 fC}}, neighbours: {uv_beside_ov: {capacitance: {max: 0.8 fF}}}}",
    ),
)
def neighbours_together_are_kept(comparator: Comparator, case: Case) -> Judgement:
    """Compare the sum of all bumps with what the level keeps."""
    sources = disturbers(case, comparator)
    if len(sources) < 2:
        return case.not_applicable(f"{'one neighbour' if sources else 'no neighbour'} disturbs it")
    if has_no_hysteresis(comparator):
        return case.not_applicable(_NOTHING_KEPT)
    seen = seen_bumps(case, comparator, [source.bump for source in sources])
    seen.sort(key=lambda each: -each.seen_v)
    largest, kept_v = seen[0], seen[0].kept_v
    if kept_v <= 0.0:
        return case.not_applicable(_NOTHING_KEPT)
    if not largest.is_kept:
        judge = "bump" if largest.bump.via in case.description.neighbours else "shared_reference"
        return case.not_applicable(f"{largest.bump.aggressor} alone is too much for it (coupling/{judge} says so)")
    total_v = math.fsum(each.seen_v for each in seen)
    parts = [f"{show(each.seen_v, _V)} {each.bump.aggressor} through {each.bump.via}" for each in seen if each.seen_v]
    return case.at_most(
        need=kept_v,
        have=total_v,
        dimension=_V,
        says=f"its {len(seen)} neighbours together move its level by",
        why=" + ".join(parts) or "none of them moves it",
        mend=f"less of the largest, or at least {show_up(total_v, _V)} of hysteresis; now {show(kept_v, _V)}",
        at="hysteresis",
    )


@rule(
    "coupling/chain",
    title="no decision toggles a comparator that toggles another",
    level=Level.WARNING,
    applies_to="comparators",
    proves="A bump above the least hysteresis of its victim toggles it; the victim, and the stages it drives, then "
    "disturb others. No chain of two toggles or more begins at the comparator, or at what is no comparator and toggles "
    "it. A chain is told where it begins; one that comes back to where it began is left to coupling/ring.",
    facts=("the facts of coupling/bump and of coupling/shared_reference, for every comparator along the chain",),
    mend="keep one of the bumps below the hysteresis of its victim",
    sources=("a walk along the bumps that exceed the hysteresis of their victims (derived)",),
    example=Example(
        fails="{comparators: {uv: {kick: 145 fC}}, neighbours: {ov_beside_core: {kind: capacitance, aggressor: ov, "
        "victim: uv_core, at: input, capacitance: 5 fF, step: 1.89 V, edge: {min: 1 ns}, "
        "node: {resistance: 1.4 Mohm, capacitance: {min: 250 fF}}}}}",
        holds="comparators: {uv: {kick: 4 fC}}",
    ),
)
def toggles_end_at_once(comparator: Comparator, case: Case) -> Judgement:
    """Follow the toggles that begin at a comparator; fail where one of them toggles somebody else."""
    pushes, name, comparators = coupling_map(case), comparator.id, case.description.comparators
    if not pushes.out_of(name):
        return case.not_applicable("its decision moves nobody's level")
    if comes_round(pushes, name):
        return case.not_applicable("what it toggles toggles it back (coupling/ring judges it)")
    before = next((push for push in pushes.onto(name) if push.toggles and push.by in comparators), None)
    if before is not None:
        return case.not_applicable(f"{before.by} toggles it: a chain is judged where it begins")
    outside = frozenset(push.by for push in pushes.onto(name) if push.by not in comparators)
    pairs = list(two_pushes(pushes, name, outside))
    sure = next((pair for pair in pairs if all(push.toggles for push in pair)), None)
    if sure is None and pairs:
        return _unknown(case, (push for pair in pairs for push in pair))
    if sure is None:
        known = [push for push in pushes.out_of(name) if push.known]
        why = _push_text(max(known, key=lambda push: push.ratio)) if known else ""
        return case.passes("no chain of toggles begins at it", why=why)
    chain = chain_on(pushes, *sure)
    first = chain[0]
    toggled = ", which toggles ".join(push.victim for push in chain)
    return case.fails(
        f"{'its decision' if first.by == name else first.by} toggles {toggled}",
        why="; ".join(_push_text(push) for push in chain),
        mend=f"keep what {first.by} leaves on {first.victim} at or below {show_down(first.kept_v, _V)}",
        path=joined(chain),
    )


def _push_text(push: Push) -> str:
    whom = "itself" if push.by == push.victim else push.victim
    return f"{push.by} moves {whom} by {show(push.bump_v, _V)} of {show(push.kept_v, _V)} kept"


def _unknown(case: Case, pushes: Iterable[Push]) -> Judgement:
    """Open, for want of the facts of these pushes."""
    doubtful = [push for push in pushes if not push.known]
    missing = dict.fromkeys(fact for push in doubtful for fact in push.missing)
    if not missing:
        raise DomainError(doubtful[0].refused)
    return case.open(missing)


@rule(
    "coupling/ring",
    title="no ring of neighbours can keep itself toggling",
    level=Level.ERROR,
    applies_to="comparators",
    proves="Round every closed way on which comparators, and the stages they drive, disturb one another, the bumps "
    "over the least hysteresis of their victims multiply to at most 1. Rings that hang together are judged once, at "
    "their first comparator in the order of the description.",
    facts=("the facts of coupling/bump and of coupling/shared_reference, for every comparator in the ring",),
    mend="less of the strongest bump in the ring, or more hysteresis where it arrives",
    sources=(
        "Dasdan (2004), ACM Trans. Des. Autom. Electron. Syst. 9(4): policy iteration for the cycle of greatest mean "
        "weight, here the logarithm of bump over hysteresis; a product reaches 1 exactly if that mean reaches 0",
    ),
    example=Example(
        fails="neighbours: {uv_beside_ov: {capacitance: {max: 8 fF}}}",
        holds="neighbours: {uv_beside_ov: {capacitance: {max: 0.8 fF}}}",
    ),
)
def ring_dies_out(comparator: Comparator, case: Case) -> Judgement:
    """Compare the product of ratios round the strongest ring with 1."""
    ring = coupling_map(case).ring_of(comparator.id)
    if ring is None:
        return case.not_applicable("it is in no ring of neighbours")
    first = ring.members[0]
    if comparator.id != first:
        return case.not_applicable(f"the ring it is in is judged at {first}")
    measure = Measure(1.0, ring.product, Dimension.COUNT, Relation.AT_MOST)
    if ring.unknown and measure.holds:
        return _unknown(case, ring.unknown)
    strongest = max(ring.pushes, key=lambda push: push.ratio)
    allowed_v = strongest.bump_v if measure.holds else strongest.bump_v / ring.product  # a product may be 0
    return case.at_most(
        need=1.0,
        have=ring.product,
        dimension=Dimension.COUNT,
        says=f"round the ring {' - '.join(push.by for push in ring.pushes)}, bump over hysteresis multiplies to",
        why="; ".join(_push_text(push) for push in ring.pushes),
        mend=f"keep what {strongest.by} leaves on {strongest.victim} at or below "
        f"{show_down(allowed_v, _V)}; now {show(strongest.bump_v, _V)}",
        path=joined(ring.pushes),
    )


@rule(
    "coupling/supply_step",
    title="the current of its own decision does not move its supply back over its level",
    level=Level.ERROR,
    applies_to="comparators",
    proves="Where a comparator lives on the rail it watches, the step of its supply current at its own decision droops "
    "that rail, through the source impedance, by at most the least hysteresis.",
    facts=(
        "comparators.*.switching_current", "rails.*.source_impedance", "comparators.*.domain", "domains.*.rail",
        _HYSTERESIS,
    ),
    mend="less current at the decision, a stiffer supply, or more hysteresis",
    sources=("Ohm's law",),
    example=Example(
        fails="comparators: {uv: {switching_current: 200 mA}}", holds="comparators: {uv: {switching_current: 2 uA}}"
    ),
    formulas=(coupling.shared_impedance_bump_v,),
)  # fmt: skip
def own_step_is_kept(comparator: Comparator, case: Case) -> Judgement:
    """Compare the droop of the comparator's own current step with what its level keeps."""
    if has_no_hysteresis(comparator):
        return case.not_applicable(_NOTHING_KEPT)
    rail = rail_of(case, comparator)
    if rail.id != comparator.watches:
        return case.not_applicable(f"it lives on {rail.id} and watches {comparator.watches}")
    step_a, impedance_ohm = case.own.most("switching_current"), case.of(rail).most("source_impedance")
    kept_v = hysteresis_window(case, comparator).least_v
    case.settle()
    if kept_v <= 0.0:
        return case.not_applicable(_NOTHING_KEPT)
    droop_v = coupling.shared_impedance_bump_v(step_a=step_a, impedance_ohm=impedance_ohm)
    loud = droop_v > kept_v
    step, impedance = show(step_a, Dimension.CURRENT), show(impedance_ohm, Dimension.RESISTANCE)
    return case.at_most(
        need=kept_v,
        have=droop_v,
        dimension=_V,
        says=f"its own decision moves {rail.id} by",
        why=f"a step of {step} through {impedance}",
        mend=f"a step of at most {show_down(kept_v / impedance_ohm, Dimension.CURRENT)}; now {step}" if loud else "",
        at="switching_current",
    )


RULES: Final[tuple[Rule, ...]] = (
    bump_is_kept,
    shared_reference_stays,
    own_kick_is_kept,
    neighbours_together_are_kept,
    toggles_end_at_once,
    ring_dies_out,
    own_step_is_kept,
)
