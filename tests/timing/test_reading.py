"""Parts as they are read off the sound example, by hand from its text; what is missing, by name and by end."""

from __future__ import annotations

from functools import cache
from typing import Any

import pytest

from tests.rules.sound import both, patched, without
from tidegate.lint.case import Case
from tidegate.lint.derived.levels.trip_levels import TripLevel, rising_window
from tidegate.lint.description.model.detector import Comparator
from tidegate.lint.facts.reading import Corner
from tidegate.lint.graph.dependency import build
from tidegate.lint.physics.domain import DomainError
from tidegate.lint.timing import reading
from tidegate.lint.timing.interval import FOREVER_S
from tidegate.lint.timing.parts import (
    NOT_NAMED,
    NOTHING,
    Bounds,
    ComparatorPart,
    DomainPart,
    Lacks,
    LoadPart,
    RailPart,
    ResetPart,
    SourcePart,
    StagePart,
    TimedPart,
)
from tidegate.lint.timing.reading import Parts, read_parts


@cache
def read(patch: str = "") -> Parts:
    description = patched(patch).description
    return read_parts(description, build(description))


@cache
def read_best(patch: str = "") -> Parts:
    description = patched(patch).description
    return read_parts(description, build(description), Corner.BEST)


def part(name: str, patch: str = "") -> TimedPart:
    return read(patch).every[name]


def best(name: str, patch: str) -> TimedPart:
    return read_best(patch).every[name]


def forms(name: str, patch: str) -> list[Any]:
    """Everything that an element may be, where a word is missing."""
    return [read(patch).every[name], *read(patch).others.get(name, ())]


def lacks(name: str, patch: str) -> dict[str, list[str]]:
    """What is missing of an element, group by group, of those that hold something."""
    found = read(patch).lacks.get(name, Lacks())
    return {group: paths for group in ("whole", "least", "most", "own") if (paths := getattr(found, group))}


def near(least: float, most: float) -> Any:
    return Bounds(pytest.approx(least, rel=1e-12), pytest.approx(most, rel=1e-12))


def test_all_that_takes_part_is_there_and_nothing_lacks() -> None:
    found = read()
    assert set(found.parts) == {
        "avdd", "vcore", "aon", "analog", "core", "ref_fast", "ref_main", "bias_start", "bias_main", "por", "uv", "ov",
        "uv_core", "por_out", "uv_out", "ov_out", "ov_latch", "gather", "rst_out", "core_out", "por_n", "core_rst_n",
        "core_regulator", "core_logic", "adc",
    }  # fmt: skip
    assert found.refused == found.others == {}
    assert Parts.__struct_config__.frozen


def test_rails_and_domains() -> None:
    assert part("avdd") == RailPart("avdd", None, None, NOTHING)
    assert part("vcore") == RailPart("vcore", "avdd", "core_regulator", near(20e-6, 200e-6))
    assert part("aon") == DomainPart("aon", "avdd", ())
    assert part("analog") == DomainPart("analog", "avdd", ("por_n",))


@pytest.mark.parametrize(
    ("patch", "delay", "missing"),
    [
        # Nothing stands in for it, such as the time in which what makes the rail starts.
        (
            "rails: {vcore: {delay: null}}", Bounds(0.0, FOREVER_S),
            {"least": ["rails.vcore.delay"], "most": ["rails.vcore.delay"]},
        ),
        ("rails: {vcore: {delay: {max: 1 ms}}}", near(0.0, 1e-3), {"least": ["rails.vcore.delay.min"]}),
        ("rails: {vcore: {delay: {min: 1 ms}}}", near(1e-3, FOREVER_S), {"most": ["rails.vcore.delay.max"]}),
        ("rails: {vcore: {delay: null, after: null, made_by: null}}", NOTHING, {}),  # it waits for nobody
    ],
)  # fmt: skip
def test_the_delay_of_a_rail(patch: str, delay: Bounds, missing: dict[str, list[str]]) -> None:
    found = part("vcore", patch)
    assert isinstance(found, RailPart)
    assert found.delay == delay
    assert lacks("vcore", patch) == missing


