"""Sizes as they are advised: rounded to few digits, on the side on which they still do."""

from __future__ import annotations

import math
from decimal import ROUND_CEILING, ROUND_FLOOR, Context, Decimal
from typing import Final

from tidegate.lint.quantity import Dimension, show

_DIGITS: Final = 3
_METRES_OF_GRID: Final = Decimal("1e-8")  # 0.01 um
_ALIKE: Final = ".11e"  # what a float leaves of 1.4 Mohm, 1400000.0000000002, is 1.4 Mohm


def show_up(value: float, dimension: Dimension) -> str:
    """A least size, with three digits: the next larger one."""
    return _show(value, dimension, ROUND_CEILING)


def show_down(value: float, dimension: Dimension) -> str:
    """A greatest size, with three digits: the next smaller one."""
    return _show(value, dimension, ROUND_FLOOR)


def _show(value: float, dimension: Dimension, rounding: str) -> str:
    if not math.isfinite(value):
        return show(value, dimension)
    rounded = Context(prec=_DIGITS, rounding=rounding).create_decimal(format(value, _ALIKE))
    return show(float(rounded), dimension)


def width_up_um(width_m: float) -> str:
    """A least width of a line, in micrometres as a layout has it: the next 0.01 um up."""
    steps = (Decimal(format(width_m, _ALIKE)) / _METRES_OF_GRID).to_integral_value(ROUND_CEILING)
    return f"{float(steps / 100):g} um"
