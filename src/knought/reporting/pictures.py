"""The pictures of a report: which figures a study supports, and captions that define every mark."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

from knought.chemistry.quantities import quantity
from knought.reporting import (
    activation_figures,
    charge_figures,
    map_figures,
    residual_figures,
    surface_figures,
    uncertainty_figures,
)
from knought.reporting.style import DOUBLE_COLUMN, SINGLE_COLUMN, STYLE, blank_figure
from knought.reporting.uncertainty_tables import BUDGETED

if TYPE_CHECKING:
    from collections.abc import Callable

    from matplotlib.axes import Axes
    from matplotlib.figure import Figure

    from knought.discussion.compare import Comparison
    from knought.discussion.next_runs import Plan
    from knought.fitting.assess import Assessment
    from knought.measurement.reduction import Reduction

__all__ = ["Picture", "forest_pictures", "pictures_of", "plan_pictures", "trace_pictures"]


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
    arrange
        Fills a blank figure of either width.
    heights
        Heights in inches at single- and at double-column width.
    has_runs
        Whether its points are runs, which say what they are when pointed at.
    """

    name: str
    title: str
    caption: str
    arrange: Callable[[Figure], object]
    heights: tuple[float, float]
    has_runs: bool = False

    def draw(self, width: float = DOUBLE_COLUMN) -> Figure:
        """Return the figure drawn anew.

        Parameters
        ----------
        width
            In inches; below the mean of single and double column the narrow arrangement is used.
        """
        import matplotlib as mpl

        with mpl.rc_context(STYLE):
            figure = blank_figure(width, self.heights[0 if _narrow(width) else 1])
            self.arrange(figure)
        return figure


def _narrow(width: float) -> bool:
    return width < (SINGLE_COLUMN + DOUBLE_COLUMN) / 2


def _on_one(draw: Callable[[Axes], object]) -> Callable[[Figure], object]:
    return lambda figure: draw(figure.add_subplot())


def _panels(
    draws: list[Callable[[Axes], object]], *, share_y: bool = False
) -> Callable[[Figure], object]:
    """Return an arrangement side by side, or on top of each other in a single column."""

    def arrange(figure: Figure) -> None:
        narrow = _narrow(float(figure.get_size_inches()[0]))
        shape = (len(draws), 1) if narrow else (1, len(draws))
        axes = figure.subplots(*shape, sharey=share_y, squeeze=False).ravel()
        for ax, draw in zip(axes, draws, strict=True):
            draw(ax)
        if share_y and not narrow:
            for ax in axes[1:]:
                ax.set_ylabel("")

    return arrange


def pictures_of(assessment: Assessment) -> tuple[Picture, ...]:
    """Return every figure that an assessment supports, in the order of the report."""
    found, seen = assessment.headline, assessment.observations
    several_T = len(seen.temperature_levels) > 1
    several_I = found.describes_salt and len(seen.ionic_strength_levels) > 1
    made = []
    if several_T:
        made.append(_temperature(assessment))
    if several_I:
        made.append(_salt(assessment))
    if several_T and several_I:
        made.append(_map(assessment))
    if charge_figures.charge_products(assessment):
        made.append(_charges(assessment))
    if "activation_enthalpy" in found.parameters:
        made.append(_regions(assessment))
    if len(assessment.budget("rate_constant").variances) > 1:
        made.append(_budget(assessment))
    made.append(_residuals(assessment))
    return tuple(made)


def _temperature(assessment: Assessment) -> Picture:
    describes_salt = assessment.headline.describes_salt
    lines = (
        "Lines: the fitted surface at I → 0 (broken) and at working ionic strengths (full)"
        if describes_salt
        else "Line: the fitted temperature law"
    )
    level = "; colour and marker tell the ionic strength" if describes_salt else ""
    return Picture(
        "temperature",
        "Rate constant against temperature",
        f"{lines}; the darker bands are 95 % confidence bands of the line, the lighter ones "
        "95 % prediction bands for one further run with the typical uncertainty of the runs. "
        f"Points: runs at their own T and I{level}; bars: one standard uncertainty.",
        _on_one(lambda ax: surface_figures.temperature_dependence(assessment, ax)),
        (3.1, 4.4),
        has_runs=True,
    )


def _salt(assessment: Assessment) -> Picture:
    slopes = (
        "dotted: limiting slopes 2 A(T) z_A z_B. "
        if "charge_product" in assessment.headline.parameters
        else ""
    )
    return Picture(
        "salt",
        "Rate constant against ionic strength",
        "Lines: the fitted surface at each temperature, extrapolated to I → 0 (open circles); "
        f"bands: 95 % confidence bands; {slopes}Points: runs; bars: one standard uncertainty.",
        _on_one(lambda ax: surface_figures.salt_effect(assessment, ax)),
        (3.1, 4.2),
        has_runs=True,
    )


def _map(assessment: Assessment) -> Picture:
    return Picture(
        "map",
        "Map of the rate constant",
        "Lines: equal rate constants of the fitted surface over temperature and ionic strength; "
        "shading: the same on a logarithmic scale, lighter where the reaction is faster. Circles: "
        "the runs; where there are none, the surface rests on the laws alone.",
        _on_one(lambda ax: map_figures.rate_constant_map(assessment, ax)),
        (3.2, 3.9),
        has_runs=True,
    )


