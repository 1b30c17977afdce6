"""One fault, one finding: each example of a fault, laid over the sound one and judged by every rule there is.

A second finding is wanted only where it says what the first does not: a consequence in another family, with a number of
its own.  What is expected was read and argued once; a rule that says again what another has said shows here.
"""

from __future__ import annotations

from typing import Final

import pytest

from tests.rules.sound import judged
from tidegate.lint.judgement import Kind
from tidegate.lint.rule import Rule
from tidegate.rules.catalogue import FAMILIES

RULES: Final[tuple[Rule, ...]] = tuple(rule for family in FAMILIES for rule in family)
FINDINGS: Final = (Kind.FAIL, Kind.REVIEW)

ALONE: Final = {
    "hysteresis/present": "uv",
    "hysteresis/sense": "uv",
    "hysteresis/covers_disturbance": "uv",
    "hysteresis/false_trips": "uv",
    "hysteresis/fits_window": "uv",
    "hysteresis/switches_complementary": "uv",
    "hysteresis/feedback_in_time": "uv",
    "trip_window/guarantee": "uv",
    "trip_window/nuisance": "uv",
    "trip_window/release": "uv",
    "trip_window/placement_sense": "uv",
    "trip_window/codes": "uv",
    "trip_window/order": "avdd",
    "trip_window/crossover_level": "por",
    "trip_window/second_crossing": "por",
    "own_range/levels_inside": "ov",
    "own_range/survives": "ov",
    "passive_default/level": "rst_out",
    "passive_default/hold_strength": "rst_out",
    "passive_default/driver_wins": "rst_out",
    "passive_default/holds_within_budget": "aon",
    "passive_default/latch_state": "ov_latch",
    "self_bias/works_at_own_trip": "por",
    "self_bias/no_loop": "uv",
    "self_bias/leans_on_nobody": "por",
    "self_bias/reference_starts": "ref_fast",
    "self_bias/bias_starts": "bias_start",
    "self_bias/loop_starts": "core_regulator",
    "start_up/release_after_ready": "core_regulator",
    "start_up/asserts_in_time": "core_regulator",
    "start_up/rail_order": "vcore",
    "hand_over/armed_when_up": "uv_core",
    "rearming/residual": "por",
    "modes/live_detector": "core_regulator",
    "modes/over_voltage": "avdd",
    "modes/sampling": "uv",
    "reach/has_reset": "core_logic",
    "reach/edge": "por_n",
    "reach/synchronised": "core_logic",
    "coverage/over_voltage": "vcore",
    "coverage/guards_something": "spare_n",
    "coverage/used": "spare",
    "crossing/stage_shifted": "core_out",
    "crossing/reset_net_shifted": "core_rst_n",
    "coupling/supply_step": "uv",
    "bypass/present": "uv_core",
    "bypass/independent": "skip_core",
    "bypass/control_up": "skip_core",
    "bypass/default_inactive": "skip_core",
    "bypass/default_held": "skip_core",
    "bypass/locked": "skip_core",
    "bypass/readable": "skip_core",
    "bypass/over_voltage_caution": "skip_core",
    "electromigration/schmitt": "uv_out",
    "electromigration/crowbar_droop": "por_out",
    "electromigration/line": "por_out",
    "electromigration/vias": "por_out",
    "budget/within": "aon",
    "budget/bias_above_leakage": "bias_start",
    "budget/timing_above_leakage": "uv",
    "claims/hysteresis": "uv",
    "claims/divider_ratio": "uv",
    "claims/level_from_reference": "uv",
    "claims/filter": "uv",
    "claims/stage_delay": "core_out",
    "claims/reference_current": "ref_fast",
    "claims/bias_current": "bias_main",
    "claims/bias_consumption": "bias_start",
    "evidence/covers": "uv",
    "description/rails": "vcore",
    "description/loads": "core_logic",
    "description/references": "ref_fast",
    "description/comparators": "uv",
}
"""Faults that one rule finds, on one element."""

