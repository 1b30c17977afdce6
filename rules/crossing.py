"""Crossing: a signal that leaves its supply domain is shifted and held, and nothing always on hangs on what is not."""

from __future__ import annotations

from collections.abc import Iterable, Iterator, Sequence
from functools import partial
from typing import Any, Final

import msgspec

from tidegate.lint.case import Case
from tidegate.lint.derived.reset_path.dead_output import dead_output, says_dead_output
from tidegate.lint.derived.reset_path.follows_alive import order_gaps
from tidegate.lint.derived.reset_path.override import resets_in
from tidegate.lint.derived.supply.rail_of import rail_of
from tidegate.lint.derived.supply.rail_sequence import leaning_of_rails
from tidegate.lint.derived.unsaid import found_out, missing
from tidegate.lint.description.model.description import Description
from tidegate.lint.description.model.detector import Bias, Comparator, Reference
from tidegate.lint.description.model.reset_path import Hold, OutputStage, Reset
from tidegate.lint.description.model.supply import Domain, Rail
from tidegate.lint.graph.dependency import Graph
from tidegate.lint.graph.edge import EdgeKind, Hop
from tidegate.lint.graph.leaning_gaps import source_gaps
from tidegate.lint.graph.paths import Reach, driven_by, drives
from tidegate.lint.judgement import Judgement, Level
from tidegate.lint.quantity import Dimension, show
from tidegate.lint.rule import Example, Rule, Yield, rule
from tidegate.rules.told_elsewhere import graph_of

_V: Final = Dimension.VOLTAGE
_SHIFTED: Final = "common practice, no source: the levels of one supply are not those of another"
_HELD: Final = "common practice, no source: what nothing drives is held in its safe state"
_LEANS: Final = (
    EdgeKind.BIASED_BY, EdgeKind.TAKES_REFERENCE_FROM, EdgeKind.LEANS_ON, EdgeKind.GATED_BY,
)  # fmt: skip


_LATE: Final = """output_stages:
  late: {{driven_by: [uv_core], domain: analog, kind: buffer, inverting: false, hold: {hold}, works_from: 0.7 V,
    threshold: {{min: 0.4 V, max: 1.25 V}}, input_edge: 60 ns, drive: 8 kohm, leakage: 10 nA, load: 40 fF,
    delay: {{min: 5 ns, max: 60 ns}}, consumes: 5 nA}}
  onward: {{driven_by: [late], domain: aon, kind: buffer, inverting: false, hold: none, works_from: 0.7 V,
    threshold: {{min: 0.4 V, max: 1.25 V}}, input_edge: 60 ns, load: 40 fF, delay: {{min: 5 ns, max: 60 ns}},
    consumes: 5 nA}}
  core_out: {{driven_by: [uv_core, gather, onward]}}
"""  # a stage in a switched domain, and one after it that is always on
_LOOPS: Final = ("self_bias/no_loop", "self_bias/loop_starts")
"""The rules that tell what waits for itself."""


class _Crossing(msgspec.Struct, frozen=True):
    """A signal between two rails."""

    driver: Comparator | OutputStage
    receiver: OutputStage | Reset
    out_of: Rail
    into: Rail

    @property
    def is_shifted(self) -> bool:
        """Whether a level shifter stands at either end."""
        return any(isinstance(end, OutputStage) and end.kind == "level_shifter" for end in (self.driver, self.receiver))

    @property
    def unsaid_kinds(self) -> tuple[str, ...]:
        """The facts with which one of the ends might be a level shifter."""
        ends = (end for end in (self.driver, self.receiver) if isinstance(end, OutputStage) and end.kind is None)
        return tuple(end.fact("kind") for end in ends)


def _drivers(case: Case, receiver: OutputStage | Reset) -> list[Comparator | OutputStage]:
    found = (case.graph.elements[name] for name in case.graph.tails(receiver.id, EdgeKind.DRIVES))
    return [driver for driver in found if isinstance(driver, Comparator | OutputStage)]


def _crossing(case: Case, receiver: OutputStage | Reset, driver: Comparator | OutputStage) -> _Crossing:
    out_of, into = (rail_of(case, driver), rail_of(case, receiver))
    return _Crossing(driver, receiver, out_of, into)


def _shifted_rule(section: str, word: str, example: Example) -> Rule:
    return rule(
        f"crossing/{word}_shifted",
        title=f"a signal that comes to a {word.replace('_', ' ')} from another supply passes a level shifter",
        level=Level.ERROR,
        applies_to=section,
        proves="Where the domain of a driver is fed by another rail than that of its receiver, and the nominal levels "
        "of the two rails differ, one of the two is a level shifter.",
        facts=("output_stages.*.domain", "resets.*.domain", "comparators.*.domain", "domains.*.rail", "rails.*.nominal",
               "output_stages.*.kind"),
        mend="a level shifter, at the driver or at the receiver",
        sources=(_SHIFTED,),
        example=example,
    )(_judge_shift)  # fmt: skip


