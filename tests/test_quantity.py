"""Quantities: against Pint (general units library) with exact fractions, and by the laws of reading and showing."""

from __future__ import annotations

import copy
import math
import pickle
from fractions import Fraction
from functools import cache

import pint
import pytest
from hypothesis import example, given, settings
from hypothesis import strategies as st

from tidegate.lint import quantity
from tidegate.lint.quantity import Basis, Dimension, QuantityError, Span, Voltage, parse, show, show_apart

PINT: pint.UnitRegistry[Fraction] = pint.UnitRegistry(non_int_type=Fraction)
READ = tuple(dimension for dimension in Dimension if dimension is not Dimension.COUNT)
UNITS = tuple((dimension, unit) for dimension in READ for unit in dimension.units)
NUMBERS = ("0", "1", "2.5", "0.1", "17", "3e-3", "4.7E+2", "0.30000000000000004", "123456789.123456789")


@cache
def one_of(unit: str) -> pint.Quantity[Fraction]:
    """One such unit; a square of a layer is no unit to Pint, and powers are written with **."""
    return PINT.parse_expression(unit.replace("/sq", "").replace("^", "**"))


def by_pint(number: str, unit: str, dimension: Dimension) -> Fraction:
    """The value in the kept unit, as an exact fraction."""
    if unit == "degC":
        return Fraction(PINT.Quantity(Fraction(number), "degC").to("K").magnitude)
    ratio = one_of(unit) / (one_of(dimension.unit) if dimension.unit != "1" else 1)
    return Fraction(number) * Fraction(ratio.to("dimensionless").magnitude)


@pytest.mark.parametrize(("dimension", "unit"), UNITS, ids=[unit for _, unit in UNITS])
def test_every_unit_is_read_as_pint_reads_it_to_the_last_bit(dimension: Dimension, unit: str) -> None:
    for number in NUMBERS:
        assert parse(f"{number} {unit}", dimension) == float(by_pint(number, unit, dimension))


def test_no_unit_belongs_to_two_dimensions() -> None:
    names = [unit for _, unit in UNITS]
    assert len(names) == len(set(names))


@pytest.mark.parametrize(
    ("text", "dimension", "value"),
    [
        ("25 nA", Dimension.CURRENT, 2.5e-8),
        ("25nA", Dimension.CURRENT, 2.5e-8),
        ("+25 nA", Dimension.CURRENT, 2.5e-8),
        ("3e-1 V", Dimension.VOLTAGE, 0.3),
        ("1e5fF", Dimension.CAPACITANCE, 1e-10),
        ("-40 degC", Dimension.TEMPERATURE, 233.15),
        ("-273.15 degC", Dimension.TEMPERATURE, 0.0),
        ("60 V/min", Dimension.SLOPE, 1.0),
        ("0.5 V/min", Dimension.SLOPE, float(Fraction(1, 120))),
        ("10 yr", Dimension.DURATION, 315576000.0),  # Julian years of 365.25 d
        ("0.003 1/K", Dimension.PER_KELVIN, 0.003),
        ("1e-400 yr", Dimension.DURATION, None),
        ("0e-999 yr", Dimension.DURATION, 0.0),
        ("1.7e308 V", Dimension.VOLTAGE, 1.7e308),
    ],
)
def test_a_text_is_read_exactly(text: str, dimension: Dimension, value: float | None) -> None:
    assert quantity.value_or_none(text, dimension) == value


