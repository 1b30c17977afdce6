"""What a stage makes of its input, by hand: delay, release delay, latch, and its hold while it is not alive."""

from __future__ import annotations

import msgspec
import pytest

from tests.timing.random_subsystems import INFINITE, stage
from tidegate.lint.timing.carry import output_of
from tidegate.lint.timing.interval import ALWAYS, FOREVER_S, NEVER, Times
from tidegate.lint.timing.parts import NOTHING, Bounds, StagePart
from tidegate.lint.timing.state import ALWAYS_ON, ANY_DECISION, ASSERTED, NEVER_ON, RELEASED, Decision, On

ALIVE_LATE = On(((2.0, FOREVER_S),), ((-FOREVER_S, 4.0),))
"""Comes alive between 2 s and 4 s."""
GIVEN = Decision(((-FOREVER_S, 10.0),), ((8.0, FOREVER_S),), NEVER)
"""Releases between 8 s and 10 s."""


def part(
    hold: str = "none", *, delay: Bounds = NOTHING, release_delay: Bounds = NOTHING, discharge_s: float = 0.0,
    latches: bool = False, power_up: str = "releases",
) -> StagePart:  # fmt: skip
    made = stage(
        "out", driven_by=("in",), works_from=NOTHING, delay=delay, hold=hold, release_delay=release_delay,
        discharge_s=discharge_s, latches=latches,
    )  # fmt: skip
    return msgspec.structs.replace(made, power_up=power_up)


def test_a_stage_without_delay_passes_its_input_on() -> None:
    assert output_of(part(), given=GIVEN, alive=ALWAYS_ON) == GIVEN
    assert output_of(part(), given=ANY_DECISION, alive=ALWAYS_ON) == ANY_DECISION


@pytest.mark.parametrize(
    ("hold", "expected"),
    [
        ("none", Decision(((2.0, 10.0),), ((8.0, FOREVER_S),), ((-FOREVER_S, 4.0),))),
        ("asserts", Decision(((-FOREVER_S, 10.0),), ((8.0, FOREVER_S),), NEVER, ((-FOREVER_S, 4.0),))),
        ("releases", Decision(((2.0, 10.0),), ((-FOREVER_S, 4.0), (8.0, FOREVER_S)), NEVER)),
    ],
)
def test_the_hold_of_a_stage_that_is_not_alive(hold: str, expected: Decision) -> None:
    assert output_of(part(hold), given=GIVEN, alive=ALIVE_LATE) == expected


def test_a_stage_that_is_never_alive_is_its_hold() -> None:
    assert output_of(part("asserts"), given=RELEASED, alive=NEVER_ON) == Decision(ALWAYS, NEVER, NEVER, ALWAYS)
    assert output_of(part("releases"), given=ASSERTED, alive=NEVER_ON) == RELEASED
    assert output_of(part("none"), given=ASSERTED, alive=NEVER_ON) == Decision(NEVER, NEVER, ALWAYS)


def test_a_delay_lies_between_its_ends_and_what_is_unknown_stays_so() -> None:
    given = Decision(((-FOREVER_S, 10.0), (20.0, FOREVER_S)), ((8.0, 21.0),), ((9.0, 12.0),))
    assert output_of(part(delay=Bounds(0.5, 1.0)), given=given, alive=ALWAYS_ON) == Decision(
        ((-FOREVER_S, 11.0), (20.5, FOREVER_S)), ((8.5, 22.0),),
        ((9.0, 13.0),),  # an input that ceases to be known may show at once
    )  # fmt: skip


def test_a_stage_that_comes_alive_takes_its_input_as_if_it_had_been_so_before() -> None:
    found = output_of(part(delay=Bounds(0.5, 1.0)), given=GIVEN, alive=ALIVE_LATE)
    assert found == Decision(((2.0, 11.0),), ((8.5, FOREVER_S),), ((-FOREVER_S, 4.0),))
    # What changes within the delay of its end is cut off with it; what is so when it comes alive again is so at once.
    twice = On(((2.0, 9.0), (12.0, FOREVER_S)), ((-FOREVER_S, 3.0), (9.0, 13.0)))
    found = output_of(part("asserts", delay=Bounds(0.5, 1.0)), given=GIVEN, alive=twice)
    assert found.may_release == ((8.5, 9.0), (12.0, FOREVER_S))
    assert found.may_assert == ((-FOREVER_S, 13.0),)


def test_an_input_that_changes_too_late_to_come_through_does_not() -> None:
    once = On(((2.0, 8.25),), ((-FOREVER_S, 2.0), (8.25, FOREVER_S)))
    found = output_of(part(delay=Bounds(0.5, 1.0)), given=GIVEN, alive=once)
    assert found == Decision(((2.0, 8.25),), NEVER, ((-FOREVER_S, 2.0), (8.25, FOREVER_S)))


