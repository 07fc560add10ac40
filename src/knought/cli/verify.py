"""Hold a report's folder against its hashes, and run its study again.

Says which file was changed, which input is another, and whether every number agrees to 1e-9.
"""

from __future__ import annotations

from typing import TYPE_CHECKING

from knought.cli.console import add_allow_outside, add_format, layout_of, progress_bars, say

if TYPE_CHECKING:
    import argparse

__all__ = ["HELP", "NAME", "add_arguments", "run"]

NAME = "verify"
HELP = "whether a report's folder is as it was written, and comes out again"


def add_arguments(parser: argparse.ArgumentParser) -> None:
    """Describe the arguments."""
    parser.add_argument("folder", metavar="FOLDER", help="folder that `knought report` made")
    parser.add_argument(
        "--study",
        metavar="STUDY.toml",
        help="run this study file instead of the one kept in the folder",
    )
    add_allow_outside(parser)
    add_format(parser)


def run(options: argparse.Namespace) -> None:
    """Verify, and say what was found.

    Raises
    ------
    InputError
        If anything does not agree.
    """
    from knought.errors import InputError
    from knought.verify import verify

    with progress_bars() as progress:
        found = verify(
            options.folder,
            options.study,
            allow_outside=options.allow_outside,
            progress=progress,
        )
    if not found.agrees:
        raise InputError(found.problems)
    say(str(found), layout_of(options))
