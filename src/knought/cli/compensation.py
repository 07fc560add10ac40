"""Set ΔH‡ and ΔS‡ of several reactions against each other, and say what their line is worth.

Each TABLE holds the rate constants of one reaction. Errors of ΔH‡ and ΔS‡ go together, so that even
reactions that do not differ lie on a line of ΔH‡ against ΔS‡ (the isokinetic artefact); against ΔG‡
at the harmonic mean temperature the errors are nearly uncorrelated.
"""

from __future__ import annotations

from pathlib import Path
from typing import TYPE_CHECKING

from knought.cli.console import add_format, add_overwrite, layout_of, new_file, say

if TYPE_CHECKING:
    import argparse

    from knought.discussion.compensation import Compensation

__all__ = ["HELP", "NAME", "add_arguments", "run"]

NAME = "compensation"
HELP = "several reactions together: ΔH‡ against ΔS‡, and the isokinetic artefact"


def add_arguments(parser: argparse.ArgumentParser) -> None:
    """Describe the arguments."""
    parser.add_argument(
        "tables", metavar="TABLE", nargs="+", help="tables of rate constants, one a reaction"
    )
    parser.add_argument(
        "--label",
        action="append",
        metavar="TEXT",
        help="name of a reaction, once for each TABLE in the same order; the file's name, if not "
        "given",
    )
    parser.add_argument("--temperature-law", metavar="LAW", help="eyring, if not given")
    parser.add_argument("--salt-law", metavar="LAW", help="open, if not given")
    parser.add_argument("--figure", metavar="FILE.svg", help="also draw both plots")
    add_overwrite(parser)
    add_format(parser)


def run(options: argparse.Namespace) -> None:
    """Read and fit every table, and say what they show together."""
    from knought.discussion.compensation import compensation
    from knought.discussion.mechanism_sentences import compensation_sentences
    from knought.fitting.assess import assess
    from knought.measurement.reading import read_rates
    from knought.reporting.cells import plain_lines
    from knought.reporting.compensation_tables import reactions_table

    target = new_file(options.figure, options)
    labels = _labels(options.tables, options.label)
    found = compensation(
        {
            label: assess(
                read_rates(Path(table)),
                temperature_law=options.temperature_law,
                salt_law=options.salt_law,
            )
            for label, table in zip(labels, options.tables, strict=True)
        }
    )
    layout = layout_of(options)
    table = reactions_table(found)
    lines = [table.title, *plain_lines(table, layout), "", *compensation_sentences(found)]
    say("\n".join(lines), layout)
    if target is not None:
        _draw(found, target)
        say(f"\nfigure: {options.figure}", layout)


def _labels(tables: list[str], given: list[str] | None) -> list[str]:
    """Return one name a reaction, all different.

    Raises
    ------
    InputError
        If there is not one for each table, or two are the same.
    """
    from knought.errors import InputError

    labels = [Path(table).stem for table in tables] if given is None else given
    if len(labels) != len(tables):
        raise InputError(
            f"there are {len(labels)} labels for {len(tables)} tables",
            "give --label once for each TABLE, in the same order",
        )
    twice = sorted({label for label in labels if labels.count(label) > 1})
    if twice:
        raise InputError(
            f"two reactions are called {twice[0]!r}", "tell them apart with --label, one a TABLE"
        )
    return labels


def _draw(found: Compensation, target: Path) -> None:
    import io

    import matplotlib as mpl

    from knought.files import atomic_write_text
    from knought.reporting.literature_figures import compensation_plot, gibbs_plot
    from knought.reporting.style import STYLE, blank_figure

    with mpl.rc_context(STYLE):
        figure = blank_figure(height=3.2)
        left, right = figure.subplots(1, 2)
        compensation_plot(found, left)
        gibbs_plot(found, right)
        text = io.StringIO()
        figure.savefig(text, format="svg", metadata={"Date": None})
    atomic_write_text(target, text.getvalue())
