"""From a path to bytes: only whole, ordinary files of a sensible size, unchanged while read."""

from __future__ import annotations

import os
import stat
from dataclasses import dataclass
from pathlib import Path

from knought.errors import InputError, Problem
from knought.files import os_problem, sha256_of

__all__ = ["LARGEST_FILE", "FileBytes", "open_bytes", "whole_bytes"]

#: A million runs are some 50 MB.
LARGEST_FILE = 200_000_000


@dataclass(frozen=True)
class FileBytes:
    """A file as it was read.

    Attributes
    ----------
    name
        File name without folders.
    data
        Its bytes.
    sha256
        Their hash.
    """

    name: str
    data: bytes
    sha256: str


def open_bytes(path: str | Path) -> FileBytes:
    """Read a file whole.

    Parameters
    ----------
    path
        An ordinary file.

    Raises
    ------
    InputError
        If it is not there, no ordinary file, empty, too large, or changes while it is read.
    """
    path = Path(path)
    name = path.name or str(path)
    if "\0" in str(path):
        raise InputError(Problem("is no path", "check the path", read=str(path)))
    try:
        return _opened(path, name)
    except OSError as error:
        raise InputError(os_problem(error, name, "read")) from error


def whole_bytes(data: bytes, name: str) -> FileBytes:
    """Return bytes that are at hand already as a file.

    Parameters
    ----------
    data
        The bytes.
    name
        What to call them in messages.

    Raises
    ------
    InputError
        If there are none, or too many.
    """
    _check_size(len(data), name)
    return FileBytes(name, data, sha256_of(data))


def _opened(path: Path, name: str) -> FileBytes:
    before = path.stat()
    _check_kind(before.st_mode, name)
    _check_size(before.st_size, name)
    with path.open("rb") as file:
        # What was opened may no longer be what was looked at.
        _check_kind(os.fstat(file.fileno()).st_mode, name)
        data = file.read(LARGEST_FILE + 1)
        after = os.fstat(file.fileno())
    same = (before.st_size, before.st_mtime_ns) == (after.st_size, after.st_mtime_ns)
    if not same or len(data) != after.st_size:
        raise InputError(
            Problem("changed while it was read", "close the program that writes it", file=name)
        )
    return whole_bytes(data, name)


def _check_kind(mode: int, name: str) -> None:
    if stat.S_ISREG(mode):
        return
    kinds = (
        (stat.S_ISDIR, "is a folder"),
        (stat.S_ISFIFO, "is a pipe"),
        (stat.S_ISSOCK, "is a socket"),
    )
    what = next((words for test, words in kinds if test(mode)), "is a device")
    raise InputError(Problem(f"{what} and no table", "name a file", file=name))


def _check_size(size: int, name: str) -> None:
    if size == 0:
        raise InputError(Problem("is empty", "save the table again", file=name))
    if size > LARGEST_FILE:
        raise InputError(
            Problem(
                f"is larger than {LARGEST_FILE // 10**6} MB",
                "give a table of rate constants, not of raw data",
                file=name,
            )
        )
