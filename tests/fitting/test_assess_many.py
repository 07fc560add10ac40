"""A batch of assessments is its members, each assessed alone."""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np
import pytest

import knought as kn
from tests.simulation import davies, simulate

if TYPE_CHECKING:
    from collections.abc import Mapping

    from knought.arrays import FloatArray

STRENGTHS = np.array([0.005, 0.02, 0.05, 0.1])
FACTOR = kn.SharedError("stock", kind="factor", u=0.03)


def made(
    studies: int = 4, *, u: float = 0.02, stated: bool = True, seed: int = 3
) -> tuple[kn.RateTable, FloatArray]:
    """A design and k of several studies of it; truth Davies, z_A z_B = 2."""
    data = simulate(davies(0.3), 2.0, STRENGTHS, studies=studies, seed=seed, u=u)
    seen = data.observations
    k = np.exp(data.ln_k)
    return design(seen.T, seen.ionic_strength, k[0], u if stated else None), k


def design(T: FloatArray, I: FloatArray, k: FloatArray, u: float | None) -> kn.RateTable:
    return kn.RateTable.from_arrays(T, k, I, None if u is None else u * k, unit="L mol^-1 s^-1")


def assert_same(many: kn.ManyAssessments, i: int, one: kn.Assessment) -> None:
    """One alone leaves out components that weigh less than 1e-10 together."""
    for name in many.headline.names:
        estimate = one.parameters[name]
        size = float(estimate.standard_uncertainty)
        low, high = estimate.interval(many.headline.coverage)
        expected = (float(estimate.value), size, float(low), float(high))
        ends = many.interval(name)
        found = (many.value(name)[i], many.standard_uncertainty(name)[i], ends[0][i], ends[1][i])
        assert found == pytest.approx(expected, abs=5e-9 * size, rel=1e-12), name
    assert set(many.laws) == {law.salt_law for law in one.laws}
    for law in one.laws:
        results = many.laws[law.salt_law].results
        assert results.chi_square[i] == pytest.approx(law.scatter.chi_square, rel=1e-6)
        assert many.laws[law.salt_law].aicc[i] == pytest.approx(law.aicc, rel=1e-6)
        assert bool(results.from_scatter[i]) == law.scatter.from_scatter
        for name in results.names:
            estimate = law.parameters[name]
            u = float(estimate.standard_uncertainty)
            assert results.value(name)[i] == pytest.approx(float(estimate.value), abs=1e-6 * u)
            assert results.interval(name)[1][i] == pytest.approx(
                float(estimate.interval(0.95)[1]), abs=1e-6 * u
            )


CASES: Mapping[str, tuple[dict[str, object], dict[str, object]]] = {
    "stated u": ({}, {}),
    "u from scatter": ({"stated": False}, {}),
    "stated u too small": ({"u": 0.02, "seed": 5}, {}),
    "charges given": ({}, {"reactants": "A^2- + B^-"}),
    "an error that runs share": ({}, {"shared_errors": [FACTOR]}),
    "shared, u from scatter": ({"stated": False}, {"shared_errors": [FACTOR]}),
    "a named law": ({}, {"salt_law": "davies"}),
    "with a heat capacity": ({}, {"temperature_law": "eyring-cp"}),
    "priors narrowed": ({}, {"priors": kn.Priors(ion_size=(4e-10, 6e-10))}),
}


@pytest.mark.parametrize("case", CASES)
def test_a_batch_equals_its_members(case: str) -> None:
    data, said = CASES[case]
    several = case in {"u from scatter", "stated u too small"}
    rates, k = made(2 if several else 1, **data)  # type: ignore[arg-type]
    if case == "stated u too small":
        rates = kn.RateTable.from_arrays(
            rates.T, rates.k, rates.I, 0.007 * rates.k, unit="L mol^-1 s^-1"
        )
    many = kn.assess_many(rates, k, **said)  # type: ignore[arg-type]
    u = None if rates.u_k is None else float(rates.u_k[0] / rates.k[0])
    assert rates.I is not None
    for i in range(len(k)):
        one = kn.assess(design(rates.T, rates.I, k[i], u), **said)  # type: ignore[arg-type]
        assert_same(many, i, one)
        if many.charge_product_weights is not None:
            weights = list(one.headline.charge_product_weights.values())  # type: ignore[attr-defined]
            assert many.charge_product_weights[i] == pytest.approx(weights, abs=1e-9)
    if several:
        assert np.any(many.headline.from_scatter)


