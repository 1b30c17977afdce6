"""Levels made without a reference, as judged."""

from __future__ import annotations

import math

import pytest
from scipy.optimize import brentq

from tests.rules.sound import both, judged, without
from tidegate.lint.judgement import Judgement, Kind
from tidegate.rules import self_bias
from tidegate.rules.trip_crossover import RULES

FAIL, PASS, OPEN, NONE = Kind.FAIL, Kind.PASS, Kind.OPEN, Kind.NOT_APPLICABLE


def said(rule: str, *patches: str, of: str = "por") -> Judgement:
    return judged(both(*patches) if patches else "", RULES)[f"trip_window/{rule}", of]


def corner_v(*, t_k: float, threshold_v: float, r_ohm: float, offset_v: float) -> float:
    """The level of the sound example's power-on detector at one corner: SciPy's root of the current balance.

    nmos_long: 0.35 mV/K, 68 mV per decade at 25 degC; 26 uA/V^2; half of the supply is compared.
    """
    thermal_v = 8.617333262e-5 * t_k
    n = 0.068 / (8.617333262e-5 * 298.15 * math.log(10))
    vth_v = threshold_v - 0.35e-3 * (t_k - 298.15)

    def surplus(supply_v: float) -> float:
        gate_v = 0.5 * supply_v - offset_v
        inversion = math.log1p(math.exp((gate_v - vth_v) / (2 * n * thermal_v)))
        return 2 * n * 26e-6 * thermal_v**2 * inversion**2 - (supply_v - gate_v) / r_ohm

    root_v: float = brentq(surplus, 0.5, 3.0, xtol=1e-13)
    return root_v


LOWEST_V = corner_v(t_k=398.15, threshold_v=0.485, r_ohm=2.2e6, offset_v=-3e-3)
HIGHEST_V = corner_v(t_k=233.15, threshold_v=0.515, r_ohm=1.8e6, offset_v=3e-3)


def test_window_against_scipy() -> None:
    answer = said("crossover_level")
    assert answer.kind is PASS
    assert answer.measure is not None
    assert answer.measure.have == pytest.approx(LOWEST_V, abs=1e-8)
    high = said("crossover_level", "comparators: {por: {trip: {rising: {min: 1 V, max: 1.46 V}}}}")
    assert high.measure is not None
    assert high.measure.have == pytest.approx(HIGHEST_V, abs=1e-8)


@pytest.mark.parametrize("side", ["lowest", "highest"])
def test_a_stated_range_narrower_than_the_components_make_contradicts_them(side: str) -> None:
    """One tenth of a millivolt either way of the window's end."""
    for away_v, kind in ((-1e-4, PASS), (1e-4, FAIL)):
        ends = (LOWEST_V + away_v, 1.6) if side == "lowest" else (1.0, HIGHEST_V - away_v)
        patch = f"comparators: {{por: {{trip: {{rising: {{min: {ends[0]:.9f} V, max: {ends[1]:.9f} V}}}}}}}}"
        answer = said("crossover_level", patch)
        assert (answer.kind, side in answer.message) == (kind, True)


def test_words_of_a_contradiction() -> None:
    answer = said("crossover_level", "comparators: {por: {trip: {rising: {min: 1.2 V, max: 1.49 V}}}}")
    assert answer.message == (
        f"rising level that the components make, lowest {LOWEST_V:.3f} V, at least 1.2 V needed"
    )  # fmt: skip
    assert answer.why.startswith(
        f"components {LOWEST_V:.3f} V to {HIGHEST_V:.3f} V, stated 1.2 V to 1.49 V; what moves it: temperature "
    )
    assert answer.why.endswith(
        "lowest at 125 degC with threshold 485 mV, threshold slope 350 uV/K, gain 26 uA/V^2, resistance 2.2 Mohm, "
        "offset -3 mV"
    )
    assert answer.mend == (
        f"state {LOWEST_V:.3f} V to {HIGHEST_V:.3f} V, or narrow what moves it most: temperature"
    )  # fmt: skip
    assert answer.at == "comparators.por.crossover"


