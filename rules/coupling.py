"""Coupling: no neighbour moves a level further than its hysteresis keeps it: alone, together, in a chain, in a ring."""

from __future__ import annotations

from collections.abc import Callable, Iterable, Iterator
from functools import partial
from typing import Any, Final

from tidegate.lint.account import Sum, plus
from tidegate.lint.case import Case
from tidegate.lint.derived.disturbance.disturbance import BUMP_FORMULAS, Bump, own_kick, seen_term, size_of
from tidegate.lint.derived.disturbance.doubt import holds
from tidegate.lint.derived.disturbance.kept_distance import kept
from tidegate.lint.derived.disturbance.pushes import pushes, pushes_of
from tidegate.lint.derived.disturbance.quieting import quieter_pair, quieter_reference
from tidegate.lint.derived.disturbance.seen_bump import SeenBump, bump_text, seen_bump
from tidegate.lint.derived.disturbance.term_text import terms_text
from tidegate.lint.derived.disturbance.toggles import Sized, first_chain, joined, mean_of, strongest_ring
from tidegate.lint.derived.disturbance.who_disturbs import Disturber, disturbers, takes_no_reference
from tidegate.lint.derived.safe_rounding import show_down, show_up
from tidegate.lint.derived.supply.rail_of import rail_of
from tidegate.lint.description.model.description import Description
from tidegate.lint.description.model.detector import Comparator
from tidegate.lint.description.model.reset_path import Neighbour
from tidegate.lint.facts.view import factors
from tidegate.lint.graph.edge import Path
from tidegate.lint.judgement import Judgement, Level
from tidegate.lint.physics import coupling, lasting_bump
from tidegate.lint.physics.domain import quotient
from tidegate.lint.quantity import Dimension, show
from tidegate.lint.rule import Example, Rule, Yield, rule

_V: Final = Dimension.VOLTAGE
_NODE: Final = "solution of the node equation (Cc + Cg) dv/dt = Cc dVs/dt - v/R (derived)"
_CHARGE: Final = "definition of capacitance: a charge Q thrown onto C moves it by Q/C"
_SUM: Final = "triangle inequality: bumps at once move a level by no more than the sum of their sizes"
_HYSTERESIS: Final = "comparators.*.hysteresis.amount, or both trip levels"
_KICK_FACTS: Final = (
    "comparators.*.kick", "references.*.decoupling", "references.*.source_resistance, behind a filter",
    "comparators.*.divider.ratio", "comparators.*.filter", _HYSTERESIS,
)  # fmt: skip
_KICK_FORMULAS: Final = (
    coupling.charge_kick_v, lasting_bump.decayed_kick_v, coupling.decoupling_for_charge_f, coupling.settling_time_s,
)  # fmt: skip
_NONE_OR_WRONG: Final = ("hysteresis/present", "hysteresis/sense")
_LESS: Final = "less of what disturbs it, or more hysteresis"


def _victims(pair: Any, description: Description) -> Iterator[str]:
    """The comparators that a described pair may disturb."""
    yield pair.victim
    if pair.mutual is not False and pair.aggressor in description.comparators:
        yield pair.aggressor


def _pairs_on(comparator: Any, description: Description) -> Iterator[str]:
    """The described pairs that may disturb a comparator."""
    for pair in description.neighbours.values():
        if comparator.id in _victims(pair, description):
            yield pair.id


def _round(comparator: Any, description: Description) -> Iterable[str]:
    """The comparators that may push one another round with one."""
    return pushes_of(description).might_ring_of(comparator.id)


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
        fails="neighbours: {uv_beside_ov: {capacitance: {max: 4.2 fF}, edge: {min: 1 ns, max: 1 us}, "
        "node: {capacitance: {min: 250 fF, max: 300 fF}}}}",
        holds="neighbours: {uv_beside_ov: {capacitance: {max: 0.8 fF}}}",
    ),
    formulas=(
        *BUMP_FORMULAS, coupling.decoupling_for_bump_f,
        lasting_bump.decoupling_for_lasting_bump_f, coupling.settling_time_s,
    ),
    yields=tuple(Yield(above, _victims) for above in _NONE_OR_WRONG),
)  # fmt: skip
def bump_is_kept(pair: Neighbour, case: Case) -> Judgement:
    """Compare the worse of the two directions with what the victim's level keeps."""
    comparators = case.description.comparators
    asks = [
        partial(seen_bump, case, comparators[victim], source)
        for victim in _victims(pair, case.description)
        for source in disturbers(case.graph).of(victim)
        if source.pair is pair and holds(case, source.doubt)
    ]
    worst, *others = sorted(case.each(asks), key=lambda way: (way.measure.margin, way.victim.id))
    also = [f"the other way round {show(way.seen.value, _V)} of {show(way.kept.value, _V)}" for way in others]
    loud = [(way.victim, way.kept.value) for way in (worst, *others) if not way.measure.holds]
    size = size_of(worst.disturber).rpartition(".")[2]
    return _judged(
        case, worst, f"{worst.disturber.aggressor} moves the level of {worst.victim.id} by", at=size,
        why="; ".join(filter(None, (worst.text(case), *also))), path=worst.disturber.path,
        quieter=lambda: quieter_pair(case, pair, loud),
    )  # fmt: skip