def test_what_a_delay_brings_together_is_one() -> None:
    given = Decision(((3.0, 4.0), (4.5, 5.0), (9.0, 9.5)), NEVER, NEVER)
    found = output_of(part("asserts", delay=Bounds(0.5, 1.0)), given=given, alive=ALIVE_LATE)
    assert found.may_assert == ((-FOREVER_S, 6.0), (9.5, 10.5))
    # It may come alive at 3 s, or any time up to 4 s, and then takes its input as if it had been so before.
    found = output_of(part("releases", delay=Bounds(0.5, 1.0)), given=given, alive=ALIVE_LATE)
    assert found.may_assert == ((3.0, 6.0), (9.5, 10.5))
    found = output_of(part("releases", delay=Bounds(0.5, 1.0)), given=given, alive=ALWAYS_ON)
    assert found.may_assert == ((3.5, 6.0), (9.5, 10.5))


def test_a_release_that_ends_as_its_delay_does_is_none() -> None:
    given = Decision(((-FOREVER_S, 0.0), (5.0, FOREVER_S)), ((0.0, 5.0),), NEVER)
    found = output_of(part(release_delay=Bounds(5.0, 5.0)), given=given, alive=ALWAYS_ON)
    assert found == Decision(ALWAYS, NEVER, NEVER)


def test_an_assertion_is_not_early_and_lasts_for_the_release_delay() -> None:
    quick = part("releases", release_delay=Bounds(0.25, 0.5))
    found = output_of(quick, given=SHORT, alive=ALWAYS_ON)
    assert found == Decision(((-FOREVER_S, 1.5), (5.0, 6.5)), ((0.25, 5.0), (6.25, FOREVER_S)), NEVER)
    # Not alive from 7 s or 8 s to 9 s or 10 s: the delay begins anew with it.
    gone = On(((-FOREVER_S, 8.0), (9.0, FOREVER_S)), ((7.0, 10.0),))
    found = output_of(quick, given=SHORT, alive=gone)
    assert found.may_assert == ((-FOREVER_S, 1.5), (5.0, 6.5), (7.0, 8.0), (9.0, 10.5))
    assert found.may_release == ((0.25, 5.0), (6.25, FOREVER_S))


SHORT = Decision(((-FOREVER_S, 1.0), (5.0, 6.0)), ((0.0, 5.0), (6.0, FOREVER_S)), NEVER)
"""Released from 0 s or 1 s to 5 s, and again from 6 s on."""


@pytest.mark.parametrize(
    ("discharge_s", "release_delay", "releases"),
    [
        # 5 s free, then 1 s asserted: a whole discharge begins anew.
        (1.0, Bounds(3.0, 4.5), ((3.0, 5.0), (9.0, FOREVER_S))),
        (0.0, Bounds(3.0, 4.5), ((3.0, 5.0), (9.0, FOREVER_S))),
        # Too short to discharge: all of the least delay has run, and the release comes back at once.
        (1.5, Bounds(3.0, 4.5), ((3.0, 5.0), (6.0, FOREVER_S))),
        (INFINITE, Bounds(3.0, 4.5), ((3.0, 5.0), (6.0, FOREVER_S))),
        # 5 s of 5.5 s may have run: half a second is left.
        (1.5, Bounds(5.5, 6.0), ((6.5, FOREVER_S),)),
        (1.0, Bounds(5.5, 6.0), ((11.5, FOREVER_S),)),
        # The delay ends just as the assertion comes: nothing of a release is seen.
        (1.0, Bounds(5.0, 6.0), ((11.0, FOREVER_S),)),
        (1.0, Bounds(4.75, 6.0), ((4.75, 5.0), (10.75, FOREVER_S))),
        (1.0, Bounds(0.0, 6.0), ((0.0, 5.0), (6.0, FOREVER_S))),
    ],
)
def test_a_release_delay_that_an_assertion_interrupts(
    discharge_s: float, release_delay: Bounds, releases: Times
) -> None:
    found = output_of(part(release_delay=release_delay, discharge_s=discharge_s), given=SHORT, alive=ALWAYS_ON)
    assert found.may_release == releases
    assert found.may_be_unknown == NEVER
    most_s = release_delay.most
    assert found.may_assert == (
        ((-FOREVER_S, 1.0 + most_s), (5.0, 6.0 + most_s)) if 1.0 + most_s < 5.0 else ((-FOREVER_S, 6.0 + most_s),)
    )


def test_what_has_run_of_a_release_delay_is_kept_over_several_interruptions() -> None:
    given = Decision(((-FOREVER_S, 0.0), (1.0, 2.0), (3.0, 4.0)), ((0.0, 1.0), (2.0, 3.0), (4.0, FOREVER_S)), NEVER)
    slow = part(release_delay=Bounds(2.5, 2.5), discharge_s=2.0)
    # 1 s and 1 s have run when the third stretch begins at 4 s: half a second is left.
    assert output_of(slow, given=given, alive=ALWAYS_ON).may_release == ((4.5, FOREVER_S),)
    # What ran before the first discharge does not count after it.
    gone = Decision(((-FOREVER_S, 0.0), (1.0, 3.0), (4.0, 5.0)), ((0.0, 1.0), (3.0, 4.0), (5.0, FOREVER_S)), NEVER)
    assert output_of(slow, given=gone, alive=ALWAYS_ON).may_release == ((6.5, FOREVER_S),)


