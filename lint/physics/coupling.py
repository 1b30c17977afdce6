"""Bumps that neighbours leave on a node, through a capacitor or a shared impedance, and what stops them.

The node of the edge formulas: a resistance R and a capacitance Cg hold it, a capacitance Cc ties it to a
neighbour that moves by V at constant slope within tr and then stays. Its equation from rest,
(Cc + Cg) dv/dt = Cc dVs/dt - v/R, has the solution written out at bump_at_v; every other edge formula here
follows from that one.
"""

from __future__ import annotations

import math

from tidegate.lint.physics.domain import (
    product,
    quotient,
    require_not_negative,
    require_positive,
    require_size,
    require_within,
    share,
)


def bump_peak_v(*, step_v: float, edge_s: float, r_ohm: float, coupling_c_f: float, ground_c_f: float) -> float:
    """Highest level that an edge leaves on the node it couples into.

    Formula: v = V (R Cc / tr) (1 - exp(-tr / tau)), tau = R (Cc + Cg); for tr = 0, v = V Cc / (Cc + Cg)
    Symbols:
        step_v        V   V    height of the edge (magnitude), >= 0
        edge_s        tr  s    duration of the edge from end to end, >= 0 (0: an ideal step)
        r_ohm         R   ohm  resistance that holds the node, >= 0
        coupling_c_f  Cc  F    capacitance to the neighbour, >= 0
        ground_c_f    Cg  F    all other capacitance of the node, >= 0
    Returns: v, in V; it is reached at the end of the edge.
    Valid: linear R and C; edge of constant slope; node at rest before. Of a symbol without end, the limit is meant; of
        an ideal step onto a node without resistance, the step before the node gives it back.
    Source: solution of (Cc + Cg) dv/dt = Cc V/tr - v/R, v(0) = 0, at t = tr.
    Raises: DomainError: if a symbol is negative.
    """
    require_size(step_v=step_v, edge_s=edge_s, r_ohm=r_ohm, coupling_c_f=coupling_c_f, ground_c_f=ground_c_f)
    passed = share(coupling_c_f, ground_c_f)
    if passed == 0.0:
        return 0.0
    tau_s = product(r_ohm, coupling_c_f + ground_c_f)
    return product(step_v, passed * _mean_of_decay(quotient(edge_s, tau_s)))


def bump_at_v(
    *, t_s: float, step_v: float, edge_s: float, r_ohm: float, coupling_c_f: float, ground_c_f: float
) -> float:
    """Level of the bump at one time after the start of the edge.

    Formula: v(t) = V (R Cc / tr) (1 - exp(-t / tau))  while t <= tr,
             v(t) = v(tr) exp(-(t - tr) / tau)         after; tau = R (Cc + Cg)
    Symbols:
        t_s           t   s    time since the start of the edge, >= 0
        step_v        V   V    height of the edge (magnitude), >= 0
        edge_s        tr  s    duration of the edge from end to end, >= 0 (0: an ideal step)
        r_ohm         R   ohm  resistance that holds the node, >= 0
        coupling_c_f  Cc  F    capacitance to the neighbour, >= 0
        ground_c_f    Cg  F    all other capacitance of the node, >= 0
    Returns: v(t), in V.
    Valid: as bump_peak_v.
    Source: solution of (Cc + Cg) dv/dt = Cc V/tr - v/R with v(0) = 0 during the edge, and without the term in
        V after it.
    Raises: DomainError: if a symbol is negative.
    """
    require_not_negative(t_s=t_s)
    # The time since the start is an edge cut short: same slope, so the height scales with the time.
    if t_s < edge_s:
        return bump_peak_v(
            step_v=step_v * (t_s / edge_s),
            edge_s=t_s,
            r_ohm=r_ohm,
            coupling_c_f=coupling_c_f,
            ground_c_f=ground_c_f,
        )
    peak_v = bump_peak_v(step_v=step_v, edge_s=edge_s, r_ohm=r_ohm, coupling_c_f=coupling_c_f, ground_c_f=ground_c_f)
    if peak_v == 0.0:
        return 0.0
    return peak_v * math.exp(-quotient(t_s - edge_s, product(r_ohm, coupling_c_f + ground_c_f)))


