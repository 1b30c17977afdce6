from __future__ import annotations

import math
from collections.abc import Sequence

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from tests.derived.corners import known
from tests.rules.sound import both, case_of, without
from tidegate.lint.account import Line
from tidegate.lint.case import Case
from tidegate.lint.derived.disturbance.disturbance import Bump, bump, ignored_s, own_kick, size_of
from tidegate.lint.derived.disturbance.disturbed_node import CoupledEdge
from tidegate.lint.derived.disturbance.doubt import extreme
from tidegate.lint.derived.disturbance.hysteresis_need import need_at_coverage, need_over_life
from tidegate.lint.derived.disturbance.who_disturbs import Disturber, disturbers
from tidegate.lint.derived.levels.least_hysteresis import least_hysteresis_v
from tidegate.lint.description.model.detector import Comparator
from tidegate.lint.facts.reading import Corner, Reading
from tidegate.lint.graph.edge import path_text
from tidegate.lint.physics.noise import false_trip_distance_v

BENCH = """
references: {ref_fast: {decoupling: {min: 8 pF, max: 10 pF}, source_resistance: 200 kohm}}
comparators:
  uv: {divider: {ratio: 0.5}, filter: none, kick: 4 fC}
  ov: {divider: {ratio: 0.25}, filter: none, kick: 8 fC}
  uv_core: {kick: 2 fC}
neighbours: {uv_beside_ov: null, core_return: null, switcher_on_ref: null}
"""


def asked(of: str, *patches: str) -> tuple[Case, Comparator]:
    case = case_of(both(BENCH, *patches), of)
    assert isinstance(case.subject, Comparator)
    return case, case.subject


def who(of: str, *patches: str) -> Sequence[Disturber]:
    """Who disturbs a comparator, whatever the sizes."""
    case, _ = asked(of, *patches)
    return disturbers(case.graph).of(of)


def bumps(of: str, *patches: str) -> list[Bump]:
    """Every bump on a comparator."""
    case, _ = asked(of, *patches)
    return [bump(case, each) for each in disturbers(case.graph).of(of)]


def test_sharers_of_a_reference_kick_each_other() -> None:
    # Q/C on the least decoupling, over the divider: 8 fC/8 pF/0.5, 2 fC/8 pF/0.5.
    found = who("uv")
    assert [(each.aggressor, each.victim, each.via) for each in found] == [
        ("ov", "uv", "ref_fast"), ("uv_core", "uv", "ref_fast"),
    ]  # fmt: skip
    assert [each.peak_v for each in bumps("uv")] == pytest.approx([2e-3, 0.5e-3], rel=1e-12)
    assert size_of(found[0]) == "comparators.ov.kick"
    assert path_text(found[0].path) == "ov kicks ref_fast is the reference of uv"
    case, comparator = asked("uv")
    assert own_kick(case, comparator).peak_v == pytest.approx(1e-3, rel=1e-12)


def test_who_takes_no_reference_is_kicked_by_nobody() -> None:
    assert who("por") == ()
    # Nor one whose level a crossover makes; one that does not say might take the same one.
    assert who("por", "comparators: {por: {reference: null}}") == ()
    unsaid = who("por", "comparators: {por: {reference: null, crossover: null}}")
    assert [(each.aggressor, each.reference, each.doubt) for each in unsaid] == [
        (name, "ref_fast", ("comparators.por.reference",)) for name in ("ov", "uv", "uv_core")
    ]


def test_what_no_edge_joins_shares_nothing() -> None:
    apart = """
    rails: {vother: {nominal: 1 V}}
    comparators:
      other: {role: under_voltage, watches: vother, kick: 9 fC}
      lone: {role: under_voltage, watches: vother}
    """
    assert [each.aggressor for each in who("uv", apart)] == ["ov", "uv_core"]
    assert [(each.aggressor, each.doubt) for each in who("other", apart)] == [
        ("lone", ("comparators.other.reference", "comparators.lone.reference"))
    ]
    case, _ = asked("uv", apart)
    more = {name: disturbers(case.graph).may_have_more(name) for name in ("other", "lone", "uv", "por")}
    assert more == {"other": True, "lone": True, "uv": True, "por": True}
    alone = "{rails: {vother: {nominal: 1 V}}, comparators: {other: {role: under_voltage, watches: vother}}}"
    case, _ = asked("uv", alone)
    assert not disturbers(case.graph).may_have_more("other")


PAIR = """
neighbours:
  pair: {kind: shared_return, aggressor: uv, victim: ov, mutual: %s, at: %s, impedance: 2 ohm, current_step: 1 mA}
"""


