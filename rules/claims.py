"""Claims: a stated hysteresis, ratio, level, time or current against what its own components make."""

from __future__ import annotations

from typing import Final

from tidegate.lint.case import Case, Facts
from tidegate.lint.derived.levels.at_code import as_shipped
from tidegate.lint.derived.levels.trip_levels import falling_window, rising_window
from tidegate.lint.derived.stated_and_made import ROUNDING, Made, held_against
from tidegate.lint.derived.supply.rail_of import rail_of
from tidegate.lint.description.model.detector import Bias, Comparator, Hysteresis, Reference
from tidegate.lint.description.model.reset_path import OutputStage
from tidegate.lint.description.model.timing import Timing
from tidegate.lint.judgement import Judgement, Kind, Level
from tidegate.lint.physics import timer
from tidegate.lint.physics.domain import require_positive
from tidegate.lint.quantity import Dimension, Span, Voltage, show
from tidegate.lint.rule import Example, Rule, rule

_V: Final = Dimension.VOLTAGE
_A: Final = Dimension.CURRENT
_S: Final = Dimension.DURATION
_MOST_ROUNDING_V: Final = 0.005
_HALF_A_PER_CENT: Final = "Half a per cent is taken for the rounding of the numbers stated."


@rule(
    "claims/hysteresis",
    title="the stated hysteresis is what lies between the stated levels",
    level=Level.WARNING,
    applies_to="comparators",
    proves="Typical rising level less typical falling level lies in the stated hysteresis. Where the levels are ranges "
    "without a typical value, some hysteresis that they leave possible does. Half a unit of the last digit of each "
    "level, and at most 5 mV, is taken for rounding.",
    facts=("comparators.*.hysteresis.amount", "comparators.*.trip (or codes and ships_with)", "comparators.*.tracked"),
    mend="correct the hysteresis or a level",
    sources=("definition: hysteresis is the rising less the falling level",),
    example=Example(
        fails="comparators: {uv: {hysteresis: {amount: {min: 56 mV, max: 64 mV}}}}",
        holds="comparators: {uv: {hysteresis: {amount: {min: 46 mV, max: 54 mV}}}}",
    ),
)
def hysteresis_is_between_levels(comparator: Comparator, case: Case) -> Judgement:
    """Hold the stated amount against the difference of the levels."""
    amount = comparator.hysteresis.amount if isinstance(comparator.hysteresis, Hysteresis) else None
    trip = as_shipped(case, comparator).trip if comparator.trip is not None or comparator.ships_with else None
    if amount is None or trip is None or trip.rising is None or trip.falling is None:
        return case.not_applicable("does not state a hysteresis beside both levels")
    up, down = trip.rising, trip.falling
    at = "hysteresis.amount"
    if up.typical is not None and down.typical is not None:
        apart_v = up.typical - down.typical
        how = f"{show(up.typical, _V)} rising less {show(down.typical, _V)} falling"
        slack_v = _last_digit_v(up.typical) + _last_digit_v(down.typical)
        made = Made(apart_v, apart_v, how)
        return held_against(case, amount, made, dimension=_V, what="hysteresis", slack=slack_v, at=at)
    apart = _possible_v(up, down, tracked=bool(comparator.tracked))
    if apart is None or amount.least is None or amount.most is None:
        return case.not_applicable("states neither typical levels nor both ends of levels and hysteresis")
    least_v, most_v = apart
    slack_v = 2 * _MOST_ROUNDING_V
    why = f"levels {show(least_v, _V)} to {show(most_v, _V)} apart; up to {show(slack_v, _V)} is taken for rounding"
    if amount.least - most_v >= least_v - amount.most:
        return case.at_most(
            need=most_v + slack_v, have=amount.least, dimension=_V, says="hysteresis as stated, least", why=why,
            mend="correct the hysteresis or a level", at=at,
        )  # fmt: skip
    return case.at_least(
        need=least_v - slack_v, have=amount.most, dimension=_V, says="hysteresis as stated, greatest", why=why,
        mend="correct the hysteresis or a level", at=at,
    )  # fmt: skip


def _possible_v(up: Voltage, down: Voltage, *, tracked: bool) -> tuple[float, float] | None:
    """What the ranges of the levels leave possible between them."""
    if up.least is None or up.most is None or down.least is None or down.most is None:
        return None
    if tracked:
        ends_v = up.least - down.least, up.most - down.most
        return min(ends_v), max(ends_v)
    return up.least - down.most, up.most - down.least