@pytest.mark.parametrize(
    ("fact", "expected"),
    [
        ("domains.analog.rail", [DomainPart("analog", NOT_NAMED, ("por_n",))]),
        ("domains.analog.switched_by", [DomainPart("analog", "avdd", (NOT_NAMED,))]),
        ("domains.analog.kind", [DomainPart("analog", "avdd", ("por_n",)), DomainPart("analog", "avdd", ())]),
    ],
)
def test_a_domain_that_does_not_say_where_it_hangs_and_what_switches_it(fact: str, expected: list[DomainPart]) -> None:
    assert lacks("analog", without(fact)) == {"whole": [fact]}
    assert "analog" not in read(without(fact)).parts
    assert forms("analog", without(fact)) == expected
    neither = without("domains.analog.kind", "domains.analog.switched_by")
    assert forms("analog", neither) == [DomainPart("analog", "avdd", (NOT_NAMED,)), DomainPart("analog", "avdd", ())]


def test_a_domain_that_is_always_on_waits_for_nothing() -> None:
    assert lacks("core", "") == {}
    assert part("core") == DomainPart("core", "vcore", ())


def test_sources() -> None:
    assert part("ref_fast") == SourcePart(
        "ref_fast", "avdd", "aon", (), near(0.0, 1.06), near(5e-6, 60e-6), starts_itself=True
    )
    assert lacks("ref_fast", "") == {"least": ["references.ref_fast.works_from.min"]}
    assert part("bias_main") == SourcePart(
        "bias_main", "avdd", "analog", ("ref_fast",), near(0.0, 1.2), near(0.0, 20e-6), starts_itself=False
    )
    more = "references: {ref_main: {leans_on: [uv, ov], gated_by: por_n, start_up: none}}"
    found = part("ref_main", more)
    assert isinstance(found, SourcePart)
    assert found.needs == ("bias_main", "uv", "ov", "por_n")
    assert not found.starts_itself
    bias = part("bias_start", "biases: {bias_start: {source: ref_fast, leans_on: [uv], gated_by: por}}")
    assert isinstance(bias, SourcePart)
    assert bias.needs == ("ref_fast", "uv", "por")
    unsettled = part("ref_main", without("references.ref_main.settling"))
    assert isinstance(unsettled, SourcePart)
    assert unsettled.settling == Bounds(0.0, FOREVER_S)
    alone = part("ref_main", "references: {ref_main: {bias: none}}")
    assert isinstance(alone, SourcePart)
    assert alone.needs == ()
    gone = best("ref_main", without("references.ref_main.settling"))
    assert isinstance(gone, SourcePart)
    assert (gone.settling, gone.works_from) == (Bounds(FOREVER_S, 0.0), near(1.5, 1.5))


@pytest.mark.parametrize(
    ("patch", "missing"),
    [
        (without("references.ref_fast.domain"), {"whole": ["references.ref_fast.domain"]}),
        (without("references.ref_fast.settling"), {"least": ["references.ref_fast.settling"],
                                                   "most": ["references.ref_fast.settling"]}),
        (without("references.ref_fast.settling.max"), {"most": ["references.ref_fast.settling.max"]}),
        (without("domains.aon.rail"), {"whole": ["domains.aon.rail"]}),
    ],
)  # fmt: skip
def test_what_a_source_lacks(patch: str, missing: dict[str, list[str]]) -> None:
    works_from = "references: {ref_fast: {works_from: {min: 0.9 V, max: 1.06 V}}}"
    assert lacks("ref_fast", both(works_from, patch)) == missing


