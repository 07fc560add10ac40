"""Ours against the literature: every value at its own conditions, and several papers together."""

from __future__ import annotations

from dataclasses import dataclass
from types import MappingProxyType
from typing import TYPE_CHECKING

from knought.discussion.carried import CarriedConsensus, carried_consensus
from knought.discussion.literature import COMPARED, LiteratureValue, literature_values
from knought.discussion.matched import Match, match
from knought.discussion.standing import headline_of

if TYPE_CHECKING:
    from collections.abc import Iterable, Mapping

    from knought.discussion.consensus import ConsensusMethod
    from knought.discussion.standing import Standing
    from knought.fitting.found import Found

__all__ = ["EXTRAPOLATED_K", "Comparison", "compare"]

#: What must stand with every rate constant that is carried beyond the runs.
EXTRAPOLATED_K = (
    "A rate constant carried beyond the measured conditions is no basis for thermal-safety, dosing "
    "or shelf-life decisions without a measurement there; follow local codes and licensed practice."
)


@dataclass(frozen=True, eq=False)
class Comparison:
    """Our result and the literature.

    Attributes
    ----------
    fit
        The fit that was carried.
    matches
        Every literature value with ours at its conditions, in the order given.
    consensuses
        Quantity name to several papers together on our conditions.
    """

    fit: Found
    matches: tuple[Match, ...]
    consensuses: Mapping[str, CarriedConsensus]

    def of(self, name: str) -> tuple[Match, ...]:
        """Return the matches of one quantity."""
        return tuple(each for each in self.matches if each.literature.name == name)

    @property
    def extrapolates(self) -> bool:
        """Whether ours was carried beyond the runs for any paper."""
        return any(each.caveats for each in self.matches)


def compare(
    found: Standing,
    literature: Iterable[LiteratureValue],
    *,
    method: ConsensusMethod = "dersimonian-laird",
    T: float | None = None,
    I: float | None = None,
) -> Comparison:
    """Hold our result against literature values, each at its own temperature and ionic strength.

    Parameters
    ----------
    found
        An assessment, or one fit.
    literature
        Literature values, as :func:`~knought.discussion.literature_table.read_literature` gives
        them.
    method
        How several papers are combined: ``"dersimonian-laird"``, ``"paule-mandel"`` or
        ``"fixed"``.
    T, I
        Conditions of the consensus, in K and mol/L; ours if not given.

    Returns
    -------
    Comparison

    Raises
    ------
    InputError
        If there is no literature value, or the conditions of the consensus lie where our surface
        cannot be evaluated.
    """
    fit = headline_of(found)
    matches = tuple(match(found, value) for value in literature_values(literature))
    together = {}
    for name in COMPARED:
        own = [each for each in matches if each.literature.name == name]
        combined = carried_consensus(fit, own, method, T, I)
        if combined is not None:
            together[name] = combined
    return Comparison(fit, matches, MappingProxyType(together))
