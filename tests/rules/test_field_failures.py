"""Failures as they are met in the field, each as a small invented description: found with its number, or left alone.

The kinds of failure are those that errata and post-mortems of real parts tell of again and again (common practice, no
source); every number here is invented, and what is expected of it is worked out beside the check.
"""

from __future__ import annotations

import datetime
import json
from functools import cache
from pathlib import Path
from tempfile import TemporaryDirectory
from typing import Any, Final

import pytest
import yaml

from tidegate.lint.description.load import load
from tidegate.lint.engine import Catalogue, review
from tidegate.lint.judgement import Judgement, Kind
from tidegate.rules.catalogue import FAMILIES

TODAY: Final = datetime.date(2026, 1, 1)

BOARD: Final = """
subsystem: small board
invented: true
conditions: {junction_temperature: {min: -40 degC, max: 85 degC}, combine: worst_case, coverage: 3}
rails:
  vdd:
    nominal: 3.3 V
    delivered: {min: 3.1 V, max: 3.5 V}
    guaranteed: {min: 2.7 V, max: 3.6 V}
    rise: {min: 100 us, max: 50 ms}
    fall: {min: 5 ms, max: 1 s}
    collapse: 1 V/ms
    dip: {depth: 0 V}
    residual: 0.3 V
    off_time: 100 ms
domains:
  main: {rail: vdd, kind: always_on, budget: 50 uA}
references:
  gap: {kind: band_gap, voltage: 1.2 V, works_from: {min: 1.2 V, max: 1.6 V}, settling: {min: 5 us, max: 50 us},
        domain: main, self_biased: true, start_up: {by: a leak, least_slope: 0 V/s}, consumes: {max: 2 uA}}
biases:
  leak: {kind: resistor, domain: main, current: {min: 50 nA, max: 90 nA}, leakage: {max: 2 nA},
         works_from: {min: 0.6 V, max: 1 V}, settling: {min: 0 s, max: 5 us}, consumes: {max: 0.2 uA}}
comparators:
  por: {role: power_on, watches: vdd, domain: main, bias: leak, reference: gap, tracked: true,
        works_from: {min: 0.8 V, max: 1.1 V}, delay: {min: 1 us, max: 10 us},
        trip: {rising: {min: 1.9 V, max: 2.2 V}, falling: {min: 1.8 V, max: 2.1 V}},
        filter: none, sampling: none, rearms_below: 0.6 V, output: level, undecided: asserts, consumes: {max: 1 uA}}
  bor: {role: under_voltage, watches: vdd, domain: main, bias: leak, reference: gap, tracked: true,
        works_from: {min: 1.1 V, max: 1.5 V},
        trip: {rising: {min: 2.85 V, max: 3 V}, falling: {min: 2.8 V, max: 2.95 V}},
        delay: {min: 1 us, max: 10 us}, filter: none, sampling: none, rearms_below: 0.6 V, output: level,
        consumes: {max: 1 uA}}
output_stages:
  join: {driven_by: [por, bor], combine: any_asserts, domain: main, kind: buffer, inverting: false,
         hold: {to: low, through: resistor, resistance: {min: 1 Mohm, max: 2 Mohm}, coupling: 0 fF},
         works_from: {min: 0.5 V, max: 0.8 V}, threshold: {min: 0.7 V, max: 2 V}, drive: {max: 5 kohm}, load: 0.5 pF,
         leakage: {max: 10 nA}, delay: {min: 5 ns, max: 50 ns}, release_delay: {min: 1 ms, max: 3 ms},
         discharge: {within: 5 us}}
resets:
  rst_n: {driven_by: [join], active: low, guards: [cpu], domain: main,
          receivers: {threshold: {min: 0.8 V, max: 2 V}, leakage: {max: 5 nA}, count: 50}}
loads:
  cpu: {needs: [{rail: vdd, works: {min: 2.7 V, max: 3.6 V}}], domain: main, ready: {min: 0 s, max: 500 us},
        start: {min: 0 s, max: 10 us}, consumes: {max: 20 mA}, clocked: true, synchronised: true}
modes: none
neighbours: none
complete: [rails, domains, references, biases, comparators, output_stages, resets, loads]
"""

TIMING: Final = frozenset({"start_up", "hand_over", "rearming", "reach", "crossing", "modes", "self_bias"})
"""The families that failures in the field belong to; what the small board does not say otherwise is left open."""


