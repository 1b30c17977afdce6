"""Views of comparators, and the references and bias they lean on.

Made from the model by ``python tests/record.py``: a fact is added there, not here.
"""

from __future__ import annotations

from typing import Literal

from tidegate.lint.description.model.detector import (
    Bias,
    Comparator,
    Contributor,
    Crossover,
    Divider,
    Hysteresis,
    Noise,
    Reference,
    StartUp,
    Switch,
    Trip,
)
from tidegate.lint.facts.view import Entries, Facts, Named, Names, Number, Word
from tidegate.lint.facts.views.timing import TimingFacts


class StartUpFacts(Facts[StartUp], of=StartUp):
    """Start-up circuit."""

    by: Word[str]
    least_slope: Number


class ReferenceFacts(Facts[Reference], of=Reference):
    """Reference."""

    kind: Word[Literal["band_gap", "threshold", "divider", "external"]]
    voltage: Number
    current: Number
    accuracy: Number
    drift: Number
    works_from: Number
    works_from_slope: Number
    settling: Number
    source_resistance: Number
    decoupling: Number
    domain: Named
    bias: Named
    leans_on: Names
    self_biased: Word[bool]
    start_up: StartUpFacts
    gated_by: Named
    resistance: Number
    consumes: Number


class BiasFacts(Facts[Bias], of=Bias):
    """Bias."""

    kind: Word[Literal["resistor", "self_biased", "from_reference", "external"]]
    source: Named
    domain: Named
    current: Number
    leakage: Number
    works_from: Number
    settling: Number
    leans_on: Names
    start_up: StartUpFacts
    gated_by: Named
    resistance: Number
    consumes: Number


class TripFacts(Facts[Trip], of=Trip):
    """Trip levels."""

    rising: Number
    falling: Number


class SwitchFacts(Facts[Switch], of=Switch):
    """Switch of a level."""

    turned_by: Named
    closed_when: Word[Literal["high", "low"]]


class HysteresisFacts(Facts[Hysteresis], of=Hysteresis):
    """Hysteresis."""

    amount: Number
    made_by: Word[Literal["switched_reference", "switched_tap", "positive_feedback", "schmitt_stage"]]
    feedback: Word[Literal["positive", "negative"]]
    switches: Entries[SwitchFacts]
    feedback_delay: Number


class ContributorFacts(Facts[Contributor], of=Contributor):
    """Error contributor."""

    of: Word[Literal["reference", "divider", "offset", "trim", "drift", "total", "other"]]
    amount: Number
    share: Number
    is_: Word[Literal["bound", "sigma"]]
    at: Word[Literal["rail", "input"]]
    tracks: Word[bool]


class DividerFacts(Facts[Divider], of=Divider):
    """Input divider."""

    ratio: Number
    top: Number
    bottom: Number


class NoiseFacts(Facts[Noise], of=Noise):
    """Noise."""

    rms: Number
    bandwidth: Number


class CrossoverFacts(Facts[Crossover], of=Crossover):
    """Crossover."""

    kind: Word[Literal["divider_diode", "divider_mos", "crude_current"]]
    ratio: Number
    resistance: Number
    resistor: Word[str]
    diode: Word[str]
    device: Word[str]
    gain: Number
    offset: Number
    reference_current: Number
    reference_start: Number
    reference_rise: Number
    mirror: Number


class ComparatorFacts(Facts[Comparator], of=Comparator):
    """Comparator."""

    role: Word[Literal["power_on", "under_voltage", "over_voltage", "reference_ready"]]
    watches: Named
    domain: Named
    bias: Named
    reference: Named
    crossover: CrossoverFacts
    trip: TripFacts
    tracked: Word[bool]
    hysteresis: HysteresisFacts
    errors: Entries[ContributorFacts]
    codes: Entries[TripFacts]
    ships_with: Word[str]
    divider: DividerFacts
    works_from: Number
    works_to: Number
    delay: Number
    filter: Number
    timing: TimingFacts
    sampling: Number
    noise: NoiseFacts
    kick: Number
    switching_current: Number
    armed_by: Named
    gated_by: Named
    rearms_below: Number
    output: Word[Literal["level", "pulse"]]
    pulse: Number
    undecided: Word[Literal["asserts", "releases", "undefined"]]
    consumes: Number
