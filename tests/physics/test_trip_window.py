"""How errors combine, and what the supply does until the answer; the windows are held in tests/derived."""

from __future__ import annotations

import math
from collections.abc import Callable

import pytest

from tidegate.lint.physics.domain import DomainError
from tidegate.lint.physics.tolerance import Contributor, Kind
from tidegate.lint.physics.trip_window import (
    Combination,
    Window,
    combined_error_v,
    droop_during_response_v,
    response_time_s,
)


def bound(size_v: float) -> Contributor:
    return Contributor("bound", size_v, Kind.BOUND, coverage=None, rectangular=False, tracks=True)


def sigma(size_v: float) -> Contributor:
    return Contributor("sigma", size_v, Kind.SIGMA, coverage=1.0, rectangular=False, tracks=False)


def test_dynamic_extension() -> None:
    # Arithmetic: a supply that collapses by 5 mV/us for 2 us + 3 us + 10 us ends 75 mV lower.
    delay_s = response_time_s(delay_s=2e-6, filter_s=3e-6, sampling_period_s=10e-6)
    assert delay_s == pytest.approx(15e-6)
    assert droop_during_response_v(slew_v_per_s=5e3, delay_s=delay_s) == pytest.approx(0.075)


@pytest.mark.parametrize("method", list(Combination))
def test_more_error_never_narrows_a_window(method: Combination) -> None:
    contributors = [bound(0.01), sigma(0.002)]
    less = combined_error_v(contributors, coverage=3.0, method=method)
    more = combined_error_v([*contributors, bound(1e-3)], coverage=3.0, method=method)
    assert more > less > 0.0


REFUSALS: tuple[tuple[Callable[[], object], str], ...] = (
    (lambda: Window(1.0, 0.9), "least_v must be at most most_v, 0.9 (found 1.0)"),
    (lambda: Window(math.nan, 0.9), "least_v must be a finite number (found nan)"),
    (lambda: Window(0.0, math.inf), "most_v must be a finite number (found inf)"),
    (
        lambda: combined_error_v([], coverage=0.0, method=Combination.ROOT_SUM_SQUARE),
        "coverage must be greater than 0 (found 0.0)",
    ),
    (
        lambda: response_time_s(delay_s=-1.0, filter_s=0.0, sampling_period_s=0.0),
        "delay_s must be at least 0 (found -1.0)",
    ),
    (
        lambda: response_time_s(delay_s=0.0, filter_s=0.0, sampling_period_s=-1.0),
        "sampling_period_s must be at least 0 (found -1.0)",
    ),
    (
        lambda: droop_during_response_v(slew_v_per_s=-1.0, delay_s=0.0),
        "slew_v_per_s must be at least 0 (found -1.0)",
    ),
)


@pytest.mark.parametrize(("call", "message"), REFUSALS, ids=[row[1] for row in REFUSALS])
def test_refused(call: Callable[[], object], message: str) -> None:
    with pytest.raises(DomainError) as caught:
        call()
    assert str(caught.value) == message