@pytest.mark.parametrize(("at", "over"), [("rail", 1.0), ("input", 0.25), ("reference", 0.25)])
def test_a_pair_is_referred_to_the_rail_of_its_victim(at: str, over: float) -> None:
    for filtered in ("none", "1 s"):  # a current that stays is not waited out
        found = bumps("ov", PAIR % ("false", at), f"comparators: {{ov: {{filter: {filtered}}}}}")[0]
        assert (found.peak_v, found.seen_v) == pytest.approx((2e-3 / over, 2e-3 / over), rel=1e-12)
    each = who("ov", PAIR % ("false", at))[0]
    assert size_of(each) == "neighbours.pair.impedance"
    assert path_text(each.path) == "uv couples through pair to ov"


def test_a_mutual_pair_disturbs_both() -> None:
    assert [each.aggressor for each in who("uv", PAIR % ("false", "input"))] == ["ov", "uv_core"]
    assert [each.aggressor for each in who("uv", PAIR % ("true", "input"))] == ["ov", "ov", "uv_core"]
    assert bumps("uv", PAIR % ("true", "input"))[0].peak_v == pytest.approx(2e-3 / 0.5, rel=1e-12)
    # A pair that does not say so might: it does at the sure corner, and does not at the best one.
    unsaid = both(BENCH, PAIR % ("true", "input"), without("neighbours.pair.mutual"))
    found = known(unsaid, "uv", lambda case, uv: bump(case, disturbers(case.graph).of(uv.id)[0]).peak_v)
    assert found == (pytest.approx(4e-3, rel=1e-12), 0.0, ("neighbours.pair.mutual",))


def test_a_described_charge_stands_in_place_of_the_kick() -> None:
    described = """
    neighbours:
      pair: {kind: shared_reference, aggressor: uv, victim: ov, mutual: false, reference: %s, charge: 16 fC}
    """
    assert [(each.aggressor, each.via) for each in who("ov", described % "ref_fast")] == [
        ("uv", "pair"), ("uv_core", "ref_fast"),
    ]  # fmt: skip
    assert bumps("ov", described % "ref_fast")[0].peak_v == pytest.approx(16e-15 / 8e-12 / 0.25, rel=1e-12)
    # A charge on another reference is another charge.
    others = who("ov", described % "ref_main")
    assert [each.aggressor for each in others] == ["uv", "uv", "uv_core"]
    # On which, is not said: the kick might be another one.
    unsaid = who("ov", described % "ref_fast", without("neighbours.pair.reference"))
    assert [(each.aggressor, each.doubt) for each in unsaid] == [
        ("uv", ()), ("uv", ("neighbours.pair.reference",)), ("uv_core", ()),
    ]  # fmt: skip


def test_seen_is_the_peak_without_a_filter_and_less_with_one() -> None:
    case, uv = asked("uv")
    assert ignored_s(case, uv) == 0.0
    assert (found := bumps("uv")[0]).seen_v == found.peak_v
    # 200 kohm and 8 pF are 1.6 us: exp(-0.5) of 2 mV is left after 0.8 us.
    filtered = "comparators: {uv: {filter: {min: 0.8 us, max: 3 us}}}"
    assert bumps("uv", filtered)[0].seen_v == pytest.approx(2e-3 * math.exp(-0.5), rel=1e-12)


@pytest.mark.parametrize(
    ("patch", "sure_v", "best_v", "waits"),
    [
        ("comparators: {uv: {filter: null}}", 2e-3, 0.0, "comparators.uv.filter"),
        ("comparators: {uv: {filter: {max: 0.8 us}}}", 2e-3, 2e-3 * math.exp(-0.5), "comparators.uv.filter.min"),
        ("comparators: {uv: {divider: null}}", math.inf, 1e-3, "comparators.uv.divider.ratio"),
        ("comparators: {ov: {kick: null}}", math.inf, 0.0, "comparators.ov.kick"),
        ("references: {ref_fast: {decoupling: null}}", math.inf, 0.0, "references.ref_fast.decoupling"),
        ("references: {ref_fast: {decoupling: {max: 10 pF}}}", math.inf, 1.6e-3, "references.ref_fast.decoupling.min"),
    ],
)
def test_what_is_missing_of_a_kick_leaves_it_between_two_bounds(
    patch: str, sure_v: float, best_v: float, waits: str
) -> None:
    # 8 fC onto 8 pF or 10 pF, behind a divider of 0.5, or of 1 at the most; 0.8 us are half the time constant.
    found = known(both(BENCH, patch), "uv", lambda case, uv: bump(case, disturbers(case.graph).of(uv.id)[0]).seen_v)
    assert (found.sure, found.best) == pytest.approx((sure_v, best_v), rel=1e-12)
    assert waits in found.waits


