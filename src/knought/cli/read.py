"""Show what is understood of a table, and write it again in the clean form with its schema."""

from __future__ import annotations

from typing import TYPE_CHECKING

from knought.cli.console import add_format, add_overwrite, layout_of, new_file, say
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
    add_overwrite(parser)
    add_format(parser)


def run(options: argparse.Namespace) -> None:
    """Read, say what was understood, and write it clean.

    Raises
    ------
    InputError
        If the table cannot be read in one way only, or a file to write is there already.
    """
    from knought.files import refuse_existing_file
    from knought.measurement.reading import account_lines
    from knought.measurement.writing import schema_beside, write_rates

    target = new_file(options.out, options)
    if target is not None:
        refuse_existing_file(schema_beside(target), overwrite=options.overwrite)
    rates = read_table(options)
    layout = layout_of(options)
    say("\n".join(account_lines(rates)), layout)
    if target is not None:
        table, schema = write_rates(rates, target)
        say(f"\nclean table: {table}\nschema: {schema}", layout)
