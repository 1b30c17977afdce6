"""Text to SI number with a dimension, and back; spans of least, typical and greatest.

The table of units is closed: a unit that is not in it, a number without a unit, ``nan``, ``inf`` and a decimal
comma are refused with a message that says what would be right.  Scaling is exact: ``25 nA`` is the float nearest
to 25e-9, not 25 times the float nearest to 1e-9.
"""

from __future__ import annotations

import re
from collections.abc import Mapping
from decimal import Decimal, localcontext
from difflib import get_close_matches
from enum import Enum
from functools import lru_cache
from typing import Any, ClassVar, Final, Self

import msgspec


class QuantityError(ValueError):
    """A text is not a quantity of the dimension that is due; the message says what would be."""


class Dimension(Enum):
    """What a quantity measures: the word used in messages and in the schema."""

    VOLTAGE = "voltage"
    CURRENT = "current"
    RESISTANCE = "resistance"
    CAPACITANCE = "capacitance"
    CHARGE = "charge"
    DURATION = "duration"
    FREQUENCY = "frequency"
    TEMPERATURE = "temperature"
    LENGTH = "length"
    SLOPE = "slope"
    TEMPERATURE_SLOPE = "temperature_slope"
    RATIO = "ratio"
    PER_KELVIN = "per_kelvin"
    PER_KELVIN_SQUARED = "per_kelvin_squared"
    ENERGY = "energy"
    CURRENT_PER_WIDTH = "current_per_width"
    GAIN_FACTOR = "gain_factor"
    SHEET_RESISTANCE = "sheet_resistance"
    CAPACITANCE_PER_AREA = "capacitance_per_area"
    MISMATCH = "mismatch"
    COUNT = "count"

    @property
    def unit(self) -> str:
        """The unit in which values are kept: the SI unit without prefix (eV for energy)."""
        return _KEPT_IN[self]

    @property
    def signed(self) -> bool:
        """Whether a value below zero has a meaning; magnitudes have none."""
        return self in _SIGNED

    @property
    def units(self) -> tuple[str, ...]:
        """Every unit that a description may use, from the smallest to the largest."""
        return tuple(_UNITS[self])


_SIGNED: Final = frozenset(
    {Dimension.TEMPERATURE, Dimension.TEMPERATURE_SLOPE, Dimension.PER_KELVIN, Dimension.PER_KELVIN_SQUARED}
)

# Power of ten that takes one such unit to the kept unit.
_POWERS: Final[Mapping[Dimension, Mapping[str, int]]] = {
    Dimension.VOLTAGE: {"nV": -9, "uV": -6, "mV": -3, "V": 0, "kV": 3},
    Dimension.CURRENT: {"fA": -15, "pA": -12, "nA": -9, "uA": -6, "mA": -3, "A": 0},
    Dimension.RESISTANCE: {"mohm": -3, "ohm": 0, "kohm": 3, "Mohm": 6, "Gohm": 9},
    Dimension.CAPACITANCE: {"aF": -18, "fF": -15, "pF": -12, "nF": -9, "uF": -6, "mF": -3, "F": 0},
    Dimension.CHARGE: {"aC": -18, "fC": -15, "pC": -12, "nC": -9, "uC": -6, "C": 0},
    Dimension.DURATION: {"ps": -12, "ns": -9, "us": -6, "ms": -3, "s": 0},
    Dimension.FREQUENCY: {"Hz": 0, "kHz": 3, "MHz": 6, "GHz": 9},
    Dimension.TEMPERATURE: {"K": 0},
    Dimension.LENGTH: {"nm": -9, "um": -6, "mm": -3, "m": 0},
    Dimension.SLOPE: {"mV/s": -3, "V/s": 0, "mV/ms": 0, "V/ms": 3, "mV/us": 3, "V/us": 6, "V/ns": 9},
    Dimension.TEMPERATURE_SLOPE: {"uV/K": -6, "mV/K": -3, "V/K": 0},
    Dimension.RATIO: {"ppm": -6, "%": -2},
    Dimension.PER_KELVIN: {"ppm/K": -6, "%/K": -2, "1/K": 0},
    Dimension.PER_KELVIN_SQUARED: {"ppm/K^2": -6, "1/K^2": 0},
    Dimension.ENERGY: {"meV": -3, "eV": 0},
    Dimension.CURRENT_PER_WIDTH: {
        "fA/um": -9, "pA/um": -6, "nA/um": -3, "A/m": 0, "uA/um": 0, "A/cm": 2, "mA/um": 3,
    },
    Dimension.GAIN_FACTOR: {"uA/V^2": -6, "mA/V^2": -3, "A/V^2": 0},
    Dimension.SHEET_RESISTANCE: {"mohm/sq": -3, "ohm/sq": 0, "kohm/sq": 3},
    Dimension.CAPACITANCE_PER_AREA: {"aF/um^2": -6, "fF/um^2": -3},
    Dimension.MISMATCH: {"mV*um": -9},
    Dimension.COUNT: {},
}  # fmt: skip

