"""Views of components that make a time.

Made from the model by ``python tests/record.py``: a fact is added there, not here.
"""

from __future__ import annotations

from tidegate.lint.description.model.timing import Timing
from tidegate.lint.facts.view import Facts, Number


class TimingFacts(Facts[Timing], of=Timing):
    """Timing."""

    resistance: Number
    current: Number
    leakage: Number
    capacitance: Number
    threshold: Number
    count: Number
    period: Number
