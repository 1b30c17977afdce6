"""Share of parts whose trip levels break a demand, by drawing parts, beside what normal theory says."""

from __future__ import annotations

import math
from collections.abc import Callable, Collection, Mapping, Sequence
from enum import Enum
from typing import Final

import msgspec
import numpy as np
from numpy.typing import NDArray

from tidegate.lint.physics.array_domain import BoolArray
from tidegate.lint.physics.domain import DomainError, require_finite, require_positive
from tidegate.lint.physics.part_draws import DrawnError, Level, PartDraws
from tidegate.lint.physics.sample_confidence import wilson_interval
from tidegate.lint.physics.tolerance import Contributor, standard_uncertainty_v

_CHUNK: Final = 1 << 14
"""Parts drawn at a time: the few arrays in use stay within a processor's cache, and memory stays flat."""

_MILLION: Final = 1e6


class Side(Enum):
    """Which way a limit holds."""

    LEAST = "least"
    MOST = "most"


class Demand(msgspec.Struct, frozen=True):
    """What one level of a detector must keep; a part passes where its margin is 0 V or above.

    Symbols:
        name        how the demand is called
        level       the level it holds for
        side        whether that level must be at least or at most limit_v
        limit_v  V  the limit
    Raises: DomainError: a limit that is not finite.
    """

    name: str
    level: Level
    side: Side
    limit_v: float

    def __post_init__(self) -> None:
        require_finite(limit_v=self.limit_v)


class DrawnDetector(msgspec.Struct, frozen=True):
    """A detector as it is drawn: nominal levels, their errors, what they must keep.

    Symbols:
        name             how the detector is called
        rising_v      V  nominal rising level
        falling_v     V  nominal falling level
        contributors     errors; a tracked one is drawn once for both levels, another one once for each
        demands          what the levels must keep
    Raises: DomainError: a level that is not finite; two demands or two contributors of one name.
    """

    name: str
    rising_v: float
    falling_v: float
    contributors: tuple[Contributor, ...]
    demands: tuple[Demand, ...]

    def __post_init__(self) -> None:
        require_finite(rising_v=self.rising_v, falling_v=self.falling_v)
        _require_distinct("demands", [demand.name for demand in self.demands])
        _require_distinct("contributors", [contributor.name for contributor in self.contributors])

    def nominal_v(self, level: Level) -> float:
        """Nominal of one of the two levels, V."""
        return self.rising_v if level is Level.RISING else self.falling_v


class FailureShare(msgspec.Struct, frozen=True):
    """Parts that failed, and what that says of all parts.

    Symbols:
        failures      parts that failed
        samples       parts drawn
        ppm           failures per million parts drawn
        least_ppm     lower end of Wilson's interval
        most_ppm      upper end of Wilson's interval
        normal_ppm    what a normal distribution of the same standard deviation gives; None where several demands count
                      together, for which there is no such figure
    """

    failures: int
    samples: int
    ppm: float
    least_ppm: float
    most_ppm: float
    normal_ppm: float | None


class YieldEstimate(msgspec.Struct, frozen=True):
    """Failures of each demand, of each detector, and of the whole.

    Symbols:
        by_demand    for the names of a detector and of its demand
        by_detector  parts on which any demand of the detector failed
        whole        parts on which any demand of any detector failed
    """

    by_demand: Mapping[tuple[str, str], FailureShare]
    by_detector: Mapping[str, FailureShare]
    whole: FailureShare


def normal_failure_ppm(*, margin_v: float, sigma_v: float) -> float:
    """Parts per million that miss a limit if the level is normally distributed.

    Formula: 1e6 Phi(-m/sigma)
    Symbols:
        margin_v  m      V  margin of the nominal level, below 0 where the nominal itself fails
        sigma_v   sigma  V  standard deviation of the level, >= 0
    Returns: parts per million; where sigma is 0, 0 for a margin of 0 or above and a million below.
    Valid: normally distributed level.
    Source: normal distribution function by the complementary error function.
    Raises: DomainError: m not finite; sigma below 0.
    """
    require_finite(margin_v=margin_v)
    if sigma_v == 0.0:
        return 0.0 if margin_v >= 0.0 else _MILLION
    require_positive(sigma_v=sigma_v)
    return 0.5 * _MILLION * math.erfc(margin_v / (sigma_v * math.sqrt(2.0)))


