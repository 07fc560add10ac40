"""The page: one self-contained HTML file, no script, no network, made from a :class:`Report`."""

from __future__ import annotations

from typing import TYPE_CHECKING

if TYPE_CHECKING:
    from knought.reporting.cells import Column
    from knought.reporting.report import Report
    from knought.rounding import Layout

__all__ = ["page"]


def page(report: Report) -> str:
    """Return the page of a report as HTML text.

    Parameters
    ----------
    report
        The report.

    Returns
    -------
    str
        A whole HTML document; everything that came from the user is escaped.
    """
    from jinja2 import Environment, PackageLoader, StrictUndefined
    from markupsafe import Markup

    from knought.version import __version__

    environment = Environment(
        loader=PackageLoader("knought.reporting", "templates"),
        autoescape=True,
        undefined=StrictUndefined,
        trim_blocks=True,
        lstrip_blocks=True,
    )
    drawn = [
        # Our own markup, in which matplotlib and the titles' writer have escaped all text.
        (picture, Markup(report.inline(picture)))
        for picture in report.pictures
    ]
    return environment.get_template("report.html.j2").render(
        report=report,
        caveats=report.assessment.caveats,
        headline=report.tables[0],
        other_tables=report.tables[1:],
        pictures=drawn,
        methods=_methods(report),
        version=__version__,
        html=_html,
        heading=_heading,
    )


def _html(texts: tuple[tuple[Layout, str], ...]) -> str:
    """Return what is read in HTML: markup where we wrote any, else text still to be escaped.

    Only digits, signs and units of the registry have a layout of their own for HTML; text of the
    user never has.
    """
    from markupsafe import Markup

    by_layout = dict(texts)
    if "html" in by_layout:
        return Markup(by_layout["html"])
    return by_layout["text"]


def _heading(column: Column) -> str:
    """Sign and unit on two lines, so that a heading is seldom wider than its numbers."""
    from markupsafe import Markup, escape

    from knought.rounding import heading

    unit = heading("", column.unit, "html").strip()
    if not unit:
        return escape(_html(column.signs))
    # The sign is escaped or our own; units come from the registry.
    return escape(_html(column.signs)) + Markup(f'<br><span class="unit">{unit}</span>')


def _methods(report: Report) -> list[str]:
    """Return sentences for a methods section."""
    found = report.assessment.headline
    seen = report.assessment.observations
    sentences = [
        f"ln k was fitted by generalised least squares to {seen.runs} runs with "
        f"{len(found.surface.parameters)} parameters, linear in all of them; every derived "
        "quantity comes from their joint covariance.",
        f"The uncertainties are standard uncertainties {found.includes}.",
    ]
    if found.surface.salt_law.needs_water:
        sentences.append(
            "Debye–Hückel coefficients A(T) and B(T) are computed at every temperature from the "
            "density (IAPWS SR6-08) and permittivity (IAPWS R8-97) of water at 0.1 MPa."
        )
    concentration = report.assessment.choices.standard_concentration
    sentences.append(
        f"Activation parameters refer to a standard concentration of {concentration:g} mol/L and "
        "to transition-state theory with a transmission coefficient of one; constants are CODATA's."
    )
    return sentences
