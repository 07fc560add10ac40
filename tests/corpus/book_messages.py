"""What the user of a crooked workbook reads."""

from __future__ import annotations

__all__ = ["MESSAGES"]

MESSAGES = {
    "dates.xlsx": (
        "4 problems:\n  "
        "dates.xlsx, sheet Sheet, row 2, column k/s^-1: is a date or a time where a number "
        'should be (read: "2024-03-05"). A spreadsheet may have made a date of the number; '
        "type it again in a column of text.\n  "
        "dates.xlsx, sheet Sheet, row 3, column T/K: is a formula whose value is not in "
        'the file (read: "=A2+10"). Open the file in the spreadsheet program and save it '
        "there, or paste the values.\n  "
        "dates.xlsx, sheet Sheet, row 4, column T/K: is an error of the spreadsheet (read: "
        '"#REF!"). Mend the formula there.\n  '
        'dates.xlsx, sheet Sheet, row 4, column k/s^-1: is not a number (read: "TRUE"). '
        "Write numbers as 2.41 or 2.41e-3; leave the cell blank for none."
    ),
    "two-tables.xlsx": (
        "two-tables.xlsx: holds a table in more than one sheet: rates, again. Say which "
        "sheet to read (sheet, --sheet)."
    ),
    "no-such-sheet.xlsx": ("no-such-sheet.xlsx: has no sheet 'k'. The sheets are 1 rates."),
    "last-cell.xlsx": (
        "last-cell.xlsx, sheet S, row 1048576, column XFD: has a cell beyond column 1000. "
        "Save only the table in a new workbook."
    ),
    "sixteen-thousand-columns.xlsx": (
        "sixteen-thousand-columns.xlsx, sheet S, row 1, column ALM: has a cell beyond "
        "column 1000. Save only the table in a new workbook."
    ),
    "row-bomb.xlsx": (
        "row-bomb.xlsx: is far too large unpacked for a table of rate constants. Save only "
        "the table in a new workbook, or as CSV."
    ),
    "zip-bomb.xlsx": (
        "zip-bomb.xlsx: is far too large unpacked for a table of rate constants. Save only "
        "the table in a new workbook, or as CSV."
    ),
    "liar.xlsx": (
        "liar.xlsx: is damaged, or no workbook. Open it in the spreadsheet program and "
        "save it again as XLSX or ODS."
    ),
    "entity-bomb.xlsx": (
        "entity-bomb.xlsx: holds a document type declaration, which no spreadsheet program "
        "writes. Open it in the spreadsheet program and save it again."
    ),
    "deep.xlsx": (
        "deep.xlsx: is damaged, or no workbook. Open it in the spreadsheet program and "
        "save it again as XLSX or ODS."
    ),
    "no-xml.xlsx": (
        "no-xml.xlsx: is damaged, or no workbook. Open it in the spreadsheet program and "
        "save it again as XLSX or ODS."
    ),
    "no-such-string.xlsx": (
        "no-such-string.xlsx: is damaged, or no workbook. Open it in the spreadsheet "
        "program and save it again as XLSX or ODS."
    ),
    "backwards.xlsx": (
        "backwards.xlsx: is damaged, or no workbook. Open it in the spreadsheet program "
        "and save it again as XLSX or ODS."
    ),
    "cut-short.xlsx": (
        "cut-short.xlsx: is damaged, or no workbook. Open it in the spreadsheet program "
        "and save it again as XLSX or ODS."
    ),
    "letter.docx": (
        "letter.docx: is an archive and no workbook. Save the table as CSV, XLSX or ODS."
    ),
    "binary-book.xlsb": ("binary-book.xlsb: is an XLSB workbook. Save it as XLSX."),
    "archive.zip": (
        "archive.zip: is an archive and no workbook. Save the table as CSV, XLSX or ODS."
    ),
    "row-bomb.ods": (
        "row-bomb.ods, sheet S, row 2: is one row repeated 1048000 times. Save only the "
        "table in a new workbook."
    ),
    "wide.ods": (
        "wide.ods, sheet S, row 1, column A: has a cell beyond column 1000. Save only the "
        "table in a new workbook."
    ),
    "no-sheet.ods": ("no-sheet.ods: holds no sheet. Save the table as ODS or XLSX."),
}
