"""Scenarios in which the chip starts, made from what each rail says of itself."""

from __future__ import annotations

from collections.abc import Collection, Iterator, Mapping, Sequence
from typing import Final

import msgspec

from tidegate.lint.description.model.description import Description
from tidegate.lint.description.model.supply import Rail
from tidegate.lint.quantity import Dimension, show
from tidegate.lint.timing.parts import ComparatorPart, TimedPart
from tidegate.lint.timing.ramps import RailRamp
from tidegate.lint.timing.scenario import Scenario, Scene
from tidegate.lint.timing.waveform import Waveform

_FEW: Final = 4
"""So many rails come late one at a time; more of them, in groups such that every two rails are told apart."""


class Setting(msgspec.Struct, frozen=True):
    """What scenarios are made from: rails off the chip, their ramps, and a time after which everything rests."""

    description: Description
    ramps: Mapping[str, RailRamp]
    by_rail: Mapping[str, Sequence[TimedPart]]
    """What each rail feeds, what watches it and what needs it."""
    long_s: float

    def outer_rails(self) -> list[Rail]:
        """The rails that the chip does not make, of those whose ramp is known."""
        return [rail for rail in self.description.rails.values() if rail.made_by is None and self._can_rise(rail.id)]

    def _can_rise(self, rail: str) -> bool:
        return rail in self.ramps and not self.ramps[rail].start_lacks


def starts(setting: Setting) -> Iterator[Scenario]:
    """Every scenario in which the chip starts."""
    rails = setting.outer_rails()
    if rails:
        yield from _plain(setting, rails)
        yield from _out_of_order(setting, [rail for rail in rails if rail.after is None])
        yield from _not_from_nothing(setting, rails)
    yield from _described(setting)


def untried(setting: Setting) -> Iterator[tuple[str, str]]:
    """Scenarios that are not tried because a rail off the chip does not give a fact: the name, and the fact."""
    for rail in setting.outer_rails():
        if rail.dip is None or rail.dip.depth is None:
            yield "a ramp that goes back", rail.fact("dip.depth")
        if rail.residual is None:
            yield "residual charge", rail.fact("residual")
        if rail.off_time is None or rail.off_time.least is None:
            yield "off and on again", rail.fact("off_time")


def _up(ramp: RailRamp, *, fast: bool, from_v: float = 0.0, at_s: float = 0.0) -> Waveform:
    """A straight ramp from a level to nominal, with the slope of the whole one."""
    rise_s = (ramp.rise.least if fast else ramp.rise.most) * (1.0 - from_v / ramp.nominal_v)
    return Waveform(((at_s, from_v), (at_s + rise_s, ramp.nominal_v)))


def _plain(setting: Setting, rails: Sequence[Rail]) -> Iterator[Scenario]:
    for fast, word in ((True, "fastest"), (False, "slowest")):
        waveforms = {rail.id: _up(setting.ramps[rail.id], fast=fast) for rail in rails}
        about = f"every rail rises as {'fast' if fast else 'slowly'} as it may"
        yield Scenario(f"{word} ramp", about, Scene.START, waveforms, fast=fast, in_sequence=True)
    going_back = {rail.id: _going_back(setting, rail) for rail in rails}
    if any(waveform is not None for waveform in going_back.values()):
        waveforms = {rail.id: going_back[rail.id] or _up(setting.ramps[rail.id], fast=False) for rail in rails}
        yield Scenario(
            "ramp that goes back", "the slowest ramp, with the dip that the rail may have on its way", Scene.START,
            waveforms, fast=False, in_sequence=True,
        )  # fmt: skip


def _going_back(setting: Setting, rail: Rail) -> Waveform | None:
    """The slowest ramp with its dip, where a detector is about to decide if the dip may be there."""
    depth_v = rail.dip.depth.most if rail.dip is not None and rail.dip.depth is not None else None
    if not depth_v or rail.dip is None:
        return None
    ramp = setting.ramps[rail.id]
    levels = [
        part.rising.least
        for part in setting.by_rail.get(rail.id, ())
        if isinstance(part, ComparatorPart) and part.watches == rail.id and not part.over
    ]
    at_v = max(levels, default=ramp.nominal_v / 2)
    if rail.dip.at is not None:
        at_v = min(max(at_v, rail.dip.at.least or 0.0), rail.dip.at.most or ramp.nominal_v)
    at_v = min(at_v, ramp.nominal_v)
    low_v = max(at_v - depth_v, 0.0)
    s_per_v = ramp.rise.most / ramp.nominal_v
    top_s = at_v * s_per_v
    low_s = top_s + (at_v - low_v) * s_per_v
    return Waveform(
        ((0.0, 0.0), (top_s, at_v), (low_s, low_v), (low_s + (ramp.nominal_v - low_v) * s_per_v, ramp.nominal_v))
    )


