"""A few equilibria that kinetic media need, to be used by name and replaced where one knows better.

All constants are K° at 25 °C and I = 0, written as formation (association). Sources:

- ion pairs: phreeqc.dat of the U.S. Geological Survey, read as public code quotes it (kcal/mol);
- acids: Goldberg, Kishore and Lennen, J. Phys. Chem. Ref. Data 31 (2002) 231, molal. ΔH and ΔC_p of
  H3PO4 and HPO4^2- were read as public code quotes that review; its other figures are from memory.
  lg K of phosphate lies within 0.02 of IUPAC's 2.14, 7.20 and 12.37 (Powell et al., Pure Appl.
  Chem. 77 (2005) 739);
- water: lg K as in public geochemical databases; ΔH from memory.

Each can be given anew in a study, and each says in its source what was not looked up.
"""

from __future__ import annotations

from functools import cache

from knought.chemistry.equilibria import Equilibrium
from knought.errors import InputError

__all__ = ["NAMES", "known_equilibria"]

_GOLDBERG = "Goldberg, Kishore and Lennen 2002"
_MEMORY = f"{_GOLDBERG} (from memory)"
_HALF = f"{_GOLDBERG} (lg K from memory)"
_USGS = "phreeqc.dat, U.S. Geological Survey"

#: name -> (reaction, lg K, ΔH in J/mol, ΔC_p in J/(K mol), u(lg K), basis, source)
_TABLE: dict[str, tuple[tuple[str, float, float, float, float, str, str], ...]] = {
    "water": (
        (
            "H+ + OH- = H2O",
            13.995,
            -55.8e3,
            0.0,
            0.005,
            "molal",
            "public geochemical databases (ΔH from memory)",
        ),
    ),
    "phosphate": (
        ("H+ + PO4^3- = HPO4^2-", 12.35, -16.0e3, 242.0, 0.03, "molal", _HALF),
        ("H+ + HPO4^2- = H2PO4^-", 7.198, -3.6e3, 230.0, 0.01, "molal", _MEMORY),
        ("H+ + H2PO4^- = H3PO4", 2.148, 8.0e3, 141.0, 0.01, "molal", _HALF),
    ),
    "acetate": (("H+ + CH3COO^- = CH3COOH", 4.756, 0.41e3, 142.0, 0.003, "molal", _MEMORY),),
    "hydrogen sulfate": (("H+ + SO4^2- = HSO4^-", 1.987, 22.4e3, 258.0, 0.01, "molal", _MEMORY),),
    "sodium sulfate": (("Na+ + SO4^2- = NaSO4^-", 0.70, 4.69e3, 0.0, 0.05, "molal", _USGS),),
    "potassium sulfate": (("K+ + SO4^2- = KSO4^-", 0.85, 9.41e3, 0.0, 0.05, "molal", _USGS),),
    "magnesium sulfate": (("Mg^2+ + SO4^2- = MgSO4", 2.37, 19.04e3, 0.0, 0.05, "molal", _USGS),),
    "calcium sulfate": (("Ca^2+ + SO4^2- = CaSO4", 2.25, 5.54e3, 0.0, 0.08, "molal", _USGS),),
}

#: What can be asked for by name.
NAMES = tuple(_TABLE)


def known_equilibria(name: str) -> tuple[Equilibrium, ...]:
    """Return equilibria by name.

    Parameters
    ----------
    name
        One of :data:`NAMES`.

    Raises
    ------
    InputError
        If there is none of that name.
    """
    if name not in _TABLE:
        raise InputError(
            f"no equilibrium is called {name!r}",
            f"the names are {', '.join(NAMES)}; others are given with reaction and lg_K",
        )
    return _made(name)


@cache
def _made(name: str) -> tuple[Equilibrium, ...]:
    return tuple(
        Equilibrium(
            reaction,
            lg_K,
            enthalpy=enthalpy,
            heat_capacity=heat_capacity,
            u_lg_K=u,
            basis="molal" if basis == "molal" else "molar",
            source=source,
        )
        for reaction, lg_K, enthalpy, heat_capacity, u, basis, source in _TABLE[name]
    )
