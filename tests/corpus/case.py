"""What a case of the corpus is."""

from __future__ import annotations

from dataclasses import dataclass, field
from typing import TYPE_CHECKING, Any

if TYPE_CHECKING:
    from collections.abc import Mapping, Sequence

__all__ = ["Accepted", "Refused"]


@dataclass(frozen=True)
class Accepted:
    """A file that is read, and everything that comes out of it.

    Attributes
    ----------
    name
        File name, and the name of the case.
    data
        Bytes of the file.
    table
        Attribute of the table -> the exact values.
    account
        Lines of the account that must be there.
    options
        Keyword arguments of ``read_rates``.
    """

    name: str
    data: bytes
    table: Mapping[str, Sequence[Any]]
    account: tuple[str, ...] = ()
    options: Mapping[str, Any] = field(default_factory=dict)


@dataclass(frozen=True)
class Refused:
    """A file that is refused, with the whole message."""

    name: str
    data: bytes
    message: str
    options: Mapping[str, Any] = field(default_factory=dict)
