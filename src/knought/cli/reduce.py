"""Reduce traces or slopes to a table of rate constants, ready for ``knought fit``.

The sections [traces] and [medium] of the study file say what was recorded and what was in the
solutions. Written beside each other: rates.csv with its schema; study.toml, which names the table
and holds the errors that runs share (`knought report` takes it); reduction.txt, all that was done.
"""

from __future__ import annotations

import json
from pathlib import Path
from typing import TYPE_CHECKING

from knought.cli.console import add_allow_outside, add_format, layout_of, say

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
    add_allow_outside(parser)
    add_format(parser)


def run(options: argparse.Namespace) -> None:
    """Reduce, write, and say what was done."""
    from knought.beside import Beside
    from knought.files import whole_folder
    from knought.measurement.writing import clean_csv, table_schema
    from knought.study_sections.upstream import read_upstream

    study, out = Path(options.study), Path(options.out)
    found = read_upstream(study).reduced(Beside(study, allow_outside=options.allow_outside).find)
    text = "\n".join(_lines(found))
    schema = json.dumps(table_schema(found.rates), indent=1, ensure_ascii=False) + "\n"
    files = {
        "rates.csv": clean_csv(found.rates),
        "rates.schema.json": schema,
        "study.toml": "\n".join(_study(found)) + "\n",
        "reduction.txt": text + "\n",
    }
    with whole_folder(out, overwrite=options.overwrite) as folder:
        for name, content in files.items():
            (folder / name).write_text(content, encoding="utf-8", newline="\n")
    layout = layout_of(options)
    say(text, layout)
    say(f"\nrates: {out / 'rates.csv'}", layout)
    if found.shared_errors:
        names = ", ".join(each.name for each in found.shared_errors)
        say(f"study: {out / 'study.toml'}, with the errors that runs share: {names}", layout)


def _lines(found: Reduction) -> list[str]:
    lines = list(found.account)
    for code in dict.fromkeys(each.code for each in found.caveats):
        alike = [each for each in found.caveats if each.code == code]
        more = f" (and {len(alike) - 1} more runs likewise)" if len(alike) > 1 else ""
        lines.append(f"warning ({code}): {alike[0].message}{more}")
    return lines


def _study(found: Reduction) -> list[str]:
    """Return a study file for the table: `knought report` takes it as it is."""
    lines = [
        "# Written by knought reduce. A table alone does not hold the errors that runs share; this",
        "# study does.",
        "[rates]",
        'file = "rates.csv"',
    ]
    for each in found.shared_errors:
        lines += [
            "",
            "[[shared_errors]]",
            f"name = {_string(each.name)}",
            f'kind = "{each.kind}"',
            f'u = "{100 * each.u:.10g} %"',
        ]
        for key, effects in (("on_ln_k", each.on_ln_k), ("on_ln_I", each.on_ln_I)):
            if effects:
                pairs = (f"{_string(run)} = {float(effect)!r}" for run, effect in effects.items())
                lines.append(f"{key} = {{ {', '.join(pairs)} }}")
    return lines


def _string(text: str) -> str:
    """Return a TOML string; JSON's escapes are TOML's, too."""
    return json.dumps(text, ensure_ascii=False).replace("\x7f", "\\u007f")
