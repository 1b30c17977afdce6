"""Crossing: a signal that leaves its supply domain is shifted and held, and nothing always on hangs on what is not."""

from __future__ import annotations

from collections.abc import Iterable, Iterator
from functools import partial
from typing import Any, Final

import msgspec

from tidegate.lint.case import Case
from tidegate.lint.derived.reset_path.override import resets_in
from tidegate.lint.derived.supply.rail_of import rail_of
from tidegate.lint.derived.supply.rail_sequence import leaning_of_rails
from tidegate.lint.description.model.detector import Comparator
from tidegate.lint.description.model.reset_path import Hold, OutputStage, Reset
from tidegate.lint.description.model.supply import Domain, Rail
from tidegate.lint.graph.edge import EdgeKind, Hop
from tidegate.lint.graph.leaning_loops import in_a_loop
from tidegate.lint.graph.paths import Reach, driven_by, drives
from tidegate.lint.judgement import Judgement, Level
from tidegate.lint.quantity import Dimension, show
from tidegate.lint.rule import Example, Rule, rule

_V: Final = Dimension.VOLTAGE
_SHIFTED: Final = "common practice, no source: the levels of one supply are not those of another"
_HELD: Final = "common practice, no source: what nothing drives is held in its safe state"
_LEANS: Final = (
    EdgeKind.BIASED_BY, EdgeKind.TAKES_REFERENCE_FROM, EdgeKind.LEANS_ON, EdgeKind.GATED_BY,
)  # fmt: skip


_LATE: Final = """output_stages:
  late: {{driven_by: [uv_core], domain: analog, kind: buffer, inverting: false, hold: {hold}, works_from: 0.7 V,
    threshold: {{min: 0.4 V, max: 1.25 V}}, input_edge: 60 ns, drive: 8 kohm, leakage: 10 nA, load: 40 fF,
    delay: {{min: 5 ns, max: 60 ns}}}}
  onward: {{driven_by: [late], domain: aon, kind: buffer, inverting: false, hold: none, works_from: 0.7 V,
    threshold: {{min: 0.4 V, max: 1.25 V}}, input_edge: 60 ns, load: 40 fF, delay: {{min: 5 ns, max: 60 ns}}}}
  core_out: {{driven_by: [uv_core, gather, onward]}}
"""  # a stage in a switched domain, and one after it that is always on
_COPY: Final = """biases:
  bias_copy: {{kind: from_reference, source: {source}, domain: aon, current: 0.1 uA, leakage: 0 A, consumes: 0.1 uA,
    works_from: 1.2 V, settling: 20 us}}
loads: {{adc: {{leans_on: [bias_copy]}}}}
"""


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


def _drivers(case: Case, receiver: OutputStage | Reset) -> list[Comparator | OutputStage]:
    found = (case.graph.elements[name] for name in case.graph.tails(receiver.id, EdgeKind.DRIVES))
    return [driver for driver in found if isinstance(driver, Comparator | OutputStage)]


def _crossing(case: Case, receiver: OutputStage | Reset, driver: Comparator | OutputStage) -> _Crossing:
    out_of, into = case.gather(lambda: rail_of(case, driver), lambda: rail_of(case, receiver))
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
    case.own.must("driven_by")
    found = case.gather_all(partial(_crossing, case, receiver, driver) for driver in _drivers(case, receiver))
    across = [crossing for crossing in found if crossing.out_of is not crossing.into]
    if not across:
        return case.not_applicable("driven from its own rail alone")
    bare = [crossing for crossing in across if not crossing.is_shifted]
    levels = {
        rail.id: case.of(rail).middle("nominal")
        for crossing in bare
        for rail in (crossing.out_of, crossing.into)
    }  # fmt: skip
    case.settle()
    wrong = [crossing for crossing in bare if levels[crossing.out_of.id] != levels[crossing.into.id]]
    unsaid = [end for crossing in wrong for end in (crossing.driver, crossing.receiver)
              if isinstance(end, OutputStage) and end.kind is None]  # fmt: skip
    for stage in unsaid:
        case.of(stage).lacks("kind")
    case.settle()
    if wrong:
        first = wrong[0]
        driver, out_of, into = first.driver.id, first.out_of.id, first.into.id
        return case.fails(
            f"{driver} drives it from {out_of}, and it is read on {into}, with no level shifter between",
            why=f"{out_of} is {show(levels[out_of], _V)}, {into} {show(levels[into], _V)}",
            mend=f"a level shifter from {out_of} to {into}",
            at="driven_by",
            path=(Hop(driver, ""), Hop(receiver.id, EdgeKind.DRIVES.forwards)),
        )
    shifted = [crossing.driver.id for crossing in across if crossing.is_shifted]
    alike = [crossing.driver.id for crossing in across if not crossing.is_shifted]
    said = [f"shifted from {' and '.join(shifted)}"] if shifted else []
    said += [f"from {' and '.join(alike)} at the same nominal level"] if alike else []
    return case.passes("; ".join(said), at="driven_by")


