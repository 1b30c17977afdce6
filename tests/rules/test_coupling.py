from __future__ import annotations

import math

import numpy as np
import pytest
from numpy.typing import NDArray
from scipy.integrate import solve_ivp
from scipy.optimize import brentq

from tests.rules.sound import both, changed, judged, of_kind, without
from tidegate.lint.graph.edge import path_text
from tidegate.lint.judgement import Judgement, Kind
from tidegate.lint.rule import Rule
from tidegate.rules.coupling import RULES
from tidegate.rules.hysteresis import RULES as HYSTERESIS

FAIL, PASS, OPEN, NONE = Kind.FAIL, Kind.PASS, Kind.OPEN, Kind.NOT_APPLICABLE

# Round numbers: three comparators on one reference, no filters, nobody beside anybody, no kicks.
BENCH = """
rails: {avdd: {source_impedance: 0.4 ohm}}
references: {ref_fast: {decoupling: 10 pF, source_resistance: 100 kohm}}
comparators:
  por: {kick: 0 fC}
  uv: {hysteresis: {amount: {min: 40 mV, max: 48 mV}}, divider: {ratio: 0.5}, filter: none, kick: 0 fC}
  ov: {hysteresis: {amount: {min: 20 mV, max: 28 mV}}, divider: {ratio: 0.25}, filter: none, kick: 0 fC}
  uv_core: {hysteresis: {amount: {min: 25 mV, max: 33 mV}}, divider: {ratio: 0.5}, filter: none, kick: 0 fC}
output_stages: {core_out: {driven_by: [uv_core]}, gather: {driven_by: [por_out, uv_out, ov_latch]}}
neighbours: {uv_beside_ov: null, core_return: null, switcher_on_ref: null}
"""


def said(rule: str, of: str, *patches: str) -> Judgement:
    return judged(both(BENCH, *patches), RULES)[f"coupling/{rule}", of]


def beside_hysteresis(rule: str, of: str, *patches: str) -> Judgement:
    """With the rules of hysteresis beside them, to which a level that keeps no distance is left."""
    return judged(both(BENCH, *patches), (*RULES, *HYSTERESIS))[f"coupling/{rule}", of]


def kinds(rule: str, *patches: str) -> dict[str, Kind]:
    return {
        key[1]: found.kind
        for key, found in judged(both(BENCH, *patches), RULES).items()
        if key[0] == f"coupling/{rule}"
    }


def pushes(*triples: str) -> str:
    """Pairs ``aggressor victim 25``: at the rail of the victim, 25 mA through 1 ohm."""
    entries = [
        f"p{number}: {{kind: supply_impedance, aggressor: {aggressor}, victim: {victim}, mutual: false, at: rail, "
        f"impedance: 1 ohm, current_step: {size} mA}}"
        for number, (aggressor, victim, size) in enumerate(triple.split() for triple in triples)
    ]
    return f"neighbours: {{{', '.join(entries)}}}"


def test_sound_example_keeps_every_rule() -> None:
    judgements = judged("", RULES)
    assert of_kind(judgements, FAIL, OPEN, Kind.REVIEW) == []
    pairs = {of for rule, of in judgements if rule == "coupling/bump"}
    detectors = {of for rule, of in judgements if rule != "coupling/bump"}
    assert len(judgements) == (len(RULES) - 1) * len(detectors) + len(pairs)
    passed = {rule for rule, _ in of_kind(judgements, PASS)}
    assert passed == {rule.id for rule in RULES}  # none is left without anything to say


# All that each example changes on the sound description: its own rule fails, and sums that hold no more than one bump
# are told under it.
EXPECTED: dict[str, dict[tuple[str, str], Kind]] = {
    "bump": {("bump", "uv_beside_ov"): FAIL, ("together", "ov"): NONE},
    "shared_reference": {("shared_reference", "ov"): FAIL, ("together", "ov"): NONE},
    "own_kick": {("own_kick", "ov"): FAIL},
    "together": {("together", "uv"): FAIL},
    "chain": {
        ("chain", "uv"): FAIL, ("shared_reference", "ov"): FAIL,
        ("bump", "ov_beside_core"): FAIL, ("together", "ov"): NONE, ("together", "uv_core"): NONE,
    },
    "ring": {
        ("ring", "ov"): FAIL, ("bump", "uv_beside_ov"): FAIL, ("together", "uv"): NONE, ("together", "ov"): NONE,
    },
    "supply_step": {("supply_step", "uv"): FAIL},
}  # fmt: skip


@pytest.mark.parametrize("rule", RULES, ids=lambda rule: str(rule.id))
def test_examples(rule: Rule) -> None:
    expected = EXPECTED[rule.id.partition("/")[2]]
    assert changed(rule.example.fails, RULES) == {
        (f"coupling/{name}", of): kind for (name, of), kind in expected.items()
    }
    assert changed(rule.example.holds, RULES) == {}


# bump


COUPLED = """
neighbours:
  beside: {kind: capacitance, aggressor: uv, victim: ov, mutual: false, at: input, capacitance: 2 fF, step: 1.8 V,
           edge: 80 ns,
           node: {resistance: 1 Mohm, capacitance: 98 fF}}
"""
STEP_V, EDGE_S, R_OHM, CC_F, CG_F, RATIO = 1.8, 80e-9, 1e6, 2e-15, 98e-15, 0.25


def bump_v(edge_s: float, times_s: NDArray[np.float64], cg_f: float = CG_F) -> NDArray[np.float64]:
    """SciPy's solution of (Cc + Cg) dv/dt = Cc dVs/dt - v/R for a straight edge, at the node."""
    node_f = CC_F + cg_f

    def slope(t_s: float, v: NDArray[np.float64]) -> NDArray[np.float64]:
        drive = CC_F * STEP_V / edge_s if t_s < edge_s else 0.0
        return (drive - v / R_OHM) / node_f

    solved = solve_ivp(slope, (0.0, float(times_s[-1])), [0.0], t_eval=times_s, rtol=1e-8, atol=1e-12, max_step=5e-9)
    return np.asarray(solved.y[0])


def test_bump_agrees_with_the_differential_equation() -> None:
    peak_v = float(bump_v(EDGE_S, np.linspace(0.0, 2 * EDGE_S, 401)).max())
    found = said("bump", "beside", COUPLED)
    assert found.measure is not None
    assert found.measure.have == pytest.approx(peak_v / RATIO, rel=1e-5)
    assert found.measure.need == 0.020
    assert found.kind is FAIL
    assert path_text(found.path) == "uv couples through beside to ov"
    assert (found.at, found.level) == ("neighbours.beside.capacitance", "error")


