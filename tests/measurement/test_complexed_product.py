"""A product in complexes: the share that absorbs, and what its constant does to k."""

from __future__ import annotations

import math

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from knought.chemistry.equilibria import Equilibrium
from knought.errors import InputError
from knought.measurement.complexed_product import ComplexedProduct
from tests.chemistry.test_equilibria import TRIIODIDE

#: ε of triiodide at 353 nm in L mol^-1 cm^-1: common practice, no source.
EPSILON = 26_000.0


def _triiodide(free: float = 0.0) -> ComplexedProduct:
    return ComplexedProduct("I2", (TRIIODIDE,), {"I3^-": EPSILON, "I2": free})


def test_iodine_in_excess_iodide_absorbs_by_its_bound_share() -> None:
    # K = 698 kg/mol at 25 °C, Palmer, Ramette and Mesmer, J. Solution Chem. 13 (1984) 673; on the
    # molar basis 698/0.99705 = 700.07 L/mol. With [I-] = 0.02 mol/L, K [I-] = 14.00:
    # bound share 14.00/15.00 = 0.9333, so that rate/(dA/dt/(ε l)) = 1 + 1/14.00 = 1.0714.
    found = _triiodide().effective({"I-": 0.02}, 298.15)
    assert found.shares["I3^-"] == pytest.approx(14.0013 / 15.0013, rel=1e-5)
    assert EPSILON / found.value == pytest.approx(1 + 1 / 14.0013, rel=1e-5)


@settings(max_examples=30, deadline=None)
@given(st.floats(-3.0, 5.0), st.floats(1e-4, 1.0), st.floats(0.0, 3e4), st.floats(10.0, 3e4))
def test_the_formula_for_one_complex_is_the_textbook_s(
    lg_K: float, ligand: float, free: float, bound: float
) -> None:
    made = ComplexedProduct(
        "I2", (Equilibrium("I2 + I- = I3^-", lg_K),), {"I3^-": bound, "I2": free}
    )
    KX = 10**lg_K * ligand
    expected = (bound * KX + free) / (1 + KX)
    assert made.effective({"I-": ligand}, 298.15).value == pytest.approx(expected, rel=1e-10)


def test_what_u_of_k_does_is_the_numerical_derivative() -> None:
    found = _triiodide(free=900.0).effective({"I-": 0.005}, 308.15)
    ends = []
    for sign in (1, -1):
        moved = Equilibrium(
            "I2 + I- = I3^-",
            TRIIODIDE.lg_K + sign * 1e-5 / math.log(10),
            enthalpy=-17.0e3,
            heat_capacity=-21.0,
            basis="molal",
        )
        product = ComplexedProduct("I2", (moved,), {"I3^-": EPSILON, "I2": 900.0})
        ends.append(math.log(product.effective({"I-": 0.005}, 308.15).value))
    slope = (ends[0] - ends[1]) / 2e-5
    effects = {name: slope * u for name, u in TRIIODIDE.effects_on_ln_K(308.15).items()}
    assert found.by_constant == pytest.approx(effects, rel=1e-6)
    assert math.hypot(*effects.values()) == pytest.approx(
        abs(slope) * TRIIODIDE.u_ln_K(308.15), rel=1e-12
    )


def test_an_error_of_the_enthalpy_changes_its_sign_at_the_reference_temperature() -> None:
    name = "ΔH of I2 + I- = I3^-"
    cold, warm = (TRIIODIDE.effects_on_ln_K(T)[name] for T in (288.15, 308.15))
    assert cold < 0 < warm
    assert TRIIODIDE.effects_on_ln_K(298.15)[name] == 0


def test_more_ligand_matters_as_the_bound_share_says() -> None:
    low, high = (_triiodide(free=900.0).effective({"I-": c}, 308.15) for c in (0.00499, 0.00501))
    middle = _triiodide(free=900.0).effective({"I-": 0.005}, 308.15)
    slope = math.log(high.value / low.value) / math.log(0.00501 / 0.00499)
    assert middle.by_ligand["I^-"] == pytest.approx(slope, rel=1e-5)


def test_a_warmer_solution_binds_less() -> None:
    cold, warm = (_triiodide().effective({"I-": 0.01}, T).shares["I3^-"] for T in (288.15, 308.15))
    assert cold > warm


def test_several_forms_share_the_product() -> None:
    # Ammonia that is protonated in part, and bound by copper in part: K [X] is one for each.
    made = ComplexedProduct(
        "NH3",
        (Equilibrium("NH3 + H+ = NH4+", 4.0), Equilibrium("NH3 + Cu^2+ = Cu(NH3)^2+", 3.0)),
        {"NH3": 1000.0, "Cu(NH3)^2+": 3000.0},
    )
    found = made.effective({"H+": 1e-4, "Cu^2+": 1e-3}, 298.15)
    assert list(found.shares.values()) == pytest.approx([1 / 3] * 3, rel=1e-9)
    assert found.value == pytest.approx(4000 / 3, rel=1e-9)
    assert {each.ascii for each in made.ligands} == {"H^+", "Cu^2+"}


def test_a_ligand_that_is_not_in_excess_is_warned_of() -> None:
    made = _triiodide()
    assert made.excess_caveat({"I-": 0.02}, 1e-5) == ()
    assert made.excess_caveat({"I-": 0.02}, 5e-3)[0].code == "complex-ligand-not-in-excess"


def test_what_does_not_fit_together_is_refused() -> None:
    with pytest.raises(InputError, match="no form of the product"):
        ComplexedProduct("I2", (TRIIODIDE,), {"Br3^-": 1.0})
    with pytest.raises(InputError, match="no form of the product absorbs"):
        ComplexedProduct("I2", (TRIIODIDE,), {"I2": 0.0})
    with pytest.raises(InputError, match="does not form one species"):
        ComplexedProduct("Br2", (TRIIODIDE,), {"Br2": 1.0})
    with pytest.raises(InputError, match="is needed"):
        _triiodide().effective({}, 298.15)
