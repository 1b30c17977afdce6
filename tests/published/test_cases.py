"""Published parts, boards and descriptions of invented ones: what a reviewer finds in each, with the numbers.

Each description (``cases/``) holds what was published and nothing else, with its source.  A row says what is right:
what fails and by how much, what is open with which margin so far, what must not fail.  Nothing but what a row says may
fail.  Rows that the language cannot say yet are expected to fail, each with the reason.

Numbers are worked out by hand beside the rows, from the published ones, to 1 mV or 1 %.  A margin below 0 of a failure
that waits for facts is the best there can be: "at least so much short".
"""

from __future__ import annotations

import importlib
import math
from collections.abc import Collection, Iterable, Iterator, Mapping
from functools import cache
from pathlib import Path
from typing import Any, Final, NamedTuple

import pytest

from tests.published.reading import TODAY, laid_over
from tidegate.lint.break_even import break_evens
from tidegate.lint.description.load import Loaded, description_of, load
from tidegate.lint.engine import Catalogue, Review, review
from tidegate.lint.judgement import Judgement, Kind
from tidegate.lint.quantity import NO_END, Dimension
from tidegate.rules.catalogue import FAMILIES

HERE: Final = Path(__file__).parent / "cases"
FIRST_LOOK: Final = 5
"""Most open judgements with a number that may be told before the first answer."""
LEAST_TOLERANCE_V: Final = 1e-3
TOLERANCE: Final = 0.01

FAILS: Final = frozenset({Kind.FAIL})
OPEN: Final = frozenset({Kind.OPEN})
KEPT: Final = frozenset({Kind.OPEN, Kind.PASS})
PASSES: Final = frozenset({Kind.PASS})
LOOK: Final = frozenset({Kind.REVIEW})


class Row(NamedTuple):
    """What must be said, by one of the rules (``a|b``, or a family: ``a/``), about one of the elements."""

    rule: str
    element: str
    kinds: Collection[Kind]
    best: float | None = None
    """The margin, at its best end, in SI units."""
    sure: float | None = None
    """The margin at its sure end."""
    need: float | None = None
    have: float | None = None
    waits: str = ""
    """What the path of a missing fact begins with."""
    holds_for: tuple[str, float] | None = None
    """A missing fact, and the value that it must keep."""
    told: tuple[str, ...] = ()
    """What the message or its reason names."""
    beyond: str = ""
    """Why the language or the tool cannot say it yet."""


class Situation(NamedTuple):
    """A description, as published or with a supposition laid over it, and what is right."""

    file: str
    rows: tuple[Row, ...]
    patch: Mapping[str, Any] = {}
    also: frozenset[tuple[str, str]] = frozenset()
    """Failures that are right too: what a reviewer would not list beside the rows, and would not call wrong."""


def fails(rule: str, element: str, best: float | None = None, **more: Any) -> Row:
    """A failure, told by itself or under another rule's."""
    return Row(rule, element, FAILS, best, **more)


def is_open(rule: str, element: str, best: float | None = None, **more: Any) -> Row:
    """An open judgement with what is known."""
    return Row(rule, element, OPEN, best, **more)


def beyond(why: str, row: Row) -> Row:
    """A row that the language or the tool cannot say yet."""
    return row._replace(beyond=why)


UNWATCHED: Final = "coverage/under_voltage"
AT_OWN_TRIP: Final = "self_bias/works_at_own_trip|own_range/levels_inside"
START_UP: Final = "start_up/release_after_ready|start_up/no_unknown_interval"
REQUIRED: Final = "a result cannot be held against the limit that it was required to keep"


def _at_levels(*, rising: tuple[str, str], falling: tuple[str, str]) -> Mapping[str, Any]:
    """The brown-out detector with one code alone."""
    levels = {"rising": rising, "falling": falling}
    trip = {name: {"min": least, "max": most} for name, (least, most) in levels.items()}
    return {"comparators": {"out": {"codes": None, "trip": trip}}}


_BROWNOUT: Final = frozenset({(UNWATCHED, "dvdd"), ("passive_default/held", "alarm"), ("bypass/independent", "ena")})
_BELOW_OWN_RANGE: Final = frozenset((rule, "out") for rule in AT_OWN_TRIP.split("|"))