def test_bump_says_why_and_what_would_do() -> None:
    found = said("bump", "beside", COUPLED)
    # Worked out with v = V (R Cc/tr)(1 - exp(-tr/tau)): 25.0 mV at the node; and its solution for 5 mV, found by
    # SciPy's brentq.
    peak_v = STEP_V * R_OHM * CC_F / EDGE_S * -math.expm1(-EDGE_S / (R_OHM * (CC_F + CG_F))) / RATIO

    def excess_v(cg_f: float) -> float:
        return STEP_V * R_OHM * CC_F / EDGE_S * -math.expm1(-EDGE_S / (R_OHM * (CC_F + cg_f))) - 0.020 * RATIO

    enough_f = float(brentq(excess_v, 1e-15, 1e-10, xtol=1e-20))
    settled_s = R_OHM * (enough_f + CC_F) * math.log(100.0)
    assert found.message == f"uv moves the level of ov by {peak_v * 1e3:.4g} mV, at most 20 mV needed"
    assert found.why == f"a peak of {peak_v * 1e3:.4g} mV at the rail"
    assert found.mend == (
        f"at least {math.ceil(enough_f * 1e15)} fF from the disturbed node to quiet nets (now 98 fF), "
        f"which then settles to 1 % in {math.ceil(settled_s * 1e8) / 100} us"
    )
    mended = f"neighbours: {{beside: {{node: {{capacitance: {math.ceil(enough_f * 1e15)} fF}}}}}}"
    assert said("bump", "beside", COUPLED, mended).kind is PASS
    less = f"neighbours: {{beside: {{node: {{capacitance: {math.floor(enough_f * 1e15) - 1} fF}}}}}}"
    assert said("bump", "beside", COUPLED, less).kind is FAIL


# An edge in no time leaves V Cc/(Cc + Cg): 2 V through 1 fF onto 399 fF, 5 mV behind a divider of 0.25, 20 mV at the
# rail. A charge leaves Q/C: 50 fC on 10 pF, the same. A current leaves I Z.
LIMITS = (
    ("{kind: capacitance, at: input, capacitance: 1 fF, step: 2 V, edge: 0 s, "
     "node: {resistance: 1 Mohm, capacitance: %s fF}}", "400", "399", "398"),
    ("{kind: shared_reference, reference: ref_fast, charge: %s fC}", "49.9", "50", "50.1"),
    ("{kind: supply_impedance, at: rail, impedance: 4 ohm, current_step: %s mA}", "4.99", "5", "5.01"),
    ("{kind: shared_return, at: input, impedance: %s ohm, current_step: 1 mA}", "4.99", "5", "5.01"),
    ("{kind: shared_return, at: reference, impedance: %s ohm, current_step: 1 mA}", "4.99", "5", "5.01"),
)  # fmt: skip


@pytest.mark.parametrize(("pair", "inside", "limit", "beyond"), LIMITS)
def test_bump_at_its_limit(pair: str, inside: str, limit: str, beyond: str) -> None:
    for size, kind, side in ((inside, PASS, 1), (limit, PASS, 0), (beyond, FAIL, -1)):
        found = said(
            "bump", "beside", f"neighbours: {{beside: {{aggressor: core_regulator, victim: ov, {pair[1:]}}}" % size
        )
        assert found.kind is kind
        assert found.measure is not None
        assert (found.measure.margin > 0) - (found.measure.margin < 0) == side


FILTERED = both(COUPLED, "comparators: {ov: {filter: {min: 0.3 us, max: 0.9 us}}}")


def test_a_filter_sees_what_lasts_whatever_the_edge() -> None:
    # Charge balance: what stays above L for T needs L (Cc + Cg + T/R) of charge, and gets Cc V at the most.
    slow = both(FILTERED, "neighbours: {beside: {edge: {min: 80 ns, max: 1 s}}}")
    found = said("bump", "beside", slow)
    assert found.measure is not None
    seen_v = STEP_V * CC_F / (CC_F + CG_F + 0.3e-6 / R_OHM) / RATIO
    assert found.measure.have == pytest.approx(seen_v, rel=1e-12)
    assert found.why == (
        f"a peak of 99.12 mV at the rail, {seen_v * 1e3:.4g} mV after the 300 ns that the filter ignores"
    )
    # No straight edge from 80 ns on, simulated by SciPy, holds the node above that for so long.
    for edge_s in (80e-9, 150e-9, 250e-9, 300e-9, 350e-9, 500e-9):
        times_s = np.arange(0.0, edge_s + 0.6e-6, 1e-9)
        v = bump_v(edge_s, times_s)
        held_v = max(min(v[start], v[start + 300]) for start in range(len(v) - 300))
        assert held_v / RATIO <= seen_v


def test_how_slow_an_edge_can_be_is_asked_for_behind_a_filter() -> None:
    # No slower than 80 ns, too little lasts (below): whether the bump is seen hangs on the slowest edge.
    less = both(FILTERED, "neighbours: {beside: {capacitance: 1 fF, edge: {min: 80 ns}}}")
    found = said("bump", "beside", less)
    assert (found.kind, found.missing) == (PASS, ("neighbours.beside.edge.max",))  # 1.8 V 1/400 over 0.25: 18 mV
    found = said("bump", "beside", FILTERED, "neighbours: {beside: {capacitance: 2.4 fF, edge: {min: 80 ns}}}")
    assert (found.kind, found.missing) == (OPEN, ("neighbours.beside.edge.max",))
    assert found.measure is not None
    sure_v = STEP_V * 2.4e-15 / (2.4e-15 + CG_F + 0.3e-6 / R_OHM) / RATIO
    node_f = 2.4e-15 + CG_F
    best_v = STEP_V * 2.4e-15 / node_f * math.exp(-220e-9 / (R_OHM * node_f)) / RATIO
    assert (found.measure.sure_margin, found.measure.best_margin) == pytest.approx((0.020 - sure_v, 0.020 - best_v))
    assert said("bump", "beside", less, "comparators: {ov: {filter: none}}").kind is FAIL  # the peak is all there is


def test_a_filter_sees_less_of_an_edge_that_is_surely_fast() -> None:
    # All of the edge over after 80 ns, 220 ns of the 300 ns are decay: less than V Cc/C exp(-220 ns/(R C)), with the
    # node as stated, 100 fF and no more.
    found = said("bump", "beside", FILTERED)
    assert found.measure is not None
    bound_v = STEP_V * CC_F / 100e-15 * math.exp(-220e-9 / (R_OHM * 100e-15)) / RATIO
    assert found.measure.have == pytest.approx(bound_v, rel=1e-12)
    times_s = np.arange(0.0, 0.8e-6, 1e-9)
    v = bump_v(EDGE_S, times_s)
    held_v = max(min(v[start], v[start + 300]) for start in range(len(v) - 300))
    assert 0.3 * bound_v < held_v / RATIO <= bound_v


