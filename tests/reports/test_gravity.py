"""The order of failures and of what is open: one table, which knows every rule that there is."""

from __future__ import annotations

import math

import msgspec
import pytest

from tests.reports.board import reviewed
from tidegate.lint.judgement import Judgement, Kind, Level, Measure, Relation
from tidegate.lint.quantity import Dimension
from tidegate.lint.reports.gravity import (
    FAMILIES,
    RULES,
    TITLES,
    Gravity,
    gravest_first,
    gravity,
    least_room_first,
    weight,
)  # fmt: skip
from tidegate.lint.waivers import STILL_RIGHT
from tidegate.rules.catalogue import FAMILIES as RULE_FAMILIES

IDS = {rule.id for family in RULE_FAMILIES for rule in family} | {STILL_RIGHT.id}


def judgement(
    rule: str = "trip_window/guarantee", kind: Kind = Kind.FAIL, margin: float | None = None, *, need: float = 1.0,
    sure: float | None = None, best: float | None = None, level: Level = Level.ERROR, subject: str = "uv",
) -> Judgement:  # fmt: skip
    measure = (
        None
        if margin is None
        else Measure(need, need + margin, Dimension.VOLTAGE, Relation.AT_LEAST, sure=sure, best=best)
    )
    return Judgement(rule=rule, subject=subject, kind=kind, level=level, message="", at="x", measure=measure)


def test_the_table_knows_every_family_and_no_rule_that_is_not_there() -> None:
    assert set(FAMILIES) == {name.partition("/")[0] for name in IDS}
    assert set(RULES) <= IDS
    assert all(RULES[name] is not FAMILIES[name.partition("/")[0]] for name in RULES)  # an exception is one
    assert set(TITLES) == set(Gravity)
    assert list(TITLES) == sorted(Gravity, reverse=True)


def test_the_gravest_first_then_the_least_share_of_room() -> None:
    house = judgement("bypass/present")
    lost = judgement("hysteresis/covers_disturbance", margin=-0.9)
    late = judgement(margin=-0.001)
    later = judgement(margin=-0.020, need=4.0)  # half a per cent of its need
    latest = judgement(margin=-0.010)
    dead = judgement("self_bias/no_loop")
    assert gravest_first([house, lost, late, later, latest, dead]) == [dead, latest, later, late, lost, house]


def test_of_two_alike_the_error_comes_before_the_warning() -> None:
    warning, error = judgement("modes/over_voltage", level=Level.WARNING), judgement("modes/sampling")
    assert gravest_first([warning, error]) == [error, warning]


def test_what_the_house_calls_a_note_is_house_policy() -> None:
    assert gravity(judgement("self_bias/no_loop", level=Level.NOTE)) is Gravity.POLICY
    assert gravity(judgement("a_pack/of_ours")) is Gravity.MARGIN
    assert gravity(judgement("a_pack/of_ours", level=Level.NOTE)) is Gravity.POLICY


def test_what_is_open_is_weighed_by_class_and_by_room() -> None:
    """At its limit an open judgement weighs twice as much as with a tenth of its need left, and as with no number."""
    at_limit, tenth = (judgement(kind=Kind.OPEN, margin=room, sure=-math.inf, best=room) for room in (0.0, 0.1))
    assert weight(at_limit) == pytest.approx(2 * weight(tenth)) == pytest.approx(2 * weight(judgement(kind=Kind.OPEN)))
    near = judgement("budget/within", Kind.OPEN, 0.01, sure=-math.inf, best=0.01)
    far = judgement(kind=Kind.OPEN, margin=100.0, sure=-math.inf, best=100.0)
    assert gravest_first([far, near, tenth, at_limit]) == [at_limit, tenth, near, far]


def test_margins_go_by_their_sure_end_after_what_misses_its_limit() -> None:
    short = judgement(margin=-0.2)
    short_or_worse = judgement(margin=-0.03, sure=-math.inf, best=-0.03)
    so_far = judgement(kind=Kind.OPEN, margin=0.5, sure=-math.inf, best=0.5)
    nearer = judgement(kind=Kind.OPEN, margin=0.1, sure=-math.inf, best=0.1)
    between = judgement(kind=Kind.OPEN, margin=0.1, sure=-0.1, best=0.1)
    passes = judgement(kind=Kind.PASS, margin=0.3, sure=0.2, best=math.inf)
    tight = judgement(kind=Kind.PASS, margin=0.01)
    under = msgspec.structs.replace(judgement(margin=-0.1), kind=Kind.NOT_APPLICABLE, under="a/b")
    given = [passes, so_far, between, short, tight, nearer, under, short_or_worse, judgement()]
    assert least_room_first(given) == [short_or_worse, short, under, nearer, so_far, between, tight, passes]


def test_what_nothing_is_known_of_is_no_number() -> None:
    nothing = judgement(kind=Kind.OPEN, margin=0.0, sure=-math.inf, best=math.inf)
    assert least_room_first([nothing]) == []


def test_every_judgement_of_a_board_has_a_class() -> None:
    assert {gravity(one) for one in reviewed().judgements} == set(Gravity)
