"""What the figures of map, charges and joint regions show, and that kn.figures offers every one."""

from __future__ import annotations

import inspect
from typing import Any

import numpy as np
import pytest

import knought as kn
from knought.reporting.style import blank_figure
from tests.fitting.test_assess import table


@pytest.fixture(scope="module")
def assessment() -> kn.Assessment:
    return kn.assess(table())


def test_every_public_figure_takes_and_returns_axes() -> None:
    drawing = [getattr(kn.figures, name) for name in kn.figures.__all__ if name.islower()]
    assert len(drawing) >= 12
    for function in drawing:
        signature = inspect.signature(function)
        assert signature.parameters["ax"].annotation == "Axes"
        assert signature.return_annotation == "Axes"
        assert "Returns\n" in (inspect.getdoc(function) or "")


def test_the_map_has_the_runs_at_their_conditions(assessment: kn.Assessment) -> None:
    ax = kn.figures.rate_constant_map(assessment, blank_figure().add_subplot())
    points = {
        line.get_gid(): line.get_xydata() for line in ax.lines if "run" in (line.get_gid() or "")
    }
    rates = assessment.rates
    assert rates.I is not None
    assert len(points) == len(rates)
    expected = [[rates.T[3], np.sqrt(rates.I[3])]]
    assert np.asarray(points["run-3"]) == pytest.approx(np.array(expected))
    top = ax.child_axes[0]
    assert top.get_xlabel() == "$t$ / °C"


def test_lines_of_the_map_have_the_rate_constant_that_they_name(
    assessment: kn.Assessment,
) -> None:
    ax = kn.figures.rate_constant_map(assessment, blank_figure().add_subplot())
    lines: Any = next(each for each in ax.collections if getattr(each, "labelTexts", None))
    for level, path in zip(lines.levels, lines.get_paths(), strict=True):
        x, y = path.vertices[0]
        k = float(assessment.rate_constant(T=float(x), I=float(y) ** 2).value)
        assert np.log10(k) == pytest.approx(float(level), abs=5e-3)
    named = float(lines.labelTexts[0].get_text())
    assert np.abs(np.log10(named) - lines.levels).min() < 1e-9


def test_integers_and_intervals_of_the_charge_product_are_marked(
    assessment: kn.Assessment,
) -> None:
    ax = kn.figures.charge_product_by_law(assessment, blank_figure().add_subplot())
    labels = [label.get_text() for label in ax.get_yticklabels()]
    assert labels[0] == "open law"
    assert "Davies" in labels
    assert "no salt effect" not in labels
    marked = [line.get_gid() for line in ax.lines if (line.get_gid() or "").startswith("integer")]
    assert {"integer-2", "integer-3"} <= set(marked)
    low, high = (float(end) for end in assessment.parameters["charge_product"].interval(0.95))
    ends = next(line.get_xdata() for line in ax.lines if line.get_gid() is None)
    assert np.asarray(ends, float) == pytest.approx([low, high])


def test_the_regions_name_their_level_and_span_alike(assessment: kn.Assessment) -> None:
    for draw in (kn.figures.enthalpy_entropy_region, kn.figures.enthalpy_gibbs_region):
        ax = draw(assessment, blank_figure().add_subplot())
        assert ax.texts[0].get_text().startswith("95%, $\\rho$ = ")
        ring = next(line for line in ax.lines if line.get_gid() == "region").get_xydata()
        span = np.ptp(np.asarray(ring), axis=0)
        limits = np.array([np.ptp(ax.get_xlim()), np.ptp(ax.get_ylim())])
        assert span / limits == pytest.approx(np.full(2, 1 / 1.22), rel=1e-3)
