"""Reads the words of a call, hands them to a subcommand, and turns errors into exit codes."""

from __future__ import annotations

import argparse
import io
import sys
from typing import TYPE_CHECKING, Protocol

from knought.cli import (
    compare,
    compensation,
    demo,
    fit,
    mechanism,
    medium,
    plan,
    predict,
    read,
    reduce,
    report,
    template,
    verify,
)
from knought.version import __version__

if TYPE_CHECKING:
    from collections.abc import Sequence

__all__ = ["main"]

EXIT_DONE, EXIT_INPUT, EXIT_INTERRUPTED = 0, 2, 130

_EXAMPLES = """\
examples:
  knought demo                                     run the invented studies
  knought read rates.xlsx --out clean.csv          what is understood of a table
  knought fit rates.csv                            table in, answer out
  knought fit rates.csv --reactants "A^2- + B^-"   the same with the charges known
  knought compensation a.csv b.csv c.csv           several reactions together
  knought template --out my-study                  blank table and study file to fill in
  knought report my-study/study.toml --out report  everything, into a folder
  knought verify report                            whether it is as written, and comes out again
"""


class Subcommand(Protocol):
    """What a module of a subcommand offers.

    Attributes
    ----------
    NAME
        The word behind ``knought``.
    HELP
        One line that says what it does.
    """

    NAME: str
    HELP: str

    def add_arguments(self, parser: argparse.ArgumentParser) -> None:
        """Describe its arguments."""

    def run(self, options: argparse.Namespace) -> None:
        """Do it; an InputError says what is wrong with the call."""


#: Subcommands in the order in which the help lists them.
_SUBCOMMANDS: tuple[Subcommand, ...] = (
    demo,
    medium,
    reduce,
    read,
    fit,
    report,
    verify,
    predict,
    compare,
    mechanism,
    compensation,
    plan,
    template,
)


def main(arguments: Sequence[str] | None = None) -> int:
    """Run the command and return its exit code.

    Parameters
    ----------
    arguments
        Words after ``knought``; those of the process if not given.
    """
    _say_what_cannot_be_shown_as_question_marks()
    parser = _parser()
    options = parser.parse_args(arguments)
    if options.command is None:
        parser.print_help()
        return EXIT_DONE
    from knought.errors import InputError

    run = next(each.run for each in _SUBCOMMANDS if options.command == each.NAME)
    try:
        run(options)
    except InputError as error:
        print(f"knought: {error}", file=sys.stderr)
        return EXIT_INPUT
    except KeyboardInterrupt:
        print("knought: interrupted; nothing half-written is left", file=sys.stderr)
        return EXIT_INTERRUPTED
    except BrokenPipeError:
        # The reader of our output (head, less) has gone: nothing is wrong.
        sys.stderr.close()
        return EXIT_DONE
    return EXIT_DONE


def _say_what_cannot_be_shown_as_question_marks() -> None:
    """Let help texts and messages pass through terminals without Unicode."""
    for stream in (sys.stdout, sys.stderr):
        if isinstance(stream, io.TextIOWrapper):
            stream.reconfigure(errors="replace")


def _parser() -> argparse.ArgumentParser:
    parser = argparse.ArgumentParser(
        prog="knought",
        description="Activation parameters, the rate constant at zero ionic strength and the "
        "charge product of the rate-determining step, each with an uncertainty that says what it "
        "means.",
        epilog=_EXAMPLES,
        formatter_class=argparse.RawDescriptionHelpFormatter,
    )
    parser.add_argument("--version", action="version", version=f"knought {__version__}")
    commands = parser.add_subparsers(dest="command", metavar="command", title="commands")
    for each in _SUBCOMMANDS:
        each.add_arguments(
            commands.add_parser(each.NAME, help=each.HELP, description=(each.__doc__ or "").strip())
        )
    return parser
