"""Passive hold: the level a resistor leaves on an output that nothing drives, and the right resistor."""

from __future__ import annotations

import math

from tidegate.lint.physics.domain import DomainError, product, require_not_negative, require_positive, require_size


def leakage_level_v(*, leakage_a: float, hold_ohm: float) -> float:
    """Level that leakage makes on a held node.

    Formula: v = I R
    Symbols:
        leakage_a  I  A    leakage into the node (magnitude), >= 0
        hold_ohm   R  ohm  hold resistance, >= 0
    Returns: v, in V, away from the rail that R holds to.
    Valid: leakage that does not depend on the level; what has no known end may be infinite.
    Source: Ohm's law.
    Raises: DomainError: if I or R is negative.
    """
    require_size(leakage_a=leakage_a, hold_ohm=hold_ohm)
    return product(leakage_a, hold_ohm)


def ramp_level_v(*, hold_ohm: float, coupling_c_f: float, total_c_f: float, rise_v: float, ramp_s: float) -> float:
    """Level that a supply ramp couples onto a held node, at the end of the ramp.

    Formula: v = V (Cc / C) (1 - exp(-x)) / x, x = t / (R C); for t = 0, v = V Cc / C
    Symbols:
        hold_ohm      R   ohm  hold resistance, >= 0
        coupling_c_f  Cc  F    capacitance between the node and the ramping supply, >= 0
        total_c_f     C   F    all capacitance of the node, Cc included, >= Cc
        rise_v        V   V    height of the ramp (magnitude), >= 0
        ramp_s        t   s    duration of the ramp, >= 0
    Returns: v, in V, away from the rail that R holds to; before the end of the ramp, and after, it is lower.
    Valid: linear R and C; constant slope; node at rest before; what has no known end may be infinite.
    Source: solution of C dv/dt = Cc V/t - v/R, v(0) = 0, at t; the same as coupling.bump_peak_v.
    Raises: DomainError: if C < Cc, or a symbol is negative.
    """
    require_size(hold_ohm=hold_ohm)
    _require_ramp(coupling_c_f=coupling_c_f, total_c_f=total_c_f, rise_v=rise_v, ramp_s=ramp_s)
    if coupling_c_f == 0.0:
        return 0.0
    coupled = 1.0 if coupling_c_f == total_c_f else coupling_c_f / total_c_f
    return product(rise_v, coupled * _kept_share(ramp_s, product(hold_ohm, total_c_f)))


def _kept_share(ramp_s: float, tau_s: float) -> float:
    """What a node with a time constant keeps of a ramp: (1 - exp(-x)) / x, all of a step and nothing of no ramp."""
    if ramp_s == 0.0 or math.isinf(tau_s):
        return 1.0
    in_tau = math.inf if tau_s == 0.0 else ramp_s / tau_s
    return 1.0 if in_tau == 0.0 else -math.expm1(-in_tau) / in_tau


def undriven_level_v(
    *,
    leakage_a: float,
    hold_ohm: float,
    coupling_c_f: float,
    total_c_f: float,
    rise_v: float,
    ramp_s: float,
) -> float:
    """Highest level of a held, undriven node while its supply ramps.

    Formula: v = I R + V (Cc / C) (1 - exp(-x)) / x, x = t / (R C)
    Symbols:
        leakage_a     I   A    leakage into the node (magnitude), >= 0
        hold_ohm      R   ohm  hold resistance, >= 0
        coupling_c_f  Cc  F    capacitance between the node and the ramping supply, >= 0
        total_c_f     C   F    all capacitance of the node, Cc included, >= Cc
        rise_v        V   V    height of the ramp (magnitude), >= 0
        ramp_s        t   s    duration of the ramp, >= 0
    Returns: v, in V, away from the rail that R holds to.
    Valid: linear R and C, so the two levels add; leakage flows with its full value from before the ramp.
    Source: sum of leakage_level_v and ramp_level_v (superposition).
    Raises: DomainError: if C < Cc, or a symbol is negative.
    """
    return leakage_level_v(leakage_a=leakage_a, hold_ohm=hold_ohm) + ramp_level_v(
        hold_ohm=hold_ohm, coupling_c_f=coupling_c_f, total_c_f=total_c_f, rise_v=rise_v, ramp_s=ramp_s
    )


def largest_hold_ohm(
    *,
    limit_v: float,
    leakage_a: float,
    coupling_c_f: float,
    total_c_f: float,
    rise_v: float,
    ramp_s: float,
) -> float:
    """Largest hold resistance whose undriven level stays at or below a limit.

    Formula: the R at which I R + V (Cc / C) (1 - exp(-x)) / x = L, x = t / (R C); infinite where every R stays at or
             below L
    Symbols:
        limit_v       L   V    highest level allowed, > 0
        leakage_a     I   A    leakage into the node (magnitude), >= 0
        coupling_c_f  Cc  F    capacitance between the node and the ramping supply, >= 0
        total_c_f     C   F    all capacitance of the node, Cc included, >= Cc
        rise_v        V   V    height of the ramp (magnitude), >= 0
        ramp_s        t   s    duration of the ramp, >= 0
    Returns: R, in ohm, to a relative 1e-12; math.inf where any R does; 0 where a step alone passes L.
    Valid: as undriven_level_v, every symbol finite.
    Source: undriven_level_v set equal to L. One solution at most: (1 - exp(-x))/x falls as x grows, from 1 down
        to 0, so both parts grow with R. The level is never above R (I + Cc V / t), which gives the lower end of the
        bracket; doubling finds the upper one.
    Raises: DomainError: if L is not > 0, C < Cc, or another symbol is negative or infinite.
    """
    require_positive(limit_v=limit_v)
    node = {"coupling_c_f": coupling_c_f, "total_c_f": total_c_f, "rise_v": rise_v, "ramp_s": ramp_s}
    require_not_negative(leakage_a=leakage_a, **node)
    _require_ramp(**node)

    def holds(hold_ohm: float) -> bool:
        return limit_v >= undriven_level_v(leakage_a=leakage_a, hold_ohm=hold_ohm, **node)

    if leakage_a == 0.0 and coupling_c_f * rise_v <= limit_v * total_c_f:
        return math.inf
    if ramp_s == 0.0:
        left_v = limit_v - ramp_level_v(hold_ohm=0.0, **node)
        return 0.0 if left_v <= 0.0 else left_v / leakage_a
    low_ohm = high_ohm = limit_v / (leakage_a + coupling_c_f * rise_v / ramp_s)
    while math.isfinite(high_ohm) and holds(high_ohm):
        low_ohm, high_ohm = high_ohm, 2.0 * high_ohm
    if math.isinf(high_ohm):
        return math.inf
    while high_ohm - low_ohm > 1e-12 * high_ohm:
        middle_ohm = 0.5 * (low_ohm + high_ohm)
        if holds(middle_ohm):
            low_ohm = middle_ohm
        else:
            high_ohm = middle_ohm
    return low_ohm


