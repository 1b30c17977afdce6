"""What a crossover is made of: which crossing makes the level, its parts, and what each may be."""

from __future__ import annotations

import math
from collections.abc import Mapping
from enum import Enum

import msgspec

from tidegate.lint.case import Case
from tidegate.lint.description.model.detector import Comparator, Crossover
from tidegate.lint.facts.view import Number, Word
from tidegate.lint.facts.views.detector import CrossoverFacts as CrossoverView
from tidegate.lint.facts.views.process import DeviceFacts, DiodeFacts, ResistorFacts
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

    A level is the root of an equation, with an end for every corner of what is given: where a component has no known
    end, there is no corner to solve, and nothing is said of the level.
    Raises: MissingFactsError: where a fact is missing, or an end of a range.
    """
    own = case.of(comparator)
    if _kind(own.crossover) != "crude_current":
        ratio, (_, _, offset_v) = _number(case, own.crossover.ratio), _values(case, own.crossover.offset)
        return _facts(case, comparator, Crossing.DIVIDER, ratio, {"offset": (-offset_v, 0.0, offset_v)})
    mirror = _number(case, own.crossover.mirror)
    moving = {
        "reference current": _values(case, own.crossover.reference_current),
        "reference start": _values(case, own.crossover.reference_start),
        "reference rise": _values(case, own.crossover.reference_rise),
    }
    return _facts(case, comparator, Crossing.REFERENCE, mirror, moving)


def second_crossing_facts(case: Case, comparator: Comparator) -> CrossoverFacts:
    """The crossing at which a crude current overtakes the reference current that it is compared with.

    Raises: MissingFactsError: as ``release_facts``.
    """
    own = case.of(comparator)
    moving = {"reference current": _values(case, own.crossover.reference_current)}
    return _facts(case, comparator, Crossing.CRUDE, _number(case, own.crossover.mirror), moving)


def _kind(facts: CrossoverView) -> str:
    """What kind of crossover it is.

    Raises: MissingFactsError: where that is not said: each kind has components of its own.
    """
    return facts.kind.given or facts.kind.lacking()


def _facts(case: Case, comparator: Comparator, crossing: Crossing, ratio: float, moving: Values) -> CrossoverFacts:
    crossover = comparator.crossover
    assert crossover is not None
    temperature = _values(case, case.whole.conditions.junction_temperature)
    crude = crossing is not Crossing.DIVIDER
    by_diode = crossover.diode is not None and crossover.device is None if crude else crossover.kind == "divider_diode"
    device_values, device = (_junction if by_diode else _transistor)(case, comparator)
    resistor_values, resistor_ref_k = _resistor(case, comparator, crossover)
    case.settle()
    assert device is not None
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
    values = {"resistance": _values(case, case.of(comparator).crossover.resistance)}
    if crossover.resistor is None:
        return values, None
    process = case.description.process
    assert process is not None  # the loader refuses a name that points nowhere
    facts = case.part(
        ResistorFacts, process.resistors.get(crossover.resistor), f"process.resistors.{crossover.resistor}"
    )
    values |= {"tc1": _values(case, facts.tc1), "tc2": _values(case, facts.tc2)}
    return values, _typical(case, facts.reference_temperature)


def _junction(case: Case, comparator: Comparator) -> tuple[Values, JunctionFacts | None]:
    name = _name(case, case.of(comparator).crossover.diode)
    if name is None:
        return {}, None
    process = case.description.process
    assert process is not None  # the loader refuses a name that points nowhere
    facts = case.part(DiodeFacts, process.diodes.get(name), f"process.diodes.{name}")
    values = {"saturation current": _values(case, facts.saturation)}
    return values, JunctionFacts(
        t_ref_k=_typical(case, facts.reference_temperature),
        temperature_exponent=_number(case, facts.temperature_exponent),
        gap_ev=_typical(case, facts.band_gap),
        emission=_number(case, facts.emission),
    )


def _transistor(case: Case, comparator: Comparator) -> tuple[Values, TransistorFacts | None]:
    own = case.of(comparator)
    gain, name = _values(case, own.crossover.gain), _name(case, own.crossover.device)
    if name is None:
        return {}, None
    process = case.description.process
    assert process is not None  # the loader refuses a name that points nowhere
    facts = case.part(DeviceFacts, process.devices.get(name), f"process.devices.{name}")
    values = {
        "threshold": _values(case, facts.threshold),
        "threshold slope": _values(case, facts.threshold_slope),
        "gain": gain,
    }
    t_ref_k, swing_v = _typical(case, facts.reference_temperature), _typical(case, facts.swing)
    if case.missing:
        return values, None
    return values, TransistorFacts(t_ref_k, slope_factor_of_swing(swing_v_per_decade=swing_v, t_k=t_ref_k))


def _name(case: Case, word: Word[str]) -> str | None:
    """The name of a family or a junction; None, and noted, where it is not given."""
    if word.given is None:
        case.missing.append(word.path)
    return word.given


def _values(case: Case, fact: Number) -> tuple[float, float, float]:
    """Least, nominal and greatest value; noted, and no number, where an end is not given.

    Nominal is what is typical, or halfway between the ends: only the ends decide anything.
    """
    given = fact.given
    if given is None or given.least is None or given.most is None:
        ends = () if given is None else (("min", given.least), ("max", given.most))
        case.missing.extend([f"{fact.path}.{end}" for end, value in ends if value is None] or [fact.path])
        return math.nan, math.nan, math.nan
    least, most = fact.least(), fact.most()
    return least, (least + most) / 2 if given.typical is None else fact.typical(), most


def _typical(case: Case, fact: Number) -> float:
    """The typical value; noted, and no number, where it is not given."""
    given = fact.given
    if given is None or given.typical is None:
        case.missing.append(fact.path if given is None else f"{fact.path}.typ")
        return math.nan
    return fact.typical()


def _number(case: Case, fact: Number) -> float:
    """A plain number; noted, and no number, where it is not given."""
    if fact.given is None:
        case.missing.append(fact.path)
        return math.nan
    return fact.number()
