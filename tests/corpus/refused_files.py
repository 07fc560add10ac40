"""Files that are refused as a whole, each with its whole message."""

from __future__ import annotations

from tests.corpus.case import Refused

__all__ = ["REFUSED_FILES"]

REFUSED_FILES = (
    Refused(
        "one-column.csv",
        b'"1.0;2.0"\n',
        (
            "one-column.csv, row 1: no row holds the headers of a table of rate constants "
            '(read: "1.0;2.0"). Head the columns with quantity and unit, T/K and k/s^-1, with '
            "tabs, semicolons or commas between the cells."
        ),
    ),
    Refused(
        "numbers-only.csv",
        b"1.0;2.0\n",
        (
            "numbers-only.csv, row 1: no row holds the headers of a table of rate constants "
            '(read: "1.0 | 2.0"). Head the columns with quantity and unit, T/K and k/s^-1, '
            "with tabs, semicolons or commas between the cells."
        ),
    ),
    Refused(
        "decimal-commas-between-commas.csv",
        b"T/K,k/s^-1\n298,15,2,41\n308,15,5,1\n",
        (
            "2 problems:\n  "
            "decimal-commas-between-commas.csv, row 2: has 4 cells where the header has 2 "
            '(read: "2"). Put a cell that holds the delimiter into quotation marks; a file '
            "with decimal commas needs semicolons or tabs between its cells.\n  "
            "decimal-commas-between-commas.csv, row 3: has 4 cells where the header has 2 "
            '(read: "5"). Put a cell that holds the delimiter into quotation marks; a file '
            "with decimal commas needs semicolons or tabs between its cells."
        ),
    ),
    Refused(
        "open-quote.csv",
        b'T/K,k/s^-1,note\n298.15,2.41e-3,"never closed\n308.15,5.1e-3,\n',
        (
            "open-quote.csv, row 2: cannot be taken apart into cells (unexpected end of data). "
            "Check the quotation marks in this row and above; a quotation mark inside a cell "
            "is doubled."
        ),
    ),
    Refused(
        "comma-in-note.csv",
        b"T/K,k/s^-1,note\n298.15,2.41e-3,cloudy, then clear\n",
        (
            'comma-in-note.csv, row 2: has 4 cells where the header has 3 (read: " then '
            'clear"). Put a cell that holds the delimiter into quotation marks; a file with '
            "decimal commas needs semicolons or tabs between its cells."
        ),
    ),
    Refused(
        "two-delimiters.csv",
        b"T/K;I/M,k/s^-1;n,run\n298.15;0.1,2.41e-3;2,a\n",
        (
            "two-delimiters.csv: can be taken apart at each semicolon or at each comma, and "
            "has headers either way. Save the table with tabs between its cells, or put cells "
            "that hold a delimiter into quotation marks."
        ),
    ),
    Refused(
        "spaces.txt",
        b"T/K  k/s^-1\n298.15  2.41e-3\n",
        (
            "spaces.txt, row 1: no row holds the headers of a table of rate constants (read: "
            '"T/K  k/s^-1"). Head the columns with quantity and unit, T/K and k/s^-1, with '
            "tabs, semicolons or commas between the cells."
        ),
    ),
    Refused(
        "empty.csv",
        b"",
        ("empty.csv: is empty. Save the table again."),
    ),
    Refused(
        "blank.csv",
        b"\n\n  \n",
        (
            "blank.csv: no row holds the headers of a table of rate constants. Head the "
            "columns with quantity and unit, T/K and k/s^-1, with tabs, semicolons or commas "
            "between the cells."
        ),
    ),
    Refused(
        "zeros.csv",
        b"T/K,k/s^-1\n\x00\x00\x00,1\n",
        ("zeros.csv: is no text: it holds zero bytes. Save the table as CSV (UTF-8), XLSX or ODS."),
    ),
    Refused(
        "binary.csv",
        bytes(range(256)) * 4,
        (
            "binary.csv: is no text: it holds zero bytes. Save the table as CSV (UTF-8), XLSX "
            "or ODS."
        ),
    ),
    Refused(
        "truncated-utf-16.txt",
        b"\xff\xfeT\x00/\x00K",
        (
            "truncated-utf-16.txt: begins as UTF-16 and does not go on so. Save the table "
            "again as UTF-8."
        ),
    ),
    Refused(
        "no-encoding.csv",
        b"T/K,k/s^-1\n298.15,\x81\n",
        (
            "no-encoding.csv, row 2: is neither UTF-8 nor Windows-1252 text. Save the table "
            "again as UTF-8."
        ),
    ),
    Refused(
        "control.csv",
        b"T/K,k/s^-1\n298.15,2.41e-3\x07\n",
        (
            "control.csv, row 2: holds a control character (\\x07) and is no text table. Save "
            "the table as CSV (UTF-8), XLSX or ODS."
        ),
    ),
    Refused(
        "picture.csv",
        b"\x89PNG\r\n\x1a\n",
        ("picture.csv: is a picture. Save the table as CSV, XLSX or ODS."),
    ),
    Refused(
        "print.csv",
        b"%PDF-1.7\n",
        ("print.csv: is a PDF. Save the table as CSV, XLSX or ODS."),
    ),
    Refused(
        "page.csv",
        b"<!DOCTYPE html><table></table>",
        ("page.csv: is a web page. Save the table as CSV, XLSX or ODS."),
    ),
    Refused(
        "old.xls",
        b"\xd0\xcf\x11\xe0\xa1\xb1\x1a\xe1" + b"\x00" * 100,
        (
            "old.xls: is an old .xls workbook, or one protected by a password. Save the table "
            "as CSV, XLSX or ODS."
        ),
    ),
    Refused(
        "sheet-of-text.csv",
        b"T/K,k/s^-1\n298.15,2.41e-3\n",
        ("sheet-of-text.csv: is no workbook and has no sheets. Leave the sheet out."),
        {"sheet": "rates"},
    ),
    Refused(
        "one-long-line.csv",
        b"T/K,k/s^-1\n" + b"1," * 150_000,
        (
            "one-long-line.csv, row 2: has a line of more than 200000 characters. Give a table "
            "with one row a line."
        ),
    ),
    Refused(
        "long-cell.csv",
        b"T/K,k/s^-1,note\n298.15,2.41e-3," + b"a" * 20_000 + b"\n",
        (
            "long-cell.csv, row 2: has a cell of more than 10000 characters. Check quotation "
            "marks and delimiters."
        ),
    ),
    Refused(
        "many-columns.csv",
        b"T/K,k/s^-1" + b",x" * 1200 + b"\n298.15,2.41e-3\n",
        (
            "many-columns.csv, row 1: has cells beyond column 1000. Give a table with a few "
            "columns; delete what stands far to the right."
        ),
    ),
)
