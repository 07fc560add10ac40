"""Bytes of every kind: a table or a refusal, never a traceback, never another number."""

from __future__ import annotations

import io
import zipfile
from decimal import Decimal, InvalidOperation
from typing import TYPE_CHECKING, Any

import numpy as np
import pytest
from hypothesis import example, given, settings
from hypothesis import strategies as st

from knought.errors import InputError
from knought.measurement.reading import account_lines, read_rates
from tests.corpus.workbooks import ods_of, raw_xlsx, sheet_xml, xlsx_of

if TYPE_CHECKING:
    from knought.measurement.table import RateTable

GOOD = (
    "run;t/°C;I/(mol/L);10^3 k/s^-1;u_r(k)/%;use;reason\r\n"
    "1;25,0;0,010;2,41;2;yes;\r\n2;35,0;0,100;5,10;3;no;spilled\r\n3;45,0;0,100;9,99;3;;\r\n"
).encode("cp1252")
BODY = [["298.15", "2.41e-3", "1e-5"], ["308.15", "5.1e-3", "2e-5"], ["318.15", "1.02e-2", "4e-5"]]
_ROWS: list[list[Any]] = [
    ["T/K", "k/s^-1", "note"],
    [298.15, 2.41e-3, "a"],
    [308.15, "5,1e-3", "b"],
]
BOOKS = {
    "xlsx": xlsx_of(_ROWS),
    "ods": ods_of(_ROWS),
    "shared": raw_xlsx(
        sheet_xml("A1=#0|B1=#1", "A2=#298.15|B2=#0.5").replace("<c ", '<c t="s" ', 2),
        parts={"xl/sharedStrings.xml": "<sst><si><t>T/K</t></si><si><t>k/s^-1</t></si></sst>"},
    ),
}

#: What makes cells go wrong.
_PIECES = st.sampled_from(
    ["", " ", ",", ".", ";", "'", "#", "-", "−", "+", "e", "E", "^", "×10", "*",
     "±", "(", ")", "%", "0", "1", "9", "000", "<", "=", "n/a", "\u00a0", "\u2009", "⁻³", "١", "_",
     "\ufeff", "\x00", "nan", "inf", "1e999", "/", "°C", "K", "3/4"]
)  # fmt: skip


def _read(data: bytes) -> RateTable | None:
    """Read; a refusal is fine when it says where and what to do."""
    refusal = None
    try:
        table = read_rates(io.BytesIO(data))
    except InputError as error:
        refusal = error
    if refusal is None:
        assert all(account_lines(table))
        return table
    assert refusal.problems
    assert all(problem.what and problem.remedy for problem in refusal.problems)
    assert len(str(refusal)) < 20_000
    return None


@settings(max_examples=60, deadline=None)
@given(st.binary(max_size=200))
@example(b"PK\x03\x04")
@example(b"\xff\xfe")
@example(b'"')
def test_any_bytes_are_a_table_or_a_refusal(data: bytes) -> None:
    _read(data)


@settings(max_examples=60, deadline=None)
@given(st.text(max_size=60), st.text(max_size=60))
def test_any_text_beneath_or_in_a_header_is_a_table_or_a_refusal(header: str, body: str) -> None:
    _read(f"T/K\tk/s^-1\t{header}\n{body}\n".encode("utf-8", "replace"))


@settings(max_examples=60, deadline=None)
@given(st.data())
def test_a_changed_byte_of_a_good_file_is_a_table_or_a_refusal(data: st.DataObject) -> None:
    changed = bytearray(GOOD)
    for _ in range(data.draw(st.integers(1, 3))):
        place = data.draw(st.integers(0, len(changed) - 1))
        changed[place : place + data.draw(st.integers(0, 2))] = data.draw(st.binary(max_size=2))
    _read(bytes(changed))


