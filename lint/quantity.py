"""Text to SI number with a dimension, and back; spans of least, typical and greatest.

The table of units is closed: a unit that is not in it, a number without a unit, ``nan``, ``inf`` and a decimal
comma are refused with a message that says what would be right.  Scaling is exact: ``25 nA`` is the float nearest
to 25e-9, not 25 times the float nearest to 1e-9.
"""

from __future__ import annotations

import re
from collections.abc import Mapping
from decimal import MAX_EMAX, MIN_EMIN, Context, Decimal
from functools import lru_cache
from typing import Annotated, Any, ClassVar, Final, Literal, NoReturn, Self

import msgspec

from tidegate.lint.found import found
from tidegate.lint.limits import MOST_QUANTITY
from tidegate.lint.units import POWERS, SCALED
from tidegate.lint.units import Dimension as _Dimension

Dimension = _Dimension
"""What a quantity measures; here for those who read and show quantities and need no table of units."""

_QUANTITY: Final = re.compile(
    r"([+-]?[0-9]+(?:\.[0-9]+)?)(?:[eE]([+-]?[0-9]+))?( ?)([A-Za-z%1][A-Za-z0-9%/^*]*)", re.ASCII
)
_EXACT: Final = Context(prec=90, Emax=MAX_EMAX, Emin=MIN_EMIN, traps=[])
_LARGEST: Final = 1.7976931348623157e308


class QuantityError(ValueError):
    """A text is not a quantity of the dimension that is due; the message says what would be."""


def pattern(dimension: Dimension) -> str:
    """The regular expression that the schema uses for a text of this dimension."""
    names = "|".join(re.escape(unit) for unit in dimension.units)
    sign = "[+-]?" if dimension.signed else "[+]?"
    return f"^{sign}[0-9]+(\\.[0-9]+)?([eE][+-]?[0-9]+)? ?({names})$"


def parse(text: str, dimension: Dimension) -> float:
    """Read one quantity.

    Returns: the value in the dimension's kept unit.
    Raises: QuantityError: saying what is wrong with the text and what would be right.
    """
    value = value_or_none(text, dimension)
    if value is None:
        # Loaded here alone: a description without faults does not pay for the wording of faults.
        from tidegate.lint.quantity_faults import what_is_wrong

        raise QuantityError(what_is_wrong(text, dimension))
    return value


@lru_cache(maxsize=65536)
def value_or_none(text: str, dimension: Dimension) -> float | None:
    """The value, or None where the text is not a quantity of this dimension."""
    match = _QUANTITY.fullmatch(text) if len(text) <= MOST_QUANTITY else None
    if match is None:
        return None
    mantissa, exponent, gap, unit = match.groups()
    if mantissa[0] == "-" and not dimension.signed:
        return None
    if unit[0] == "1" and not gap:
        return None  # 0.0031/K has no number of its own
    power = POWERS[dimension].get(unit)
    if power is not None:
        value = float(f"{mantissa}e{int(exponent or 0) + power}")
        vanished = value == 0.0 and mantissa.strip("+-0.") != ""
    else:
        scaled = SCALED.get(dimension, {}).get(unit)
        if scaled is None:
            return None
        exact = _scaled(Decimal(f"{mantissa}e{exponent or 0}", _EXACT), *scaled)
        value = float(exact)
        vanished = value == 0.0 and exact != 0
    if vanished or not -_LARGEST <= value <= _LARGEST:
        return None
    return None if value < 0.0 and dimension is Dimension.TEMPERATURE else value


def _scaled(number: Decimal, factor: str, divisor: str, offset: str) -> Decimal:
    product = _EXACT.multiply(number, Decimal(factor))
    return _EXACT.add(_EXACT.divide(product, Decimal(divisor)), Decimal(offset))


_SHOWN: Final[Mapping[Dimension, tuple[tuple[float, str], ...]]] = {
    **{
        dimension: tuple((float(f"1e{power}"), unit) for unit, power in units.items())
        for dimension, units in POWERS.items()
    },
    Dimension.DURATION: (
        (1e-12, "ps"), (1e-9, "ns"), (1e-6, "us"), (1e-3, "ms"), (1.0, "s"), (3600.0, "h"), (31557600.0, "yr"),
    ),
    Dimension.SLOPE: ((1e-3, "mV/s"), (1.0, "V/s"), (1e3, "V/ms"), (1e6, "V/us"), (1e9, "V/ns")),
    Dimension.CURRENT_PER_WIDTH: (
        (1e-9, "fA/um"), (1e-6, "pA/um"), (1e-3, "nA/um"), (1.0, "uA/um"), (1e3, "mA/um"),
    ),
}  # fmt: skip
"""Units in which a number is shown, smallest first, with the size of one."""

NO_END: Final = "without end"
_SHOWN_FROM: Final = {"%": 1e-3}
"""Units that are used from another size on than one of them: 0.5 % is easier to read than 5000 ppm."""


@lru_cache(maxsize=4096)  # a report tells the same levels again and again
def show(value: float, dimension: Dimension, *, digits: int = 4) -> str:
    """A value for people: at most ``digits`` significant figures, with the unit that suits its size."""
    if value in (float("inf"), float("-inf")):
        return NO_END if value > 0 else f"-{NO_END}"
    if dimension is Dimension.COUNT:
        return _plain(value, digits)
    if dimension is Dimension.TEMPERATURE:
        return f"{_plain(value - 273.15, digits)} degC"
    shown = _SHOWN[dimension]
    rounded = abs(float(f"{value:.{digits - 1}e}"))
    if rounded == 0.0:
        return f"0 {dimension.unit if dimension.unit in dimension.units else shown[-1][1]}"
    size, unit = shown[0]
    for candidate, name in shown:
        if rounded >= _SHOWN_FROM.get(name, candidate) * (1 - 1e-12):
            size, unit = candidate, name
    if abs(value) > _LARGEST * size:  # more of the unit than a float can count
        return f"{Decimal(value) / Decimal(size):.{digits}g} {unit}"
    return f"{_plain(value / size, digits)} {unit}"


