"""Hypothesis strategies for solutions and species."""

from __future__ import annotations

from hypothesis import strategies as st

#: Temperatures in K where liquid water is known, with room for a step to either side.
temperatures = st.floats(274.0, 372.0)

#: Ionic strengths in mol/L, from traces to far beyond the domain of most forms.
ionic_strengths = st.floats(1e-6, 3.0)

_GROUPS = ("H", "O2", "S2", "Cl", "Fe", "Co", "C12", "N", "(CN)6", "(NH3)5", "[Fe(CN)6]", "(en)3")

#: Formulas without a charge.
formulas = st.lists(st.sampled_from(_GROUPS), min_size=1, max_size=4).map("".join)

#: Charges that an ion can have.
charges = st.integers(-9, 9)

#: Text of the characters that formulas are made of, for hostile input.
formula_like = st.text(alphabet="HSONaFeCox0123456789()[]{}^+-−⁺⁻²₄·•_ '\n\t", max_size=60)
