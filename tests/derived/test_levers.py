"""Levers: what each is said to buy is what the description gives once it is changed so."""

from __future__ import annotations

import pytest

from tests.derived.placing import found, placed

# What a lever says it does, and the same change written into the description.
CHANGES = {
    "uv": {
        "tolerance of the source halved": "rails: {avdd: {delivered: {min: 1.755 V}}}",
        "all errors halved, as by trim": "comparators: {uv: {errors: {reference: {share: 0.2 %}, "
        "divider: {share: 0.05 %}, offset: {amount: 0.2 mV}}}}",
        "reference error halved": "comparators: {uv: {errors: {reference: {share: 0.2 %}}}}",
        "offset error halved": "comparators: {uv: {errors: {offset: {amount: 0.2 mV}}}}",
        "divider error halved": "comparators: {uv: {errors: {divider: {share: 0.05 %}}}}",
        "slower collapse, by hold-up": "rails: {avdd: {collapse: 1 V/ms}}",
        "ripple halved, by decoupling": "rails: {avdd: {ripple: {peak_to_peak: 5 mV}}}",
        "delay halved": "comparators: {uv: {delay: {max: 1 us}}}",
        "filter halved": "comparators: {uv: {filter: {max: 0.75 us}}}",
        "adc, core_regulator signed off 10 mV wider": "loads: {adc: {needs: {0: {works: {min: 1.59 V}}}}, "
        "core_regulator: {needs: {0: {works: {min: 1.59 V}}}}}",
    },
    "ov": {
        "tolerance of the source halved": "rails: {avdd: {delivered: {max: 1.845 V}}}",
        "reference error halved": "comparators: {ov: {errors: {reference: {share: 0.2 %}}}}",
        "slower overshoot": "rails: {avdd: {overshoot: 0.5 V/ms}}",
        "ripple halved, by decoupling": "rails: {avdd: {ripple: {peak_to_peak: 5 mV}}}",
        "adc, core_regulator signed off 10 mV wider": "loads: {adc: {needs: {0: {works: {max: 1.99 V}}}}, "
        "core_regulator: {needs: {0: {works: {max: 1.99 V}}}}}",
    },
}


@pytest.mark.parametrize(("detector", "what"), [(d, what) for d, changes in CHANGES.items() for what in changes])
def test_a_lever_buys_what_the_changed_description_gives(detector: str, what: str) -> None:
    lever = next(lever for lever in placed("", detector).levers if lever.what == what)
    gained_v = found(CHANGES[detector][what], detector).room_v - found("", detector).room_v
    assert gained_v > 0.0
    assert lever.gain_v == pytest.approx(gained_v, abs=1e-9)


def test_the_best_lever_stands_first_and_none_that_buys_nothing() -> None:
    gains = [lever.gain_v for lever in placed("", "uv").levers]
    assert gains == sorted(gains, reverse=True)
    assert min(gains) > 0.0
    # The load step does not set the upper end of this detector: to halve the impedance buys nothing.
    assert "source impedance halved" not in {lever.what for lever in placed("", "uv").levers}


def test_a_stiffer_source_buys_room_where_the_load_step_sets_the_end() -> None:
    patch = "rails: {avdd: {load_step: {max: 200 mA}}}"
    lever = next(lever for lever in placed(patch, "uv").levers if lever.what == "source impedance halved")
    stiffer = found("rails: {avdd: {load_step: {max: 200 mA}, source_impedance: {max: 0.2 ohm}}}", "uv")
    assert lever.gain_v == pytest.approx(stiffer.room_v - found(patch, "uv").room_v, abs=1e-9)
    assert lever.fact == "rails.avdd.source_impedance"
    assert lever.change == "400 mohm to 200 mohm"


def test_a_range_of_the_levels_is_a_lever() -> None:
    lever = next(lever for lever in placed("", "por").levers if lever.what == "range of the levels halved")
    assert lever.fact == "comparators.por.trip"
    assert lever.gain_v > 0.0


def test_less_hysteresis_is_a_lever_down_to_what_is_needed() -> None:
    answer = placed("", "uv")
    lever = next(lever for lever in answer.levers if lever.what == "hysteresis no larger than needed")
    assert isinstance(answer.least_hysteresis_v, float)
    falling_v = 1.627
    less = f"comparators: {{uv: {{trip: {{falling: 1.627 V, rising: {falling_v + answer.least_hysteresis_v:.9f} V}}}}}}"
    assert lever.gain_v == pytest.approx(found(less, "uv").room_v - found("", "uv").room_v, abs=1e-8)
