"""Where the current law of a MOS device meets a straight line, for arrays of corners at once."""

from __future__ import annotations

import math
from typing import Final, NamedTuple

import numpy as np

from tidegate.lint.physics.array_domain import BoolArray, FloatArray, Reals, finite
from tidegate.lint.physics.domain import DomainError

_LN2: Final = math.log(2.0)
_MOST_STEPS: Final = 100

_SETTLED: Final = 1e-9
"""Relative step after which the next, quadratically smaller, lies below a rounding."""


class InversionRoot(NamedTuple):
    """Roots, and where there is one.

    Symbols:
        x       -  the root; of no meaning where exists is False
        exists     whether the line meets the law at all
    """

    x: FloatArray
    exists: BoolArray


def inversion_root(*, constant: Reals, slope: Reals) -> InversionRoot:
    """Largest x at which a line meets the square of ln(1 + e^x).

    Formula: ln^2(1 + exp(x)) = p + q x
    Symbols:
        constant  p  -  value of the line at x = 0
        slope     q  -  slope of the line, either sign
    Returns: x, and whether it exists, of the common shape of the inputs. There is one root where q < 0, none or two
        where q > 0 (x is the upper), and one where q = 0 < p.
    Valid: every real p and q.
    Source: Newton's method on h(x) = p + q x - ln^2(1 + e^x). h is concave, so that from a start right of its last
        root the method falls on that root without passing it; a slope of h that is not negative on the way, with h
        still below 0, means that there is no root.
    Raises: DomainError: p or q not finite; a root that does not settle.
    """
    p, q = np.broadcast_arrays(finite("constant", constant), finite("slope", slope))
    exists = np.asarray((q < 0.0) | (p > 0.0) | (q > _LN2))
    if not exists.all():
        p, q = np.where(exists, p, 1.0), np.where(exists, q, 0.0)
    x = _start_right_of_the_root(p, q)
    for _ in range(_MOST_STEPS):
        away = np.exp(-np.abs(x))
        s = np.maximum(x, 0.0) + np.log1p(away)
        fall = 2.0 * s * np.where(x > 0.0, 1.0, away) / (1.0 + away) - q
        lost = fall <= 0.0
        if lost.any():
            exists = exists & ~lost
            fall = np.where(lost, np.inf, fall)
        step = (s * s - p - q * x) / fall
        x = x - step
        if np.all(step <= _SETTLED * (1.0 + np.abs(x))):
            return InversionRoot(np.asarray(x), exists)
    raise DomainError("constant and slope leave a root that does not settle")


def _start_right_of_the_root(p: FloatArray, q: FloatArray) -> FloatArray:
    """Upper bound of the last root, close to it both in strong and in weak inversion."""
    # The root lies at x >= 0 where h(0) >= 0, or where h still rises there; and there ln(1 + e^x) >= x.
    x = np.asarray(0.5 * (q + np.sqrt(np.maximum(q * q + 4.0 * p, 0.0))))
    weak = (p < _LN2**2) & (q <= _LN2)
    x[weak] = _start_in_weak_inversion(p[weak], q[weak])
    return x


def _start_in_weak_inversion(p: FloatArray, q: FloatArray) -> FloatArray:
    # At x <= 0, ln(2) e^x <= ln(1 + e^x) <= e^x. With a rising line the square is at most p. With a falling one, the
    # right inequality bounds how far left the root lies, W(z) <= ln(1 + z), and so how high the line is there.
    falling = q < 0.0
    down = np.where(falling, -q, 1.0)
    line = 0.5 * down * np.logaddexp(0.0, np.log(2.0 / down) + 2.0 * p / down)
    with np.errstate(divide="ignore"):
        bound = 0.5 * np.log(np.where(falling, line, p)) - math.log(_LN2)
    # A falling line has its root left of where it is 0; and where it is all but 0 at the root, there.
    bound = np.minimum(bound, p / down)
    return np.where(np.isfinite(bound), bound, p / down)
