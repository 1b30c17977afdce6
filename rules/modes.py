"""Modes: in every operating mode, what is awake is still watched."""

from __future__ import annotations

from collections.abc import Iterable
from typing import Final

from tidegate.lint.account import Sum
from tidegate.lint.case import Case
from tidegate.lint.derived.levels.at_code import as_shipped
from tidegate.lint.derived.levels.guarded_loads import greatest_supplies, least_supplies
from tidegate.lint.derived.levels.trip_causes import LEVEL_FORMULAS
from tidegate.lint.derived.levels.trip_levels import falling_window, rising_window
from tidegate.lint.derived.reset_path.guarding_nets import (
    LOW_ROLES,
    detectors_behind_nets,
    guard_gaps,
    guarding_nets,
    watching,
)
from tidegate.lint.derived.reset_path.mode_states import ModeState, mode_states
from tidegate.lint.derived.reset_path.path_gaps import gaps_behind, unsaid_ways
from tidegate.lint.derived.safe_rounding import show_down
from tidegate.lint.derived.unsaid import unsaid
from tidegate.lint.description.model.detector import Comparator
from tidegate.lint.description.model.reset_path import Load
from tidegate.lint.description.model.supply import Rail
from tidegate.lint.graph.edge import EdgeKind, Hop, Path
from tidegate.lint.graph.leaning_gaps import before_gaps, leaning_gaps
from tidegate.lint.graph.paths import Reach, drives
from tidegate.lint.judgement import Judgement, Level
from tidegate.lint.physics import trip_window
from tidegate.lint.quantity import Dimension, show
from tidegate.lint.rule import Example, Rule, rule
from tidegate.rules.told_elsewhere import DECIDES_TOO_LATE

_INFINITE: Final = float("inf")
_COMMON_PRACTICE: Final = "common practice, no source: what runs is watched, in every mode"


def _and(names: Iterable[str]) -> str:
    return " and ".join(dict.fromkeys(names))


@rule(
    "modes/live_detector",
    title="in every mode, each load that is not off has a live detector on every rail it needs",
    level=Level.ERROR,
    applies_to="loads",
    proves="In each mode in which the load is not off (by itself, with its domain or with the maker of a rail it "
    "needs), the detectors that protect it in service (the under-voltage detectors of the rail that reset it; where it "
    "has none, the power-on detectors) are live: neither off nor masked, leaning on nothing that is off, and heard by "
    "a net that guards the load through stages that are awake. Where one is not, the lowest falling level of another "
    "live detector of the rail, which is no higher than its lowest rising one, lies no lower than the load needs.",
    facts=("modes.*.off", "modes.*.masked", "what each of the detectors leans on", "resets.*.guards and driven_by",
           "comparators.*.trip", "loads.*.needs.*.works"),
    mend="keep a detector awake in the mode, or let the load be off too",
    sources=(_COMMON_PRACTICE,),
    example=Example(
        fails="modes: {drift: {off: [ref_main, adc, uv]}}",
        holds="modes: {drift: {off: [ref_main, adc, uv, core_regulator]}}",
    ),
    yields=("reach/has_reset", "reach/every_rail", *DECIDES_TOO_LATE),
)  # fmt: skip
def load_is_watched_in_every_mode(load: Load, case: Case) -> Judgement:
    """Find the mode and the rail in which what is live protects the load least."""
    modes = mode_states(case.description, case.graph)
    if not modes:
        return _no_modes(case)
    nets = guarding_nets(case.graph, load)
    if not nets:
        case.missing.extend(guard_gaps(case, load))
        case.settle()
        return case.not_applicable("no reset net guards it")
    if not load.needs:
        case.of(load).lacks("needs")
        case.settle()
    watched = {rail: _watching(case, nets, rail) for rail in dict.fromkeys(need.rail for need in load.needs)}
    if not any(watched.values()):
        case.missing.extend(fact for net in nets for fact in gaps_behind(case, net))
        case.settle()
        return case.not_applicable("no detector of its rails resets it")
    awake = [mode for mode in modes if not mode.is_off(load)]
    stands_in: list[tuple[Judgement, float]] = []
    for mode in awake:
        heard = {name for net in nets for name in mode.heard_by(net)}
        for rail, found in watched.items():
            live = [one for one in found if one.id in heard]
            lost = [one for one in _protecting(found) if one.id not in heard]
            if lost and not live:
                _note_asleep(case, load, mode)
                return _unwatched(case, load, mode, rail, lost)
            if lost:
                said = _stand_in(case, load, mode, rail, (live, lost))
                stands_in.append((said, said.measure.margin if said.measure is not None else 0.0))
    _note_gaps(case, (detector for found in watched.values() for detector in found), modes)
    case.settle()
    if stands_in:
        return min(stands_in, key=lambda one: one[1])[0]
    if not awake:
        return case.passes(f"is off in {_and(mode.name for mode in modes)}")
    return case.passes(f"watched in {_and(mode.name for mode in awake)}")


