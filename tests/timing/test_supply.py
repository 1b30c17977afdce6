"""A rail that its maker makes, and one that comes late, by hand."""

from __future__ import annotations

import pytest

from tidegate.lint.timing.interval import ALWAYS, FOREVER_S, NEVER, Times
from tidegate.lint.timing.parts import Bounds
from tidegate.lint.timing.state import On
from tidegate.lint.timing.supply import GivenSupply, MadeSupply, Ramp, Supply
from tidegate.lint.timing.waveform import Waveform

# 2 V, up within 4 s (2 s a volt), down within 8 s (4 s a volt); begins 1 s to 3 s after its maker is on.
RAMP = Ramp(nominal_v=2.0, rise=Bounds(4.0, 4.0), fall=Bounds(8.0, 8.0), delay=Bounds(1.0, 3.0))
MAKER = On(((10.0, 40.0),), ((-FOREVER_S, 12.0), (35.0, FOREVER_S)))
"""On from 10 s to 40 s at most, surely from 12 s to 35 s."""


@pytest.mark.parametrize(
    ("rising_v", "falling_v", "high", "low"),
    [
        # High at the earliest 1 s after 10 s and the way up; until it has come down from nominal after 40 s.
        (0.5, 0.5, ((12.0, 46.0),), ((-FOREVER_S, 16.0), (41.0, FOREVER_S))),
        (1.5, 0.5, ((14.0, 46.0),), ((-FOREVER_S, 18.0), (41.0, FOREVER_S))),
        (1.5, 1.0, ((14.0, 44.0),), ((-FOREVER_S, 18.0), (39.0, FOREVER_S))),
        (2.0, 2.0, ((15.0, 40.0),), ((-FOREVER_S, 19.0), (35.0, FOREVER_S))),
        (0.0, 0.0, ((11.0, 48.0),), ((-FOREVER_S, 15.0), (43.0, FOREVER_S))),
        (-1.0, -1.0, ((11.0, 52.0),), ((-FOREVER_S, 15.0), (47.0, FOREVER_S))),
        (2.0, 3.0, ((15.0, 40.0),), ((-FOREVER_S, 19.0), (35.0, FOREVER_S))),
        (2.0 + 1e-9, 0.5, NEVER, ALWAYS),  # above nominal: never reached
    ],
)
def test_a_made_rail_by_hand(rising_v: float, falling_v: float, high: Times, low: Times) -> None:
    rail = MadeSupply(MAKER, RAMP)
    assert Ramp.__struct_config__.frozen
    assert rail.may_be_high(rising_v=rising_v, falling_v=falling_v) == high
    assert rail.may_be_low(rising_v=rising_v, falling_v=falling_v) == low


def test_a_rail_that_comes_late_comes_within_its_bounds() -> None:
    waveform = Waveform(((0.0, 0.0), (2.0, 2.0), (8.0, 2.0), (9.0, 0.0)))
    rail = GivenSupply(waveform, least_s=1.0, most_s=3.0)
    # High at 1 V and more from 1 s to 8.5 s of its own time.
    assert rail.may_be_high(rising_v=1.0, falling_v=1.0) == ((2.0, 11.5),)
    assert rail.may_be_low(rising_v=1.0, falling_v=1.0) == ((-FOREVER_S, 4.0), (9.5, FOREVER_S))
    # With a gap of its own: high from 0.5 V up, low again only below 1.5 V.
    assert rail.may_be_high(rising_v=0.5, falling_v=1.5) == ((1.5, 11.25),)
    assert rail.may_be_low(rising_v=0.5, falling_v=1.5) == ((-FOREVER_S, 3.5), (9.25, FOREVER_S))
    assert GivenSupply(waveform).may_be_high(rising_v=1.0, falling_v=1.0) == ((1.0, 8.5),)


def test_above_a_level_between_two_bounds() -> None:
    rail = GivenSupply(Waveform(((0.0, 0.0), (4.0, 4.0), (8.0, 0.0))))
    # Perhaps from 1 V on, surely from 3 V on.
    assert rail.above(Bounds(1.0, 3.0)) == On(((1.0, 7.0),), ((-FOREVER_S, 3.0), (5.0, FOREVER_S)))
    assert rail.above(Bounds(1.0, 1.0)) == On(((1.0, 7.0),), ((-FOREVER_S, 1.0), (7.0, FOREVER_S)))
    assert rail.above(Bounds(1.0, FOREVER_S)) == On(((1.0, 7.0),), ALWAYS)


class Counting(Supply):
    """Answers what it was asked, and how often."""

    def __init__(self) -> None:
        super().__init__()
        self.asked: list[tuple[str, float, float]] = []

    def _may_be_high(self, rising_v: float, falling_v: float) -> Times:
        self.asked.append(("high", rising_v, falling_v))
        return ((rising_v, falling_v),)

    def _may_be_low(self, rising_v: float, falling_v: float) -> Times:
        self.asked.append(("low", rising_v, falling_v))
        return ((-rising_v, -falling_v),)


def test_what_was_asked_once_is_kept() -> None:
    rail = Counting()
    for _ in range(2):
        assert rail.may_be_high(rising_v=1.0, falling_v=2.0) == ((1.0, 2.0),)
        assert rail.may_be_high(rising_v=2.0, falling_v=1.0) == ((2.0, 1.0),)
        assert rail.may_be_low(rising_v=1.0, falling_v=2.0) == ((-1.0, -2.0),)
        assert rail.above(Bounds(1.0, 2.0)) == On(((1.0, 1.0),), ((-2.0, -2.0),))
        assert rail.above(Bounds(1.0, 2.0)) is rail.above(Bounds(1.0, 2.0))
    assert rail.asked == [
        ("high", 1.0, 2.0), ("high", 2.0, 1.0), ("low", 1.0, 2.0), ("high", 1.0, 1.0), ("low", 2.0, 2.0),
    ]  # fmt: skip
