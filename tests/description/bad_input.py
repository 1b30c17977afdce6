"""What a bad description is to the tests; the demo data are invented."""

from __future__ import annotations

from typing import Final, NamedTuple


class Bad(NamedTuple):
    """A bad description: what is bad about it, its text, and what is said about it."""

    what: str
    text: str
    said: str


RAIL: Final = "rails:\n  avdd:\n    nominal: 1.8 V\n"
"""A rail; more of it may follow."""
UV: Final = RAIL + "comparators:\n  uv: {role: under_voltage, watches: avdd, "
"""A detector; more of it must follow, and a brace."""
