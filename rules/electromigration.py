"""Electromigration: crowbar current of stages behind a slow edge, and the metal that has to carry it."""

from __future__ import annotations

import math
from collections.abc import Callable
from functools import partial
from typing import Final

from tidegate.lint.case import Case
from tidegate.lint.derived.levels.trip_levels import has_no_hysteresis, hysteresis_window
from tidegate.lint.derived.metal.crowbar_peak import Crowbar, crowbar_of
from tidegate.lint.derived.metal.output_metal import Conductor, line_of, vias_of
from tidegate.lint.derived.metal.wire_limit import wear_of
from tidegate.lint.derived.safe_rounding import show_down
from tidegate.lint.derived.supply.rail_of import rail_of
from tidegate.lint.description.model.detector import Comparator
from tidegate.lint.description.model.reset_path import OutputStage
from tidegate.lint.graph.edge import EdgeKind, Hop, Path
from tidegate.lint.graph.paths import Reach, driven_by
from tidegate.lint.judgement import Judgement, Level, Measure, Relation
from tidegate.lint.physics import conductor_size, coupling, crowbar, electromigration, short_length
from tidegate.lint.quantity import Dimension, show
from tidegate.lint.rule import Example, Rule, rule

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


def _edge(case: Case) -> Measure:
    """The input edge against the slowest one that a plain stage is good for."""
    edge_s, plain_s = case.own.most("input_edge"), case.whole.least("process.plain_edge")
    case.settle()
    return Measure(plain_s, edge_s, _TIME, Relation.AT_MOST)


def _why_fast(case: Case) -> str:
    """Why crowbar current is no matter; empty where the stage is behind a slow edge."""
    edge = _edge(case)
    return f"its input edge of {show(edge.have, _TIME)} is not slow" if edge.holds else ""


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
    if stage.kind == "schmitt":
        return case.passes("a Schmitt stage is good for any edge", at="kind")
    edge = _edge(case)
    kind = "" if edge.holds else case.own.must("kind").replace("_", " ")
    return case.at_most(
        need=edge.need,
        have=edge.have,
        dimension=_TIME,
        says="input edge",
        why=f"{_ONE.get(kind, 'a')} {kind} stage has no hysteresis" if kind else "",
        mend=f"make it a Schmitt stage, or an edge of at most {show(edge.need, _TIME)}",
        at="input_edge",
    )


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
)
def crowbar_leaves_the_level(stage: OutputStage, case: Case) -> Judgement:
    """Compare the droop at the crowbar peak with the least hysteresis of the detectors behind it."""
    fast = _why_fast(case)
    if fast:
        return case.not_applicable(fast)
    rail = rail_of(case, stage)
    behind = Reach(stage.id, driven_by(case.graph))
    known = case.description.comparators
    watching = [known[name] for name in behind if name in known and known[name].watches == rail.id]
    detectors = [comparator for comparator in watching if not has_no_hysteresis(comparator)]
    if not detectors:
        why = "has hysteresis (hysteresis/present says so)" if watching else "drives it"
        return case.not_applicable(f"no detector that watches {rail.id} {why}")
    kept, source_ohm, current = case.gather(
        lambda: _least_hysteresis(case, detectors),
        lambda: case.of(rail).most("source_impedance"),
        lambda: crowbar_of(case, stage),
    )
    detector, kept_v = kept
    droop_v = coupling.shared_impedance_bump_v(step_a=current.peak_a, impedance_ohm=source_ohm)
    most_a = kept_v / source_ohm if source_ohm > 0.0 else math.inf
    return case.at_most(
        need=kept_v,
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


def _least_hysteresis(case: Case, detectors: list[Comparator]) -> tuple[str, float]:
    """The detector with the least hysteresis, and how much it is, in V."""
    windows = case.gather_all(partial(hysteresis_window, case, detector) for detector in detectors)
    least = {detector.id: window.least_v for detector, window in zip(detectors, windows, strict=True)}
    return min(least.items(), key=lambda each: each[1])


@rule(
    "electromigration/line",
    title="the output line carries the crowbar current",
    level=Level.ERROR,
    applies_to="output_stages",
    proves="An edge much longer than the thermal time constant of a wire is direct current to it: the greatest crowbar "
    "current keeps the direct, r.m.s. and peak limits of the line at its narrowest, less the width bias of the layer "
    "where there is one, at the hottest junction and for the service life. Where it exceeds the direct limit alone, a "
    "line too short to fail (Blech) will do; else the damage of all edges and of the longest stays at the threshold "
    "is added up, and a person must look where it is no whole life.",
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
        electromigration.damage_share, short_length.short_length_product_a_per_m, conductor_size.line_limit_a,
        conductor_size.width_for_current_m,
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
        electromigration.damage_share, conductor_size.vias_for_current,
    ),
)  # fmt: skip
def vias_carry_the_crowbar(stage: OutputStage, case: Case) -> Judgement:
    """Compare the crowbar peak with the limit of the vias, then with what all of its time uses up."""
    return _carried(stage, case, vias_of)


