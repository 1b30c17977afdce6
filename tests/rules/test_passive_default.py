from __future__ import annotations

import math
from typing import Final

import pytest

from tests.rules.sound import both, changed, judged, of_kind, without
from tidegate.lint.graph.edge import path_text
from tidegate.lint.judgement import Judgement, Kind
from tidegate.lint.rule import Rule
from tidegate.rules.passive_default import RULES

HELD: Final = "passive_default/held"
ALIVE: Final = "passive_default/chain_alive"
LEVEL: Final = "passive_default/level"
STRENGTH: Final = "passive_default/hold_strength"
DRIVER: Final = "passive_default/driver_wins"
BUDGET: Final = "passive_default/holds_within_budget"
LATCH: Final = "passive_default/latch_state"
HELD_STAGES: Final = ("gather", "rst_out", "core_out")
OF_A_HOLD: Final = (ALIVE, LEVEL, STRENGTH, DRIVER)


def one(patch: str, rule: str, subject: str) -> Judgement:
    return judged(patch, RULES)[rule, subject]


# What the sound example gives


def test_sound_example_keeps_every_rule() -> None:
    assert of_kind(judged("", RULES), Kind.FAIL, Kind.OPEN, Kind.REVIEW) == []


def test_rules_that_have_nothing_to_say_on_the_sound_example() -> None:
    loose = ("por_out", "uv_out", "ov_out", "ov_latch")
    no_latch = ("por_out", "uv_out", "ov_out", "gather", "rst_out", "core_out")
    expected = {(BUDGET, "analog"), (BUDGET, "core"), *((LATCH, stage) for stage in no_latch)}
    expected |= {(rule, stage) for stage in loose for rule in OF_A_HOLD}
    assert set(of_kind(judged("", RULES), Kind.NOT_APPLICABLE)) == expected
    assert one("", LEVEL, "uv_out").message == "nothing holds its output"
    assert one("", BUDGET, "core").message == "nothing in it is held"
    assert one("", LATCH, "gather").message == "it is no latch"


# Examples: one fault, and exactly the judgements that it changes

FAULTS: Final = {
    HELD: {
        (HELD, "por_n"): Kind.FAIL,
        **{(rule, "rst_out"): Kind.NOT_APPLICABLE for rule in OF_A_HOLD},
    },
    ALIVE: {
        (ALIVE, "gather"): Kind.FAIL,
        **{(rule, "stretch"): Kind.NOT_APPLICABLE for rule in (*OF_A_HOLD, LATCH)},  # the new stage
    },
    LEVEL: {(LEVEL, "rst_out"): Kind.FAIL},
    STRENGTH: {(STRENGTH, "rst_out"): Kind.FAIL},
    DRIVER: {(DRIVER, "rst_out"): Kind.FAIL},
    BUDGET: {(BUDGET, "aon"): Kind.FAIL},
    LATCH: {(LATCH, "ov_latch"): Kind.FAIL},
}


@pytest.mark.parametrize("rule", RULES, ids=lambda rule: rule.id)
def test_example_fails_alone_and_holds(rule: Rule) -> None:
    assert changed(rule.example.fails, RULES) == FAULTS[rule.id]
    mended = changed(rule.example.holds, RULES)
    assert set(mended.values()) <= {Kind.NOT_APPLICABLE}, "nothing but what a new stage has nothing to say on"


# Facts that are missing

