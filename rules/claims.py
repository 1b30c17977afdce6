"""Claims: a stated hysteresis, ratio, level, time or current against what its own components make."""

from __future__ import annotations

import math
from collections.abc import Callable
from typing import Final

from tidegate.lint.case import Case
from tidegate.lint.derived.at_corner import at_corner
from tidegate.lint.derived.levels.at_code import as_shipped
from tidegate.lint.derived.levels.claimed_level import claimed_v
from tidegate.lint.derived.levels.trip_causes import LEVEL_FORMULAS
from tidegate.lint.derived.levels.trip_levels import falling_window, rising_window
from tidegate.lint.derived.stated_and_made import ROUNDING, Made, held_against, share_for_rounding
from tidegate.lint.derived.supply.rail_of import rail_of
from tidegate.lint.description.model.detector import Bias, Comparator, Hysteresis, Reference
from tidegate.lint.description.model.reset_path import OutputStage
from tidegate.lint.description.model.timing import Timing
from tidegate.lint.facts.reading import Better
from tidegate.lint.facts.view import Number
from tidegate.lint.judgement import Judgement, Kind, Level
from tidegate.lint.physics import timer
from tidegate.lint.physics.domain import require_positive
from tidegate.lint.quantity import Dimension, Voltage, show
from tidegate.lint.rule import Example, Rule, rule

_V: Final = Dimension.VOLTAGE
_A: Final = Dimension.CURRENT
_S: Final = Dimension.DURATION
_MOST_ROUNDING_V: Final = 0.005
_AMOUNT: Final = "hysteresis.amount"
_HALF_A_PER_CENT: Final = "Half a per cent is taken for the rounding of the numbers stated."


