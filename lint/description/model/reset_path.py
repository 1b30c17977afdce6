"""What carries a decision to the loads: output stages, reset nets, loads, overrides, neighbours."""

from __future__ import annotations

from typing import ClassVar, Literal

from tidegate.lint.description.model.part import (
    Ability,
    AtLeastOne,
    Count,
    Element,
    Name,
    NotNegative,
    Part,
    Promise,
    Text,
)
from tidegate.lint.description.model.timing import Timing
from tidegate.lint.quantity import (
    Capacitance,
    Charge,
    Current,
    Duration,
    GainFactor,
    Length,
    Resistance,
    Voltage,
)


class Hold(Part, frozen=True, kw_only=True):
    """Passive hold."""

    to: Literal["low", "high"] | None = None
    through: Literal["resistor", "transistor"] | None = None
    resistance: Resistance | None = None
    coupling: Capacitance | None = None
    note: Text | None = None


class Transistor(Part, frozen=True, kw_only=True):
    """Output transistor."""

    family: Text | None = None
    threshold: Voltage | None = None
    gain: GainFactor | None = None


class OutputLine(Part, frozen=True, kw_only=True):
    """Output line."""

    layer: Text | None = None
    width: Length | None = None
    length: Length | None = None
    via: Text | None = None
    vias: Count | None = None
    note: Text | None = None


class Discharge(Part, frozen=True, kw_only=True):
    """Discharge."""

    within: Duration | None = None
    by: Text | None = None
    note: Text | None = None


class OutputStage(Element, frozen=True, kw_only=True):
    """Output stage."""

    section: ClassVar[str] = "output_stages"

    driven_by: AtLeastOne[Name] | None = None
    combine: Literal["any_asserts", "all_agree"] | None = None
    combined_against: Literal["false_reset", "missed_reset"] | None = None
    domain: Name | None = None
    kind: Literal["gain", "inverter", "buffer", "schmitt", "latch", "level_shifter", "filter", "delay"] | None = None
    inverting: bool | None = None
    hold: Promise[Hold | Literal["none"]] | None = None
    works_from: Voltage | None = None
    threshold: Voltage | None = None
    input_edge: Duration | None = None
    nmos: Transistor | None = None
    pmos: Transistor | None = None
    drive: Resistance | None = None
    crowbar_peak: Current | None = None
    output: OutputLine | None = None
    leakage: Current | None = None
    load: Capacitance | None = None
    power_up: Promise[Literal["asserts", "releases", "undefined"]] | None = None
    dwell: Duration | None = None
    edges_per_cycle: NotNegative | None = None
    delay: Duration | None = None
    release_delay: Promise[Duration] | None = None
    discharge: Promise[Discharge | Literal["none"]] | None = None
    timing: Timing | None = None
    gated_by: Name | None = None
    consumes: Current | None = None
    note: Text | None = None


class Receiver(Part, frozen=True, kw_only=True):
    """Receivers of a net."""

    levels: Literal["JESD8C.01", "JESD8-5A.01", "JESD8-7A", "JESD8-11A", "JESD8-12A.01"] | None = None
    threshold: Voltage | None = None
    leakage: Current | None = None
    count: Count | None = None
    note: Text | None = None


class Reset(Element, frozen=True, kw_only=True):
    """Reset net."""

    section: ClassVar[str] = "resets"

    driven_by: AtLeastOne[Name] | None = None
    combine: Literal["any_asserts", "all_agree"] | None = None
    combined_against: Literal["false_reset", "missed_reset"] | None = None
    active: Literal["low", "high"] | None = None
    guards: tuple[Name, ...] | None = None
    domain: Name | None = None
    receivers: Receiver | None = None
    note: Text | None = None


class Need(Part, frozen=True, kw_only=True):
    """Need of a supply."""

    rail: Name
    works: Ability[Voltage] | None = None


class Load(Element, frozen=True, kw_only=True):
    """Guarded load."""

    section: ClassVar[str] = "loads"

    needs: AtLeastOne[Need] = ()
    references: tuple[Name, ...] | None = None
    domain: Name | None = None
    ready: Duration | None = None
    start: Duration | None = None
    clocked: bool | None = None
    synchronised: Promise[bool] | None = None
    consumes: Current | None = None
    leans_on: tuple[Name, ...] | None = None
    gated_by: Name | None = None
    note: Text | None = None


class Bypass(Element, frozen=True, kw_only=True):
    """Bypass."""

    section: ClassVar[str] = "bypasses"

    overrides: Name | None = None
    forces: Literal["released", "asserted"] | None = None
    controlled_by: Literal["pin", "register", "fuse", "test_port"] | None = None
    domain: Name | None = None
    reset_by: Promise[Name] | None = None
    leans_on: tuple[Name, ...] | None = None
    default: Literal["inactive", "active"] | None = None
    hold: Promise[Hold | Literal["none"]] | None = None
    locked_outside_test: Promise[bool] | None = None
    readable: Promise[bool] | None = None
    note: Text | None = None


class VictimNode(Part, frozen=True, kw_only=True):
    """Victim node."""

    resistance: Resistance | None = None
    capacitance: Capacitance | None = None


class Neighbour(Element, frozen=True, kw_only=True):
    """Neighbours."""

    section: ClassVar[str] = "neighbours"

    kind: Literal["capacitance", "shared_reference", "supply_impedance", "shared_return"]
    aggressor: Name
    victim: Name
    mutual: Promise[bool] | None = None
    at: Literal["rail", "input", "reference"] | None = None
    capacitance: Capacitance | None = None
    step: Voltage | None = None
    edge: Duration | None = None
    node: VictimNode | None = None
    impedance: Resistance | None = None
    current_step: Current | None = None
    reference: Name | None = None
    charge: Charge | None = None
    note: Text | None = None