OPEN: Final = (
    (
        "resets.por_n.driven_by",  # any of the held stages may drive it
        {
            (HELD, "por_n"): ["resets.por_n.driven_by"],
            **{(rule, stage): ["resets.por_n.driven_by"] for rule in OF_A_HOLD for stage in HELD_STAGES},
        },
    ),
    (
        "output_stages.rst_out.hold",
        {
            (HELD, "por_n"): ["output_stages.rst_out.hold"], (BUDGET, "aon"): ["output_stages.rst_out.hold"],
            **{(rule, "rst_out"): ["output_stages.rst_out.hold"] for rule in OF_A_HOLD},
        },
    ),
    (
        "output_stages.gather.hold",
        {
            (BUDGET, "aon"): ["output_stages.gather.hold"],
            **{(rule, "gather"): ["output_stages.gather.hold"] for rule in OF_A_HOLD},
        },
    ),
    ("output_stages.rst_out.hold.to", {(LEVEL, "rst_out"): ["output_stages.rst_out.hold.to"]}),  # strong either way
    (
        "output_stages.rst_out.hold.resistance",
        {
            (STRENGTH, "rst_out"): ["output_stages.rst_out.hold.resistance"],
            (DRIVER, "rst_out"): ["output_stages.rst_out.hold.resistance"],
            (BUDGET, "aon"): ["output_stages.rst_out.hold.resistance"],
        },
    ),
    (
        "output_stages.rst_out.hold.resistance.min",
        {
            (DRIVER, "rst_out"): ["output_stages.rst_out.hold.resistance.min"],
            (BUDGET, "aon"): ["output_stages.rst_out.hold.resistance.min"],
        },
    ),
    (
        "output_stages.rst_out.hold.resistance.max",
        {(STRENGTH, "rst_out"): ["output_stages.rst_out.hold.resistance.max"]},
    ),
    ("output_stages.rst_out.hold.coupling", {(STRENGTH, "rst_out"): ["output_stages.rst_out.hold.coupling"]}),
    ("output_stages.rst_out.leakage", {(STRENGTH, "rst_out"): ["output_stages.rst_out.leakage"]}),
    ("output_stages.rst_out.consumes", {(BUDGET, "aon"): ["output_stages.rst_out.consumes"]}),
    ("output_stages.rst_out.load", {}),  # 4 fF alone, through 1.2 Mohm, add 172.8 uV too: the ramp is slow
    ("output_stages.rst_out.drive", {(DRIVER, "rst_out"): ["output_stages.rst_out.drive"]}),
    ("output_stages.rst_out.inverting", {}),  # a buffer, which says it
    (
        "output_stages.rst_out.threshold",
        {
            (STRENGTH, "gather"): ["output_stages.rst_out.threshold"],
            (DRIVER, "gather"): ["output_stages.rst_out.threshold"],
        },
    ),
    (
        "output_stages.rst_out.domain",
        {
            (STRENGTH, "rst_out"): ["output_stages.rst_out.domain"],
            (DRIVER, "rst_out"): ["output_stages.rst_out.domain"],
        },  # it fits into the budget of each domain
    ),
    (
        "resets.por_n.receivers",
        {
            (STRENGTH, "rst_out"): ["resets.por_n.receivers.leakage", "resets.por_n.receivers.threshold"],
            (DRIVER, "rst_out"): ["resets.por_n.receivers.threshold"],
        },
    ),
    ("resets.por_n.receivers.leakage", {(STRENGTH, "rst_out"): ["resets.por_n.receivers.leakage"]}),
    ("resets.por_n.receivers.threshold.min", {(STRENGTH, "rst_out"): ["resets.por_n.receivers.threshold.min"]}),
    ("resets.por_n.receivers.threshold.max", {(DRIVER, "rst_out"): ["resets.por_n.receivers.threshold.max"]}),
    (
        "resets.por_n.active",
        {(LEVEL, "gather"): ["resets.por_n.active"], (LEVEL, "rst_out"): ["resets.por_n.active"]},
    ),
    ("rails.avdd.nominal", {(STRENGTH, stage): ["rails.avdd.nominal"] for stage in HELD_STAGES}),
    ("rails.avdd.rise", {}),  # a step of 1.8 V through 4 fF of 400 fF, the worst of the three, adds 18 mV
    (
        "rails.avdd.delivered",
        {
            (BUDGET, "aon"): ["rails.avdd.delivered"],
            **{(DRIVER, stage): ["rails.avdd.delivered"] for stage in HELD_STAGES},
        },
    ),
    ("domains.aon.budget", {(BUDGET, "aon"): ["domains.aon.budget"]}),
    (
        "domains.aon.rail",
        {
            (BUDGET, "aon"): ["domains.aon.rail"],
            **{(rule, stage): ["domains.aon.rail"] for rule in (STRENGTH, DRIVER) for stage in HELD_STAGES},
        },
    ),
    ("references.ref_fast.consumes", {(BUDGET, "aon"): ["references.ref_fast.consumes"]}),
    ("biases.bias_start.consumes", {(BUDGET, "aon"): ["biases.bias_start.consumes"]}),
    ("comparators.uv.consumes", {(BUDGET, "aon"): ["comparators.uv.consumes"]}),
    ("output_stages.ov_latch.kind", {}),  # if it is a latch, it comes up defined
    ("output_stages.ov_latch.power_up", {(LATCH, "ov_latch"): ["output_stages.ov_latch.power_up"]}),
)  # fmt: skip


