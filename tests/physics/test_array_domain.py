"""Refusals of arrays: the message names the symbol, the value and its place."""

from __future__ import annotations

import math
from collections.abc import Callable

import numpy as np
import pytest

from tidegate.lint.physics.array_domain import FloatArray, between_0_and_1, finite, not_negative, positive
from tidegate.lint.physics.domain import DomainError


@pytest.mark.parametrize(
    ("check", "good"),
    [
        (finite, [-1.0, 0.0, 1.0]),
        (positive, [1e-300, 1.0]),
        (not_negative, [0.0, 1.0]),
        (between_0_and_1, [1e-9, 1.0 - 1e-9]),
    ],
    ids=["finite", "positive", "not-negative", "between-0-and-1"],
)
def test_good_entries_come_back_as_they_are(check: Callable[..., FloatArray], good: list[float]) -> None:
    found = check("x", np.array(good))
    assert found.dtype == np.float64
    assert found.tolist() == good
    assert float(check("x", good[0])) == good[0]


@pytest.mark.parametrize(
    ("check", "bad", "message"),
    [
        (finite, math.nan, "x must be a finite number (found nan)"),
        (finite, np.array([1.0, math.inf]), "x must be a finite number (found inf at index (1,))"),
        (positive, np.array([[1.0, 2.0], [0.0, 3.0]]), "x must be greater than 0 (found 0.0 at index (1, 0))"),
        (positive, np.array([1.0, 0.0, -1.0]), "x must be greater than 0 (found 0.0 at index (1,))"),
        (positive, math.inf, "x must be greater than 0 (found inf)"),
        (positive, math.nan, "x must be greater than 0 (found nan)"),
        (not_negative, -1.0, "x must be at least 0 (found -1.0)"),
        (not_negative, math.nan, "x must be at least 0 (found nan)"),
        (between_0_and_1, 0.0, "x must be between 0 and 1, ends excluded (found 0.0)"),
        (between_0_and_1, 1.0, "x must be between 0 and 1, ends excluded (found 1.0)"),
        (between_0_and_1, math.nan, "x must be between 0 and 1, ends excluded (found nan)"),
    ],
)
def test_refused(check: Callable[..., FloatArray], bad: float | FloatArray, message: str) -> None:
    with pytest.raises(DomainError) as caught:
        check("x", bad)
    assert str(caught.value) == message
