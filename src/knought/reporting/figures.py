"""Every figure as a function that draws on the Axes it is given and returns it.

    import knought as kn
    from matplotlib import pyplot as plt

    found = kn.assess(kn.read_rates("rates.csv"))
    with plt.rc_context(kn.figures.STYLE):
        fig, ax = plt.subplots(figsize=(kn.figures.SINGLE_COLUMN, 2.8), layout="constrained")
        kn.figures.salt_effect(found, ax)

Captions that define every line, band and bar come with the pictures of a :class:`knought.Report`.
"""

from __future__ import annotations

from knought.reporting.activation_figures import enthalpy_entropy_region, enthalpy_gibbs_region
from knought.reporting.charge_figures import charge_product_by_law
from knought.reporting.literature_figures import compensation_plot, forest, gibbs_plot
from knought.reporting.map_figures import rate_constant_map
from knought.reporting.plan_figures import information_map, u_against_runs
from knought.reporting.residual_figures import residuals_against
from knought.reporting.style import DOUBLE_COLUMN, SINGLE_COLUMN, STYLE
from knought.reporting.surface_figures import salt_effect, temperature_dependence
from knought.reporting.uncertainty_figures import budget_bars

__all__ = [
    "DOUBLE_COLUMN",
    "SINGLE_COLUMN",
    "STYLE",
    "budget_bars",
    "charge_product_by_law",
    "compensation_plot",
    "enthalpy_entropy_region",
    "enthalpy_gibbs_region",
    "forest",
    "gibbs_plot",
    "information_map",
    "rate_constant_map",
    "residuals_against",
    "salt_effect",
    "temperature_dependence",
    "u_against_runs",
]