def _carried(stage: OutputStage, case: Case, metal: Callable[[Case, OutputStage], Conductor]) -> Judgement:
    """Compare the crowbar peak with what the metal carries outright, with its short length, then with its life."""
    fast = _why_fast(case)
    if fast:
        return case.not_applicable(fast)
    known = case.attempt(lambda: crowbar_of(case, stage))
    if known is not None and known.peak_a == 0.0:
        return case.passes("there is no crowbar current", why=known.text(), at="input_edge")
    current, conductor = case.gather(lambda: crowbar_of(case, stage), lambda: metal(case, stage))
    outright = _at_most(current, conductor.limit_a)
    if outright.holds or _heats(current, conductor):
        return case.at_most(
            need=outright.need,
            have=outright.have,
            dimension=_A,
            says=f"crowbar current of its {conductor.name}",
            why=f"{current.text()}; {_limits_text(current, conductor)}",
            mend=conductor.enough(current.peak_a),
            at=conductor.fact,
        )
    short = conductor.short
    if short is not None and _at_most(current, short.largest_a).holds:
        length_um, limit_a_per_cm = short.length_m * 1e6, short.limit_a_per_m / 100.0
        return case.at_most(
            need=short.largest_a,
            have=current.peak_a,
            dimension=_A,
            says=f"too short to fail (Blech) from the crowbar current of its {conductor.name}",
            why=f"{current.text()}; {length_um:g} um keep below {limit_a_per_cm:g} A/cm of density times length; "
            f"for a long line {_limits_text(current, conductor)}",
            at="output.length",
        )
    return _worn(stage, case, current, conductor)


def _at_most(current: Crowbar, limit_a: float) -> Measure:
    return Measure(limit_a, current.peak_a, _A, Relation.AT_MOST)


def _heats(current: Crowbar, conductor: Conductor) -> bool:
    """Whether the current exceeds a limit that no short time and no short length makes up for."""
    return any(not _at_most(current, limit_a).holds for limit_a in conductor.heating_a.values())


def _limits_text(current: Crowbar, conductor: Conductor) -> str:
    """The limit for direct current, and each other limit that the current exceeds or that is the smallest."""
    parts = [f"{show(conductor.direct.here, _A)} direct, {conductor.direct.text()}"]
    for word, limit_a in conductor.heating_a.items():
        if limit_a == conductor.limit_a or not _at_most(current, limit_a).holds:
            parts.append(f"{show(limit_a, _A)} {word}")
    return ", ".join(parts)


def _worn(stage: OutputStage, case: Case, current: Crowbar, conductor: Conductor) -> Judgement:
    """Add up the damage of all edges and all stays at the threshold: a person must look if it is no whole life."""
    own, whole, direct = case.own, case.whole, conductor.direct
    edge_s, dwell_s = own.most("input_edge"), own.most("dwell")
    cycles, edges = whole.number("conditions.power_cycles"), own.number("edges_per_cycle")
    wear = wear_of(case, stated_k=direct.stated_k, hottest_k=direct.hottest_k)
    at_peak_s = current.time_at_peak_s(edge_s=edge_s, exponent=wear.current_exponent)
    spent = [
        electromigration.Exposure(time_s=cycles * edges * at_peak_s, current=current.peak_a),
        electromigration.Exposure(time_s=cycles * dwell_s, current=current.peak_a),
    ]
    share = electromigration.damage_share(
        exposures=spent, limit=direct.stated, wear=wear, stated_k=direct.stated_k, use_k=direct.hottest_k,
        stated_life_s=direct.stated_life_s,
    )  # fmt: skip
    used = Measure(1.0, share, Dimension.RATIO, Relation.AT_MOST)
    says = f"wear of its {conductor.name} over the service life"
    why = (
        f"{show(current.peak_a, _A)} ({current.text()}) against {_limits_text(current, conductor)}; "
        f"{show(cycles * edges, Dimension.COUNT)} edges, each as {show(at_peak_s, _TIME)} at the peak, and "
        f"{show(cycles, Dimension.COUNT)} stays of {show(dwell_s, _TIME)} at it"
    )
    if used.holds:
        return case.asks(
            f"above its direct limit for a while only; {says} {used.text()}",
            why=f"{why}; assumes that no more time than this is spent, and that damage adds up linearly (Miner)",
            mend=conductor.enough(current.peak_a),
            at=conductor.fact,
            measure=used,
        )
    return case.at_most(
        need=used.need,
        have=used.have,
        dimension=Dimension.RATIO,
        says=says,
        why=why,
        mend=conductor.enough(current.peak_a),
        at=conductor.fact,
    )


RULES: Final[tuple[Rule, ...]] = (
    slow_edge_meets_schmitt,
    crowbar_leaves_the_level,
    line_carries_the_crowbar,
    vias_carry_the_crowbar,
)
