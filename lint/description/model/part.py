"""What every part of a description is, and the plain values it is made of.

The types say all that the schema says, so that a description that can be built needs no other check; a test holds the
two together.
"""

from __future__ import annotations

from collections.abc import Iterator
from functools import lru_cache
from types import UnionType
from typing import Annotated, Any, ClassVar, Literal, TypeAlias, TypeVar, Union, get_args, get_origin, get_type_hints

import msgspec

_A = TypeVar("_A")

Name: TypeAlias = Annotated[str, msgspec.Meta(pattern=r"^(?!x-|none\Z)[A-Za-z_][A-Za-z0-9_-]{0,63}\Z")]
"""The id of an element, or of an entry of another section."""
NameOrNone: TypeAlias = Annotated[str, msgspec.Meta(pattern=r"^(?!x-)[A-Za-z_][A-Za-z0-9_-]{0,63}\Z")]
"""An id, or the word that says that there is none."""
Text: TypeAlias = Annotated[str, msgspec.Meta(min_length=1)]
Date: TypeAlias = Annotated[
    str, msgspec.Meta(pattern=r"^[0-9]{4}-(0[1-9]|1[0-2])-(0[1-9]|[12][0-9]|3[01])\Z", min_length=1)
]
Positive: TypeAlias = Annotated[float, msgspec.Meta(gt=0)]
NotNegative: TypeAlias = Annotated[float, msgspec.Meta(ge=0)]
UpToOne: TypeAlias = Annotated[float, msgspec.Meta(gt=0, le=1)]
"""More than nothing, and at most the whole."""
Count: TypeAlias = Annotated[int, msgspec.Meta(ge=1)]
AtLeastOne: TypeAlias = Annotated[tuple[_A, ...], msgspec.Meta(min_length=1)]

Use: TypeAlias = Literal["varies", "ability", "promise", "policy"]
"""What a fact is for; what carries no mark varies over parts, corners, temperature and life."""
Ability: TypeAlias = Annotated[_A, msgspec.Meta(extra={"use": "ability"})]
"""What a part stands, or works over: a narrower one is a worse part."""
Promise: TypeAlias = Annotated[_A, msgspec.Meta(extra={"use": "promise"})]
"""What nobody promises is not relied on; a promise that is added may turn a failure into a pass."""
Policy: TypeAlias = Annotated[_A, msgspec.Meta(extra={"use": "policy"})]
"""How a house judges: it has a default, and is never missing."""


class Part(msgspec.Struct, frozen=True, kw_only=True, forbid_unknown_fields=True):
    """An object of the description; a field that is None was not given."""


class Element(Part, frozen=True, kw_only=True):
    """A part with an id of its own, which other parts name."""

    section: ClassVar[str]
    id: str

    def fact(self, path: str) -> str:
        """The path of one of its facts in the description, such as ``rails.avdd.ripple.peak_to_peak``."""
        return f"{self.section}.{self.id}.{path}"


@lru_cache(maxsize=1024)
def use_of(kind: type[Part], field: str) -> Use:
    """What a fact is for, as its field is marked, such as ``ability`` for ``(Rail, "guaranteed")``.

    Raises: KeyError: where the part has no such field.
    """
    return next(_marks(get_type_hints(kind, include_extras=True)[field]), "varies")


def _marks(hint: Any) -> Iterator[Use]:
    """The uses that a type is marked with, wherever in it."""
    if get_origin(hint) is Annotated:
        yield from (meta.extra["use"] for meta in hint.__metadata__ if meta.extra)
    elif get_origin(hint) in (Union, UnionType):
        for member in get_args(hint):
            yield from _marks(member)