def test_a_mutual_pair_is_judged_both_ways() -> None:
    found = said("bump", "beside", COUPLED, "neighbours: {beside: {mutual: true, capacitance: 0.2 fF}}")
    # At the same node: 2.507 mV; 5.015 mV at the rail of uv (of 40 mV), twice as much at that of ov (of 20 mV).
    assert found.kind is PASS
    assert found.message.startswith("uv moves the level of ov by 10.")
    assert found.why.endswith("; the other way round 5.015 mV of 40 mV")
    # With uv the more delicate of the two, it is told.
    found = said(
        "bump", "beside", COUPLED, "neighbours: {beside: {mutual: true, capacitance: 0.2 fF}}",
        "comparators: {uv: {hysteresis: {amount: {min: 4 mV, max: 9 mV}}}}",
    )  # fmt: skip
    assert found.kind is FAIL
    assert found.message == "ov moves the level of uv by 5.015 mV, at most 4 mV needed"
    assert path_text(found.path) == "ov couples through beside to uv"


def test_a_pair_that_is_not_mutual_is_judged_one_way() -> None:
    found = said("bump", "beside", COUPLED, "comparators: {uv: {hysteresis: {amount: {min: 1 mV, max: 9 mV}}}}")
    assert found.message.startswith("uv moves the level of ov by ")
    assert "the other way round" not in found.why


def test_mends_of_the_other_kinds() -> None:
    found = said("bump", "p0", pushes("uv_out ov 25"))
    assert found.message == "uv_out moves the level of ov by 25 mV, at most 20 mV needed"
    assert found.mend == "an impedance of at most 800 mohm (now 1 ohm), or a step of at most 20 mA (now 25 mA)"
    assert found.at == "neighbours.p0.impedance"
    shared = """
    neighbours:
      on_ref: {kind: shared_reference, aggressor: core_regulator, victim: ov, reference: ref_fast, charge: 61 fC}
    """
    found = said("bump", "on_ref", shared)
    # 61 fC on 12.2 pF make 5 mV; 100 kohm times that times ln 100 is 5.618 us.
    assert found.message == "core_regulator moves the level of ov by 24.4 mV, at most 20 mV needed"
    assert found.mend == "at least 12.2 pF on ref_fast (now 10 pF), which then settles to 1 % in 5.62 us"
    assert path_text(found.path) == "core_regulator kicks ref_fast is the reference of ov"


@pytest.mark.parametrize("filtered", ["none", "{min: 0.1 us, max: 0.3 us}"])
def test_what_is_advised_is_just_enough(filtered: str) -> None:
    # For both of a mutual pair, with a filter and without: the capacitance that is named does, 2 fF less does not.
    pair = both(
        COUPLED, "neighbours: {beside: {mutual: true}}",
        f"comparators: {{ov: {{filter: {filtered}}}, uv: {{filter: {filtered}, hysteresis: {{amount: 8 mV}}}}}}",
    )  # fmt: skip
    found = said("bump", "beside", pair)
    assert found.kind is FAIL
    advised_ff = int(found.mend.split(" ")[2])
    assert found.mend.split(" ")[3] == "fF"
    for capacitance_ff, kind in ((advised_ff, PASS), (advised_ff - 2, FAIL)):
        mended = f"neighbours: {{beside: {{node: {{capacitance: {capacitance_ff} fF}}}}}}"
        assert said("bump", "beside", pair, mended).kind is kind


def under(rule: str, of: str, *patches: str) -> tuple[Kind, str, float]:
    """What is said where the rules of hysteresis are asked too: the kind, under which rule, and the margin kept."""
    found = beside_hysteresis(rule, of, *patches)
    assert found.measure is not None
    return found.kind, found.under, round(found.measure.margin, 9)


@pytest.mark.parametrize(
    ("hysteresis", "kind", "above"),
    [
        ("none", NONE, "hysteresis/present"),
        ("{amount: 0 V}", NONE, "hysteresis/present"),
        ("{amount: {min: 0 V, max: 9 mV}}", FAIL, ""),  # there is some, and nothing wrong with it but its size
    ],
)
def test_a_victim_that_keeps_nothing_is_told_under_the_hysteresis_rules(
    hysteresis: str, kind: Kind, above: str
) -> None:
    barely = f"comparators: {{ov: {{hysteresis: {hysteresis}}}}}"
    assert under("bump", "p0", pushes("uv ov 1"), barely) == (kind, above, -0.001)
    kicks = "comparators: {uv: {kick: 5 fC}, ov: {kick: 5 fC, switching_current: 10 mA}}"  # 0.5 mV, 2 mV at the rail
    assert under("shared_reference", "ov", kicks, barely) == (kind, above, -0.002)
    assert under("own_kick", "ov", kicks, barely) == (kind, above, -0.002)
    assert under("supply_step", "ov", kicks, barely) == (kind, above, -0.004)  # 10 mA through 0.4 ohm
    # A sum that one of them exceeds alone is told under that one.
    found = beside_hysteresis("together", "ov", kicks, barely)
    assert (found.kind, found.under) == (NONE, above or "coupling/shared_reference")


def test_levels_that_can_cross_keep_nothing() -> None:
    crossing = """
    comparators: {ov: {tracked: false, hysteresis: {amount: null}, trip: {rising: {min: 1.95 V, max: 1.97 V},
                                                                          falling: {min: 1.94 V, max: 1.96 V}}}}
    """
    assert under("bump", "p0", pushes("uv ov 1"), crossing) == (NONE, "hysteresis/sense", -0.001)
    asked = beside_hysteresis("bump", "p0", pushes("uv ov 1"), crossing, without("comparators.ov.tracked"))
    assert (asked.kind, asked.missing) == (OPEN, ("comparators.ov.hysteresis.amount", "comparators.ov.tracked"))


NODE = "neighbours.beside"


H, R = "comparators.ov.hysteresis.amount", "comparators.ov.trip"