def test_a_device_that_is_never_ahead_holds_nothing() -> None:
    """A junction that carries 1 mA at no voltage to speak of: half of any supply is ahead of it from the start."""
    patch = """
    comparators: {por: {crossover: {kind: divider_diode, diode: pnp}}}
    process: {diodes: {pnp: {saturation: 1 mA}}}
    """
    answer = said("crossover_level", patch)
    assert (answer.kind, answer.message) == (
        FAIL, "at some corner the divided supply is ahead from the start: nothing holds reset at any supply",
    )  # fmt: skip
    tracks = said("crossover_tracks", patch)
    assert (tracks.kind, tracks.message) == (
        NONE, "at some corner there is no level at all",
    )  # fmt: skip


def test_tracking_at_equal_temperature_and_not_extreme_against_extreme() -> None:
    """A reference that works from 1.2 V at -40 degC and 1.7 mV/K less above: extreme against extreme it is short.

    At the cold end the lowest level is that of a low threshold there, less 70 mV of hysteresis.
    """
    patch = "references: {ref_fast: {works_from: {max: 1.2 V}, works_from_slope: -1.7 mV/K}}"
    early = "{works_from: {max: 0.9 V}}"
    calmer = f"comparators: {{uv: {early}, ov: {early}, uv_core: {early}}}"
    calmest = "biases: {bias_start: {works_from: {max: 0.5 V}}}"
    answer = said("crossover_tracks", patch, calmer, calmest)
    gaps_v = {
        t_k: corner_v(t_k=t_k, threshold_v=0.485, r_ohm=2.2e6, offset_v=-3e-3) - 0.07 - (1.2 - 1.7e-3 * (t_k - 233.15))
        for t_k in (233.15, 240.0, 260.0, 298.15, 398.15)
    }
    assert min(gaps_v, key=lambda t_k: gaps_v[t_k]) == 233.15
    assert answer.kind is PASS
    assert answer.measure is not None
    assert answer.measure.margin == pytest.approx(gaps_v[233.15], abs=1e-8)
    assert LOWEST_V - 0.07 < 1.2  # extreme against extreme, 125 degC against -40 degC
    assert answer.why.endswith(f"extreme against extreme it would be {(1.2 - LOWEST_V + 0.07) * 1e3:.2f} mV below")


def test_extreme_against_extreme_is_told_beside() -> None:
    """The lowest level that the components make, less 70 mV of hysteresis, against 1.06 V and 1.2 V of ref_fast."""
    level = said("crossover_level").measure
    assert level is not None
    assert said("crossover_tracks").why.endswith(
        f"; extreme against extreme it would be {(level.have - 0.07 - 1.06) * 1e3:.4g} mV above"
    )
    assert said("crossover_tracks", "references: {ref_fast: {works_from: {max: 1.2 V}}}").why.endswith(
        f"; extreme against extreme it would be {(1.2 + 0.07 - level.have) * 1e3:.4g} mV below"
    )


def test_without_hysteresis_the_level_itself_is_compared() -> None:
    bare, sound = (
        said("crossover_tracks", "comparators: {por: {hysteresis: none}}").measure,
        said("crossover_tracks").measure,
    )
    assert bare is not None
    assert sound is not None
    assert bare.have == pytest.approx(sound.have + 0.07, abs=1e-9)


def test_only_what_moves_the_level_is_told() -> None:
    """At one temperature and one resistance the threshold moves it, and without a span of that nothing does."""
    one_point = "{conditions: {junction_temperature: 27 degC}, comparators: {por: {crossover: {resistance: 2 Mohm, "
    why = said("crossover_level", one_point + "offset: 0 V}}}}").why
    assert "; what moves it: threshold " in why
    assert "temperature 0 V" not in why
    exact = "{process: {devices: {nmos_long: {threshold: 0.5 V}}}}"
    assert "; what moves it: nothing; " in said("crossover_level", one_point + "offset: 0 V}}}}", exact).why


