"""What the hysteresis of a comparator must cover, at the rail."""

from __future__ import annotations

import msgspec

from tidegate.lint.case import Case
from tidegate.lint.derived.disturbance.disturbance import bumps_on, ignored_s
from tidegate.lint.derived.levels.trip_levels import falling_window, rising_window
from tidegate.lint.description.model.detector import Comparator
from tidegate.lint.physics import hysteresis
from tidegate.lint.quantity import Dimension, show


class Disturbance(msgspec.Struct, frozen=True):
    """What the hysteresis must cover besides noise, in V at the rail."""

    ripple_v: float
    dip_v: float
    droop_v: float
    bumps_v: float

    @property
    def total_v(self) -> float:
        """All of it at once, V."""
        return self.with_noise_v(0.0)

    def with_noise_v(self, noise_v: float) -> float:
        """All of it and noise at once, V."""
        return hysteresis.disturbance_v(
            ripple_v=self.ripple_v, dip_v=self.dip_v, release_droop_v=self.droop_v, neighbours_v=self.bumps_v,
            noise_v=noise_v,
        )  # fmt: skip

    def text(self) -> str:
        """Its parts, without those that are zero."""
        parts = (
            (self.ripple_v, "ripple"), (self.dip_v, "dip of the ramp"), (self.droop_v, "droop at release"),
            (self.bumps_v, "neighbours"),
        )  # fmt: skip
        return " + ".join(f"{show(size, Dimension.VOLTAGE)} {word}" for size, word in parts if size > 0.0) or "nothing"


def disturbance(case: Case, comparator: Comparator, *, dip_anywhere: bool = False) -> Disturbance:
    """What moves the supply or the level of a comparator while it should rest, noise apart.

    The dip of the ramp counts where it can fall between the levels; anywhere, where there are no levels yet.
    """
    facts = case.of(case.description.rails[comparator.watches])
    return Disturbance(
        *case.gather(
            lambda: facts.most("ripple.peak_to_peak"),
            lambda: facts.most("dip.depth") if dip_anywhere else _dip_in_band_v(case, comparator),
            lambda: _droop_v(case, comparator),
            lambda: _bumps_v(case, comparator),
        )
    )


def noise_v(case: Case, comparator: Comparator) -> float:
    """Noise at the stated coverage, in V at the rail."""
    sigmas, rms_v = case.whole.number("conditions.coverage"), case.of(comparator).most("noise.rms")
    case.settle()
    return sigmas * rms_v


def _bumps_v(case: Case, comparator: Comparator) -> float:
    """All neighbours at once, each with the part of its bump that the comparator can act on."""
    bumps, lasts_s = case.gather(lambda: bumps_on(case, comparator), lambda: ignored_s(case, comparator))
    return sum(bump.lasting_v(lasts_s) for bump in bumps)


def _droop_v(case: Case, comparator: Comparator) -> float:
    """Droop of the supply when reset is released: for an over-voltage detector, away from its level."""
    if comparator.role == "over_voltage":
        return 0.0
    facts = case.of(case.description.rails[comparator.watches])
    step_a, source_ohm = facts.most("load_step"), facts.most("source_impedance")
    case.settle()
    return hysteresis.release_droop_v(load_step_a=step_a, source_ohm=source_ohm)


def _dip_in_band_v(case: Case, comparator: Comparator) -> float:
    """The non-monotonic dip of the ramp, where it can fall between the levels; anywhere if it is not said where."""
    rail = case.description.rails[comparator.watches]
    facts = case.of(rail)
    depth_v = facts.most("dip.depth")
    if rail.dip is None or rail.dip.at is None or depth_v == 0.0:
        return depth_v
    down, up, begins_v, lowest_v = case.gather(
        lambda: falling_window(case, comparator),
        lambda: rising_window(case, comparator),
        lambda: facts.most("dip.at"),
        lambda: facts.least("dip.at") - depth_v,
    )
    return depth_v if lowest_v <= up.most_v and begins_v >= down.least_v else 0.0
