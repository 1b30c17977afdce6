"""What a missing fact must keep, held against the closed form and against giving the fact that value."""

from __future__ import annotations

import datetime
from pathlib import Path

import pytest

from tidegate.lint.break_even import BreakEven, break_evens
from tidegate.lint.description.load import load
from tidegate.lint.engine import Catalogue, Review, review
from tidegate.lint.judgement import Kind
from tidegate.rules.catalogue import FAMILIES

SUPERVISOR = """
rails:
  vdd: {{delivered: {{min: 3.135 V, max: 3.465 V}}{rail}}}
comparators:
  sup:
    role: under_voltage
    watches: vdd
    trip: {{falling: 3.08 V}}
    errors: {{accuracy: {{share: 1.5 %, of: total, is: bound, at: rail}}}}
    hysteresis: {{amount: {{typ: 40 mV}}}}
resets:
  rst_n: {{driven_by: [sup], active: low, guards: [mcu]}}
loads:
  mcu: {{needs: [{{rail: vdd, works: {{min: 2.7 V}}}}]}}
"""


def judged(tmp_path: Path, rail: str) -> Review:
    file = tmp_path / "board.yaml"
    file.write_text(SUPERVISOR.format(rail=rail), "utf-8")
    return review(load(file), Catalogue(FAMILIES), today=datetime.date(2026, 1, 1))


def kept(found: Review, rule: str) -> dict[str, BreakEven]:
    judgement = next(one for one in found.judgements if (one.rule, one.subject) == (rule, "sup"))
    return {one.fact: one for one in break_evens(found, judgement)}


def test_the_ripple_that_a_quiet_level_still_bears(tmp_path: Path) -> None:
    """Twice what lies between the level at its highest and the supply: 2 (3.135 V - 1.015 3.08 V), by hand."""
    only = kept(judged(tmp_path, ", load_step: none"), "trip_window/nuisance")["rails.vdd.ripple.peak_to_peak"]
    assert only.value == pytest.approx(2 * (3.135 - 1.015 * 3.08), rel=1e-9)
    assert (only.at_most, only.alone) == (True, True)
    both = kept(judged(tmp_path, ""), "trip_window/nuisance")
    assert both["rails.vdd.ripple.peak_to_peak"] == BreakEven("rails.vdd.ripple.peak_to_peak", only.value, True, False)


@pytest.mark.parametrize(("ripple", "kind"), [("17.5 mV", Kind.PASS), ("17.7 mV", Kind.FAIL)])
def test_given_the_value_it_holds_and_beyond_it_does_not(tmp_path: Path, ripple: str, kind: Kind) -> None:
    found = judged(tmp_path, f", load_step: none, ripple: {{peak_to_peak: {ripple}}}")
    assert (
        next(one.kind for one in found.judgements if (one.rule, one.subject) == ("trip_window/nuisance", "sup")) is kind
    )


def test_the_factor_of_a_product_has_none_alone(tmp_path: Path) -> None:
    """A load step may be any if the source has no impedance: the limit belongs to the product."""
    found = kept(judged(tmp_path, ""), "trip_window/nuisance")
    assert not {"rails.vdd.load_step", "rails.vdd.source_impedance"} & found.keys()
    given = kept(judged(tmp_path, ", load_step: {max: 100 mA}"), "trip_window/nuisance")
    assert given["rails.vdd.source_impedance"].value == pytest.approx((3.135 - 1.015 * 3.08) / 0.1, rel=1e-9)


def test_what_fails_or_holds_waits_for_nothing(tmp_path: Path) -> None:
    found = judged(tmp_path, "")
    for rule in ("trip_window/release", "trip_window/placement_sense"):
        assert kept(found, rule) == {}