def _laid_over(data: Any, patch: Any, *, removes: bool = True) -> Any:
    """Data with a patch laid over them; ``null`` removes a key, or is kept for a later patch to remove it."""
    if not isinstance(patch, dict) or not isinstance(data, dict) or {"min", "typ", "max"} & patch.keys():
        return patch
    joined = dict(data)
    for key, value in patch.items():
        joined[key] = _laid_over(joined.get(key), value, removes=removes)
    return {key: value for key, value in joined.items() if value is not None or not removes}


@cache
def said(patch: str = "") -> dict[tuple[str, str], Judgement]:
    """What every family says about the board with a patch laid over it."""
    data = _laid_over(yaml.safe_load(BOARD), yaml.safe_load(patch) or {})
    with TemporaryDirectory() as folder:
        file = Path(folder) / "board.json"
        file.write_text(json.dumps(data), "utf-8")
        result = review(load(file, shown="board.json"), Catalogue(FAMILIES), today=TODAY)
    assert result.faults == ()
    return {(answer.rule, answer.subject): answer for answer in result.judgements}


def failed(patch: str = "") -> set[tuple[str, str]]:
    """What fails of the families that failures in the field belong to."""
    return {
        key
        for key, answer in said(patch).items()
        if answer.kind is Kind.FAIL and key[0].partition("/")[0] in TIMING
    }  # fmt: skip


def number(answer: Judgement) -> tuple[float, float]:
    """The number found and the one needed."""
    assert answer.measure is not None
    return answer.measure.have, answer.measure.need


def test_the_board_itself_is_sound() -> None:
    assert failed() == set()


# A late rail

LATE: Final = """
rails:
  vio: {nominal: 1.8 V, delivered: {min: 1.7 V, max: 1.9 V}, rise: {min: 100 us, max: 50 ms},
        fall: {min: 5 ms, max: 1 s}, collapse: 1 V/ms, guaranteed: {min: 1.6 V, max: 2 V},
        residual: 0 V, off_time: 100 ms, dip: none}
loads:
  cpu: {needs: [{rail: vdd, works: {min: 2.7 V, max: 3.6 V}}, {rail: vio, works: {min: 1.6 V, max: 2 V}}]}
"""
IO_WATCHED: Final = """
comparators:
  io_ok: {role: under_voltage, watches: vio, domain: main, bias: leak, reference: gap, tracked: true,
          works_from: {min: 1.1 V, max: 1.5 V},
          trip: {rising: {min: 1.65 V, max: 1.68 V}, falling: {min: 1.62 V, max: 1.65 V}},
          delay: {min: 1 us, max: 10 us}, filter: none, sampling: none, rearms_below: 0.4 V, output: level,
          undecided: asserts, consumes: {max: 1 uA}}
output_stages: {join: {driven_by: [por, bor, io_ok]}}
"""


def laid(*patches: str) -> str:
    data: Any = {}
    for patch in patches:
        data = _laid_over(data, yaml.safe_load(patch), removes=False)
    return json.dumps(data)


def test_late_rail_that_nobody_watches() -> None:
    """Released 1 ms after bor at the earliest; vio may still rise: it is late by all that the order leaves open."""
    found = failed(LATE)
    assert found == {("start_up/release_after_ready", "cpu")}
    assert said(LATE)["coverage/under_voltage", "vio"].kind is Kind.FAIL


def test_late_rail_whose_detector_resets_the_load_is_left_alone() -> None:
    assert failed(laid(LATE, IO_WATCHED)) == set()


def test_late_rail_whose_detector_does_not_reach_the_load() -> None:
    patch = laid(LATE, IO_WATCHED, "output_stages: {join: {driven_by: [por, bor]}}")
    assert failed(patch) == {
        ("reach/every_rail", "cpu"), ("start_up/release_after_ready", "cpu"),
    }  # fmt: skip
    answer = said(patch)["reach/every_rail", "cpu"]
    assert answer.message == "it needs vio, and no detector of vio resets it"
    assert answer.why == "io_ok watches vio, and does not reach rst_n"


# A hole between two detectors


def test_hole_between_two_detectors() -> None:
    """gap is moved to work from 1.95 V; por lets go from 1.8 V down: 150 mV, at 3.3 V in 1 s."""
    patch = "references: {gap: {works_from: {min: 1.2 V, max: 1.95 V}}}"
    answer = said(patch)["hand_over/no_hole", "vdd"]
    assert failed(patch) == {
        ("hand_over/no_hole", "vdd"), ("self_bias/up_in_time", "por"), ("start_up/no_unknown_interval", "rst_n"),
        ("start_up/release_after_ready", "cpu"),  # out of a dip into the hole
    }  # fmt: skip
    assert answer.kind is Kind.FAIL
    assert number(answer) == (pytest.approx(1.8), pytest.approx(1.95))
    assert answer.why.endswith(
        "between 1.8 V and 1.95 V no detector holds reset, and vdd may take 45.45 ms to pass"
    )  # fmt: skip
    assert said()["hand_over/no_hole", "vdd"].kind is Kind.PASS


