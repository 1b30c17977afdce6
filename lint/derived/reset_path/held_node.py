"""The output of a held stage: what it is held with, and what those that read it surely take for low and for high."""

from __future__ import annotations

from collections.abc import Mapping
from functools import partial
from typing import Final, Literal, TypeAlias

import msgspec

from tidegate.lint.case import Case
from tidegate.lint.derived.safe_rounding import show_down, show_up
from tidegate.lint.derived.supply.rail_of import delivered_v, rail_of
from tidegate.lint.description.model.reset_path import OutputStage, Reset
from tidegate.lint.graph.edge import EdgeKind
from tidegate.lint.physics import hold
from tidegate.lint.physics.logic_levels import input_levels_v
from tidegate.lint.physics.ramp import ramp_slope_v_per_s
from tidegate.lint.quantity import Dimension, show

_End: TypeAlias = Literal["least", "most"]

_SURE: Final[Mapping[str, str]] = {"low": "low_most_v", "high": "high_least_v"}
_WORST: Final[Mapping[str, _End]] = {"low": "least", "high": "most"}
_NO_ROOM: Final = "no hold will do: a supply, or a reader, with room between the two levels"


def reads_it(case: Case, stage: OutputStage) -> list[OutputStage | Reset]:
    """The stages and reset nets that a stage drives directly."""
    found: list[OutputStage | Reset] = []
    for name in case.graph.heads(stage.id, EdgeKind.DRIVES):
        element = case.graph.elements[name]
        assert isinstance(element, OutputStage | Reset)
        found.append(element)
    return found


def drives_reset(case: Case, stage: OutputStage) -> bool:
    """Whether a stage drives a reset net directly."""
    return any(isinstance(reader, Reset) for reader in reads_it(case, stage))


class HeldNode(msgspec.Struct, frozen=True):
    """A node that nothing drives, with the worst of everything that moves it away from its level."""

    hold_ohm: float
    leakage_a: float
    coupling_c_f: float
    total_c_f: float
    slope_v_per_s: float
    ramp_s: float

    @property
    def leaks_to_v(self) -> float:
        """How far leakage moves it away from the level it is held at, in V."""
        return hold.leakage_level_v(leakage_a=self.leakage_a, hold_ohm=self.hold_ohm)

    @property
    def ramps_to_v(self) -> float:
        """How far the fastest ramp moves it away, in V."""
        return hold.ramp_level_v(
            hold_ohm=self.hold_ohm, coupling_c_f=self.coupling_c_f, total_c_f=self.total_c_f,
            slope_v_per_s=self.slope_v_per_s, ramp_s=self.ramp_s,
        )  # fmt: skip

    @property
    def moves_v(self) -> float:
        """How far both move it away, in V."""
        return self.leaks_to_v + self.ramps_to_v

    def text(self) -> str:
        """What moves it, in V, and by what."""
        leakage = f"{show(self.leakage_a, Dimension.CURRENT)} through {show(self.hold_ohm, Dimension.RESISTANCE)}"
        leaks = f"{show(self.leaks_to_v, Dimension.VOLTAGE)} from {leakage}"
        if self.coupling_c_f == 0.0:
            return leaks
        slope = show(self.slope_v_per_s, Dimension.SLOPE)
        return f"{leaks} + {show(self.ramps_to_v, Dimension.VOLTAGE)} from a ramp of {slope}"

    def smaller_hold(self, room_v: float) -> str:
        """The greatest hold with which it moves no further than there is room, in words."""
        if room_v <= 0.0:
            return _NO_ROOM
        largest_ohm = hold.largest_hold_ohm(
            limit_v=room_v, leakage_a=self.leakage_a, coupling_c_f=self.coupling_c_f, total_c_f=self.total_c_f,
            slope_v_per_s=self.slope_v_per_s, ramp_s=self.ramp_s,
        )  # fmt: skip
        now = show(self.hold_ohm, Dimension.RESISTANCE)
        return f"a hold of {show_down(largest_ohm, Dimension.RESISTANCE)} or less; now up to {now}"


