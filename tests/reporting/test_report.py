"""The report: page, figures, record and tables all tell the same numbers."""

from __future__ import annotations

import json
import re
from html.parser import HTMLParser
from typing import TYPE_CHECKING

import numpy as np
import pytest
from defusedxml.ElementTree import fromstring
from matplotlib.axes import Axes

import knought as kn
from knought.reporting import figures, tables
from knought.reporting.cells import plain_lines
from knought.reporting.figure_files import figure_bytes, laid_out
from knought.reporting.page import page, written_page
from knought.reporting.record import record
from knought.reporting.style import blank_figure, sequential
from knought.reporting.summary import summary, to_ascii
from tests.fitting.test_assess import table

if TYPE_CHECKING:
    from collections.abc import Callable

HOSTILE = "<script>alert('x')</script>=cmd()\"&"


@pytest.fixture(scope="module")
def assessment() -> kn.Assessment:
    return kn.assess(table(), reactants="A^2- + B^-")


@pytest.fixture(scope="module")
def html(assessment: kn.Assessment) -> str:
    return page(kn.Report(assessment, "Study <1> & more"))


class Structure(HTMLParser):
    """Collects ids, tags, and anything that would reach out of the page."""

    def __init__(self) -> None:
        super().__init__()
        self.ids: list[str] = []
        self.tags: list[str] = []
        self.outward: list[str] = []
        self.titles = 0

    def handle_starttag(self, tag: str, attrs: list[tuple[str, str | None]]) -> None:
        self.tags.append(tag)
        for name, value in attrs:
            if name == "id" and value:
                self.ids.append(value)
            reaches = name in {"src", "href", "xlink:href", "action", "data"}
            if reaches and value and not value.startswith("#"):
                self.outward.append(value)


def structure(text: str) -> Structure:
    parsed = Structure()
    parsed.feed(text)
    return parsed


def test_the_page_stands_alone(html: str) -> None:
    found = structure(html)
    assert found.outward == []
    assert found.tags.count("script") == 1
    assert found.tags.count("svg") == 2 * 7
    assert "@import" not in html
    assert "http" not in re.sub(r'xmlns(:\w+)?="[^"]*"', "", html).replace(
        "https://", "http://"
    ) or ("http://www.w3.org" in html)


def test_no_two_elements_of_the_page_share_an_id(html: str) -> None:
    ids = structure(html).ids
    assert len(ids) == len(set(ids))


def test_every_point_of_every_figure_says_what_it_is(html: str, assessment: kn.Assessment) -> None:
    titles = re.findall(r"<title>(run [^<]*)</title>", html)
    # Three main figures with every run once, and three panels of residuals; each wide and narrow.
    assert len(titles) == 18 * 6 * 2
    rates = assessment.rates
    assert rates.I is not None
    first = f"run 1, T = {rates.T[0]:.2f} K, I = {rates.I[0]:.4g} mol/L, k = "
    of_first = [title for title in titles if title.startswith(first)]
    assert len(of_first) == 12
    residual = float(assessment.headline.standardised_residuals[0])
    ending = f"residual = {residual:+.1f} u".replace("-", "−")
    assert all(title.endswith(ending) for title in of_first)


def undrawn(report: kn.Report) -> str:
    """Return the page without its drawings, which take most of the time."""
    return written_page(report, dict.fromkeys((each.name for each in report.pictures), "<svg/>"))


def test_text_of_the_user_is_escaped() -> None:
    rates = table(run=[HOSTILE] + [str(i) for i in range(17)], salt=[HOSTILE] * 18)
    report = kn.Report(kn.assess(rates), HOSTILE)
    text = undrawn(report)
    assert HOSTILE not in text
    assert text.count("<script>") == 1
    assert "&lt;script&gt;" in text
    drawing = report.inline(report.pictures[-1])
    assert "<script>" not in drawing
    assert "run &lt;script&gt;" in drawing


def test_nothing_on_the_page_asks_the_network(html: str) -> None:
    policy = re.search(r'Content-Security-Policy" content="([^"]*)"', html)
    assert policy is not None
    assert policy[1].startswith("default-src &#39;none&#39;;")
    # Style attributes would be refused by that policy.
    assert not re.search(r"<[^>]* style=", html)
    assert not re.search(r'(?:src|href)="(?!#|data:)', html)