def _last_digit_v(level_v: float) -> float:
    """Half a unit of the last digit in which a level is written; 5 mV where that is more."""
    _, _, digits = f"{level_v:.9f}".rstrip("0").partition(".")
    return min(0.5 * 10.0 ** -len(digits), _MOST_ROUNDING_V)


@rule(
    "claims/divider_ratio",
    title="the stated divider ratio is what its resistances make",
    level=Level.WARNING,
    applies_to="comparators",
    proves="The ratio is one that bottom/(top + bottom) takes over the spans of both. " + _HALF_A_PER_CENT,
    facts=("comparators.*.divider.ratio", "comparators.*.divider.top", "comparators.*.divider.bottom"),
    mend="correct the ratio or a resistance",
    sources=("Kirchhoff's laws for an unloaded divider (derived)",),
    example=Example(
        fails="comparators: {uv: {divider: {ratio: 0.36}}}",
        holds="comparators: {uv: {divider: {ratio: 0.367}}}",
    ),
)
def ratio_is_made_by_resistances(comparator: Comparator, case: Case) -> Judgement:
    """Hold the stated ratio against the two resistances."""
    divider = comparator.divider
    if divider is None or divider.ratio is None or divider.top is None or divider.bottom is None:
        return case.not_applicable("does not state a ratio beside both resistances")
    own = case.own
    top, bottom = _ends(own, "divider.top"), _ends(own, "divider.bottom")
    case.settle()
    made = Made(
        bottom[0] / (bottom[0] + top[1]), bottom[1] / (bottom[1] + top[0]),
        f"{_ends_text(bottom, Dimension.RESISTANCE)} below {_ends_text(top, Dimension.RESISTANCE)}",
    )  # fmt: skip
    stated = Span(divider.ratio, divider.ratio, divider.ratio)
    slack = ROUNDING * divider.ratio
    return held_against(
        case, stated, made, dimension=Dimension.COUNT, what="ratio", slack=slack, at="divider.ratio"
    )  # fmt: skip


def _ends(facts: Facts, fact: str) -> tuple[float, float]:
    return facts.least(fact), facts.most(fact)


def _ends_text(ends: tuple[float, float], dimension: Dimension) -> str:
    least, most = (show(end, dimension) for end in ends)
    return least if least == most else f"{least} to {most}"


@rule(
    "claims/level_from_reference",
    title="the levels are where the divider and the reference put them",
    level=Level.WARNING,
    applies_to="comparators",
    proves="Reference voltage over divider ratio, which is the level before the hysteresis moves it either way, lies "
    "between the lowest falling and the highest rising level. " + _HALF_A_PER_CENT,
    facts=("comparators.*.trip", "comparators.*.divider.ratio", "references.*.voltage"),
    mend="correct the levels, the ratio or the reference",
    sources=("a V = V_ref (derived)",),
    example=Example(
        fails="comparators: {uv: {divider: {ratio: 0.38, top: 3.72 Mohm, bottom: 2.28 Mohm}}}",
        holds="comparators: {uv: {divider: {ratio: 0.367, top: 3.8 Mohm, bottom: 2.2 Mohm}}}",
    ),
)
def levels_come_from_reference(comparator: Comparator, case: Case) -> Judgement:
    """Hold the levels against reference and divider."""
    reference = case.description.references.get(comparator.reference or "")
    ratio = comparator.divider.ratio if comparator.divider is not None else None
    if reference is None or ratio is None or reference.voltage is None:
        return case.not_applicable("does not state a reference voltage beside a divider ratio")
    shipped = as_shipped(case, comparator)
    falling, rising, voltage_v = case.gather(
        lambda: falling_window(case, shipped),
        lambda: rising_window(case, shipped),
        lambda: case.of(reference).middle("voltage"),
    )
    level_v = voltage_v / ratio
    slack_v = ROUNDING * level_v
    low_v, high_v = min(falling.least_v, rising.least_v) - slack_v, max(falling.most_v, rising.most_v) + slack_v
    why = f"{show(voltage_v, _V)} of {reference.id} over a ratio of {ratio:g}; {show(slack_v, _V)} taken for rounding"
    answer, need_v = (case.at_least, low_v) if level_v - low_v <= high_v - level_v else (case.at_most, high_v)
    return answer(
        need=need_v, have=level_v, dimension=_V, says="level that reference and divider make", why=why,
        mend="correct the levels, the ratio or the reference", at="trip",
    )  # fmt: skip


