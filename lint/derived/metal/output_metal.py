"""The metal of a stage's output, its line and its vias: what it carries, and how much of it would be enough."""

from __future__ import annotations

import math
from collections.abc import Callable, Mapping
from typing import Final

import msgspec

from tidegate.lint.case import Case
from tidegate.lint.derived.at_corner import at_corner
from tidegate.lint.derived.metal.wire_limit import Seconds, StatedLimit, chosen_entry
from tidegate.lint.derived.safe_rounding import width_up_um
from tidegate.lint.description.model.process import Process
from tidegate.lint.description.model.reset_path import OutputStage
from tidegate.lint.facts.reading import Better, Wait
from tidegate.lint.facts.view import Number
from tidegate.lint.facts.views.process import LayerFacts, LayerLimitFacts, ViaKindFacts
from tidegate.lint.physics.conductor_size import line_limit_a, vias_for_current, width_for_current_m
from tidegate.lint.physics.domain import DomainError, product
from tidegate.lint.physics.short_length import short_length_product_a_per_m

_SAME: Final = 1e-9
_GRID_M: Final = 1e-8


class Conductor(msgspec.Struct, frozen=True):
    """A line, or vias side by side: what it carries, each in A."""

    name: str
    fact: str
    """The fact that says how much of it there is."""
    carried_a: Callable[[Seconds], float]
    """What it carries for so long at the hottest junction."""
    damage: Callable[[float, Seconds], float]
    """The share of its life that a current uses up in so long."""
    stated: StatedLimit
    heating_a: Mapping[str, float]
    """What else the process limits, by the word for it: no short time makes up for heat."""
    short_a: float
    """What it carries for ever because it is short (Blech); 0 where that is not known to be anything."""
    short_text: str
    enough: Callable[[float], str]
    """How much of it would carry a current for its life, in words."""

    def for_good_a(self, life_s: Seconds) -> float:
        """What it carries for its life, heat and all."""
        return min([max(self.carried_a(life_s), self.short_a), *self.heating_a.values()])


def line_of(case: Case, stage: OutputStage) -> Conductor:
    """The line at the output of a stage.

    Raises: MissingFactsError: where its layer is not given, or the layer has no limits, or one without a temperature.
    """
    output = case.of(stage).output
    output.width.least()  # beside the layer, so that both are named
    name = output.layer.must()
    layer = case.part(LayerFacts, _process(case).layers.get(name), f"process.layers.{name}")
    entry = chosen_entry(case, layer)
    assert isinstance(entry, LayerLimitFacts)
    limit = StatedLimit(entry.dc, entry)
    width, bias = output.width, layer.width_bias

    def wide_a(per_width_a_per_m: float) -> float:
        if per_width_a_per_m in (0.0, math.inf):
            return per_width_a_per_m
        return at_corner(
            case,
            lambda: line_limit_a(
                drawn_width_m=width.least(), width_bias_m=bias.most(), per_width_a_per_m=per_width_a_per_m
            ),
            sure=0.0,
            best=math.inf,
        )

    narrow = _narrow(case, layer, width)
    alone = narrow.limit if narrow is not None and narrow.surely else None
    direct = limit.carried(case, case.whole.conditions.service_life.most)
    heat = {word: _heat(case, fact, direct) for word, fact in (("r.m.s.", entry.rms), ("peak", entry.peak))}

    def carried_a(time_s: Seconds) -> float:
        if alone is not None:
            return alone.carried(case, time_s)
        by_width_a = wide_a(limit.carried(case, time_s))
        if narrow is None:
            return by_width_a
        alone_a = narrow.limit.carried(case, time_s)
        return max(by_width_a, alone_a) if case.at_best else min(by_width_a, alone_a)

    def damage(current_a: float, time_s: Seconds) -> float:
        if alone is not None:
            return alone.damage(case, current_a, time_s)
        return limit.damage(case, _in_unit(current_a, wide_a(1.0)), time_s)

    def enough(current_a: float) -> str:
        strictest = min(direct, *heat.values())
        needed_m = _or_unlimited(
            lambda: width_for_current_m(current_a=current_a, per_width_a_per_m=strictest, width_bias_m=bias.most())
        )
        if alone is not None and narrow is not None:
            needed_m = max(needed_m, narrow.up_to_m + _GRID_M)
        if not math.isfinite(needed_m * 1e6):
            return f"another layer: no width is enough; now {width.least() * 1e6:g} um"
        return f"{width_up_um(needed_m)} wide, or wider; now {width.least() * 1e6:g} um"

    return Conductor(
        name="line", fact="output.width", carried_a=carried_a, damage=damage, stated=alone or limit,
        heating_a={word: wide_a(each) for word, each in heat.items()}, short_a=_short_a(case, stage, layer),
        short_text=_short_text(case, stage, layer), enough=enough,
    )  # fmt: skip


