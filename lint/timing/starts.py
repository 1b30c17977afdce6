"""Scenarios in which the chip starts, made from what each rail says of itself.

A rail that does not say what a scenario is made from is left out of it, and what it does then is not known.
"""

from __future__ import annotations

from collections.abc import Collection, Iterator, Mapping, Sequence
from typing import Final, NamedTuple

import msgspec

from tidegate.lint.description.model.description import Description
from tidegate.lint.description.model.supply import Rail
from tidegate.lint.quantity import Dimension, Span, show
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
    certain: bool = False
    """Whether only what may happen whatever the missing facts are is wanted."""

    def outer_rails(self) -> list[Rail]:
        """The rails that the chip does not make, of those that have a nominal level, by id."""
        rails = self.description.rails
        return [rails[name] for name in sorted(rails) if rails[name].made_by is None and name in self.ramps]

    def rising(self, *, fast: bool) -> list[Rail]:
        """Those of which it is known how they rise at the fastest, or at the slowest."""
        lacks = {rail.id: self.ramps[rail.id].lacks for rail in self.outer_rails()}
        return [
            rail for rail in self.outer_rails() if not (lacks[rail.id].fast_rise if fast else lacks[rail.id].slow_rise)
        ]


class Untried(NamedTuple):
    """A kind of scenario that cannot be tried on a rail for want of a fact."""

    name: str
    fact: str
    rail: str
    scene: Scene


def starts(setting: Setting) -> Iterator[Scenario]:
    """Every scenario in which the chip starts."""
    yield from _plain(setting)
    yield from _out_of_order(setting)
    yield from _not_from_nothing(setting)
    yield from _described(setting)


def untried(setting: Setting) -> Iterator[Untried]:
    """Scenarios that are not tried because a rail off the chip does not give a fact."""
    for rail in setting.outer_rails():
        lacks = setting.ramps[rail.id].lacks
        depth_v, at_v = (rail.dip.depth, rail.dip.at) if rail.dip is not None else (None, None)
        found = [
            ("fastest ramp", lacks.fast_rise, Scene.START),
            ("slowest ramp", lacks.slow_rise, Scene.START),
            ("a ramp that goes back", _lacks(rail, "dip.depth", depth_v, most=True), Scene.START),
            ("residual charge", _lacks(rail, "residual", rail.residual, most=True), Scene.START),
            ("off and on again", _lacks(rail, "off_time", rail.off_time, most=False), Scene.CYCLE),
            ("off and on again", lacks.fast_fall, Scene.CYCLE),
        ]
        if depth_v is not None and depth_v.most:
            where = _lacks(rail, "dip.at", at_v, most=True) or _lacks(rail, "dip.at", at_v, most=False)
            found.append(("a ramp that goes back anywhere", where, Scene.START))
        yield from (Untried(name, fact, rail.id, scene) for name, facts, scene in found for fact in facts)


def _lacks(rail: Rail, fact: str, span: Span | None, *, most: bool) -> tuple[str, ...]:
    """What is missing of one end of a quantity, as a path."""
    if span is None:
        return (rail.fact(fact),)
    if most:
        return () if span.most is not None else (rail.fact(f"{fact}.max"),)
    return () if span.least is not None else (rail.fact(f"{fact}.min"),)


def _up(ramp: RailRamp, *, fast: bool, from_v: float = 0.0, at_s: float = 0.0) -> Waveform:
    """A straight ramp from a level to nominal, with the slope of the whole one."""
    rise_s = (ramp.rise.least if fast else ramp.rise.most) * (1.0 - from_v / ramp.nominal_v)
    return Waveform(((at_s, from_v), (at_s + rise_s, ramp.nominal_v)))


def _plain(setting: Setting) -> Iterator[Scenario]:
    for fast, word in ((True, "fastest"), (False, "slowest")):
        waveforms = {rail.id: _up(setting.ramps[rail.id], fast=fast) for rail in setting.rising(fast=fast)}
        about = f"every rail rises as {'fast' if fast else 'slowly'} as it may"
        if waveforms:
            yield Scenario(f"{word} ramp", about, Scene.START, waveforms, fast=fast, in_sequence=True)
    rails = [rail for rail in setting.rising(fast=False) if _goes_back_as_said(setting, rail)]
    going_back = {rail.id: _going_back(setting, rail) for rail in rails}
    if any(waveform is not None for waveform in going_back.values()):
        waveforms = {rail.id: going_back[rail.id] or _up(setting.ramps[rail.id], fast=False) for rail in rails}
        yield Scenario(
            "ramp that goes back", "the slowest ramp, with the dip that the rail may have on its way", Scene.START,
            waveforms, fast=False, in_sequence=True,
        )  # fmt: skip


