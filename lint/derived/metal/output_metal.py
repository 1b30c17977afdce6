"""The metal of a stage's output, its line and its vias: what it carries, and how much of it would be enough."""

from __future__ import annotations

import math
from collections.abc import Callable, Mapping
from typing import Final

import msgspec

from tidegate.lint.case import Case, Facts
from tidegate.lint.derived.metal.wire_limit import DirectLimit, LimitEntry, direct_limit, entry_at, table_limit
from tidegate.lint.derived.safe_rounding import width_up_um
from tidegate.lint.description.model.process import Layer, Process
from tidegate.lint.description.model.reset_path import OutputStage
from tidegate.lint.physics.conductor_size import line_limit_a, vias_for_current, width_for_current_m
from tidegate.lint.physics.short_length import short_length_product_a_per_m

_HEATING: Final[Mapping[str, str]] = {"rms": "r.m.s.", "peak": "peak"}
_SAME: Final = 1e-9
_GRID_M: Final = 1e-8


class ShortLine(msgspec.Struct, frozen=True):
    """What is needed to tell whether a line is too short to fail from electromigration."""

    width_m: float
    thickness_m: float
    length_m: float
    limit_a_per_m: float
    """Product of current density and length below which the layer does not fail."""

    @property
    def largest_a(self) -> float:
        """The current up to which it does not fail, however long it flows."""
        product_a_per_m = short_length_product_a_per_m(
            current_a=1.0, width_m=self.width_m, thickness_m=self.thickness_m, length_m=self.length_m
        )
        return self.limit_a_per_m / product_a_per_m


class Conductor(msgspec.Struct, frozen=True):
    """A line, or vias side by side."""

    name: str
    fact: str
    """The fact that says how much of it there is."""
    direct: DirectLimit
    """Most direct current, in A."""
    heating_a: Mapping[str, float]
    """What else the process limits, in A, by the word for it."""
    enough: Callable[[float], str]
    """How much of it would carry a current, in words."""
    short: ShortLine | None

    @property
    def limit_a(self) -> float:
        """The smallest of its limits, in A."""
        return min([self.direct.here, *self.heating_a.values()])


def line_of(case: Case, stage: OutputStage) -> Conductor:
    """The line at the output of a stage.

    Where the layer states no width bias, its limits stand for the drawn width.
    Raises: MissingFactsError: where a fact is missing.
    """
    own = case.of(stage)
    (layer, table, entry, per_width), width_m = case.gather(
        lambda: _layer_limit(case, own), lambda: own.least("output.width")
    )
    bias_m = 0.0 if layer.width_bias is None else table.most("width_bias")
    heating = {
        word: entry.facts.least(fact) for fact, word in _HEATING.items() if getattr(entry.entry, fact) is not None
    }
    case.settle()

    def carries_a(per_width_a_per_m: float) -> float:
        return line_limit_a(drawn_width_m=width_m, width_bias_m=bias_m, per_width_a_per_m=per_width_a_per_m)

    narrow_m = _narrow_m(case, layer, table)
    is_narrow = width_m <= narrow_m * (1.0 + _SAME)

    def enough(current_a: float) -> str:
        strictest = min([per_width.here, *heating.values()])
        needed_m = width_for_current_m(current_a=current_a, per_width_a_per_m=strictest, width_bias_m=bias_m)
        if math.isinf(needed_m * 1e6):
            return f"another layer: no width is enough; now {width_m * 1e6:g} um"
        wide_m = max(needed_m, narrow_m + _GRID_M) if is_narrow else needed_m
        return f"{width_up_um(wide_m)} wide, or wider; now {width_m * 1e6:g} um"

    return Conductor(
        "line",
        "output.width",
        _narrow_limit(case, layer, table) if is_narrow else per_width.of(carries_a),
        {word: carries_a(limit) for word, limit in heating.items()},
        enough,
        case.attempt(lambda: _short(own, table, width_m - bias_m)),
    )


def _layer_limit(case: Case, own: Facts) -> tuple[Layer, Facts, LimitEntry, DirectLimit]:
    """The layer of a line, and the limit of its width."""
    name = own.must("output.layer")
    layer = _process(case).layers[name]
    table = case.part(layer, f"process.layers.{name}")
    return layer, table, *table_limit(case, layer.limits, table)


def _process(case: Case) -> Process:
    process = case.description.process
    assert process is not None, "an output names a layer or a via of no process"
    return process


def _narrow_m(case: Case, layer: Layer, table: Facts) -> float:
    """Widest line that the process gives a limit of its own; 0 where it does not."""
    if layer.narrow is None:
        return 0.0
    narrow_m = table.least("narrow.up_to")
    case.settle()
    return narrow_m


def _narrow_limit(case: Case, layer: Layer, table: Facts) -> DirectLimit:
    """The limit of one narrow line, stated at the conditions of the first entry."""
    limit = direct_limit(case, entry_at(case, layer.limits, table, 0), table.least("narrow.dc"))
    case.settle()
    return limit


def _short(own: Facts, table: Facts, width_m: float) -> ShortLine:
    return ShortLine(width_m, table.least("thickness"), own.most("output.length"), table.least("short_length_product"))


def vias_of(case: Case, stage: OutputStage) -> Conductor:
    """The vias at the output of a stage.

    Raises: MissingFactsError: where a fact is missing.
    """
    own = case.of(stage)
    per_via, count = case.gather(lambda: _via_limit(case, own), lambda: own.number("output.vias"))

    def enough(current_a: float) -> str:
        return f"{vias_for_current(current_a=current_a, per_via_a=per_via.here)} vias; now {count:g}"

    return Conductor("vias", "output.vias", per_via.of(lambda each_a: count * each_a), {}, enough, None)


def _via_limit(case: Case, own: Facts) -> DirectLimit:
    """The limit of one via."""
    name = own.must("output.via")
    via = _process(case).vias[name]
    return table_limit(case, via.limits, case.part(via, f"process.vias.{name}"))[1]
