"""What people say that ± means."""

from __future__ import annotations

import pytest

from knought.chemistry.uncertainty_words import Meaning, meaning_of_sign, parse_meaning
from knought.errors import InputError


@pytest.mark.parametrize(
    ("text", "meaning"),
    [
        ("standard uncertainty", Meaning("standard")), ("standard error", Meaning("standard")),
        ("standard error of the mean", Meaning("standard")), ("SE", Meaning("standard")),
        ("u", Meaning("standard")), ("68 %", Meaning("standard")),
        ("standard deviation", Meaning("deviation")), ("s", Meaning("deviation")),
        ("1 s", Meaning("deviation")), ("σ", Meaning("deviation")), ("SD", Meaning("deviation")),
        ("2 s", Meaning("double deviation")), ("2σ", Meaning("double deviation")),
        ("2 standard deviations", Meaning("double deviation")), ("2 u", Meaning("double")),
        ("k = 2", Meaning("double")), ("2 SE", Meaning("double")), ("95 %", Meaning("95 %")),
        ("95% half-width", Meaning("95 %")), ("95 % confidence interval", Meaning("95 %")),
        ("± 95 %", Meaning("95 %")), ("CI95", Meaning("95 %")),
        ("percent", Meaning("standard", relative=True, percent=True)),
        ("%", Meaning("standard", relative=True, percent=True)),
        ("relative standard deviation", Meaning("deviation", relative=True)),
        ("standard deviation, percent", Meaning("deviation", relative=True, percent=True)),
        ("2 s in %", Meaning("double deviation", relative=True, percent=True)),
        ("2 s, percent", Meaning("double deviation", relative=True, percent=True)),
    ],
)  # fmt: skip
def test_words_are_read_as(text: str, meaning: Meaning) -> None:
    assert parse_meaning(text) == meaning
    assert meaning.words


@pytest.mark.parametrize("text", ["", "error", "3 s", "90 %", "half range", "uncertain", "x" * 500])
def test_unknown_words_are_refused_with_the_known_ones(text: str) -> None:
    with pytest.raises(InputError, match="standard deviation, 2 s, 2 u or 95 %"):
        parse_meaning(text)


def test_signs_that_are_none_are_left_alone() -> None:
    assert meaning_of_sign("k") is None
    assert meaning_of_sign("S") is None
    assert meaning_of_sign("U") == Meaning("expanded", relative=False)
