"""What subcommands share: saying text in a layout that the terminal can show."""

from __future__ import annotations

import sys
from contextlib import contextmanager
from typing import TYPE_CHECKING, Any

if TYPE_CHECKING:
    import argparse
    from collections.abc import Callable, Iterator

    from knought.rounding import Layout

__all__ = ["add_figures", "add_format", "figure_formats", "layout_of", "progress_bars", "say"]


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
    """Print `text` with one line break at its end, in ASCII where the layout is."""
    if layout == "ascii":
        from knought.reporting.summary import to_ascii

        text = to_ascii(text)
    print(text.rstrip("\n"))


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
