"""Numbers published for real circuits, in tidegate's language, and what the tool rightly says of them.

Each description says where every number stands. What no document gives stays out, so that `open`, with the right
facts, is the right answer.
"""

from __future__ import annotations

from collections.abc import Iterator
from typing import Any, Final, get_args

import pytest

from tests.published.reading import HERE, NAMES, ROUNDING_V, as_published, judged, plain, published
from tidegate.lint.description.model.description import CompleteSection
from tidegate.lint.description.model.part import Part
from tidegate.lint.judgement import Kind
from tidegate.lint.quantity import Span
from tidegate.rules import claims, hysteresis, own_range, passive_default, self_bias, trip_window
from tidegate.rules.catalogue import FAMILIES

# What holds for all of them


def spans(part: Any, path: str = "") -> Iterator[tuple[str, Span]]:
    """Every quantity below a part of a description, with its path."""
    if isinstance(part, Span):
        yield path, part
    elif isinstance(part, Part):
        for field in part.__struct_fields__:
            yield from spans(getattr(part, field), f"{path}.{field}" if path else field)
    elif isinstance(part, dict):
        for key, value in part.items():
            yield from spans(value, f"{path}.{key}")
    elif isinstance(part, tuple):
        for index, value in enumerate(part):
            yield from spans(value, f"{path}.{index}")


def given(data: Any, fact: str) -> Any:
    """The value at a path with dots in plain data; None where there is none."""
    for step in fact.split("."):
        data = data.get(step) if isinstance(data, dict) else data[int(step)] if isinstance(data, list) else None
    return data


def test_every_description_of_the_folder_is_tested() -> None:
    assert tuple(sorted(file.stem for file in HERE.glob("*.yaml"))) == NAMES


@pytest.mark.parametrize("name", NAMES)
def test_every_number_names_its_source(name: str) -> None:
    found = list(spans(as_published(name).description))
    assert len(found) >= 5
    assert [path for path, span in found if span.basis is None or not (span.basis.by and span.basis.source)] == []


@pytest.mark.parametrize("name", NAMES)
def test_what_is_said_to_be_missing_is_missing(name: str) -> None:
    """For every family: an open judgement names facts, and none of them is given."""
    data = plain(name)
    open_ones = [answer for answer in judged(as_published(name), FAMILIES).values() if answer.kind is Kind.OPEN]
    assert open_ones
    for answer in open_ones:
        assert answer.missing, answer
        for fact in answer.missing:
            # A list that is not said to be whole may lack a member.
            perhaps_more = fact.rpartition(".")[2] in LISTS
            assert given(data, fact) is None or perhaps_more, f"{answer.rule} on {answer.subject}: {fact}"


LISTS: Final = frozenset(("errors", *get_args(CompleteSection)))
"""What holds as many entries as are described, and perhaps others."""

PASSES: Final = {
    "mspm0l1306_por_bor": {"por", "bor"},
    "nrf54lm20a_power_fail": {"power_fail"},
    "rp2350_core_supply": {"bod", "vout_ok"},
    "sky130_brownout": {"out", "vunder"},
    "stm1403_supervisor": {"reset_t"},
    "stm32f031_por_pdr": {"por_pdr"},
}
"""Detectors of which some hysteresis is published: an amount, if only a typical one, or levels that differ."""


@pytest.mark.parametrize("name", NAMES)
def test_a_part_that_works_is_not_failed_for_want_of_data(name: str) -> None:
    """That there is some hysteresis is seen; nothing else can pass, and above all nothing fails.

    What the published levels of RP2350 leave no room for is told by trip_window/spread, under which this family is.
    """
    answers = judged(as_published(name), (hysteresis.RULES, trip_window.RULES))
    assert Kind.FAIL not in {answer.kind for (rule, _), answer in answers.items() if rule.startswith("hysteresis/")}
    passed = {key for key, answer in published(name).items() if answer.kind is Kind.PASS}
    assert passed == {("hysteresis/present", subject) for subject in PASSES.get(name, set())}


@pytest.mark.parametrize(
    ("name", "subject", "window"),
    [
        # SLASEX0D, 7.6.1, VHYS,POR: 30 / 45 / 60 mV, although the ends of the levels differ by 50 mV and 30 mV
        pytest.param("mspm0l1306_por_bor", "por", "30 mV to 60 mV", id="SLASEX0D"),
        # nRF54LM20A Datasheet, VPOFHYST: 40 / 50 / 55 mV
        pytest.param("nrf54lm20a_power_fail", "power_fail", "40 mV to 55 mV", id="nRF54LM20A"),
        # sky130_ajc_ip__brownout, Hysteresis (out): 0.1155 / 0.1617 / 0.2083 V
        pytest.param("sky130_brownout", "out", "115.5 mV to 208.3 mV", id="sky130"),
    ],
)
def test_published_hysteresis_is_told(name: str, subject: str, window: str) -> None:
    assert published(name)["hysteresis/present", subject].message == f"has hysteresis, {window}"