@pytest.mark.parametrize(
    ("patch", "name", "needs", "missing"),
    [
        ("references: {ref_main: {bias: null}}", "ref_main", (NOT_NAMED,), "references.ref_main.bias"),
        ("references: {ref_main: {bias: null, self_biased: null}}", "ref_main", (NOT_NAMED,),
         "references.ref_main.self_biased"),
        ("biases: {bias_main: {kind: null}}", "bias_main", ("ref_fast", NOT_NAMED), "biases.bias_main.kind"),
        ("biases: {bias_main: {source: null}}", "bias_main", (NOT_NAMED,), "biases.bias_main.source"),
        ("comparators: {uv: {bias: null}}", "uv", ("ref_fast", NOT_NAMED), "comparators.uv.bias"),
        ("comparators: {uv: {reference: null}}", "uv", ("bias_start", NOT_NAMED), "comparators.uv.reference"),
        ("comparators: {uv: {reference: none}}", "uv", ("bias_start",), ""),
    ],
)  # fmt: skip
def test_what_is_leant_on_and_not_named_may_be_anything(
    patch: str, name: str, needs: tuple[str, ...], missing: str
) -> None:
    found = part(name, patch)
    assert isinstance(found, SourcePart | ComparatorPart)
    assert found.needs == needs
    assert lacks(name, patch).get("whole", []) == ([missing] if missing else [])


def test_a_detector() -> None:
    # 0.5 % of the level for reference and divider, and three times 0.4 mV through a ratio of 0.367.
    up_v, down_v = (0.005 * level_v + 3 * 0.4e-3 / 0.367 for level_v in (1.677, 1.627))
    found = part("uv")
    assert found == ComparatorPart(
        id="uv", rail="avdd", domain="aon", watches="avdd", needs=("bias_start", "ref_fast"), armed_by=(), over=False,
        works_from=near(0.0, 1.05), rising=near(1.677 - up_v, 1.677 + up_v),
        falling=near(1.627 - down_v, 1.627 + down_v),
        filter=near(0.5e-6, 1.5e-6), delay=near(0.3e-6, 2e-6), pulse=NOTHING, undecided="undefined",
    )  # fmt: skip
    por, ov = part("por"), part("ov")
    assert isinstance(por, ComparatorPart)
    assert isinstance(ov, ComparatorPart)
    assert (por.undecided, por.over, por.needs, por.filter) == ("asserts", False, ("bias_start",), NOTHING)
    assert (ov.undecided, ov.over) == ("releases", True)
    gated = part("uv", "comparators: {uv: {armed_by: por, gated_by: bias_main}}")
    assert isinstance(gated, ComparatorPart)
    assert (gated.needs, gated.armed_by) == (("bias_start", "ref_fast", "bias_main"), ("por",))


def test_a_sample_may_miss_what_is_shorter_than_its_period() -> None:
    found = part("uv", "comparators: {uv: {sampling: {min: 2 us, max: 10 us}}}")
    assert isinstance(found, ComparatorPart)
    assert found.filter == near(0.5e-6, 11.5e-6)
    alone = part("uv", "comparators: {uv: {filter: none, sampling: {min: 2 us, max: 10 us}}}")
    assert isinstance(alone, ComparatorPart)
    assert alone.filter == near(0.0, 10e-6)


@pytest.mark.parametrize("fact", ["filter", "sampling"])
def test_a_filter_or_a_period_that_is_not_said_is_not_none(fact: str) -> None:
    gone = f"comparators: {{uv: {{{fact}: null}}}}"
    found, inner = part("uv", gone), best("uv", gone)
    assert isinstance(found, ComparatorPart)
    assert isinstance(inner, ComparatorPart)
    assert found.filter == near(0.0 if fact == "filter" else 0.5e-6, FOREVER_S)
    assert inner.filter == near(*((FOREVER_S, 0.0) if fact == "filter" else (0.5e-6, 1.5e-6)))
    assert lacks("uv", gone)["most"] == [f"comparators.uv.{fact}"]


def test_a_detector_that_says_a_pulse() -> None:
    pulse = "comparators: {uv: {output: pulse, pulse: {min: 5 us, max: 9 us}, rearms_below: {min: 0.4 V, max: 0.6 V}}}"
    found = part("uv", pulse)
    assert isinstance(found, ComparatorPart)
    assert (found.pulse, found.falling) == (near(5e-6, 9e-6), near(0.4, 0.6))
    assert lacks("uv", "comparators: {uv: {output: pulse}}") == {
        "least": ["comparators.uv.works_from.min", "comparators.uv.pulse"], "most": ["comparators.uv.pulse"],
    }  # fmt: skip
    gone = both("comparators: {uv: {rearms_below: {min: 0.4 V, max: 0.6 V}}}", without("comparators.uv.output"))
    assert lacks("uv", gone)["whole"] == ["comparators.uv.output"]
    level, as_pulse = forms("uv", gone)
    assert (level, as_pulse.falling) == (part("uv"), near(0.4, 0.6))


