"""Error contributors of a trip level, and how they combine."""

from __future__ import annotations

import math
from collections.abc import Sequence
from enum import Enum
from typing import Final

import msgspec

from tidegate.lint.physics.domain import (
    DomainError,
    require_finite,
    require_not_negative,
    require_positive,
    require_within,
)

RECTANGULAR_DIVISOR: Final = math.sqrt(3.0)
"""Half-width over standard deviation, every value equally likely (JCGM 100:2008, 4.3.7)."""

TRIANGULAR_DIVISOR: Final = math.sqrt(6.0)
"""Half-width over standard deviation, likelihood falling in a line to 0 at the ends (JCGM 100:2008, 4.3.9)."""

ARCSINE_DIVISOR: Final = math.sqrt(2.0)
"""Half-width over standard deviation of a sine caught at a random moment (JCGM 101:2008, 6.4.6)."""

_CORRELATION_SLACK: Final = 1e-12
_NEGATIVE_VARIANCE_SLACK: Final = 1e-12


class Kind(Enum):
    """What the size of a contributor states."""

    BOUND = "bound"
    SIGMA = "sigma"


class Contributor(msgspec.Struct, frozen=True):
    """One error of a trip level, already referred to the rail; it acts either way.

    Symbols:
        name               what causes it
        at_rail_v    b  V  size at the rail, >= 0
        kind               whether b bounds the error or states its spread
        coverage     c  -  how many standard deviations b stands for, > 0: 1 for a plain sigma, 3 for a
                           "three sigma" figure; None, for a bound only: the coverage of the combination
        rectangular        every value is as likely as any other: a bound then counts as b/sqrt(3), whatever c
                           says; a sigma is that of a rectangular distribution
        tracks             it moves the rising and the falling level together, by the same amount
    Raises: DomainError: b below 0; c not above 0; a sigma with no c.
    """

    name: str
    at_rail_v: float
    kind: Kind
    coverage: float | None
    rectangular: bool
    tracks: bool

    def __post_init__(self) -> None:
        require_not_negative(at_rail_v=self.at_rail_v)
        if self.coverage is not None:
            require_positive(coverage=self.coverage)
        elif self.kind is Kind.SIGMA:
            raise DomainError("coverage of a sigma must be given (found None)")


def standard_uncertainty_v(contributor: Contributor, *, coverage: float) -> float:
    """Standard deviation that a contributor counts as.

    Formula: u = b / c; u = b / k for a bound with no c of its own; u = b / sqrt(3) for a rectangular bound
    Symbols:
        contributor  b, c  its size at the rail in V, and the standard deviations that this size stands for
        coverage     k     -  coverage factor of the combination it enters, > 0
    Returns: u, in V.
    Valid: symmetric errors.
    Source: JCGM 100:2008 (GUM), 4.3.3 (a stated multiple of sigma), 4.3.7 (rectangular).
    Raises: DomainError: if k is not above 0.
    """
    require_positive(coverage=coverage)
    if contributor.kind is Kind.BOUND and contributor.rectangular:
        return contributor.at_rail_v / RECTANGULAR_DIVISOR
    return contributor.at_rail_v / (coverage if contributor.coverage is None else contributor.coverage)


def worst_case_v(contributors: Sequence[Contributor], *, coverage: float) -> float:
    """Largest error when every contributor is at its end at once.

    Formula: E = sum of b over the bounds + k * sum of u over the sigmas
    Symbols:
        contributors  b, u  sizes of the bounds and standard deviations of the sigmas, V
        coverage      k     -  coverage factor at which a sigma counts, > 0
    Returns: E, in V; 0 for no contributors.
    Valid: to first order, errors that add; sigmas have no end, so E is an end only at coverage k.
    Source: triangle inequality.
    Raises: DomainError: if k is not above 0.
    """
    require_positive(coverage=coverage)
    return math.fsum(
        c.at_rail_v if c.kind is Kind.BOUND else coverage * standard_uncertainty_v(c, coverage=coverage)
        for c in contributors
    )


def root_sum_square_v(contributors: Sequence[Contributor], *, coverage: float) -> float:
    """Error at a coverage factor when the contributors are independent of each other.

    Formula: E = k * sqrt(sum of u_i^2)
    Symbols:
        contributors  u_i  standard deviation that each counts as (standard_uncertainty_v), V
        coverage      k    -  coverage factor, > 0
    Returns: E, in V; 0 for no contributors.
    Valid: independent contributors, none of which outweighs the rest if E is to be read as a quantile.
    Source: JCGM 100:2008 (GUM), 5.1.2 equation (10) and 6.2.1 equation (18).
    Raises: DomainError: if k is not above 0.
    """
    require_positive(coverage=coverage)
    return coverage * math.hypot(*(standard_uncertainty_v(c, coverage=coverage) for c in contributors))


def refer_offset_to_rail_v(*, offset_v: float, divider_ratio: float) -> float:
    """Size at the rail of an error at the comparator input, behind a divider.

    Formula: e = V_os / a
    Symbols:
        offset_v       V_os  V  size of the error at the comparator input, >= 0
        divider_ratio  a     -  part of the rail that reaches the input, 0 < a <= 1
    Returns: e, in V.
    Valid: a divider that is linear around the level.
    Source: a V = V_ref + V_os solved for V.
    Raises: DomainError: V_os below 0; a not in (0, 1].
    """
    require_not_negative(offset_v=offset_v)
    require_positive(divider_ratio=divider_ratio)
    require_within(least=0.0, most=1.0, divider_ratio=divider_ratio)
    return offset_v / divider_ratio


