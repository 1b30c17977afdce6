"""The laws of what may be said with less known, on descriptions that the examples do not have.

Taking a fact away never raises the sure end of a margin, nor lowers its best end; what passes or fails stays so or
becomes a question (inclusion: IEEE 1788-2015; Kleene's three values for what has no number).
"""

from __future__ import annotations

from collections.abc import Mapping
from types import ModuleType
from typing import Any, Final

import pytest
import yaml

from tests.laws.knowledge import broken, is_excused, ways, without
from tests.rules.sound import SOUND, TODAY, _laid_over, _Loader, _sound
from tidegate.lint.description.load import Loaded, description_of, load
from tidegate.lint.engine import Catalogue, review
from tidegate.lint.judgement import Judgement
from tidegate.rules import bypass, coverage, crossing, passive_default, reach

LINKS: Final = frozenset({"made_by", "after", "gated_by", "armed_by", "leans_on"})
"""What is left out where there is none: it is not asked for; taken from a section that is whole, it says so."""

_STAGE: Final = "domain: aon, kind: buffer, inverting: false, hold: none, threshold: {min: 0.4 V, max: 1.25 V}"
_LATE: Final = _STAGE.replace("aon", "core").replace("buffer, inverting: false", "gain, inverting: true")
_HIGH: Final = """
output_stages:
  gather: {hold: {to: high}}
  rst_out: {hold: {to: high}}
  core_out: {driven_by: [uv_core]}
resets: {por_n: {active: high, receivers: RECEIVERS}}
"""
CASES: Final[Mapping[str, tuple[ModuleType, str, tuple[str, ...]]]] = {
    "held high": (
        passive_default,
        _HIGH.replace("RECEIVERS", "{threshold: {min: 0.45 V, max: 1.2 V}}"),
        ("rst_out", "por_n", "avdd"),
    ),
    "held high, too weak": (
        passive_default,
        _HIGH.replace("RECEIVERS", "{leakage: {max: 480 nA}}") + "rails: {avdd: {rise: {min: 1 us, max: 20 ms}}}",
        ("rst_out", "por_n", "avdd", "aon"),
    ),
    "at a pin": (
        passive_default,
        "resets: {por_n: {receivers: {threshold: null, levels: JESD8-7A}}}",
        ("rst_out", "por_n", "avdd"),
    ),
    "at a pin of another rail": (
        passive_default,
        "resets: {por_n: {domain: core, receivers: {threshold: null, levels: JESD8-12A.01}}}",
        ("rst_out", "por_n", "avdd", "vcore", "core"),
    ),
    "a driver that loses at a pin": (
        passive_default,
        "{resets: {por_n: {receivers: {threshold: null, levels: JESD8-7A}}}, "
        "output_stages: {rst_out: {drive: {min: 300 kohm, max: 600 kohm}}}}",
        ("rst_out", "por_n", "avdd"),
    ),
    "a step through the coupling": (
        passive_default,
        "{output_stages: {rst_out: {load: {min: 4 pF, max: 9 pF}, hold: {coupling: {min: 0 fF, max: 0.8 pF}}}}, "
        "rails: {avdd: {rise: {min: 1 us, max: 20 ms}}}}",
        ("rst_out", "avdd"),
    ),
    "detectors straight onto their net": (
        passive_default,
        "{resets: {core_rst_n: {driven_by: [uv_core, ov], combine: any_asserts}}, "
        "comparators: {uv_core: {undecided: asserts}, ov: {undecided: releases}}}",
        ("core_rst_n", "uv_core", "ov"),
    ),
    "dead after a hold": (
        passive_default,
        f"output_stages: {{a: {{driven_by: [gather], {_STAGE.replace('aon', 'analog')}}}, "
        "rst_out: {driven_by: [a]}}",
        ("a", "gather", "rst_out", "analog", "aon"),
    ),
    "on a later rail, inverted": (
        passive_default,
        f"output_stages: {{a: {{driven_by: [gather], {_LATE}}}, rst_out: {{driven_by: [a]}}}}",
        ("a", "gather", "rst_out", "core", "vcore", "por_n"),
    ),
    "like detectors that must agree": (
        reach,
        "{comparators: {uv_twin: {role: under_voltage, watches: avdd, domain: aon}}, output_stages: {twins: "
        f"{{driven_by: [uv, uv_twin], combine: all_agree, combined_against: false_reset, {_STAGE}}}}}}}",
        ("twins", "uv_twin"),
    ),
    "one of two ways past a single point": (
        coverage,
        f"output_stages: {{fork: {{driven_by: [por], {_STAGE}}}, left: {{driven_by: [fork], {_STAGE}}}, right: "
        f"{{driven_by: [fork], {_STAGE}}}, join: {{driven_by: [left, right], combine: all_agree, {_STAGE}}}}}\n"
        "resets: {forked: {driven_by: [join], active: low, guards: [adc], domain: aon}}\n"
        "bypasses: {skip_left: {overrides: left, forces: released}, skip_resets: {forces: asserted}}",
        ("fork", "left", "right", "join", "forked", "skip_left", "skip_resets"),
    ),
    "overrides none": (
        bypass,
        "{bypasses: none, waivers: null}",
        ("por_n", "core_rst_n", "gather", "core_out", "uv_core"),
    ),
    "an active register cleared by what it overrides": (
        bypass,
        "bypasses: {skip_core: {controlled_by: register, reset_by: core_rst_n, default: active, hold: none}}",
        ("skip_core", "core_rst_n", "core_out"),
    ),
    "a register in a guarded domain": (
        bypass,
        "{domains: {control: {rail: avdd, kind: always_on}}, resets: {core_rst_n: {guards: [control]}}, "
        "bypasses: {skip_core: {controlled_by: register, domain: control, reset_by: por_n}}}",
        ("skip_core", "control", "core_rst_n", "core_logic"),
    ),
    "a control on a later rail": (bypass, "bypasses: {skip_resets: {domain: core}}", ("skip_resets", "core", "vcore")),
    "nobody watches from above": (
        coverage,
        "{comparators: {ov: {role: under_voltage}}, rails: {vcore: {damage: {min: 1.7 V, max: 1.9 V}}}}",
        ("avdd", "vcore", "core_regulator", "core"),
    ),
    "a maker that steps up": (
        coverage,
        "rails: {vcore: {nominal: 3.3 V, damage: 4 V}}",
        ("avdd", "vcore", "core_regulator"),
    ),
    "nobody watches what loads need": (
        coverage,
        "{rails: {vin: {nominal: 3.3 V}}, loads: {core_regulator: {needs: [{rail: vin}]}, "
        "adc: {needs: [{rail: vin}]}}}",
        ("vin", "core_regulator", "adc", "vcore"),
    ),
    "guards an empty domain": (
        coverage,
        "{resets: {spare_n: {driven_by: [rst_out], active: low, guards: [spare], domain: aon}}, "
        "domains: {spare: {rail: avdd, kind: always_on}}}",
        ("spare_n", "spare", "core_logic", "skip_core"),
    ),
    "bare between two supplies": (
        crossing,
        "output_stages: {core_out: {kind: buffer}}",
        ("core_out", "core_rst_n", "core", "aon", "avdd", "vcore"),
    ),
    "a switched enable": (
        crossing,
        f"output_stages: {{gate: {{driven_by: [ov], {_STAGE.replace('aon', 'analog')}}}, "
        "core_out: {gated_by: gate}}",
        ("gate", "core_out", "analog", "aon"),
    ),
    "a switched reference": (
        crossing,
        "comparators: {uv_core: {reference: ref_main, undecided: asserts}}",
        ("uv_core", "ref_main", "analog"),
    ),
    "a driver that sleeps": (
        crossing,
        "{output_stages: {uv_out: {domain: analog}}, comparators: {uv_core: {domain: core, undecided: undefined}}}",
        ("uv_out", "uv_core", "gather", "core_out", "analog", "core"),
    ),
}
"""The family asked, a patch of the sound example, and the elements of which each fact is taken away."""