CODES = "codes: {a: {rising: 1.7 V, falling: 1.65 V}, b: {rising: 1.2 V, falling: 1.1 V}}"


@pytest.mark.parametrize(
    ("patch", "whole"),
    [
        (without("comparators.uv.domain"), ["comparators.uv.domain"]),
        (without("comparators.uv.trip"), ["comparators.uv.trip.rising", "comparators.uv.trip.falling"]),
        # Both levels need the same facts, which are told once.
        (without("comparators.uv.errors"), ["comparators.uv.errors"]),
        (f"comparators: {{uv: {{trip: null, {CODES}}}}}", ["comparators.uv.ships_with"]),
    ],
)
def test_what_a_detector_lacks_is_told_once(patch: str, whole: list[str]) -> None:
    assert lacks("uv", patch) == {"whole": whole, "least": ["comparators.uv.works_from.min"]}
    assert "uv" not in read(patch).parts


def test_a_level_of_which_nothing_is_said_may_lie_anywhere() -> None:
    gone = without("comparators.uv.trip")
    found, inner = part("uv", gone), best("uv", gone)
    assert isinstance(found, ComparatorPart)
    assert isinstance(inner, ComparatorPart)
    assert (found.rising, inner.rising) == (Bounds(-FOREVER_S, FOREVER_S), Bounds(FOREVER_S, -FOREVER_S))


def test_words_that_a_level_lacks_are_tried() -> None:
    """0.4 mV as three standard deviations, or as a bound: the level lies further out one way than the other."""
    gone = without("comparators.uv.errors.offset.is")
    found, inner = part("uv", gone), best("uv", gone)
    assert isinstance(found, ComparatorPart)
    assert isinstance(inner, ComparatorPart)
    wide_v, narrow_v = (0.005 * 1.627 + times * 0.4e-3 / 0.367 for times in (3, 1))
    assert found.falling == near(1.627 - wide_v, 1.627 + wide_v)
    assert inner.falling == near(1.627 - narrow_v, 1.627 + narrow_v)
    assert lacks("uv", gone)["whole"] == ["comparators.uv.errors.offset.is"]


def test_a_level_through_the_other_one_is_known_no_better_than_how_the_two_go_together() -> None:
    """Falling 1.11 V to 1.43 V and 50 mV to 70 mV of hysteresis: which has which is not said."""
    gone = without("comparators.por.trip.rising")
    found, inner = part("por", gone), best("por", gone)
    assert isinstance(found, ComparatorPart)
    assert isinstance(inner, ComparatorPart)
    assert found.rising == near(1.11 + 0.05, 1.43 + 0.07)
    assert inner.rising == near(1.11 + 0.07, 1.43 + 0.05)
    assert lacks("por", gone)["whole"] == ["comparators.por.trip.rising.min", "comparators.por.trip.rising.max"]


def test_a_detector_has_the_levels_of_the_code_it_ships_with() -> None:
    found = part("uv", f"comparators: {{uv: {{trip: null, ships_with: b, {CODES}}}}}")
    assert isinstance(found, ComparatorPart)
    # Errors are shares of the greater of the two levels of the code, 1.2 V: 0.5 % and three times 0.4 mV / 0.367.
    error_v = 0.005 * 1.2 + 3 * 0.4e-3 / 0.367
    assert found.rising == near(1.2 - error_v, 1.2 + error_v)


