"""``datapackage.json``: every file of a report's folder with its size and hash.

It follows the Frictionless Data Package, as plain JSON, with two keys of its own: ``study``, the
place of the study file in the folder, and ``descriptor_sha256``, the hash of the descriptor as it
is written without that key, so that a byte changed in the descriptor itself is found too.
"""

from __future__ import annotations

import json
import re
from typing import TYPE_CHECKING, Any

from knought.files import sha256_of

if TYPE_CHECKING:
    from collections.abc import Iterable, Mapping

    from knought.reporting.plain_tables import PlainTable

__all__ = ["DESCRIPTOR", "descriptor_text", "package_text"]

#: Name of the descriptor in its folder.
DESCRIPTOR = "datapackage.json"

_MEDIA_TYPES = {
    "html": "text/html",
    "json": "application/json",
    "txt": "text/plain",
    "md": "text/markdown",
    "tex": "application/x-tex",
    "csv": "text/csv",
    "toml": "application/toml",
    "svg": "image/svg+xml",
    "pdf": "application/pdf",
    "png": "image/png",
    "xlsx": "application/vnd.openxmlformats-officedocument.spreadsheetml.sheet",
}


def package_text(
    title: str,
    files: Mapping[str, bytes],
    tables: Iterable[PlainTable] = (),
    inputs: Mapping[str, str] | None = None,
) -> str:
    """Return the text of ``datapackage.json``.

    Parameters
    ----------
    title
        Title of the study.
    files
        Content of every other file, by its path in the folder.
    tables
        Tables of which ``tables/NAME.csv`` is one of the files.
    inputs
        Path in the folder of what the study reads, to the path that the study knows it by; the
        study file first.
    """
    from knought.version import __version__

    inputs = inputs or {}
    schemas = {f"tables/{table.name}.csv": table for table in tables}
    resources = []
    for path, content in sorted(files.items()):
        resource = _resource(path, content)
        if path in schemas:
            resource |= {"title": schemas[path].title, "schema": schemas[path].schema()}
            resource["type"] = "table"
        if path in inputs:
            resource["input"] = inputs[path]
        resources.append(resource)
    return descriptor_text(
        {
            "name": "knought-report",
            "title": title,
            "version": __version__,
            "study": next(iter(inputs), None),
            "resources": resources,
        }
    )


def descriptor_text(descriptor: Mapping[str, Any]) -> str:
    """Return a descriptor as it is written, with its own hash at its end.

    Parameters
    ----------
    descriptor
        The descriptor; a hash that it holds is made anew.
    """
    bare = {key: value for key, value in descriptor.items() if key != "descriptor_sha256"}
    digest = sha256_of(_written(bare).encode("utf-8", "surrogatepass"))
    return _written({**bare, "descriptor_sha256": digest})


def _written(data: Mapping[str, Any]) -> str:
    return json.dumps(data, ensure_ascii=False, indent=1) + "\n"


def _resource(path: str, content: bytes) -> dict[str, Any]:
    ending = path.rpartition(".")[2].lower()
    return {
        "name": _name(path),
        "path": path,
        "type": "file",
        "format": ending,
        "mediatype": _MEDIA_TYPES.get(ending, "application/octet-stream"),
        "bytes": len(content),
        "hash": f"sha256:{sha256_of(content)}",
    }


def _name(path: str) -> str:
    """Return a name of small ASCII letters, unique because it holds the path's own hash."""
    plain = re.sub(r"[^a-z0-9._-]+", "-", path.lower())
    return plain if plain == path.replace("/", "-") else f"{plain}-{sha256_of(path.encode())[:8]}"
