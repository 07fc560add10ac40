"""The command ``knought``: thin over the library.

Exit codes: 0 done; 2 the input or the call is wrong (one message, no traceback); 1 a fault of
ours; 130 interrupted.
"""

from __future__ import annotations

import argparse
import sys
from pathlib import Path
from typing import TYPE_CHECKING

from knought import __version__

if TYPE_CHECKING:
    from collections.abc import Sequence

    from knought.rounding import Layout

__all__ = ["main"]

EXIT_DONE, EXIT_FAULT, EXIT_INPUT, EXIT_INTERRUPTED = 0, 1, 2, 130

_TEMPERATURE_LAWS = "arrhenius, modified-arrhenius, eyring (default), eyring-cp, isothermal"
_SALT_LAWS = "open (default), none, linear, limiting, guntelberg, extended, davies, sit, pitzer"

_EXAMPLES = """\
examples:
  knought demo                                    run the invented studies
  knought fit rates.csv                           table in, answer out
  knought fit rates.csv --reactants "A^2- + B^-"  the same with the charges known
  knought template --out my-study                 blank table and study file to fill in
  knought report my-study/study.toml --out report everything, into a folder
"""


def main(arguments: Sequence[str] | None = None) -> int:
    """Run the command and return its exit code.

    Parameters
    ----------
    arguments
        Words after ``knought``; those of the process if not given.
    """
    parser = _parser()
    options = parser.parse_args(arguments)
    if options.command is None:
        parser.print_help()
        return EXIT_DONE
    from knought.errors import InputError

    try:
        _COMMANDS[options.command](options)
    except InputError as error:
        print(f"knought: {error}", file=sys.stderr)  # noqa: T201
        return EXIT_INPUT
    except KeyboardInterrupt:
        print("knought: interrupted; nothing half-written is left", file=sys.stderr)  # noqa: T201
        return EXIT_INTERRUPTED
    except BrokenPipeError:
        # The reader of our output (head, less) has gone: nothing is wrong.
        sys.stderr.close()
        return EXIT_DONE
    return EXIT_DONE


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

    demo = commands.add_parser("demo", help="run the invented studies whole")
    demo.add_argument(
        "--out", default="knought-demo", metavar="DIR", help="folder to make (knought-demo)"
    )
    demo.add_argument("--overwrite", action="store_true", help="replace the folder if it is there")
    _add_format(demo)

    fit = commands.add_parser(
        "fit",
        help="fit a table of rate constants",
        description="Fit a table of rate constants at several temperatures and ionic strengths. "
        "The table is CSV, TSV or XLSX with headers such as T/K, I/(mol/L), k/(L mol^-1 s^-1) and "
        "u(k)/(L mol^-1 s^-1); '-' reads cells pasted into the terminal.",
    )
    fit.add_argument("table", metavar="TABLE", help="the table, or - for pasted cells")
    fit.add_argument("--sheet", help="sheet of a spreadsheet, by name or number")
    fit.add_argument("--temperature-law", metavar="LAW", help=_TEMPERATURE_LAWS)
    fit.add_argument("--salt-law", metavar="LAW", help=_SALT_LAWS)
    fit.add_argument("--reference-temperature", type=float, metavar="K", help="T_ref in K (298.15)")
    fit.add_argument(
        "--reactants",
        metavar="TEXT",
        help='what enters the rate-determining step, with charges: "A^2- + B^-"',
    )
    fit.add_argument("--json", metavar="FILE", help="also write the record as JSON")
    _add_format(fit)

    report = commands.add_parser("report", help="run a study file into a folder")
    report.add_argument("study", metavar="STUDY.toml", help="the study file")
    report.add_argument("--out", required=True, metavar="DIR", help="folder to make")
    report.add_argument(
        "--overwrite", action="store_true", help="replace the folder if it is there"
    )
    report.add_argument("--open", action="store_true", help="open the page in a browser")
    _add_format(report)

    template = commands.add_parser("template", help="write a blank table and study file")
    template.add_argument("--out", default="knought-study", metavar="DIR", help="folder to make")
    return parser


def _add_format(parser: argparse.ArgumentParser) -> None:
    parser.add_argument(
        "--format",
        choices=("text", "ascii"),
        default=None,
        help="ascii for terminals without Unicode (found out by itself if not given)",
    )


def _layout(options: argparse.Namespace) -> Layout:
    if options.format is not None:
        chosen: Layout = options.format
        return chosen
    encoding = (sys.stdout.encoding or "ascii").lower().replace("-", "")
    return "text" if encoding.startswith("utf") else "ascii"


def _say(text: str) -> None:
    print(text, end="" if text.endswith("\n") else "\n")  # noqa: T201


def _fit(options: argparse.Namespace) -> None:
    from knought.files import atomic_write_text
    from knought.fitting.assess import assess
    from knought.measurement.reading import account_lines, read_rates, read_text
    from knought.reporting.record import record_text
    from knought.reporting.summary import summary, to_ascii

    if options.table == "-":
        rates = read_text(sys.stdin.read(), name="pasted cells")
    else:
        rates = read_rates(Path(options.table), sheet=options.sheet)
    assessment = assess(
        rates,
        temperature_law=options.temperature_law,
        salt_law=options.salt_law,
        reference_temperature=options.reference_temperature,
        reactants=options.reactants,
    )
    layout = _layout(options)
    account = "\n".join(account_lines(rates))
    _say(to_ascii(account) if layout == "ascii" else account)
    _say("")
    _say(summary(assessment, layout))
    if options.json:
        atomic_write_text(Path(options.json), record_text(assessment))
        _say(f"record: {options.json}")


def _report(options: argparse.Namespace) -> None:
    from knought.study import run_study

    report = run_study(options.study, options.out, overwrite=options.overwrite)
    _say(report.summary(_layout(options)))
    target = Path(options.out) / "report.html"
    _say(f"report: {target}")
    if options.open:
        import webbrowser

        webbrowser.open(target.resolve().as_uri())


def _demo(options: argparse.Namespace) -> None:
    from knought.demo import run_demo

    _say(run_demo(Path(options.out), overwrite=options.overwrite, layout=_layout(options)))


def _template(options: argparse.Namespace) -> None:
    from knought.template import write_template

    for path in write_template(Path(options.out)):
        _say(str(path))


_COMMANDS = {"fit": _fit, "report": _report, "demo": _demo, "template": _template}
