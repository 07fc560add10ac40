"""Say the rate constant at chosen temperatures and ionic strengths, with its interval.

Temperatures and ionic strengths are lists or ranges with units; k is said at every combination, and
what lies outside the runs is marked.
"""

from __future__ import annotations

from typing import TYPE_CHECKING

from knought.cli.console import add_format, layout_of, say
from knought.cli.tables import add_table, read_table

if TYPE_CHECKING:
    import argparse

__all__ = ["HELP", "NAME", "add_arguments", "run"]

NAME = "predict"
HELP = "the rate constant at chosen temperatures and ionic strengths"

#: More rows than this are a slip.
_MOST_CONDITIONS = 2000


def add_arguments(parser: argparse.ArgumentParser) -> None:
    """Describe the arguments."""
    add_table(parser)
    parser.add_argument(
        "--temperatures", required=True, metavar="TEXT", help='"25, 37 °C" or "5 to 45 °C by 10"'
    )
    parser.add_argument(
        "--ionic-strengths",
        metavar="TEXT",
        help='"0, 0.15 mol/L" or "0 to 0.2 mol/L by 0.05"; 0 if not given',
    )
    parser.add_argument("--temperature-law", metavar="LAW", help="eyring, if not given")
    parser.add_argument("--salt-law", metavar="LAW", help="open, if not given")
    parser.add_argument(
        "--reactants",
        metavar="TEXT",
        help='what enters the rate-determining step, with charges: "A^2- + B^-"',
    )
    add_format(parser)


def run(options: argparse.Namespace) -> None:
    """Read, assess, and say k at every condition.

    Raises
    ------
    InputError
        If the table, the conditions or the laws are wrong.
    """
    from itertools import product

    from knought.discussion.reach_text import read_levels
    from knought.errors import InputError
    from knought.fitting.assess import assess
    from knought.reporting.cells import plain_lines
    from knought.reporting.predicted_tables import predicted_table

    temperatures = read_levels(options.temperatures, "K")
    strengths = (
        (0.0,)
        if options.ionic_strengths is None
        else read_levels(options.ionic_strengths, "mol L^-1")
    )
    conditions = list(product(temperatures, strengths))
    if len(conditions) > _MOST_CONDITIONS:
        raise InputError(
            f"there are {len(conditions)} combinations of temperature and ionic strength",
            f"ask for {_MOST_CONDITIONS} at most",
        )
    found = assess(
        read_table(options),
        temperature_law=options.temperature_law,
        salt_law=options.salt_law,
        reactants=options.reactants,
    )
    table = predicted_table(found, conditions)
    layout = layout_of(options)
    say("\n".join([table.title, *plain_lines(table, layout)]), layout)