def _judge_shift(receiver: Any, case: Case) -> Judgement:
    """Pass if every signal from a rail with another nominal level passes a level shifter."""
    case.of(receiver).driven_by.must()
    asked = [found_out(case, partial(_crossing, case, receiver, driver)) for driver in _drivers(case, receiver)]
    lacking = [fact for _, facts in asked for fact in facts]
    across = [crossing for crossing, _ in asked if crossing is not None and crossing.out_of is not crossing.into]
    for crossing in across:
        if crossing.is_shifted:
            continue
        (out_v, no_out), (in_v, no_in) = _nominal(case, crossing.out_of), _nominal(case, crossing.into)
        unsaid = [*no_out, *no_in, *crossing.unsaid_kinds]
        if not unsaid and out_v != in_v:
            return _bare(case, crossing)
        lacking += unsaid if out_v is None or out_v != in_v else ()
    if lacking:
        missing(tuple(lacking))
    if not across:
        return case.not_applicable("driven from its own rail alone")
    shifted = [crossing.driver.id for crossing in across if crossing.is_shifted]
    alike = [crossing.driver.id for crossing in across if not crossing.is_shifted]
    said = [f"shifted from {' and '.join(shifted)}"] if shifted else []
    said += [f"from {' and '.join(alike)} at the same nominal level"] if alike else []
    return case.passes("; ".join(said), at="driven_by")


def _nominal(case: Case, rail: Rail) -> tuple[float | None, tuple[str, ...]]:
    """The nominal level of a rail in V, or None and the fact that is missing."""
    nominal = case.of(rail).nominal
    level_v = case.if_known(nominal.typical)
    if level_v is not None:
        return level_v, ()
    return None, (nominal.path if nominal.given is None else f"{nominal.path}.typ",)


def _bare(case: Case, crossing: _Crossing) -> Judgement:
    """Say which signal comes bare from which level to which."""
    driver, out_of, into = crossing.driver.id, crossing.out_of, crossing.into
    levels = [show(case.of(rail).nominal.typical(), _V) for rail in (out_of, into)]
    return case.fails(
        f"{driver} drives it from {out_of.id}, and it is read on {into.id}, with no level shifter between",
        why=f"{out_of.id} is {levels[0]}, {into.id} {levels[1]}",
        mend=f"a level shifter from {out_of.id} to {into.id}",
        at="driven_by",
        path=(Hop(driver, ""), Hop(crossing.receiver.id, EdgeKind.DRIVES.forwards)),
    )


def _holds_behind(graph: Graph, driver: Comparator | OutputStage) -> list[str]:
    """The held stages of which a driver passes the level on to a reset net."""
    if not resets_in(graph, Reach(driver.id, drives(graph))):
        return []
    before = (graph.elements[name] for name in Reach(driver.id, driven_by(graph)) if name != driver.id)
    return [stage.id for stage in before if isinstance(stage, OutputStage) and isinstance(stage.hold, Hold)]


def _elsewhere(stage: OutputStage, description: Description) -> list[OutputStage]:
    """The drivers of a stage that live in another domain and are not held."""
    drivers = (description.output_stages.get(name) for name in stage.driven_by or ())
    return [one for one in drivers if one is not None and one.hold == "none" and one.domain != stage.domain]


def _holds_before(stage: OutputStage, description: Description) -> Iterable[str]:
    """The held stages whose level is lost with the drivers of a stage; none where a driver comes after no hold."""
    held = [_holds_behind(graph_of(description), driver) for driver in _elsewhere(stage, description)]
    return [name for names in held for name in names] if all(held) else ()


def _nets_of_drivers(stage: OutputStage, description: Description) -> Iterable[str]:
    """The reset nets that the drivers of a stage drive directly too."""
    graph = graph_of(description)
    nets = [set(graph.heads(one.id, EdgeKind.DRIVES)) & {*description.resets} for one in _elsewhere(stage, description)]
    return [net for found in nets for net in found] if all(nets) else ()


def _turning_itself_on(element: Any, description: Description) -> Iterator[str]:
    """The elements of the loop on which what is switched off is switched on by what leans on it itself."""
    graph = graph_of(description)
    for source, _ in _leant_on(graph, element):
        domain = getattr(source, "domain", None)
        if domain is not None and element.id in (waits := Reach(domain, graph.needs)):
            yield from (name for name in waits if domain in Reach(name, graph.needs))


