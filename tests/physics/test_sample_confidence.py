"""Confidence of counts: SciPy, and a published table."""

from __future__ import annotations

from collections.abc import Callable

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from scipy import stats

from tidegate.lint.physics.domain import DomainError
from tidegate.lint.physics.sample_confidence import wilson_interval

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


@pytest.mark.parametrize("samples", [1, 2, 3, 10, 29, 50, 1000])
def test_the_ends_of_the_scale_are_exact(samples: int) -> None:
    # 10 and 50 of as many come out a rounding off 1 by the formula alone.
    assert wilson_interval(failures=0, samples=samples, coverage=Z95).least == 0.0
    assert wilson_interval(failures=samples, samples=samples, coverage=Z95).most == 1.0


def test_nothing_failed_still_leaves_room() -> None:
    found = wilson_interval(failures=0, samples=10**6, coverage=Z95)
    assert found.least == 0.0
    assert found.most == pytest.approx(Z95**2 / (10**6 + Z95**2), rel=1e-12)
    assert wilson_interval(failures=10, samples=10, coverage=Z95).most == 1.0


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
)


@pytest.mark.parametrize(("call", "message"), REFUSALS, ids=[row[1] for row in REFUSALS])
def test_refused(call: Callable[[], object], message: str) -> None:
    with pytest.raises(DomainError) as caught:
        call()
    assert str(caught.value) == message
