"""Physical constants and the reference state.

References
----------
E. Tiesinga et al., CODATA recommended values of the fundamental physical constants: 2018,
Rev. Mod. Phys. 93 (2021) 025010. Standard pressure: IUPAC (1982), 1 bar.
"""

from __future__ import annotations

from math import log
from typing import Final

R: Final = 8.314462618
"""Molar gas constant, J/(mol K)."""

F: Final = 96485.33212
"""Faraday constant, C/mol."""

AVOGADRO: Final = 6.02214076e23
"""1/mol."""

BOLTZMANN: Final = 1.380649e-23
"""J/K."""

ELEMENTARY_CHARGE: Final = 1.602176634e-19
"""C."""

VACUUM_PERMITTIVITY: Final = 8.8541878128e-12
"""F/m."""

T0: Final = 298.15
"""Reference temperature of the tables, K."""

P0: Final = 1.0
"""Standard pressure, bar."""

CELSIUS_ZERO: Final = 273.15
"""0 °C, K."""

WATER_MOLAR_MASS: Final = 18.015268
"""g/mol (IAPWS R11-07)."""

LN10: Final = log(10.0)
