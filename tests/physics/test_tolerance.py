"""Combination of errors: published circuit budgets, the additive model of the GUM's Supplement 1, and laws."""

from __future__ import annotations

import math
from collections.abc import Callable

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from scipy import stats
from uncertainties import ufloat

from tidegate.lint.physics.domain import DomainError
from tidegate.lint.physics.tolerance import (
    RECTANGULAR_DIVISOR,
    Contributor,
    Kind,
    refer_offset_to_rail_v,
    refer_relative_to_level_v,
    root_sum_square_v,
    standard_uncertainty_v,
    worst_case_v,
)


def sigma(size_v: float, *, name: str = "sigma", coverage: float = 1.0) -> Contributor:
    return Contributor(name, size_v, Kind.SIGMA, coverage=coverage, rectangular=False, tracks=True)


def bound(size_v: float, *, name: str = "bound", rectangular: bool = False) -> Contributor:
    return Contributor(name, size_v, Kind.BOUND, coverage=None, rectangular=rectangular, tracks=True)


def test_divider_trip_level() -> None:
    # Derived: V = Vref (1 + R1/R2), 1.2 V, 200k, 100k, each +-1 %; the same from the uncertainties library below.
    level_v = 3.6
    shares = (0.01, 0.01 * 2.0 / 3.0, 0.01 * 2.0 / 3.0)
    contributors = [bound(refer_relative_to_level_v(share=p, level_v=level_v)) for p in shares]
    assert worst_case_v(contributors, coverage=3.0) / level_v == pytest.approx(0.02333333, abs=5e-9)
    assert root_sum_square_v(contributors, coverage=3.0) / level_v == pytest.approx(0.013744, abs=5e-7)

    reference = ufloat(1.2, 0.012) * (1 + ufloat(200e3, 2e3) / ufloat(100e3, 1e3))
    # Bounds with no coverage of their own count whole, at whatever coverage they enter.
    assert root_sum_square_v(contributors, coverage=2.0) == pytest.approx(reference.std_dev, rel=1e-9)


@pytest.mark.parametrize(
    ("op_amp_mv", "total_mv", "tolerance_mv"),
    [(18.0, 19.0, 0.5), (6.6, 9.0, 0.5)],
    ids=["pelgrom-1988-as-measured", "pelgrom-1988-better-op-amp"],
)
def test_band_gap_output_budget(op_amp_mv: float, total_mv: float, tolerance_mv: float) -> None:
    # M. Pelgrom et al., ESSCIRC 1988 (digest, second-hand): base-emitter spread 6 mV, its difference 0.14 mV times 11,
    # ratio 0.3 mV, resistor 0.7 mV, op amp; 17 samples measured 19 mV, target with the better op amp 9 mV.
    contributors = [sigma(1e-3 * size) for size in (6.0, 1.5, 0.3, 0.7, op_amp_mv)]
    assert 1e3 * root_sum_square_v(contributors, coverage=1.0) == pytest.approx(total_mv, abs=tolerance_mv)
    assert 1e3 * worst_case_v(contributors, coverage=1.0) == pytest.approx(8.5 + op_amp_mv, rel=1e-12)


def test_uncertainty_of_gum_supplement_1_additive_model() -> None:
    # JCGM 101:2008, 9.2.2 and 9.2.3 (second-hand): four inputs of unit standard deviation, normal or rectangular:
    # u = 2.0; 9.2.4 (value from memory): one of them 10: u = 10.1.
    rectangular = [bound(RECTANGULAR_DIVISOR, rectangular=True)] * 4
    assert root_sum_square_v([sigma(1.0)] * 4, coverage=1.0) == pytest.approx(2.0, rel=1e-12)
    assert root_sum_square_v(rectangular, coverage=1.0) == pytest.approx(2.0, rel=1e-12)
    wide = [*rectangular[:3], bound(10.0 * RECTANGULAR_DIVISOR, rectangular=True)]
    assert root_sum_square_v(wide, coverage=1.0) == pytest.approx(10.1, abs=0.05)
    assert root_sum_square_v(wide, coverage=1.959964) == pytest.approx(19.9, abs=0.05)


def test_divisor_is_half_width_over_standard_deviation() -> None:
    # SciPy's uniform distribution.
    assert pytest.approx(float(stats.uniform(-1.0, 2.0).std()), rel=1e-9) == 1.0 / RECTANGULAR_DIVISOR