@pytest.mark.parametrize("whole", [True, False], ids=["whole", "in part"])
@pytest.mark.parametrize("name", CASES)
def test_taking_a_fact_away_settles_nothing(name: str, whole: bool) -> None:
    family, patch, elements = CASES[name]
    catalogue = Catalogue([family.RULES])
    data = _laid_over(_sound(), yaml.load(patch, _Loader))
    for key in ("waivers",) if whole else ("waivers", "complete"):
        data.pop(key, None)
    base, faults, tried = _judged(data, catalogue), [], 0
    assert base is not None
    for way in ways(data):
        if way[1] not in elements:
            continue
        less = _judged(_lessened(data, way), catalogue)
        if less is None:
            continue  # what is left is no description
        tried += 1
        for key, more in base.items():
            law = broken(more, less.get(key), excused=is_excused(way))
            if law and not (way[-1] in LINKS and law.startswith("pass becomes")):
                faults.append(f"{'.'.join(map(str, way))}: {key[0]} on {key[1]}: {law}")
    assert tried >= len(elements)
    assert faults == []


def _lessened(data: Mapping[str, Any], way: tuple[Any, ...]) -> dict[str, Any]:
    """The data without a key; a section from which a link is taken is not whole any more."""
    left: dict[str, Any] = without(data, way)
    if way[-1] in LINKS and "complete" in left:
        left["complete"] = [section for section in left["complete"] if section != way[0]]
    return left


def _judged(data: Mapping[str, Any], catalogue: Catalogue) -> dict[tuple[str, str], Judgement] | None:
    """What a family says; None where the data are no description."""
    description = description_of(data)
    if description is None:
        return None
    result = review(Loaded(description, _SOURCES), catalogue, today=TODAY)
    assert result.faults == ()
    return {(one.rule, one.subject): one for one in result.judgements}


_SOURCES: Final = load(SOUND).sources
