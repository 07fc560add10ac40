"""What a report shows of the discussion: literature compared, candidates weighed."""

from __future__ import annotations

import math
from dataclasses import dataclass
from functools import cached_property
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
from knought.reporting.pictures import forest_pictures, plan_pictures
from knought.reporting.plan_tables import expectation_table, planned_runs_table, power_table
from knought.reporting.sections import Section

if TYPE_CHECKING:
    from knought.discussion.background import Background
    from knought.discussion.compare import Comparison
    from knought.discussion.mechanism import Weighing
    from knought.discussion.next_runs import Plan
    from knought.reporting.cells import Table
    from knought.reporting.pictures import Picture

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

    @cached_property
    def sections(self) -> tuple[Section, ...]:
        """The pieces that were asked for, in the order of the report."""
        made = []
        if self.comparison is not None:
            made.append(_literature_section(self.comparison))
        if self.weighing is not None:
            made.append(_candidates_section(self.weighing, self.background))
        if self.plan is not None:
            made.append(_plan_section(self.plan))
        return tuple(made)

    @property
    def sentences(self) -> tuple[str, ...]:
        """Sentences for the discussion, each with its number."""
        return tuple(each for section in self.sections for each in section.sentences)

    @property
    def pictures(self) -> tuple[Picture, ...]:
        """Figures of the discussion."""
        return tuple(each for section in self.sections for each in section.pictures)

    @property
    def tables(self) -> tuple[Table, ...]:
        """Tables of the discussion."""
        return tuple(each for section in self.sections for each in section.tables)

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


def _literature_section(comparison: Comparison) -> Section:
    made = (
        literature_table(comparison),
        explanations_table(comparison),
        consensus_table(comparison),
    )
    return Section(
        "literature",
        "Literature at matched conditions",
        tuple(comparison_sentences(comparison)),
        forest_pictures(comparison),
        tuple(table for table in made if table is not None),
    )


def _candidates_section(weighing: Weighing, beside: Background | None) -> Section:
    sentences = [*weighing_sentences(weighing)]
    made = [candidates_table(weighing), distances_table(weighing)]
    if beside is not None:
        sentences += background_sentences(beside)
        made += background_tables(beside)
    return Section(
        "mechanism",
        "Candidate mechanisms",
        tuple(sentences),
        (),
        tuple(table for table in made if table is not None),
    )


def _plan_section(plan: Plan) -> Section:
    made = (planned_runs_table(plan), expectation_table(plan), power_table(plan))
    return Section(
        "next-runs",
        "The next runs",
        (*plan.assumptions, *(caution.message for caution in plan.cautions)),
        plan_pictures(plan),
        tuple(table for table in made if table is not None),
    )


def _finite(value: float) -> float | None:
    return value if math.isfinite(value) else None
