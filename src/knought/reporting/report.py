"""One report: tables, figures and sentences of an assessment; page and files come from it."""

from __future__ import annotations

from dataclasses import dataclass, field
from functools import cached_property
from typing import TYPE_CHECKING, Any

from knought.chemistry.quantities import quantity
from knought.errors import InputError, quoted
from knought.measurement.reading import account_lines
from knought.reporting import covariance_tables, predicted_tables, tables, uncertainty_tables
from knought.reporting.figure_files import (
    FIGURE_FORMATS,
    WIDTHS,
    check_formats,
    figure_bytes,
    laid_out,
)
from knought.reporting.pictures import pictures_of, trace_pictures
from knought.reporting.plain_tables import plain_table
from knought.reporting.record import record_text
from knought.reporting.sections import ANSWER_TABLES, sections_of
from knought.reporting.sentences import (
    charge_sentences,
    check_sentences,
    laws_sentence,
    runs_sentence,
)
from knought.reporting.style import DOUBLE_COLUMN
from knought.reporting.summary import summary
from knought.reporting.svg import inline_svg
from knought.reporting.upstream_tables import reduction_record, reduction_table

if TYPE_CHECKING:
    from collections.abc import Iterator, Mapping, Sequence

    import pandas as pd
    from matplotlib.figure import Figure

    from knought.fitting.assess import Assessment
    from knought.measurement.reduction import Reduction
    from knought.reporting.cells import Table
    from knought.reporting.checked import Checked
    from knought.reporting.discussed import Discussed
    from knought.reporting.pictures import Picture
    from knought.reporting.plain_tables import PlainTable
    from knought.reporting.sections import Section
    from knought.rounding import Layout

__all__ = ["Report"]


