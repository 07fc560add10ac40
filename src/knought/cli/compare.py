"""Hold a result against literature values, each at its own temperature and ionic strength.

LITERATURE is a table with columns such as label, year, T/K, I/(mol/L), k/(L mol^-1 s^-1),
u(k)/(L mol^-1 s^-1), E_a/(kJ/mol) and "± means" (1 s, 2 s, 95 %, half-range, F-factor, none).
"""

from __future__ import annotations

from pathlib import Path
from typing import TYPE_CHECKING

from knought.cli.console import add_format, add_overwrite, layout_of, new_file, say

if TYPE_CHECKING:
    import argparse

__all__ = ["HELP", "NAME", "add_arguments", "run"]

NAME = "compare"
HELP = "hold a result against literature values at matched conditions"

_METHODS = ("dersimonian-laird", "paule-mandel", "fixed")


def add_arguments(parser: argparse.ArgumentParser) -> None:
    """Describe the arguments."""
    parser.add_argument("table", metavar="TABLE", help="the table of rate constants")
    parser.add_argument("literature", metavar="LITERATURE", help="the table of literature values")
    parser.add_argument("--sheet", help="sheet of TABLE, by name or number")
    parser.add_argument("--literature-sheet", metavar="SHEET", help="sheet of LITERATURE")
    parser.add_argument(
        "--uncertainty-means",
        metavar="TEXT",
        help='what ± means in LITERATURE where it does not say: "1 s", "2 s", "95 %%", half-range',
    )
    parser.add_argument(
        "--reactants",
        metavar="TEXT",
        help='what enters the rate-determining step, with charges: "A^2- + B^-"',
    )
    parser.add_argument("--temperature-law", metavar="LAW", help="eyring, if not given")
    parser.add_argument("--salt-law", metavar="LAW", help="open, if not given")
    parser.add_argument(
        "--method",
        choices=_METHODS,
        default=_METHODS[0],
        help="how several papers are combined (dersimonian-laird)",
    )
    parser.add_argument("--at-temperature", type=float, metavar="K", help="of the consensus, in K")
    parser.add_argument(
        "--at-ionic-strength", type=float, metavar="I", help="of the consensus, in mol/L"
    )
    parser.add_argument("--figure", metavar="FILE.svg", help="also draw the forest figure of k")
    add_overwrite(parser)
    add_format(parser)


def run(options: argparse.Namespace) -> None:
    """Read both tables, assess, compare, and say what was found."""
    from knought.discussion.compare import compare
    from knought.discussion.literature_sentences import comparison_sentences
    from knought.discussion.literature_table import read_literature
    from knought.fitting.assess import assess
    from knought.measurement.reading import read_rates
    from knought.reporting.cells import plain_lines
    from knought.reporting.literature_tables import (
        consensus_table,
        explanations_table,
        literature_table,
    )

    target = new_file(options.figure, options)
    literature = read_literature(
        Path(options.literature),
        sheet=options.literature_sheet,
        uncertainty_means=options.uncertainty_means,
    )
    found = assess(
        read_rates(Path(options.table), sheet=options.sheet),
        temperature_law=options.temperature_law,
        salt_law=options.salt_law,
        reactants=options.reactants,
    )
    comparison = compare(
        found,
        literature,
        method=options.method,
        T=options.at_temperature,
        I=options.at_ionic_strength,
    )
    layout = layout_of(options)
    tables = (
        literature_table(comparison),
        explanations_table(comparison),
        consensus_table(comparison),
    )
    blocks = [
        "\n".join([table.title, *plain_lines(table, layout)])
        for table in tables
        if table is not None
    ]
    say("\n\n".join([*blocks, "\n".join(comparison_sentences(comparison))]), layout)
    if target is not None:
        _draw(comparison, target)
        say(f"\nfigure: {options.figure}", layout)


def _draw(comparison: object, target: Path) -> None:
    import io

    import matplotlib as mpl

    from knought.discussion.compare import Comparison
    from knought.errors import InputError
    from knought.files import atomic_write_text
    from knought.reporting.literature_figures import forest
    from knought.reporting.style import STYLE, blank_figure

    carried = comparison.consensuses if isinstance(comparison, Comparison) else {}
    if not carried:
        raise InputError(
            "there are no two papers of one quantity to draw", "give more literature values"
        )
    name = "rate_constant" if "rate_constant" in carried else next(iter(carried))
    with mpl.rc_context(STYLE):
        figure = blank_figure(height=1.2 + 0.3 * len(carried[name].carried))
        forest(carried[name], figure.subplots())
        text = io.StringIO()
        figure.savefig(text, format="svg", metadata={"Date": None})
    atomic_write_text(target, text.getvalue())
