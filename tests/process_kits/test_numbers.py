"""Shipped process data against a second transcription of the published documents they come from.

The table below was typed apart from the shipped files and covers every number of them:
- IHP: IHP-GmbH/IHP-Open-PDK at 5cccb161; "p." are pages of SG13G2_os_process_spec.pdf Rev 1.2.
- GF: google/gf180mcu-pdk at de3240d7 (tables named), "model" is sm141064.ngspice of
  google/globalfoundries-pdk-libs-gf180mcu_fd_pr at 9f992d5a.
"""

from __future__ import annotations

from collections.abc import Callable, Iterator
from dataclasses import dataclass
from typing import Any

import msgspec
import pytest

from tidegate.lint.description.model.process import Process
from tidegate.lint.quantity import Span

IHP, GF = "ihp-sg13g2", "gf180mcu"

# Size of one unit in the kept unit (SI, or eV for energies).
UNITS = {
    "mA/um": 1e3, "A/um": 1e6, "pA/um": 1e-6, "mA": 1e-3, "nm": 1e-9, "um": 1e-6, "mohm/sq": 1e-3, "ohm/sq": 1.0,
    "ohm": 1.0, "V": 1.0, "mV": 1e-3, "mV/K": 1e-3, "mV*um": 1e-9, "ppm/K": 1e-6, "1/K": 1.0, "ppm/K^2": 1e-6,
    "1/K^2": 1.0, "fF/um^2": 1e-3, "A": 1.0, "eV": 1.0, "K": 1.0, "1": 1.0, "h": 3600.0, "yr": 365.25 * 86400.0,
}  # fmt: skip

# least, typical, greatest; None where the document gives none
Values = tuple[float | None, float | None, float | None]


@dataclass(frozen=True)
class Row:
    """One row of a published table: whom it describes (names by commas), which fact, the numbers, the source."""

    kit: str
    section: str
    names: str
    fact: str
    values: float | Values
    unit: str
    source: str

    @property
    def paths(self) -> list[str]:
        return [f"{self.section}.{name.strip()}.{self.fact}" for name in self.names.split(",")]

    @property
    def kept(self) -> Values:
        values = self.values if isinstance(self.values, tuple) else (self.values,) * 3
        least, typical, most = (None if value is None else value * UNITS[self.unit] for value in values)
        return least, typical, most


def rows(kit: str) -> tuple[Row, ...]:
    table = IHP_TABLE if kit == IHP else GF_TABLE
    return (*(Row(kit, *row) for row in table), *_conditions(kit))


def _conditions(kit: str) -> Iterator[Row]:
    """Temperature and life of the current limits."""
    ihp_layers = "metal1,metal2,metal3,metal4,metal5,topmetal1,topmetal2"
    if kit == IHP:
        for section, names in (("layers", ihp_layers), ("vias", "contact,via1,via2,via3,via4,topvia1,topvia2")):
            yield Row(kit, section, names, "limits.0.temperature", 105 + 273.15, "K", "p.16, p.24 A.v")
            yield Row(kit, section, names, "limits.0.life", 11, "yr", "p.16, p.24 A.v")
        return
    for section, names in (("layers", GF_METALS), ("vias", GF_VIAS)):
        for index, celsius in enumerate((85, 110, 125)):
            yield Row(
                kit,
                section,
                names,
                f"limits.{index}.temperature",
                celsius + 273.15,
                "K",
                "54_Electro-migration1_150.csv, 54_Electro-migration2_151.csv",
            )
            yield Row(kit, section, names, f"limits.{index}.life", 100_000, "h", "drm_14_2.rst L4, stated at 85 degC")


