"""Wear of metal by current: Black's law, limits carried to other conditions, and damage that adds up."""

from __future__ import annotations

import math
from collections.abc import Sequence

import msgspec

from tidegate.lint.physics.constants import BOLTZMANN_EV_PER_K
from tidegate.lint.physics.domain import (
    product,
    require_finite,
    require_not_negative,
    require_positive,
    require_within,
)

# Takes in every service and stress-test temperature of on-chip metal, and refuses one given in degrees
# Celsius by mistake (common practice, no source).
_COLDEST_K = 200.0
_HOTTEST_K = 700.0


class Wear(msgspec.Struct, frozen=True):
    """How one failure mechanism of one metal depends on temperature and current.

    Symbols:
        activation_energy_ev   Ea   eV   activation energy, >= 0 (0: temperature does not matter)
        current_exponent       n    -    exponent of the current density, > 0 (1 void growth, 2 nucleation; without
                                         end: the limit is sharp, and no life moves it)
    Valid: both belong to the process; there is no value that fits all.
    Raises: DomainError: if Ea is below 0, or n is not greater than 0.
    """

    activation_energy_ev: float
    current_exponent: float

    def __post_init__(self) -> None:
        require_not_negative(activation_energy_ev=self.activation_energy_ev)
        if self.current_exponent != math.inf:
            require_positive(current_exponent=self.current_exponent)


class Exposure(msgspec.Struct, frozen=True):
    """A time spent at a steady current.

    Symbols:
        time_s    t   s                     total time spent, >= 0
        current   I   that of the limit     magnitude of the current, >= 0
    Raises: DomainError: if a symbol is below 0.
    """

    time_s: float
    current: float

    def __post_init__(self) -> None:
        require_not_negative(time_s=self.time_s, current=self.current)


def acceleration_factor(*, wear: Wear, current_ratio: float, use_k: float, stress_k: float) -> float:
    """Life in use over life under stress.

    Formula: AF = (Js/Ju)^n exp((Ea/k) (1/Tu - 1/Ts))
    Symbols:
        wear            Ea, n as in Wear
        current_ratio   Js/Ju   -   current density under stress over that in use, > 0
        use_k           Tu      K   metal temperature in use, self-heating included, 200 to 700
        stress_k        Ts      K   metal temperature under stress, self-heating included, 200 to 700
    Returns: AF, dimensionless; infinite where it exceeds the largest float.
    Valid: one failure mechanism at both conditions; line longer than its immune (Blech) length.
    Source: ratio of two lives by J. R. Black, IEEE Trans. Electron Devices 16(4), 338-347 (1969),
        life = A J^-n exp(Ea/(k T)).
    Raises: DomainError: if a symbol is outside its range.
    """
    require_positive(current_ratio=current_ratio)
    require_within(least=_COLDEST_K, most=_HOTTEST_K, use_k=use_k, stress_k=stress_k)
    return _exp(wear.current_exponent * math.log(current_ratio) + _log_thermal_gain(wear, to_k=use_k, from_k=stress_k))


def carried_limit(
    *,
    limit: float,
    wear: Wear,
    stated_k: float,
    use_k: float,
    stated_life_s: float,
    use_life_s: float,
) -> float:
    """Current limit carried from the temperature and life it is stated for to those of this chip.

    Formula: I = I0 ((L0/L) exp((Ea/k) (1/T - 1/T0)))^(1/n)
    Symbols:
        limit           I0   any    current limit as stated, > 0: A, A per m of width, A per m^2, A per via
        wear            Ea, n as in Wear
        stated_k        T0   K      metal temperature the limit is stated for, 200 to 700
        use_k           T    K      metal temperature on this chip, self-heating included, 200 to 700
        stated_life_s   L0   s      life the limit is stated for, > 0
        use_life_s      L    s      life this chip has to reach, > 0, at the same share of failures
    Returns: I, in the unit of limit.
    Valid: one failure mechanism at both conditions; same share of failures at both.
    Source: life = A J^-n exp(Ea/(k T)) (Black, IEEE Trans. Electron Devices 16(4), 338-347, 1969) written for
        both conditions and solved for the current; for L = L0 it is the derating formula of the design manual
        of google/gf180mcu-pdk, section 14.2.2.
    Raises: DomainError: if a symbol, or the limit that results, is outside its range.
    """
    require_positive(use_life_s=use_life_s)
    log_life_at_limit = _log_life_at_limit(
        limit=limit, wear=wear, stated_k=stated_k, use_k=use_k, stated_life_s=stated_life_s
    )
    carried = limit * _exp((log_life_at_limit - math.log(use_life_s)) / wear.current_exponent)
    # A limit that left the range of a float would pass or fail everything without saying why.
    require_finite(carried_limit=carried)
    require_positive(carried_limit=carried)
    return carried


