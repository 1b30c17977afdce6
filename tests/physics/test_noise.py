from __future__ import annotations

import math

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from numpy.typing import NDArray
from scipy import integrate

from tidegate.lint.physics.domain import DomainError
from tidegate.lint.physics.noise import (
    false_trip_distance_v,
    false_trip_rate_hz,
    zero_level_rate_hz,
)

JULIAN_YEAR_S = 365.25 * 86400.0

# S. O. Rice, Bell System Technical Journal 23-24 (1944-45): ideal low-pass of 1 MHz, level k sigma away.
# Value from memory, recomputed; tolerance: half of the last digit written down.
RICE_RATES_HZ = (
    (3, 6413.78, 0.005),
    (4, 193.68, 0.005),
    (5, 2.15158, 5e-6),
    (6, 8.79303e-3, 5e-9),
    (7, 1.32198e-5, 5e-11),
    (8, 7.31166e-9, 5e-15),
)


@pytest.mark.parametrize(
    ("k", "rate_hz", "tolerance_hz"), RICE_RATES_HZ, ids=[f"Rice-1945-{row[0]}sigma" for row in RICE_RATES_HZ]
)
def test_rate_follows_rice(k: int, rate_hz: float, tolerance_hz: float) -> None:
    found_hz = false_trip_rate_hz(sigma_v=1e-3, bandwidth_hz=1e6, distance_v=k * 1e-3)
    assert found_hz == pytest.approx(rate_hz, abs=tolerance_hz)


def test_zeros_both_ways_are_rices_1_155_times_the_bandwidth() -> None:
    # Rice (1944-45), ideal low-pass: 1.155 zeros a second for each Hz of bandwidth (value from memory).
    assert 2.0 * zero_level_rate_hz(bandwidth_hz=1.0) == pytest.approx(1.155, abs=5e-4)


def test_zero_level_rate_equals_root_of_spectral_moments() -> None:
    # Rice's general expression, integrated by SciPy over a flat spectrum.
    second_moment, _ = integrate.quad(lambda f_hz: f_hz**2, 0.0, 3.7e5)
    zeroth_moment, _ = integrate.quad(lambda f_hz: 1.0, 0.0, 3.7e5)
    assert zero_level_rate_hz(bandwidth_hz=3.7e5) == pytest.approx(math.sqrt(second_moment / zeroth_moment), rel=1e-12)


def _flat_noise(*, seed: int, samples: int, samples_per_s: int) -> NDArray[np.float64]:
    """Gaussian noise of r.m.s. 1 V, flat from 0 Hz to 1 Hz and nothing above."""
    rng = np.random.default_rng(seed)
    frequency_hz = np.fft.rfftfreq(samples, 1.0 / samples_per_s)
    spectrum = rng.normal(size=frequency_hz.size) + 1j * rng.normal(size=frequency_hz.size)
    spectrum[(frequency_hz > 1.0) | (frequency_hz == 0.0)] = 0.0
    noise = np.fft.irfft(spectrum, samples)
    return np.asarray(noise / noise.std(), dtype=np.float64)


def _up_crossings(signal: NDArray[np.float64], level: float) -> int:
    return int(np.count_nonzero((signal[:-1] < level) & (signal[1:] >= level)))


@pytest.mark.parametrize("level_sigmas", [0.0, 1.0, 2.0, 3.0])
def test_rate_agrees_with_simulated_noise(level_sigmas: float) -> None:
    duration_s, samples_per_s = 2**15, 16
    noise = _flat_noise(seed=20, samples=duration_s * samples_per_s, samples_per_s=samples_per_s)
    expected = duration_s * false_trip_rate_hz(sigma_v=1.0, bandwidth_hz=1.0, distance_v=level_sigmas)
    # Four standard deviations of a Poisson count; the crossings come no less regularly than that.
    assert _up_crossings(noise, level_sigmas) == pytest.approx(expected, abs=4.0 * math.sqrt(expected))


def test_rate_agrees_with_a_recorded_simulation() -> None:
    # A simulation of 1e5 s with B = 1 Hz gave these up-crossings a second (NumPy, flat spectrum).
    for level_sigmas, simulated_hz in ((0, 0.5762), (1, 0.3517), (2, 0.07813), (3, 0.00624)):
        rate_hz = false_trip_rate_hz(sigma_v=1.0, bandwidth_hz=1.0, distance_v=level_sigmas)
        assert simulated_hz == pytest.approx(rate_hz, abs=4.0 * math.sqrt(rate_hz / 1e5))


# Distance in sigma for one trip in ten Julian years: k = sqrt(2 ln(nu0 T)). Value from memory, recomputed.
TEN_YEAR_DISTANCES = ((577350.269, 8.1038), (1e5, 7.8845), (1e3, 7.2770))


@pytest.mark.parametrize(("zero_rate_hz", "k"), TEN_YEAR_DISTANCES, ids=["Rice-577k", "Rice-100k", "Rice-1k"])
def test_distance_for_one_trip_in_ten_years(zero_rate_hz: float, k: float) -> None:
    distance_v = false_trip_distance_v(
        sigma_v=1e-3,
        bandwidth_hz=zero_rate_hz * math.sqrt(3.0),
        life_s=10.0 * JULIAN_YEAR_S,
        allowed_trips=1.0,
    )
    assert distance_v == pytest.approx(k * 1e-3, abs=5e-8)