@pytest.mark.parametrize(
    ("fact", "sure_v"),
    [
        ("edge", 1.8 * 2e-15 / 80e-15 / 0.25),
        ("step", math.inf),
        ("capacitance", 1.8 / 0.25),
        ("node", 1.8 / 0.25),
        ("node.resistance", 1.8 * 2e-15 / 80e-15 / 0.25),
        ("node.capacitance", 1.8 * 1e6 * 2e-15 / 20e-9 * (1 - math.exp(-10)) / 0.25),  # tau of 2 ns
        ("at", None),
    ],
)
def test_what_is_missing_of_an_edge_leaves_it_between_two_bounds(fact: str, sure_v: float | None) -> None:
    """Worst: an ideal step onto a capacitive divider of 2 fF and 78 fF, or onto nothing but the coupling."""
    pair = """
    comparators: {ov: {filter: {min: 50 ns}}}
    neighbours:
      pair: {kind: capacitance, aggressor: uv, victim: ov, mutual: false, at: input, capacitance: 2 fF, step: 1.8 V,
             edge: {min: 20 ns, max: 60 ns}, node: {resistance: 1 Mohm, capacitance: {min: 78 fF, max: 160 fF}}}
    """

    def seen_v(case: Case, ov: Comparator) -> float:
        return bump(case, disturbers(case.graph).of(ov.id)[0]).seen_v

    def peak_v(case: Case, ov: Comparator) -> float:
        return bump(case, disturbers(case.graph).of(ov.id)[0]).peak_v

    bare = without(f"neighbours.pair.{fact}")
    for ask in (seen_v, peak_v):
        whole, less = known(both(BENCH, pair), "ov", ask), known(both(BENCH, pair, bare), "ov", ask)
        assert whole.waits == () and whole.sure == whole.best
        assert less.waits != ()
        assert less.best <= whole.best <= less.sure if fact != "at" else less.best <= whole.best
    if sure_v is not None:
        assert known(both(BENCH, pair, bare), "ov", peak_v).sure == pytest.approx(sure_v, rel=1e-12)


def test_choices_of_one_number_do_not_multiply_with_those_of_another() -> None:
    unsaid = PAIR % ("false", "input")
    case, _ = asked("ov", unsaid, without("neighbours.pair.at"))
    first = disturbers(case.graph).of("ov")[0]
    found = {}
    for corner in Corner:
        case.asked.reading = Reading(corner)
        found[corner] = extreme(case, lambda: bump(case, first).seen_v, worst=math.inf, best=0.0)
        assert case.reading.options == {}
        assert case.reading.lacking == ("neighbours.pair.at",)
    assert found == {Corner.SURE: pytest.approx(8e-3), Corner.BEST: pytest.approx(2e-3)}


# What the hysteresis must cover


NEED = """
rails: {avdd: {dip: {depth: 15 mV, at: {min: 1.6 V, max: 1.65 V}}, ripple: {peak_to_peak: 10 mV},
               load_step: {max: 30 mA}, source_impedance: {max: 0.4 ohm}}}
comparators: {uv: {noise: {rms: 0.5 mV, bandwidth: 1 MHz}}}
"""


def lines(of: str, *patches: str) -> dict[str, float]:
    case, comparator = asked(of, NEED, *patches)
    return {line.name: line.value for line in need_at_coverage(case, comparator).lines}


def test_the_need_is_a_sum_of_named_terms() -> None:
    found = lines("uv")
    assert found == {
        "ripple": pytest.approx(0.010), "dip of the ramp": pytest.approx(0.015),
        "droop at release": pytest.approx(0.012), "ov through ref_fast": pytest.approx(2e-3),
        "uv_core through ref_fast": pytest.approx(0.5e-3), "noise": pytest.approx(3 * 0.5e-3),
    }  # fmt: skip
    case, uv = asked("uv", NEED)
    assert need_at_coverage(case, uv).value == pytest.approx(math.fsum(found.values()), rel=1e-12)
    # Over life, the distance of Rice's formula in place of the noise at its coverage.
    distance_v = false_trip_distance_v(
        sigma_v=0.5e-3, bandwidth_hz=1e6, life_s=10 * 365.25 * 86400, allowed_trips=0.001
    )
    life = need_over_life(case, uv)
    assert life.lines[-1].value == pytest.approx(distance_v, rel=1e-12)
    assert life.value == pytest.approx(math.fsum(found.values()) - 1.5e-3 + distance_v, rel=1e-12)
    assert least_hysteresis_v(case, uv, anywhere=False) == max(need_at_coverage(case, uv).value, life.value)
    # The level of an over-voltage detector moves away from the droop.
    assert "droop at release" not in lines("ov")


