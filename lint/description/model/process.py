"""What the process allows: interconnect limits, transistors, resistors, capacitors, junctions."""

from __future__ import annotations

from typing import Literal

from tidegate.lint.description.model.part import Name, NotNegative, Part, Positive, Text
from tidegate.lint.quantity import (
    CapacitancePerArea,
    Current,
    CurrentPerWidth,
    Duration,
    Energy,
    GainFactor,
    Length,
    Mismatch,
    PerKelvin,
    PerKelvinSquared,
    Resistance,
    SheetResistance,
    Temperature,
    TemperatureSlope,
    Voltage,
)


class LayerLimit(Part, frozen=True, kw_only=True):
    """Current limit of a layer."""

    temperature: Temperature | None = None
    life: Duration | None = None
    dc: CurrentPerWidth | None = None
    rms: CurrentPerWidth | None = None
    peak: CurrentPerWidth | None = None


class Narrow(Part, frozen=True, kw_only=True):
    """Limit of narrow lines."""

    up_to: Length
    dc: Current


class Layer(Part, frozen=True, kw_only=True):
    """Interconnect layer."""

    limits: tuple[LayerLimit, ...] = ()
    narrow: Narrow | None = None
    width_bias: Length | None = None
    thickness: Length | None = None
    short_length_product: CurrentPerWidth | None = None
    sheet: SheetResistance | None = None
    source: Text | None = None
    note: Text | None = None


class ViaLimit(Part, frozen=True, kw_only=True):
    """Current limit of a via."""

    temperature: Temperature | None = None
    life: Duration | None = None
    dc: Current | None = None


class ViaKind(Part, frozen=True, kw_only=True):
    """Kind of via."""

    limits: tuple[ViaLimit, ...] = ()
    resistance: Resistance | None = None
    source: Text | None = None
    note: Text | None = None


class MismatchLaw(Part, frozen=True, kw_only=True):
    """Mismatch law."""

    coefficient: Mismatch
    of: Literal["single", "pair"]


class Device(Part, frozen=True, kw_only=True):
    """Transistor family."""

    polarity: Literal["nmos", "pmos"] | None = None
    threshold: Voltage | None = None
    threshold_slope: TemperatureSlope | None = None
    reference_temperature: Temperature | None = None
    gain: GainFactor | None = None
    leakage: CurrentPerWidth | None = None
    swing: Voltage | None = None
    mismatch: MismatchLaw | None = None
    supply: Voltage | None = None
    source: Text | None = None
    note: Text | None = None


class Resistor(Part, frozen=True, kw_only=True):
    """Resistor kind."""

    sheet: SheetResistance | None = None
    tc1: PerKelvin | None = None
    tc2: PerKelvinSquared | None = None
    reference_temperature: Temperature | None = None
    source: Text | None = None
    note: Text | None = None


class Capacitor(Part, frozen=True, kw_only=True):
    """Capacitor kind."""

    density: CapacitancePerArea | None = None
    source: Text | None = None
    note: Text | None = None


class Diode(Part, frozen=True, kw_only=True):
    """Junction."""

    saturation: Current | None = None
    emission: Positive | None = None
    band_gap: Energy | None = None
    temperature_exponent: NotNegative | None = None
    reference_temperature: Temperature | None = None
    source: Text | None = None
    note: Text | None = None


class Process(Part, frozen=True, kw_only=True):
    """Process."""

    kit: Literal["ihp-sg13g2", "gf180mcu"] | None = None
    activation_energy: Energy | None = None
    current_exponent: Positive | None = None
    plain_edge: Duration | None = None
    layers: dict[Name, Layer] = {}
    vias: dict[Name, ViaKind] = {}
    devices: dict[Name, Device] = {}
    resistors: dict[Name, Resistor] = {}
    capacitors: dict[Name, Capacitor] = {}
    diodes: dict[Name, Diode] = {}
    source: Text | None = None
    note: Text | None = None