def _in_unit(current_a: float, of_the_unit: float) -> float:
    """A current in the unit of a limit, of which the conductor makes so much."""
    return current_a / of_the_unit if of_the_unit > 0.0 else math.inf


def _or_unlimited(ask: Callable[[], float]) -> float:
    try:
        return ask()
    except DomainError:
        return math.inf


def _process(case: Case) -> Process:
    process = case.description.process
    assert process is not None, "an output names a layer or a via of no process"
    return process


def _heat(case: Case, fact: Number, direct: float) -> float:
    """A limit against heat: one that is not given is no less than the direct current that the process allows.

    A direct current is its own r.m.s. and peak value (definition).
    """
    if fact.given is None:
        return case.reading.end(Wait(fact.path, direct, math.inf, Better.MORE))
    return fact.least()


class Narrow(msgspec.Struct, frozen=True):
    """The limit of one narrow line, in A, at the conditions of the first entry; and whether this line surely is one."""

    limit: StatedLimit
    up_to_m: float
    surely: bool


def _narrow(case: Case, layer: LayerFacts, width: Number) -> Narrow | None:
    """The limit of its own that a line has where it is narrow; None where the process states none, or it is wider."""
    if layer.narrow.part is None:
        return None
    up_to = layer.narrow.up_to
    (thinnest_m, widest_m), (least_m, most_m) = _known_least(width), _ends(up_to)
    if thinnest_m > most_m * (1.0 + _SAME):
        return None
    surely = widest_m <= least_m * (1.0 + _SAME)
    if not surely:  # what is missing to tell is noted
        up_to.least()
    return Narrow(StatedLimit(layer.narrow.dc, layer.limits[0]), most_m, surely)


def _known_least(fact: Number) -> tuple[float, float]:
    """Between what the least value of a size lies, as far as it is stated."""
    given = fact.given
    if given is None:
        return 0.0, math.inf
    if given.least is not None:
        return given.least, given.least
    return 0.0, min(end for end in (given.typical, given.most) if end is not None)


def _ends(fact: Number) -> tuple[float, float]:
    """The ends of a size, as far as they are stated."""
    given = fact.given
    least = None if given is None else given.least
    most = None if given is None else given.most
    return 0.0 if least is None else least, math.inf if most is None else most


def _short_a(case: Case, stage: OutputStage, layer: LayerFacts) -> float:
    """The current up to which a line is too short to fail, in A."""
    output = case.of(stage).output

    def largest_a() -> float:
        product_a_per_m = short_length_product_a_per_m(
            current_a=1.0, width_m=output.width.least() - layer.width_bias.most(), thickness_m=layer.thickness.least(),
            length_m=output.length.most(),
        )  # fmt: skip
        return layer.short_length_product.least() / product_a_per_m

    return at_corner(case, largest_a, sure=0.0, best=math.inf)


def _short_text(case: Case, stage: OutputStage, layer: LayerFacts) -> str:
    length_um, limit_a_per_cm = case.of(stage).output.length.most() * 1e6, layer.short_length_product.least() / 100.0
    return f"{length_um:g} um keep below {limit_a_per_cm:g} A/cm of density times length"


def vias_of(case: Case, stage: OutputStage) -> Conductor:
    """The vias at the output of a stage.

    Raises: MissingFactsError: where their kind is not given, or it has no limits, or one without a temperature.
    """
    output = case.of(stage).output
    output.vias.number()
    name = output.via.must()
    kind = case.part(ViaKindFacts, _process(case).vias.get(name), f"process.vias.{name}")
    entry = chosen_entry(case, kind)
    limit, vias = StatedLimit(entry.dc, entry), output.vias

    def enough(current_a: float) -> str:
        each_a = limit.carried(case, case.whole.conditions.service_life.most)
        needed = _or_unlimited(lambda: vias_for_current(current_a=current_a, per_via_a=each_a))
        return f"{needed:g} vias; now {vias.number():g}" if math.isfinite(needed) else "another kind of via"

    return Conductor(
        name="vias", fact="output.vias", carried_a=lambda time_s: product(vias.number(), limit.carried(case, time_s)),
        damage=lambda current_a, time_s: limit.damage(case, _in_unit(current_a, vias.number()), time_s), stated=limit,
        heating_a={}, short_a=0.0, short_text="", enough=enough,
    )  # fmt: skip