IHP_M25 = "metal2,metal3,metal4,metal5"
IHP_TABLE: tuple[tuple[str, str, str, float | Values, str, str], ...] = (
    ("layers", "metal1", "limits.0.dc", 1, "mA/um", "p.16, w > 0.36 um"),
    ("layers", "metal1", "narrow.dc", 0.36, "mA", "p.16, w = 0.16 to 0.36 um"),
    ("layers", "metal1", "narrow.up_to", 0.36, "um", "p.16"),
    ("layers", IHP_M25, "limits.0.dc", 2, "mA/um", "p.16, w > 0.3 um"),
    ("layers", IHP_M25, "narrow.dc", 0.6, "mA", "p.16, w = 0.2 to 0.3 um"),
    ("layers", IHP_M25, "narrow.up_to", 0.3, "um", "p.16"),
    ("layers", "topmetal1", "limits.0.dc", 15, "mA/um", "p.16"),
    ("layers", "topmetal2", "limits.0.dc", 16, "mA/um", "p.16"),
    ("layers", "metal1", "thickness", 420, "nm", "p.17"),
    ("layers", IHP_M25, "thickness", 490, "nm", "p.17"),
    ("layers", "topmetal1", "thickness", 2000, "nm", "p.17"),
    ("layers", "topmetal2", "thickness", 3000, "nm", "p.17"),
    ("layers", "metal1", "sheet", (85, 110, 135), "mohm/sq", "p.14"),
    ("layers", IHP_M25, "sheet", (73, 88, 103), "mohm/sq", "p.14"),
    ("layers", "topmetal1", "sheet", (15, 18, 21), "mohm/sq", "p.14"),
    ("layers", "topmetal2", "sheet", (7.5, 11, 14.5), "mohm/sq", "p.14"),
    ("vias", "contact", "limits.0.dc", 0.3, "mA", "p.16"),
    ("vias", "via1,via2,via3,via4", "limits.0.dc", 0.4, "mA", "p.16"),
    ("vias", "topvia1", "limits.0.dc", 1.4, "mA", "p.16"),
    ("vias", "topvia2", "limits.0.dc", 10, "mA", "p.16"),
    ("vias", "contact", "resistance", (8, 17, 22), "ohm", "p.15"),
    ("vias", "via1,via2,via3,via4", "resistance", (5, 9, 20), "ohm", "p.15"),
    ("vias", "topvia1", "resistance", (1, 2.2, 4), "ohm", "p.15"),
    ("vias", "topvia2", "resistance", (0.5, 1.1, 2.2), "ohm", "p.15"),
    ("devices", "nmos_lv", "threshold", (0.43, 0.50, 0.55), "V", "p.7, 10/0.13"),
    ("devices", "nmos_lv_long", "threshold", (0.16, 0.20, 0.24), "V", "p.7, 10/10"),
    ("devices", "pmos_lv", "threshold", (0.41, 0.47, 0.53), "V", "p.8, 10/0.13, printed -0.53 to -0.41"),
    ("devices", "pmos_lv_long", "threshold", (0.31, 0.36, 0.41), "V", "p.8, 10/10"),
    ("devices", "nmos_hv", "threshold", (0.63, 0.70, 0.77), "V", "p.9, 10/0.45"),
    ("devices", "nmos_hv_long", "threshold", (0.65, 0.69, 0.73), "V", "p.9, 10/10"),
    ("devices", "pmos_hv", "threshold", (0.59, 0.65, 0.71), "V", "p.9, 10/0.4"),
    ("devices", "pmos_hv_long", "threshold", (0.64, 0.70, 0.78), "V", "p.9, 10/10"),
    ("devices", "nmos_lv", "leakage", (None, 1e-10, 1e-9), "A/um", "p.7, Vds 1.2 V, 27 degC"),
    ("devices", "pmos_lv", "leakage", (None, 10**-10.3, 10**-9.3), "A/um", "p.8"),
    ("devices", "nmos_hv", "leakage", (None, 10**-12.5, 1e-11), "A/um", "p.9, Vds 3.3 V, 27 degC"),
    ("devices", "pmos_hv", "leakage", (None, 10**-12.5, 10**-11.5), "A/um", "p.9"),
    ("devices", "nmos_lv", "swing", (76, 82, 88), "mV", "p.7-10"),
    ("devices", "pmos_lv", "swing", (75, 81, 87), "mV", "p.7-10"),
    ("devices", "nmos_hv", "swing", (72, 84, 96), "mV", "p.7-10"),
    ("devices", "pmos_hv", "swing", (82, 92, 102), "mV", "p.7-10"),
    ("devices", "nmos_lv,nmos_lv_long", "mismatch.coefficient", 3.9, "mV*um", "sg13g2_moslv_mismatch.lib L20"),
    ("devices", "pmos_lv,pmos_lv_long", "mismatch.coefficient", 2.2, "mV*um", "sg13g2_moslv_mismatch.lib L25"),
    ("devices", "nmos_hv,nmos_hv_long", "mismatch.coefficient", 7.0, "mV*um", "sg13g2_moshv_mismatch.lib L20"),
    ("devices", "pmos_hv,pmos_hv_long", "mismatch.coefficient", 4.5, "mV*um", "sg13g2_moshv_mismatch.lib L25"),
    ("devices", "nmos_lv,nmos_lv_long,pmos_lv,pmos_lv_long", "reference_temperature", 300.15, "K", "p.7, 27 degC"),
    ("devices", "nmos_hv,nmos_hv_long,pmos_hv,pmos_hv_long", "reference_temperature", 300.15, "K", "p.9, 27 degC"),
    ("resistors", "rsil", "sheet", (6.2, 7.0, 7.8), "ohm/sq", "p.10"),
    ("resistors", "rppd", "sheet", (235, 260, 285), "ohm/sq", "p.11"),
    ("resistors", "rhigh", "sheet", (1160, 1360, 1560), "ohm/sq", "p.12"),
    ("resistors", "nactive_unsalicided", "sheet", (55, 67, 79), "ohm/sq", "p.14"),
    ("resistors", "pactive_unsalicided", "sheet", (69, 79, 89), "ohm/sq", "p.14"),
    ("resistors", "rsil", "tc1", 3100, "ppm/K", "p.10"),
    ("resistors", "rppd", "tc1", 170, "ppm/K", "p.11"),
    ("resistors", "rhigh", "tc1", -2300, "ppm/K", "p.12"),
    ("resistors", "rsil", "tc2", 0.3, "ppm/K^2", "p.10"),
    ("resistors", "rppd", "tc2", 0.4, "ppm/K^2", "p.11"),
    ("resistors", "rhigh", "tc2", 2.1, "ppm/K^2", "p.12"),
    ("resistors", "rsil,rppd,rhigh", "reference_temperature", 300, "K", "p.24 A.af"),
    ("capacitors", "cmim", "density", (1.35, 1.5, 1.65), "fF/um^2", "p.13"),
    ("diodes", "pnp_mpa", "saturation", (0.87 * 1.66e-19, 1.66e-19, 1.13 * 1.66e-19), "A",
     "sg13g2_hbt_mod.lib L747-779, cornerHBT.lib L99, L165 (x0.87, x1.13)"),
    ("diodes", "pnp_mpa", "emission", 1.015, "1", "sg13g2_hbt_mod.lib L747-779"),
    ("diodes", "pnp_mpa", "band_gap", 1.17, "eV", "sg13g2_hbt_mod.lib L747-779"),
    ("diodes", "pnp_mpa", "temperature_exponent", 2.54, "1", "sg13g2_hbt_mod.lib L747-779"),
    ("diodes", "pnp_mpa,dantenna", "reference_temperature", 300.15, "K", "model cards, Tnom 27 degC"),
    ("diodes", "dantenna", "saturation", 2.315e-19, "A", "diodes.lib L19"),
    ("diodes", "dantenna", "emission", 1.009, "1", "diodes.lib L19"),
    ("diodes", "dantenna", "temperature_exponent", 5.039, "1", "diodes.lib L19"),
    ("diodes", "dpantenna", "saturation", 8.569e-20, "A", "diodes.lib L22"),
    ("diodes", "dpantenna", "emission", 1.003, "1", "diodes.lib L22"),
    ("diodes", "dpantenna", "temperature_exponent", 4.56, "1", "diodes.lib L22"),
)  # fmt: skip

