"""The folder of a report: which files it holds, and what is in each."""

from __future__ import annotations

from typing import TYPE_CHECKING

from knought.files import safe_name
from knought.reporting.cells import plain_lines
from knought.reporting.data_package import DESCRIPTOR, package_text
from knought.reporting.figure_files import FIGURE_FORMATS
from knought.reporting.page import page
from knought.reporting.paragraphs import paragraphs_markdown, paragraphs_text
from knought.reporting.record import schema_text
from knought.reporting.workbook import workbook_bytes
from knought.reporting.written_tables import latex_table, markdown_table

if TYPE_CHECKING:
    from collections.abc import Mapping, Sequence

    from knought.reporting.report import Report

__all__ = ["report_files"]


def report_files(
    report: Report, figure_formats: Sequence[str] = FIGURE_FORMATS
) -> dict[str, bytes]:
    """Return the content of every file of a report's folder, by its path in the folder.

    Parameters
    ----------
    report
        The report.
    figure_formats
        Formats of the figure files.

    Raises
    ------
    InputError
        If a format of figures is unknown.
    """
    plain = report.plain_tables
    texts = {
        "report.html": page(report),
        "results.json": report.record(),
        "results.schema.json": schema_text(),
        "summary.txt": report.summary(),
    }
    texts["paragraphs.txt"] = paragraphs_text(report)
    texts["paragraphs.md"] = paragraphs_markdown(report)
    for table, full in zip(report.tables, plain, strict=True):
        texts[f"tables/{table.name}.txt"] = "\n".join([table.title, *plain_lines(table)]) + "\n"
        texts[f"tables/{table.name}.md"] = markdown_table(table)
        texts[f"tables/{table.name}.tex"] = latex_table(table)
        texts[f"tables/{table.name}.csv"] = full.csv()
    if report.discussed is not None and report.discussed.plan is not None:
        texts["next-runs.csv"] = report.discussed.plan.csv()
    files = {name: text.encode("utf-8") for name, text in texts.items()}
    files["tables.xlsx"] = workbook_bytes(plain)
    for name, content in report.figure_files(figure_formats):
        files[f"figures/{name}"] = content
    inputs = _input_paths(report.contents)
    files |= {path: content for path, (_, content) in inputs.items()}
    kept = {path: name for path, (name, _) in inputs.items()}
    files[DESCRIPTOR] = package_text(report.title, files, plain, kept).encode("utf-8")
    return files


def _input_paths(
    contents: Sequence[tuple[str, bytes]],
) -> Mapping[str, tuple[str, bytes]]:
    """Return where what was read is kept: under its own name, made safe for every system."""
    kept: dict[str, tuple[str, bytes]] = {}
    taken: set[str] = set()
    for name, content in contents:
        parts = [safe_name(part) for part in name.replace("\\", "/").split("/") if part != "."]
        path = "/".join(["inputs", *parts])
        number = 1
        # Windows and macOS do not tell capitals from small letters.
        while path.lower() in taken:
            number += 1
            path = "/".join(["inputs", *parts[:-1], f"{number}-{parts[-1]}"])
        taken.add(path.lower())
        kept[path] = name, content
    return kept