def driven_level_v(*, supply_v: float, hold_ohm: float, drive_ohm: float) -> float:
    """Level that a stage reaches when it drives its output against the hold resistor.

    Formula: v = V R / (R + Rd)
    Symbols:
        supply_v   V   V    supply of the driving stage, >= 0
        hold_ohm   R   ohm  hold resistance, >= 0
        drive_ohm  Rd  ohm  resistance of the stage when it drives, >= 0; with R = 0 it wins if it has none
    Returns: v, in V, away from the rail that R holds to.
    Valid: the stage behaves as a resistance up to this level; no other load; what has no known end may be infinite.
    Source: voltage divider.
    Raises: DomainError: if a symbol is negative.
    """
    require_size(supply_v=supply_v, hold_ohm=hold_ohm, drive_ohm=drive_ohm)
    return product(supply_v, 1.0 - _lost_share(hold_ohm, drive_ohm))


def level_left_v(*, supply_v: float, hold_ohm: float, drive_ohm: float) -> float:
    """Level that is left when a stage drives its output down against a resistor that holds it to the supply.

    Formula: v = V Rd / (R + Rd)
    Symbols:
        supply_v   V   V    supply that R holds to, >= 0
        hold_ohm   R   ohm  hold resistance, >= 0
        drive_ohm  Rd  ohm  resistance of the stage when it drives, >= 0; with R = 0 nothing is left if it has none
    Returns: v, in V from the ground of the stage.
    Valid: as driven_level_v.
    Source: voltage divider.
    Raises: DomainError: if a symbol is negative.
    """
    require_size(supply_v=supply_v, hold_ohm=hold_ohm, drive_ohm=drive_ohm)
    return product(supply_v, _lost_share(hold_ohm, drive_ohm))


def _lost_share(hold_ohm: float, drive_ohm: float) -> float:
    """The share of the supply that is lost across the drive."""
    if drive_ohm == 0.0 or math.isinf(hold_ohm):
        return 0.0
    return 1.0 if math.isinf(drive_ohm) else drive_ohm / (hold_ohm + drive_ohm)


def smallest_hold_for_driver_ohm(*, supply_v: float, drive_ohm: float, needed_v: float) -> float:
    """Smallest hold resistance against which a stage still reaches the level it must.

    Formula: R = Rd Vn / (V - Vn)
    Symbols:
        supply_v   V   V    supply of the driving stage, > 0
        drive_ohm  Rd  ohm  resistance of the stage when it drives, >= 0
        needed_v   Vn  V    level to be reached, 0 <= Vn < V
    Returns: R, in ohm.
    Valid: as driven_level_v.
    Source: driven_level_v set equal to Vn and solved for R.
    Raises: DomainError: if V is not > 0, Rd is negative, or Vn is not in [0, V).
    """
    require_positive(supply_v=supply_v)
    require_not_negative(drive_ohm=drive_ohm, needed_v=needed_v)
    if needed_v >= supply_v:
        raise DomainError(f"needed_v must be below supply_v ({supply_v!r}) (found {needed_v!r})")
    return drive_ohm * (needed_v / (supply_v - needed_v))


def hold_current_a(*, supply_v: float, hold_ohm: float) -> float:
    """Current that a hold resistor takes while its node is driven to the other rail.

    Formula: I = V / R
    Symbols:
        supply_v  V  V    voltage across the resistor, >= 0
        hold_ohm  R  ohm  hold resistance, >= 0
    Returns: I, in A.
    Valid: linear R; the largest case, a drive resistance of 0; what has no known end may be infinite.
    Source: Ohm's law.
    Raises: DomainError: if V or R is negative.
    """
    require_size(supply_v=supply_v, hold_ohm=hold_ohm)
    if supply_v == 0.0 or math.isinf(hold_ohm):
        return 0.0
    return math.inf if hold_ohm == 0.0 else supply_v / hold_ohm


def _require_ramp(*, coupling_c_f: float, total_c_f: float, rise_v: float, ramp_s: float) -> None:
    """Refuse a ramp or a node that cannot be."""
    require_size(coupling_c_f=coupling_c_f, total_c_f=total_c_f, rise_v=rise_v, ramp_s=ramp_s)
    if total_c_f < coupling_c_f:
        raise DomainError(f"total_c_f must be at least coupling_c_f ({coupling_c_f!r}) (found {total_c_f!r})")