def test_numbers_that_cannot_be_refuse_a_part(monkeypatch: pytest.MonkeyPatch) -> None:
    """Most are refused when a file is read; what a formula refuses refuses the part alone."""

    def refuses(case: Case, comparator: Comparator) -> TripLevel:
        if comparator.id == "uv":
            raise DomainError(f"level of {comparator.id}")
        if comparator.id == "por":  # what the formula refuses may be what is missing: then nothing is known
            case.reading.block(["comparators.por.gone"])
            raise DomainError("not without what is missing")
        return rising_window(case, comparator)

    monkeypatch.setattr(reading, "rising_window", refuses)
    description = patched("").description
    found = read_parts(description, build(description))
    assert {name: str(error) for name, error in found.refused.items()} == {"uv": "level of uv"}
    assert "uv" not in found.every
    assert "ov" in found.parts
    por = found.every["por"]
    assert isinstance(por, ComparatorPart)
    assert por.rising == Bounds(-FOREVER_S, FOREVER_S)
    assert found.lacks["por"].whole == ["comparators.por.gone"]


def test_stages() -> None:
    # gather: hold low, and the nets behind it are active low; works from 0.7 V, given as the one level that it is.
    assert part("gather") == StagePart(
        id="gather", rail="avdd", domain="aon", needs=(), driven_by=("por_out", "uv_out", "ov_latch"), all_agree=False,
        works_from=near(0.7, 0.7), hold="asserts", latches=False, power_up="undefined", delay=near(5e-9, 60e-9),
        release_delay=NOTHING, discharge_s=0.0,
    )  # fmt: skip
    latch = part("ov_latch")
    assert isinstance(latch, StagePart)
    assert (latch.latches, latch.power_up, latch.hold) == (True, "releases", "none")
    last = part("rst_out")
    assert isinstance(last, StagePart)
    assert (last.release_delay, last.discharge_s) == (near(200e-6, 400e-6), pytest.approx(0.2e-6))
    assert lacks("gather", "") == {}
    gated = part(
        "gather",
        "output_stages: {gather: {gated_by: bias_main, combine: all_agree, works_from: {min: 0.5 V, max: 0.7 V}}}",
    )
    assert isinstance(gated, StagePart)
    assert (gated.needs, gated.all_agree, gated.works_from) == (("bias_main",), True, near(0.5, 0.7))


@pytest.mark.parametrize(
    ("hold", "expected"),
    [
        ("{to: low, through: resistor, resistance: 1 Mohm}", "asserts"),
        ("{to: high, through: resistor, resistance: 1 Mohm}", "releases"),
        ("none", "none"),
    ],
)
def test_what_a_hold_does_to_the_nets_behind_it(hold: str, expected: str) -> None:
    found = part("rst_out", f"output_stages: {{rst_out: {{hold: {hold}}}}}")
    assert isinstance(found, StagePart)
    assert found.hold == expected


@pytest.mark.parametrize("fact", ["resets.por_n.active", "output_stages.rst_out.hold.to"])
def test_a_hold_whose_effect_is_not_known_asserts_or_releases(fact: str) -> None:
    assert [form.hold for form in forms("rst_out", without(fact))] == ["asserts", "releases"]
    assert lacks("rst_out", without(fact))["whole"] == [fact]


def test_a_hold_of_which_nothing_is_said_may_be_any() -> None:
    assert [form.hold for form in forms("rst_out", without("output_stages.rst_out.hold"))] == [
        "none", "asserts", "releases",
    ]  # fmt: skip


def test_a_hold_that_asserts_one_net_and_releases_another_is_for_another_rule() -> None:
    """passive_default/level tells it; here the hold is taken to do what it is there for."""
    found = forms("rst_out", "resets: {other: {driven_by: [rst_out], active: high, guards: [adc], domain: aon}}")
    assert [form.hold for form in found] == ["asserts"]


@pytest.mark.parametrize(
    ("discharge", "discharge_s", "missing"),
    [
        ("{within: 0.2 us}", 0.2e-6, {}),
        ("{within: {min: 0.1 us, max: 0.3 us}}", 0.3e-6, {}),
        ("none", FOREVER_S, {}),
        ("{by: transistor, within: null}", FOREVER_S, {"most": ["output_stages.rst_out.discharge.within"]}),
        ("{within: {min: 0.1 us}}", FOREVER_S, {"most": ["output_stages.rst_out.discharge.within.max"]}),
    ],
)
def test_what_discharges_a_release_delay(discharge: str, discharge_s: float, missing: dict[str, list[str]]) -> None:
    patch = f"output_stages: {{rst_out: {{discharge: {discharge}}}}}"
    found = part("rst_out", patch)
    assert isinstance(found, StagePart)
    assert found.discharge_s == pytest.approx(discharge_s)
    assert lacks("rst_out", patch) == missing


