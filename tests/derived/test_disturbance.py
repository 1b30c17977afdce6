from __future__ import annotations

import math

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from tests.rules.sound import both, case_of
from tidegate.lint.case import Case, MissingFactsError
from tidegate.lint.derived.disturbance.disturbance import bumps_on, disturbers, ignored_s, own_kick, sharers
from tidegate.lint.derived.disturbance.disturbed_node import CoupledEdge
from tidegate.lint.description.model.detector import Comparator
from tidegate.lint.graph.edge import path_text

BENCH = """
references: {ref_fast: {decoupling: {min: 8 pF, max: 10 pF}, source_resistance: 200 kohm}}
comparators:
  uv: {divider: {ratio: 0.5}, filter: null, kick: 4 fC}
  ov: {divider: {ratio: 0.25}, filter: null, kick: 8 fC}
  uv_core: {kick: 2 fC}
neighbours: {uv_beside_ov: null, core_return: null, switcher_on_ref: null}
"""


def asked(of: str, *patches: str) -> tuple[Case, Comparator]:
    case = case_of(both(BENCH, *patches), of)
    assert isinstance(case.subject, Comparator)
    return case, case.subject


def test_sharers_of_a_reference_kick_each_other() -> None:
    # Q/C on the least decoupling, over the divider: 8 fC/8 pF/0.5, 2 fC/8 pF/0.5.
    bumps = bumps_on(*asked("uv"))
    assert [(bump.aggressor, bump.victim, bump.via) for bump in bumps] == [
        ("ov", "uv", "ref_fast"), ("uv_core", "uv", "ref_fast"),
    ]  # fmt: skip
    assert [bump.peak_v for bump in bumps] == pytest.approx([2e-3, 0.5e-3], rel=1e-12)
    assert bumps[0].fact == "comparators.ov.kick"
    assert path_text(bumps[0].path) == "ov kicks ref_fast is the reference of uv"
    case, comparator = asked("uv")
    assert own_kick(case, comparator).peak_v == pytest.approx(1e-3, rel=1e-12)


def test_who_takes_no_reference_is_kicked_by_nobody() -> None:
    assert sharers(*asked("por")) == []
    assert bumps_on(*asked("por")) == []


PAIR = """
neighbours:
  pair: {kind: shared_return, aggressor: uv, victim: ov, mutual: %s, at: %s, impedance: 2 ohm, current_step: 1 mA}
"""


@pytest.mark.parametrize(("at", "over"), [("rail", 1.0), ("input", 0.25), ("reference", 0.25)])
def test_a_pair_is_referred_to_the_rail_of_its_victim(at: str, over: float) -> None:
    bump = bumps_on(*asked("ov", PAIR % ("false", at)))[0]
    assert bump.peak_v == pytest.approx(2e-3 / over, rel=1e-12)
    assert bump.lasting_v(1.0) == bump.peak_v  # a current that stays is not waited out
    assert bump.fact == "neighbours.pair.impedance"
    assert path_text(bump.path) == "uv couples through pair to ov"


def test_a_mutual_pair_disturbs_both() -> None:
    one_way = [disturber.aggressor for disturber in disturbers(*asked("uv", PAIR % ("false", "input")))]
    assert one_way == ["ov", "uv_core"]
    case, uv = asked("uv", PAIR % ("true", "input"))
    assert [disturber.aggressor for disturber in disturbers(case, uv)] == ["ov", "ov", "uv_core"]
    assert bumps_on(case, uv)[0].peak_v == pytest.approx(2e-3 / 0.5, rel=1e-12)


def test_a_described_charge_stands_in_place_of_the_kick() -> None:
    described = """
    neighbours: {pair: {kind: shared_reference, aggressor: uv, victim: ov, reference: %s, charge: 16 fC}}
    """
    bumps = bumps_on(*asked("ov", described % "ref_fast"))
    assert [(bump.aggressor, bump.via) for bump in bumps] == [("uv", "pair"), ("uv_core", "ref_fast")]
    assert bumps[0].peak_v == pytest.approx(16e-15 / 8e-12 / 0.25, rel=1e-12)
    # A charge on another reference is another charge.
    others = disturbers(*asked("ov", described % "ref_main"))
    assert [disturber.aggressor for disturber in others] == ["uv", "uv", "uv_core"]


def test_seen_is_the_peak_without_a_filter_and_less_with_one() -> None:
    case, uv = asked("uv")
    bump = bumps_on(case, uv)[0]
    assert ignored_s(case, uv) == 0.0
    assert bump.lasting_v(0.0) == bump.peak_v
    case, uv = asked("uv", "comparators: {uv: {filter: {min: 0.8 us, max: 3 us}}}")
    # 200 kohm and 8 pF are 1.6 us: exp(-0.5) of 2 mV is left after 0.8 us.
    assert bumps_on(case, uv)[0].lasting_v(ignored_s(case, uv)) == pytest.approx(2e-3 * math.exp(-0.5), rel=1e-12)
    case, uv = asked("uv", "comparators: {uv: {filter: {max: 3 us}}}")
    with pytest.raises(MissingFactsError, match=r"^comparators\.uv\.filter\.min$"):
        ignored_s(case, uv)


EDGE = CoupledEdge(
    step_v=1.8, least_edge_s=20e-9, most_edge_s=60e-9, r_ohm=1e6, coupling_c_f=2e-15, least_c_f=80e-15,
    most_c_f=160e-15,
)  # fmt: skip


@settings(max_examples=40, deadline=None)
@given(
    edge=st.floats(0.0, 1.0), step=st.floats(0.1, 1.0), r=st.floats(0.05, 1.0), cc=st.floats(0.05, 1.0),
    cg=st.floats(0.0, 1.0), lasts_s=st.floats(0.0, 400e-9),
)  # fmt: skip
def test_no_draw_within_the_ranges_is_seen_more(
    edge: float, step: float, r: float, cc: float, cg: float, lasts_s: float
) -> None:
    # The level that a straight edge of tr holds for T, with tau = R C: solved by setting v(t) equal at both ends of T,
    # V (R Cc/tr) (e^(tr/tau) - 1)/(e^(tr/tau) - 1 + e^(T/tau)) (derived).
    edge_s = EDGE.least_edge_s + edge * (EDGE.most_edge_s - EDGE.least_edge_s)
    node_f = cc * EDGE.coupling_c_f + EDGE.least_c_f + cg * (EDGE.most_c_f - EDGE.least_c_f)
    tau_s = r * EDGE.r_ohm * node_f
    rise = np.expm1(edge_s / tau_s)
    plateau_v = step * EDGE.step_v * r * EDGE.r_ohm * cc * EDGE.coupling_c_f / edge_s
    held_v = float(plateau_v * rise / (rise + np.exp(lasts_s / tau_s)))
    assert held_v <= EDGE.lasting_v(lasts_s) * (1.0 + 1e-9)


def test_an_edge_need_not_last_to_be_seen_without_a_filter() -> None:
    assert EDGE.lasting_v(0.0) == EDGE.peak_v