def test_an_unknown_input_may_run_a_release_delay_down_or_set_it_back() -> None:
    given = Decision(((-FOREVER_S, 2.0),), ((8.0, FOREVER_S),), ((2.0, 8.0),))
    found = output_of(part(release_delay=Bounds(3.0, 4.0)), given=given, alive=ALWAYS_ON)
    assert found == Decision(((-FOREVER_S, 12.0),), ((8.0, FOREVER_S),), ((5.0, 8.0),))


def test_a_release_delay_begins_once_the_stage_is_alive() -> None:
    found = output_of(part("asserts", release_delay=Bounds(3.0, 5.0)), given=RELEASED, alive=ALIVE_LATE)
    assert found == Decision(((-FOREVER_S, 9.0),), ((5.0, FOREVER_S),), NEVER, ((-FOREVER_S, 4.0),))
    bare = output_of(part("none", release_delay=Bounds(3.0, 5.0)), given=RELEASED, alive=ALIVE_LATE)
    assert bare == Decision(((2.0, 9.0),), ((5.0, FOREVER_S),), ((-FOREVER_S, 4.0),))


def test_a_release_delay_and_a_delay_add_up() -> None:
    both = part(delay=Bounds(0.5, 1.0), release_delay=Bounds(3.0, 5.0))
    assert output_of(both, given=GIVEN, alive=ALWAYS_ON) == Decision(((-FOREVER_S, 16.0),), ((11.5, FOREVER_S),), NEVER)


# A latch: released at first, perhaps asserted from 5 s to 7 s and surely from 5.5 s to 6 s.
BLIP = Decision(((5.0, 7.0),), ((-FOREVER_S, 5.5), (6.0, FOREVER_S)), NEVER)


def test_a_latch_remembers_an_assertion() -> None:
    found = output_of(part(latches=True), given=BLIP, alive=ALWAYS_ON)
    assert found == Decision(((5.0, FOREVER_S),), ((-FOREVER_S, 5.5),), NEVER)
    never_sure = Decision(((5.0, 7.0),), ALWAYS, NEVER)
    assert output_of(part(latches=True), given=never_sure, alive=ALWAYS_ON) == Decision(
        ((5.0, FOREVER_S),), ALWAYS, NEVER
    )
    assert output_of(part(latches=True), given=RELEASED, alive=ALWAYS_ON) == RELEASED


def test_an_unknown_input_may_set_a_latch() -> None:
    given = Decision(NEVER, ((-FOREVER_S, 5.0), (6.0, FOREVER_S)), ((5.0, 6.0),))
    found = output_of(part(latches=True), given=given, alive=ALWAYS_ON)
    assert found == Decision(((5.0, FOREVER_S),), ALWAYS, ((5.0, FOREVER_S),))
    then_set = Decision(((8.0, 9.0),), ((-FOREVER_S, 5.0), (6.0, 8.0), (9.0, FOREVER_S)), ((5.0, 6.0),))
    found = output_of(part(latches=True), given=then_set, alive=ALWAYS_ON)
    assert found == Decision(((5.0, FOREVER_S),), ((-FOREVER_S, 8.0),), ((5.0, 8.0),))


def test_a_latch_forgets_with_its_supply() -> None:
    off = On(((0.0, 10.0), (20.0, FOREVER_S)), ((-FOREVER_S, 1.0), (9.0, 21.0)))
    found = output_of(part("asserts", latches=True), given=BLIP, alive=off)
    # Surely on, and so surely set, from 5.5 s to 9 s; while its supply may be gone it may have come back released.
    assert found.may_release == ((0.0, 5.5), (9.0, 10.0), (20.0, FOREVER_S))
    assert found.may_assert == ((-FOREVER_S, 1.0), (5.0, 21.0))
    assert found.may_be_held == ((-FOREVER_S, 1.0), (9.0, 21.0))


def test_a_latch_that_wakes_asserting_follows_its_drivers() -> None:
    woken = output_of(part("asserts", latches=True, power_up="asserts"), given=BLIP, alive=ALIVE_LATE)
    assert woken == Decision(
        ((-FOREVER_S, 4.0), (5.0, 7.0)), ((2.0, 5.5), (6.0, FOREVER_S)), NEVER, ((-FOREVER_S, 4.0),)
    )


def test_a_latch_of_which_nobody_knows_how_it_wakes_is_unknown_until_it_is_set() -> None:
    found = output_of(part(latches=True, power_up="undefined"), given=BLIP, alive=ALWAYS_ON)
    assert found == Decision(((5.0, FOREVER_S),), NEVER, ((-FOREVER_S, 5.5),))
