"""Drawn parts: normal theory, Supplement 1 of the GUM, and SciPy for parts whose errors go together."""

from __future__ import annotations

import math
from collections.abc import Callable

import pytest
from scipy import stats

from tidegate.lint.physics.domain import DomainError
from tidegate.lint.physics.part_draws import Level
from tidegate.lint.physics.tolerance import RECTANGULAR_DIVISOR, Contributor, Kind
from tidegate.lint.physics.yield_estimate import (
    Demand,
    DrawnDetector,
    FailureShare,
    Side,
    YieldEstimate,
    normal_failure_ppm,
    yield_estimate,
)

SAMPLES = 200_000
WIDE = (
    4.0  # standard deviations of the interval: a sound estimate misses it once in 16 000 seeds, and the seed is fixed
)


def normal(name: str, sigma_v: float, *, tracks: bool = True) -> Contributor:
    return Contributor(name, sigma_v, Kind.SIGMA, coverage=1.0, rectangular=False, tracks=tracks)


def rectangular(name: str, sigma_v: float) -> Contributor:
    half_v = RECTANGULAR_DIVISOR * sigma_v
    return Contributor(name, half_v, Kind.BOUND, coverage=None, rectangular=True, tracks=True)


def at_least(limit_v: float, level: Level = Level.FALLING, name: str = "at least") -> Demand:
    return Demand(name, level, Side.LEAST, limit_v)


def at_most(limit_v: float, level: Level = Level.FALLING, name: str = "at most") -> Demand:
    return Demand(name, level, Side.MOST, limit_v)


def detector(*contributors: Contributor, demands: tuple[Demand, ...], name: str = "detector") -> DrawnDetector:
    return DrawnDetector(name, rising_v=1.05, falling_v=1.0, contributors=contributors, demands=demands)


def drawn(
    *detectors: DrawnDetector, shared: tuple[str, ...] = (), samples: int = SAMPLES, seed: int = 1
) -> YieldEstimate:
    return yield_estimate(
        detectors,
        shared=shared,
        samples=samples,
        seed=seed,
        coverage=3.0,
        interval_coverage=WIDE,
        progress=None,
    )


def holds(share: FailureShare, expected: float) -> bool:
    return share.least_ppm <= 1e6 * expected <= share.most_ppm


def test_without_spread_the_nominal_decides() -> None:
    # A margin of 0 V is kept.
    assert [normal_failure_ppm(margin_v=margin_v, sigma_v=0.0) for margin_v in (0.5, 5e-324, 0.0)] == [0.0] * 3
    assert normal_failure_ppm(margin_v=-5e-324, sigma_v=0.0) == 1e6


@pytest.mark.parametrize("distance", [0.0, 1.0, 2.0, 3.0, -1.0])
@pytest.mark.parametrize("side", [at_least, at_most], ids=["at-least", "at-most"])
def test_normal_errors_against_the_normal_integral(distance: float, side: Callable[[float], Demand]) -> None:
    # Two normal errors of 3 mV and 4 mV: 5 mV together; SciPy's normal distribution as the reference.
    sign = 1.0 if side is at_least else -1.0
    demand = side(1.0 - sign * distance * 0.005)
    found = drawn(detector(normal("a", 0.003), normal("b", 0.004), demands=(demand,)))
    share = found.by_demand["detector", demand.name]
    expected = float(stats.norm.sf(distance))
    assert share.normal_ppm == pytest.approx(1e6 * expected, rel=1e-9)
    assert holds(share, expected)
    assert share.least_ppm <= share.ppm == 1e6 * share.failures / SAMPLES <= share.most_ppm


# JCGM 101:2008, 9.2: sum of four inputs of unit standard deviation, half-width that 95 % lie within. 9.2.2 and 9.2.3
# second-hand (3.88 is 2 sqrt(3) (2 - (3/5)^(1/4)) = 3.8794), 9.2.4 from memory.
SUPPLEMENT_1 = (
    ("9.2.2-normal", tuple(normal(n, 1.0) for n in "abcd"), 3.92),
    ("9.2.3-rectangular", tuple(rectangular(n, 1.0) for n in "abcd"), 3.88),
    ("9.2.4-one-dominates", (*(rectangular(n, 1.0) for n in "abc"), rectangular("d", 10.0)), 17.0),
)


@pytest.mark.parametrize(
    ("contributors", "half_width_v", "last_digit"),
    [(row[1], row[2], 0.05 if row[2] == 17.0 else 0.005) for row in SUPPLEMENT_1],
    ids=[f"jcgm-101-{row[0]}" for row in SUPPLEMENT_1],
)
def test_additive_model_of_gum_supplement_1(
    contributors: tuple[Contributor, ...], half_width_v: float, last_digit: float
) -> None:
    # The printed half-width is rounded: 5 % lie outside somewhere within half of its last digit.
    inner, outer = (
        drawn(detector(*contributors, demands=(at_least(1.0 - h), at_most(1.0 + h)))).by_detector["detector"]
        for h in (half_width_v - last_digit, half_width_v + last_digit)
    )
    assert inner.most_ppm >= 50_000.0 >= outer.least_ppm
    # Not more than the rounding (3100 ppm at 17.0 +- 0.05) and twice four standard deviations of 490 ppm, so that a
    # half-width that is off by a few per cent would show.
    assert inner.most_ppm - outer.least_ppm < 7_500.0
    assert inner.normal_ppm is None


