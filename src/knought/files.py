"""Writing that leaves the old or the new and nothing between; hashes; names safe everywhere.

A file is written beside its place and renamed into it; a folder is built beside its place and
renamed, or exchanged with the one that stands there. Whoever is interrupted finds what was there
before, and at most a hidden leftover that says by its name that it is one.
"""

from __future__ import annotations

import ctypes
import errno
import hashlib
import os
import re
import secrets
import shutil
import stat
import sys
import unicodedata
from contextlib import contextmanager
from pathlib import Path
from typing import TYPE_CHECKING

from knought.errors import InputError, Problem

if TYPE_CHECKING:
    from collections.abc import Iterator

__all__ = [
    "atomic_write_bytes",
    "atomic_write_text",
    "is_device_name",
    "os_problem",
    "read_bytes",
    "refuse_existing",
    "refuse_existing_file",
    "safe_name",
    "sha256_of",
    "whole_folder",
]

#: What an operating system refuses because of where the user pointed, not because of us.
_USERS_TO_MEND = frozenset(
    {
        errno.EACCES, errno.EPERM, errno.EROFS, errno.ENOSPC, errno.EDQUOT, errno.EFBIG,
        errno.ENAMETOOLONG, errno.EIO, errno.ENOTDIR, errno.ELOOP,
    }
)  # fmt: skip

_REMEDIES = {
    errno.ENOSPC: "free some space or write elsewhere",
    errno.EDQUOT: "free some space or write elsewhere",
    errno.EACCES: "check the permissions or choose another place",
    errno.EPERM: "check the permissions or choose another place",
    errno.EROFS: "choose a place that can be written to",
    errno.ENOENT: "check the path",
    errno.ENOTDIR: "check the path",
    errno.ENAMETOOLONG: "choose a shorter name",
    errno.EISDIR: "name a file, not a folder",
}

_CHUNK = 1 << 20

#: What file managers leave in folders; no one misses it.
_LEFT_BY_SYSTEMS = frozenset({".DS_Store", "Thumbs.db", "desktop.ini"})


def os_problem(error: OSError, name: str, doing: str) -> Problem:
    """Return what the operating system refused, as something the user can mend.

    Parameters
    ----------
    error
        What was raised.
    name
        File or folder name, without the folders above it.
    doing
        What was tried, ``"read"`` or ``"written"``.
    """
    cause = os.strerror(error.errno) if error.errno is not None else str(error)
    remedy = _REMEDIES.get(error.errno or 0, "check the path and the permissions")
    return Problem(f"cannot be {doing}: {cause}", remedy, file=name)


def atomic_write_text(path: str | Path, text: str) -> None:
    """Write UTF-8 text with Unix line ends, whole or not at all.

    Parameters
    ----------
    path
        The file; one that exists is replaced.
    text
        What to write.

    Raises
    ------
    InputError
        If the place cannot be written to.
    """
    atomic_write_bytes(path, text.encode("utf-8"))


def atomic_write_bytes(path: str | Path, data: bytes) -> None:
    """Write bytes, whole or not at all.

    Parameters
    ----------
    path
        The file; one that exists is replaced, and keeps its permissions. A device or a pipe is
        written to as it stands.
    data
        What to write.

    Raises
    ------
    InputError
        If the place cannot be written to.
    """
    path = Path(path)
    try:
        mode = _mode(path)
        if mode is not None and not stat.S_ISREG(mode):
            path.write_bytes(data)
            return
        _replace(path, data, mode)
    except OSError as error:
        raise InputError(os_problem(error, path.name or str(path), "written")) from error


def _replace(path: Path, data: bytes, mode: int | None) -> None:
    # A link stays a link: what it points to is replaced.
    target = path.resolve()
    partial = target.with_name(f".{target.name[:100]}.{secrets.token_hex(4)}.part")
    try:
        with partial.open("xb") as file:
            file.write(data)
            file.flush()
            os.fsync(file.fileno())
        if mode is not None:
            partial.chmod(stat.S_IMODE(mode))
        partial.replace(target)
    except BaseException:
        partial.unlink(missing_ok=True)
        raise


def _mode(path: Path) -> int | None:
    try:
        return path.stat().st_mode
    except FileNotFoundError:
        return None


@contextmanager
def whole_folder(path: str | Path, *, overwrite: bool = False) -> Iterator[Path]:
    """Build a folder whole or not at all.

    Parameters
    ----------
    path
        The folder to make.
    overwrite
        Whether one that exists may be replaced. It is only replaced by a folder that holds
        everything that it holds at its top, so that no file of the user's is lost.

    Yields
    ------
    Path
        A hidden folder beside `path` to write into. When the block ends it becomes `path`; when
        the block raises, or the process is killed, `path` is as it was.

    Raises
    ------
    InputError
        If the folder exists and may not be replaced, holds what the new one does not, or cannot
        be written to.
    OSError
        Whatever the system refuses for a reason that is no user's to mend.
    """
    path = Path(path)
    name = path.name or str(path)
    refuse_existing(path, overwrite=overwrite)
    target = path.resolve()
    partial = target.with_name(f".{target.name[:100]}.{secrets.token_hex(4)}.part")
    try:
        target.parent.mkdir(parents=True, exist_ok=True)
        partial.mkdir()
    except OSError as error:
        raise InputError(os_problem(error, name, "made")) from error
    try:
        yield partial
        _put_in_place(partial, target, name)
    except OSError as error:
        if error.errno in _USERS_TO_MEND:
            raise InputError(os_problem(error, name, "written")) from error
        raise
    finally:
        # Either what was being built, or, after an exchange, what stood there before.
        shutil.rmtree(partial, ignore_errors=True)


