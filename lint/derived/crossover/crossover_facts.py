"""What a crossover is made of: which crossing makes the level, its parts, and what each may be."""

from __future__ import annotations

import math
from collections.abc import Mapping
from enum import Enum

import msgspec

from tidegate.lint.case import Case, Facts
from tidegate.lint.description.model.detector import Comparator, Crossover
from tidegate.lint.physics.device_at_corner import slope_factor_of_swing

Values = dict[str, tuple[float, float, float]]
"""Least, nominal and greatest value of parameters."""


class Crossing(Enum):
    """What overtakes what."""

    DIVIDER = "the divided supply overtakes the device"
    REFERENCE = "the reference current overtakes the crude one as it comes up"
    CRUDE = "the crude current overtakes the reference current in service"


class JunctionFacts(msgspec.Struct, frozen=True):
    """What is the same for a junction at every corner.

    Symbols:
        t_ref_k               K   temperature the saturation current is stated for
        temperature_exponent  -   exponent of temperature
        gap_ev                eV  band gap of the law
        emission              -   emission coefficient
    """

    t_ref_k: float
    temperature_exponent: float
    gap_ev: float
    emission: float


class TransistorFacts(msgspec.Struct, frozen=True):
    """What is the same for a diode-connected MOS device at every corner.

    Symbols:
        t_ref_k       K  temperature the threshold is stated for
        slope_factor  -  slope factor
    """

    t_ref_k: float
    slope_factor: float


class CrossoverFacts(msgspec.Struct, frozen=True):
    """A crossing whose level can be solved at any corner and temperature.

    Symbols:
        ratio                -  part of the supply that is compared; the mirror ratio where currents are
        resistor_ref_k       K  temperature the resistance is stated for; None where it is taken as stated at every one
        spans                   values that each parameter takes at its corners: one, or least and greatest
        nominal                 the nominal value of each
        temperature_k        K  lowest and highest temperature
        nominal_k            K  typical temperature
    """

    crossing: Crossing
    device: JunctionFacts | TransistorFacts
    ratio: float
    resistor_ref_k: float | None
    spans: Mapping[str, tuple[float, ...]]
    nominal: Mapping[str, float]
    temperature_k: tuple[float, float]
    nominal_k: float


def release_facts(case: Case, comparator: Comparator) -> CrossoverFacts:
    """The crossing at which a detector lets go as the supply rises.

    Raises: MissingFactsError: where a fact is missing.
    """
    own = case.of(comparator)
    if own.must("crossover.kind") != "crude_current":
        ratio, offset_v = own.number("crossover.ratio"), own.most("crossover.offset")
        return _facts(case, comparator, Crossing.DIVIDER, ratio, {"offset": (-offset_v, 0.0, offset_v)})
    mirror = own.number("crossover.mirror")
    moving = {
        "reference current": _values(own, "crossover.reference_current"),
        "reference start": _values(own, "crossover.reference_start"),
        "reference rise": _values(own, "crossover.reference_rise"),
    }
    return _facts(case, comparator, Crossing.REFERENCE, mirror, moving)


def second_crossing_facts(case: Case, comparator: Comparator) -> CrossoverFacts:
    """The crossing at which a crude current overtakes the reference current that it is compared with.

    Raises: MissingFactsError: where a fact is missing.
    """
    own = case.of(comparator)
    moving = {"reference current": _values(own, "crossover.reference_current")}
    return _facts(case, comparator, Crossing.CRUDE, own.number("crossover.mirror"), moving)


def _facts(case: Case, comparator: Comparator, crossing: Crossing, ratio: float, moving: Values) -> CrossoverFacts:
    crossover = comparator.crossover
    assert crossover is not None
    temperature = _values(case.whole, "conditions.junction_temperature")
    crude = crossing is not Crossing.DIVIDER
    by_diode = crossover.diode is not None and crossover.device is None if crude else crossover.kind == "divider_diode"
    device_values, device = (_junction if by_diode else _transistor)(case, comparator)
    resistor_values, resistor_ref_k = _resistor(case, comparator, crossover)
    case.settle()
    values = {**device_values, **resistor_values, **moving}
    return CrossoverFacts(
        crossing=crossing,
        device=device,
        ratio=ratio,
        resistor_ref_k=resistor_ref_k,
        spans={name: (least,) if least == most else (least, most) for name, (least, _, most) in values.items()},
        nominal={name: nominal for name, (_, nominal, _) in values.items()},
        temperature_k=(temperature[0], temperature[2]),
        nominal_k=temperature[1],
    )


def _resistor(case: Case, comparator: Comparator, crossover: Crossover) -> tuple[Values, float | None]:
    """The resistance and what it does over temperature, as far as its kind is named."""
    values = {"resistance": _values(case.of(comparator), "crossover.resistance")}
    if crossover.resistor is None:
        return values, None
    process = case.description.process
    assert process is not None  # the loader refuses a name that points nowhere
    facts = case.part(process.resistors[crossover.resistor], f"process.resistors.{crossover.resistor}")
    values |= {"tc1": _values(facts, "tc1"), "tc2": _values(facts, "tc2")}
    return values, facts.middle("reference_temperature")


def _junction(case: Case, comparator: Comparator) -> tuple[Values, JunctionFacts]:
    name = case.of(comparator).must("crossover.diode")
    process = case.description.process
    assert process is not None  # the loader refuses a name that points nowhere
    facts = case.part(process.diodes[name], f"process.diodes.{name}")
    values = {"saturation current": _values(facts, "saturation")}
    return values, JunctionFacts(
        t_ref_k=facts.middle("reference_temperature"),
        temperature_exponent=facts.number("temperature_exponent"),
        gap_ev=facts.middle("band_gap"),
        emission=facts.number("emission"),
    )


def _transistor(case: Case, comparator: Comparator) -> tuple[Values, TransistorFacts]:
    own = case.of(comparator)
    name = own.must("crossover.device")
    process = case.description.process
    assert process is not None  # the loader refuses a name that points nowhere
    facts = case.part(process.devices[name], f"process.devices.{name}")
    values = {
        "threshold": _values(facts, "threshold"),
        "threshold slope": _values(facts, "threshold_slope"),
        "gain": _values(own, "crossover.gain"),
    }
    t_ref_k, swing_v = facts.middle("reference_temperature"), facts.middle("swing")
    case.settle()
    return values, TransistorFacts(t_ref_k, slope_factor_of_swing(swing_v_per_decade=swing_v, t_k=t_ref_k))


def _values(facts: Facts, fact: str) -> tuple[float, float, float]:
    """Least, nominal and greatest value."""
    least, most = facts.least(fact), facts.most(fact)
    if math.isnan(least) or math.isnan(most):
        return least, math.nan, most
    return least, facts.middle(fact), most