@dataclass(frozen=True)
class Report:
    """Everything that is shown and kept of one assessment.

    Parameters
    ----------
    assessment
        What was found.
    title
        Title of the study.
    inputs
        Name and SHA-256 of every file read.
    seed
        Seed of everything random, if anything was.
    discussed
        Pieces of the discussion, where the study asked for any.
    checked
        Monte Carlo and bootstrap of the headline, where the study asked for any.
    reduction
        How the rate constants came from traces or slopes, where they did.
    conditions
        T in K and I in mol/L at which k is told; if not given, those of
        :func:`knought.reporting.predicted_tables.customary_conditions`.
    contents
        Name and content of every file read, the study file first; kept with the report, so that
        it can be run again.
    """

    assessment: Assessment
    title: str
    inputs: tuple[tuple[str, str], ...] = ()
    seed: int | None = None
    discussed: Discussed | None = None
    checked: Checked | None = None
    reduction: Reduction | None = None
    conditions: tuple[tuple[float, float], ...] = ()
    contents: tuple[tuple[str, bytes], ...] = field(default=(), repr=False)

    @cached_property
    def introduction(self) -> tuple[str, ...]:
        """Sentences that say what was read and which laws the answer rests on."""
        return runs_sentence(self.assessment), laws_sentence(self.assessment)

    @cached_property
    def charges(self) -> tuple[str, ...]:
        """Sentences that say what the runs tell of the charges and of the priors."""
        return (
            *charge_sentences(self.assessment.data_alone or self.assessment.headline),
            *check_sentences(self.assessment),
        )

    @cached_property
    def account(self) -> tuple[str, ...]:
        """What was understood of the file, a line each."""
        return tuple(account_lines(self.assessment.rates))

    @cached_property
    def tables(self) -> tuple[Table, ...]:
        """Every table that the assessment supports, in the order of the report."""
        made = (
            tables.headline_table(self.assessment),
            tables.data_alone_table(self.assessment),
            tables.working_table(self.assessment),
            tables.laws_table(self.assessment),
            tables.temperature_laws_table(self.assessment),
            predicted_tables.predicted_table(self.assessment, self._conditions),
            uncertainty_tables.budget_table(self.assessment),
            covariance_tables.covariance_table(self.assessment),
            covariance_tables.correlation_table(self.assessment),
            uncertainty_tables.prior_table(self.assessment),
            uncertainty_tables.influence_table(self.assessment),
            tables.runs_table(self.assessment),
        )
        checked = () if self.checked is None else self.checked.tables
        discussed = () if self.discussed is None else self.discussed.tables
        reduced = () if self.reduction is None else (reduction_table(self.reduction),)
        return (*(table for table in made if table is not None), *reduced, *checked, *discussed)

    @property
    def _conditions(self) -> tuple[tuple[float, float], ...]:
        return self.conditions or predicted_tables.customary_conditions(self.assessment.headline)

    @property
    def plain_tables(self) -> tuple[PlainTable, ...]:
        """Every table with its numbers in full, u and ends of intervals in their own columns."""
        return tuple(plain_table(table) for table in self.tables)

    def frame(self, name: str) -> pd.DataFrame:
        """Return a table as a data frame, numbers in full.

        Parameters
        ----------
        name
            Name of the table: ``"parameters"``, ``"runs"``, ``"laws"``, ``"predicted"``...

        Raises
        ------
        InputError
            If the report has no such table; those that it has are told.
        """
        found = {table.name: table for table in self.tables}
        if name not in found:
            raise InputError(
                f"there is no table {quoted(name)} in this report",
                f"take one of {', '.join(found)}",
            )
        return plain_table(found[name]).frame()

    @property
    def upstream(self) -> tuple[str, ...]:
        """How rate constants came from traces, a line each; none where they were given."""
        return () if self.reduction is None else self.reduction.notes

    @property
    def answer_tables(self) -> tuple[Table, ...]:
        """The tables of the answer itself."""
        return tuple(table for table in self.tables if table.name in ANSWER_TABLES)

    @property
    def sections(self) -> tuple[Section, ...]:
        """What stands between the answer and the methods, by subject."""
        return sections_of(self)

    @property
    def discussion(self) -> tuple[str, ...]:
        """Sentences of the discussion, each with its number; none where none was asked for."""
        return () if self.discussed is None else self.discussed.sentences

    @cached_property
    def pictures(self) -> tuple[Picture, ...]:
        """Every figure that the study supports, in the order of the report; none is drawn yet."""
        traced = () if self.reduction is None else trace_pictures(self.reduction)
        discussed = () if self.discussed is None else self.discussed.pictures
        return (*traced, *pictures_of(self.assessment), *discussed)

    def summary(self, layout: Layout = "text") -> str:
        """Return the summary for the terminal."""
        return summary(self.assessment, layout)

    def record(self) -> str:
        """Return the text of ``results.json``."""
        about: dict[str, Any] = {"seed": self.seed}
        if self.inputs:
            about["inputs"] = self.inputs
        if self.discussed is not None:
            about["discussed"] = self.discussed.record()
        if self.checked is not None:
            about["checked"] = self.checked.record()
        if self.reduction is not None:
            about["reduction"] = reduction_record(self.reduction)
        return record_text(self.assessment, **about)

    def inline(self, picture: Picture, width: float = DOUBLE_COLUMN) -> str:
        """Return a picture as an SVG element whose runs tell what they are.

        Parameters
        ----------
        picture
            One of `pictures`.
        width
            Width in inches for which it is arranged.
        """
        drawn = self._saved(picture, width, "svg").decode("utf-8")
        salt = f"{picture.name}-{'narrow' if width < DOUBLE_COLUMN else 'wide'}"
        titles = self._point_titles if picture.has_runs else {}
        return inline_svg(drawn, salt, f"{picture.title}. {picture.caption}", titles)

    def figure_files(self, formats: Sequence[str] = FIGURE_FORMATS) -> Iterator[tuple[str, bytes]]:
        """Yield name and content of every figure file, at single- and double-column width.

        Parameters
        ----------
        formats
            Some of ``"svg"``, ``"pdf"`` and ``"png"`` (600 dpi); none draws nothing.

        Yields
        ------
        tuple
            ``"single-column/salt.svg"`` and its bytes.

        Raises
        ------
        InputError
            If a format is none of these.
        """
        check_formats(formats)
        for picture in self.pictures:
            for folder, width in WIDTHS.items():
                for each in formats:
                    yield f"{folder}/{picture.name}.{each}", self._saved(picture, width, each)

    def _saved(self, picture: Picture, width: float, file_format: str) -> bytes:
        """Return a picture as a file; the page and the folder share drawings and SVG texts."""
        key = (picture.name, width)
        if key not in self._drawings:
            self._drawings[key] = laid_out(picture.draw(width))
        if file_format != "svg":
            return figure_bytes(self._drawings[key], file_format, picture.name)
        if key not in self._svg_texts:
            self._svg_texts[key] = figure_bytes(self._drawings[key], "svg", picture.name)
        return self._svg_texts[key]

    @cached_property
    def _drawings(self) -> dict[tuple[str, float], Figure]:
        return {}

    @cached_property
    def _svg_texts(self) -> dict[tuple[str, float], bytes]:
        return {}

    @cached_property
    def _point_titles(self) -> Mapping[str, str]:
        """What each point is, by the gid that the figures give it."""
        rates = self.assessment.rates
        residuals = iter(self.assessment.headline.standardised_residuals)
        k = quantity("measured_rate_constant", rates.order)
        titles = {}
        for row, run in enumerate(rates.run):
            parts = [f"run {run}", f"T = {rates.T[row]:.2f} K"]
            if rates.I is not None:
                parts.append(f"I = {rates.I[row]:.4g} mol/L")
            u = None if rates.u_k is None else float(rates.u_k[row])
            parts.append(f"k = {k.written(float(rates.k[row]), u)}")
            if rates.used[row]:
                residual = f"{next(residuals):+.1f}".replace("-", "−")
                parts.append(f"residual = {residual} u")
            titles[f"run-{row}"] = ", ".join(parts)
        return titles