@pytest.mark.parametrize(
    ("patch", "missing"),
    [
        (without("output_stages.rst_out.discharge"), ["output_stages.rst_out.discharge"]),
        (without("output_stages.rst_out.driven_by"), ["output_stages.rst_out.driven_by"]),
        (without("output_stages.rst_out.hold"), ["output_stages.rst_out.hold"]),
        (without("output_stages.rst_out.domain"), ["output_stages.rst_out.domain"]),
        ("output_stages: {rst_out: {kind: latch}}", ["output_stages.rst_out.power_up"]),
        ("output_stages: {rst_out: {driven_by: [gather, uv]}}", ["output_stages.rst_out.combine"]),
    ],
)
def test_what_a_stage_must_say(patch: str, missing: list[str]) -> None:
    assert lacks("rst_out", patch) == {"whole": missing}


def test_what_a_stage_may_be_where_a_word_is_missing() -> None:
    found = forms("rst_out", "output_stages: {rst_out: {driven_by: [gather, uv]}}")
    assert [form.all_agree for form in found] == [False, True]
    found = forms("ov_latch", without("output_stages.ov_latch.power_up"))
    assert [(form.latches, form.power_up) for form in found] == [
        (True, "undefined"), (True, "asserts"), (True, "releases"),
    ]  # fmt: skip
    found = forms("ov_latch", without("output_stages.ov_latch.kind"))
    assert [(form.latches, form.power_up) for form in found] == [(False, "releases"), (True, "releases")]
    assert [form.driven_by for form in forms("rst_out", without("output_stages.rst_out.driven_by"))] == [(NOT_NAMED,)]
    gone = without("output_stages.rst_out.discharge")
    assert [part("rst_out", gone).discharge_s, best("rst_out", gone).discharge_s] == [FOREVER_S, 0.0]  # type: ignore[union-attr]


def test_a_stage_without_a_delay_of_its_release_has_nothing_to_discharge() -> None:
    found = part("rst_out", without("output_stages.rst_out.release_delay", "output_stages.rst_out.discharge"))
    assert isinstance(found, StagePart)
    assert (found.release_delay, found.discharge_s) == (NOTHING, 0.0)


def test_resets() -> None:
    assert part("por_n") == ResetPart(
        "por_n", ("rst_out",), False, ("adc", "core_regulator"), "avdd", pytest.approx(0.45)
    )
    assert part("core_rst_n") == ResetPart(
        "core_rst_n", ("core_out",), False, ("core_logic", "adc"), "vcore", pytest.approx(0.3)
    )
    silent = "resets: {por_n: {driven_by: [rst_out, por], combine: all_agree, receivers: null, guards: null}}"
    assert part("por_n", silent) == ResetPart("por_n", ("rst_out", "por"), True, (), "avdd", -FOREVER_S)
    assert best("por_n", silent) == ResetPart("por_n", ("rst_out", "por"), True, (), "avdd", FOREVER_S)
    assert lacks("por_n", silent) == {"own": ["resets.por_n.receivers.threshold"]}
    upper = part("por_n", "resets: {por_n: {receivers: {threshold: {max: 1.2 V}}}}")
    assert isinstance(upper, ResetPart)
    assert upper.reads_from_v == -FOREVER_S


@pytest.mark.parametrize(
    ("patch", "whole", "expected"),
    [
        (without("resets.por_n.domain"), ["resets.por_n.domain"], [((("rst_out",)), False, NOT_NAMED)]),
        (without("resets.por_n.driven_by"), ["resets.por_n.driven_by"], [((NOT_NAMED,), False, "avdd")]),
        (
            "resets: {por_n: {driven_by: [rst_out, por]}}", ["resets.por_n.combine"],
            [(("rst_out", "por"), False, "avdd"), (("rst_out", "por"), True, "avdd")],
        ),
    ],
)  # fmt: skip
def test_what_a_reset_must_say(patch: str, whole: list[str], expected: list[Any]) -> None:
    assert lacks("por_n", patch) == {"whole": whole}
    assert [(form.driven_by, form.all_agree, form.rail) for form in forms("por_n", patch)] == expected


