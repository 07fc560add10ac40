"""How subcommands take a table of rate constants: its arguments, and reading it with them."""

from __future__ import annotations

import sys
from pathlib import Path
from typing import TYPE_CHECKING

if TYPE_CHECKING:
    import argparse

    from knought.measurement.table import RateTable

__all__ = ["add_table", "read_table"]


def add_table(parser: argparse.ArgumentParser) -> None:
    """Add the table and what may have to be said of it to a subcommand."""
    parser.add_argument("table", metavar="TABLE", help="the table, or - for pasted cells")
    parser.add_argument("--sheet", help="sheet of a spreadsheet, by name or number")
    parser.add_argument(
        "--uncertainty-means",
        metavar="TEXT",
        help='what ± means where the header does not say: "1 s", "2 s", "95 %%", half-range',
    )
    parser.add_argument(
        "--decimal", choices=(".", ","), help="decimal mark, where the numbers do not show it"
    )
    parser.add_argument(
        "--excess", metavar="SPECIES", help="by whose concentration k_obs is to be divided"
    )


def read_table(options: argparse.Namespace) -> RateTable:
    """Read the table as the arguments say.

    Raises
    ------
    InputError
        If it cannot be read in one way only.
    """
    from knought.measurement.reading import read_rates

    source = sys.stdin.buffer if options.table == "-" else Path(options.table)
    return read_rates(
        source,
        sheet=options.sheet,
        uncertainty_means=options.uncertainty_means,
        decimal=options.decimal,
        excess=options.excess,
    )
