"""Electromigration: crowbar current of stages behind a slow edge, and the metal that has to carry it."""

from __future__ import annotations

import math
from collections.abc import Callable
from functools import partial
from typing import Final

from tidegate.lint.account import Sum
from tidegate.lint.case import Case
from tidegate.lint.derived.at_corner import at_corner
from tidegate.lint.derived.levels.furthest import lowest
from tidegate.lint.derived.levels.trip_levels import has_no_hysteresis, hysteresis_window
from tidegate.lint.derived.metal.crowbar_peak import Crowbar, crowbar_of
from tidegate.lint.derived.metal.output_metal import Conductor, line_of, vias_of
from tidegate.lint.derived.reset_path.path_gaps import gaps_behind
from tidegate.lint.derived.safe_rounding import show_down
from tidegate.lint.derived.supply.rail_of import rail_of
from tidegate.lint.description.model.description import Description
from tidegate.lint.description.model.detector import Comparator
from tidegate.lint.description.model.reset_path import OutputStage
from tidegate.lint.facts.reading import Better, MissingFactsError
from tidegate.lint.graph.dependency import build
from tidegate.lint.graph.edge import EdgeKind, Hop, Path
from tidegate.lint.graph.paths import Reach, driven_by
from tidegate.lint.judgement import Judgement, Kind, Level, Measure, Relation
from tidegate.lint.physics import conductor_size, coupling, crowbar, electromigration, short_length
from tidegate.lint.physics.domain import product
from tidegate.lint.quantity import Dimension, show
from tidegate.lint.rule import Example, Rule, Yield, rule

_V: Final = Dimension.VOLTAGE
_A: Final = Dimension.CURRENT
_OHM: Final = Dimension.RESISTANCE
_TIME: Final = Dimension.DURATION
_VEENDRICK: Final = (
    "H. J. M. Veendrick, Short-Circuit Dissipation of Static CMOS Circuitry, IEEE J. Solid-State Circuits 19(4), "
    "468-473 (1984), for unequal transistors derived at the formula"
)
_BLACK: Final = "J. R. Black, Electromigration, IEEE Trans. Electron Devices 16(4), 338-347 (1969)"
_MINER: Final = "M. A. Miner, Cumulative Damage in Fatigue, J. Appl. Mech. 12, A159-A164 (1945)"
_BLECH: Final = "I. A. Blech, Electromigration in thin aluminum films, J. Appl. Phys. 47, 1203-1208 (1976)"
_PEAK_FACTS: Final = (
    "output_stages.*.input_edge", "process.plain_edge", "output_stages.*.crowbar_peak, or thresholds and gains of "
    "output_stages.*.nmos and output_stages.*.pmos, output_stages.*.domain and rails.*.delivered",
)  # fmt: skip
_WEAR_FACTS: Final = (
    "conditions.junction_temperature", "conditions.service_life", "process.activation_energy and "
    "process.current_exponent, where the limit is stated for other conditions or does not hold outright",
    "conditions.power_cycles, output_stages.*.edges_per_cycle and output_stages.*.dwell, where it does not",
)  # fmt: skip


_ONE: Final = {"inverter": "an"}


def _edge(stage: OutputStage, case: Case) -> Measure:
    """The input edge against the slowest one that a plain stage is good for."""
    plain_s = case.whole.process.plain_edge.least()
    return Measure(plain_s, case.of(stage).input_edge.most(), _TIME, Relation.AT_MOST)


def _fast(stage: OutputStage, case: Case) -> Judgement | None:
    """Why crowbar current is no matter; None where the stage is, or may be, behind a slow edge."""
    edge = _edge(stage, case)
    if not edge.holds:
        return None
    if not case.reading.exact:
        return case.passes("its input edge may be fast enough")
    return case.not_applicable(f"its input edge of {show(edge.have, _TIME)} is not slow")


