"""The clean table: one CSV form that is read back bit for bit, with a schema that explains it.

Numbers are written with the fewest digits that give the same double (Python's ``repr``), in the
units of the package; words are guarded so that no spreadsheet runs them (:mod:`.labels`). The
schema follows the Frictionless Table Schema, as plain JSON.
"""

from __future__ import annotations

import csv
import io
import json
from pathlib import Path
from typing import TYPE_CHECKING, Any

import numpy as np

from knought.chemistry.headers import parse_header
from knought.chemistry.quantities import QUANTITIES
from knought.errors import InputError, Problem
from knought.files import atomic_write_text
from knought.measurement.labels import guarded

if TYPE_CHECKING:
    from knought.measurement.table import RateTable

__all__ = ["clean_csv", "schema_beside", "table_schema", "write_rates"]

_WORDS = {
    "run": "label of the run",
    "salt": "what sets the ionic strength",
    "batch": "runs that share a stock, a day or an instrument",
    "use": "whether the run counts",
    "reason": "why a run does not count",
    "note": "free text",
}


def clean_csv(table: RateTable) -> str:
    """Return a table as CSV in the clean form.

    Parameters
    ----------
    table
        The table.

    Returns
    -------
    str
        Comma between cells, decimal point, Unix line ends.

    Raises
    ------
    InputError
        If the name of a species would not be read back as it is.
    """
    columns = table.headed_columns()
    _check_species(table)
    cells = [
        [guarded(word) for word in values] if isinstance(values, tuple) else _digits(values, header)
        for header, values in columns.items()
    ]
    text = io.StringIO()
    writer = csv.writer(text, lineterminator="\n")
    writer.writerow(columns)
    writer.writerows(zip(*cells, strict=True))
    return text.getvalue()


def _digits(values: Any, header: str) -> list[str]:
    numbers = np.asarray(values).tolist()
    if header == "n":
        return [f"{number:.0f}" for number in numbers]
    return [repr(number) for number in numbers]


def _check_species(table: RateTable) -> None:
    for name in table.concentrations:
        try:
            header = parse_header(f"c({name})/(mol/L)")
        except InputError:
            header = None
        if header is None or header.species != name or header.excess or header.is_uncertainty:
            raise InputError(
                Problem(
                    "is no name of a species that can be read back",
                    "write formulas as in NaClO4 or S2O8^2-",
                    read=name,
                )
            )


def table_schema(table: RateTable) -> dict[str, Any]:
    """Return the Frictionless Table Schema of the clean form of a table, as data for JSON."""
    return {
        "fields": [_field(header, table) for header in table.headed_columns()],
        "missingValues": [""],
    }


def _field(header: str, table: RateTable) -> dict[str, Any]:
    if header in _WORDS:
        made: dict[str, Any] = {"name": header, "type": "string", "description": _WORDS[header]}
        if header == "use":
            made["constraints"] = {"required": True, "enum": ["yes", "no"]}
        return made
    if header == "n":
        return {
            "name": header,
            "type": "integer",
            "description": "number of determinations averaged",
            "constraints": {"required": True, "minimum": 1},
        }
    return {
        "name": header,
        "type": "number",
        "description": _description(header, table),
        "constraints": {"required": True, "minimum": 0},
    }


def _description(header: str, table: RateTable) -> str:
    read = parse_header(header)
    if read is None:
        raise TypeError(f"{header!r} is a header of our own")
    name = {"T": "temperature", "I": "ionic_strength", "k": "measured_rate_constant"}.get(read.role)
    words = f"concentration of {read.species}" if name is None else QUANTITIES[name].words
    if read.role == "k":
        words += f" of order {table.order}"
    if read.is_uncertainty:
        words = f"standard uncertainty of the {words}"
    return f"{words}, in {read.unit}"


def schema_beside(path: Path) -> Path:
    """Return where the schema of a clean table stands: ``rates.schema.json`` by ``rates.csv``."""
    return path.with_suffix(".schema.json")


def write_rates(table: RateTable, path: str | Path) -> tuple[Path, Path]:
    """Write a table in the clean form, and its schema beside it.

    Parameters
    ----------
    table
        The table.
    path
        The CSV file; the schema is named after it, ``rates.csv`` and ``rates.schema.json``.

    Returns
    -------
    tuple of Path
        Both files.

    Raises
    ------
    InputError
        If they cannot be written.
    """
    path = Path(path)
    text = clean_csv(table)
    schema = json.dumps(table_schema(table), indent=1, ensure_ascii=False) + "\n"
    beside = schema_beside(path)
    atomic_write_text(path, text)
    atomic_write_text(beside, schema)
    return path, beside
