"""Start-up, the way down: when a rail falls or dips, reset comes before the load leaves its range."""

from __future__ import annotations

from typing import Final

from tidegate.lint.case import Case
from tidegate.lint.derived.levels.trip_causes import LEVEL_FORMULAS
from tidegate.lint.derived.reset_path.guarding_nets import guard_gaps, guarding_nets
from tidegate.lint.derived.safe_rounding import show_up
from tidegate.lint.derived.unsaid import missing
from tidegate.lint.description.model.reset_path import Load
from tidegate.lint.judgement import Judgement, Level
from tidegate.lint.physics import ramp
from tidegate.lint.quantity import Dimension, show
from tidegate.lint.rule import Example, Rule, rule
from tidegate.lint.timing.interval import FOREVER_S
from tidegate.lint.timing.judging import judged_in_time
from tidegate.lint.timing.parts import Bounds, LoadPart
from tidegate.lint.timing.slack import Slack, assert_slack, is_missed
from tidegate.lint.timing.timeline import Timeline, Timelines, timelines
from tidegate.rules.told_elsewhere import DECIDES_TOO_LATE, NEVER_KNOWN, NOBODY_JUDGES

_T: Final = Dimension.DURATION
_V: Final = Dimension.VOLTAGE
_JUST: Final = 1.0 - 1e-9
DERIVED: Final = "arrival times over the dependency graph, each the last of what is needed (derived)"
RESET_PATH: Final = (
    "comparators.*.trip, delay, filter, sampling, works_from, output", "references.*.works_from and settling",
    "biases.*.works_from and settling", "output_stages.*.works_from, hold, delay, release_delay and discharge",
    "domains.*.rail and kind",
)  # fmt: skip


def not_guarded(case: Case) -> Judgement:
    """What is said of a load that no reset net guards, where that is known."""
    assert isinstance(case.subject, Load)
    if gaps := guard_gaps(case, case.subject):
        missing(gaps)
    return case.not_applicable("no reset net guards it")


def _needs(load: Load, case: Case) -> list[str]:
    """The rails that a load needs.

    Raises: MissingFactsError: where none is named.
    """
    if not load.needs:
        case.of(load).lacks("needs")
        case.settle()
    return [need.rail for need in load.needs]


@rule(
    "start_up/asserts_in_time",
    title="reset is asserted before a falling rail leaves the range of the load",
    level=Level.ERROR,
    applies_to="loads",
    proves="When any rail that the load needs falls by itself as steeply as it may (its collapse; where that is not "
    "stated no steeper than I / C, where its hold-up and the current of all its loads are), the latest assertion of "
    "its reset comes no later than the rail leaves the range in which the load works.",
    facts=("loads.*.needs.*.works", "rails.*.nominal and collapse", *RESET_PATH),
    mend="a higher falling level, a faster answer, or a rail that falls less steeply",
    sources=(DERIVED, "C dV = I dt for a constant current"),
    example=Example(
        fails="output_stages: {rst_out: {delay: {min: 10 ns, max: 20 us}}}",
        holds="output_stages: {rst_out: {delay: {min: 10 ns, max: 100 ns}}}",
    ),
    formulas=(*LEVEL_FORMULAS,),
    yields=(*NEVER_KNOWN, *DECIDES_TOO_LATE, *NOBODY_JUDGES, "start_up/dip_is_caught"),
)  # fmt: skip
def reset_is_asserted_in_time(load: Load, case: Case) -> Judgement:
    """Compare the time at which each rail leaves the range of the load with the latest assertion."""
    if not guarding_nets(case.graph, load):
        return not_guarded(case)
    wide = timelines(case.description, case.graph)
    gaps = wide.gaps(load.id, falling=_needs(load, case), rails_forced=True)

    def judge(lines: Timelines) -> Judgement:
        found = [
            (slack, rail, works)
            for rail, works in _ranges(lines, load)
            if (slack := _slack(lines, load, rail, works)) is not None
        ]
        if not found:
            return case.passes("no rail that falls from nominal leaves its range", at="needs")
        least, rail, works = min(found, key=lambda one: one[0].slack_s)
        falls = f"{least.scenario.about}; the load works down to {show(works.least, _V)}"
        if least.first_s == FOREVER_S:
            return case.fails(
                f"its reset may never be asserted when {rail} falls", why=falls,
                mend=f"let a detector of {rail} that is alive down to 0 V, or held, reset it", at="needs",
            )  # fmt: skip
        if least.first_s == -FOREVER_S:
            return case.passes(f"its reset is asserted before {rail} falls", at="needs")
        ramp = lines.ramps.by_rail[rail]
        if ramp.lacks.steepest and least.slack_s < 0.0:
            return case.fails(
                f"its reset is asserted {show_up(-least.slack_s, _T)} too late when {rail} falls no steeper than it is "
                "known to", why=falls, mend="an answer that comes sooner, or a higher falling level", at="needs",
            )  # fmt: skip
        return case.at_least(
            need=least.first_s, have=least.then_s, dimension=_T,
            says=f"{rail} leaves the range of the load, falling from nominal, after",
            why=f"{falls}, the latest assertion comes after {show(least.first_s, _T)}",
            mend=f"an answer that comes {show_up(-least.slack_s, _T)} sooner, or a falling level that lies "
            f"{show_up(-least.slack_s * ramp.steepest.v_per_s, _V)} higher", at="needs",
        )  # fmt: skip

    return judged_in_time(case, gaps, judge)


