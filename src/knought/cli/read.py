"""Show what is understood of a table, and write it again in the clean form with its schema."""

from __future__ import annotations

from pathlib import Path
from typing import TYPE_CHECKING

from knought.cli.console import add_format, layout_of, say
from knought.cli.tables import add_table, read_table

if TYPE_CHECKING:
    import argparse

__all__ = ["HELP", "NAME", "add_arguments", "run"]

NAME = "read"
HELP = "show what is understood of a table"


def add_arguments(parser: argparse.ArgumentParser) -> None:
    """Describe the arguments."""
    add_table(parser)
    parser.add_argument(
        "--out",
        metavar="FILE.csv",
        help="write the clean table, and a Frictionless Table Schema beside it",
    )
    add_format(parser)


def run(options: argparse.Namespace) -> None:
    """Read, say what was understood, and write it clean."""
    from knought.measurement.reading import account_lines
    from knought.measurement.writing import write_rates

    rates = read_table(options)
    layout = layout_of(options)
    say("\n".join(account_lines(rates)), layout)
    if options.out:
        table, schema = write_rates(rates, Path(options.out))
        say(f"\nclean table: {table}\nschema: {schema}", layout)
