"""Start-up: on the way up, in a dip and on the way down, reset holds whatever it guards for as long as it must."""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from typing import Final

from tidegate.lint.case import Case
from tidegate.lint.derived.never_known import decides_too_late, nobody_judges, unless_told
from tidegate.lint.derived.safe_rounding import show_up
from tidegate.lint.derived.supply.rail_order import rails_before
from tidegate.lint.description.model.reset_path import Load, Reset
from tidegate.lint.description.model.supply import Rail
from tidegate.lint.graph.edge import EdgeKind
from tidegate.lint.judgement import Judgement, Level, Measure, Relation
from tidegate.lint.physics import hold_up
from tidegate.lint.quantity import Dimension, show
from tidegate.lint.rule import Example, Rule, rule
from tidegate.lint.timing.blame import Why, blame_for_unknown
from tidegate.lint.timing.common_cause import release_slack_apart
from tidegate.lint.timing.interval import FOREVER_S
from tidegate.lint.timing.parts import LoadPart, ResetPart
from tidegate.lint.timing.scenario import Scenario
from tidegate.lint.timing.slack import (
    Slack,
    assert_slack,
    begin_slack,
    is_missed,
    release_slack,
    unknown_while_read,
    worst,
)
from tidegate.lint.timing.timeline import Timeline, Timelines, timelines

_T: Final = Dimension.DURATION
_V: Final = Dimension.VOLTAGE
_DERIVED: Final = "arrival times over the dependency graph, each the last of what is needed (derived)"
_NO_NET: Final = "no reset net guards it"
_RESET_PATH: Final = (
    "comparators.*.trip, delay, filter, works_from, output", "references.*.works_from and settling",
    "biases.*.works_from and settling", "output_stages.*.works_from, hold, delay, release_delay and discharge",
    "domains.*.rail and kind",
)  # fmt: skip


def _ask(case: Case, missing: Iterable[str]) -> None:
    """End the rule where facts are missing."""
    case.missing.extend(missing)
    case.settle()


def _load_part(lines: Timelines, load: Load) -> LoadPart:
    part = lines.read.parts[load.id]
    assert isinstance(part, LoadPart)
    return part


@rule(
    "start_up/release_after_ready",
    title="reset is released only when the load is ready",
    level=Level.ERROR,
    applies_to="loads",
    proves="In every start-up (fastest and slowest ramp, a ramp that goes back, rails late and early, residual "
    "charge, off and on again, every dip, and the description's own waveforms), the earliest time at which the last of "
    "the nets that guard the load can be released comes no sooner than the latest time at which its supplies and "
    "references are up and its time to be ready is over. A least time that is not given counts as 0 where that passes.",
    facts=(
        "loads.*.needs, works, ready, references", "rails.*.nominal, rise, after, delay", *_RESET_PATH,
    ),
    mend="hold reset for longer, let it wait for what comes late, or make what the load needs come sooner",
    sources=(_DERIVED,),
    example=Example(
        fails="output_stages: {rst_out: {release_delay: {min: 100 us, max: 400 us}}}",
        holds="output_stages: {rst_out: {release_delay: {min: 200 us, max: 400 us}}}",
    ),
)  # fmt: skip
@unless_told
def release_comes_after_ready(load: Load, case: Case) -> Judgement:
    """Compare the earliest release with the latest time at which the load is ready, in the worst scenario."""
    lines = timelines(case.description, case.graph)
    if not _nets(case, load):
        return case.not_applicable(_NO_NET)
    _ask(case, (*lines.missing(load.id, starts=True), *lines.missing(load.id, readiness=True, latest=True)))
    courses = [*lines.starts, *(dip for rail, _ in _load_part(lines, load).works for dip in lines.dips(rail))]
    least = worst(release_slack(line, load.id) for line in courses)
    if least is None:
        names = ", ".join(line.scenario.name for line in lines.starts)
        return case.fails(
            f"its reset is never released ({names})",
            mend="let every detector that resets it let go within the supply in service",
        )
    shared: Sequence[str] = ()
    if least.slack_s < 0.0:
        least, shared = release_slack_apart(lines, load.id, courses)
    if least.slack_s < 0.0:
        _ask(case, lines.missing(load.id, latest=True))
        _ask(case, _least_times_to_give(lines, load, least))
    return _release_judgement(case, lines, least, shared)