def _no_modes(case: Case) -> Judgement:
    """What is said where no mode is described, and where that is known to be all."""
    case.missing.extend(unsaid(case, "modes"))
    case.settle()
    return case.not_applicable("no mode is described")


def _watching(case: Case, nets: Iterable[str], rail: str) -> list[Comparator]:
    """The detectors of too low a supply of a rail that reset what some nets guard."""
    behind = case.graph.once(detectors_behind_nets)
    found = {one.id: one for net in nets for one in behind[net] if one.watches == rail and one.role in LOW_ROLES}
    return [found[name] for name in sorted(found)]


def _protecting(found: Iterable[Comparator]) -> list[Comparator]:
    """Those that protect a load in service."""
    under = [one for one in found if one.role == "under_voltage"]
    return under or list(found)


def _stand_in(
    case: Case, load: Load, mode: ModeState, rail: str, detectors: tuple[list[Comparator], list[Comparator]]
) -> Judgement:
    """Compare the level of what is still live in a mode with what the load needs."""
    live, lost = detectors
    levels = [(_lowest(case, one), one.id) for one in live]
    have, best = max(levels, key=lambda level: (level[0].value, level[1]))
    needs_v = max(
        facts.works.least() for need, facts in zip(load.needs, case.of(load).needs, strict=True) if need.rail == rail
    )
    return case.at_least(
        need=needs_v, have=have, dimension=Dimension.VOLTAGE,
        says=f"in {mode.name} {best} stands in for {_and(one.id for one in lost)}, and falls at the lowest at",
        why=f"{'; '.join(_why_deaf(mode, one) for one in lost)}; {load.id} works from "
        f"{show(needs_v, Dimension.VOLTAGE)} of {rail}",
        mend=f"keep {_and(one.id for one in lost)} awake in {mode.name}, or name {load.id} among what is off",
        at="needs", path=_path(case, load, mode, rail, lost),
    )  # fmt: skip


def _lowest(case: Case, detector: Comparator) -> Sum:
    """The lowest falling level of a detector; where it is not exactly known, no higher than where it rises."""
    shipped = as_shipped(case, detector)
    log = case.reading.listen()
    falling = falling_window(case, shipped).end("least")
    case.reading.unlisten()
    if not log or not case.at_best:
        return falling
    return min(falling, rising_window(case, shipped).end("least"), key=lambda level: level.value)


def _why_deaf(mode: ModeState, detector: Comparator) -> str:
    asleep = mode.why_deaf(detector.id)
    if asleep is None:
        return f"no stage that is awake carries the decision of {detector.id} to it"
    return asleep.text(detector.id)


def _unwatched(case: Case, load: Load, mode: ModeState, rail: str, detectors: Iterable[Comparator]) -> Judgement:
    whys = "; ".join(_why_deaf(mode, detector) for detector in detectors)
    return case.fails(
        f"in {mode.name} it is not off, and no detector of {rail} watches over it: {whys}",
        mend=f"keep a detector of {rail} awake in {mode.name}, or name {load.id} among what is off",
        at="needs",
        path=_path(case, load, mode, rail, detectors),
    )


def _path(case: Case, load: Load, mode: ModeState, rail: str, detectors: Iterable[Comparator]) -> Path:
    """The way from the first of some detectors that leans on what is off to that; where none does, to the rail."""
    for detector in detectors:
        asleep = mode.why_deaf(detector.id)
        if asleep is not None and not asleep.masked and asleep.because != detector.id:
            reach = Reach(detector.id, case.graph.needs)
            if asleep.because in reach:
                return reach.path(asleep.because)
    return Hop(load.id, ""), Hop(rail, EdgeKind.SUPPLIED_BY.forwards)


def _note_asleep(case: Case, load: Load, mode: ModeState) -> None:
    """End the question where a load may be off with its domain, and it is not said in which it lives."""
    if load.domain is None and any(name in mode.asleep for name in case.description.domains):
        case.of(load).lacks("domain")
        case.settle()


def _note_gaps(case: Case, detectors: Iterable[Comparator], modes: Iterable[ModeState]) -> None:
    """Note what is not said of what detectors lean on, where something is off that could be among it."""
    if not any(mode.mode.off for mode in modes):
        return
    loose = case.graph.once(before_gaps)
    for detector in detectors:
        for name in Reach(detector.id, case.graph.needs) if detector.id in loose else ():
            element = case.graph.elements[name]
            case.missing.extend(element.fact(fact) for fact in leaning_gaps(element))


