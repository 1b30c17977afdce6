"""The terms of a sum in words, as far as they are known."""

from __future__ import annotations

import math
from collections.abc import Iterable

from tidegate.lint.account import Line
from tidegate.lint.case import Case
from tidegate.lint.quantity import Dimension, show


def terms_text(case: Case, lines: Iterable[Line]) -> str:
    """The terms in V, without those that are nothing; what is not exactly known is told as far as it is."""
    bound = "at least " if case.at_best else "up to "
    return " + ".join(_term(line, bound) for line in lines if line.value != 0.0 or line.waits)


def _term(line: Line, bound: str) -> str:
    if line.waits and (line.value == 0.0 or not math.isfinite(line.value)):
        return line.name if line.name.endswith("not described") else f"{line.name} (not known)"
    return f"{bound if line.waits else ''}{show(line.value, Dimension.VOLTAGE)} {line.name}"