@pytest.mark.parametrize(("fact", "expected"), OPEN, ids=[fact for fact, _ in OPEN])
def test_missing_fact_is_open_and_named(fact: str, expected: dict[tuple[str, str], list[str]]) -> None:
    said = judged(without(fact), RULES)
    assert {key: list(said[key].missing) for key in of_kind(said, Kind.OPEN)} == expected
    assert of_kind(said, Kind.FAIL) == []


def test_all_that_is_missing_is_named_at_once() -> None:
    patch = without(
        "output_stages.rst_out.leakage", "output_stages.rst_out.hold.coupling", "output_stages.rst_out.load",
        "resets.por_n.receivers", "rails.avdd.nominal", "rails.avdd.rise",
    )  # fmt: skip
    assert set(one(patch, STRENGTH, "rst_out").missing) == {
        "output_stages.rst_out.leakage", "output_stages.rst_out.hold.coupling", "output_stages.rst_out.load",
        "resets.por_n.receivers.leakage", "resets.por_n.receivers.threshold", "rails.avdd.nominal", "rails.avdd.rise",
    }  # fmt: skip
    homeless = without("output_stages.rst_out.domain", "output_stages.rst_out.drive", "resets.por_n.receivers")
    assert set(one(homeless, DRIVER, "rst_out").missing) == {
        "output_stages.rst_out.domain", "resets.por_n.receivers.threshold",
    }  # fmt: skip
    everyone = without("references.ref_fast.consumes", "comparators.ov.consumes", "domains.aon.budget")
    assert set(one(everyone, BUDGET, "aon").missing) == {
        "references.ref_fast.consumes", "comparators.ov.consumes", "domains.aon.budget",
    }  # fmt: skip


def test_a_hold_that_is_not_described_hides_no_question() -> None:
    """Nothing is called not applicable for want of a fact; each rule waits for the same one."""
    for stage in ("rst_out", "gather"):
        for rule in OF_A_HOLD:
            said = one(without(f"output_stages.{stage}.hold"), rule, stage)
            assert (said.kind, said.missing) == (Kind.OPEN, (f"output_stages.{stage}.hold",))


def test_what_is_not_known_leaves_the_margin_of_the_rest() -> None:
    """22 nA less the 20 nA of the stage, through 1.2 Mohm, and 172.8 uV of the ramp against 450 mV."""
    said = one(without("output_stages.rst_out.leakage"), STRENGTH, "rst_out")
    assert said.measure is not None
    assert (said.measure.sure, said.measure.best) == (
        -math.inf,
        pytest.approx(0.45 - 2e-9 * 1.2e6 - 172.8e-6, rel=1e-6),
    )
    assert said.message.endswith("so far, before leakage through the hold")
    # The hold of rst_out may take anything; the rest takes its part of the budget.
    budget = one(without("output_stages.rst_out.hold"), BUDGET, "aon").measure
    assert budget is not None
    assert budget.best == pytest.approx(12e-6 - (TAKEN_A - 1.89 / 0.8e6), rel=1e-9)


def test_what_fails_already_fails_whatever_else_is_not_given() -> None:
    """500 nA through 1.2 Mohm are 600 mV against 450 mV, whatever the ramp adds."""
    leaks = "resets: {por_n: {receivers: {leakage: {max: 500 nA}}}}"
    said = one(both(leaks, without("rails.avdd.nominal", "output_stages.rst_out.leakage")), STRENGTH, "rst_out")
    assert said.kind is Kind.FAIL
    assert said.measure is not None
    assert said.measure.best_margin == pytest.approx(0.45 - 0.6)
    assert said.message.endswith("at least 150 mV short, whatever leakage of rst_out and nominal of avdd may be")
    strict = "output_stages: {core_out: {threshold: {min: 20 mV, max: 1.25 V}}}"
    said = one(both(strict, without("output_stages.rst_out.threshold")), STRENGTH, "gather")
    assert said.kind is Kind.FAIL  # 24.09 mV; the other reader can only ask for less
    over = one(both("domains: {aon: {budget: 5 uA}}", without("references.ref_fast.consumes")), BUDGET, "aon")
    assert (over.kind, over.missing) == (Kind.FAIL, ("references.ref_fast.consumes",))


