"""How far a count of failures can be trusted."""

from __future__ import annotations

import math

import msgspec

from tidegate.lint.physics.domain import DomainError, require_positive


class ShareInterval(msgspec.Struct, frozen=True):
    """Interval of a share.

    Symbols:
        least  -  lower end, 0 to 1
        most   -  upper end, 0 to 1
    """

    least: float
    most: float


def wilson_interval(*, failures: int, samples: int, coverage: float) -> ShareInterval:
    """Interval of the true share of failures behind a count (Wilson's score interval).

    Formula: (p + z^2/(2n) -+ z sqrt(p (1 - p)/n + z^2/(4 n^2))) / (1 + z^2/n), p = x/n
    Symbols:
        failures  x  -  failures counted, 0 <= x <= n
        samples   n  -  samples drawn, >= 1
        coverage  z  -  standard deviations to either side, > 0; 1.96 for 95 %
    Returns: both ends, as shares of 1.
    Valid: independent samples.
    Source: E. B. Wilson, J. American Statistical Association 22, 209-212 (1927); no continuity correction.
    Raises: DomainError: n below 1; x not in 0 to n; z not above 0.
    """
    if samples < 1:
        raise DomainError(f"samples must be at least 1 (found {samples!r})")
    if not 0 <= failures <= samples:
        raise DomainError(f"failures must lie in 0 to {samples!r} (found {failures!r})")
    require_positive(coverage=coverage)
    share = failures / samples
    squared = coverage * coverage / samples
    middle = share + 0.5 * squared
    half = math.sqrt(squared * (share * (1.0 - share) + 0.25 * squared))
    least = (middle - half) / (1.0 + squared)
    # Where nothing else was found the end is exactly 1; the quotient would leave a rounding.
    most = 1.0 if failures == samples else (middle + half) / (1.0 + squared)
    return ShareInterval(least=least, most=most)
