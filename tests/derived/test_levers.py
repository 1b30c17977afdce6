"""Levers: what each is said to buy is what the description gives once it is changed so."""

from __future__ import annotations

import pytest

from tests.derived.placing import found, placed
from tests.rules.sound import both, without

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


def room_v(patch: str, detector: str) -> float:
    return found(patch, detector).best.room_v


@pytest.mark.parametrize(("detector", "what"), [(d, what) for d, changes in CHANGES.items() for what in changes])
def test_a_lever_buys_what_the_changed_description_gives(detector: str, what: str) -> None:
    lever = next(lever for lever in placed("", detector).levers if lever.what == what)
    gained_v = room_v(CHANGES[detector][what], detector) - room_v("", detector)
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
    stiffer = "rails: {avdd: {load_step: {max: 200 mA}, source_impedance: {max: 0.2 ohm}}}"
    assert lever.gain_v == pytest.approx(room_v(stiffer, "uv") - room_v(patch, "uv"), abs=1e-9)
    assert lever.fact == "rails.avdd.source_impedance"
    assert lever.change == "400 mohm to 200 mohm"


def test_a_range_of_the_levels_is_a_lever() -> None:
    lever = next(lever for lever in placed("", "por").levers if lever.what == "range of the levels halved")
    assert lever.fact == "comparators.por.trip"
    assert lever.gain_v > 0.0


def test_less_hysteresis_is_a_lever_down_to_what_is_needed() -> None:
    answer = placed("", "uv")
    lever = next(lever for lever in answer.levers if lever.what == "hysteresis no larger than needed")
    needed_v = answer.least_hysteresis.sure_v
    assert needed_v is not None
    less = f"comparators: {{uv: {{trip: {{falling: 1.627 V, rising: {1.627 + needed_v:.9f} V}}}}}}"
    assert lever.gain_v == pytest.approx(room_v(less, "uv") - room_v("", "uv"), abs=1e-8)


def test_a_source_without_a_nominal_is_tried_a_little_tighter() -> None:
    lever = next(
        lever for lever in placed(without("rails.avdd.nominal"), "uv").levers if lever.what == "source 10 mV tighter"
    )
    tighter = both(without("rails.avdd.nominal"), "rails: {avdd: {delivered: {min: 1.72 V, max: 1.89 V}}}")
    assert lever.gain_v == pytest.approx(room_v(tighter, "uv") - room_v(without("rails.avdd.nominal"), "uv"), abs=1e-9)
    assert (lever.fact, lever.change) == ("rails.avdd.delivered", "1.71 V to 1.72 V")


def test_an_under_voltage_detector_placed_higher_makes_room_below_it() -> None:
    lever = next(lever for lever in placed("", "por").levers if lever.what == "uv placed higher")
    higher = "comparators: {uv: {trip: {falling: 1.637 V, rising: 1.687 V}}}"
    assert lever.gain_v == pytest.approx(room_v(higher, "por") - room_v("", "por"), abs=1e-9)
    assert lever.change == "1.665 V to 1.675 V at least"


def test_what_is_missing_is_no_lever_and_stands_at_its_best_for_the_others() -> None:
    """Without the delay the collapse of the rail counts for the filter alone: 2 V/ms for 1.5 us, of which half."""
    patch = without("comparators.uv.delay")
    gains = {lever.what: lever.gain_v for lever in placed(patch, "uv").levers}
    assert "delay halved" not in gains
    assert gains["slower collapse, by hold-up"] == pytest.approx(0.0015 / 0.995, abs=1e-9)
    assert gains["reference error halved"] == pytest.approx(
        room_v(both(patch, "comparators: {uv: {errors: {reference: {share: 0.2 %}}}}"), "uv") - room_v(patch, "uv"),
        abs=1e-9,
    )


def test_only_the_end_that_is_known_can_gain() -> None:
    """Loads that do not say from which supply they work leave the lower end open; the upper one moves all the same."""
    patch = without("loads.adc.needs.0.works", "loads.core_regulator.needs.0.works")
    gains = {lever.what: lever.gain_v for lever in placed(patch, "uv").levers}
    assert gains["tolerance of the source halved"] == pytest.approx(0.045 / 1.005, abs=1e-9)
    assert "slower collapse, by hold-up" not in gains