@rule(
    "crossing/input_held",
    title="a signal from a domain that may be dead is held",
    level=Level.ERROR,
    applies_to="output_stages",
    proves="A driver that lives in a switched domain, or on a rail that is not up before that of the stage, has its "
    "output held, or, for a detector, is said to assert or to release while it cannot decide; or the stage is a level "
    "shifter whose own output is held. Drivers of reset nets are judged by passive_default/held, those that pass on "
    "the level of a hold by passive_default/chain_alive.",
    facts=(
        "output_stages.*.driven_by and domain", "comparators.*.domain", "domains.*.kind and rail",
        "output_stages.*.hold of each driver", "comparators.*.undecided of each driver",
    ),
    mend="hold the output of the driver at the level at which the nets behind it reset",
    sources=(_HELD,),
    example=Example(
        fails=_LATE.format(hold="none"),
        holds=_LATE.format(hold="{to: low, through: resistor, resistance: 1 Mohm, coupling: 1 fF}"),
    ),
)  # fmt: skip
def input_is_held(stage: OutputStage, case: Case) -> Judgement:
    """Pass if every driver that may be dead while the stage is alive is held."""
    case.own.must("driven_by")
    dead = [
        (driver, why)
        for driver, why in zip(
            _drivers(case, stage),
            case.gather_all(partial(_why_dead, case, stage, driver) for driver in _drivers(case, stage)),
            strict=True,
        )
        if why
    ]
    if not dead:
        return case.not_applicable("every driver is alive whenever it is")
    if stage.kind == "level_shifter" and isinstance(stage.hold, Hold):
        return case.passes("a level shifter whose output is held", at="hold")
    loose = [(driver, why) for driver, why in dead if not _is_quiet(case, driver)]
    case.settle()
    if not loose:
        return case.passes(f"held: {' and '.join(driver.id for driver, _ in dead)}", at="driven_by")
    told = next((held for driver, _ in loose if (held := _after_a_hold(case, driver))), None)
    loose = [(driver, why) for driver, why in loose if not _after_a_hold(case, driver)]
    if not loose:
        return case.not_applicable(f"its driver comes after the hold of {told} (passive_default/chain_alive judges it)")
    driver, why = loose[0]
    says = f"what its output does while it cannot decide is not defined, and it {why}"
    return case.fails(
        f"{driver.id} drives it, {f'is not held, and {why}' if isinstance(driver, OutputStage) else says}",
        mend=f"hold the output of {driver.id}, or move {driver.id} to the domain of {stage.id}"
        if isinstance(driver, OutputStage)
        else f"move {driver.id} to the domain of {stage.id}, or let its output assert until it can decide",
        at="driven_by",
        path=(Hop(driver.id, ""), Hop(stage.id, EdgeKind.DRIVES.forwards)),
    )


def _after_a_hold(case: Case, driver: Comparator | OutputStage) -> str | None:
    """The held stage that a driver passes the level of on to a reset net: the driver is judged there."""
    if not isinstance(driver, OutputStage) or not resets_in(case.graph, Reach(driver.id, drives(case.graph))):
        return None
    before = (case.graph.elements[name] for name in Reach(driver.id, driven_by(case.graph)) if name != driver.id)
    return next((stage.id for stage in before if isinstance(stage, OutputStage) and isinstance(stage.hold, Hold)), None)


def _why_dead(case: Case, stage: OutputStage, driver: Comparator | OutputStage) -> str:
    """Why a driver may be dead while a stage is alive; empty where it is not."""
    here, there = case.gather(lambda: case.of(stage).element("domain"), lambda: case.of(driver).element("domain"))
    if here is there:
        return ""
    assert isinstance(there, Domain)
    if case.of(there).must("kind") == "switched":
        return f"lives in {there.id}, which is switched"
    into, out_of = case.gather(lambda: rail_of(case, stage), lambda: rail_of(case, driver))
    if out_of is into or out_of.id in case.graph.once(leaning_of_rails)[into.id]:
        return ""
    return f"lives on {out_of.id}, which is not among the rails that are up before {into.id}"


def _is_quiet(case: Case, driver: Comparator | OutputStage) -> bool:
    """Whether the output of a driver is defined while it is dead; noted where it is not said."""
    if isinstance(driver, OutputStage):
        if driver.hold is None:
            case.of(driver).lacks("hold")
        return driver.hold is None or isinstance(driver.hold, Hold)
    if driver.undecided is None:
        case.of(driver).lacks("undecided")
    return driver.undecided != "undefined"


