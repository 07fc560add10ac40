"""What of a result the discussion reads: the headline fit, and the fit that left the charges open.

An :class:`~knought.fitting.assess.Assessment` holds both, with every named law beside them; a
single fit holds itself only. Everything in this package takes either.
"""

from __future__ import annotations

from typing import TYPE_CHECKING, TypeAlias

from knought.fitting.assess import Assessment
from knought.fitting.found import Found

if TYPE_CHECKING:
    from knought.errors import Caveat

__all__ = ["Standing", "caveats_text", "charges_open", "headline_of", "law_words", "tried"]

#: What the discussion starts from.
Standing: TypeAlias = Assessment | Found


def headline_of(found: Standing) -> Found:
    """Return the fit that gives the headline."""
    return found.headline if isinstance(found, Assessment) else found


def charges_open(found: Standing) -> Found | None:
    """Return the fit in which the runs alone say what the charges are; None where none does."""
    candidates = (found.data_alone, found.headline) if isinstance(found, Assessment) else (found,)
    return next(
        (
            each
            for each in candidates
            if each is not None and "charge_product" in each.distribution.names
        ),
        None,
    )


def tried(found: Standing) -> tuple[Found, ...]:
    """Return every fit there is: the headline first, then named laws and temperature laws.

    Each pair of laws once.
    """
    if not isinstance(found, Assessment):
        return (found,)
    fits = [found.headline]
    if found.data_alone is not None:
        fits.append(found.data_alone)
    for each in (*found.laws, *found.temperature_laws):
        pair = (each.temperature_law, each.salt_law)
        if all(pair != (kept.temperature_law, kept.salt_law) for kept in fits):
            fits.append(each)
    return tuple(fits)


def law_words(found: Found) -> str:
    """Return the laws that a number of `found` rests on, ``"Eyring, open law"``."""
    text = f"{found.surface.temperature_law.words}, {found.surface.salt_law.words}"
    if found.charge_product_given is not None:
        text += f", z_A z_B = {signed(found.charge_product_given)} given"
    return text


def signed(number: float) -> str:
    """Return a number with a typographic minus."""
    return f"{number:g}".replace("-", "−")


def caveats_text(caveats: tuple[Caveat, ...]) -> str:
    """Return the messages of caveats, joined."""
    return " ".join(caveat.message for caveat in caveats)
