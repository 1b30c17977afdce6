"""What every part of a description is."""

from __future__ import annotations

from typing import ClassVar

import msgspec


class Part(msgspec.Struct, frozen=True, kw_only=True):
    """An object of the description; a field that is None was not given."""


class Element(Part, frozen=True, kw_only=True):
    """A part with an id of its own, which other parts name."""

    section: ClassVar[str]
    id: str

    def fact(self, path: str) -> str:
        """The path of one of its facts in the description, such as ``rails.avdd.ripple.peak_to_peak``."""
        return f"{self.section}.{self.id}.{path}"
