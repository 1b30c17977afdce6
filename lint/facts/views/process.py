"""Views of what the process allows: interconnect limits, transistors, resistors, capacitors, junctions.

Made from the model by ``python tests/record.py``: a fact is added there, not here.
"""

from __future__ import annotations

from typing import Literal

from tidegate.lint.description.model.process import (
    Capacitor,
    Device,
    Diode,
    Layer,
    LayerLimit,
    MismatchLaw,
    Narrow,
    Process,
    Resistor,
    ViaKind,
    ViaLimit,
)
from tidegate.lint.facts.view import Entries, Facts, Number, Word


class LayerLimitFacts(Facts[LayerLimit], of=LayerLimit):
    """Current limit of a layer."""

    temperature: Number
    life: Number
    dc: Number
    rms: Number
    peak: Number


class NarrowFacts(Facts[Narrow], of=Narrow):
    """Limit of narrow lines."""

    up_to: Number
    dc: Number


class LayerFacts(Facts[Layer], of=Layer):
    """Interconnect layer."""

    limits: Entries[LayerLimitFacts]
    narrow: NarrowFacts
    width_bias: Number
    thickness: Number
    short_length_product: Number
    sheet: Number
    source: Word[str]


class ViaLimitFacts(Facts[ViaLimit], of=ViaLimit):
    """Current limit of a via."""

    temperature: Number
    life: Number
    dc: Number


class ViaKindFacts(Facts[ViaKind], of=ViaKind):
    """Kind of via."""

    limits: Entries[ViaLimitFacts]
    resistance: Number
    source: Word[str]


class MismatchLawFacts(Facts[MismatchLaw], of=MismatchLaw):
    """Mismatch law."""

    coefficient: Number
    of: Word[Literal["single", "pair"]]


class DeviceFacts(Facts[Device], of=Device):
    """Transistor family."""

    polarity: Word[Literal["nmos", "pmos"]]
    threshold: Number
    threshold_slope: Number
    reference_temperature: Number
    gain: Number
    leakage: Number
    swing: Number
    mismatch: MismatchLawFacts
    supply: Number
    source: Word[str]


class ResistorFacts(Facts[Resistor], of=Resistor):
    """Resistor kind."""

    sheet: Number
    tc1: Number
    tc2: Number
    reference_temperature: Number
    source: Word[str]


class CapacitorFacts(Facts[Capacitor], of=Capacitor):
    """Capacitor kind."""

    density: Number
    source: Word[str]


class DiodeFacts(Facts[Diode], of=Diode):
    """Junction."""

    saturation: Number
    emission: Number
    band_gap: Number
    temperature_exponent: Number
    reference_temperature: Number
    source: Word[str]


class ProcessFacts(Facts[Process], of=Process):
    """Process."""

    kit: Word[Literal["ihp-sg13g2", "gf180mcu"]]
    activation_energy: Number
    current_exponent: Number
    plain_edge: Number
    layers: Entries[LayerFacts]
    vias: Entries[ViaKindFacts]
    devices: Entries[DeviceFacts]
    resistors: Entries[ResistorFacts]
    capacitors: Entries[CapacitorFacts]
    diodes: Entries[DiodeFacts]
    source: Word[str]
