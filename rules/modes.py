"""Modes: in every operating mode, what is awake is still watched."""

from __future__ import annotations

from collections.abc import Iterable
from typing import Final

from tidegate.lint.case import Case
from tidegate.lint.derived.levels.at_code import as_shipped
from tidegate.lint.derived.levels.guarded_loads import greatest_supplies, least_supplies
from tidegate.lint.derived.levels.trip_levels import falling_window, rising_window
from tidegate.lint.derived.reset_path.guarding_nets import LOW_ROLES, detectors_behind_nets, guarding_nets, watching
from tidegate.lint.derived.reset_path.mode_states import ModeState, mode_states
from tidegate.lint.derived.safe_rounding import show_down
from tidegate.lint.description.model.detector import Comparator
from tidegate.lint.description.model.reset_path import Load
from tidegate.lint.description.model.supply import Rail
from tidegate.lint.graph.edge import EdgeKind, Hop, Path
from tidegate.lint.graph.leaning_gaps import leaning_gaps
from tidegate.lint.graph.paths import Reach
from tidegate.lint.judgement import Judgement, Level
from tidegate.lint.physics import trip_window
from tidegate.lint.quantity import Dimension, show
from tidegate.lint.rule import Example, Rule, rule

_NO_MODES: Final = "no mode is described"
_COMMON_PRACTICE: Final = "common practice, no source: what runs is watched, in every mode"


def _and(names: Iterable[str]) -> str:
    return " and ".join(dict.fromkeys(names))


@rule(
    "modes/live_detector",
    title="in every mode, each load that is not off has a live detector on every rail it needs",
    level=Level.ERROR,
    applies_to="loads",
    proves="In each mode in which the load is not off (by itself, with its domain or with the maker of a rail it "
    "needs), at least one of the detectors that protect it in service (the under-voltage detectors of the rail that "
    "reset it; where it has none, the power-on detectors) is neither off nor masked, leans on nothing that is off, and "
    "reaches a net that guards the load through stages that are awake.",
    facts=("modes.*.off", "modes.*.masked", "what each of the detectors leans on", "resets.*.guards and driven_by"),
    mend="keep a detector awake in the mode, or let the load be off too",
    sources=(_COMMON_PRACTICE,),
    example=Example(
        fails="modes: {drift: {off: [ref_main, adc, uv]}}",
        holds="modes: {drift: {off: [ref_main, adc, uv, core_regulator]}}",
    ),
)
def load_is_watched_in_every_mode(load: Load, case: Case) -> Judgement:
    """Find a mode and a rail in which nothing that protects the load is live."""
    modes = mode_states(case.description, case.graph)
    if not modes:
        return case.not_applicable(_NO_MODES)
    nets = guarding_nets(case.graph, load)
    if not nets:
        return case.not_applicable("no reset net guards it (reach/has_reset says so)")
    protected = {rail: found for rail in (need.rail for need in load.needs) if (found := _protecting(case, nets, rail))}
    if not protected:
        return case.not_applicable("no detector of its rails resets it (reach/every_rail and coverage say so)")
    awake = [mode for mode in modes if not mode.is_off(load)]
    for mode in awake:
        heard = {name for net in nets for name in mode.heard_by(net)}
        for rail, detectors in protected.items():
            if not any(detector.id in heard for detector in detectors):
                return _unwatched(case, load, mode, rail, detectors)
    _note_gaps(case, (detector for found in protected.values() for detector in found), modes)
    case.settle()
    if not awake:
        return case.passes(f"is off in {_and(mode.name for mode in modes)}")
    return case.passes(f"watched in {_and(mode.name for mode in awake)}")


def _protecting(case: Case, nets: Iterable[str], rail: str) -> list[Comparator]:
    """The detectors of a rail that protect what some nets guard."""
    behind = case.graph.once(detectors_behind_nets)
    found = {one.id: one for net in nets for one in behind[net] if one.watches == rail and one.role in LOW_ROLES}
    under = [one for one in found.values() if one.role == "under_voltage"]
    return under or list(found.values())


