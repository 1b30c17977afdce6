"""Trip levels made without a reference: what the components make of them, over corners and temperature."""

from __future__ import annotations

import math
from typing import Final

from tidegate.lint.account import Sum, plus
from tidegate.lint.case import Case
from tidegate.lint.derived.crossover.crossover_error import stated_centre_v
from tidegate.lint.derived.crossover.crossover_facts import Crossing
from tidegate.lint.derived.crossover.crossover_level import CrossoverLevel, Place, release_level, second_crossing_level
from tidegate.lint.derived.crossover.crossover_words import NO_LEVEL, corner_text
from tidegate.lint.derived.levels.at_code import as_shipped
from tidegate.lint.derived.levels.claimed_level import claimed_v
from tidegate.lint.derived.levels.follower_lines import follower_lines, most_demanding
from tidegate.lint.derived.levels.follower_supplies import follower_supplies
from tidegate.lint.derived.levels.guarded_loads import Bound
from tidegate.lint.derived.levels.requirements import guard_gaps, half_ripple_v
from tidegate.lint.derived.levels.trip_levels import End, has_no_hysteresis, hysteresis_window, rising_window
from tidegate.lint.derived.safe_rounding import show_up
from tidegate.lint.description.model.detector import Comparator
from tidegate.lint.facts.reading import MissingFactsError
from tidegate.lint.judgement import Judgement, Level
from tidegate.lint.physics import crossing_point, device_at_corner
from tidegate.lint.physics.crossing_point import NoCrossingError
from tidegate.lint.quantity import Dimension, show
from tidegate.lint.rule import Example, Rule, rule

_V: Final = Dimension.VOLTAGE
_FACTS: Final = (
    "comparators.*.crossover", "process.diodes.*, or process.devices.*", "process.resistors.*, where one is named",
    "conditions.junction_temperature",
)  # fmt: skip
_SPICE: Final = "saturation-current law of the SPICE junction models (Nagel, Memorandum ERL-M520, 1975)"
_EKV: Final = "Enz, Krummenacher and Vittoz, Analog Integrated Circuits and Signal Processing 8, 83-114 (1995)"
_ENDS: Final[tuple[End, End]] = ("least", "most")
_MORE_HOLD: Final = {
    Crossing.DIVIDER: "a smaller ratio, or a smaller resistance, so that the device is ahead at low supply",
    Crossing.REFERENCE: "a larger reference current, a smaller rise, a larger resistance, or a smaller mirror ratio",
}


def _without_crossover(comparator: Comparator, case: Case) -> Judgement:
    """Nothing to judge where a reference makes the level; without one, what does is a question.

    Raises: MissingFactsError: where it is not said what makes the level.
    """
    if comparator.reference is None:
        raise MissingFactsError([comparator.fact("reference")])
    if comparator.reference == "none":
        raise MissingFactsError([comparator.fact("crossover")])
    return case.not_applicable("its level comes from a reference, not from a crossover")


_CRUDE: Final = """comparators: {{por: {{crossover: {{kind: crude_current, reference_current: {current}, mirror: 1,
  reference_start: {{min: 1.26 V, max: 1.34 V}}, reference_rise: 0.1 V}}}}}}
"""


