"""Pulse trains: the table of average-current and RMS lives, and the waveform integrated by SciPy."""

from __future__ import annotations

import math

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from scipy.integrate import quad
from tidegate.lint.physics.domain import DomainError
from tidegate.lint.physics.pulsed_current import average_current_a, pulsed_life_gain, rms_current_a

# (duty, exponent, life gain by the average current, by the RMS current) over a steady current at the peak;
# derived from the average-current model of Liew, Cheung and Hu, IEEE Trans. Electron Devices 37, 1343 (1990).
# The currents behind both columns are confirmed by SciPy quad below.
GAINS = (
    (0.5, 1.0, 2.0, 1.4142),
    (0.1, 1.0, 10.0, 3.1623),
    (0.01, 1.0, 100.0, 10.0),
    (0.5, 2.0, 4.0, 2.0),
    (0.1, 2.0, 100.0, 10.0),
    (0.01, 2.0, 1e4, 100.0),
)


@pytest.mark.parametrize(
    ("duty", "exponent", "by_average", "by_rms"), GAINS, ids=[f"duty{row[0]}-n{row[1]:.0f}" for row in GAINS]
)
def test_life_gain_of_a_pulse_train(duty: float, exponent: float, by_average: float, by_rms: float) -> None:
    peak_a = 3e-3
    assert pulsed_life_gain(duty=duty, exponent=exponent) == pytest.approx(by_average, rel=1e-9)
    average_gain = (peak_a / average_current_a(peak_a=peak_a, duty=duty)) ** exponent
    assert average_gain == pytest.approx(by_average, rel=1e-9)
    rms_gain = (peak_a / rms_current_a(peak_a=peak_a, duty=duty)) ** exponent
    assert rms_gain == pytest.approx(by_rms, rel=2e-5)  # printed to five digits


@pytest.mark.parametrize("duty", [0.03, 0.4, 0.9])
def test_currents_against_scipy_quad(duty: float) -> None:
    peak_a, period_s = 2.5e-3, 1e-5

    def current_a(t: float) -> float:
        return peak_a if t < duty * period_s else 0.0

    mean, _ = quad(current_a, 0.0, period_s, points=[duty * period_s])
    square, _ = quad(lambda t: current_a(t) ** 2, 0.0, period_s, points=[duty * period_s])
    assert average_current_a(peak_a=peak_a, duty=duty) == pytest.approx(mean / period_s, rel=1e-9)
    assert rms_current_a(peak_a=peak_a, duty=duty) == pytest.approx(math.sqrt(square / period_s), rel=1e-9)


@settings(max_examples=40)
@given(st.floats(0.0, 1e3), st.floats(0.0, 1.0))
def test_heating_current_lies_between_average_and_peak(peak_a: float, duty: float) -> None:
    average_a = average_current_a(peak_a=peak_a, duty=duty)
    rms_a = rms_current_a(peak_a=peak_a, duty=duty)
    assert average_a <= rms_a * (1.0 + 1e-12)
    assert rms_a <= peak_a


def test_ends_of_the_scale() -> None:
    assert pulsed_life_gain(duty=1.0, exponent=2.0) == 1.0
    assert pulsed_life_gain(duty=0.0, exponent=2.0) == math.inf
    assert pulsed_life_gain(duty=1e-300, exponent=2.0) == math.inf


def test_arguments_out_of_range_are_refused() -> None:
    for function in (average_current_a, rms_current_a):
        with pytest.raises(DomainError, match=r"^peak_a must be at least 0 \(found -1\.0\)$"):
            function(peak_a=-1.0, duty=0.5)
        with pytest.raises(DomainError, match=r"^duty must lie in 0\.0 to 1\.0 \(found 1\.5\)$"):
            function(peak_a=1.0, duty=1.5)
    with pytest.raises(DomainError, match=r"^duty must lie in 0\.0 to 1\.0 \(found -0\.1\)$"):
        pulsed_life_gain(duty=-0.1, exponent=2.0)
    with pytest.raises(DomainError, match=r"^exponent must be greater than 0 \(found 0\.0\)$"):
        pulsed_life_gain(duty=0.5, exponent=0.0)
