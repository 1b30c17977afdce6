"""Draws of the errors of the trip levels, part by part, in buffers that are used over and over."""

from __future__ import annotations

import math
from collections.abc import Mapping, Sequence
from enum import Enum
from typing import Final

import msgspec
import numpy as np

from tidegate.lint.physics.array_domain import FloatArray
from tidegate.lint.physics.domain import DomainError

_UNIFORM_WIDTH: Final = math.sqrt(12.0)
"""Width over standard deviation of a rectangular distribution (JCGM 100:2008, 4.3.7)."""


class Level(Enum):
    """Which of the two trip levels."""

    RISING = "rising"
    FALLING = "falling"


class DrawnError(msgspec.Struct, frozen=True):
    """One error to draw.

    Symbols:
        name            what causes it
        sigma_v      u  V  standard deviation, >= 0
        rectangular     rectangular, else normal
        shared          one and the same error, scaled, wherever this name occurs
    """

    name: str
    sigma_v: float
    rectangular: bool
    shared: bool


class PartDraws:
    """Draws the errors of both levels for a number of parts at a time.

    Formula: e = u N(0, 1), or u sqrt(12) (U(0, 1) - 1/2)
    Source: JCGM 101:2008 (GUM Supplement 1), 6.4.2 and 6.4.7; NumPy's generators behind them.
    Raises: DomainError: a shared error that is rectangular in one place and normal in another.
    """

    def __init__(self, errors: Sequence[DrawnError], *, seed: int, most: int) -> None:
        self._generator = np.random.default_rng(seed)
        self._shapes = _shared_shapes(errors)
        # A draw of each shared error for each level, for where it acts on each level on its own.
        self._shared = {(name, level): np.empty(most) for name in self._shapes for level in Level}
        self._draw, self._both = np.empty(most), np.empty(most)
        self._levels = {level: np.empty(most) for level in Level}
        self.count = most

    def next_parts(self, count: int) -> None:
        """Go on to the next count parts, at most as many as there is room for."""
        self.count = count
        for (name, _), buffer in self._shared.items():
            self._fill(buffer[:count], rectangular=self._shapes[name])

    def level_errors_v(self, *, both: Sequence[DrawnError], apart: Sequence[DrawnError]) -> Mapping[Level, FloatArray]:
        """Errors of the two levels of one detector, V, one entry for each part; overwritten by the next call.

        An error in both is drawn once and moves both levels; one in apart is drawn for each level.
        """
        total = self._both[: self.count]
        # A uniform draw is added as it comes, 0 to 1; what its middle amounts to is taken off here, once for all.
        total.fill(-sum(0.5 * _UNIFORM_WIDTH * e.sigma_v for e in (*both, *apart) if e.rectangular))
        # A tracked error that is shared takes the draw of one level, the same for all detectors.
        self._add(total, both, Level.RISING)
        if not apart:
            return dict.fromkeys(Level, total)
        found = {}
        for level in Level:
            found[level] = self._levels[level][: self.count]
            np.copyto(found[level], total)
            self._add(found[level], apart, level)
        return found

    def _add(self, total: FloatArray, errors: Sequence[DrawnError], level: Level) -> None:
        draw = self._draw[: self.count]
        for error in errors:
            scale_v = error.sigma_v * (_UNIFORM_WIDTH if error.rectangular else 1.0)
            if error.shared:
                np.multiply(self._shared[error.name, level][: self.count], scale_v, out=draw)
            else:
                self._fill(draw, rectangular=error.rectangular)
                draw *= scale_v
            total += draw

    def _fill(self, out: FloatArray, *, rectangular: bool) -> None:
        if rectangular:
            self._generator.random(out=out)
        else:
            self._generator.standard_normal(out=out)


def _shared_shapes(errors: Sequence[DrawnError]) -> dict[str, bool]:
    shapes: dict[str, bool] = {}
    for error in errors:
        if error.shared and shapes.setdefault(error.name, error.rectangular) is not error.rectangular:
            raise DomainError(f"shared contributor {error.name!r} must have one distribution")
    return shapes