SITUATIONS: Final[Mapping[str, Situation]] = {
    # A board's supervisor: F 3.08 V (1 -+ 1.5 %) = 3.0338 V to 3.1262 V; R up to 3.1262 V + 0.040 V or more
    "board_supervisor": Situation(
        "board_supervisor",
        (
            fails("trip_window/release", "supervisor", 3.135 - 3.1662),  # -31.2 mV
            is_open(
                "trip_window/nuisance", "supervisor", 3.135 - 3.1262,  # +8.8 mV
                holds_for=("rails.vdd.ripple.peak_to_peak", 2 * (3.135 - 3.1262)),
            ),
            is_open("trip_window/guarantee", "supervisor", 3.0338 - 2.7),  # +333.8 mV
        ),
    ),
    # Case 1, as taped out
    "bgrref_por_before": Situation(
        "bgrref_por_before",
        (
            fails("trip_window/release", "por", 2.7 - 2.745),  # before any spread
            fails(UNWATCHED, "dvdd"),
            fails("passive_default/held", "porb_h"),
            fails("budget/within", "analog", 1e-6 - 3.921e-6),
            is_open(START_UP, "porb|logic|porb_h|pads", waits="references.vbg"),  # not shown up before reset ends
            is_open("hysteresis/present", "por", waits="comparators.por.hysteresis"),
            Row("evidence/", "por", LOOK),
            Row("evidence/", "stretch", LOOK),  # 30.39 ms at one corner
        ),
    ),
    # ... and if it did compare with vbg: 2.745 V (1 + 0.12/1.2) = 3.0195 V
    "bgrref_por_compares_with_vbg": Situation(
        "bgrref_por_before",
        (fails("trip_window/release", "por", 2.7 - 3.0195),),
        {"comparators": {"por": {"reference": "vbg", "errors": {
            "vbg": {"of": "reference", "share": "10 %", "is": "bound", "at": "rail"}
        }}}},
        also=frozenset({(UNWATCHED, "dvdd"), ("passive_default/held", "porb_h"), ("budget/within", "analog")}),
    ),
    "bgrref_por_held_by_a_capacitor": Situation(
        "bgrref_por_before",
        (beyond(
            "a hold that is a capacitor, with its leakage, cannot be said",
            # 8 fF x 1 V / 10 pA = 0.8 ms against the 2 ms for which dvdd is later
            fails("passive_default/hold_strength", "out_h", 0.8e-3 - 2e-3),
        ),),
        {
            "rails": {"dvdd": {"after": "avdd", "delay": "2 ms"}},
            "output_stages": {"out_h": {
                "hold": {"to": "low", "through": "capacitor", "capacitance": "8 fF"}, "leakage": {"max": "10 pA"}
            }},
        },
    ),
    "bgrref_por_required": Situation(
        "bgrref_por_before",
        (beyond(REQUIRED, fails("claims/required", "por", 3.0 - 3.0195)),),
        {"comparators": {"por": {"trip": {"rising": {"required": {"min": "2.4 V", "max": "3.0 V"}}}}}},
    ),
    # Case 1, repaired: the need of vbg and the current are gone; no threshold on dvdd, no default of porb_h without it
    "bgrref_por_after": Situation(
        "bgrref_por_after",
        (
            fails(UNWATCHED, "dvdd"),
            fails("passive_default/held", "porb_h"),
            Row("budget/within", "analog", KEPT, 0.0),
            is_open("hysteresis/covers_disturbance", "por", waits="comparators.por.hysteresis.amount"),
        ),
    ),
    # Case 2: 3.6 pF x 1.65 V to 2.3 V / 0.67 nA = 8.866 ms to 12.36 ms
    "simple_por": Situation(
        "simple_por",
        (
            fails("rearming/level_held", "timer"),
            fails("rearming/discharge", "schmitt"),
            is_open("trip_window/release", "timer", waits="comparators.timer.trip.rising"),
            fails(UNWATCHED, "vdd1v8"),
            fails("claims/stage_delay", "schmitt", need=12.36e-3, have=15e-3),
            is_open(
                "budget/", "schmitt", 0.67e-9,
                holds_for=("output_stages.schmitt.timing.leakage", 0.067e-9),
            ),
            # 30 uA against 0.14 um x 2.8 mA/um = 392 uA, and 290 uA: 7.7 % and 10.3 %, no temperature with the limits
            Row("electromigration/line", "schmitt", KEPT),
            Row("electromigration/vias", "schmitt", KEPT),
            Row("electromigration/schmitt", "schmitt", PASSES),
        ),
    ),
    # ... and with the delay of the later README, 0.5 ms
    "simple_por_500_us": Situation(
        "simple_por",
        (fails("claims/stage_delay", "schmitt", need=8.866e-3),),
        {"output_stages": {"schmitt": {"release_delay": "500 us"}}},
        also=frozenset(
            {("rearming/level_held", "timer"), ("rearming/discharge", "schmitt"), (UNWATCHED, "vdd1v8")}
        ),
    ),
    "simple_por_skew": Situation(
        "simple_por",
        (beyond(
            "a delay that begins with the ramp, at no level, cannot be said",
            # released 15 ms after the ramp began, vdd1v8 good at 5.3 ms: +9.7 ms; at 20 ms: -5.0 ms
            fails("start_up/release_after_ready", "core", 15e-3 - 20e-3),
        ),),
        {
            "comparators": {"timer": {"trip": {"rising": "none"}}},
            "loads": {"core": {"ready": {"max": "20 ms"}}},
        },
    ),
    # Case 3: every code below the 3.0 V that the block needs; 1842 of the reported 2048 periods
    "ajc_por": Situation(
        "ajc_por",
        (
            fails("rearming/level_held", "por"),
            fails(AT_OWN_TRIP, "por", 2.40 - 3.0),  # falling level at or below the code: at least 600 mV short
            fails("claims/stage_delay", "one_shot", have=32.01e-3),  # 35.59 ms x 1842/2048
            fails(UNWATCHED, "dvdd"),
            is_open("bypass/default_inactive", "force_pdn", waits="bypasses.force_pdn.default"),
            is_open("bypass/default_inactive", "force_dis_rc_osc", waits="bypasses.force_dis_rc_osc.default"),
            is_open("bypass/default_held", "force_pdn", waits="bypasses.force_pdn"),
            is_open("bypass/default_held", "force_dis_rc_osc", waits="bypasses.force_dis_rc_osc"),
            Row("budget/within", "analog", KEPT, 5e-6 - 4.725e-6),
            Row("evidence/", "por", LOOK),
        ),
    ),
    "ajc_por_short_pulse": Situation(
        "ajc_por",
        # 8 x 27.456 us = 0.220 ms against the 30 ms that are required
        (beyond("an override that shortens a pulse cannot be said", fails("bypass/effect", "force_short", -29.8e-3)),),
        {"bypasses": {"force_short": {"overrides": "one_shot", "forces": "shorter", "count": 8}}},
    ),
    "ajc_por_accuracy": Situation(
        "ajc_por",
        # 2.7097 V x 50/1200 = 112.9 mV against the +-100 mV that are required
        (beyond(REQUIRED, fails("claims/required", "por", 0.1 - 0.1129)),),
        {"comparators": {"por": {"errors": {"vbg": {"of": "reference", "required": "100 mV"}}}}},
    ),
    # Case 4, on a rail of 2.97 V to 3.63 V; the levels are worked out in the description
    "ajc_brownout": Situation(
        "ajc_brownout",
        (
            fails(AT_OWN_TRIP, "out", 2.2160 - 3.0),  # at 000, the lowest that can be chosen
            fails("passive_default/held", "alarm"),
            fails("bypass/independent", "ena"),
            Row("hysteresis/present", "out", PASSES),
            Row("budget/within", "analog", KEPT, 10e-6 - 6.524e-6),
            Row("trip_window/codes", "out", frozenset({Kind.OPEN}), told=("c111",)),
        ),
        also=frozenset({(UNWATCHED, "dvdd")}),
    ),
    "ajc_brownout_000": Situation(
        "ajc_brownout",
        (
            is_open("trip_window/release", "out", 2.97 - 2.5840),  # +386 mV
            is_open("trip_window/nuisance", "out", 2.97 - 2.4425),  # +528 mV
            fails(AT_OWN_TRIP, "out", 2.2160 - 3.0),
        ),
        _at_levels(rising=("2.3575 V", "2.5840 V"), falling=("2.2160 V", "2.4425 V")),
        also=_BROWNOUT,
    ),
    "ajc_brownout_100": Situation(
        "ajc_brownout",
        (
            is_open(
                "trip_window/release", "out", 2.97 - 2.9171,  # +53 mV
                holds_for=("rails.avdd.ripple.peak_to_peak", 2 * (2.97 - 2.9171)),
            ),
            is_open("trip_window/nuisance", "out", 2.97 - 2.7571),  # +213 mV
            fails(AT_OWN_TRIP, "out", 2.5023 - 3.0),  # -497 mV
        ),
        _at_levels(rising=("2.6623 V", "2.9171 V"), falling=("2.5023 V", "2.7571 V")),
        also=_BROWNOUT,
    ),
    "ajc_brownout_111": Situation(
        "ajc_brownout",
        (
            fails("trip_window/release", "out", 2.97 - 3.2290),  # -259 mV
            fails("trip_window/nuisance", "out", 2.97 - 3.0535),  # -84 mV
            fails(AT_OWN_TRIP, "out", 2.7710 - 3.0),  # -229 mV
        ),
        _at_levels(rising=("2.9465 V", "3.2290 V"), falling=("2.7710 V", "3.0535 V")),
        also=_BROWNOUT,
    ),
    # 47.63 us: 476 mV at 10 mV/us, 47.6 mV at 1 V/ms; what the logic needs is not known, so: down to which level
    "ajc_brownout_collapses": Situation(
        "ajc_brownout",
        # 2.216 V - 0.476 V
        (is_open("trip_window/guarantee", "out", told=("1.74 V",), waits="loads.logic.needs.0.works"),),
        {"comparators": {"out": {"ships_with": "c000"}}, "rails": {"avdd": {"collapse": {"max": "10 mV/us"}}}},
        also=_BROWNOUT | _BELOW_OWN_RANGE,
    ),
    "ajc_brownout_sags": Situation(
        "ajc_brownout",
        # 2.216 V - 0.0476 V = 2.168 V, to four digits
        (is_open("trip_window/guarantee", "out", told=("2.168 V",), waits="loads.logic.needs.0.works"),),
        {"comparators": {"out": {"ships_with": "c000"}}, "rails": {"avdd": {"collapse": {"max": "1 V/ms"}}}},
        also=_BROWNOUT | _BELOW_OWN_RANGE,
    ),
    # Case 9: lets go at just -10 %; may let the core start 66 mV below it, with the brown-out detector still masked;
    # the input has no threshold near 1.8 V: the blocks are only sure to be initialised again below 0.87 V
    "rp2040_core": Situation(
        "rp2040_core",
        (
            is_open("trip_window/release", "por", 0.99 - 0.99, waits="rails.dvdd.ripple"),
            beyond(
                "that a detector that takes over is masked for a while after reset cannot be said",
                fails("trip_window/guarantee|hand_over/no_hole", "por|dvdd", 0.924 - 0.99),
            ),
            fails("trip_window/guarantee|rearming/level_held", "supply_monitor", 0.87 - 1.8),
            fails("modes/live_detector", "chip"),
        ),
    ),
    # Case 10
    "mspm0l_bor": Situation(
        "mspm0l_bor",
        (
            is_open("trip_window/release", "bor", 1.62 - 1.62, waits="rails.vdd.ripple"),
            is_open("trip_window/nuisance", "bor", 1.62 - 1.61),
            is_open("trip_window/release", "por", 1.62 - 1.51),
            is_open("trip_window/nuisance", "por", 1.62 - 1.48),
            # 1.54 V - 10 us x 0.01 V/us; what the device needs is not published
            is_open("trip_window/guarantee", "bor", told=("1.44 V",), waits="loads.device.needs.0.works"),
            Row("trip_window/order", "vdd", PASSES, sure=1.55 - 1.51),
            # typically 21 mV; but where it rises at 1.55 V it falls at 1.54 V or above: the least is 10 mV or less
            is_open("hysteresis/covers_disturbance", "bor", 0.010, holds_for=("rails.vdd.ripple.peak_to_peak", 0.010)),
        ),
    ),
    "mspm0l_bor_cold_start": Situation(
        "mspm0l_bor",
        # "always higher" only typically
        (Row("trip_window/order", "vdd", frozenset({Kind.FAIL}), need=1.51, have=1.48),),
        {"comparators": {"bor": {"ships_with": "bor0_cold"}}},
    ),
    "mspm0l_bor_good_to_1v44": Situation(
        "mspm0l_bor",
        (Row("trip_window/guarantee", "bor", KEPT, 1.44 - 1.44),),  # the slew limit is kept: no failure
        {"loads": {"device": {"needs": [{"rail": "vdd", "works": {"min": "1.44 V"}}]}}},
    ),
    "mspm0l_bor_standby": Situation(
        "mspm0l_bor",
        # 1.54 V - 100 us x 0.1 V/ms
        (is_open("trip_window/guarantee", "bor", told=("1.53 V",), waits="loads.device.needs.0.works"),),
        {"comparators": {"bor": {"delay": "100 us"}}, "rails": {"vdd": {"collapse": {"max": "0.1 V/ms"}}}},
    ),
    "mspm0l_bor3_in_standby": Situation(
        "mspm0l_bor",
        (beyond(
            "a level for each mode cannot be said, nor that a mode falls back to another code",
            fails("modes/live_detector", "device", 1.54 - 2.88),  # 1.34 V lower than what was chosen
        ),),
        {"comparators": {"bor": {"ships_with": "bor3"}}, "modes": {"standby": {"codes": {"bor": "bor0"}}}},
    ),
    # A data sheet's row: 1.7/1.8/2.0 V as the mean of levels 50 mV apart, against 1.8 V delivered and needed
    "atmega328pb_bod": Situation(
        "atmega328pb_bod",
        (
            fails("trip_window/release", "bod", 1.8 - 2.025),
            fails("trip_window/nuisance", "bod", 1.8 - 1.975),
            fails("trip_window/guarantee", "bod", 1.675 - 1.8),
            # F 300 mV wide, and no room at all between 1.8 V and 1.8 V
            fails("trip_window/spread", "bod", 0.0 - 0.3),
            is_open("trip_window/release", "por", 1.8 - 1.7),
            is_open("trip_window/nuisance", "por", 1.8 - 1.7),
            is_open("rearming/residual", "por", 0.6, holds_for=("rails.vcc.residual", 0.6)),
            is_open(START_UP, "internal_reset|mcu", waits="references.bandgap"),
            # VPOT (falling) is both numbers
            Row("description/comparators", "por", frozenset({Kind.PASS, Kind.OPEN, Kind.NOT_APPLICABLE})),
        ),
        # 1.675 V of one against 1.7 V of the other, falling: order kept only typically
        also=frozenset({("trip_window/order", "vcc")}),
    ),
    "atmega328pb_bandgap_after_por": Situation(
        "atmega328pb_bod",
        (beyond(
            "no rule holds the settling of a reference against the time in which a ramp goes from one level to another",
            fails("self_bias/up_in_time", "bod", 11.1e-6 - 70e-6),  # 1.7 V to 1.8 V at 9 V/ms
        ),),
        {"references": {"bandgap": {"gated_by": "por"}}},
    ),
    # Invented: 2.93 V (1 -+ 2.5 %) = 2.85675 V to 3.00325 V, R up to 3.01825 V or more;
    # 1.12 V (1 -+ 2.79 %) = 1.088752 V to 1.151248 V, R up to 1.156848 V or more, and an offset that nobody gave
    "dual_supervisor": Situation(
        "dual_supervisor",
        (
            is_open(
                "trip_window/release", "vcc_monitor", 3.135 - 3.01825,  # +116.8 mV
                holds_for=("rails.v3v3.ripple.peak_to_peak", 2 * (3.135 - 3.01825)),
            ),
            is_open("trip_window/nuisance", "vcc_monitor", 3.135 - 3.00325),  # +131.8 mV
            is_open("trip_window/guarantee", "vcc_monitor", 2.85675 - 2.7),  # +156.8 mV
            fails("trip_window/guarantee", "core_monitor", 1.088752 - 1.1),  # -11.2 mV
            # 64 mV between 1.1 V and 1.164 V, of which the error takes 62.5 mV and the hysteresis 5.6 mV
            fails("hysteresis/fits_window", "core_monitor", 0.064 - 0.062496 - 0.0056),  # -4.1 mV
            is_open(
                "trip_window/release", "core_monitor", 1.164 - 1.156848,  # +7.2 mV
                holds_for=("rails.v1v2.ripple.peak_to_peak", 2 * (1.164 - 1.156848)),
            ),
            is_open("trip_window/nuisance", "core_monitor", 1.164 - 1.151248),  # +12.8 mV
            # 9.9 kohm x 80 nF x ln(3.465/(3.465 - 1.65)) = 0.792 ms x 0.6466
            fails("claims/stage_delay", "rc", have=0.5121e-3),
            # it forces the reset: no way around a detector, and no danger
            is_open("bypass/present", "vcc_monitor|core_monitor", waits="bypasses"),
            Row("bypass/default_held", "manual_reset", PASSES),
            Row("bypass/locked", "manual_reset", frozenset({Kind.OPEN, Kind.PASS, Kind.NOT_APPLICABLE})),
            is_open("passive_default/held", "nrst", waits="output_stages.rc.hold"),
        ),
    ),
    # Invented: typical values only. 1.08 V and 1.095 V, at best
    "core_bod": Situation(
        "core_bod",
        (
            is_open("trip_window/guarantee", "bod", 1.08 - 1.05, waits="comparators.bod.errors"),  # +30 mV
            is_open("trip_window/nuisance", "bod", 1.14 - 1.08),  # +60 mV
            is_open(
                "trip_window/release", "bod", 1.14 - 1.095,  # +45 mV
                holds_for=("rails.vcore.ripple.peak_to_peak", 2 * (1.14 - 1.095)),
            ),
            # 0.90 V and 1.00 V lie 150 mV and 50 mV below what the logic needs, whatever the rest
            Row("trip_window/codes", "bod", frozenset({Kind.OPEN}), told=("level0", "level1", "150 mV", "50 mV")),
            fails("modes/live_detector", "logic"),  # in deep sleep it has no bandgap
        ),
    ),
    "core_bod_level1": Situation(
        "core_bod",
        (
            fails("trip_window/guarantee", "bod", 1.00 - 1.05),  # at least 50 mV short
            is_open("trip_window/release", "bod", 1.14 - 1.015),
        ),
        {"comparators": {"bod": {"ships_with": "level1"}}},
        also=frozenset({("modes/live_detector", "logic")}),
    ),
    "core_bod_level3": Situation(
        "core_bod",
        (
            is_open("trip_window/guarantee", "bod", 1.12 - 1.05),
            is_open(
                "trip_window/release", "bod", 1.14 - 1.135,  # +5 mV
                holds_for=("rails.vcore.ripple.peak_to_peak", 2 * (1.14 - 1.135)),
            ),
        ),
        {"comparators": {"bod": {"ships_with": "level3"}}},
        also=frozenset({("modes/live_detector", "logic")}),
    ),
    # ... and once the trim is known to leave 2 %: 1.0584 V to 1.1016 V, R up to 1.1166 V or more
    "core_bod_trimmed": Situation(
        "core_bod",
        (
            is_open("trip_window/guarantee", "bod", 1.0584 - 1.05),  # +8.4 mV
            is_open("trip_window/nuisance", "bod", 1.14 - 1.1016),  # +38.4 mV
            is_open("trip_window/release", "bod", 1.14 - 1.1166),  # +23.4 mV
        ),
        {"comparators": {"bod": {"errors": {"trim": {"of": "trim", "share": "2 %", "is": "bound", "at": "rail"}}}}},
        also=frozenset({("modes/live_detector", "logic")}),
    ),
    # Invented: 4.65 V and 5.35 V (1 -+ 2 %) = 4.557 V to 4.743 V and 5.243 V to 5.457 V; answers within 25 us.
    # Which part has the most hysteresis is not said: R at most 4.743 V + 60 mV, at best 4.743 V + 40 mV
    "window_monitor": Situation(
        "window_monitor",
        (
            fails("trip_window/guarantee", "uv", 4.557 - 4.5 - 0.125),  # 5 V/ms x 25 us: -68 mV
            is_open("trip_window/nuisance", "uv", 4.9 - 4.743),  # +157 mV
            is_open("trip_window/release", "uv", 4.9 - 4.783),  # +117 mV
            is_open("hysteresis/fits_window", "uv", 4.9 - 4.625 - 0.186 - 0.040),  # +49 mV, at the worst +29 mV
            Row("trip_window/guarantee", "ov", PASSES, 5.5 - 0.025 - 5.457),  # 1 V/ms x 25 us: +18 mV
            is_open("trip_window/nuisance", "ov", 5.243 - 5.1),  # +143 mV
            is_open("trip_window/release", "ov", 5.203 - 5.1),  # +103 mV
            Row("own_range/survives", "ov", KEPT, 6.0 - 5.457 - 0.025),  # +518 mV
            Row("trip_window/order", "v5", PASSES, sure=5.183 - 4.803),  # +380 mV
        ),
    ),
    # ... and with nothing on the supply: judged at the sure end
    "window_monitor_quiet_supply": Situation(
        "window_monitor",
        (
            Row("trip_window/nuisance", "uv", PASSES, 4.9 - 4.743),
            Row("trip_window/release", "uv", PASSES, sure=4.9 - 4.803),  # +97 mV
            Row("trip_window/nuisance", "ov", PASSES, 5.243 - 5.1),
            Row("trip_window/release", "ov", PASSES, sure=5.183 - 5.1),  # +83 mV
        ),
        {"rails": {"v5": {"ripple": "none", "load_step": "none"}}},
        also=frozenset({("trip_window/guarantee", "uv")}),
    ),
    # ... and with a deglitch of 4 us at most: 5 V/ms x 9 us = 45 mV
    "window_monitor_faster": Situation(
        "window_monitor",
        (Row("trip_window/guarantee", "uv", PASSES, 4.557 - 4.5 - 0.045),),  # +12 mV
        {"comparators": {"uv": {"filter": {"min": "1 us", "max": "4 us"}}}},
    ),
}  # fmt: skip