@rule(
    "modes/over_voltage",
    title="a rail that is watched for too high a supply is watched so in every mode",
    level=Level.WARNING,
    applies_to="rails",
    proves="In each mode in which the maker of the rail is not off, at least one of its over-voltage detectors is "
    "neither off nor masked and leans on nothing that is off.",
    facts=("modes.*.off", "modes.*.masked", "what each over-voltage detector leans on"),
    mend="keep an over-voltage detector awake in the mode",
    sources=(_COMMON_PRACTICE,),
    example=Example(
        fails="modes: {self_test: {masked: [ov]}}",
        holds="modes: {drift: {off: [adc]}}",
    ),
)
def rail_is_watched_from_above_in_every_mode(rail: Rail, case: Case) -> Judgement:
    """Find a mode in which every over-voltage detector of the rail is deaf."""
    modes = mode_states(case.description, case.graph)
    detectors = sorted(watching(case.graph, rail.id, ("over_voltage",)), key=lambda one: one.id)
    if not detectors:
        return case.not_applicable("no over-voltage detector watches it")
    if not modes:
        return _no_modes(case)
    for mode in modes:
        if rail.id in mode.asleep:
            continue
        deaf = [(detector.id, mode.why_deaf(detector.id)) for detector in detectors]
        if all(why is not None for _, why in deaf):
            return case.fails(
                f"in {mode.name} no over-voltage detector watches it: "
                + "; ".join(why.text(name) for name, why in deaf if why is not None),
                mend=f"keep an over-voltage detector of {rail.id} awake in {mode.name}",
            )
    _note_gaps(case, detectors, modes)
    case.settle()
    return case.passes(f"watched in {_and(mode.name for mode in modes)}")


@rule(
    "modes/sampling",
    title="a detector that decides only now and then does so often enough",
    level=Level.ERROR,
    applies_to="comparators",
    proves="A detector that a mode names as sampled states its period, and while it waits for the next sample the "
    "rail, at its steepest, does not move past what the loads bear: from the level at its worst end to the most "
    "demanding load. The answer as a whole, delay and filter included, is judged by trip_window/guarantee.",
    facts=(
        "modes.*.sampled", "comparators.*.sampling", "comparators.*.trip", "rails.*.collapse, or overshoot for an "
        "over-voltage detector", "loads.*.needs.*.works",
    ),
    mend="a shorter period, or a level further from what the loads need",
    sources=("a sample sees what came before it (derived)",),
    example=Example(
        fails="{modes: {drift: {sampled: [uv]}}, comparators: {uv: {sampling: 8 us}}}",
        holds="{modes: {drift: {sampled: [uv]}}, comparators: {uv: {sampling: 4 us}}}",
    ),
    formulas=(*LEVEL_FORMULAS, trip_window.droop_during_response_v),
    yields=("trip_window/placement_sense",),
)  # fmt: skip
def sampled_detector_is_quick_enough(comparator: Comparator, case: Case) -> Judgement:
    """Compare the sampling period with the time in which the rail takes the loads out of their range."""
    in_modes = [
        mode.name for mode in mode_states(case.description, case.graph) if comparator.id in (mode.mode.sampled or ())
    ]
    if not in_modes:
        return case.not_applicable("no mode names it as sampled")
    over = comparator.role == "over_voltage"
    rail = case.of(case.description.rails[comparator.watches])
    slope, sampling = rail.overshoot if over else rail.collapse, case.of(comparator).sampling
    shipped = as_shipped(case, comparator)
    level = rising_window(case, shipped).end("most") if over else falling_window(case, shipped).end("least")
    bounds = greatest_supplies(case, comparator) if over else least_supplies(case, comparator)
    gaps = unsaid_ways(case, Reach(comparator.id, drives(case.graph)))
    case.reading.block(gaps)
    if not bounds:
        case.missing.extend(gaps)
        case.settle()
        return case.not_applicable("it guards no load of its rail")
    first = bounds[0]
    room_v = first.level_v - level.value if over else level.value - first.level_v
    if gaps and not case.at_best:
        room_v = -_INFINITE  # what else it may guard may need anything
    slew_v_per_s, sampling_s = slope.most(), sampling.most()
    return case.at_most(
        need=Sum(room_v, (), level.loose),
        have=trip_window.droop_during_response_v(slew_v_per_s=slew_v_per_s, delay_s=sampling_s),
        dimension=Dimension.VOLTAGE,
        says=f"sampled in {_and(in_modes)}: between two samples {comparator.watches} moves",
        why=f"{show(slew_v_per_s, Dimension.SLOPE)} for {show(sampling_s, Dimension.DURATION)}; {first.element} "
        f"works {'up to' if over else 'from'} {show(first.level_v, Dimension.VOLTAGE)}, the level lies at "
        f"{show(level.value, Dimension.VOLTAGE)} at its worst",
        mend=_period(room_v, slew_v_per_s), at="sampling", path=first.path,
    )  # fmt: skip


def _period(room_v: float, slew_v_per_s: float) -> str:
    """The longest period that would do, in words."""
    if room_v <= 0.0 or not slew_v_per_s:
        return "a level further from what the loads need"
    return f"a period of {show_down(room_v / slew_v_per_s, Dimension.DURATION)} or less"


RULES: Final[tuple[Rule, ...]] = (
    load_is_watched_in_every_mode,
    rail_is_watched_from_above_in_every_mode,
    sampled_detector_is_quick_enough,
)