@rule(
    "trip_window/crossover_level",
    title="the components of a crossover make the level that is stated",
    level=Level.ERROR,
    applies_to="comparators",
    proves="The level at which the divided supply overtakes a diode or a diode-connected MOS device fed through a "
    "resistor, or at which a reference current, as it comes up in a straight line, overtakes the mirrored current of "
    "such a branch, lies inside the rising level as it is stated; a level stated as one number is one of those that "
    "the components make. It is solved at every corner of what is given (threshold, its slope, gain, resistance, "
    "saturation current, offset, and the reference's current, start and rise at the ends of their spans) and over the "
    "range of temperature. Where the resistor's kind is named, its resistance follows tc1 and tc2; else it is taken as "
    "stated at every temperature. At every corner there is such a level; else nothing holds reset, or nothing lets go. "
    "Where a component is not given there is no corner to solve.",
    facts=(*_FACTS, "comparators.*.trip.rising"),
    mend="state the level that the components make, or change the components",
    sources=(_SPICE, _EKV),
    example=Example(
        fails="comparators: {por: {crossover: {ratio: 0.46}}}",
        holds="comparators: {por: {crossover: {ratio: 0.5}}}",
    ),
    formulas=(
        crossing_point.divider_crossing_v, crossing_point.reference_crossing_v, device_at_corner.junction_at,
        device_at_corner.diode_connected_at, device_at_corner.slope_factor_of_swing, device_at_corner.series_ohm_at,
    ),
)  # fmt: skip
def components_make_the_level(comparator: Comparator, case: Case) -> Judgement:
    """Compare the window worked out with the one stated."""
    if comparator.crossover is None:
        return _without_crossover(comparator, case)
    level, stated = release_level(case, comparator), rising_window(case, as_shipped(case, comparator))
    try:
        least, most, swings = level.least(), level.most(), level.swings_v()
    except NoCrossingError:
        crossing = Crossing.REFERENCE if comparator.crossover.kind == "crude_current" else Crossing.DIVIDER
        return case.fails(NO_LEVEL[crossing], mend=_MORE_HOLD[crossing], at="crossover")
    made = f"{show(least.level_v, _V)} to {show(most.level_v, _V)}"
    parts = ", ".join(f"{name} {show(width_v, _V)}" for name, width_v in swings if width_v > 0.0)
    moves = f"what moves it: {parts or 'nothing'}"
    mend = f"state {made}, or narrow what moves it most: {swings[0][0]}"
    centre_v = stated_centre_v(comparator)
    if centre_v is not None:  # one number, about which the components move it: it is one of those they make
        is_low = centre_v - least.level_v <= most.level_v - centre_v
        answer, place = (case.at_least, least) if is_low else (case.at_most, most)
        return answer(
            need=place.level_v, have=centre_v, dimension=_V, says="rising level as it is stated",
            why=f"components {made}; {moves}; {'lowest' if is_low else 'highest'} {_where(place)}", mend=mend,
            at="crossover",
        )  # fmt: skip
    # The further out the ends lie that are stated, the more of what the components make lies between them.
    low_v, high_v = (claimed_v(case, comparator, stated, end) for end in _ENDS)
    why = f"components {made}, stated {show(low_v, _V)} to {show(high_v, _V)}; {moves}"
    if least.level_v - low_v <= high_v - most.level_v:
        return case.at_least(
            need=low_v, have=least.level_v, dimension=_V, says="rising level that the components make, lowest",
            why=f"{why}; lowest {_where(least)}", mend=mend, at="crossover",
        )  # fmt: skip
    return case.at_most(
        need=high_v, have=most.level_v, dimension=_V, says="rising level that the components make, highest",
        why=f"{why}; highest {_where(most)}", mend=mend, at="crossover",
    )  # fmt: skip


def _where(place: Place) -> str:
    """The temperature and corner of a level, in words."""
    return corner_text(place.corner, place.t_k)


@rule(
    "trip_window/crossover_tracks",
    title="a level made without a reference stays above what must work once it lets go",
    level=Level.ERROR,
    applies_to="comparators",
    proves="At every corner and every temperature, the level that the components make, less the greatest hysteresis, "
    "is at least the supply that the most demanding of what must work once the detector lets go needs at that "
    "temperature (a reference: its lowest supply at the cold end, moved by works_from_slope). Corner by corner, not "
    "extreme against extreme.",
    facts=(
        *_FACTS, "works_from, and works_from_slope of references, of what follows", "comparators.*.hysteresis.amount",
    ),
    mend="a higher level, or a reference that works from less",
    sources=(_SPICE, _EKV, "common practice, no source: both levels fall with temperature, and should do so alike"),
    example=Example(
        fails="references: {ref_fast: {works_from: {max: 1.3 V}}}",
        holds="references: {ref_fast: {works_from: {max: 1.06 V}}}",
    ),
    formulas=(
        crossing_point.divider_crossing_v, crossing_point.reference_crossing_v, device_at_corner.junction_at,
        device_at_corner.diode_connected_at, device_at_corner.slope_factor_of_swing, device_at_corner.series_ohm_at,
    ),
)  # fmt: skip
def level_tracks_followers(comparator: Comparator, case: Case) -> Judgement:
    """Find the corner and temperature with the least room."""
    if comparator.crossover is None:
        return _without_crossover(comparator, case)
    if comparator.role != "power_on":
        return case.not_applicable("only a power-on detector lets go what is not up yet")
    bounds = follower_supplies(case, comparator)
    if not bounds and (gaps := guard_gaps(case, comparator)):
        raise MissingFactsError(gaps)
    if not bounds:
        nothing = "nothing follows it on this rail"
        return case.not_applicable(nothing) if case.reading.exact else case.passes(nothing)
    level, kept = release_level(case, comparator), _greatest_hysteresis(comparator, case)
    lines, cold_k = follower_lines(case, bounds), level.temperature_k[0]
    try:
        worst = level.where_least(
            lambda place: place.level_v - most_demanding(lines, place.t_k, cold_k).needs_v(place.t_k, cold_k)
        )
    except NoCrossingError:
        return case.not_applicable("at some corner there is no level at all")
    demanding = most_demanding(lines, worst.t_k, cold_k)
    element, need_v = demanding.element, demanding.needs_v(worst.t_k, cold_k)
    have = case.sum(plus("level of the crossover", lambda: worst.level_v, of=_where(worst))).less(kept)
    short_v = need_v - have.value
    return case.at_least(
        need=need_v,
        have=have,
        dimension=_V,
        says="falling level, where it is closest at equal temperature,",
        why=f"{_where(worst)}; {element} works from {show(need_v, _V)} there{_extremes(level, bounds, kept.value)}",
        mend=f"a level at least {show_up(short_v, _V)} higher, or {element} working from that much less",
        at="crossover",
    )


