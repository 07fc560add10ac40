"""The sections of the page: which sentences, figures and tables belong together, and in what order.

Tables and figures are named here once; one that no section names stands in the last section, so
that nothing of a report is ever left out.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

from knought.reporting.paragraphs import paragraphs_of

if TYPE_CHECKING:
    from knought.reporting.cells import Table
    from knought.reporting.pictures import Picture
    from knought.reporting.report import Report

__all__ = ["ANSWER_TABLES", "Section", "sections_of"]


@dataclass(frozen=True)
class Section:
    """What stands under one heading.

    Attributes
    ----------
    name
        For the anchor.
    title
        The heading.
    sentences
        Paragraphs above figures and tables.
    pictures, tables
        Figures, then tables.
    """

    name: str
    title: str
    sentences: tuple[str, ...] = ()
    pictures: tuple[Picture, ...] = ()
    tables: tuple[Table, ...] = ()

    @property
    def empty(self) -> bool:
        """Whether nothing stands under the heading."""
        return not (self.sentences or self.pictures or self.tables)


#: Name, heading, figures and tables of the sections on the assessment itself.
_ASSESSED: tuple[tuple[str, str, tuple[str, ...], tuple[str, ...]], ...] = (
    ("surface", "The surface", ("temperature", "salt", "map"), ("working", "predicted")),
    (
        "other-laws",
        "Does the conclusion survive another law?",
        ("charge-product",),
        ("laws", "temperature-laws"),
    ),
    (
        "uncertainty",
        "Where the uncertainty comes from",
        ("budget", "activation"),
        ("budget", "priors", "covariance", "correlation"),
    ),
    ("each-run", "The runs", ("traces", "residuals"), ("runs", "influence", "reduction")),
)

#: Tables of the answer itself.
ANSWER_TABLES = ("parameters", "data-alone")


def sections_of(report: Report) -> tuple[Section, ...]:
    """Return the sections of a report between the answer and the methods, without empty ones.

    Parameters
    ----------
    report
        The report.
    """
    pictures = {picture.name: picture for picture in report.pictures}
    tables = {table.name: table for table in report.tables if table.name not in ANSWER_TABLES}
    made = [
        Section(
            name,
            title,
            (),
            tuple(pictures.pop(each) for each in drawn if each in pictures),
            tuple(tables.pop(each) for each in listed if each in tables),
        )
        for name, title, drawn, listed in _ASSESSED
    ]
    discussed = () if report.discussed is None else report.discussed.sections
    for section in discussed:
        for picture in section.pictures:
            pictures.pop(picture.name)
        for table in section.tables:
            tables.pop(table.name)
    words = Section(
        "results-text",
        "Results as text to paste",
        tuple(text for title, text in paragraphs_of(report) if title == "Results"),
    )
    rest = Section("further", "Further", (), tuple(pictures.values()), tuple(tables.values()))
    return tuple(section for section in (*made, *discussed, rest, words) if not section.empty)