# Units that are no power of ten of the kept one: (factor, offset), exact.
_SCALED: Final[Mapping[Dimension, Mapping[str, tuple[Decimal, Decimal]]]] = {
    Dimension.DURATION: {
        "min": (Decimal(60), Decimal(0)),
        "h": (Decimal(3600), Decimal(0)),
        "d": (Decimal(86400), Decimal(0)),
        "yr": (Decimal(31557600), Decimal(0)),  # Julian year of 365.25 d
    },
    Dimension.SLOPE: {"V/min": (Decimal(1) / Decimal(60), Decimal(0))},
    Dimension.TEMPERATURE: {"degC": (Decimal(1), Decimal("273.15"))},
}

_UNITS: Final[Mapping[Dimension, tuple[str, ...]]] = {
    dimension: (*_POWERS[dimension], *_SCALED.get(dimension, {})) for dimension in Dimension
}

_KEPT_IN: Final[Mapping[Dimension, str]] = {
    Dimension.RATIO: "1",
    Dimension.CAPACITANCE_PER_AREA: "F/m^2",
    Dimension.MISMATCH: "V*m",
    Dimension.COUNT: "1",
    **{
        dimension: next(unit for unit, power in units.items() if power == 0)
        for dimension, units in _POWERS.items()
        if 0 in units.values()
    },
    Dimension.SLOPE: "V/s",
    Dimension.CURRENT_PER_WIDTH: "A/m",
}

# Units used when a number is shown, smallest first, with the size of one.
_SHOWN: Final[Mapping[Dimension, tuple[tuple[float, str], ...]]] = {
    **{
        dimension: tuple((float(f"1e{power}"), unit) for unit, power in units.items())
        for dimension, units in _POWERS.items()
    },
    Dimension.DURATION: (
        (1e-12, "ps"), (1e-9, "ns"), (1e-6, "us"), (1e-3, "ms"), (1.0, "s"), (3600.0, "h"), (31557600.0, "yr"),
    ),
    Dimension.SLOPE: ((1e-3, "mV/s"), (1.0, "V/s"), (1e3, "V/ms"), (1e6, "V/us"), (1e9, "V/ns")),
    Dimension.CURRENT_PER_WIDTH: (
        (1e-9, "fA/um"), (1e-6, "pA/um"), (1e-3, "nA/um"), (1.0, "uA/um"), (1e3, "mA/um"),
    ),
    Dimension.RATIO: ((1e-6, "ppm"), (1e-2, "%")),
}  # fmt: skip

_NUMBER: Final = r"[+-]?[0-9]+(?:\.[0-9]+)?(?:[eE][+-]?[0-9]+)?"
_QUANTITY: Final = re.compile(rf"({_NUMBER}) ?([A-Za-z%1][A-Za-z0-9%/^*]*)", re.ASCII)
_MANTISSA: Final = re.compile(r"([+-]?[0-9]+(?:\.[0-9]+)?)(?:[eE]([+-]?[0-9]+))?", re.ASCII)
_LOOKALIKES: Final = str.maketrans(
    {"\u00b5": "u", "\u03bc": "u", "\u03a9": "ohm", "\u2126": "ohm", "°": "deg", "²": "^2"}
)
MOST_TEXT: Final = 64
"""Longest text of a quantity that is read, in characters."""


def pattern(dimension: Dimension) -> str:
    """The regular expression that the schema uses for a text of this dimension."""
    units = "|".join(re.escape(unit) for unit in dimension.units)
    sign = "[+-]?" if dimension.signed else "[+]?"
    return f"^{sign}[0-9]+(\\.[0-9]+)?([eE][+-]?[0-9]+)? ?({units})$"


