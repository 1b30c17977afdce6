"""Self-bias: the bias and the references of a detector are up where it must decide."""

from __future__ import annotations

import math
from collections.abc import Iterable, Sequence
from enum import Enum
from functools import partial
from typing import Final

import msgspec

from tidegate.lint.case import Case
from tidegate.lint.derived.at_corner import known_of
from tidegate.lint.derived.levels.lowest_decision import LowestDecision, lowest_decision
from tidegate.lint.derived.levels.trip_causes import LEVEL_FORMULAS
from tidegate.lint.derived.safe_rounding import show_down, show_up
from tidegate.lint.derived.supply.lowest_supply import LowestSupply, lowest_supply
from tidegate.lint.derived.supply.rail_of import rail_of
from tidegate.lint.derived.supply.rail_sequence import leaning_of_rails, order_text, way_to_earlier
from tidegate.lint.derived.supply.sources_of import reach_of_sources, sources_in
from tidegate.lint.description.model.detector import Bias, Comparator, Reference
from tidegate.lint.description.model.supply import Rail
from tidegate.lint.graph.edge import Hop, Path
from tidegate.lint.graph.paths import Reach
from tidegate.lint.judgement import Judgement, Level, Measure, Relation
from tidegate.lint.quantity import Dimension, show
from tidegate.lint.rule import Example, Rule, rule

_V: Final = Dimension.VOLTAGE


@rule(
    "self_bias/up_in_time",
    title="what a detector leans on is up where it must decide",
    level=Level.ERROR,
    applies_to="comparators",
    proves="Every bias and reference that the detector leans on, directly or through others, works from a supply no "
    "higher than the detector's lowest falling level, where it is fed from the watched rail; else no higher than the "
    "lowest level delivered on its own rail, which comes up before the watched one. Lowest supplies are taken at the "
    "worst corner and temperature and held against the lowest trip level, extreme against extreme.",
    facts=(
        "comparators.*.trip", "comparators.*.domain", "comparators.*.bias",
        "comparators.*.reference or comparators.*.crossover", "biases.*.kind", "biases.*.works_from",
        "references.*.works_from, works_from_slope", "conditions.junction_temperature where that slope is above zero",
        "the domain of each source, and its rail", "rails.*.delivered and rails.*.after where another rail feeds one",
    ),
    mend="a source that works from a lower supply, a higher trip level, or a rail that is surely up first",
    sources=("a decision is worth what it is made from (derived)",),
    example=Example(
        fails="biases: {bias_start: {works_from: {max: 1.3 V}}}",
        holds="biases: {bias_start: {works_from: {max: 1.1 V}}}",
    ),
    formulas=LEVEL_FORMULAS,
    yields=("self_bias/no_loop", "self_bias/leans_on_nobody"),
)  # fmt: skip
def sources_are_up_in_time(comparator: Comparator, case: Case) -> Judgement:
    """Compare each source's lowest supply with the level at which it must work; then look at the order of rails."""
    reach = reach_of_sources(case, comparator)
    sources = sources_in(case, reach)
    off_chip = [source for source in sources if case.of(source).kind.must() == "external"]
    on_chip = [source for source in sources if source not in off_chip]
    needs, unsaid = known_of(case, (partial(_need, case, comparator, source) for source in on_chip))
    rails, unfed = known_of(case, [partial(rail_of, case, comparator)])
    worst = min(needs, key=lambda need: need.measure.margin, default=None)
    short = worst is not None and not worst.measure.holds
    fed = (*((comparator, rail) for rail in rails), *((need.source, need.rail) for need in needs))
    waits = [_wait(case, comparator, part, rail) for part, rail in fed]
    doubts = [wait for wait in waits if wait.order in (_Order.LATER, _Order.UNKNOWN)]
    late = _surely_late(comparator, off_chip, waits)
    if late is not None and not (short and (case.at_best or case.reading.exact)):  # a number that is sure says more
        return _asks_for_order(case, comparator, late, reach)
    if (unsaid or unfed) and not case.at_best:  # what is not known of, or not of enough, may work from anything
        need_v = 0.0 if worst is None else worst.least.level_v
        return case.at_most(need=need_v, have=math.inf, dimension=_V, says="what else it may lean on works from")
    if (off_chip or doubts) and not short:
        return _asks_for_order(case, comparator, _off_chip_wait(off_chip[0]) if off_chip else doubts[0], reach)
    if worst is None:
        return case.not_applicable("needs neither bias nor reference")
    return _measured(case, worst, reach, () if short else waits)


def _surely_late(comparator: Comparator, off_chip: Sequence[Bias | Reference], waits: Sequence[_Wait]) -> _Wait | None:
    """What is up too late whatever else is: what hangs on the detector itself, and what a power-on one gets late."""
    itself = next((wait for wait in waits if wait.order is _Order.ON_ITSELF), None)
    if itself is not None or comparator.role != "power_on":
        return itself
    later = next((wait for wait in waits if wait.order is _Order.LATER), None)
    return _off_chip_wait(off_chip[0]) if later is None and off_chip else later