def test_a_stage_that_does_not_say_where_it_lives_may_live_anywhere() -> None:
    """core holds nothing else, and has no room for the hold of rst_out: 1.26 V through 0.8 Mohm are 1.575 uA."""
    tight = both("domains: {core: {budget: 1 uA}}", without("output_stages.rst_out.domain"))
    assert one(tight, BUDGET, "core").missing == ("output_stages.rst_out.domain",)
    assert one("domains: {core: {budget: 1 uA}}", BUDGET, "core").kind is Kind.NOT_APPLICABLE
    loose = both("domains: {core: {budget: 1 uA}}", without("output_stages.uv_out.domain", "comparators.ov.domain"))
    assert judged(loose, RULES)[BUDGET, "core"].kind is Kind.NOT_APPLICABLE  # they are not held


# passive_default/held


def test_net_without_a_hold() -> None:
    said = one("output_stages: {rst_out: {hold: none}}", HELD, "por_n")
    assert said.kind is Kind.FAIL
    assert said.message == "nothing holds the output of rst_out, which drives it"
    assert said.mend == "hold the output of rst_out low through a resistor"
    assert said.at == "resets.por_n.driven_by"
    assert path_text(said.path) == "rst_out drives por_n"


DIRECT: Final = "resets: {core_rst_n: {driven_by: [uv_core]}}"


def undecided(**outputs: str) -> str:
    """A patch that says what detectors do while they cannot decide."""
    return f"comparators: {{{', '.join(f'{name}: {{undecided: {word}}}' for name, word in outputs.items())}}}"


def test_net_that_a_detector_drives_directly_is_open_until_it_is_said() -> None:
    """A detector drawn straight onto its net, as a bought one is, is no fault; what its output does can be said."""
    said = one(DIRECT, HELD, "core_rst_n")
    assert (said.kind, said.missing) == (Kind.OPEN, ("comparators.uv_core.undecided",))
    kept = one(both(DIRECT, undecided(uv_core="asserts")), HELD, "core_rst_n")
    assert (kept.kind, kept.message) == (Kind.PASS, "held by uv_core")
    loose = one(both(DIRECT, undecided(uv_core="undefined")), HELD, "core_rst_n")
    assert loose.kind is Kind.FAIL
    assert loose.message == "driven directly by uv_core, whose output is not defined while it cannot decide"
    assert loose.mend == "put a stage with an output held low between uv_core and the net"
    assert path_text(loose.path) == "uv_core drives core_rst_n"


def test_a_detector_that_lets_go_meanwhile_needs_another_that_does_not() -> None:
    alone = one(both(DIRECT, undecided(uv_core="releases")), HELD, "core_rst_n")
    assert alone.kind is Kind.FAIL
    assert alone.message == "uv_core lets it go while unable to decide, and nothing else keeps it in reset"
    assert path_text(alone.path) == "uv_core drives core_rst_n"
    pair = "resets: {core_rst_n: {driven_by: [uv_core, ov], combine: COMBINE}}"
    lets_go = undecided(uv_core="asserts", ov="releases")
    kept = one(both(pair.replace("COMBINE", "any_asserts"), lets_go), HELD, "core_rst_n")
    assert (kept.kind, kept.message) == (Kind.PASS, "held by uv_core")
    agree = one(both(pair.replace("COMBINE", "all_agree"), lets_go), HELD, "core_rst_n")
    assert agree.message == "ov lets it go while unable to decide, and all must agree"
    unsaid = one(both(pair.replace("COMBINE", "null"), lets_go), HELD, "core_rst_n")
    assert (unsaid.kind, unsaid.missing) == (Kind.OPEN, ("resets.core_rst_n.combine",))
    two = one(both(pair.replace("COMBINE", "null"), undecided(uv_core="releases", ov="releases")), HELD, "core_rst_n")
    assert two.message == "uv_core and ov let it go while unable to decide, and nothing else keeps it in reset"


def test_one_held_driver_of_several_is_not_enough() -> None:
    drivers = "resets: {por_n: {driven_by: [rst_out, uv, uv_out, ov_out]}}"
    said = one(both(drivers, undecided(uv="undefined")), HELD, "por_n")
    assert said.kind is Kind.FAIL
    assert said.message == (
        "driven directly by uv, whose output is not defined while it cannot decide; "
        "nothing holds the output of uv_out and of ov_out, which drives it"
    )
    assert path_text(said.path) == "uv drives por_n"
    unsaid = one(drivers, HELD, "por_n")  # the two stages fail it, whatever the detector does
    assert unsaid.message == "nothing holds the output of uv_out and of ov_out, which drives it"
    assert path_text(unsaid.path) == "uv_out drives por_n"
    bare = one(
        both("resets: {por_n: {driven_by: [por, uv]}}", undecided(por="undefined", uv="undefined")), HELD, "por_n"
    )
    assert bare.message == "driven directly by por and uv, whose output is not defined while it cannot decide"
    assert path_text(bare.path) == "por drives por_n"
    mixed = one("resets: {por_n: {driven_by: [por, uv]}}", HELD, "por_n")  # por asserts
    assert (mixed.kind, mixed.missing) == (Kind.OPEN, ("comparators.uv.undecided",))
    level = both("resets: {por_n: {driven_by: [por], active: null}}", undecided(por="undefined"))
    assert one(level, HELD, "por_n").mend == "put a stage with an output held between por and the net"
    stages = one("resets: {por_n: {driven_by: [rst_out, core_out]}}", HELD, "por_n")
    assert (stages.kind, stages.message) == (Kind.PASS, "held by rst_out and core_out")


