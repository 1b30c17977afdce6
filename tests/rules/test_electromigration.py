from __future__ import annotations

from typing import Final

import pytest
from scipy.optimize import brentq

from tests.rules.sound import both, changed, judged, of_kind, without
from tidegate.lint.graph.edge import path_text
from tidegate.lint.judgement import Judgement, Kind
from tidegate.lint.rule import Rule
from tidegate.rules import hysteresis
from tidegate.rules.electromigration import RULES

SCHMITT: Final = "electromigration/schmitt"
DROOP: Final = "electromigration/crowbar_droop"
LINE: Final = "electromigration/line"
VIAS: Final = "electromigration/vias"

SLOW: Final = ("por_out", "uv_out", "ov_out")
FAST: Final = ("ov_latch", "gather", "rst_out", "core_out")


def one(patch: str, rule: str, subject: str = "por_out") -> Judgement:
    return judged(patch, RULES)[rule, subject]


def have(said: Judgement) -> float:
    assert said.measure is not None
    return said.measure.have


def need(said: Judgement) -> float:
    assert said.measure is not None
    return said.measure.need


def por_out(facts: str, more: str = "") -> str:
    return f"output_stages: {{por_out: {{{facts}}}}}\n{more}"


def peak_a(*, supply_v: float, nmos_v: float, pmos_v: float, nmos_beta: float, pmos_beta: float) -> float:
    """Where both transistors are saturated and carry the same current, found by SciPy."""

    def drives(input_v: float) -> tuple[float, float]:
        return nmos_beta / 2 * (input_v - nmos_v) ** 2, pmos_beta / 2 * (supply_v - input_v - pmos_v) ** 2

    crossing_v = brentq(lambda input_v: drives(input_v)[0] - drives(input_v)[1], nmos_v, supply_v - pmos_v, xtol=1e-15)
    return drives(crossing_v)[0]


SOUND_PEAK_A: Final = peak_a(supply_v=1.89, nmos_v=0.31, pmos_v=0.32, nmos_beta=120e-6, pmos_beta=60e-6)


# What the sound example gives


def test_sound_example_keeps_every_rule() -> None:
    said = judged("", RULES)
    assert of_kind(said, Kind.FAIL, Kind.OPEN, Kind.REVIEW) == []
    expected = {(rule, stage) for rule in (DROOP, LINE, VIAS) for stage in FAST}
    assert set(of_kind(said, Kind.NOT_APPLICABLE)) == expected
    for rule, stage in expected:
        assert said[rule, stage].message == "its input edge of 60 ns is not slow"


def test_peak_of_the_sound_example() -> None:
    for rule in (LINE, VIAS):
        assert have(one("", rule)) == pytest.approx(SOUND_PEAK_A, rel=1e-9)
    # 0.5 um less 0.02 um: 297.6 uA at 0.62 mA/um, and 2000 A/cm * 0.48 um * 0.4 um / 60 um = 640 uA since it is short
    assert need(one("", LINE)) == pytest.approx(0.64e-3, rel=1e-12)
    assert need(one("", VIAS)) == pytest.approx(2 * 0.18e-3, rel=1e-12)
    assert have(one("", DROOP)) == pytest.approx(SOUND_PEAK_A * 0.4, rel=1e-9)
    assert one("", LINE).message == "crowbar current of its line 16.34 uA, at most 640 uA needed"
    assert one("", LINE).why == (
        "square law at 1.89 V with thresholds of 310 mV and 320 mV; 297.6 uA direct, limit of 125 degC and 10 yr, "
        "640 uA because 60 um keep below 2000 A/cm of density times length"
    )
    assert one("", VIAS).message == "crowbar current of its vias 16.34 uA, at most 360 uA needed"
    assert path_text(one("", DROOP).path) == "por drives por_out"


# Examples: one fault, and exactly the judgements that it changes

FAULTS: Final = {
    SCHMITT: {(SCHMITT, "uv_out"): Kind.FAIL},
    DROOP: {(DROOP, "por_out"): Kind.FAIL},
    LINE: {(LINE, "por_out"): Kind.FAIL},
    VIAS: {(VIAS, "por_out"): Kind.FAIL},
}