def test_tracked_levels_fail_together_and_untracked_ones_on_their_own() -> None:
    demands = (at_least(0.99, name="falling"), at_least(1.04, Level.RISING, name="rising"))
    p = float(stats.norm.sf(1.0))

    together = drawn(detector(normal("a", 0.01), demands=demands))
    assert together.by_demand["detector", "falling"] == together.by_demand["detector", "rising"]
    assert together.by_detector["detector"].failures == together.by_demand["detector", "rising"].failures

    apart = drawn(detector(normal("a", 0.01, tracks=False), demands=demands))
    assert holds(apart.by_detector["detector"], 1.0 - (1.0 - p) ** 2)

    # Half of the variance tracked: a correlation of one half; SciPy's bivariate normal distribution as the reference.
    part = math.sqrt(0.5) * 0.01
    half = drawn(detector(normal("a", part), normal("b", part, tracks=False), demands=demands))
    both_pass = float(stats.multivariate_normal.cdf([1.0, 1.0], cov=[[1.0, 0.5], [0.5, 1.0]]))
    assert holds(half.by_detector["detector"], 1.0 - both_pass)
    assert holds(half.by_demand["detector", "rising"], p)


@pytest.mark.parametrize("tracks", [True, False])
def test_shared_errors_are_one_for_all_detectors(tracks: bool) -> None:
    # Twice the error at twice the limit fails on the same parts if the error is shared, on its own parts if not.
    demands = ((at_least(0.99),), (at_least(0.98),))
    detectors = [
        detector(normal("reference", size, tracks=tracks), demands=d, name=name)
        for size, d, name in zip((0.01, 0.02), demands, ("first", "second"), strict=True)
    ]
    p = float(stats.norm.sf(1.0))
    one = drawn(*detectors, shared=("reference",))
    assert holds(one.whole, p)
    assert one.by_detector["first"].failures == pytest.approx(one.whole.failures, abs=2)  # but for a rounding
    assert holds(drawn(*detectors).whole, 1.0 - (1.0 - p) ** 2)


def test_shared_rectangular_errors() -> None:
    # By hand: uniform over +-10 mV, below -5 mV in a quarter of all parts.
    detectors = [
        detector(rectangular("reference", 0.01 / RECTANGULAR_DIVISOR), demands=(at_least(0.995),), name=name)
        for name in ("first", "second")
    ]
    found = drawn(*detectors, shared=("reference",))
    assert holds(found.whole, 0.25)
    assert found.whole.failures == found.by_detector["second"].failures


def test_a_margin_of_exactly_zero_passes() -> None:
    # Common practice, no source: a limit that is met is kept.
    found = drawn(
        detector(demands=(at_least(1.0), at_most(1.0, name="most"), at_least(math.nextafter(1.0, 2.0), name="above"))),
        samples=10,
    )
    assert found.by_demand["detector", "at least"].failures == 0
    assert found.by_demand["detector", "most"].failures == 0
    assert found.by_demand["detector", "above"].failures == 10
    assert found.by_demand["detector", "above"].normal_ppm == 1e6
    assert found.whole.failures == 10


def test_a_seed_draws_the_same_parts_again_and_progress_is_told() -> None:
    subject = detector(normal("a", 0.01), rectangular("b", 0.002), demands=(at_least(0.99),))
    calls: list[tuple[int, int]] = []
    told = yield_estimate(
        [subject],
        shared=(),
        samples=40_000,
        seed=3,
        coverage=3.0,
        interval_coverage=WIDE,
        progress=lambda done, total: calls.append((done, total)),
    )
    assert told == drawn(subject, samples=40_000, seed=3)
    assert told != drawn(subject, samples=40_000, seed=4)
    assert calls == [(16384, 40_000), (32768, 40_000), (40_000, 40_000)]


def test_a_bound_counts_as_it_says() -> None:
    # 30 mV at the coverage of 3 given to the estimate: 10 mV.
    plain = Contributor("a", 0.03, Kind.BOUND, coverage=None, rectangular=False, tracks=True)
    share = drawn(detector(plain, demands=(at_least(0.99),))).by_demand["detector", "at least"]
    assert share.normal_ppm == pytest.approx(1e6 * float(stats.norm.sf(1.0)), rel=1e-12)
    assert holds(share, float(stats.norm.sf(1.0)))


ONE = detector(normal("a", 0.01), demands=(at_least(0.99),))
REFUSALS: tuple[tuple[Callable[[], object], str], ...] = (
    (drawn, "detectors must be at least one (found none)"),
    (lambda: drawn(ONE, samples=0), "samples must be at least 1 (found 0)"),
    (lambda: drawn(ONE, ONE), "detectors must have distinct names (found 'detector' twice)"),
    (
        lambda: detector(demands=(at_least(1.0), at_least(2.0))),
        "demands must have distinct names (found 'at least' twice)",
    ),
    (
        lambda: detector(normal("a", 1.0), normal("a", 1.0), demands=()),
        "contributors must have distinct names (found 'a' twice)",
    ),
    (lambda: at_least(math.nan), "limit_v must be a finite number (found nan)"),
    (
        lambda: drawn(
            detector(normal("a", 1.0), demands=()),
            detector(rectangular("a", 1.0), demands=(), name="other"),
            shared=("a",),
        ),
        "shared contributor 'a' must have one distribution",
    ),
    (
        lambda: yield_estimate([ONE], shared=(), samples=1, seed=1, coverage=0.0, interval_coverage=2.0, progress=None),
        "coverage must be greater than 0 (found 0.0)",
    ),
    (lambda: normal_failure_ppm(margin_v=math.nan, sigma_v=1.0), "margin_v must be a finite number (found nan)"),
    (lambda: normal_failure_ppm(margin_v=1.0, sigma_v=-1.0), "sigma_v must be greater than 0 (found -1.0)"),
)


@pytest.mark.parametrize(("call", "message"), REFUSALS, ids=[row[1] for row in REFUSALS])
def test_refused(call: Callable[[], object], message: str) -> None:
    with pytest.raises(DomainError) as caught:
        call()
    assert str(caught.value) == message
