from __future__ import annotations

import math
from typing import Final

import pytest
from scipy.constants import Boltzmann, elementary_charge
from scipy.integrate import quad
from scipy.optimize import brentq

from tests.rules.sound import judged
from tidegate.lint.judgement import Judgement, Kind
from tidegate.rules.electromigration import RULES

LINE: Final = "electromigration/line"
VIAS: Final = "electromigration/vias"
OF_POR: Final = "output_stages.por_out."
TEN_YEARS_S: Final = 10 * 365.25 * 86400
K_EV: Final = Boltzmann / elementary_charge  # eV/K, CODATA as SciPy has it


def one(patch: str, rule: str, subject: str = "por_out") -> Judgement:
    return judged(patch, RULES)[rule, subject]


def have(said: Judgement) -> float:
    assert said.measure is not None
    return said.measure.have


def need(said: Judgement) -> float:
    assert said.measure is not None
    return said.measure.need


def por_out(facts: str, more: str = "") -> str:
    return f"output_stages: {{por_out: {{{facts}}}}}\n{more}"


# electromigration/line and vias: the limits

LONG: Final = "process: {layers: {metal1: {short_length_product: 0 A/cm}}}"  # no line is too short to fail


@pytest.mark.parametrize(("peak", "kind"), [("297.5", "pass"), ("297.6", "pass"), ("297.7", "review")])
def test_line_at_its_direct_limit(peak: str, kind: str) -> None:
    assert one(por_out(f"crowbar_peak: {peak} uA", LONG), LINE).kind == kind


@pytest.mark.parametrize(("peak", "kind"), [("2.879", "review"), ("2.88", "review"), ("2.881", "fail")])
def test_line_at_its_rms_limit(peak: str, kind: str) -> None:
    # 0.48 um * 6 mA/um; no short time and no short length makes up for heat
    assert one(por_out(f"crowbar_peak: {peak} mA", LONG), LINE).kind == kind
    short = "process: {layers: {metal1: {short_length_product: 1e6 A/cm}}}"
    assert (one(por_out(f"crowbar_peak: {peak} mA", short), LINE).kind is Kind.FAIL) is (kind == "fail")


@pytest.mark.parametrize(("peak", "kind"), [("359.9", "pass"), ("360", "pass"), ("360.1", "review")])
def test_vias_at_their_limit(peak: str, kind: str) -> None:
    assert one(por_out(f"crowbar_peak: {peak} uA"), VIAS).kind == kind


def test_line_that_gets_too_hot() -> None:
    said = one(por_out("crowbar_peak: 4 mA", LONG), LINE)
    assert said.kind is Kind.FAIL
    assert said.message == "crowbar current of its line 4 mA, at most 297.6 uA needed"
    assert said.why == "peak as stated; 297.6 uA direct, limit of 125 degC and 10 yr"
    # 4 mA / (0.62 mA/um) + 0.02 um = 6.4716 um, to the next 0.01 um up
    assert said.mend == "6.48 um wide, or wider; now 0.5 um"
    assert said.at == "output_stages.por_out.output.width"
    assert one(por_out("crowbar_peak: 4 mA, output: {width: 6.48 um}"), LINE).kind is Kind.PASS


def test_smallest_limit_governs() -> None:
    hot = "process: {layers: {metal1: {limits: {1: {peak: 0.5 mA/um, rms: 0.4 mA/um}}}}}"
    said = one(por_out("crowbar_peak: 0.2 mA", hot), LINE)
    assert said.kind is Kind.FAIL
    assert need(said) == pytest.approx(0.48 * 0.4e-3)
    assert said.why == (
        "peak as stated; 297.6 uA direct, limit of 125 degC and 10 yr, 640 uA because 60 um keep below 2000 A/cm of "
        "density times length, 192 uA r.m.s."
    )
    assert said.mend == "0.52 um wide, or wider; now 0.5 um"


@pytest.mark.parametrize(("bias", "limit_um"), [("0 um", 0.5), ("0.02 um", 0.48)])
def test_the_width_that_is_left_counts(bias: str, limit_um: float) -> None:
    layer = f"process: {{layers: {{metal1: {{width_bias: {bias}, short_length_product: 0 A/cm}}}}}}"
    assert need(one(por_out("crowbar_peak: 0.29 mA", layer), LINE)) == pytest.approx(limit_um * 0.62e-3)