def test_many_that_kick_one_reference_are_one_term() -> None:
    crowd = ", ".join(f"d{number}: {{role: under_voltage, watches: avdd, reference: ref_fast, kick: 1 fC}}"
                      for number in range(8))  # fmt: skip
    found = lines("uv", f"comparators: {{{crowd}}}")
    assert found["10 others through ref_fast"] == pytest.approx((8e-15 + 2e-15 + 8 * 1e-15) / 8e-12 / 0.5, rel=1e-12)


def need(patch: str, line: str) -> tuple[Line, Line]:
    """A line of the need at the sure and at the best corner."""
    found = []
    for corner in (Corner.SURE, Corner.BEST):
        case, uv = asked("uv", NEED, patch)
        case.asked.reading = Reading(corner)
        found.append(next(each for each in need_at_coverage(case, uv).lines if each.name == line))
    return found[0], found[1]


@pytest.mark.parametrize(
    ("patch", "sure_v", "best_v", "waits"),
    [
        # Somewhere on the way up: between the levels, or not.
        (without("rails.avdd.dip.at"), 0.015, 0.0, {"rails.avdd.dip.at"}),
        ("rails: {avdd: {dip: {at: {max: 1.63 V}}}}", 0.015, 0.015, {"rails.avdd.dip.at.min"}),
        ("rails: {avdd: {dip: {at: {max: 1 V}}}}", 0.0, 0.0, set()),
        # However deep, it begins between the levels; of what surely lies below, the depth does not matter.
        ("rails: {avdd: {dip: {depth: {min: 1 mV}}}}", math.inf, 0.001, {"rails.avdd.dip.depth.max"}),
        (without("rails.avdd.dip"), math.inf, 0.0, {"rails.avdd.dip.depth", "rails.avdd.dip.at"}),
        # Of the levels nothing is known.
        (without("comparators.uv.trip"), 0.015, 0.0, {"comparators.uv.trip.falling", "comparators.uv.trip.rising"}),
        ("comparators: {uv: {trip: {rising: null, falling: {min: 1.66 V}}}}", 0.0, 0.0, set()),
        (
            "comparators: {uv: {trip: null, codes: {a: {rising: 1.65 V, falling: 1.6 V}}}}", 0.015, 0.0,
            {"comparators.uv.ships_with"},
        ),
    ],
)  # fmt: skip
def test_whether_a_dip_can_fall_between_the_levels_has_three_answers(
    patch: str, sure_v: float, best_v: float, waits: set[str]
) -> None:
    sure, best = need(patch, "dip of the ramp")
    assert (sure.value, best.value) == pytest.approx((sure_v, best_v), rel=1e-12)
    assert waits <= {*sure.waits, *best.waits}


UNSAID = "neighbours not described"


def unsaid(of: str, *patches: str, complete: bool = False) -> bool:
    """Whether neighbours that are not described stand in what a comparator must cover."""
    sections = "[rails, neighbours]" if complete else "[rails]"
    return UNSAID in lines(of, f"complete: {sections}", *patches)


def test_neighbours_that_are_not_described_are_not_nothing() -> None:
    assert unsaid("uv") and not unsaid("uv", complete=True)
    sure, best = need("complete: [rails]", UNSAID)
    assert (sure.value, best.value) == (math.inf, 0.0)
    assert sure.waits == best.waits == ("neighbours",)
    assert sure.of == "neighbours"


def test_a_detector_that_stands_by_itself_has_no_neighbours_to_describe() -> None:
    homes = "domains: {lone: {rail: avdd, kind: always_on}}"
    alone = "comparators: {uv: {domain: lone, reference: none}}"
    assert not unsaid("uv", homes, alone)
    assert unsaid("uv", homes, "comparators: {uv: {domain: lone}}")  # on one reference with others
    assert unsaid("uv", homes, "comparators: {uv: {reference: none}}")  # beside others in one domain
    # Where it is not said in which domain it lives, it may be beside them.
    assert unsaid("uv", homes, alone, "comparators: {uv: {domain: null}}")
    assert unsaid("uv", homes, alone, "comparators: {ov: {domain: null}}")


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
