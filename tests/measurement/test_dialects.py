"""A table written in every dialect is read back bit for bit, or refused for a stated ambiguity."""

from __future__ import annotations

import io
from typing import TYPE_CHECKING

import numpy as np
from hypothesis import assume, given, settings
from hypothesis import strategies as st

from knought.errors import InputError
from knought.measurement.reading import read_rates
from tests.measurement.dialects import Dialect, written
from tests.strategies import rate_tables

if TYPE_CHECKING:
    from knought.measurement.table import RateTable

DIALECTS = st.builds(
    Dialect,
    delimiter=st.sampled_from(["\t", ";", ","]),
    decimal=st.sampled_from([".", ","]),
    encoding=st.sampled_from(["utf-8", "utf-8-sig", "utf-16", "cp1252"]),
    line_end=st.sampled_from(["\n", "\r\n"]),
    header=st.integers(0, 3),
    number=st.integers(0, 2),
    uncertainty=st.sampled_from(["column", "±"]),
    clutter=st.booleans(),
)


@settings(max_examples=40, deadline=None)
@given(rate_tables(words=False), DIALECTS)
def test_a_table_in_any_dialect_is_read_back_bit_for_bit_or_refused(
    table: RateTable, dialect: Dialect
) -> None:
    # Windows-1252 has neither the superscripts nor the minus of the other forms.
    assume(dialect.encoding != "cp1252" or dialect.number == 0)
    data = written(table, dialect)
    refusal = None
    try:
        back = read_rates(io.BytesIO(data))
    except InputError as error:
        refusal = str(error)
        back = read_rates(io.BytesIO(data), decimal="," if dialect.decimal == "," else ".")
    # The one thing that a file may leave open: 1,234 where no other number tells the mark.
    assert refusal is None or "no other number shows" in refusal
    for name in ("T", "k", "I", "u_k"):
        expected, found = getattr(table, name), getattr(back, name)
        assert (found is None) == (expected is None)
        if expected is not None:
            np.testing.assert_array_equal(found, expected)
    assert back.order == table.order


def test_semicolons_and_points_never_become_other_numbers() -> None:
    for text in ("1.0;2.0", '"1.0;2.0"', "T/K;k/s^-1\n1.0;2.0", "1.0;2.0\n1.0;2.0\n"):
        try:
            table = read_rates(io.StringIO(text))
        except InputError:
            continue
        assert (table.T.tolist(), table.k.tolist()) == ([1.0], [2.0])