def test_a_width_bias_that_is_not_stated_may_be_anything() -> None:
    """0.5 um as drawn carry 310 uA at the best."""
    unsaid = "process: {layers: {metal1: {width_bias: null, short_length_product: 0 A/cm}}}"
    said = one(por_out("crowbar_peak: 0.29 mA", unsaid), LINE)
    assert (said.kind, said.missing) == (Kind.OPEN, ("process.layers.metal1.width_bias",))
    assert said.measure is not None
    assert said.measure.best_margin == pytest.approx(0.02e-3)
    long_ago = por_out("crowbar_peak: 0.32 mA, dwell: 3000 yr", unsaid)
    assert one(long_ago, LINE).kind is Kind.FAIL


def narrow(limit: str) -> str:
    """A limit of its own for lines up to 0.5 um, at the conditions of the first entry; no line is too short to fail."""
    limits = f"narrow: {{up_to: 0.5 um, dc: {limit}}}, short_length_product: 0 A/cm"
    return f"process: {{layers: {{metal1: {{{limits}}}}}}}"


@pytest.mark.parametrize("width_um", [0.49, 0.5, 0.51])
def test_narrow_line_has_a_limit_of_its_own(width_um: float) -> None:
    said = one(por_out(f"crowbar_peak: 0.2 mA, output: {{width: {width_um} um}}", narrow("0.4 mA")), LINE)
    carried_a = 0.4e-3 * math.exp(-0.45 / K_EV * (1 / 383.15 - 1 / 398.15))  # from 110 to 125 degC
    by_width_a = (width_um - 0.02) * 0.62e-3
    assert need(said) == pytest.approx(by_width_a if width_um == 0.51 else carried_a, rel=1e-9)


def test_a_narrow_line_that_does_not_do_is_widened_beyond_narrow() -> None:
    said = one(por_out("output: {width: 0.3 um}", narrow("10 uA")), LINE)
    assert (said.kind, said.mend) == (Kind.REVIEW, "0.51 um wide, or wider; now 0.3 um")


def test_a_line_that_may_be_narrow_carries_what_harms() -> None:
    """Up to 0.5 um: 0.4 mA at 110 degC make 239.6 uA here, and by its width it carries 297.6 uA."""
    unsure = narrow("0.4 mA").replace("0.5 um", "{max: 0.5 um}")
    for peak, kind in (("0.239 mA", Kind.PASS), ("0.24 mA", Kind.OPEN)):
        said = one(por_out(f"crowbar_peak: {peak}", unsure), LINE)
        assert (said.kind, said.missing) == (kind, ("process.layers.metal1.narrow.up_to.min",))
    wide = one(por_out("crowbar_peak: 0.28 mA, output: {width: 0.51 um}", unsure), LINE)
    assert (wide.kind, wide.missing) == (Kind.PASS, ())


def test_a_narrow_limit_that_is_not_sure_is_open() -> None:
    said = one(por_out("", narrow("{typ: 0.4 mA}")), LINE)
    assert (said.kind, said.missing) == (Kind.OPEN, ("process.layers.metal1.narrow.dc.min",))


def test_line_no_wider_than_the_process_takes_away_is_open() -> None:
    said = one(por_out("output: {width: 0.02 um}"), LINE)
    assert said.kind is Kind.OPEN
    assert "drawn_width_m must be above width_bias_m" in said.message


# Limits carried to the conditions of the chip (J. R. Black, IEEE Trans. Electron Devices 16(4), 338-347, 1969)


def cooler(celsius: float, life: str = "10 yr", process: str = "") -> str:
    temperature = f"junction_temperature: {{min: -40 degC, max: {celsius} degC}}"
    return f"conditions: {{{temperature}, service_life: {life}}}\nprocess: {{{process}}}"


LONG_LAYER: Final = "layers: {metal1: {short_length_product: 0 A/cm}}"


def test_limit_is_carried_from_the_coolest_entry_that_is_hot_enough() -> None:
    # life gains exp(Ea/k (1/T - 1/T0)) = 4.0043 from 125 to 105 degC at 0.9 eV, so current its root at n = 2
    # (derived; confirmed with SciPy's constants)
    gain = math.exp(0.9 / K_EV * (1 / 378.15 - 1 / 398.15))
    assert gain == pytest.approx(4.0043, rel=1e-4)
    said = one(cooler(105), VIAS)
    assert need(said) == pytest.approx(0.36e-3 * math.sqrt(gain), rel=1e-9)
    assert said.why.endswith("720.4 uA direct, limit carried from 125 degC and 10 yr to 105 degC by Black's law")
    line = 0.48e-6 * 1e3 * math.exp(0.45 / K_EV * (1 / 378.15 - 1 / 383.15))  # of the entry for 110 degC
    assert need(one(cooler(105, process=LONG_LAYER), LINE)) == pytest.approx(line, rel=1e-9)