# What is open, and for want of what


def missing(name: str, rule: str, subject: str) -> set[str]:
    """The facts that an open judgement asks for."""
    answer = published(name)[rule, subject]
    assert answer.kind is Kind.OPEN
    return set(answer.missing)


def rail_facts(rail: str, *facts: str) -> set[str]:
    return {f"rails.{rail}.{fact}" for fact in facts}


@pytest.mark.parametrize(
    ("name", "rule", "subject", "facts"),
    [
        # Only the typical hysteresis is published: 40 mV (DocID025743, Table 20), 10 mV (STM1403, Table 6, footnote 9).
        (
            "stm32f031_por_pdr",
            "sense",
            "por_pdr",
            {"hysteresis.amount.min", "hysteresis.feedback"},
        ),
        (
            "stm1403_supervisor",
            "sense",
            "reset_t",
            {"hysteresis.amount.min", "hysteresis.feedback"},
        ),
        # Ranges that overlap, and no word whether the levels move together: neither sound nor swapped.
        ("rp2350_core_supply", "sense", "bod", {"tracked", "hysteresis.feedback", "hysteresis.amount"}),
        # How the hysteresis is made is not published.
        ("mspm0l1306_por_bor", "sense", "por", {"hysteresis.feedback"}),
        ("mspm0l1306_por_bor", "switches_complementary", "por", {"hysteresis.made_by"}),
    ],
)
def test_what_the_document_does_not_say_of_the_detector_is_asked(
    name: str, rule: str, subject: str, facts: set[str]
) -> None:
    assert missing(name, f"hysteresis/{rule}", subject) == {f"comparators.{subject}.{fact}" for fact in facts}


def test_what_the_document_does_not_say_of_the_supply_is_asked() -> None:
    """SLASEX0D gives the range of VDD; no data sheet of a detector gives the ripple and droop of somebody's board."""
    name, subject = "mspm0l1306_por_bor", "por"
    disturbance = rail_facts("vdd", "ripple.peak_to_peak", "dip.depth", "load_step", "source_impedance")
    noise = {"comparators.por.noise.rms"}
    # At which level the dip is; and how much the other detector of the chip kicks a reference that both may take.
    disturbance |= rail_facts("vdd", "dip.at") | {"neighbours"}
    kicked = {f"comparators.por.{fact}" for fact in ("reference", "filter", "divider.ratio")}
    kicked |= {"comparators.bor.kick", "references.bandgap.decoupling"}
    assert missing(name, "hysteresis/covers_disturbance", subject) == disturbance | kicked | noise
    life = {"conditions.service_life", "comparators.por.noise.bandwidth"}
    assert missing(name, "hysteresis/false_trips", subject) == disturbance | kicked | noise | life
    # It is not said what the detector guards, and so nothing is known to bound its hysteresis.
    assert missing(name, "hysteresis/fits_window", subject) == {"resets"}
    asked = judged(as_published(name), (trip_window.RULES,))["trip_window/release", subject].missing
    assert set(asked) == rail_facts("vdd", "ripple.peak_to_peak", "delivered")


def test_the_regulator_of_the_same_data_sheet_leaves_one_fact_of_its_rail_open() -> None:
    """RP2350, Table 1442: the range delivered is published, its ripple is not."""
    answers = judged(as_published("rp2350_core_supply"), (trip_window.RULES,))
    assert set(answers["trip_window/release", "bod"].missing) == {"rails.dvdd.ripple.peak_to_peak"}


def test_an_over_voltage_alarm_does_not_ask_for_the_droop_at_release() -> None:
    """STM1403, Table 7: 4.0 / 4.2 / 4.4 V rising; the droop moves the supply away from that level."""
    asked = missing("stm1403_supervisor", "hysteresis/covers_disturbance", "high_alarm")
    assert not asked & rail_facts("vcc", "load_step", "source_impedance")
    assert asked >= rail_facts("vcc", "ripple.peak_to_peak", "dip.depth")


def test_reset_logic_that_is_not_published_is_asked_for_its_hold() -> None:
    """RP2350, 7.3.3 and 7.6: por_n and bor_n reset the chip; what lies between, and what holds it, is not said."""
    answers = judged(as_published("rp2350_core_supply"), (passive_default.RULES,))
    answer = answers["passive_default/held", "chip_level"]
    assert answer.kind is Kind.OPEN
    assert set(answer.missing) == {"output_stages.reset_logic.hold"}


# Rules of other families that published numbers alone decide


def measured(name: str, rule: str, subject: str) -> tuple[Kind, float, float]:
    """Kind, what is needed and what is there."""
    families = (trip_window.RULES, own_range.RULES, self_bias.RULES, claims.RULES)
    answer = judged(as_published(name), families)[rule, subject]
    assert answer.measure is not None
    return answer.kind, answer.measure.need, answer.measure.have


