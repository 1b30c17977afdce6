"""Error contributors of a trip level, and how they combine."""

from __future__ import annotations

import math
from collections.abc import Sequence
from enum import Enum
from typing import Final

import msgspec

from tidegate.lint.physics.domain import (
    DomainError,
    require_not_negative,
    require_positive,
    require_within,
)

RECTANGULAR_DIVISOR: Final = math.sqrt(3.0)
"""Half-width over standard deviation, every value equally likely (JCGM 100:2008, 4.3.7)."""


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