FLAT = "references: {ref_fast: {works_from: {max: 1.2 V}, works_from_slope: 0 V/K}}"


def test_what_a_reference_needs_at_every_temperature_is_held_against_the_lowest_level() -> None:
    answer = said("crossover_tracks", FLAT)
    assert answer.kind is FAIL
    assert answer.measure is not None
    assert answer.measure.have == pytest.approx(LOWEST_V - 0.07, abs=1e-8)
    assert answer.measure.need == pytest.approx(1.2)
    short_v = 1.2 - (LOWEST_V - 0.07)
    assert answer.mend.startswith("a level at least ")
    assert float(answer.mend.split()[4]) == pytest.approx(short_v * 1e3, abs=0.1)


def test_the_account_of_tracking_adds_up() -> None:
    answer = said("crossover_tracks", FLAT)
    assert answer.measure is not None
    assert [line.name for line in answer.account] == ["level of the crossover", "hysteresis, most"]
    assert sum(line.value for line in answer.account) == pytest.approx(answer.measure.have, abs=1e-12)


def test_a_slope_that_is_not_sure_may_ask_for_anything_at_the_hot_end() -> None:
    """Stated for the cold end, where the level is higher; and without a slope for all temperatures."""
    falls = "references: {ref_fast: {works_from_slope: {min: -2 mV/K}}}"
    answer = said("crossover_tracks", FLAT, falls)
    assert (answer.kind, answer.missing) == (OPEN, ("references.ref_fast.works_from_slope.max",))
    short = said("crossover_tracks", FLAT, falls, "references: {ref_fast: {works_from: {max: 1.4 V}}}")
    assert short.kind is FAIL  # at the cold end already, whatever the slope is
    level = said("crossover_tracks", FLAT, without("references.ref_fast.works_from_slope"))
    assert level.measure == said("crossover_tracks", FLAT).measure


def test_a_slope_that_rises_counts_at_the_hot_end() -> None:
    answer = said(
        "crossover_tracks", "references: {ref_fast: {works_from: {max: 1 V}, works_from_slope: 1 mV/K}}"
    )  # fmt: skip
    assert answer.measure is not None
    assert answer.measure.need == pytest.approx(1.0 + 1e-3 * 165.0, abs=1e-9)


def test_second_crossing_at_its_limit() -> None:
    """1.89 V + 5 mV in service; the least reference current, the least resistance, the device at 125 degC."""
    n = 0.068 / (8.617333262e-5 * 298.15 * math.log(10))
    thermal_v = 8.617333262e-5 * 398.15
    specific_a = 2 * n * 26e-6 * thermal_v**2

    def level_v(current_a: float) -> float:
        device_v = 0.485 - 0.35e-3 * 100.0
        return (
            current_a * 1.8e6 + device_v + 2 * n * thermal_v * math.log(math.expm1(math.sqrt(current_a / specific_a)))
        )

    limit_a = brentq(lambda current_a: level_v(current_a) - 1.895, 1e-8, 2e-6, xtol=1e-18)
    for share, kind in ((0.999, FAIL), (1.001, PASS)):
        current = f"reference_current: {2 * share * limit_a:.12e} A"
        patch = f"comparators: {{por: {{crossover: {{kind: crude_current, mirror: 2, {current}}}}}}}"
        answer = said("second_crossing", patch)
        assert answer.kind is kind
        assert answer.measure is not None
        assert answer.measure.have == pytest.approx(level_v(share * limit_a), abs=1e-8)
        assert answer.measure.need == pytest.approx(1.895)


@pytest.mark.parametrize(
    ("rule", "of", "words"),
    [
        ("crossover_level", "uv", "its level comes from a reference, not from a crossover"),
        ("crossover_tracks", "uv", "its level comes from a reference, not from a crossover"),
        ("second_crossing", "uv", "its level comes from a reference, not from a crossover"),
        ("second_crossing", "por", "its crossover compares voltages: the divided supply stays ahead"),
    ],
)
def test_not_applicable(rule: str, of: str, words: str) -> None:
    answer = said(rule, of=of)
    assert (answer.kind, answer.message) == (NONE, words)


