"""Views of rails and the domains they feed.

Made from the model by ``python tests/record.py``: a fact is added there, not here.
"""

from __future__ import annotations

from typing import Literal

from tidegate.lint.description.model.supply import Dip, Domain, Rail, Ripple
from tidegate.lint.facts.view import Facts, Named, Number, Word


class DipFacts(Facts[Dip], of=Dip):
    """Dip of the ramp."""

    depth: Number
    at: Number


class RippleFacts(Facts[Ripple], of=Ripple):
    """Ripple."""

    peak_to_peak: Number
    frequency: Number


class RailFacts(Facts[Rail], of=Rail):
    """Supply rail."""

    nominal: Number
    delivered: Number
    guaranteed: Number
    damage: Number
    rise: Number
    fall: Number
    collapse: Number
    overshoot: Number
    dip: DipFacts
    ripple: RippleFacts
    source_impedance: Number
    load_step: Number
    hold_up: Number
    after: Named
    delay: Number
    residual: Number
    off_time: Number
    made_by: Named


class DomainFacts(Facts[Domain], of=Domain):
    """Supply domain."""

    rail: Named
    kind: Word[Literal["always_on", "switched"]]
    switched_by: Named
    budget: Number
