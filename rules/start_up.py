"""Start-up: on the way up, in a dip and on the way down, reset holds whatever it guards for as long as it must."""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from typing import Final

from tidegate.lint.case import Case
from tidegate.lint.derived.levels.trip_causes import LEVEL_FORMULAS
from tidegate.lint.derived.reset_path.guarding_nets import guarding_nets
from tidegate.lint.derived.safe_rounding import show_up
from tidegate.lint.derived.supply.rail_order import rails_before
from tidegate.lint.description.model.reset_path import Load, Reset
from tidegate.lint.description.model.supply import Rail
from tidegate.lint.judgement import Judgement, Level
from tidegate.lint.physics import ramp
from tidegate.lint.quantity import Dimension, show
from tidegate.lint.rule import Example, Rule, rule
from tidegate.lint.timing.blame import Why, blame_for_unknown
from tidegate.lint.timing.common_cause import release_slack_apart
from tidegate.lint.timing.hidden import with_certain_releases
from tidegate.lint.timing.interval import FOREVER_S
from tidegate.lint.timing.judging import judged_in_time
from tidegate.lint.timing.parts import ResetPart
from tidegate.lint.timing.scenario import Scenario, Scene
from tidegate.lint.timing.slack import Slack, begin_slack, release_slack, unknown_while_read, worst
from tidegate.lint.timing.timeline import Timeline, Timelines, timelines
from tidegate.rules import start_up_falls
from tidegate.rules.start_up_falls import DERIVED, RESET_PATH, not_guarded
from tidegate.rules.told_elsewhere import NEVER_KNOWN

_T: Final = Dimension.DURATION
_ANY_START: Final = (Scene.START, Scene.CYCLE)


@rule(
    "start_up/release_after_ready",
    title="reset is released only when the load is ready",
    level=Level.ERROR,
    applies_to="loads",
    proves="In every start-up (fastest and slowest ramp, a ramp that goes back, rails late and early, residual "
    "charge, off and on again, every dip, and the description's own waveforms), the earliest time at which the last of "
    "the nets that guard the load can be released comes no sooner than the latest time at which its supplies and "
    "references are up and its time to be ready is over. What is not given may be anything; what cannot be tried "
    "without it is not known to hold.",
    facts=(
        "loads.*.needs, works, ready, references", "rails.*.nominal, rise, after, delay", *RESET_PATH,
    ),
    mend="hold reset for longer, let it wait for what comes late, or make what the load needs come sooner",
    sources=(DERIVED,),
    example=Example(
        fails="output_stages: {rst_out: {release_delay: {min: 100 us, max: 400 us}}}",
        holds="output_stages: {rst_out: {release_delay: {min: 200 us, max: 400 us}}}",
    ),
    formulas=(*LEVEL_FORMULAS, ramp.ramp_slope_v_per_s),
    yields=NEVER_KNOWN,
)  # fmt: skip
def release_comes_after_ready(load: Load, case: Case) -> Judgement:
    """Compare the earliest release with the latest time at which the load is ready, in the worst scenario."""
    if not guarding_nets(case.graph, load):
        return not_guarded(case)
    wide = timelines(case.description, case.graph)
    rails = [need.rail for need in load.needs]
    gaps = wide.gaps(load.id, scenes=_ANY_START, falling=rails, dipping=rails, own=True)
    surely = worst(release_slack(line, load.id) for line in _courses(wide, rails))
    comes = any(line.scenario.scene is Scene.START for line in wide.starts)

    def judge(lines: Timelines) -> Judgement:
        if surely is None and (lines is wide or (comes and not gaps.untried)):
            names = ", ".join(line.scenario.name for line in wide.starts)
            return case.fails(
                f"its reset is never released ({names})",
                mend="let every detector that resets it let go within the supply in service",
            )
        every = _courses(lines, rails)
        courses: Sequence[Timeline] = every
        if gaps.facts or gaps.lone:
            other = wide.at_best if lines is wide else wide
            courses = with_certain_releases(lines, every, other, _courses(other, rails), load.id)
        if lines is wide and len(courses) < len(every):
            return case.fails("it is not known whether its reset is released again", mend="give what asserts it")
        least = worst(release_slack(line, load.id) for line in courses)
        if least is None or surely is None:
            return case.passes("it is not known when its reset is released")
        shared: Sequence[str] = ()
        if least.slack_s < 0.0 or (lines is not wide and surely.slack_s < 0.0):
            least, shared = release_slack_apart(lines, load.id, courses, at_best_of=None if lines is wide else wide)
        return _release_judgement(case, least, shared)

    return judged_in_time(case, gaps, judge)