# No discharge path


def test_capacitor_without_a_discharge_path() -> None:
    assert failed("output_stages: {join: {discharge: none}}") >= {
        ("rearming/discharge", "join"), ("start_up/release_after_ready", "cpu"),
    }  # fmt: skip
    answer = said("output_stages: {join: {discharge: none}}")["rearming/discharge", "join"]
    assert answer.message == "nothing sets its release delay of up to 3 ms back: the next one may be over at once"


def test_capacitor_that_discharges_too_slowly() -> None:
    """Down from 2.8 V to 2.7 V at 1 V/ms, and up from 2.7 V to 2.85 V at 3.3 V in 100 us: 100 us and 4.55 us."""
    assert failed("output_stages: {join: {discharge: {within: 2 ms}}}") == {("rearming/discharge", "join")}
    answer = said("output_stages: {join: {discharge: {within: 2 ms}}}")["rearming/discharge", "join"]
    assert number(answer) == (pytest.approx(2e-3), pytest.approx(0.1 / 1e3 + 0.15 / (3.3 / 100e-6), rel=1e-9))
    fast_enough = said("output_stages: {join: {discharge: {within: 104 us}}}")["rearming/discharge", "join"]
    assert fast_enough.kind is Kind.PASS


# A pulse instead of a level

PULSE: Final = "comparators: {por: {output: pulse, pulse: {min: 5 ms, max: 20 ms}}}"


def test_pulse_instead_of_a_level() -> None:
    """bor keeps the load safe in a dip, and the power-on detector re-arms below 0.6 V only."""
    answer = said(PULSE)["rearming/level_held", "por"]
    assert answer.kind is Kind.FAIL
    assert number(answer) == (pytest.approx(0.6), pytest.approx(2.7))


def test_pulse_alone_misses_dips() -> None:
    alone = laid(PULSE, "{comparators: {bor: null}, output_stages: {join: {driven_by: [por]}}}")
    assert failed(alone) >= {("rearming/level_held", "por"), ("start_up/dip_is_caught", "cpu")}
    assert said(alone)["start_up/asserts_in_time", "cpu"].under == "start_up/dip_is_caught"
    missed = said(alone)["start_up/dip_is_caught", "cpu"]
    assert number(missed) == (pytest.approx(1.6), pytest.approx(2.7))  # where gap may still work


# An enable that is driven from the domain being reset


def test_enable_from_the_domain_being_reset() -> None:
    """bor is enabled by the load that its own reset holds: it never starts."""
    patch = "comparators: {bor: {gated_by: cpu}}"
    assert failed(patch) == {("self_bias/no_loop", "bor")}
    assert said("comparators: {bor: {gated_by: por}}")["self_bias/no_loop", "bor"].kind is Kind.PASS


# Residual voltage


@pytest.mark.parametrize(("left", "fails"), [("0.3 V", False), ("0.6 V", False), ("0.61 V", True)])
def test_residual_voltage(left: str, fails: bool) -> None:
    found = failed(f"rails: {{vdd: {{residual: {left}}}}}")
    assert (("rearming/residual", "por") in found) is fails
    if fails:
        assert number(said(f"rails: {{vdd: {{residual: {left}}}}}")["rearming/residual", "por"]) == (0.61, 0.6)
    else:
        assert found == set()


# A ramp that is too slow


@pytest.mark.parametrize(("slope", "fails"), [("66 V/s", False), ("66.1 V/s", True)])
def test_ramp_that_is_too_slow_for_the_start_up_circuit(slope: str, fails: bool) -> None:
    """3.3 V in 50 ms are 66 V/s."""
    patch = f"references: {{gap: {{start_up: {{by: a capacitor, least_slope: {slope}}}}}}}"
    found = failed(patch)
    assert (("self_bias/reference_starts", "gap") in found) is fails
    assert len(found) == int(fails)


# Asleep while the load runs


def test_detector_that_sleeps_while_its_load_runs() -> None:
    answer = said('modes: {sleep: {"off": [gap]}}')["modes/live_detector", "cpu"]
    assert answer.message == (
        "in sleep it is not off, and no detector of vdd watches over it: bor leans on gap, which is off"
    )
    assert failed('modes: {sleep: {"off": [gap, cpu]}}') == set()
