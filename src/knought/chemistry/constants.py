"""Physical constants, each with its source; derived ones are computed.

The SI-exact ones are fixed by the definition of the SI (BIPM, SI Brochure, 9th edition, 2019);
the vacuum permittivity is CODATA 2022's.
"""

from __future__ import annotations

import math

__all__ = [
    "AVOGADRO",
    "BOLTZMANN",
    "CELSIUS_ZERO",
    "COLDEST",
    "ELEMENTARY_CHARGE",
    "GAS_CONSTANT",
    "HOTTEST",
    "LN10",
    "PLANCK",
    "STRONGEST",
    "VACUUM_PERMITTIVITY",
]

#: Avogadro constant N_A in mol^-1 (exact).
AVOGADRO = 6.02214076e23

#: Boltzmann constant k_B in J K^-1 (exact).
BOLTZMANN = 1.380649e-23

#: Planck constant h in J s (exact).
PLANCK = 6.62607015e-34

#: Elementary charge e in C (exact).
ELEMENTARY_CHARGE = 1.602176634e-19

#: Molar gas constant R = N_A k_B in J mol^-1 K^-1 (exact).
GAS_CONSTANT = AVOGADRO * BOLTZMANN

#: Vacuum electric permittivity ε₀ in F m^-1 (CODATA 2022, relative uncertainty 1.6e-10).
VACUUM_PERMITTIVITY = 8.8541878188e-12

#: 0 °C in K (exact): T/K = t/°C + 273.15.
CELSIUS_ZERO = 273.15

#: Temperatures in K that a run or a prediction may have, whatever the medium: a unit or a sign is
#: wrong outside, and arithmetic would leave the range of doubles.
COLDEST, HOTTEST = 1.0, 1.0e5

#: Largest ionic strength or concentration in mol/L that is looked at; pure water has 55.
STRONGEST = 1000.0

#: ln 10.
LN10 = math.log(10.0)