@pytest.mark.parametrize("rule", RULES, ids=lambda rule: rule.id)
def test_example_fails_alone_and_holds(rule: Rule) -> None:
    assert changed(rule.example.fails, RULES) == FAULTS[rule.id]
    assert changed(rule.example.holds, RULES) == {}


# Facts that are missing

STIFF: Final = "rails: {avdd: {source_impedance: {max: 200 ohm}}}"

OF_POR: Final = "output_stages.por_out."
THREE: Final = (DROOP, LINE, VIAS)
LAYER: Final = "process.layers.metal1.limits"

SLOW_LINES: Final = [(LINE, stage) for stage in SLOW]
SLOW_VIAS: Final = [(VIAS, stage) for stage in SLOW]

# What is missing, and what is open for want of it.
OPEN: Final = (
    (f"{OF_POR}kind", [(SCHMITT, "por_out")]),
    (f"{OF_POR}nmos", [(rule, "por_out") for rule in THREE]),
    (f"{OF_POR}nmos.gain", [(rule, "por_out") for rule in THREE]),
    (f"{OF_POR}pmos.gain", [(rule, "por_out") for rule in THREE]),
    (f"{OF_POR}pmos.threshold.min", [(rule, "por_out") for rule in THREE]),
    (f"{OF_POR}domain", [(rule, "por_out") for rule in THREE]),
    ("rails.avdd.delivered", [(rule, stage) for rule in THREE for stage in SLOW]),
    ("rails.avdd.source_impedance", [(DROOP, stage) for stage in SLOW]),
    (f"{OF_POR}output", [(LINE, "por_out"), (VIAS, "por_out")]),
    (f"{OF_POR}output.layer", [(LINE, "por_out")]),
    (f"{OF_POR}output.width", [(LINE, "por_out")]),
    (f"{OF_POR}output.via", [(VIAS, "por_out")]),
    (f"{OF_POR}output.vias", []),  # there is one at least, and it carries 180 uA
    (f"{OF_POR}output.length", []),  # no line carries less for being short
    (LAYER, SLOW_LINES),
    (f"{LAYER}.1.temperature", SLOW_LINES),
    (f"{LAYER}.1.dc", []),  # the line is short enough
    (f"{LAYER}.1.life", []),
    (f"{LAYER}.0.life", []),  # of the entry that is not used
    (f"{LAYER}.1.rms", []),  # the direct current that is allowed is its own r.m.s. value
    ("process.layers.metal1.width_bias", SLOW_LINES),
    ("process.layers.metal1.thickness", []),
    ("process.vias.via1.limits.0.dc", SLOW_VIAS),
    ("process.vias.via1.limits.0.temperature", SLOW_VIAS),
    ("process.vias.via1.limits.0.life", SLOW_VIAS),
    ("process.activation_energy", []),  # not needed where the limit is stated for this chip's conditions
    ("process.current_exponent", []),
    ("conditions.junction_temperature", SLOW_VIAS),
    ("conditions.service_life", SLOW_VIAS),
    ("conditions.power_cycles", []),  # not needed where the metal keeps its limit outright
    (f"{OF_POR}dwell", []),
)


@pytest.mark.parametrize(("fact", "expected"), OPEN, ids=[fact for fact, _ in OPEN])
def test_missing_fact_is_open_and_named(fact: str, expected: list[tuple[str, str]]) -> None:
    patch = without(fact) if fact != f"{OF_POR}kind" else por_out("kind: null, input_edge: 200 ns")
    said = judged(patch, RULES)
    assert set(of_kind(said, Kind.OPEN)) == set(expected)
    for key in expected:
        assert said[key].missing
        assert all(missing.startswith(fact) for missing in said[key].missing)
    assert of_kind(said, Kind.FAIL) == []


