"""How far a count of failures, or a number of runs, can be trusted."""

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
    # At no failures, or at nothing else, the end is exactly 0 or 1; the difference would leave a rounding.
    least = 0.0 if failures == 0 else (middle - half) / (1.0 + squared)
    most = 1.0 if failures == samples else (middle + half) / (1.0 + squared)
    return ShareInterval(least=least, most=most)


def runs_for_one_limit(*, share: float, confidence: float) -> int:
    """Fewest runs whose largest result bounds a share of all results, whatever their distribution.

    Formula: least n with 1 - p^n >= c
    Symbols:
        share       p  -  share of all results to lie below the largest of the runs, 0 < p < 1
        confidence  c  -  confidence that it does, 0 < c < 1
    Returns: n.
    Valid: independent runs.
    Source: S. S. Wilks, Annals of Mathematical Statistics 12, 91-96 (1941).
    Raises: DomainError: p or c not between 0 and 1.
    """
    _require_share(share=share, confidence=confidence)
    runs = max(1, math.ceil(math.log1p(-confidence) / math.log(share)))
    # The quotient of two rounded logarithms may be one off.
    while runs > 1 and 1.0 - share ** (runs - 1) >= confidence:
        runs -= 1
    while 1.0 - share**runs < confidence:
        runs += 1
    return runs


def runs_for_two_limits(*, share: float, confidence: float) -> int:
    """Fewest runs whose least and largest results enclose a share of all results, whatever their distribution.

    Formula: least n with 1 - p^n - n (1 - p) p^(n - 1) >= c
    Symbols:
        share       p  -  share of all results to lie between the two, 0 < p < 1
        confidence  c  -  confidence that it does, 0 < c < 1
    Returns: n.
    Valid: independent runs.
    Source: S. S. Wilks, Annals of Mathematical Statistics 12, 91-96 (1941).
    Raises: DomainError: p or c not between 0 and 1.
    """
    _require_share(share=share, confidence=confidence)

    def enclosed(runs: int) -> bool:
        return 1.0 - share**runs - runs * (1.0 - share) * share ** (runs - 1) >= confidence

    most = 2
    while not enclosed(most):
        most *= 2
    least = 1
    while most - least > 1:
        middle = (least + most) // 2
        least, most = (least, middle) if enclosed(middle) else (middle, most)
    return most


def _require_share(**symbols: float) -> None:
    for name, value in symbols.items():
        if not 0.0 < value < 1.0:
            raise DomainError(f"{name} must lie between 0 and 1, ends excluded (found {value!r})")