def refer_relative_to_level_v(*, share: float, level_v: float) -> float:
    """Size at the rail of an error that scales with the level, such as that of a reference.

    Formula: e = p V
    Symbols:
        share    p  -  relative size of the error, >= 0
        level_v  V  V  trip level at the rail, >= 0
    Returns: e, in V.
    Valid: small p (first order).
    Source: V = V_ref / a, differentiated.
    Raises: DomainError: p or V below 0.
    """
    require_not_negative(share=share, level_v=level_v)
    return share * level_v


def combined_uncertainty(
    *,
    sensitivities: Sequence[float],
    uncertainties: Sequence[float],
    correlations: Sequence[Sequence[float]] | None,
) -> float:
    """Standard uncertainty of a quantity worked out from several others, correlated or not.

    Formula: u_c^2 = sum over i and j of c_i c_j u_i u_j r_ij
    Symbols:
        sensitivities  c_i   derivative of the result with respect to each input; n of them
        uncertainties  u_i   standard uncertainty of each input, >= 0; n of them
        correlations   r_ij  -  n rows of n, symmetric, 1 on the diagonal; None for independent inputs
    Returns: u_c, in the unit of c_i u_i.
    Valid: first order; a result nearly linear over the spread of its inputs.
    Source: JCGM 100:2008 (GUM), 5.2.2 equation (16); equation (10) where all r_ij but the diagonal are 0.
    Raises: DomainError: lengths that differ; u_i below 0; a matrix that no set of quantities can have.
    """
    size = len(uncertainties)
    if len(sensitivities) != size:
        raise DomainError(f"sensitivities must be as many as uncertainties, {size} (found {len(sensitivities)})")
    for c, u in zip(sensitivities, uncertainties, strict=True):
        require_finite(sensitivities=c)
        require_not_negative(uncertainties=u)
    terms = [c * u for c, u in zip(sensitivities, uncertainties, strict=True)]
    if correlations is None:
        return math.hypot(*terms)
    _require_correlations(correlations, size)
    variance = math.fsum(terms[i] * terms[j] * correlations[i][j] for i in range(size) for j in range(size))
    if variance < -_NEGATIVE_VARIANCE_SLACK * math.fsum(term * term for term in terms):
        raise DomainError(f"correlations must give a variance of at least 0 (found {variance!r})")
    return math.sqrt(max(variance, 0.0))


def _require_correlations(correlations: Sequence[Sequence[float]], size: int) -> None:
    if len(correlations) != size or any(len(row) != size for row in correlations):
        raise DomainError(f"correlations must be {size} rows of {size}")
    for i, row in enumerate(correlations):
        for j, r in enumerate(row):
            if not abs(r) <= 1.0 + _CORRELATION_SLACK:
                raise DomainError(f"correlations must lie in -1.0 to 1.0 (found {r!r})")
            if i == j and abs(r - 1.0) > _CORRELATION_SLACK:
                raise DomainError(f"correlations must be 1 on the diagonal (found {r!r})")
            if abs(r - correlations[j][i]) > _CORRELATION_SLACK:
                raise DomainError(f"correlations must be symmetric (found {r!r} against {correlations[j][i]!r})")


def effective_degrees_of_freedom(*, contributions: Sequence[float], degrees_of_freedom: Sequence[float]) -> float:
    """Degrees of freedom of a combined uncertainty (Welch-Satterthwaite).

    Formula: nu = u_c^4 / sum of (u_i^4 / nu_i), u_c^2 = sum of u_i^2
    Symbols:
        contributions       u_i   each input's share of the result's uncertainty, c_i u(x_i), any sign
        degrees_of_freedom  nu_i  -  of each u_i, > 0; infinity where u_i is taken as exact
    Returns: nu; infinity where every u_i that is not 0 is exact.
    Valid: independent, normally distributed inputs.
    Source: JCGM 100:2008 (GUM), G.4.1 equation (G.2b).
    Raises: DomainError: lengths that differ; nu_i not above 0; no u_i other than 0.
    """
    if len(contributions) != len(degrees_of_freedom):
        raise DomainError(
            f"degrees_of_freedom must be as many as contributions, {len(contributions)}"
            f" (found {len(degrees_of_freedom)})"
        )
    for u, nu in zip(contributions, degrees_of_freedom, strict=True):
        require_finite(contributions=u)
        if not nu > 0.0:
            raise DomainError(f"degrees_of_freedom must be greater than 0 (found {nu!r})")
    combined = math.hypot(*contributions)
    require_positive(combined_uncertainty=combined)
    # Shares of u_c, not u_i themselves, so that the fourth power of a small uncertainty does not vanish.
    inverse = math.fsum((u / combined) ** 4 / nu for u, nu in zip(contributions, degrees_of_freedom, strict=True))
    return math.inf if inverse == 0.0 else 1.0 / inverse