@pytest.mark.parametrize("fact", [f"{OF_POR}input_edge", "process.plain_edge"])
def test_an_edge_that_may_be_slow_is_taken_for_slow_where_that_harms(fact: str) -> None:
    said = judged(without(fact), RULES)
    for rule in THREE:
        assert (said[rule, "por_out"].kind, said[rule, "por_out"].missing) == (Kind.PASS, (fact,))
    large = judged(both(without(fact), por_out("crowbar_peak: 4 mA, output: {vias: 1}"), STIFF), RULES)
    for rule in THREE:
        assert large[rule, "por_out"].kind is Kind.OPEN
        assert fact in large[rule, "por_out"].missing


def test_a_stage_of_unknown_kind_may_be_a_schmitt_stage() -> None:
    said = one(por_out("kind: null"), SCHMITT)
    assert (said.kind, said.missing) == (Kind.OPEN, (f"{OF_POR}kind",))
    assert one("output_stages: {gather: {kind: null}}", SCHMITT, "gather").kind is Kind.PASS  # its edge is fast


@pytest.mark.parametrize(
    ("facts", "more"),
    [
        ("nmos: {gain: {min: 0.1 A/V^2}}, pmos: {gain: {min: 0.1 A/V^2}}", ""),
        ("nmos: {gain: 0.1 A/V^2}, pmos: {gain: 0.1 A/V^2}", "rails: {avdd: {delivered: {min: 1.71 V}}}"),
    ],
)
def test_a_current_that_known_transistors_surely_exceed_fails(facts: str, more: str) -> None:
    """Two gains of 0.1 A/V^2 pass 14.6 mA at 1.71 V (b/8 times 1.08 V squared); more of either only adds to it."""
    said = one(por_out(facts, more), LINE)
    assert said.kind is Kind.FAIL
    assert "whatever" in said.message


def test_all_that_is_missing_is_named_at_once() -> None:
    gone = without(
        f"{OF_POR}nmos", f"{OF_POR}pmos.gain", f"{OF_POR}output", "rails.avdd.delivered", "rails.avdd.source_impedance"
    )
    transistors = {
        f"{OF_POR}nmos.gain", f"{OF_POR}nmos.threshold", f"{OF_POR}pmos.gain", "rails.avdd.delivered",
    }  # fmt: skip
    assert set(one(gone, LINE).missing) == {*transistors, f"{OF_POR}output.layer", f"{OF_POR}output.width"}
    assert set(one(gone, VIAS).missing) == {*transistors, f"{OF_POR}output.via", f"{OF_POR}output.vias"}
    assert set(one(gone, DROOP).missing) == {*transistors, "rails.avdd.source_impedance"}


def test_all_that_the_metal_needs_is_named_at_once() -> None:
    gone = without(f"{OF_POR}output.width", f"{OF_POR}output.vias", "conditions.service_life", f"{LAYER}.1.temperature")
    life = "conditions.service_life"
    assert set(one(gone, LINE).missing) == {f"{OF_POR}output.width", f"{LAYER}.1.temperature", life}
    assert set(one(gone, VIAS).missing) == {f"{OF_POR}output.vias", life}


def test_a_stated_peak_needs_no_transistors() -> None:
    patch = por_out("crowbar_peak: {typ: 10 uA, max: 20 uA}, nmos: null, pmos: null")
    for rule in THREE:
        assert one(patch, rule).kind is Kind.PASS
    assert have(one(patch, LINE)) == pytest.approx(20e-6)
    assert one(patch, LINE).why.startswith("peak as stated; ")
    only_typical = por_out("crowbar_peak: {typ: 10 uA}")
    assert one(only_typical, LINE).missing == ("output_stages.por_out.crowbar_peak.max",)


def test_a_stated_peak_wins_over_the_square_law() -> None:
    assert have(one(por_out("crowbar_peak: 5 uA"), LINE)) == 5e-6


# The crowbar current


def test_equal_transistors_carry_what_veendrick_says() -> None:
    # H. J. M. Veendrick, IEEE JSSC 19(4), 468-473 (1984): beta/8 (VDD - 2 VT)^2; 100 uA/V^2, 1.8 V, 0.45 V: 10.125 uA
    equal = "{threshold: 0.45 V, gain: 100 uA/V^2}"
    patch = por_out(f"nmos: {equal}, pmos: {equal}", "rails: {avdd: {delivered: {min: 1.71 V, max: 1.8 V}}}")
    assert have(one(patch, LINE)) == pytest.approx(10.125e-6, rel=1e-12)


