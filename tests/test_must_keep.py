"""What missing facts must keep for an open judgement: values and room by hand, and what a rule that raises leaves."""

from __future__ import annotations

import msgspec
import pytest

from tests.reports.board import BOARD, ROOM_V, TODAY, reviewed, said, with_rail
from tidegate.lint.case import Case
from tidegate.lint.description.model.supply import Rail
from tidegate.lint.engine import Catalogue, review
from tidegate.lint.judgement import Judgement, Kind, Level
from tidegate.lint.must_keep import MustKeep, must_keep
from tidegate.lint.quantity import Dimension
from tidegate.lint.rule import Example, rule


def kept(rule_id: str, subject: str = "sup", text: str = BOARD) -> MustKeep | None:
    return must_keep(reviewed(text), said(rule_id, subject, text))


def test_the_terms_that_wait_share_the_best_margin() -> None:
    found = kept("trip_window/nuisance")
    assert found is not None
    assert found.terms == ("half the ripple", "load step at release")
    assert found.room == pytest.approx(ROOM_V, rel=1e-9)
    (ripple,) = found.facts
    assert (ripple.fact, ripple.at_most, ripple.alone) == ("rails.vdd.ripple.peak_to_peak", True, False)
    assert ripple.value == pytest.approx(2 * ROOM_V, rel=1e-9)


def test_where_nothing_else_is_missing_the_value_is_sufficient() -> None:
    found = kept("trip_window/nuisance", text=with_rail("load_step: none"))
    assert found is not None
    assert found.terms == ("half the ripple",)
    assert [each.alone for each in found.facts] == [True]


def test_a_word_has_no_value_but_one_that_holds() -> None:
    found = kept("rearming/level_held")
    assert found is not None
    assert found.choice == ("comparators.sup.output", "level")
    assert (found.facts, found.room) == ((), None)


def test_to_be_at_least_nothing_is_no_value() -> None:
    for judgement in reviewed().judgements:
        found = must_keep(reviewed(), judgement)
        assert found is None or not [each for each in found.facts if not each.at_most and each.value < 1e-12]


@pytest.mark.parametrize("kind", [Kind.PASS, Kind.FAIL, Kind.NOT_APPLICABLE])
def test_what_is_not_open_asks_for_nothing(kind: Kind) -> None:
    judgement = next(one for one in reviewed().judgements if one.kind is kind)
    assert must_keep(reviewed(), judgement) is None


def test_a_rule_that_raises_when_it_is_read_again_keeps_what_it_said() -> None:
    """A pack's rule may answer the first time and not the next: its judgement stands, without values to keep."""
    asked = []

    @rule(
        "pack/moody", title="t", level=Level.ERROR, applies_to="rails", proves="p", facts=("f",), mend="m",
        sources=("s",), example=Example(fails="{}", holds="{}"),
    )  # fmt: skip
    def moody(rail: Rail, case: Case) -> Judgement:
        asked.append(rail.id)
        if len(asked) > 2:  # once at each corner
            raise ZeroDivisionError
        ripple_v = case.of(rail).ripple.peak_to_peak.most()
        return case.at_most(need=1.0, have=ripple_v, dimension=Dimension.VOLTAGE, says="ripple")

    base = reviewed()
    found = review(base.loaded, Catalogue([[moody]]), today=TODAY)
    (judgement,) = (one for one in found.judgements if one.rule == "pack/moody")
    assert (judgement.kind, found.faults) == (Kind.OPEN, ())
    again = must_keep(found, judgement)
    assert again is not None
    assert (again.facts, again.choice, again.room) == ((), None, pytest.approx(1.0))


def test_it_is_worked_out_once() -> None:
    judgement = said("trip_window/nuisance")
    assert must_keep(reviewed(), judgement) is must_keep(reviewed(), msgspec.structs.replace(judgement, message="x"))