def life_s(
    *,
    current: float,
    limit: float,
    wear: Wear,
    stated_k: float,
    use_k: float,
    stated_life_s: float,
) -> float:
    """Life at a steady current, from a limit and the temperature and life that limit is stated for.

    Formula: L = L0 (I0/I)^n exp((Ea/k) (1/T - 1/T0))
    Symbols:
        current         I    that of limit   magnitude of the current, >= 0
        limit           I0   any             current limit as stated, > 0
        wear            Ea, n as in Wear
        stated_k        T0   K               metal temperature the limit is stated for, 200 to 700
        use_k           T    K               metal temperature at this current, 200 to 700
        stated_life_s   L0   s               life the limit is stated for, > 0
    Returns: L, in s, at the share of failures the limit is stated for; infinite at no current and where it
        exceeds the largest float.
    Valid: one failure mechanism at both conditions; current steady against the thermal time constant.
    Source: as carried_limit, solved for the life.
    Raises: DomainError: if a symbol is outside its range.
    """
    require_not_negative(current=current)
    log_life = _log_life_at_limit(limit=limit, wear=wear, stated_k=stated_k, use_k=use_k, stated_life_s=stated_life_s)
    if current == 0.0:
        return math.inf
    return _exp(log_life + product(wear.current_exponent, math.log(limit) - math.log(current)))


def damage_share(
    *,
    exposures: Sequence[Exposure],
    limit: float,
    wear: Wear,
    stated_k: float,
    use_k: float,
    stated_life_s: float,
) -> float:
    """Share of the life used up by all times spent at all currents.

    Formula: D = sum of t_i / L(I_i)
    Symbols:
        exposures       t_i, I_i as in Exposure, I_i in the unit of limit
        limit           I0   any   current limit as stated, > 0
        wear            Ea, n as in Wear
        stated_k        T0   K     metal temperature the limit is stated for, 200 to 700
        use_k           T    K     metal temperature during the exposures, 200 to 700
        stated_life_s   L0   s     life the limit is stated for, > 0
    Returns: D, dimensionless; 1 is the whole budget; infinite where it exceeds the largest float.
    Valid: as life_s; no recovery between exposures, order without effect.
    Source: linear damage rule, M. A. Miner, J. Appl. Mech. 12, A159-A164 (1945), with L by life_s.
    Raises: DomainError: if a symbol is outside its range.
    """
    log_life = _log_life_at_limit(limit=limit, wear=wear, stated_k=stated_k, use_k=use_k, stated_life_s=stated_life_s)
    return math.fsum(
        # Logarithms, because the life itself may be too short or too long for a float.
        _exp(
            math.log(exposure.time_s)
            + product(wear.current_exponent, math.log(exposure.current) - math.log(limit))
            - log_life
        )
        for exposure in exposures
        if exposure.time_s > 0.0 and exposure.current > 0.0
    )


def _log_thermal_gain(wear: Wear, *, to_k: float, from_k: float) -> float:
    """Natural logarithm of life at ``to_k`` over life at ``from_k``, at equal current."""
    return wear.activation_energy_ev / BOLTZMANN_EV_PER_K * (1.0 / to_k - 1.0 / from_k)


def _log_life_at_limit(*, limit: float, wear: Wear, stated_k: float, use_k: float, stated_life_s: float) -> float:
    """Natural logarithm of the life, in s, at a current equal to the stated limit and at ``use_k``."""
    require_positive(limit=limit, stated_life_s=stated_life_s)
    require_within(least=_COLDEST_K, most=_HOTTEST_K, stated_k=stated_k, use_k=use_k)
    return math.log(stated_life_s) + _log_thermal_gain(wear, to_k=use_k, from_k=stated_k)


def _exp(log_value: float) -> float:
    """Exponential function that is infinite, not an error, above the largest float."""
    try:
        return math.exp(log_value)
    except OverflowError:
        return math.inf
