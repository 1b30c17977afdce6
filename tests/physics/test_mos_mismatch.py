"""Threshold mismatch: Pelgrom's data, a kit's own statistics, and the two conventions of the coefficient."""

from __future__ import annotations

import math
from collections.abc import Callable

import numpy as np
import pytest

from tidegate.lint.physics.domain import DomainError
from tidegate.lint.physics.mos_mismatch import (
    MatchingOf,
    device_mismatch_v,
    mirror_mismatch_share,
    pair_mismatch_v,
)

MV_UM = 1e-9
UM = 1e-6

# (source, coefficient in mV um, width and length in um, expected in mV, tolerance: half of the last digit)
PAIRS = (
    ("second-hand-digest-0.05-um2", 4.0, 0.25, 0.2, 17.9, 0.05),
    # Coefficient from M. Pelgrom et al., ESSCIRC 1988 (second-hand); areas derived.
    ("pelgrom-1988-n-20x20", 30.0, 20.0, 20.0, 1.500, 0.0005),
    ("pelgrom-1988-n-10x5", 30.0, 10.0, 5.0, 4.243, 0.0005),
    ("pelgrom-1988-p-3x3", 35.0, 3.0, 3.0, 11.667, 0.0005),
    # Coefficient from Schaper, Linnenbank and Thewes, IEEE Trans. Semicond. Manufacturing 14(4), 2001 (second-hand).
    ("schaper-2001-n-10x1", 6.7, 10.0, 1.0, 2.1187, 0.00005),
)


@pytest.mark.parametrize(
    ("coefficient", "width", "length", "expected_mv"),
    [(*row[1:4], pytest.approx(row[4], abs=row[5])) for row in PAIRS],
    ids=[row[0] for row in PAIRS],
)
def test_pair(coefficient: float, width: float, length: float, expected_mv: object) -> None:
    found = pair_mismatch_v(
        coefficient_v_m=coefficient * MV_UM,
        matching_of=MatchingOf.PAIR,
        width_m=width * UM,
        length_m=length * UM,
    )
    assert 1e3 * found == expected_mv


# google/globalfoundries-pdk-libs-gf180mcu_fd_pr at 9f992d5a: coefficient of nmos_3p3, 7.148 mV um for a pair, effective
# length L - 0.15 um and width W + 0.1 um (sm141064.ngspice L46989-47002); standard deviation of 1000 simulated pairs in
# 180MCU_SPICE_DATA/MOS/stat_mm_nmos_3p3.nl_out.xlsx rows 5-8.
GF180_PAIRS = ((10.0, 10.0, 0.7032), (10.0, 1.0, 2.3177), (10.0, 0.28, 6.5126), (1.0, 1.0, 7.3635))


@pytest.mark.parametrize(
    ("width", "length", "simulated_mv"), GF180_PAIRS, ids=[f"gf180-{w:g}x{n:g}" for w, n, _ in GF180_PAIRS]
)
def test_pair_coefficient_of_gf180_against_its_own_statistics(width: float, length: float, simulated_mv: float) -> None:
    found = pair_mismatch_v(
        coefficient_v_m=7.148 * MV_UM,
        matching_of=MatchingOf.PAIR,
        width_m=(width + 0.1) * UM,
        length_m=(length - 0.15) * UM,
    )
    # A standard deviation of 1000 runs is itself good to 1/sqrt(2000) = 2.2 %; three of those.
    assert 1e3 * found == pytest.approx(simulated_mv, rel=0.067)


def test_device_coefficient_of_ihp_is_not_taken_for_a_pair() -> None:
    # IHP Open PDK at 5cccb161, sg13g2_moslv_mismatch.lib L20 and sg13g2_moslv_mod_mismatch.lib L87: 3.9 mV um shifts a
    # single low-voltage nMOS device; for a pair that is 5.5 mV um (derived).
    size = {"width_m": UM, "length_m": UM}
    device = device_mismatch_v(coefficient_v_m=3.9 * MV_UM, matching_of=MatchingOf.DEVICE, **size)
    pair = pair_mismatch_v(coefficient_v_m=3.9 * MV_UM, matching_of=MatchingOf.DEVICE, **size)
    assert 1e3 * device == pytest.approx(3.9, rel=1e-12)
    assert 1e3 * pair == pytest.approx(5.5, abs=0.05)


def test_pair_is_the_spread_of_a_difference() -> None:
    # NumPy as the reference: 100 000 pairs of independent devices; 0.22 % of its own error.
    device = device_mismatch_v(
        coefficient_v_m=5 * MV_UM, matching_of=MatchingOf.PAIR, width_m=2 * UM, length_m=0.5 * UM
    )
    first, second = device * np.random.default_rng(7).standard_normal((2, 100_000))
    pair = pair_mismatch_v(coefficient_v_m=5 * MV_UM, matching_of=MatchingOf.PAIR, width_m=2 * UM, length_m=0.5 * UM)
    assert pair == pytest.approx(float(np.std(first - second)), rel=0.01)


def test_four_times_the_area_halves_the_mismatch() -> None:
    small, large = (
        pair_mismatch_v(coefficient_v_m=5 * MV_UM, matching_of=MatchingOf.PAIR, width_m=scale * UM, length_m=scale * UM)
        for scale in (1.0, 2.0)
    )
    assert large == pytest.approx(0.5 * small, rel=1e-12)


def test_mirror() -> None:
    # Law of Pelgrom et al. (1989) by hand: 2 mV on 200 mV of overdrive and 1 % of gain: sqrt(2^2 + 1^2) %.
    found = mirror_mismatch_share(threshold_v=2e-3, gain_share=0.01, overdrive_v=0.2)
    assert found == pytest.approx(math.sqrt(5.0) * 0.01, rel=1e-12)


REFUSALS: tuple[tuple[Callable[[], object], str], ...] = (
    (
        lambda: pair_mismatch_v(coefficient_v_m=-1.0, matching_of=MatchingOf.PAIR, width_m=1.0, length_m=1.0),
        "coefficient_v_m must be at least 0 (found -1.0)",
    ),
    (
        lambda: pair_mismatch_v(coefficient_v_m=1.0, matching_of=MatchingOf.PAIR, width_m=0.0, length_m=1.0),
        "width_m must be greater than 0 (found 0.0)",
    ),
    (
        lambda: device_mismatch_v(coefficient_v_m=1.0, matching_of=MatchingOf.PAIR, width_m=1.0, length_m=-1.0),
        "length_m must be greater than 0 (found -1.0)",
    ),
    (
        lambda: mirror_mismatch_share(threshold_v=-1.0, gain_share=0.0, overdrive_v=0.2),
        "threshold_v must be at least 0 (found -1.0)",
    ),
    (
        lambda: mirror_mismatch_share(threshold_v=0.0, gain_share=-1.0, overdrive_v=0.2),
        "gain_share must be at least 0 (found -1.0)",
    ),
    (
        lambda: mirror_mismatch_share(threshold_v=0.0, gain_share=0.0, overdrive_v=0.0),
        "overdrive_v must be greater than 0 (found 0.0)",
    ),
)


@pytest.mark.parametrize(("call", "message"), REFUSALS, ids=[row[1] for row in REFUSALS])
def test_refused(call: Callable[[], object], message: str) -> None:
    with pytest.raises(DomainError) as caught:
        call()
    assert str(caught.value) == message
