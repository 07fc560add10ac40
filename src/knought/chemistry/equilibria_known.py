"""A few equilibria that kinetic media need, to be used by name and replaced where one knows better.

All constants are K° at 25 °C and I = 0, written as formation (association), from memory: of the
critical review of buffers (Goldberg, Kishore and Lennen, J. Phys. Chem. Ref. Data 31 (2002) 231,
molal) for acids, of the critical compilation of Martell and Smith for ion pairs, and of Bandura
and Lvov (J. Phys. Chem. Ref. Data 35 (2006) 15) for water. Each can be given anew in a study.
"""

from __future__ import annotations

from functools import cache

from knought.chemistry.equilibria import Equilibrium
from knought.errors import InputError

__all__ = ["NAMES", "known_equilibria"]

_GOLDBERG = "Goldberg, Kishore and Lennen 2002 (from memory)"
_MARTELL = "Martell and Smith, Critical Stability Constants (from memory)"

#: name -> (reaction, lg K, ΔH in J/mol, ΔC_p in J/(K mol), u(lg K), basis, source)
_TABLE: dict[str, tuple[tuple[str, float, float, float, float, str, str], ...]] = {
    "water": (
        ("H+ + OH- = H2O", 13.995, -55.8e3, 0.0, 0.005, "molal", "Bandura and Lvov 2006 (memory)"),
    ),
    "phosphate": (
        ("H+ + PO4^3- = HPO4^2-", 12.35, -16.0e3, 242.0, 0.03, "molal", _GOLDBERG),
        ("H+ + HPO4^2- = H2PO4^-", 7.198, -3.6e3, 230.0, 0.01, "molal", _GOLDBERG),
        ("H+ + H2PO4^- = H3PO4", 2.148, 8.0e3, 141.0, 0.01, "molal", _GOLDBERG),
    ),
    "acetate": (("H+ + CH3COO^- = CH3COOH", 4.756, 0.41e3, 142.0, 0.003, "molal", _GOLDBERG),),
    "hydrogen sulfate": (("H+ + SO4^2- = HSO4^-", 1.987, 22.4e3, 258.0, 0.01, "molal", _GOLDBERG),),
    "sodium sulfate": (("Na+ + SO4^2- = NaSO4^-", 0.70, 4.7e3, 0.0, 0.05, "molar", _MARTELL),),
    "potassium sulfate": (("K+ + SO4^2- = KSO4^-", 0.85, 9.4e3, 0.0, 0.05, "molar", _MARTELL),),
    "magnesium sulfate": (("Mg^2+ + SO4^2- = MgSO4", 2.23, 19.0e3, 0.0, 0.05, "molar", _MARTELL),),
    "calcium sulfate": (("Ca^2+ + SO4^2- = CaSO4", 2.31, 6.9e3, 0.0, 0.05, "molar", _MARTELL),),
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
