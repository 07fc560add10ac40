"""Tables for other programs: plain columns, workbook, Markdown, LaTeX."""

from __future__ import annotations

import io
import shutil
import subprocess
from typing import TYPE_CHECKING

import openpyxl
import pytest

import knought as kn
from knought.reporting.plain_tables import plain_table
from knought.reporting.workbook import workbook_bytes
from knought.reporting.written_tables import LATEX_PACKAGES, latex_table, latex_text, markdown_table
from tests.reporting.test_golden import STATES

if TYPE_CHECKING:
    from pathlib import Path


@pytest.fixture(scope="module")
def hostile() -> kn.Report:
    return STATES["hostile"]()


def test_u_and_ends_of_intervals_have_their_own_columns(hostile: kn.Report) -> None:
    frame = hostile.frame("parameters")
    assert list(frame.columns)[2:6] == [
        "value",
        "u",
        "95 % interval, lower",
        "95 % interval, upper",
    ]
    estimate = hostile.assessment.parameters["activation_energy"]
    row = frame[frame["symbol"] == "activation_energy"].iloc[0]
    assert row["value"] == estimate.value / 1000
    assert row["u"] == pytest.approx(float(estimate.standard_uncertainty) / 1000, rel=1e-15)
    assert row["95 % interval, lower"] < row["value"] < row["95 % interval, upper"]
    runs = hostile.frame("runs")
    assert runs["u(k) / s^-1"].tolist() == [2e-5, 5e-5, 1e-4]
    with pytest.raises(kn.InputError, match="Take one of parameters"):
        hostile.frame("no such table")


def test_a_workbook_has_numbers_as_numbers_and_never_a_formula(hostile: kn.Report) -> None:
    plain = hostile.plain_tables
    content = workbook_bytes(plain)
    assert content == workbook_bytes(plain)
    book = openpyxl.load_workbook(io.BytesIO(content))
    assert book.sheetnames == [table.name[:31] for table in plain]
    kinds = {cell.data_type for sheet in book for row in sheet.iter_rows() for cell in row}
    assert kinds <= {"n", "s", "inlineStr"}  # and none is "f"
    rows = list(book["runs"].iter_rows(min_row=3, values_only=True))
    assert rows[2][0] == "=cmd()"
    assert rows[2][2] == 2.4e-3


def test_labels_are_no_commands_in_csv_latex_or_markdown(hostile: kn.Report) -> None:
    runs = next(table for table in hostile.tables if table.name == "runs")
    assert "\n'=cmd()," in plain_table(runs).csv()
    assert latex_text(r"\input{x}%_#&$~^") == (
        r"\textbackslash{}input\{x\}\%\_\#\&\$\textasciitilde{}\textasciicircum{}"
    )
    assert latex_text("[a] *") == "{[}a{]} {*}"  # after \\ these would be an option, a star
    assert latex_text("Å é ‡ 日 \x07") == "Å é $^{\\ddagger}$ ? ?"
    assert r"\<script\>" in markdown_table(runs)
    assert r"\textless{}script\textgreater{}" in latex_table(runs)


@pytest.mark.latex
@pytest.mark.skipif(shutil.which("pdflatex") is None, reason="no LaTeX compiler is installed")
def test_every_table_compiles(tmp_path: Path) -> None:
    tables = [table for state in STATES.values() for table in state().tables]
    lines = [r"\documentclass{article}", r"\usepackage[a3paper,landscape,margin=1cm]{geometry}"]
    lines += [*LATEX_PACKAGES, r"\begin{document}"]
    for number, table in enumerate(tables):
        lines += [
            latex_table(table).replace(r"\label{tab:", rf"\label{{tab:{number}-"),
            r"\clearpage",
        ]
    (tmp_path / "tables.tex").write_text("\n".join([*lines, r"\end{document}"]), encoding="utf-8")
    done = subprocess.run(
        ["pdflatex", "-interaction=nonstopmode", "-halt-on-error", "tables.tex"],
        cwd=tmp_path, capture_output=True, text=True, errors="replace", check=False, timeout=300,
    )  # fmt: skip
    assert done.returncode == 0, done.stdout[-2000:]
    assert (tmp_path / "tables.pdf").stat().st_size > 10_000
