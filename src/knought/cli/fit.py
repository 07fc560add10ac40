"""Fit a table of rate constants at several temperatures and ionic strengths.

The table is CSV, TSV or XLSX with headers such as T/K, I/(mol/L), k/(L mol^-1 s^-1) and
u(k)/(L mol^-1 s^-1); a dash reads cells pasted into the terminal.
"""

from __future__ import annotations

from typing import TYPE_CHECKING

from knought.cli.console import add_format, add_overwrite, layout_of, new_file, progress_bars, say
from knought.cli.tables import add_table, read_table

if TYPE_CHECKING:
    import argparse

    from knought.fitting.assess import Assessment
    from knought.rounding import Layout

__all__ = ["HELP", "NAME", "add_arguments", "run"]

NAME = "fit"
HELP = "fit a table of rate constants"

_TEMPERATURE_LAWS = "arrhenius, modified-arrhenius, eyring (default), eyring-cp, isothermal"
_SALT_LAWS = "open (default), none, linear, limiting, guntelberg, extended, davies, sit, pitzer"


def add_arguments(parser: argparse.ArgumentParser) -> None:
    """Describe the arguments."""
    add_table(parser)
    parser.add_argument("--temperature-law", metavar="LAW", help=_TEMPERATURE_LAWS)
    parser.add_argument("--salt-law", metavar="LAW", help=_SALT_LAWS)
    parser.add_argument(
        "--reference-temperature", type=float, metavar="K", help="T_ref in K (298.15)"
    )
    parser.add_argument(
        "--reactants",
        metavar="TEXT",
        help='what enters the rate-determining step, with charges: "A^2- + B^-"',
    )
    parser.add_argument(
        "--monte-carlo",
        nargs="?",
        type=int,
        const=0,
        metavar="DRAWS",
        help="check every ± by Monte Carlo (JCGM 101); as many draws as it takes, if no number",
    )
    parser.add_argument(
        "--seed", type=int, default=None, metavar="N", help="seed of the draws (20250101)"
    )
    parser.add_argument("--json", metavar="FILE", help="also write the record as JSON")
    add_overwrite(parser)
    add_format(parser)


def run(options: argparse.Namespace) -> None:
    """Read, assess, and say what was found."""
    from knought.files import atomic_write_text
    from knought.fitting.assess import assess
    from knought.measurement.reading import account_lines
    from knought.reporting.record import record_text
    from knought.reporting.summary import summary

    target = new_file(options.json, options)
    rates = read_table(options)
    assessment = assess(
        rates,
        temperature_law=options.temperature_law,
        salt_law=options.salt_law,
        reference_temperature=options.reference_temperature,
        reactants=options.reactants,
    )
    layout = layout_of(options)
    say("\n".join([*account_lines(rates), ""]), layout)
    say("\n" + summary(assessment, layout), layout)
    if options.monte_carlo is not None:
        say("\n" + _drawn(assessment, options, layout), layout)
    if target is not None:
        atomic_write_text(target, record_text(assessment))
        say(f"\nrecord: {options.json}", layout)


def _drawn(assessment: Assessment, options: argparse.Namespace, layout: Layout) -> str:
    """Draw, with a progress bar on the terminal, and arrange what was found."""
    from knought.fitting.monte_carlo import monte_carlo
    from knought.numerics.seeds import DEFAULT_SEED
    from knought.reporting.cells import plain_lines
    from knought.reporting.uncertainty_tables import monte_carlo_table

    seed = DEFAULT_SEED if options.seed is None else options.seed
    with progress_bars() as progress:
        drawn = monte_carlo(
            assessment.headline,
            options.monte_carlo or None,
            seed=seed,
            progress=lambda done: progress("draws", done),
        )
    table = monte_carlo_table(drawn)
    return "\n".join([table.title, *plain_lines(table, layout)])