def _nets(case: Case, load: Load) -> list[str]:
    """The nets that guard a load, or its domain."""
    nets = case.graph.tails(load.id, EdgeKind.GUARDS)
    return nets + (case.graph.tails(load.domain, EdgeKind.GUARDS) if load.domain is not None else [])


def _least_times_to_give(lines: Timelines, load: Load, least: Slack) -> tuple[str, ...]:
    """Least values on the way of the reset that are not given, if the load could be ready in time with them."""
    part = _load_part(lines, load)
    elements = {name for net in part.resets for name in lines.behind(net)}
    lacking = tuple(dict.fromkeys(path for net in part.resets for path in lines.missing(net, earliest=True)))
    if not lacking:
        return ()
    best = release_slack(lines.as_if_given(least.scenario, elements), load.id)
    return lacking if best is not None and best.slack_s >= 0.0 else ()


def _not_tried(lines: Timelines) -> str:
    """What was not tried for want of facts, in words; empty where everything was."""
    if not lines.untried:
        return ""
    return f"; not tried: {', '.join(f'{name} (no {fact})' for name, fact in lines.untried)}"


def _release_judgement(case: Case, lines: Timelines, least: Slack, shared: Sequence[str]) -> Judgement:
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
        f"begins to rise{both_ends}{_not_tried(lines)}",
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
    facts=("resets.*.driven_by, domain, receivers.threshold", "rails.*.nominal, rise, fall", *_RESET_PATH),
    mend="hold the stage, or let a detector that is valid sooner assert meanwhile",
    sources=(_DERIVED,),
    example=Example(
        fails="comparators: {por: {undecided: undefined}}",
        holds="comparators: {por: {undecided: asserts}}",
    ),
)  # fmt: skip
@unless_told
def no_unknown_interval(reset: Reset, case: Case) -> Judgement:
    """Pass if the net is known at every time at which it is read."""
    lines = timelines(case.description, case.graph)
    _ask(case, lines.missing(reset.id, latest=True, starts=True, falls=True, slow_falls=True))
    part = lines.read.parts[reset.id]
    assert isinstance(part, ResetPart)
    rails = [name for name in lines.behind(reset.id) if name in case.description.rails]
    alone = [line for rail in rails if (line := lines.alone(rail)) is not None]
    dipping = [dip for rail in rails for dip in lines.dips(rail)]
    for courses in (lines.starts, [*lines.falls, *alone], dipping):
        spans = [
            (end_s - start_s, start_s, line) for line in courses for start_s, end_s in unknown_while_read(line, part)
        ]
        if spans:
            return _unknown(reset, case, lines, max(spans, key=_length))
    tried = len(lines.starts) + len(lines.falls) + len(alone) + len(dipping)
    return case.passes(f"known in {tried} start-ups, falls and dips", at="driven_by")


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
    "start_up/asserts_in_time",
    title="reset is asserted before a falling rail leaves the range of the load",
    level=Level.ERROR,
    applies_to="loads",
    proves="When any rail that the load needs falls by itself as fast as it may (its fastest fall, or its collapse "
    "where that is not given; no faster than C dV = I dt where its hold-up and the current of its loads are given), "
    "the latest assertion of its reset comes no later than the rail leaves the range in which the load works.",
    facts=("loads.*.needs.*.works, or rails.*.guaranteed", "rails.*.nominal and fall, or collapse", *_RESET_PATH),
    mend="a higher falling level, a faster answer, or more hold-up",
    sources=(_DERIVED, "C dV = I dt for a constant current"),
    example=Example(
        fails="output_stages: {rst_out: {delay: {min: 10 ns, max: 20 us}}}",
        holds="output_stages: {rst_out: {delay: {min: 10 ns, max: 100 ns}}}",
    ),
    formulas=(hold_up.hold_up_time_s,),
)  # fmt: skip
@unless_told
def reset_is_asserted_in_time(load: Load, case: Case) -> Judgement:
    """Compare the time at which each rail leaves the range of the load with the latest assertion."""
    lines = timelines(case.description, case.graph)
    nets = _nets(case, load)
    if not nets:
        return case.not_applicable(_NO_NET)
    _ask(case, (path for net in nets for path in lines.missing(net, latest=True, rails_forced=True)))
    _ask(case, lines.missing(load.id, falls=True))
    found: list[tuple[str, Slack]] = []
    for rail, works in _load_part(lines, load).works:
        line = lines.alone(rail)
        slack = None if line is None else assert_slack(line, load.id, rail=rail, works=works)
        if slack is not None:
            found.append((rail, slack))
    if not found:
        return case.not_applicable("no rail that falls from nominal leaves its range")
    rail, least = min(found, key=lambda one: one[1].slack_s)
    if least.slack_s < 0.0 and (late := decides_too_late(case, load, rail)):
        return case.not_applicable(late)
    works_v = dict(_load_part(lines, load).works)[rail].least
    missed = _deepest_missed(lines, load, rail)
    seen = missed is None or Measure(works_v, _depth_v(missed), _V, Relation.AT_LEAST).holds
    if least.first_s < FOREVER_S and not seen:
        return case.not_applicable(f"a dip of {rail} may be missed altogether (start_up/dip_is_caught says so)")
    if least.first_s == FOREVER_S and (unheard := nobody_judges(case, load, rail)):
        return case.not_applicable(unheard)
    if least.first_s == FOREVER_S:
        return case.fails(
            f"its reset may never be asserted when {rail} falls",
            why=f"{least.scenario.about}; the load works down to {show(works_v, _V)}",
            mend=f"let a detector of {rail} that is alive down to 0 V, or held, reset it",
            at="needs",
        )
    if least.first_s == -FOREVER_S:
        return case.passes(f"its reset is asserted before {rail} falls", at="needs")
    short_v = -least.slack_s * lines.ramps.by_rail[rail].fastest_fall_v_per_s
    return case.at_least(
        need=least.first_s, have=least.then_s, dimension=_T,
        says=f"{rail} leaves the range of the load, falling from nominal, after",
        why=f"{least.scenario.about}; the load works down to {show(works_v, _V)}, the latest assertion comes after "
        f"{show(least.first_s, _T)}",
        mend=f"an answer that comes {show_up(-least.slack_s, _T)} sooner, or a falling level that lies "
        f"{show_up(short_v, _V)} higher", at="needs",
    )  # fmt: skip