@pytest.mark.parametrize("rule", ["crossover_level", "crossover_tracks", "second_crossing"])
def test_whether_a_crossover_makes_the_level_may_not_be_said(rule: str) -> None:
    """Without a reference something else makes the level; what, is a question."""
    answer = said(rule, without("comparators.por.crossover"))
    assert (answer.kind, answer.missing) == (OPEN, ("comparators.por.crossover",))
    answer = said(rule, without("comparators.por.crossover", "comparators.por.reference"))
    assert (answer.kind, answer.missing) == (OPEN, ("comparators.por.reference",))


@pytest.mark.parametrize(("level_v", "kind"), [(LOWEST_V - 1e-3, FAIL), (LOWEST_V + 1e-3, PASS), (1.3, PASS),
                                               (HIGHEST_V - 1e-3, PASS), (HIGHEST_V + 1e-3, FAIL)])  # fmt: skip
def test_a_level_stated_as_one_number_is_one_of_those_that_the_components_make(level_v: float, kind: Kind) -> None:
    trip = f"comparators: {{por: {{trip: {{rising: {level_v:.6f} V, falling: {level_v - 0.06:.6f} V}}}}}}"
    answer = said("crossover_level", trip)
    assert answer.kind is kind
    assert answer.message.startswith("rising level as it is stated ")


def test_a_level_stated_as_one_number_has_the_errors_of_its_crossover() -> None:
    """1.3 V and 60 mV less, moved by as much as the components move it: LOWEST_V less 60 mV at the least."""
    trip = "comparators: {por: {trip: {rising: 1.3 V, falling: 1.24 V}}}"
    answer = judged(trip, self_bias.RULES)["self_bias/works_at_own_trip", "por"]
    assert answer.measure is not None
    assert answer.measure.need == pytest.approx(LOWEST_V - 0.06, abs=1e-8)
    gone = both(trip, without("comparators.por.crossover.offset"))
    unknown = judged(gone, self_bias.RULES)["self_bias/works_at_own_trip", "por"]
    assert (unknown.kind, unknown.missing) == (OPEN, ("comparators.por.crossover.offset",))


CRUDE = """
comparators:
  por:
    crossover: {kind: crude_current, reference_current: 900 nA, mirror: 1, reference_start: 1 V, reference_rise: 0.4 V}
"""


def crude_corner_v(*, t_k: float, threshold_v: float, r_ohm: float) -> float:
    """SciPy's root of 900 nA (V - 1 V)/0.4 V against the current that a diode-connected device draws through R."""
    thermal_v = 8.617333262e-5 * t_k
    n = 0.068 / (8.617333262e-5 * 298.15 * math.log(10))
    vth_v = threshold_v - 0.35e-3 * (t_k - 298.15)

    def missing_v(crude_a: float) -> float:
        specific_a = 2 * n * 26e-6 * thermal_v**2
        device_v = vth_v + 2 * n * thermal_v * math.log(math.expm1(math.sqrt(crude_a / specific_a)))
        return 1.0 + 0.4 * crude_a / 900e-9 - crude_a * r_ohm - device_v

    crude_a = brentq(missing_v, 1e-10, 900e-9, xtol=1e-20)
    return 1.0 + 0.4 * crude_a / 900e-9