def test_threshold_of_the_family_at_the_hottest_junction() -> None:
    stated = por_out("nmos: {threshold: {min: 0.31 V, max: 0.6 V}}, pmos: {threshold: {min: 0.32 V, max: 0.6 V}}")
    family = without(f"{OF_POR}nmos.threshold", f"{OF_POR}pmos.threshold")
    # 0.42 V - 1.1 mV/K * 100 K = 0.31 V, 0.44 V - 1.2 mV/K * 100 K = 0.32 V
    assert have(one(family, LINE)) == pytest.approx(have(one(stated, LINE)), rel=1e-9)
    cooler = f'{family[:-1]}, "conditions": {{"junction_temperature": {{"min": "-40 degC", "max": "75 degC"}}}}}}'
    expected_a = peak_a(supply_v=1.89, nmos_v=0.365, pmos_v=0.38, nmos_beta=120e-6, pmos_beta=60e-6)
    assert have(one(cooler, DROOP)) == pytest.approx(0.4 * expected_a, rel=1e-9)


@pytest.mark.parametrize("fact", ["threshold", "threshold_slope", "reference_temperature"])
def test_family_that_does_not_give_its_threshold_is_open(fact: str) -> None:
    patch = without(f"{OF_POR}nmos.threshold", f"process.devices.nmos_1v8.{fact}")
    assert one(patch, DROOP).missing == (f"process.devices.nmos_1v8.{fact}",)


def test_no_crowbar_current_below_both_thresholds() -> None:
    patch = por_out("nmos: {threshold: 0.9 V}, pmos: {threshold: 0.99 V}, output: null")
    for rule in (LINE, VIAS):
        said = one(patch, rule)
        assert (said.kind, said.message) == (Kind.PASS, "there is no crowbar current")
        assert said.why == "square law at 1.89 V with thresholds of 900 mV and 990 mV"
    assert one(patch, DROOP).message == "its crowbar current moves avdd by 0 V, at most 50 mV needed"
    barely = por_out("nmos: {threshold: 0.9 V}, pmos: {threshold: 0.98 V}")
    assert have(one(barely, LINE)) > 0.0


# electromigration/schmitt


def test_plain_stage_behind_a_slow_edge() -> None:
    said = one("output_stages: {uv_out: {kind: buffer}}", SCHMITT, "uv_out")
    assert said.kind is Kind.FAIL
    assert said.message == "input edge 2 us, at most 100 ns needed"
    assert said.why == "a buffer stage has no hysteresis"
    assert said.mend == "make it a Schmitt stage, or an edge of at most 100 ns"
    assert said.at == "output_stages.uv_out.input_edge"


@pytest.mark.parametrize("kind", ["gain", "inverter", "buffer", "latch", "level_shifter", "filter", "delay"])
def test_no_other_kind_has_hysteresis(kind: str) -> None:
    said = one(por_out(f"kind: {kind}"), SCHMITT)
    assert said.kind is Kind.FAIL
    article = "an" if kind == "inverter" else "a"
    assert said.why == f"{article} {kind.replace('_', ' ')} stage has no hysteresis"


@pytest.mark.parametrize(("edge", "kind"), [("99.9", "pass"), ("100", "pass"), ("100.1", "fail")])
def test_edge_at_its_limit(edge: str, kind: str) -> None:
    patch = f"output_stages: {{gather: {{input_edge: {{max: {edge} ns}}}}}}"
    assert one(patch, SCHMITT, "gather").kind == kind
    slow = kind == "fail"
    assert (one(patch, LINE, "gather").kind is Kind.NOT_APPLICABLE) is not slow


def test_schmitt_stage_is_good_for_any_edge() -> None:
    assert one("", SCHMITT).message == "a Schmitt stage is good for any edge"
    assert one(por_out("input_edge: null"), SCHMITT).kind is Kind.PASS


# electromigration/crowbar_droop