@rule(
    "electromigration/schmitt",
    title="a stage behind a slow edge is a Schmitt stage",
    level=Level.ERROR,
    applies_to="output_stages",
    proves="The slowest edge at the input of the stage is one that a plain stage of the process is good for, or the "
    "stage is a Schmitt stage, which passes through its transition by itself once it has begun. No other kind of "
    "stage counts as having hysteresis.",
    facts=("output_stages.*.kind", "output_stages.*.input_edge", "process.plain_edge"),
    mend="make it a Schmitt stage, or put one before it",
    sources=("common practice, no source: a slow edge goes into a Schmitt stage first",),
    example=Example(
        fails="output_stages: {uv_out: {kind: buffer}}",
        holds="output_stages: {uv_out: {kind: schmitt}}",
    ),
)
def slow_edge_meets_schmitt(stage: OutputStage, case: Case) -> Judgement:
    """Pass if the stage is a Schmitt stage, or its edge is fast enough for any other."""
    edge = None if stage.kind == "schmitt" else _edge(stage, case)
    kind = "schmitt" if edge is None else "" if edge.holds else case.of(stage).kind.must()
    if edge is None or kind == "schmitt":
        return case.passes("a Schmitt stage is good for any edge", at="kind")
    return case.at_most(
        need=edge.need,
        have=edge.have,
        dimension=_TIME,
        says="input edge",
        why=f"{_ONE.get(kind, 'a')} {kind.replace('_', ' ')} stage has no hysteresis" if kind else "",
        mend=f"make it a Schmitt stage, or an edge of at most {show(edge.need, _TIME)}",
        at="input_edge",
    )


def _detectors_behind(stage: OutputStage, description: Description) -> list[str]:
    """The detectors whose decision a stage passes on."""
    reach = Reach(stage.id, driven_by(build(description)))
    return [name for name in reach if name in description.comparators]


@rule(
    "electromigration/crowbar_droop",
    title="the crowbar current does not move the supply back over the level",
    level=Level.ERROR,
    applies_to="output_stages",
    proves="While the stage passes on the decision of a detector that watches its own rail, the greatest crowbar "
    "current through the greatest source impedance moves that rail by less than the least hysteresis of the detector.",
    facts=(*_PEAK_FACTS, "rails.*.source_impedance", "the facts of comparators.*.hysteresis"),
    mend="a faster edge, smaller transistors, or a stiffer supply",
    sources=(_VEENDRICK, "Ohm's law"),
    example=Example(
        fails="{rails: {avdd: {source_impedance: {max: 200 ohm}, load_step: {max: 0 A}}}, "
        "output_stages: {por_out: {crowbar_peak: 0.28 mA}}}",
        holds="{rails: {avdd: {source_impedance: {max: 150 ohm}, load_step: {max: 0 A}}}, "
        "output_stages: {por_out: {crowbar_peak: 0.28 mA}}}",
    ),
    formulas=(crowbar.peak_current_a, coupling.shared_impedance_bump_v),
    yields=(Yield("hysteresis/present", _detectors_behind),),
)
def crowbar_leaves_the_level(stage: OutputStage, case: Case) -> Judgement:
    """Compare the droop at the crowbar peak with the least hysteresis of the detectors behind it."""
    if (fast := _fast(stage, case)) is not None:
        return fast
    rail = rail_of(case, stage)
    behind = Reach(stage.id, driven_by(case.graph))
    known, gaps = case.description.comparators, gaps_behind(case, stage.id)
    watching = [known[name] for name in behind if name in known and known[name].watches == rail.id]
    if not watching and gaps:
        raise MissingFactsError(gaps)
    if not watching:
        return case.not_applicable(f"no detector that watches {rail.id} drives it")
    # Those without hysteresis are another rule's, as long as one has some.
    detectors = [comparator for comparator in watching if not has_no_hysteresis(comparator)] or watching
    detector, kept = _least_hysteresis(case, detectors)
    if gaps:  # what else drives it may have any
        case.reading.block(gaps)
        kept = kept if case.at_best else Sum(min(kept.value, 0.0), kept.lines)
    source_ohm, current = case.of(rail).source_impedance.most(), crowbar_of(case, stage)
    droop_v = at_corner(
        case,
        lambda: coupling.shared_impedance_bump_v(step_a=current.peak_a, impedance_ohm=source_ohm),
        sure=math.inf,
        best=0.0,
    )
    most_a = kept.value / source_ohm if 0.0 < source_ohm < math.inf else math.inf
    return case.at_most(
        need=kept,
        have=droop_v,
        dimension=_V,
        says=f"its crowbar current moves {rail.id} by",
        why=f"{show(current.peak_a, _A)} ({current.text()}) through {show(source_ohm, _OHM)}; least hysteresis of "
        f"{detector}",
        mend=f"at most {show_down(most_a, _A)} of crowbar current; now {show(current.peak_a, _A)}",
        at="input_edge",
        path=_forwards(behind.path(detector)),
    )