@pytest.mark.parametrize(
    ("name", "rule", "subject", "expected"),
    [
        # DocID025743, Table 20: falls at 1.80 V at the least, and the product behaves down to just that (footnote 2);
        # how long the answer takes while the supply falls on is not published.
        ("stm32f031_por_pdr", "trip_window/guarantee", "por_pdr", (Kind.OPEN, 1.80, 1.80)),
        # SLASEX0D, 7.6.1: POR+ up to 1.51 V, BOR0+ from 1.55 V ("always higher than the POR threshold", says SLAU847D)
        ("mspm0l1306_por_bor", "trip_window/order", "vdd", (Kind.PASS, 1.51, 1.55)),
        # sky130_ajc_ip__brownout: the pin table begins at 3.0 V, the level of code 100 lies down to 2.60509 V
        ("sky130_brownout", "self_bias/works_at_own_trip", "out", (Kind.FAIL, 2.60509, 3.0)),
        # The typical levels lie as far apart as the typical hysteresis says, within the last digit that is printed.
        ("stm32f031_por_pdr", "claims/hysteresis", "por_pdr", (Kind.PASS, 0.050, 0.040)),
        ("stm1403_supervisor", "claims/hysteresis", "reset_t", (Kind.PASS, 0.009, 0.010)),
    ],
)
def test_published_numbers_decide(name: str, rule: str, subject: str, expected: tuple[Kind, float, float]) -> None:
    kind, need_v, have_v = measured(name, rule, subject)
    assert kind is expected[0]
    assert (need_v, have_v) == pytest.approx(expected[1:], abs=ROUNDING_V)


# Numbers worked out from published ones


def ends(span: Span | None) -> tuple[float | None, float | None, float | None]:
    assert span is not None
    return span.least, span.typical, span.most


def trip(name: str, subject: str, which: str) -> tuple[float | None, float | None, float | None]:
    return ends(getattr(as_published(name).description.comparators[subject].trip, which))


@pytest.mark.parametrize(
    ("subject", "which", "selected_v", "per_cent"),
    [
        # Table 539, of the threshold of 0.946 V that is selected at power-on (7.6.2.2)
        ("bod", "falling", 0.946, (96.5, 100, 103.5)),
        ("bod", "rising", 0.946, (97.4, 101, 105)),
        # Table 1442, of the output of 1.1 V that is selected at power-on (6.3.4)
        ("vout_ok", "falling", 1.1, (84, 87, 90)),
        ("vout_ok", "rising", 1.1, (87, 90, 93)),
    ],
)
def test_levels_in_per_cent_are_worked_out_right(
    subject: str, which: str, selected_v: float, per_cent: tuple[float, ...]
) -> None:
    """RP2350 Datasheet of 29 July 2025."""
    expected = [selected_v * share / 100 for share in per_cent]
    assert trip("rp2350_core_supply", subject, which) == pytest.approx(expected, abs=ROUNDING_V)


def test_levels_in_per_cent_agree_with_the_text_beside_them() -> None:
    """RP2350, 7.6.2.2: 'between 0.913V and 0.979V'; 6.3.4: nominally 0.99 V and 0.957 V; Table 1442: -3 % to +3 %."""
    least_v, _, most_v = trip("rp2350_core_supply", "bod", "falling")
    assert (least_v, most_v) == pytest.approx((0.913, 0.979), abs=0.0005)  # the text rounds to 1 mV
    assert trip("rp2350_core_supply", "vout_ok", "rising")[1] == pytest.approx(0.99, abs=ROUNDING_V)
    assert trip("rp2350_core_supply", "vout_ok", "falling")[1] == pytest.approx(0.957, abs=ROUNDING_V)
    delivered = as_published("rp2350_core_supply").description.rails["dvdd"].delivered
    assert ends(delivered)[::2] == pytest.approx((1.1 * 0.97, 1.1 * 1.03), abs=ROUNDING_V)


@pytest.mark.parametrize(
    ("subject", "least_v", "most_v", "accuracy_v"),
    [("out", 0.1155, 0.2083, 0.00076), ("vunder", 0.1161, 0.2084, 0.00081)],
)
def test_levels_about_a_mean_are_worked_out_right(
    subject: str, least_v: float, most_v: float, accuracy_v: float
) -> None:
    """sky130_ajc_ip__brownout: Hysteresis and Accuracy of each output about the mean of both levels, 2.71 V."""
    expected = (2.71 - most_v / 2 - accuracy_v, 2.71 - least_v / 2 + accuracy_v)
    assert trip("sky130_brownout", subject, "falling")[::2] == pytest.approx(expected, abs=ROUNDING_V)


def test_the_codes_of_one_detector_lie_as_far_apart_as_the_document_says() -> None:
    """DocID025743, Table 21: each rising level is 100 mV above its falling one, at the least, typical and most."""
    codes = as_published("stm32f031_por_pdr").description.comparators["pvd"].codes
    assert len(codes) == 6
    for code in codes.values():
        apart = [up - down for up, down in zip(ends(code.rising), ends(code.falling), strict=True) if up and down]
        assert apart == pytest.approx([0.1] * 3, abs=ROUNDING_V)
