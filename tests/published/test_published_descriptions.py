"""Numbers published for real circuits, in tidegate's language, and what the tool rightly says of them.

Each description says where every number stands. What no document gives stays out, so that `open` with the right facts is
the right answer; a test that asks "what if" lays its own supposition over a description and says so.
"""

from __future__ import annotations

import datetime
import json
from collections.abc import Iterator, Mapping
from functools import cache
from pathlib import Path
from typing import Any, Final

import msgspec
import pytest
import yaml

from tidegate.lint.description.load import Loaded, load
from tidegate.lint.description.model.part import Part
from tidegate.lint.engine import Catalogue, review
from tidegate.lint.judgement import Judgement, Kind
from tidegate.lint.quantity import Span
from tidegate.rules import hysteresis
from tidegate.rules.catalogue import FAMILIES

HERE: Final = Path(__file__).parent
TODAY: Final = datetime.date(2026, 1, 1)
NAMES: Final = (
    "mspm0l1306_por_bor", "nrf54lm20a_power_fail", "rp2350_core_supply", "sky130_brownout", "stm1403_supervisor",
    "stm32f031_por_pdr",
)  # fmt: skip
NOTHING_ELSE: Final = {"dip": {"depth": "0 V"}, "load_step": "0 A", "source_impedance": "0 ohm"}
"""A supposition: nothing disturbs the rail but its ripple."""
PAIR: Final = 1e-9  # V; sums of a few numbers with at most six digits, each rounded to a float


def laid_over(data: Any, patch: Any) -> Any:
    """The data with a patch laid over them, mapping by mapping; ``None`` removes a key, a quantity is replaced whole."""
    if not isinstance(patch, dict) or not isinstance(data, dict) or {"min", "typ", "max"} & data.keys():
        return patch
    joined = {**data, **{key: laid_over(data.get(key), value) for key, value in patch.items()}}
    return {key: value for key, value in joined.items() if value is not None}


def described(name: str, folder: Path, patch: Mapping[str, Any]) -> Loaded:
    """A published description with a supposition laid over it."""
    file = folder / f"{name}.json"
    file.write_text(json.dumps(laid_over(yaml.safe_load((HERE / f"{name}.yaml").read_text("utf-8")), patch)), "utf-8")
    return load(file, shown=file.name)


def said(loaded: Loaded, families: Any = (hysteresis.RULES,)) -> dict[tuple[str, str], Judgement]:
    """What the rules of some families say, by rule and element; no rule may raise."""
    result = review(loaded, Catalogue(families), today=TODAY)
    assert result.faults == ()
    ours = {rule.id for family in families for rule in family}
    return {(answer.rule, answer.subject): answer for answer in result.judgements if answer.rule in ours}


@cache
def published(name: str) -> dict[tuple[str, str], Judgement]:
    """What the rules about hysteresis say of a published description as it stands."""
    return said(load(HERE / f"{name}.yaml", shown=f"{name}.yaml"))


def missing(name: str, rule: str, subject: str) -> set[str]:
    """The facts that an open judgement asks for."""
    answer = published(name)[rule, subject]
    assert answer.kind is Kind.OPEN
    return set(answer.missing)


def rail_facts(rail: str, *facts: str) -> set[str]:
    return {f"rails.{rail}.{fact}" for fact in facts}


def spans(part: Any, path: str) -> Iterator[tuple[str, Span]]:
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


# What holds for all of them


@pytest.mark.parametrize("name", NAMES)
def test_every_number_names_its_source(name: str) -> None:
    found = list(spans(load(HERE / f"{name}.yaml").description, ""))
    assert len(found) >= 5
    assert [path for path, span in found if span.basis is None or not span.basis.source or not span.basis.by] == []


def test_every_description_of_the_folder_is_tested() -> None:
    assert tuple(sorted(file.stem for file in HERE.glob("*.yaml"))) == NAMES


@pytest.mark.parametrize("name", NAMES)
def test_what_is_said_to_be_missing_is_missing(name: str) -> None:
    """For every family: an open judgement names facts, and none of them is given."""
    loaded = load(HERE / f"{name}.yaml")
    data = msgspec.to_builtins(loaded.sources.data)
    open_ones = [answer for answer in said(loaded, FAMILIES).values() if answer.kind is Kind.OPEN]
    assert open_ones
    for answer in open_ones:
        assert answer.missing, answer
        for fact in answer.missing:
            assert given(data, fact) is None, f"{answer.rule} on {answer.subject}: {fact}"