@rule(
    "crossing/input_held",
    title="a signal from a domain that may be dead is held",
    level=Level.ERROR,
    applies_to="output_stages",
    proves="A driver that lives in a switched domain, or on a rail that is not up before that of the stage, has its "
    "output held, or, for a detector, is said to assert or to release while it cannot decide; or the stage is a level "
    "shifter whose own output is held.",
    facts=(
        "output_stages.*.driven_by and domain", "comparators.*.domain", "domains.*.kind and rail",
        "output_stages.*.hold of each driver", "comparators.*.undecided of each driver", "rails.*.after",
    ),
    mend="hold the output of the driver at the level at which the nets behind it reset",
    sources=(_HELD,),
    example=Example(
        fails=_LATE.format(hold="none"),
        holds=_LATE.format(hold="{to: low, through: resistor, resistance: 1 Mohm, coupling: 1 fF}"),
    ),
    yields=(Yield("passive_default/chain_alive", _holds_before), Yield("passive_default/held", _nets_of_drivers)),
)  # fmt: skip
def input_is_held(stage: OutputStage, case: Case) -> Judgement:
    """Pass if every driver that may be dead while the stage is alive is held."""
    case.of(stage).driven_by.must()
    asked = [(driver, *found_out(case, partial(_why_dead, case, stage, driver))) for driver in _drivers(case, stage)]
    lacking = [fact for _, _, facts in asked for fact in facts]
    dead = [(driver, why) for driver, why, _ in asked if why]
    if not dead and not lacking:
        return case.not_applicable("every driver is alive whenever it is")
    if stage.kind == "level_shifter" and isinstance(stage.hold, Hold):
        return case.passes("a level shifter whose output is held", at="hold")
    loose = [(driver, why) for driver, why in dead if dead_output(driver) == "loose"]
    unsaid = _may_be_held_itself(stage)
    if loose and not unsaid:
        return _loose_driver(stage, case, loose)
    lacking += [says_dead_output(driver) for driver, _ in dead if dead_output(driver) is None]
    lacking += unsaid if loose else ()
    if lacking:
        missing(tuple(lacking))
    return case.passes(f"held: {_and(driver.id for driver, _ in dead)}", at="driven_by")


def _may_be_held_itself(stage: OutputStage) -> tuple[str, ...]:
    """The facts with which a stage might be a level shifter whose output is held."""
    if stage.kind not in (None, "level_shifter") or stage.hold == "none":
        return ()
    return tuple(stage.fact(name) for name in ("kind", "hold") if getattr(stage, name) is None)


def _loose_driver(stage: OutputStage, case: Case, loose: Sequence[tuple[Comparator | OutputStage, str]]) -> Judgement:
    """Say which driver leaves the input at no level: first one that no hold before it is lost with."""
    driver, why = min(loose, key=lambda found: bool(_holds_behind(case.graph, found[0])))
    if isinstance(driver, OutputStage):
        says, mend = f"is not held, and {why}", f"hold the output of {driver.id}, or move {driver.id} to the domain of"
        return _fails(stage, case, driver.id, says, f"{mend} {stage.id}")
    says = f"what its output does while it cannot decide is not defined, and it {why}"
    mend = f"move {driver.id} to the domain of {stage.id}, or let its output assert until it can decide"
    return _fails(stage, case, driver.id, says, mend)


def _fails(stage: OutputStage, case: Case, driver: str, says: str, mend: str) -> Judgement:
    path = (Hop(driver, ""), Hop(stage.id, EdgeKind.DRIVES.forwards))
    return case.fails(f"{driver} drives it, {says}", mend=mend, at="driven_by", path=path)


def _why_dead(case: Case, stage: OutputStage, driver: Comparator | OutputStage) -> str:
    """Why a driver may be dead while a stage is alive; empty where it is not."""
    here, there = case.each((case.of(stage).domain.element, case.of(driver).domain.element))
    if here is there:
        return ""
    assert isinstance(there, Domain)
    if case.of(there).kind.must() == "switched":
        return f"lives in {there.id}, which is switched"
    into, out_of = rail_of(case, stage), rail_of(case, driver)
    before = case.graph.once(leaning_of_rails)[into.id]
    if out_of is into or out_of.id in before:
        return ""
    if gaps := order_gaps(case, before):
        missing(gaps)
    return f"lives on {out_of.id}, which is not among the rails that are up before {into.id}"


