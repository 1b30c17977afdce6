"""Scenarios in which a rail goes away, or dips: fastest and slowest, and to every level at which something changes."""

from __future__ import annotations

from collections.abc import Iterable, Iterator
from typing import Final

from tidegate.lint.quantity import Dimension, show
from tidegate.lint.timing.interval import FOREVER_S
from tidegate.lint.timing.parts import ComparatorPart, LoadPart, SourcePart, StagePart, TimedPart
from tidegate.lint.timing.ramps import RailRamp
from tidegate.lint.timing.scenario import Scenario, Scene
from tidegate.lint.timing.starts import Setting
from tidegate.lint.timing.waveform import Waveform

_JUST: Final = 1e-9
"""Share of a level by which a supply passes it."""
_SHORTEST: Final = 1e-6
"""Share of the time a detector is blind for; a dip that rests for less turns round at once."""


def together(setting: Setting) -> Iterator[Scenario]:
    """All rails off the chip fall at once."""
    for fast, word in ((True, "fastest"), (False, "slowest")):
        waveforms = {
            rail.id: _down(ramp, ramp.fall.least if fast else ramp.fall.most)
            for rail in setting.outer_rails()
            if not _lacks(ramp := setting.ramps[rail.id], fast=fast)
        }
        if waveforms:
            about = f"every rail falls as {'fast' if fast else 'slowly'} as it may"
            yield Scenario(f"{word} power-down", about, Scene.FALL, waveforms, fast=fast)


def _lacks(ramp: RailRamp, *, fast: bool) -> tuple[str, ...]:
    return ramp.lacks.fast_fall if fast else ramp.lacks.slow_fall


def _down(ramp: RailRamp, falls_s: float) -> Waveform:
    return Waveform(((0.0, ramp.nominal_v), (falls_s, 0.0)))


def alone(setting: Setting, rail: str) -> Scenario | None:
    """One rail falls as steeply as it may, while the others stay; None where its fall is not known."""
    ramp = setting.ramps.get(rail)
    if ramp is None or not ramp.can_fall:
        return None
    slope_v_per_s = ramp.steepest.v_per_s
    about = f"{rail} falls at {show(slope_v_per_s, Dimension.SLOPE)}, by {ramp.steepest.by}"
    return Scenario(f"{rail} falls", about, Scene.FALL, {rail: _down(ramp, ramp.nominal_v / slope_v_per_s)}, rail=rail)


def dips(setting: Setting, rail: str) -> Iterator[Scenario]:
    """One rail dips to each critical level: for long, and for just less than its slowest detector surely sees."""
    ramp = setting.ramps.get(rail)
    if ramp is None or not ramp.can_dip:
        return
    watching = [
        p for p in setting.by_rail.get(rail, ()) if isinstance(p, ComparatorPart) and p.watches == rail and not p.over
    ]
    slowest = max(watching, key=lambda part: (_blind_s(part), part.id), default=None)
    blind_s = 0.0 if slowest is None else _blind_s(slowest)
    for level_v in critical_levels_v(setting.by_rail.get(rail, ()), rail, ramp):
        yield _dip(ramp, rail, level_v=level_v, rests_s=setting.long_s, words="for long")
        if slowest is not None and blind_s > 0.0 and level_v < slowest.falling.least:
            rests_s = (blind_s - _seen_low_s(slowest, ramp, level_v)) * (1.0 - _JUST)
            if rests_s > _SHORTEST * blind_s:
                length = show(rests_s, Dimension.DURATION)
                yield _dip(ramp, rail, level_v=level_v, rests_s=rests_s, words=f"for {length}")
            else:
                yield _dip(ramp, rail, level_v=level_v, rests_s=0.0, words="and back")


def _blind_s(part: ComparatorPart) -> float:
    """How long a detector is blind for at the most; 0 s where that, or its level, is not known."""
    known = part.filter.most < FOREVER_S and min(part.falling.least, part.rising.least) > -FOREVER_S
    return part.filter.most if known else 0.0


def _dip(ramp: RailRamp, rail: str, *, level_v: float, rests_s: float, words: str) -> Scenario:
    """A dip from nominal and back, as steep as the rail can be."""
    low_s = (ramp.nominal_v - level_v) / ramp.steepest.v_per_s
    rises_s = low_s + rests_s
    end_s = rises_s + (ramp.nominal_v - level_v) / ramp.fastest_rise_v_per_s
    points = ((0.0, ramp.nominal_v), (low_s, level_v), (rises_s, level_v), (end_s, ramp.nominal_v))
    name = f"{rail} dips to {show(level_v, Dimension.VOLTAGE)} {words}"
    return Scenario(name, name, Scene.DIP, {rail: Waveform(points)}, rail=rail, rises_s=rises_s)


def _seen_low_s(part: ComparatorPart, ramp: RailRamp, level_v: float) -> float:
    """How long a detector at its least levels takes a dip that turns round at once for low, in s."""
    falls_s = (part.falling.least - level_v) / ramp.steepest.v_per_s
    return falls_s + (part.rising.least - level_v) / ramp.fastest_rise_v_per_s


def critical_levels_v(parts: Iterable[TimedPart], rail: str, ramp: RailRamp) -> list[float]:
    """The levels of a rail at which something changes, each from its worse side, highest first, in V.

    Just above what a detector surely sees or re-arms below, or as deep as a dip without a bottom can go while its
    filter may ignore it; just below what a load or a circuit needs.
    """
    found: set[float] = set()
    for part in parts:
        match part:
            case ComparatorPart():
                if part.watches == rail and not part.over:
                    found.update((part.falling.least, part.falling.most * (1.0 - _JUST)))
                    found.add(_deepest_point_v(part, ramp))
                if part.rail == rail:
                    found.add(part.works_from.most * (1.0 - _JUST))
            case SourcePart() | StagePart():
                if part.rail == rail:
                    found.add(part.works_from.most * (1.0 - _JUST))
            case LoadPart():
                found.update(works.least * (1.0 - _JUST) for name, works in part.works if name == rail)
            case _:
                pass
    return sorted((level for level in found if 0.0 < level < ramp.nominal_v), reverse=True)


def _deepest_point_v(part: ComparatorPart, ramp: RailRamp) -> float:
    """How low a dip that turns round at once can go while a detector may ignore it, in V."""
    blind_s = part.filter.most * (1.0 - _JUST) - _seen_low_s(part, ramp, part.falling.least)
    if not 0.0 < blind_s < FOREVER_S:
        return part.falling.least
    s_per_v = 1.0 / ramp.steepest.v_per_s + 1.0 / ramp.fastest_rise_v_per_s
    return part.falling.least - blind_s / s_per_v
