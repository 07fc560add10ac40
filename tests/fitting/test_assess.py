"""The front door: what is decided for the user, and what is said with the answer."""

from __future__ import annotations

import numpy as np
import pytest

import knought as kn
from knought.fitting.open_fit import OpenFit
from knought.fitting.verdicts import integers_in
from tests.simulation import Truth, davies, extended, simulate

STRENGTHS = np.array([0.005, 0.01, 0.02, 0.05, 0.1, 0.2])


def table(
    truth: Truth | None = None, z: float = 2, seed: int = 1, u: float = 0.02, **changes: object
) -> kn.RateTable:
    studies = simulate(truth or davies(0.3), z, STRENGTHS, studies=1, seed=seed, u=u)
    seen = studies.observations
    k = np.exp(seen.ln_k)
    columns: dict[str, object] = {"I": seen.I, "u_k": u * k, "unit": "L mol^-1 s^-1"} | changes
    return kn.RateTable.from_arrays(seen.T, k, **columns)  # type: ignore[arg-type]


def codes(assessment: kn.Assessment) -> set[str]:
    return {caveat.code for caveat in assessment.caveats}


def test_the_headline_is_the_open_law_with_every_named_law_beside_it() -> None:
    found = kn.assess(table())
    assert isinstance(found.headline, OpenFit)
    assert [law.salt_law for law in found.laws] == [
        "none",
        "linear",
        "limiting",
        "guntelberg",
        "extended",
        "davies",
        "sit",
        "pitzer",
    ]
    assert {law.temperature_law for law in found.laws} == {"eyring"}
    assert [law.temperature_law for law in found.temperature_laws] == [
        "arrhenius",
        "modified-arrhenius",
        "eyring",
        "eyring-cp",
    ]
    assert found.data_alone is None
    assert found.parameters is found.headline.parameters
    assert float(found.rate_constant(T=298.15, I=0.1).value) == pytest.approx(
        float(found.at(I=0.1)["rate_constant"].value)
    )
    assert found.correlated().keys() == found.headline.correlated().keys()
    assert found.covariance()[0] == found.headline.covariance()[0]


def test_given_reactants_narrow_the_headline_and_leave_the_runs_their_say() -> None:
    found = kn.assess(table(), reactants="A^2- + B^-")
    assert found.parameters["charge_product"].given
    assert found.data_alone is not None
    free = found.data_alone.parameters["charge_product"]
    low, high = free.interval(0.95)
    assert float(low) < 2 < float(high)
    assert "charges-contradicted" not in codes(found)


def test_charges_that_the_runs_contradict_are_said_to_be() -> None:
    assert "charges-contradicted" in codes(kn.assess(table(), reactants="A^2- + B^2-"))


def test_reactants_and_a_different_charge_product_are_refused() -> None:
    with pytest.raises(kn.InputError, match="either the reactants or the charge product"):
        kn.assess(table(), reactants="A^2- + B^-", charge_product=3)
    assert kn.assess(table(), reactants="A^2- + B^-", charge_product=2).choices.charge_product == 2


def test_a_table_of_temperature_and_k_says_what_it_cannot_determine() -> None:
    found = kn.assess(kn.RateTable.from_arrays([288.15, 298.15, 308.15], [1.0, 2.1, 4.0]))
    assert found.salt_law == "none"
    assert "no-ionic-strength" in codes(found)
    assert "charge_product" not in found.parameters
    assert "medium" in found.parameters["rate_constant"].quantity.words
    assert [law.salt_law for law in found.laws] == ["none"]


def test_one_ionic_strength_says_what_to_measure() -> None:
    found = kn.assess(table(I=np.full(18, 0.1)))
    assert found.salt_law == "none"
    assert "one-ionic-strength" in codes(found)
    assert {refusal.salt_law for refusal in found.refused} >= {"davies", "sit"}


def test_one_ionic_strength_with_charges_rests_on_them_and_says_so() -> None:
    found = kn.assess(table(I=np.full(18, 0.1)), reactants="A^2- + B^-")
    assert "charges-carry-the-extrapolation" in codes(found)
    assert found.data_alone is None


def test_one_temperature_gives_the_salt_law_there_and_no_activation_parameters() -> None:
    studies = simulate(davies(0.3), 2, STRENGTHS, studies=1, seed=1, temperatures=(310.15,))
    seen = studies.observations
    k = np.exp(seen.ln_k)
    found = kn.assess(kn.RateTable.from_arrays(seen.T, k, seen.I, 0.02 * k, unit="L mol^-1 s^-1"))
    assert found.temperature_law == "isothermal"
    assert found.reference_temperature == pytest.approx(310.15)
    assert "one-temperature" in codes(found)
    assert set(found.parameters) >= {"rate_constant", "activation_gibbs_energy", "charge_product"}
    assert "activation_energy" not in found.parameters
    assert found.temperature_laws == ()