def _plain(value: float, digits: int) -> str:
    """A number, without exponent where that stays readable."""
    text = f"{value:.{digits}g}"
    if "e" in text and 1e-6 < abs(value) < 1e9:
        text = f"{Decimal(text):f}"
    return "0" if text == "-0" else text


def show_apart(first: float, second: float, dimension: Dimension) -> tuple[str, str]:
    """Two values for people, with as many digits as it takes to tell them apart (17 at the most)."""
    for digits in range(4, 18):
        texts = show(first, dimension, digits=digits), show(second, dimension, digits=digits)
        if texts[0] != texts[1] or first == second:
            return texts
    return texts


class Basis(msgspec.Struct, frozen=True, kw_only=True, forbid_unknown_fields=True):
    """Where a number comes from."""

    by: Literal["calculated", "simulated", "measured", "published"] | None = None
    corners: Literal["all", "one"] | None = None
    temperatures: Literal["all", "one"] | None = None
    ramps: Literal["all", "one"] | None = None
    reference: Literal["ideal", "real"] | None = None
    source: Annotated[str, msgspec.Meta(min_length=1)] | None = None


_OF_A_SPAN: Final = frozenset(("min", "typ", "max", "basis"))


class Span:
    """Least, typical and greatest value of a quantity, in its kept unit; None where not given. Immutable."""

    # A plain class: the library that builds the typed description hands over to read() only what it does not know.
    __slots__ = ("basis", "least", "most", "plain", "typical")
    dimension: ClassVar[Dimension]

    least: float | None
    typical: float | None
    most: float | None
    basis: Basis | None
    plain: bool
    """Whether one value is written, which is a nominal one; a range with equal ends is a range."""

    def __init__(
        self, least: float | None, typical: float | None, most: float | None, basis: Basis | None = None,
        plain: bool = False,
    ) -> None:  # fmt: skip
        put = object.__setattr__
        put(self, "least", least)
        put(self, "typical", typical)
        put(self, "most", most)
        put(self, "basis", basis)
        put(self, "plain", plain)

    def __setattr__(self, name: str, value: object) -> NoReturn:
        raise AttributeError(f"a span cannot be changed (tried to set {name})")

    def __delattr__(self, name: str) -> NoReturn:
        raise AttributeError(f"a span cannot be changed (tried to delete {name})")

    def __eq__(self, other: object) -> bool:
        return type(other) is type(self) and self._key() == other._key()

    def __hash__(self) -> int:
        return hash(self._key())

    def __repr__(self) -> str:
        return f"{type(self).__name__}({self.least!r}, {self.typical!r}, {self.most!r})"

    def __reduce__(self) -> tuple[type[Self], tuple[float | None, float | None, float | None, Basis | None, bool]]:
        return type(self), self._key()

    def _key(self) -> tuple[float | None, float | None, float | None, Basis | None, bool]:
        return self.least, self.typical, self.most, self.basis, self.plain

    @classmethod
    def read(cls, given: object) -> Self:
        """Read ``"1.62 V"`` or ``{min: ..., typ: ..., max: ..., basis: ...}``.

        Raises: QuantityError: where a text is no such quantity, or least, typical and greatest are out of order.
        """
        if isinstance(given, str):
            value = parse(given, cls.dimension)
            return cls(value, value, value, plain=True)
        if not isinstance(given, dict):
            raise QuantityError(_not_a_text(given, cls.dimension))
        if not given.keys() <= _OF_A_SPAN:
            raise QuantityError("a span has min, typ, max and basis")
        least, typical, most = (cls._part(given, key) for key in ("min", "typ", "max"))
        known = [value for value in (least, typical, most) if value is not None]
        if not known:
            raise QuantityError("a span without values; give at least one of min, typ, max")
        if known != sorted(known):
            order = ", ".join(f"{key} {given[key]}" for key in ("min", "typ", "max") if given.get(key) is not None)
            raise QuantityError(f"{order} are out of order; min <= typ <= max is due")
        basis = given.get("basis")
        return cls(least, typical, most, msgspec.convert(basis, Basis) if basis is not None else None)

    @classmethod
    def _part(cls, given: Mapping[str, Any], key: str) -> float | None:
        text = given.get(key)
        if text is None:
            return None
        if not isinstance(text, str):
            raise QuantityError(_not_a_text(text, cls.dimension))
        return parse(text, cls.dimension)

    @property
    def is_nominal(self) -> bool:
        """Whether it states a nominal value, about which there are errors: one value, or a typical one alone."""
        return self.plain or (self.least is None and self.most is None)

    @property
    def middle(self) -> float | None:
        """The typical value, or the middle between least and greatest where only these are given."""
        if self.typical is not None or self.least is None or self.most is None:
            return self.typical
        return (self.least + self.most) / 2


def _not_a_text(given: object, dimension: Dimension) -> str:
    from tidegate.lint.quantity_faults import with_unit

    if isinstance(given, bool) or not isinstance(given, int | float):
        return f"{found(given)} is no {dimension.noun}; write a number with its unit, such as {dimension.example}"
    return f"{given} has no unit; {with_unit(str(given), dimension)}"


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
