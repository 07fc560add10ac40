"""Run a study file: read, assess, and write page, record, tables and figures into a folder."""

from __future__ import annotations

from pathlib import Path
from typing import TYPE_CHECKING

from knought.cli.console import (
    add_allow_outside,
    add_figures,
    add_format,
    figure_formats,
    layout_of,
    progress_bars,
    say,
)

if TYPE_CHECKING:
    import argparse

__all__ = ["HELP", "NAME", "add_arguments", "run"]

NAME = "report"
HELP = "run a study file into a folder"


def add_arguments(parser: argparse.ArgumentParser) -> None:
    """Describe the arguments."""
    parser.add_argument("study", metavar="STUDY.toml", help="the study file")
    parser.add_argument("--out", required=True, metavar="DIR", help="folder to make")
    parser.add_argument(
        "--overwrite", action="store_true", help="replace the folder if it is there"
    )
    parser.add_argument("--open", action="store_true", help="open the page in a browser")
    add_allow_outside(parser)
    add_figures(parser)
    add_format(parser)


def run(options: argparse.Namespace) -> None:
    """Run the study and say what was found and where it is."""
    from knought.study import run_study

    layout = layout_of(options)
    with progress_bars() as progress:
        report = run_study(
            options.study,
            options.out,
            overwrite=options.overwrite,
            figure_formats=figure_formats(options),
            progress=progress,
            allow_outside=options.allow_outside,
        )
    say(report.summary(layout), layout)
    target = Path(options.out) / "report.html"
    say(f"\nreport: {target}", layout)
    if options.open:
        import webbrowser

        webbrowser.open(target.resolve().as_uri())
