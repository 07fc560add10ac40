"""The invented studies that ship with the package, run whole and held against their truth."""

from __future__ import annotations

import json
import shutil
from importlib import resources
from typing import TYPE_CHECKING

from knought.errors import InputError
from knought.files import whole_folder
from knought.reporting.cells import (
    Table,
    estimate_cells,
    interval_cell,
    number_column,
    plain_lines,
    text_column,
    unit_cell,
    words,
)
from knought.reporting.figure_files import FIGURE_FORMATS
from knought.study import read_study, write_report

if TYPE_CHECKING:
    from collections.abc import Sequence
    from importlib.resources.abc import Traversable
    from pathlib import Path

    from knought.reporting.cells import Cell
    from knought.reporting.report import Report
    from knought.rounding import Layout

__all__ = ["STUDIES", "run_demo"]

#: The studies in the order in which they are run.
STUDIES = ("like-charges", "opposite-charges", "neutral-partner")

#: What belongs to a study.
_COPIED = (".toml", ".csv", ".json")

_COMPARED = (
    "rate_constant",
    "activation_energy",
    "activation_enthalpy",
    "activation_entropy",
    "activation_gibbs_energy",
    "charge_product",
)


def run_demo(
    out: Path,
    *,
    overwrite: bool = False,
    layout: Layout = "text",
    figure_formats: Sequence[str] = FIGURE_FORMATS,
) -> str:
    """Run every invented study into `out` and return what was found beside what is true.

    Parameters
    ----------
    out
        The folder to make: one folder a study, with its input and its report.
    overwrite
        Whether an existing folder may be replaced.
    layout
        ``"text"`` or ``"ascii"``.
    figure_formats
        Formats of the figure files; see :func:`knought.study.write_report`.

    Raises
    ------
    InputError
        If the folder exists and may not be replaced, or the studies are not installed.
    """
    blocks = []
    with whole_folder(out, overwrite=overwrite) as folder:
        for name in STUDIES:
            _copy(name, folder / name)
            report = read_study(folder / name / "study.toml").report()
            write_report(report, folder / name / "report", figure_formats=figure_formats)
            truth = json.loads((folder / name / "truth.json").read_text(encoding="utf-8"))
            blocks.append("\n".join([report.title, *plain_lines(_beside(report, truth), layout)]))
    where = [f"{out / name / 'report' / 'report.html'}" for name in STUDIES]
    text = "\n\n".join([*blocks, "Reports:\n" + "\n".join(f"  {path}" for path in where)])
    if layout == "ascii":
        from knought.reporting.summary import to_ascii

        text = to_ascii(text)
    return text + "\n"


def _copy(name: str, target: Path) -> None:
    target.mkdir()
    for source in installed_study(name).iterdir():
        if source.name.endswith(_COPIED):
            with resources.as_file(source) as path:
                shutil.copyfile(path, target / source.name)


def installed_study(name: str) -> Traversable:
    """Return the installed folder of an invented study.

    Raises
    ------
    InputError
        If the package was installed without its data.
    """
    source = resources.files("knought") / "datasets" / name
    if not source.is_dir():
        raise InputError(
            "the invented studies are not installed with the package",
            "install it as a wheel (pip install .), not as an editable install",
        )
    return source


def _beside(report: Report, truth: dict[str, dict[str, float]]) -> Table:
    """Return what was found beside the true values, which were known only to the maker."""
    rows: list[tuple[Cell, ...]] = []
    for name in _COMPARED:
        estimate = report.assessment.parameters.get(name)
        if estimate is None:
            continue
        true = truth["parameters"][name]
        what = estimate.quantity
        u = what.shown(float(estimate.standard_uncertainty))
        digits = what.rounded(
            true / what.shown(1.0), None if estimate.given else u / what.shown(1.0)
        )
        low, high = (what.shown(float(end)) for end in estimate.interval(0.95))
        inside = estimate.given or low <= true <= high
        rows.append(
            (
                words(what.symbol.text),
                *estimate_cells(estimate),
                interval_cell(estimate),
                words(digits.number()),
                unit_cell(estimate),
                words("given" if estimate.given else ("inside" if inside else "outside")),
            )
        )
    return Table(
        "truth",
        report.title,
        (
            text_column(""),
            number_column("found"),
            number_column("u"),
            number_column("95 % interval"),
            number_column("true"),
            text_column("unit"),
            text_column("true value"),
        ),
        tuple(rows),
    )
