"""Workbooks that are read, and workbooks that are refused."""

from __future__ import annotations

from datetime import date
from typing import TYPE_CHECKING, Any

from tests.corpus.book_messages import MESSAGES
from tests.corpus.case import Accepted, Refused
from tests.corpus.workbooks import (
    ods_content,
    ods_of,
    raw_ods,
    raw_xlsx,
    sheet_xml,
    with_declared_size,
    xlsx_of,
    xlsx_with,
    zip_of,
)

if TYPE_CHECKING:
    from collections.abc import Iterator

__all__ = ["accepted_books", "refused_books"]

_ROWS: list[list[Any]] = [["T/K", "k/s^-1"], [298.15, 2.41e-3], [308.15, 5.1e-3]]
_PLAIN = {"T": [298.15, 308.15], "k": [2.41e-3, 5.1e-3]}
_HEAD = "A1=T/K|B1=k/s^-1"


def accepted_books() -> Iterator[Accepted]:
    """Make the workbooks that are read."""
    yield Accepted("plain.xlsx", xlsx_of(_ROWS), _PLAIN, ("2 of 2 runs used",))
    yield Accepted(
        "seventeen-digits.xlsx",
        raw_xlsx(sheet_xml(_HEAD, "A2=#298.14999999999998|B2=#2.4099999999999998E-3")),
        {"T": [298.15], "k": [2.41e-3]},
        ("T/K read as temperature: 298.15 → 298.15 K",),
    )
    yield Accepted(
        "numbers-as-text.xlsx",
        xlsx_of([["t/°C", "k/s⁻¹"], [25.0, "2,41·10⁻³"], ["35,0", "5,1·10⁻³"]]),
        _PLAIN,
    )
    yield Accepted(
        "merged.xlsx",
        xlsx_of(
            [
                ["Table 3", None, None],
                ["T/K", "k / s⁻¹", None],
                [None, "value", "u"],
                [298.15, 2.41e-3, 1e-5],
                [None, 2.5e-3, 1e-5],
                [308.15, 5.1e-3, 2e-5],
            ],
            merged=("A1:C1", "A2:A3", "B2:C2", "A4:A5"),
            hidden_rows=(6,),
        ),
        {"T": [298.15, 298.15, 308.15], "k": [2.41e-3, 2.5e-3, 5.1e-3], "u_k": [1e-5, 1e-5, 2e-5]},
        (
            "row 1 left out (above the header): Table 3",
            "rows 2 and 3 read as one header",
            "row 6 hidden in the sheet, and read all the same",
        ),
    )
    yield Accepted(
        "percent-format.xlsx",
        xlsx_of(
            [["T/K", "k/s^-1", "u_r(k)/%"], [298.15, 0.5, 0.02], [308.15, 0.75, 0.04]],
            formats={"C2": "0%", "C3": "0.00%"},
        ),
        {"T": [298.15, 308.15], "k": [0.5, 0.75], "u_k": [0.01, 0.03]},
    )
    yield Accepted(
        "third-sheet.xlsx",
        xlsx_of([["Read me"]], sheets={"raw": [["time/s", "A"], [1, 0.5]], "k": _ROWS}),
        _PLAIN,
        ("sheet k read, of 3 sheets",),
    )
    both = xlsx_of([["T/K", "k/s^-1"], [300, 1.5]], sheets={"k": _ROWS})
    yield Accepted("by-name.xlsx", both, _PLAIN, options={"sheet": "k"})
    yield Accepted("by-number.xlsx", both, _PLAIN, options={"sheet": 2})
    yield Accepted(
        "rich-text.xlsx",
        raw_xlsx(
            sheet_xml("A1=T/K|B1=x", "A2=#298.15|B2=#2.41e-3").replace(
                '<c r="B1" t="inlineStr"><is><t>x</t></is></c>', '<c r="B1" t="s"><v>0</v></c>'
            ),
            parts={
                "xl/sharedStrings.xml": "<sst><si><r><t>k</t></r><r><t>/s</t></r><r><t>⁻¹</t></r>"
                "<rPh sb='0' eb='1'><t>ケー</t></rPh></si></sst>"
            },
        ),
        {"T": [298.15], "k": [2.41e-3]},
    )
    yield Accepted(
        "prefixed.xlsx",
        raw_xlsx(
            sheet_xml(_HEAD, "A2=#298.15|B2=#0.5")
            .replace("<", "<x:")
            .replace("<x:/", "</x:")
            .replace("xmlns=", "xmlns:x=")
        ),
        {"T": [298.15], "k": [0.5]},
    )
    yield Accepted("plain.ods", ods_of(_ROWS), _PLAIN)
    yield Accepted(
        "comma.ods", ods_of([["t/°C", "k/s^-1"], [25.0, "2,41e-3"], ["35,0", "5,1e-3"]]), _PLAIN
    )
    yield Accepted(
        "repeated.ods",
        raw_ods(
            "<table-row><table-cell><p>T/K</p></table-cell><table-cell><p>k/s<span>⁻¹</span></p>"
            "</table-cell><table-cell><annotation><p>by eye</p></annotation><p>u_r(k)/%</p>"
            "</table-cell></table-row><table-row number-rows-repeated='3'/>"
            "<table-row number-rows-repeated='2'><table-cell value-type='float' value='298.15'/>"
            "<table-cell value-type='float' value='0.5'><p>1</p></table-cell>"
            "<table-cell value-type='percentage' value='0.02'/></table-row>"
            "<table-row visibility='collapse'><table-cell number-columns-repeated='2' "
            "value-type='float' value='300'/><table-cell value-type='percentage' value='0.01'/>"
            "</table-row>"
        ),
        {"T": [298.15, 298.15, 300.0], "k": [0.5, 0.5, 300.0], "u_k": [0.01, 0.01, 3.0]},
        ("row 7 hidden in the sheet, and read all the same",),
    )