class _Need(msgspec.Struct, frozen=True):
    """The lowest supply of a source against the level at which it must work."""

    source: Bias | Reference
    rail: Rail
    least: LowestDecision
    works: LowestSupply

    @property
    def measure(self) -> Measure:
        return Measure(self.least.level_v, self.works.level_v, _V, Relation.AT_MOST)


def _need(case: Case, comparator: Comparator, source: Bias | Reference) -> _Need:
    """A source with its two levels."""
    rail = rail_of(case, source)
    return _Need(source, rail, lowest_decision(case, comparator, rail), lowest_supply(case, source))


def _measured(case: Case, worst: _Need, reach: Reach, waits: Iterable[_Wait]) -> Judgement:
    """The source with the least margin."""
    name, least, works = worst.source.id, worst.least, worst.works
    at = (f"{name} is worst {works.at}",) if works.at else ()
    order = dict.fromkeys(wait.says for wait in waits if wait.order is _Order.FIRST)
    higher = f"; or a lowest falling level of {show_up(works.level_v, _V)} or more" if least.is_trip_level else ""
    return case.at_most(
        need=least.level,
        have=works.level_v,
        dimension=_V,
        says=f"{name}, which it leans on, works from",
        why="; ".join((least.why, *at, *order)),
        mend=f"{name} working from {show_down(least.level_v, _V)} or less; now {show(works.level_v, _V)}{higher}",
        path=reach.path(name),
    )


class _Order(Enum):
    """When the rail of something is up, as seen from the rail that the detector watches."""

    SAME = "the watched rail itself"
    FIRST = "before it"
    ON_ITSELF = "once the detector itself has let go"
    LATER = "after it"
    UNKNOWN = "not said"
    OFF_CHIP = "not the description's to say"


class _Wait(msgspec.Struct, frozen=True):
    """Something that a detector leans on, and when its rail is up."""

    part: str
    rail: str
    order: _Order
    says: str = ""
    onward: Path = ()


def _off_chip_wait(source: Bias | Reference) -> _Wait:
    return _Wait(source.id, "", _Order.OFF_CHIP)


def _wait(case: Case, comparator: Comparator, part: Comparator | Bias | Reference, rail: Rail) -> _Wait:
    watched = case.description.rails[comparator.watches]
    if rail.id == watched.id:
        return _Wait(part.id, rail.id, _Order.SAME)
    if comparator.id in case.graph.once(leaning_of_rails)[rail.id]:
        return _Wait(part.id, rail.id, _Order.ON_ITSELF)
    before = way_to_earlier(case, later=watched, earlier=rail)
    if before:
        return _Wait(part.id, rail.id, _Order.FIRST, order_text(case, later=watched, way=before))
    after = way_to_earlier(case, later=rail, earlier=watched)
    feed = (Hop(part.domain or "", "supplied by"), Hop(rail.id, "supplied by"), *after[1:])
    if after:
        return _Wait(part.id, rail.id, _Order.LATER, order_text(case, later=rail, way=after), feed)
    return _Wait(part.id, rail.id, _Order.UNKNOWN, onward=feed)


def _asks_for_order(case: Case, comparator: Comparator, wait: _Wait, reach: Reach) -> Judgement:
    """A person must look; of a power-on detector it is known to be wrong, unless nothing is said of the order."""
    watched = comparator.watches
    itself = wait.part == comparator.id
    who = "it" if itself else f"{wait.part}, which it leans on,"
    feed = f"feed {'it' if itself else wait.part} from {watched}"
    path = (*reach.path(wait.part), *wait.onward)
    if wait.order is _Order.UNKNOWN:
        return case.asks(
            f"rests on {wait.rail} being up before {watched}",
            why=f"{who} is fed from {wait.rail}, and nothing says that {watched} comes up after it",
            mend=f"give rails.{watched}.after and its delay if it does; else {feed}",
            path=path,
        )
    if wait.order is _Order.OFF_CHIP:
        says = f"rests on {wait.part} being there before {watched} reaches its trip level"
        why = f"{wait.part} comes from off the chip, and no rail of the description says when"
        mend = f"a source on the chip, fed from {watched}"
    elif wait.order is _Order.ON_ITSELF:
        says = f"{who} is fed from {wait.rail}, which hangs on its own output"
        why, mend = f"{wait.rail} comes up once {comparator.id} has let go", feed
    else:
        says = f"{who} is fed from {wait.rail}, which comes up after {watched}"
        why, mend = wait.says, feed
    if comparator.role == "power_on" or wait.order is _Order.ON_ITSELF:
        return case.fails(says, why=why, mend=mend, path=path)
    if wait.order is _Order.LATER:
        why = f"{why}: until then its decision means nothing, and another detector must hold reset"
        mend = f"a detector that holds reset until {wait.rail} is up; or {mend}"
    return case.asks(says, why=why, mend=mend, path=path)


RULES: Final[tuple[Rule, ...]] = (sources_are_up_in_time,)