def _courses(lines: Timelines, rails: Iterable[str]) -> list[Timeline]:
    """Every start-up, and every dip of some rails."""
    return [*lines.starts, *(dip for rail in rails for dip in lines.dips(rail))]


def _release_judgement(case: Case, least: Slack, shared: Sequence[str]) -> Judgement:
    where = least.scenario.name
    both_ends = f"; {', '.join(shared)} at either end, for both times alike" if shared else ""
    if least.first_s == FOREVER_S:
        return case.fails(
            f"released from {show(least.then_s, _T)} on, and may never be ready ({where})",
            why=f"{least.scenario.about}{both_ends}",
            mend="release it by a net that waits for all that it needs",
            at="ready",
        )
    if least.then_s < least.scenario.rises_s <= least.first_s:
        return case.fails(
            f"may be released before the last of its supplies rises ({where})",
            why=f"{least.scenario.about}; released from {show(least.then_s, _T)} on",
            mend="let its reset wait for every rail that it needs",
            at="needs",
        )
    return case.at_least(
        need=least.first_s - least.from_s, have=least.then_s - least.from_s, dimension=_T,
        says=f"earliest release ({where})",
        why=f"{least.scenario.about}; ready at the latest {show(least.first_s - least.from_s, _T)} after the supply "
        f"begins to rise{both_ends}",
        mend=f"release it {show_up(-least.slack_s, _T)} later, or let it be ready that much sooner", at="ready",
    )  # fmt: skip


@rule(
    "start_up/no_unknown_interval",
    title="a reset net is never at an unknown level while its receivers read it",
    level=Level.ERROR,
    applies_to="resets",
    proves="In every start-up, power-down and dip, whenever the receivers of the net have a supply at which they "
    "read it (their least threshold), a stage that is alive drives it from inputs that are known, or a passive hold "
    "keeps it. A detector is known once its rail, bias and reference are up; before, it is what undecided says.",
    facts=("resets.*.driven_by, domain, receivers.threshold", "rails.*.nominal, rise, fall", *RESET_PATH),
    mend="hold the stage, or let a detector that is valid sooner assert meanwhile",
    sources=(DERIVED,),
    example=Example(
        fails="comparators: {por: {undecided: undefined}}",
        holds="comparators: {por: {undecided: asserts}}",
    ),
    formulas=(*LEVEL_FORMULAS, ramp.ramp_slope_v_per_s),
    yields=NEVER_KNOWN,
)  # fmt: skip
def no_unknown_interval(reset: Reset, case: Case) -> Judgement:
    """Pass if the net is known at every time at which it is read."""
    wide = timelines(case.description, case.graph)
    rails = [name for name in wide.behind(reset.id) if name in case.description.rails]
    gaps = wide.gaps(reset.id, scenes=_ANY_START, falling=rails, dipping=rails, power_down=True, own=True)

    def judge(lines: Timelines) -> Judgement:
        part = lines.read.every[reset.id]
        assert isinstance(part, ResetPart)
        ramp = lines.ramps.by_rail.get(part.rail)
        nominal_v = FOREVER_S if ramp is None else ramp.nominal_v
        alone = [line for rail in rails if (line := lines.alone(rail)) is not None]
        dipping = [dip for rail in rails for dip in lines.dips(rail)]
        for courses in (lines.starts, [*lines.falls, *alone], dipping):
            spans = [
                (end_s - start_s, start_s, line)
                for line in courses
                for start_s, end_s in unknown_while_read(line, part, nominal_v=nominal_v)
            ]
            if spans:
                return _unknown(reset, case, lines, max(spans, key=_length))
        tried = len(lines.starts) + len(lines.falls) + len(alone) + len(dipping)
        if lines is wide and not tried:
            return case.fails("nothing that the supplies do can be tried", mend="give what drives it, and its rails")
        return case.passes(f"known in {tried} start-ups, falls and dips", at="driven_by")

    return judged_in_time(case, gaps, judge)


def _length(span: tuple[float, float, Timeline]) -> float:
    """How long it is, to the digits that differ for another reason than rounding."""
    return float(f"{span[0]:.9g}")