@rule(
    "claims/filter",
    title="the stated filter time is what its components make",
    level=Level.WARNING,
    applies_to="comparators",
    proves="The time that the components of timing make, over their spans, lies in the stated filter time. "
    + _HALF_A_PER_CENT,
    facts=("comparators.*.filter", "comparators.*.timing", "rails.*.delivered for a resistance"),
    mend="correct the time or a component",
    sources=("charge of a capacitor through a resistance or by a current; counted periods (derived)",),
    example=Example(
        fails="comparators: {uv: {timing: {capacitance: {min: 90 fF, max: 160 fF}}}}",
        holds="comparators: {uv: {timing: {capacitance: {min: 90 fF, max: 110 fF}}}}",
    ),
    formulas=(timer.charge_time_s, timer.current_charge_time_s, timer.counted_time_s),
)
def filter_is_made_by_components(comparator: Comparator, case: Case) -> Judgement:
    """Hold the filter against its components."""
    if comparator.timing is None:
        return case.not_applicable("does not say what makes its filter (timing)")
    return _time_held(comparator, comparator.timing, case, "filter")


@rule(
    "claims/stage_delay",
    title="the stated delay of a stage is what its components make",
    level=Level.WARNING,
    applies_to="output_stages",
    proves="The time that the components of timing make, over their spans, lies in the stated release delay, or in the "
    "delay where there is no release delay. " + _HALF_A_PER_CENT,
    facts=(
        "output_stages.*.release_delay, or delay", "output_stages.*.timing", "rails.*.delivered for a resistance",
    ),
    mend="correct the time or a component",
    sources=("charge of a capacitor through a resistance or by a current; counted periods (derived)",),
    example=Example(
        fails="output_stages: {core_out: {timing: {count: 100, period: {min: 9 us, max: 12 us}}}}",
        holds="output_stages: {core_out: {timing: {count: 100, period: {min: 12 us, max: 18 us}}}}",
    ),
    formulas=(timer.charge_time_s, timer.current_charge_time_s, timer.counted_time_s),
)  # fmt: skip
def delay_is_made_by_components(stage: OutputStage, case: Case) -> Judgement:
    """Hold the delay against its components."""
    if stage.timing is None:
        return case.not_applicable("does not say what makes its delay (timing)")
    return _time_held(stage, stage.timing, case, "release_delay" if stage.release_delay is not None else "delay")


def _time_held(element: Comparator | OutputStage, timing: Timing, case: Case, fact: str) -> Judgement:
    made, stated = case.gather(lambda: _time_made(element, timing, case), lambda: case.own.must(fact))
    slack_s = ROUNDING * made.most
    return held_against(
        case, stated, made, dimension=_S, what=fact.replace("_", " "), slack=slack_s, at=fact
    )  # fmt: skip


def _time_made(element: Comparator | OutputStage, timing: Timing, case: Case) -> Made:
    """What the components make: by counting where periods are given, else by charging."""
    own = case.own
    if timing.count is not None or timing.period is not None:
        count, (least_s, most_s) = own.number("timing.count"), _ends(own, "timing.period")
        case.settle()
        ends_s = [timer.counted_time_s(count=count, period_s=period_s) for period_s in (least_s, most_s)]
        return Made(ends_s[0], ends_s[1], f"{count:g} periods")
    farad, volt = _ends(own, "timing.capacitance"), _ends(own, "timing.threshold")
    if timing.current is not None:
        ampere = _ends(own, "timing.current")
        case.settle()
        ends_s = [
            timer.current_charge_time_s(current_a=ampere[1 - end], c_f=farad[end], v_th_v=volt[end]) for end in (0, 1)
        ]
        return Made(ends_s[0], ends_s[1], "a current into a capacitance")
    ohm = _ends(own, "timing.resistance")
    rail = rail_of(case, element)
    supply = _ends(case.of(rail), "delivered")
    case.settle()
    ends_s = [
        timer.charge_time_s(r_ohm=ohm[end], c_f=farad[end], v_final_v=supply[1 - end], v_th_v=volt[end])
        for end in (0, 1)
    ]
    return Made(ends_s[0], ends_s[1], f"a resistance and a capacitance charged from {rail.id}")


