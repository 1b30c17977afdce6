"""Dimensions, and the closed table of units in which a description may state each of them."""

from __future__ import annotations

from collections.abc import Mapping
from enum import Enum
from typing import Final


class Dimension(Enum):
    """What a quantity measures: the word used in the schema."""

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
    """A plain number: it is shown, and read as a number of YAML, never from a text with a unit."""

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
        """Every unit that a description may use."""
        return tuple(POWERS[self]) + tuple(SCALED.get(self, ()))

    @property
    def noun(self) -> str:
        """The dimension in a sentence, without article."""
        return _NOUNS.get(self, self.value.replace("_", " "))

    @property
    def example(self) -> str:
        """A text of this dimension as an engineer would write it."""
        return _EXAMPLES[self]


_SIGNED: Final = frozenset(
    {Dimension.TEMPERATURE, Dimension.TEMPERATURE_SLOPE, Dimension.PER_KELVIN, Dimension.PER_KELVIN_SQUARED}
)

_NOUNS: Final[Mapping[Dimension, str]] = {
    Dimension.SLOPE: "voltage slope",
    Dimension.PER_KELVIN: "relative change per kelvin",
    Dimension.PER_KELVIN_SQUARED: "relative change per kelvin squared",
    Dimension.MISMATCH: "mismatch coefficient",
}

POWERS: Final[Mapping[Dimension, Mapping[str, int]]] = {
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
"""Power of ten that takes one such unit to the kept unit."""

SCALED: Final[Mapping[Dimension, Mapping[str, tuple[str, str, str]]]] = {
    Dimension.DURATION: {
        "min": ("60", "1", "0"),
        "h": ("3600", "1", "0"),
        "d": ("86400", "1", "0"),
        "yr": ("31557600", "1", "0"),  # Julian year of 365.25 d
    },
    Dimension.SLOPE: {"V/min": ("1", "60", "0")},
    Dimension.TEMPERATURE: {"degC": ("1", "1", "273.15")},
}
"""Units that are no power of ten of the kept one: exact factor, divisor and offset, as decimal texts."""

_KEPT_IN: Final[Mapping[Dimension, str]] = {
    **{
        dimension: next((unit for unit, power in units.items() if power == 0), "")
        for dimension, units in POWERS.items()
    },
    Dimension.RATIO: "1",
    Dimension.COUNT: "1",
    Dimension.CAPACITANCE_PER_AREA: "F/m^2",
    Dimension.MISMATCH: "V*m",
}

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