@rule(
    "crossing/stays_on",
    title="what is always on leans on nothing that is switched off",
    level=Level.ERROR,
    applies_to=("comparators", "references", "biases", "output_stages"),
    proves="What a detector, reference, bias or stage in an always-on domain is biased by, compares with, leans on or "
    "is enabled by does not live in a switched domain; an enable that is held counts as defined, and a detector that "
    "is said to assert while it cannot decide is safe.",
    facts=(
        "the domain of each detector, reference, bias and stage", "domains.*.kind",
        "what each of them is biased by, compares with, leans on and is enabled by", "comparators.*.undecided",
    ),
    mend="something in an always-on domain to lean on",
    sources=("common practice, no source: what must stay awake leans on nothing that sleeps",),
    example=Example(
        fails="{comparators: {uv_core: {bias: bias_main}}, biases: {bias_main: {works_from: 1 V}}}",
        holds="{comparators: {uv_core: {bias: bias_start}}, biases: {bias_main: {works_from: 1 V}}}",
    ),
    yields=tuple(Yield(told, _turning_itself_on) for told in _LOOPS),
)  # fmt: skip
def always_on_stays_on(element: Any, case: Case) -> Judgement:
    """Pass if nothing that the element leans on directly lives in a switched domain."""
    if _is_external(case, element):
        return case.not_applicable("it lives off the chip")
    own_domain = case.of(element).domain.element()
    assert isinstance(own_domain, Domain)
    if case.of(own_domain).kind.must() != "always_on":
        return case.not_applicable(f"it lives in {own_domain.id}, which is switched")
    names, lacking = [], [element.fact(fact) for fact in source_gaps(element)]
    for source, words in _leant_on(case.graph, element):
        domain, lacks = found_out(case, partial(_switched, case, source))
        lacking += lacks
        if domain is not None and isinstance(element, Comparator) and element.undecided == "asserts":
            return case.passes(f"asserts while {domain.id} is off, in which {source.id} lives", at="undecided")
        if domain is not None and getattr(source, "hold", "none") != "none":
            lacking.append(source.fact("hold"))
        elif domain is not None:
            return _leans_on_switched(case, element, source, words, domain)
        if not _is_external(case, source):
            names.append(source.id)
    if lacking:
        missing(tuple(lacking))
    return case.passes(f"leans on {_and(names)}, which stay on" if names else "leans on nothing but its supply")


def _is_external(case: Case, element: Any) -> bool:
    return isinstance(element, Reference | Bias) and case.of(element).kind.must() == "external"


def _leant_on(graph: Graph, element: Any) -> Iterator[tuple[Any, str]]:
    """What an element leans on directly, and in which words; reset nets and stages that are held are left out."""
    for edge in graph.out(element.id):
        source = graph.elements[edge.head]
        held = isinstance(source, OutputStage) and isinstance(source.hold, Hold)
        if edge.kind in _LEANS and not held and not isinstance(source, Reset | Rail | Domain):
            yield source, edge.kind.forwards


def _switched(case: Case, source: Any) -> Domain | None:
    """The domain in which something lives, if that is switched; None where it stays on, or the thing is off the chip.

    Raises: MissingFactsError: where it is not said where it lives.
    """
    if _is_external(case, source):
        return None
    domain = case.of(source).domain.element()
    assert isinstance(domain, Domain)
    return domain if case.of(domain).kind.must() == "switched" else None


def _leans_on_switched(case: Case, element: Any, source: Any, words: str, domain: Domain) -> Judgement:
    is_verb = words.startswith(("leans", "takes"))
    return case.fails(
        f"it is always on and {words if is_verb else f'is {words}'} {source.id}, which lives in {domain.id}, which is "
        "switched",
        why=f"while {domain.id} is off, {element.id} has no {'enable' if words == 'gated by' else 'source'}",
        mend=f"let {element.id} lean on something that is always on, or move {source.id} to a domain that is",
        path=(Hop(element.id, ""), Hop(source.id, words), Hop(domain.id, EdgeKind.SUPPLIED_BY.forwards)),
    )


def _and(names: Iterable[str]) -> str:
    return " and ".join(dict.fromkeys(names))


RULES: Final[tuple[Rule, ...]] = (
    _shifted_rule(
        "output_stages",
        "stage",
        Example(
            fails="output_stages: {core_out: {kind: buffer, domain: core}}",
            holds="output_stages: {core_out: {kind: level_shifter, domain: core}}",
        ),
    ),
    _shifted_rule(
        "resets",
        "reset_net",
        Example(
            fails="output_stages: {core_out: {kind: buffer}}",
            holds="output_stages: {core_out: {kind: level_shifter}}",
        ),
    ),
    input_is_held,
    always_on_stays_on,
)