def test_limit_is_carried_to_a_hotter_chip_and_a_longer_life() -> None:
    hotter = 0.36e-3 * math.exp(-0.45 / K_EV * (1 / 398.15 - 1 / 413.15))
    assert need(one(cooler(140), VIAS)) == pytest.approx(hotter, rel=1e-9)
    assert need(one(cooler(125, "40 yr"), VIAS)) == pytest.approx(0.36e-3 / 2, rel=1e-9)  # a quarter of the life


@pytest.mark.parametrize(("celsius", "ev"), [(105, 0.8), (140, 1.0)])
def test_worst_activation_energy_counts(celsius: float, ev: float) -> None:
    said = one(cooler(celsius, process="activation_energy: {min: 0.8 eV, max: 1.0 eV}"), VIAS)
    expected = 0.36e-3 * math.exp(ev / 2 / K_EV * (1 / (273.15 + celsius) - 1 / 398.15))
    assert need(said) == pytest.approx(expected, rel=1e-9)


# google/gf180mcu-pdk, design manual, table 54_Electro-migration1_150.csv and section 14.2.2 (Ea 0.7 eV and n = 2):
# metal1 carries 2.09, 1.00 and 0.67 mA/um at 85, 110 and 125 degC; printed to three digits
@pytest.mark.parametrize(("celsius", "printed", "tolerance"), [(85, 2.09, 0.005), (110, 1.00, 1e-9), (125, 0.67, 0.01)])
def test_published_limits_follow_from_the_one_for_110_degc(celsius: float, printed: float, tolerance: float) -> None:
    table = "{temperature: 110 degC, life: 100000 h, dc: 1.00 mA/um}"
    layer = f"layers: {{metal1: {{limits: [{table}], width_bias: 0 um, short_length_product: 0 A/cm}}}}"
    said = one(cooler(celsius, "100000 h", f"activation_energy: 0.7 eV, current_exponent: 2, {layer}"), LINE)
    assert need(said) == pytest.approx(0.5e-6 * printed * 1e3, rel=tolerance)


UNKNOWN_LAW: Final = "activation_energy: null, current_exponent: null"


def test_without_the_law_a_stricter_limit_stands_as_it_is() -> None:
    """A cooler chip carries no less, whatever the constants are; how much more is not known."""
    said = one(cooler(105, process=UNKNOWN_LAW), VIAS)
    assert (said.kind, need(said)) == (Kind.PASS, pytest.approx(0.36e-3))
    assert said.missing == ("process.activation_energy", "process.current_exponent")
    assert said.measure is not None
    assert said.measure.best_margin == math.inf


@pytest.mark.parametrize("conditions", [(126, "10 yr"), (125, "11 yr")])
def test_without_the_law_a_laxer_limit_is_open(conditions: tuple[float, str]) -> None:
    """Colder or for less long than this chip: at the best, nothing is lost; at the worst, everything."""
    said = one(cooler(*conditions, process=UNKNOWN_LAW), VIAS)
    hotter = ("process.activation_energy",) if conditions[0] > 125 else ()
    assert (said.kind, said.missing) == (Kind.OPEN, (*hotter, "process.current_exponent"))
    assert said.measure is not None
    assert said.measure.best_margin == pytest.approx(0.36e-3 - have(said), rel=1e-9)


@pytest.mark.parametrize(("peak", "kind"), [("0.35 mA", Kind.OPEN), ("0.37 mA", Kind.FAIL)])
def test_far_above_any_limit_it_fails_without_the_law(peak: str, kind: Kind) -> None:
    """Hotter than the limit is stated for, and for all of its life at the peak: no constants save more than 360 uA."""
    patch = por_out(f"crowbar_peak: {peak}, dwell: 10 h", cooler(140, process=UNKNOWN_LAW))
    said = one(patch, VIAS)
    assert said.kind is kind
    assert set(said.missing) <= {"process.activation_energy", "process.current_exponent"}


@pytest.mark.parametrize("half", ["activation_energy", "current_exponent"])
def test_one_constant_of_the_law_bounds_what_the_other_may_do(half: str) -> None:
    """140 degC: with 0.9 eV and any exponent up to none of it is left; with n = 2 and any energy all of it at best."""
    said = one(cooler(140, process=f"{half}: null"), VIAS)
    assert (said.kind, said.missing) == (Kind.OPEN, (f"process.{half}",))
    assert said.measure is not None
    assert said.measure.best_margin == pytest.approx(0.36e-3 - have(said), rel=1e-9)


# Lines that are too short to fail (I. A. Blech, J. Appl. Phys. 47, 1203-1208, 1976)