DUE = "write a number with its unit, such as"
REFUSED = (
    ("", Dimension.VOLTAGE, "'' is no voltage; leave the key empty where it is not known yet"),
    ("V", Dimension.VOLTAGE, f"'V' is no voltage; {DUE} 1.62 V"),
    ("1.8", Dimension.VOLTAGE, "'1.8' has no unit; write its unit, such as 1.8 V"),
    ("0.02", Dimension.RATIO, "'0.02' has no unit; write it in % or ppm: 0.02 is 2 %"),
    ("nan V", Dimension.VOLTAGE, f"'nan V' is not a finite number; {DUE} 1.62 V"),
    ("nan", Dimension.CURRENT, f"'nan' is not a finite number; {DUE} 25 nA"),
    ("inf s", Dimension.DURATION, f"'inf s' is not a finite number; {DUE} 20 us"),
    ("-Infinity", Dimension.VOLTAGE, f"'-Infinity' is not a finite number; {DUE} 1.62 V"),
    ("1,8 V", Dimension.VOLTAGE, "'1,8 V' has a decimal comma; write 1.8 V"),
    ("1,8", Dimension.VOLTAGE, f"'1,8' has a decimal comma; {DUE} 1.62 V"),
    ("3 V + 2 V", Dimension.VOLTAGE, "'3 V + 2 V' is no voltage; write one number with its unit, such as 1.62 V"),
    ("1.8 V ± 2 %", Dimension.VOLTAGE, "'1.8 V ± 2 %' is no voltage; write one number with its unit, such as 1.62 V"),
    ("1.6-1.8 V", Dimension.VOLTAGE, "'1.6-1.8 V' is no voltage; write a range as {min: 1.6 V, max: 1.8 V}"),
    ("40 nA .. 90 nA", Dimension.CURRENT,
     "'40 nA .. 90 nA' is no current; write a range as {min: 40 nA, max: 90 nA}"),
    ("1_0 V", Dimension.VOLTAGE, "'1_0 V' is no voltage; write one number with its unit, such as 1.62 V"),
    ("1_000 V", Dimension.VOLTAGE, "'1_000 V' is no voltage; write 1000 V"),
    ("1 000 V", Dimension.VOLTAGE, "'1 000 V' is no voltage; write 1000 V"),
    (".5 V", Dimension.VOLTAGE, "'.5 V' is no voltage; write 0.5 V"),
    ("5. V", Dimension.VOLTAGE, "'5. V' is no voltage; write 5 V"),
    ("0x10 V", Dimension.VOLTAGE, "'0x10 V' is no voltage; write one number with its unit, such as 1.62 V"),
    ("1 V\n", Dimension.VOLTAGE, "'1 V\\n' is not written plainly; write 1 V"),
    (" 1 V", Dimension.VOLTAGE, "' 1 V' is not written plainly; write 1 V"),
    ("1\u00a0V", Dimension.VOLTAGE, "'1\\xa0V' is not written plainly; write 1 V"),
    ("20 \u00b5s", Dimension.DURATION, "'20 \u00b5s' is not written plainly; write 20 us"),
    ("1.4 M\u2126", Dimension.RESISTANCE, "'1.4 M\u2126' is not written plainly; write 1.4 Mohm"),
    ("125 \u00b0C", Dimension.TEMPERATURE, "'125 \u00b0C' is not written plainly; write 125 degC"),
    ("\u221240 degC", Dimension.TEMPERATURE, "'\u221240 degC' is not written plainly; write -40 degC"),
    ("\uff11 V", Dimension.VOLTAGE, "'\uff11 V' is not written plainly; write 1 V"),
    ("-1.8 V", Dimension.VOLTAGE, "'-1.8 V' is negative; a magnitude is due here, zero or more"),
    ("-300 degC", Dimension.TEMPERATURE, "'-300 degC' lies below absolute zero; the lowest is -273.15 degC"),
    ("-1 K", Dimension.TEMPERATURE, "'-1 K' lies below absolute zero; the lowest is -273.15 degC"),
    ("1e400 V", Dimension.VOLTAGE, "'1e400 V' is too large a number; no voltage is that large"),
    ("1e-400 V", Dimension.VOLTAGE, "'1e-400 V' is too small a number; no voltage is that small"),
    ("1e99999999999999999999 yr", Dimension.DURATION,
     "'1e99999999999999999999 yr' is too large a number; no duration is that large"),
    ("1e-99999999999999999999 degC", Dimension.TEMPERATURE,
     "'1e-99999999999999999999 degC' is too small a number; no temperature is that small"),
    ("5 mA", Dimension.VOLTAGE, "'5 mA' is a current; write a voltage, such as 1.62 V"),
    ("5 meV", Dimension.CURRENT, "'5 meV' is an energy; write a current, such as 25 nA"),
    ("1 F", Dimension.CHARGE, "'1 F' is a capacitance; write a charge, such as 20 fC"),
    ("1.8 v", Dimension.VOLTAGE, "'1.8 v' has the unknown unit 'v'; did you mean 1.8 V?"),
    ("1.8 volts", Dimension.VOLTAGE, "'1.8 volts' has the unknown unit 'volts'; did you mean 1.8 V?"),
    ("125 C", Dimension.TEMPERATURE, "'125 C' has the unknown unit 'C'; did you mean 125 degC?"),
    ("20 msec", Dimension.DURATION, "'20 msec' has the unknown unit 'msec'; did you mean 20 ms?"),
    ("10 years", Dimension.DURATION, "'10 years' has the unknown unit 'years'; did you mean 10 yr?"),
    ("10k", Dimension.RESISTANCE, "'10k' has the unknown unit 'k'; did you mean 10 kohm?"),
    ("1.4 MOhm", Dimension.RESISTANCE, "'1.4 MOhm' has the unknown unit 'MOhm'; did you mean 1.4 Mohm?"),
    ("2 mhz", Dimension.FREQUENCY, "'2 mhz' has the unknown unit 'mhz'; did you mean 2 MHz?"),
    ("100 ppm/C", Dimension.PER_KELVIN, "'100 ppm/C' has the unknown unit 'ppm/C'; did you mean 100 ppm/K?"),
    ("0.0031/K", Dimension.PER_KELVIN, "'0.0031/K' has the unknown unit '/K'; did you mean 0.0031 1/K?"),
    ("1.5 mV/degC", Dimension.TEMPERATURE_SLOPE,
     "'1.5 mV/degC' has the unknown unit 'mV/degC'; did you mean 1.5 mV/K?"),
    ("1.5 fF/um2", Dimension.CAPACITANCE_PER_AREA,
     "'1.5 fF/um2' has the unknown unit 'fF/um2'; did you mean 1.5 fF/um^2?"),
    ("1.8 GV", Dimension.VOLTAGE, "'1.8 GV' has the unknown unit 'GV'; units of a voltage: nV, uV, mV, V, kV"),
    ("9" * 80 + " V", Dimension.VOLTAGE,
     f"'{'9' * 60}...' is longer than 64 characters; {DUE} 1.62 V"),
    ("1 \x1b[31mV", Dimension.VOLTAGE,
     "'1 \\x1b[31mV' is no voltage; write one number with its unit, such as 1.62 V"),
    ("2", Dimension.COUNT, "'2' is a text; write a plain number, such as 2"),
)  # fmt: skip


