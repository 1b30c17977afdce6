"""Comparators, and the references and bias they lean on."""

from __future__ import annotations

from typing import ClassVar, Literal

import msgspec

from tidegate.lint.description.model.part import Element, Name, NameOrNone, Part, Positive, Promise, Text, UpToOne
from tidegate.lint.description.model.timing import Timing
from tidegate.lint.quantity import (
    Capacitance,
    Charge,
    Current,
    Duration,
    Frequency,
    GainFactor,
    Ratio,
    Resistance,
    Slope,
    TemperatureSlope,
    Voltage,
)


class StartUp(Part, frozen=True, kw_only=True):
    """Start-up circuit."""

    by: Text | None = None
    least_slope: Slope | None = None
    note: Text | None = None


class Reference(Element, frozen=True, kw_only=True):
    """Reference."""

    section: ClassVar[str] = "references"

    kind: Literal["band_gap", "threshold", "divider", "external"] | None = None
    voltage: Voltage | None = None
    current: Current | None = None
    accuracy: Ratio | None = None
    drift: Ratio | None = None
    works_from: Voltage | None = None
    works_from_slope: TemperatureSlope | None = None
    settling: Duration | None = None
    source_resistance: Resistance | None = None
    decoupling: Capacitance | None = None
    domain: Name | None = None
    bias: NameOrNone | None = None
    leans_on: tuple[Name, ...] | None = None
    self_biased: bool | None = None
    start_up: Promise[StartUp | Literal["none"]] | None = None
    gated_by: Name | None = None
    resistance: Resistance | None = None
    consumes: Current | None = None
    note: Text | None = None


class Bias(Element, frozen=True, kw_only=True):
    """Bias."""

    section: ClassVar[str] = "biases"

    kind: Literal["resistor", "self_biased", "from_reference", "external"] | None = None
    source: Name | None = None
    domain: Name | None = None
    current: Current | None = None
    leakage: Current | None = None
    works_from: Voltage | None = None
    settling: Duration | None = None
    leans_on: tuple[Name, ...] | None = None
    start_up: Promise[StartUp | Literal["none"]] | None = None
    gated_by: Name | None = None
    resistance: Resistance | None = None
    consumes: Current | None = None
    note: Text | None = None


class Trip(Part, frozen=True, kw_only=True):
    """Trip levels."""

    rising: Voltage | None = None
    falling: Voltage | None = None
    note: Text | None = None


class Switch(Part, frozen=True, kw_only=True):
    """Switch of a level."""

    turned_by: Name | None = None
    closed_when: Literal["high", "low"] | None = None


class Hysteresis(Part, frozen=True, kw_only=True):
    """Hysteresis."""

    amount: Voltage | None = None
    made_by: Literal["switched_reference", "switched_tap", "positive_feedback", "schmitt_stage"] | None = None
    feedback: Literal["positive", "negative"] | None = None
    switches: tuple[Switch, ...] = ()
    feedback_delay: Duration | None = None
    note: Text | None = None


class Contributor(Part, frozen=True, kw_only=True):
    """Error contributor."""

    of: Literal["reference", "divider", "offset", "trim", "drift", "total", "other"] | None = None
    amount: Voltage | None = None
    share: Ratio | None = None
    is_: Literal["bound", "sigma"] | None = msgspec.field(default=None, name="is")
    at: Literal["rail", "input"] | None = None
    tracks: bool | None = None
    note: Text | None = None


class Divider(Part, frozen=True, kw_only=True):
    """Input divider."""

    ratio: UpToOne | None = None
    top: Resistance | None = None
    bottom: Resistance | None = None
    note: Text | None = None


class Noise(Part, frozen=True, kw_only=True):
    """Noise."""

    rms: Voltage | None = None
    bandwidth: Frequency | None = None


class Crossover(Part, frozen=True, kw_only=True):
    """Crossover."""

    kind: Literal["divider_diode", "divider_mos", "crude_current"] | None = None
    ratio: UpToOne | None = None
    resistance: Resistance | None = None
    resistor: Text | None = None
    diode: Text | None = None
    device: Text | None = None
    gain: GainFactor | None = None
    offset: Voltage | None = None
    reference_current: Current | None = None
    reference_start: Voltage | None = None
    reference_rise: Voltage | None = None
    mirror: Positive | None = None
    note: Text | None = None


class Comparator(Element, frozen=True, kw_only=True):
    """Comparator."""

    section: ClassVar[str] = "comparators"

    role: Literal["power_on", "under_voltage", "over_voltage", "reference_ready"]
    watches: Name
    domain: Name | None = None
    bias: NameOrNone | None = None
    reference: NameOrNone | None = None
    crossover: Crossover | None = None
    trip: Trip | None = None
    tracked: bool | None = None
    hysteresis: Hysteresis | Literal["none"] | None = None
    errors: dict[Name, Contributor] = {}
    codes: dict[Name, Trip] = {}
    ships_with: Text | None = None
    divider: Divider | None = None
    works_from: Voltage | None = None
    works_to: Voltage | None = None
    delay: Duration | None = None
    filter: Duration | None = None
    timing: Timing | None = None
    sampling: Duration | None = None
    noise: Noise | None = None
    kick: Charge | None = None
    switching_current: Current | None = None
    armed_by: Name | None = None
    gated_by: Name | None = None
    rearms_below: Voltage | None = None
    output: Literal["level", "pulse"] | None = None
    pulse: Duration | None = None
    undecided: Promise[Literal["asserts", "releases", "undefined"]] | None = None
    consumes: Current | None = None
    note: Text | None = None