# --- how a contributor counts ----------------------------------------------------------------------------------


def test_a_contributor_counts_as_it_says() -> None:
    three_sigma = sigma(9e-3, coverage=3.0)
    assert standard_uncertainty_v(three_sigma, coverage=2.0) == pytest.approx(3e-3, rel=1e-15)
    assert worst_case_v([three_sigma], coverage=2.0) == pytest.approx(6e-3, rel=1e-15)
    assert standard_uncertainty_v(bound(9e-3), coverage=2.0) == pytest.approx(4.5e-3, rel=1e-15)
    assert worst_case_v([bound(9e-3)], coverage=2.0) == 9e-3
    stated = Contributor("stated", 9e-3, Kind.BOUND, coverage=6.0, rectangular=False, tracks=False)
    assert root_sum_square_v([stated], coverage=2.0) == pytest.approx(3e-3, rel=1e-15)


def test_nothing_gives_no_error() -> None:
    assert worst_case_v([], coverage=3.0) == 0.0
    assert root_sum_square_v([], coverage=3.0) == 0.0


def test_offset_behind_a_divider_grows_at_the_rail() -> None:
    # 5 mV at an input that sees a third of the rail: 15 mV.
    assert refer_offset_to_rail_v(offset_v=5e-3, divider_ratio=1.0 / 3.0) == pytest.approx(15e-3, rel=1e-12)
    assert refer_offset_to_rail_v(offset_v=5e-3, divider_ratio=1.0) == 5e-3


sizes = st.lists(st.floats(0.0, 1.0), min_size=1, max_size=6)


@settings(max_examples=50, deadline=None)
@given(bounds=sizes, sigmas=sizes, k=st.floats(0.5, 6.0))
def test_root_sum_square_never_exceeds_worst_case(bounds: list[float], sigmas: list[float], k: float) -> None:
    contributors = [bound(b) for b in bounds] + [sigma(s) for s in sigmas]
    worst = worst_case_v(contributors, coverage=k)
    assert root_sum_square_v(contributors, coverage=k) <= worst * (1.0 + 1e-12)
    assert worst_case_v([*contributors, bound(0.1)], coverage=k) == pytest.approx(worst + 0.1)


# --- refusals --------------------------------------------------------------------------------------------------

REFUSALS = (
    (lambda: bound(-1e-3), "at_rail_v must be at least 0 (found -0.001)"),
    (lambda: bound(math.nan), "at_rail_v must be at least 0 (found nan)"),
    (lambda: sigma(1.0, coverage=0.0), "coverage must be greater than 0 (found 0.0)"),
    (
        lambda: Contributor("x", 1.0, Kind.SIGMA, coverage=None, rectangular=False, tracks=True),
        "coverage of a sigma must be given (found None)",
    ),
    (lambda: worst_case_v([], coverage=0.0), "coverage must be greater than 0 (found 0.0)"),
    (lambda: root_sum_square_v([], coverage=-1.0), "coverage must be greater than 0 (found -1.0)"),
    (lambda: standard_uncertainty_v(bound(1.0), coverage=0.0), "coverage must be greater than 0 (found 0.0)"),
    (
        lambda: refer_offset_to_rail_v(offset_v=-1.0, divider_ratio=0.5),
        "offset_v must be at least 0 (found -1.0)",
    ),
    (
        lambda: refer_offset_to_rail_v(offset_v=1.0, divider_ratio=0.0),
        "divider_ratio must be greater than 0 (found 0.0)",
    ),
    (
        lambda: refer_offset_to_rail_v(offset_v=1.0, divider_ratio=1.5),
        "divider_ratio must lie in 0.0 to 1.0 (found 1.5)",
    ),
    (lambda: refer_relative_to_level_v(share=-0.1, level_v=1.0), "share must be at least 0 (found -0.1)"),
    (lambda: refer_relative_to_level_v(share=0.1, level_v=-1.0), "level_v must be at least 0 (found -1.0)"),
)


@pytest.mark.parametrize(("call", "message"), REFUSALS, ids=[row[1] for row in REFUSALS])
def test_refused(call: Callable[[], object], message: str) -> None:
    with pytest.raises(DomainError) as caught:
        call()
    assert str(caught.value) == message
