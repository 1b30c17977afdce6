"""The output of a held stage: what it is held with, and what those that read it surely take for low and for high."""

from __future__ import annotations

import math
from collections.abc import Iterator, Mapping
from functools import partial
from typing import Final, Literal, TypeAlias

import msgspec

from tidegate.lint.account import Sum, Term, less, plus
from tidegate.lint.case import Case
from tidegate.lint.derived.safe_rounding import show_down, show_up
from tidegate.lint.derived.supply.rail_of import delivered_v, rail_of
from tidegate.lint.derived.unsaid import missing
from tidegate.lint.description.model.reset_path import OutputStage, Reset
from tidegate.lint.facts.reading import Better
from tidegate.lint.graph.edge import EdgeKind
from tidegate.lint.physics import hold
from tidegate.lint.physics.logic_levels import input_levels_v
from tidegate.lint.physics.ramp import ramp_slope_v_per_s
from tidegate.lint.quantity import Dimension, show

End: TypeAlias = Literal["least", "most"]
Level: TypeAlias = Literal["low", "high"]

_WORST: Final[Mapping[Level, End]] = {"low": "least", "high": "most"}
"""The end of the supply of other receivers at which a level is worst."""
_SUPPLY: Final[Mapping[Level, End]] = {"low": "least", "high": "most"}
"""The end of the supply at which a stage is weakest against a hold to a level."""
_LARGER: Final = "a larger hold resistance, or a stronger stage"
_NO_ROOM: Final = "no hold will do: a supply, or a reader, with room between the two levels"
_STRONGER: Final = "a smaller hold resistance, less leakage, or less coupling to the rail"


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
    rise_v: float
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
            rise_v=self.rise_v, ramp_s=self.ramp_s,
        )  # fmt: skip

    def text(self) -> str:
        """What moves it, in V, and by what."""
        leakage = f"{show(self.leakage_a, Dimension.CURRENT)} through {show(self.hold_ohm, Dimension.RESISTANCE)}"
        leaks = f"{show(self.leaks_to_v, Dimension.VOLTAGE)} from {leakage}"
        if self.coupling_c_f == 0.0:
            return leaks
        slope = show(ramp_slope_v_per_s(rise_v=self.rise_v, rise_s=self.ramp_s), Dimension.SLOPE)
        return f"{leaks} + {show(self.ramps_to_v, Dimension.VOLTAGE)} from a ramp of {slope}"

    def smaller_hold(self, room_v: float) -> str:
        """The greatest hold with which it moves no further than there is room, in words."""
        largest_ohm = 0.0 if room_v <= 0.0 else hold.largest_hold_ohm(
            limit_v=room_v, leakage_a=self.leakage_a, coupling_c_f=self.coupling_c_f, total_c_f=self.total_c_f,
            rise_v=self.rise_v, ramp_s=self.ramp_s,
        )  # fmt: skip
        if largest_ohm == 0.0:
            return _NO_ROOM
        now = show(self.hold_ohm, Dimension.RESISTANCE)
        return f"a hold of {show_down(largest_ohm, Dimension.RESISTANCE)} or less; now up to {now}"


def held_node(case: Case, stage: OutputStage, to: Level) -> HeldNode:
    """The node at the output of a stage that is held at a level.

    Held low, the rail lifts it through what couples the two, most where there is little else on the node.  Held high,
    what it has to the ground keeps it behind the rail, and that is no more than all it has.
    Raises: MissingFactsError: where it is not given which rail feeds it.
    """
    coupling_f, total_f, rise_v, ramp_s = _coupled(case, stage, to)
    hold_ohm = case.of(stage).hold.resistance.most()
    return HeldNode(hold_ohm, _leakage_a(case, stage), coupling_f, total_f, rise_v, ramp_s)


def _leakage_a(case: Case, stage: OutputStage) -> float:
    """What leaks onto the output: from the stage, and from the receivers of the reset nets that it drives."""
    nets = (reader for reader in reads_it(case, stage) if isinstance(reader, Reset))
    return case.of(stage).leakage.most() + sum(case.of(net).receivers.leakage.most() for net in nets)