def test_data_too_precise_for_the_grid_are_refined_as_one_alone_is() -> None:
    rates, k = made(2, u=2e-3)
    many = kn.assess_many(rates, k, named_laws=False)
    assert rates.I is not None
    for i in range(2):
        one = kn.fit(design(rates.T, rates.I, k[i], 2e-3))
        for name in many.headline.names:
            u = float(one.parameters[name].standard_uncertainty)
            assert many.value(name)[i] == pytest.approx(
                float(one.parameters[name].value), abs=1e-8 * u
            )
        codes = {caveat.code for caveat in one.caveats}
        assert bool(many.coarse[i]) == ("coarse-grid" in codes)


def test_what_decides_on_the_grid_is_looked_at_whether_or_not_it_is_wanted() -> None:
    """Asking for ΔC_p‡ alone, of data too precise for the first grid, failed once."""
    rates, k = made(2, u=2e-3)
    said = {"temperature_law": "eyring-cp", "named_laws": False}
    name = "activation_heat_capacity"
    alone = kn.assess_many(rates, k, quantities=(name,), **said)  # type: ignore[arg-type]
    whole = kn.assess_many(rates, k, **said)  # type: ignore[arg-type]
    assert alone.headline.names == (name,)
    assert alone.value(name) == pytest.approx(whole.value(name), rel=1e-9)
    assert np.array_equal(alone.coarse, whole.coarse)


def test_errors_of_temperature_go_along_the_slopes_of_the_mean_study() -> None:
    """Not to rounding, as each study alone takes its own slopes, but within a hundredth of u."""
    rates, k = made(2)
    offset = kn.SharedError("probe", kind="temperature-offset", u=0.2)
    many = kn.assess_many(rates, k, shared_errors=[offset], named_laws=False)
    assert rates.I is not None
    for i in range(2):
        one = kn.fit(design(rates.T, rates.I, k[i], 0.02), shared_errors=[offset])
        assert_u = one.parameters["rate_constant"].standard_uncertainty
        assert many.standard_uncertainty("rate_constant")[i] == pytest.approx(assert_u, rel=0.02)


def test_the_numbers_do_not_depend_on_the_workers(monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr("knought.fitting.assess_many._PORTION", 10)
    rates, k = made(25)
    said = {"quantities": ("charge_product",), "named_laws": False}
    one, two = (kn.assess_many(rates, k, workers=n, **said) for n in (1, 2))  # type: ignore[arg-type]
    assert np.array_equal(one.headline.values, two.headline.values)
    assert np.array_equal(one.headline.high, two.headline.high)
    assert one.headline.names == ("charge_product",)
    assert len(two) == 25


def test_runs_that_do_not_count_have_no_column() -> None:
    rates, k = made(2)
    used = np.ones(len(rates), dtype=bool)
    used[0] = False
    some = kn.RateTable(
        k=rates.k, T=rates.T, order=rates.order, I=rates.I, u_k=rates.u_k, used=used,
        reason=("spilt", *[""] * (len(rates) - 1)),
    )  # fmt: skip
    assert len(kn.assess_many(some, k[:, 1:], named_laws=False)) == 2
    with pytest.raises(kn.InputError, match="runs that count"):
        kn.assess_many(some, k)


@pytest.mark.parametrize(
    ("change", "words"),
    [
        ({"k": -1.0}, "not positive"),
        ({"coverage": 95.0}, "coverage"),
        ({"quantities": ("colour",)}, "no colour"),
    ],
)
def test_what_cannot_be_is_refused(change: dict[str, object], words: str) -> None:
    rates, k = made(1)
    if "k" in change:
        k, change = k * np.asarray(change["k"]), {}
    with pytest.raises(kn.InputError, match=words):
        kn.assess_many(rates, k, **change)  # type: ignore[arg-type]


def test_a_result_that_is_not_there_is_refused() -> None:
    rates, k = made(1)
    with pytest.raises(kn.InputError, match="no result called"):
        kn.assess_many(rates, k, named_laws=False).value("ion_size")