SAYABLE: Final = [name for name, situation in SITUATIONS.items() if not all(row.beyond for row in situation.rows)]


@cache
def _read(file: str) -> Loaded:
    return load(HERE / f"{file}.yaml", shown=f"{file}.yaml")


@cache
def reviewed(name: str) -> Review:
    """What every rule says in a situation."""
    situation = SITUATIONS[name]
    loaded = _read(situation.file)
    if situation.patch:
        description = description_of(laid_over(loaded.sources.data, situation.patch), own_keys=True)
        assert description is not None, "the language cannot say it"
        loaded = Loaded(description, loaded.sources)
    return review(loaded, Catalogue(FAMILIES), today=TODAY)


def is_of(row: Row, judgement: Judgement) -> bool:
    """Whether a judgement is one of those that a row speaks of."""
    rules = (rule in (judgement.rule, judgement.rule.partition("/")[0] + "/") for rule in row.rule.split("|"))
    return any(rules) and judgement.subject in row.element.split("|")


def asked(row: Row, found: Review) -> list[Judgement]:
    """What the rules of a row say about its elements."""
    return [one for one in found.judgements if is_of(row, one)]


def as_told(judgements: Iterable[Judgement]) -> list[Judgement]:
    """Open judgements with a number, in the order in which the reports tell them."""
    try:
        order = importlib.import_module("tidegate.lint.reports.gravity").gravest_first
    except ModuleNotFoundError:
        order = importlib.import_module("tidegate.lint.reports.order").closest_first
    return list(order([one for one in judgements if one.kind is Kind.OPEN and one.measure is not None]))


