"""Workbooks are zip archives of XML: opened only when small enough unpacked, and free of entities.

The directory of the archive says how large each part is unpacked, and Python's zip reader never
gives more than that; so a bomb is refused before anything of it is unpacked. The parser of
defusedxml refuses document type declarations, without which there are no entities.
"""

from __future__ import annotations

import io
import zipfile
import zlib
from typing import TYPE_CHECKING, Any
from xml.sax import SAXException
from xml.sax.handler import ContentHandler
from xml.sax.xmlreader import AttributesImpl

from knought.errors import InputError, Problem

if TYPE_CHECKING:
    from collections.abc import Iterator

__all__ = ["Archive", "AttributesImpl", "Handler", "TooMuchError", "attribute"]

#: What a damaged archive, or XML that is none of a workbook, makes the parsers raise.
_DAMAGE = (
    SAXException, zipfile.BadZipFile, zlib.error, EOFError, ArithmeticError, LookupError,
    ValueError, NotImplementedError, RuntimeError,
)  # fmt: skip

_LARGEST_PART = 400_000_000
_LARGEST_SUM = 800_000_000
_MOST_PARTS = 5000
_CHUNK = 1 << 16

#: A million runs in five columns have 11 million elements and some 100 million characters.
_MOST_ELEMENTS = 15_000_000
_MOST_CHARACTERS = 150_000_000

#: No XML of a workbook nests deeper.
_DEEPEST = 100


class TooMuchError(Exception):
    """A part holds more than a table of rate constants can."""


def attribute(attributes: AttributesImpl, name: str) -> str | None:
    """Return an attribute by its name without namespace prefix; None where it is missing."""
    for key in attributes.getNames():
        if key.rpartition(":")[2] == name:
            value: str = attributes.getValue(key)
            return value
    return None


class Handler(ContentHandler):
    """What is done with the elements of a part; names come without their namespace prefix."""

    def __init__(self) -> None:
        super().__init__()
        self._depth = self._elements = self._characters = 0

    def startElement(self, name: str, attrs: AttributesImpl) -> None:
        """Take the beginning of an element.

        Raises
        ------
        TooMuchError
            If there are too many elements.
        ValueError
            If they nest too deep.
        """
        self._depth += 1
        self._elements += 1
        if self._depth > _DEEPEST:
            raise ValueError("elements nest too deep")
        if self._elements > _MOST_ELEMENTS:
            raise TooMuchError
        self.begin(name.rpartition(":")[2], attrs)

    def endElement(self, name: str) -> None:
        """Take the end of an element."""
        self._depth -= 1
        self.end(name.rpartition(":")[2])

    def count(self, content: str) -> None:
        """Count text that is kept.

        Raises
        ------
        TooMuchError
            If it is too much.
        """
        self._characters += len(content)
        if self._characters > _MOST_CHARACTERS:
            raise TooMuchError

    def begin(self, name: str, attributes: AttributesImpl) -> None:
        """Take the beginning of an element."""

    def end(self, name: str) -> None:
        """Take the end of an element."""


class Archive:
    """The parts of a workbook.

    Parameters
    ----------
    data
        Bytes of the file.
    name
        File name for messages.

    Raises
    ------
    InputError
        If it is no sound archive, too large unpacked, or protected by a password.
    """

    def __init__(self, data: bytes, name: str) -> None:
        self.name = name
        try:
            self._zip = zipfile.ZipFile(io.BytesIO(data))
            parts = self._zip.infolist()
        except (zipfile.BadZipFile, ValueError, OSError, NotImplementedError) as error:
            raise self._broken() from error
        self._parts = {part.filename: part for part in parts}
        if (
            len(parts) > _MOST_PARTS
            or sum(part.file_size for part in parts) > _LARGEST_SUM
            or any(part.file_size > _LARGEST_PART for part in parts)
        ):
            raise self._too_large()

    def __contains__(self, part: str) -> bool:
        return part in self._parts

    def _too_large(self) -> InputError:
        return InputError(
            Problem(
                "is far too large unpacked for a table of rate constants",
                "save only the table in a new workbook, or as CSV",
                file=self.name,
            )
        )

    def _broken(self) -> InputError:
        return InputError(
            Problem(
                "is damaged, or no workbook",
                "open it in the spreadsheet program and save it again as XLSX or ODS",
                file=self.name,
            )
        )

    def parse(self, part: str, handler: Handler) -> None:
        """Parse a part whole.

        Raises
        ------
        InputError
            If the part is missing or damaged.
        """
        for _ in self.steps(part, handler):
            pass

    def steps(self, part: str, handler: Handler) -> Iterator[None]:
        """Parse a part, some 64 kB a step.

        Raises
        ------
        InputError
            If the part is missing, damaged, or holds a document type declaration.
        """
        from defusedxml.common import DefusedXmlException
        from defusedxml.expatreader import DefusedExpatParser

        if part not in self._parts:
            raise self._broken()
        if self._parts[part].flag_bits & 1:
            raise InputError(
                Problem("is protected by a password", "save it without one", file=self.name)
            )
        parser: Any = DefusedExpatParser(forbid_dtd=True)
        parser.setContentHandler(handler)
        try:
            with self._zip.open(part) as file:
                while chunk := file.read(_CHUNK):
                    parser.feed(chunk)
                    yield
            parser.close()
        except DefusedXmlException as error:
            raise InputError(
                Problem(
                    "holds a document type declaration, which no spreadsheet program writes",
                    "open it in the spreadsheet program and save it again",
                    file=self.name,
                )
            ) from error
        except TooMuchError as error:
            raise self._too_large() from error
        except InputError:
            raise
        except _DAMAGE as error:
            raise self._broken() from error
        yield