def _coupled(case: Case, stage: OutputStage, to: Level) -> tuple[float, float, float, float]:
    """Coupling, all capacitance, height and time of the ramp; of what couples to nothing, nothing more is asked."""
    own = case.of(stage)
    coupling_f = own.hold.coupling.most() if to == "low" else own.load.most()
    if coupling_f == 0.0:
        return 0.0, 0.0, 0.0, 0.0
    total_f = max(own.load.least(), coupling_f) if to == "low" else coupling_f
    rail = case.of(rail_of(case, stage))
    return coupling_f, total_f, rail.nominal.typical(), rail.rise.least()


def moves(case: Case, stage: OutputStage, to: Level) -> Sum:
    """How far leakage and the fastest ramp move the output of a stage away from the level it is held at, in V."""
    own = case.of(stage)
    return case.sum(
        plus("leakage through the hold", lambda: _leaks_v(case, stage), of=own.leakage, floor=0.0),
        plus("fastest ramp", lambda: _ramps_v(case, stage, to), of=own.hold.coupling if to == "low" else own.load,
             floor=0.0),
    )  # fmt: skip


def _leaks_v(case: Case, stage: OutputStage) -> float:
    leakage_a = _leakage_a(case, stage)
    return hold.leakage_level_v(leakage_a=leakage_a, hold_ohm=case.of(stage).hold.resistance.most())


def _ramps_v(case: Case, stage: OutputStage, to: Level) -> float:
    coupling_f, total_f, rise_v, ramp_s = _coupled(case, stage, to)
    return hold.ramp_level_v(
        hold_ohm=case.of(stage).hold.resistance.most(), coupling_c_f=coupling_f, total_c_f=total_f, rise_v=rise_v,
        ramp_s=ramp_s,
    )  # fmt: skip


def moves_text(case: Case, stage: OutputStage, to: Level, moved: Sum) -> str:
    """What moves the output, in words; what is not known is named."""
    return case.if_known(lambda: held_node(case, stage, to).text()) or parts_text(moved)


def parts_text(total: Sum) -> str:
    """``24 mV (leakage through the hold) + fastest ramp (not given)``."""
    return " + ".join(
        f"{line.name} (not given)" if line.waits else f"{show(line.value, Dimension.VOLTAGE)} ({line.name})"
        for line in total.lines
    )


def stronger_hold(case: Case, stage: OutputStage, to: Level, room_v: float) -> str:
    """What would keep the level held within some room, in words."""
    return case.if_known(lambda: held_node(case, stage, to).smaller_hold(room_v)) or _STRONGER


class SureLevel(msgspec.Struct, frozen=True):
    """A level that one reader surely takes for what is meant, in V from its ground, and the fact that says so."""

    reader: str
    level_v: float
    of: str

    def text(self, level: Level) -> str:
        """``por_n surely reads low up to 450 mV``."""
        ends = "up to {}" if level == "low" else "from {} on"
        at = show(self.level_v, Dimension.VOLTAGE) if math.isfinite(self.level_v) else "a level that is not given"
        return f"{self.reader} surely reads {level} {ends.format(at)}"


def sure_level(case: Case, stage: OutputStage, level: Level, supply: End) -> SureLevel:
    """The level that each of those that read a stage surely takes for low, or for high, and whose level that is.

    The level of a standard is taken at the supply of the receivers that is worst; where they live on the rail of the
    stage, at that end of it which ``supply`` names.  Readers of which nothing is known may ask for any level.
    """
    demands = [demand for reader in reads_it(case, stage) for demand in _demands(case, stage, reader, level, supply)]
    sign = 1.0 if level == "high" else -1.0
    asked = [(case.sum(demand).value, demand) for demand in demands]
    most, strictest = max(asked, key=lambda each: each[0])
    return SureLevel(strictest.name, sign * most, str(strictest.of))


def surely_read(case: Case, stage: OutputStage, level: Level, supply: End, gaps: tuple[str, ...]) -> Sum:
    """The same as a limit; ``gaps`` are the facts with which more may read the stage than are described to."""
    of = sure_level(case, stage, level, supply).of
    need = [plus(f"what its readers take for {level}", lambda: sure_level(case, stage, level, supply).level_v, of=of)]
    if gaps:
        stricter = plus if level == "high" else less
        need.append(stricter("what else may read it", partial(missing, gaps), of=gaps[0], floor=0.0))
    return case.sum(*need)