def failed(judgement: Judgement) -> bool:
    """Whether a judgement is a failure, told by itself or under another one."""
    return judgement.kind is Kind.FAIL or bool(judgement.under)


def short_of(row: Row, judgement: Judgement, found: Review) -> Iterator[str]:
    """In what a judgement is not what a row says."""
    if judgement.kind not in row.kinds and not (Kind.FAIL in row.kinds and failed(judgement)):
        yield f"is {judgement.kind.value}"
    measure = judgement.measure
    right = {"margin": row.best, "sure margin": row.sure, "need": row.need, "have": row.have}
    for name, value in right.items():
        if value is None:
            continue
        if measure is None:
            yield f"has no {name} ({value:.6g} is right)"
            continue
        said = {
            "margin": measure.best_margin, "sure margin": measure.sure_margin, "need": measure.need,
            "have": measure.have,
        }[name]  # fmt: skip
        if not abs(said - value) <= _tolerance(value, measure.dimension):
            yield f"{name} {said:.6g} ({value:.6g} is right)"
    if row.waits and not any(fact.startswith(row.waits) for fact in judgement.missing):
        yield f"does not wait for {row.waits}"
    text = f"{judgement.message} {judgement.why}"
    yield from (f"does not tell {word}" for word in row.told if word not in text)
    if row.holds_for is not None:
        fact, value = row.holds_for
        kept = {one.fact: one.value for one in break_evens(found, judgement)}
        if fact not in kept:
            yield f"does not say what {fact} must keep"
        elif not math.isclose(kept[fact], value, rel_tol=TOLERANCE):
            yield f"holds for {fact} of {kept[fact]:.6g} ({value:.6g} is right)"