def decoupling_for_bump_f(
    *, allowed_v: float, step_v: float, edge_s: float, r_ohm: float, coupling_c_f: float
) -> float:
    """Least capacitance to ground that keeps the bump at or below a limit.

    Formula: Cg = tau / R - Cc, tau = -tr / ln(1 - a tr / (V R Cc)); for tr = 0, Cg = Cc (V / a - 1);
             0 where the bump without Cg is at most a
    Symbols:
        allowed_v     a   V    highest bump allowed, > 0
        step_v        V   V    height of the edge (magnitude), >= 0
        edge_s        tr  s    duration of the edge from end to end, >= 0 (0: an ideal step)
        r_ohm         R   ohm  resistance that holds the node, >= 0
        coupling_c_f  Cc  F    capacitance to the neighbour, >= 0
    Returns: Cg, in F.
    Valid: as bump_peak_v, for symbols that have an end.
    Source: bump_peak_v set equal to a and solved for Cg. There is one solution: Cg enters the peak through
        tau alone, tau grows with Cg, and 1 - exp(-tr/tau) falls as tau grows, from its value at Cg = 0 down to 0.
    Raises: DomainError: if a is not > 0, or another symbol is negative.
    """
    require_positive(allowed_v=allowed_v)
    bare_peak_v = bump_peak_v(step_v=step_v, edge_s=edge_s, r_ohm=r_ohm, coupling_c_f=coupling_c_f, ground_c_f=0.0)
    if bare_peak_v <= allowed_v:
        return 0.0
    settled_share = (allowed_v / step_v) * quotient(edge_s, r_ohm * coupling_c_f)
    if settled_share == 0.0:
        return coupling_c_f * (step_v / allowed_v - 1.0)
    node_c_f = edge_s / (r_ohm * _tau_to_settle(settled_share))
    return max(0.0, node_c_f - coupling_c_f)


def settling_time_s(*, r_ohm: float, c_f: float, residual: float) -> float:
    """Time for an RC node to settle to within a share of the step that moved it.

    Formula: t = R C ln(1 / e)
    Symbols:
        r_ohm     R  ohm  resistance that feeds the node, > 0
        c_f       C  F    capacitance of the node, >= 0
        residual  e  1    error left, as a share of the step, 0 < e <= 1
    Returns: t, in s.
    Valid: linear R and C, one pole.
    Source: solution of dv/dt = (V - v)/(R C): the error falls as exp(-t/(R C)).
    Raises: DomainError: if R is not > 0, C is negative, or e is not in (0, 1].
    """
    require_positive(r_ohm=r_ohm, residual=residual)
    require_not_negative(c_f=c_f)
    require_within(least=0.0, most=1.0, residual=residual)
    return r_ohm * c_f * abs(math.log(residual))


def charge_kick_v(*, charge_c: float, c_f: float) -> float:
    """Step on a decoupled node when a charge is thrown onto it.

    Formula: dV = Q / C
    Symbols:
        charge_c  Q  C  charge (magnitude), >= 0
        c_f       C  F  capacitance of the node, >= 0
    Returns: dV, in V; without end where there is no capacitance.
    Valid: charge delivered in a time much shorter than the node takes to recover.
    Source: definition of capacitance.
    Raises: DomainError: if Q or C is negative.
    """
    require_size(charge_c=charge_c, c_f=c_f)
    return quotient(charge_c, c_f)


def decoupling_for_charge_f(*, charge_c: float, allowed_v: float) -> float:
    """Least capacitance on which a charge makes no more than the allowed step.

    Formula: C = Q / a
    Symbols:
        charge_c   Q  C  charge (magnitude), >= 0
        allowed_v  a  V  highest step allowed, > 0
    Returns: C, in F: all capacitance of the node together.
    Valid: as charge_kick_v.
    Source: charge_kick_v solved for C.
    Raises: DomainError: if Q is negative or a is not > 0.
    """
    require_not_negative(charge_c=charge_c)
    require_positive(allowed_v=allowed_v)
    return charge_c / allowed_v


def shared_impedance_bump_v(*, step_a: float, impedance_ohm: float) -> float:
    """Bump that a current step of one block makes on an impedance it shares with another.

    Formula: v = dI Z
    Symbols:
        step_a         dI  A    current step (magnitude), >= 0
        impedance_ohm  Z   ohm  magnitude of the impedance that both share, >= 0
    Returns: v, in V.
    Valid: resistive impedance, or the largest magnitude over the band of the step.
    Source: Ohm's law.
    Raises: DomainError: if dI or Z is negative.
    """
    require_size(step_a=step_a, impedance_ohm=impedance_ohm)
    return product(step_a, impedance_ohm)


def _mean_of_decay(x: float) -> float:
    """Mean of exp(-u) over u from 0 to x: (1 - exp(-x))/x, which is 1 at x = 0."""
    return -math.expm1(-x) / x if x > 0.0 else 1.0


def _tau_to_settle(share: float) -> float:
    """Time constants that a node takes to cover a share of its way to where it settles."""
    # The callers have seen the share reached, so it is below 1; after a long edge rounding may bring it to 1.
    return -math.log1p(-min(share, math.nextafter(1.0, 0.0)))