GF_M15 = "metal1,metal2,metal3,metal4,metal5"
GF_METALS = f"{GF_M15},topmetal_6k,topmetal_9k,topmetal_11k,topmetal_30k"
GF_V15 = "via1,via2,via3,via4,via5"
GF_COMP = f"contact_diffusion_n,contact_diffusion_p,{GF_V15}"
GF_VIAS = f"contact_poly,{GF_COMP}"
EM1, EM2 = "54_Electro-migration1_150.csv", "54_Electro-migration2_151.csv"
GENERAL, LV, MV6, MV5 = (
    "5_General_Specification1.csv", "1_Low_Voltage_Devices.csv", "2_Medium_Voltage_Devices6v.csv",
    "3_Medium_Voltage_Devices5v.csv",
)  # fmt: skip
# (section, names, at 85, 110, 125 degC, unit, source): rows for current in one direction
GF_LIMITS = (
    ("layers", GF_M15, (2.09, 1.00, 0.67), "mA/um", EM1),
    ("layers", "topmetal_6k", (3.3, 1.6, 1.07), "mA/um", EM1),
    ("layers", "topmetal_9k", (3.77, 1.8, 1.21), "mA/um", EM1),
    ("layers", "topmetal_11k", (4.5, 2.2, 1.5), "mA/um", EM1),
    ("layers", "topmetal_30k", (16.52, 8.01, 5.37), "mA/um", EM1),
    ("vias", "contact_poly", (0.43, 0.21, 0.14), "mA", EM2),
    ("vias", GF_COMP, (0.58, 0.28, 0.18), "mA", EM2),
)
GF_TABLE: tuple[tuple[str, str, str, float | Values, str, str], ...] = (
    ("layers", GF_METALS, "width_bias", 0, "um", "54_Electro-migration1_150.csv: for each micrometre of drawn width"),
    *(
        (section, names, f"limits.{index}.dc", value, unit, source)
        for section, names, values, unit, source in GF_LIMITS
        for index, value in enumerate(values)
    ),
    ("layers", "poly2", "limits.0.dc", 1, "mA/um", "16_Poly2_42.csv L29 (PL.10)"),
    ("layers", GF_M15, "thickness", (0.50, 0.55, 0.60), "um", "3_General_conductor.csv L25-29"),
    ("layers", "topmetal_6k", "thickness", (None, 0.7025, None), "um", "3_General_conductor.csv L20-23"),
    ("layers", "topmetal_9k", "thickness", (None, 1.0025, None), "um", "3_General_conductor.csv L20-23"),
    ("layers", "topmetal_11k", "thickness", (None, 1.25, None), "um", "3_General_conductor.csv L20-23"),
    ("layers", "topmetal_30k", "thickness", (None, 3.0, None), "um", "3_General_conductor.csv L20-23"),
    ("layers", GF_M15, "sheet", (76, 90, 104), "mohm/sq", f"{GENERAL} L12-16"),
    ("layers", "topmetal_6k", "sheet", (50, 60, 70), "mohm/sq", f"{GENERAL} L17-19"),
    ("layers", "topmetal_9k,topmetal_11k", "sheet", (31, 40, 49), "mohm/sq", f"{GENERAL} L17-19"),
    ("layers", "topmetal_30k", "sheet", (6, 9.5, 14), "mohm/sq", f"{GENERAL} L20"),
    ("vias", "contact_poly", "resistance", (None, 5.9, 15), "ohm", "5_General_Specification2.csv L3-10"),
    ("vias", "contact_diffusion_n", "resistance", (None, 6.3, 15), "ohm", "5_General_Specification2.csv L3-10"),
    ("vias", "contact_diffusion_p", "resistance", (None, 5.2, 15), "ohm", "5_General_Specification2.csv L3-10"),
    ("vias", GF_V15, "resistance", (None, 4.5, 15), "ohm", "5_General_Specification2.csv L3-10"),
    ("devices", "nmos_3v3", "threshold", (0.53, 0.63, 0.73), "V", f"{LV} L3, 10/0.28"),
    ("devices", "pmos_3v3", "threshold", (0.61, 0.73, 0.85), "V", f"{LV} L4, 10/0.28, printed -0.85 to -0.61"),
    ("devices", "nmos_6v0", "threshold", (0.61, 0.73, 0.85), "V", f"{MV6} L3, 10/0.7"),
    ("devices", "pmos_6v0", "threshold", (0.72, 0.85, 0.98), "V", f"{MV6} L4, 10/0.55"),
    ("devices", "nmos_5v0", "threshold", (0.58, 0.70, 0.82), "V", f"{MV5} L3, 10/0.6"),
    ("devices", "pmos_5v0", "threshold", (0.70, 0.83, 0.96), "V", f"{MV5} L4, 10/0.5"),
    ("devices", "nmos_3v3", "leakage", (None, 1, 100), "pA/um", f"{LV} L9, Vds 3.63 V, 25 degC"),
    ("devices", "pmos_3v3", "leakage", (None, 1, 20), "pA/um", f"{LV} L10"),
    ("devices", "nmos_6v0,pmos_6v0", "leakage", (None, 1, 10), "pA/um", f"{MV6} L9-10, Vds 6.6 V, 25 degC"),
    ("devices", "nmos_5v0,pmos_5v0", "leakage", (None, 1, 10), "pA/um", f"{MV5} L9-10, Vds 5.5 V"),
    ("devices", "nmos_3v3,pmos_3v3", "swing", (None, None, 150), "mV", f"{LV} L12-13"),
    ("devices", "nmos_6v0,pmos_6v0", "swing", (None, None, 150), "mV", f"{MV6} L12-13"),
    ("devices", "nmos_3v3", "mismatch.coefficient", 7.148, "mV*um", "model L46989-47002"),
    ("devices", "pmos_3v3", "mismatch.coefficient", 6.66, "mV*um", "model L47014-27"),
    ("devices", "nmos_6v0", "mismatch.coefficient", 11.55, "mV*um", "model L47039-52"),
    ("devices", "pmos_6v0", "mismatch.coefficient", 10.51, "mV*um", "model L47064-77"),
    # KT1 / 298.15 K by BSIM's Vth(T) = Vth(Tnom) + KT1 (T/Tnom - 1): derived, rounded to 0.01 mV/K in the file.
    ("devices", "nmos_3v3", "threshold_slope", round(459.35 / 298.15, 2), "mV/K", "model L953-962, KT1 -0.45935 V"),
    ("devices", "nmos_6v0", "threshold_slope", round(412.0 / 298.15, 2), "mV/K", "model L37581-82, KT1 -0.412 V"),
    ("devices", "pmos_6v0", "threshold_slope", round(382.8 / 298.15, 2), "mV/K", "model L38024-26, KT1 -0.3828 V"),
    ("devices", "nmos_3v3,pmos_3v3,nmos_6v0,pmos_6v0,nmos_5v0,pmos_5v0", "reference_temperature", 298.15, "K",
     "Ioff at 25 degC"),
    ("resistors", "nplus_u", "sheet", (45, 60, 75), "ohm/sq", f"{GENERAL} L3-11"),
    ("resistors", "pplus_u", "sheet", (145, 185, 225), "ohm/sq", f"{GENERAL} L3-11"),
    ("resistors", "npolyf_u", "sheet", (250, 310, 370), "ohm/sq", f"{GENERAL} L3-11"),
    ("resistors", "ppolyf_u", "sheet", (280, 350, 420), "ohm/sq", f"{GENERAL} L3-11"),
    ("resistors", "nplus_s", "sheet", (1, 6.3, 15), "ohm/sq", f"{GENERAL} L3-11"),
    ("resistors", "pplus_s", "sheet", (1, 7, 15), "ohm/sq", f"{GENERAL} L3-11"),
    ("resistors", "npolyf_s", "sheet", (1, 6.8, 15), "ohm/sq", f"{GENERAL} L3-11"),
    ("resistors", "ppolyf_s", "sheet", (1, 7.3, 15), "ohm/sq", f"{GENERAL} L3-11"),
    ("resistors", "ppolyf_u_1k", "sheet", (800, 1000, 1200), "ohm/sq", "6_Passive_Elements1/2/3.csv L2"),
    ("resistors", "ppolyf_u_2k", "sheet", (1600, 2000, 2400), "ohm/sq", "6_Passive_Elements1/2/3.csv L2"),
    ("resistors", "ppolyf_u_3k", "sheet", (2250, 3000, 3750), "ohm/sq", "6_Passive_Elements1/2/3.csv L2"),
    ("resistors", "nwell", "sheet", (800, 1000, 1200), "ohm/sq", f"{GENERAL} L3-11"),
    ("resistors", "nplus_u", "tc1", 1.36e-3, "1/K", "model L38293-94"),
    ("resistors", "pplus_u", "tc1", 1.375e-3, "1/K", "model L38350-51"),
    ("resistors", "npolyf_u", "tc1", -1.4e-3, "1/K", "model L38554-55"),
    ("resistors", "ppolyf_u", "tc1", -0.9e-4, "1/K", "model L38606-07"),
    ("resistors", "nplus_s", "tc1", 3.3e-3, "1/K", "model L38407-08"),
    ("resistors", "pplus_s", "tc1", 3.375e-3, "1/K", "model L38456-57"),
    ("resistors", "npolyf_s", "tc1", 3.26e-3, "1/K", "model L38659-60"),
    ("resistors", "ppolyf_s", "tc1", 3.245e-3, "1/K", "model L38704-05"),
    ("resistors", "ppolyf_u_1k", "tc1", (-1200, -1000, -800), "ppm/K", "6_Passive_Elements1/2/3.csv, TCR1"),
    ("resistors", "ppolyf_u_2k", "tc1", (-1900, -1650, -1300), "ppm/K", "6_Passive_Elements1/2/3.csv, TCR1"),
    ("resistors", "ppolyf_u_3k", "tc1", -1.6698e-3, "1/K", "model L38938-39"),
    ("resistors", "nplus_u", "tc2", 6.5e-7, "1/K^2", "model L38293-94"),
    ("resistors", "pplus_u", "tc2", 1e-6, "1/K^2", "model L38350-51"),
    ("resistors", "npolyf_u", "tc2", 2.2e-6, "1/K^2", "model L38554-55"),
    ("resistors", "ppolyf_u", "tc2", 7e-7, "1/K^2", "model L38606-07"),
    ("resistors", "nplus_s", "tc2", 3e-7, "1/K^2", "model L38407-08"),
    ("resistors", "pplus_s", "tc2", 4.5e-7, "1/K^2", "model L38456-57"),
    ("resistors", "npolyf_s", "tc2", 2.5e-7, "1/K^2", "model L38659-60"),
    ("resistors", "ppolyf_s", "tc2", 3.6e-7, "1/K^2", "model L38704-05"),
    ("resistors", "ppolyf_u_1k", "tc2", 2.51e-6, "1/K^2", "model L38751-52"),
    ("resistors", "ppolyf_u_2k,ppolyf_u_3k", "tc2", 3.743e-6, "1/K^2", "model L38798-99, L38938-39"),
    ("resistors", "nplus_u,pplus_u,npolyf_u,ppolyf_u,nplus_s,pplus_s,npolyf_s,ppolyf_s,ppolyf_u_1k,ppolyf_u_2k,"
     "ppolyf_u_3k", "reference_temperature", 298.15, "K", "model, Tnom 25 degC"),
    ("capacitors", "mim_1f5", "density", (1.27, 1.5, 1.73), "fF/um^2", "6_Passive_Elements4.csv L2-16"),
    ("capacitors", "mim_1f0", "density", (0.9, 1.0, 1.1), "fF/um^2", "6_Passive_Elements5.csv"),
    ("capacitors", "mim_2f0", "density", (1.8, 2.0, 2.2), "fF/um^2", "6_Passive_Elements6.csv"),
    ("capacitors", "gate_3v3", "density", (3.4, 4.4, 5.4), "fF/um^2", "5_General_Specification3.csv L3-6"),
    ("capacitors", "gate_6v0", "density", (1.8, 2.3, 2.8), "fF/um^2", "5_General_Specification3.csv L3-6"),
    ("diodes", "pnp", "saturation", (0.65 * 9e-19, 9e-19, 1.35 * 9e-19), "A", "model L47295-47308, L309-, L339-"),
    ("diodes", "pnp", "emission", 1, "1", "model L47295-47308"),
    ("diodes", "nplus_psub_3v3", "saturation", (0.85 * 2.2959e-19, 2.2959e-19, 1.15 * 2.2959e-19), "A",
     "model L38083-38109 (2.2959e-7 A/m^2), L377-389"),
    ("diodes", "nplus_psub_3v3,nwell_psub", "emission", 1.01, "1", "model L38083-38109, L38162-38191"),
    ("diodes", "pnp,nplus_psub_3v3", "band_gap", 1.17, "eV", "model L47295-47308, L38083-38109"),
    ("diodes", "pnp,nplus_psub_3v3", "temperature_exponent", 3, "1", "model L47295-47308, L38083-38109"),
    ("diodes", "pnp,nplus_psub_3v3", "reference_temperature", 298.15, "K", "model, Tref 25 degC"),
    ("diodes", "pplus_nwell_3v3", "saturation", 1.653e-19, "A", "model L38112-38139 (1.653e-7 A/m^2)"),
    ("diodes", "pplus_nwell_3v3", "emission", 1.0, "1", "model L38112-38139"),
    ("diodes", "nwell_psub", "saturation", 1.565e-18, "A", "model L38162-38191 (1.565e-6 A/m^2)"),
)  # fmt: skip