@pytest.mark.parametrize(("peak", "kind"), [("0.639", "pass"), ("0.64", "pass"), ("0.641", "review")])
def test_short_line_at_its_limit(peak: str, kind: str) -> None:
    # 2000 A/cm * 0.48 um * 0.4 um / 60 um = 0.64 mA
    assert one(por_out(f"crowbar_peak: {peak} mA"), LINE).kind == kind


def test_short_line_says_so() -> None:
    said = one(por_out("crowbar_peak: 0.5 mA"), LINE)
    assert said.kind is Kind.PASS
    assert said.message == "crowbar current of its line 500 uA, at most 640 uA needed"
    assert said.why == (
        "peak as stated; 297.6 uA direct, limit of 125 degC and 10 yr, "
        "640 uA because 60 um keep below 2000 A/cm of density times length"
    )


@pytest.mark.parametrize(
    ("of_the_line", "of_the_layer", "missing"),
    [
        ("length: null", "", f"{OF_POR}output.length"),
        ("", "thickness: null", "process.layers.metal1.thickness"),
        ("", "short_length_product: null", "process.layers.metal1.short_length_product"),
        ("length: {min: 60 um}", "", f"{OF_POR}output.length.max"),
    ],
)
def test_a_line_that_may_be_short_enough_is_open(of_the_line: str, of_the_layer: str, missing: str) -> None:
    layer = f"process: {{layers: {{metal1: {{{of_the_layer}}}}}}}"
    said = one(por_out(f"crowbar_peak: 0.5 mA, output: {{{of_the_line}}}", layer), LINE)
    assert (said.kind, said.missing) == (Kind.OPEN, (missing,))
    below = one(por_out(f"crowbar_peak: 0.29 mA, output: {{{of_the_line}}}", layer), LINE)
    assert below.kind is Kind.PASS  # it carries so much however long it is
    hot = one(por_out(f"crowbar_peak: 4 mA, output: {{{of_the_line}}}", layer), LINE)
    assert hot.kind is Kind.FAIL  # no length makes up for heat


# Limits against heat


@pytest.mark.parametrize(("peak", "kind"), [("0.29 mA", Kind.PASS), ("0.3 mA", Kind.OPEN)])
def test_a_limit_against_heat_that_is_not_stated_allows_the_direct_current(peak: str, kind: Kind) -> None:
    """A direct current is its own r.m.s. value: 297.6 uA are allowed; more may heat too much, were it long or short."""
    unsaid = "process: {layers: {metal1: {limits: {1: {rms: null}}}}}"
    said = one(por_out(f"crowbar_peak: {peak}", unsaid), LINE)
    assert said.kind is kind
    assert said.missing == ("process.layers.metal1.limits.1.rms",)


# Time spent above the direct limit (M. A. Miner, J. Appl. Mech. 12, A159-A164, 1945)


def test_time_above_the_limit_is_for_a_person_to_look_at() -> None:
    said = one(por_out("crowbar_peak: 0.7 mA"), LINE)
    assert said.kind is Kind.REVIEW
    assert (have(said), need(said)) == (0.7e-3, pytest.approx(0.64e-3))
    assert said.message == "for a while only, crowbar current of its line 700 uA, at most 640 uA needed"
    spent_s = 20000 * (2 * 20e-3 + 50e-3)  # whole edges, since a stated peak says nothing of its shape, and stays
    share = spent_s / TEN_YEARS_S * (0.7e-3 / 0.2976e-3) ** 2
    assert share == pytest.approx(31.56e-6, rel=1e-4)
    assert said.why == (
        "peak as stated; 297.6 uA direct, limit of 125 degC and 10 yr, 640 uA because 60 um keep below 2000 A/cm of "
        "density times length; assumes that no more time than this is spent, and that damage adds up linearly (Miner); "
        "40000 edges, each as 20 ms at the peak, and 20000 stays of 50 ms at it use up 31.56 ppm of its life"
    )
    assert said.mend == "1.15 um wide, or wider; now 0.5 um"  # 0.7/0.62 + 0.02 = 1.14903 um