def test_the_level_of_a_crude_current_is_where_the_reference_overtakes_it() -> None:
    """The crude current is largest, and the level highest, with a low threshold and resistance, and hot."""
    most_v = crude_corner_v(t_k=398.15, threshold_v=0.485, r_ohm=1.8e6)
    least_v = crude_corner_v(t_k=233.15, threshold_v=0.515, r_ohm=2.2e6)
    for trip, limit_v in (("{min: 0.5 V, max: 1.2 V}", most_v), ("{min: 1.1 V, max: 1.9 V}", least_v)):
        answer = said("crossover_level", CRUDE, f"comparators: {{por: {{trip: {{rising: {trip}}}}}}}")
        assert answer.measure is not None
        assert answer.measure.have == pytest.approx(limit_v, abs=1e-8)
    tracks = said("crossover_tracks", CRUDE)
    assert tracks.measure is not None
    assert tracks.measure.have == pytest.approx(least_v - 0.07, abs=1e-8)


@pytest.mark.parametrize("change", ["reference_rise: 3 V", "reference_start: 8 V"], ids=["slow", "late"])
def test_a_reference_that_never_stays_ahead_never_lets_go(change: str) -> None:
    answer = said("crossover_level", CRUDE, f"comparators: {{por: {{crossover: {{{change}}}}}}}")
    assert (answer.kind, answer.message) == (
        FAIL,
        "at some corner the reference current never stays ahead of the crude one as it comes up: the detector never "
        "lets go",
    )
    assert answer.mend == (
        "a larger reference current, a smaller rise, a larger resistance, or a smaller mirror ratio"
    )  # fmt: skip
    assert said("crossover_tracks", CRUDE, f"comparators: {{por: {{crossover: {{{change}}}}}}}").kind is NONE


@pytest.mark.parametrize("fact", ["reference_current", "reference_start", "reference_rise", "mirror", "resistance"])
def test_the_level_of_a_crude_current_needs_how_its_reference_comes_up(fact: str) -> None:
    for rule in ("crossover_level", "crossover_tracks"):
        answer = said(rule, CRUDE, f"comparators: {{por: {{crossover: {{{fact}: null}}}}}}")
        assert (answer.kind, answer.missing) == (OPEN, (f"comparators.por.crossover.{fact}",))


NAMED = "comparators: {por: {crossover: {resistor: poly_high}}}"


def test_a_named_resistor_follows_its_kind() -> None:
    """poly_high: -900 ppm/K and 2.5 ppm/K^2 from 25 degC, so 0.935 of its resistance at 125 degC."""
    answer = said("crossover_level", NAMED)
    hot = 1 - 900e-6 * 100 + 2.5e-6 * 100**2
    expected_v = corner_v(t_k=398.15, threshold_v=0.485, r_ohm=2.2e6 * hot, offset_v=-3e-3)
    assert answer.measure is not None
    assert answer.measure.have == pytest.approx(expected_v, abs=1e-8)
    assert expected_v > LOWEST_V + 1e-3
    assert "resistance 2.2 Mohm, tc1 -900 ppm/K, tc2 2.5 ppm/K^2" in answer.why


@pytest.mark.parametrize("fact", ["tc1", "tc2", "reference_temperature"])
def test_a_named_resistor_needs_its_coefficients(fact: str) -> None:
    answer = said("crossover_level", NAMED, without(f"process.resistors.poly_high.{fact}"))
    assert (answer.kind, answer.missing) == (OPEN, (f"process.resistors.poly_high.{fact}",))


@pytest.mark.parametrize(
    "fact",
    [
        "comparators.por.crossover.kind", "comparators.por.crossover.ratio", "comparators.por.crossover.resistance",
        "comparators.por.crossover.offset", "comparators.por.crossover.gain", "comparators.por.crossover.device",
        "process.devices.nmos_long.threshold", "process.devices.nmos_long.swing", "conditions.junction_temperature",
    ],
)  # fmt: skip
def test_open_names_the_fact_that_is_missing(fact: str) -> None:
    for rule in ("crossover_level", "crossover_tracks"):
        answer = said(rule, without(fact))
        assert (answer.kind, answer.missing) == (OPEN, (fact,))