@rule(
    "start_up/dip_is_caught",
    title="no dip takes a load out of its range without resetting it",
    level=Level.ERROR,
    applies_to="loads",
    proves="Dips of each rail that the load needs, to every level at which something changes and of every length that "
    "matters (for long, for just less than the slowest filter surely sees, and without a bottom), all assert its reset "
    "if they go below the range in which it works.",
    facts=("loads.*.needs.*.works", "rails.*.nominal, rise and fall, or collapse", *_RESET_PATH),
    mend="a higher falling level, a shorter filter, or an output that is a level for every supply below the threshold",
    sources=(_DERIVED,),
    example=Example(
        fails="comparators: {uv: {output: pulse, pulse: {min: 20 us, max: 30 us}}}",
        holds="comparators: {uv: {output: level}}",
    ),
)  # fmt: skip
@unless_told
def dip_is_caught(load: Load, case: Case) -> Judgement:
    """Compare the deepest dip that may be missed with the least supply at which the load works."""
    lines = timelines(case.description, case.graph)
    nets = _nets(case, load)
    if not nets:
        return case.not_applicable(_NO_NET)
    _ask(case, (path for net in nets for path in lines.missing(net, latest=True, rails_forced=True)))
    _ask(case, lines.missing(load.id, starts=True, falls=True))
    margins: list[tuple[float, float, float, str, Timeline]] = []
    unseen: list[str] = []
    for rail, works in _load_part(lines, load).works:
        falls = lines.alone(rail)
        slack = None if falls is None else assert_slack(falls, load.id, rail=rail, works=works)
        if slack is not None and slack.first_s == FOREVER_S:
            unseen.append(rail)
        deepest = None if slack is None or rail in unseen else _deepest_missed(lines, load, rail)
        if deepest is not None:
            depth_v = _depth_v(deepest)
            margins.append((depth_v - works.least, works.least, depth_v, rail, deepest))
    if not margins:
        rails = " and ".join(unseen)
        said = f"its reset is not asserted even when {rails} falls (start_up/asserts_in_time says so)"
        return case.not_applicable(said if unseen else "no dip can be missed")
    margin_v, need_v, have_v, rail, line = min(margins, key=lambda margin: margin[0])
    if margin_v < 0.0 and (late := decides_too_late(case, load, rail)):
        return case.not_applicable(late)
    return case.at_least(
        need=need_v, have=have_v, dimension=_V, says=f"the deepest dip of {rail} that may be missed goes down to",
        why=f"{line.scenario.about}; the load works down to {show(need_v, _V)}",
        mend=f"see dips {show_up(need_v - have_v, _V)} sooner: a higher falling level, or a shorter filter", at="needs",
    )  # fmt: skip