def _always_on_rule(section: str, word: str, example: Example) -> Rule:
    return rule(
        f"crossing/{word}_stays_on",
        title=f"a {word} that is always on leans on nothing that is switched off",
        level=Level.ERROR,
        applies_to=section,
        proves="What the element in an always-on domain is biased by, compares with, leans on or is enabled by does "
        "not live in a switched domain; an enable that is held counts as defined, and a detector that is said to "
        "assert while it cannot decide is safe. What the detector's own output switches on is judged by "
        "self_bias/no_loop.",
        facts=(f"{section}.*.domain", "domains.*.kind", "the domain of everything it leans on directly"),
        mend="something in an always-on domain to lean on",
        sources=("common practice, no source: what must stay awake leans on nothing that sleeps",),
        example=example,
    )(_judge_always_on)


def _judge_always_on(element: Any, case: Case) -> Judgement:
    """Pass if nothing that the element leans on directly lives in a switched domain."""
    if getattr(element, "kind", None) == "external":
        return case.not_applicable("it lives off the chip")
    own_domain = case.own.element("domain")
    assert isinstance(own_domain, Domain)
    if case.of(own_domain).must("kind") != "always_on":
        return case.not_applicable(f"it lives in {own_domain.id}, which is switched")
    leant = list(_leant_on(case, element))
    switched = [(name, words, domain) for name, words, domain in leant if case.of(domain).must("kind") == "switched"]
    case.settle()
    if not switched:
        names = [name for name, _, _ in leant]
        return case.passes(f"leans on {_and(names)}, which stay on" if names else "leans on nothing but its supply")
    name, words, domain = switched[0]
    if isinstance(element, Comparator) and element.undecided == "asserts":
        return case.passes(f"asserts while {domain.id} is off, in which {name} lives", at="undecided")
    if element.id in case.graph.once(in_a_loop) and element.id in Reach(domain.id, case.graph.needs):
        return case.not_applicable(f"{domain.id} is switched on by what leans on it itself (self_bias says so)")
    is_verb = words.startswith(("leans", "takes"))
    return case.fails(
        f"it is always on and {words if is_verb else f'is {words}'} {name}, which lives in {domain.id}, which is "
        "switched",
        why=f"while {domain.id} is off, {element.id} has no {'enable' if words == 'gated by' else 'source'}",
        mend=f"let {element.id} lean on something that is always on, or move {name} to a domain that is",
        path=(Hop(element.id, ""), Hop(name, words), Hop(domain.id, EdgeKind.SUPPLIED_BY.forwards)),
    )


def _leant_on(case: Case, element: Any) -> Iterator[tuple[str, str, Domain]]:
    """What an element leans on directly, in words, and the domain in which that lives; reset nets left out."""
    for edge in case.graph.out(element.id):
        if edge.kind not in _LEANS:
            continue
        source = case.graph.elements[edge.head]
        if isinstance(source, Reset | Rail | Domain) or getattr(source, "kind", None) == "external":
            continue
        if isinstance(source, OutputStage) and isinstance(source.hold, Hold):
            continue
        name = getattr(source, "domain", None)
        if name is None:
            case.of(source).lacks("domain")
        else:
            yield source.id, edge.kind.forwards, case.description.domains[name]


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
    _always_on_rule(
        "comparators",
        "detector",
        Example(
            fails="{comparators: {uv_core: {bias: bias_main}}, biases: {bias_main: {works_from: 1 V}}}",
            holds="{comparators: {uv_core: {bias: bias_start}}, biases: {bias_main: {works_from: 1 V}}}",
        ),
    ),
    _always_on_rule(
        "references",
        "reference",
        Example(
            fails="references: {ref_main: {domain: aon, consumes: 0.5 uA}}",
            holds="{references: {ref_main: {domain: aon, consumes: 0.5 uA}}, biases: {bias_main: {domain: aon}}}",
        ),
    ),
    _always_on_rule(
        "biases",
        "bias",
        Example(
            fails=_COPY.format(source="ref_main"),
            holds=_COPY.format(source="ref_fast"),
        ),
    ),
    _always_on_rule(
        "output_stages",
        "output_stage",
        Example(
            fails="{output_stages: {enable: {driven_by: [uv], domain: analog, kind: buffer, inverting: false, "
            "hold: none, works_from: 0.7 V, input_edge: 60 ns, delay: {min: 5 ns, max: 60 ns}}, "
            "core_out: {gated_by: enable}}}",
            holds="output_stages: {core_out: {gated_by: uv_out}}",
        ),
    ),
)
