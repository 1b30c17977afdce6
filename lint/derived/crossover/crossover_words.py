"""Words for the level of a crossover: its parameters with their units, and why there may be no level."""

from __future__ import annotations

from collections.abc import Mapping
from typing import Final

from tidegate.lint.derived.crossover.crossover_facts import Crossing
from tidegate.lint.quantity import Dimension, show

DIMENSION_OF: Final = {
    "threshold": Dimension.VOLTAGE,
    "threshold slope": Dimension.TEMPERATURE_SLOPE,
    "gain": Dimension.GAIN_FACTOR,
    "resistance": Dimension.RESISTANCE,
    "tc1": Dimension.PER_KELVIN,
    "tc2": Dimension.PER_KELVIN_SQUARED,
    "saturation current": Dimension.CURRENT,
    "offset": Dimension.VOLTAGE,
    "reference current": Dimension.CURRENT,
    "reference start": Dimension.VOLTAGE,
    "reference rise": Dimension.VOLTAGE,
}
"""What each parameter of a crossover is measured in."""

NO_LEVEL: Final = {
    Crossing.DIVIDER: "at some corner the divided supply is ahead from the start: nothing holds reset at any supply",
    Crossing.REFERENCE: "at some corner the reference current never stays ahead of the crude one as it comes up: the "
    "detector never lets go",
    Crossing.CRUDE: "at some corner the crude current never reaches the reference current",
}
"""Why some corner has no level."""


def corner_text(corner: Mapping[str, float], t_k: float) -> str:
    """A corner and its temperature: ``at 125 degC with threshold 485 mV, offset -3 mV``."""
    words = [f"{name} {_signed(value, DIMENSION_OF[name])}" for name, value in corner.items()]
    return f"at {show(t_k, Dimension.TEMPERATURE)}{' with ' if words else ''}{', '.join(words)}"


def _signed(value: float, dimension: Dimension) -> str:
    return show(value, dimension) if value >= 0.0 else f"-{show(-value, dimension)}"