def _deepest_missed(lines: Timelines, load: Load, rail: str) -> Timeline | None:
    """The deepest dip of a rail that may pass without the load being reset; None where every one is caught."""
    return min((line for line in lines.dips(rail) if is_missed(line, load.id)), key=_depth_v, default=None)


def _depth_v(line: Timeline) -> float:
    """The lowest level of a dip, in V."""
    return min(level_v for _, level_v in line.scenario.waveforms[line.scenario.rail].points)


@rule(
    "start_up/rail_order",
    title="a rail that comes after another does so whatever the tolerances do",
    level=Level.ERROR,
    applies_to="rails",
    proves="The rail does not wait for itself, and in every ramp the earliest time at which it can begin to rise comes "
    "no sooner than the latest time at which the rail named by after is up: at the least level it is guaranteed for.",
    facts=("rails.*.after, delay, made_by", "rails.*.nominal, rise", *_RESET_PATH),
    mend="let what makes the rail wait for the other one",
    sources=(_DERIVED,),
    example=Example(
        fails="resets: {por_n: {guards: [adc]}}\n"
        "loads: {core_regulator: {needs: {0: {works: {min: 1.2 V, max: 1.98 V}}}}}",
        holds="resets: {por_n: {guards: [adc, core_regulator]}}",
    ),
)
@unless_told
def rails_keep_their_order(rail: Rail, case: Case) -> Judgement:
    """Compare the earliest begin of the rail with the latest time at which the one before it is up."""
    if rail.id in rails_before(case, rail):
        return case.fails(
            "waits for itself: it comes after a rail, or is made by an element, that needs it",
            mend="take one of after, made_by and the rails its maker needs out of the ring",
            at="made_by" if rail.made_by is not None else "after",
        )
    if rail.after is None:
        return case.not_applicable("comes after no other rail")
    lines = timelines(case.description, case.graph)
    _ask(case, lines.missing(rail.id, starts=True))
    least = worst(begin_slack(line, rail=rail.id, after=rail.after, up_v=lines.up_v(rail.after))
                  for line in lines.starts if line.scenario.in_sequence)  # fmt: skip
    if least is None:
        return case.fails("never begins to rise", mend="let what makes it come on", at="after")
    return case.at_least(
        need=least.first_s, have=least.then_s, dimension=_T, says=f"begins to rise ({least.scenario.name}) after",
        why=f"{least.scenario.about}; {rail.after} is up at the latest after {show(least.first_s, _T)}",
        mend=f"let it begin {show_up(-least.slack_s, _T)} later", at="after",
    )  # fmt: skip


RULES: Final[tuple[Rule, ...]] = (
    release_comes_after_ready,
    no_unknown_interval,
    reset_is_asserted_in_time,
    dip_is_caught,
    rails_keep_their_order,
)