def _goes_back_as_said(setting: Setting, rail: Rail) -> bool:
    """Whether a rail says how deep it dips on its way up; and where, if what is not certain is not wanted."""
    if rail.dip is None or rail.dip.depth is None or rail.dip.depth.most is None:
        return False
    at_v = rail.dip.at
    known = at_v is not None and at_v.least is not None and at_v.most is not None
    return not setting.certain or known or not rail.dip.depth.most


def _going_back(setting: Setting, rail: Rail) -> Waveform | None:
    """The slowest ramp with its dip, where a detector is about to decide if the dip may be there."""
    depth_v = rail.dip.depth.most if rail.dip is not None and rail.dip.depth is not None else None
    if not depth_v or rail.dip is None:
        return None
    ramp = setting.ramps[rail.id]
    levels = [
        part.rising.least
        for part in setting.by_rail.get(rail.id, ())
        if isinstance(part, ComparatorPart) and part.watches == rail.id and not part.over and part.rising.least > 0.0
    ]
    at_v = max(levels, default=ramp.nominal_v / 2)
    if rail.dip.at is not None:
        least_v, most_v = rail.dip.at.least, rail.dip.at.most
        at_v = min(max(at_v, least_v if least_v is not None else 0.0), most_v if most_v is not None else ramp.nominal_v)
    at_v = min(at_v, ramp.nominal_v)
    low_v = max(at_v - depth_v, 0.0)
    s_per_v = ramp.rise.most / ramp.nominal_v
    top_s = at_v * s_per_v
    low_s = top_s + (at_v - low_v) * s_per_v
    return Waveform(
        ((0.0, 0.0), (top_s, at_v), (low_s, low_v), (low_s + (ramp.nominal_v - low_v) * s_per_v, ramp.nominal_v))
    )


def _out_of_order(setting: Setting) -> Iterator[Scenario]:
    """Rails whose order the description does not fix come in other orders: one late, one early, or groups of them."""
    rails = setting.rising(fast=True)
    free = [rail for rail in rails if rail.after is None]
    if len(free) < 2:
        return
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


def _not_from_nothing(setting: Setting) -> Iterator[Scenario]:
    """Starts from what an earlier time on left behind."""
    rails = setting.rising(fast=True)
    left_v = {
        rail.id: min(rail.residual.most, setting.ramps[rail.id].nominal_v)
        for rail in rails
        if rail.residual is not None and rail.residual.most is not None
    }
    if any(left_v.values()):
        waveforms = {name: _up(setting.ramps[name], fast=True, from_v=level_v) for name, level_v in left_v.items()}
        levels = ", ".join(f"{name} at {show(level_v, Dimension.VOLTAGE)}" for name, level_v in left_v.items())
        yield Scenario(
            "residual charge", f"the fastest ramp, with {_few(levels)}", Scene.START, waveforms, in_sequence=True
        )
    off_s = {
        rail.id: rail.off_time.least
        for rail in rails
        if rail.off_time is not None and rail.off_time.least is not None
        and not setting.ramps[rail.id].lacks.fast_fall and (rail.id in left_v or not setting.certain)
    }  # fmt: skip
    if off_s:
        longest_s = max(setting.ramps[name].fall.least for name in off_s)
        rests_s = max(off_s.values())
        waveforms = {
            name: _off_and_on(setting.ramps[name], left_v.get(name, 0.0), longest_s, rests_s) for name in off_s
        }
        yield Scenario(
            "off and on again", "every rail falls as fast as it may, stays off for its least time, and rises",
            Scene.CYCLE, waveforms, rises_s=longest_s + rests_s,
        )  # fmt: skip


def _few(text: str) -> str:
    return text if len(text) <= 120 else f"{text[:117]}..."


def _off_and_on(ramp: RailRamp, left_v: float, falls_within_s: float, off_s: float) -> Waveform:
    fall_s = ramp.fall.least * (1.0 - left_v / ramp.nominal_v)
    on_s = falls_within_s + off_s
    down = Waveform(((0.0, ramp.nominal_v), (fall_s, left_v)))
    return Waveform(down.points + _up(ramp, fast=True, from_v=left_v, at_s=on_s).points)


def _described(setting: Setting) -> Iterator[Scenario]:
    """The description's own waveforms; a rail off the chip that one leaves out rests at its nominal level."""
    resting = {rail.id: Waveform(((0.0, setting.ramps[rail.id].nominal_v),)) for rail in setting.outer_rails()}
    for name, scenario in setting.description.scenarios.items():
        waveforms = dict(resting)
        for waveform in scenario.waveforms:
            points = [(point.at.middle, point.level.middle) for point in waveform.points]
            known = tuple((at_s, level_v) for at_s, level_v in points if at_s is not None and level_v is not None)
            if known:
                waveforms[waveform.rail] = Waveform(known)
        yield Scenario(name, scenario.note or "described", Scene.OWN, waveforms)