def _tolerance(value: float, dimension: Dimension) -> float:
    floor = LEAST_TOLERANCE_V if dimension is Dimension.VOLTAGE else 0.0
    return max(TOLERANCE * abs(value), floor)


def _rows() -> Iterator[Any]:
    for name, situation in SITUATIONS.items():
        for row in situation.rows:
            marks = [pytest.mark.xfail(strict=True, reason=row.beyond)] if row.beyond else []
            yield pytest.param(name, row, id=f"{name}-{row.rule}-{row.element}", marks=marks)


@pytest.mark.parametrize(("name", "row"), list(_rows()))
def test_what_a_reviewer_finds_is_said(name: str, row: Row) -> None:
    found = reviewed(name)
    judgements = asked(row, found)
    wrong = {f"{one.rule} on {one.subject}": list(short_of(row, one, found)) for one in judgements}
    assert any(not each for each in wrong.values()), wrong or "nothing is said"


@pytest.mark.parametrize("name", SAYABLE)
def test_nothing_else_fails(name: str) -> None:
    situation, found = SITUATIONS[name], reviewed(name)
    failing = [row for row in situation.rows if Kind.FAIL in row.kinds]
    wrong = [
        f"{one.rule} on {one.subject}: {one.message}"
        for one in found.judgements
        if one.kind is Kind.FAIL
        and (one.rule, one.subject) not in situation.also
        and not any(is_of(row, one) for row in failing)
    ]
    assert wrong == []