def parse(text: str, dimension: Dimension) -> float:
    """Read one quantity.

    Returns: the value in the dimension's kept unit.
    Raises: QuantityError: saying what is wrong with the text and what would be right.
    """
    value = _read(text, dimension)
    if value is None:
        raise QuantityError(_what_is_wrong(text, dimension))
    return value


@lru_cache(maxsize=65536)
def _read(text: str, dimension: Dimension) -> float | None:
    """The value, or None where the text is not a quantity of this dimension."""
    match = _QUANTITY.fullmatch(text) if len(text) <= MOST_TEXT else None
    if match is None:
        return None
    number, unit = match.groups()
    if number.startswith("-") and not dimension.signed:
        return None
    power = _POWERS[dimension].get(unit)
    if power is not None:
        parts = _MANTISSA.fullmatch(number)
        assert parts is not None  # _QUANTITY holds the same number
        value = float(f"{parts[1]}e{int(parts[2] or 0) + power}")
    else:
        scaled = _SCALED.get(dimension, {}).get(unit)
        if scaled is None:
            return None
        factor, offset = scaled
        with localcontext() as context:
            context.prec = 60
            value = float(Decimal(number) * factor + offset)
    if value in (float("inf"), float("-inf")):
        return None
    return None if value < 0.0 and dimension is Dimension.TEMPERATURE else value


def _what_is_wrong(text: str, dimension: Dimension) -> str:
    """A sentence about a text that is not a quantity of this dimension, and what would be."""
    due = f"a {_word(dimension)} with its unit, such as {_EXAMPLES[dimension]}"
    shown = text if len(text) <= MOST_TEXT else text[:MOST_TEXT] + "..."
    clean = text.strip().translate(_LOOKALIKES)
    match = re.fullmatch(rf"({_NUMBER}) ?(\S*)", clean, re.ASCII)
    units = dimension.units
    problem = f"is no {_word(dimension)}"
    advice = due
    if len(text) > MOST_TEXT:
        problem, advice = f"is longer than {MOST_TEXT} characters", due
    elif re.fullmatch(r"[+-]?(nan|inf|infinity)\b.*", clean, re.IGNORECASE):
        problem, advice = "is not a finite number", due
    elif re.match(r"[+-]?[0-9]+,[0-9]", clean):
        problem, advice = "has a decimal comma", f"write {clean.replace(',', '.')}"
    elif match and not match[2]:
        problem, advice = "has no unit", f"write its unit, such as {match[1]} {_usual_unit(dimension)}"
    elif match and match[2] in units and clean != text:
        problem, advice = "is not written plainly", f"write {match[1]} {match[2]}"
    elif match and match[2] in units and dimension is Dimension.TEMPERATURE:
        problem = "lies below absolute zero"
    elif match and match[2] in units and match[1].startswith("-") and not dimension.signed:
        problem, advice = "is negative", "magnitudes are due here, zero or more"
    elif match and match[2] in units:
        problem = "is too large a number"
    elif match:
        other = next((d for d in Dimension if match[2] in _UNITS[d]), None)
        near = get_close_matches(match[2], units, 1) or [u for u in units if u.lower() == match[2].lower()]
        if other is not None:
            problem = f"is a {_word(other)}"
        elif near:
            problem = f"has the unknown unit {match[2]}"
            advice = f"did you mean {match[1]} {near[0]}? Units of {_word(dimension)}: {', '.join(units)}"
        else:
            problem = f"has the unknown unit {match[2]}"
            advice = f"units of {_word(dimension)}: {', '.join(units)}"
    return f"{shown!r} {problem}; {advice}"


def _word(dimension: Dimension) -> str:
    return dimension.value.replace("_", " ")


def _usual_unit(dimension: Dimension) -> str:
    return _EXAMPLES[dimension].split(" ")[1]


