"""A detector whose levels are chosen by code, at one of its codes."""

from __future__ import annotations

import msgspec

from tidegate.lint.description.model.detector import Comparator


def at_code(comparator: Comparator, code: str) -> Comparator:
    """The detector with the levels of a code."""
    return msgspec.structs.replace(comparator, trip=comparator.codes[code])
