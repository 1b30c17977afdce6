"""Trip level made without a reference: where something that grows with the supply overtakes something that does not.

Every function takes numbers or arrays over the corners and solves them all at once. A corner with no crossing is never
filled in: NoCrossingError says which corners have none.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import Final

import numpy as np

from tidegate.lint.physics.array_domain import (
    BoolArray,
    FloatArray,
    Reals,
    between_0_and_1,
    finite,
    not_negative,
    positive,
)
from tidegate.lint.physics.domain import DomainError
from tidegate.lint.physics.fed_branch import Branch, DiodeBranch, MosBranch
from tidegate.lint.physics.inversion_root import inversion_root
from tidegate.lint.physics.lambert_w import lower_lambert_w_of_exp

_ROUNDING: Final = 1e-9
"""Part of the thermal voltage below which a level is the trivial crossing at 0 V, missed by a rounding."""


class NoCrossingError(DomainError):
    """Some corners have no crossing.

    Symbols:
        exists  bool array of the shape of the corners, True where there is a crossing
    """

    def __init__(self, exists: BoolArray) -> None:
        self.exists = exists
        missing = np.argwhere(~exists)
        where = f", first at index {tuple(int(i) for i in missing[0])}" if exists.ndim else ""
        super().__init__(f"no crossing at {len(missing)} of {exists.size} corners{where}")


def divider_diode_trip_v(branch: DiodeBranch, *, divider_ratio: Reals, offset_v: Reals) -> FloatArray:
    """Supply at which a part of it overtakes the voltage of a diode fed from it through a resistor.

    Formula: a V = V_D + V_os with (V - V_D)/R = IS (exp(V_D/(n V_T)) - 1); solved:
             V_D = n V_T z - V_os/(1 - a) - K, z = -W_-1(-exp(-y)), y = (V_os/(1 - a) + K)/(n V_T) - ln(K/(n V_T)),
             K = a R IS/(1 - a), V = (V_D + V_os)/a
    Symbols:
        branch         R, IS, n V_T     the diode and its resistor
        divider_ratio  a             -  part of the supply that is compared, between 0 and 1
        offset_v       V_os          V  offset of the comparison; above 0 it raises the level
    Returns: V, in V, of the common shape of the inputs: the level above which the part stays ahead.
    Valid: ideal divider that does not load the branch.
    Source: V taken from the first equation into the second leaves V_D + c = K exp(V_D/(n V_T)), c = V_os/(1 - a) + K;
        for s = V_D + c, (-s/(n V_T)) exp(-s/(n V_T)) = -(K/(n V_T)) exp(-c/(n V_T)). Of the two branches of
        Lambert's W the lower gives the upper crossing; the other one, for V_os = 0, is V = 0.
    Raises: DomainError: a not between 0 and 1; V_os not finite. NoCrossingError: corners where the diode never gets
        ahead of the part, so that nothing holds reset at any supply.
    """
    a = between_0_and_1("divider_ratio", divider_ratio)
    offset_v = finite("offset_v", offset_v)
    emission_v = np.asarray(branch.emission_v)
    leak_v = a / (1.0 - a) * branch.series_ohm * branch.saturation_a
    shift_v = offset_v / (1.0 - a) + leak_v
    y = shift_v / emission_v - np.log(leak_v / emission_v)
    device_v = emission_v * lower_lambert_w_of_exp(np.maximum(y, 1.0)) - shift_v
    trip_v = np.asarray((device_v + offset_v) / a)
    return _where_it_exists(trip_v, (y >= 1.0) & (trip_v > _ROUNDING * emission_v))


def divider_mos_trip_v(branch: MosBranch, *, divider_ratio: Reals, offset_v: Reals) -> FloatArray:
    """Supply at which a part of it overtakes the voltage of a diode-connected MOS device fed through a resistor.

    Formula: a V = V_GS + V_os with (V - V_GS)/R = I_S ln^2(1 + exp(x)), x = (V_GS - V_TH)/(2 n V_T); solved:
             ln^2(1 + exp(x)) = ((1 - a)(V_TH + 2 n V_T x) + V_os)/(a R I_S), V = (V_TH + 2 n V_T x + V_os)/a
    Symbols:
        branch         R, V_TH, n, I_S, V_T     the device and its resistor
        divider_ratio  a                     -  part of the supply that is compared, between 0 and 1
        offset_v       V_os                  V  offset of the comparison; above 0 it raises the level
    Returns: V, in V, of the common shape of the inputs: the level above which the part stays ahead.
    Valid: ideal divider that does not load the branch; the saturated law (saturated_current_a), so levels of the device
        above about 0.1 V.
    Source: V taken from the first equation into the second; inversion_root gives the larger x.
    Raises: DomainError: a not between 0 and 1; V_os not finite. NoCrossingError: corners where the device never gets
        ahead of the part, so that nothing holds reset at any supply.
    """
    a = between_0_and_1("divider_ratio", divider_ratio)
    offset_v = finite("offset_v", offset_v)
    drop_v = a * branch.specific_drop_v
    root = inversion_root(
        constant=np.asarray(((1.0 - a) * branch.threshold_v + offset_v) / drop_v),
        slope=np.asarray((1.0 - a) * branch.scale_v / drop_v),
    )
    trip_v = np.asarray((branch.threshold_v + branch.scale_v * root.x + offset_v) / a)
    return _where_it_exists(trip_v, root.exists & (trip_v > _ROUNDING * branch.scale_v))


@dataclass(frozen=True, slots=True, eq=False)
class RisingReference:
    """Current of a reference against the supply: nothing, then a rise, then its own value.

    Each symbol is a number or an array over the corners; their shapes broadcast.

    Formula: I_ref(V) = 0 up to V_s, then g (V - V_s), never more than I_0
    Symbols:
        start_v       V_s  V    supply at which the current sets in, >= 0
        rise_a_per_v  g    A/V  rise of the current with the supply until it regulates, > 0
        regulated_a   I_0  A    current in regulation, > 0
    Raises: DomainError: V_s below 0; g or I_0 not above 0.
    """

    start_v: Reals
    rise_a_per_v: Reals
    regulated_a: Reals

    def __post_init__(self) -> None:
        not_negative("start_v", self.start_v)
        positive("rise_a_per_v", self.rise_a_per_v)
        positive("regulated_a", self.regulated_a)

    def current_a(self, supply_v: Reals) -> FloatArray:
        """Current at a supply, A."""
        above_v = np.maximum(finite("supply_v", supply_v) - self.start_v, 0.0)
        return np.asarray(np.minimum(above_v * self.rise_a_per_v, self.regulated_a))


def reference_overtakes_v(branch: Branch, *, mirror_ratio: Reals, reference: RisingReference) -> FloatArray:
    """Supply at which the current of a starting reference overtakes a crude current, mirrored: the trip level.

    Formula: m I_c(V) = g (V - V_s), V = I_c R + V_dev(I_c); so I_c is the current from a source V_s through the same
             device behind R - m/g, and V = V_s + m I_c/g
    Symbols:
        branch        R, device        what makes the crude current from the supply
        mirror_ratio  m             -  crude current at the comparison over that in the branch, > 0
        reference     V_s, g, I_0      the reference's own current
    Returns: V, in V, of the common shape of the inputs.
    Valid: a reference that rises faster than the crude current at full conduction, g > m/R; quasi-static.
    Source: the two lines above, V eliminated.
    Raises: DomainError: m not above 0; g not above m/R. NoCrossingError: corners where the reference regulates at a
        current below the crude one, and so never overtakes it.
    """
    m = positive("mirror_ratio", mirror_ratio)
    share_ohm = np.asarray(m / reference.rise_a_per_v)
    left_ohm = np.asarray(branch.series_ohm - share_ohm)
    if np.any(left_ohm <= 0.0):
        raise DomainError("rise_a_per_v must be greater than mirror_ratio / series_ohm")
    crude_a = branch.with_series_ohm(left_ohm).current_a(reference.start_v)
    trip_v = np.asarray(reference.start_v + share_ohm * crude_a)
    return _where_it_exists(trip_v, np.asarray(m * crude_a <= reference.regulated_a))


def crude_overtakes_v(branch: Branch, *, mirror_ratio: Reals, regulated_a: Reals) -> FloatArray:
    """Supply at which a crude current, mirrored, overtakes a constant one.

    Where the crude current holds reset against a reference, this is the second crossing: above it the chip is reset
    in service. Where the crude current is what releases, it is the trip level.

    Formula: V = I R + V_dev(I), I = I_0/m
    Symbols:
        branch        R, device     what makes the crude current from the supply
        mirror_ratio  m          -  crude current at the comparison over that in the branch, > 0
        regulated_a   I_0        A  the constant current, > 0
    Returns: V, in V, of the common shape of the inputs.
    Valid: quasi-static.
    Source: Kirchhoff's voltage law around the branch at I = I_0/m.
    Raises: DomainError: m or I_0 not above 0.
    """
    return branch.level_v(positive("regulated_a", regulated_a) / positive("mirror_ratio", mirror_ratio))


def least_reference_ratio(
    branch: Branch,
    *,
    mirror_ratio: Reals,
    reference: RisingReference,
    supply_least_v: Reals,
    supply_most_v: Reals,
) -> FloatArray:
    """Least of the reference's current over the mirrored crude current, over a range of the supply.

    Formula: min over V of I_ref(V)/(m I_c(V)), which lies at an end of the range
    Symbols:
        branch          R, device        what makes the crude current from the supply
        mirror_ratio    m             -  crude current at the comparison over that in the branch, > 0
        reference       V_s, g, I_0      the reference's own current
        supply_least_v  V_1           V  lowest supply in service, > 0
        supply_most_v   V_2           V  highest supply, >= V_1
    Returns: the ratio, dimensionless, of the common shape of the inputs; below 1 the chip is reset in service.
    Valid: quasi-static.
    Source: I_c is convex in V (V = I R + V_dev(I) is concave in I), so that while I_ref rises in a line the ratio has
        at most a greatest value inside, and once I_ref is constant the ratio falls.
    Raises: DomainError: m or V_1 not above 0; V_2 below V_1.
    """
    m = positive("mirror_ratio", mirror_ratio)
    least_v, most_v = positive("supply_least_v", supply_least_v), positive("supply_most_v", supply_most_v)
    if np.any(most_v < least_v):
        raise DomainError("supply_most_v must be at least supply_least_v")
    at_least = reference.current_a(least_v) / (m * branch.current_a(least_v))
    at_most = reference.current_a(most_v) / (m * branch.current_a(most_v))
    return np.asarray(np.minimum(at_least, at_most))


def _where_it_exists(trip_v: FloatArray, exists: BoolArray) -> FloatArray:
    trip_v, exists = np.broadcast_arrays(trip_v, exists)
    if not exists.all():
        raise NoCrossingError(exists)
    return np.array(trip_v)
