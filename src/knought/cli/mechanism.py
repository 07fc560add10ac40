"""Weigh candidate mechanisms by the salt effect, and say what charges and diffusion bring.

A candidate is what enters the transition state, fast pre-equilibria included, with charges:
"A^2- + B^-", or with a name in front: "direct: A^2- + B^-". What a pre-equilibrium releases stands
behind "releasing": "acid: HSO3^- + B^- releasing H+".
"""

from __future__ import annotations

from pathlib import Path
from typing import TYPE_CHECKING

from knought.cli.console import add_format, layout_of, say

if TYPE_CHECKING:
    import argparse

    from knought.discussion.candidates import Candidate

__all__ = ["HELP", "NAME", "add_arguments", "run"]

NAME = "mechanism"
HELP = "weigh candidate mechanisms by the salt effect"


def add_arguments(parser: argparse.ArgumentParser) -> None:
    """Describe the arguments."""
    parser.add_argument("table", metavar="TABLE", help="the table of rate constants")
    parser.add_argument("--sheet", help="sheet of TABLE, by name or number")
    parser.add_argument(
        "--candidate",
        action="append",
        required=True,
        metavar="TEXT",
        help='a candidate, "direct: A^2- + B^-"; give two or more',
    )
    parser.add_argument("--temperature-law", metavar="LAW", help="eyring, if not given")
    parser.add_argument(
        "--contact-distance",
        metavar="LENGTH",
        default="5 Å",
        help='distance of the two charges at contact, with its unit: "5 Å" (the default)',
    )
    parser.add_argument(
        "--contact-distance-u", metavar="LENGTH", default="0 Å", help="its standard uncertainty"
    )
    parser.add_argument(
        "--diffusion",
        nargs=2,
        metavar=("D_A", "D_B"),
        help='diffusion coefficients at 25 °C with unit, "1.9e-9 m^2 s^-1"; from the contact '
        "distance by Stokes and Einstein, if not given",
    )
    add_format(parser)


def run(options: argparse.Namespace) -> None:
    """Read, assess with the charges left open, weigh, and say what was found."""
    from knought.discussion.background import background
    from knought.discussion.mechanism import weigh
    from knought.discussion.mechanism_sentences import background_sentences, weighing_sentences
    from knought.fitting.assess import assess
    from knought.measurement.reading import read_rates
    from knought.reporting.cells import plain_lines
    from knought.reporting.mechanism_tables import (
        background_tables,
        candidates_table,
        distances_table,
    )

    found = assess(
        read_rates(Path(options.table), sheet=options.sheet),
        temperature_law=options.temperature_law,
    )
    weighing = weigh(found, _candidates(options))
    leading = max(weighing.candidates, key=lambda each: each.weight).candidate
    beside = background(found, leading)
    tables = [candidates_table(weighing), distances_table(weighing), *background_tables(beside)]
    layout = layout_of(options)
    blocks = [
        "\n".join([table.title, *plain_lines(table, layout)])
        for table in tables
        if table is not None
    ]
    sentences = [*weighing_sentences(weighing), *background_sentences(beside)]
    say("\n\n".join([*blocks, "\n".join(sentences)]), layout)


def read_candidate(text: str) -> Candidate:
    """Read a candidate from the command line.

    Parameters
    ----------
    text
        ``"name: A^2- + B^- releasing H+"``; name and release may be left out.

    Raises
    ------
    InputError
        If its species cannot be read.
    """
    from knought.discussion.candidates import Candidate

    name, colon, species = text.partition(":")
    if not colon:
        name, species = text, text
    entering, _, leaving = species.partition(" releasing ")
    return Candidate(name.strip(), entering.strip(), leaving.strip())


def _candidates(options: argparse.Namespace) -> list[Candidate]:
    """Return the candidates with the distance and the diffusion coefficients of the call."""
    from dataclasses import replace

    from knought.chemistry.units import parse_quantity

    diffusion = None
    if options.diffusion is not None:
        first, second = (parse_quantity(each, "m^2 s^-1") for each in options.diffusion)
        diffusion = (first, second)
    return [
        replace(
            read_candidate(text),
            contact_distance=parse_quantity(options.contact_distance, "m"),
            contact_distance_uncertainty=parse_quantity(options.contact_distance_u, "m"),
            diffusion_coefficients=diffusion,
        )
        for text in options.candidate
    ]