def refused_books() -> Iterator[Refused]:
    """Make the workbooks that are refused."""
    for name, data in _crooked():
        options = {"sheet": "k"} if name == "no-such-sheet.xlsx" else {}
        yield Refused(name, data, MESSAGES[name], options)


def _crooked() -> Iterator[tuple[str, bytes]]:
    dates = {"B2": date(2024, 3, 5), "A3": "=A2+10", "B3": 0.5, "A4": "#REF!", "B4": True}
    yield "dates.xlsx", xlsx_with({"A1": "T/K", "B1": "k/s^-1", "A2": 298.15} | dates)
    yield "two-tables.xlsx", xlsx_of(_ROWS, sheets={"again": _ROWS})
    yield "no-such-sheet.xlsx", xlsx_of(_ROWS)
    yield "last-cell.xlsx", raw_xlsx(sheet_xml(_HEAD, "XFD1048576=#1"))
    wide = sheet_xml(_HEAD).replace("</row>", "<c><v>1</v></c>" * 16_000 + "</row>")
    yield "sixteen-thousand-columns.xlsx", raw_xlsx(wide)
    yield (
        "row-bomb.xlsx",
        raw_xlsx('<worksheet><sheetData><row r="1048577"/></sheetData></worksheet>'),
    )
    whole = xlsx_of(_ROWS)
    yield "zip-bomb.xlsx", with_declared_size(whole, "xl/worksheets/sheet1.xml", 500_000_000)
    yield "liar.xlsx", with_declared_size(whole, "xl/worksheets/sheet1.xml", 100)
    entities = '<!DOCTYPE w [<!ENTITY a "aa"><!ENTITY b "&a;&a;">]>'
    yield "entity-bomb.xlsx", raw_xlsx(entities + sheet_xml(_HEAD))
    yield "deep.xlsx", raw_xlsx("<a>" * 200)
    yield "no-xml.xlsx", raw_xlsx("T/K,k/s^-1")
    yield "no-such-string.xlsx", raw_xlsx(sheet_xml("A1=#7").replace("<c ", '<c t="s" '))
    yield "backwards.xlsx", raw_xlsx(sheet_xml("B1=T/K|A1=k/s^-1"))
    yield "cut-short.xlsx", whole[: len(whole) // 2]
    yield "letter.docx", raw_xlsx("<w/>", main="word/document.xml")
    yield "binary-book.xlsb", raw_xlsx("<w/>", main="xl/workbook.bin")
    yield "archive.zip", zip_of({"rates.csv": "T/K,k/s^-1\n"})
    header = "<table-cell><p>T/K</p></table-cell><table-cell><p>k/s^-1</p></table-cell>"
    number = "<table-cell value-type='float' value='300' number-columns-repeated='2'/>"
    yield (
        "row-bomb.ods",
        raw_ods(
            f"<table-row>{header}</table-row>"
            f"<table-row number-rows-repeated='1048000'>{number}</table-row>"
        ),
    )
    cell = "<table-cell number-columns-repeated='16384'><p>T/K</p></table-cell>"
    yield "wide.ods", raw_ods(f"<table-row>{cell}</table-row>")
    yield "no-sheet.ods", ods_content("<text><p>T/K</p></text>")