def yield_estimate(
    detectors: Sequence[DrawnDetector],
    *,
    shared: Collection[str],
    samples: int,
    seed: int,
    coverage: float,
    interval_coverage: float,
    progress: Callable[[int, int], None] | None,
) -> YieldEstimate:
    """Draw parts and count those that break a demand.

    Formula: level = nominal + sum of errors, each with the standard deviation of standard_uncertainty_v, normal or
             rectangular as the contributor says; failed where level - limit (or limit - level) < 0
    Symbols:
        detectors              the detectors of one part
        shared                 names of contributors that are one and the same error in all detectors that have them,
                               scaled to each
        samples                parts to draw, >= 1
        seed                   seed of the generator; the same seed draws the same parts
        coverage           k   coverage factor at which a bound without its own counts, > 0
        interval_coverage  z   standard deviations to either side of Wilson's interval, > 0
        progress               called with the parts drawn so far and in all; None for no calls
    Returns: failures and intervals, in parts per million.
    Valid: errors that add; contributors independent of each other but for tracked and shared ones. A bound that counts
        as b/k is drawn from the normal distribution it counts as, and may exceed b.
    Source: JCGM 101:2008 (GUM Supplement 1), clause 7 and 6.4; wilson_interval.
    Raises: DomainError: no detector; two of one name; fewer than one sample; k or z not above 0; a shared contributor
        rectangular in one detector and not in another.
    """
    if not detectors:
        raise DomainError("detectors must be at least one (found none)")
    _require_distinct("detectors", [detector.name for detector in detectors])
    if samples < 1:
        raise DomainError(f"samples must be at least 1 (found {samples!r})")
    plans = [_Plan.of(detector, shared=shared, coverage=coverage) for detector in detectors]
    counts = _count(plans, samples=samples, seed=seed, progress=progress)

    def share(failures: int, normal_ppm: float | None) -> FailureShare:
        interval = wilson_interval(failures=failures, samples=samples, coverage=interval_coverage)
        ends_ppm = (_MILLION * interval.least, _MILLION * interval.most)
        return FailureShare(failures, samples, _MILLION * failures / samples, *ends_ppm, normal_ppm)

    return YieldEstimate(
        by_demand={
            (plan.detector.name, demand.name): share(int(failures), plan.normal_ppm(demand))
            for plan, row in zip(plans, counts.by_demand, strict=True)
            for demand, failures in zip(plan.detector.demands, row, strict=True)
        },
        by_detector={
            plan.detector.name: share(failures, None) for plan, failures in zip(plans, counts.by_detector, strict=True)
        },
        whole=share(counts.whole, None),
    )


def _require_distinct(what: str, names: Sequence[str]) -> None:
    for name in names:
        if names.count(name) > 1:
            raise DomainError(f"{what} must have distinct names (found {name!r} twice)")


class _Plan(msgspec.Struct, frozen=True):
    """A detector with its errors sorted by what they act on, and its limits as errors that fail."""

    detector: DrawnDetector
    both: tuple[DrawnError, ...]
    apart: tuple[DrawnError, ...]

    @classmethod
    def of(cls, detector: DrawnDetector, *, shared: Collection[str], coverage: float) -> _Plan:
        def drawn(contributor: Contributor) -> DrawnError:
            return DrawnError(
                name=contributor.name,
                sigma_v=standard_uncertainty_v(contributor, coverage=coverage),
                rectangular=contributor.rectangular,
                shared=contributor.name in shared,
            )

        return cls(
            detector,
            both=tuple(drawn(c) for c in detector.contributors if c.tracks),
            apart=tuple(drawn(c) for c in detector.contributors if not c.tracks),
        )

    def normal_ppm(self, demand: Demand) -> float:
        over_v = self.detector.nominal_v(demand.level) - demand.limit_v
        return normal_failure_ppm(
            margin_v=over_v if demand.side is Side.LEAST else -over_v,
            sigma_v=math.hypot(*(error.sigma_v for error in (*self.both, *self.apart))),
        )

    def failed(self, draws: PartDraws) -> BoolArray:
        """Which parts of this draw fail which demand; demands by parts."""
        errors_v = draws.level_errors_v(both=self.both, apart=self.apart)
        failed = np.empty((len(self.detector.demands), draws.count), dtype=np.bool_)
        for row, demand in zip(failed, self.detector.demands, strict=True):
            to_limit_v = demand.limit_v - self.detector.nominal_v(demand.level)
            compare = np.less if demand.side is Side.LEAST else np.greater
            compare(errors_v[demand.level], to_limit_v, out=row)
        return failed


class _Counts(msgspec.Struct, frozen=True):
    by_demand: list[NDArray[np.int64]]
    by_detector: list[int]
    whole: int


def _count(plans: Sequence[_Plan], *, samples: int, seed: int, progress: Callable[[int, int], None] | None) -> _Counts:
    draws = PartDraws(
        [error for plan in plans for error in (*plan.both, *plan.apart)], seed=seed, most=min(_CHUNK, samples)
    )
    by_demand = [np.zeros(len(plan.detector.demands), dtype=np.int64) for plan in plans]
    by_detector = [0] * len(plans)
    whole = 0
    for begin in range(0, samples, _CHUNK):
        draws.next_parts(min(_CHUNK, samples - begin))
        any_failed = np.zeros(draws.count, dtype=np.bool_)
        for i, plan in enumerate(plans):
            failed = plan.failed(draws)
            by_demand[i] += np.count_nonzero(failed, axis=1)
            part_failed = failed.any(axis=0)
            by_detector[i] += int(np.count_nonzero(part_failed))
            any_failed |= part_failed
        whole += int(np.count_nonzero(any_failed))
        if progress is not None:
            progress(begin + draws.count, samples)
    return _Counts(by_demand, by_detector, whole)