def _demands(case: Case, stage: OutputStage, reader: OutputStage | Reset, level: Level, supply: End) -> Iterator[Term]:
    """What a reader asks of a level, the greatest the strictest: a level to be low with its sign changed."""
    receivers = reader.receivers if isinstance(reader, Reset) else None
    standard = receivers.levels if receivers is not None else None
    if standard is None or (receivers is not None and receivers.threshold is not None):
        read = case.of(reader).receivers.threshold if isinstance(reader, Reset) else case.of(reader).threshold
        ask = read.most if level == "high" else lambda: -read.least()
        yield plus(reader.id, ask, of=read.path, floor=-math.inf)
    if standard is not None and isinstance(reader, Reset):
        of = case.of(reader).receivers.levels.path
        ask = partial(_standard, case, stage, reader, standard, level, supply)
        yield plus(f"{reader.id} ({standard})", ask, of=of, floor=-math.inf)


def _standard(case: Case, stage: OutputStage, net: Reset, standard: str, level: Level, supply: End) -> float:  # noqa: PLR0917
    """What a standard asks of a level at the supply of the receivers that is worst for it."""
    rail = rail_of(case, net)
    end = supply if rail is rail_of(case, stage) else _WORST[level]
    better = Better.LESS if level == "high" else Better.MORE
    delivered = case.of(rail).delivered
    supply_v = delivered.least(better) if end == "least" else delivered.most(better)
    if math.isinf(supply_v):
        return supply_v if level == "high" else -supply_v
    levels = input_levels_v(standard=standard, supply_v=supply_v)
    return levels.high_least_v if level == "high" else -levels.low_most_v


def larger_hold(case: Case, stage: OutputStage, to: Level, need_v: float) -> str:
    """The least hold against which a stage moves its output as far as is needed, in words."""
    return case.if_known(lambda: _larger_hold(case, stage, to, need_v)) or _LARGER


def _larger_hold(case: Case, stage: OutputStage, to: Level, need_v: float) -> str:
    supply_v, hold_ohm, drive_ohm = _drive(case, stage, to)
    needed_v = max(need_v if to == "low" else supply_v - need_v, 0.0)
    if needed_v >= supply_v:
        return _NO_ROOM
    least_ohm = hold.smallest_hold_for_driver_ohm(supply_v=supply_v, drive_ohm=drive_ohm, needed_v=needed_v)
    now = show(hold_ohm, Dimension.RESISTANCE)
    return f"a hold of {show_up(least_ohm, Dimension.RESISTANCE)} or more; now down to {now}"


def drive_text(case: Case, stage: OutputStage, to: Level) -> str:
    """``1.71 V through 8 kohm of drive against a hold of 0.8 Mohm``, as far as it is known."""
    own = case.of(stage)
    drive = case.if_known(lambda: show(own.drive.most(), Dimension.RESISTANCE)) or "what is not given"
    held = case.if_known(lambda: show(own.hold.resistance.least(), Dimension.RESISTANCE)) or "what is not given"
    supply = (
        case.if_known(lambda: show(delivered_v(case, stage, _SUPPLY[to]), Dimension.VOLTAGE)) or "what is not given"
    )
    return f"{supply} through {drive} of drive against a hold of {held}"


def _drive(case: Case, stage: OutputStage, to: Level) -> tuple[float, float, float]:
    """Supply, hold and drive where the stage moves its output least, in V and ohm."""
    own = case.of(stage)
    return delivered_v(case, stage, _SUPPLY[to]), own.hold.resistance.least(), own.drive.most()


def driven_v(case: Case, stage: OutputStage, to: Level) -> Sum:
    """The level to which a stage moves its output away from the level it is held at, in V from its ground."""
    own = case.of(stage)
    if to == "high":
        return case.sum(plus("level it comes down to", lambda: _driven_v(case, stage, to), of=own.drive, floor=0.0))
    return case.sum(less("level it reaches", lambda: -_driven_v(case, stage, to), of=own.drive, floor=-math.inf))


def _driven_v(case: Case, stage: OutputStage, to: Level) -> float:
    supply_v, hold_ohm, drive_ohm = _drive(case, stage, to)
    reached = hold.driven_level_v if to == "low" else hold.level_left_v
    return reached(supply_v=supply_v, hold_ohm=hold_ohm, drive_ohm=drive_ohm)


def supply_kept(case: Case, stage: OutputStage) -> Sum:
    """The least supply delivered to a stage, from which a level that is held high counts, in V."""
    least = less("supply delivered, least", lambda: -delivered_v(case, stage, "least"), floor=-math.inf)
    return case.sum(least)