def larger_hold(*, supply_v: float, needed_v: float, drive_ohm: float, hold_ohm: float) -> str:
    """The least hold against which a stage moves its output as far as is needed, in words."""
    if needed_v >= supply_v:
        return _NO_ROOM
    least_ohm = hold.smallest_hold_for_driver_ohm(supply_v=supply_v, drive_ohm=drive_ohm, needed_v=max(needed_v, 0.0))
    now = show(hold_ohm, Dimension.RESISTANCE)
    return f"a hold of {show_up(least_ohm, Dimension.RESISTANCE)} or more; now down to {now}"


def held_node(case: Case, stage: OutputStage) -> HeldNode:
    """The node at the output of a held stage.

    Held low, the rail lifts it through what couples the two, most where there is little else on the node.  Held high,
    what it has to the ground keeps it behind the rail, and that is no more than all it has.
    Raises: MissingFactsError: where a fact is missing.
    """
    own = case.of(stage)
    hold_ohm, leakage_a = own.most("hold.resistance"), own.most("leakage")
    for reader in reads_it(case, stage):
        if isinstance(reader, Reset):
            leakage_a += case.of(reader).most("receivers.leakage")
    low = own.must("hold.to") == "low"
    coupling_f = own.most("hold.coupling") if low else own.most("load")
    if coupling_f == 0.0:
        case.settle()
        return HeldNode(hold_ohm, leakage_a, 0.0, 0.0, 0.0, 0.0)
    load_f = own.least("load") if low else coupling_f
    rise_v, rise_s = case.gather(
        lambda: case.of(rail_of(case, stage)).middle("nominal"), lambda: case.of(rail_of(case, stage)).least("rise")
    )
    slope_v_per_s = ramp_slope_v_per_s(rise_v=rise_v, rise_s=rise_s)
    return HeldNode(hold_ohm, leakage_a, coupling_f, load_f, slope_v_per_s, rise_s)


class SureLevel(msgspec.Struct, frozen=True):
    """A level that one reader surely takes for what is meant, in V from its ground."""

    reader: str
    level_v: float


def sure_low(case: Case, stage: OutputStage, *, supply: _End) -> SureLevel:
    """The lowest of the levels up to which those that read a stage surely take its output for low.

    The level of a standard is taken at the least supply of the receivers; where they live on the rail of the stage, at
    that end of it which ``supply`` names.
    Raises: MissingFactsError: where a fact is missing.
    """
    return min(_sure(case, stage, "low", supply), key=lambda sure: sure.level_v)


def sure_high(case: Case, stage: OutputStage, *, supply: _End) -> SureLevel:
    """The highest of the levels from which on those that read a stage surely take its output for high.

    The level of a standard is taken at the greatest supply of the receivers; where they live on the rail of the stage,
    at that end of it which ``supply`` names.
    Raises: MissingFactsError: where a fact is missing.
    """
    return max(_sure(case, stage, "high", supply), key=lambda sure: sure.level_v)


def _sure(case: Case, stage: OutputStage, level: str, supply: _End) -> list[SureLevel]:
    asks = (partial(_levels, case, stage, reader, level, supply) for reader in reads_it(case, stage))
    return [sure for levels in case.gather_all(asks) for sure in levels]


def _levels(case: Case, stage: OutputStage, reader: OutputStage | Reset, level: str, supply: _End) -> list[SureLevel]:
    facts = case.of(reader)
    receivers = reader.receivers if isinstance(reader, Reset) else None
    standard = receivers.levels if receivers is not None else None
    found = []
    if standard is None or (receivers is not None and receivers.threshold is not None):
        fact = "receivers.threshold" if isinstance(reader, Reset) else "threshold"
        found.append(SureLevel(reader.id, facts.least(fact) if level == "low" else facts.most(fact)))
    if standard is not None and isinstance(reader, Reset):
        levels = input_levels_v(standard=standard, supply_v=_receiver_supply_v(case, stage, reader, level, supply))
        found.append(SureLevel(f"{reader.id} ({standard})", getattr(levels, _SURE[level])))
    return found


def _receiver_supply_v(case: Case, stage: OutputStage, reader: Reset, level: str, supply: _End) -> float:
    """The supply at which the receivers of a net read a level at its worst."""
    shared = rail_of(case, reader) is rail_of(case, stage)
    supply_v = delivered_v(case, reader, supply if shared else _WORST[level])
    case.settle()
    return supply_v
