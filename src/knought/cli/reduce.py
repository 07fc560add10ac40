"""Reduce traces or slopes to a table of rate constants, ready for ``knought fit``.

The sections [traces] and [medium] of the study file say what was recorded and what was in the
solutions. Written beside each other: rates.csv with its schema, and reduction.txt, everything that
was done and the shared errors as lines for the study file.
"""

from __future__ import annotations

from pathlib import Path
from typing import TYPE_CHECKING

from knought.cli.console import add_format, layout_of, say

if TYPE_CHECKING:
    import argparse

    from knought.measurement.reduction import Reduction

__all__ = ["HELP", "NAME", "add_arguments", "run"]

NAME = "reduce"
HELP = "make a rate table from traces"


def add_arguments(parser: argparse.ArgumentParser) -> None:
    """Describe the arguments."""
    parser.add_argument("study", metavar="STUDY.toml", help="file with [traces], perhaps [medium]")
    parser.add_argument(
        "--out", default="knought-rates", metavar="DIR", help="folder to make (knought-rates)"
    )
    parser.add_argument(
        "--overwrite", action="store_true", help="replace the folder if it is there"
    )
    add_format(parser)


def run(options: argparse.Namespace) -> None:
    """Reduce, write, and say what was done."""
    from knought.files import whole_folder
    from knought.measurement.writing import clean_csv
    from knought.study_sections.upstream import read_upstream

    study = Path(options.study)
    found = read_upstream(study).reduced(lambda name, _key: study.parent / name)
    text = "\n".join(_lines(found))
    with whole_folder(Path(options.out), overwrite=options.overwrite) as folder:
        files = {"rates.csv": clean_csv(found.rates), "reduction.txt": text + "\n"}
        for name, content in files.items():
            (folder / name).write_text(content, encoding="utf-8", newline="\n")
    layout = layout_of(options)
    say(text, layout)
    say(f"\nrates: {Path(options.out) / 'rates.csv'}", layout)


def _lines(found: Reduction) -> list[str]:
    lines = list(found.account)
    for code in dict.fromkeys(each.code for each in found.caveats):
        alike = [each for each in found.caveats if each.code == code]
        more = f" (and {len(alike) - 1} more runs likewise)" if len(alike) > 1 else ""
        lines.append(f"warning ({code}): {alike[0].message}{more}")
    if found.shared_errors:
        lines += ["", "Errors that the runs share; these lines belong into the study file:"]
    for each in found.shared_errors:
        lines += [
            "",
            "[[shared_errors]]",
            f'name = "{each.name}"',
            f'kind = "{each.kind}"',
            f'u = "{100 * each.u:.3g} %"',
        ]
    return lines
