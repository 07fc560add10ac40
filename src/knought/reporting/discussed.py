"""What a report shows of the discussion: literature compared, candidates weighed."""

from __future__ import annotations

import math
from dataclasses import dataclass
from typing import TYPE_CHECKING, Any

from knought.discussion.literature_sentences import comparison_sentences
from knought.discussion.mechanism_sentences import background_sentences, weighing_sentences
from knought.reporting.literature_tables import (
    consensus_table,
    explanations_table,
    literature_table,
)
from knought.reporting.mechanism_tables import (
    background_tables,
    candidates_table,
    distances_table,
)
from knought.reporting.plan_tables import expectation_table, planned_runs_table, power_table

if TYPE_CHECKING:
    from knought.discussion.background import Background
    from knought.discussion.compare import Comparison
    from knought.discussion.mechanism import Weighing
    from knought.discussion.next_runs import Plan
    from knought.reporting.cells import Table

__all__ = ["Discussed"]


@dataclass(frozen=True)
class Discussed:
    """Pieces of the discussion that a study asked for.

    Attributes
    ----------
    comparison
        With the literature.
    weighing
        Of the candidates.
    background
        Of the leading candidate: diffusion limit, electrostatic part, shifts with I.
    plan
        The next runs.
    """

    comparison: Comparison | None = None
    weighing: Weighing | None = None
    background: Background | None = None
    plan: Plan | None = None

    @property
    def sentences(self) -> tuple[str, ...]:
        """Sentences for the discussion, each with its number."""
        found: list[str] = []
        if self.comparison is not None:
            found += comparison_sentences(self.comparison)
        if self.weighing is not None:
            found += weighing_sentences(self.weighing)
        if self.background is not None:
            found += background_sentences(self.background)
        if self.plan is not None:
            found += self.plan.assumptions
            found += [caution.message for caution in self.plan.cautions]
        return tuple(found)

    @property
    def tables(self) -> tuple[Table, ...]:
        """Tables of the discussion."""
        found: list[Table | None] = []
        if self.comparison is not None:
            found += [
                literature_table(self.comparison),
                explanations_table(self.comparison),
                consensus_table(self.comparison),
            ]
        if self.weighing is not None:
            found += [candidates_table(self.weighing), distances_table(self.weighing)]
        if self.background is not None:
            found += background_tables(self.background)
        if self.plan is not None:
            found += [
                planned_runs_table(self.plan),
                expectation_table(self.plan),
                power_table(self.plan),
            ]
        return tuple(table for table in found if table is not None)

    def record(self) -> dict[str, Any]:
        """Return what the record keeps."""
        kept: dict[str, Any] = {}
        if self.comparison is not None:
            kept["literature"] = [
                {
                    "label": each.literature.label,
                    "quantity": each.literature.name,
                    "temperature": each.T,
                    "ionic_strength": each.I,
                    "difference": _finite(each.difference),
                    "combined_standard_uncertainty": _finite(each.combined_uncertainty),
                    "z": _finite(each.z),
                    "e_number": _finite(each.e_number),
                    "verdict": str(each.verdict),
                }
                for each in self.comparison.matches
            ]
        if self.weighing is not None:
            kept["candidates"] = [
                {
                    "name": each.candidate.name,
                    "charge_change": each.candidate.charge_change,
                    "prior": each.prior,
                    "weight": _finite(each.weight),
                    "excluded": each.excluded or None,
                }
                for each in self.weighing.candidates
            ]
        return kept


def _finite(value: float) -> float | None:
    return value if math.isfinite(value) else None