def test_hysteresis_of_ten_sigma_is_as_good_as_never() -> None:
    # nu0 = 1e6/s at ten sigma: 1.93e-16 a second (value from memory, recomputed).
    rate_hz = false_trip_rate_hz(sigma_v=1e-3, bandwidth_hz=1e6 * math.sqrt(3.0), distance_v=10e-3)
    assert rate_hz == pytest.approx(1.93e-16, abs=5e-19)


@settings(max_examples=60)
@given(
    sigma_v=st.floats(1e-6, 1e-1),
    bandwidth_hz=st.floats(1e2, 1e10),
    life_s=st.floats(1.0, 1e9),
    allowed_trips=st.floats(1e-6, 10.0),
)
def test_distance_is_just_enough(sigma_v: float, bandwidth_hz: float, life_s: float, allowed_trips: float) -> None:
    distance_v = false_trip_distance_v(
        sigma_v=sigma_v, bandwidth_hz=bandwidth_hz, life_s=life_s, allowed_trips=allowed_trips
    )

    def trips(at_v: float) -> float:
        return life_s * false_trip_rate_hz(sigma_v=sigma_v, bandwidth_hz=bandwidth_hz, distance_v=at_v)

    assert trips(distance_v) == pytest.approx(allowed_trips, rel=1e-9)
    assert trips(distance_v * (1.0 - 1e-6)) > allowed_trips
    assert trips(distance_v * (1.0 + 1e-6)) < allowed_trips


def test_no_distance_is_needed_where_even_the_mean_is_crossed_rarely_enough() -> None:
    bandwidth_hz = math.sqrt(3.0)
    for life_s in (0.5, 1.0 - 1e-12):
        assert false_trip_distance_v(sigma_v=1.0, bandwidth_hz=bandwidth_hz, life_s=life_s, allowed_trips=1.0) == 0.0
    assert false_trip_distance_v(sigma_v=1.0, bandwidth_hz=bandwidth_hz, life_s=1.001, allowed_trips=1.0) > 0.0


def test_silence_needs_no_distance() -> None:
    assert false_trip_distance_v(sigma_v=0.0, bandwidth_hz=1e6, life_s=1e8, allowed_trips=1.0) == 0.0


@settings(max_examples=40)
@given(near_v=st.floats(0.0, 5e-3), further_v=st.floats(1e-6, 5e-3))
def test_further_away_is_never_tripped_more_often(near_v: float, further_v: float) -> None:
    near_hz = false_trip_rate_hz(sigma_v=1e-3, bandwidth_hz=1e6, distance_v=near_v)
    far_hz = false_trip_rate_hz(sigma_v=1e-3, bandwidth_hz=1e6, distance_v=near_v + further_v)
    assert far_hz < near_hz


def test_rate_at_the_mean_is_the_zero_level_rate() -> None:
    found_hz = false_trip_rate_hz(sigma_v=1e-3, bandwidth_hz=1e6, distance_v=0.0)
    assert found_hz == zero_level_rate_hz(bandwidth_hz=1e6)


def test_refusals_name_the_symbol() -> None:
    with pytest.raises(DomainError, match=r"^bandwidth_hz must be at least 0 \(found -1\.0\)$"):
        zero_level_rate_hz(bandwidth_hz=-1.0)
    with pytest.raises(DomainError, match=r"^sigma_v must be greater than 0 \(found 0\.0\)$"):
        false_trip_rate_hz(sigma_v=0.0, bandwidth_hz=1.0, distance_v=1.0)
    with pytest.raises(DomainError, match=r"^bandwidth_hz must be at least 0 \(found nan\)$"):
        false_trip_rate_hz(sigma_v=1.0, bandwidth_hz=math.nan, distance_v=1.0)
    with pytest.raises(DomainError, match=r"^distance_v must be at least 0 \(found -1\.0\)$"):
        false_trip_rate_hz(sigma_v=1.0, bandwidth_hz=1.0, distance_v=-1.0)


@pytest.mark.parametrize("symbol", ["sigma_v", "bandwidth_hz", "life_s", "allowed_trips"])
def test_distance_refuses_each_symbol(symbol: str) -> None:
    good = {"sigma_v": 1e-3, "bandwidth_hz": 1e6, "life_s": 1e8, "allowed_trips": 1.0}
    with pytest.raises(DomainError, match=f"^{symbol} must be .* \\(found -1\\.0\\)$"):
        false_trip_distance_v(**{**good, symbol: -1.0})


@pytest.mark.parametrize(
    ("symbols", "limit"),
    [
        ({"bandwidth_hz": 0.0}, 0.0),
        ({"life_s": 0.0}, 0.0),
        ({"bandwidth_hz": math.inf}, math.inf),
        ({"life_s": math.inf}, math.inf),
        ({"sigma_v": math.inf}, math.inf),
        ({"sigma_v": 0.0, "bandwidth_hz": math.inf}, 0.0),
        ({"bandwidth_hz": 0.0, "life_s": math.inf}, 0.0),
    ],
)
def test_distance_at_the_ends_of_what_is_not_known(symbols: dict[str, float], limit: float) -> None:
    # Limits of sigma sqrt(2 ln(nu0 T/N)), held at 0 below nu0 T = N; nothing times what has no end is nothing.
    good = {"sigma_v": 1e-3, "bandwidth_hz": 1e6, "life_s": 1e8, "allowed_trips": 1.0}
    assert false_trip_distance_v(**{**good, **symbols}) == limit