@pytest.mark.parametrize(
    ("facts", "missing"),
    [
        ((f"{NODE}.at",), (f"{NODE}.at",)),
        ((f"{NODE}.capacitance",), (f"{NODE}.capacitance",)),
        ((f"{NODE}.step",), (f"{NODE}.step",)),
        ((f"{NODE}.edge",), (f"{NODE}.edge",)),
        ((f"{NODE}.node",), (f"{NODE}.node.capacitance", f"{NODE}.node.resistance")),
        ((f"{NODE}.mutual",), (f"{NODE}.mutual",)),
        (("comparators.ov.divider.ratio",), ("comparators.ov.divider.ratio",)),
        (("comparators.ov.divider",), ("comparators.ov.divider.ratio",)),
        (("comparators.ov.filter",), ("comparators.ov.filter",)),
        ((H, R), (H,)),
        ((f"{NODE}.at", f"{NODE}.step", H, R), (f"{NODE}.step", H, f"{NODE}.at")),
    ],
)  # fmt: skip
def test_bump_open(facts: tuple[str, ...], missing: tuple[str, ...]) -> None:
    """A bump of 10 mV at the input, 39.6 mV at the rail of ov and 9.9 mV at its input, of 20 mV; 1 mV kept by uv."""
    small = "comparators: {uv: {hysteresis: {amount: {min: 1 mV, max: 9 mV}}}}"
    loud = f"neighbours: {{beside: {{capacitance: {'0.3 fF' if facts == (f'{NODE}.mutual',) else '0.8 fF'}}}}}"
    before = said("bump", "beside", COUPLED, loud, small)
    after = said("bump", "beside", COUPLED, loud, small, without(*facts))
    assert (after.kind, after.missing) == (OPEN, missing)
    assert before.measure is not None
    if after.measure is not None:  # the sure end has not risen, nor the best end fallen
        assert after.measure.sure_margin <= before.measure.margin <= after.measure.best_margin


def test_what_a_missing_word_cannot_change_is_certain() -> None:
    # 24.8 mV at the rail, 99.1 mV at the input: too much of 20 mV wherever it enters.
    found = said("bump", "beside", COUPLED, without(f"{NODE}.at"))
    assert (found.kind, found.missing) == (FAIL, (f"{NODE}.at",))
    assert found.message.endswith("at least 4.78 mV short, whatever at of beside may be")
    assert found.mend == "less of what disturbs it, or more hysteresis"
    quiet = "neighbours: {beside: {capacitance: 0.1 fF}}"
    assert said("bump", "beside", COUPLED, quiet, without(f"{NODE}.at")).kind is PASS


def test_a_pair_that_does_not_say_that_it_acts_one_way_acts_both_ways() -> None:
    delicate = "comparators: {uv: {hysteresis: {amount: {min: 1 mV, max: 9 mV}}}}"
    quiet = "neighbours: {beside: {capacitance: 0.2 fF}}"  # 2.5 mV at the node: 10 mV for ov, 5 mV for uv
    unsaid = said("bump", "beside", COUPLED, quiet, delicate, without(f"{NODE}.mutual"))
    assert (unsaid.kind, unsaid.missing) == (OPEN, (f"{NODE}.mutual",))
    sure, best = (said("bump", "beside", COUPLED, quiet, delicate, f"neighbours: {{beside: {{mutual: {way}}}}}")
                  for way in ("true", "false"))  # fmt: skip
    assert unsaid.measure is not None and sure.measure is not None and best.measure is not None
    assert (sure.kind, best.kind) == (FAIL, PASS)
    assert unsaid.measure.sure_margin == pytest.approx(sure.measure.margin, rel=1e-12)
    # At best there is no other way, and the one that is described is judged alone.
    assert unsaid.measure.best_margin == pytest.approx(best.measure.margin, rel=1e-12)


@pytest.mark.parametrize(
    ("pair", "missing"),
    [
        ("{kind: shared_return, aggressor: uv, victim: ov}", ("current_step", "impedance", "at", "mutual")),
        ("{kind: shared_reference, aggressor: uv, victim: ov}", ("charge", "mutual", "reference")),
        ("{kind: capacitance, aggressor: uv, victim: ov, mutual: false, at: rail, capacitance: {min: 1 fF}, step: 1 V, "
         "edge: {max: 100 ns}, node: {resistance: 1 Mohm, capacitance: {max: 100 fF}}}",
         ("node.capacitance.min", "edge.min", "capacitance.max")),
        # 1 V through at least 1 fF within 1 ns onto 2 fF at the most makes 0.4 V and more.
        ("{kind: capacitance, aggressor: uv, victim: ov, mutual: false, at: rail, capacitance: 1 fF, step: 1 V, "
         "edge: {max: 1 ns}, node: {resistance: 1 Mohm, capacitance: {max: 1 fF}}}", ()),
    ],
)  # fmt: skip
def test_a_bare_pair_is_asked_for_all_it_lacks(pair: str, missing: tuple[str, ...]) -> None:
    found = said("bump", "beside", f"neighbours: {{beside: {pair}}}")
    if missing:
        assert (found.kind, found.missing) == (OPEN, tuple(f"neighbours.beside.{fact}" for fact in missing))
    else:
        assert found.kind is FAIL and found.message.endswith(
            "whatever least node capacitance and least edge of beside may be"
        )


def test_the_source_resistance_of_a_reference_matters_behind_a_filter_alone() -> None:
    shared = """
    neighbours: {p: {kind: shared_reference, aggressor: uv, victim: ov, mutual: false, reference: ref_fast,
                     charge: 60 fC}}
    """
    bare = without("references.ref_fast.source_resistance")
    found = said("bump", "p", shared, bare)
    assert (found.kind, found.mend) == (FAIL, "at least 12 pF on ref_fast (now 10 pF)")
    found = said("bump", "p", shared, bare, "comparators: {ov: {filter: {min: 0.3 us}}}")
    assert (found.kind, found.missing) == (OPEN, ("references.ref_fast.source_resistance",))
    found = said("bump", "p", shared, "comparators: {ov: {filter: {max: 0.3 us}}}")
    assert found.kind is PASS or found.missing == ("comparators.ov.filter.min",)
    assert said("bump", "p", shared, "comparators: {ov: {filter: {max: 0.1 us}}}").kind is FAIL  # 24 mV exp(-0.1)
    # Nothing given of a filter: all of 24 mV, or nothing.
    found = said("bump", "p", shared, without("comparators.ov.filter"))
    assert (found.kind, found.missing) == (OPEN, ("comparators.ov.filter",))
    assert found.measure is not None
    assert (found.measure.sure_margin, found.measure.best_margin) == pytest.approx((-0.004, 0.020))