def _ranges(lines: Timelines, load: Load) -> list[tuple[str, Bounds]]:
    """Each rail that a load needs, with the supply between which it works; one of an unknown range is left at once."""
    part = lines.read.every[load.id]
    assert isinstance(part, LoadPart)
    found = []
    for rail, works in part.works:
        ramp = lines.ramps.by_rail.get(rail)
        top_v = works.least if ramp is None or not part.may_work or lines.network.best else ramp.nominal_v * _JUST
        found.append((rail, Bounds(min(works.least, top_v), works.most)))
    return found


def _nominal_v(lines: Timelines, rail: str) -> float:
    """The nominal level of a rail, in V; a load that works from above it is out of its range before any dip."""
    ramp = lines.ramps.by_rail.get(rail)
    return FOREVER_S if ramp is None else ramp.nominal_v


def _slack(lines: Timelines, load: Load, rail: str, works: Bounds) -> Slack | None:
    line = lines.alone(rail)
    return None if line is None else assert_slack(line, load.id, rail=rail, works=works)


@rule(
    "start_up/dip_is_caught",
    title="no dip takes a load out of its range without resetting it",
    level=Level.ERROR,
    applies_to="loads",
    proves="Dips of each rail that the load needs, to every level at which something changes and of every length that "
    "matters (for long, for just less than the slowest filter surely sees, and without a bottom), all assert its reset "
    "if they go below the range in which it works.",
    facts=("loads.*.needs.*.works", "rails.*.nominal, rise and collapse", *RESET_PATH),
    mend="a higher falling level, a shorter filter, or an output that is a level for every supply below the threshold",
    sources=(DERIVED,),
    example=Example(
        fails="comparators: {uv: {output: pulse, pulse: {min: 20 us, max: 30 us}}}",
        holds="comparators: {uv: {output: level}}",
    ),
    formulas=(*LEVEL_FORMULAS, ramp.ramp_slope_v_per_s),
    yields=(*NEVER_KNOWN, *DECIDES_TOO_LATE, *NOBODY_JUDGES),
)  # fmt: skip
def dip_is_caught(load: Load, case: Case) -> Judgement:
    """Compare the deepest dip that may be missed with the least supply at which the load works."""
    if not guarding_nets(case.graph, load):
        return not_guarded(case)
    rails = _needs(load, case)
    gaps = timelines(case.description, case.graph).gaps(load.id, dipping=rails, rails_forced=True)

    def judge(lines: Timelines) -> Judgement:
        margins = [
            (deepest[0] - works.least, works.least, rail, deepest)
            for rail, works in _ranges(lines, load)
            if works.least < _nominal_v(lines, rail) and (deepest := _deepest_missed(lines, load, rail)) is not None
        ]
        if not margins:
            return case.passes("no dip can be missed", at="needs")
        _, need_v, rail, (have_v, line) = min(margins, key=lambda margin: margin[0])
        return case.at_least(
            need=need_v, have=have_v, dimension=_V,
            says=f"the deepest dip of {rail} that may be missed goes down to",
            why=f"{line.scenario.about}; the load works down to {show(need_v, _V)}",
            mend=f"see dips {show_up(need_v - have_v, _V)} sooner: a higher falling level, or a shorter filter",
            at="needs",
        )  # fmt: skip

    return judged_in_time(case, gaps, judge)


def _deepest_missed(lines: Timelines, load: Load, rail: str) -> tuple[float, Timeline] | None:
    """The level in V of the deepest dip of a rail that may pass without the load being reset; None where none may.

    A rail that may be gone for good without resetting it may dip as deep.
    """
    gone = lines.alone(rail)
    if gone is not None and is_missed(gone, load.id):
        return 0.0, gone
    missed = ((_depth_v(line), line) for line in lines.dips(rail) if is_missed(line, load.id))
    return min(missed, key=lambda one: one[0], default=None)


def _depth_v(line: Timeline) -> float:
    """The lowest level of a dip, in V."""
    return min(level_v for _, level_v in line.scenario.waveforms[line.scenario.rail].points)


RULES: Final[tuple[Rule, ...]] = (reset_is_asserted_in_time, dip_is_caught)
