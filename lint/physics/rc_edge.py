"""The edge of a node that a resistance charges."""

from __future__ import annotations

import math

from tidegate.lint.physics.domain import product, require_size

TEN_TO_NINETY = math.log(9.0)


def rc_edge_s(*, r_ohm: float, c_f: float) -> float:
    """Time an RC node takes from a tenth to nine tenths of its way.

    Formula: t = ln(9) R C
    Symbols:
        r_ohm  R  ohm  resistance that drives the node, >= 0
        c_f    C  F    capacitance of the node, >= 0
    Returns: t, in s.
    Valid: linear R and C; the input is much faster than the output; what has no known end may be infinite.
    Source: solution of dV/dt = (Vf - V)/(R C), V(0) = 0: it reaches 0.1 Vf after R C ln(1/0.9) and 0.9 Vf after
        R C ln(10), and the difference is R C ln(9).
    Raises: DomainError: if R or C is below 0.
    """
    require_size(r_ohm=r_ohm, c_f=c_f)
    return TEN_TO_NINETY * product(r_ohm, c_f)
