"""What fuzzing has found, each as a small case of its own: the name says what went wrong."""

from __future__ import annotations

import json
import random
from collections import Counter
from pathlib import Path
from typing import Final

import pytest

from tests.commands.calling import tidegate
from tests.fuzz.cases import MAIN, Case
from tests.fuzz.run_case import run_case
from tests.rules.sound import TODAY
from tidegate.lint.description.load import load
from tidegate.lint.description.place import DescriptionError
from tidegate.lint.engine import Catalogue, review
from tidegate.lint.judgement import Judgement
from tidegate.lint.quantity import Dimension, show
from tidegate.lint.reports.placement_text import down_text, up_text
from tidegate.rules.catalogue import FAMILIES

WITHOUT_TROUBLE: Final = {
    # `ramp` drew a rail against its nominal level, which a described waveform does not need
    "rail_without_nominal_in_a_scenario": """
        rails: {avdd: {}}
        scenarios: {dip: {waveforms: [{rail: avdd, points: [{at: 0 s, level: 0 V}, {at: 1 ms, level: 1 V}]}]}}
    """,
    "made_rail_without_nominal": """
        rails: {avdd: {nominal: 1.8 V, rise: 1 ms}, vcore: {nominal: {min: 1.1 V}, made_by: reg}}
        loads: {reg: {needs: [{rail: avdd}], start: 1 us}}
    """,
    # the time axis of `ramp` had no width
    "late_and_short_waveform": """
        rails: {avdd: {nominal: 1.8 V, rise: 1 ms}}
        scenarios: {late: {waveforms: [{rail: avdd, points: [{at: 1e12 s, level: 0 V}, {at: 1e12 s, level: 1 V}]}]}}
    """,
    # start_up/asserts_in_time and start_up/dip_is_caught took the state of a given rail in a loop without rest for
    # that of a supply
    "given_rail_in_a_loop_that_never_rests": """
        rails:
          vcore: {nominal: {typ: 1917 mV}, rise: 13 ms, collapse: {max: 13.6 mV/us}}
          vio: {nominal: 1.58 V, rise: {min: 32 us, max: 48 us}, hold_up: {min: 29.6 uF}, made_by: ib}
          vbat:
            {nominal: 1760 mV, rise: {min: 47 ms, max: 70 ms}, collapse: 15.9 mV/us, after: vio, delay: {max: 11.5 ms}}
        domains:
          aon: {rail: vcore, kind: switched, switched_by: por_n}
          sw: {rail: vbat, kind: switched, switched_by: rst_b}
          core: {rail: vcore, kind: always_on}
        biases: {ib: {domain: sw, works_from: {max: 1.64 V}, settling: {max: 2.5 us}}}
        comparators:
          por:
            {role: over_voltage, watches: vcore, domain: aon, codes: {b: {rising: {min: 1010 mV, max: 1010 mV}}},
            works_from: 1.81 V, delay: {max: 3.2 us}, armed_by: rst_b, rearms_below: {max: 0.28 V}, output: pulse,
            pulse: {max: 47 us}, undecided: asserts, ships_with: b}
        output_stages:
          buf: {driven_by: [por], domain: aon, hold: {to: high}, works_from: 1.2 V, delay: {max: 3 ns}, gated_by: ib}
        resets:
          por_n: {driven_by: [buf], domain: core}
          rst_b: {driven_by: [por], guards: [core], domain: aon}
        loads: {cpu: {needs: [{rail: vio, works: {min: 1.27 V}}], domain: core, consumes: {max: 25 mA}}}
    """,
    # start_up/release_after_ready found no release at any combination of ends of what two times share
    "release_between_the_ends_alone": """
        conditions: {combine: worst_case, coverage: 2.954}
        rails: {avdd: {nominal: 1.98897312 V, rise: 23.936 ms, hold_up: 4910.5 nF}}
        domains: {aon: {rail: avdd, kind: always_on}}
        comparators:
          por:
            {role: over_voltage, watches: avdd, domain: aon, errors: {a: {share: {max: 4570 ppm}, is: sigma}},
            codes: {a: {rising: {min: 1.64 V, max: 1.81 V}, falling: 1.75489797 V}}, ships_with: a,
            works_from: {max: 1.22760424 V},
            delay: {max: 2.2273 us}, sampling: 1247.5 us, output: level, undecided: releases}
        output_stages:
          st:
            {driven_by: [st_b], domain: aon, kind: latch, hold: {to: low}, works_from: {max: 0.6696018 V},
            power_up: releases,
            delay: {max: 42.3 ns}, gated_by: por}
          st_b: {driven_by: [st], domain: aon, hold: {to: low}, works_from: {max: 0.875425494 V}, delay: 42164 ps}
        resets:
          por_n: {driven_by: [st], guards: [cpu], domain: aon}
          rst_b: {driven_by: [st_b], domain: aon}
        loads:
          cpu:
            {needs: [{rail: avdd, works: 1.4926 V}], ready: {max: 43.4 us},
            consumes: {max: 32167 uA}, gated_by: rst_b}
    """,
    # the wear is unlimited, which SARIF alone wrote as inf
    "vias_that_wear_out_at_once": """
        conditions: {junction_temperature: {max: -12 degC}, service_life: 17.906 yr, power_cycles: 0.08696}
        process:
          {activation_energy: 0.2 meV, current_exponent: 4034, plain_edge: 0.13534 us,
          vias: {m1: {limits: [{temperature: 55.763 degC, life: 3.6e+38 s, dc: 7.0348 uA}]}}}
        output_stages:
          st:
            {input_edge: 3.6944 min, crowbar_peak: 0.21188571 A, output: {via: m1, vias: 1}, dwell: 56.5 h,
            edges_per_cycle: 4.87e-06}
    """,
    # electromigration/line advised a line that is inf um wide
    "line_that_carries_nothing": """
        conditions: {junction_temperature: {max: 182 degC}, service_life: 22 yr, power_cycles: 40820}
        process:
          {activation_energy: 648.77 meV, current_exponent: 0.001, plain_edge: 183 ns,
          layers: {m1: {limits: [{temperature: 447.35 K, life: 14.377 yr, dc: 0.845 mA/um}]}}}
        output_stages:
          st:
            {input_edge: 16.78 ms, crowbar_peak: 17 uA, output: {layer: m1, width: 0.321 um}, dwell: 0.06 ps,
            edges_per_cycle: 1.065}
    """,
    # `place` stepped without end, and showed an error of inf mV, where errors grow faster than the level
    "errors_larger_than_the_level": """
        conditions: {combine: worst_case}
        rails: {avdd: {nominal: 1.8 V, delivered: {min: 1.71 V, max: 1.89 V}, ripple: {peak_to_peak: 10 mV}}}
        domains: {aon: {rail: avdd, kind: always_on}}
        comparators:
          uv:
            {role: under_voltage, watches: avdd, domain: aon, trip: {rising: 1.65 V, falling: 1.6 V}, delay: 1 us,
            hysteresis: {amount: 50 mV}, errors: {a: {share: 240 %, is: bound, at: rail, tracks: true}}}
        resets: {rst_n: {driven_by: [uv], guards: [cpu], domain: aon}}
        loads: {cpu: {needs: [{rail: avdd, works: {min: 1.5 V}}], domain: aon}}
    """,
    # coupling/ring divided by a product that is less than a float holds
    "ring_of_hardly_any_bump": """
        rails: {avdd: {nominal: 1.8 V}}
        domains: {aon: {rail: avdd, kind: always_on}}
        references: {ref: {domain: aon, decoupling: 10 pF, source_resistance: 200 kohm}}
        comparators:
          uv:
            {role: under_voltage, watches: avdd, domain: aon, reference: ref, divider: {ratio: 0.4}, kick: 1e-200 fC,
            hysteresis: {amount: 50 mV}}
          ov:
            {role: over_voltage, watches: avdd, domain: aon, reference: ref, divider: {ratio: 0.3}, kick: 1e-200 fC,
            hysteresis: {amount: 50 mV}}
    """,
    # trip_window/crossover_level and `place` came to numbers that no float holds
    "junction_beyond_the_range_of_a_number": """
        conditions: {combine: worst_case, junction_temperature: {min: 300 K, max: 420 K}}
        process:
          diodes:
            d: {saturation: 1 fA, emission: 1e-3, band_gap: 345 eV, temperature_exponent: 3,
               reference_temperature: 264 K}
        rails: {avdd: {nominal: 1.8 V, rise: 1 ms}}
        domains: {aon: {rail: avdd, kind: always_on}}
        comparators:
          por:
            {role: power_on, watches: avdd, domain: aon, tracked: true, trip: {rising: {min: 1.1 V, max: 1.4 V}},
            crossover: {kind: divider_diode, ratio: 0.5, resistance: 600 kohm, diode: d, offset: 3 mV}}
    """,
    "device_without_a_current_in_the_range_of_a_number": """
        conditions: {combine: worst_case, junction_temperature: {min: 450 K, max: 498 K}}
        process:
          devices: {m: {threshold: 194 V, threshold_slope: 0.06 mV/K, reference_temperature: 239 K, swing: 80 mV}}
        rails: {avdd: {nominal: 1.8 V, rise: 1 ms}}
        domains: {aon: {rail: avdd, kind: always_on}}
        comparators:
          por:
            {role: power_on, watches: avdd, domain: aon, tracked: true, trip: {rising: {min: 1.1 V, max: 1.4 V}},
            crossover: {kind: crude_current, resistance: 16 kohm, device: m, gain: 1.5 A/V^2, mirror: 0.001,
            reference_current: 31 nA, reference_start: 71 V, reference_rise: 12 mV}}
    """,
    # claims/reference_current divided by a resistance of nothing
    "reference_over_no_resistance": """
        rails: {avdd: {nominal: 1.8 V}}
        references: {ref: {voltage: 1.2 V, current: 100 nA, resistance: 0 ohm}}
    """,
}  # fmt: skip