@pytest.mark.parametrize(
    "fact",
    [
        "references.ref_fast.works_from", "biases.bias_start.works_from", "comparators.ov.works_from",
        "comparators.uv.bias",
    ],
)  # fmt: skip
def test_tracking_needs_what_follows(fact: str) -> None:
    answer = said("crossover_tracks", without(fact))
    assert (answer.kind, answer.missing) == (OPEN, (fact,))
    late = said("crossover_tracks", without(fact), "comparators: {uv_core: {works_from: {max: 1.3 V}}}")
    assert late.kind is FAIL  # what is known to follow is short whatever else does


@pytest.mark.parametrize("fact", ["comparators.uv.domain", "domains.aon.rail"])
def test_what_may_be_fed_by_the_rail_follows_where_that_harms(fact: str) -> None:
    """uv works from 1.05 V and the level is 1.106 V: it may follow. If it worked from 1.3 V, that would decide."""
    assert said("crossover_tracks", without(fact)).kind is PASS
    answer = said("crossover_tracks", without(fact), "comparators: {uv: {works_from: {max: 1.3 V}}}")
    assert (answer.kind, answer.missing) == (OPEN, (fact,))


def test_a_load_that_an_under_voltage_detector_may_look_after_is_open() -> None:
    """Without what drives uv_out, uv may or may not reset the loads of avdd, which need 1.6 V."""
    answer = said("crossover_tracks", without("output_stages.uv_out.driven_by"))
    assert (answer.kind, answer.missing) == (OPEN, ("output_stages.uv_out.driven_by",))


def test_a_source_from_off_the_chip_follows_no_rail() -> None:
    outside = "references: {ref_x: {kind: external}}, comparators: {uv: {reference: ref_x}}"
    assert said("crossover_tracks", f"{{{outside}}}").kind is PASS


@pytest.mark.parametrize(
    ("part", "missing"),
    [
        ("resistance: {min: 1.8 Mohm}", "comparators.por.crossover.resistance.max"),
        ("resistance: {typ: 2 Mohm}", "comparators.por.crossover.resistance.min"),
        ("gain: {max: 26 uA/V^2}", "comparators.por.crossover.gain.min"),
    ],
)
def test_a_component_without_an_end_has_no_corner(part: str, missing: str) -> None:
    """An end that is not known is no corner to sweep, and no reason to say that there is no level."""
    for rule in ("crossover_level", "crossover_tracks"):
        answer = said(rule, f"comparators: {{por: {{crossover: {{{part}}}}}}}")
        assert answer.kind is OPEN
        assert missing in answer.missing
        assert answer.measure is None


def test_level_needs_what_is_stated() -> None:
    answer = said("crossover_level", without("comparators.por.trip"))
    assert (answer.kind, answer.missing) == (OPEN, ("comparators.por.trip.rising",))


@pytest.mark.parametrize("fact", ["reference_current", "mirror", "resistance", "gain", "device"])
def test_second_crossing_needs_its_components(fact: str) -> None:
    crude = "comparators: {por: {crossover: {kind: crude_current, reference_current: 900 nA, mirror: 1}}}"
    answer = said("second_crossing", crude, f"comparators: {{por: {{crossover: {{{fact}: null}}}}}}")
    assert (answer.kind, answer.missing) == (OPEN, (f"comparators.por.crossover.{fact}",))


def test_a_crude_current_through_a_junction() -> None:
    """1 Mohm at 1 uA drops 1 V, and the junction adds what its law says, least when hot."""
    patch = """
    comparators:
      por:
        crossover:
          {kind: crude_current, reference_current: 1 uA, mirror: 1, resistance: 1 Mohm, diode: pnp, device: null}
    """
    answer = said("second_crossing", patch)
    saturation_a = 8e-19 * (398.15 / 298.15) ** 3 * math.exp(1.17 / 8.617333262e-5 * (1 / 298.15 - 1 / 398.15))
    junction_v = 8.617333262e-5 * 398.15 * math.log1p(1e-6 / saturation_a)
    assert answer.measure is not None
    assert answer.measure.have == pytest.approx(1.0 + junction_v, abs=1e-8)