def _judged(
    case: Case, seen: SeenBump, says: str, *, at: str, why: str, path: Path, quieter: Callable[[], str]
) -> Judgement:  # fmt: skip
    """Compare what a comparator sees with what its level keeps; ``quieter`` says what would do, where all is known."""
    mend = _LESS
    if not seen.measure.holds and seen.kept.value > 0.0:
        mend = case.if_known(quieter) or _LESS
    return case.at_most(need=seen.kept, have=seen.seen, dimension=_V, says=says, why=why, mend=mend, at=at, path=path)


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
    formulas=_KICK_FORMULAS,
    yields=_NONE_OR_WRONG,
)
def shared_reference_stays(comparator: Comparator, case: Case) -> Judgement:
    """Compare the largest kick of another comparator with what the level keeps."""
    if takes_no_reference(comparator):
        return case.not_applicable("it takes no reference")
    others = disturbers(case.graph).sharers(comparator.id)
    reference = comparator.reference or "its reference"
    if not others:
        return case.not_applicable(f"no other comparator kicks {reference}")
    seen = case.each(partial(seen_bump, case, comparator, other) for other in others)
    worst = min(seen, key=lambda each: (each.measure.margin, each.disturber.aggressor))
    kicking = case.description.comparators[worst.disturber.aggressor]
    return _judged(
        case, worst, f"{kicking.id} kicks {worst.disturber.reference or reference}, which moves its level by",
        at="reference", why=_kick_text(case, comparator, kicking, worst.text(case)), path=worst.disturber.path,
        quieter=partial(_quieter_kick, case, comparator, kicking, worst.kept),
    )  # fmt: skip


def _kick_text(case: Case, comparator: Comparator, kicking: Comparator, text: str) -> str:
    """The charge, what it goes onto, and the bump; empty where it is not known."""
    if not text or comparator.reference is None:
        return ""
    reference = case.description.references[comparator.reference]
    ask = (case.of(kicking).kick.most, case.of(reference).decoupling.least)
    known = case.if_known(lambda: tuple(each() for each in ask))
    if known is None:
        return text
    return f"{show(known[0], Dimension.CHARGE)} onto {show(known[1], Dimension.CAPACITANCE)}: {text}"


def _quieter_kick(case: Case, comparator: Comparator, kicking: Comparator, keeps: Sum) -> str:
    """The decoupling that would do for the kick of a comparator."""
    reference = case.of(comparator).reference.element()
    return quieter_reference(case, reference, case.of(kicking).kick.most(), [(comparator, keeps.value)])


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
    formulas=_KICK_FORMULAS,
    yields=_NONE_OR_WRONG,
)
def own_kick_is_kept(comparator: Comparator, case: Case) -> Judgement:
    """Compare a comparator's kick on its own reference with what its level keeps."""
    if takes_no_reference(comparator):
        return case.not_applicable("it takes no reference")
    ask: Callable[[], Bump] = partial(own_kick, case, comparator)
    own = Disturber(comparator.id, comparator.id, None, comparator.reference)
    total = case.sum(plus("its own kick", lambda: ask().seen_v, of=case.of(comparator).kick, floor=0.0))
    seen = SeenBump(own, comparator, total, kept(case, comparator))
    return _judged(
        case, seen, f"its own decision kicks {comparator.reference or 'its reference'}, which moves its level by",
        at="reference", why=_kick_text(case, comparator, comparator, bump_text(case, comparator, ask)), path=own.path,
        quieter=partial(_quieter_kick, case, comparator, comparator, seen.kept),
    )  # fmt: skip