@pytest.mark.parametrize(("peak", "kind"), [("0.2499", "pass"), ("0.25", "pass"), ("0.2501", "fail")])
def test_droop_at_its_limit(peak: str, kind: str) -> None:
    assert one(por_out(f"crowbar_peak: {peak} mA", STIFF), DROOP).kind == kind  # 50 mV through 200 ohm


def test_droop_that_trips_the_detector_again() -> None:
    said = one(por_out("crowbar_peak: 0.28 mA", STIFF), DROOP)
    assert said.kind is Kind.FAIL
    assert said.message == "its crowbar current moves avdd by 56 mV, at most 50 mV needed"
    assert said.why == "280 uA (peak as stated) through 200 ohm; least hysteresis of por"
    assert said.mend == "at most 250 uA of crowbar current; now 280 uA"
    assert path_text(said.path) == "por drives por_out"


def test_supply_without_impedance_is_not_moved() -> None:
    said = one(por_out("crowbar_peak: 1 A", "rails: {avdd: {source_impedance: 0 ohm}}"), DROOP)
    assert (said.kind, said.message) == (Kind.PASS, "its crowbar current moves avdd by 0 V, at most 50 mV needed")


def test_stiff_supply_that_a_large_current_moves_all_the_same() -> None:
    """0.2 A through 0.4 ohm are 80 mV; 50 mV are kept up to 125 mA."""
    said = one(por_out("crowbar_peak: 0.2 A"), DROOP)
    assert said.message == "its crowbar current moves avdd by 80 mV, at most 50 mV needed"
    assert said.mend == "at most 125 mA of crowbar current; now 200 mA"
    assert said.at == "output_stages.por_out.input_edge"


def test_detector_with_the_least_hysteresis_decides_through_all_stages() -> None:
    slow = "output_stages: {rst_out: {kind: schmitt, input_edge: 1 us, crowbar_peak: 10 uA}}"
    said = one(slow, DROOP, "rst_out")
    assert need(said) == 0.04
    assert path_text(said.path) == "ov drives ov_out drives ov_latch drives gather drives rst_out"
    assert said.why == "10 uA (peak as stated) through 400 mohm; least hysteresis of ov"
    less = "comparators: {uv: {hysteresis: {amount: {min: 39 mV, max: 54 mV}}}}"
    said = one(f"{slow}\n{less}", DROOP, "rst_out")
    assert need(said) == 0.039
    assert path_text(said.path) == "uv drives uv_out drives gather drives rst_out"


def test_detector_of_another_rail_is_not_moved() -> None:
    alone = "driven_by: [uv_core], kind: schmitt, input_edge: 1 us, crowbar_peak: 10 uA"
    said = one(f"output_stages: {{core_out: {{{alone}}}}}", DROOP, "core_out")
    assert (said.kind, said.message) == (Kind.NOT_APPLICABLE, "no detector that watches avdd drives it")


def test_detector_without_hysteresis_is_told_by_another_rule() -> None:
    said = judged("comparators: {por: {hysteresis: none}}", (*RULES, *hysteresis.RULES))[DROOP, "por_out"]
    assert (said.kind, said.under) == (Kind.NOT_APPLICABLE, "hysteresis/present")
    assert said.measure is not None
    assert (said.measure.need, said.measure.have) == (0.0, pytest.approx(SOUND_PEAK_A * 0.4, rel=1e-9))


def test_a_detector_without_hysteresis_does_not_hide_the_others() -> None:
    slow = "output_stages: {rst_out: {kind: schmitt, input_edge: 1 us, crowbar_peak: 10 uA}}"
    said = one(f"{slow}\ncomparators: {{por: {{hysteresis: none}}}}", DROOP, "rst_out")
    assert (said.kind, need(said)) == (Kind.PASS, 0.04)


def test_a_detector_that_may_drive_the_stage_may_have_any_hysteresis() -> None:
    gone = without("output_stages.por_out.driven_by")
    said = one(gone, DROOP)
    assert (said.kind, said.missing) == (Kind.OPEN, ("output_stages.por_out.driven_by",))


def test_stages_that_drive_each_other_do_not_hang() -> None:
    patch = "output_stages: {por_out: {driven_by: [por, gather]}}"
    assert one(patch, DROOP).kind is Kind.PASS
