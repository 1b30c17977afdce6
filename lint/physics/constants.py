"""Physical constants: value, unit, source and edition of each."""

from typing import Final

BOLTZMANN_J_PER_K: Final = 1.380649e-23
"""Boltzmann constant, J/K; exact by definition since 2019 (SI Brochure, 9th edition, section 2.2)."""

ELEMENTARY_CHARGE_C: Final = 1.602176634e-19
"""Elementary charge, C; exact by definition since 2019 (SI Brochure, 9th edition, section 2.2)."""

BOLTZMANN_EV_PER_K: Final = BOLTZMANN_J_PER_K / ELEMENTARY_CHARGE_C
"""Boltzmann constant, eV/K; the ratio of the two exact constants above."""
