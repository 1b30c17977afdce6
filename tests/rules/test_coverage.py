"""Coverage: rails watched, resets that guard, single points, and what nobody uses."""

from __future__ import annotations

import json
import random
from typing import Any, Final

import pytest

from tests.rules.sound import both, changed, judged, of_kind, without
from tidegate.lint.derived.reset_path.used_by import NAMED_BY
from tidegate.lint.graph.edge import path_text
from tidegate.lint.judgement import Judgement, Kind
from tidegate.rules import bypass
from tidegate.rules.coverage import RULES

FAIL, PASS, OPEN, NONE = Kind.FAIL, Kind.PASS, Kind.OPEN, Kind.NOT_APPLICABLE
UNDER: Final = "coverage/under_voltage"
OVER: Final = "coverage/over_voltage"
GUARDS: Final = "coverage/guards_something"
POINT: Final = "coverage/single_point"
USED: Final = "coverage/used"

NO_UV_CORE: Final = (
    "{comparators: {uv_core: null}, bypasses: {skip_core: null}, output_stages: {core_out: {driven_by: [gather]}}, "
    "neighbours: {core_return: null}}"
)
EXAMPLES: Final = {
    UNDER: {(UNDER, "vcore")},
    OVER: {(OVER, "vcore")},
    GUARDS: {(GUARDS, "spare_n")},
    POINT: {(POINT, "por_n")},
    USED: {(USED, "spare")},
}


def one(patch: str, rule: str, subject: str) -> Judgement:
    return judged(patch, RULES)[rule, subject]


def test_the_sound_example_keeps_every_rule() -> None:
    assert of_kind(judged("", RULES), FAIL, OPEN, Kind.REVIEW) == []


@pytest.mark.parametrize("rule", RULES, ids=lambda rule: str(rule.id))
def test_each_example_fails_in_one_place_and_holds(rule: Any) -> None:
    bad = {key for key, kind in changed(rule.example.fails, RULES).items() if kind not in (PASS, NONE)}
    assert bad == EXAMPLES[rule.id]
    assert {said.kind for key, said in judged(rule.example.holds, RULES).items() if key[0] == rule.id} <= {PASS, NONE}


# coverage/under_voltage


def test_rail_that_nobody_watches() -> None:
    said = one(NO_UV_CORE, UNDER, "vcore")
    assert said.message == "no under-voltage detector watches it, and core_logic and adc need it"
    assert said.mend == "an under-voltage detector on vcore that resets core_logic and adc"


def test_power_on_detector_counts_for_its_level_is_judged_elsewhere() -> None:
    patch = "{comparators: {uv: null}, output_stages: {uv_out: {driven_by: [ov]}}, neighbours: {uv_beside_ov: null, "
    patch += "switcher_on_ref: null}}"
    assert one(patch, UNDER, "avdd").message == "watched by por"


def test_over_voltage_detector_does_not_watch_from_below() -> None:
    patch = "comparators: {por: {watches: vcore}, uv: {watches: vcore}}"
    assert one(patch, UNDER, "avdd").kind is FAIL


def test_rail_of_a_regulator_whose_output_is_watched() -> None:
    """What feeds nothing but a regulator shows in what the regulator makes."""
    patch = "{rails: {vin: {nominal: 3.3 V}}, loads: {core_regulator: {needs: [{rail: vin}]}}}"
    said = one(patch, UNDER, "vin")
    assert (said.kind, said.message) == (PASS, "only core_regulator needs it, and what that makes is watched")
    also = both(patch, "{loads: {adc: {needs: [{rail: vin}]}}}")
    assert one(also, UNDER, "vin").message == "no under-voltage detector watches it, and adc needs it"
    assert one(both(NO_UV_CORE, patch), UNDER, "vin").kind is FAIL


def test_rail_that_no_load_needs() -> None:
    assert one("rails: {vspare: {nominal: 1.8 V}}", UNDER, "vspare").kind is NONE


def partly(patch: str, *complete: str) -> str:
    """A patch of a description in which only some sections are said to hold all that there is."""
    return both(patch, f"complete: [{', '.join(complete)}]")