def _unwatched(case: Case, load: Load, mode: ModeState, rail: str, detectors: Iterable[Comparator]) -> Judgement:
    whys: list[str] = []
    path: Path = ()
    for detector in detectors:
        asleep = mode.why_deaf(detector.id)
        if asleep is None:
            whys.append(f"no stage that is awake carries the decision of {detector.id} to it")
        else:
            whys.append(asleep.text(detector.id))
            if not asleep.masked and asleep.because != detector.id and not path:
                reach = Reach(detector.id, case.graph.needs)
                path = reach.path(asleep.because) if asleep.because in reach else ()
    return case.fails(
        f"in {mode.name} it is not off, and no detector of {rail} watches over it: {'; '.join(whys)}",
        mend=f"keep a detector of {rail} awake in {mode.name}, or name {load.id} among what is off",
        at="needs",
        path=path or (Hop(load.id, ""), Hop(rail, EdgeKind.SUPPLIED_BY.forwards)),
    )


def _note_gaps(case: Case, detectors: Iterable[Comparator], modes: Iterable[ModeState]) -> None:
    """Note what is not said of the sources of detectors, where something is off that could be among them."""
    if not any(mode.mode.off for mode in modes):
        return
    for detector in detectors:
        for fact in leaning_gaps(detector):
            case.of(detector).lacks(fact)


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
    detectors = watching(case.graph, rail.id, ("over_voltage",))
    if not detectors:
        return case.not_applicable("no over-voltage detector watches it")
    if not modes:
        return case.not_applicable(_NO_MODES)
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
    formulas=(trip_window.droop_during_response_v,),
)  # fmt: skip
def sampled_detector_is_quick_enough(comparator: Comparator, case: Case) -> Judgement:
    """Compare the sampling period with the time in which the rail takes the loads out of their range."""
    in_modes = [
        mode.name for mode in mode_states(case.description, case.graph) if comparator.id in (mode.mode.sampled or ())
    ]
    if not in_modes:
        return case.not_applicable("no mode names it as sampled")
    over = comparator.role == "over_voltage"
    sampling_s = case.own.most("sampling")
    slew_v_per_s = case.of(case.description.rails[comparator.watches]).most("overshoot" if over else "collapse")
    window, bounds = case.gather(
        lambda: (rising_window if over else falling_window)(case, as_shipped(case, comparator)),
        lambda: greatest_supplies(case, comparator) if over else least_supplies(case, comparator),
    )
    if not bounds:
        return case.not_applicable("it guards no load of its rail")
    room_v = bounds[0].level_v - window.most_v if over else window.least_v - bounds[0].level_v
    if room_v < 0.0:
        return case.not_applicable("its level does not protect its loads at all (trip_window/guarantee says so)")
    moved_v = trip_window.droop_during_response_v(slew_v_per_s=slew_v_per_s, delay_s=sampling_s)
    longest_s = room_v / slew_v_per_s if slew_v_per_s else float("inf")
    return case.at_most(
        need=room_v, have=moved_v, dimension=Dimension.VOLTAGE,
        says=f"sampled in {_and(in_modes)}: between two samples {comparator.watches} moves",
        why=f"{show(slew_v_per_s, Dimension.SLOPE)} for {show(sampling_s, Dimension.DURATION)}; {bounds[0].element} "
        f"works {'up to' if over else 'from'} {show(bounds[0].level_v, Dimension.VOLTAGE)}, the level lies at "
        f"{show(window.most_v if over else window.least_v, Dimension.VOLTAGE)} at its worst",
        mend=f"a period of {show_down(longest_s, Dimension.DURATION)} or less", at="sampling", path=bounds[0].path,
    )  # fmt: skip


RULES: Final[tuple[Rule, ...]] = (
    load_is_watched_in_every_mode,
    rail_is_watched_from_above_in_every_mode,
    sampled_detector_is_quick_enough,
)