@pytest.mark.parametrize("name", SAYABLE)
def test_every_rule_answers(name: str) -> None:
    assert [f"{fault.rule} on {fault.subject}: {fault.error}" for fault in reviewed(name).faults] == []


@pytest.mark.parametrize("name", SAYABLE)
def test_no_verdict_rests_on_a_number_that_nobody_gave(name: str) -> None:
    """What passes or fails does so at finite numbers: an end that is not known is no verdict."""
    wrong = [
        f"{one.rule} on {one.subject}: {one.message} ({one.why})"
        for one in reviewed(name).judgements
        if one.kind in (Kind.PASS, Kind.FAIL, Kind.REVIEW) and NO_END in f"{one.message} {one.why}"
    ]
    assert wrong == []


@pytest.mark.parametrize("name", SAYABLE)
def test_few_open_judgements_stand_before_an_answer(name: str) -> None:
    """Failures are told before everything that is open; of what is open, an answer is among the first."""
    situation, found = SITUATIONS[name], reviewed(name)
    told = as_told(found.judgements)
    answers = [one for row in situation.rows for one in asked(row, found)]
    at = [index for index, one in enumerate(told) if one in answers]
    assert not at or min(at) <= FIRST_LOOK, [f"{one.rule} on {one.subject}" for one in told[: min(at)]]


def test_a_level_that_does_not_come_from_a_reference_does_not_scale_with_it() -> None:
    """Case 1: vbg feeds the delay alone; no judgement of the levels may speak of it."""
    levels = [
        one for one in reviewed("bgrref_por_before").judgements
        if one.subject == "por" and one.rule.startswith(("trip_window/", "hysteresis/", "claims/"))
    ]  # fmt: skip
    assert levels
    assert [one.rule for one in levels if "vbg" in f"{one.message} {one.why} {one.missing} {one.account}"] == []


def test_what_the_repair_was_for_is_gone() -> None:
    """Case 1, after: neither the budget nor the reference is spoken of as wrong."""
    after = reviewed("bgrref_por_after")
    assert not any(
        failed(one) and one.rule.startswith(("budget/", "self_bias/", "start_up/")) for one in after.judgements
    )
    assert not any(fact.startswith("references.") for one in after.judgements for fact in one.missing)


def test_every_description_is_used() -> None:
    assert sorted({situation.file for situation in SITUATIONS.values()}) == sorted(
        file.stem for file in HERE.glob("*.yaml")
    )
