"""Say which runs to do next, or first: from what can be reached and what the answer is for.

Levels are numbers between commas with a unit ("15, 25, 35 °C") or a range ("15 to 55 °C by 5").
The form that --csv writes has the headers that `knought fit` reads, with empty cells for k.
"""

from __future__ import annotations

from pathlib import Path
from typing import TYPE_CHECKING

from knought.cli.console import add_format, add_overwrite, layout_of, new_file, say

if TYPE_CHECKING:
    import argparse

    from knought.discussion.next_runs import Plan
    from knought.fitting.assess import Assessment
    from knought.rounding import Layout

__all__ = ["HELP", "NAME", "add_arguments", "run"]

NAME = "plan"
HELP = "say which runs to do next"

_AIMS = (
    "activation_energy (default), activation_entropy, rate_constant, charge_product, "
    "activation_heat_capacity, ..., all, 'rate_constant at 310.15 K, 0.15 mol/L', "
    "'charge products 2 and 3', 'laws guntelberg and davies'"
)


def add_arguments(parser: argparse.ArgumentParser) -> None:
    """Describe the arguments."""
    parser.add_argument("--temperatures", required=True, metavar="LEVELS", help="that can be set")
    parser.add_argument("--ionic-strengths", metavar="LEVELS", help="that can be set")
    parser.add_argument("--runs", required=True, type=int, metavar="N", help="how many to plan")
    parser.add_argument(
        "--repeatability", required=True, metavar="U", help='relative u of one k: "3 %%"'
    )
    parser.add_argument("--aim", default="activation_energy", metavar="AIM", help=_AIMS)
    parser.add_argument("--reactants", metavar="TEXT", help='known charges: "A^2- + B^-"')
    parser.add_argument(
        "--charge-product", type=float, metavar="Z", help="z_A z_B taken as true where unknown"
    )
    parser.add_argument("--made", metavar="TABLE", help="table of the runs already made")
    parser.add_argument("--runs-a-day", type=int, metavar="N", help="runs that a day has time for")
    parser.add_argument(
        "--change-cost",
        type=float,
        default=0.0,
        metavar="RUNS",
        help="what a change of temperature costs, in working times of a run (0)",
    )
    parser.add_argument(
        "--hazard",
        action="append",
        default=[],
        metavar="WORD",
        help="volatile, unstable or oxidiser; may be repeated",
    )
    parser.add_argument(
        "--most", type=int, metavar="N", help="also give the expected u for every number of runs"
    )
    parser.add_argument("--seed", type=int, default=20_250_101, metavar="N", help="of the order")
    parser.add_argument("--csv", metavar="FILE", help="also write the form to fill in")
    add_overwrite(parser)
    add_format(parser)


def run(options: argparse.Namespace) -> None:
    """Plan, and say what is expected of it."""
    from knought.chemistry.units import parse_quantity
    from knought.discussion.next_runs import plan
    from knought.discussion.reach_text import read_levels
    from knought.files import atomic_write_text
    from knought.reporting.plan_tables import plan_summary

    target = new_file(options.csv, options)
    strengths = options.ionic_strengths
    made = _made(options)
    planned = plan(
        read_levels(options.temperatures, "K"),
        None if strengths is None else read_levels(strengths, "mol L^-1"),
        runs=options.runs,
        repeatability=parse_quantity(options.repeatability, "1"),
        aim=options.aim,
        reactants=options.reactants,
        charge_product=options.charge_product,
        found=made,
        runs_a_day=options.runs_a_day,
        temperature_change_cost=options.change_cost,
        hazards=options.hazard,
        seed=options.seed,
    )
    layout = layout_of(options)
    say(plan_summary(planned, layout), layout)
    if options.most:
        _say_curve(planned, options.most, layout)
    if target is not None:
        atomic_write_text(target, planned.csv())
        say(f"\nform to fill in: {options.csv}", layout)


def _made(options: argparse.Namespace) -> Assessment | None:
    if options.made is None:
        return None
    from knought.fitting.assess import assess
    from knought.measurement.reading import read_rates

    return assess(read_rates(Path(options.made)), reactants=options.reactants)


def _say_curve(planned: Plan, most: int, layout: Layout) -> None:
    from knought.discussion.runs_curve import runs_curve
    from knought.reporting.cells import plain_lines
    from knought.reporting.plan_tables import curve_table

    table = curve_table(runs_curve(planned, most))
    say("\n" + "\n".join([table.title, *plain_lines(table, layout)]), layout)