@pytest.mark.parametrize(("text", "dimension", "message"), REFUSED, ids=[ascii(text[:20]) for text, *_ in REFUSED])
def test_what_is_no_quantity_is_refused_in_words(text: str, dimension: Dimension, message: str) -> None:
    with pytest.raises(QuantityError) as caught:
        parse(text, dimension)
    assert str(caught.value) == message


@given(st.text(max_size=70), st.sampled_from(tuple(Dimension)))
@example("1e999999999999999999999 yr", Dimension.DURATION)
@settings(max_examples=300)
def test_any_text_is_read_or_refused_with_a_printable_message(text: str, dimension: Dimension) -> None:
    try:
        value = parse(text, dimension)
    except QuantityError as error:
        assert str(error).isprintable()
        assert len(str(error)) < 400
    else:
        assert math.isfinite(value)


@given(
    st.sampled_from(UNITS),
    st.decimals(min_value=0, max_value=10**9, allow_nan=False, places=6),
    st.sampled_from(["", " "]),
)
@settings(max_examples=300)
def test_scaling_is_exact(of: tuple[Dimension, str], number: object, gap: str) -> None:
    dimension, unit = of
    gap = " " if unit.startswith("1/") else gap
    assert parse(f"{number:f}{gap}{unit}", dimension) == float(by_pint(f"{number:f}", unit, dimension))


SIZES = st.floats(min_value=1e-19, max_value=1e12)


@given(st.sampled_from(READ), SIZES, st.integers(2, 17))
@settings(max_examples=500)
def test_what_is_shown_reads_back_to_its_digits(dimension: Dimension, size: float, digits: int) -> None:
    value = size + 273.15 if dimension is Dimension.TEMPERATURE else size
    again = parse(show(value, dimension, digits=digits), dimension)
    room = 10.0 ** (1 - digits) * size + 1e-12 * abs(value)
    assert again == pytest.approx(value, rel=0, abs=room)


@given(st.sampled_from(READ), SIZES)
@settings(max_examples=200)
def test_a_value_below_zero_is_shown_as_its_size_with_a_sign(dimension: Dimension, size: float) -> None:
    if dimension is not Dimension.TEMPERATURE:
        assert show(-size, dimension) == f"-{show(size, dimension)}"


@pytest.mark.parametrize(
    ("value", "dimension", "text"),
    [
        (1.62, Dimension.VOLTAGE, "1.62 V"),
        (0.025, Dimension.VOLTAGE, "25 mV"),
        (0.99996, Dimension.VOLTAGE, "1 V"),
        (-0.025, Dimension.VOLTAGE, "-25 mV"),
        (0.0, Dimension.VOLTAGE, "0 V"),
        (-0.0, Dimension.VOLTAGE, "0 V"),
        (0.0, Dimension.RATIO, "0 %"),
        (0.0, Dimension.CAPACITANCE_PER_AREA, "0 fF/um^2"),
        (0.005, Dimension.RATIO, "0.5 %"),
        (1e-4, Dimension.RATIO, "100 ppm"),
        (2.5e-8, Dimension.CURRENT, "25 nA"),
        (9e-19, Dimension.CURRENT, "0.0009 fA"),
        (1.4e6, Dimension.RESISTANCE, "1.4 Mohm"),
        (398.15, Dimension.TEMPERATURE, "125 degC"),
        (233.15, Dimension.TEMPERATURE, "-40 degC"),
        (315576000.0, Dimension.DURATION, "10 yr"),
        (90.0, Dimension.DURATION, "90 s"),
        (1200.0, Dimension.CURRENT_PER_WIDTH, "1.2 mA/um"),
        (1e4, Dimension.SLOPE, "10 V/ms"),
        (12345.0, Dimension.COUNT, "12340"),
        (1.23456e-5, Dimension.COUNT, "0.00001235"),
        (math.inf, Dimension.RESISTANCE, "without end"),
        (-math.inf, Dimension.TEMPERATURE, "-without end"),
    ],
)
def test_values_are_shown_as_engineers_write_them(value: float, dimension: Dimension, text: str) -> None:
    assert show(value, dimension) == text


