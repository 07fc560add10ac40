"""The runs test: against counting every arrangement."""

from __future__ import annotations

from itertools import combinations, pairwise

import numpy as np
import pytest

from knought.numerics.runs_test import runs_probability


@pytest.mark.parametrize("signs", ["++--++", "+-+-+-", "+++---", "++-++-", "-++++++"])
def test_probabilities_are_those_of_counting(signs: str) -> None:
    values = np.array([1.0 if sign == "+" else -1.0 for sign in signs])
    n, plus = len(signs), signs.count("+")

    def runs(pattern: list[bool]) -> int:
        return 1 + sum(a != b for a, b in pairwise(pattern))

    seen = runs([value > 0 for value in values])
    every = [
        runs([i in chosen for i in range(n)]) for chosen in map(set, combinations(range(n), plus))
    ]
    expected = sum(count <= seen for count in every) / len(every)
    assert runs_probability(values) == pytest.approx(expected, rel=1e-12)


def test_signs_all_alike_say_nothing() -> None:
    assert runs_probability(np.ones(5)) == 1.0