def _charges(assessment: Assessment) -> Picture:
    given = assessment.choices.charge_product is not None
    return Picture(
        "charge-product",
        "Charge product by salt law",
        "Points: the charge product z_A z_B of the runs; bars: 95 % intervals. "
        + (
            "The charges are given (broken line): shown is what the runs alone say. "
            if given
            else "Thick: the headline; thin: each named law as if it were known to be right. "
        )
        + "Dotted lines: integers.",
        _on_one(lambda ax: charge_figures.charge_product_by_law(assessment, ax)),
        (0.75 + 0.24 * len(charge_figures.charge_products(assessment)),) * 2,
    )


def _regions(assessment: Assessment) -> Picture:
    return Picture(
        "activation",
        "ΔH‡ with ΔS‡, and ΔH‡ with ΔG‡",
        "Ellipses: joint 95 % regions at "
        f"{assessment.reference_temperature:.2f} K"
        f"{' and I → 0' if assessment.headline.describes_salt else ''}, which hold both "
        "quantities at once with that probability; ρ is their correlation. Crosses: best values; "
        "bars: one standard uncertainty of each quantity alone. Every axis spans as many of its "
        "own standard uncertainties.",
        _panels(
            [
                lambda ax: activation_figures.enthalpy_entropy_region(assessment, ax),
                lambda ax: activation_figures.enthalpy_gibbs_region(assessment, ax),
            ]
        ),
        (5.2, 3.0),
    )


def _budget(assessment: Assessment) -> Picture:
    # In a single column the legend stands above the bars, and grows with the sources.
    sources = {
        source
        for name in BUDGETED
        if name in assessment.headline.parameters and not assessment.headline.parameters[name].given
        for source in assessment.budget(name).variances
    }
    return Picture(
        "budget",
        "Which error to reduce",
        "Bars: share of each source of error in the variance of a result; a row adds up to "
        "100 %. Shares from 8 % are labelled.",
        _on_one(lambda ax: uncertainty_figures.budget_bars(assessment, ax)),
        (1.9 + 0.17 * len(sources), max(2.4, 0.6 + 0.16 * len(sources))),
    )


def _residuals(assessment: Assessment) -> Picture:
    kinds = residual_figures.sources(assessment.observations)
    several = len(assessment.observations.temperature_levels) > 1
    return Picture(
        "residuals",
        "Residuals",
        "Observed less fitted ln k over the standard uncertainty of each run; dotted lines at "
        "±2." + (" Colour and marker tell the temperature, one for each level." if several else ""),
        _panels(
            [
                lambda ax, kind=kind: residual_figures.residuals_against(assessment, kind, ax)  # type: ignore[misc]
                for kind in kinds
            ],
            share_y=True,
        ),
        (0.3 + 1.75 * len(kinds), 2.5),
        has_runs=True,
    )


def trace_pictures(reduction: Reduction) -> tuple[Picture, ...]:
    """Return some of the traces with what was read off them; none where slopes were given."""
    from knought.reporting.upstream_figures import across, trace_panels, traces_shown

    shown, runs = traces_shown(reduction), len(reduction.runs)
    if not shown:
        return ()
    which = (
        "Every trace"
        if len(shown) == runs
        else f"{len(shown)} of {runs} traces, from the slowest to the fastest"
    )
    line = (
        "the single exponential"
        if reduction.method.kind == "first-order"
        else "the polynomial, dashed the slope at t = 0"
    )
    narrow, wide = (1.9 * -(-len(shown) // across(n)) for n in (SINGLE_COLUMN, DOUBLE_COLUMN))
    return (
        Picture(
            "traces",
            "From traces to rate constants",
            f"{which}. Points: absorbance; shaded: the window that was used; line: {line}.",
            lambda figure: trace_panels(reduction, figure),
            (narrow, wide),
        ),
    )


def forest_pictures(comparison: Comparison) -> tuple[Picture, ...]:
    """Return one forest figure for each quantity of which several papers are combined."""
    from knought.reporting.literature_figures import FOREST_CAPTION, forest

    return tuple(
        Picture(
            f"forest-{name.replace('_', '-')}",
            f"Literature and this work: {_words(name)}",
            FOREST_CAPTION,
            _on_one(lambda ax, carried=carried: forest(carried, ax)),  # type: ignore[misc]
            (1.2 + 0.3 * len(carried.carried),) * 2,
        )
        for name, carried in comparison.consensuses.items()
    )


def plan_pictures(plan: Plan) -> tuple[Picture, ...]:
    """Return where the next runs say most."""
    from knought.reporting.plan_figures import CAPTIONS, information_map

    return (
        Picture(
            "plan",
            "Where the next runs say most",
            CAPTIONS["information"],
            _on_one(lambda ax: information_map(plan, ax)),
            (2.8, 3.6),
        ),
    )


def _words(name: str) -> str:
    return quantity("measured_rate_constant" if name == "rate_constant" else name).words
