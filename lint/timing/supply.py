"""A rail in a scenario: a waveform that is given, or one that its maker makes."""

from __future__ import annotations

import msgspec

from tidegate.lint.physics.domain import product
from tidegate.lint.timing.interval import NEVER, Times, delayed, outside
from tidegate.lint.timing.parts import Bounds
from tidegate.lint.timing.state import On
from tidegate.lint.timing.waveform import Waveform


class Supply:
    """A rail over time; what was asked once is kept."""

    def __init__(self) -> None:
        self._above: dict[Bounds, On] = {}
        self._high: dict[tuple[float, float], Times] = {}
        self._low: dict[tuple[float, float], Times] = {}

    def above(self, level: Bounds) -> On:
        """When the rail may be above a level that lies between two bounds, and when it may not be."""
        found = self._above.get(level)
        if found is None:
            found = self._above[level] = On(
                self.may_be_high(rising_v=level.least, falling_v=level.least),
                self.may_be_low(rising_v=level.most, falling_v=level.most),
            )
        return found

    def may_be_high(self, *, rising_v: float, falling_v: float) -> Times:
        """When a detector with these levels may take the rail for high."""
        key = (rising_v, falling_v)
        found = self._high.get(key)
        if found is None:
            found = self._high[key] = self._may_be_high(rising_v, falling_v)
        return found

    def may_be_low(self, *, rising_v: float, falling_v: float) -> Times:
        """When a detector with these levels may take the rail for low."""
        key = (rising_v, falling_v)
        found = self._low.get(key)
        if found is None:
            found = self._low[key] = self._may_be_low(rising_v, falling_v)
        return found

    def _may_be_high(self, rising_v: float, falling_v: float) -> Times:
        raise NotImplementedError

    def _may_be_low(self, rising_v: float, falling_v: float) -> Times:
        raise NotImplementedError


class GivenSupply(Supply):
    """A rail with a waveform that comes late by a time between two bounds."""

    def __init__(self, waveform: Waveform, *, least_s: float = 0.0, most_s: float = 0.0) -> None:
        super().__init__()
        self.waveform = waveform
        self.least_s = least_s
        self.most_s = most_s

    def _may_be_high(self, rising_v: float, falling_v: float) -> Times:
        high = self.waveform.above(rising_v=rising_v, falling_v=falling_v)
        return delayed(high, least_s=self.least_s, most_s=self.most_s)

    def _may_be_low(self, rising_v: float, falling_v: float) -> Times:
        low = outside(self.waveform.above(rising_v=rising_v, falling_v=falling_v))
        return delayed(low, least_s=self.least_s, most_s=self.most_s)


class Ramp(msgspec.Struct, frozen=True):
    """How a made rail comes and goes, straight both ways; the times are those between 0 V and nominal."""

    nominal_v: float
    rise: Bounds
    fall: Bounds
    delay: Bounds
    """From its maker being on until it begins to rise."""


class MadeSupply(Supply):
    """A rail that follows its maker: it rises to its nominal level once the maker is on, and falls once it is off.

    A maker that is on for less than the rise, or off for less than the fall, is taken to have made the whole way.
    """

    def __init__(self, maker: On, ramp: Ramp) -> None:
        super().__init__()
        self.maker = maker
        self.ramp = ramp

    def _up(self, level_v: float) -> Bounds:
        """How long it takes from 0 V to a level."""
        share = max(level_v, 0.0) / self.ramp.nominal_v
        return Bounds(product(share, self.ramp.rise.least), product(share, self.ramp.rise.most))

    def _down(self, level_v: float) -> Bounds:
        """How long it takes from nominal to a level."""
        share = max(self.ramp.nominal_v - level_v, 0.0) / self.ramp.nominal_v
        return Bounds(product(share, self.ramp.fall.least), product(share, self.ramp.fall.most))

    def _may_be_high(self, rising_v: float, falling_v: float) -> Times:
        if rising_v > self.ramp.nominal_v:
            return NEVER
        up_s = self.ramp.delay.least + self._up(rising_v).least
        return delayed(self.maker.may_be_on, least_s=up_s, most_s=self._down(falling_v).most)

    def _may_be_low(self, rising_v: float, falling_v: float) -> Times:
        if rising_v > self.ramp.nominal_v:
            return outside(NEVER)
        up_s = self.ramp.delay.most + self._up(rising_v).most
        return delayed(self.maker.may_be_off, least_s=self._down(falling_v).least, most_s=up_s)