def test_numbers_of_page_summary_and_record_are_the_same(
    html: str, assessment: kn.Assessment
) -> None:
    estimate = assessment.parameters["activation_energy"]
    digits = estimate.quantity.rounded(float(estimate.value), float(estimate.standard_uncertainty))
    assert digits.value in html
    assert digits.value in summary(assessment)
    kept = record(assessment)["parameters"]["activation_energy"]
    assert kept["value"] == pytest.approx(float(estimate.value) / 1000, rel=1e-15)
    assert kept["unit"] == "kJ mol^-1"
    assert kept["interval"] == pytest.approx([float(e) / 1000 for e in estimate.interval(0.95)])


def test_the_record_holds_what_the_design_promises(assessment: kn.Assessment) -> None:
    kept = json.loads(json.dumps(record(assessment, seed=7), allow_nan=False))
    assert set(kept) >= {
        "knought",
        "inputs",
        "seed",
        "reference_temperature",
        "parameters",
        "covariance",
        "temperature_law",
        "salt_law",
        "priors",
        "laws",
        "warnings",
    }
    names = kept["covariance"]["names"]
    matrix = np.array(kept["covariance"]["matrix"])
    assert names[0] == "ln_rate_constant"
    assert matrix.shape == (len(names),) * 2
    u = np.sqrt(matrix[names.index("activation_enthalpy")][names.index("activation_enthalpy")])
    assert u == pytest.approx(
        kept["parameters"]["activation_enthalpy"]["standard_uncertainty"], rel=1e-9
    )
    pairs = [(law["temperature"], law["salt"]) for law in kept["laws"]]
    assert ("eyring", "davies") in pairs
    assert ("eyring-cp", "open") in pairs
    assert kept["data_alone"]["parameters"]["charge_product"]["standard_uncertainty"] > 0.1
    assert kept["parameters"]["charge_product"]["given"] is True
    law = next(law for law in kept["laws"] if law["salt"] == "davies")
    assert law["standard_errors"]["from_stated_u"]["activation_enthalpy"] > 0
    assert law["standard_errors"]["from_scatter"]["activation_enthalpy"] > 0


def test_a_record_without_stated_u_has_no_standard_errors_from_it() -> None:
    kept = record(kn.assess(table(u_k=None)))
    law = next(law for law in kept["laws"] if law["salt"] == "davies")
    assert law["standard_errors"]["from_stated_u"]["activation_enthalpy"] is None
    assert kept["uncertainty"]["kind"] == "scatter"
    assert kept["parameters"]["activation_energy"]["degrees_of_freedom"] == 15


def test_figures_draw_on_the_axes_they_are_given(assessment: kn.Assessment) -> None:
    drawings: list[Callable[[Axes], Axes]] = [
        lambda ax: figures.temperature_dependence(assessment, ax),
        lambda ax: figures.salt_effect(assessment, ax),
        lambda ax: figures.residuals_against(assessment, "order", ax),
        lambda ax: figures.rate_constant_map(assessment, ax),
        lambda ax: figures.charge_product_by_law(assessment, ax),
        lambda ax: figures.enthalpy_entropy_region(assessment, ax),
        lambda ax: figures.enthalpy_gibbs_region(assessment, ax),
        lambda ax: figures.budget_bars(assessment, ax),
    ]
    for draw in drawings:
        ax = blank_figure().add_subplot()
        assert draw(ax) is ax
        assert isinstance(ax, Axes)
        assert ax.get_xlabel()
        assert ax.get_ylabel() or ax.get_yticklabels()


def test_the_temperature_figure_shows_points_lines_and_celsius(
    assessment: kn.Assessment,
) -> None:
    figure = blank_figure()
    ax = figures.temperature_dependence(assessment, figure.add_subplot())
    figure.canvas.draw()
    points = [line for line in ax.lines if (line.get_gid() or "").startswith("run-")]
    assert len(points) == 18
    rates = assessment.rates
    assert np.asarray(points[0].get_xdata()) == pytest.approx([1000 / rates.T[0]])
    assert np.asarray(points[0].get_ydata()) == pytest.approx([np.log(rates.k[0])])
    dashed = next(line for line in ax.lines if line.get_gid() == "limit")
    x, y = np.asarray(dashed.get_xdata(), float), np.asarray(dashed.get_ydata(), float)
    rising = np.argsort(x)
    at_ref = np.interp(1000 / 298.15, x[rising], y[rising])
    assert at_ref == pytest.approx(
        np.log(float(assessment.parameters["rate_constant"].value)), abs=1e-3
    )
    top = ax.child_axes[0]
    assert "°C" in top.get_xlabel()
    celsius = [float(label.get_text()) for label in top.get_xticklabels()]
    assert celsius == pytest.approx([1000 / x - 273.15 for x in top.get_xticks()], abs=0.5)