@rule(
    "coupling/together",
    title="all neighbours at once do not move the level by more than its hysteresis",
    level=Level.WARNING,
    applies_to="comparators",
    proves="What a comparator sees of every described neighbour and of every other comparator on its reference, added "
    "up, is at most the least hysteresis. One that is too much alone is told by coupling/bump or by "
    "coupling/shared_reference.",
    facts=("the facts of coupling/bump and of coupling/shared_reference", _HYSTERESIS),
    mend="less of the largest, or more hysteresis",
    sources=(_SUM,),
    example=Example(
        fails="{comparators: {ov: {kick: 120 fC}}, neighbours: {uv_beside_ov: {capacitance: {max: 2.2 fF}, "
        "edge: {min: 1 ns, max: 1 us}, node: {capacitance: {min: 250 fF, max: 300 fF}}}}}",
        holds="{comparators: {ov: {kick: 4 fC}}, neighbours: {uv_beside_ov: {capacitance: {max: 0.8 fF}}}}",
    ),
    formulas=BUMP_FORMULAS,
    yields=(Yield("coupling/bump", _pairs_on), "coupling/shared_reference", *_NONE_OR_WRONG),
)
def neighbours_together_are_kept(comparator: Comparator, case: Case) -> Judgement:
    """Compare the sum of all bumps with what the level keeps."""
    sources = disturbers(case.graph).of(comparator.id)
    if len(sources) < 2:
        return case.not_applicable(f"{'one neighbour' if sources else 'no neighbour'} disturbs it")
    keeps, total = kept(case, comparator), case.sum(*(seen_term(case, source) for source in sources))
    lines = sorted(total.lines, key=lambda line: (-line.value, line.name))
    return case.at_most(
        need=keeps, have=total, dimension=_V, says=f"its {len(sources)} neighbours together move its level by",
        why=terms_text(case, lines) or "none of them moves it",
        mend=f"less of the largest, or at least {show_up(total.value, _V)} of hysteresis; now {show(keeps.value, _V)}",
        at="hysteresis",
    )  # fmt: skip


@rule(
    "coupling/chain",
    title="no decision toggles a comparator that toggles another",
    level=Level.WARNING,
    applies_to="comparators",
    proves="A bump above the least hysteresis of its victim toggles it; the victim, and the stages it drives, then "
    "disturb others. No chain of two toggles or more begins at the comparator, or at what is no comparator and toggles "
    "it. A victim that surely keeps no distance is left out: the rules of hysteresis judge it.",
    facts=("the facts of coupling/bump and of coupling/shared_reference, for every comparator along the chain",),
    mend="keep one of the bumps below the hysteresis of its victim",
    sources=("a walk along the bumps that exceed the hysteresis of their victims (derived)",),
    example=Example(
        fails="{comparators: {uv: {kick: 145 fC}}, neighbours: {ov_beside_core: {kind: capacitance, aggressor: ov, "
        "victim: uv_core, mutual: false, at: input, capacitance: 5 fF, step: 1.89 V, edge: {min: 1 ns, max: 1 us}, "
        "node: {resistance: 1.4 Mohm, capacitance: {min: 250 fF, max: 300 fF}}}}}",
        holds="comparators: {uv: {kick: 4 fC}}",
    ),
    formulas=BUMP_FORMULAS,
    yields=(Yield("coupling/ring", _round),),
)
def toggles_end_at_once(comparator: Comparator, case: Case) -> Judgement:
    """Follow the toggles that begin at a comparator; fail where one of them toggles somebody else."""
    if not pushes(case.graph).out_of(comparator.id):
        return case.not_applicable("its decision moves nobody's level")
    chain = first_chain(case, comparator.id)
    if not chain:
        return case.passes("no chain of toggles begins at it")
    first = chain[0]
    toggled = ", which toggles ".join(each.push.victim for each in chain)
    return case.fails(
        f"{'its decision' if first.push.by == comparator.id else first.push.by} toggles {toggled}",
        why="; ".join(map(_push_text, chain)),
        mend=f"keep what {first.push.by} leaves on {first.push.victim} at or below {show_down(first.kept_v, _V)}",
        path=joined(chain),
    )


def _push_text(each: Sized) -> str:
    whom = "itself" if each.push.by == each.push.victim else each.push.victim
    return f"{each.push.by} moves {whom} by {show(each.bump_v, _V)} of {show(each.kept_v, _V)} kept"


