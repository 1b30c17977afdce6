"""A device that grows slower than the supply, fed from it through a resistor; arrays of corners at once."""

from __future__ import annotations

from typing import Protocol

import msgspec
import numpy as np
from msgspec.structs import replace

from tidegate.lint.physics.array_domain import FloatArray, Reals, finite, not_negative, positive
from tidegate.lint.physics.inversion_root import inversion_root
from tidegate.lint.physics.lambert_w import diode_current_a
from tidegate.lint.physics.mos_threshold import diode_connected_v
from tidegate.lint.physics.silicon import junction_voltage_v


class Branch(Protocol):
    """What a crossing asks of a branch."""

    @property
    def series_ohm(self) -> Reals:
        """Resistance in front of the device, ohm."""

    def current_a(self, source_v: Reals) -> FloatArray:
        """Current drawn from a source, A."""

    def level_v(self, current_a: Reals) -> FloatArray:
        """Source at which the branch draws a current, V."""

    def with_series_ohm(self, series_ohm: Reals) -> Branch:
        """The same device behind another resistance."""


class DiodeBranch(msgspec.Struct, frozen=True, eq=False):
    """A diode, or a diode-connected bipolar transistor, behind a resistor.

    Each symbol is a number or an array over the corners; their shapes broadcast.

    Symbols:
        series_ohm    R      ohm  resistance at the corner's temperature, > 0
        saturation_a  IS     A    saturation current at the corner's temperature, > 0
        emission_v    n V_T  V    emission coefficient times thermal voltage, > 0
    Raises: DomainError: a symbol not above 0.
    """

    series_ohm: Reals
    saturation_a: Reals
    emission_v: Reals

    def __post_init__(self) -> None:
        positive("series_ohm", self.series_ohm)
        positive("saturation_a", self.saturation_a)
        positive("emission_v", self.emission_v)

    def current_a(self, source_v: Reals) -> FloatArray:
        """Current from a source of source_v >= 0, A (diode_current_a)."""
        return diode_current_a(
            source_v=source_v,
            series_ohm=self.series_ohm,
            saturation_a=self.saturation_a,
            emission_v=self.emission_v,
        )

    def level_v(self, current_a: Reals) -> FloatArray:
        """Source at which the branch draws current_a >= 0, V: I R + n V_T ln(1 + I/IS)."""
        device_v = junction_voltage_v(current_a=current_a, saturation_a=self.saturation_a, emission_v=self.emission_v)
        return np.asarray(np.asarray(current_a) * self.series_ohm + device_v)

    def with_series_ohm(self, series_ohm: Reals) -> DiodeBranch:
        """The same device behind another resistance."""
        return replace(self, series_ohm=series_ohm)


class MosBranch(msgspec.Struct, frozen=True, eq=False):
    """A diode-connected MOS device behind a resistor.

    Each symbol is a number or an array over the corners; their shapes broadcast.

    Symbols:
        series_ohm    R     ohm  resistance at the corner's temperature, > 0
        threshold_v   V_TH  V    threshold at the corner's temperature, as a magnitude
        slope_factor  n     -    slope factor, > 0
        specific_a    I_S   A    specific current at the corner's temperature, > 0
        thermal_v     V_T   V    thermal voltage, > 0
    Raises: DomainError: R, n, I_S or V_T not above 0; V_TH not finite.
    """

    series_ohm: Reals
    threshold_v: Reals
    slope_factor: Reals
    specific_a: Reals
    thermal_v: Reals

    def __post_init__(self) -> None:
        positive("series_ohm", self.series_ohm)
        finite("threshold_v", self.threshold_v)
        positive("slope_factor", self.slope_factor)
        positive("specific_a", self.specific_a)
        positive("thermal_v", self.thermal_v)

    @property
    def scale_v(self) -> FloatArray:
        """2 n V_T, V: the gate voltage that counts as one in the law of inversion."""
        return np.asarray(2.0 * np.asarray(self.slope_factor) * self.thermal_v)

    @property
    def specific_drop_v(self) -> FloatArray:
        """I_S R, V."""
        return np.asarray(np.asarray(self.specific_a) * self.series_ohm)

    def current_a(self, source_v: Reals) -> FloatArray:
        """Current from a source of source_v >= 0, A: the root of V = I R + V_GS(I).

        With x = (V_GS - V_TH)/(2 n V_T), ln^2(1 + e^x) = (V - V_TH - 2 n V_T x)/(I_S R).
        """
        source_v = not_negative("source_v", source_v)
        root = inversion_root(
            constant=np.asarray((source_v - self.threshold_v) / self.specific_drop_v),
            slope=np.asarray(-self.scale_v / self.specific_drop_v),
        )
        return np.asarray(self.specific_a * np.logaddexp(0.0, root.x) ** 2)

    def level_v(self, current_a: Reals) -> FloatArray:
        """Source at which the branch draws current_a > 0, V: I R + V_GS(I)."""
        device_v = diode_connected_v(
            current_a=current_a,
            threshold_v=self.threshold_v,
            slope_factor=self.slope_factor,
            specific_a=self.specific_a,
            thermal_v=self.thermal_v,
        )
        return np.asarray(np.asarray(current_a) * self.series_ohm + device_v)

    def with_series_ohm(self, series_ohm: Reals) -> MosBranch:
        """The same device behind another resistance."""
        return replace(self, series_ohm=series_ohm)