def _greatest_hysteresis(comparator: Comparator, case: Case) -> Sum:
    """How far the falling level lies below the rising one at the most."""
    if has_no_hysteresis(comparator):
        return Sum(0.0, ())
    return hysteresis_window(case, as_shipped(case, comparator)).end("most")


def _extremes(level: CrossoverLevel, bounds: list[Bound], kept_v: float) -> str:
    """What extreme against extreme would say, where that is known."""
    apart_v = level.least().level_v - kept_v - bounds[0].level_v
    if not math.isfinite(apart_v):
        return ""
    return f"; extreme against extreme it would be {show(abs(apart_v), _V)} {'above' if apart_v >= 0.0 else 'below'}"


@rule(
    "trip_window/second_crossing",
    title="a crude current that holds reset does not overtake the reference again in service",
    level=Level.ERROR,
    applies_to="comparators",
    proves="At every corner and every temperature, the supply at which the mirrored crude current reaches the least "
    "reference current, I R + V(I) with I the reference current over the mirror ratio, is at least the highest supply "
    "delivered plus ripple/2; else the chip is reset in service.",
    facts=(*_FACTS, "rails.*.delivered", "rails.*.ripple.peak_to_peak"),
    mend="a larger resistance, a larger reference current, or a smaller mirror ratio",
    sources=(_SPICE, _EKV, "Kirchhoff's voltage law around the branch (derived)"),
    example=Example(
        fails=_CRUDE.format(current="600 nA"),
        holds=_CRUDE.format(current="900 nA"),
    ),
    formulas=(
        crossing_point.branch_level_v,
        device_at_corner.junction_at,
        device_at_corner.diode_connected_at,
        device_at_corner.slope_factor_of_swing,
        device_at_corner.series_ohm_at,
    ),
)
def no_second_crossing(comparator: Comparator, case: Case) -> Judgement:
    """Compare the supply of the second crossing with the highest in service."""
    if comparator.crossover is None:
        return _without_crossover(comparator, case)
    kind = case.of(comparator).crossover.kind
    if kind.given is None:
        kind.lacking()
    if kind.given != "crude_current":
        return case.not_applicable("its crossover compares voltages: the divided supply stays ahead")
    rail = case.of(case.description.rails[comparator.watches])
    least = second_crossing_level(case, comparator).least()
    highest = case.sum(
        plus(f"{comparator.watches} delivered, greatest", rail.delivered.most, of=rail.delivered),
        plus("half the ripple", lambda: half_ripple_v(rail), of=rail.ripple.peak_to_peak),
    )
    return case.at_least(
        need=highest,
        have=least.level_v,
        dimension=_V,
        says="supply at which the crude current overtakes the reference again",
        why=f"lowest {_where(least)}; {comparator.watches} reaches {show(highest.value, _V)} in service",
        mend="a larger resistance, a larger reference current, or a smaller mirror ratio",
        at="crossover",
    )


RULES: Final[tuple[Rule, ...]] = (components_make_the_level, level_tracks_followers, no_second_crossing)