def given(data: Any, fact: str) -> Any:
    """The value at a path with dots; None where there is none."""
    for step in fact.split("."):
        data = data.get(step) if isinstance(data, dict) else data[int(step)] if isinstance(data, list) else None
    return data


PASSES: Final = {
    ("mspm0l1306_por_bor", "por"), ("nrf54lm20a_power_fail", "power_fail"), ("sky130_brownout", "out"),
    ("sky130_brownout", "vunder"),
}  # fmt: skip


@pytest.mark.parametrize("name", NAMES)
def test_a_part_that_is_sold_is_not_failed_for_want_of_data(name: str) -> None:
    """A hysteresis published with both ends is seen; nothing else passes, and above all nothing fails."""
    kinds = {answer.kind for answer in published(name).values()}
    passed = {(name, subject) for (_, subject), answer in published(name).items() if answer.kind is Kind.PASS}
    assert kinds <= {Kind.PASS, Kind.OPEN}
    assert passed == {(file, subject) for file, subject in PASSES if file == name}


@pytest.mark.parametrize(
    ("name", "subject", "window"),
    [
        # SLASEX0D, 7.6.1: 30 / 45 / 60 mV, although the ends of the levels differ by 50 mV and 30 mV
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


@pytest.mark.parametrize(
    ("name", "rule", "subject", "facts"),
    [
        # Only the typical hysteresis is published: 40 mV (DocID025743, Table 20) and 10 mV (STM1403, footnote 9).
        ("stm32f031_por_pdr", "hysteresis/present", "por_pdr", {"amount.min", "amount.max"}),
        ("stm1403_supervisor", "hysteresis/present", "reset_t", {"amount.min", "amount.max"}),
        # Overlapping ranges, and no word whether the levels move together: neither sound nor swapped.
        ("rp2350_core_supply", "hysteresis/present", "bod", {"tracked"}),
        ("rp2350_core_supply", "hysteresis/present", "vout_ok", {"tracked"}),
        ("rp2350_core_supply", "hysteresis/sense", "bod", {"tracked", "hysteresis.feedback"}),
        ("mspm0l1306_por_bor", "hysteresis/present", "bor", {"tracked"}),
        ("mspm0l1306_por_bor", "hysteresis/sense", "por", {"hysteresis.feedback"}),
        ("mspm0l1306_por_bor", "hysteresis/switches_complementary", "por", {"hysteresis.made_by"}),
    ],
)
def test_what_the_document_does_not_say_of_the_detector_is_asked(
    name: str, rule: str, subject: str, facts: set[str]
) -> None:
    own = f"comparators.{subject}."
    asked = {
        fact.removeprefix(own).removeprefix("hysteresis." if "amount" in fact else "")
        for fact in missing(name, rule, subject)
    }
    assert asked == facts


def test_what_the_document_does_not_say_of_the_supply_is_asked() -> None:
    """SLASEX0D gives the range of VDD; no data sheet of a detector gives the ripple and droop of somebody's board."""
    name, subject = "mspm0l1306_por_bor", "por"
    disturbance = rail_facts("vdd", "ripple.peak_to_peak", "dip.depth", "load_step", "source_impedance")
    assert missing(name, "hysteresis/covers_disturbance", subject) == {
        *disturbance, "comparators.por.noise.rms", "conditions.coverage",
    }  # fmt: skip
    assert missing(name, "hysteresis/false_trips", subject) == {
        *disturbance, "comparators.por.noise.rms", "comparators.por.noise.bandwidth", "conditions.service_life",
        "conditions.false_trips",
    }  # fmt: skip
    assert missing(name, "hysteresis/fits_window", subject) == rail_facts("vdd", "ripple.peak_to_peak", "delivered")


def test_an_over_voltage_alarm_does_not_ask_for_the_droop_at_release() -> None:
    """STM1403, Table 7: 4.0 / 4.2 / 4.4 V rising; the droop moves the supply away from that level."""
    asked = missing("stm1403_supervisor", "hysteresis/covers_disturbance", "high_alarm")
    assert not asked & rail_facts("vcc", "load_step", "source_impedance")
    assert asked >= rail_facts("vcc", "ripple.peak_to_peak", "dip.depth")


def test_a_typical_ripple_is_no_bound(tmp_path: Path) -> None:
    """LMZ10500 data sheet (JAJSB44H, October 2023), VOUT Ripple at 1.8 V, 650 mA: 8 mV peak to peak, typical only."""
    loaded = described(
        "mspm0l1306_por_bor", tmp_path, {"rails": {"vdd": {"ripple": {"peak_to_peak": {"typ": "8 mV"}}}}}
    )
    answer = said(loaded)["hysteresis/fits_window", "por"]
    assert set(answer.missing) == rail_facts("vdd", "ripple.peak_to_peak.max", "delivered")


# Numbers worked out from published ones


def test_levels_in_per_cent_are_worked_out_right() -> None:
    """RP2350 Datasheet: Table 539 times 0.946 V (7.6.2.2), Table 1442 times 1.1 V (6.3.4)."""
    description = load(HERE / "rp2350_core_supply.yaml").description
    for subject, which, selected_v, per_cent in (
        ("bod", "falling", 0.946, (96.5, 100, 103.5)),
        ("bod", "rising", 0.946, (97.4, 101, 105)),
        ("vout_ok", "falling", 1.1, (84, 87, 90)),
        ("vout_ok", "rising", 1.1, (87, 90, 93)),
    ):
        span = getattr(description.comparators[subject].trip, which)
        assert (span.least, span.typical, span.most) == pytest.approx(
            [selected_v * p / 100 for p in per_cent], abs=PAIR
        )
    delivered = description.rails["dvdd"].delivered
    assert delivered is not None
    assert (delivered.least, delivered.most) == pytest.approx((1.1 * 0.97, 1.1 * 1.03), abs=PAIR)
    # the text beside Table 539 rounds them: "a detection threshold between 0.913V and 0.979V"
    falling = description.comparators["bod"].trip.falling  # type: ignore[union-attr]
    assert (round(falling.least, 3), round(falling.most, 3)) == (0.913, 0.979)  # type: ignore[union-attr,arg-type]


def test_levels_about_a_mean_are_worked_out_right() -> None:
    """sky130_ajc_ip__brownout: mean of both levels 2.71 V (code 100), Accuracy and Hysteresis of each output."""
    description = load(HERE / "sky130_brownout.yaml").description
    for subject, least_v, most_v, accuracy_v in (("out", 0.1155, 0.2083, 0.00076), ("vunder", 0.1161, 0.2084, 0.00081)):
        falling = description.comparators[subject].trip.falling  # type: ignore[union-attr]
        expected = (2.71 - most_v / 2 - accuracy_v, 2.71 - least_v / 2 + accuracy_v)
        assert (falling.least, falling.most) == pytest.approx(expected, abs=PAIR)  # type: ignore[union-attr]


# Traps, on published numbers


@pytest.mark.parametrize(
    ("name", "subject", "ends_v", "typical_v"),
    [
        # DocID025743 Rev 6, Table 20: 1.84/1.92/2.00 V rising, 1.80/1.88/1.96 V falling; PDR hysteresis 40 mV typ
        pytest.param("stm32f031_por_pdr", "por_pdr", (1.84 - 1.80, 2.00 - 1.96), 0.040, id="STM32F031"),
        # STM1403, Table 6: 3.00/3.17 V rising, 3.00/3.15 V falling; hysteresis 10 mV typ (footnote 9)
        pytest.param("stm1403_supervisor", "reset_t", (3.00 - 3.00, 3.17 - 3.15), 0.010, id="STM1403"),
        # RP2350, Table 539: 97.4 % and 105 % of 0.946 V rising, 96.5 % and 103.5 % falling; typical 101 % and 100 %
        pytest.param("rp2350_core_supply", "bod", (0.009 * 0.946, 0.015 * 0.946), 0.01 * 0.946, id="RP2350-bod"),
        # RP2350, Table 1442: 87 % and 93 % of 1.1 V rising, 84 % and 90 % falling
        pytest.param("rp2350_core_supply", "vout_ok", (0.033, 0.033), 0.033, id="RP2350-vout_ok"),
        # SLASEX0D, 7.6.1: 1.55/1.59/1.62 V rising, 1.54/1.58/1.61 V falling
        pytest.param("mspm0l1306_por_bor", "bor", (0.010, 0.010), 0.010, id="SLASEX0D-bor"),
    ],
)
def test_levels_that_overlap_are_sound_if_they_move_together(
    name: str, subject: str, ends_v: tuple[float, float], typical_v: float, tmp_path: Path
) -> None:
    """What if: the levels share their errors. Then the overlap says nothing, and the ends are about the typical value."""
    tracked = {"comparators": {subject: {"tracked": True, "hysteresis": {"amount": None, "feedback": "positive"}}}}
    loaded = described(name, tmp_path, tracked)
    trip = loaded.description.comparators[subject].trip
    assert trip is not None and trip.rising is not None and trip.falling is not None
    assert trip.rising.least < trip.falling.most  # type: ignore[operator]  # they do overlap
    answers = said(loaded)
    assert answers["hysteresis/present", subject].kind is Kind.PASS
    assert answers["hysteresis/sense", subject].kind is Kind.PASS
    assert ends_v[0] <= typical_v + PAIR and typical_v - PAIR <= ends_v[1]
    measure = covers(name, subject, tmp_path, tracked, ripple_v=0.0).measure
    assert measure is not None
    assert measure.have == pytest.approx(ends_v[0], abs=PAIR)


def test_levels_that_overlap_can_be_swapped_if_they_do_not_move_together(tmp_path: Path) -> None:
    """What if, the other way: DocID025743, Table 20, 1.84 V at the least rising against 1.96 V at the most falling."""
    patch = {"comparators": {"por_pdr": {"tracked": False, "hysteresis": {"amount": None, "feedback": "positive"}}}}
    answer = said(described("stm32f031_por_pdr", tmp_path, patch))["hysteresis/sense", "por_pdr"]
    assert answer.kind is Kind.FAIL
    assert "120 mV" in answer.message


def covers(name: str, subject: str, folder: Path, patch: Mapping[str, Any], *, ripple_v: float) -> Judgement:
    """What if nothing but a ripple disturbs the rail: whether the hysteresis covers it."""
    quiet = {
        "conditions": {"coverage": 3},
        "comparators": {subject: {"noise": {"rms": "0 V"}}},
        "rails": {
            rail: {**NOTHING_ELSE, "ripple": {"peak_to_peak": f"{ripple_v:.9f} V"}}
            for rail in yaml.safe_load((HERE / f"{name}.yaml").read_text("utf-8"))["rails"]
        },
    }
    return said(described(name, folder, laid_over(quiet, patch)))["hysteresis/covers_disturbance", subject]


@pytest.mark.parametrize(
    ("name", "subject", "patch", "least_v"),
    [
        # SLASEX0D, 7.6.1, VHYS,POR least 30 mV: the amount counts, not the ends of the levels (0.95 - 0.9 = 50 mV)
        pytest.param("mspm0l1306_por_bor", "por", {}, 0.030, id="SLASEX0D"),
        # nRF54LM20A Datasheet, VPOFHYST least 40 mV
        pytest.param("nrf54lm20a_power_fail", "power_fail", {}, 0.040, id="nRF54LM20A"),
        # STM1403, footnote 9: 10 mV, taken as exact
        pytest.param(
            "stm1403_supervisor", "reset_t",
            {"comparators": {"reset_t": {"hysteresis": {"amount": "10 mV"}}}}, 0.010, id="STM1403",
        ),
    ],
)  # fmt: skip
def test_a_small_hysteresis_is_too_small_and_not_missing(
    name: str, subject: str, patch: Mapping[str, Any], least_v: float, tmp_path: Path
) -> None:
    """What if: a ripple of just the least hysteresis, and of 1 mV more."""
    assert covers(name, subject, tmp_path, patch, ripple_v=least_v).kind is Kind.PASS
    beyond = covers(name, subject, tmp_path, patch, ripple_v=least_v + 0.001)
    assert beyond.kind is Kind.FAIL
    assert beyond.measure is not None
    assert beyond.measure.margin == pytest.approx(-0.001, abs=PAIR)
    quiet = described(name, tmp_path, patch)
    assert said(quiet)["hysteresis/present", subject].kind is Kind.PASS


def fits(name: str, subject: str, folder: Path, patch: Mapping[str, Any]) -> Judgement:
    """Whether the greatest hysteresis fits its window."""
    return said(described(name, folder, patch))["hysteresis/fits_window", subject]


def test_a_release_level_that_is_bounded_is_not_the_trip_level_plus_hysteresis(tmp_path: Path) -> None:
    """STM1403, Table 6: rises to 3.17 V at the most, although 3.15 V (falling, most) plus 10 mV would be 3.16 V.

    What if: a supply of at least 3.19 V with 20 mV of ripple, 3.18 V at its lowest: 10 mV of room, not 20 mV.
    """
    patch = {
        "rails": {"vcc": {"delivered": {"min": "3.19 V"}, "ripple": {"peak_to_peak": "20 mV"}}},
        "comparators": {"reset_t": {"hysteresis": {"amount": "10 mV"}}},
    }
    answer = fits("stm1403_supervisor", "reset_t", tmp_path, patch)
    assert answer.kind is Kind.PASS
    assert answer.measure is not None
    assert answer.measure.margin == pytest.approx(3.19 - 0.020 / 2 - 3.17, abs=PAIR)


def test_the_least_supply_of_the_data_sheet_is_just_enough_to_start(tmp_path: Path) -> None:
    """SLASEX0D: VDD from 1.62 V, BOR0+ up to 1.62 V. What if the source keeps just that range, still or with a ripple?"""
    for ripple_v, kind in ((0.0, Kind.PASS), (0.002, Kind.FAIL)):
        patch = {
            "rails": {
                "vdd": {"delivered": {"min": "1.62 V", "max": "3.6 V"}, "ripple": {"peak_to_peak": f"{ripple_v} V"}}
            },
            "comparators": {"bor": {"tracked": True}},
        }
        answer = fits("mspm0l1306_por_bor", "bor", tmp_path, patch)
        assert answer.kind is kind
        assert answer.measure is not None
        assert answer.measure.margin == pytest.approx(1.62 - ripple_v / 2 - 1.62, abs=PAIR)


def test_the_regulator_of_the_same_data_sheet_leaves_the_brownout_detector_room(tmp_path: Path) -> None:
    """RP2350: DVDD from 1.067 V (Table 1442), release up to 105 % of 0.946 V (Table 539): 73.7 mV, half a ripple of 147.4 mV."""
    for ripple_v, kind in ((0.1474, Kind.PASS), (0.1494, Kind.FAIL)):
        patch = {
            "rails": {"dvdd": {"ripple": {"peak_to_peak": f"{ripple_v} V"}}},
            "comparators": {"bod": {"tracked": True}},
        }
        answer = fits("rp2350_core_supply", "bod", tmp_path, patch)
        assert answer.kind is kind
        assert answer.measure is not None
        assert answer.measure.margin == pytest.approx(1.1 * 0.97 - ripple_v / 2 - 1.05 * 0.946, abs=PAIR)


@pytest.mark.parametrize("tenths", range(17, 33))
def test_a_nominal_level_with_a_tolerance_and_a_hysteresis_gives_the_release_level(tenths: int, tmp_path: Path) -> None:
    """nRF54LM20A, every code: the nominal level within 2 %, released by up to 55 mV more.

    What if: the least supply is just that level, and 1 mV less.
    """
    level_v = tenths / 10
    highest_v = level_v * 1.02 + 0.055
    codes = yaml.safe_load((HERE / "nrf54lm20a_power_fail.yaml").read_text("utf-8"))["comparators"]["power_fail"][
        "codes"
    ]
    chosen = {"trip": codes[f"v{tenths // 10}_{tenths % 10}"], "tracked": True}
    for less_v, kind in ((0.0, Kind.PASS), (0.001, Kind.FAIL)):
        supply = {"delivered": {"min": f"{highest_v - less_v:.6f} V"}, "ripple": {"peak_to_peak": "0 V"}}
        patch = {"rails": {"vdd": supply}, "comparators": {"power_fail": chosen}}
        answer = fits("nrf54lm20a_power_fail", "power_fail", tmp_path, patch)
        assert answer.kind is kind
        assert answer.measure is not None
        assert answer.measure.margin == pytest.approx(-less_v, abs=PAIR)
