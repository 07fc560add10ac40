"""Write a blank table with the right headers and a study file that explains itself."""

from __future__ import annotations

from pathlib import Path
from typing import TYPE_CHECKING

from knought.cli.console import add_format, layout_of, say

if TYPE_CHECKING:
    import argparse

__all__ = ["HELP", "NAME", "add_arguments", "run"]

NAME = "template"
HELP = "write a blank table and study file"


def add_arguments(parser: argparse.ArgumentParser) -> None:
    """Describe the arguments."""
    parser.add_argument(
        "--out", default="knought-study", metavar="DIR", help="folder to make (knought-study)"
    )
    add_format(parser)


def run(options: argparse.Namespace) -> None:
    """Write both and say where they are."""
    from knought.template import write_template

    for path in write_template(Path(options.out)):
        say(str(path), layout_of(options))