@pytest.mark.parametrize("name", WITHOUT_TROUBLE)
def test_nothing_goes_wrong(name: str) -> None:
    case = Case({MAIN: WITHOUT_TROUBLE[name].encode()})
    tally: Counter[str] = Counter()
    found = run_case(case, random.Random(1), tally, commands=99)
    assert [trouble.story for trouble in found] == []
    assert tally["loaded"] == 1


def test_a_rail_that_cannot_be_drawn_is_named(tmp_path: Path) -> None:
    (tmp_path / "chip.yaml").write_text(WITHOUT_TROUBLE["rail_without_nominal_in_a_scenario"], "utf-8")
    done = tidegate("ramp", "chip.yaml", cwd=tmp_path)
    assert done.returncode == 0
    assert "not drawn without its nominal level" in done.stdout


def test_a_number_without_end_is_told_in_words(tmp_path: Path) -> None:
    (tmp_path / "chip.yaml").write_text(WITHOUT_TROUBLE["vias_that_wear_out_at_once"], "utf-8")
    results = json.loads(tidegate("review", "--as", "sarif", "chip.yaml", cwd=tmp_path).stdout)["runs"][0]["results"]
    (wear,) = [each for each in results if each["ruleId"] == "electromigration/vias"]
    assert wear["kind"] == "fail"
    assert "use up without end of its life" in wear["message"]["text"] + json.dumps(wear["properties"])


