"""One report: tables, figures and sentences of an assessment; page and files come from it."""

from __future__ import annotations

from dataclasses import dataclass
from functools import cached_property
from typing import TYPE_CHECKING, Any

from knought.chemistry.quantities import quantity
from knought.measurement.reading import account_lines
from knought.reporting import figures, tables, uncertainty_figures, uncertainty_tables
from knought.reporting.record import record_text
from knought.reporting.sentences import (
    charge_sentences,
    check_sentences,
    laws_sentence,
    runs_sentence,
)
from knought.reporting.style import DOUBLE_COLUMN, STYLE, blank_figure
from knought.reporting.summary import summary
from knought.reporting.svg import inline_svg, plain_svg
from knought.reporting.upstream_tables import reduction_record, reduction_table

if TYPE_CHECKING:
    from collections.abc import Callable, Mapping

    from matplotlib.figure import Figure

    from knought.discussion.compare import Comparison
    from knought.discussion.next_runs import Plan
    from knought.fitting.assess import Assessment
    from knought.measurement.reduction import Reduction
    from knought.reporting.cells import Table
    from knought.reporting.checked import Checked
    from knought.reporting.discussed import Discussed
    from knought.rounding import Layout

__all__ = ["Picture", "Report"]


@dataclass(frozen=True)
class Picture:
    """A figure of a report.

    Attributes
    ----------
    name
        For file names and ids.
    title
        One line above it.
    caption
        Defines every line, band and bar.
    draw
        Makes the figure anew.
    """

    name: str
    title: str
    caption: str
    draw: Callable[[], Figure]


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
    """

    assessment: Assessment
    title: str
    inputs: tuple[tuple[str, str], ...] = ()
    seed: int | None = None
    discussed: Discussed | None = None
    checked: Checked | None = None
    reduction: Reduction | None = None

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
            uncertainty_tables.budget_table(self.assessment),
            uncertainty_tables.prior_table(self.assessment),
            uncertainty_tables.influence_table(self.assessment),
            tables.runs_table(self.assessment),
        )
        checked = () if self.checked is None else self.checked.tables
        discussed = () if self.discussed is None else self.discussed.tables
        reduced = () if self.reduction is None else (reduction_table(self.reduction),)
        return (*(table for table in made if table is not None), *reduced, *checked, *discussed)

    @property
    def upstream(self) -> tuple[str, ...]:
        """How rate constants came from traces, a line each; none where they were given."""
        return () if self.reduction is None else self.reduction.notes

    @property
    def discussion(self) -> tuple[str, ...]:
        """Sentences of the discussion, each with its number; none where none was asked for."""
        return () if self.discussed is None else self.discussed.sentences

    @cached_property
    def pictures(self) -> tuple[Picture, ...]:
        """Every figure that the assessment supports, in the order of the report."""
        seen, found = self.assessment.observations, self.assessment.headline
        made = []
        if self.reduction is not None and any(each.window for each in self.reduction.runs):
            made.append(_traces_picture(self.reduction))
        if len(seen.temperature_levels) > 1:
            made.append(self._temperature_picture())
        if found.describes_salt and len(seen.ionic_strength_levels) > 1:
            made.append(self._salt_picture())
        made.append(self._residual_picture())
        budget = self.assessment.budget("rate_constant")
        if len(budget.variances) > 1:
            made.append(self._budget_picture())
        if self.discussed is not None and self.discussed.comparison is not None:
            made += _forest_pictures(self.discussed.comparison)
        if self.discussed is not None and self.discussed.plan is not None:
            made.append(_plan_picture(self.discussed.plan))
        return tuple(made)

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

    def inline(self, picture: Picture) -> str:
        """Return a picture as an SVG element whose points tell what they are."""
        return inline_svg(self.svg(picture), picture.name, picture.caption, self._point_titles)

    def svg(self, picture: Picture) -> str:
        """Return a picture as the text of an SVG file."""
        return self._svg_texts[picture.name]

    @cached_property
    def _svg_texts(self) -> Mapping[str, str]:
        """Every picture as SVG, drawn once for the page and the files."""
        return {each.name: plain_svg(each.draw(), each.name) for each in self.pictures}

    @cached_property
    def _point_titles(self) -> Mapping[str, str]:
        """What each point is, by the gid that the figures give it."""
        rates = self.assessment.rates
        k = quantity("measured_rate_constant", rates.order)
        titles = {}
        for row, run in enumerate(rates.run):
            parts = [f"run {run}", f"T = {rates.T[row]:.2f} K"]
            if rates.I is not None:
                parts.append(f"I = {rates.I[row]:.4g} mol/L")
            u = None if rates.u_k is None else float(rates.u_k[row])
            parts.append(f"k = {k.written(float(rates.k[row]), u)}")
            titles[f"run-{row}"] = ", ".join(parts)
        return titles

    def _temperature_picture(self) -> Picture:
        describes_salt = self.assessment.headline.describes_salt
        lines = (
            "Lines: the fitted surface at I → 0 (dashed) and at working ionic strengths"
            if describes_salt
            else "Line: the fitted temperature law"
        )
        return Picture(
            "temperature",
            "Rate constant against temperature",
            f"{lines}; the darker bands are 95 % confidence bands of the line, the lighter ones "
            "95 % prediction bands for one further run with the typical uncertainty of the runs. "
            "Points: runs at their own T and I; bars: one standard uncertainty.",
            lambda: _drawn(
                lambda figure: figures.temperature_dependence(
                    self.assessment, figure.add_subplot()
                ),
                height=4.4,
            ),
        )

    def _salt_picture(self) -> Picture:
        return Picture(
            "salt",
            "Rate constant against ionic strength",
            "Lines: the fitted surface at each temperature, extrapolated to I → 0 (open circles); "
            "bands: 95 % confidence bands; dotted: limiting slopes 2 A(T) z_A z_B. Points: runs; "
            "bars: one standard uncertainty.",
            lambda: _drawn(
                lambda figure: figures.salt_effect(self.assessment, figure.add_subplot()),
                height=4.2,
            ),
        )

    def _budget_picture(self) -> Picture:
        return Picture(
            "budget",
            "Which error to reduce",
            "Bars: shares of each source of error in the variance of a result; a row adds up to "
            "100 %.",
            lambda: _drawn(
                lambda figure: uncertainty_figures.budget_bars(
                    self.assessment, figure.add_subplot()
                ),
                height=2.4,
            ),
        )

    def _residual_picture(self) -> Picture:
        kinds = figures.sources(self.assessment.observations)

        def draw(figure: Figure) -> None:
            axes = figure.subplots(1, len(kinds), sharey=True, squeeze=False)[0]
            for ax, kind in zip(axes, kinds, strict=True):
                figures.residuals_against(self.assessment, kind, ax)
            for ax in axes[1:]:
                ax.set_ylabel("")

        return Picture(
            "residuals",
            "Residuals",
            "Observed less fitted ln k over the standard uncertainty of each run; dotted lines at "
            "±2. Colours and markers as in the figure against ionic strength: one for each "
            "temperature.",
            lambda: _drawn(draw, height=2.5),
        )


def _traces_picture(reduction: Reduction) -> Picture:
    from knought.reporting.upstream_figures import trace_panels, traces_shown

    shown, runs = traces_shown(reduction), len(reduction.runs)
    which = f"{len(shown)} of {runs} traces, from the slowest to the fastest" * (len(shown) < runs)
    first_order = reduction.method.kind == "first-order"
    return Picture(
        "traces",
        "From traces to rate constants",
        f"{which or 'Every trace'}. Points: absorbance; shaded: the window that was used; line: "
        + ("the single exponential." if first_order else "the polynomial; dashed: slope at t = 0."),
        lambda: _drawn(
            lambda figure: trace_panels(reduction, figure), height=1.75 * -(-len(shown) // 3)
        ),
    )


def _plan_picture(plan: Plan) -> Picture:
    from knought.reporting.plan_figures import information_map

    return Picture(
        "plan",
        "Where the next runs say most",
        "Shading: what a run at that temperature and ionic strength adds to the aim of the plan; "
        "points: planned runs.",
        lambda: _drawn(lambda figure: information_map(plan, figure.add_subplot()), height=3.6),
    )


def _words(name: str) -> str:
    return quantity("measured_rate_constant" if name == "rate_constant" else name).words


def _forest_pictures(comparison: Comparison) -> list[Picture]:
    """One forest figure for each quantity of which several papers are combined."""
    from knought.reporting.literature_figures import forest

    return [
        Picture(
            f"forest-{name.replace('_', '-')}",
            f"Literature and this work: {_words(name)}",
            "Points: literature values carried to our conditions, with 95 % intervals; diamond: "
            "their consensus; vertical line and band: this work with its 95 % interval.",
            lambda carried=carried: _drawn(  # type: ignore[misc]
                lambda figure: forest(carried, figure.add_subplot()),
                height=1.2 + 0.3 * len(carried.carried),
            ),
        )
        for name, carried in comparison.consensuses.items()
    ]


def _drawn(draw: Callable[[Figure], object], height: float) -> Figure:
    import matplotlib as mpl

    with mpl.rc_context(STYLE):
        figure = blank_figure(DOUBLE_COLUMN, height)
        draw(figure)
    return figure
