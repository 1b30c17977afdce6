"""The crowbar current of an output stage whose input edge is slow."""

from __future__ import annotations

import math

import msgspec

from tidegate.lint.case import Case
from tidegate.lint.derived.at_corner import at_corner
from tidegate.lint.derived.supply.rail_of import rail_of
from tidegate.lint.description.model.reset_path import OutputStage
from tidegate.lint.facts.reading import Better
from tidegate.lint.facts.view import Number
from tidegate.lint.facts.views.process import DeviceFacts
from tidegate.lint.facts.views.reset_path import TransistorFacts
from tidegate.lint.physics import crowbar
from tidegate.lint.physics.domain import DomainError, product
from tidegate.lint.quantity import Dimension, show


class Crowbar(msgspec.Struct, frozen=True):
    """The peak, and the inverter it was worked out from; None where the peak is stated, or the inverter not known."""

    peak_a: float
    inverter: crowbar.Inverter | None
    stated: bool

    def text(self) -> str:
        """Where the peak comes from."""
        if self.stated:
            return "peak as stated"
        if self.inverter is None:
            return "square law"
        thresholds = self.inverter.nmos_threshold_v, self.inverter.pmos_threshold_v
        each = " and ".join(show(threshold_v, Dimension.VOLTAGE) for threshold_v in thresholds)
        return f"square law at {show(self.inverter.supply_v, Dimension.VOLTAGE)} with thresholds of {each}"

    def time_at_peak_s(self, case: Case, *, edge_s: float, exponent: Number) -> float:
        """Time at the peak that wears as much as one edge, in s; the whole edge where the shape is not known.

        A stated peak says nothing of the shape of the current, and no shape lasts longer than its edge.
        """
        inverter = self.inverter
        if inverter is None:
            return edge_s
        return at_corner(
            case,
            lambda: crowbar.peak_equivalent_time_s(inverter, edge_s=edge_s, exponent=exponent.number(Better.MORE)),
            sure=edge_s,
            best=0.0,
        )


def crowbar_of(case: Case, stage: OutputStage) -> Crowbar:
    """The greatest crowbar current of a stage: as stated, else by the square law.

    Worst case: the greatest supply delivered, the least thresholds (at the hottest junction where they come from the
    family), the greatest gains.  A transistor of which nothing limits the current may carry any.
    Raises: MissingFactsError: where it is not said which rail feeds the stage.
    """
    facts = case.of(stage)
    if stage.crowbar_peak is not None:
        return Crowbar(facts.crowbar_peak.most(), None, stated=True)
    supply = case.of(rail_of(case, stage)).delivered

    def made() -> crowbar.Inverter:
        return crowbar.Inverter(
            supply_v=supply.most(), nmos_threshold_v=_threshold_v(case, facts.nmos),
            pmos_threshold_v=_threshold_v(case, facts.pmos), nmos_beta_a_per_v2=facts.nmos.gain.most(),
            pmos_beta_a_per_v2=facts.pmos.gain.most(),
        )  # fmt: skip

    peak_a = at_corner(case, lambda: crowbar.peak_current_a(made()), sure=math.inf, best=0.0)
    try:
        inverter = made()
    except DomainError:  # at a corner without end, which the peak has met too
        inverter = None
    return Crowbar(peak_a, inverter, stated=False)


def _threshold_v(case: Case, facts: TransistorFacts) -> float:
    """The least threshold of a transistor: as stated, else that of its family at the hottest junction."""
    process, name = case.description.process, facts.family.given
    if facts.threshold.given is not None or name is None or process is None:
        return facts.threshold.least()
    family = case.part(DeviceFacts, process.devices.get(name), f"process.devices.{name}")
    warmer_k = case.whole.conditions.junction_temperature.most() - family.reference_temperature.least()
    slope = family.threshold_slope.most() if warmer_k >= 0.0 else family.threshold_slope.least()
    return family.threshold.least() - product(slope, warmer_k)