@rule(
    "claims/reference_current",
    title="the stated current of a reference is what its voltage and resistance make",
    level=Level.WARNING,
    applies_to="references",
    proves="Voltage over setting resistance, over the spans of both, lies in the stated current. " + _HALF_A_PER_CENT,
    facts=("references.*.current", "references.*.voltage", "references.*.resistance"),
    mend="correct the current, the voltage or the resistance",
    sources=("Ohm's law",),
    example=Example(
        fails="references: {ref_fast: {current: 120 nA, resistance: {min: 5.4 Mohm, max: 6.6 Mohm}}}",
        holds="references: {ref_fast: {current: 100 nA, resistance: {min: 5.4 Mohm, max: 6.6 Mohm}}}",
    ),
)
def reference_current_is_made(reference: Reference, case: Case) -> Judgement:
    """Hold the stated current against Ohm's law."""
    if reference.current is None or reference.resistance is None:
        return case.not_applicable("does not state a current beside a setting resistance")
    return _current_held(case, reference, reference)


@rule(
    "claims/bias_current",
    title="the stated bias current is what its reference and resistance make",
    level=Level.WARNING,
    applies_to="biases",
    proves="Voltage of the reference that a bias copies from over its setting resistance, over the spans of both, lies "
    "in the stated current. " + _HALF_A_PER_CENT,
    facts=("biases.*.current", "biases.*.source", "biases.*.resistance", "references.*.voltage"),
    mend="correct the current or the resistance",
    sources=("Ohm's law",),
    example=Example(
        fails="biases: {bias_main: {current: {min: 1.25 uA, typ: 1.3 uA, max: 1.35 uA}}}",
        holds="biases: {bias_main: {current: {min: 0.9 uA, typ: 1 uA, max: 1.12 uA}}}",
    ),
)
def bias_current_is_made(bias: Bias, case: Case) -> Judgement:
    """Hold the stated current against Ohm's law."""
    source = case.description.references.get(bias.source or "")
    if bias.current is None or bias.resistance is None or source is None:
        return case.not_applicable("does not state a current beside a setting resistance and the reference it copies")
    return _current_held(case, bias, source)


def _current_held(case: Case, element: Reference | Bias, reference: Reference) -> Judgement:
    volt, ohm = _ends(case.of(reference), "voltage"), _ends(case.own, "resistance")
    case.settle()
    require_positive(r_ohm=ohm[0])
    made = Made(volt[0] / ohm[1], volt[1] / ohm[0], f"voltage of {reference.id} over the resistance")
    assert element.current is not None
    slack_a = ROUNDING * made.most
    return held_against(case, element.current, made, dimension=_A, what="current", slack=slack_a, at="current")


@rule(
    "claims/bias_consumption",
    title="a bias takes no less than the current it makes",
    level=Level.WARNING,
    applies_to="biases",
    proves="The greatest supply current of a resistor bias or of one that feeds itself is at least its greatest output "
    "current: what it copies flows in it first. Where it does not, a person must look whether the current is a "
    "multiple of what flows in the bias. " + _HALF_A_PER_CENT,
    facts=("biases.*.consumes", "biases.*.current"),
    mend="correct the consumption or the current",
    sources=("Kirchhoff's current law",),
    example=Example(
        fails="biases: {bias_start: {consumes: {max: 0.08 uA}}}",
        holds="biases: {bias_start: {consumes: {max: 0.2 uA}}}",
    ),
)
def bias_takes_what_it_makes(bias: Bias, case: Case) -> Judgement:
    """Compare the two currents."""
    if bias.kind not in ("resistor", "self_biased"):
        return case.not_applicable("does not make its current by itself")
    if bias.consumes is None or bias.current is None or bias.consumes.most is None or bias.current.most is None:
        return case.not_applicable("does not state its greatest consumption beside its greatest current")
    makes_a = bias.current.most
    return case.at_least(
        need=makes_a * (1 - ROUNDING), have=bias.consumes.most, dimension=_A, says="consumption",
        why=f"makes up to {show(makes_a, _A)}; {show(ROUNDING * makes_a, _A)} taken for rounding",
        mend=f"state a consumption of at least {show(makes_a, _A)}, or that the current is a multiple of its own",
        otherwise=Kind.REVIEW, at="consumes",
    )  # fmt: skip


RULES: Final[tuple[Rule, ...]] = (
    hysteresis_is_between_levels,
    ratio_is_made_by_resistances,
    levels_come_from_reference,
    filter_is_made_by_components,
    delay_is_made_by_components,
    reference_current_is_made,
    bias_current_is_made,
    bias_takes_what_it_makes,
)