def test_an_edge_of_the_square_law_wears_less_than_its_peak() -> None:
    """The wear of one linear edge, proportional to I^n, integrated by SciPy over the input voltage."""
    strong = "gain: {max: 12 mA/V^2}"
    facts = f"nmos: {{{strong}}}, pmos: {{gain: {{max: 6 mA/V^2}}}}, output: {{vias: 1}}, dwell: 0 s"
    said = one(por_out(facts), VIAS)

    def wear(input_v: float) -> float:
        nmos_a, pmos_a = 6e-3 * max(0.0, input_v - 0.31) ** 2, 3e-3 * max(0.0, 1.89 - input_v - 0.32) ** 2
        return (min(nmos_a, pmos_a) / 0.18e-3) ** 2

    turn_v = brentq(lambda v: 12e-3 * (v - 0.31) ** 2 - 6e-3 * (1.57 - v) ** 2, 0.31, 1.57)
    edge = (quad(wear, 0.31, turn_v)[0] + quad(wear, turn_v, 1.57)[0]) * 20e-3 / 1.89
    share = 20000 * 2 * edge / TEN_YEARS_S
    assert said.kind is Kind.REVIEW
    assert said.why.endswith(f"use up {share * 1e6:.4g} ppm of its life")
    assert (
        f"{6 * (turn_v - 0.31) ** 2:.4g} mA, at most 180 uA needed" in said.message
    )  # the peak, where both carry the same
    assert "40000 edges, each as 2.667 ms at the peak" in said.why  # a fifth of 2/3 of 20 ms, at n = 2


@pytest.mark.parametrize(("dwell", "kind"), [("3944.6", "review"), ("3944.66", "review"), ("3944.7", "fail")])
def test_wear_at_its_limit(dwell: str, kind: str) -> None:
    # at twice the limit a quarter of 10 yr is the whole life: 20000 times (2 * 20 ms + dwell) = 2.5 yr
    assert pytest.approx(TEN_YEARS_S / 4 / 20000 - 0.04, rel=1e-12) == 3944.66
    said = one(por_out(f"crowbar_peak: 0.36 mA, dwell: {dwell} s, output: {{vias: 1}}"), VIAS)
    assert said.kind == kind


def test_worn_vias() -> None:
    said = one(por_out("crowbar_peak: 0.5 mA, dwell: 3 h"), VIAS)
    assert said.kind is Kind.FAIL
    share = 20000 * (0.04 + 10800) / TEN_YEARS_S * (0.5 / 0.36) ** 2
    assert share == pytest.approx(1.32, abs=5e-3)
    assert said.message == "crowbar current of its vias 500 uA, at most 360 uA needed"
    assert said.why.endswith("20000 stays of 3 h at it use up 132 % of its life")
    assert said.mend == "3 vias; now 2"
    assert said.at == "output_stages.por_out.output.vias"
    assert one(por_out("crowbar_peak: 0.5 mA, dwell: 3 h, output: {vias: 3}"), VIAS).kind is Kind.PASS


def test_wear_is_counted_at_the_temperature_of_the_chip() -> None:
    patch = por_out("crowbar_peak: 1 mA", cooler(105))
    gain = math.exp(0.9 / K_EV * (1 / 378.15 - 1 / 398.15))
    share = 20000 * 0.09 / (TEN_YEARS_S * gain) * (1 / 0.36) ** 2
    assert one(patch, VIAS).why.endswith(f"use up {share * 1e6:.4g} ppm of its life")


WEAR_FACTS: Final = (
    "conditions.power_cycles", f"{OF_POR}edges_per_cycle", f"{OF_POR}dwell", "process.current_exponent",
)  # fmt: skip


@pytest.mark.parametrize("fact", WEAR_FACTS)
def test_wear_is_open_without_what_it_adds_up(fact: str) -> None:
    """Not without the activation energy: the chip is as hot as the limit is stated for."""
    section, *rest = fact.split(".")
    facts = "crowbar_peak: 0.7 mA"
    if section == "output_stages":
        patch = por_out(f"{facts}, {rest[1]}: null")
    else:
        patch = por_out(facts, f"{section}: {{{rest[0]}: null}}")
    for rule in (LINE, VIAS):
        said = one(patch, rule)
        assert (said.kind, said.missing) == (Kind.OPEN, (fact,))


def test_all_that_wear_needs_is_named_at_once() -> None:
    patch = por_out(
        "crowbar_peak: 0.7 mA, edges_per_cycle: null, dwell: null",
        f"conditions: {{power_cycles: null}}\nprocess: {{{UNKNOWN_LAW}}}",
    )
    assert set(one(patch, VIAS).missing) == set(WEAR_FACTS)


def test_a_stay_that_is_surely_too_long_fails_whatever_the_edges_are() -> None:
    """20000 stays of 3 h at 500 uA use up 132 % of the life of two vias, whatever the edges add."""
    said = one(por_out("crowbar_peak: 0.5 mA, dwell: 3 h, edges_per_cycle: null"), VIAS)
    assert (said.kind, said.missing) == (Kind.FAIL, ())
    assert said.message == "crowbar current of its vias 500 uA, at most 360 uA needed"