def faults_of(folder: Path, text: str) -> list[str]:
    (folder / "chip.yaml").write_text(text, "utf-8")
    with pytest.raises(DescriptionError) as refused:
        load(folder / "chip.yaml", shown="chip.yaml")
    return [str(fault) for fault in refused.value.faults]


def test_points_that_go_back_in_time_are_refused_where_they_stand(tmp_path: Path) -> None:
    """`trace`, `draw` and the page failed on them, and the rules said not which scenario it was."""
    points = "[{at: 1 ms, level: 0 V},\n {at: 900 us, level: 1 V}]"
    text = f"rails: {{avdd: {{}}}}\nscenarios: {{dip: {{waveforms: [{{rail: avdd, points: {points}}}]}}}}\n"
    assert faults_of(tmp_path, text) == [
        "chip.yaml:3:7: scenarios.dip.waveforms[0].points[1].at: goes back in time (900 us after 1 ms); "
        "write the points in the order of their times"
    ]


def test_points_without_one_time_are_refused(tmp_path: Path) -> None:
    """They were left out of the waveform without a word."""
    points = "[{at: {min: 1 ms}, level: 0 V}, {at: 2 ms, level: {max: 1 V}}]"
    text = f"rails: {{avdd: {{}}}}\nscenarios: {{dip: {{waveforms: [{{rail: avdd, points: {points}}}]}}}}\n"
    assert faults_of(tmp_path, text) == [
        "chip.yaml:2:58: scenarios.dip.waveforms[0].points[0].at: one end of a range; "
        "a point has one time: write it without min and max",
        "chip.yaml:2:102: scenarios.dip.waveforms[0].points[1].level: one end of a range; "
        "a point has one level: write it without min and max",
    ]