def test_a_detector_that_is_not_described_is_asked_for() -> None:
    """One question, whichever rails wait for it; a description that says that it is whole has a hole instead."""
    said = one(partly(NO_UV_CORE, "rails", "loads"), UNDER, "vcore")
    assert (said.kind, said.missing) == (OPEN, ("comparators",))
    assert said.message == ("no under-voltage detector is described that watches it, and core_logic and adc need it")
    above = one(partly("comparators: {ov: {role: under_voltage}}", "rails"), OVER, "avdd")
    assert (above.kind, above.missing) == (OPEN, ("comparators",))
    assert above.message == "no over-voltage detector is described that watches it"
    assert one(partly("", "rails"), UNDER, "vcore").kind is PASS
    assert one(partly(NO_UV_CORE, "comparators"), UNDER, "vcore").kind is FAIL


def test_loads_that_are_not_described_may_need_a_rail() -> None:
    spare = "rails: {vspare: {nominal: 1.8 V, made_by: core_regulator}}"
    assert one(both(spare, without("loads.adc.needs")), UNDER, "vspare").missing == ("loads.adc.needs",)
    no_loads = "{loads: null, rails: {vcore: {made_by: null}}, modes: null, neighbours: null, resets: {por_n: {guards: "
    no_loads += "null}, core_rst_n: {guards: null}}}"
    assert one(partly(no_loads, "rails"), UNDER, "avdd").missing == ("loads",)
    assert one(partly(no_loads, "loads"), UNDER, "avdd").message == "no load needs it"


# coverage/over_voltage


@pytest.mark.parametrize(
    ("damage", "kind"), [("1.9801 V", PASS), ("1.98 V", PASS), ("1.9799 V", FAIL)], ids=["inside", "limit", "beyond"]
)
def test_damage_level_against_what_a_failing_regulator_passes_on(damage: str, kind: Kind) -> None:
    """avdd is guaranteed up to 1.98 V, and feeds the regulator that makes vcore."""
    assert one(f"rails: {{vcore: {{damage: {damage}}}}}", OVER, "vcore").kind is kind


def test_rail_below_what_can_feed_it() -> None:
    said = one("rails: {vcore: {damage: 1.6 V}}", OVER, "vcore")
    assert said.message == "not watched from above; it is damaged at 1.6 V, at least 1.98 V needed"
    assert said.why == "a failing core_regulator can pass on no more than avdd, which is guaranteed up to 1.98 V"
    assert said.mend == "an over-voltage detector on vcore"


def test_rail_from_off_the_chip_needs_a_detector() -> None:
    said = one("comparators: {ov: {role: under_voltage}}", OVER, "avdd")
    assert (said.kind, said.message) == (FAIL, "no over-voltage detector watches it, and 2.5 V damages")
    assert said.why == "it comes from off the chip, and nothing on the chip limits it"
    open_one = one("{comparators: {ov: {role: under_voltage}}, rails: {avdd: {damage: null}}}", OVER, "avdd")
    assert (open_one.kind, open_one.missing) == (OPEN, ("rails.avdd.damage",))


def test_a_damage_level_that_is_not_given_is_a_question_and_no_number() -> None:
    for patch in ("comparators: {ov: {role: under_voltage}}", ""):
        rail = "avdd" if patch else "vcore"
        said = one(both(patch, without(f"rails.{rail}.damage")), OVER, rail)
        assert (said.kind, said.missing, said.measure) == (OPEN, (f"rails.{rail}.damage",), None)
        assert "unlimited" not in said.message


def test_damage_level_with_one_end() -> None:
    """What is known to damage from 1.9 V on may damage from less: too low whatever its least is."""
    assert one("rails: {vcore: {damage: {max: 1.9 V}}}", OVER, "vcore").kind is FAIL
    said = one("rails: {vcore: {damage: {max: 2.1 V}}}", OVER, "vcore")
    assert (said.kind, said.missing) == (OPEN, ("rails.vcore.damage.min",))


def test_a_rail_of_which_it_is_not_said_what_makes_it() -> None:
    """It is known to come from off the chip only where all rails are said to be described."""
    external = "{comparators: {ov: {role: under_voltage}}}"
    assert one(partly(external, "comparators"), OVER, "avdd").missing == ("rails",)
    assert one(partly(external, "comparators", "rails"), OVER, "avdd").kind is FAIL