def test_a_crossover_has_no_share_of_its_own() -> None:
    # Both sides of a crossover move with the rail: what reaches its comparison must be stated.
    pair = pushes("uv por 1").replace("at: rail", "at: %s")
    found = said("bump", "p0", pair % "input")
    assert (found.kind, found.missing) == (OPEN, ("comparators.por.divider.ratio",))
    assert said("bump", "p0", pair % "rail").kind is PASS


# shared_reference


@pytest.mark.parametrize(("kick", "kind"), [("49.9 fC", PASS), ("50 fC", PASS), ("50.1 fC", FAIL)])
def test_shared_reference_at_its_limit(kick: str, kind: Kind) -> None:
    # 50 fC on 10 pF are 5 mV: 20 mV at the rail of ov; uv_core sees 10 mV of its 25 mV.
    patch = f"comparators: {{uv: {{kick: {kick}}}}}"
    assert kinds("shared_reference", patch) == {"por": NONE, "uv": PASS, "ov": kind, "uv_core": PASS}


def test_shared_reference_says_why_and_what_would_do() -> None:
    found = said("shared_reference", "ov", "comparators: {uv: {kick: 61 fC}, uv_core: {kick: 20 fC}}")
    assert found.message == "uv kicks ref_fast, which moves its level by 24.4 mV, at most 20 mV needed"
    assert found.why == "61 fC onto 10 pF: a peak of 24.4 mV at the rail"
    assert found.mend == "at least 12.2 pF on ref_fast (now 10 pF), which then settles to 1 % in 5.62 us"
    assert path_text(found.path) == "uv kicks ref_fast is the reference of ov"
    assert found.at == "comparators.ov.reference"


def test_a_kick_that_has_decayed_behind_a_filter() -> None:
    # 100 kohm and 10 pF: 1 us. After 0.5 us, exp(-0.5) of the kick is left; with 10 pF or more, T/R = 5 pF is exceeded.
    patch = "comparators: {uv: {kick: 61 fC}, ov: {filter: {min: 0.5 us, max: 2 us}}}"
    found = said("shared_reference", "ov", patch)
    assert found.measure is not None
    assert found.measure.have == pytest.approx(0.0244 * math.exp(-0.5), rel=1e-12)
    assert (
        found.why == "61 fC onto 10 pF: a peak of 24.4 mV at the rail, 14.8 mV after the 500 ns that the filter ignores"
    )
    # With 4 pF to 10 pF the worst is neither end, but 5 pF: (61 fC/5 pF) exp(-1) = 4.488 mV, 17.95 mV at the rail.
    found = said("shared_reference", "ov", patch, "references: {ref_fast: {decoupling: {min: 4 pF, max: 10 pF}}}")
    assert found.measure is not None
    assert found.measure.have == pytest.approx(61e-15 / 5e-12 * math.exp(-1.0) / RATIO, rel=1e-12)


def test_shared_reference_not_applicable() -> None:
    assert said("shared_reference", "por").message == "it takes no reference"
    none = "comparators: {uv: {reference: none}, ov: {reference: none}}"
    assert said("shared_reference", "uv", none).message == "it takes no reference"
    alone = "comparators: {ov: {reference: none}, uv_core: {reference: none}}"
    assert said("shared_reference", "uv", alone).message == "no other comparator kicks ref_fast"


def test_who_might_take_the_same_reference_might_kick_it() -> None:
    loud = "comparators: {uv: {kick: 60 fC}}"  # 24 mV at the rail of ov
    assert said("shared_reference", "ov", loud).kind is FAIL
    for unsaid in ("comparators.uv.reference", "comparators.ov.reference"):
        found = said("shared_reference", "ov", loud, without(unsaid))
        assert (found.kind, found.missing) == (OPEN, (unsaid,))
    # A level that a crossover makes takes none.
    alone = "comparators: {uv_core: {reference: none}}"
    crossed = "comparators: {uv: {reference: null, crossover: {kind: divider_diode, ratio: 0.5}}}"
    assert said("shared_reference", "ov", loud, crossed, alone).message == "no other comparator kicks ref_fast"


def test_a_described_pair_stands_in_place_of_the_kick() -> None:
    described = """
    comparators: {uv: {kick: 60 fC}, uv_core: {reference: none}}
    neighbours: {p: {kind: shared_reference, aggressor: uv, victim: ov, mutual: false, reference: ref_fast,
                     charge: 30 fC}}
    """
    found = said("shared_reference", "ov", described)
    assert (found.kind, found.message) == (NONE, "no other comparator kicks ref_fast")
    pair = said("bump", "p", described)
    assert pair.measure is not None
    assert pair.measure.have == pytest.approx(0.012, rel=1e-12)
    assert said("together", "ov", described).message == "one neighbour disturbs it"
    # Onto which reference it is thrown is not said: what kicks this one might be another charge.
    unsaid = without("neighbours.p.reference")
    found = said("shared_reference", "ov", described, unsaid)
    assert (found.kind, found.missing) == (OPEN, ("neighbours.p.reference",))
    assert said("bump", "p", described, unsaid).kind is OPEN


def test_kicks_open() -> None:
    found = said("shared_reference", "ov", without("comparators.uv.kick", "comparators.uv_core.kick"))
    assert (found.kind, found.missing) == (OPEN, ("comparators.uv.kick", "comparators.uv_core.kick"))
    lost = without("references.ref_fast.decoupling", "comparators.ov.divider.ratio")
    found = said("shared_reference", "ov", "comparators: {uv: {kick: 5 fC}}", lost)
    assert found.missing == ("comparators.ov.divider.ratio", "references.ref_fast.decoupling")
    assert said("shared_reference", "ov", lost).kind is PASS  # nobody kicks it at all
    found = said("own_kick", "ov", without("comparators.ov.kick", "references.ref_fast.decoupling"))
    assert found.missing == ("comparators.ov.kick", "references.ref_fast.decoupling")
    unknown = without("comparators.ov.hysteresis.amount", "comparators.ov.trip")
    found = said("own_kick", "ov", "comparators: {ov: {kick: 5 fC}}", unknown)
    assert (found.kind, found.missing) == (OPEN, ("comparators.ov.hysteresis.amount",))
    assert said("own_kick", "ov", unknown).kind is PASS  # no charge moves it


# own_kick


@pytest.mark.parametrize(("kick", "kind"), [("49.9 fC", PASS), ("50 fC", PASS), ("50.1 fC", FAIL)])
def test_own_kick_at_its_limit(kick: str, kind: Kind) -> None:
    patch = f"comparators: {{ov: {{kick: {kick}}}}}"
    assert kinds("own_kick", patch) == {"por": NONE, "uv": PASS, "ov": kind, "uv_core": PASS}
    assert set(kinds("shared_reference", patch).values()) == {PASS, NONE}


