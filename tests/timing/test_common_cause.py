"""Shared tolerances at their ends, against every combination of ends on the whole network, one by one."""

from __future__ import annotations

import random
from collections.abc import Sequence
from itertools import product
from typing import cast

import pytest

from tests.rules.sound import both, patched, without
from tidegate.lint.graph.dependency import build
from tidegate.lint.timing import common_cause
from tidegate.lint.timing.common_cause import release_slack_apart
from tidegate.lint.timing.evaluate import evaluate
from tidegate.lint.timing.scenario import Scenario, Scene
from tidegate.lint.timing.slack import Slack, release_slack
from tidegate.lint.timing.timeline import Timeline, Timelines


def lines_of(patch: str) -> Timelines:
    description = patched(patch).description
    return Timelines(description, build(description))


def by_brute_force(lines: Timelines, load: str, courses: Sequence[Timeline], shared: Sequence[str]) -> Slack:
    """Every course; of each that is short, every combination of ends, with nothing taken over from anywhere."""
    found = []
    for line in courses:
        slack = release_slack(line, load)
        if slack is not None and slack.slack_s < 0.0 and shared:
            slacks = []
            for ends in product((False, True), repeat=len(shared)):
                net = lines.network.pinned(dict(zip(shared, ends, strict=True)))
                slacks.append(release_slack(Timeline(line.scenario, evaluate(net, line.scenario)), load))
            slack = min((one for one in slacks if one is not None), key=lambda one: one.slack_s, default=None)
        if slack is not None:
            found.append(slack)
    return min(found, key=lambda one: one.slack_s)


NOT_READY = "loads: {{core_regulator: {{ready: {{max: {}}}{}}}}}"
LEANS = ", leans_on: [por, uv, ov, bias_start]"


@pytest.mark.parametrize(
    ("patch", "shared"),
    [
        # Ready in time however the tolerances lie: nothing need be taken apart.
        ("", ()),
        # The reference settles in 5 us to 60 us; what the load needs beside it has no width.
        (NOT_READY.format("400 us", ""), ("ref_fast",)),
        (NOT_READY.format("150 us", ""), ("ref_fast",)),
        # Widths on the slowest ramp, 20 ms for 1.8 V: por 0.32 V, 3.56 ms; ov 27.3 mV, 0.30 ms; uv 23.3 mV, 0.26 ms;
        # then the reference with 55 us; the bias with 5 us is one too many.
        (NOT_READY.format("9 ms", LEANS), ("por", "ov", "uv", "ref_fast")),
        # No greatest settling: what is not bounded does not count, and the bias comes in.
        (
            f"{{references: {{ref_fast: {{settling: {{min: 5 us}}}}}}, {NOT_READY.format('9 ms', LEANS)}}}",
            ("por", "ov", "uv", "bias_start"),
        ),
        # Late is not wide: 100 us to 101 us are narrower than 5 us to 60 us.
        (
            both("biases: {bias_start: {settling: {min: 100 us, max: 101 us}}}", NOT_READY.format("9 ms", LEANS)),
            ("por", "ov", "uv", "ref_fast"),
        ),
        # 5 ms are wider than the 3.56 ms of por, and narrower than what 0.32 V would be on a ramp of 1 V in 20 ms.
        (
            f"{{references: {{ref_fast: {{settling: {{min: 0 s, max: 5 ms}}}}}}, {NOT_READY.format('9 ms', LEANS)}}}",
            ("ref_fast", "por", "ov", "uv"),
        ),
        # Of one that lives nobody knows where the times are known all the same.
        (
            f"{{biases: {{bias_start: {{domain: null}}}}, {NOT_READY.format('9 ms', ', leans_on: [bias_start]')}}}",
            ("ref_fast", "bias_start"),
        ),
    ],
)
def test_the_least_slack_is_that_of_every_combination(patch: str, shared: tuple[str, ...]) -> None:
    lines = lines_of(patch)
    least, taken = release_slack_apart(lines, "core_regulator", lines.starts)
    assert tuple(taken) == shared
    expected = by_brute_force(lines, "core_regulator", lines.starts, shared)
    assert (least.first_s, least.then_s) == (pytest.approx(expected.first_s), pytest.approx(expected.then_s))
    assert least.slack_s == pytest.approx(expected.slack_s)
    assert least.scenario == expected.scenario