def test_a_rail_that_feeds_nothing_that_is_described() -> None:
    spare = "rails: {vspare: {nominal: 1.8 V}}"
    assert one(spare, OVER, "vspare").message == "it feeds nothing"
    assert one(both(spare, without("domains.core.rail")), OVER, "vspare").missing == ("domains.core.rail",)


def test_maker_that_steps_up_has_no_limit() -> None:
    """3.3 V out of 1.8 V: what feeds the maker says nothing about how high it can go."""
    said = one("rails: {vcore: {nominal: 3.3 V, damage: 4 V}}", OVER, "vcore")
    assert (said.kind, said.message) == (FAIL, "no over-voltage detector watches it, and 4 V damages")
    assert said.why == "core_regulator makes it from a lower supply, or from none that is described: nothing limits it"


@pytest.mark.parametrize("fact", ["rails.vcore.damage", "rails.vcore.nominal", "rails.avdd.guaranteed"])
def test_over_voltage_is_open_without(fact: str) -> None:
    said = one(without(fact), OVER, "vcore")
    assert (said.kind, said.missing) == (OPEN, (fact,))


# coverage/guards_something


def test_net_that_guards_nothing_or_an_empty_domain() -> None:
    net = "{{resets: {{spare_n: {{driven_by: [rst_out], active: low, {guards} domain: aon}}}}, "
    net += "domains: {{spare: {{rail: avdd, kind: always_on}}}}}}"
    assert one(net.format(guards="guards: [],"), GUARDS, "spare_n").message == "guards nothing"
    said = one(net.format(guards="guards: [spare],"), GUARDS, "spare_n")
    assert said.message == "guards spare, in which no load lives"
    assert one(net.format(guards="guards: [core],"), GUARDS, "spare_n").message == "guards core"
    missing = one(net.format(guards=""), GUARDS, "spare_n")
    assert (missing.kind, missing.missing) == (OPEN, ("resets.spare_n.guards",))


@pytest.mark.parametrize("fact", ["loads.core_logic.domain", "bypasses.skip_core.domain"])
def test_what_does_not_say_where_it_lives_may_live_in_the_domain_guarded(fact: str) -> None:
    net = "{{resets: {{spare_n: {{driven_by: [rst_out], active: low, guards: {guards}, domain: aon}}}}, "
    net += "domains: {{spare: {{rail: avdd, kind: always_on}}}}}}"
    said = one(both(net.format(guards="[spare]"), without(fact)), GUARDS, "spare_n")
    assert (said.kind, said.missing) == (OPEN, (fact,))
    assert one(both(net.format(guards="[]"), without(fact)), GUARDS, "spare_n").kind is FAIL


def test_a_domain_that_seems_empty_may_hold_loads_that_are_not_described() -> None:
    net = "{resets: {spare_n: {driven_by: [rst_out], active: low, guards: [spare], domain: aon}}, "
    net += "domains: {spare: {rail: avdd, kind: always_on}}}"
    said = one(partly(net, "resets"), GUARDS, "spare_n")
    assert (said.kind, said.missing) == (OPEN, ("loads",))
    assert said.message == "guards spare, in which no load lives that is described"
    nothing = net.replace("guards: [spare]", "guards: []")
    assert one(partly(nothing, "resets"), GUARDS, "spare_n").kind is FAIL  # that it guards nothing is said


def test_net_that_only_switches_something_on() -> None:
    assert one("resets: {por_n: {guards: []}}", GUARDS, "por_n").message == "switches analog on"


# coverage/single_point


def test_single_point_behind_every_override() -> None:
    rule = next(rule for rule in RULES if rule.id == POINT)
    said = one(rule.example.fails, POINT, "por_n")
    assert said.message == "gather stands on every way to it, and no override acts on gather or behind it"
    assert said.mend == "an override that forces released, on gather or behind it"
    assert path_text(said.path) == "gather drives rst_out drives por_n"


def test_a_stage_that_is_stuck_where_detectors_have_no_override_is_one_finding() -> None:
    """It fails by itself, and is told under the detector that has no override."""
    alone = one("bypasses: {skip_resets: null}", POINT, "por_n")
    assert alone.kind is FAIL
    with_bypass = judged("{bypasses: {skip_resets: null}, waivers: null}", (*RULES, *bypass.RULES))
    assert with_bypass["bypass/present", "por"].kind is FAIL
    under = with_bypass[POINT, "por_n"]
    assert (under.kind, under.under) == (NONE, "bypass/present")
    assert under.message.startswith("gather stands on every way to it, and no override acts on gather or behind it")