def numbers(part: Any, path: str = "") -> Iterator[tuple[str, Values]]:
    """Every number below a part, with its path."""
    if isinstance(part, Span):
        yield path, (part.least, part.typical, part.most)
    elif isinstance(part, bool | str) or part is None:
        return
    elif isinstance(part, int | float):
        yield path, (float(part),) * 3
    elif isinstance(part, msgspec.Struct):
        for field in part.__struct_fields__:
            yield from numbers(getattr(part, field), f"{path}.{field}" if path else field)
    else:
        for key, value in part.items() if isinstance(part, dict) else enumerate(part):
            yield from numbers(value, f"{path}.{key}")


def test_every_number_is_that_of_the_second_transcription(kit: str, process_of: Callable[..., Process]) -> None:
    found = dict(numbers(process_of(kit)))
    wear = {path: found.pop(path) for path in ("activation_energy", "current_exponent") if path in found}
    # drm_14_2.rst L35-51: Ea = 0.7 eV, n = 2; the IHP specification publishes neither.
    assert wear == ({} if kit == IHP else {"activation_energy": (0.7,) * 3, "current_exponent": (2.0,) * 3})
    due = {path: row for row in rows(kit) for path in row.paths}
    assert sum(len(row.paths) for row in rows(kit)) == len(due)  # nothing in the table twice
    assert sorted(found) == sorted(due)
    for path, row in due.items():
        # Leakages printed as powers of ten are shipped with five digits.
        tolerance = 2e-5 if row.unit == "A/um" else 1e-12
        for value, expected in zip(found[path], row.kept, strict=True):
            assert (value is None) == (expected is None), path
            if value is not None:
                assert value == pytest.approx(expected, rel=tolerance), f"{path} ({row.source})"