@pytest.mark.parametrize(
    ("first", "second", "texts"),
    [
        (0.038, 0.025, ("38 mV", "25 mV")),
        (1.62, 1.62, ("1.62 V", "1.62 V")),
        (0.025, 0.02500001, ("25 mV", "25.00001 mV")),
        (1.0, math.nextafter(1.0, 2.0), ("1 V", "1.0000000000000002 V")),
    ],
)
def test_two_values_are_told_apart(first: float, second: float, texts: tuple[str, str]) -> None:
    assert show_apart(first, second, Dimension.VOLTAGE) == texts


@given(SIZES, SIZES)
@settings(max_examples=200)
def test_different_values_never_look_the_same(first: float, second: float) -> None:
    texts = show_apart(first, second, Dimension.COUNT)
    assert (texts[0] == texts[1]) == (first == second)


def test_a_span_is_read_from_its_parts() -> None:
    assert Voltage.read("1.62 V") == Voltage(1.62, 1.62, 1.62, plain=True)
    assert Voltage.read({"min": "1.62 V", "typ": "1.62 V", "max": "1.62 V"}) == Voltage(1.62, 1.62, 1.62)
    span = Voltage.read({"min": "1.6 V", "max": "1.7 V", "basis": {"by": "simulated"}})
    assert (span.least, span.typical, span.most) == (1.6, None, 1.7)
    assert span.basis == Basis(by="simulated")
    assert span.middle == pytest.approx(1.65)
    assert Voltage.read({"typ": "1.6 V"}).middle == 1.6
    assert Voltage.read({"min": "1.6 V"}).middle is None
    assert repr(span) == "Voltage(1.6, None, 1.7)"


def test_a_span_takes_no_other_parts() -> None:
    with pytest.raises(QuantityError, match="a span has min, typ, max and basis"):
        Voltage.read({"min": "1.6 V", "least": "1.5 V"})


@pytest.mark.parametrize(
    ("given", "message"),
    [
        (5, "5 has no unit; write its unit, such as 5 V"),
        (1.8, "1.8 has no unit; write its unit, such as 1.8 V"),
        (True, "true is no voltage; write a number with its unit, such as 1.62 V"),
        ([], "an empty list is no voltage; write a number with its unit, such as 1.62 V"),
        ({}, "a span without values; give at least one of min, typ, max"),
        ({"basis": {}}, "a span without values; give at least one of min, typ, max"),
        ({"min": "2 V", "max": "1 V"}, "min 2 V, max 1 V are out of order; min <= typ <= max is due"),
        ({"min": "2 V", "typ": "1 V"}, "min 2 V, typ 1 V are out of order; min <= typ <= max is due"),
        ({"min": 2}, "2 has no unit; write its unit, such as 2 V"),
        ({"max": "2 A"}, "'2 A' is a current; write a voltage, such as 1.62 V"),
    ],
    ids=str,
)
def test_what_is_no_span_is_refused_in_words(given: object, message: str) -> None:
    with pytest.raises(QuantityError) as caught:
        Voltage.read(given)
    assert str(caught.value) == message


@pytest.mark.parametrize("kind", Span.__subclasses__(), ids=lambda kind: str(kind.__name__))
def test_a_span_cannot_be_changed_and_can_be_copied(kind: type[Span]) -> None:
    span = kind(1.0, 2.0, 3.0, Basis(by="measured"))
    for name in ("least", "typical", "most", "basis", "more"):
        with pytest.raises(AttributeError, match="cannot be changed"):
            setattr(span, name, 4.0)
        with pytest.raises(AttributeError, match="cannot be changed"):
            delattr(span, name)
    assert copy.deepcopy(span) == span == pickle.loads(pickle.dumps(span))
    assert hash(copy.copy(span)) == hash(span)
    assert span != kind(1.0, 2.0, 3.0)


def test_spans_of_different_dimensions_are_never_equal() -> None:
    kinds = Span.__subclasses__()
    assert [kind.dimension for kind in kinds] == list(READ)
    assert len({kind(1.0, 1.0, 1.0) for kind in kinds}) == len(kinds)
    assert all(one(1.0, 1.0, 1.0) != other(1.0, 1.0, 1.0) for one in kinds for other in kinds if one is not other)
