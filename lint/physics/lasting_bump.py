"""How high a bump can still be after the time that a filter wants it to last.

A comparator with a filter ignores what does not last; what it sees of a bump is the highest level above which the bump
stays for that time. The edge that makes the bump may be faster or slower than thought, and a slow edge holds its bump
up for longer, so the bounds here hold for every shape of edge. The node is that of coupling.py.
"""

from __future__ import annotations

import math

from tidegate.lint.physics.domain import (
    DomainError,
    product,
    quotient,
    require_not_negative,
    require_positive,
    require_size,
    share,
)


def lasting_bump_v(*, lasts_s: float, step_v: float, r_ohm: float, coupling_c_f: float, ground_c_f: float) -> float:
    """Highest level above which a coupled bump can stay for a time, whatever the edge that makes it.

    Formula: L = V Cc / (Cc + Cg + T/R)
    Symbols:
        lasts_s       T   s    time for which it stays above the level, >= 0
        step_v        V   V    height of the edge (magnitude), >= 0
        r_ohm         R   ohm  resistance that holds the node, >= 0
        coupling_c_f  Cc  F    capacitance to the neighbour, >= 0
        ground_c_f    Cg  F    all other capacitance of the node, >= 0
    Returns: L, in V.
    Valid: linear R and C; node at rest before; edges that never turn back, of any duration and shape. The edge that
        reaches it jumps to L and then rises for T just fast enough to hold the node there.
    Source: charge balance. (Cc + Cg) dv/dt = Cc dVs/dt - v/R, integrated from rest to the end of the time above L:
        the node holds at least L (Cc + Cg) and R has drained at least L T/R, all of it brought by at most Cc V.
    Raises: DomainError: if a symbol is negative.
    """
    require_size(lasts_s=lasts_s, step_v=step_v, r_ohm=r_ohm, coupling_c_f=coupling_c_f, ground_c_f=ground_c_f)
    drained_c_f = quotient(lasts_s, r_ohm)
    return product(step_v, share(coupling_c_f, ground_c_f + drained_c_f))


def decayed_kick_v(*, lasts_s: float, charge_c: float, r_ohm: float, least_c_f: float, most_c_f: float) -> float:
    """Highest level that a charge thrown onto a node can still hold after a time, whatever the node's capacitance.

    Formula: v = (Q/C) exp(-T/(R C)), C = T/R taken into C_min to C_max: the more capacitance, the smaller the kick but
             the longer it lasts, and T/R is where one outweighs the other
    Symbols:
        lasts_s    T      s    time after the charge has come, >= 0
        charge_c   Q      C    charge (magnitude), >= 0
        r_ohm      R      ohm  resistance that holds the node, >= 0
        least_c_f  C_min  F    least capacitance of the node, >= 0
        most_c_f   C_max  F    greatest capacitance of the node, >= C_min; infinity where it is not known
    Returns: v, in V.
    Valid: linear R and C; charge delivered in no time, or T counted from the end of its delivery.
    Source: solution of C dv/dt = -v/R from v(0) = Q/C; its derivative in C is v (T/(R C) - 1)/C, positive below T/R
        and negative above.
    Raises: DomainError: if C_max is below C_min, or a symbol is negative.
    """
    require_size(lasts_s=lasts_s, charge_c=charge_c, r_ohm=r_ohm, least_c_f=least_c_f)
    if not most_c_f >= least_c_f:
        raise DomainError(f"most_c_f must be at least least_c_f, {least_c_f!r} (found {most_c_f!r})")
    c_f = min(max(quotient(lasts_s, r_ohm), least_c_f), most_c_f)
    return product(quotient(charge_c, c_f), math.exp(-quotient(lasts_s, product(r_ohm, c_f))))


def decoupling_for_lasting_bump_f(
    *, allowed_v: float, lasts_s: float, step_v: float, r_ohm: float, coupling_c_f: float
) -> float:
    """Least capacitance to ground with which no bump stays above a limit for a time, whatever the edge.

    Formula: Cg = Cc (V/a - 1) - T/R; 0 where that is negative
    Symbols:
        allowed_v     a   V    highest level allowed for that time, > 0
        lasts_s       T   s    time, >= 0
        step_v        V   V    height of the edge (magnitude), >= 0
        r_ohm         R   ohm  resistance that holds the node, > 0
        coupling_c_f  Cc  F    capacitance to the neighbour, >= 0
    Returns: Cg, in F.
    Valid: as lasting_bump_v.
    Source: lasting_bump_v set equal to a and solved for Cg.
    Raises: DomainError: if a or R is not > 0, or another symbol is negative.
    """
    require_positive(allowed_v=allowed_v, r_ohm=r_ohm)
    require_not_negative(lasts_s=lasts_s, step_v=step_v, coupling_c_f=coupling_c_f)
    return max(0.0, coupling_c_f * (step_v / allowed_v - 1.0) - lasts_s / r_ohm)