def test_own_kick_says_why_and_what_would_do() -> None:
    found = said("own_kick", "ov", "comparators: {ov: {kick: 61 fC}}")
    assert found.message == "its own decision kicks ref_fast, which moves its level by 24.4 mV, at most 20 mV needed"
    assert found.mend == "at least 12.2 pF on ref_fast (now 10 pF), which then settles to 1 % in 5.62 us"
    assert path_text(found.path) == "ov kicks ref_fast is the reference of ov"
    assert said("own_kick", "por").message == "it takes no reference"
    assert said("own_kick", "uv", "comparators: {uv: {reference: none}}").message == "it takes no reference"


# together


@pytest.mark.parametrize(("size", "kind"), [("9.9", PASS), ("10", PASS), ("10.1", FAIL)])
def test_together_at_its_limit(size: str, kind: Kind) -> None:
    # 10 mV and 20 fC on 10 pF, 8 mV at the rail, and 5 fC more, 2 mV: 20 mV.
    patch = both(pushes(f"uv_out ov {size}"), "comparators: {uv: {kick: 20 fC}, uv_core: {kick: 5 fC}}")
    assert said("together", "ov", patch).kind is kind
    assert kinds("bump", patch) == {"p0": PASS}


def test_together_lists_the_largest_first() -> None:
    patch = both(pushes("uv_out ov 5", "uv ov 0"), "comparators: {uv: {kick: 35 fC}, uv_core: {kick: 5 fC}}")
    found = said("together", "ov", patch)
    assert found.message == "its 4 neighbours together move its level by 21 mV, at most 20 mV needed"
    assert found.why == "14 mV uv through ref_fast + 5 mV uv_out through p0 + 2 mV uv_core through ref_fast"
    assert found.mend == "less of the largest, or at least 21 mV of hysteresis; now 20 mV"
    assert (found.level, found.at) == ("warning", "comparators.ov.hysteresis")
    assert said("together", "ov", "comparators: {ov: {kick: 9 fC}}").why == "none of them moves it"


def test_together_leaves_one_fault_to_one_rule() -> None:
    found = said("together", "ov", pushes("uv_out ov 21"))
    assert (found.kind, found.under) == (NONE, "coupling/bump")
    assert (
        found.message
        == "its 3 neighbours together move its level by 21 mV, at most 20 mV needed (coupling/bump says so)"
    )
    assert found.measure is not None and found.measure.margin == pytest.approx(-0.001)
    found = said("together", "ov", "comparators: {uv: {kick: 51 fC}}")
    assert (found.kind, found.under) == (NONE, "coupling/shared_reference")
    assert said("together", "por").message == "no neighbour disturbs it"


def test_together_open() -> None:
    found = said(
        "together", "ov", pushes("uv_out ov 5"),
        without("neighbours.p0.impedance", "comparators.uv.kick", "comparators.uv_core.kick"),
    )  # fmt: skip
    assert found.missing == ("neighbours.p0.impedance", "comparators.uv.kick", "comparators.uv_core.kick")


# chain: uv keeps 40 mV, ov 20 mV, uv_core 25 mV, por 50 mV


def test_chain_of_two_toggles() -> None:
    patch = pushes("uv ov 21", "ov uv_core 26")
    found = said("chain", "uv", patch)
    assert found.kind is FAIL
    assert found.message == "its decision toggles ov, which toggles uv_core"
    assert found.why == "uv moves ov by 21 mV of 20 mV kept; ov moves uv_core by 26 mV of 25 mV kept"
    assert found.mend == "keep what uv leaves on ov at or below 20 mV"
    assert path_text(found.path) == "uv couples through p0 to ov couples through p1 to uv_core"
    assert found.level == "warning"
    # Whoever is toggled begins no chain of two by that alone.
    assert kinds("chain", patch) == {"por": NONE, "uv": FAIL, "ov": PASS, "uv_core": PASS}
    assert said("chain", "ov", patch).message == "no chain of toggles begins at it"
    # One that has two toggles left has a chain of its own, which stays once the first toggle is gone.
    longer = pushes("uv ov 21", "ov uv_core 26", "uv_core por 51")
    assert kinds("chain", longer) == {"por": NONE, "uv": FAIL, "ov": FAIL, "uv_core": PASS}


@pytest.mark.parametrize(
    ("first", "second", "kind"), [("20", "26", PASS), ("20.1", "25", PASS), ("20.1", "25.1", FAIL)]
)
def test_chain_at_its_limit(first: str, second: str, kind: Kind) -> None:
    assert said("chain", "uv", pushes(f"uv ov {first}", f"ov uv_core {second}")).kind is kind


def test_chain_goes_on_to_its_end_and_through_stages() -> None:
    found = said("chain", "uv", pushes("gather ov 21", "ov_out uv_core 26", "core_rst_n por 51"))
    assert found.message == (
        "its decision toggles ov, which toggles uv_core, which toggles por (coupling/ring says so)"  # por drives gather
    )
    assert path_text(found.path) == (
        "uv drives uv_out drives gather couples through p0 to ov drives ov_out couples through p1 to uv_core "
        "drives core_out drives core_rst_n couples through p2 to por"
    )


def test_chain_that_begins_outside_is_told_at_its_first_victim() -> None:
    patch = pushes("core_regulator ov 21", "ov uv_core 26")
    found = said("chain", "ov", patch)
    assert found.message == "core_regulator toggles ov, which toggles uv_core"
    assert found.mend == "keep what core_regulator leaves on ov at or below 20 mV"
    assert path_text(found.path) == "core_regulator couples through p0 to ov couples through p1 to uv_core"
    assert kinds("chain", patch) == {"por": NONE, "uv": PASS, "ov": FAIL, "uv_core": PASS}


def test_chain_not_applicable_or_no_chain() -> None:
    assert said("chain", "por").message == "its decision moves nobody's level"
    ring = pushes("uv ov 21", "ov uv 41")
    assert said("chain", "uv", ring).kind is PASS  # nobody else is toggled
    onward = said("chain", "uv", pushes("uv ov 21", "ov uv_core 26", "uv_core uv 41"))
    assert (onward.kind, onward.under) == (NONE, "coupling/ring")
    passed = said("chain", "uv", pushes("uv ov 12", "uv uv_core 21"))
    assert passed.message == "no chain of toggles begins at it"
    # A victim without hysteresis is another rule's to tell.
    assert said("chain", "uv", pushes("uv ov 99", "ov por 99"), "comparators: {ov: {hysteresis: none}}").kind is PASS