_EXAMPLES: Final[Mapping[Dimension, str]] = {
    Dimension.VOLTAGE: "1.62 V",
    Dimension.CURRENT: "25 nA",
    Dimension.RESISTANCE: "1.4 Mohm",
    Dimension.CAPACITANCE: "50 fF",
    Dimension.CHARGE: "20 fC",
    Dimension.DURATION: "20 us",
    Dimension.FREQUENCY: "2 MHz",
    Dimension.TEMPERATURE: "125 degC",
    Dimension.LENGTH: "0.5 um",
    Dimension.SLOPE: "10 V/ms",
    Dimension.TEMPERATURE_SLOPE: "1.5 mV/K",
    Dimension.RATIO: "2 %",
    Dimension.PER_KELVIN: "170 ppm/K",
    Dimension.PER_KELVIN_SQUARED: "0.4 ppm/K^2",
    Dimension.ENERGY: "0.9 eV",
    Dimension.CURRENT_PER_WIDTH: "1.2 mA/um",
    Dimension.GAIN_FACTOR: "120 uA/V^2",
    Dimension.SHEET_RESISTANCE: "260 ohm/sq",
    Dimension.CAPACITANCE_PER_AREA: "1.5 fF/um^2",
    Dimension.MISMATCH: "5 mV*um",
    Dimension.COUNT: "2",
}


def example(dimension: Dimension) -> str:
    """A text of this dimension as an engineer would write it."""
    return _EXAMPLES[dimension]


def show(value: float, dimension: Dimension, *, digits: int = 4) -> str:
    """A value for people: at most ``digits`` significant figures, with the unit that suits its size."""
    if dimension is Dimension.COUNT:
        return f"{value:.{digits}g}"
    if dimension is Dimension.TEMPERATURE:
        return f"{_plain(value - 273.15, digits)} degC"
    if value in (float("inf"), float("-inf")):
        return "unlimited" if value > 0 else "-unlimited"
    shown = _SHOWN[dimension]
    rounded = abs(float(f"{value:.{digits - 1}e}"))
    size, unit = shown[0]
    if rounded == 0.0:
        return f"0 {dimension.unit if dimension is not Dimension.RATIO else '%'}"
    for candidate, name in shown:
        if rounded >= candidate * (1 - 1e-12):
            size, unit = candidate, name
    return f"{_plain(value / size, digits)} {unit}"


def _plain(value: float, digits: int) -> str:
    """A number without exponent where that stays readable."""
    text = f"{value:.{digits}g}"
    if "e" in text and 1e-6 < abs(value) < 1e9:
        text = f"{float(text):f}".rstrip("0").rstrip(".")
    return "0" if text == "-0" else text


def show_apart(first: float, second: float, dimension: Dimension) -> tuple[str, str]:
    """Two values for people, with as many digits as it takes to tell them apart (17 at the most)."""
    for digits in range(4, 18):
        texts = show(first, dimension, digits=digits), show(second, dimension, digits=digits)
        if texts[0] != texts[1] or first == second:
            return texts
    return texts


class Basis(msgspec.Struct, frozen=True, kw_only=True):
    """Where a number comes from."""

    by: str | None = None
    corners: str | None = None
    temperatures: str | None = None
    ramps: str | None = None
    reference: str | None = None
    source: str | None = None


class Span:
    """Least, typical and greatest value of a quantity, in its kept unit; None where not given. Immutable."""

    # A plain class: the library that builds the typed description hands over to read() only what it does not know.
    __slots__ = ("basis", "least", "most", "typical")
    dimension: ClassVar[Dimension]

    least: Final[float | None]
    typical: Final[float | None]
    most: Final[float | None]
    basis: Final[Basis | None]

    def __init__(
        self, least: float | None, typical: float | None, most: float | None, basis: Basis | None = None
    ) -> None:
        self.least = least
        self.typical = typical
        self.most = most
        self.basis = basis

    def __eq__(self, other: object) -> bool:
        return type(other) is type(self) and self._key() == other._key()

    def __hash__(self) -> int:
        return hash(self._key())

    def __repr__(self) -> str:
        return f"{type(self).__name__}({self.least!r}, {self.typical!r}, {self.most!r})"

    def _key(self) -> tuple[float | None, float | None, float | None, Basis | None]:
        return self.least, self.typical, self.most, self.basis

    @classmethod
    def read(cls, given: object) -> Self:
        """Read ``"1.62 V"`` or ``{min: ..., typ: ..., max: ..., basis: ...}``.

        Raises: QuantityError: where a text is no such quantity, or least, typical and greatest are out of order.
        """
        if isinstance(given, str):
            value = parse(given, cls.dimension)
            return cls(value, value, value)
        if not isinstance(given, dict):
            raise QuantityError(_not_a_text(given, cls.dimension))
        least, typical, most = (cls._part(given, key) for key in ("min", "typ", "max"))
        known = [value for value in (least, typical, most) if value is not None]
        if not known:
            raise QuantityError("needs at least one of min, typ, max")
        if known != sorted(known):
            raise QuantityError(f"{_order(given)} are out of order; min <= typ <= max is due")
        basis = given.get("basis")
        return cls(least, typical, most, msgspec.convert(basis, Basis) if basis is not None else None)

    @classmethod
    def _part(cls, given: Mapping[str, Any], key: str) -> float | None:
        text = given.get(key)
        if text is None:
            return None
        if not isinstance(text, str):
            raise QuantityError(f"{key}: {_not_a_text(text, cls.dimension)}")
        try:
            return parse(text, cls.dimension)
        except QuantityError as error:
            raise QuantityError(f"{key}: {error}") from None

    @property
    def middle(self) -> float | None:
        """The typical value, or the middle between least and greatest where only these are given."""
        if self.typical is not None or self.least is None or self.most is None:
            return self.typical
        return (self.least + self.most) / 2


