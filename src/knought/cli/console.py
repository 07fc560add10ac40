"""What subcommands share: saying text in a layout that the terminal can show."""

from __future__ import annotations

import sys
from contextlib import contextmanager
from pathlib import Path
from typing import TYPE_CHECKING, Any

from knought.files import refuse_existing_file

if TYPE_CHECKING:
    import argparse
    from collections.abc import Callable, Iterator

    from knought.rounding import Layout

__all__ = [
    "add_allow_outside",
    "add_figures",
    "add_format",
    "add_overwrite",
    "figure_formats",
    "layout_of",
    "new_file",
    "progress_bars",
    "say",
]


def add_format(parser: argparse.ArgumentParser) -> None:
    """Add ``--format`` to a subcommand."""
    parser.add_argument(
        "--format",
        choices=("text", "ascii"),
        default=None,
        help="ascii for terminals without Unicode (found out by itself if not given)",
    )


def add_figures(parser: argparse.ArgumentParser) -> None:
    """Add ``--figures`` to a subcommand that writes a report's folder."""
    parser.add_argument(
        "--figures",
        default="svg,pdf,png",
        metavar="FORMATS",
        help="formats of the figure files: svg,pdf,png (all three if not given), some of them, or "
        "none; the page has its figures in any case",
    )


def add_overwrite(parser: argparse.ArgumentParser) -> None:
    """Add ``--overwrite`` to a subcommand that writes a file."""
    parser.add_argument("--overwrite", action="store_true", help="replace a file that is there")


def new_file(name: str | None, options: argparse.Namespace) -> Path | None:
    """Return a file that is to be written; None where none was asked for.

    Parameters
    ----------
    name
        What the user named.
    options
        With `overwrite`, whether one that is there may be replaced.

    Raises
    ------
    InputError
        If it is there and may not be replaced; asked before any work is done.
    """
    if not name:
        return None
    refuse_existing_file(name, overwrite=options.overwrite)
    return Path(name)


def add_allow_outside(parser: argparse.ArgumentParser) -> None:
    """Add ``--allow-outside`` to a subcommand that reads what a study file names."""
    parser.add_argument(
        "--allow-outside",
        action="store_true",
        help="let the study file name files outside its own folder; only for one that you trust",
    )


def figure_formats(options: argparse.Namespace) -> tuple[str, ...]:
    """Return the formats that were asked for, without repeats; none for ``none``."""
    asked = [part.strip().lower() for part in str(options.figures).split(",")]
    return tuple(dict.fromkeys(part for part in asked if part not in {"", "none"}))


def layout_of(options: argparse.Namespace) -> Layout:
    """Return the layout that was asked for, or the one that the terminal can show."""
    if options.format is not None:
        chosen: Layout = options.format
        return chosen
    encoding = (sys.stdout.encoding or "ascii").lower().replace("-", "")
    return "text" if encoding.startswith("utf") else "ascii"


def say(text: str, layout: Layout = "text") -> None:
    """Print `text` with one line break at its end, in ASCII where nothing else can be shown."""
    if layout == "ascii" or not _shows(text):
        from knought.reporting.summary import to_ascii

        text = to_ascii(text)
    print(text.rstrip("\n"))


def _shows(text: str) -> bool:
    """Whether the output has every sign of `text`, whatever layout was asked for."""
    try:
        text.encode(sys.stdout.encoding or "ascii")
    except UnicodeEncodeError:
        return False
    return True


@contextmanager
def progress_bars() -> Iterator[Callable[[str, int], None]]:
    """Give a function that shows on a terminal how many of something are done.

    One bar for each thing that is counted; all are gone at the end, also after an interrupt.
    Nothing is shown where the output for messages is no terminal.
    """
    from tqdm import tqdm

    bars: dict[str, tqdm[Any]] = {}

    def progress(what: str, done: int) -> None:
        if what not in bars:
            bars[what] = tqdm(unit=f" {what}", disable=None, leave=False)
        bars[what].update(done - bars[what].n)

    try:
        yield progress
    finally:
        for bar in bars.values():
            bar.close()
