"""How much hysteresis a detector needs at least."""

from __future__ import annotations

from tidegate.lint.case import Case
from tidegate.lint.derived.disturbance.hysteresis_need import disturbance, noise_v
from tidegate.lint.description.model.detector import Comparator
from tidegate.lint.physics.noise import false_trip_distance_v


def least_hysteresis_v(case: Case, comparator: Comparator) -> float:
    """The least hysteresis that covers what disturbs the supply and lets noise trip it seldom enough, in V.

    Raises: MissingFactsError: where a fact of either is missing.
    """
    own, whole = case.of(comparator), case.whole
    sigma_v, bandwidth_hz = own.most("noise.rms"), own.most("noise.bandwidth")
    life_s, allowed = whole.most("conditions.service_life"), whole.number("conditions.false_trips")
    placed = comparator.trip is not None and (comparator.trip.falling or comparator.trip.rising) is not None
    moved, covered_v = case.gather(
        lambda: disturbance(case, comparator, dip_anywhere=not placed), lambda: noise_v(case, comparator)
    )
    seldom_v = false_trip_distance_v(sigma_v=sigma_v, bandwidth_hz=bandwidth_hz, life_s=life_s, allowed_trips=allowed)
    return max(moved.with_noise_v(covered_v), moved.total_v + seldom_v)