def test_one_course_alone() -> None:
    lines = lines_of("")
    for line in lines.starts:
        slack = release_slack(line, "core_regulator")
        if slack is not None:
            assert release_slack_apart(lines, "core_regulator", [line]) == (slack, ())


def random_course(chance: random.Random) -> tuple[int, int] | None:
    """A slack by intervals, and how much more it is at the ends; no release for some, and for some none at the ends."""
    return None if chance.random() < 0.2 else (chance.randint(-3, 2), chance.choice((0, 0, 1, 2, 3, 4)))


@pytest.mark.parametrize("seed", range(4))
def test_the_first_of_the_least_is_chosen(seed: int) -> None:
    chance = random.Random(seed)
    for _ in range(100):
        _is_chosen_first(chance)


def _is_chosen_first(chance: random.Random) -> None:
    courses = [random_course(chance) for _ in range(chance.randint(1, 6))]
    any_shared = chance.random() < 0.8
    scenario = Scenario("tried", "tried", Scene.START, {})
    lines = [Timeline(scenario, {}) for _ in courses]
    place = {id(line): number for number, line in enumerate(lines)}

    def by_intervals(line: Timeline, _: str) -> Slack | None:
        course = courses[place[id(line)]]
        return None if course is None else Slack(scenario, float(place[id(line)]), float(place[id(line)] + course[0]))

    def at_ends(_: object, line: Timeline) -> Slack | None:
        number = place[id(line)]
        loose, more = courses[number] or (0, 0)
        return None if more == 4 else Slack(scenario, float(number), float(number + loose + more))

    shared = ["ref"] if any_shared else []
    found = []
    for number, course in enumerate(courses):
        if course is not None:
            loose, more = course
            apart = loose < 0 and any_shared
            if not (apart and more == 4):
                found.append((loose + more if apart else loose, number))
    if not found:
        return
    with pytest.MonkeyPatch.context() as patch:
        patch.setattr(common_cause, "release_slack", by_intervals)
        patch.setattr(common_cause, "_shared", lambda *_: shared)
        patch.setattr(common_cause._Ends, "worst_of", at_ends)
        least, taken = release_slack_apart(cast(Timelines, None), "core", lines)
    assert (least.slack_s, least.first_s) == min(found)
    assert taken == (shared if any(course is not None and course[0] < 0 for course in courses) else ())


def test_what_lies_between_the_ends_stands_where_nothing_is_released_at_them(monkeypatch: pytest.MonkeyPatch) -> None:
    lines = lines_of(NOT_READY.format("400 us", ""))
    slacks = [(line, release_slack(line, "core_regulator")) for line in lines.starts]
    short = [(line, slack) for line, slack in slacks if slack is not None and slack.slack_s < 0.0]
    assert len({slack.slack_s for _, slack in short}) > 1
    monkeypatch.setattr(common_cause._Ends, "worst_of", lambda *_: None)
    courses = sorted(short, key=lambda each: -each[1].slack_s)  # the least does not come first
    least, shared = release_slack_apart(lines, "core_regulator", [line for line, _ in courses])
    assert least == min((slack for _, slack in short), key=lambda slack: slack.slack_s)
    assert shared == ()


def test_at_best_the_same_elements_are_taken_at_their_ends() -> None:
    """uv has less tolerance at the best corner than what is left out for it otherwise."""
    patch = both(NOT_READY.format("9 ms", LEANS), without("comparators.uv.trip.rising"))
    lines = lines_of(patch)
    _, shared = release_slack_apart(lines, "core_regulator", lines.starts)
    best, at_best = release_slack_apart(
        lines.at_best, "core_regulator", lines.at_best.starts, at_best_of=lines
    )  # fmt: skip
    assert list(shared) == list(at_best)
    known, _ = release_slack_apart(
        lines_of(NOT_READY.format("9 ms", LEANS)), "core_regulator", lines_of(NOT_READY.format("9 ms", LEANS)).starts
    )
    assert best.slack_s >= known.slack_s - 1e-12