def _forwards(path: Path) -> Path:
    """The way from a stage back to a detector, as the way from the detector to the stage."""
    names = [hop.element for hop in reversed(path)]
    return (Hop(names[0], ""), *(Hop(name, EdgeKind.DRIVES.forwards) for name in names[1:]))


def _least_hysteresis(case: Case, detectors: list[Comparator]) -> tuple[str, Sum]:
    """The detector with the least hysteresis, and how much it is, in V."""
    ends = case.each(partial(_smallest, case, detector) for detector in detectors)
    first = min(zip(detectors, ends, strict=True), key=lambda each: each[1].value)[0]
    return first.id, lowest(ends)


def _smallest(case: Case, detector: Comparator) -> Sum:
    return Sum(0.0, ()) if has_no_hysteresis(detector) else hysteresis_window(case, detector).end("least")


@rule(
    "electromigration/line",
    title="the output line carries the crowbar current",
    level=Level.ERROR,
    applies_to="output_stages",
    proves="An edge much longer than the thermal time constant of a wire is direct current to it: the greatest crowbar "
    "current keeps the r.m.s. and peak limits of the line at its narrowest, less the width bias of the layer, and the "
    "direct limit at the hottest junction and for the service life, or what a line so short carries without failing "
    "(Blech). Where it exceeds what the line carries for good, and no limit against heat, the time of all edges and of "
    "the longest stays at the threshold is added up, and a person must look where the line carries it for so long. A "
    "limit against heat that is not stated is at least the direct current that is.",
    facts=(
        *_PEAK_FACTS, "output_stages.*.output.layer", "output_stages.*.output.width", "process.layers.*.limits",
        *_WEAR_FACTS, "output_stages.*.output.length, process.layers.*.thickness and "
        "process.layers.*.short_length_product, to tell whether the line is too short to fail",
    ),
    mend="a wider line, a faster edge, or smaller transistors",
    sources=(_VEENDRICK, _BLACK, _BLECH, _MINER),
    example=Example(
        fails="output_stages: {por_out: {crowbar_peak: 4 mA, output: {width: 0.5 um, vias: 40}}}",
        holds="output_stages: {por_out: {crowbar_peak: 4 mA, output: {width: 8 um, vias: 40}}}",
    ),
    formulas=(
        crowbar.peak_current_a, crowbar.peak_equivalent_time_s, electromigration.carried_limit,
        electromigration.life_s, electromigration.damage_share, short_length.short_length_product_a_per_m,
        conductor_size.line_limit_a, conductor_size.width_for_current_m,
    ),
)  # fmt: skip
def line_carries_the_crowbar(stage: OutputStage, case: Case) -> Judgement:
    """Compare the crowbar peak with the limits of the line, then with what all of its time uses up."""
    return _carried(stage, case, line_of)


@rule(
    "electromigration/vias",
    title="the output vias carry the crowbar current",
    level=Level.ERROR,
    applies_to="output_stages",
    proves="As electromigration/line, for the vias of the output, which share the current equally.",
    facts=(
        *_PEAK_FACTS, "output_stages.*.output.via", "output_stages.*.output.vias", "process.vias.*.limits",
        *_WEAR_FACTS,
    ),
    mend="more vias, a faster edge, or smaller transistors",
    sources=(_VEENDRICK, _BLACK, _MINER),
    example=Example(
        fails="output_stages: {por_out: {crowbar_peak: 0.28 mA, dwell: 3 h, output: {vias: 1}}}",
        holds="output_stages: {por_out: {crowbar_peak: 0.28 mA, dwell: 3 h, output: {vias: 2}}}",
    ),
    formulas=(
        crowbar.peak_current_a, crowbar.peak_equivalent_time_s, electromigration.carried_limit,
        electromigration.life_s, electromigration.damage_share, conductor_size.vias_for_current,
    ),
)  # fmt: skip
def vias_carry_the_crowbar(stage: OutputStage, case: Case) -> Judgement:
    """Compare the crowbar peak with the limit of the vias, then with what all of its time uses up."""
    return _carried(stage, case, vias_of)