@rule(
    "claims/hysteresis",
    title="the stated hysteresis is what lies between the stated levels",
    level=Level.WARNING,
    applies_to="comparators",
    proves="Typical rising level less typical falling level lies in the stated hysteresis, and is its typical value "
    "where one is stated. Where the levels are ranges without a typical value, some hysteresis that they leave "
    "possible does, and so where a typical amount is all that is stated: typical values of one table need not be of "
    "one part. Half a unit of the last digit of each level, and at most 5 mV, is taken for rounding.",
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
    code = comparator.ships_with if comparator.codes and comparator.trip is None else None
    trip = comparator.trip if code is None else comparator.codes.get(code)
    if amount is None or trip is None or trip.rising is None or trip.falling is None:
        return case.not_applicable("does not state a hysteresis beside both levels")
    own = case.of(comparator)
    levels = own.trip if code is None else own.codes[code]
    up_v, down_v = trip.rising.typical, trip.falling.typical
    lone = amount.least is None and amount.most is None
    if up_v is None or down_v is None or (lone and not _fits(amount, up_v, down_v)):
        return _some_is_possible(case, own.hysteresis.amount, levels.rising, levels.falling, own.tracked.must)
    apart_v, slack_v = up_v - down_v, _last_digit_v(up_v) + _last_digit_v(down_v)
    how = f"{show(up_v, _V)} rising less {show(down_v, _V)} falling"
    return held_against(
        case, own.hysteresis.amount, lambda: Made(apart_v, apart_v, how), dimension=_V, what="hysteresis",
        at=_AMOUNT, rounding=lambda _: slack_v,
    )  # fmt: skip


def _some_is_possible(case: Case, amount: Number, up: Number, down: Number, tracked: Callable[[], bool]) -> Judgement:
    """Pass if some stated hysteresis is one that the ranges of the levels leave possible."""
    together = tracked()
    slack_v = 2 * _MOST_ROUNDING_V
    # The more the levels leave possible, the more of the stated amount may be right.
    most_v = _apart_v(up, down, max, together=together, up=Better.MORE)
    least_v = _apart_v(up, down, min, together=together, up=Better.LESS)
    stated_least_v, stated_most_v = amount.least(Better.LESS), amount.most(Better.MORE)
    why = f"levels {show(least_v, _V)} to {show(most_v, _V)} apart; up to {show(slack_v, _V)} is taken for rounding"
    if stated_least_v - most_v >= least_v - stated_most_v:
        return case.at_most(
            need=most_v + slack_v, have=stated_least_v, dimension=_V, says="hysteresis as stated, least", why=why,
            mend="correct the hysteresis or a level", at=_AMOUNT,
        )  # fmt: skip
    return case.at_least(
        need=least_v - slack_v, have=stated_most_v, dimension=_V, says="hysteresis as stated, greatest", why=why,
        mend="correct the hysteresis or a level", at=_AMOUNT,
    )  # fmt: skip


def _apart_v(
    rising: Number, falling: Number, furthest: Callable[[float, float], float], *, together: bool, up: Better
) -> float:
    """How far apart the levels can be at one end: low with low and high with high where they track."""
    if together:
        return furthest(rising.least(up) - falling.least(up.other), rising.most(up) - falling.most(up.other))
    if up is Better.MORE:
        return rising.most(up) - falling.least(up.other)
    return rising.least(up) - falling.most(up.other)


def _fits(amount: Voltage, up_v: float, down_v: float) -> bool:
    """Whether the typical amount is what lies between the typical levels, up to rounding."""
    slack_v = _last_digit_v(up_v) + _last_digit_v(down_v)
    return amount.typical is not None and abs(amount.typical - (up_v - down_v)) <= slack_v


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
    if divider is None or divider.ratio is None or (divider.top is None and divider.bottom is None):
        return case.not_applicable("does not state a ratio beside its resistances")
    own = case.of(comparator).divider

    def make() -> Made:
        bottom, top = _ends(own.bottom), _ends(own.top)
        how = f"{_ends_text(bottom, Dimension.RESISTANCE)} below {_ends_text(top, Dimension.RESISTANCE)}"
        return Made(
            at_corner(case, lambda: _share(bottom[0], top[1]), sure=0.0, best=1.0),
            at_corner(case, lambda: _share(bottom[1], top[0]), sure=1.0, best=0.0), how,
        )  # fmt: skip

    return held_against(case, own.ratio, make, dimension=Dimension.COUNT, what="ratio", at="divider.ratio")


def _share(part: float, rest: float) -> float:
    return part / (part + rest)


def _ends(fact: Number) -> tuple[float, float]:
    return fact.least(), fact.most()


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
    formulas=LEVEL_FORMULAS,
)
def levels_come_from_reference(comparator: Comparator, case: Case) -> Judgement:
    """Hold the levels against reference and divider."""
    reference = case.description.references.get(comparator.reference or "")
    if reference is None or comparator.divider is None:
        return case.not_applicable("does not name a reference beside a divider")
    voltage, ratio = case.of(reference).voltage, case.of(comparator).divider.ratio
    shipped = as_shipped(case, comparator)
    levels = falling_window(case, shipped), rising_window(case, shipped)
    # The wider the levels lie, the more of what reference and divider make lies between them.
    low_v = min(claimed_v(case, comparator, level, "least") for level in levels)
    high_v = max(claimed_v(case, comparator, level, "most") for level in levels)
    above_v = at_corner(case, lambda: voltage.typical(Better.MORE) / ratio.number(Better.LESS), sure=0.0, best=math.inf)
    below_v = at_corner(case, lambda: voltage.typical(Better.LESS) / ratio.number(Better.MORE), sure=math.inf, best=0.0)
    low_v, high_v = low_v - share_for_rounding(above_v), high_v + share_for_rounding(below_v)
    is_low = above_v - low_v <= high_v - below_v
    level_v = above_v if is_low else below_v
    answer, need_v = (case.at_least, low_v) if is_low else (case.at_most, high_v)
    return answer(
        need=need_v, have=level_v, dimension=_V, says="level that reference and divider make",
        why=f"{show(voltage.typical(), _V)} of {reference.id} over a ratio of {ratio.number():g}; "
        f"{show(share_for_rounding(level_v), _V)} taken for rounding",
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
    stated: Number = getattr(case.of(element), fact)
    return held_against(
        case, stated, lambda: _time_made(element, timing, case), dimension=_S, what=fact.replace("_", " "), at=fact
    )


def _time_made(element: Comparator | OutputStage, timing: Timing, case: Case) -> Made:
    """What the components make: by counting where periods are given, else by charging."""
    facts = case.of(element).timing
    if timing.count is not None or timing.period is not None:
        return _between(
            case,
            lambda: timer.counted_time_s(count=facts.count.number(Better.MORE), period_s=facts.period.least()),
            lambda: timer.counted_time_s(count=facts.count.number(Better.LESS), period_s=facts.period.most()),
            f"{'unsaid' if timing.count is None else f'{timing.count:g}'} periods",
        )
    farad, volt = facts.capacitance, facts.threshold
    if timing.current is not None:
        ampere = facts.current
        return _between(
            case,
            lambda: timer.current_charge_time_s(current_a=ampere.most(), c_f=farad.least(), v_th_v=volt.least()),
            lambda: timer.current_charge_time_s(current_a=ampere.least(), c_f=farad.most(), v_th_v=volt.most()),
            "a current into a capacitance",
        )
    ohm, rail = facts.resistance, rail_of(case, element)
    supply = case.of(rail).delivered
    return _between(
        case,
        lambda: timer.charge_time_s(r_ohm=ohm.least(), c_f=farad.least(), v_final_v=supply.most(), v_th_v=volt.least()),
        lambda: timer.charge_time_s(r_ohm=ohm.most(), c_f=farad.most(), v_final_v=supply.least(), v_th_v=volt.most()),
        f"a resistance and a capacitance charged from {rail.id}",
    )


def _between(case: Case, least: Callable[[], float], most: Callable[[], float], how: str) -> Made:
    """What lies between two ends, each without a limit where a component is not known."""
    return Made(at_corner(case, least, sure=0.0, best=math.inf), at_corner(case, most, sure=math.inf, best=0.0), how)


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
    own = case.of(element)

    def make() -> Made:
        volt, ohm = case.of(reference).voltage, own.resistance
        return _between(
            case,
            lambda: _flowing_a(volt.least(), ohm.most()),
            lambda: _flowing_a(volt.most(), ohm.least()),
            f"voltage of {reference.id} over the resistance",
        )

    return held_against(case, own.current, make, dimension=_A, what="current", at="current")


def _flowing_a(voltage_v: float, r_ohm: float) -> float:
    require_positive(r_ohm=r_ohm)
    return voltage_v / r_ohm


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
    own = case.of(bias)
    if own.kind.must() not in ("resistor", "self_biased"):
        return case.not_applicable("does not make its current by itself")
    makes_a = own.current.most()
    return case.at_least(
        need=makes_a * (1 - ROUNDING), have=own.consumes.most(Better.MORE), dimension=_A, says="consumption",
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
