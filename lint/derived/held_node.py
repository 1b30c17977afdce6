"""The output of a held stage: what it is held with, and what those that read it surely take for low and for high."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass
from typing import Final

from tidegate.lint.case import Case
from tidegate.lint.derived.rail_of import domain_rail, rail_of
from tidegate.lint.description.model.reset_path import OutputStage, Reset
from tidegate.lint.description.model.supply import Domain, Rail
from tidegate.lint.graph.edge import EdgeKind
from tidegate.lint.physics import hold
from tidegate.lint.physics.logic_levels import input_levels_v
from tidegate.lint.physics.ramp import ramp_slope_v_per_s

_NAN: Final = float("nan")


def reads_it(case: Case, stage: OutputStage) -> list[OutputStage | Reset]:
    """The stages and reset nets that a stage drives directly."""
    found: list[OutputStage | Reset] = []
    for name in case.graph.heads(stage.id, EdgeKind.DRIVES):
        element = case.graph.elements[name]
        assert isinstance(element, OutputStage | Reset)
        found.append(element)
    return found


@dataclass(frozen=True, slots=True)
class HeldNode:
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

    def largest_hold_ohm(self, limit_v: float) -> float:
        """The largest hold with which it moves no further than a limit, in ohm."""
        return hold.largest_hold_ohm(
            limit_v=limit_v, leakage_a=self.leakage_a, coupling_c_f=self.coupling_c_f, total_c_f=self.total_c_f,
            slope_v_per_s=self.slope_v_per_s, ramp_s=self.ramp_s,
        )  # fmt: skip


def held_node(case: Case, stage: OutputStage) -> HeldNode:
    """The node at the output of a held stage.

    Raises: MissingFactsError: where a fact is missing.
    """
    own = case.of(stage)
    hold_ohm, leakage_a, coupling_f = own.most("hold.resistance"), own.most("leakage"), own.most("hold.coupling")
    for reader in reads_it(case, stage):
        if isinstance(reader, Reset):
            leakage_a += case.of(reader).most("receivers.leakage")
    if coupling_f == 0.0:
        case.settle()
        return HeldNode(hold_ohm, leakage_a, 0.0, 0.0, 0.0, 0.0)
    load_f = own.least("load")
    rise_v, rise_s = case.gather(
        lambda: case.of(rail_of(case, stage)).most("nominal"), lambda: case.of(rail_of(case, stage)).least("rise")
    )
    slope_v_per_s = ramp_slope_v_per_s(rise_v=rise_v, rise_s=rise_s)
    return HeldNode(hold_ohm, leakage_a, coupling_f, load_f, slope_v_per_s, rise_s)


@dataclass(frozen=True, slots=True)
class SureLevel:
    """A level that one reader surely takes for what is meant, in V from its ground."""

    reader: str
    level_v: float


def sure_low(case: Case, stage: OutputStage, *, rail: Rail, supply_v: float) -> SureLevel:
    """The lowest of the levels up to which those that read a stage surely take its output for low.

    A standard's level is taken at ``supply_v`` where the receivers live on the rail of the stage, else at the least
    supply of their own.  Raises: MissingFactsError: where a fact is missing.
    """
    return min(_sure(case, stage, rail, supply_v, low=True), key=lambda sure: sure.level_v)


def sure_high(case: Case, stage: OutputStage, *, rail: Rail, supply_v: float) -> SureLevel:
    """The highest of the levels from which on those that read a stage surely take its output for high.

    A standard's level is taken at ``supply_v`` where the receivers live on the rail of the stage, else at the greatest
    supply of their own.  Raises: MissingFactsError: where a fact is missing.
    """
    return max(_sure(case, stage, rail, supply_v, low=False), key=lambda sure: sure.level_v)


def _sure(case: Case, stage: OutputStage, rail: Rail, supply_v: float, *, low: bool) -> list[SureLevel]:
    found = [
        level for reader in reads_it(case, stage) for level in _levels(case, reader, rail, supply_v, low=low)
    ]
    case.settle()
    return found


def _levels(
    case: Case, reader: OutputStage | Reset, rail: Rail, supply_v: float, *, low: bool
) -> Iterator[SureLevel]:
    facts = case.of(reader)
    if isinstance(reader, OutputStage):
        yield SureLevel(reader.id, facts.least("threshold") if low else facts.most("threshold"))
        return
    receivers = reader.receivers
    standard = receivers.levels if receivers is not None else None
    if standard is not None:
        at_v = _receiver_supply_v(case, reader, rail, supply_v, low=low)
        if at_v == at_v:  # a number: the rail of the receivers is known
            levels = input_levels_v(standard=standard, supply_v=at_v)
            yield SureLevel(f"{reader.id} ({standard})", levels.low_most_v if low else levels.high_least_v)
    if standard is None or (receivers is not None and receivers.threshold is not None):
        fact = "receivers.threshold"
        yield SureLevel(reader.id, facts.least(fact) if low else facts.most(fact))


def _receiver_supply_v(case: Case, reader: Reset, rail: Rail, supply_v: float, *, low: bool) -> float:
    """The supply of a net's receivers at which their level is worst; not a number, and noted, where it is not given."""
    if reader.domain is None:
        return case.of(reader).lacks("domain")
    domain = case.description.domains[reader.domain]
    assert isinstance(domain, Domain)
    if domain.rail is None:
        return case.of(domain).lacks("rail")
    own = domain_rail(case, domain)
    if own is rail:
        return supply_v
    return case.of(own).least("delivered") if low else case.of(own).most("delivered")
