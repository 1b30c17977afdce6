"""What a quantity allows at all, and what it is for: the table that arithmetic with missing facts rests on.

A number that is not given lies between the bounds that the language sets for it.  Everything is zero or more, but for
slopes over temperature, and for levels: of a level that is not given nothing is known.  An *ability* is what a part
stands or works with, where a narrower range is a worse part; everything else *varies*, and a narrower range is a better
part.
"""

from __future__ import annotations

from functools import cache
from math import inf
from types import UnionType
from typing import Annotated, Any, Final, Literal, Union, get_args, get_origin, get_type_hints

import msgspec

from tidegate.lint.description.model.part import Part, use_of
from tidegate.lint.quantity import Dimension, Span


class Bounds(msgspec.Struct, frozen=True):
    """The least and the greatest value that the language lets a number have, and whether it is an ability."""

    floor: float = 0.0
    ceiling: float = inf
    ability: bool = False


_ANYTHING: Final = frozenset({Dimension.TEMPERATURE_SLOPE, Dimension.PER_KELVIN, Dimension.PER_KELVIN_SQUARED})
"""Dimensions with a sign."""

_AMOUNTS: Final = frozenset(
    {
        "Ripple.peak_to_peak", "Dip.depth", "Hysteresis.amount", "Noise.rms", "Contributor.amount", "Crossover.offset",
        "Neighbour.step", "Rail.residual",
    }
)  # fmt: skip
"""Voltages that are sizes; every other voltage is a level."""


@cache
def bounds_of(part: type[Part], field: str) -> Bounds:
    """The bounds of a number of a part of the description."""
    name = f"{part.__name__}.{field}"
    ability = use_of(part, field) == "ability"
    hint, limits = _plain(_hints(part)[field])
    if isinstance(hint, type) and issubclass(hint, Span):
        if hint.dimension in _ANYTHING or (hint.dimension is Dimension.VOLTAGE and name not in _AMOUNTS):
            return Bounds(-inf, inf, ability)
        return Bounds(ability=ability)
    floor = next((limit for meta in limits for limit in (meta.ge, meta.gt) if limit is not None), 0.0)
    ceiling = next((limit for meta in limits for limit in (meta.le, meta.lt) if limit is not None), inf)
    return Bounds(float(floor), float(ceiling), ability)


@cache
def options_of(part: type[Part], field: str) -> tuple[Any, ...]:
    """The words that a fact of a part may be; none where it is free."""
    hint, _ = _plain(_hints(part)[field])
    if hint is bool:
        return (True, False)
    return get_args(hint) if get_origin(hint) is Literal else ()


@cache
def _hints(part: type[Part]) -> dict[str, Any]:
    return get_type_hints(part, include_extras=True)


def _plain(hint: Any) -> tuple[Any, tuple[msgspec.Meta, ...]]:
    """A type hint without ``None`` and without what it is annotated with, and those annotations."""
    found: list[msgspec.Meta] = []
    while True:
        if get_origin(hint) is Annotated:
            hint, *more = get_args(hint)
            found += [meta for meta in more if isinstance(meta, msgspec.Meta)]
        elif get_origin(hint) in (Union, UnionType):
            kinds = [kind for kind in get_args(hint) if kind is not type(None)]
            if len(kinds) > 1:
                return hint, tuple(found)
            hint = kinds[0]
        else:
            return hint, tuple(found)