def test_net_without_drivers_is_open() -> None:
    assert one("resets: {por_n: {driven_by: null}}", HELD, "por_n").missing == ("resets.por_n.driven_by",)


def test_unheld_net_fails_although_another_hold_is_not_described() -> None:
    patch = """
output_stages: {rst_out: {hold: none}, core_out: {hold: null}}
resets: {por_n: {driven_by: [rst_out, core_out]}}
"""
    assert one(patch, HELD, "por_n").kind is Kind.FAIL


# passive_default/holds_within_budget

TAKEN_A: Final = math.fsum(
    (
        1.89 / 1.6e6, 1.89 / 0.8e6, 1.89 / 0.8e6,  # holds of gather, rst_out and core_out at their least
        1.2e-6, 0.2e-6, 0.4e-6, 0.35e-6, 0.35e-6, 0.35e-6,  # reference, bias and four comparators
        4 * 5e-9, 5e-9, 10e-9, 15e-9,  # the seven stages
    )
)  # fmt: skip


@pytest.mark.parametrize(("budget", "kind"), [("8.80624", "fail"), ("8.80625", "pass"), ("8.80626", "pass")])
def test_budget_at_its_limit(budget: str, kind: str) -> None:
    said = one(f"domains: {{aon: {{budget: {budget} uA}}}}", BUDGET, "aon")
    assert pytest.approx(8.80625e-6, rel=1e-12) == TAKEN_A
    assert said.measure is not None
    assert said.measure.have == pytest.approx(TAKEN_A, rel=1e-12)
    assert said.kind == kind


def test_budget_that_is_exceeded() -> None:
    said = one("domains: {aon: {budget: 5 uA}}", BUDGET, "aon")
    assert said.message == "its holds and circuits take 8.806 uA, at most 5 uA needed"
    assert said.why == (
        "hold of rst_out 2.362 uA, hold of core_out 2.362 uA, ref_fast 1.2 uA, hold of gather 1.181 uA, 12 more 1.7 uA"
    )
    assert said.mend == "take 3.81 uA less, or a budget of at least 8.81 uA"


def test_what_a_stage_is_said_to_take_counts() -> None:
    said = one(
        "{domains: {aon: {budget: 9 uA}}, output_stages: {por_out: {consumes: {typ: 0.1 uA, max: 0.3 uA}}}}",
        BUDGET, "aon",
    )  # fmt: skip
    assert said.measure is not None
    assert said.measure.have == pytest.approx(TAKEN_A + 0.3e-6 - 5e-9, rel=1e-12)
    assert said.kind is Kind.FAIL


def test_stage_that_is_moved_takes_its_hold_along() -> None:
    said = judged("output_stages: {rst_out: {domain: core}}", RULES)
    here, there = said[BUDGET, "aon"].measure, said[BUDGET, "core"].measure
    assert here is not None
    assert there is not None
    assert here.have == pytest.approx(TAKEN_A - 1.89 / 0.8e6 - 10e-9, rel=1e-12)
    assert there.have == pytest.approx(1.26 / 0.8e6 + 10e-9, rel=1e-12)


# passive_default/latch_state


def test_latch_that_comes_up_either_way() -> None:
    said = one("output_stages: {ov_latch: {power_up: undefined}}", LATCH, "ov_latch")
    assert (said.kind, said.message) == (Kind.FAIL, "it comes up in either state")
    assert said.mend == "let a power-on detector set or reset it, or make it lopsided"
    assert one("", LATCH, "ov_latch").message == "it releases when its supply comes up"
    asserts = one("output_stages: {ov_latch: {power_up: asserts}}", LATCH, "ov_latch")
    assert asserts.message == "it asserts when its supply comes up"
