"""The crowbar current of an output stage whose input edge is slow."""

from __future__ import annotations

import msgspec

from tidegate.lint.case import Case
from tidegate.lint.derived.supply.rail_of import rail_of
from tidegate.lint.description.model.reset_path import OutputStage, Transistor
from tidegate.lint.physics import crowbar
from tidegate.lint.quantity import Dimension, show


class Crowbar(msgspec.Struct, frozen=True):
    """The peak, and the inverter it was worked out from; None where the peak is stated."""

    peak_a: float
    inverter: crowbar.Inverter | None

    def text(self) -> str:
        """Where the peak comes from."""
        if self.inverter is None:
            return "peak as stated"
        thresholds = self.inverter.nmos_threshold_v, self.inverter.pmos_threshold_v
        each = " and ".join(show(threshold_v, Dimension.VOLTAGE) for threshold_v in thresholds)
        return f"square law at {show(self.inverter.supply_v, Dimension.VOLTAGE)} with thresholds of {each}"

    def time_at_peak_s(self, *, edge_s: float, exponent: float) -> float:
        """Time at the peak that wears as much as one edge, in s; the whole edge where the peak is stated.

        A stated peak says nothing of the shape of the current, and no shape lasts longer than its edge.
        """
        if self.inverter is None:
            return edge_s
        return crowbar.peak_equivalent_time_s(self.inverter, edge_s=edge_s, exponent=exponent)


def crowbar_of(case: Case, stage: OutputStage) -> Crowbar:
    """The greatest crowbar current of a stage: as stated, else by the square law.

    Worst case: the greatest supply delivered, the least thresholds (at the hottest junction where they come from the
    family), the greatest gains.
    Raises: MissingFactsError: where a fact is missing.
    """
    facts = case.of(stage)
    if stage.crowbar_peak is not None:
        peak_a = facts.most("crowbar_peak")
        case.settle()
        return Crowbar(peak_a, None)
    nmos_beta, pmos_beta = facts.most("nmos.gain"), facts.most("pmos.gain")
    supply_v, nmos_v, pmos_v = case.gather(
        lambda: case.of(rail_of(case, stage)).most("delivered"),
        lambda: _threshold_v(case, stage, "nmos", stage.nmos),
        lambda: _threshold_v(case, stage, "pmos", stage.pmos),
    )
    inverter = crowbar.Inverter(
        supply_v=supply_v, nmos_threshold_v=nmos_v, pmos_threshold_v=pmos_v, nmos_beta_a_per_v2=nmos_beta,
        pmos_beta_a_per_v2=pmos_beta,
    )  # fmt: skip
    return Crowbar(crowbar.peak_current_a(inverter), inverter)


def _threshold_v(case: Case, stage: OutputStage, which: str, transistor: Transistor | None) -> float:
    """The least threshold of a transistor: as stated, else that of its family at the hottest junction."""
    process = case.description.process
    if transistor is None or transistor.threshold is not None or transistor.family is None or process is None:
        return case.of(stage).least(f"{which}.threshold")
    family = case.part(process.devices[transistor.family], f"process.devices.{transistor.family}")
    stated_v, slope_v_per_k = family.least("threshold"), family.most("threshold_slope")
    stated_k, hottest_k = family.least("reference_temperature"), case.whole.most("conditions.junction_temperature")
    return stated_v - slope_v_per_k * (hottest_k - stated_k)