def refuse_existing(path: Path, *, overwrite: bool) -> None:
    """Refuse a folder that is there and may not be replaced; before any work goes into it.

    Raises
    ------
    InputError
        If there is one, or a file of that name.
    """
    if not os.path.lexists(path):
        return
    if not path.is_dir():
        raise InputError(
            Problem("exists and is no folder", "choose another name", file=path.name or str(path))
        )
    if not overwrite:
        raise InputError(
            Problem(
                "exists already and is left as it is",
                "choose another folder, or say that it may be overwritten (--overwrite)",
                file=path.name or str(path),
            )
        )
    target = path.resolve()
    if Path.cwd().is_relative_to(target):
        raise InputError(
            Problem(
                "is the folder you are working in, or holds it, and is not replaced",
                "choose another folder",
                file=target.name or str(path),
            )
        )


def _put_in_place(partial: Path, target: Path, name: str) -> None:
    if not os.path.lexists(target):
        partial.rename(target)
        return
    made = {each.name for each in partial.iterdir()} | _LEFT_BY_SYSTEMS
    others = sorted({each.name for each in target.iterdir()} - made)
    if others:
        shown = ", ".join(others[:5]) + (", ..." if len(others) > 5 else "")
        raise InputError(
            Problem(
                f"is not replaced, for it holds what is not made anew: {shown}",
                "move these away or choose another folder",
                file=name,
            )
        )
    if not _exchanged(partial, target):
        # No exchange on this system: between the two renames the old folder stands beside.
        old = target.with_name(f".{target.name[:100]}.{secrets.token_hex(4)}.old")
        target.rename(old)
        try:
            partial.rename(target)
        except BaseException:
            old.rename(target)
            raise
        shutil.rmtree(old, ignore_errors=True)


def _exchanged(one: Path, other: Path) -> bool:
    """Exchange two names in one step where the system can; say whether it did."""
    first, second = os.fsencode(one), os.fsencode(other)
    try:
        libc = ctypes.CDLL(None, use_errno=True)
        if sys.platform == "darwin":
            return bool(libc.renamex_np(first, second, 2) == 0)  # RENAME_SWAP
        at_cwd, exchange = -100, 2  # AT_FDCWD, RENAME_EXCHANGE
        return bool(libc.renameat2(at_cwd, first, at_cwd, second, exchange) == 0)
    except (OSError, AttributeError, TypeError):
        return False


def refuse_existing_file(path: str | Path, *, overwrite: bool) -> None:
    """Refuse a file that is there and may not be replaced; before any work goes into it.

    Parameters
    ----------
    path
        The file to write; devices and pipes may be written to at any time.
    overwrite
        Whether one that exists may be replaced.

    Raises
    ------
    InputError
        If there is one.
    """
    path = Path(path)
    if not overwrite and path.is_file():
        raise InputError(
            Problem(
                "exists already and is left as it is",
                "choose another name, or say that it may be overwritten (--overwrite)",
                file=path.name,
            )
        )


def read_bytes(path: str | Path) -> bytes:
    """Return the content of a file.

    Parameters
    ----------
    path
        The file.

    Raises
    ------
    InputError
        If it cannot be read.
    """
    path = Path(path)
    try:
        return path.read_bytes()
    except OSError as error:
        raise InputError(os_problem(error, path.name or str(path), "read")) from error


def sha256_of(source: str | Path | bytes) -> str:
    """Return the SHA-256 of a file, or of bytes, in hexadecimal.

    Parameters
    ----------
    source
        A path, or the bytes themselves.

    Raises
    ------
    InputError
        If the file cannot be read.
    """
    if isinstance(source, bytes):
        return hashlib.sha256(source).hexdigest()
    path = Path(source)
    digest = hashlib.sha256()
    try:
        with path.open("rb") as file:
            while chunk := file.read(_CHUNK):
                digest.update(chunk)
    except OSError as error:
        raise InputError(os_problem(error, path.name or str(path), "read")) from error
    return digest.hexdigest()


_FORBIDDEN = re.compile(r'[<>:"/\\|?*\x00-\x1f\x7f-\x9f\u200b-\u200f\u2028-\u202e\u2060-\u2069]+')
_RESERVED = re.compile(r"(?:con|prn|aux|nul|com[0-9¹²³]|lpt[0-9¹²³])(?:\.|$)", re.IGNORECASE)
_LONGEST_NAME = 100


def is_device_name(name: str) -> bool:
    """Whether Windows takes a file name for a device, ``"NUL"`` or ``"con.csv"``."""
    return _RESERVED.match(name.strip()) is not None


def safe_name(text: str) -> str:
    """Return a file name made of `text` that every common system takes; never empty.

    Parameters
    ----------
    text
        Anything: a title, a label from a table.

    Returns
    -------
    str
        At most 100 bytes of UTF-8, with no separator, no character that Windows forbids, no
        leading full stop, no trailing full stop or space, and none of the device names of Windows.
    """
    name = unicodedata.normalize("NFC", text.encode("utf-8", "ignore").decode("utf-8"))
    name = _FORBIDDEN.sub("-", name).lstrip(". ")
    name = name.encode("utf-8")[:_LONGEST_NAME].decode("utf-8", "ignore").rstrip(". ")
    if not name:
        return "unnamed"
    return f"-{name}"[:_LONGEST_NAME] if _RESERVED.match(name) else name
