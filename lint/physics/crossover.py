"""Trip level made without a reference: where something that grows with the supply overtakes something that does not.

Every function takes numbers or arrays over the corners and solves them all at once; ``crossing_point`` solves one
corner without NumPy. A corner with no crossing is never filled in: NoCrossingError says which corners have none.
"""

from __future__ import annotations

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


def reference_overtakes_v(
    branch: Branch, *, mirror_ratio: Reals, start_v: Reals, rise_v: Reals, regulated_a: Reals
) -> FloatArray:
    """Supply at which the current of a starting reference overtakes a crude current, mirrored: the trip level.

    Formula: m I_c(V) = I_0 (V - V_s)/V_r, V = I_c R + V_dev(I_c); so I_c is the current from a source V_s through the
             same device behind R - m V_r/I_0, and V = V_s + I_c m V_r/I_0
    Symbols:
        branch        R, device     what makes the crude current from the supply
        mirror_ratio  m          -  crude current at the comparison over that in the branch, > 0
        start_v       V_s        V  supply at which the reference's current sets in, > 0
        rise_v        V_r        V  how much further the supply rises until it regulates, >= 0
        regulated_a   I_0        A  current in regulation, > 0
    Returns: V, in V, of the common shape of the inputs.
    Valid: the reference's current rises in a straight line; quasi-static.
    Source: the two lines above, V eliminated.
    Raises: DomainError: m, V_s or I_0 not above 0; V_r below 0. NoCrossingError: corners where the reference rises
        slower than the crude current, or regulates below it.
    """
    m, regulated_a = positive("mirror_ratio", mirror_ratio), positive("regulated_a", regulated_a)
    start_v = positive("start_v", start_v)
    share_ohm = m * not_negative("rise_v", rise_v) / regulated_a
    left_ohm = np.asarray(branch.series_ohm - share_ohm)
    faster = left_ohm > 0.0
    crude_a = branch.with_series_ohm(np.where(faster, left_ohm, branch.series_ohm)).current_a(start_v)
    return _where_it_exists(np.asarray(start_v + share_ohm * crude_a), faster & (m * crude_a <= regulated_a))


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


def _where_it_exists(trip_v: FloatArray, exists: BoolArray) -> FloatArray:
    trip_v, exists = np.broadcast_arrays(trip_v, exists)
    if not exists.all():
        raise NoCrossingError(exists)
    return np.array(trip_v)