def _unknown(reset: Reset, case: Case, lines: Timelines, longest: tuple[float, float, Timeline]) -> Judgement:
    length_s, start_s, line = longest
    blame = blame_for_unknown(lines, line, reset.id, start_s)
    where = f"{line.scenario.name}, {_since(line.scenario, start_s)}"
    lasts = "for good" if length_s == FOREVER_S else f"for {show(length_s, _T)}"
    if blame.why is Why.NOT_HELD:
        what = f"{blame.element} is not alive and nothing holds it"
        mend = f"hold the output of {blame.element} at the level at which {reset.id} resets"
    elif blame.why is Why.INPUT:
        what = f"{blame.element} is alive before its input is known"
        mend = f"hold the output of {blame.element}, or let what drives it be alive no later than it is itself"
    else:
        what = f"{blame.element} cannot decide yet"
        mend = (
            f"let something assert {reset.id} until {blame.element} can decide; where its output surely does so by "
            f"itself, say comparators.{blame.element}.undecided"
        )
    return case.fails(
        f"its level may be unknown {lasts} ({where}): {what}",
        why=f"{line.scenario.about}; {blame.element} waits for {blame.waits_for}",
        mend=mend,
        at="driven_by",
        path=blame.path,
    )


def _since(scenario: Scenario, start_s: float) -> str:
    """From when on, in words."""
    if start_s == -FOREVER_S:
        return "all along"
    if start_s >= scenario.rises_s > 0.0:
        return f"from {show(start_s - scenario.rises_s, _T)} after the supply begins to rise again"
    return f"from {show(start_s, _T)} on"


@rule(
    "start_up/rail_order",
    title="a rail that comes after another does so whatever the tolerances do",
    level=Level.ERROR,
    applies_to="rails",
    proves="The rail does not wait for itself, and in every ramp the earliest time at which it can begin to rise comes "
    "no sooner than the latest time at which the rail named by after is up: at the least level it is guaranteed for.",
    facts=("rails.*.after, delay, made_by", "rails.*.nominal, rise", *RESET_PATH),
    mend="let what makes the rail wait for the other one",
    sources=(DERIVED,),
    example=Example(
        fails="resets: {por_n: {guards: [adc]}}\n"
        "loads: {core_regulator: {needs: {0: {works: {min: 1.2 V, max: 1.98 V}}}}}",
        holds="resets: {por_n: {guards: [adc, core_regulator]}}",
    ),
    formulas=(*LEVEL_FORMULAS,),
    yields=NEVER_KNOWN,
)
def rails_keep_their_order(rail: Rail, case: Case) -> Judgement:
    """Compare the earliest begin of the rail with the latest time at which the one before it is up."""
    if rail.id in rails_before(case, rail):
        return case.fails(
            "waits for itself: it comes after a rail, or is made by an element, that needs it",
            mend="take one of after, made_by and the rails its maker needs out of the ring",
            at="made_by" if rail.made_by is not None else "after",
        )
    after = rail.after
    if after is None:
        return case.not_applicable("comes after no other rail")
    wide = timelines(case.description, case.graph)
    gaps = wide.gaps(rail.id, scenes=(Scene.START,))
    surely = _begins(wide, rail.id, after)

    def judge(lines: Timelines) -> Judgement:
        if surely is None and (not gaps.untried or lines is wide):
            return case.fails("never begins to rise", mend="let what makes it come on", at="after")
        least = _begins(lines, rail.id, after)
        if least is None:
            return case.passes("it is not known when it begins to rise", at="after")
        if least.first_s == FOREVER_S:
            return case.fails(
                f"may begin to rise while {after} is not up ({least.scenario.name})", why=least.scenario.about,
                mend="let what makes it wait for the other one", at="after",
            )  # fmt: skip
        return case.at_least(
            need=least.first_s, have=least.then_s, dimension=_T, says=f"begins to rise ({least.scenario.name}) after",
            why=f"{least.scenario.about}; {after} is up at the latest after {show(least.first_s, _T)}",
            mend=f"let it begin {show_up(-least.slack_s, _T)} later", at="after",
        )  # fmt: skip

    return judged_in_time(case, gaps, judge)


def _begins(lines: Timelines, rail: str, after: str) -> Slack | None:
    """The least time between a rail that is up and the one after it that begins to rise; None where it never does."""
    if after not in lines.ramps.by_rail:
        return None
    up_v = lines.up_v(after)
    return worst(
        begin_slack(line, rail=rail, after=after, up_v=up_v) for line in lines.starts if line.scenario.in_sequence
    )


RULES: Final[tuple[Rule, ...]] = (
    release_comes_after_ready,
    no_unknown_interval,
    *start_up_falls.RULES,
    rails_keep_their_order,
)