def test_loads() -> None:
    assert part("adc") == LoadPart(
        id="adc", works=(("avdd", near(1.6, 1.98)), ("vcore", near(1.08, 1.32))), domain="analog", needs=("ref_main",),
        ready=near(0.0, 60e-6), resets=("por_n", "core_rst_n"),
    )  # fmt: skip
    assert lacks("adc", "") == {}
    more = part("adc", "loads: {adc: {leans_on: [uv], gated_by: por, domain: null}}")
    assert isinstance(more, LoadPart)
    assert (more.needs, more.domain) == (("ref_main", "uv", "por"), NOT_NAMED)
    guarded = part("core_logic", "resets: {por_n: {guards: [core, core_logic, adc]}}")
    assert isinstance(guarded, LoadPart)
    assert guarded.resets == ("por_n", "core_rst_n")  # once, though its domain is guarded as well
    with_its_domain = part("core_logic", "resets: {por_n: {guards: [core]}}")
    assert isinstance(with_its_domain, LoadPart)
    assert with_its_domain.resets == ("core_rst_n", "por_n")
    unsaid = part("core_logic", "resets: {por_n: {guards: null}}")
    assert isinstance(unsaid, LoadPart)
    assert (unsaid.resets, unsaid.may_have_more_resets) == (("core_rst_n",), True)


@pytest.mark.parametrize(
    ("works", "surely", "perhaps", "missing"),
    [
        ("{min: 1.5 V, max: 2 V}", (1.5, 2.0), None, []),
        # Where it says but one end, the other may lie anywhere beyond it; the rail's guaranteed range says nothing.
        ("{min: 1.5 V}", (1.5, 1.5), (1.5, FOREVER_S), ["works.max"]),
        ("{max: 2 V}", (2.0, 2.0), (-FOREVER_S, 2.0), ["works.min"]),
        ("null", (FOREVER_S, -FOREVER_S), (-FOREVER_S, FOREVER_S), ["works"]),
    ],
)
def test_between_which_supplies_a_load_works(
    works: str, surely: tuple[float, float], perhaps: tuple[float, float] | None, missing: list[str]
) -> None:
    patch = f"loads: {{adc: {{needs: [{{rail: avdd, works: {works}}}]}}}}"
    found, inner = part("adc", patch), best("adc", patch)
    assert isinstance(found, LoadPart)
    assert isinstance(inner, LoadPart)
    assert found.works == (("avdd", near(*surely)),)
    assert found.may_work == ((("avdd", near(*perhaps)),) if perhaps else ())
    if perhaps:  # at the best corner the two change places
        assert (inner.works, inner.may_work) == (found.may_work, found.works)
    assert lacks("adc", patch).get("most", []) == [f"loads.adc.needs.0.{fact}" for fact in missing]


def test_a_load_that_does_not_say_what_it_needs() -> None:
    found = part("adc", "loads: {adc: {needs: null}}")
    assert isinstance(found, LoadPart)
    assert found.needs == ("ref_main", NOT_NAMED)
    assert lacks("adc", "loads: {adc: {needs: null}}") == {"whole": ["loads.adc.needs"]}


@pytest.mark.parametrize(
    ("ready", "missing"),
    [
        ("null", {"own": ["loads.adc.ready"]}),
        ("{min: 1 us}", {"own": ["loads.adc.ready.max"]}),
        ("{max: 1 us}", {}),  # ready at once at the least, which nobody need say
    ],
)
def test_the_time_to_be_ready_is_lacking_by_itself(ready: str, missing: dict[str, list[str]]) -> None:
    text = without("loads.adc.ready") if ready == "null" else f"loads: {{adc: {{ready: {ready}}}}}"
    assert lacks("adc", text) == missing
