"""The corpus of nasty files: the exact table, or the exact message."""

from __future__ import annotations

from typing import TYPE_CHECKING, Any

import numpy as np
import pytest

from knought.errors import InputError
from knought.measurement.reading import account_lines, read_rates
from tests.corpus.accepted import ACCEPTED_TEXTS
from tests.corpus.books import accepted_books, refused_books
from tests.corpus.refused_cells import REFUSED_CELLS
from tests.corpus.refused_files import REFUSED_FILES
from tests.corpus.refused_headers import REFUSED_HEADERS

if TYPE_CHECKING:
    from pathlib import Path

    from knought.measurement.table import RateTable
    from tests.corpus.case import Accepted, Refused

ACCEPTED = (*ACCEPTED_TEXTS, *accepted_books())
REFUSED = (*REFUSED_HEADERS, *REFUSED_CELLS, *REFUSED_FILES, *refused_books())

#: Where an expectation is computed and not typed, it may differ in the last bit.
_ONE_BIT = 3e-16


def _column(table: RateTable, name: str) -> Any:
    if name == "order":
        return [table.order]
    if name.startswith("c("):
        return table.concentrations[name[2:-1]]
    return getattr(table, name)


@pytest.mark.parametrize("case", ACCEPTED, ids=lambda case: case.name)
def test_a_nasty_file_gives_exactly_this_table(case: Accepted, tmp_path: Path) -> None:
    path = tmp_path / case.name
    path.write_bytes(case.data)
    table = read_rates(path, **case.options)
    for name, expected in case.table.items():
        found = _column(table, name)
        assert found is not None, name
        if isinstance(expected[0], float) and name != "order":
            np.testing.assert_allclose(found, expected, rtol=_ONE_BIT, atol=0, err_msg=name)
        else:
            assert list(found) == list(expected), name
    told = [str(line) for line in table.account]
    for line in case.account:
        assert line in told
    columns = ("I", "u_k", "u_T", "u_I", "determinations", "salt", "batch")
    for name in columns:
        assert (getattr(table, name) is not None) == (name in case.table), name
    assert table.source is not None
    assert table.source.name == case.name
    assert str(tmp_path) not in "\n".join(account_lines(table))


@pytest.mark.parametrize("case", REFUSED, ids=lambda case: case.name)
def test_a_nasty_file_is_refused_with_exactly_this_message(case: Refused, tmp_path: Path) -> None:
    path = tmp_path / case.name
    path.write_bytes(case.data)
    with pytest.raises(InputError) as refusal:
        read_rates(path, **case.options)
    assert str(refusal.value) == case.message
    assert all(problem.file == case.name for problem in refusal.value.problems)
    assert all(problem.remedy for problem in refusal.value.problems)


def test_the_corpus_has_forty_files_and_more_under_distinct_names() -> None:
    names = [case.name for case in ACCEPTED] + [case.name for case in REFUSED]
    assert len(names) >= 100
    assert len({*names}) >= 95