def _oracle(text: str) -> float | None:
    """Read a plain number in another way; None where the text is none."""
    plain = text.strip().replace("−", "-").replace("\u00a0", " ")
    try:
        return None if set(plain) & set("_ naif") else float(Decimal(plain))
    except InvalidOperation:
        return None


@settings(max_examples=100, deadline=None)
@given(st.integers(0, 2), st.integers(0, 2), st.integers(0, 7), st.integers(0, 3), _PIECES)
def test_no_number_changes_in_silence(
    row: int, column: int, place: int, dropped: int, piece: str
) -> None:
    cells = [list(line) for line in BODY]
    text = cells[row][column]
    cells[row][column] = text[:place] + piece + text[place + dropped :]
    lines = ["T/K\tk/s^-1\tu(k)/s^-1", *("\t".join(line) for line in cells)]
    table = _read("\n".join(lines).encode())
    if table is None:
        return
    assert len(table) == 3 or "left out" in str(table.account)
    kept = [place for place in range(3) if place != row or len(table) == 3]
    u = np.zeros(len(table)) if table.u_k is None else table.u_k
    for found, source in zip(zip(table.T, table.k, u, strict=True), kept, strict=False):
        for value, written in zip(found, cells[source], strict=False):
            expected = _oracle(written)
            # What the oracle cannot read (2.41(5)e-3, 1.2 × 10⁻³) is held to its digits elsewhere.
            if expected is not None and value:
                assert value == expected


@settings(max_examples=30, deadline=None)
@given(st.sampled_from(sorted(BOOKS)), st.data())
def test_a_changed_byte_of_a_workbook_is_a_table_or_a_refusal(
    book: str, data: st.DataObject
) -> None:
    changed = bytearray(BOOKS[book])
    place = data.draw(st.integers(0, len(changed) - 1))
    changed[place] = data.draw(st.integers(0, 255))
    _read(bytes(changed))


def _repacked(book: bytes, part: str, text: bytes) -> bytes:
    made = io.BytesIO()
    with zipfile.ZipFile(io.BytesIO(book)) as old, zipfile.ZipFile(made, "w") as new:
        for name in old.namelist():
            new.writestr(name, text if name == part else old.read(name))
    return made.getvalue()


PARTS = (
    ("xlsx", "xl/worksheets/sheet1.xml"),
    ("xlsx", "xl/workbook.xml"),
    ("xlsx", "xl/styles.xml"),
    ("shared", "xl/sharedStrings.xml"),
    ("shared", "xl/worksheets/sheet1.xml"),
    ("shared", "xl/_rels/workbook.xml.rels"),
    ("shared", "_rels/.rels"),
    ("ods", "content.xml"),
)


@settings(max_examples=60, deadline=None)
@given(st.sampled_from(PARTS), st.data())
def test_changed_xml_inside_a_workbook_is_a_table_or_a_refusal(
    which: tuple[str, str], data: st.DataObject
) -> None:
    book, part = BOOKS[which[0]], which[1]
    with zipfile.ZipFile(io.BytesIO(book)) as archive:
        xml = archive.read(part)
    words = [b"0", b"9", b"-1", b"", b"<", b">", b'"', b"&amp;", b"A", b"XFD1", b"t", b"s", b"1e9"]
    for _ in range(data.draw(st.integers(1, 3))):
        place = data.draw(st.integers(0, len(xml) - 1))
        end = place + data.draw(st.integers(0, 3))
        xml = xml[:place] + data.draw(st.sampled_from(words)) + xml[end:]
    _read(_repacked(book, part, xml))


@pytest.mark.parametrize(
    ("data", "what"),
    [
        (b"\xff\xfe" + b"\x00\xd8" * 4, "begins as UTF-16"),
        ("T/K\tk/s^-1\n1\t\ud800\n".encode("utf-8", "surrogatepass"), "holds|neither|not a number"),
    ],
)
def test_halves_of_characters_are_refused(data: bytes, what: str) -> None:
    with pytest.raises(InputError, match=what):
        read_rates(io.BytesIO(data))
