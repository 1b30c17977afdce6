"""Lambert's W by its logarithm, where the argument itself would overflow, and a diode behind a resistor by it."""

from __future__ import annotations

from typing import Final

import numpy as np

from tidegate.lint.physics.array_domain import FloatArray, Reals, finite, not_negative, positive
from tidegate.lint.physics.domain import DomainError

_TINY_LOG: Final = -37.0
"""Below this logarithm of x, W(x) = x to the last bit, since W(x) = x (1 - x + ...)."""

_STEPS: Final = 2
"""Each step raises the error to the fourth power; from 5 % two steps leave less than a rounding."""


def lambert_w_of_exp(y: Reals) -> FloatArray:
    """Principal branch of Lambert's W at exp(y), without forming exp(y).

    Formula: w + ln w = y, w > 0
    Symbols:
        y  y  -  logarithm of the argument, finite; any shape
    Returns: w, dimensionless, of the shape of y; 0 where exp(y) itself is.
    Valid: every real y; relative error of w about that of y itself.
    Source: R. M. Corless, G. H. Gonnet, D. E. G. Hare, D. J. Jeffrey and D. E. Knuth, "On the Lambert W Function",
        Advances in Computational Mathematics 5, 329-359 (1996); start by S. Winitzki, "Uniform Approximations for
        Transcendental Functions", ICCSA 2003; step by F. N. Fritsch, R. E. Shafer and W. P. Crowley, "Solution of the
        Transcendental Equation w e^w = x", Communications of the ACM 16, 123-124 (1973).
    Raises: DomainError: y not finite.
    """
    y = finite("y", y)
    held = np.maximum(y, _TINY_LOG)
    start = np.logaddexp(0.0, held)
    w = start * (1.0 - np.log1p(start) / (2.0 + start))
    for _ in range(_STEPS):
        w = w * (1.0 + _fritsch_step(held - np.log(w) - w, 1.0 + w))
    return np.asarray(w * np.exp(np.minimum(y - _TINY_LOG, 0.0)))


def _fritsch_step(rest: FloatArray, w1: FloatArray) -> FloatArray:
    """Relative change of w that leaves an error of fourth order; w1 = 1 + w, rest = ln(x/w) - w."""
    first = rest / w1
    # Numerator and denominator of the published step, both divided by w1^2 so that neither overflows.
    q = 2.0 + (4.0 / 3.0) * first
    return np.asarray(first * (q - first / w1) / (q - 2.0 * first / w1))


def lower_lambert_w_of_exp(y: Reals) -> FloatArray:
    """Lower branch of Lambert's W at -exp(-y), with its sign turned, without forming exp(-y).

    Formula: z - ln z = y, z >= 1; z = -W_-1(-exp(-y))
    Symbols:
        y  y  -  minus the logarithm of minus the argument, >= 1; any shape
    Returns: z, dimensionless, >= 1, of the shape of y.
    Valid: y >= 1; at y = 1 both branches meet, and z there is only good to the square root of a rounding.
    Source: Corless et al. (1996), as for lambert_w_of_exp; step by Fritsch, Shafer and Crowley (1973).
    Raises: DomainError: y below 1 or not finite.
    """
    y = finite("y", y)
    if np.any(y < 1.0):
        raise DomainError(f"y must be at least 1 (found {float(np.min(y))!r})")
    # Near 1 the square root of the series about the branch point; far off, one substitution of z = y + ln z.
    root = np.sqrt(2.0 * (y - 1.0))
    start = 1.0 + root + root**2 / 3.0
    z = np.where(y < 2.0, start, y + np.log(y + np.log(y)))
    for _ in range(_STEPS):
        # The step of the upper branch for w = -z: 1 + w = 1 - z, and ln(x/w) - w = z - y - ln z. At z = 1 = y there is
        # nothing left to do, and nothing to divide by.
        z = z * (1.0 + _fritsch_step(z - y - np.log(z), np.minimum(1.0 - z, -1e-300)))
    return np.asarray(z)


def diode_current_a(*, source_v: Reals, series_ohm: Reals, saturation_a: Reals, emission_v: Reals) -> FloatArray:
    """Current from a source through a resistor and a diode in series.

    Formula: I = (n V_T / R) W[(IS R / (n V_T)) exp((V + IS R) / (n V_T))] - IS
    Symbols:
        source_v      V      V    source voltage, >= 0
        series_ohm    R      ohm  series resistance, > 0
        saturation_a  IS     A    saturation current, > 0
        emission_v    n V_T  V    emission coefficient times thermal voltage, > 0
    Returns: I, in A, of the common shape of the inputs.
    Valid: I = IS (exp(V_D/(n V_T)) - 1).
    Source: T. C. Banwell and A. Jayakumar, Electronics Letters 36(4), 291-292 (2000), doi 10.1049/el:20000301.
    Raises: DomainError: V below 0; R, IS or n V_T not above 0.
    """
    saturation_a = positive("saturation_a", saturation_a)
    scale_a = positive("emission_v", emission_v) / positive("series_ohm", series_ohm)
    w = _diode_w(source_v, series_ohm, saturation_a, emission_v)
    # Near 0 V the difference of two equal currents may come out a rounding below 0.
    return np.asarray(np.maximum(scale_a * w - saturation_a, 0.0))


def _diode_w(source_v: Reals, series_ohm: Reals, saturation_a: Reals, emission_v: Reals) -> FloatArray:
    source_v = not_negative("source_v", source_v)
    leak_v = positive("saturation_a", saturation_a) * positive("series_ohm", series_ohm)
    emission_v = positive("emission_v", emission_v)
    return lambert_w_of_exp(np.log(leak_v / emission_v) + (source_v + leak_v) / emission_v)
