"""Orders of reaction: what is read, and what would never end."""

from __future__ import annotations

from fractions import Fraction

import pytest

from knought.chemistry.order_text import parse_order
from knought.discussion.literature_table import read_literature_text
from knought.errors import InputError


@pytest.mark.parametrize(
    ("text", "order"),
    [("1", 1), (" 2 ", 2), ("0.5", Fraction(1, 2)), ("3/2", Fraction(3, 2)), ("-1", -1)],
)
def test_an_order_is_read_exactly(text: str, order: Fraction | int) -> None:
    assert parse_order(text) == order


@pytest.mark.parametrize(
    "text", ["", "first", "1/0", "nan", "inf", "1e9", "1_0", "٢", "9" * 100_000, "1/" * 50_000]
)
def test_anything_else_is_no_order(text: str) -> None:
    with pytest.raises(InputError, match="is no order of reaction"):
        parse_order(text)


def test_an_order_with_a_huge_power_of_ten_once_filled_the_memory() -> None:
    with pytest.raises(InputError, match=r"row 2, column order: is no order of reaction"):
        read_literature_text("label\torder\tT/K\tk/s^-1\nX\t1e999999999\t298\t1\n")


def test_a_compilation_wrong_in_every_row_is_not_read_to_its_end() -> None:
    text = "label\tT/K\tk/s^-1\n" + "X\t298\tabc\n" * 400
    with pytest.raises(InputError) as caught:
        read_literature_text(text)
    assert len(caught.value.problems) == 100
    assert caught.value.problems[-1].row == 101
