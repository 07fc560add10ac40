"""Hypothesis strategies that several test modules share."""

from __future__ import annotations

from fractions import Fraction
from typing import TYPE_CHECKING, Any

import numpy as np
from hypothesis import strategies as st

from knought.measurement.table import RateTable

if TYPE_CHECKING:
    from numpy.typing import NDArray

__all__ = ["labels", "rate_tables"]

_SPECIES = ("NaClO4", "S2O8^2-", "[Co(NH3)6]^3+", "H2O")


def labels() -> st.SearchStrategy[str]:
    """Words that a table can hold, those that spreadsheets would run among them."""
    text = st.text(
        st.characters(blacklist_categories=("Cc", "Cs", "Cn")), max_size=12
    ) | st.sampled_from(["=1+1", "+a", "-b", "@c", "'=x", "#3", "a,b", 'say "no"', "x;y", "a\nb"])
    return text.map(str.strip)


def _numbers(n: int, low: float, high: float) -> st.SearchStrategy[NDArray[np.float64]]:
    number = st.floats(low, high, allow_nan=False, allow_infinity=False)
    return st.lists(number, min_size=n, max_size=n).map(np.array)


@st.composite
def rate_tables(draw: st.DrawFn, *, words: bool = True) -> RateTable:
    """Whole tables of rate constants with whatever columns there can be.

    Parameters
    ----------
    draw
        Hypothesis's.
    words
        Whether labels are drawn as well.
    """
    n = draw(st.integers(1, 5))
    maybe: dict[str, Any] = {
        "I": _numbers(n, 0.0, 6.0),
        "u_k": _numbers(n, 1e-12, 1e6),
        "u_T": _numbers(n, 1e-4, 5.0),
        "u_I": _numbers(n, 1e-9, 0.1),
        "determinations": _numbers(n, 1, 50).map(np.floor),
    }
    chosen = {name: draw(st.none() | strategy) for name, strategy in maybe.items()}
    if chosen["I"] is None:
        chosen["u_I"] = None
    if words:
        word = st.lists(labels(), min_size=n, max_size=n).map(tuple)
        chosen |= {name: draw(word) for name in ("run", "note")}
        chosen |= {name: draw(st.none() | word) for name in ("salt", "batch")}
        chosen["used"] = draw(st.lists(st.booleans(), min_size=n, max_size=n).map(np.array))
        chosen["reason"] = tuple("" if used else "spilled" for used in chosen["used"])
        species = draw(st.lists(st.sampled_from(_SPECIES), max_size=2, unique=True))
        chosen["concentrations"] = {name: draw(_numbers(n, 0.0, 5.0)) for name in species}
    return RateTable(
        k=draw(_numbers(n, 1e-12, 1e12)),
        T=draw(_numbers(n, 150.0, 1500.0)),
        order=draw(
            st.sampled_from(
                [Fraction(0), Fraction(1), Fraction(2), Fraction(3, 2), Fraction(4, 3), Fraction(3)]
            )
        ),
        **chosen,
    )
