"""What to mind when a plan heats a volatile or unstable mixture, or an oxidiser.

The usual cautions of a laboratory (common practice, no source); no substitute for the safety data
sheets and for the rules of the house.
"""

from __future__ import annotations

from typing import TYPE_CHECKING

from knought.chemistry.species import parse_reactants
from knought.errors import Caveat, InputError

if TYPE_CHECKING:
    from collections.abc import Sequence

    from knought.arrays import FloatArray

__all__ = ["HAZARDS", "cautions"]

#: What a mixture may be said to be.
HAZARDS = ("volatile", "unstable", "oxidiser")

#: Above this temperature (K) a plan heats.
_HEATS = 303.15

#: Formulas of oxidisers whose names need not be told, without their charges.
_OXIDISERS = frozenset(
    {
        "S2O8", "HSO5", "MnO4", "ClO4", "ClO3", "ClO2", "ClO", "BrO3", "BrO", "IO3", "IO4",
        "CrO4", "Cr2O7", "HCrO4", "H2O2", "NO3", "Ce",
    }
)  # fmt: skip


def cautions(
    T: FloatArray, hazards: Sequence[str], names: Sequence[str] = ()
) -> tuple[Caveat, ...]:
    """Return the cautions that a plan carries.

    Parameters
    ----------
    T
        Temperatures of the runs in K.
    hazards
        What the mixture is said to be: any of :data:`HAZARDS`.
    names
        Reactants and salts as they are written, in which oxidisers are looked for.

    Raises
    ------
    InputError
        If a hazard is not one of those.
    """
    for each in hazards:
        if each not in HAZARDS:
            raise InputError(
                f"no caution is kept for {each!r}", f"choose from {', '.join(HAZARDS)}"
            )
    hottest = float(T.max())
    if hottest <= _HEATS:
        return ()
    oxidisers = _oxidisers_in(names)
    at = f"{hottest - 273.15:.0f} °C"
    found = []
    if "volatile" in hazards:
        found.append(
            Caveat(
                "heats-volatile",
                f"The plan heats a volatile mixture to {at}: close the cell with a vented or "
                "pressure-proof cap, never a sealed rigid vessel; work in a fume cupboard and keep "
                "ignition sources away. Loss by evaporation changes every concentration: weigh "
                "before and after, and fill the headspace.",
            )
        )
    if "unstable" in hazards:
        found.append(
            Caveat(
                "heats-unstable",
                f"The plan heats an unstable mixture to {at}: try the hottest run first on the "
                "smallest scale, behind a shield, with the waste and a cooling bath ready; make "
                "the stocks fresh, keep them cold, and run a blank without the partner at the "
                "hottest temperature, as decomposition would be counted as reaction.",
            )
        )
    if "oxidiser" in hazards or oxidisers:
        which = f" ({', '.join(oxidisers)})" if oxidisers else ""
        found.append(
            Caveat(
                "heats-oxidiser",
                f"The plan heats an oxidiser{which} to {at}: keep it dilute and away from organic "
                "solvents, grease and reducing waste, never let it dry out, vent the vessel (gas "
                "may form), and check that its own decomposition is slow at that temperature.",
            )
        )
    return tuple(found)


def _oxidisers_in(names: Sequence[str]) -> tuple[str, ...]:
    found: list[str] = []
    for name in names:
        found.extend(oxidiser for oxidiser in sorted(_OXIDISERS) if _holds(name, oxidiser))
    return tuple(dict.fromkeys(found))


def _holds(name: str, oxidiser: str) -> bool:
    """Whether a salt's or reactants' text holds an oxidiser: a species, or the end of a salt."""
    try:
        formulas = [species.formula for _, species in parse_reactants(name)]
    except InputError:
        # A salt such as NaClO4 is no ion with a charge: read by its ending instead.
        formulas = [name.strip().rstrip("0123456789+-^")]
        formulas += [name.strip()]
    return any(
        formula == oxidiser
        or (formula.endswith(oxidiser) and formula[: -len(oxidiser)] in _CATIONS)
        for formula in formulas
    )


_CATIONS = frozenset({"", "Li", "Na", "K", "Cs", "Rb", "NH4", "H", "Na2", "K2", "Li2"})