def test_overrides_of_which_nothing_is_said_may_reach_past_a_single_point() -> None:
    said = one(partly("{bypasses: null, waivers: null}", "resets"), POINT, "por_n")
    assert (said.kind, said.missing) == (OPEN, ("bypasses",))
    assert said.message == "gather stands on every way to it, and no override is described on it or behind it"
    unsaid = one(without("bypasses.skip_resets.forces"), POINT, "por_n")
    assert (unsaid.kind, unsaid.missing) == (OPEN, ("bypasses.skip_resets.forces",))


def test_single_point_is_open_where_ways_are_not_known() -> None:
    said = one(without("output_stages.uv_out.driven_by"), POINT, "por_n")
    assert (said.kind, said.missing) == (OPEN, ("output_stages.uv_out.driven_by",))


def test_single_point_is_open_where_an_override_does_not_say_what_it_overrides() -> None:
    said = one(without("bypasses.skip_resets.overrides"), POINT, "por_n")
    assert (said.kind, said.missing) == (OPEN, ("bypasses.skip_resets.overrides",))


@pytest.mark.parametrize(("combine", "kind"), [("any_asserts", FAIL), ("null", OPEN), ("all_agree", PASS)])
def test_override_on_one_of_two_ways_behind_a_single_point(combine: str, kind: Kind) -> None:
    """fork is stuck: one way is lifted, and the other still asserts unless both must agree. What is not said does not
    lift the net."""
    stage = "domain: aon, kind: buffer, hold: none"
    patch = f"""
    output_stages:
      fork: {{driven_by: [por], {stage}}}
      left: {{driven_by: [fork], {stage}}}
      right: {{driven_by: [fork], {stage}}}
      join: {{driven_by: [left, right], combine: {combine}, {stage}}}
    resets: {{forked: {{driven_by: [join], active: low, guards: [adc], domain: aon}}}}
    bypasses: {{skip_por: {{overrides: por, forces: released}}, skip_left: {{overrides: left, forces: released}}}}
    """
    said = one(patch, POINT, "forked")
    assert said.missing == (("output_stages.join.combine",) if kind is OPEN else ())
    assert (said.kind, "fork stands on every way to it" in said.message) == (kind, kind is FAIL)


@pytest.mark.parametrize("seed", range(12))
def test_single_points_against_brute_force(seed: int) -> None:
    """A random net of stages: the point named is one whose forced assertion no set of overrides undoes.

    Brute force: set a stage to asserted and every overridden element to released, and carry the states to the net.
    """
    chance = random.Random(seed)
    count = 7
    drivers: dict[str, list[str]] = {"s0": ["por"]}
    for index in range(1, count):
        earlier = [f"s{number}" for number in range(index)]
        drivers[f"s{index}"] = sorted(chance.sample(earlier, k=min(len(earlier), chance.choice((1, 1, 2)))))
    drivers["net"] = [f"s{count - 1}"]
    overridden = [f"s{index}" for index in range(count) if chance.random() < 0.3] or ["por"]
    stages = {
        name: {"driven_by": found, "combine": "any_asserts", "domain": "aon", "kind": "buffer", "hold": "none"}
        for name, found in drivers.items()
        if name != "net"
    }
    bypasses = {f"skip_{name}": {"overrides": name, "forces": "released"} for name in overridden}
    patch = json.dumps(
        {
            "output_stages": stages,
            "bypasses": {"skip_resets": None, "skip_core": None, **bypasses},
            "resets": {"net": {"driven_by": drivers["net"], "active": "low", "guards": ["adc"], "domain": "aon"}},
        }
    )

    def is_lifted(stuck: str) -> bool:
        asserts = {"por": "por" not in overridden}
        for index in range(count):
            name = f"s{index}"
            asserts[name] = name == stuck or any(asserts[driver] for driver in drivers[name])
            if name in overridden:
                asserts[name] = False
        return not asserts[drivers["net"][0]]

    def reaches(goal: str, cut: str) -> bool:
        return goal != cut and (goal == "por" or any(reaches(driver, cut) for driver in drivers[goal]))

    points = [name for name in stages if not reaches("net", name) and name not in drivers["net"]]
    said = one(patch, POINT, "net")
    stuck = [name for name in points if not is_lifted(name)]
    assert said.kind is (FAIL if stuck else PASS)
    if stuck:
        assert said.path[0].element in stuck