def _carried(stage: OutputStage, case: Case, metal: Callable[[Case, OutputStage], Conductor]) -> Judgement:
    """Compare the crowbar peak with what the metal carries for good, then with what it carries for so long."""
    if (fast := _fast(stage, case)) is not None:
        return fast
    current = crowbar_of(case, stage)
    if current.peak_a == 0.0:
        return case.passes("there is no crowbar current", why=current.text(), at="input_edge")
    conductor = metal(case, stage)
    good = Measure(conductor.for_good_a(case.whole.conditions.service_life.most), current.peak_a, _A, Relation.AT_MOST)
    kind, says, why = (
        Kind.FAIL,
        f"crowbar current of its {conductor.name}",
        f"{current.text()}; {_limits(case, conductor)}",
    )
    if not good.holds and all(_at_most(current, limit_a).holds for limit_a in conductor.heating_a.values()):
        time_s = partial(_time_s, stage, case, current)
        if _at_most(current, conductor.carried_a(time_s)).holds:
            kind, says = Kind.REVIEW, f"for a while only, {says}"
            why = f"{why}; assumes that no more time than this is spent, and that damage adds up linearly (Miner)"
        used = conductor.damage(current.peak_a, time_s)
        why = f"{why}; {_times(stage, case, current)} use up {show(used, Dimension.RATIO)} of its life"
    return case.at_most(
        need=good.need, have=good.have, dimension=_A, says=says, why=why, mend=conductor.enough(current.peak_a),
        at=conductor.fact, otherwise=kind,
    )  # fmt: skip


def _at_most(current: Crowbar, limit_a: float) -> Measure:
    return Measure(limit_a, current.peak_a, _A, Relation.AT_MOST)


def _limits(case: Case, conductor: Conductor) -> str:
    """What the metal carries for good and by what; of what is limited besides, the smallest."""
    direct_a = conductor.carried_a(case.whole.conditions.service_life.most)
    parts = [f"{show(direct_a, _A)} direct, {conductor.stated.text(case)}"]
    if conductor.short_a > direct_a:
        parts.append(f"{show(conductor.short_a, _A)} because {conductor.short_text}")
    if conductor.heating_a:
        word, least_a = min(conductor.heating_a.items(), key=lambda limit: limit[1])
        parts += [f"{show(least_a, _A)} {word}"] if least_a < max(direct_a, conductor.short_a) else []
    return ", ".join(parts)


def _time_s(stage: OutputStage, case: Case, current: Crowbar) -> float:
    """The time that the crowbar peak flows over the service life, in s: on edges, and in stays at the threshold."""
    own, conditions = case.of(stage), case.whole.conditions
    cycles, edges = conditions.power_cycles.number(Better.LESS), own.edges_per_cycle.number(Better.LESS)
    at_peak_s = _at_peak_s(stage, case, current)
    return product(cycles, product(edges, at_peak_s) + own.dwell.most())


def _at_peak_s(stage: OutputStage, case: Case, current: Crowbar) -> float:
    exponent = case.whole.process.current_exponent
    return current.time_at_peak_s(case, edge_s=case.of(stage).input_edge.most(), exponent=exponent)


def _times(stage: OutputStage, case: Case, current: Crowbar) -> str:
    own, cycles = case.of(stage), case.whole.conditions.power_cycles.number(Better.LESS)
    edges, at_peak_s = product(cycles, own.edges_per_cycle.number(Better.LESS)), _at_peak_s(stage, case, current)
    return (
        f"{show(edges, Dimension.COUNT)} edges, each as {show(at_peak_s, _TIME)} at the peak, and "
        f"{show(cycles, Dimension.COUNT)} stays of {show(own.dwell.most(), _TIME)} at it"
    )


RULES: Final[tuple[Rule, ...]] = (
    slow_edge_meets_schmitt,
    crowbar_leaves_the_level,
    line_carries_the_crowbar,
    vias_carry_the_crowbar,
)