def _out_of_order(setting: Setting, free: Sequence[Rail]) -> Iterator[Scenario]:
    """Rails whose order the description does not fix come in other orders: one late, one early, or groups of them."""
    if len(free) < 2:
        return
    rails = setting.outer_rails()
    late_s = max(setting.ramps[rail.id].rise.least for rail in rails) + setting.long_s
    first = {rail.id: _up(setting.ramps[rail.id], fast=True) for rail in rails}
    last = {rail.id: _up(setting.ramps[rail.id], fast=True, at_s=late_s) for rail in rails}

    def scenario(name: str, about: str, late: Collection[str]) -> Scenario:
        waveforms = {rail: last[rail] if rail in late else first[rail] for rail in first}
        return Scenario(name, about, Scene.START, waveforms, in_sequence=True, rises_s=late_s)

    names = [rail.id for rail in free]
    if len(free) <= _FEW:
        for name in names:
            yield scenario(f"{name} late", f"{name} rises when all else has come to rest", {name})
        if len(free) > 2:
            for name in names:
                yield scenario(f"{name} early", f"{name} rises long before the others", set(names) - {name})
        return
    for bit in range((len(names) - 1).bit_length()):
        for late_bit in (1, 0):
            late = {name for number, name in enumerate(names) if number >> bit & 1 == late_bit}
            about = f"{len(late)} of the rails rise when all else has come to rest"
            yield scenario(f"rails late, group {2 * bit + 2 - late_bit}", about, late)


def _not_from_nothing(setting: Setting, rails: Sequence[Rail]) -> Iterator[Scenario]:
    """Starts from what an earlier time on left behind."""
    left_v = {rail.id: _residual_v(rail, setting.ramps[rail.id]) for rail in rails}
    if any(left_v.values()):
        waveforms = {rail.id: _up(setting.ramps[rail.id], fast=True, from_v=left_v[rail.id]) for rail in rails}
        levels = ", ".join(f"{name} at {show(level_v, Dimension.VOLTAGE)}" for name, level_v in left_v.items())
        yield Scenario(
            "residual charge", f"the fastest ramp, with {_few(levels)}", Scene.START, waveforms, in_sequence=True
        )
    off_s = {rail.id: rail.off_time.least for rail in rails if rail.off_time is not None}
    falls = all(not setting.ramps[rail.id].fast_fall_lacks for rail in rails)
    if falls and off_s and all(off_s.get(rail.id) is not None for rail in rails):
        longest_s = max(setting.ramps[rail.id].fall.least for rail in rails)
        rests_s = max(least_s or 0.0 for least_s in off_s.values())
        waveforms = {
            rail.id: _off_and_on(setting.ramps[rail.id], left_v[rail.id], longest_s, rests_s) for rail in rails
        }
        yield Scenario(
            "off and on again", "every rail falls as fast as it may, stays off for its least time, and rises",
            Scene.CYCLE, waveforms, rises_s=longest_s + rests_s,
        )  # fmt: skip


def _few(text: str) -> str:
    return text if len(text) <= 120 else f"{text[:117]}..."


def _residual_v(rail: Rail, ramp: RailRamp) -> float:
    level_v = rail.residual.most if rail.residual is not None else None
    return min(level_v or 0.0, ramp.nominal_v)


def _off_and_on(ramp: RailRamp, left_v: float, falls_within_s: float, off_s: float) -> Waveform:
    fall_s = ramp.fall.least * (1.0 - left_v / ramp.nominal_v)
    on_s = falls_within_s + off_s
    down = Waveform(((0.0, ramp.nominal_v), (fall_s, left_v)))
    return Waveform(down.points + _up(ramp, fast=True, from_v=left_v, at_s=on_s).points)


def _described(setting: Setting) -> Iterator[Scenario]:
    """The description's own waveforms; a rail off the chip that one leaves out rests at its nominal level."""
    resting = {
        rail.id: Waveform(((0.0, setting.ramps[rail.id].nominal_v),))
        for rail in setting.description.rails.values()
        if rail.made_by is None and rail.id in setting.ramps
    }
    for name, scenario in setting.description.scenarios.items():
        waveforms = dict(resting)
        for waveform in scenario.waveforms:
            points = [(point.at.middle, point.level.middle) for point in waveform.points]
            known = tuple((at_s, level_v) for at_s, level_v in points if at_s is not None and level_v is not None)
            if known:
                waveforms[waveform.rail] = Waveform(known)
        yield Scenario(name, scenario.note or "described", Scene.OWN, waveforms)