MORE: Final[dict[str, set[str]]] = {
    # The load is not protected where the levels are; that no other place would do is not seen from there.
    "trip_window/spread": {"trip_window/spread uv", "trip_window/guarantee uv"},
    # For how long, and what then runs unreset, only the course of a start-up tells.
    "trip_window/crossover_tracks": {
        "trip_window/crossover_tracks por",
        "start_up/no_unknown_interval por_n",
        "start_up/no_unknown_interval core_rst_n",
        "start_up/release_after_ready core_regulator",
        "start_up/release_after_ready adc",
    },
    # How long the net is at no level, and in which start-up.
    "passive_default/held": {"passive_default/held por_n", "start_up/no_unknown_interval por_n"},
    # How long the net is at no level, and in which start-up.
    "passive_default/chain_alive": {"passive_default/chain_alive gather", "start_up/no_unknown_interval core_rst_n"},
    # The same source feeds the detector that takes over, at a level of its own.
    "self_bias/up_in_time": {"self_bias/up_in_time por", "trip_window/crossover_tracks por"},
    # Both nets hang on the detector; and the load that is released first has a time of its own.
    "start_up/no_unknown_interval": {
        "start_up/no_unknown_interval por_n",
        "start_up/no_unknown_interval core_rst_n",
        "start_up/release_after_ready core_regulator",
    },
    # A pulse, whatever the dips are; a missed dip, under which the late way down is told; the margin of the other load
    # is that of its net; a start-up with a pulse in it.
    "start_up/dip_is_caught": {
        "start_up/dip_is_caught core_regulator",
        "rearming/level_held uv",
        "start_up/release_after_ready core_regulator",
        "start_up/asserts_in_time adc",
    },
    # What the hole does to each net and load, in time.
    "hand_over/no_hole": {
        "hand_over/no_hole avdd",
        "start_up/no_unknown_interval por_n",
        "start_up/no_unknown_interval core_rst_n",
        "start_up/release_after_ready core_regulator",
        "start_up/release_after_ready adc",
    },
    # What a dip without a second pulse does to each net and load, in time.
    "rearming/level_held": {
        "rearming/level_held por",
        "start_up/no_unknown_interval por_n",
        "start_up/no_unknown_interval core_rst_n",
        "start_up/release_after_ready core_regulator",
        "start_up/release_after_ready adc",
    },
    # What the release that is over at once does to the net and the load.
    "rearming/discharge": {
        "rearming/discharge rst_out",
        "start_up/no_unknown_interval por_n",
        "start_up/release_after_ready core_regulator",
    },
    # The load is released by a net that knows nothing of its rail: how much too soon.
    "reach/every_rail": {"reach/every_rail core_logic", "start_up/release_after_ready core_logic"},
    # What one driver that does not assert does to each net and load.
    "reach/stage_combined_safely": {
        "reach/stage_combined_safely gather",
        "start_up/no_unknown_interval core_rst_n",
        "start_up/release_after_ready core_regulator",
        "start_up/dip_is_caught core_regulator",
        "start_up/release_after_ready adc",
        "start_up/dip_is_caught adc",
    },
    # What one driver that does not assert does to the net and the load.
    "reach/reset_net_combined_safely": {
        "reach/reset_net_combined_safely por_n",
        "start_up/no_unknown_interval por_n",
        "start_up/release_after_ready core_regulator",
    },
    # The loads of the rail are released before it is up: how much too soon.
    "coverage/under_voltage": {
        "coverage/under_voltage vcore",
        "start_up/release_after_ready core_logic",
        "start_up/release_after_ready adc",
    },
    # The example needs an override on each detector, and one of them silences over-voltage.
    "coverage/single_point": {"coverage/single_point por_n", "bypass/over_voltage_caution skip_ov"},
    # How long the net is at no level.
    "crossing/input_held": {"crossing/input_held onward", "start_up/no_unknown_interval core_rst_n"},
    # How long the net is at no level.
    "crossing/stays_on": {"crossing/stays_on uv_core", "start_up/no_unknown_interval core_rst_n"},
    # Alone it is too much for one; with ripple, droop and noise it is too much for both.
    "coupling/bump": {
        "coupling/bump uv_beside_ov",
        "hysteresis/covers_disturbance uv",
        "hysteresis/covers_disturbance ov",
    },
    # Alone it is too much for one; with ripple, droop and noise for a second one too.
    "coupling/shared_reference": {
        "coupling/shared_reference ov",
        "hysteresis/covers_disturbance ov",
        "hysteresis/covers_disturbance uv_core",
    },
    # The same kick disturbs the others on the reference.
    "coupling/own_kick": {
        "coupling/own_kick ov",
        "hysteresis/covers_disturbance uv",
        "hysteresis/covers_disturbance uv_core",
    },
    # With ripple, droop and noise the same bumps are too much for a second one too.
    "coupling/together": {
        "coupling/together uv",
        "hysteresis/covers_disturbance uv",
        "hysteresis/covers_disturbance uv_core",
    },
    # Each link is a finding of its own, and each victim has a margin of its own.
    "coupling/chain": {
        "coupling/chain uv",
        "hysteresis/covers_disturbance ov",
        "coupling/shared_reference ov",
        "hysteresis/covers_disturbance uv_core",
        "coupling/bump ov_beside_core",
    },
    # Each link is a finding of its own, and each victim has a margin of its own.
    "coupling/ring": {
        "coupling/ring ov",
        "hysteresis/covers_disturbance uv",
        "hysteresis/covers_disturbance ov",
        "coupling/bump uv_beside_ov",
    },
}
"""Faults that show more than once: every finding, and what the others add to the first."""


def findings(patch: str) -> set[str]:
    """The findings that a patch adds to those of the sound example, as rule and subject."""
    found = {key for key, said in judged(patch, RULES).items() if said.kind in FINDINGS}
    return {" ".join(key) for key in found - {key for key, said in judged("", RULES).items() if said.kind in FINDINGS}}


@pytest.mark.parametrize("rule", RULES, ids=lambda rule: str(rule.id))
def test_a_fault_is_found_once(rule: Rule) -> None:
    expected = MORE.get(rule.id) or {f"{rule.id} {ALONE[rule.id]}"}
    assert findings(rule.example.fails) == expected


@pytest.mark.parametrize("rule", RULES, ids=lambda rule: str(rule.id))
def test_what_holds_keeps_every_rule(rule: Rule) -> None:
    before = judged("", RULES)
    for key, said in judged(rule.example.holds, RULES).items():
        if said.kind in (*FINDINGS, Kind.OPEN):
            assert key in before and before[key].kind is said.kind, f"{' '.join(key)}: {said.message}"


def test_every_rule_has_an_expectation() -> None:
    assert ALONE.keys() | MORE.keys() == {rule.id for rule in RULES}
    assert not ALONE.keys() & MORE.keys()
