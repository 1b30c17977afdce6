"""Confidence of counts and runs: SciPy, a published table, and Wilks's numbers."""

from __future__ import annotations

from collections.abc import Callable

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from scipy import stats

from tidegate.lint.physics.domain import DomainError
from tidegate.lint.physics.sample_confidence import runs_for_one_limit, runs_for_two_limits, wilson_interval

Z95 = 1.959963984540054

# R. G. Newcombe, Statistics in Medicine 17, 857-872 (1998), table I, score method without continuity correction (values
# from memory, confirmed by SciPy's binomtest below).
NEWCOMBE = ((81, 263, 0.2553, 0.3662), (15, 148, 0.0624, 0.1605), (0, 20, 0.0, 0.1611), (1, 29, 0.0061, 0.1718))


@pytest.mark.parametrize(
    ("failures", "samples", "least", "most"), NEWCOMBE, ids=[f"newcombe-1998-{x}-of-{n}" for x, n, _, _ in NEWCOMBE]
)
def test_published_intervals(failures: int, samples: int, least: float, most: float) -> None:
    found = wilson_interval(failures=failures, samples=samples, coverage=Z95)
    assert found.least == pytest.approx(least, abs=5e-5)
    assert found.most == pytest.approx(most, abs=5e-5)


@settings(max_examples=40, deadline=None)
@given(samples=st.integers(1, 10**7), share=st.floats(0.0, 1.0))
def test_interval_against_scipy(samples: int, share: float) -> None:
    failures = round(share * samples)
    found = wilson_interval(failures=failures, samples=samples, coverage=Z95)
    expected = stats.binomtest(failures, samples).proportion_ci(confidence_level=0.95, method="wilson")
    assert found.least == pytest.approx(expected.low, rel=1e-9, abs=1e-15)
    assert found.most == pytest.approx(expected.high, rel=1e-9, abs=1e-15)
    assert found.least <= failures / samples <= found.most


def test_nothing_failed_still_leaves_room() -> None:
    found = wilson_interval(failures=0, samples=10**6, coverage=Z95)
    assert found.least == 0.0
    assert found.most == pytest.approx(Z95**2 / (10**6 + Z95**2), rel=1e-12)
    assert wilson_interval(failures=10, samples=10, coverage=Z95).most == 1.0


# S. S. Wilks (1941), values reproduced: one limit 1 - 0.95^59 = 0.9515 (58: 0.94895), two limits 93 (92: 0.947864).
def test_wilks_for_95_percent_at_95_percent() -> None:
    assert runs_for_one_limit(share=0.95, confidence=0.95) == 59
    assert runs_for_two_limits(share=0.95, confidence=0.95) == 93


@settings(max_examples=40, deadline=None)
@given(share=st.floats(0.05, 0.999), confidence=st.floats(0.05, 0.999))
def test_runs_against_scipy(share: float, confidence: float) -> None:
    # The largest of n bounds a share p unless all n lie inside p; both extremes enclose it unless n or n - 1 do.
    one = runs_for_one_limit(share=share, confidence=confidence)
    assert stats.binom.cdf(one - 1, one, share) >= confidence - 1e-12
    if one > 1:
        assert stats.binom.cdf(one - 2, one - 1, share) < confidence + 1e-12
    two = runs_for_two_limits(share=share, confidence=confidence)
    assert stats.binom.cdf(two - 2, two, share) >= confidence - 1e-12
    if two > 2:
        assert stats.binom.cdf(two - 3, two - 1, share) < confidence + 1e-12


@pytest.mark.parametrize("runs", [1, 2, 3, 7, 22, 58, 59, 131])
@pytest.mark.parametrize("share", [0.8, 0.9, 0.95, 0.99])
def test_confidence_that_is_met_exactly_needs_not_one_run_more_or_less(share: float, runs: int) -> None:
    # The quotient of logarithms lies next to a whole number here, on either side by a rounding.
    found = runs_for_one_limit(share=share, confidence=1.0 - share**runs)
    assert 1.0 - share**found >= 1.0 - share**runs
    assert found == 1 or 1.0 - share ** (found - 1) < 1.0 - share**runs


REFUSALS: tuple[tuple[Callable[[], object], str], ...] = (
    (
        lambda: wilson_interval(failures=0, samples=0, coverage=2.0),
        "samples must be at least 1 (found 0)",
    ),
    (
        lambda: wilson_interval(failures=3, samples=2, coverage=2.0),
        "failures must lie in 0 to 2 (found 3)",
    ),
    (
        lambda: wilson_interval(failures=-1, samples=2, coverage=2.0),
        "failures must lie in 0 to 2 (found -1)",
    ),
    (
        lambda: wilson_interval(failures=1, samples=2, coverage=0.0),
        "coverage must be greater than 0 (found 0.0)",
    ),
    (
        lambda: runs_for_one_limit(share=1.0, confidence=0.95),
        "share must lie between 0 and 1, ends excluded (found 1.0)",
    ),
    (
        lambda: runs_for_two_limits(share=0.95, confidence=0.0),
        "confidence must lie between 0 and 1, ends excluded (found 0.0)",
    ),
)


@pytest.mark.parametrize(("call", "message"), REFUSALS, ids=[row[1] for row in REFUSALS])
def test_refused(call: Callable[[], object], message: str) -> None:
    with pytest.raises(DomainError) as caught:
        call()
    assert str(caught.value) == message