def test_the_limiting_slope_is_drawn_with_its_slope(assessment: kn.Assessment) -> None:
    ax = figures.salt_effect(assessment, blank_figure().add_subplot())
    dotted = [line for line in ax.lines if line.get_linestyle() == ":"]
    assert len(dotted) == 3
    x, y = np.asarray(dotted[1].get_xdata()), np.asarray(dotted[1].get_ydata())
    A = float(kn.debye_huckel(np.array(298.15)).A)
    assert (y[-1] - y[0]) / (x[-1] - x[0]) == pytest.approx(2 * 2 * A, rel=1e-9)


def test_colours_are_ordered_in_grey() -> None:
    luminance = [0.299 * r + 0.587 * g + 0.114 * b for r, g, b, _ in sequential(7)]
    assert np.all(np.diff(luminance) > 0.05)


def test_svg_files_are_the_same_for_the_same_study(assessment: kn.Assessment) -> None:
    picture = kn.Report(assessment, "x").pictures[-1]
    text = figure_bytes(laid_out(picture.draw()), "svg", picture.name)
    assert text == figure_bytes(laid_out(picture.draw()), "svg", picture.name)
    assert fromstring(text).tag.endswith("svg")


def test_tables_line_up(assessment: kn.Assessment) -> None:
    lines = plain_lines(tables.headline_table(assessment))
    assert len({len(line) for line in lines[1:2]}) == 1
    assert all(len(line) <= 100 for line in lines)
    for table_ in kn.Report(assessment, "x").tables:
        for row in table_.rows:
            assert len(row) == len(table_.columns), table_.name


def test_one_temperature_and_no_salt_have_fewer_figures() -> None:
    alone = kn.assess(kn.RateTable.from_arrays([288.15, 298.15, 308.15], [1.0, 2.1, 4.0]))
    assert [picture.name for picture in kn.Report(alone, "x").pictures] == [
        "temperature",
        "activation",
        "residuals",
    ]
    assert undrawn(kn.Report(alone, "x")).count("<svg") == 3
    isothermal = kn.assess(
        kn.RateTable.from_arrays(
            [298.15] * 4, [1.0, 1.2, 1.4, 1.6], [0.01, 0.02, 0.05, 0.1], unit="L mol^-1 s^-1"
        )
    )
    assert [picture.name for picture in kn.Report(isothermal, "x").pictures] == [
        "salt",
        "charge-product",
        "budget",
        "residuals",
    ]
    assert "E_a" not in summary(isothermal, "ascii")


def test_ascii_has_a_word_for_every_sign_that_we_use(assessment: kn.Assessment) -> None:
    text = to_ascii(summary(assessment, "ascii"))
    assert text.isascii()
    assert "?" not in text.replace("salt law?", "")


def test_the_budget_is_told_alike_in_table_figure_and_record(assessment: kn.Assessment) -> None:
    from knought.reporting.uncertainty_figures import budget_bars
    from knought.reporting.uncertainty_tables import budget_table

    made = budget_table(assessment)
    assert made is not None
    shares = {row[0].raw: row[2].raw for row in made.rows}
    parts = assessment.budget("rate_constant")
    assert shares["repeatability of k"] == pytest.approx(parts.shares["repeatability of k"])
    rows = [row for row in made.rows if row[0].raw != "all together"]
    listed: list[float] = [float(row[2].raw or 0.0) for row in rows]
    assert sum(listed) == pytest.approx(1)
    ax = budget_bars(assessment, blank_figure().add_subplot())
    widths = [float(patch.get_bbox().width) for patch in ax.patches]  # type: ignore[attr-defined]
    assert sum(widths) == pytest.approx(3)  # three results, each adding up to one
    kept = record(assessment)["budget"]["rate_constant"]["variances"]
    assert sum(kept.values()) == pytest.approx(
        record(assessment)["parameters"]["rate_constant"]["standard_uncertainty"] ** 2, rel=1e-8
    )


def test_tables_of_priors_and_influence_have_their_rows(assessment: kn.Assessment) -> None:
    from knought.reporting.uncertainty_tables import influence_table, prior_table

    priors, moved = prior_table(assessment), influence_table(assessment)
    assert priors is not None
    assert [row[0].raw for row in priors.rows] == ["as they are", "widths halved", "widths doubled"]
    assert moved is not None
    assert len(moved.rows) == 10