def test_a_number_of_more_units_than_a_float_can_count_is_shown() -> None:
    """It was shown as ``inf %``."""
    assert show(2e306, Dimension.RATIO) == "2.000e+308 %"
    assert show(-1e305, Dimension.MISMATCH) == "-1.000e+314 mV*um"


def test_a_level_beyond_any_voltage_is_shown() -> None:
    """``place`` failed to round it to tenths of a millivolt."""
    assert [up_text(float("inf")), down_text(-1e305), up_text(1.23451)] == ["without end", "-1e+302 kV", "1.2346 V"]


def said(folder: Path, text: str) -> dict[tuple[str, str], Judgement]:
    (folder / "chip.yaml").write_text(text, "utf-8")
    result = review(load(folder / "chip.yaml"), Catalogue(FAMILIES), today=TODAY)
    return {(judgement.rule, judgement.subject): judgement for judgement in result.judgements}


DETECTOR: Final = """
rails: {{avdd: {rail}}}
domains: {{aon: {{rail: avdd, kind: always_on}}}}
comparators: {{uv: {{role: under_voltage, watches: avdd, domain: aon, works_from: 1 V, {levels}}}}}
resets: {{rst_n: {{driven_by: [uv], guards: [cpu], domain: aon}}}}
loads: {{cpu: {{needs: [{{rail: avdd, works: 1.5 V}}], domain: aon, ready: 1 us}}}}
"""


def test_a_missing_level_is_named_where_it_belongs(tmp_path: Path) -> None:
    """It was called ``trip.falling``, which is not where the levels of a detector with codes stand."""
    levels = "codes: {a: {rising: {min: 1.7 V, max: 1.75 V}, falling: {min: 1.6 V}}}, ships_with: a"
    judgement = said(tmp_path, DETECTOR.format(rail="{nominal: 1.8 V}", levels=levels))["own_range/levels_inside", "uv"]
    assert "comparators.uv.codes.a.falling.max" in judgement.missing
    assert not any(".trip." in path for path in judgement.missing)


@pytest.mark.parametrize(
    ("rail", "missing", "message"),
    [
        ("{nominal: {min: 1.7 V}}", "rails.avdd.nominal.typ", ""),
        ("{nominal: 0 V, rise: 1 ms}", "", "nominal_v must be greater than 0"),
        ("{nominal: 1.8 V, rise: {min: 0 s, max: 1 ms}}", "", "rise_s must be greater than 0"),
    ],
    ids=["nominal_without_a_middle", "nominal_of_nothing", "rise_in_no_time"],
)
def test_what_is_given_is_not_called_missing(rail: str, missing: str, message: str, tmp_path: Path) -> None:
    levels = (
        "trip: {rising: {min: 1.7 V, max: 1.71 V}, falling: {min: 1.6 V, max: 1.65 V}}, delay: 1 us, output: level, "
        "undecided: asserts"
    )
    judgement = said(tmp_path, DETECTOR.format(rail=rail, levels=levels))["start_up/no_unknown_interval", "rst_n"]
    assert judgement.kind.value == "open"
    assert missing in judgement.missing or not missing
    assert "rails.avdd.nominal" not in judgement.missing
    assert "rails.avdd.rise.min" not in judgement.missing
    assert message in judgement.message
