"""Run the invented studies that ship with the package, and hold the answers against the truth."""

from __future__ import annotations

from pathlib import Path
from typing import TYPE_CHECKING

from knought.cli.console import add_figures, add_format, figure_formats, layout_of, say

if TYPE_CHECKING:
    import argparse

__all__ = ["HELP", "NAME", "add_arguments", "run"]

NAME = "demo"
HELP = "run the invented studies whole"


def add_arguments(parser: argparse.ArgumentParser) -> None:
    """Describe the arguments."""
    parser.add_argument(
        "--out", default="knought-demo", metavar="DIR", help="folder to make (knought-demo)"
    )
    parser.add_argument(
        "--overwrite", action="store_true", help="replace the folder if it is there"
    )
    add_figures(parser)
    add_format(parser)


def run(options: argparse.Namespace) -> None:
    """Run the studies and say what was found."""
    from knought.demo import run_demo

    layout = layout_of(options)
    said = run_demo(
        Path(options.out),
        overwrite=options.overwrite,
        layout=layout,
        figure_formats=figure_formats(options),
    )
    say(said, layout)