def _order(given: Mapping[str, Any]) -> str:
    return ", ".join(f"{key} {given[key]}" for key in ("min", "typ", "max") if given.get(key) is not None)


def _not_a_text(given: object, dimension: Dimension) -> str:
    if isinstance(given, bool) or not isinstance(given, int | float):
        return f"a {_word(dimension)} with its unit is due, such as {_EXAMPLES[dimension]}"
    return f"{given} has no unit; write its unit, such as {given} {_usual_unit(dimension)}"


class Voltage(Span):
    """A span of volts."""

    __slots__ = ()
    dimension = Dimension.VOLTAGE


class Current(Span):
    """A span of amperes."""

    __slots__ = ()
    dimension = Dimension.CURRENT


class Resistance(Span):
    """A span of ohms."""

    __slots__ = ()
    dimension = Dimension.RESISTANCE


class Capacitance(Span):
    """A span of farads."""

    __slots__ = ()
    dimension = Dimension.CAPACITANCE


class Charge(Span):
    """A span of coulombs."""

    __slots__ = ()
    dimension = Dimension.CHARGE


class Duration(Span):
    """A span of seconds."""

    __slots__ = ()
    dimension = Dimension.DURATION


class Frequency(Span):
    """A span of hertz."""

    __slots__ = ()
    dimension = Dimension.FREQUENCY


class Temperature(Span):
    """A span of kelvins."""

    __slots__ = ()
    dimension = Dimension.TEMPERATURE


class Length(Span):
    """A span of metres."""

    __slots__ = ()
    dimension = Dimension.LENGTH


class Slope(Span):
    """A span of volts per second."""

    __slots__ = ()
    dimension = Dimension.SLOPE


class TemperatureSlope(Span):
    """A span of volts per kelvin."""

    __slots__ = ()
    dimension = Dimension.TEMPERATURE_SLOPE


class Ratio(Span):
    """A span of plain numbers, written in per cent or ppm."""

    __slots__ = ()
    dimension = Dimension.RATIO


class PerKelvin(Span):
    """A span of relative changes per kelvin."""

    __slots__ = ()
    dimension = Dimension.PER_KELVIN


class PerKelvinSquared(Span):
    """A span of relative changes per kelvin squared."""

    __slots__ = ()
    dimension = Dimension.PER_KELVIN_SQUARED


class Energy(Span):
    """A span of electronvolts."""

    __slots__ = ()
    dimension = Dimension.ENERGY


class CurrentPerWidth(Span):
    """A span of amperes per metre of width."""

    __slots__ = ()
    dimension = Dimension.CURRENT_PER_WIDTH


class GainFactor(Span):
    """A span of amperes per volt squared."""

    __slots__ = ()
    dimension = Dimension.GAIN_FACTOR


class SheetResistance(Span):
    """A span of ohms per square."""

    __slots__ = ()
    dimension = Dimension.SHEET_RESISTANCE


class CapacitancePerArea(Span):
    """A span of farads per square metre."""

    __slots__ = ()
    dimension = Dimension.CAPACITANCE_PER_AREA


class Mismatch(Span):
    """A span of volt metres: standard deviation times the root of the gate area."""

    __slots__ = ()
    dimension = Dimension.MISMATCH
