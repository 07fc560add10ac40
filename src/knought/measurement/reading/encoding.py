"""From bytes to text by rule: a byte order mark, else strict UTF-8, else Windows-1252.

ISO-8859-1 differs from Windows-1252 in control characters only, which no table holds. Text that
fits none of them is refused; nothing is guessed from the frequency of letters.
"""

from __future__ import annotations

import codecs
import re

from knought.errors import InputError, Problem

__all__ = ["decoded"]

_MARKS = (
    (codecs.BOM_UTF8, "utf-8", "UTF-8"),
    (codecs.BOM_UTF32_LE, "utf-32", "UTF-32"),
    (codecs.BOM_UTF32_BE, "utf-32", "UTF-32"),
    (codecs.BOM_UTF16_LE, "utf-16", "UTF-16"),
    (codecs.BOM_UTF16_BE, "utf-16", "UTF-16"),
)

#: Control characters that no text table holds.
_CONTROL = re.compile(r"[\x00-\x08\x0b\x0e-\x1f\x7f-\x9f\ufffe\uffff]")

#: How files begin that people mistake for tables.
_KNOWN_FILES = (
    (b"%PDF", "a PDF"),
    (b"\xd0\xcf\x11\xe0", "an old .xls workbook, or one protected by a password"),
    (b"\x89PNG", "a picture"),
    (b"\xff\xd8\xff", "a picture"),
    (b"\x1f\x8b", "a compressed file"),
    (b"{\\rtf", "a text-processor document"),
    (b"<!DOCTYPE html", "a web page"),
    (b"<html", "a web page"),
)


def decoded(data: bytes, name: str) -> tuple[str, str]:
    """Decode a text file.

    Parameters
    ----------
    data
        Its bytes.
    name
        File name for messages.

    Returns
    -------
    text, encoding
        Line ends as they are; the name of the encoding for the account.

    Raises
    ------
    InputError
        If it is no text, or in no encoding that is read.
    """
    for start, kind in _KNOWN_FILES:
        if data.startswith(start):
            raise InputError(Problem(f"is {kind}", "save the table as CSV, XLSX or ODS", file=name))
    text, encoding = _by_rule(data, name)
    control = _CONTROL.search(text)
    if control is not None:
        raise InputError(
            Problem(
                f"holds a control character ({ascii(control[0])[1:-1]}) and is no text table",
                "save the table as CSV (UTF-8), XLSX or ODS",
                file=name,
                row=text.count("\n", 0, control.start()) + 1,
            )
        )
    return text, encoding


def _by_rule(data: bytes, name: str) -> tuple[str, str]:
    for mark, codec, words in _MARKS:
        if data.startswith(mark):
            try:
                return data.decode(codec).removeprefix("\ufeff"), words
            except UnicodeDecodeError as error:
                raise InputError(
                    Problem(
                        f"begins as {words} and does not go on so",
                        "save the table again as UTF-8",
                        file=name,
                    )
                ) from error
    if b"\x00" in data:
        raise InputError(
            Problem(
                "is no text: it holds zero bytes",
                "save the table as CSV (UTF-8), XLSX or ODS",
                file=name,
            )
        )
    try:
        return data.decode("utf-8"), "UTF-8"
    except UnicodeDecodeError:
        # Not UTF-8; every byte but five has a meaning in Windows-1252.
        pass
    try:
        return data.decode("cp1252"), "Windows-1252"
    except UnicodeDecodeError as error:
        raise InputError(
            Problem(
                "is neither UTF-8 nor Windows-1252 text",
                "save the table again as UTF-8",
                file=name,
                row=data.count(b"\n", 0, error.start) + 1,
            )
        ) from error