def test_chain_open_where_what_is_missing_might_make_one() -> None:
    lost = without("neighbours.p1.impedance")
    found = said("chain", "uv", pushes("uv ov 21", "ov uv_core 26"), lost)
    assert (found.kind, found.missing) == (OPEN, ("neighbours.p1.impedance",))
    # With a first push that toggles nobody, the second does not matter.
    assert said("chain", "uv", pushes("uv ov 19", "ov uv_core 26"), lost).kind is PASS
    # With a sure chain, another one that might be does not matter either.
    assert said("chain", "uv", pushes("uv ov 21", "ov por 1", "ov uv_core 26"), lost).kind is FAIL
    # And none of that opens the judgement of the first pair.
    assert said("bump", "p0", pushes("uv ov 21", "ov uv_core 26"), lost).kind is FAIL
    found = said(
        "chain",
        "uv",
        pushes("uv ov 21", "ov uv_core 26"),
        without("comparators.ov.hysteresis.amount", "comparators.ov.trip"),
    )
    assert (found.kind, found.missing) == (OPEN, ("comparators.ov.hysteresis.amount",))


def test_a_node_that_a_short_holds_is_moved_by_nothing() -> None:
    held = """
    neighbours:
      held: {kind: capacitance, aggressor: ov, victim: uv_core, mutual: false, at: rail, capacitance: 1 fF, step: 1 V,
             edge: 1 ns, node: {resistance: 0 ohm, capacitance: 1 fF}}
    """
    assert said("chain", "uv", pushes("uv ov 21"), held).kind is PASS
    found = said("bump", "held", held)
    assert found.measure is not None and (found.kind, found.measure.have) == (PASS, 0.0)


# ring: uv, ov and uv_core are on one reference, and judged together, at ov


@pytest.mark.parametrize(("back", "kind"), [("19.9", PASS), ("20", PASS), ("20.1", FAIL)])
def test_ring_of_two_at_its_limit(back: str, kind: Kind) -> None:
    # 40 of 20 mV there, 20 of 40 mV back: 2 times 0.5.
    patch = pushes("uv ov 40", f"ov uv {back}")
    found = said("ring", "ov", patch)
    assert found.kind is kind
    assert found.measure is not None
    assert found.measure.have**2 == pytest.approx(2.0 * float(back) / 40.0, rel=1e-12)
    assert kinds("ring", patch) == {"por": NONE, "uv": NONE, "ov": kind, "uv_core": NONE}


@pytest.mark.parametrize(("last", "kind"), [("31.9", PASS), ("32", PASS), ("32.1", FAIL)])
def test_ring_of_three_at_its_limit(last: str, kind: Kind) -> None:
    # 10/20 times 62.5/25 times 32/40: 0.5 times 2.5 times 0.8; and a weaker ring within, 0.5 times 0.1.
    patch = pushes("uv ov 10", "ov uv_core 62.5", f"uv_core uv {last}", "ov uv 4")
    found = said("ring", "ov", patch)
    assert found.kind is kind
    assert found.measure is not None
    assert found.measure.have**3 == pytest.approx(0.5 * 2.5 * float(last) / 40.0, rel=1e-12)


def test_ring_says_why_and_what_would_do() -> None:
    found = said("ring", "ov", pushes("uv ov 10", "ov_out uv_core 75", "uv_core uv 32", "ov uv_core 1"))
    assert found.message == (  # 1.2^(1/3)
        "round the ring ov - uv_core - uv, bump over hysteresis is on the geometric mean 1.063, at most 1 needed"
    )
    assert found.why == (
        "ov moves uv_core by 75 mV of 25 mV kept; uv_core moves uv by 32 mV of 40 mV kept; "
        "uv moves ov by 10 mV of 20 mV kept"
    )
    assert found.mend == "keep what ov leaves on uv_core at or below 62.5 mV; now 75 mV"
    assert path_text(found.path) == (
        "ov drives ov_out couples through p1 to uv_core couples through p2 to uv couples through p0 to ov"
    )
    assert found.level == "error"
    assert said("ring", "uv", pushes("uv ov 10", "ov uv 1")).message == "the ring it is in is judged at ov"
    assert said("ring", "por").message == "it is in no ring of neighbours"


ALONE = "comparators: {uv_core: {reference: none}}"  # on no reference that others kick


def test_ring_through_its_own_output() -> None:
    found = said("ring", "uv_core", pushes("core_out uv_core 25.1"), ALONE)
    assert found.kind is FAIL
    assert found.message == (
        "round the ring uv_core, bump over hysteresis is on the geometric mean 1.004, at most 1 needed"
    )
    assert found.why == "uv_core moves itself by 25.1 mV of 25 mV kept"
    assert path_text(found.path) == "uv_core drives core_out couples through p0 to uv_core"


def test_rings_through_a_shared_reference() -> None:
    # Each kicks the other two: 0.5 mV on the reference, 1 mV of 40 mV, 2 mV of 20 mV, 1 mV of 25 mV. The strongest way
    # round is uv - ov - uv_core or one of two; here by the mean: ov and uv_core, sqrt(0.1 * 0.04).
    found = said("ring", "ov", "comparators: {uv: {kick: 5 fC}, ov: {kick: 5 fC}, uv_core: {kick: 5 fC}}")
    assert found.kind is PASS
    assert found.measure is not None
    assert found.measure.have == pytest.approx(math.sqrt((2 / 20) * (1 / 25)), rel=1e-9)
    assert (
        path_text(found.path) == "ov kicks ref_fast is the reference of uv_core kicks ref_fast is the reference of ov"
    )


def test_two_rings_are_two_judgements() -> None:
    found = kinds("ring", pushes("uv ov 40", "ov uv 40", "uv_core por 60", "por uv_core 60"), ALONE)
    assert found == {"por": FAIL, "uv": NONE, "ov": FAIL, "uv_core": NONE}


def test_pushes_of_nothing_go_round_with_nothing() -> None:
    none = "comparators: {ov: {hysteresis: none}}"  # nobody is held against a level that keeps nothing
    for patch in (pushes("uv ov 40", "ov uv 0"), both(pushes("uv ov 40", "ov uv 40"), none)):
        assert kinds("ring", patch) == {"por": NONE, "uv": NONE, "ov": PASS, "uv_core": NONE}
        found = said("ring", "ov", patch)
        assert found.measure is not None and found.measure.have == 0.0
    # Without any way back there is no ring, whatever the sizes.
    off = "comparators: {uv: {reference: none}, ov: {reference: none}, uv_core: {reference: none}}"
    assert set(kinds("ring", pushes("uv ov 40"), off).values()) == {NONE}