@rule(
    "coupling/ring",
    title="no ring of neighbours can keep itself toggling",
    level=Level.ERROR,
    applies_to="comparators",
    proves="Round every closed way on which comparators, and the stages they drive, disturb one another, the bumps "
    "over the least hysteresis of their victims multiply to at most 1: so does their geometric mean, which is what is "
    "measured. Comparators that may disturb one another round are judged once, by the strongest way round, at the "
    "first of them by id. A victim that surely keeps no distance is left out: the rules of hysteresis judge it.",
    facts=("the facts of coupling/bump and of coupling/shared_reference, for every comparator in the ring",),
    mend="less of the strongest bump in the ring, or more hysteresis where it arrives",
    sources=(
        "Dasdan (2004), ACM Trans. Des. Autom. Electron. Syst. 9(4): policy iteration for the cycle of greatest mean "
        "weight, here the logarithm of bump over hysteresis; a product reaches 1 exactly if that mean reaches 0",
    ),
    example=Example(
        fails="neighbours: {uv_beside_ov: {capacitance: {max: 8 fF}, edge: {min: 1 ns, max: 1 us}, "
        "node: {capacitance: {min: 250 fF, max: 300 fF}}}}",
        holds="neighbours: {uv_beside_ov: {capacitance: {max: 0.8 fF}}}",
    ),
    formulas=BUMP_FORMULAS,
)
def ring_dies_out(comparator: Comparator, case: Case) -> Judgement:
    """Compare the product of ratios round the strongest ring with 1."""
    found = pushes(case.graph)
    surely, might = found.ring_of(comparator.id), found.might_ring_of(comparator.id)
    if not might:
        return case.not_applicable("it is in no ring of neighbours")
    if surely and comparator.id != surely[0]:
        return case.not_applicable(f"the ring it is in is judged at {surely[0]}")
    members = surely if case.at_best else might
    ring = strongest_ring(case, members)
    mean = mean_of(ring)
    if not ring:
        nothing = f"round {', '.join(might)}, bump over hysteresis is on the geometric mean"
        return case.at_most(need=1.0, have=mean, dimension=Dimension.COUNT, says=nothing)
    strongest = max(ring, key=lambda each: each.ratio)
    allowed_v = quotient(strongest.bump_v, mean ** len(ring))
    return case.at_most(
        need=1.0, have=mean, dimension=Dimension.COUNT,
        says=f"round the ring {' - '.join(each.push.by for each in ring)}, bump over hysteresis is on the geometric "
        "mean",
        why="; ".join(map(_push_text, ring)),
        mend=f"keep what {strongest.push.by} leaves on {strongest.push.victim} at or below "
        f"{show_down(allowed_v, _V)}; now {show(strongest.bump_v, _V)}",
        path=joined(ring),
    )  # fmt: skip


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
    yields=_NONE_OR_WRONG,
)  # fmt: skip
def own_step_is_kept(comparator: Comparator, case: Case) -> Judgement:
    """Compare the droop of the comparator's own current step with what its level keeps."""
    rail = rail_of(case, comparator)
    if rail.id != comparator.watches:
        return case.not_applicable(f"it lives on {rail.id} and watches {comparator.watches}")
    keeps, (step, impedance) = (
        kept(case, comparator),
        (case.of(comparator).switching_current, case.of(rail).source_impedance),
    )

    def droop_v() -> float:
        step_a, impedance_ohm = factors(step, impedance)
        return coupling.shared_impedance_bump_v(step_a=step_a, impedance_ohm=impedance_ohm)

    droop = case.sum(plus("step of its own current", droop_v, of=step))
    known = case.if_known(lambda: (step.most(), impedance.most()))
    return case.at_most(
        need=keeps, have=droop, dimension=_V, says=f"its own decision moves {rail.id} by",
        why="" if known is None else _step_text(*known),
        mend=_LESS if known is None or keeps.value == 0.0 or not known[1] else _smaller_step(*known, keeps.value),
        at="switching_current",
    )  # fmt: skip


def _step_text(step_a: float, impedance_ohm: float) -> str:
    return f"a step of {show(step_a, Dimension.CURRENT)} through {show(impedance_ohm, Dimension.RESISTANCE)}"


def _smaller_step(step_a: float, impedance_ohm: float, kept_v: float) -> str:
    ampere = Dimension.CURRENT
    return f"a step of at most {show_down(kept_v / impedance_ohm, ampere)}; now {show(step_a, ampere)}"


RULES: Final[tuple[Rule, ...]] = (
    bump_is_kept,
    shared_reference_stays,
    own_kick_is_kept,
    neighbours_together_are_kept,
    toggles_end_at_once,
    ring_dies_out,
    own_step_is_kept,
)
