"""The page: one self-contained HTML file made from a :class:`Report`.

It asks nothing of the network and can be read without its script, which only labels the runs that
are pointed at and copies tables.
"""

from __future__ import annotations

import base64
import hashlib
import math
from typing import TYPE_CHECKING

from knought.reporting.cells import interval_cell
from knought.reporting.methods import methods_sentences
from knought.reporting.style import DOUBLE_COLUMN, SINGLE_COLUMN

if TYPE_CHECKING:
    from collections.abc import Mapping

    from jinja2 import Environment

    from knought.fitting.assess import Assessment
    from knought.reporting.cells import Cell, Column
    from knought.reporting.pictures import Picture
    from knought.reporting.report import Report
    from knought.rounding import Layout

__all__ = ["page", "written_page"]


#: The results that the page begins with.
_FIRST = ("rate_constant", "activation_energy", "activation_entropy", "charge_product")

#: Text cells longer than this are folded.
_LONG = 40


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
    return written_page(report, {each.name: _drawing(report, each) for each in report.pictures})


def written_page(report: Report, drawn: Mapping[str, str]) -> str:
    """Return the page with the drawings given.

    Parameters
    ----------
    report
        The report.
    drawn
        Markup of every picture by its name.
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
    # Our own files and drawings, in which matplotlib and the titles' writer have escaped all text.
    style, script = (Markup(_own_file(environment, name)) for name in ("report.css", "report.js"))
    return environment.get_template("report.html.j2").render(
        report=report,
        policy=_policy(style, script),
        style=style,
        script=script,
        caveats=report.assessment.caveats,
        answers=_answers(report.assessment),
        answer_tables=report.answer_tables,
        sections=report.sections,
        drawn={name: Markup(drawing) for name, drawing in drawn.items()},
        methods=methods_sentences(report.assessment),
        version=__version__,
        html=_html,
        heading=_heading,
        attributes=_attributes,
    )


def _own_file(environment: Environment, name: str) -> str:
    """Return a style sheet or script as it stands beside the template.

    Raises
    ------
    FileNotFoundError
        If the package was installed without it.
    """
    if environment.loader is None:
        raise FileNotFoundError(name)
    return environment.loader.get_source(environment, name)[0]


def _policy(style: str, script: str) -> str:
    """Return a policy that allows this style, this script, and nothing from anywhere."""
    hashes = [
        base64.b64encode(hashlib.sha256(text.encode("utf-8")).digest()).decode("ascii")
        for text in (style, script)
    ]
    return (
        f"default-src 'none'; style-src 'sha256-{hashes[0]}'; script-src 'sha256-{hashes[1]}'; "
        "img-src data:; base-uri 'none'; form-action 'none'"
    )


def _drawing(report: Report, picture: Picture) -> str:
    """Return a picture for wide and for narrow screens; the style sheet shows one of them."""
    return "\n".join(
        report.inline(picture, width).replace("<svg ", f'<svg class="{name}" ', 1)
        for name, width in (("wide", DOUBLE_COLUMN), ("narrow", SINGLE_COLUMN))
    )


def _answers(assessment: Assessment) -> list[tuple[str, str, str]]:
    """Return words, value with u, and interval of the results that the page begins with."""
    from markupsafe import Markup

    found: list[tuple[str, str, str]] = []
    for name in _FIRST:
        estimate = assessment.parameters.get(name)
        if estimate is None:
            continue
        interval = "given"
        if not estimate.given:
            ends = Markup(interval_cell(estimate).written("html"))
            interval = Markup("95 %: {}").format(ends)
        # Signs, digits and units are the registry's own.
        value = Markup(f"{estimate.quantity.symbol.html} = {estimate.written('html')}")
        found.append((estimate.quantity.words, value, interval))
    return found


def _attributes(cell: Cell, tag: str, *, numeric: bool) -> str:
    """Return class and full numbers of a cell, for the style sheet and for copying."""
    from markupsafe import Markup

    made = ' scope="row"' if tag == "th" else ""
    if numeric:
        made += ' class="number"'
    elif len(cell.written()) > _LONG:
        made += ' class="long"'
    if isinstance(cell.raw, float) and math.isfinite(cell.raw):
        made += f' data-value="{cell.raw!r}"'
    if cell.uncertainty is not None and math.isfinite(cell.uncertainty):
        made += f' data-u="{cell.uncertainty!r}"'
    return Markup(made)


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