def test_one_temperature_refuses_a_law_that_was_asked_for() -> None:
    rates = kn.RateTable.from_arrays(np.full(3, 298.15), [1.0, 1.1, 1.2])
    with pytest.raises(kn.InputError, match="isothermal"):
        kn.assess(rates, temperature_law="eyring")


def test_an_undecided_charge_product_names_the_integers() -> None:
    found = kn.assess(table(u=0.15, z=1, seed=3))
    message = next(c.message for c in found.caveats if c.code == "charge-product-undecided")
    low, high = (float(end) for end in found.parameters["charge_product"].interval(0.95))
    for z in integers_in(low, high):
        assert str(z) in message


def test_no_integer_inside_is_said() -> None:
    found = kn.assess(
        table(extended(5), z=1.5, u=0.002),
        priors=kn.Priors((4.9e-10, 5.1e-10), (0.0, 0.01), (0.0, 0.01)),
    )
    assert "no-integer-charge-product" in codes(found)


def test_named_laws_that_disagree_are_named_with_their_numbers() -> None:
    found = kn.assess(table(u=0.005, seed=2))
    messages = [c.message for c in found.caveats if c.code == "laws-disagree"]
    assert any("±" in message and "against" in message for message in messages)


def test_data_that_no_law_describes_are_said_not_to_be_described() -> None:
    rates = table()
    k = rates.k.copy()
    k[4] *= 1.6
    found = kn.assess(kn.RateTable.from_arrays(rates.T, k, rates.I, 0.02 * k, unit="L mol^-1 s^-1"))
    assert {"nothing-fits", "u-too-small"} <= codes(found)
    assert found.headline.scatter.kind == "enlarged"


def test_runs_left_out_are_listed_with_their_reasons() -> None:
    rates = table()
    used = np.ones(18, dtype=bool)
    used[3] = False
    part = kn.RateTable(
        rates.k,
        rates.T,
        rates.order,
        rates.I,
        rates.u_k,
        used=used,
        reason=tuple("bubble in the cell" if not each else "" for each in used),
    )
    found = kn.assess(part)
    message = next(c.message for c in found.caveats if c.code == "runs-left-out")
    assert "bubble in the cell" in message
    assert found.observations.runs == 17


def test_a_reference_temperature_outside_the_runs_is_said_to_be() -> None:
    assert "extrapolated-temperature" in codes(kn.assess(table(), reference_temperature=350.0))
    assert "extrapolated-temperature" not in codes(kn.assess(table()))


def test_ionic_strengths_far_from_zero_are_said_to_be() -> None:
    studies = simulate(
        davies(0.3), 2, np.array([0.3, 0.35, 0.4, 0.45]), studies=1, seed=1
    ).observations
    k = np.exp(studies.ln_k)
    found = kn.assess(
        kn.RateTable.from_arrays(studies.T, k, studies.I, 0.02 * k, unit="L mol^-1 s^-1")
    )
    assert "far-from-zero-ionic-strength" in codes(found)


def test_large_relative_uncertainties_are_warned_of() -> None:
    assert "large-relative-uncertainty" in codes(kn.assess(table(u=0.3)))


def test_a_named_law_can_be_the_headline() -> None:
    found = kn.assess(table(), salt_law="davies", temperature_law="arrhenius")
    assert found.salt_law == "davies"
    assert found.temperature_law == "arrhenius"
    outside = kn.assess(table(), salt_law="limiting")
    assert "outside-domain" in codes(outside)


def test_hot_gas_phase_tables_need_no_water() -> None:
    T = np.array([500.0, 600.0, 700.0])
    found = kn.assess(kn.RateTable.from_arrays(T, [1e-3, 2e-2, 0.2], unit="cm3 molecule^-1 s^-1"))
    assert found.salt_law == "none"
    assert float(found.parameters["activation_energy"].value) > 0


def test_inputs_are_left_as_they_were() -> None:
    T, k = np.array([288.15, 298.15, 308.15]), np.array([1.0, 2.1, 4.0])
    before = T.copy(), k.copy()
    kn.assess(kn.RateTable.from_arrays(T, k))
    assert np.array_equal(T, before[0])
    assert np.array_equal(k, before[1])