# coverage/used

UNUSED: Final = {
    "rails": ("spare", "rails: {spare: {nominal: 1.8 V}}", "domains: {aon: {rail: avdd}}"),
    "domains": ("spare", "domains: {spare: {rail: avdd, kind: always_on}}", "comparators: {uv: {domain: aon}}"),
    "references": ("spare", "references: {spare: {kind: external}}", "comparators: {uv: {reference: ref_fast}}"),
    "biases": ("spare", "biases: {spare: {kind: external}}", "comparators: {uv: {bias: bias_start}}"),
    "comparators": (
        "spare", "comparators: {spare: {role: under_voltage, watches: avdd, domain: aon, bias: none, reference: none}}",
        "output_stages: {uv_out: {driven_by: [uv]}}",
    ),
    "output_stages": (
        "spare", "output_stages: {spare: {driven_by: [uv], domain: aon, kind: buffer, hold: none}}",
        "output_stages: {gather: {driven_by: [por_out, uv_out, ov_latch]}}",
    ),
}  # fmt: skip


@pytest.mark.parametrize("section", UNUSED)
def test_what_nobody_uses_in_each_section(section: str) -> None:
    name, unused, used = UNUSED[section]
    found = {key: kind for key, kind in changed(unused, RULES).items() if kind not in (PASS, NONE)}
    assert found == {(USED, name): FAIL}
    assert changed(used, RULES) == {}


@pytest.mark.parametrize("section", UNUSED)
def test_what_is_not_described_may_be_the_use(section: str) -> None:
    """Only the sections that may name it are asked for, and only where they are not said to be whole."""
    name, unused, _ = UNUSED[section]
    said = one(partly(unused, "rails"), USED, name)
    assert (said.kind, said.message) == (OPEN, "nobody that is described uses it")
    assert set(said.missing) <= set(NAMED_BY[section]) and said.missing
    assert one(partly(unused, *said.missing), USED, name).kind is FAIL


def test_what_a_description_leaves_out_may_be_the_use() -> None:
    patch = both("references: {spare: {kind: external}}", without("comparators.uv.reference"))
    said = one(patch, USED, "spare")
    assert (said.kind, said.missing) == (OPEN, ("comparators.uv.reference",))
    bias = both("biases: {spare: {kind: external}, other: {domain: aon}}")
    assert one(bias, USED, "spare").missing == ("biases.other.kind",)
    domain = both("domains: {spare: {rail: avdd, kind: always_on}}", without("resets.core_rst_n.domain"))
    assert one(domain, USED, "spare").missing == ("resets.core_rst_n.domain",)


def test_to_switch_the_levels_of_another_detector_is_a_use() -> None:
    stage = "output_stages: {tap: {driven_by: [uv], domain: aon, kind: inverter, hold: none}}"
    assert one(stage, USED, "tap").kind is FAIL
    turned = "comparators: {uv_core: {hysteresis: {switches: {0: {turned_by: tap}}}}}"
    assert one(both(stage, turned), USED, "tap").kind is PASS


def test_detectors_of_a_description_without_reset_nets_are_not_called_unused() -> None:
    assert one("", USED, "por").kind is PASS
    patch = "{resets: null, domains: {analog: null}, output_stages: null, bypasses: null, neighbours: null, "
    patch += "references: {ref_main: null}, biases: {bias_main: null}, modes: null, waivers: null, loads: null, "
    patch += "rails: {vcore: {made_by: null}}, comparators: {ov: {hysteresis: {switches: null}}}}"
    said = one(patch, USED, "por")
    assert (said.kind, said.message) == (NONE, "there is no reset net that it could drive")
    unsaid = one(partly(patch, "comparators"), USED, "por")
    assert (unsaid.kind, unsaid.missing) == (OPEN, ("resets",))
