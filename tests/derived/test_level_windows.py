"""Where levels and hysteresis lie: the sign-off example, published tolerance laws, and brute force over the errors."""

from __future__ import annotations

import itertools
import math
from collections.abc import Mapping
from typing import Any

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from tests.derived.small import case_on, description, detector, span, volts
from tidegate.lint.case import Case
from tidegate.lint.derived.levels.trip_levels import falling_window, hysteresis_window, rising_window
from tidegate.lint.description.model.detector import Comparator

Ends = tuple[float, float]


def error(size_v: float, *, tracks: bool, kind: str = "bound", of: str = "other") -> Mapping[str, Any]:
    return {"of": of, "amount": volts(size_v), "is": kind, "at": "rail", "tracks": tracks}


def asked(*errors: Mapping[str, Any], levels: Any = (1.61, 1.66), combine: str = "worst_case", **more: Any) -> Any:
    """The falling level, the rising level and the hysteresis of a detector, each as its ends."""
    named = {f"e{number}": each for number, each in enumerate(errors)}
    whole = {"total": error(0.0, tracks=True, of="total"), **named}
    own = detector("under_voltage", *levels, **{"errors": whole, "divider": {"ratio": 1}, "tracked": True, **more})
    made = description({"uv": own}, works={"min": "1.5 V"})
    case = case_on(_combined(made, combine), "uv")
    subject = case.subject
    assert isinstance(subject, Comparator)
    ends = tuple(_ends(case, subject, window) for window in (falling_window, rising_window, hysteresis_window))
    assert case.reading.exact
    return ends


def _combined(made: Any, combine: str) -> Any:
    import msgspec

    from tidegate.lint.description.model.description import Conditions

    return msgspec.structs.replace(made, conditions=Conditions(combine=combine, coverage=3.0))  # type: ignore[arg-type]


def _ends(case: Case, subject: Comparator, window: Any) -> Ends:
    found = window(case, subject)
    return found.least_v, found.most_v


def close(least_v: float, most_v: float) -> Any:
    return pytest.approx((least_v, most_v), abs=1e-12)


def test_signed_off_minimum_placed_to_guarantee() -> None:
    # Common practice, no source: signed off from 1.60 V, error +-10 mV, hysteresis 50 mV.
    falling, rising, hysteresis = asked(error(0.010, tracks=True))
    assert falling == close(1.60, 1.62)
    assert rising == close(1.65, 1.67)
    assert hysteresis == close(0.05, 0.05)


def test_signed_off_minimum_placed_the_other_way_round() -> None:
    # Common practice, no source: always released above 1.60 V; the flag may stay silent down to 1.53 V.
    falling, rising, _ = asked(error(0.010, tracks=True), levels=(1.54, 1.59))
    assert rising[1] == pytest.approx(1.60, abs=1e-12)
    assert falling[0] == pytest.approx(1.53, abs=1e-12)


def test_tracked_errors_cancel_in_the_hysteresis_though_the_windows_overlap() -> None:
    falling, rising, hysteresis = asked(error(0.040, tracks=True))
    assert falling[1] > rising[0]
    assert hysteresis == close(0.05, 0.05)
    assert rising == close(1.62, 1.70)


def test_untracked_errors_enter_the_hysteresis_twice() -> None:
    mixed = (error(0.040, tracks=True), error(0.004, tracks=False), error(0.001, tracks=False, kind="sigma"))
    falling, _, hysteresis = asked(*mixed)
    assert falling == close(1.61 - 0.047, 1.61 + 0.047)
    assert hysteresis == close(0.05 - 0.014, 0.05 + 0.014)
    falling, _, hysteresis = asked(*mixed, combine="root_sum_square")
    error_v = math.sqrt(0.040**2 + 0.004**2 + 0.003**2)
    assert falling == close(1.61 - error_v, 1.61 + error_v)
    apart_v = math.sqrt(2 * (0.004**2 + 0.003**2))
    assert hysteresis == close(0.05 - apart_v, 0.05 + apart_v)


@settings(max_examples=40, deadline=None)
@given(rows=st.lists(st.tuples(st.floats(0.0, 0.1), st.booleans()), min_size=1, max_size=4))
def test_worst_case_windows_are_what_brute_force_finds(rows: list[tuple[float, bool]]) -> None:
    found = asked(*(error(size, tracks=tracks) for size, tracks in rows))
    rising, falling, hysteresis = [], [], []
    # Every error at either end: one sign where it tracks, one for each level where it does not.
    for signs in itertools.product((-1.0, 1.0), repeat=2 * len(rows)):
        up = sum(s * size for s, (size, _) in zip(signs[::2], rows, strict=True))
        down = sum(
            (s if tracks else other) * size
            for s, other, (size, tracks) in zip(signs[::2], signs[1::2], rows, strict=True)
        )
        rising.append(1.66 + up)
        falling.append(1.61 + down)
        hysteresis.append(0.05 + up - down)
    for ends, drawn in zip(found, (falling, rising, hysteresis), strict=True):
        assert ends == pytest.approx((min(drawn), max(drawn)), abs=1e-9)


def test_root_sum_square_windows_against_drawn_parts() -> None:
    # NumPy as the reference: standard deviation of 200 000 drawn parts; its own relative error is 1/sqrt(2 n) = 0.16 %.
    draw = np.random.default_rng(20240607).standard_normal((3, 200_000))
    shared, up, down = 0.008 * draw[0], 0.003 * draw[1], 0.003 * draw[2]
    errors = (error(0.008, tracks=True, kind="sigma"), error(0.003, tracks=False, kind="sigma"))
    _, rising, hysteresis = asked(*errors, combine="root_sum_square")
    assert (rising[1] - 1.66) / 3.0 == pytest.approx(np.std(shared + up), rel=0.008)
    assert (hysteresis[1] - 0.05) / 3.0 == pytest.approx(np.std(up - down), rel=0.008)


RANGES = ((1.58, 1.64), (1.62, 1.70))


def test_ranges_of_tracked_levels_pair_low_with_low() -> None:
    falling, rising, hysteresis = asked(levels=RANGES, tracked=True)
    assert (falling, rising) == RANGES
    assert hysteresis == close(0.04, 0.06)
    assert asked(levels=RANGES, tracked=False)[2] == close(-0.02, 0.12)
    stated = asked(levels=RANGES, tracked=True, hysteresis={"amount": span((0.045, 0.055))})
    assert stated == (*RANGES, (0.045, 0.055))


def test_ranges_that_narrow_upwards_still_give_a_window() -> None:
    assert asked(levels=((1.58, 1.62), (1.65, 1.66)), tracked=True)[2] == close(0.04, 0.07)


def test_a_level_reached_through_the_hysteresis() -> None:
    # Interval arithmetic: R in [F_lo + H_lo, F_hi + H_hi], F in [R_lo - H_hi, R_hi - H_lo].
    apart = {"hysteresis": {"amount": span((0.03, 0.05))}}
    assert asked(levels=((1.60, 1.62), None), **apart)[1] == close(1.63, 1.67)
    assert asked(levels=(None, (1.63, 1.67)), **apart)[0] == close(1.58, 1.64)


@pytest.mark.parametrize("combine", ["worst_case", "root_sum_square"])
def test_more_error_never_narrows_a_window(combine: str) -> None:
    fewer = (error(0.01, tracks=True), error(0.002, tracks=False, kind="sigma"))
    less, more = (asked(*each, combine=combine)[0] for each in (fewer, (*fewer, error(1e-3, tracks=True))))
    assert more[0] < less[0] < less[1] < more[1]