def test_ring_open_where_what_is_missing_might_close_one() -> None:
    lost = without("neighbours.p1.current_step")
    found = said("ring", "ov", pushes("uv ov 1", "ov uv 1"), lost)
    assert (found.kind, found.missing) == (OPEN, ("neighbours.p1.current_step",))
    found = said("ring", "ov", pushes("uv ov 1", "ov uv_core 1", "uv_core uv 1", "ov uv 1"), lost)
    assert found.missing == ("neighbours.p1.current_step",)
    assert found.measure is not None and found.measure.sure_margin == -math.inf
    # Without the push that is not known, uv and ov are left: 1 of 20 mV and 1 of 40 mV.
    assert found.measure.best_margin == pytest.approx(1.0 - (1 / 20 * 1 / 40) ** (1 / 2))
    # A ring that is surely too strong fails all the same; and a push out of the ring does not matter.
    assert said("ring", "ov", pushes("uv ov 41", "ov uv_core 1", "uv_core uv 1", "ov uv 41"), lost).kind is FAIL
    for size, kind in (("20", OPEN), ("20.1", FAIL)):  # of 20 mV, and back 40 of 40 mV
        found = said("ring", "ov", pushes(f"uv ov {size}", "ov uv_core 1", "uv_core uv 1", "ov uv 40"), lost)
        assert found.kind is kind
    assert said("ring", "ov", pushes("uv ov 1", "ov por 1", "ov uv 1"), lost).kind is PASS
    kicked = without("comparators.uv.kick")
    assert {key for key, found in judged(both(BENCH, kicked), RULES).items() if found.kind is OPEN} == {
        ("coupling/own_kick", "uv"),
        *((f"coupling/{name}", of) for name in ("shared_reference", "together") for of in ("ov", "uv_core")),
    }  # fmt: skip


def test_a_push_onto_a_level_of_unknown_hysteresis_may_toggle_it() -> None:
    unknown = without("comparators.ov.hysteresis.amount", "comparators.ov.trip")
    there_and_back = pushes("uv ov 1", "ov uv 1")
    found = said("ring", "ov", there_and_back, unknown)
    assert (found.kind, found.missing) == (OPEN, ("comparators.ov.hysteresis.amount",))
    assert found.measure is not None and found.measure.sure_margin == -math.inf
    found = said("chain", "uv", pushes("uv ov 1", "ov uv_core 26"), unknown)
    assert (found.kind, found.missing) == (OPEN, ("comparators.ov.hysteresis.amount",))
    # A push of nothing toggles nobody, however little is kept.
    assert said("ring", "ov", pushes("uv ov 0", "ov uv 1"), unknown).kind is PASS


def test_a_stage_of_which_it_is_not_said_what_drives_it_may_close_a_ring() -> None:
    back = pushes("core_out uv_core 25.1")
    assert said("ring", "uv_core", back, ALONE).kind is FAIL
    lost = without("output_stages.core_out.driven_by")
    found = said("ring", "uv_core", back, lost, ALONE)  # itself, or another one of its circuit
    assert (found.kind, found.missing) == (OPEN, ("output_stages.core_out.driven_by",))
    assert found.measure is not None
    assert (found.measure.sure_margin, found.measure.best_margin) == pytest.approx((1.0 - 25.1 / 25.0, 1.0))


def test_the_order_of_the_file_changes_nothing() -> None:
    pairs = ("uv ov 40", "ov uv 40", "ov uv_core 40", "uv_core ov 40")
    first, last = (judged(both(BENCH, pushes(*order)), RULES) for order in (pairs, pairs[::-1]))
    for key, found in first.items():
        if key[0] in ("coupling/ring", "coupling/chain", "coupling/together"):
            assert (found.kind, found.measure) == (last[key].kind, last[key].measure)


# supply_step


@pytest.mark.parametrize(("step", "kind"), [("49.9 mA", PASS), ("50 mA", PASS), ("50.1 mA", FAIL)])
def test_supply_step_at_its_limit(step: str, kind: Kind) -> None:
    # 50 mA through 0.4 ohm: 20 mV.
    patch = f"comparators: {{ov: {{switching_current: {step}}}}}"
    assert kinds("supply_step", patch) == {"por": PASS, "uv": PASS, "ov": kind, "uv_core": NONE}


def test_supply_step_says_why_and_what_would_do() -> None:
    found = said("supply_step", "ov", "comparators: {ov: {switching_current: 61 mA}}")
    assert found.message == "its own decision moves avdd by 24.4 mV, at most 20 mV needed"
    assert found.why == "a step of 61 mA through 400 mohm"
    assert found.mend == "a step of at most 50 mA; now 61 mA"
    assert found.at == "comparators.ov.switching_current"
    assert said("supply_step", "uv_core").message == "it lives on avdd and watches vcore"
    assert said("supply_step", "ov", "rails: {avdd: {source_impedance: none}}", without(
        "comparators.ov.switching_current"
    )).kind is PASS  # fmt: skip


@pytest.mark.parametrize(
    ("facts", "missing"),
    [
        (("comparators.ov.switching_current",), ("comparators.ov.switching_current",)),
        (("rails.avdd.source_impedance",), ("rails.avdd.source_impedance",)),
        (("comparators.ov.domain",), ("comparators.ov.domain",)),
        (("domains.aon.rail",), ("domains.aon.rail",)),
        (
            ("comparators.ov.switching_current", "rails.avdd.source_impedance", "comparators.ov.hysteresis.amount",
             "comparators.ov.trip"),
            ("comparators.ov.hysteresis.amount", "comparators.ov.switching_current", "rails.avdd.source_impedance"),
        ),
    ],
)  # fmt: skip
def test_supply_step_open(facts: tuple[str, ...], missing: tuple[str, ...]) -> None:
    found = said("supply_step", "ov", without(*facts))
    assert (found.kind, found.missing) == (OPEN, missing)


def test_a_push_that_is_not_known_never_raises_the_best_end_of_a_ring() -> None:
    """The product round the strongest ring would: a longer way has a smaller product and a greater mean."""
    ways = pushes("uv ov 8", "ov uv_core 10", "uv_core uv 16", "ov uv 12")
    known = said("ring", "ov", ways)
    for lost in ("neighbours.p1.impedance", "neighbours.p2.impedance", "neighbours.p3.current_step"):
        unknown = said("ring", "ov", ways, without(lost))
        assert known.measure is not None and unknown.measure is not None
        assert unknown.measure.sure_margin <= known.measure.margin <= unknown.measure.best_margin
